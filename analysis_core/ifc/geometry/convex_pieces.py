"""Outlines that are not convex, as a few convex pieces: walls round a corner, lift shafts."""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import pairwise

import numpy as np

from analysis_core.ifc.geometry.outline import Floats

Ring = tuple[tuple[float, float], ...]
MOST_PIECES = 24


def convex_pieces(rings: Sequence[Floats]) -> list[Ring]:
    """Return convex polygons that make up the region inside ``rings`` (n, 2), voids left out.

    The region is cut into strips at its corners, across its longest edge; strips whose edges go
    on straight are joined again, so that an L gives two pieces and a ring of four walls four.
    Empty where that would take more than ``MOST_PIECES`` pieces.
    """
    turn = _direction(rings)
    c, s = math.cos(turn), math.sin(turn)
    base = rings[0][0]
    edges = []
    for ring in rings:
        x, y = (ring - base).T
        u, v = c * x + s * y, c * y - s * x
        edges += [
            (*a, *b) if a[0] < b[0] else (*b, *a)
            for a, b in pairwise([*zip(u.tolist(), v.tolist(), strict=True), (u[0], v[0])])
        ]
    pieces = _strips(edges)
    if len(pieces) > MOST_PIECES:
        return []
    return [
        tuple((c * u - s * v + base[0], s * u + c * v + base[1]) for u, v in piece)
        for piece in pieces
    ]


def _direction(rings: Sequence[Floats]) -> float:
    steps = np.roll(rings[0], -1, axis=0) - rings[0]
    x, y = steps[int(np.hypot(steps[:, 0], steps[:, 1]).argmax())].tolist()
    return math.atan2(y, x)


Edge = tuple[float, float, float, float]


def _strips(edges: Sequence[Edge]) -> list[list[tuple[float, float]]]:
    size = max(max(abs(v) for v in edge) for edge in edges)
    levels = sorted({round(u / (1e-6 * size)) * 1e-6 * size for e in edges for u in (e[0], e[2])})
    finished: list[list[tuple[float, float]]] = []
    # Open pieces: lower and upper edge, and where each began.
    open_: list[tuple[Edge, Edge, float]] = []
    for left, right in pairwise(levels):
        middle = 0.5 * (left + right)
        across = sorted(
            (e for e in edges if e[0] < middle < e[2]), key=lambda e: _height(e, middle)
        )
        pairs = list(zip(across[::2], across[1::2], strict=False))
        kept = []
        for low, high, began in open_:
            match = next(
                (p for p in pairs if _goes_on(low, p[0], left, size)
                 and _goes_on(high, p[1], left, size)),
                None,
            )  # fmt: skip
            if match is None:
                finished.append(_piece(low, high, began, left))
            else:
                pairs.remove(match)
                kept.append((low, high, began))
        open_ = kept + [(low, high, left) for low, high in pairs]
    finished += [_piece(low, high, began, levels[-1]) for low, high, began in open_]
    return finished


def _goes_on(edge: Edge, other: Edge, at: float, size: float) -> bool:
    """Whether ``other`` continues the straight line of ``edge`` at ``at``."""
    if edge is other:
        return True
    same_place = abs(_height(edge, at) - _height(other, at)) < 1e-6 * size
    slopes = [(e[3] - e[1]) / (e[2] - e[0]) for e in (edge, other)]
    return same_place and abs(slopes[0] - slopes[1]) < 1e-6


def _height(edge: Edge, at: float) -> float:
    x, y, x2, y2 = edge
    return y + (y2 - y) * (at - x) / (x2 - x)


def _piece(low: Edge, high: Edge, left: float, right: float) -> list[tuple[float, float]]:
    corners = [
        (left, _height(low, left)),
        (right, _height(low, right)),
        (right, _height(high, right)),
        (left, _height(high, left)),
    ]
    return [p for p, q in pairwise([*corners, corners[0]]) if math.dist(p, q) > 1e-9]
