"""The distribution of a governing state, laid out so that a checker can redo it by hand."""

from __future__ import annotations

from collections.abc import Sequence

from analysis_core.report.record_rows import RecordTable
from analysis_core.sheet.html import Markup, tag
from analysis_core.sheet.table import table, table_row

_FITS = 34
"""Rows of a table that fits on one page."""
_QUIET = ("stiffness", "factor", "carry")


def fixed_ends(rows: Sequence[tuple[str, ...]], unit: str) -> Markup:
    """Return the fixed-end moments with formulas and numbers."""
    return table(
        ("Member", "Action", "Both ends held", "At start", "At end"),
        ("", "", "", unit, unit),
        rows,
        caption="Fixed-end moments, clockwise on the member",
        texts=(0, 1, 2),
        class_="fixed-ends",
    )


def distribution(shown: RecordTable, closing: str, unit: str) -> Markup:
    """Return one distribution table with its notes."""
    head = [tag("th", "", scope="col")]
    head += [tag("th", name, scope="col") for name in shown.columns]
    body = []
    for row in shown.rows:
        class_ = "quiet" if row.kind in _QUIET else row.kind
        body.append(table_row((row.name, *row.cells), class_))
    parts = [
        tag(
            "table",
            tag("caption", f"{shown.title}: end moments [{unit}], clockwise on the member"),
            tag("thead", tag("tr", head)),
            tag("tbody", Markup("".join(body))),
            class_="distribution",
        )
    ]
    notes = [*shown.notes, *([closing] if closing else [])]
    if notes:
        parts.append(tag("ul", [tag("li", note) for note in notes], class_="table-notes"))
    return tag("div", parts, class_="keep" if len(shown.rows) <= _FITS else None)
