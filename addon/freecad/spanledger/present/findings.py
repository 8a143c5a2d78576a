"""Findings as rows, gravest first, and what each of them is about in the drawing."""

from __future__ import annotations

from dataclasses import dataclass

from analysis_core.findings import Finding
from analysis_core.report.tables import safe
from analysis_core.results import Outcome

from .words import noop, say

ORDER = {"error": 0, "warning": 1, "note": 2}
# Told apart by shape, not by colour alone.
GLYPHS = {noop("error"): "✖", noop("warning"): "▲", noop("note"): "·"}
_COUNTED = {
    "error": (noop("{count} error"), noop("{count} errors")),
    "warning": (noop("{count} warning"), noop("{count} warnings")),
    "note": (noop("{count} note"), noop("{count} notes")),
}


@dataclass(frozen=True, slots=True)
class FindingRow:
    """One finding: its texts, and what "show me" shows."""

    severity: str
    texts: tuple[str, str, str]
    message: str
    line: int | None
    elements: tuple[str, ...]
    search: str


def finding_rows(outcome: Outcome) -> list[FindingRow]:
    """Return all findings, gravest first, then by line."""
    number_of = {result.line.mark: i for i, result in enumerate(outcome.lines)}
    line_of = {
        element: i for i, result in enumerate(outcome.lines) for element in result.line.elements
    }
    rows = [_row(finding, number_of, line_of) for finding in outcome.findings]
    return sorted(rows, key=lambda row: (ORDER.get(row.severity, 3), row.texts[1]))


def matching(rows: list[FindingRow], words: str) -> list[FindingRow]:
    """Return the rows that hold every word."""
    wanted = words.lower().split()
    return [row for row in rows if all(word in row.search for word in wanted)]


def counts_words(rows: list[FindingRow]) -> str:
    """Return how many there are of each severity."""
    parts = []
    for severity, (one, many) in _COUNTED.items():
        number = sum(row.severity == severity for row in rows)
        if number:
            parts.append(say(one if number == 1 else many, count=number))
    return ", ".join(parts) or say("no findings")


def _row(finding: Finding, number_of: dict[str, int], line_of: dict[str, int]) -> FindingRow:
    line = number_of.get(finding.line) if finding.line else None
    if line is None:
        line = next((line_of[e] for e in finding.elements if e in line_of), None)
    message = safe(finding.message)
    where = safe(finding.line or "")
    return FindingRow(
        severity=finding.severity,
        texts=(f"{GLYPHS.get(finding.severity, '')} {finding.severity}", where, message),
        message=message,
        line=line,
        elements=finding.elements,
        search=f"{finding.severity} {where} {finding.slug} {message} "
        f"{' '.join(finding.elements)}".lower(),
    )
