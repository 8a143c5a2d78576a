"""Results and changed members into model files, and out again."""

from __future__ import annotations

import tempfile
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

from analysis_core.ifc import source as ifc_source
from analysis_core.ifc.posting.posted import known_marks, read_posted
from analysis_core.pipeline.progress import Progress
from analysis_core.pipeline.reading import check_marks, idealised, read, with_marks
from analysis_core.pipeline.solving import solve
from analysis_core.results import LineResult, Outcome, Stations
from analysis_core.settings import Settings

if TYPE_CHECKING:
    from analysis_core.ifc.posting.writer import PostReport, RemoveReport
    from analysis_core.ifc.updating import Change


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
        before = with_marks(read(copy, settings, progress=progress), marks)
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
        outcome = solve(idealised(with_marks(after, marks), settings), settings, progress=progress)
        report = post(outcome, copy, target, progress=progress, analysis_model=analysis_model)
    return MemberUpdate(outcome, report, updated.changes)
