"""A bearing that is pulled up must be tied down, and the engineer must be told."""

from __future__ import annotations

from dataclasses import replace

import pytest
from ifc_makers.analysis_file import AnalysisFile
from ifc_makers.description import Case, SpreadLoad, continuous_beam

from analysis_core import pipeline
from analysis_core.solving.uplift import uplift

W = 10e3


def outcome(tmp_path, *spans):
    """A continuous beam under its uniform permanent load."""
    loads = [SpreadLoad(f"g{i}", "G", f"M{i + 1}", ((0.0, 0.0, -W),)) for i in range(len(spans))]
    model = continuous_beam(spans, actions=loads, cases=[Case("G", "PERMANENT_G", "DEAD_LOAD_G")])
    return pipeline.run(AnalysisFile(model).write(tmp_path / "model.ifc"))


def test_a_short_end_span_pulls_at_its_bearing(tmp_path):
    """Clapeyron: M = w (L1³ + L2³) / (8 (L1 + L2)) = 6.5 w, end reaction w - M / 2 = -2.25 w."""
    found = outcome(tmp_path, 8.0, 2.0)

    (told,) = [f for f in found.findings if f.slug == "uplift"]
    assert (told.severity, told.line) == ("note", found.lines[0].line.mark)
    assert told.elements == (found.lines[0].line.joints[2].element,)
    assert f"joint 2 (J2) by {1.35 * 2.25 * W / 1e3:.3g} kN" in told.message


def test_spans_alike_pull_nowhere(tmp_path):
    assert "uplift" not in [f.slug for f in outcome(tmp_path, 5.0, 5.0).findings]


@pytest.mark.parametrize("element", ["wall", "member"])
def test_bearings_taken_by_rule_are_a_warning_and_joined_ends_are_not_named(tmp_path, element):
    (result,) = outcome(tmp_path, 8.0, 2.0).lines
    line = result.line
    own = line.members[0].element if element == "member" else "W-1"
    last = replace(line.joints[2], reason="end bears on it; taken as pinned by rule", element=own)
    ruled = replace(result, line=replace(line, joints=(*line.joints[:2], last)))

    assert [f.severity for f in uplift([ruled], {})] == ["warning"] * (element == "wall")
