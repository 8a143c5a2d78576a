"""One line as the desk shows it: spans, bearings, actions, and curves for a chosen view.

Positions run along the line: a span lies at its own place, legs follow behind the last span with
a gap, so that every member has a stretch of the axis to itself.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace

import numpy as np
from numpy.typing import NDArray

from analysis_core.model import (
    Joint,
    Line,
    Member,
)
from analysis_core.results import Extreme, LineEnvelope, LineResult
from analysis_core.units import DisplayUnits

from .diagrams import Quantity, View, line_ordinates, view_envelopes
from .shown_actions import ShownAction, chosen_actions, shown_action
from .stretches import Stretch, stretches_of
from .words import say

Floats = NDArray[np.float64]
QUANTITIES: tuple[Quantity, ...] = ("moment", "shear", "deflection")
UNIT_OF: Mapping[str, str] = {"moment": "moment", "shear": "force", "deflection": "deflection"}
CURVE_POINTS = 161
SEEN = 1e-3  # of the largest ordinate: less than a pixel in the height of a curve


@dataclass(frozen=True, slots=True)
class Peak:
    """An extreme value worth a label."""

    x: float
    value: float
    words: str
    source: str


@dataclass(frozen=True, slots=True, eq=False)
class Curve:
    """A quantity along the axis (P,), broken between members by NaN; ``before`` where it moved."""

    quantity: Quantity
    x: Floats
    lower: Floats
    upper: Floats
    peaks: tuple[Peak, ...]
    before: tuple[Floats, Floats] | None = None
    redistributed: tuple[Floats, Floats] | None = None


@dataclass(frozen=True, slots=True, eq=False)
class Strip:
    """Everything the desk draws of one line."""

    line: Line
    title: str
    stretches: tuple[Stretch, ...]
    actions: tuple[ShownAction, ...]
    curves: Mapping[str, Curve] = field(default_factory=dict)
    status: str = ""
    sampled: bool = False
    """Whether the curves are known at few stations only (an envelope), so that values between
    them are near and not exact."""


def strip_of(
    result: LineResult,
    view: View,
    units: DisplayUnits,
    *,
    before: LineResult | None = None,
    redistributed: bool = True,
) -> Strip:
    """Return what is to be drawn of a line.

    An envelope shows all actions, a combination those of its cases with their factors.
    ``before`` is the same line in the run before, whose curves are drawn beside.  What is left of
    the moments after redistribution is part of a line's details, which take as long to make as
    all else here; ``redistributed`` tells whether any line has it.
    """
    line = result.line
    stretches = stretches_of(line)
    curves = {}
    (envelope,) = view_envelopes([result], view, CURVE_POINTS)
    old = view_envelopes([before], view, CURVE_POINTS)[0] if before is not None else None
    if envelope is not None:
        for quantity in QUANTITIES:
            curve = _curve(envelope, stretches, quantity, units)
            curves[quantity] = _with_before(curve, old, before.line if before else None)
        if redistributed and (after := _redistributed(result, view)) is not None:
            for quantity in ("moment", "shear"):
                pair = _joined(after, stretches, quantity)
                curves[quantity] = replace(curves[quantity], redistributed=pair)
    factors = None if view.kind == "envelope" else dict(view.factors)
    return Strip(
        line=line,
        title=_title(line, view),
        stretches=stretches,
        actions=tuple(
            shown_action(action, line, stretches, units, factors)
            for action in chosen_actions(line, factors)
        ),
        curves=curves,
        status=result.status,
        sampled=view.kind == "envelope",
    )


def joint_places(strip: Strip) -> list[tuple[float, Joint]]:
    """Return the joints with their places on the axis; a joint of several stretches once each."""
    places: dict[tuple[float, int], Joint] = {}
    for stretch in strip.stretches:
        for x, end in ((stretch.start, stretch.member.start), (stretch.end, stretch.member.end)):
            places[round(x, 6), end] = strip.line.joints[end]
    return [(x, joint) for (x, _), joint in sorted(places.items(), key=lambda item: item[0])]


def joint_words(joint: Joint, units: DisplayUnits) -> str:
    """Return what holds a joint and why, for a tooltip."""
    from analysis_core.report.tables import safe, support_text

    held = support_text(joint.support, units)
    parts = [say("Joint {number}: {held}", number=joint.id, held=say(held))]
    if joint.reason:
        parts.append(safe(joint.reason))
    if joint.width:
        parts.append(say("bearing {width} wide", width=units.text(joint.width, "section length")))
    if joint.element:
        parts.append(say("element {element}", element=safe(joint.element)))
    return "\n".join(parts)


def member_words(member: Member, units: DisplayUnits) -> str:
    """Return a member in words, for a tooltip."""
    from analysis_core.report.tables import safe

    length = units.text(member.length, "length")
    if member.role == "span":
        parts = [say("Span {number}: {length}", number=member.span, length=length)]
    else:
        parts = [say("Leg: {length}", length=length)]
    if member.section:
        parts.append(say("section {name}", name=safe(member.section.name)))
    if member.material:
        parts.append(say("material {name}", name=safe(member.material.name)))
    parts.append(f"EI {units.text(member.flexural_rigidity, 'flexural rigidity')}")
    parts.append(say("element {element}", element=safe(member.element)))
    return "\n".join(parts)


def values_at(strip: Strip, x: float, units: DisplayUnits) -> list[tuple[str, str]]:
    """Return (quantity, words) of every curve at a place on the axis."""
    rows = []
    about = "≈ " if strip.sampled else ""
    for quantity, curve in strip.curves.items():
        known = ~np.isnan(curve.upper)
        if not known.any() or not _inside(strip, x):
            continue
        low = float(np.interp(x, curve.x[known], curve.lower[known]))
        high = float(np.interp(x, curve.x[known], curve.upper[known]))
        unit = UNIT_OF[quantity]
        if units.number(low, unit) == units.number(high, unit):
            words = about + units.text(high, unit)
        else:
            words = f"{about}{units.number(low, unit)} … {units.text(high, unit)}"
        rows.append((quantity, words))
    return rows


def _inside(strip: Strip, x: float) -> bool:
    return any(s.start <= x <= s.end for s in strip.stretches)


def _title(line: Line, view: View) -> str:
    spans = len({m.span for m in line.members if m.role == "span"})
    where = f", {line.storey}" if line.storey else ""
    words = say("1 span") if spans == 1 else say("{count} spans", count=spans)
    return f"{line.mark}{where}: {words}; {view.title}"


def _curve(
    envelope: LineEnvelope,
    stretches: tuple[Stretch, ...],
    quantity: Quantity,
    units: DisplayUnits,
) -> Curve:
    x = np.concatenate([_axis_of(s) for s in stretches])
    lower, upper = _joined(envelope, stretches, quantity)
    peaks = [peak for s in stretches for peak in _peaks(envelope, s, quantity, units)]
    return Curve(quantity, x, lower, upper, tuple(_worth_labels(peaks)))


def _joined(
    envelope: LineEnvelope, stretches: Sequence[Stretch], quantity: Quantity
) -> tuple[Floats, Floats]:
    low, high = line_ordinates(envelope, quantity, CURVE_POINTS)
    order = [s.member.id for s in stretches]
    lower = np.concatenate([np.append(low[i], np.nan) for i in order])
    return lower, np.concatenate([np.append(high[i], np.nan) for i in order])


def _axis_of(stretch: Stretch) -> Floats:
    return np.append(np.linspace(stretch.start, stretch.end, CURVE_POINTS), stretch.end)


def _peaks(
    envelope: LineEnvelope, stretch: Stretch, quantity: Quantity, units: DisplayUnits
) -> list[Peak]:
    member = envelope.members[stretch.member.id]
    found: tuple[Extreme, Extreme] = {
        "moment": (member.sagging, member.hogging),
        "shear": (member.shear_max, member.shear_min),
        "deflection": (member.deflection_down, member.deflection_up),
    }[quantity]
    return [
        Peak(stretch.to_axis(e.x), e.value, units.number(e.value, UNIT_OF[quantity]), e.source)
        for e in found
    ]


def _worth_labels(peaks: list[Peak]) -> list[Peak]:
    """Drop values that are nothing beside the largest, and one of two in the same place."""
    largest = max((abs(p.value) for p in peaks), default=0.0)
    kept: list[Peak] = []
    for peak in sorted(peaks, key=lambda p: -abs(p.value)):
        if abs(peak.value) <= 0.02 * largest:
            continue
        if any(abs(peak.x - other.x) < 1e-6 and peak.words == other.words for other in kept):
            continue
        kept.append(peak)
    return sorted(kept, key=lambda p: p.x)


def _redistributed(result: LineResult, view: View) -> LineEnvelope | None:
    """Return the strength envelope after redistribution, where the engineer asked for it."""
    if (view.kind, view.name) != ("envelope", "strength") or result.detail is None:
        return None
    from analysis_core.solving.line_details import detail_of  # late: start-up of the workbench

    found = detail_of(result).redistributed
    return found.envelope if found is not None else None


def _with_before(curve: Curve, before: LineEnvelope | None, line: Line | None) -> Curve:
    if before is None or line is None:
        return curve
    low, high = _joined(before, stretches_of(line), curve.quantity)
    if low.shape != curve.x.shape:
        return curve
    seen = SEEN * float(np.nanmax(np.abs([low, high, curve.lower, curve.upper])))
    moved = [_where_moved(low, curve.lower, seen), _where_moved(high, curve.upper, seen)]
    return replace(curve, before=(low, high)) if any(moved) else curve


def _where_moved(old: Floats, now: Floats, seen: float) -> bool:
    """Empty the stretches of ``old`` that nobody could tell from ``now``; tell if any is left."""
    by_stretch = old.reshape(-1, CURVE_POINTS + 1)
    gap = np.abs(by_stretch - now.reshape(by_stretch.shape))[:, :-1]
    same = gap.max(axis=1) <= seen
    by_stretch[same] = np.nan
    return not same.all()


__all__ = [
    "Curve", "Peak", "ShownAction", "Stretch", "Strip", "joint_places", "joint_words",
    "member_words", "stretches_of", "strip_of", "values_at",
]  # fmt: skip
