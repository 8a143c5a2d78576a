"""What the sheet shows of each line beside its results: governing states, distributed by hand."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from analysis_core.assumptions import assumptions_part
from analysis_core.checking import DEFLECTION_LIMIT, MemberChecks, check_line
from analysis_core.distribution.record import distribute
from analysis_core.effects.states import State, state_line
from analysis_core.errors import AnalysisError
from analysis_core.fixed_end_rows import fixed_end_rows
from analysis_core.line_details import detail_of
from analysis_core.record_rows import closing_note, record_tables
from analysis_core.results import LineResult, Outcome
from analysis_core.settings import Settings
from analysis_core.sheet.checks import NOTE, line_checks
from analysis_core.sheet.details import deflections, redistribution, support_moments
from analysis_core.sheet.distribution import distribution, fixed_ends
from analysis_core.sheet.document import sheet
from analysis_core.sheet.html import Markup, tag
from analysis_core.sheet.line_section import member_name
from analysis_core.units import DisplayUnits

_SHOWN = ("sagging", "hogging")
_MOST = 4
WORKED_ONCE = (
    "The working of each check is written down for the member of a section that uses most of its "
    "resistance; the others follow the same formulas."
)


def calculation_sheet(outcome: Outcome, settings: Settings, units: DisplayUnits, date: str) -> str:
    """Return the whole sheet as HTML text."""
    found = {
        result.line.mark: check_line(result, outcome.model, settings)
        for result in outcome.lines
        if result.status == "balanced"
    }

    def working(result: LineResult) -> list[Markup]:
        return distribution_parts(result, units)

    def checks(result: LineResult) -> list[Markup]:
        return detail_parts(result, units) + check_parts(
            result, found.get(result.line.mark, []), units
        )

    return sheet(
        outcome, units, title=settings.title, date=date, working=working, checks=checks,
        uses={mark: use for mark, each in found.items() if (use := _largest_use(each))},
        assumed=assumptions_part(outcome, settings, units),
    )  # fmt: skip


def _largest_use(found: Sequence[MemberChecks]) -> tuple[float, str] | None:
    made = [each.worst for each in found if each.worst is not None]
    worst = max(made, key=lambda check: check.use, default=None)
    return None if worst is None else (worst.use, worst.name)


def distribution_parts(result: LineResult, units: DisplayUnits) -> list[Markup]:
    """Return the recorded distributions of the states that govern the moments of a line."""
    if result.detail is None or result.parts is None:
        return []
    states = [s for s in detail_of(result).states if _governs_moment(s)]
    parts: list[Markup] = []
    for state in states[:_MOST]:
        parts += _one(result, state, units)
    if len(states) > _MOST:
        left = "; ".join(s.source for s in states[_MOST:])
        parts.append(tag("p", f"Not written down, for length: {left}.", class_="verification"))
    return [tag("h3", "Distribution of the governing states"), *parts] if parts else []


def detail_parts(result: LineResult, units: DisplayUnits) -> list[Markup]:
    """Return deflections against limits, moments at faces and redistribution of a line."""
    if result.detail is None:
        return []
    detail = detail_of(result)
    parts = []
    if detail.deflections:
        parts.append(deflections(detail.deflections, units))
    if detail.supports:
        parts.append(support_moments(detail.supports, units))
    if detail.redistributed is not None:
        names = [member_name(m) for m in result.line.members]
        elastic = result.envelopes["strength"]
        parts += redistribution(detail.redistributed, elastic, names, units)
    return parts


def check_parts(
    result: LineResult, found: Sequence[MemberChecks], units: DisplayUnits
) -> list[Markup]:
    """Return the checks of the members of a line; deflections have a table of their own."""
    found = _worked_once(result, [_without_limits(each) for each in found])
    if not found:
        return []
    members = [
        (member_name(result.line.members[e.member]), e.code, e.restraints, e.checks) for e in found
    ]
    parts = line_checks(members, units)
    notes = [tag("p", text, class_="verification") for text in (WORKED_ONCE, NOTE)]
    return [tag("h3", "Member checks"), *parts, *notes]


def _without_limits(each: MemberChecks) -> MemberChecks:
    return replace(each, checks=tuple(c for c in each.checks if c.name != DEFLECTION_LIMIT))


def _worked_once(result: LineResult, found: Sequence[MemberChecks]) -> list[MemberChecks]:
    """Keep the working of each check for the member of a section that it is closest for."""
    worst: dict[tuple[str, str], tuple[float, int]] = {}
    for each in found:
        section = result.line.members[each.member].section
        for check in each.checks:
            key = check.name, section.name if section else ""
            worst[key] = max(worst.get(key, (-1.0, 0)), (check.use, -each.member))
    out = []
    for each in found:
        section = result.line.members[each.member].section
        name = section.name if section else ""
        checks = tuple(
            check if worst[check.name, name][1] == -each.member else replace(check, steps=())
            for check in each.checks
        )
        out.append(replace(each, checks=checks))
    return out


def _one(result: LineResult, state: State, units: DisplayUnits) -> list[Markup]:
    assert result.parts is not None
    line = state_line(result.parts.line, state, case=state.source)
    unit = units.symbol("moment")
    governs = ", ".join(e for e in state.effects if e.startswith(_SHOWN))
    try:
        record = distribute(line, state.source)
    except AnalysisError as error:
        return [tag("p", f"{state.source}: {error}")]
    shown = [tag("p", f"{state.source} governs {governs}.", class_="governs")]
    rows = fixed_end_rows(line, units)
    if rows:
        shown.append(fixed_ends(rows, unit))
    tables = record_tables(record, units)
    for number, each in enumerate(tables):
        closing = closing_note(record, units) if number == len(tables) - 1 else ""
        shown.append(distribution(each, closing, unit))
    return shown


def _governs_moment(state: State) -> bool:
    return any(effect.startswith(_SHOWN) for effect in state.effects)
