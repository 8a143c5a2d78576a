"""Which part of a loaded area each supporting line carries.

Two ways: every point of the area goes to the nearest line, which draws the bisectors of the
angles between lines (triangles and trapezoids in a rectangular panel).  One way: every point goes
along the span direction to the nearer of the two lines that it meets.  By panel: a panel more
than twice as long as wide carries across its short side alone (common practice; ACI 318 and
EN 1992 draw the line there too, from memory), others both ways.

Lengths are m, loads per unit of intensity, so that results are m² per m and m².
"""

from __future__ import annotations

import itertools
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from functools import partial
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from analysis_core.idealise.plan import Spot
from analysis_core.idealise.region import TOUCH, Floats, Region, cross

Spread = Literal["panels", "two-way", "one-way"]

_LONG = 2.0  # a panel longer than this many times its width carries one way
_BESIDE = 0.35  # m; a line this far outside the edge of the area still carries it
_ROUNDS = 14  # halvings of an interval on which the share is not linear
_SLACK = 1e-4  # how far from linear a share may be, as a fraction
_LOOKS = np.array([1e-7, 0.01, 0.27, 0.5, 0.73, 0.99, 1.0 - 1e-7])
_SECTORS = 1440


@dataclass(frozen=True, slots=True)
class Share:
    """What one line carries, in m² per unit of intensity.

    ``pieces``: (from, to, width at from, width at to) along the line, m.  ``ends``: areas that
    go to its start and to its end (corners beyond the last line).
    """

    pieces: tuple[tuple[float, float, float, float], ...]
    ends: tuple[float, float] = (0.0, 0.0)

    @property
    def total(self) -> float:
        """Area carried, m²."""
        return sum((b - a) * (u + v) / 2.0 for a, b, u, v in self.pieces) + sum(self.ends)


@dataclass(frozen=True, slots=True)
class _Lines:
    start: Floats
    end: Floats
    length: Floats
    along: Floats

    @classmethod
    def of(cls, segments: Sequence[tuple[Spot, Spot]]) -> _Lines:
        ends = np.asarray(segments, float).reshape(-1, 2, 2)
        apart = ends[:, 1] - ends[:, 0]
        length = np.hypot(apart[:, 0], apart[:, 1])
        return cls(ends[:, 0], ends[:, 1], length, apart / length[:, None])


def shares(
    region: Region,
    segments: Sequence[tuple[Spot, Spot]],
    spread: Spread,
    direction: Spot | None = None,
) -> list[Share]:
    """Return the share of each supporting line.

    ``direction`` is the span direction of "one-way".  Lines must not lie on each other.  With
    "panels", where the panels do not fit together (the total would miss by more than 0.1 %),
    the bisectors decide everywhere.
    """
    lines = _Lines.of(segments)
    result = _shares(region, lines, spread, direction)
    if spread == "panels":
        total = sum(share.total for share in result)
        if abs(total - region.area) > 1e-3 * region.area:
            return _shares(region, lines, "two-way", None)
    return result


def _shares(region: Region, lines: _Lines, spread: Spread, direction: Spot | None) -> list[Share]:
    result = []
    corners = np.concatenate([region.start, lines.start, lines.end])
    for index in range(len(lines.length)):
        pieces: list[tuple[float, float, float, float]] = []
        for side in (1.0, -1.0):
            width = _Width(region, lines, index, side, spread, direction)
            for stretch, rule in width.stretches(corners):
                pieces.extend(_linear_pieces(partial(width, rule=rule), stretch))
        result.append(Share(tuple(sorted(pieces))))
    if spread == "one-way":
        return result
    return _with_ends(region, lines, result)


class _Width:
    """How wide a strip of the region a line carries on one of its sides, along it."""

    def __init__(
        self,
        region: Region,
        lines: _Lines,
        index: int,
        side: float,
        spread: Spread,
        direction: Spot | None,
    ) -> None:
        self.region, self.lines, self.index, self.spread = region, lines, index, spread
        along = lines.along[index]
        self.normal = side * np.array([-along[1], along[0]])
        self.slant = 1.0
        if spread == "one-way" and direction is not None:
            way = np.asarray(direction, float) / np.hypot(*direction)
            self.slant = float(abs(way @ self.normal))
            self.normal = way * np.copysign(1.0, way @ self.normal)

    def stretches(self, corners: Floats) -> list[tuple[list[float], str]]:
        """Return breakpoints with the rule that holds between them."""
        length = float(self.lines.length[self.index])
        origin, along = self.lines.start[self.index], self.lines.along[self.index]
        if self.spread == "one-way":
            # Rays slant along the span direction: a corner is met where its ray leaves the line.
            across = np.array([-self.normal[1], self.normal[0]])
            scale = float(along @ across)
            if abs(scale) < 1e-3:  # the line runs along the span direction and carries nothing
                return []
            places = ((corners - origin) @ across) / scale
        else:
            places = (corners - origin) @ along
        inner = np.unique(places[(places > TOUCH) & (places < length - TOUCH)].round(9))
        if self.spread != "panels":
            return [([0.0, *map(float, inner), length], self.spread)]
        junctions = [0.0, *self._junctions(), length]
        result = []
        for low, high in itertools.pairwise(junctions):
            if high - low > TOUCH:
                within = [float(p) for p in inner if low < p < high]
                result.append(([low, *within, high], self._rule(low, high)))
        return result

    def __call__(self, places: Floats, rule: str) -> Floats:
        base = self.lines.start[self.index] + places[:, None] * self.lines.along[self.index]
        if rule == "nothing":
            return np.zeros(len(places))
        if rule in ("across", "one-way"):
            hit = self._facing(base)
            enters, leaves = self.region.way_through(base, self.normal)
            far = float(np.abs(self.region.start - base[0]).sum(axis=1).max()) + 1.0
            reach = np.where(hit <= leaves + _BESIDE, hit / 2.0, far)
            reach = np.where(enters <= _BESIDE, reach, 0.0)
            return self.slant * self.region.chord(base, self.normal, reach)
        reach = _nearest_reach(base, self.normal, self.lines, self._others())
        return self.region.chord(base, self.normal, reach)

    def _others(self) -> NDArray[np.bool_]:
        others = np.ones(len(self.lines.length), bool)
        others[self.index] = False
        return others

    def _facing(self, base: Floats) -> Floats:
        """Distance along the normal to the next line that crosses it."""
        return _hits(base, self.normal, self.lines, self._others())

    def _junctions(self) -> list[float]:
        """Places where other lines meet this one from this side."""
        lines, index = self.lines, self.index
        origin, along = lines.start[index], lines.along[index]
        found = []
        for other in np.flatnonzero(self._others()):
            for end, inward in (
                (lines.start[other], lines.along[other]),
                (lines.end[other], -lines.along[other]),
            ):
                off = (end - origin) @ self.normal
                place = float((end - origin) @ along)
                if abs(off) < 1e-3 and inward @ self.normal > 1e-3:
                    found.append(place)
            a = (lines.start[other] - origin) @ self.normal
            b = (lines.end[other] - origin) @ self.normal
            if min(a, b) < -1e-3 and max(a, b) > 1e-3:  # it crosses
                share = a / (a - b)
                spot = lines.start[other] + share * (lines.end[other] - lines.start[other])
                found.append(float((spot - origin) @ along))
        length = float(lines.length[index])
        return sorted(p for p in found if TOUCH < p < length - TOUCH)

    def _rule(self, low: float, high: float) -> str:
        """How the panel beside a stretch carries: across to it, past it, or both ways."""
        middle = np.array([(low + high) / 2.0])
        base = self.lines.start[self.index] + middle[:, None] * self.lines.along[self.index]
        depth = float(self._facing(base)[0])
        enters, leaves = self.region.way_through(base, self.normal)
        if not float(enters[0]) <= _BESIDE or not depth <= float(leaves[0]) + _BESIDE:
            return "two-way"
        if high - low > _LONG * depth:
            return "across"
        return "nothing" if depth > _LONG * (high - low) else "two-way"


def _hits(base: Floats, direction: Floats, lines: _Lines, others: NDArray[np.bool_]) -> Floats:
    """Return the distance along ``direction`` from each base to the next line, infinite if none."""
    start, along, length = lines.start[others], lines.along[others], lines.length[others]
    turn = cross(direction[None], along)
    apart = start[None] - base[:, None]
    with np.errstate(divide="ignore", invalid="ignore"):
        distance = cross(apart, along[None]) / turn
        place = cross(apart, direction[None, None]) / turn
    good = (np.abs(turn) > 1e-9) & (distance > TOUCH)
    good &= (place > -TOUCH) & (place < length + TOUCH)
    return np.asarray(np.where(good, distance, np.inf).min(axis=1, initial=np.inf))


def _nearest_reach(
    base: Floats, direction: Floats, lines: _Lines, others: NDArray[np.bool_]
) -> Floats:
    """Return how far along rays the base stays the nearest point of all lines.

    Against a line at signed distance c, approached at rate g: t = c/(1 - g) or -c/(1 + g).
    Against its end at distance d: t = d²/(2 x), with x what of d lies along the ray.
    """
    start, end = lines.start[others], lines.end[others]
    along, length = lines.along[others], lines.length[others]
    direction = np.broadcast_to(direction, base.shape)
    best = np.full(len(base), np.inf)
    if not len(length):
        return best
    apart = base[:, None] - start[None]
    normal = np.stack([-along[:, 1], along[:, 0]], axis=1)
    c = np.einsum("nkj,kj->nk", apart, normal)
    g = direction @ normal.T
    place, drift = np.einsum("nkj,kj->nk", apart, along), direction @ along.T
    with np.errstate(divide="ignore", invalid="ignore"):
        for reach in (c / (1.0 - g), -c / (1.0 + g)):
            foot = place + reach * drift
            good = np.isfinite(reach) & (reach > -1e-12)
            good &= (foot > -TOUCH) & (foot < length + TOUCH)
            best = np.minimum(best, np.where(good, np.maximum(reach, 0.0), np.inf).min(axis=1))
        for point, beyond in ((start, -1.0), (end, 1.0)):
            away = point[None] - base[:, None]
            ahead = np.einsum("nkj,nj->nk", away, direction)
            reach = (away**2).sum(axis=2) / (2.0 * ahead)
            foot = place + reach * drift
            outside = foot < TOUCH if beyond < 0.0 else foot > length - TOUCH
            good = np.isfinite(reach) & (ahead > 1e-12) & outside
            best = np.minimum(best, np.where(good, reach, np.inf).min(axis=1))
    return np.where(np.isfinite(best), best, 1e6)


def _linear_pieces(
    width: Callable[[Floats], Floats], breaks: Sequence[float]
) -> list[tuple[float, float, float, float]]:
    """Return ``width`` as linear pieces: exact where it is piecewise linear, else nearly.

    Where three looks within an interval do not lie on a line, the interval is split where the
    lines from both its ends meet, or in halves.
    """
    done: list[tuple[float, float, float, float]] = []
    work = [(a, b) for a, b in itertools.pairwise(breaks) if b - a > TOUCH]
    for round_number in range(_ROUNDS + 1):
        if not work:
            break
        ends = np.array(work)
        looks = ends[:, :1] + (ends[:, 1:] - ends[:, :1]) * _LOOKS
        values = width(looks.ravel()).reshape(looks.shape)
        again: list[tuple[float, float]] = []
        for (a, b), row in zip(work, values, strict=True):
            first, last = float(row[0]), float(row[-1])
            straight = first + (last - first) * _LOOKS
            slack = _SLACK * max(0.1, float(np.abs(row).max()))
            if float(np.abs(row - straight).max()) <= slack or round_number == _ROUNDS:
                if first or last:
                    done.append((a, b, first, last))
                continue
            kink = a + (b - a) * _kink(row)
            again += [(a, kink), (kink, b)]
        work = [(a, b) for a, b in again if b - a > TOUCH]
    return _joined(sorted(done))


def _joined(
    pieces: list[tuple[float, float, float, float]],
) -> list[tuple[float, float, float, float]]:
    """Return the pieces with those made one that go on along the same line."""
    result: list[tuple[float, float, float, float]] = []
    for piece in pieces:
        if result:
            a, b, u, v = result[-1]
            c, d, w, x = piece
            slack = _SLACK * max(0.1, u, v, w, x)
            meant = u + (v - u) * (d - a) / (b - a)
            if abs(c - b) < TOUCH and abs(w - v) < slack and abs(meant - x) < slack:
                result[-1] = (a, d, u, x)
                continue
        result.append(piece)
    return result


def _kink(row: Floats) -> float:
    """Return where, as a fraction, the lines through the looks at both ends meet; else a half."""
    left = (row[1] - row[0]) / (_LOOKS[1] - _LOOKS[0])
    right = (row[-1] - row[-2]) / (_LOOKS[-1] - _LOOKS[-2])
    if abs(left - right) < 1e-12:
        return 0.5
    at = (row[-1] - right * _LOOKS[-1] - row[0] + left * _LOOKS[0]) / (left - right)
    return float(at) if 0.02 < at < 0.98 else 0.5


def _with_ends(region: Region, lines: _Lines, found: list[Share]) -> list[Share]:
    """Add what is nearest to the very end of a line, shared by all lines that end there."""
    ends = np.zeros((len(found), 2))
    points = np.concatenate([lines.start, lines.end])
    inward = np.concatenate([lines.along, -lines.along])
    count = len(found)
    seen: set[int] = set()
    for number, point in enumerate(points):
        if number in seen:
            continue
        here = np.flatnonzero(np.hypot(*(points - point).T) < 1e-3)
        seen.update(int(n) for n in here)
        touching = np.isin(np.arange(count), here % count)
        area = _end_area(region, lines, point, inward[here], ~touching)
        for n in here:
            ends[n % count, int(n >= count)] += area / len(here)
    return [
        Share(share.pieces, (float(a), float(b))) for share, (a, b) in zip(found, ends, strict=True)
    ]


def _end_area(
    region: Region, lines: _Lines, point: Floats, inward: Floats, others: NDArray[np.bool_]
) -> float:
    """Area that is nearest to a point where lines end, beyond all of them."""
    angles = (np.arange(_SECTORS) + 0.5) * (2.0 * np.pi / _SECTORS)
    rays = np.stack([np.cos(angles), np.sin(angles)], axis=1)
    rays = rays[(rays @ inward.T <= 0.0).all(axis=1)]
    if not len(rays):
        return 0.0
    base = np.broadcast_to(point, rays.shape)
    reach = _nearest_reach(base, rays, lines, others)
    return float(region.sector(base, rays, reach).sum()) * 2.0 * np.pi / _SECTORS
