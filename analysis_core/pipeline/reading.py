"""A file in, and its lines idealised."""

from __future__ import annotations

import difflib
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import TYPE_CHECKING

from analysis_core import idealise
from analysis_core.building import Building
from analysis_core.checking.slab_restraint import held_by_slabs
from analysis_core.errors import JobError
from analysis_core.findings import Finding
from analysis_core.ifc import source as ifc_source
from analysis_core.ifc.posting.posted import Posted, known_marks, read_posted
from analysis_core.model import LineModel
from analysis_core.pipeline.progress import Progress, silent
from analysis_core.settings import Settings
from analysis_core.solving.stacks import Standing, standing_elements

if TYPE_CHECKING:
    from analysis_core.ifc.updating.stock import Stock


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
    stock: Stock | None = None
    """Profiles and materials of the file, where they were asked for."""

    def serves(self, settings: Settings) -> bool:
        """Whether the file need not be read again for other settings."""
        if settings.members and self.stock is None:
            return False
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
    tell = progress or silent
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
        _stock(source, settings) if settings.members else None,
    )


def stock(path: str | Path, settings: Settings | None = None) -> Stock:
    """Return the profiles and materials that a file has.  Raises IfcReadError."""
    return _stock(ifc_source.open_model(path), settings or Settings())


def _stock(source: ifc_source.Source, settings: Settings) -> Stock:
    from analysis_core.ifc.updating.stock import read_stock

    return read_stock(source, settings)


def idealised(reading: Reading, settings: Settings, *, only: Sequence[str] = ()) -> Survey:
    """Idealise what was read; lines keep the marks they were posted with.  Raises JobError."""
    building, told = reading.building, settings.section_table_findings
    if settings.members:
        from analysis_core.given_members import with_given

        assert reading.stock is not None  # it was read for these settings
        building, changed = with_given(building, reading.stock, settings)
        told = (*told, *changed)
    model = idealise.idealise(building, settings)
    findings = tuple(dict.fromkeys((*reading.findings, *told, *model.findings)))
    model = replace(
        model,
        findings=findings,
        names=_names(building),
        held_by=held_by_slabs(building),
        ties=building.ties,
    )
    check_marks(model, only)
    return Survey(
        reading.file,
        reading.schema,
        reading.fingerprint,
        model,
        findings,
        building.route,
        counts=building.counts,
        standing=standing_elements(building),
        posted=reading.posted,
    )


def with_marks(reading: Reading, marks: Mapping[str, str]) -> Reading:
    return replace(reading, building=replace(reading.building, known_marks=marks))


def check_marks(model: LineModel, only: Sequence[str]) -> None:
    marks = [line.mark for line in model.lines]
    for mark in only:
        if mark not in marks:
            near = difflib.get_close_matches(mark, marks, n=1, cutoff=0.0)
            hint = f"; the nearest is '{near[0]}'" if near else "; it has no lines"
            raise JobError(f"The model has no line '{mark}'{hint}.")


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
        "supports", "releases", "sections", "limits", "checks", "members", "section_table",
        "section_table_files", "section_table_findings",
    )  # fmt: skip
    return replace(settings, **{name: getattr(blank, name) for name in later})


def _names(building: Building) -> dict[str, str]:
    names = {m.global_id: m.name for m in building.members}
    names |= {c.global_id: c.name for c in building.carriers}
    names |= {c.global_id: c.name for c in building.connections}
    return {key: name for key, name in names.items() if name}
