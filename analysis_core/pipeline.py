"""The whole road: a file in, lines idealised, solved, combined, verified and posted.

This is the one module that knows all the parts; the command line, the sheet and the add-on call
it and nothing else.
"""

from __future__ import annotations

import difflib
import tempfile
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import asdict, dataclass, field, replace
from datetime import datetime
from pathlib import Path
from typing import TYPE_CHECKING, Any

from analysis_core import idealise
from analysis_core.building import Building
from analysis_core.checking.slab_restraint import held_by_slabs
from analysis_core.distribution.record import DistributionRecord, distribute
from analysis_core.errors import AnalysisError, JobError
from analysis_core.findings import Finding
from analysis_core.ifc import source as ifc_source
from analysis_core.ifc.posting.posted import Posted, known_marks, read_posted
from analysis_core.model import LineModel
from analysis_core.results import LineResult, Outcome, Stations
from analysis_core.revision.kept_marks import with_kept_marks
from analysis_core.revision.line_fingerprints import line_bases
from analysis_core.revision.reconcile import Reconciliation, marks_before
from analysis_core.revision.reconcile import reconcile as compare
from analysis_core.settings import Settings
from analysis_core.solving.area_reduction import reduced_by_area
from analysis_core.solving.combining import choose, with_combinations
from analysis_core.solving.lines import Memory, solve_lines
from analysis_core.solving.stacks import Standing, received, standing_elements
from analysis_core.units import display_units

if TYPE_CHECKING:
    from analysis_core.checking.choosing import Choice
    from analysis_core.checking.members import MemberChecks
    from analysis_core.ifc.posting.writer import PostReport, RemoveReport
    from analysis_core.ifc.updating import Change
    from analysis_core.revision.posted_states import PostedState

Progress = Callable[[str, float], None]

# Section forces along members of an analysis model: at the tenths of each, ends included.
_SECTION_FORCES = 11


@dataclass(frozen=True, slots=True, eq=False)
class Reading:
    """What stands in a file, before it is idealised.

    It serves as long as the file and those settings stay that reading depends on.
    """

    file: str
    schema: str
    fingerprint: str
    building: Building
    findings: tuple[Finding, ...]
    settings: Settings
    posted: Mapping[str, tuple[Posted, ...]] = field(default_factory=dict)
    """What was posted earlier, by the GlobalId of the element."""

    def serves(self, settings: Settings) -> bool:
        """Whether the file need not be read again for other settings."""
        return _asked_of_reading(self.settings) == _asked_of_reading(settings)


@dataclass(frozen=True, slots=True)
class Survey:
    """What was found in a file, before anything is solved."""

    file: str
    schema: str
    fingerprint: str
    model: LineModel
    findings: tuple[Finding, ...]
    route: str = "physical"
    """"analytical" or "physical"."""
    counts: Mapping[str, int] = field(default_factory=dict)
    """What the file holds, by class, and how many of it were taken as beams."""
    standing: tuple[Standing, ...] = ()
    """Columns, walls, piles and footings with what each stands on."""
    posted: Mapping[str, tuple[Posted, ...]] = field(default_factory=dict)
    """What was posted earlier, by the GlobalId of the element."""


@dataclass(frozen=True, slots=True)
class MemberUpdate:
    """What updating members did: the results of the changed model, and all that was changed."""

    outcome: Outcome
    report: PostReport
    changes: tuple[Change, ...]


def survey(
    path: str | Path,
    settings: Settings | None = None,
    *,
    progress: Progress | None = None,
    only: Sequence[str] = (),
) -> Survey:
    """Read a file and idealise it.  ``only``: marks of the lines wanted, all where empty.

    Raises IfcReadError, JobError.
    """
    settings = settings or Settings()
    return idealised(read(path, settings, progress=progress), settings, only=only)


def read(
    path: str | Path, settings: Settings | None = None, *, progress: Progress | None = None
) -> Reading:
    """Read what stands in a file.  Raises IfcReadError."""
    settings = settings or Settings()
    tell = progress or _silent
    tell("Reading", 0.0)
    source = ifc_source.open_model(path)
    tell("Reading", 0.5)
    building = _read(source, settings)
    posted = read_posted(source)
    building = replace(building, known_marks=known_marks(posted))
    tell("Reading", 1.0)
    return Reading(
        source.name,
        source.schema,
        source.fingerprint,
        building,
        (*source.findings, *building.findings),
        settings,
        posted,
    )


def idealised(reading: Reading, settings: Settings, *, only: Sequence[str] = ()) -> Survey:
    """Idealise what was read; lines keep the marks they were posted with.  Raises JobError."""
    model = idealise.idealise(reading.building, settings)
    findings = tuple(dict.fromkeys((*reading.findings, *model.findings)))
    model = replace(
        model,
        findings=findings,
        names=_names(reading.building),
        held_by=held_by_slabs(reading.building),
    )
    _check_marks(model, only)
    return Survey(
        reading.file,
        reading.schema,
        reading.fingerprint,
        model,
        findings,
        reading.building.route,
        counts=reading.building.counts,
        standing=standing_elements(reading.building),
        posted=reading.posted,
    )


def run(
    path: str | Path,
    settings: Settings | None = None,
    *,
    progress: Progress | None = None,
    only: Sequence[str] = (),
) -> Outcome:
    """Read, idealise, solve and envelope.  Raises IfcReadError, JobError.

    A line that cannot be analysed never stops the others: its finding says why.
    """
    settings = settings or Settings()
    found = survey(path, settings, progress=progress, only=only)
    return solve(found, settings, progress=progress, only=only)


def solve(
    found: Survey,
    settings: Settings,
    *,
    progress: Progress | None = None,
    only: Sequence[str] = (),
    memory: Memory | None = None,
) -> Outcome:
    """Solve what a survey found; with a ``memory``, only what it does not know yet."""
    rules, assumed = choose(found.model, settings)
    reduced, by_area = reduced_by_area(found.model, settings, rules.rule_set)
    model = with_combinations(reduced, rules)
    results, failed = solve_lines(model, rules, settings, progress or _silent, memory)
    findings = (*assumed, *by_area, *failed)
    if only:
        results = tuple(r for r in results if r.line.mark in only)
    return Outcome(
        file=found.file,
        schema=found.schema,
        fingerprint=found.fingerprint,
        model=_restricted(model, results) if only else model,
        lines=results,
        findings=tuple(dict.fromkeys((*found.findings, *findings))),
        rules=rules.name,
        received=received(
            found.standing, results, [case.name for case in model.cases], model.direct
        ),
    )


def posted_states(found: Survey, settings: Settings) -> dict[str, PostedState]:
    """Return by mark whether the results in the file hold, without solving.  Raises JobError."""
    from analysis_core.revision.posted_states import PostedState
    from analysis_core.revision.posted_states import posted_states as states

    if not found.posted:
        return {line.mark: PostedState("not posted") for line in found.model.lines}
    rules, _ = choose(found.model, settings)
    bases = line_bases(
        found.model, combinations=rules.combinations, rules=rules.name, settings=settings
    )
    return states(found.model, bases, found.posted)


def reconcile(
    before: str | Path,
    after: str | Path,
    settings: Settings | None = None,
    *,
    progress: Progress | None = None,
) -> Reconciliation:
    """Compare two revisions; of the later one only what is affected is solved again.

    Raises IfcReadError, JobError.
    """
    settings = settings or Settings()
    memory = Memory()
    first = solve(
        survey(before, settings, progress=progress), settings, progress=progress, memory=memory
    )
    found = survey(after, settings, progress=progress)
    model = with_kept_marks(found.model, marks_before(first, found.model.lines))
    found = replace(found, model=model, findings=model.findings)
    second = solve(found, settings, progress=progress, memory=memory)
    return compare(first, second, solved_again=tuple(memory.again))


def post(
    outcome: Outcome,
    source: str | Path,
    target: str | Path,
    *,
    progress: Progress | None = None,
    analysis_model: bool = False,
    only: Sequence[str] = (),
) -> PostReport:
    """Write an outcome into a copy of its model, or the model itself.

    ``outcome`` holds all lines; ``only``: marks of those to be written, all where empty.  What was
    posted for others then stays.  ``analysis_model``: the idealisation too, where the model has
    none.  Raises IfcWriteError, JobError.
    """
    from analysis_core.effects.stations import stations
    from analysis_core.ifc.posting import writer  # not always wanted; keep the start quick

    def section_forces(result: LineResult) -> Stations:
        assert result.solution is not None  # only asked for lines that were solved
        return stations(result.line, result.solution, _SECTION_FORCES)

    _check_marks(outcome.model, only)
    return writer.post(
        source,
        target,
        outcome,
        analysis_model=analysis_model,
        only=only,
        stations=section_forces,
        progress=progress,
    )


def remove(source: str | Path, target: str | Path) -> RemoveReport:
    """Write a copy of a model without anything that was posted.  Raises IfcWriteError."""
    from analysis_core.ifc.posting import writer

    return writer.remove(source, target)


def update_members(
    source: str | Path,
    target: str | Path,
    settings: Settings | None = None,
    *,
    sections: Mapping[str, str] | None = None,
    materials: Mapping[str, str] | None = None,
    analysis_model: bool = False,
    progress: Progress | None = None,
) -> MemberUpdate:
    """Write changed sections and materials into a copy of a model, solve it again and post.

    ``sections`` and ``materials`` give the name of a profile or material, of the model or the job
    file, by the mark of a line or the GlobalId of an element.  ``target`` may be ``source``.
    Everything is written at once, or nothing.  Raises IfcReadError, JobError, IfcWriteError.
    """
    from analysis_core.ifc.updating import update
    from analysis_core.member_update import check_update, wishes

    settings = settings or Settings()
    marks = known_marks(read_posted(ifc_source.open_model(source)))
    with tempfile.TemporaryDirectory() as folder:
        copy = Path(folder) / Path(source).name
        remove(source, copy)
        before = _with_marks(read(copy, settings, progress=progress), marks)
        found = idealised(before, settings)
        wanted = wishes(
            found.model,
            before.building,
            settings,
            sections=sections or {},
            materials=materials or {},
        )
        updated = update(copy, wanted, settings)
        copy.write_bytes(b"".join(updated.parts))
        after = read(copy, settings, progress=progress)
        check_update(updated, after.building)
        marks = {e: line.mark for line in found.model.lines for e in line.elements}
        outcome = solve(idealised(_with_marks(after, marks), settings), settings, progress=progress)
        report = post(outcome, copy, target, progress=progress, analysis_model=analysis_model)
    return MemberUpdate(outcome, report, updated.changes)


def checks(outcome: Outcome, settings: Settings) -> dict[str, tuple[MemberChecks, ...]]:
    """Return the checks of the members of each balanced line by its mark.  Raises JobError."""
    from analysis_core.checking.members import check_lines

    return check_lines(outcome, settings)


def lightest(
    path: str | Path,
    table: str,
    settings: Settings | None = None,
    *,
    marks: Sequence[str] = (),
    alike: bool = False,
    progress: Progress | None = None,
) -> list[Choice]:
    """Return the lightest section for lines, from a table; nothing is written.

    ``table``: "model" for the profiles of the model, "job" for the section table of the job file,
    or a file with one (.csv, .yaml).  ``marks``: the lines, each by itself or, if ``alike``, with
    all of its section and material; every kind of lines where empty.  Raises IfcReadError,
    JobError.
    """
    from analysis_core.checking import choosing
    from analysis_core.ifc.updating import candidates
    from analysis_core.job.reader import with_section_table

    settings = settings or Settings()
    if table not in ("model", "job"):
        settings = with_section_table(settings, Path(table))
    found = survey(path, settings, progress=progress)
    _check_marks(found.model, marks)
    source = ifc_source.open_model(path)
    known = (
        candidates.of_model(source) if table == "model" else candidates.of_table(source, settings)
    )
    where = {"model": f"'{found.file}'", "job": "The section table of the job file"}
    choosing.check_candidates(known, where.get(table, f"'{table}'"))
    memory = Memory()

    def solved(model: LineModel) -> Outcome:
        asked = replace(found, model=model, standing=())
        return solve(asked, settings, memory=memory)

    groups = choosing.kinds(found.model, marks, alike=alike)
    return choosing.choose_lightest(found.model, settings, known, groups, solved)


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


def records(outcome: Outcome, cases: Sequence[str] = ()) -> Iterator[DistributionRecord]:
    """Yield the recorded distribution of each line and case (all where ``cases`` is empty).

    Cases without actions on a line, and those whose cycles do not settle, are left out.
    """
    for result in outcome.lines:
        if result.status != "balanced":
            continue
        acting = {action.case for action in result.line.actions}
        for case in cases or [case.name for case in outcome.model.cases]:
            if case in acting:
                try:
                    yield distribute(result.line, case)
                except AnalysisError:
                    continue


def of_storeys(outcome: Outcome, storeys: Sequence[str]) -> Outcome:
    """Return the lines of the named storeys alone.  Raises JobError for a name without lines."""
    known = [r.line.storey for r in outcome.lines if r.line.storey]
    for name in storeys:
        if name not in known:
            near = difflib.get_close_matches(name, known, n=1, cutoff=0.0)
            hint = f"; the nearest is '{near[0]}'" if near else ""
            raise JobError(f"No line belongs to a storey '{name}'{hint}.")
    chosen = tuple(r for r in outcome.lines if r.line.storey in storeys)
    return replace(outcome, model=_restricted(outcome.model, chosen), lines=chosen)


def of_lines(outcome: Outcome, marks: Sequence[str]) -> Outcome:
    """Return the lines of these marks alone, all where there are none.  Raises JobError."""
    _check_marks(outcome.model, marks)
    chosen = tuple(r for r in outcome.lines if not marks or r.line.mark in marks)
    return replace(outcome, model=_restricted(outcome.model, chosen), lines=chosen)


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


def _read(source: ifc_source.Source, settings: Settings) -> Building:
    route = settings.analysis.route
    if route == "auto":
        route = "analytical" if source.has_analysis_model else "physical"
    if route == "analytical":
        from analysis_core.ifc.analytical.reader import read_analytical

        return read_analytical(source, settings)
    from analysis_core.ifc.physical.reader import read_physical

    return read_physical(source, settings)


def _asked_of_reading(settings: Settings) -> Settings:
    """The settings without those that come into play after reading; a new one counts as read."""
    blank = Settings()
    later = (
        "title", "text", "display", "rules", "cases", "combinations", "actions", "movements",
        "supports", "releases", "sections", "limits", "checks",
    )  # fmt: skip
    return replace(settings, **{name: getattr(blank, name) for name in later})


def _with_marks(reading: Reading, marks: Mapping[str, str]) -> Reading:
    return replace(reading, building=replace(reading.building, known_marks=marks))


def _names(building: Building) -> dict[str, str]:
    names = {m.global_id: m.name for m in building.members}
    names |= {c.global_id: c.name for c in building.carriers}
    names |= {c.global_id: c.name for c in building.connections}
    return {key: name for key, name in names.items() if name}


def _check_marks(model: LineModel, only: Sequence[str]) -> None:
    marks = [line.mark for line in model.lines]
    for mark in only:
        if mark not in marks:
            near = difflib.get_close_matches(mark, marks, n=1, cutoff=0.0)
            hint = f"; the nearest is '{near[0]}'" if near else "; it has no lines"
            raise JobError(f"The model has no line '{mark}'{hint}.")


def _restricted(model: LineModel, results: Sequence[LineResult]) -> LineModel:
    return replace(model, lines=tuple(result.line for result in results))


def _silent(step: str, part: float) -> None:
    return None
