"""What is handed out: the results file, the sheet, schedules, issues and rule sets."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import asdict
from datetime import datetime
from typing import TYPE_CHECKING, Any

from analysis_core.pipeline.reading import Survey
from analysis_core.results import LineResult, Outcome
from analysis_core.settings import Settings
from analysis_core.units import display_units

if TYPE_CHECKING:
    from analysis_core.checking.members import MemberChecks
    from analysis_core.revision.posted_states import PostedState


def document(
    outcome: Outcome,
    *,
    stations: int = 21,
    checks: Mapping[str, tuple[MemberChecks, ...]] | None = None,
) -> dict[str, Any]:
    """Return the results file as plain data, with the checks of members where given."""
    from analysis_core.report.results_file import results_document

    data = results_document(outcome, stations=stations)
    if checks is not None:
        from analysis_core.report.checks import checks_data

        for line in data["lines"]:
            line["checks"] = checks_data(checks.get(line["mark"], ()))
    return data


def survey_document(
    found: Survey,
    states: Mapping[str, PostedState] | None = None,
    *,
    only: Sequence[str] = (),
) -> dict[str, Any]:
    """Return a survey in the form of the results file, without results.

    With ``states``, each line also tells whether its results in the file hold ("posted").
    """
    wanted = [line for line in found.model.lines if not only or line.mark in only]
    lines = tuple(LineResult(line, "not analysed") for line in wanted)
    outcome = Outcome(
        found.file, found.schema, found.fingerprint, found.model, lines, found.findings
    )
    data = document(outcome)
    known = states or {}
    for line in data["lines"]:
        state = known.get(line["mark"])
        if state is None:
            continue
        line["posted"] = {
            "state": state.state,
            "reasons": list(state.reasons),
            "computed_at": state.computed_at or None,
        }
    return data


def sheet(outcome: Outcome, settings: Settings, *, date: str = "") -> str:
    """Return the calculation sheet as HTML; ``date`` as shown, today where empty."""
    from analysis_core.calculation.composition import calculation_sheet

    units = display_units(settings.display.system, settings.display.units)
    today = date or datetime.now().date().isoformat()
    return calculation_sheet(outcome, settings, units, today)


def reactions_csv(outcome: Outcome, settings: Settings) -> str:
    """Return the schedule of reactions as CSV in display units."""
    from analysis_core.effects.reactions import schedule, schedule_table
    from analysis_core.report.csv_text import csv_text

    units = display_units(settings.display.system, settings.display.units)
    return csv_text(schedule_table(schedule(outcome.lines), units, outcome.model.names))


def issues(outcome: Outcome, checks: Mapping[str, tuple[MemberChecks, ...]] | None = None) -> bytes:
    """Return findings and failed checks as a BCF file."""
    from analysis_core.report.issues import bcf_bytes, issues_of

    return bcf_bytes(outcome, issues_of(outcome, checks))


def job_text(found: Survey, settings: Settings) -> str:
    """Return a starting job file for a survey, as YAML text."""
    from analysis_core.report.job import job_text as text

    physical = found.route == "physical"
    return text(found.model, file=found.file, rules=settings.rules.name, physical=physical)


def rules_text(name: str | None, replaced: Mapping[str, object] | None = None) -> str:
    """Return the list of rule sets, one rule set in full, or the figures of a code of the checks.

    ``replaced``: figures that a project puts its own in place of.  Raises JobError.
    """
    from analysis_core import rules
    from analysis_core.checking.members import TITLES
    from analysis_core.report.checks import figures_text

    if name is None:
        titles = {key: rules.load(key).title for key in rules.names()}
        sets, codes = (
            "\n".join(f"{key:16} {title}" for key, title in named.items())
            for named in (titles, TITLES)
        )
        return f"{sets}\n\nChecks of members:\n{codes}"
    if name in TITLES:
        return figures_text(name, replaced or {})
    return rules.describe(rules.load(name, replace=replaced))


def is_check_code(name: str) -> bool:
    """Whether this is the name of a code that members are checked by."""
    from analysis_core.checking.members import TITLES

    return name in TITLES


def rules_document(
    name: str | None, replaced: Mapping[str, object] | None = None
) -> dict[str, Any]:
    """Return what ``rules_text`` says as plain data, ready for JSON.  Raises JobError."""
    from analysis_core import rules
    from analysis_core.checking.members import TITLES
    from analysis_core.report.checks import figures_data

    head = {"format": "spanledger-rules", "version": 1}
    if name is not None and name in TITLES:
        return {**head, "checks": figures_data(name, replaced or {})}
    if name is not None:
        return {**head, "set": asdict(rules.load(name, replace=replaced))}
    sets = [rules.load(key) for key in rules.names()]
    return {
        **head,
        "sets": [{"name": r.name, "title": r.title, "edition": r.edition} for r in sets],
        "codes": [{"name": name, "title": title} for name, title in TITLES.items()],
    }
