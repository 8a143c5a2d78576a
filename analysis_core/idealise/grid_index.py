"""Finding what is near without comparing everything with everything: a hash of cells in space."""

from __future__ import annotations

import math
from collections.abc import Iterator
from typing import Generic, TypeVar

from analysis_core.model import Point

T = TypeVar("T")
_CELL = 3.0  # m; about the size of what is looked for

Box = tuple[float, float, float, float, float, float]
"""Lowest x, y, z, then highest."""


class GridIndex(Generic[T]):
    """Things by the cells that they touch.  ``near`` gives each once, in order of entry."""

    def __init__(self) -> None:
        self._items: list[T] = []
        self._cells: dict[tuple[int, int, int], list[int]] = {}

    def add_box(self, item: T, box: Box) -> None:
        """Enter a thing by its bounding box."""
        self._enter(item, _cells_of_box(box))

    def add_segment(self, item: T, start: Point, end: Point, around: float) -> None:
        """Enter a thing that lies within ``around`` of a segment."""
        self._enter(item, _cells_of_segment(start, end, around))

    def near_box(self, box: Box) -> list[T]:
        """Return what touches the cells of a box."""
        return self._found(_cells_of_box(box))

    def near_segment(self, start: Point, end: Point, around: float) -> list[T]:
        """Return what touches the cells within ``around`` of a segment."""
        return self._found(_cells_of_segment(start, end, around))

    def _enter(self, item: T, cells: Iterator[tuple[int, int, int]]) -> None:
        number = len(self._items)
        self._items.append(item)
        for cell in dict.fromkeys(cells):
            self._cells.setdefault(cell, []).append(number)

    def _found(self, cells: Iterator[tuple[int, int, int]]) -> list[T]:
        numbers: set[int] = set()
        for cell in cells:
            numbers.update(self._cells.get(cell, ()))
        return [self._items[number] for number in sorted(numbers)]


def _cells_of_box(box: Box) -> Iterator[tuple[int, int, int]]:
    low = [math.floor(c / _CELL) for c in box[:3]]
    high = [math.floor(c / _CELL) for c in box[3:]]
    for x in range(low[0], high[0] + 1):
        for y in range(low[1], high[1] + 1):
            for z in range(low[2], high[2] + 1):
                yield x, y, z


def _cells_of_segment(start: Point, end: Point, around: float) -> Iterator[tuple[int, int, int]]:
    """Cells of short boxes along the segment, so that a long diagonal stays cheap."""
    span = math.dist(start, end)
    count = max(1, math.ceil(span / _CELL))
    for step in range(count):
        a, b = step / count, (step + 1) / count
        p = [s + a * (e - s) for s, e in zip(start, end, strict=True)]
        q = [s + b * (e - s) for s, e in zip(start, end, strict=True)]
        box = (
            min(p[0], q[0]) - around,
            min(p[1], q[1]) - around,
            min(p[2], q[2]) - around,
            max(p[0], q[0]) + around,
            max(p[1], q[1]) + around,
            max(p[2], q[2]) + around,
        )
        yield from _cells_of_box(box)
