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
_MANY = 3  # members; of more, every second station is close enough at this size


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
    parts = [_bound(kind.lower, "lower", members, at, axis, scale)]
    parts.append(_bound(kind.upper, "upper", members, at, axis, scale))
    ends = zip(at.starts, at.ends, strict=True)
    base = " ".join(f"M{_px(a)},{_px(axis)}H{_px(b)}" for a, b in ends)
    parts.append(tag("path", d=base, class_="axis"))
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


def _bound(
    values: Callable[[MemberEnvelope], Sequence[float]],
    name: str,
    members: Sequence[MemberEnvelope],
    at: Strip,
    axis: float,
    scale: float,
) -> Markup:
    """The area between the axis and one bound; the two differ in their stroke, not colour alone."""
    pieces = []
    step = 2 if len(members) > _MANY and len(members[0].x) % 2 else 1
    for index, member in enumerate(members):
        points = [
            f"{_px(at.at(index, float(x)))},{_px(axis + scale * v)}"
            for x, v in zip(member.x[::step], values(member)[::step], strict=True)
        ]
        pieces.append(f"M{_px(at.starts[index])},{_px(axis)}L{' '.join(points)}V{_px(axis)}Z")
    return tag("path", d="".join(pieces), class_=f"area {name}")


def _px(value: float) -> str:
    return f"{value:.1f}".removesuffix(".0")


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
