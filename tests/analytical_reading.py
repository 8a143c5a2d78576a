"""What the tests of the analytical reader share."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from ifc_makers import AnalysisFile, Model

from analysis_core.building import Building
from analysis_core.findings import Finding
from analysis_core.ifc.analytical.reader import read_analytical
from analysis_core.ifc.source import open_model
from analysis_core.settings import Settings

SCHEMAS = ("IFC2X3", "IFC4", "IFC4X3")


def read(
    made: AnalysisFile | Model, folder: Path, *, settings: Settings | None = None, **options: Any
) -> Building:
    """Write a model, open the file and read it."""
    if isinstance(made, Model):
        made = AnalysisFile(made, **options)
    source = open_model(made.write(folder / "model.ifc"))
    assert source.findings == ()
    return read_analytical(source, settings)


def finding(building: Building, slug: str) -> Finding:
    """Return the one finding with this slug."""
    (found,) = [f for f in building.findings if f.slug == slug]
    return found


def slugs(building: Building) -> set[str]:
    """Return the slugs of all findings."""
    return {f.slug for f in building.findings}


def by_name(items: Any) -> dict[str, Any]:
    """Return items by their names."""
    return {item.name: item for item in items}
