"""Members and nodes of an analysis model: one line of the line model after another.

Every line has nodes of its own, also where two lines meet in a place: each is analysed by itself,
and what one receives from the other is among its actions.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field

from analysis_core.ifc.analysis_model.bars import Bar, bars_of
from analysis_core.ifc.analysis_model.text import ModelText, Vector
from analysis_core.model import FREE, RIGID, Joint, Line, Member, Point, Support

_KINDS = ("IFCLINEARSTIFFNESSMEASURE",) * 3 + ("IFCROTATIONALSTIFFNESSMEASURE",) * 3
_UNITS = ("LINEARSTIFFNESSUNIT",) * 3 + ("ROTATIONALSTIFFNESSUNIT",) * 3
_FIXED = (RIGID,) * 6


@dataclass(frozen=True, slots=True)
class WrittenBar:
    """A bar with its instance, its ends and its directions in the world."""

    bar: Bar
    number: int
    start: Point
    end: Point
    along: Vector
    down: Vector

    def point(self, s: float) -> Point:
        """Return the place ``s`` m from the start of the bar."""
        u = s / self.bar.length
        return _between(self.start, self.end, u)


@dataclass(slots=True)
class WrittenLine:
    """A line with the instances of its nodes by joint, and its bars by member."""

    line: Line
    nodes: dict[int, int] = field(default_factory=dict)
    bars: dict[int, list[WrittenBar]] = field(default_factory=dict)
    free_nodes: list[int] = field(default_factory=list)
    """Between the bars of a member."""


def clockwise(line: Line) -> Vector:
    """Return the world direction about which a clockwise turn is positive: up × x."""
    x, y, _ = line.axis
    return -y, x, 0.0


def write_items(text: ModelText, line: Line) -> WrittenLine:
    """Write nodes and members of a line."""
    written = WrittenLine(line)
    slides = line.kind == "line" and not any(
        joint.support is not None and joint.support.horizontal for joint in line.joints
    )
    for joint in line.joints:
        # A line is held horizontally as a whole; one support says so for other programs.
        held = slides and joint.support is not None
        written.nodes[joint.id] = _node(text, line, joint, held=held)
        slides = slides and not held
    for member in line.members:
        written.bars[member.id] = _member(text, written, member)
    return written


def _node(text: ModelText, line: Line, joint: Joint, *, held: bool) -> int:
    condition = "$"
    if joint.support is not None:
        condition = f"#{_condition(text, _stiffness(joint.support, held=held))}"
    name = f"{line.mark} / {joint.id}"
    key = f"{line.mark}/joint {joint.id}"
    if text.old:
        # The condition stands in the axes of the node's own placement, which IFC2X3 asks for.
        placement = text.placement(joint.point, line.axis)
        origin = text.point((0.0, 0.0, 0.0))
        shape = text.shape("Vertex", text.lines.add(f"IFCVERTEXPOINT(#{origin})"))
        return text.object("IFCSTRUCTURALPOINTCONNECTION", key, name, placement, shape, condition)
    axes = f"#{text.axes((0.0, 0.0, 0.0), line.axis)}" if joint.support is not None else "$"
    shape = text.shape("Vertex", text.vertex(joint.point))
    return text.object(
        "IFCSTRUCTURALPOINTCONNECTION", key, name, text.placement(), shape, condition, axes
    )


def _stiffness(support: Support, *, held: bool) -> tuple[float, ...]:
    """Along the line, across it, upward; turning about these.

    Out of its plane a support holds the line in place, and against twisting.
    """
    sideways = RIGID if support.rotation == RIGID else FREE
    horizontal = RIGID if held else support.horizontal
    return horizontal, RIGID, support.vertical, RIGID, support.rotation, sideways


def _condition(text: ModelText, values: tuple[float, ...]) -> int:
    parts = []
    for value, kind, unit in zip(values, _KINDS, _UNITS, strict=True):
        if text.old:  # -1 is fixed, 0 free
            plain = -1.0 if math.isinf(value) else value
            parts.append("-1." if plain < 0.0 else text.measured(plain, unit))
        elif value in (FREE, RIGID):
            parts.append(f"IFCBOOLEAN({'.T.' if value else '.F.'})")
        else:
            parts.append(f"{kind}({text.measured(value, unit)})")
    return text.lines.shared(f"IFCBOUNDARYNODECONDITION($,{','.join(parts)})")


def _member(text: ModelText, written: WrittenLine, member: Member) -> list[WrittenBar]:
    line = written.line
    cos, sin = line.direction(member)
    x, y, _ = line.axis
    along = (cos * x, cos * y, sin)
    down = (sin * x, sin * y, -cos)
    first, last = line.joints[member.start].point, line.joints[member.end].point
    bars = bars_of(member)
    node = written.nodes[member.start]
    result = []
    for bar in bars:
        start = _between(first, last, bar.start / member.length)
        end = _between(first, last, bar.end / member.length)
        number = _bar(text, line, bar, start, end, down)
        is_last = bar is bars[-1]
        far = written.nodes[member.end] if is_last else _free_node(text, written, bar, end)
        begins = member.start_spring if bar is bars[0] else RIGID
        ends = member.end_spring if is_last else RIGID
        for name, joined, spring in (("start", node, begins), ("end", far, ends)):
            _connect(text, line, bar, name, number, joined, spring, along)
        result.append(WrittenBar(bar, number, start, end, along, down))
        node = far
    return result


def _bar(text: ModelText, line: Line, bar: Bar, start: Point, end: Point, down: Vector) -> int:
    edge = text.lines.add(f"IFCEDGE(#{text.vertex(start)},#{text.vertex(end)})")
    shape = text.shape("Edge", edge)
    upward = [] if text.old else [f"#{text.direction([-c for c in down])}"]
    part = f".{bar.number + 1}" if len(bars_of(bar.member)) > 1 else ""
    return text.object(
        "IFCSTRUCTURALCURVEMEMBER",
        f"{line.mark}/member {bar.member.id}/bar {bar.number}",
        f"{line.mark} / {bar.member.role} {bar.member.id + 1}{part}",
        text.placement(),
        shape,
        ".RIGID_JOINED_MEMBER.",
        *upward,
    )


def _free_node(text: ModelText, written: WrittenLine, bar: Bar, point: Point) -> int:
    line = written.line
    node = text.object(
        "IFCSTRUCTURALPOINTCONNECTION",
        f"{line.mark}/member {bar.member.id}/after bar {bar.number}",
        f"{line.mark} / {bar.member.id}.{bar.number + 1}",
        text.placement(),
        text.shape("Vertex", text.vertex(point)),
        "$",
        *([] if text.old else ["$"]),
    )
    written.free_nodes.append(node)
    return node


def _connect(
    text: ModelText,
    line: Line,
    bar: Bar,
    end: str,
    member: int,
    node: int,
    spring: float,
    along: Vector,
) -> None:
    condition = "$"
    if spring != RIGID:
        values = list(_FIXED)
        values[3 + _bending_axis(text, line, along)] = spring
        condition = f"#{_condition(text, tuple(values))}"
    text.rooted(
        "IFCRELCONNECTSSTRUCTURALMEMBER",
        f"{line.mark}/member {bar.member.id}/bar {bar.number}/{end}",
        f"#{member}", f"#{node}", condition, "$", "$", "$",
    )  # fmt: skip


def _bending_axis(text: ModelText, line: Line, along: Vector) -> int:
    """Which local axis of a member is across the plane of its line: 1 for y, 2 for z.

    From IFC4 on z is upward within the plane.  IFC2X3 has no orientation of members: z is up,
    for a column along the x axis of the model.
    """
    if not text.old or abs(along[2]) < math.cos(math.radians(0.5)):
        return 1
    across = clockwise(line)
    return 2 if abs(across[0]) > abs(across[1]) else 1


def _between(a: Point, b: Point, u: float) -> Point:
    x, y, z = (p + (q - p) * u for p, q in zip(a, b, strict=True))
    return x, y, z
