"""Live-load reduction by area: only where asked for, by the rule of the rule set."""

import math
from pathlib import Path

import pytest

from analysis_core import pipeline
from analysis_core.job.reader import parse

MODEL = Path(__file__).resolve().parents[1] / "sample_models" / "quarry_lane_physical_ifc4.ifc"
JOB = """
rules: {{set: {rules}, live_load_reduction: {asked}}}
cases: [{{name: Q, nature: imposed, category: {category}}}]
area_actions: [{{case: Q, on: {{class: IfcSlab}}, load: 3 kN/m2}}]
"""


def run(rules, category, asked="true"):
    return pipeline.run(MODEL, parse(JOB.format(rules=rules, category=category, asked=asked)))


def own_load(outcome, mark):
    """Downward force of the area actions on a line, without what others hand down, N."""
    (line,) = [x for x in outcome.model.lines if x.mark == mark]
    return sum(
        sum(c * (a.end - a.start) ** (i + 1) / (i + 1) for i, c in enumerate(a.transverse))
        for a in line.actions
        if a.case == "Q"
    )


def test_nothing_is_reduced_unless_it_is_asked_for():
    plain = run("en-1990", "B", asked="false")

    assert not [f for f in plain.findings if f.slug == "reduced-by-area"]


def test_en_1991_reduces_by_the_area_that_the_line_carries():
    """EN 1991-1-1, (6.1): 5/7 psi0 + A0/A with psi0 = 0.7 and A0 = 10 m²."""
    area = own_load(run("en-1990", "B", asked="false"), "FF-02") / 3e3
    factor = 5 / 7 * 0.7 + 10 / area

    assert own_load(run("en-1990", "B"), "FF-02") == pytest.approx(3e3 * area * factor, rel=1e-9)


def test_asce_7_reduces_by_the_influence_area():
    """ASCE 7, 4.7.2 in SI: 0.25 + 4.57/sqrt(K_LL A_T), K_LL = 2 for beams; small areas not."""
    plain = run("asce-7-16", "office", asked="false")
    area = own_load(plain, "FF-02") / 3e3
    reduced = run("asce-7-16", "office")

    factor = 0.25 + 4.57 / math.sqrt(2 * area)
    assert own_load(reduced, "FF-02") == pytest.approx(3e3 * area * factor, rel=1e-9)
    assert own_load(reduced, "FF-04") == pytest.approx(own_load(plain, "FF-04"))


def test_without_area_actions_the_wish_is_answered():
    outcome = pipeline.run(MODEL, parse("rules: {live_load_reduction: true}"))

    (finding,) = [f for f in outcome.findings if f.slug == "no-area-to-reduce-by"]
    assert "area_actions" in finding.message
