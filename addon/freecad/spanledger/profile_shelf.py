"""What the members of an open model can be given, from the model, the job file and the host.

Knows neither Qt nor FreeCAD; everything here may run off the interface thread.
"""

from __future__ import annotations

from collections.abc import Callable, Collection, Iterable, Mapping, Sequence
from dataclasses import dataclass, field, replace
from fnmatch import fnmatchcase
from pathlib import Path
from typing import TYPE_CHECKING

from analysis_core.checking.offers import JOB, MODEL, Candidate, Offer
from analysis_core.findings import Finding
from analysis_core.model import Material
from analysis_core.settings import Settings, TableSection

from .opened_model import OpenedModel
from .present.profiles import HOST

if TYPE_CHECKING:
    from analysis_core.checking.choosing import Choice
    from analysis_core.ifc.updating.stock import Stock

Progress = Callable[[str, float], None]


@dataclass(frozen=True, slots=True, eq=False)
class Shelf:
    """Sections by where they come from, and the materials by name."""

    offers: Mapping[str, Offer]
    materials: Mapping[str, Material]
    rows: Mapping[str, TableSection] = field(default_factory=dict)
    """Dimensions of what only the host has: a job file that uses it must state them."""
    findings: tuple[Finding, ...] = ()

    def every(self) -> list[Candidate]:
        """Return each name once: as the model has it, else the job file, else the host."""
        found: dict[str, Candidate] = {}
        for source in (MODEL, JOB, HOST):
            for candidate in self.offers[source].candidates:
                known = found.setdefault(candidate.name, candidate)
                if known is not candidate:
                    kinds = dict.fromkeys((*known.categories, *candidate.categories))
                    found[known.name] = replace(known, categories=tuple(kinds))
        return list(found.values())

    def made_of(self, material: str) -> list[Candidate]:
        """Return those of ``every`` that can be made of a material, as names and shapes tell."""
        from analysis_core.checking.offers import made_of

        known = self.materials.get(material)
        return self.every() if known is None else made_of(self.every(), known)[0]


class ShelfKeeper:
    """Fills the shelf of a model; the host's sections are worked out once for a model."""

    def __init__(self) -> None:
        self._host: tuple[object, Offer, Settings] | None = None

    def fill(
        self, opened: OpenedModel, settings: Settings, lists: Sequence[Path], progress: Progress
    ) -> Shelf:
        """Return what there is to choose from.  Raises IfcReadError, JobError."""
        from analysis_core import pipeline
        from analysis_core.ifc.updating.stock import stated_material

        stock = opened.stocked(settings, progress).stock
        assert stock is not None  # that is what was asked for
        progress("Reading", 0.8)
        host, tables = self._of_host(opened, stock, lists)
        offers = {
            MODEL: pipeline.offered(stock, settings, "model"),
            JOB: pipeline.offered(stock, settings, "job"),
            HOST: host,
        }
        known = {c.name for source in (MODEL, JOB) for c in offers[source].candidates}
        stated = {
            m.name: stated_material(m, settings)
            for m in settings.materials
            if not set(m.name) & set("*?[")
        }
        return Shelf(
            offers,
            {**stated, **stock.materials},
            {row.name: row for row in tables.section_table if row.name not in known},
            (*tables.section_table_findings, *host.findings),
        )

    def _of_host(
        self, opened: OpenedModel, stock: Stock, lists: Sequence[Path]
    ) -> tuple[Offer, Settings]:
        from analysis_core import pipeline
        from analysis_core.job.reader import with_section_tables

        key = (opened.path, opened.stamp, [(path, path.stat().st_mtime_ns) for path in lists])
        if self._host is None or self._host[0] != key:
            tables = with_section_tables(Settings(), lists)
            offer = pipeline.offered(stock, tables, "job")
            named = (c if c.origin == MODEL else replace(c, origin=HOST) for c in offer.candidates)
            self._host = (key, replace(offer, candidates=tuple(named)), tables)
        return self._host[1], self._host[2]


def narrowed(
    candidates: Iterable[Candidate], kinds: Collection[str], names: Sequence[str]
) -> list[Candidate]:
    """Return the candidates of some kinds and names (with wildcards); of all where empty."""
    patterns = [name.casefold() for name in names]
    return [
        c
        for c in candidates
        if (not kinds or not set(kinds).isdisjoint(c.categories))
        and (not patterns or any(fnmatchcase(c.name.casefold(), p) for p in patterns))
    ]


def lightest(
    opened: OpenedModel,
    settings: Settings,
    candidates: Sequence[Candidate],
    marks: Sequence[str],
    progress: Progress,
    *,
    alike: bool,
    strict: bool,
) -> list[Choice]:
    """Return the lightest of some sections for lines; see ``pipeline.lightest_of``."""
    from analysis_core import pipeline

    reading = opened.stocked(settings, progress)
    found = pipeline.idealised(reading, settings)
    return pipeline.lightest_of(
        found, settings, Offer(tuple(candidates)), marks=marks, alike=alike, strict=strict,
        progress=progress,
    )  # fmt: skip
