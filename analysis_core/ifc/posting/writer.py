"""Posting: results are written into a copy of their model, or into the model itself.

The road: read the bytes, take out what we posted earlier, write down the new instances as text,
put them before the end of the data, replace the target as a whole.  Every byte of the model stays
where it was; ``append`` says how, ``clearing`` how our entities are found when another program
has rewritten the file.
"""

from __future__ import annotations

import os
from collections.abc import Collection
from dataclasses import dataclass
from datetime import UTC, datetime
from pathlib import Path
from typing import Literal

from analysis_core.collector import collector_paused
from analysis_core.errors import IfcWriteError
from analysis_core.ifc.posting import clearing
from analysis_core.ifc.posting.posting import Posting, PostReport, Progress
from analysis_core.ifc.posting.section_forces import CaseStations
from analysis_core.ifc.step import atomic
from analysis_core.ifc.step.container import read_container
from analysis_core.results import Outcome

__all__ = ["PostReport", "RemoveReport", "post", "remove"]


@dataclass(frozen=True, slots=True)
class RemoveReport:
    """What was taken out: the number of property sets.

    ``path`` is "append" where our blocks were as we had written them: then the model is again, bit
    for bit, what it was before posting.  So is the whole file, unless ``packed_anew``: the zip
    archive around the model then had to be written anew.
    """

    removed: int
    path: Literal["append", "general"]
    packed_anew: bool = False


def post(
    source_path: str | Path,
    target_path: str | Path,
    outcome: Outcome,
    *,
    analysis_model: bool = False,
    only: Collection[str] = (),
    stations: CaseStations | None = None,
    progress: Progress | None = None,
    computed_at: datetime | None = None,
) -> PostReport:
    """Write an outcome into a copy of its model; the same path twice replaces it.

    ``outcome`` holds all lines of the model.  ``only``: marks of the lines to be written, all
    where empty; then what was posted for others stays.  Otherwise everything posted earlier gives
    way.  ``stations`` gives the section forces of a line's cases along its members, for the
    curve reactions of an analysis model; at the ends only where None.  ``computed_at``: now
    where None.

    Raises IfcReadError where the model cannot be read, IfcWriteError where the target cannot be
    written.
    """
    tell = progress or _silent
    moment = computed_at or datetime.now(UTC)
    source = Path(source_path)
    with atomic.writing_to(target_path) as target, collector_paused():
        guard = _Guard(source, target)
        stored = read_container(source)
        job = Posting(outcome, only, stations, moment, tell, analysis_model=analysis_model)
        job.prepare(stored, source.name)
        content = stored.packed(job.parts(), way_back=True)
        atomic.replace_file(target, content, before=guard.check)
    tell("Posting", 1.0)
    return job.report()


def remove(source_path: str | Path, target_path: str | Path) -> RemoveReport:
    """Write a copy of a model without anything of ours; the same path twice replaces it.

    Raises IfcReadError where the model cannot be read, IfcWriteError where the target cannot be
    written.
    """
    source = Path(source_path)
    with atomic.writing_to(target_path) as target:
        guard = _Guard(source, target)
        stored = read_container(source)
        base, count, path = clearing.removed(stored.text)
        content, whole = stored.restored(base)
        atomic.replace_file(target, [content], before=guard.check)
    return RemoveReport(count, path, packed_anew=not whole)


class _Guard:
    """Sees that a model written in place is not changed by others meanwhile."""

    def __init__(self, source: Path, target: Path) -> None:
        self._source = source
        try:
            self._in_place = os.path.samefile(source, target)
        except OSError:
            self._in_place = False
        self._before = self._state()

    def check(self) -> None:
        if self._in_place and self._state() != self._before:
            raise IfcWriteError(
                f"'{self._source.name}' was changed by another program while results were written "
                f"down; nothing was written. Run again."
            )

    def _state(self) -> tuple[int, int, int] | None:
        try:
            status = os.stat(self._source)
        except OSError:
            return None
        return status.st_ino, status.st_size, status.st_mtime_ns


def _silent(_: str, __: float) -> None:
    pass
