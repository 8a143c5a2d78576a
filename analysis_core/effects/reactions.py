"""Reactions for those who design what is below: per support and case, and governing."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass

from analysis_core.model import Joint, Line
from analysis_core.results import Extreme, LineEnvelope, LineResult, LineSolution
from analysis_core.units import DisplayUnits

_NOTHING = 1e-9  # of the largest on the line: less than this is rounding


@dataclass(frozen=True, slots=True)
class SupportReaction:
    """The reaction at one joint in one case (unfactored), or the governing one of a limit state.

    ``state`` is "case", or "highest", "lowest" with the limit state; forces in N (vertical up,
    horizontal to the right), ``moment`` in N·m clockwise, all acting on the line.  A governing
    row holds the one value that governs; ``source`` says by what.
    """

    line: str
    joint: int
    x: float
    element: str
    name: str
    state: str
    vertical: float | None = None
    horizontal: float | None = None
    moment: float | None = None
    source: str = ""


def unfactored(line: Line, solution: LineSolution) -> Iterator[SupportReaction]:
    """Yield the reactions of every case at every support; cases without any are left out."""
    largest = abs(solution.reactions).max(axis=(0, 1), initial=0.0)
    for joint in _supports(line):
        for case, row in zip(solution.cases, solution.reactions[:, joint.id], strict=True):
            values = [
                0.0 if abs(v) <= _NOTHING * most else float(v)
                for v, most in zip(row, largest, strict=True)
            ]
            if any(values):
                yield SupportReaction(
                    line.mark, joint.id, joint.x, joint.element or "", case, "case",
                    vertical=values[1], horizontal=values[0], moment=values[2],
                )  # fmt: skip


def governing(line: Line, envelope: LineEnvelope) -> Iterator[SupportReaction]:
    """Yield the highest and lowest reactions of a limit state at every support."""
    for found in envelope.reactions:
        joint = line.joints[found.joint]
        each: tuple[tuple[str, Extreme, Extreme], ...] = (
            ("vertical", found.vertical_max, found.vertical_min),
            ("horizontal", found.horizontal_max, found.horizontal_min),
            ("moment", found.moment_max, found.moment_min),
        )
        for kind, highest, lowest in each:
            if kind != "vertical" and highest.value == lowest.value == 0.0:
                continue
            for state, extreme in (("highest", highest), ("lowest", lowest)):
                values = {kind: extreme.value}
                yield SupportReaction(
                    line.mark, joint.id, joint.x, joint.element or "",
                    f"{state} {kind}", f"{envelope.limit_state}, {state}",
                    source=extreme.source, **values,
                )  # fmt: skip


def schedule(results: Iterable[LineResult]) -> Iterator[SupportReaction]:
    """Yield all reactions of all analysed lines: cases first, then what governs."""
    for result in results:
        if result.solution is None:
            continue
        yield from unfactored(result.line, result.solution)
        for envelope in result.envelopes.values():
            yield from governing(result.line, envelope)


def schedule_table(
    rows: Iterable[SupportReaction], units: DisplayUnits, names: Mapping[str, str] | None = None
) -> Iterator[list[str | float | int | None]]:
    """Yield the rows of a schedule for a spreadsheet, the heading first, in display units.

    ``names`` gives the name of a supporting element by its GlobalId.  Names come from the model:
    whoever writes the file must see that none is taken for a formula.
    """
    force, moment, length = (units.symbol(q) for q in ("force", "moment", "length"))
    yield [
        "Line", "Support", f"Position [{length}]", "Supporting element", "GlobalId",
        "Case or limit state", "State", f"Vertical, up [{force}]",
        f"Horizontal, right [{force}]", f"Moment, clockwise [{moment}]", "Governed by",
    ]  # fmt: skip
    known = names or {}
    for row in rows:
        yield [
            row.line, row.joint, _shown(row.x, "length", units), known.get(row.element, ""),
            row.element, row.name, row.state, _shown(row.vertical, "force", units),
            _shown(row.horizontal, "force", units), _shown(row.moment, "moment", units), row.source,
        ]  # fmt: skip


def _shown(value: float | None, quantity: str, units: DisplayUnits) -> float | None:
    """The number as it is displayed, so that the schedule agrees with the sheet."""
    return None if value is None else float(units.number(value, quantity))


def _supports(line: Line) -> Sequence[Joint]:
    return [joint for joint in line.joints if joint.support is not None]
