"""Our part of a model file: a block of lines before the end of the data, between two comments.

    ...                                      the file as it was
    /* Spanledger results begin <digest> */  what stands around the block, digested
    #901=IFCPROPERTYSINGLEVALUE(...);
    ...
    /* Spanledger results end <digest> */    what stands in the block, digested
    ENDSEC;
    END-ISO-10303-21;

Nothing else in the file changes, so cutting the block out gives the original file.  The digests
prove it: where another program has rewritten the file or touched the block, they no longer fit,
and our entities are found by their names instead (``remove``).  A file may have two blocks: the
idealised analysis model under the results.
"""

from __future__ import annotations

import hashlib
import re
from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from itertools import pairwise

from analysis_core.ifc.step.index import StepIndex
from analysis_core.ifc.step.values import references

RESULTS = "results"
MODEL = "analysis model"

# Readers commonly keep instance numbers in 32 signed bits.
_LARGEST_NUMBER = 2**31 - 1
_ROOM = 2**26
_NUMBERS = re.compile(rb"(?:^|[\r\n])#(\d+)=")


@dataclass(frozen=True, slots=True)
class Cut:
    """A file without a block: ``base`` is what stood around it, ``block`` its lines.

    ``intact`` says that neither was touched since the block was written.
    """

    base: bytes
    block: bytes
    intact: bool


class Lines:
    """Instances under construction, numbered upwards from ``first``.

    ``shared`` gives instances of equal text one number: properties may stand in many sets.
    """

    def __init__(self, first: int, newline: bytes) -> None:
        self.next = first
        self._end = f";{newline.decode()}"
        self._lines: list[str] = []
        self._shared: dict[str, int] = {}

    def add(self, body: str) -> int:
        """Add an instance, given without number and semicolon; return its number."""
        number = self.next
        self.next = number + 1
        self._lines.append(f"#{number}={body}{self._end}")
        return number

    def shared(self, body: str) -> int:
        """Return the number of an instance with this text; add it where there is none yet."""
        number = self._shared.get(body)
        if number is None:
            number = self._shared[body] = self.add(body)
        return number

    def shared_list(self, bodies: Iterable[str]) -> str:
        """Return references to instances with these texts."""
        return references(map(self.shared, bodies))

    def form(self, bodies: Iterable[str]) -> str:
        """Return a format string for instances that are written together, for ``add_text``.

        Each begins with a place for its number.
        """
        return "".join(f"#%d={body}{self._end}" for body in bodies)

    def add_text(self, text: str, count: int) -> None:
        """Add so many instances as they are, numbered by the caller from ``next`` on."""
        self._lines.append(text)
        self.next += count

    def taken(self) -> bytes:
        """Return the lines added since this was asked last, each with its line end."""
        text = "".join(self._lines)
        self._lines = []
        return text.encode("ascii")


def first_free(index: StepIndex, kept: bytes = b"") -> int:
    """Return the number from which ours may count: after all of the file, or in a wide gap.

    ``kept`` are lines that stay in our block.  Numbers of some files reach the limit of 32 bits;
    then the widest gap below is taken.
    """
    own = [int(n) for n in _NUMBERS.findall(kept)]
    largest = max([index.largest_number, *own])
    if largest < _LARGEST_NUMBER - _ROOM:
        return largest + 1
    taken = sorted({0, *index.numbers, *own, _LARGEST_NUMBER})
    below = [n for n in taken if n <= _LARGEST_NUMBER]
    gaps = [(high - low, low) for low, high in pairwise(below)]
    widest: int = max(gaps)[1]
    return widest + 1


def with_block(index: StepIndex, lines: Iterator[bytes], kind: str) -> Iterator[bytes | memoryview]:
    """Return the file, part by part, with a block of ``lines`` before the end of its data.

    Without marks where the file opens a comment and never closes it: ours would.
    """
    view, end = memoryview(index.data), index.data_end
    assert end is not None  # the caller has seen to it
    yield view[:end]
    total = hashlib.sha256()
    for number, piece in enumerate(filter(None, lines)):
        if number == 0 and not index.stray:
            yield _mark(kind, "begin", _digest(index.data), index)
        total.update(piece)
        yield piece
    if total.digest() != hashlib.sha256().digest() and not index.stray:
        yield _mark(kind, "end", total.hexdigest(), index)
    yield view[end:]


def _mark(kind: str, which: str, digest: str, index: StepIndex) -> bytes:
    return f"/* Spanledger {kind} {which} {digest} */".encode() + index.newline


def cut_block(data: bytes, kind: str) -> Cut | None:
    """Return the file without its block of this kind, None where no block is marked.

    The marks are looked for from the end of the file, where they stand.
    """
    opening = _last_mark(data, f"/* Spanledger {kind} begin ")
    closing = _last_mark(data, f"/* Spanledger {kind} end ")
    if opening is None or closing is None or closing.start() < opening.end():
        return None
    base = data[: opening.start()] + data[closing.end() :]
    block = data[opening.end() : closing.start()]
    intact = opening[1] == _digest(base).encode() and closing[1] == _digest(block).encode()
    return Cut(base, block, intact)


def mark_spans(
    data: bytes, comments: Iterable[tuple[int, int]], kind: str
) -> list[tuple[int, int]]:
    """Return where the marks of a kind of block stand among the comments, line ends included."""
    mark = rb"/\* Spanledger " + kind.encode() + rb" (?:begin|end) [0-9a-f]{64} \*/(?:\r\n?|\n)?"
    pattern = re.compile(mark)
    found = (pattern.match(data, start) for start, _ in comments)
    return [match.span() for match in found if match]


def _last_mark(data: bytes, start: str) -> re.Match[bytes] | None:
    at = data.rfind(start.encode())
    pattern = re.escape(start.encode()) + rb"([0-9a-f]{64}) \*/(?:\r\n?|\n)?"
    return re.compile(pattern).match(data, at) if at >= 0 else None


def _digest(data: bytes) -> str:
    return hashlib.sha256(data).hexdigest()
