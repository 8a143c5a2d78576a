"""Every instance of a STEP file and every reference in it, as arrays.

Strings and comments are blanked first (``step_blank``), so that each # and each = that is left
has its meaning in the grammar.
"""

from __future__ import annotations

from collections.abc import Iterable
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

Positions = NDArray[np.int64]
Bytes = NDArray[np.uint8]


class StepArrays:
    """``ids``, ``starts``, ``equals`` and ``ends`` are arrays over the instances of a file.

    In the order of the file: number, position of the #, of the =, and just after the semicolon.
    ``mentioned`` are the numbers of all references, one by one.
    """

    def __init__(self, code: bytes) -> None:
        buffer: Bytes = np.frombuffer(code, dtype=np.uint8)
        hashes = np.flatnonzero(buffer == ord("#"))
        numbers, after = _numbers(buffer, hashes)
        named = numbers >= 0
        hashes, numbers, after = hashes[named], numbers[named], after[named]
        defining = buffer[np.minimum(after, buffer.size - 1)] == ord("=")
        semicolons = np.flatnonzero(buffer == ord(";"))
        at = np.searchsorted(semicolons, after[defining])
        whole = at < semicolons.size
        self.ids: Positions = numbers[defining][whole]
        self.starts: Positions = hashes[defining][whole]
        self.equals: Positions = after[defining][whole]
        self.ends: Positions = semicolons[at[whole]] + 1
        self.mentioned: Positions = numbers[~defining]
        self._places: Positions = hashes[~defining]

    @property
    def largest(self) -> int:
        """Largest number given to an instance or referred to, 0 where there is none."""
        return max(int(self.ids.max(initial=0)), int(self.mentioned.max(initial=0)))

    @cached_property
    def rows(self) -> dict[int, int]:
        """The place of each instance in the arrays, by its number."""
        return dict(zip(self.ids.tolist(), range(self.ids.size), strict=True))

    def row_at(self, position: int) -> int | None:
        """Return the place of the instance that covers a position of the file."""
        row = int(np.searchsorted(self.starts, position, side="right")) - 1
        return row if row >= 0 and position < self.ends[row] else None

    @cached_property
    def _links(self) -> tuple[Positions, Positions]:
        """Of every reference in an instance: the number referred to, and the one that refers."""
        rows = np.searchsorted(self.equals, self._places) - 1
        inside = (rows >= 0) & (self._places < self.ends[rows])
        return self.mentioned[inside], self.ids[rows[inside]]

    def referrers(self, wanted: Iterable[int]) -> dict[int, set[int]]:
        """Return, for each wanted number, the numbers of the instances that refer to it."""
        numbers, referrers = self._links
        hit = np.isin(numbers, np.array(sorted(wanted), dtype=np.int64))
        result: dict[int, set[int]] = {}
        for number, referrer in zip(numbers[hit].tolist(), referrers[hit].tolist(), strict=True):
            if referrer != number:
                result.setdefault(number, set()).add(referrer)
        return result


def _numbers(buffer: Bytes, hashes: Positions) -> tuple[Positions, Positions]:
    """Return the number after each #, -1 where there is none, and where the next token begins."""
    numbers = np.zeros(hashes.size, dtype=np.int64)
    at = _skip_blanks(buffer, hashes + 1)
    first = at.copy()
    moving = np.flatnonzero(at < buffer.size)
    while moving.size:
        values = buffer[at[moving]]
        digit = (values >= ord("0")) & (values <= ord("9"))
        moving = moving[digit]
        numbers[moving] = numbers[moving] * 10 + (values[digit] - np.uint8(ord("0")))
        at[moving] += 1
        moving = moving[at[moving] < buffer.size]
    numbers[at == first] = -1
    return numbers, _skip_blanks(buffer, at)


def _skip_blanks(buffer: Bytes, at: Positions) -> Positions:
    """Move each position on to the next byte that is not blank."""
    at = at.copy()
    moving = np.flatnonzero(at < buffer.size)
    while moving.size:
        values = buffer[at[moving]]
        moving = moving[(values == 32) | ((values >= 9) & (values <= 13))]
        at[moving] += 1
        moving = moving[at[moving] < buffer.size]
    return at
