"""Columns and walls that stand on one another, and what the lines hand down to them.

The reaction of every line goes to the element that carries it; each element hands the sum on to
the one below it.  Sums are per load case, unfactored; the own weight of columns and walls is not
in them.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from analysis_core.building import Building, Carrier
from analysis_core.idealise.pairs import Floats, overlapping
from analysis_core.results import LineResult

_STANDING = ("IfcColumn", "IfcWall", "IfcFooting", "IfcPile")
_REACH = 1.3
"""An element may stand this far (m) above the one below: the depth of a floor lies between."""
_OVERLAP = 0.3
"""So far (m) the foot of one may reach down beside the head of the other."""
_ASIDE = 0.35
"""So far (m) aside in plan it may stand."""


@dataclass(frozen=True, slots=True)
class Standing:
    """An element that carries lines or others: its levels in m, and what it stands on."""

    global_id: str
    name: str
    ifc_class: str
    storey: str | None
    bottom: float
    top: float
    on: str | None


@dataclass(frozen=True, slots=True)
class Received:
    """What one element carries, by case: N, downward positive.

    ``lines``: from the lines and slabs that bear on it; ``total``: with what stands on it.
    """

    element: Standing
    lines: Mapping[str, float]
    total: Mapping[str, float]


def standing_elements(building: Building) -> tuple[Standing, ...]:
    """Return columns, walls, piles and footings with what each stands on, from the top down."""
    carriers: dict[str, list[Carrier]] = {}
    for carrier in building.carriers:
        if carrier.ifc_class.startswith(_STANDING):
            carriers.setdefault(carrier.global_id, []).append(carrier)
    if not carriers:
        return ()
    boxes = _boxes(list(carriers.values()))
    below = _below(list(carriers), boxes)
    levels = boxes[:, [2, 5]].tolist()
    out = [
        Standing(
            key, pieces[0].name, pieces[0].ifc_class, pieces[0].storey, bottom, top, below.get(key)
        )
        for (key, pieces), (bottom, top) in zip(carriers.items(), levels, strict=True)
    ]
    return tuple(sorted(out, key=lambda s: (-s.bottom, s.name, s.global_id)))


def received(
    standing: Sequence[Standing],
    results: Iterable[LineResult],
    cases: Sequence[str],
    direct: Iterable[tuple[str, str, float]] = (),
) -> tuple[Received, ...]:
    """Return what every element carries, from the top down; those that carry nothing left out.

    ``direct``: what goes straight to an element, as a slab on a wall: GlobalId, case, N.
    """
    lines: dict[str, dict[str, float]] = {}
    for wall, case, force in direct:
        lines.setdefault(wall, dict.fromkeys(cases, 0.0))[case] += force
    for result in results:
        if result.solution is None:
            continue
        for joint in result.line.joints:
            if joint.support is None or joint.element is None:
                continue
            sums = lines.setdefault(joint.element, dict.fromkeys(cases, 0.0))
            values = result.solution.reactions[:, joint.id, 1]
            for case, value in zip(result.solution.cases, values, strict=True):
                sums[case] += float(value)
    totals = {s.global_id: dict(lines.get(s.global_id, {})) for s in standing}
    out = []
    for element in standing:  # from the top down: what stands on it is summed already
        total = totals[element.global_id]
        if not total:
            continue
        out.append(Received(element, lines.get(element.global_id, {}), total))
        if element.on in totals:
            below = totals[element.on]
            for case, value in total.items():
                below[case] = below.get(case, 0.0) + value
    return tuple(out)


def _boxes(elements: Sequence[Sequence[Carrier]]) -> Floats:
    """The boxes (n, 6) round elements, each in pieces: lowest x, y, z, then highest."""
    outlines = [
        [corner for piece in pieces for corner in piece.corners] or [(0.0, 0.0)]
        for pieces in elements
    ]
    corners = np.array([corner for outline in outlines for corner in outline])
    counts = np.array([len(outline) for outline in outlines])
    first = np.cumsum(counts) - counts
    low, high = (bound.reduceat(corners, first) for bound in (np.minimum, np.maximum))
    bottoms = [[min(piece.bottom for piece in pieces)] for pieces in elements]
    tops = [[max(piece.top for piece in pieces)] for pieces in elements]
    return np.hstack([low, bottoms, high, tops])


def _below(keys: Sequence[str], boxes: Floats) -> dict[str, str]:
    """The element under the foot of each: the nearest below it, then the nearest aside.

    ``boxes`` (n, 6) are those of the elements; those with nothing under them are left out.
    """
    low, high = boxes[:, :3], boxes[:, 3:]
    feet = np.column_stack([(low[:, :2] + high[:, :2]) / 2.0, low[:, 2]])
    reach = np.array([_ASIDE, _ASIDE, _REACH]), np.array([_ASIDE, _ASIDE, _OVERLAP])
    under = np.hstack([feet - reach[0], feet + reach[1]])
    heads = np.hstack([low[:, :2], high[:, 2:], high])
    upper, lower = overlapping(under, heads)
    gap = feet[upper, 2] - high[lower, 2]
    beside = np.maximum(low[lower, :2] - feet[upper, :2], feet[upper, :2] - high[lower, :2])
    aside = np.hypot(*np.maximum(beside, 0.0).T)
    stands = (upper != lower) & (aside <= _ASIDE) & (gap >= -_OVERLAP) & (gap <= _REACH)
    stands &= low[lower, 2] < low[upper, 2] - 1e-6
    found: dict[str, tuple[float, float, str]] = {}
    pairs = np.column_stack([upper, lower])[stands].tolist()
    measures = np.column_stack([np.abs(gap), aside])[stands].tolist()
    for (a, b), (drop, off) in zip(pairs, measures, strict=True):
        nearest = (drop, off, keys[b])
        found[keys[a]] = min(found.get(keys[a], nearest), nearest)
    return {key: nearest[2] for key, nearest in found.items()}
