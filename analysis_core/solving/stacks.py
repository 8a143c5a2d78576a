"""Columns and walls that stand on one another, and what the lines hand down to them.

The reaction of every line goes to the element that carries it; each element hands the sum on to
the one below it.  Sums are per load case, unfactored; the own weight of columns and walls is not
in them.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass

from analysis_core.building import Building, Carrier
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
    parts = {key: _extent(pieces) for key, pieces in carriers.items()}
    cells = _cells(parts)
    out = [
        Standing(
            key, pieces[0].name, pieces[0].ifc_class, pieces[0].storey,
            parts[key].bottom, parts[key].top, _below(key, parts, cells),
        )
        for key, pieces in carriers.items()
    ]  # fmt: skip
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


@dataclass(frozen=True, slots=True)
class _Extent:
    bottom: float
    top: float
    low: tuple[float, float]
    high: tuple[float, float]

    @property
    def middle(self) -> tuple[float, float]:
        return (self.low[0] + self.high[0]) / 2.0, (self.low[1] + self.high[1]) / 2.0


def _extent(pieces: Sequence[Carrier]) -> _Extent:
    xs = [x for c in pieces for x, _ in c.corners]
    ys = [y for c in pieces for _, y in c.corners]
    return _Extent(
        min(c.bottom for c in pieces), max(c.top for c in pieces),
        (min(xs, default=0.0), min(ys, default=0.0)), (max(xs, default=0.0), max(ys, default=0.0)),
    )  # fmt: skip


def _cells(parts: Mapping[str, _Extent]) -> dict[tuple[int, int], list[str]]:
    """Elements by squares of 5 m of the plan that they touch."""
    cells: dict[tuple[int, int], list[str]] = {}
    for key, part in parts.items():
        for i in range(int(part.low[0] // 5.0), int(part.high[0] // 5.0) + 1):
            for j in range(int(part.low[1] // 5.0), int(part.high[1] // 5.0) + 1):
                cells.setdefault((i, j), []).append(key)
    return cells


def _below(
    key: str, parts: Mapping[str, _Extent], cells: Mapping[tuple[int, int], list[str]]
) -> str | None:
    """The element under the foot of another: the nearest below it, then the nearest aside."""
    part = parts[key]
    x, y = part.middle
    i, j = int(x // 5.0), int(y // 5.0)
    near = {k for a in (-1, 0, 1) for b in (-1, 0, 1) for k in cells.get((i + a, j + b), ())}
    best: tuple[float, float, str] | None = None
    for other in near:
        below = parts[other]
        gap = part.bottom - below.top
        if other == key or not -_OVERLAP <= gap <= _REACH or below.bottom >= part.bottom - 1e-6:
            continue
        aside = _distance(below, x, y)
        if aside <= _ASIDE and (best is None or (abs(gap), aside, other) < best):
            best = abs(gap), aside, other
    return best[2] if best else None


def _distance(part: _Extent, x: float, y: float) -> float:
    dx = max(part.low[0] - x, 0.0, x - part.high[0])
    dy = max(part.low[1] - y, 0.0, y - part.high[1])
    return float((dx * dx + dy * dy) ** 0.5)
