"""The lightest section for lines, from a table."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING

from analysis_core.ifc import source as ifc_source
from analysis_core.model import LineModel
from analysis_core.pipeline.progress import Progress
from analysis_core.pipeline.reading import check_marks, survey
from analysis_core.pipeline.solving import solve
from analysis_core.results import Outcome
from analysis_core.settings import Settings
from analysis_core.solving.lines import Memory

if TYPE_CHECKING:
    from analysis_core.checking.choosing import Choice


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
    check_marks(found.model, marks)
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
