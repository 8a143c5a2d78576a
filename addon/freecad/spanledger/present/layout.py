"""Lays a strip out in pixels: the elevation above, a band per curve below, one common axis."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from analysis_core.units import DisplayUnits

from .action_marks import action_rows, draw_actions, short
from .drawing import Drawing, Fill, Place, Spot, Stroke, Words
from .strip import (
    UNIT_OF,
    Curve,
    ShownAction,
    Strip,
    joint_places,
    joint_words,
    member_words,
)
from .symbols import support_symbol
from .words import noop, say

Floats = NDArray[np.float64]
LEFT, RIGHT, TOP = 86.0, 40.0, 8.0
SYMBOL = 13.0
TITLES = {"moment": noop("Moment"), "shear": noop("Shear"), "deflection": noop("Deflection")}
# Which way a positive value is drawn: moments on the side in tension, deflections as they go.
DOWNWARD = {"moment": True, "shear": False, "deflection": True}
ROW, BAND, BELOW_AXIS = 27.0, 74.0, 68.0
"""Least height of a row of actions and of a curve's band; what lies below the beam's axis."""

BLOCK, SEEN, TINY = 8, 0.15, 1e-9

Measure = Callable[[str], float]


def lay_out(
    strip: Strip,
    width: float,
    height: float,
    units: DisplayUnits,
    *,
    measure: Measure = lambda text: 7.0 * len(text),
    quantities: Sequence[str] = ("moment", "shear", "deflection"),
    chosen: tuple[str, int] | None = None,
) -> Drawing:
    """Return the drawing of a strip for an area of ``width`` by ``height`` pixels.

    ``measure`` gives the width of a text in pixels; ``chosen`` is the (kind, number) of the spot
    that is being worked on.
    """
    length = max(s.end for s in strip.stretches)
    titles = max(measure(say(title)) for title in TITLES.values())
    left = max(LEFT, 1.15 * titles + 44.0)  # titles are bold; labels hang over the first joint
    drawing = Drawing(width, height, left, max(width - left - RIGHT, 40.0) / length)
    shown = [q for q in quantities if q in strip.curves]
    rows = action_rows(strip.actions)
    spare = max(height - least_height(strip, quantities), 0.0)
    elevation = _least_elevation(rows) + (0.25 * spare if shown else spare)
    _elevation(drawing, strip, rows, elevation, units, measure, chosen)
    each = (height - elevation - 4.0) / max(len(shown), 1)
    for number, quantity in enumerate(shown):
        top = elevation + number * each
        _band(drawing, strip, strip.curves[quantity], top, each, units, measure)
    return drawing


def least_height(strip: Strip, quantities: Sequence[str]) -> float:
    """Return the height in pixels that a strip needs to be read."""
    shown = sum(q in strip.curves for q in quantities)
    return _least_elevation(action_rows(strip.actions)) + BAND * shown + 4.0


def _least_elevation(rows: Sequence[object]) -> float:
    return TOP + ROW * len(rows) + 24.0 + BELOW_AXIS


def _elevation(
    drawing: Drawing,
    strip: Strip,
    rows: list[tuple[str, list[ShownAction]]],
    height: float,
    units: DisplayUnits,
    measure: Measure,
    chosen: tuple[str, int] | None,
) -> None:
    axis = height - BELOW_AXIS
    row_height = min(1.4 * ROW, (axis - TOP - 20.0) / max(len(rows), 1))
    named = ""
    for number, (case, actions) in enumerate(rows):
        if case != named:
            at = axis - 18.0 - row_height * (len(rows) - 1 - number) - 6.0
            drawing.words.append(Words(10.0, at, short(case, 11), "action", "left", small=True))
            named = case
        bottom = axis - 18.0 - row_height * (len(rows) - 1 - number)
        draw_actions(drawing, strip, case, actions, bottom, row_height, measure)
    if not rows:
        words = Words(drawing.to_pixel(0.0), axis - 28.0, say("no action here"), "faint", "left")
        drawing.words.append(words)
    _members(drawing, strip, axis, units, measure, chosen)
    _joints(drawing, strip, axis, units, chosen)
    _dimensions(drawing, strip, axis + 46.0, units, measure)


def _members(
    drawing: Drawing,
    strip: Strip,
    axis: float,
    units: DisplayUnits,
    measure: Measure,
    chosen: tuple[str, int] | None,
) -> None:
    for stretch in strip.stretches:
        left, right = drawing.to_pixel(stretch.start), drawing.to_pixel(stretch.end)
        member = stretch.member
        depth = drawing.scale * (member.section.depth if member.section else 0.0)
        half = min(max(depth / 2.0, 2.0), 13.0)
        role = "chosen" if chosen == ("member", member.id) else "line"
        box = ((left, axis - half), (right, axis - half), (right, axis + half), (left, axis + half))
        drawing.fills.append(Fill(box, role, 0.30))
        drawing.strokes.append(Stroke((*box, box[0]), role, 2.4 if role == "chosen" else 1.4))
        _ends(drawing, strip, stretch.member.id, left, right, axis)
        words = member.section.name if member.section else say("EI stated")
        if measure(words) < right - left - 2.0 * SYMBOL:
            middle = (left + right) / 2.0
            drawing.words.append(Words(middle, axis + half + 10.0, words, "faint", small=True))
        drawing.spots.append(
            Spot(left, axis - 16.0, right, axis + 24.0, "member", member.id,
                 member_words(member, units))
        )  # fmt: skip


def _ends(
    drawing: Drawing, strip: Strip, member_id: int, left: float, right: float, axis: float
) -> None:
    """An open ring where a member's end is released, a ring with a bar where it is on a spring."""
    member = strip.line.members[member_id]
    for at, spring in ((left + 9.0, member.start_spring), (right - 9.0, member.end_spring)):
        if np.isinf(spring):
            continue
        ring = tuple(
            (at + 4.5 * np.cos(a), axis + 4.5 * np.sin(a)) for a in np.linspace(0, 2 * np.pi, 17)
        )
        drawing.fills.append(Fill(ring, "ground", 1.0))
        drawing.strokes.append(Stroke(ring, "line", 1.6))
        if spring > 0.0:
            drawing.strokes.append(Stroke(((at - 4.5, axis), (at + 4.5, axis)), "line", 1.6))


def _joints(
    drawing: Drawing, strip: Strip, axis: float, units: DisplayUnits, chosen: tuple[str, int] | None
) -> None:
    for x, joint in joint_places(strip):
        at = drawing.to_pixel(x)
        role = "chosen" if chosen == ("joint", joint.id) else "support"
        for polyline in support_symbol(joint.support):
            points = tuple((at + SYMBOL * u, axis + 3.0 - SYMBOL * v) for u, v in polyline)
            drawing.strokes.append(Stroke(points, role, 2.6 if role == "chosen" else 1.7))
        drawing.words.append(Words(at, axis + 27.0, str(joint.id), role, bold=True, small=True))
        drawing.spots.append(
            Spot(at - SYMBOL, axis - 12.0, at + SYMBOL, axis + 34.0, "joint", joint.id,
                 joint_words(joint, units))
        )  # fmt: skip


def _dimensions(
    drawing: Drawing, strip: Strip, y: float, units: DisplayUnits, measure: Measure
) -> None:
    for stretch in strip.stretches:
        left, right = drawing.to_pixel(stretch.start), drawing.to_pixel(stretch.end)
        drawing.strokes.append(Stroke(((left, y), (right, y)), "faint", 1.0))
        for at in (left, right):
            drawing.strokes.append(Stroke(((at, y - 4.0), (at, y + 4.0)), "faint", 1.0))
        words = units.number(stretch.member.length, "length")
        if measure(words) < right - left - 4.0:
            drawing.words.append(Words((left + right) / 2.0, y + 9.0, words, "ink", small=True))
    drawing.words.append(Words(10.0, y + 9.0, units.symbol("length"), "faint", "left", small=True))


def _band(
    drawing: Drawing,
    strip: Strip,
    curve: Curve,
    top: float,
    height: float,
    units: DisplayUnits,
    measure: Measure,
) -> None:
    drawing.fills.insert(
        0, Fill(((0.0, top), (drawing.width, top), (drawing.width, top + height - 3.0),
                 (0.0, top + height - 3.0)), "band", 1.0)
    )  # fmt: skip
    unit = units.symbol(UNIT_OF[curve.quantity])
    drawing.words.append(
        Words(10.0, top + 12.0, say(TITLES[curve.quantity]), "ink", "left", bold=True)
    )
    drawing.words.append(Words(10.0, top + 28.0, unit, "faint", "left", small=True))
    base, scale = _scale(curve, top + 14.0, height - 31.0)
    for stretch in strip.stretches:
        left, right = drawing.to_pixel(stretch.start), drawing.to_pixel(stretch.end)
        drawing.strokes.append(Stroke(((left, base), (right, base)), "faint", 1.0))
    for x, _ in joint_places(strip):
        at = drawing.to_pixel(x)
        drawing.strokes.append(Stroke(((at, top + 4.0), (at, top + height - 7.0)), "rule", 1.0))
    if curve.before is not None:
        for values in curve.before:
            for run in _runs(drawing, curve.x, values, base, scale):
                drawing.strokes.append(Stroke(run, "before", 1.0, dashed=True))
    _curve(drawing, curve, base, scale)
    if curve.redistributed is not None:
        for values in curve.redistributed:
            for run in _runs(drawing, curve.x, values, base, scale):
                drawing.strokes.append(Stroke(run, "ink", 1.4, dashed=True))
        drawing.words.append(
            Words(drawing.width - 8.0, top + 12.0, say("dashed: redistributed"), "ink", "right",
                  small=True)
        )  # fmt: skip
    elif curve.before is not None:
        drawing.words.append(
            Words(drawing.width - 8.0, top + 12.0, say("dashed: before"), "before", "right",
                  small=True)
        )  # fmt: skip
    _peaks(drawing, curve, base, scale, top, height, measure)


def _scale(curve: Curve, top: float, room: float) -> tuple[float, float]:
    """Return the pixel of zero and pixels per unit, downward positive."""
    sign = 1.0 if DOWNWARD[curve.quantity] else -1.0
    parts = [curve.lower, curve.upper, *(curve.before or ()), *(curve.redistributed or ())]
    values = sign * np.concatenate([p[~np.isnan(p)] for p in parts])
    least, most = min(float(values.min(initial=0.0)), 0.0), max(float(values.max(initial=0.0)), 0.0)
    if most - least == 0.0:
        return top + room / 2.0, 0.0
    factor = room / (most - least)
    return top - factor * least, sign * factor


def _curve(drawing: Drawing, curve: Curve, base: float, scale: float) -> None:
    for values, positive in ((curve.upper, True), (curve.lower, False)):
        one_sided = np.maximum(values, 0.0) if positive else np.minimum(values, 0.0)
        role = _role(curve.quantity, positive)
        for run in _runs(drawing, curve.x, one_sided, base, scale):
            polygon = ((run[0][0], base), *run, (run[-1][0], base))
            hatched = curve.quantity == "moment" and not positive
            drawing.fills.append(Fill(polygon, role, 0.22, hatched))
        for run in _runs(drawing, curve.x, values, base, scale):
            drawing.strokes.append(Stroke(run, role, 1.7))


def _role(quantity: str, positive: bool) -> str:
    if quantity != "moment":
        return quantity
    return "sagging" if positive else "hogging"


def _runs(
    drawing: Drawing, x: Floats, values: Floats, base: float, scale: float
) -> list[tuple[Place, ...]]:
    breaks = [-1, *np.nonzero(np.isnan(values))[0].tolist()]
    if breaks[-1] != len(values) - 1:
        breaks.append(len(values))
    px, py = drawing.origin + drawing.scale * x, base + scale * values
    return [_thinned(px[a + 1 : b], py[a + 1 : b]) for a, b in pairwise(breaks) if b - a > 2]


def _thinned(px: Floats, py: Floats) -> tuple[Place, ...]:
    """Leave points out that lie within SEEN pixels of the chord over their BLOCK.

    Most of a curve is nearly straight between stations; painting costs by the point.  A block
    with a kink keeps all of its points.
    """
    keep = np.ones(len(py), dtype=bool)
    whole = (len(py) - 1) // BLOCK * BLOCK
    if whole:
        x, y = px[:whole].reshape(-1, BLOCK), py[:whole].reshape(-1, BLOCK)
        x_end, y_end = px[BLOCK : whole + 1 : BLOCK], py[BLOCK : whole + 1 : BLOCK]
        along = x - x[:, :1]
        run = np.maximum(x_end - x[:, 0], TINY)
        off_chord = np.abs(y - y[:, :1] - along * ((y_end - y[:, 0]) / run)[:, None])
        straight = off_chord.max(axis=1) <= SEEN
        keep[:whole].reshape(-1, BLOCK)[straight, 1:] = False
    return tuple(zip(px[keep].tolist(), py[keep].tolist(), strict=True))


def _peaks(
    drawing: Drawing, curve: Curve, base: float, scale: float, top: float, height: float,
    measure: Measure,
) -> None:  # fmt: skip
    taken: list[tuple[float, float, float]] = []
    for peak in sorted(curve.peaks, key=lambda p: -abs(p.value)):
        x, y = drawing.to_pixel(peak.x), base + scale * peak.value
        half = measure(peak.words) / 2.0
        below = y >= base
        words_y = min(max(y + (9.0 if below else -9.0), top + 8.0), top + height - 10.0)
        left = min(max(x, drawing.origin - 24.0 + half), drawing.width - half - 4.0)
        if any(abs(left - t[0]) < half + t[2] and abs(words_y - t[1]) < 12.0 for t in taken):
            continue
        taken.append((left, words_y, half + 3.0))
        role = _role(curve.quantity, peak.value > 0.0)
        drawing.strokes.append(Stroke(((x - 3.0, y), (x + 3.0, y)), role, 3.0))
        drawing.words.append(Words(left, words_y, peak.words, role, bold=True, small=True))
