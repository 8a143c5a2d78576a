"""The lightest section for lines, from a table."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING

from analysis_core.errors import JobError
from analysis_core.findings import Finding
from analysis_core.model import LineModel
from analysis_core.pipeline.progress import Progress, silent
from analysis_core.pipeline.reading import Survey, check_marks, stock, survey
from analysis_core.pipeline.solving import solve
from analysis_core.results import Outcome
from analysis_core.settings import Settings
from analysis_core.solving.lines import Memory

if TYPE_CHECKING:
    from analysis_core.checking.choosing import Choice
    from analysis_core.checking.offers import Offer
    from analysis_core.ifc.updating.stock import Stock

# Lines whose results are kept while candidates are tried.
_KEPT = 2000


def lightest(
    path: str | Path,
    table: str,
    settings: Settings | None = None,
    *,
    marks: Sequence[str] = (),
    alike: bool = False,
    only: Sequence[str] = (),
    progress: Progress | None = None,
) -> tuple[list[Choice], tuple[Finding, ...]]:
    """Return the lightest section for lines, from a table, and what was noticed of the table.

    ``table``: "model" for the profiles of the model, "job" for the section table of the job file,
    or a file with one (.csv, .yaml; also a list of profiles without a head).  ``only``: patterns
    of names or categories to choose among.  ``marks``: the lines, each by itself or, if ``alike``,
    with all of its section and material; every kind of lines where empty.  Nothing is written.
    Raises IfcReadError, JobError.
    """
    settings = settings or Settings()
    known = stock(path, settings)
    if table not in ("model", "job"):
        from analysis_core.job.reader import with_section_tables

        settings = with_section_tables(settings, [Path(table)])
    found = survey(path, settings, progress=progress)
    offer = offered(known, settings, table, only=only)
    where = {"model": f"'{found.file}'", "job": "The section table of the job file"}
    _check_offer(offer, where.get(table, f"'{table}'"), only)
    told = (*settings.section_table_findings, *offer.findings)
    choices = lightest_of(
        found, settings, offer, marks=marks, alike=alike, strict=not only, progress=progress
    )
    return choices, told


def offered(known: Stock, settings: Settings, table: str, *, only: Sequence[str] = ()) -> Offer:
    """Return the sections to choose from: of the model ("model"), or of the section table.

    ``only``: patterns of names or categories.  Raises JobError.
    """
    from analysis_core.checking import offers
    from analysis_core.ifc.updating.stock import table_profile

    if table == "model":
        found = offers.of_model(known)
        return replace(found, candidates=tuple(offers.only(found.candidates, only)))
    return offers.of_table(known, settings, table_profile, only)


def lightest_of(
    found: Survey,
    settings: Settings,
    offer: Offer,
    *,
    marks: Sequence[str] = (),
    alike: bool = False,
    strict: bool = True,
    progress: Progress | None = None,
) -> list[Choice]:
    """Return the lightest section on offer for lines of a survey; see ``lightest``.

    ``strict``: leave out what is not made of the material of a line, as names and shapes tell.
    Raises JobError, and whatever ``progress`` raises.
    """
    from analysis_core.checking import choosing

    check_marks(found.model, marks)
    memory = Memory()
    most = _KEPT + 4 * len(found.model.lines)

    def solved(model: LineModel) -> Outcome:
        if len(memory.kept) > most:  # hardly a line of one candidate comes back with another
            memory.kept.clear()
        return solve(replace(found, model=model, standing=()), settings, memory=memory)

    groups = choosing.kinds(found.model, marks, alike=alike)
    choices = choosing.choose_lightest(
        found.model, settings, offer.candidates, groups, solved,
        strict=strict, progress=progress or silent,
    )  # fmt: skip
    rest = choosing.of_no_kind(found.model) if not marks else None
    return choices if rest is None else [*choices, rest]


def _check_offer(offer: Offer, where: str, only: Sequence[str]) -> None:
    if not offer.candidates:
        which = f" that fits {', '.join(repr(p) for p in only)}" if only else ""
        raise JobError(f"{where} holds no section{which} to choose from.")
