"""What the sheet shows of each line beside its results: governing states, distributed by hand."""

from __future__ import annotations

from collections.abc import Hashable, Sequence
from dataclasses import replace

from analysis_core.calculation.assumptions import assumptions_part
from analysis_core.calculation.fixed_end_rows import fixed_end_rows
from analysis_core.checking.direct_bearing import direct_bearing
from analysis_core.checking.members import DEFLECTION_LIMIT, MemberChecks, check_line
from analysis_core.distribution.record import distribute
from analysis_core.effects.states import State, state_line
from analysis_core.errors import AnalysisError
from analysis_core.report.record_rows import RecordTable, closing_note, record_tables
from analysis_core.results import LineResult, Outcome
from analysis_core.settings import Settings
from analysis_core.sheet.anchors import anchor
from analysis_core.sheet.checks import NOTE, Told, line_checks
from analysis_core.sheet.details import deflections, redistribution, support_moments
from analysis_core.sheet.distribution import distribution, fixed_ends
from analysis_core.sheet.document import sheet
from analysis_core.sheet.html import Markup, tag
from analysis_core.sheet.line_section import member_name
from analysis_core.solving.line_details import detail_of
from analysis_core.units import DisplayUnits

_FACTORS_ABOVE = "Stiffness, distribution and carry-over factors as in the first table."
_MANY = 200
"""Lines of a sheet beyond which less is written down for each."""
_SHOWN = ("sagging", "hogging")
_MOST, _FEW = 4, 2


def calculation_sheet(outcome: Outcome, settings: Settings, units: DisplayUnits, date: str) -> str:
    """Return the whole sheet as HTML text."""
    bearing = direct_bearing(outcome.model)
    found = {
        result.line.mark: check_line(result, outcome.model, settings, bearing)
        for result in outcome.lines
        if result.status == "balanced"
    }

    codes = {each.code for of_line in found.values() for each in of_line}
    many = len(outcome.lines) > _MANY
    seen: dict[Hashable, LineResult] = {}
    told = Told()

    def working(result: LineResult) -> list[Markup]:
        return distribution_parts(result, units, seen, _FEW if many else _MOST)

    def checks(result: LineResult) -> list[Markup]:
        of_line = found.get(result.line.mark, [])
        return detail_parts(result, units) + check_parts(
            result, of_line, units, many=many, told=told
        )

    return sheet(
        outcome, units, title=settings.title, date=date, working=working, checks=checks,
        uses={mark: use for mark, each in found.items() if (use := _largest_use(each))},
        assumed=assumptions_part(outcome, settings, units, _how_much(many), codes),
    )  # fmt: skip


def _how_much(many: bool) -> str:
    """What is written down of each line, and what is left out for length."""
    of, most = ("of the line", "two") if many else ("of each section in the line", "four")
    return (
        f"Of each line the {most} states with the largest moments are distributed by hand; a line "
        f"equal to an earlier one refers to it. The working of each check is written down for the "
        f"member {of} that uses most of its resistance; the others follow the same formulas, and a "
        f"working equal in every number to an earlier one refers to it."
    )


def _largest_use(found: Sequence[MemberChecks]) -> tuple[float, str] | None:
    made = [each.worst for each in found if each.worst is not None]
    worst = max(made, key=lambda check: check.use, default=None)
    return None if worst is None else (worst.use, worst.name)


def distribution_parts(
    result: LineResult, units: DisplayUnits, seen: dict[Hashable, LineResult], most: int = _MOST
) -> list[Markup]:
    """Return the recorded distributions of the states that govern the moments of a line.

    ``seen`` keeps what was written down for earlier lines: an equal line refers to it.
    """
    if result.detail is None or result.parts is None:
        return []
    states = _by_size(result, [s for s in detail_of(result).states if _governs_moment(s)])
    if not states:
        return []
    heading = tag("h3", "Distribution of the governing states")
    key = _content(result, states[:most])
    first = seen.setdefault(key, result)
    if first is not result:
        same = tag("a", first.line.mark, href=f"#{anchor(first)}")
        words = "the same joints, members and actions under the same factors."
        return [heading, tag("p", "As for line ", same, f": {words}")]
    parts: list[Markup] = []
    for state in states[:most]:
        parts += _one(result, state, units, whole=not parts)
    if len(states) > most:
        left = "; ".join(s.source for s in states[most:])
        parts.append(tag("p", f"Not written down, for length: {left}.", class_="verification"))
    return [heading, *parts]


def _by_size(result: LineResult, states: Sequence[State]) -> list[State]:
    """The states whose moments are largest come first."""
    size: dict[str, float] = {}
    for member in result.envelopes["strength"].members:
        for extreme in (member.sagging, member.hogging):
            size[extreme.source] = max(size.get(extreme.source, 0.0), abs(extreme.value))
    return sorted(states, key=lambda state: -size.get(state.source, 0.0))


def _content(result: LineResult, states: Sequence[State]) -> Hashable:
    """Everything that the distribution of these states depends on, without names."""
    assert result.parts is not None
    line = result.parts.line
    joints = tuple((j.x, j.z, j.support) for j in line.joints)
    members = tuple(
        (m.start, m.end, m.pieces, m.role, m.start_spring, m.end_spring) for m in line.members
    )
    actions = tuple(
        tuple(replace(a, source="") for a in state_line(line, state, case="").actions)
        for state in states
    )
    return line.kind, joints, members, actions


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
    result: LineResult,
    found: Sequence[MemberChecks],
    units: DisplayUnits,
    *,
    many: bool = False,
    told: Told | None = None,
) -> list[Markup]:
    """Return the checks of the members of a line; deflections have a table of their own.

    ``many``: the working of each check once for the line, not for each of its sections.
    ``told`` keeps the workings of the sheet.
    """
    found = _worked_once(result, [_without_limits(each) for each in found], by_section=not many)
    if not found:
        return []
    members = [
        (member_name(result.line.members[e.member]), e.code, e.restraints, e.checks) for e in found
    ]
    parts = line_checks(members, units, mark=result.line.mark, told=told)
    return [tag("h3", "Member checks"), *parts, tag("p", NOTE, class_="verification")]


def _without_limits(each: MemberChecks) -> MemberChecks:
    return replace(each, checks=tuple(c for c in each.checks if c.name != DEFLECTION_LIMIT))


def _worked_once(
    result: LineResult, found: Sequence[MemberChecks], *, by_section: bool
) -> list[MemberChecks]:
    """Keep the working of each check for the member that it is closest for."""
    groups = [
        section.name if by_section and (section := result.line.members[e.member].section) else ""
        for e in found
    ]
    worst: dict[tuple[str, str], tuple[float, int]] = {}
    for each, group in zip(found, groups, strict=True):
        for check in each.checks:
            key = check.name, group
            worst[key] = max(worst.get(key, (-1.0, 0)), (check.use, -each.member))
    return [
        replace(each, checks=tuple(
            check if worst[check.name, group][1] == -each.member else replace(check, steps=())
            for check in each.checks
        ))
        for each, group in zip(found, groups, strict=True)
    ]  # fmt: skip


def _one(result: LineResult, state: State, units: DisplayUnits, *, whole: bool) -> list[Markup]:
    """One state; stiffness and factors are those of the line and stand in its first alone."""
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
    if not whole and len(tables) == 1:
        tables = [_without_factors(tables[0])]
    for number, each in enumerate(tables):
        closing = closing_note(record, units) if number == len(tables) - 1 else ""
        shown.append(distribution(each, closing, unit))
    return shown


def _without_factors(table: RecordTable) -> RecordTable:
    rows = tuple(row for row in table.rows if row.kind not in ("stiffness", "factor", "carry"))
    return replace(table, rows=rows, notes=(_FACTORS_ABOVE, *table.notes))


def _governs_moment(state: State) -> bool:
    return any(effect.startswith(_SHOWN) for effect in state.effects)
