"""Diagrams of moment, shear and deflection: the envelope with its extremes labelled.

Ordinates are drawn on the side of the tension (moment) or of the movement (deflection), that is
positive downward; shear is drawn positive upward.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

from analysis_core.results import Extreme, LineEnvelope, MemberEnvelope
from analysis_core.sheet.html import Markup, tag
from analysis_core.sheet.strip import MARGIN, WIDTH, Strip
from analysis_core.units import DisplayUnits

_HALF = 58.0  # pixels of the largest ordinate
_LABEL = 15.0


@dataclass(frozen=True, slots=True)
class _Kind:
    name: str
    quantity: str
    upper: Callable[[MemberEnvelope], Sequence[float]]
    lower: Callable[[MemberEnvelope], Sequence[float]]
    extremes: Callable[[MemberEnvelope], tuple[Extreme, Extreme]]
    sign: float
    """+1 where positive ordinates are drawn downward."""


MOMENT = _Kind(
    "Moment", "moment",
    lambda m: m.moment_max.tolist(), lambda m: m.moment_min.tolist(),
    lambda m: (m.sagging, m.hogging), 1.0,
)  # fmt: skip
SHEAR = _Kind(
    "Shear", "force",
    lambda m: m.shear_max_at.tolist(), lambda m: m.shear_min_at.tolist(),
    lambda m: (m.shear_max, m.shear_min), -1.0,
)  # fmt: skip
DEFLECTION = _Kind(
    "Deflection", "deflection",
    lambda m: m.deflection_max.tolist(), lambda m: m.deflection_min.tolist(),
    lambda m: (m.deflection_down, m.deflection_up), 1.0,
)  # fmt: skip


def diagram(kind: _Kind, envelope: LineEnvelope, at: Strip, units: DisplayUnits) -> Markup:
    """Return the envelope of one effect over all members as a drawing."""
    by_id = {m.member: m for m in envelope.members}
    members = [by_id[m.id] for m in at.members]
    largest = max((abs(e.value) for m in members for e in kind.extremes(m)), default=0.0)
    scale = kind.sign * _HALF / largest if largest > 0.0 else 0.0
    axis = _HALF + _LABEL + 4.0
    parts: list[Markup] = []
    for index, member in enumerate(members):
        parts += _areas(kind, member, index, at, axis, scale)
        parts.append(_line(at.starts[index], axis, at.ends[index], axis, "axis"))
    for index, member in enumerate(members):
        parts += _labels(kind, member, index, at, axis, scale, largest, units)
    unit = units.symbol(kind.quantity)
    title = f"{kind.name} [{unit}]"
    return tag(
        "figure",
        tag(
            "svg", tag("title", f"{kind.name} envelope in {unit}"), parts,
            viewBox=f"0 0 {WIDTH:g} {2 * axis:g}", role="img", class_="diagram",
        ),
        tag("figcaption", title),
    )  # fmt: skip


def _areas(
    kind: _Kind, member: MemberEnvelope, index: int, at: Strip, axis: float, scale: float
) -> list[Markup]:
    """The area between the axis and each bound; the two differ in hatching, not colour alone."""
    out = []
    for values, name in ((kind.upper(member), "upper"), (kind.lower(member), "lower")):
        points = [
            (at.at(index, float(x)), axis + scale * v)
            for x, v in zip(member.x, values, strict=True)
        ]
        outline = " ".join(f"{x:.1f},{y:.1f}" for x, y in points)
        closed = f"M{points[0][0]:.1f},{axis:.1f} L{outline} L{points[-1][0]:.1f},{axis:.1f} Z"
        out.append(tag("path", d=closed, class_=f"area {name}"))
        out.append(tag("polyline", points=outline, class_=f"curve {name}"))
    return out


def _labels(
    kind: _Kind, member: MemberEnvelope, index: int, at: Strip, axis: float, scale: float,
    largest: float, units: DisplayUnits,
) -> list[Markup]:  # fmt: skip
    out = []
    for extreme in kind.extremes(member):
        if abs(extreme.value) <= 0.02 * largest:
            continue
        x, y = at.at(index, extreme.x), axis + scale * extreme.value
        below = scale * extreme.value > 0.0
        inside = min(max(x, MARGIN), WIDTH - MARGIN)
        anchor = "middle"
        if extreme.x < 0.02 * float(member.x[-1]):
            anchor = "start"
        elif extreme.x > 0.98 * float(member.x[-1]):
            anchor = "end"
        out.append(tag("circle", cx=x, cy=y, r=2.0, class_="peak"))
        out.append(
            tag(
                "text", units.number(extreme.value, kind.quantity), x=inside,
                y=y + (12.0 if below else -5.0), text_anchor=anchor, class_="value",
            )
        )  # fmt: skip
    return out


def _line(x1: float, y1: float, x2: float, y2: float, class_: str) -> Markup:
    return tag("line", x1=x1, y1=y1, x2=x2, y2=y2, class_=class_)
