"""Count and check the instances of a DATA section with array operations.

26 MB take about a third of a second; a tokenizer in plain Python would take half a minute.
Which mark may follow which is a table, nesting is a running sum, so no character is looked at
one by one.
"""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Ints = NDArray[np.int64]
Bytes = NDArray[np.uint8]

_CHUNK = 1 << 21
_MOST_DIGITS = 18
_DROPPED = b"\0 \t\r\n"
_CLASS_NAME = re.compile(rb"=(\w+)\(")

# Kinds of marks.
_BAD, _OPEN, _CLOSE, _COMMA, _TEXT, _HASH, _EQUALS, _END, _LONE, _DIGIT, _LETTER, _POINT, _BITS = (
    range(13)
)


class GrammarError(Exception):
    """A statement that is no instance; ``statement`` counts from 0 within the section."""

    def __init__(self, message: str, statement: int) -> None:
        super().__init__(message)
        self.statement = statement


@dataclass(frozen=True, slots=True, eq=False)
class Census:
    """Numbers given, numbers referred to (repeats kept), and counts by class and attributes."""

    ids: Ints
    references: Ints
    shapes: Counter[tuple[str, int]]


def take_census(blanked: bytes) -> Census:
    """Return the census of the statements of a DATA section, blanked.

    Raises GrammarError at a statement that is no whole instance.
    """
    ids: list[Ints] = [np.zeros(0, np.int64)]
    references: list[Ints] = [np.zeros(0, np.int64)]
    shapes: Counter[tuple[bytes, int]] = Counter()
    done = 0
    for chunk in _chunks(blanked.translate(None, _DROPPED)):
        marks = np.frombuffer(chunk, np.uint8)
        kinds = _KIND[marks]
        counts = _attribute_counts(chunk, kinds, done)
        names = _CLASS_NAME.findall(chunk)
        if len(names) != counts.size:
            raise _nameless(chunk, done)
        hashes = np.flatnonzero(kinds == _HASH)
        defines = np.zeros(hashes.size, bool)
        defines[:1] = hashes[:1] == 0
        defines |= kinds[hashes - 1] == _END
        numbers = _numbers(marks, hashes + 1, done)
        ids.append(numbers[defines])
        references.append(numbers[~defines])
        shapes.update(zip(names, counts.tolist(), strict=True))
        done += counts.size
    named: Counter[tuple[str, int]] = Counter()
    for (name, attributes), count in shapes.items():
        named[name.decode("ascii").upper(), attributes] += count
    return Census(np.concatenate(ids), np.concatenate(references), named)


def _chunks(text: bytes) -> Iterator[bytes]:
    """Yield runs of whole statements, so that the working arrays stay small."""
    start = 0
    while start < len(text):
        stop = start + _CHUNK
        if stop < len(text):
            stop = text.rfind(b";", start, stop) + 1 or text.find(b";", stop) + 1
        stop = stop if start < stop <= len(text) else len(text)
        yield text[start:stop]
        start = stop


def _attribute_counts(chunk: bytes, kinds: Bytes, done: int) -> Ints:
    """Return the number of attributes of each statement of a chunk, and check its grammar."""
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
        0 if kinds[0] != _HASH else len(chunk),
    )
    if first < len(chunk):
        broken = chunk.count(b";", 0, first)
        raise GrammarError(_what_is_wrong(chunk, first), done + broken)
    if kinds[-1] != _END or count == 0:
        raise GrammarError("it does not end", done + count)
    if (equals[:count] != 1).any():
        raise GrammarError("it has no name", done + int(np.flatnonzero(equals[:count] != 1)[0]))
    commas = np.bincount(statement[(kind == _COMMA) & (depth == 1)], minlength=count)[:count]
    ends = at[kind == _END]
    empty = (kinds[ends - 1] == _CLOSE) & (kinds[ends - 2] == _OPEN) & (commas == 0)
    attributes: Ints = commas + 1 - empty
    return attributes


def _nameless(chunk: bytes, done: int) -> GrammarError:
    """Return the error for the first statement whose class name is no plain word."""
    for number, statement in enumerate(chunk.split(b";")):
        if len(_CLASS_NAME.findall(statement)) != 1:
            return GrammarError("its class is not a plain name", done + number)
    return GrammarError("a class is not a plain name", done)


def _first(positions: Ints) -> int:
    return int(positions[0]) if positions.size else np.iinfo(np.int64).max


def _what_is_wrong(chunk: bytes, first: int) -> str:
    around = chunk[max(0, first - 12) : first + 6].decode("ascii", "replace")
    return f"near {around!r}"


def _numbers(marks: Bytes, starts: Ints, done: int) -> Ints:
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
    raise GrammarError("a number has too many digits", done + broken)


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
