"""What the bytes of a STEP file hold, found without the parser: the proof of a whole reading.

A parser may stop early and report success.  So the instances are counted here on their own, by
the grammar of ISO 10303-21, and everything that would make a reading incomplete is noticed: an
open text, an unclosed comment, a statement that is no instance, a reference to nothing.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from itertools import islice

import numpy as np

from analysis_core.errors import IfcReadError
from analysis_core.ifc.step.blank import Blanked, Span, blank
from analysis_core.ifc.step.census import Census, GrammarError, Ints, take_census

_START = b"ISO-10303-21;"
_KEYWORD = re.compile(rb";\s*(HEADER|ENDSEC|DATA|ANCHOR|REFERENCE|END-ISO-10303-21)(?=\s*[;(])")
_INSTANCE = re.compile(rb"#\s*(\d+)\s*=")
_TABLE_LIMIT = 100_000_000
_LARGEST_NUMBER = 2**31 - 1
_EXPORT_AGAIN = "Copy or export it again."


@dataclass(frozen=True, slots=True, eq=False)
class StepText:
    """The census of a STEP file.

    ``clean`` is the text to be parsed: the original, or a mended copy where ``repaired`` says
    what was mended.  ``content`` is that text with spaces in place of comments.  ``schemas`` are
    the names in its FILE_SCHEMA.  ``missing`` are numbers that are referenced but given to no
    instance.
    """

    clean: bytes
    content: bytes
    header: bytes
    schemas: tuple[str, ...]
    census: Census
    missing: Ints
    repaired: tuple[str, ...] = ()
    data_sections: int = 1

    @property
    def count(self) -> int:
        """Number of instances."""
        return int(self.census.ids.size)


def read_step(data: bytes, name: str) -> StepText:
    """Return the census of ``data``, the content of the file ``name``.

    Raises IfcReadError, with the line, where the text is cut off or breaks the grammar.
    """
    if not data.lstrip()[: len(_START)] == _START:
        raise IfcReadError(_not_step(data, name))
    blanked = blank(data)
    header_end, sections = _sections(data, blanked, name)
    census, references = _census(data, blanked, sections, name)
    _check_numbers(census.ids, name)
    missing = _missing(census.ids, references)
    _check_hidden(data, blanked.comments, missing, name)
    clean = _spaced(data, blanked.stray)
    return StepText(
        clean,
        _spaced(clean, blanked.comments),
        data[:header_end],
        _schemas(data[:header_end], blanked.text[:header_end]),
        census,
        missing,
        tuple(f"line {line_of(data, start)}" for start, _ in blanked.stray),
        len(sections),
    )


def line_of(data: bytes, position: int) -> int:
    """Return the line number of a position, counted from 1."""
    return data.count(b"\n", 0, position) + 1


def _not_step(data: bytes, name: str) -> str:
    head = data.lstrip()[:200]
    if not head:
        return f"'{name}' is empty: it holds no model. {_EXPORT_AGAIN}"
    if head[:1] == b"<":
        kind = "an XML file"
    elif head[:1] in (b"{", b"["):
        kind = "a JSON file"
    elif b"\0" in data[:4096]:
        kind = "a binary file"
    else:
        kind = "some other kind of file"
    return (
        f"'{name}' is {kind}; it must be an IFC file in STEP format, which begins with "
        f"'ISO-10303-21;'. Export the model as .ifc (IFC2X3, IFC4 or IFC4X3)."
    )


def _sections(data: bytes, blanked: Blanked, name: str) -> tuple[int, list[Span]]:
    """Return where the header ends, and the spans of the statements of each DATA section."""
    header_end, start = 0, -1
    spans: list[Span] = []
    expected: tuple[bytes, ...] = (b"HEADER",)
    for match in _KEYWORD.finditer(blanked.text):
        word = match[1]
        if word not in expected:
            break
        if word == b"END-ISO-10303-21":
            if not spans:
                raise IfcReadError(f"'{name}' holds no DATA section, so no model. {_EXPORT_AGAIN}")
            _check_tail(data, blanked, match.end(), name)
            return header_end, spans
        if word == b"DATA":
            start = blanked.text.index(b";", match.end()) + 1
        elif word == b"ENDSEC" and start >= 0:
            spans.append((start, match.start() + 1))
            start = -1
        elif word == b"ENDSEC":
            header_end = match.end()
        inside = word in (b"HEADER", b"DATA")
        expected = (b"ENDSEC",) if inside else (b"DATA", b"END-ISO-10303-21")
    if start >= 0:
        _check_last_statement(data, blanked, start, name)
    raise IfcReadError(_broken_off(data, blanked, expected, name))


def _check_last_statement(data: bytes, blanked: Blanked, start: int, name: str) -> None:
    """Say where a section goes wrong whose end no semicolon comes before."""
    end = re.compile(rb"\bENDSEC\s*;").search(blanked.text, start)
    if end is not None:
        _census(data, blanked, [(start, end.start())], name)


def _broken_off(data: bytes, blanked: Blanked, expected: tuple[bytes, ...], name: str) -> str:
    if blanked.open >= 0 and b"END-ISO-10303-21;" in data[-1000:]:
        return (
            f"'{name}' has an apostrophe without its partner, on line "
            f"{line_of(data, blanked.open)} or before; a text in it is not closed. {_EXPORT_AGAIN}"
        )
    found = [match[1] for match in _KEYWORD.finditer(blanked.text)]
    if b"END-ISO-10303-21" in found:
        words = " or ".join(word.decode() for word in expected)
        return (
            f"'{name}' has its sections in an order that cannot be read: {words} was expected "
            f"next, after {found.count(b'DATA')} DATA sections. {_EXPORT_AGAIN}"
        )
    whole = len(_INSTANCE.findall(blanked.text))
    return (
        f"'{name}' was cut off: END-ISO-10303-21 is missing at its end, on line "
        f"{line_of(data, len(data))}, after {whole:,} entities. {_EXPORT_AGAIN}"
    )


def _check_tail(data: bytes, blanked: Blanked, end: int, name: str) -> None:
    """Nothing that could be a model may follow the end mark; signatures may."""
    if _INSTANCE.search(blanked.text, end):
        raise IfcReadError(
            f"'{name}' goes on with more entities after its end mark on line "
            f"{line_of(data, end)}; two models in one file cannot be read. Split them."
        )


def _census(data: bytes, blanked: Blanked, sections: list[Span], name: str) -> tuple[Census, Ints]:
    try:
        return take_census(blanked.text, sections)
    except GrammarError as error:
        raise IfcReadError(_bad_statement(data, blanked, error, name)) from None


def _bad_statement(data: bytes, blanked: Blanked, error: GrammarError, name: str) -> str:
    begin = error.begin
    if error.statement:
        ends = re.compile(rb";").finditer(blanked.text, begin)
        begin = next(islice(ends, error.statement - 1, None)).end()
    begin += len(blanked.text[begin : begin + 10_000]) - len(
        blanked.text[begin : begin + 10_000].lstrip()
    )
    number = re.match(rb"#\s*\d+", data[begin : begin + 30])
    what = number[0].decode() if number else "what stands there"
    return (
        f"'{name}', line {line_of(data, begin)}: {what} is not a whole entity of the form "
        f"#1=IFCNAME(...); ({error}). Entities after it could be lost. {_EXPORT_AGAIN}"
    )


def _missing(ids: Ints, references: Ints) -> Ints:
    """Return the numbers that are referred to but not given, in order."""
    top = int(max(ids.max(initial=0), references.max(initial=0)))
    if top > _TABLE_LIMIT:
        missing: Ints = np.setdiff1d(references, ids)
        return missing
    given = np.zeros(top + 1, bool)
    given[ids] = True
    absent: Ints = np.unique(references[~given[references]])
    return absent


def _check_numbers(ids: Ints, name: str) -> None:
    top = int(ids.max(initial=0))
    if top > _LARGEST_NUMBER:
        raise IfcReadError(
            f"'{name}' holds an entity numbered #{top}; numbers above {_LARGEST_NUMBER:,} cannot "
            f"be read. Export the model again, or have its entities renumbered."
        )
    if ids.size < 2 or (np.diff(ids) > 0).all():
        return
    values, counts = np.unique(ids, return_counts=True)
    if values.size < ids.size:
        twice = ", ".join(f"#{value}" for value in values[counts > 1][:3])
        raise IfcReadError(
            f"'{name}' gives the same number to {ids.size - values.size + 1} entities or more "
            f"({twice}); one of them would be lost. {_EXPORT_AGAIN}"
        )


def _check_hidden(data: bytes, comments: tuple[Span, ...], missing: Ints, name: str) -> None:
    """Entities inside a comment are left out; refuse where other entities need them."""
    if not missing.size:
        return
    for start, stop in comments:
        numbers = [int(number) for number in _INSTANCE.findall(data, start, stop)]
        needed = np.intersect1d(np.array(numbers, dtype=np.int64), missing)
        if needed.size:
            raise IfcReadError(
                f"'{name}', line {line_of(data, start)}: a comment hides {len(numbers)} entities, "
                f"and others refer to {needed.size} of them (#{needed[0]}). Remove the comment "
                f"mark or export the model again."
            )


def _spaced(data: bytes, spans: tuple[Span, ...]) -> bytes:
    """Return the text with spaces in some places."""
    if not spans:
        return data
    text = bytearray(data)
    for start, stop in spans:
        text[start:stop] = b" " * (stop - start)
    return bytes(text)


def _schemas(header: bytes, blanked: bytes) -> tuple[str, ...]:
    match = re.search(rb"FILE_SCHEMA\s*\(\s*\(([^()]*)\)", blanked)
    if match is None:
        return ()
    texts = re.findall(rb"'([^']*)'", header[match.start(1) : match.end(1)])
    return tuple(text.decode("ascii", "replace").strip() for text in texts)
