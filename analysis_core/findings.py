"""Findings: what was noticed while reading and idealising, written down while the work goes on.

An error stops the work; a finding does not.  Nothing in a model is dropped in silence:
what is not understood, assumed or left out becomes a finding with its GlobalId.  Slugs are
stable; DEVELOPERS.md lists them.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from typing import Literal

Severity = Literal["error", "warning", "note"]


@dataclass(frozen=True, slots=True)
class Finding:
    """One thing worth telling the engineer.

    ``elements`` are GlobalIds, empty when the whole file is meant.  ``error`` means that a
    line could not be analysed, ``warning`` that the result may not be what was meant,
    ``note`` that something was assumed or left out and why.
    """

    severity: Severity
    slug: str
    message: str
    elements: tuple[str, ...] = ()
    line: str | None = None


def listed(names: Iterable[str], *, most: int = 5) -> str:
    """Return "a, b, c and 4 more", so that a message stays readable."""
    items = list(names)
    if len(items) <= most:
        return ", ".join(items)
    return f"{', '.join(items[:most])} and {len(items) - most} more"
