"""Addresses within the sheet."""

from __future__ import annotations

from analysis_core.results import LineResult


def anchor(result: LineResult) -> str:
    """Return the id of a line's section: letters and digits of its mark only."""
    return "line-" + "".join(c if c.isascii() and c.isalnum() else "-" for c in result.line.mark)
