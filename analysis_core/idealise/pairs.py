"""Pairs of boxes that overlap, among thousands, without comparing all with all."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Indices = NDArray[np.int64]

_CELL = np.array([8.0, 8.0, 4.0])  # m; about a bay wide and a storey high
_MANY = 4096  # a box over more cells than this is compared with all others instead


def overlapping(first: Floats, second: Floats) -> tuple[Indices, Indices]:
    """Return (i, j) of all boxes first[i] and second[j] that overlap, in order of i, then j.

    Boxes are rows (lowest x, y, z, highest x, y, z) in m.
    """
    if not len(first) or not len(second):
        return np.empty(0, np.int64), np.empty(0, np.int64)
    origin = np.minimum(first[:, :3].min(axis=0), second[:, :3].min(axis=0))
    keys = [_cells(boxes, origin) for boxes in (first, second)]
    i, j = _joined(*keys)
    for boxes, others, swap in ((first, second, False), (second, first, True)):
        for wide in np.flatnonzero(_count(boxes, origin) > _MANY):
            all_of = np.arange(len(others))
            same = np.full(len(others), wide)
            i = np.concatenate([i, all_of if swap else same])
            j = np.concatenate([j, same if swap else all_of])
    a, b = first[i], second[j]
    touch = ((a[:, :3] <= b[:, 3:]) & (b[:, :3] <= a[:, 3:])).all(axis=1)
    both = np.unique(i[touch] * len(second) + j[touch])
    return both // len(second), both % len(second)


def _range(boxes: Floats, origin: Floats) -> tuple[Indices, Indices]:
    low = np.floor((boxes[:, :3] - origin) / _CELL).astype(np.int64)
    high = np.floor((boxes[:, 3:] - origin) / _CELL).astype(np.int64)
    return low, high - low + 1


def _count(boxes: Floats, origin: Floats) -> Indices:
    return np.asarray(_range(boxes, origin)[1].prod(axis=1))


def _cells(boxes: Floats, origin: Floats) -> tuple[Indices, Indices]:
    """Return (box number, cell key) for every cell that a box touches, sorted by key."""
    low, size = _range(boxes, origin)
    count = size.prod(axis=1)
    count = np.where(count > _MANY, 0, count)
    number = np.repeat(np.arange(len(boxes)), count)
    step = np.arange(count.sum()) - np.repeat(np.cumsum(count) - count, count)
    size = size[number]
    x = low[number, 0] + step % size[:, 0]
    y = low[number, 1] + step // size[:, 0] % size[:, 1]
    z = low[number, 2] + step // (size[:, 0] * size[:, 1])
    key = (x * 2_000_003 + y) * 20_011 + z  # distinct cells may share a key; boxes are compared
    order = np.argsort(key, kind="stable")
    return number[order], key[order]


def _joined(
    first: tuple[Indices, Indices], second: tuple[Indices, Indices]
) -> tuple[Indices, Indices]:
    """Return the pairs of box numbers that share a key."""
    low = np.searchsorted(second[1], first[1], side="left")
    count = np.searchsorted(second[1], first[1], side="right") - low
    i = np.repeat(first[0], count)
    step = np.arange(count.sum()) - np.repeat(np.cumsum(count) - count, count)
    return i, second[0][np.repeat(low, count) + step]
