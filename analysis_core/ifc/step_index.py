"""Where things stand in the bytes of a STEP file: instances, sections, references.

Posting leaves every byte of a model where it was, so it works on the bytes.  Strings and comments
are blanked first (``step_blank``), then arrays of positions answer what a reading character by
character would answer in more time than opening the model takes.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterable
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from analysis_core.ifc.step_blank import blank
from analysis_core.ifc.step_values import decoded

Positions = NDArray[np.int64]
Bytes = NDArray[np.uint8]

_HEAD = re.compile(rb"#\s*(\d+)\s*=\s*([A-Za-z0-9_]*)\s*\(")
_REFERENCE = re.compile(r"'(?:[^']|'')*'|#(\d+)")
_TOKEN = re.compile(r"\s*('(?:[^']|'')*'|[(),]|[^\s(),']+)")
_DATA = re.compile(rb"\bDATA\s*[;(]")
_SCHEMA = re.compile(rb"FILE_SCHEMA\s*\(\s*\(\s*'([^']*)'")


class StepIndex:
    """Positions in ``data``, the bytes of one STEP file.

    ``ids``, ``starts``, ``equals`` and ``ends`` are arrays over its instances in the order of
    the file: number, position of the #, of the =, and just after the semicolon.  ``code`` is the
    file with blanked strings and comments, ``stray`` says that a comment is opened and never
    closed.
    """

    def __init__(self, data: bytes) -> None:
        blanked = blank(data)
        self.data = data
        self.code = blanked.text
        self.comments = blanked.comments
        self.stray = bool(blanked.stray)
        self.open_string = blanked.open >= 0
        self._buffer: Bytes = np.frombuffer(self.code, dtype=np.uint8)
        hashes = np.flatnonzero(self._buffer == ord("#"))
        numbers, after = _numbers(self._buffer, hashes)
        named = numbers >= 0
        hashes, numbers, after = hashes[named], numbers[named], after[named]
        defining = self._buffer[np.minimum(after, self._buffer.size - 1)] == ord("=")
        semicolons = np.flatnonzero(self._buffer == ord(";"))
        at = np.searchsorted(semicolons, after[defining])
        whole = at < semicolons.size
        self.ids: Positions = numbers[defining][whole]
        self.starts: Positions = hashes[defining][whole]
        self.equals: Positions = after[defining][whole]
        self.ends: Positions = semicolons[at[whole]] + 1
        self._mentions = hashes[~defining], numbers[~defining]

    @property
    def largest_id(self) -> int:
        """Largest number given to an instance or referred to, 0 where there is none.

        Some files refer to instances that they do not hold; these numbers stay free.
        """
        return max(int(self.ids.max(initial=0)), int(self._mentions[1].max(initial=0)))

    @property
    def numbers(self) -> set[int]:
        """All numbers given to instances or referred to."""
        return {*self.ids.tolist(), *self._mentions[1].tolist()}

    @cached_property
    def end_of_file(self) -> int | None:
        """Position of END-ISO-10303-21; None where there is none."""
        return _last(self.code, rb"END-ISO-10303-21\s*;", len(self.code))

    @cached_property
    def data_end(self) -> int | None:
        """Position of the last ENDSEC; before END-ISO-10303-21; None where there is none.

        There must be a DATA section, else that would be the end of the header.  A signature
        section stands after END-ISO-10303-21 and ends with an ENDSEC; of its own.
        """
        if self.end_of_file is None:
            return None
        section = _last(self.code, rb"ENDSEC\s*;", self.end_of_file)
        if section is None or _DATA.search(self.code, 0, section) is None:
            return None
        return section

    @property
    def signed(self) -> bool:
        """Whether a signature section follows the data (ISO 10303-21:2016, clause 14)."""
        return self.end_of_file is not None and b"SIGNATURE" in self.code[self.end_of_file :]

    @property
    def schema(self) -> str:
        """The schema in the header as ifcopenshell's families go: IFC2X3, IFC4, IFC4X3."""
        match = _SCHEMA.search(self.content)
        name = match[1].decode("latin-1").upper() if match else ""
        if name.startswith("IFC4X3"):
            return "IFC4X3"
        return "IFC2X3" if name.startswith("IFC2X") else "IFC4" if name.startswith("IFC4") else name

    @property
    def newline(self) -> bytes:
        """The line end that the file uses."""
        head = self.data[:65536]
        if b"\r\n" in head:
            return b"\r\n"
        return b"\r" if b"\r" in head and b"\n" not in head else b"\n"

    @cached_property
    def content(self) -> bytes:
        """The file with blanked comments, strings as they are."""
        if not self.comments:
            return self.data
        content = bytearray(self.data)
        for start, end in self.comments:
            content[start:end] = b" " * (end - start)
        return bytes(content)

    @cached_property
    def _rows(self) -> dict[int, int]:
        return dict(zip(self.ids.tolist(), range(self.ids.size), strict=True))

    def row(self, instance: int) -> int:
        """Return the place of an instance in the arrays; KeyError where there is none."""
        return self._rows[instance]

    def __contains__(self, instance: int) -> bool:
        return instance in self._rows

    def text(self, instance: int) -> str:
        """Return an instance as it stands in the file, without comments."""
        row = self.row(instance)
        return self.content[self.starts[row] : self.ends[row]].decode("utf-8", "surrogateescape")

    def keyword(self, row: int) -> str:
        """Return the class of the instance in a row in capitals, "" where it has none."""
        match = _HEAD.match(self.code, int(self.starts[row]))
        return match[2].decode().upper() if match else ""

    def arguments(self, instance: int) -> list[object]:
        """Return the attributes of an instance: text for tokens, lists for aggregates."""
        return arguments(self.text(instance))

    def instances_of(self, keyword: str) -> list[int]:
        """Return the numbers of all instances of exactly this class, in the order of the file."""
        rows = (self._row_of_keyword(at) for at in self._places(keyword))
        return [int(self.ids[row]) for row in rows if row is not None]

    def instance_at(self, position: int) -> int | None:
        """Return the number of the instance that covers a position, None where none does."""
        row = int(np.searchsorted(self.starts, position, side="right")) - 1
        return int(self.ids[row]) if row >= 0 and position < self.ends[row] else None

    def rooted(self, wanted: Iterable[str]) -> dict[str, list[int]]:
        """Return the numbers of the instances that begin with each wanted GlobalId."""
        names = set(wanted)
        quotes = np.flatnonzero(self._buffer == ord("'"))
        first = np.searchsorted(quotes, self.equals)
        rows = np.flatnonzero(first + 1 < quotes.size)
        first = first[rows]
        opening = quotes[first]
        fits = (quotes[first + 1] == opening + 23) & (opening < self.ends[rows])
        rows, opening = rows[fits], opening[fits]
        raw = np.frombuffer(self.data, dtype=np.uint8)
        text = raw[opening[:, None] + np.arange(1, 23)].tobytes().decode("latin-1")
        found: dict[str, list[int]] = {}
        for k, row in enumerate(rows.tolist()):
            name = text[22 * k : 22 * k + 22]
            if name in names and self._begins_at(row, int(opening[k])):
                found.setdefault(name, []).append(int(self.ids[row]))
        odd = {name for name in names if not _usual(name)}
        return found | (self._rooted_oddly(odd) if odd else {})

    def references(self, instance: int) -> list[int]:
        """Return the numbers that an instance refers to."""
        row = self.row(instance)
        code = self.code[int(self.equals[row]) + 1 : int(self.ends[row])]
        return [int(n) for n in re.findall(rb"#\s*(\d+)", code)]

    @cached_property
    def _links(self) -> tuple[Positions, Positions]:
        """Of every reference in an instance: the number referred to, and the one that refers."""
        places, numbers = self._mentions
        rows = np.searchsorted(self.equals, places) - 1
        inside = (rows >= 0) & (places < self.ends[rows])
        return numbers[inside], self.ids[rows[inside]]

    def referrers(self, wanted: Iterable[int]) -> dict[int, set[int]]:
        """Return, for each wanted number, the numbers of the instances that refer to it."""
        numbers, referrers = self._links
        hit = np.isin(numbers, np.array(sorted(wanted), dtype=np.int64))
        result: dict[int, set[int]] = {}
        for number, referrer in zip(numbers[hit].tolist(), referrers[hit].tolist(), strict=True):
            if referrer != number:
                result.setdefault(number, set()).add(referrer)
        return result

    def _places(self, keyword: str) -> Iterable[int]:
        """Places of a keyword: capitals, as the standard asks, else whatever case there is."""
        capitals = re.compile(keyword.encode() + rb"\s*\(")
        found = [m.start() for m in capitals.finditer(self.code)]
        if not found and b"IFCPROJECT" not in self.code:
            any_case = re.compile(capitals.pattern, re.IGNORECASE)
            found = [m.start() for m in any_case.finditer(self.code)]
        return found

    def _row_of_keyword(self, at: int) -> int | None:
        row = int(np.searchsorted(self.equals, at)) - 1
        if row < 0 or self.code[self.equals[row] + 1 : at].strip():
            return None
        return row

    def _begins_at(self, row: int, quote: int) -> bool:
        match = _HEAD.match(self.code, int(self.starts[row]))
        return match is not None and not self.code[match.end() : quote].strip()

    def _rooted_oddly(self, names: set[str]) -> dict[str, list[int]]:
        """The same for GlobalIds that are not as they should be: read every first string."""
        found: dict[str, list[int]] = {}
        for row in range(self.ids.size):
            match = _HEAD.match(self.code, int(self.starts[row]))
            if match is None:
                continue
            text = self.content[match.end() : self.ends[row]].decode("utf-8", "replace")
            token = _TOKEN.match(text)
            if token and token[1].startswith("'") and (name := decoded(token[1])) in names:
                found.setdefault(name, []).append(int(self.ids[row]))
        return found


def arguments(text: str) -> list[object]:
    """Return the attributes of an instance given as text, or of a bare list in brackets.

    Tokens are text, aggregates are lists; a typed value gives two items, its type and a list.
    """
    opening = text.index("(")
    stack: list[list[object]] = [[]]
    for match in _TOKEN.finditer(text, opening):
        token = match[1]
        if token == "(":
            stack.append([])
        elif token == ")":
            inner = stack.pop()
            stack[-1].append(inner)
            if len(stack) == 1:
                break
        elif token != ",":
            stack[-1].append(token)
    result = stack[0][0]
    return result if isinstance(result, list) else []


def reference(token: object) -> int | None:
    """Return the number in a reference such as #12, None for anything else."""
    if isinstance(token, str) and token.startswith("#") and token[1:].isdigit():
        return int(token[1:])
    return None


def renumbered(text: str, number: Callable[[int], int]) -> str:
    """Return a text with every reference replaced, strings left alone."""
    return _REFERENCE.sub(lambda m: f"#{number(int(m[1]))}" if m[1] else m[0], text)


def _usual(name: str) -> bool:
    return len(name) == 22 and name.isascii() and "'" not in name and "\\" not in name


def _last(code: bytes, pattern: bytes, end: int) -> int | None:
    """Return the last place before ``end`` that fits, looking from the back in steps."""
    regex = re.compile(pattern)
    high = end
    while high > 0:
        low = max(0, high - 65536)
        # A match may begin just below ``high`` and run past it.
        places = [m.start() for m in regex.finditer(code, low, min(end, high + 256))]
        if places:
            return places[-1]
        high = low
    return None


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
