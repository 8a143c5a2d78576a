"""Diagrams of moment, shear and deflection: the envelope with its extremes labelled.

Ordinates are drawn on the side of the tension (moment) or of the movement (deflection), that is
positive downward; shear is drawn positive upward.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace

from analysis_core.results import Extreme, LineEnvelope, MemberEnvelope
from analysis_core.sheet.html import Markup, tag
from analysis_core.sheet.strip import MARGIN, WIDTH, Strip, pixels, runs
from analysis_core.units import DisplayUnits

_HALF = 58.0  # pixels of the largest ordinate
_LABEL = 15.0
_STRAIGHT = 0.3  # pixels that a point may lie beside the line that stands for it
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
    parts.append(tag("path", d=runs(at.starts, at.ends, axis), class_="axis"))
    labels: dict[tuple[str, str, str], _Label] = {}
    for index, member in enumerate(members):
        for label in _labels(kind, member, index, at, axis, scale, largest, units):
            key = pixels(label.x), pixels(label.y), label.text
            # Both sides of a bearing have one moment: one label, in the middle.
            labels[key] = label if key not in labels else replace(label, anchor=None)
    if labels:
        peaks = "".join(f"M{x},{y}h0" for x, y, _ in labels)
        texts = [label.markup() for label in labels.values()]
        parts += [tag("path", d=peaks, class_="peaks"), tag("g", texts, class_="value")]
    unit = units.symbol(kind.quantity)
    title = f"{kind.name} [{unit}]"
    ordinates = [scale * e.value for m in members for e in kind.extremes(m)] + [0.0]
    above, below = (f(ordinates) for f in (min, max))
    top = axis + above - _LABEL - 3.0
    height = below - above + 2.0 * _LABEL + 6.0
    return tag(
        "figure",
        tag(
            "svg", tag("title", f"{kind.name} envelope in {unit}"), parts,
            viewBox=f"0 {top:.0f} {WIDTH:g} {height:.0f}", role="img", class_="diagram",
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
        start = at.starts[index]
        points = [
            (round(at.at(index, float(x)), 1), round(axis + scale * v, 1))
            for x, v in zip(member.x[::step], values(member)[::step], strict=True)
        ]
        path, (x0, y0) = f"M{pixels(start)},{pixels(axis)}", (round(start, 1), round(axis, 1))
        for x, y in thinned(points):
            if (x, y) == (x0, y0):
                continue
            across, down = pixels(x - x0), pixels(y - y0)
            path += f"l{across}{'' if down.startswith('-') else ','}{down}"
            x0, y0 = x, y
        pieces.append(f"{path}V{pixels(axis)}Z")
    return tag("path", d="".join(pieces), class_=f"area {name}")


def thinned(points: Sequence[tuple[float, float]]) -> list[tuple[float, float]]:
    """Return points without those that lie on the straight line between kept ones."""
    kept, last = [points[0]], 0
    for i in range(2, len(points)):
        (x1, y1), (x2, y2) = points[last], points[i]
        run = max(x2 - x1, 1e-9)
        straight = all(
            abs(y1 + (y2 - y1) * (x - x1) / run - y) <= _STRAIGHT for x, y in points[last + 1 : i]
        )
        if not straight:
            last = i - 1
            kept.append(points[last])
    return [*kept, points[-1]]


@dataclass(frozen=True, slots=True)
class _Label:
    x: float
    y: float
    text: str
    below: bool
    anchor: str | None

    def markup(self) -> Markup:
        return tag(
            "text", self.text, x=min(max(self.x, MARGIN), WIDTH - MARGIN),
            y=self.y + (13.0 if self.below else -5.0), text_anchor=self.anchor,
        )  # fmt: skip


def _labels(
    kind: _Kind, member: MemberEnvelope, index: int, at: Strip, axis: float, scale: float,
    largest: float, units: DisplayUnits,
) -> list[_Label]:  # fmt: skip
    """Place of each extreme and its label."""
    out = []
    for extreme in kind.extremes(member):
        if abs(extreme.value) <= 0.02 * largest:
            continue
        x, y = at.at(index, extreme.x), axis + scale * extreme.value
        below = scale * extreme.value > 0.0
        anchor = None
        if extreme.x < 0.02 * float(member.x[-1]):
            anchor = "start"
        elif extreme.x > 0.98 * float(member.x[-1]):
            anchor = "end"
        text = units.number(extreme.value, kind.quantity)
        out.append(_Label(x, y, text, below, anchor))
    return out
