"""The document object and the add-on's description, in FreeCAD without a window."""

import tomllib
from pathlib import Path

import pytest

pytestmark = pytest.mark.host
ROOT = Path(__file__).resolve().parents[2]


def test_a_saved_document_keeps_the_lines_and_their_diagram(in_freecad):
    kept = in_freecad("scenes_document:keep", window=False)

    assert kept["proxy"] == "freecad.spanledger.document.BeamLines"  # a file format: never moves
    assert kept["label"] == "demo.ifc"
    assert kept["marks"] == ["L1", "L2"]
    assert kept["states"] == ["balanced", "stale"]
    assert kept["elements"] == ["GID-L1-0", "GID-L1-1", "GID-L2-0"]
    assert kept["ends"][1] == [[6000.0, 0.0, 3500.0], [10000.0, 0.0, 3500.0]]
    assert kept["lowest"] == pytest.approx(-42.0e3)  # three-moment equation, see demo.py
    assert kept["ordinates"] == 3 * kept["stations"]
    assert kept["shown"] == "Moment, strength envelope"


def test_freecad_reads_the_description_of_the_add_on(in_freecad):
    found = in_freecad("scenes_document:describe", window=False)

    project = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))["project"]
    assert found["name"] == "Spanledger"
    assert found["version"] == project["version"]
    assert found["supported"]
    assert found["class"] == "SpanledgerWorkbench"
    assert found["icons"] == [True, True]
    assert found["licence"] == [True]
