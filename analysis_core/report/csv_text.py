"""Comma-separated values that a spreadsheet opens as what they are: numbers and plain text."""

from __future__ import annotations

import csv
import io
from collections.abc import Iterable, Sequence

_ACTIVE = ("=", "+", "-", "@", "\t", "\r")


def csv_text(rows: Iterable[Sequence[str | float | int | None]]) -> str:
    """Return rows as CSV (RFC 4180, CRLF line ends).

    Text that a spreadsheet would take for a formula gets an apostrophe in front, since names in a
    model are hostile text; numbers stay numbers.
    """
    out = io.StringIO()
    csv.writer(out, lineterminator="\r\n").writerows([_cell(c) for c in row] for row in rows)
    return out.getvalue()


def _cell(value: str | float | int | None) -> str:
    if value is None:
        return ""
    if isinstance(value, str):
        return f"'{value}" if value.startswith(_ACTIVE) else value
    return repr(value)
