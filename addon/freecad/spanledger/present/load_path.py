"""Where reactions go: from line to line, and onto columns, walls and nodes."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

from analysis_core.report.tables import safe
from analysis_core.results import Outcome
from analysis_core.units import DisplayUnits

from .words import say

if TYPE_CHECKING:
    from analysis_core.ifc.posting.support_reactions import SupportReactions


@dataclass(frozen=True, slots=True)
class Path:
    """A step from the line in hand to another: words for a button, and that line's number."""

    words: str
    line: int


@dataclass(frozen=True, slots=True)
class BearingRow:
    """What one supporting element receives from all lines together."""

    texts: tuple[str, str, str, str]
    """Element, largest, smallest, lines."""
    values: tuple[float, float]
    lines: tuple[int, ...]
    element: str
    detail: str
    search: str


def paths_at_joint(outcome: Outcome, line: int, joint: int) -> list[Path]:
    """Return the lines that carry a joint of a line."""
    mark, numbers = outcome.lines[line].line.mark, _numbers(outcome)
    return [
        Path(say("↓ on {line}", line=safe(t.to_line)), number)
        for t in outcome.model.transfers
        if (t.from_line, t.joint) == (mark, joint)
        and (number := numbers.get(t.to_line)) is not None
    ]


def paths_on_member(outcome: Outcome, line: int, member: int, units: DisplayUnits) -> list[Path]:
    """Return the lines that bear on a member, in the order in which they do."""
    mark, numbers = outcome.lines[line].line.mark, _numbers(outcome)
    found = sorted(
        (t.position, t.from_line)
        for t in outcome.model.transfers
        if (t.to_line, t.member) == (mark, member)
    )
    return [
        Path(
            say("↑ {line} at {place}", line=safe(name), place=units.text(position, "length")),
            number,
        )
        for position, name in found
        if (number := numbers.get(name)) is not None
    ]


def bearing_rows(outcome: Outcome, units: DisplayUnits) -> list[BearingRow]:
    """Return what every supporting element receives, the most loaded first."""
    from analysis_core.ifc.posting.support_reactions import support_reactions  # late: start-up

    names, numbers = outcome.model.names, _numbers(outcome)
    rows = [
        _row(element, found, numbers, names, units)
        for element, found in support_reactions(outcome).items()
    ]
    return sorted(rows, key=lambda row: -row.values[0])


def _row(
    element: str,
    found: SupportReactions,
    numbers: Mapping[str, int],
    names: Mapping[str, str],
    units: DisplayUnits,
) -> BearingRow:
    low, high = found.total("Vertical") or (0.0, 0.0)
    cases = found.cases
    marks = tuple(dict.fromkeys(mark for mark, _ in cases))
    lines = tuple(numbers[mark] for mark in marks if mark in numbers)
    name = safe(names.get(element, "")) or safe(element)
    detail = "\n".join(
        f"{safe(mark)} / {safe(case)}: {units.text(value, 'force')}"
        for (mark, case), value in cases.items()
    )
    texts = (name, units.number(high, "force"), units.number(low, "force"), ", ".join(marks))
    search = f"{name} {element} {' '.join(marks)}".lower()
    return BearingRow(texts, (high, low), lines, element, f"{safe(element)}\n{detail}", search)


def _numbers(outcome: Outcome) -> dict[str, int]:
    return {result.line.mark: i for i, result in enumerate(outcome.lines)}
