"""Lines solved, checked, compared with an earlier revision, and chosen from."""

from __future__ import annotations

import difflib
from collections.abc import Iterator, Sequence
from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING

from analysis_core.collector import collector_paused
from analysis_core.distribution.record import DistributionRecord, distribute
from analysis_core.errors import AnalysisError, JobError
from analysis_core.model import LineModel
from analysis_core.pipeline.progress import Progress, silent
from analysis_core.pipeline.reading import Survey, check_marks, survey
from analysis_core.results import LineResult, Outcome
from analysis_core.revision.kept_marks import with_kept_marks
from analysis_core.revision.line_fingerprints import line_bases
from analysis_core.revision.reconcile import Reconciliation, marks_before
from analysis_core.revision.reconcile import reconcile as compare
from analysis_core.settings import Settings
from analysis_core.solving.area_reduction import reduced_by_area
from analysis_core.solving.combining import choose, with_combinations
from analysis_core.solving.lines import Memory, solve_lines
from analysis_core.solving.stacks import received
from analysis_core.solving.uplift import uplift

if TYPE_CHECKING:
    from analysis_core.checking.members import MemberChecks
    from analysis_core.revision.posted_states import PostedState


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
    with collector_paused():
        return _solved(found, settings, progress or silent, only, memory)


def _solved(
    found: Survey, settings: Settings, tell: Progress, only: Sequence[str], memory: Memory | None
) -> Outcome:
    rules, assumed = choose(found.model, settings)
    reduced, by_area = reduced_by_area(found.model, settings, rules.rule_set)
    model = with_combinations(reduced, rules)
    results, failed = solve_lines(model, rules, settings, tell, memory)
    if only:
        results = tuple(r for r in results if r.line.mark in only)
    findings = (*assumed, *by_area, *failed, *uplift(results, model.names))
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


def checks(outcome: Outcome, settings: Settings) -> dict[str, tuple[MemberChecks, ...]]:
    """Return the checks of the members of each balanced line by its mark.  Raises JobError."""
    from analysis_core.checking.members import check_lines

    return check_lines(outcome, settings)


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
    check_marks(outcome.model, marks)
    chosen = tuple(r for r in outcome.lines if not marks or r.line.mark in marks)
    return replace(outcome, model=_restricted(outcome.model, chosen), lines=chosen)


def _restricted(model: LineModel, results: Sequence[LineResult]) -> LineModel:
    return replace(model, lines=tuple(result.line for result in results))
