"""Rows of numbers as text, many at a time.

Printing millions of numbers one by one takes longer than everything else that posting does.
Here all digits of a block of numbers are found at once: a number rounded to a whole count of its
last decimal is cut into groups of four digits, each looked up in a table; what is not wanted
(a sign that is plus, leading zeros) is masked out, and the rest is the text.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from analysis_core.results import Floats

_FOUR = np.array([f"{i:04d}" for i in range(10_000)], dtype="S4").view("<u4")
_WIDTH = 16
"""Most digits of a number, before and after the point together."""
_LARGEST = 10**15
_MOST_DECIMALS = _WIDTH - 1


class Row(NamedTuple):
    """The text of a row of numbers, and what equal rows have in common."""

    text: str
    key: bytes


def printed(
    arrays: Sequence[Floats],
    *,
    digits: int,
    before: str,
    after: str,
    factor: float = 1.0,
    apart: float = 0.0,
) -> list[Row | None]:
    """Return each array over ``factor`` as text, ``before`` and ``after`` around every number.

    What stands after the last number lacks its last character (a comma between numbers).  Where
    ``apart`` is given, ascending numbers closer than that (before division) are moved apart.  The
    numbers of an array have as many decimals (at least one) as its largest needs to show
    ``digits`` digits.  None for an array with a value that is no number, or too large to print
    with one decimal in 16 digits.
    """
    rows: list[Row | None] = [None] * len(arrays)
    by_size: dict[int, list[int]] = {}
    for i, array in enumerate(arrays):
        by_size.setdefault(array.size, []).append(i)
    for size, chosen in by_size.items():
        if size:
            block = np.array([arrays[i] for i in chosen])
            if apart:
                _move_apart(block, apart)
            block /= factor
            _print_block(block, chosen, digits, before, after, rows)
    return rows


def _print_block(
    block: Floats, places: list[int], digits: int, before: str, after: str,
    rows: list[Row | None],
) -> None:  # fmt: skip
    """Print the rows of a block, equal ones once; each goes to its place in ``rows``."""
    largest = np.abs(block).max(axis=1)
    magnitude = np.floor(np.log10(np.where(largest > 0.0, largest, 1.0)))
    good = np.isfinite(magnitude)
    decimals = np.clip(digits - 1 - magnitude[good], 1, _MOST_DECIMALS).astype(int)
    counts = np.rint(block[good] * 10.0 ** decimals[:, None])
    kept = np.flatnonzero(good)
    fits = np.abs(counts).max(axis=1, initial=0.0) < _LARGEST
    between, end = after + before, after[:-1]
    for wanted in np.unique(decimals).tolist():
        same = np.flatnonzero((decimals == wanted) & fits)
        if not same.size:
            continue
        whole = counts[same].astype(np.int64)
        keys = [bytes((wanted,)) + count.tobytes() for count in whole]
        one = dict(zip(keys, range(len(keys)), strict=True))
        texts = _texts(whole[list(one.values())], wanted)
        # What is the same about every number need not be copied before the last step.
        known = {
            key: Row(f"{before}{text.replace(',', between)}{end}", key)
            for key, text in zip(one, texts, strict=True)
        }
        for i, key in zip(kept[same].tolist(), keys, strict=True):
            rows[places[i]] = known[key]


def _move_apart(block: Floats, apart: float) -> None:
    """Make the rows strictly ascending, by this much at least."""
    for row in np.flatnonzero((block[:, 1:] - block[:, :-1] < apart).any(axis=1)).tolist():
        x = block[row]
        for i in range(1, x.size):
            x[i] = max(x[i], x[i - 1] + apart)


def _texts(counts: NDArray[np.int64], decimals: int) -> list[str]:
    """Return the text of each row of numbers, given as counts of the last decimal: 1.5,-0.25."""
    flat = counts.reshape(-1)
    sizes = np.abs(flat)
    whole = max(1, len(str(int(sizes.max()))) - decimals)  # most digits before the point
    point = 1 + whole
    out = np.empty((flat.size, point + 1 + decimals + 1), dtype=np.uint8)
    digits = _digits(sizes, whole + decimals)
    out[:, 0] = ord("-")
    out[:, 1:point] = digits[:, :whole]
    out[:, point] = ord(".")
    out[:, point + 1 : -1] = digits[:, whole:]
    out[:, -1] = ord(",")
    keep = np.ones(out.shape, dtype=bool)
    keep[:, 0] = flat < 0
    # One digit stays before the point; those before it only behind a digit that is not zero.
    for place in range(whole - 1):
        keep[:, 1 + place] = sizes >= 10 ** (whole + decimals - 1 - place)
    text = out[keep].tobytes().decode("ascii")
    lengths = np.count_nonzero(keep.reshape(len(counts), -1), axis=1)
    ends = np.cumsum(lengths).tolist()
    return [text[start : end - 1] for start, end in zip([0, *ends], ends, strict=False)]


def _digits(sizes: NDArray[np.int64], count: int) -> NDArray[np.uint8]:
    """Return the last ``count`` decimal digits of each number."""
    groups = -(-count // 4)
    found = np.empty((sizes.size, groups), dtype="<u4")
    rest = sizes
    for column in range(groups - 1, -1, -1):
        above = rest // 10_000
        found[:, column] = _FOUR[rest - above * 10_000]
        rest = above
    return found.view(np.uint8)[:, 4 * groups - count :]
