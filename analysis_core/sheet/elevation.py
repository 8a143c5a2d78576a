"""The elevation of a line: spans to scale, bearings, sections, and the actions of each case."""

from __future__ import annotations

import math

from analysis_core.model import (
    DistributedForce,
    Joint,
    Line,
    Member,
    PointForce,
    PointMoment,
    Support,
)
from analysis_core.sheet.frame import frame_elevation
from analysis_core.sheet.html import Markup, tag
from analysis_core.sheet.strip import WIDTH, Strip, pixels, runs
from analysis_core.units import DisplayUnits

_AXIS = 44.0
_HEIGHT = 104.0
_LETTER = 5.6  # pixels of a letter
_LOAD = 34.0  # pixels of the largest intensity


def elevation(line: Line, at: Strip, units: DisplayUnits) -> Markup:
    """Return the members with their lengths, sections and bearings, as a drawing.

    Frames are drawn as they stand, lines as a strip.
    """
    if line.kind == "frame" or any(m.role != "span" for m in line.members):
        return frame_elevation(line, units)
    parts: list[Markup] = []
    drawn: set[int] = set()
    for index, member in enumerate(at.members):
        x1, x2 = at.starts[index], at.ends[index]
        parts.append(tag("line", x1=x1, y1=_AXIS, x2=x2, y2=_AXIS, class_="member"))
        parts += _texts(member, (x1 + x2) / 2.0, x2 - x1, units)
        parts += _releases(member, x1, x2)
        for joint, x in ((line.joints[member.start], x1), (line.joints[member.end], x2)):
            if joint.id not in drawn:
                parts += _bearing(joint, x)
                drawn.add(joint.id)
    return _figure("Elevation", parts, _HEIGHT)


def actions_drawing(line: Line, case: str, at: Strip, units: DisplayUnits) -> Markup | None:
    """Return what stands on the members in one case; None where nothing does."""
    acting = [a for a in line.actions if a.case == case]
    largest = max((_intensity(a) for a in acting if isinstance(a, DistributedForce)), default=0.0)
    index_of = {m.id: i for i, m in enumerate(at.members)}
    y = _LOAD + 34.0
    base = runs(at.starts, at.ends, y)
    parts: list[Markup] = [tag("path", d=base, class_="member thin")]
    texts: list[Markup] = []
    shown = 0
    for action in acting:
        if isinstance(action, DistributedForce) and any(action.transverse):
            *drawn, text = _distributed(action, index_of[action.member], at, largest, units)
        elif isinstance(action, PointForce) and action.transverse:
            *drawn, text = _point(action, at.at(index_of[action.member], action.position), units)
        elif isinstance(action, PointMoment):
            *drawn, text = _moment(action, at.at(index_of[action.member], action.position), units)
        else:
            continue
        parts += drawn
        texts.append(text)
        shown += 1
    if not shown:
        return None
    parts.append(tag("g", texts, class_="value"))
    return _figure(f"Actions of case {case}", parts, _LOAD + 50.0)


def _figure(title: str, parts: list[Markup], height: float) -> Markup:
    drawing = tag(
        "svg", tag("title", title), parts,
        viewBox=f"0 0 {WIDTH:g} {height:g}", role="img", class_="drawing",
    )  # fmt: skip
    return tag("figure", drawing, tag("figcaption", title))


def _texts(member: Member, x: float, room: float, units: DisplayUnits) -> list[Markup]:
    name = f"{member.span}" if member.role == "span" and member.span else f"leg {member.id}"
    length = units.text(member.length, "length")
    section = member.section.title if member.section else ""
    text = f"{name}:  {length}"
    if room < _LETTER * len(text):
        text = name
    out = [tag("text", text, x=x, y=_AXIS - 9.0)]
    if section and room > _LETTER * len(section) + 24.0:
        out.append(tag("text", section, x=x, y=_AXIS + 15.0, class_="section-name"))
    return out


def _releases(member: Member, x1: float, x2: float) -> list[Markup]:
    ends = ((member.start_spring, x1 + 6.0), (member.end_spring, x2 - 6.0))
    return [
        tag("circle", cx=x, cy=_AXIS, r=3.2, class_="release" if spring == 0.0 else "spring")
        for spring, x in ends
        if not math.isinf(spring)
    ]


def _bearing(joint: Joint, x: float) -> list[Markup]:
    """Common drafting practice: a triangle for a pin, hatching for a fixed end."""
    y = _AXIS
    number = tag("text", str(joint.id), x=x, y=y + 44.0, class_="joint-name")
    support = joint.support
    if support is None:
        return [tag("circle", cx=x, cy=y, r=1.8, class_="free-joint"), number]
    parts = []
    if support.vertical > 0.0:
        parts.append(
            tag("path", d=f"M{x:.1f},{y + 2:g}l-8,14h16Zm-11,14h22",
                class_=_filling(support.vertical))
        )  # fmt: skip
    if support.rotation > 0.0:
        parts.append(
            tag("rect", x=x - 3.0, y=y - 9.0, width=6.0, height=18.0,
                class_=_filling(support.rotation))
        )  # fmt: skip
    if note := _spring_note(support):
        parts.append(tag("text", note, x=x, y=y + 30.0, class_="note"))
    return [*parts, number]


def _filling(stiffness: float) -> str:
    return "support" if math.isinf(stiffness) else "support sprung"


def _spring_note(support: Support) -> str:
    sprung = [s for s in (support.vertical, support.rotation) if 0.0 < s < math.inf]
    return "spring" if sprung else ""


def _intensity(action: DistributedForce) -> float:
    return max(abs(action.transverse_at(action.start)), abs(action.transverse_at(action.end)))


def _distributed(
    action: DistributedForce, index: int, at: Strip, largest: float, units: DisplayUnits
) -> list[Markup]:
    base = _LOAD + 32.0
    count = 2 if len(action.transverse) <= 2 else 13
    places = [action.start + (action.end - action.start) * i / (count - 1) for i in range(count)]
    points = [
        (at.at(index, s), base - _LOAD * abs(action.transverse_at(s)) / (largest or 1.0))
        for s in places
    ]
    path = f"M{pixels(points[0][0])},{base:g}"
    last = base
    for i, (x, y) in enumerate(points):
        level, up = pixels(y) == pixels(last), i == 0
        path += f"V{pixels(y)}" if up else f"H{pixels(x)}" if level else f"L{pixels(x)},{pixels(y)}"
        last = y
    path += f"V{base:g}Z"
    ends = [action.transverse_at(action.start), action.transverse_at(action.end)]
    same = abs(ends[0] - ends[1]) <= 1e-9 * max(map(abs, ends))
    text = units.number(ends[0], "line load")
    if not same:
        text += f" to {units.number(ends[1], 'line load')}"
    middle = (points[0][0] + points[-1][0]) / 2.0
    top = min(y for _, y in points)
    height = (top + base) / 2.0 + 4.0 if base - top > 16.0 else top - 3.0
    return [
        tag("path", d=path, class_="load"),
        tag("text", f"{text} {units.symbol('line load')}", x=middle, y=height),
    ]


def _point(action: PointForce, x: float, units: DisplayUnits) -> list[Markup]:
    base = _LOAD + 32.0
    down = action.transverse > 0.0
    high = base - _LOAD - 14.0
    tip, tail = (base, high) if down else (high, base)
    head = -6.0 if down else 6.0
    return [
        tag("line", x1=x, y1=tail, x2=x, y2=tip, class_="force"),
        tag("path", d=f"M{x:.1f},{tip:.1f} l-3.5,{head:g} h7 Z", class_="force-head"),
        tag("text", units.text(abs(action.transverse), "force"), x=x, y=high - 3.0),
    ]  # fmt: skip


def _moment(action: PointMoment, x: float, units: DisplayUnits) -> list[Markup]:
    base = _LOAD + 32.0
    sweep = 1 if action.moment > 0.0 else 0
    return [
        tag("path", d=f"M{x - 8:.1f},{base:.1f} A8,8 0 1 {sweep} {x + 8:.1f},{base:.1f}",
            class_="couple"),
        tag("text", units.text(action.moment, "moment"), x=x, y=base - 14.0),
    ]  # fmt: skip
