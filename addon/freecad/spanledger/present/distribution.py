"""The recorded distribution of a line, to be stepped through release by release."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import accumulate
from typing import TYPE_CHECKING, get_args

from analysis_core.distribution.cycles import Order
from analysis_core.errors import AnalysisError
from analysis_core.model import Combination
from analysis_core.results import LineResult
from analysis_core.units import DisplayUnits

from .diagrams import View
from .words import noop, say

if TYPE_CHECKING:
    from analysis_core.distribution.record import DistributionRecord
    from analysis_core.report.record_rows import RecordRow, RecordTable

ORDERS: tuple[Order, ...] = get_args(Order)
ORDER_WORDS = {
    "largest": noop("largest unbalance first"),
    "together": noop("all joints together"),
    "alternate": noop("every second joint in turn"),
}
_BEGINNING = ("stiffness", "factor", "carry")


@dataclass(frozen=True, slots=True)
class Step:
    """What is shown at one step: a table, how many of its rows, and the joints just released."""

    table: int
    rows: int
    new: int
    """How many of the rows were not there a step before."""
    joints: tuple[int, ...]
    words: str


@dataclass(frozen=True, slots=True)
class Recorded:
    """The tables of a case or combination, and the steps through them."""

    tables: tuple[RecordTable, ...]
    steps: tuple[Step, ...]
    closing: str
    unit: str
    """Of every moment in the tables."""


def recorded(
    result: LineResult, view: View, units: DisplayUnits, order: Order = "largest"
) -> Recorded | str:
    """Return the recorded distribution of a line, or why there is none, in a sentence."""
    from analysis_core.distribution.record import distribute  # late: start-up of the workbench
    from analysis_core.effects.combinations import combine_line
    from analysis_core.report.record_rows import closing_note, record_tables

    if result.status != "balanced":
        return say("This line is not analysed; its findings say why.")
    if view.kind == "envelope":
        return say(
            "An envelope gathers many distributions. Choose a case or a combination to see the "
            "one that belongs to it."
        )
    line = result.line
    if view.kind == "combination":
        line = combine_line(line, [Combination(view.name, "strength", dict(view.factors))])
    if not any(action.case == view.name for action in line.actions):
        return say("Nothing acts on {line} in {case}.", line=line.mark, case=view.name)
    try:
        record = distribute(line, view.name, order=order)
    except AnalysisError as error:
        return str(error)
    tables = tuple(record_tables(record, units))
    closing = closing_note(record, units)
    return Recorded(tables, tuple(_steps(tables, record)), closing, units.symbol("moment"))


def _steps(tables: tuple[RecordTable, ...], record: DistributionRecord) -> list[Step]:
    steps: list[Step] = []
    for number, table in enumerate(tables):
        releases = iter(record.tables[number].rows)
        groups = _groups(table.rows)
        for group, shown in zip(groups, accumulate(len(g) for g in groups), strict=True):
            released = next(releases).joints if group[0].kind == "balance" else ()
            words = f"{table.title}: {group[0].name}"
            steps.append(Step(number, shown, len(group), tuple(released), words))
    return steps


def _groups(rows: tuple[RecordRow, ...]) -> list[list[RecordRow]]:
    """Rows that belong to one step: the stiffnesses, the fixed-end moments, each release, sums."""
    groups: list[list[RecordRow]] = []
    for row in rows:
        follows = (
            (row.kind in _BEGINNING and groups and groups[-1][0].kind in _BEGINNING)
            or row.kind in ("known", "carried", "exact")
        )  # fmt: skip
        if follows and groups:
            groups[-1].append(row)
        else:
            groups.append([row])
    return groups
