"""The whole road on the sample building, against statics done by other means.

The same building is stated physically and analytically, in three schemas and three length units;
all must lead to the same effects.  What they must be is computed here by Clapeyron's theorem of
three moments (E. Clapeyron, 1857), solved with NumPy, for rows that carry nothing secondary.
"""

from dataclasses import replace
from functools import cache
from pathlib import Path

import ifcopenshell
import numpy as np
import pytest

from analysis_core import pipeline
from analysis_core.job.reader import load
from analysis_core.settings import Settings

SAMPLES = Path(__file__).resolve().parents[1] / "sample_models"
JOB = load(SAMPLES / "quarry_lane.yaml")
PHYSICAL = ["physical_ifc2x3", "physical_ifc4", "physical_ifc4x3", "physical_ifc4_inch"]
ANALYTICAL = ["analytical_ifc4", "analytical_ifc4x3", "analytical_ifc4_feet", "both_ifc4"]

SPANS = (6.0, 7.2, 6.0)
SELF_WEIGHT = 0.3 * 0.5 * 2500.0 * 9.80665
FINISHES, OFFICES, HOIST = 7.5e3, 6.5e3, 18e3


@cache
def run(name, stated="job"):
    settings = JOB if stated == "job" else Settings()
    return pipeline.run(SAMPLES / f"quarry_lane_{name}.ifc", settings)


def row_three(outcome):
    """The line of beam row 3, which carries no joists."""
    names = outcome.model.names
    return next(
        r for r in outcome.lines if {names.get(e) for e in r.line.elements} >= {"B3-AB", "B3-BC"}
    )


def three_moments(intensities, point=0.0):
    """Support moments at the two inner bearings; ``point`` in the middle of the second span."""
    a, b, c = SPANS
    w1, w2, w3 = intensities
    right = [
        -(w1 * a**3 + w2 * b**3) / 4 - 3 * point * b**2 / 8,
        -(w2 * b**3 + w3 * c**3) / 4 - 3 * point * b**2 / 8,
    ]
    return np.linalg.solve([[2 * (a + b), b], [b, 2 * (b + c)]], right)


@pytest.mark.parametrize("name", PHYSICAL)
def test_support_moments_of_row_three_are_those_of_three_moments(name):
    result = row_three(run(name))
    solution = result.solution
    cases = dict(zip(solution.cases, solution.end_moments, strict=True))

    for case, intensity, point in (
        ("Self weight", SELF_WEIGHT, 0.0),
        ("Finishes", FINISHES, 0.0),
        ("Offices", OFFICES, HOIST),
    ):
        expected = three_moments([intensity] * 3, point)
        # Diagram moment at the end of spans 1 and 2 is minus the end moment.
        assert -cases[case][:2, 1] == pytest.approx(expected, rel=1e-9), case


def test_the_governing_hogging_moment_is_found_over_all_arrangements():
    """Strength by EN 1990 (6.10): 1.35 permanent, 1.5 offices where they are adverse."""
    permanent = three_moments([1.35 * (SELF_WEIGHT + FINISHES)] * 3)[0]
    parts = [
        1.5 * three_moments([OFFICES if i == k else 0.0 for i in range(3)], HOIST * (k == 1))[0]
        for k in range(3)
    ]

    member = row_three(run("physical_ifc4")).envelopes["strength"].members[0]

    assert member.hogging.value == pytest.approx(
        permanent + sum(p for p in parts if p < 0.0), rel=1e-9
    )
    assert "spans 1, 2" in member.hogging.source


@pytest.mark.parametrize("name", PHYSICAL[1:])
def test_schema_and_length_unit_do_not_matter_to_a_physical_model(name):
    assert governing(run(name)) == pytest.approx(governing(run(PHYSICAL[0])), rel=1e-7)


@pytest.mark.parametrize("name", ANALYTICAL)
def test_the_analysis_model_leads_to_the_same_effects_as_the_building_itself(name):
    analytical = governing(run(name, "nothing"))
    physical = governing(run("physical_ifc4"))

    # The analysis model holds every member at its axis, the building by its faces: the joists
    # are 0.3 m shorter as drawn and are carried at the axes of the beams all the same.
    assert analytical == pytest.approx(physical, rel=1e-6)


def governing(outcome):
    """Hogging, sagging and largest reaction of every line, by the names of its elements."""
    found = {}
    for result in outcome.lines:
        envelope = result.envelopes["strength"]
        names = sorted({outcome.model.names[e] for e in result.line.elements})
        found[f"{names} hogging"] = min(m.hogging.value for m in envelope.members)
        found[f"{names} sagging"] = max(m.sagging.value for m in envelope.members)
        found[f"{names} reaction"] = max(r.vertical_max.value for r in envelope.reactions)
    return found


@pytest.mark.parametrize("name", [*PHYSICAL, *ANALYTICAL, "analytical_ifc2x3", "both_ifc2x3"])
def test_posting_writes_what_was_found_and_posting_again_adds_nothing(name, tmp_path):
    source = SAMPLES / f"quarry_lane_{name}.ifc"
    outcome = run(name)
    once, twice = tmp_path / "once.ifc", tmp_path / "twice.ifc"

    pipeline.post(outcome, source, once)
    pipeline.post(outcome, once, twice)

    posted = ifcopenshell.open(once)
    assert len(list(ifcopenshell.open(twice))) == len(list(posted))
    result = row_three(outcome)
    element = posted.by_guid(result.line.members[1].element)
    sets = {
        r.RelatingPropertyDefinition.Name: r.RelatingPropertyDefinition
        for r in element.IsDefinedBy
        if r.is_a("IfcRelDefinesByProperties")
    }
    effects = {p.Name: p for p in sets["Spanledger_Effects"].HasProperties}
    assert effects["LineMark"].NominalValue.wrappedValue == result.line.mark
    assert effects["HoggingMoment"].NominalValue.is_a("IfcTorqueMeasure")
    assert effects["HoggingMoment"].NominalValue.wrappedValue < 0.0


def test_every_line_verifies_itself():
    for name in ("physical_ifc4", "analytical_ifc4"):
        for result in run(name).lines:
            check = result.verification
            assert check.joint_residual < 1e-6, result.line.mark  # N·m
            assert check.continuity_residual < 1e-12, result.line.mark
            assert check.independent_check < 1e-10, result.line.mark


def test_an_analysis_model_that_we_posted_does_not_stand_in_for_the_building(tmp_path):
    source = SAMPLES / "quarry_lane_physical_ifc4.ifc"
    posted = tmp_path / "posted.ifc"
    first = run("physical_ifc4")
    pipeline.post(first, source, posted, analysis_model=True)

    again = pipeline.run(posted, JOB)
    analytical = pipeline.run(
        posted, replace(Settings(), analysis=replace(Settings().analysis, route="analytical"))
    )

    assert again.model.names.keys() == first.model.names.keys()
    assert governing(again) == pytest.approx(governing(first), rel=1e-12)
    hogging = [
        min(m.hogging.value for m in r.envelopes["strength"].members)
        for r in (row_three(first), *analytical.lines)
    ]
    assert any(other == pytest.approx(hogging[0], rel=1e-6) for other in hogging[1:])
