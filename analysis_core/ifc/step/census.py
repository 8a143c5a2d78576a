"""Count and check the instances of a DATA section with array operations.

26 MB take about a third of a second; a tokenizer in plain Python would take half a minute.
Which mark may follow which is a table, nesting is a running sum, so no character is looked at
one by one.
"""

from __future__ import annotations

import re
from collections import defaultdict
from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Ints = NDArray[np.int64]
Bytes = NDArray[np.uint8]

_STRETCH = 1 << 21
_MOST_DIGITS = 18
_DROPPED = b"\0 \t\r\n"
_CLASS_NAME = re.compile(rb"=(\w+)\(")

# Kinds of marks.
_BAD, _OPEN, _CLOSE, _COMMA, _TEXT, _HASH, _EQUALS, _END, _LONE, _DIGIT, _LETTER, _POINT, _BITS = (
    range(13)
)


class GrammarError(Exception):
    """A statement that is no instance: ``statement`` counts from 0, from position ``begin`` on."""

    def __init__(self, message: str, statement: int) -> None:
        super().__init__(message)
        self.statement = statement
        self.begin = 0


@dataclass(frozen=True, slots=True, eq=False)
class Census:
    """The instances of a DATA section, in the order of the file.

    Of each: its number (``ids``), where in the text it begins, white space included, and where
    its semicolon stands (``starts``, ``ends``), its class (``kinds``, places in ``names``, which
    are in capitals) and how many attributes it has (``attributes``).
    """

    ids: Ints
    starts: Ints
    ends: Ints
    kinds: Ints
    attributes: Ints
    names: tuple[str, ...]

    @property
    def shapes(self) -> dict[tuple[str, int], int]:
        """How many instances there are of each class and number of attributes."""
        width = int(self.attributes.max(initial=0)) + 1
        values, counts = np.unique(self.kinds * width + self.attributes, return_counts=True)
        pairs = [divmod(value, width) for value in values.tolist()]
        return {
            (self.names[kind], attributes): count
            for (kind, attributes), count in zip(pairs, counts.tolist(), strict=True)
        }


def take_census(blanked: bytes, sections: Sequence[tuple[int, int]]) -> tuple[Census, Ints]:
    """Return the census of the statements in DATA sections (from, to) of a text, blanked.

    With it go the numbers that are referred to, repeats kept.  Raises GrammarError at a statement
    that is no whole instance.
    """
    parts: list[tuple[Ints, ...]] = [(np.zeros(0, np.int64),) * 6]
    kind_of: defaultdict[bytes, int] = defaultdict()
    kind_of.default_factory = kind_of.__len__
    for first, stretch in _stretches(blanked, sections):
        text = stretch.translate(None, _DROPPED)
        if not text:
            continue
        try:
            parts.append(_counted(text, kind_of) + _places(stretch, first))
        except GrammarError as error:
            error.begin = first
            raise
    ids, references, kinds, attributes, starts, ends = map(np.concatenate, zip(*parts, strict=True))
    names, same = _in_capitals(kind_of)
    return Census(ids, starts, ends, same[kinds], attributes, names), references


def _stretches(text: bytes, sections: Sequence[tuple[int, int]]) -> Iterator[tuple[int, bytes]]:
    """Yield runs of whole statements and where they begin; the working arrays stay small."""
    for start, stop in sections:
        while start < stop:
            end = start + _STRETCH
            if end < stop:
                end = text.rfind(b";", start, end) + 1 or text.find(b";", end, stop) + 1
            end = end if start < end <= stop else stop
            yield start, text[start:end]
            start = end


def _counted(text: bytes, kind_of: defaultdict[bytes, int]) -> tuple[Ints, Ints, Ints, Ints]:
    """Return numbers given, numbers referred to, kinds and attributes of statements."""
    marks = np.frombuffer(text, np.uint8)
    kinds = _KIND[marks]
    counts = _attribute_counts(text, kinds)
    names = _CLASS_NAME.findall(text)
    if len(names) != counts.size:
        raise _nameless(text)
    hashes = np.flatnonzero(kinds == _HASH)
    defines = kinds[hashes - 1] == _END
    defines[:1] = True
    numbers = _numbers(marks, hashes + 1)
    kind = np.fromiter(map(kind_of.__getitem__, names), np.int64, len(names))
    return numbers[defines], numbers[~defines], kind, counts


def _places(stretch: bytes, first: int) -> tuple[Ints, Ints]:
    """Return where the statements of a stretch of the text begin and end."""
    ends = np.flatnonzero(np.frombuffer(stretch, np.uint8) == ord(";")) + first
    starts = np.empty_like(ends)
    starts[:1], starts[1:] = first, ends[:-1] + 1
    return starts, ends


def _in_capitals(kind_of: dict[bytes, int]) -> tuple[tuple[str, ...], Ints]:
    """Return the names in capitals, and the place there of each name as it was written."""
    places: dict[str, int] = {}
    same = [places.setdefault(name.decode("ascii").upper(), len(places)) for name in kind_of]
    return tuple(places), np.array(same, np.int64)


def _attribute_counts(text: bytes, kinds: Bytes) -> Ints:
    """Return the number of attributes of each statement, and check the grammar."""
    wrong = _MUST_NOT_FOLLOW[(kinds[:-1] << 4) | kinds[1:]]
    at = np.flatnonzero((kinds >= _OPEN) & (kinds <= _COMMA) | (kinds == _EQUALS) | (kinds == _END))
    kind = kinds[at]
    depth = np.cumsum(_DEPTH[kind], dtype=np.int64)
    statement = np.cumsum(kind == _END)
    bad = (depth < 0) | (depth > 0) & ((kind == _END) | (kind == _EQUALS))
    bad |= (depth == 0) & (kind == _COMMA)
    count = int(statement[-1]) if at.size else 0
    equals = np.bincount(statement[kind == _EQUALS], minlength=count + 1)
    first = min(
        _first(np.flatnonzero(wrong) + 1),
        _first(at[bad]),
        0 if kinds[0] != _HASH else len(text),
    )
    if first < len(text):
        broken = text.count(b";", 0, first)
        raise GrammarError(_what_is_wrong(text, first), broken)
    if kinds[-1] != _END or count == 0:
        raise GrammarError("it does not end", count)
    if (equals[:count] != 1).any():
        raise GrammarError("it has no name", int(np.flatnonzero(equals[:count] != 1)[0]))
    commas = np.bincount(statement[(kind == _COMMA) & (depth == 1)], minlength=count)[:count]
    ends = at[kind == _END]
    empty = (kinds[ends - 1] == _CLOSE) & (kinds[ends - 2] == _OPEN) & (commas == 0)
    attributes: Ints = commas + 1 - empty
    return attributes


def _nameless(text: bytes) -> GrammarError:
    """Return the error for the first statement whose class name is no plain word."""
    for number, statement in enumerate(text.split(b";")):
        if len(_CLASS_NAME.findall(statement)) != 1:
            return GrammarError("its class is not a plain name", number)
    return GrammarError("a class is not a plain name", 0)


def _first(positions: Ints) -> int:
    return int(positions[0]) if positions.size else np.iinfo(np.int64).max


def _what_is_wrong(text: bytes, first: int) -> str:
    around = text[max(0, first - 12) : first + 6].decode("ascii", "replace")
    return f"near {around!r}"


def _numbers(marks: Bytes, starts: Ints) -> Ints:
    """Return the whole numbers whose first digits stand at ``starts``."""
    padded = np.concatenate([marks, np.zeros(_MOST_DIGITS + 2, np.uint8)])
    values = np.zeros(starts.size, np.int64)
    alive = np.ones(starts.size, bool)
    for place in range(_MOST_DIGITS + 1):
        digits = padded[starts + place].astype(np.int64) - ord("0")
        alive &= (digits >= 0) & (digits <= 9)
        if not alive.any():
            return values
        values = np.where(alive, values * 10 + digits, values)
    broken = int(np.count_nonzero(marks[: int(starts[np.flatnonzero(alive)[0]])] == ord(";")))
    raise GrammarError("a number has too many digits", broken)


def _kinds() -> Bytes:
    kinds = np.full(256, _BAD, np.uint8)
    for marks, kind in (
        (b"(", _OPEN), (b")", _CLOSE), (b",", _COMMA), (b"'", _TEXT), (b"#", _HASH),
        (b"=", _EQUALS), (b";", _END), (b"$*", _LONE), (b"0123456789", _DIGIT),
        (b"ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz_", _LETTER),
        (b".+-", _POINT), (b'"', _BITS),
    ):  # fmt: skip
        kinds[list(marks)] = kind
    return kinds


def _must_not_follow() -> NDArray[np.bool_]:
    """At 16 * kind + next kind: whether they must not meet, white space and texts being gone."""
    table = np.ones((16, 16), bool)
    value = (_OPEN, _TEXT, _HASH, _LONE, _DIGIT, _LETTER, _POINT, _BITS)
    after_value = (_COMMA, _CLOSE)
    for kind, followers in (
        (_OPEN, (*value, _CLOSE)),
        (_CLOSE, (*after_value, _END)),
        (_COMMA, value),
        (_TEXT, (*after_value, _TEXT)),
        (_HASH, (_DIGIT,)),
        (_EQUALS, (_LETTER,)),
        (_END, (_HASH,)),
        (_LONE, after_value),
        (_DIGIT, (*after_value, _DIGIT, _LETTER, _POINT, _EQUALS, _OPEN, _BITS)),
        (_LETTER, (_LETTER, _DIGIT, _POINT, _OPEN, _BITS)),
        (_POINT, (*after_value, _DIGIT, _LETTER, _POINT)),
        (_BITS, (*after_value, _DIGIT, _LETTER, _BITS)),
    ):
        table[kind, list(followers)] = False
    return table.ravel()


_KIND = _kinds()
_MUST_NOT_FOLLOW = _must_not_follow()
_DEPTH = np.zeros(13, np.int8)
_DEPTH[_OPEN], _DEPTH[_CLOSE] = 1, -1
