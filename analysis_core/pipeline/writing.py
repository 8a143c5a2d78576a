"""Results and changed members into model files, and out again."""

from __future__ import annotations

import tempfile
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from pathlib import Path
from typing import TYPE_CHECKING

from analysis_core.errors import JobError
from analysis_core.ifc import source as ifc_source
from analysis_core.ifc.posting.posted import known_marks, read_posted
from analysis_core.pipeline.progress import Progress
from analysis_core.pipeline.reading import Survey, check_marks, idealised, read, stock, with_marks
from analysis_core.pipeline.solving import solve
from analysis_core.results import LineResult, Outcome, Stations
from analysis_core.settings import Settings

if TYPE_CHECKING:
    from analysis_core.ifc.posting.writer import PostReport, RemoveReport
    from analysis_core.ifc.updating import Change, Updated


# Section forces along members of an analysis model: at the tenths of each, ends included.
_SECTION_FORCES = 11


@dataclass(frozen=True, slots=True)
class MemberUpdate:
    """What updating members did: the results of the changed model, and all that was changed."""

    outcome: Outcome
    report: PostReport
    changes: tuple[Change, ...]


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

    check_marks(outcome.model, only)
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
    given: bool = False,
    analysis_model: bool = False,
    progress: Progress | None = None,
) -> MemberUpdate:
    """Write changed sections and materials into a copy of a model, solve it again and post.

    ``sections`` and ``materials`` give the name of a profile or material, of the model or the job
    file, by the mark of a line or the GlobalId of an element.  ``given``: what the job file gives
    members as well, where nothing else is named for them.  ``target`` may be ``source``.
    Everything is written at once, or nothing.  Raises IfcReadError, JobError, IfcWriteError.
    """
    from analysis_core.member_update import check_update

    settings = settings or Settings()
    if settings.members and not given:
        raise JobError(
            "The job file gives members other sections or materials (members), which would be left "
            "out here. Write them too (post --members), or take them out of the job file."
        )
    as_read = replace(settings, members=())
    with tempfile.TemporaryDirectory() as folder:
        copy = Path(folder) / Path(source).name
        found, updated = _updated(
            source, copy, settings, sections or {}, materials or {}, given=given, progress=progress
        )
        copy.write_bytes(b"".join(updated.parts))
        after = read(copy, as_read, progress=progress)
        check_update(updated, after.building)
        marks = {e: line.mark for line in found.model.lines for e in line.elements}
        again = idealised(with_marks(after, marks), as_read)
        outcome = solve(again, as_read, progress=progress)
        report = post(outcome, copy, target, progress=progress, analysis_model=analysis_model)
    return MemberUpdate(outcome, report, updated.changes)


def member_changes(
    source: str | Path, settings: Settings, *, progress: Progress | None = None
) -> tuple[Change, ...]:
    """Return what writing the members that the job file gives would change in a model.

    Nothing is written.  Raises IfcReadError, JobError.
    """
    with tempfile.TemporaryDirectory() as folder:
        copy = Path(folder) / Path(source).name
        _, updated = _updated(source, copy, settings, {}, {}, given=True, progress=progress)
    return updated.changes


def _updated(
    source: str | Path, copy: Path, settings: Settings, sections: Mapping[str, str],
    materials: Mapping[str, str], *, given: bool, progress: Progress | None,
) -> tuple[Survey, Updated]:  # fmt: skip
    """The survey before a change and the changed model; ``copy`` holds it without our results."""
    from analysis_core.given_members import outstanding
    from analysis_core.ifc.updating import update
    from analysis_core.member_update import wishes

    as_read = replace(settings, members=())
    opened = ifc_source.open_model(source)
    marks = known_marks(read_posted(opened))
    remove(source, copy)
    before = with_marks(read(copy, as_read, progress=progress), marks)
    found = idealised(before, as_read)
    more = outstanding(before.building, stock(copy, settings), settings) if given else None
    wanted = wishes(
        found.model, before.building, settings, sections=sections, materials=materials, given=more
    )
    return found, update(copy, wanted, settings)
