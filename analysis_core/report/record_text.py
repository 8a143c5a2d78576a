"""Recorded distributions as text for the screen."""

from __future__ import annotations

from collections.abc import Iterable

from analysis_core.distribution.record import DistributionRecord
from analysis_core.report.record_rows import RecordTable, closing_note, record_tables
from analysis_core.report.tables import safe, table
from analysis_core.units import DisplayUnits


def record_text(records: Iterable[DistributionRecord], units: DisplayUnits) -> str:
    """Return the distribution tables of the records, clockwise end moments."""
    parts = []
    for record in records:
        parts += [_table_text(t, units) for t in record_tables(record, units)]
        parts.append(closing_note(record, units))
    return "\n\n".join(parts)


def _table_text(shown: RecordTable, units: DisplayUnits) -> str:
    head = ["end moments on members, clockwise", *shown.columns]
    unit = [f"moments in {units.symbol('moment')}", *[""] * len(shown.columns)]
    rows = [[row.name, *row.cells] for row in shown.rows]
    text = table(head, unit, rows)
    return "\n".join([safe(shown.title), text, *(safe(note) for note in shown.notes)])
