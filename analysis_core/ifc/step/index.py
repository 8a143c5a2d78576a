"""What posting has to know of the bytes of a STEP file: its instances, sections and numbers.

Posting leaves every byte of a model where it was, so it works on the bytes.  Usually it looks for
few things in a large file, and a search for them is quick; whether a place lies within a string
is told by the number of quotes before it (a doubled quote counts twice and changes nothing).
What needs every instance and reference of the file builds ``StepArrays``.
"""

from __future__ import annotations

import re
from collections.abc import Iterable
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from analysis_core.ifc.step.arrays import Bytes, Positions, StepArrays
from analysis_core.ifc.step.blank import Blanked, blank
from analysis_core.ifc.step.tokens import arguments
from analysis_core.ifc.step.values import decoded

_HEAD = re.compile(rb"#\s*(\d+)\s*=\s*([A-Za-z0-9_]*)\s*\(")
_DATA = re.compile(rb"\bDATA\s*[;(]")
_SCHEMA = re.compile(rb"FILE_SCHEMA\s*\(\s*\(\s*'([^']*)'")
_STRING = re.compile(r"\s*('(?:[^']|'')*')")
_REFERENCE = re.compile(r"'(?:[^']|'')*'|#\s*(\d+)")
_STRETCH = 1 << 22
"""Bytes that are looked at together; what is worked out of them takes several times as much."""
_GLOBAL_ID = re.compile(r"[0-9A-Za-z_$]{22}")


class StepIndex:
    """Finds things in ``data``, the bytes of one STEP file.

    ``comments`` are their spans, ``content`` is the file with blanked comments.  ``stray`` says
    that a comment is opened and never closed, ``open_string`` that a string is.
    """

    def __init__(self, data: bytes) -> None:
        self.data = data
        self.content = data
        self.comments: tuple[tuple[int, int], ...] = ()
        self.stray = False
        self._kinds: dict[int, str] = {}
        # A shifted apostrophe stands alone in a string; quotes cannot be counted then.
        self._countable = b"\\S\\'" not in data
        if b"/*" in data or not self._countable:
            blanked = self._blanked
            self.comments, self.stray = blanked.comments, bool(blanked.stray)
            self.content = _without(data, (*blanked.comments, *blanked.stray))
            self.open_string = blanked.open >= 0
        else:
            self.open_string = data.count(b"'") % 2 == 1

    # -- the file as a whole -----------------------------------------------------------------

    @cached_property
    def end_of_file(self) -> int | None:
        """Position of END-ISO-10303-21; None where there is none."""
        return self._last(rb"END-ISO-10303-21\s*;", len(self.content))

    @cached_property
    def data_end(self) -> int | None:
        """Position of the last ENDSEC; before END-ISO-10303-21; None where there is none.

        There must be a DATA section, else that would be the end of the header.  A signature
        section stands after END-ISO-10303-21 and ends with an ENDSEC; of its own.
        """
        if self.end_of_file is None:
            return None
        section = self._last(rb"ENDSEC\s*;", self.end_of_file)
        if section is None:
            return None
        found = (m.start() for m in _DATA.finditer(self.content, 0, section))
        return section if any(self._outside(at) for at in found) else None

    @property
    def signed(self) -> bool:
        """Whether a signature section follows the data (ISO 10303-21:2016, clause 14)."""
        return self.end_of_file is not None and b"SIGNATURE" in self.content[self.end_of_file :]

    @cached_property
    def schema(self) -> str:
        """The schema family in the header: IFC2X3, IFC4 or IFC4X3."""
        match = _SCHEMA.search(self.content)
        name = match[1].decode("latin-1").upper() if match else ""
        families = (("IFC4X3", "IFC4X3"), ("IFC4", "IFC4"), ("IFC2X", "IFC2X3"))
        return next((family for start, family in families if name.startswith(start)), name)

    @property
    def newline(self) -> bytes:
        """The line end that the file uses."""
        head = self.data[:65536]
        if b"\r\n" in head:
            return b"\r\n"
        return b"\r" if b"\r" in head and b"\n" not in head else b"\n"

    @cached_property
    def largest_number(self) -> int:
        """A number that no instance and no reference of the file exceeds.

        Some files refer to instances that they do not hold; these numbers stay free.
        """
        quick = _largest_after_hash(self.content)
        return self.arrays.largest if quick is None else quick

    @property
    def numbers(self) -> set[int]:
        """All numbers given to instances or referred to."""
        return {*self.arrays.ids.tolist(), *self.arrays.mentioned.tolist()}

    @cached_property
    def arrays(self) -> StepArrays:
        """All instances and references."""
        return StepArrays(self._blanked.text)

    # -- one instance ------------------------------------------------------------------------

    def __contains__(self, instance: int) -> bool:
        return self._span(instance) is not None

    def span(self, instance: int) -> tuple[int, int]:
        """Return from where to where an instance stands; KeyError where there is none."""
        found = self._span(instance)
        if found is None:
            raise KeyError(instance)
        return found

    def text(self, instance: int) -> str:
        """Return an instance as it stands in the file, without comments."""
        start, end = self.span(instance)
        return self.content[start:end].decode("utf-8", "surrogateescape")

    def kind(self, instance: int) -> str:
        """Return the class of an instance in capitals, "" where it has none."""
        if instance not in self._kinds:
            match = _HEAD.match(self.content, self.span(instance)[0])
            self._kinds[instance] = match[2].decode().upper() if match else ""
        return self._kinds[instance]

    def arguments(self, instance: int) -> list[object]:
        """Return the attributes of an instance: text for tokens, lists for aggregates."""
        return arguments(self.text(instance))

    def references(self, instance: int) -> list[int]:
        """Return the numbers that an instance refers to."""
        text = self.text(instance)
        return [int(n) for n in _REFERENCE.findall(text[text.index("=") :]) if n]

    # -- many instances ----------------------------------------------------------------------

    def instances_of(self, keyword: str) -> list[int]:
        """Return the numbers of all instances of exactly this class, in the order of the file."""
        capitals = re.compile(keyword.encode() + rb"\s*\(")
        places = [m.start() for m in capitals.finditer(self.content)]
        if not places and b"IFCPROJECT" not in self.content:  # not in capitals, as it should be
            any_case = re.compile(capitals.pattern, re.IGNORECASE)
            places = [m.start() for m in any_case.finditer(self.content)]
        found = []
        for at in places:
            head = self._head_before(at, keyword.encode())
            if head is not None and self._outside(at):
                found.append(head)
        return found

    def instance_at(self, position: int) -> int | None:
        """Return the number of the instance that covers a position, None where none does."""
        row = self.arrays.row_at(position)
        return None if row is None else int(self.arrays.ids[row])

    def referrers(self, wanted: Iterable[int]) -> dict[int, set[int]]:
        """Return, for each wanted number, the numbers of the instances that refer to it."""
        wanted = list(wanted)
        return self.arrays.referrers(wanted) if wanted else {}

    def rooted(self, wanted: Iterable[str]) -> dict[str, list[int]]:
        """Return the numbers of the instances that begin with each wanted GlobalId."""
        names = set(wanted)
        found: dict[str, list[int]] = {}
        places = _first_strings(self.content, names)
        inside = np.searchsorted(self._quotes, [at for at, _ in places]) % 2
        for (at, name), hidden in zip(places, inside.tolist(), strict=True):
            head = None if hidden else self._head_before(at)
            if head is not None:
                found.setdefault(name, []).append(head)
        missing = names - found.keys()
        return found | (self._rooted_oddly(missing) if missing else {})

    # -- how it is done ----------------------------------------------------------------------

    @cached_property
    def _blanked(self) -> Blanked:
        return blank(self.data)

    @cached_property
    def _quotes(self) -> Positions:
        text = self.content if self._countable else self._blanked.text
        buffer = np.frombuffer(text, dtype=np.uint8)
        found = [
            np.flatnonzero(buffer[start : start + _STRETCH] == ord("'")) + start
            for start in range(0, buffer.size, _STRETCH)
        ]
        return np.concatenate(found) if found else np.zeros(0, dtype=np.int64)

    def _outside(self, position: int) -> bool:
        """Whether a place is not within a string."""
        return int(np.searchsorted(self._quotes, position)) % 2 == 0

    def _last(self, pattern: bytes, end: int) -> int | None:
        """Return the last place before ``end`` where code, not a string, fits."""
        regex = re.compile(pattern)
        high = end
        while high > 0:
            low = max(0, high - 65536)
            # A match may begin just below ``high`` and run past it.
            places = [m.start() for m in regex.finditer(self.content, low, min(end, high + 256))]
            for at in reversed(places):
                if self._outside(at):
                    return at
            high = low
        return None

    def _span(self, instance: int) -> tuple[int, int] | None:
        if "arrays" not in self.__dict__:
            start = self._quick_start(instance)
            if start is not None:
                return start, self._end_after(start)
        row = self.arrays.rows.get(instance)
        if row is None:
            return None
        return int(self.arrays.starts[row]), int(self.arrays.ends[row])

    def _quick_start(self, instance: int) -> int | None:
        needle = b"#%d=" % instance
        at = self.content.find(needle)
        while at >= 0 and not self._outside(at):
            at = self.content.find(needle, at + 1)
        return at if at >= 0 else None

    def _end_after(self, start: int) -> int:
        end = self.content.find(b";", start)
        while end >= 0 and not self._outside(end):
            end = self.content.find(b";", end + 1)
        return len(self.content) if end < 0 else end + 1

    def _head_before(self, at: int, keyword: bytes | None = None) -> int | None:
        """Return the number of the instance whose first bracket or keyword stands ``at``."""
        start = self.content.rfind(b"#", 0, at)
        match = _HEAD.match(self.content, start) if start >= 0 else None
        if match is None:
            return None
        if keyword is None and match.end() != at + 1:
            return None
        if keyword is not None and (match.start(2) != at or match[2].upper() != keyword):
            return None
        number = int(match[1])
        self._kinds[number] = match[2].decode().upper()
        return number

    def _rooted_oddly(self, names: set[str]) -> dict[str, list[int]]:
        """The same for whatever a quick search does not find: read every first string."""
        found: dict[str, list[int]] = {}
        for start, end, number in zip(
            self.arrays.starts.tolist(), self.arrays.ends.tolist(), self.arrays.ids.tolist(),
            strict=True,
        ):  # fmt: skip
            match = _HEAD.match(self.content, start)
            if match is None:
                continue
            token = _STRING.match(self.content[match.end() : end].decode("utf-8", "replace"))
            if token and (name := decoded(token[1])) in names:
                found.setdefault(name, []).append(number)
        return found


def _without(data: bytes, spans: Iterable[tuple[int, int]]) -> bytes:
    content = bytearray(data)
    for start, end in spans:
        content[start:end] = b" " * (end - start)
    return bytes(content)


def _first_strings(content: bytes, names: set[str]) -> list[tuple[int, str]]:
    """Return where a bracket opens before one of these GlobalIds in quotes, and which it is."""
    wanted = {name.encode(): name for name in names if _GLOBAL_ID.fullmatch(name)}
    found: list[tuple[int, str]] = []
    for start in range(0, max(0, len(content) - 24), _STRETCH):
        buffer = np.frombuffer(
            content, np.uint8, min(_STRETCH + 24, len(content) - start), offset=start
        )
        quoted = buffer[:-24] == ord("(")
        quoted &= buffer[1:-23] == ord("'")
        quoted &= buffer[24:] == ord("'")
        places = np.flatnonzero(quoted)
        # Each 22 bytes, wherever they begin, as one item.
        words: NDArray[np.bytes_] = np.ndarray(
            (buffer.size - 21,), dtype="S22", buffer=buffer, strides=(1,)
        )
        both = zip((places + start).tolist(), words[places + 2].tolist(), strict=True)
        found += [(at, wanted[word]) for at, word in both if word in wanted]
    return found


def _largest_after_hash(content: bytes) -> int | None:
    """Return the largest number of at most seven digits after a #.

    None where one is longer or does not follow directly.  Strings are not left out: a number too
    large does no harm.
    """
    largest = 0
    for start in range(0, len(content), _STRETCH):
        buffer = np.frombuffer(
            content, np.uint8, min(_STRETCH + 9, len(content) - start), offset=start
        )
        found = _largest_in(buffer)
        if found is None:
            return None
        largest = max(largest, found)
    return largest


def _largest_in(buffer: Bytes) -> int | None:
    """The same for a stretch: eight bytes after each # are looked at as one integer.

    The lowest bit set in ``other`` marks the first of them that is no digit.
    """
    hashes = np.flatnonzero(buffer == ord("#"))
    hashes = hashes[hashes < buffer.size - 9]
    if not hashes.size:
        return 0
    words: NDArray[np.uint64] = np.ndarray(
        (buffer.size - 7,), dtype="<u8", buffer=buffer, strides=(1,)
    )
    word = words[hashes + 1]
    digits = word ^ np.uint64(0x3030303030303030)  # a digit becomes 0 to 9
    other = ((digits + np.uint64(0x7676767676767676)) | digits) & np.uint64(0x8080808080808080)
    first = other & (~other + np.uint64(1))
    if not first.all():
        return None  # eight digits or more
    none = first == 0x80
    if (word[none] & np.uint64(0xFF) <= 32).any():
        return None  # a blank after some #
    longest = int(first.max())
    count = longest.bit_length() // 8 - 1
    texts = word[first == np.uint64(longest)].byteswap()
    return int(int(texts.max()).to_bytes(8, "big")[:count] or b"0")
