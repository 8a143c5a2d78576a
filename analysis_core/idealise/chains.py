"""Physical beams joined end to end, across bearings and splices, into continuous lines."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import Literal

import numpy as np

from analysis_core.idealise.beams import Beam
from analysis_core.idealise.bearings import RANK, Bearing
from analysis_core.idealise.pairs import overlapping
from analysis_core.idealise.vectors import Vector, dot, length, scale, subtract
from analysis_core.model import Point
from analysis_core.settings import Tolerances

# Ends farther apart than this are two beams even where one pier carries both (m).
_WIDEST = 2.0

How = Literal["splice", "bearing"]
End = tuple[str, int]
"""GlobalId of a beam and 0 for its start, 1 for its end."""


@dataclass(frozen=True, slots=True)
class Link:
    """Two ends that are joined: directly, or over a bearing that both reach."""

    first: End
    second: End
    how: How
    bearing: str = ""
    gap: float = 0.0


@dataclass(frozen=True, slots=True)
class _Tip:
    beam: Beam
    end: int
    point: Point
    outward: Vector

    @property
    def key(self) -> End:
        return self.beam.id, self.end


@dataclass(frozen=True, slots=True)
class _Rules:
    over_bearings: bool
    kept_rigid: frozenset[End]
    loose: frozenset[End]


def link_ends(
    beams: list[Beam],
    bearings: Mapping[str, list[Bearing]],
    tolerances: Tolerances,
    *,
    over_bearings: bool,
    kept_rigid: frozenset[End],
    loose: frozenset[End] = frozenset(),
) -> list[Link]:
    """Return the pairs of collinear ends that go on as one line.

    Ends are joined where they meet within the joining tolerance (a splice), or over a bearing
    that both reach, unless ``over_bearings`` is off.  Beams that frame into the sides of another
    beam are not joined through it, unless the job file makes an end rigid (``kept_rigid``).
    Ends that the model states as released (``loose``) end a line at a bearing.
    """
    tips = [_tip(beam, end) for beam in beams for end in (0, 1)]
    best: dict[End, tuple[float, Link]] = {}
    rules = _Rules(over_bearings, kept_rigid, loose)
    for i, j in _facing(tips, tolerances):
        tip = tips[i]
        found = _link(tip, tips[j], bearings, tolerances, rules)
        if found is not None and (tip.key not in best or found[0] < best[tip.key][0]):
            best[tip.key] = found
    links = []
    for key, (_, link) in sorted(best.items()):
        mutual = best.get(link.second)
        if mutual is not None and mutual[1].second == key and key < link.second:
            links.append(link)
    return links


def _facing(tips: list[_Tip], tolerances: Tolerances) -> Iterator[tuple[int, int]]:
    """Pairs of ends that are near, point at each other and lie on one line in plan."""
    points = np.array([tip.point for tip in tips]).reshape(-1, 3)
    outward = np.array([tip.outward for tip in tips]).reshape(-1, 3)
    reach = np.array([_WIDEST, _WIDEST, 0.5])
    i, j = overlapping(np.hstack([points - reach, points + reach]), np.hstack([points, points]))
    against = np.einsum("nk,nk->n", outward[i], outward[j]) <= -math.cos(tolerances.collinear)
    i, j = i[against], j[against]
    apart = points[j] - points[i]
    flat = np.hypot(outward[i, 0], outward[i, 1])
    side = np.abs(apart[:, 0] * outward[i, 1] - apart[:, 1] * outward[i, 0])
    near = (i // 2 != j // 2) & (side <= flat * tolerances.offset * 1.01)
    return zip(i[near].tolist(), j[near].tolist(), strict=True)


def _tip(beam: Beam, end: int) -> _Tip:
    if end:
        return _Tip(beam, 1, beam.member.end, beam.direction)
    return _Tip(beam, 0, beam.member.start, scale(beam.direction, -1.0))


def _link(
    tip: _Tip,
    other: _Tip,
    bearings: Mapping[str, list[Bearing]],
    tolerances: Tolerances,
    rules: _Rules,
) -> tuple[float, Link] | None:
    if other.beam.id == tip.beam.id:
        return None
    if dot(tip.outward, other.outward) > -math.cos(tolerances.collinear):
        return None
    apart = subtract(other.point, tip.point)
    gap = dot(apart, tip.outward)
    if not -2.0 * tolerances.bearing <= gap <= _WIDEST:
        return None
    if not _in_line(tip, other, apart, gap, tolerances):
        return None
    shared = _shared(bearings[tip.beam.id], tip.end, bearings[other.beam.id], other.end)
    off = length(subtract(apart, scale(tip.outward, gap)))
    score = abs(gap) + 10.0 * off
    ends = {tip.key, other.key}
    rigid = bool(ends & rules.kept_rigid)
    if shared is None:
        if abs(gap) > tolerances.join:
            return None
        return score, Link(tip.key, other.key, "splice", "", gap)
    if not rigid and (shared.kind == "beam" and shared.passes):
        return None
    if shared.kind == "beam" and not shared.passes:  # it ends here; this line goes on
        if abs(gap) > shared.width + tolerances.join:
            return None
        return score, Link(tip.key, other.key, "splice", "", gap)
    if not rigid and (not rules.over_bearings or ends & rules.loose):
        return None
    return score, Link(tip.key, other.key, "bearing", shared.id, gap)


def _in_line(tip: _Tip, other: _Tip, apart: Vector, gap: float, tolerances: Tolerances) -> bool:
    """Sideways the axes must agree; in height the axes, the tops or the undersides."""
    off = subtract(apart, scale(tip.outward, gap))
    side = abs(off[0] * -tip.beam.ray.direction[1] + off[1] * tip.beam.ray.direction[0])
    if side > tolerances.offset:
        return False
    own, next_one = tip.beam, other.beam
    levels = (
        off[2],
        off[2] + next_one.above - own.above,
        off[2] - next_one.below + own.below,
    )
    return min(abs(level) for level in levels) <= tolerances.offset


def _shared(
    first: list[Bearing], first_end: int, second: list[Bearing], second_end: int
) -> Bearing | None:
    """Return the best bearing that both ends reach, None where there is none."""
    own = {(b.id, b.kind): b for b in first if b.end == first_end and not b.lengthwise}
    both = [
        own[(b.id, b.kind)]
        for b in second
        if b.end == second_end and (b.id, b.kind) in own and not b.lengthwise
    ]
    return min(both, key=lambda b: (RANK[b.kind], b.gap, b.id), default=None)


def chains(beams: list[Beam], links: list[Link]) -> list[list[Beam]]:
    """Return the beams in chains, each in order along it; a beam alone is a chain of one."""
    table = {beam.id: beam for beam in beams}
    partner: dict[End, End] = {}
    for link in links:
        partner[link.first], partner[link.second] = link.second, link.first
    seen: set[str] = set()
    result = []
    for beam in sorted(beams, key=lambda b: b.id):
        if beam.id in seen:
            continue
        start = _outermost(beam.id, partner)
        chain = []
        key: End | None = start
        while key is not None and key[0] not in seen:
            seen.add(key[0])
            chain.append(table[key[0]])
            key = partner.get((key[0], 1 - key[1]))
        result.append(chain)
    return result


def _outermost(beam: str, partner: Mapping[End, End]) -> End:
    """Walk from a beam to one end of its chain; return that beam and its outer end."""
    key: End = (beam, 0)
    visited = {beam}
    while (other := partner.get(key)) is not None and other[0] not in visited:
        visited.add(other[0])
        key = (other[0], 1 - other[1])
    return key
