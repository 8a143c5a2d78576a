"""Slugs of findings are stable: each that real and sample files bring up is listed."""

from pathlib import Path

import pytest

from analysis_core import pipeline
from analysis_core.errors import IfcReadError
from analysis_core.settings import Analysis, Settings

ROOT = Path(__file__).resolve().parents[1]
LISTED = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8")
FILES = [
    *sorted((ROOT / "sample_models").glob("*.ifc")),
    *sorted((ROOT.parent / "shared" / "ifc").glob("*/*.ifc*")),
]


@pytest.mark.parametrize("path", FILES, ids=lambda path: path.stem[:24])
@pytest.mark.parametrize("route", ["analytical", "physical"])
def test_every_slug_is_listed_in_the_contributors_guide(path, route):
    settings = Settings(analysis=Analysis(route=route))
    try:
        outcome = pipeline.run(path, settings)
    except IfcReadError:
        return
    missing = {f.slug for f in outcome.findings if f"`{f.slug}`" not in LISTED}
    assert missing == set()
