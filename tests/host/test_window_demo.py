"""The workbench in a real window, shown an outcome whose numbers are known."""

import pytest

pytestmark = pytest.mark.host


def test_lines_and_diagrams_of_an_outcome_are_seen(in_freecad):
    found = in_freecad("scenes_demo:draw")

    assert found["shown"] == 2
    (_, _, lowest), (right, _, _) = found["extent"]
    assert lowest > 1000.0  # nothing is left at the origin: the lines lie 3.5 m up
    assert right < 11_000.0
    assert found["line"] > 300  # pixels of a 1000 × 700 picture
    assert found["sagging"] > 1000
    assert found["hogging"] > 300
