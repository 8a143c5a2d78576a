"""Reactions followed down columns and walls: nothing is lost between the roof and the ground."""

from pathlib import Path

import pytest

from analysis_core import pipeline
from analysis_core.building import Building, Carrier
from analysis_core.job.reader import load, parse
from analysis_core.solving.stacks import standing_elements

SAMPLES = Path(__file__).resolve().parents[1] / "sample_models"


@pytest.fixture(scope="module")
def outcome():
    job = load(SAMPLES / "quarry_lane.yaml")
    return pipeline.run(SAMPLES / "quarry_lane_physical_ifc4.ifc", job)


def ground(outcome):
    """Sums by case of the elements that stand on nothing."""
    sums = {}
    for each in outcome.received:
        if each.element.on is None:
            for case, value in each.total.items():
                sums[case] = sums.get(case, 0.0) + value
    return sums


def test_what_was_put_on_the_building_arrives_at_the_ground(outcome):
    """By hand from the job file: intensities times lengths, axis to axis, and the point force."""
    floor, balcony, joist, roof = 19.2, 1.8, 6.4, 12.8
    finishes = 9e3 * floor + 14e3 * (floor + balcony) + 7.5e3 * floor + 4 * 6.2e3 * joist
    finishes += 4 * 2.4e3 * roof + 3.5e3 * balcony / 2
    offices = 8e3 * floor + 13e3 * (floor + balcony) + 6.5e3 * floor + 4 * 6.6e3 * joist + 18e3

    sums = ground(outcome)

    assert sums["Finishes"] == pytest.approx(finishes, rel=1e-9)
    assert sums["Offices"] == pytest.approx(offices, rel=1e-9)
    assert sums["Snow"] == pytest.approx(4 * 3.1e3 * roof, rel=1e-9)


def test_a_footing_carries_what_its_column_carries_and_that_what_stands_on_it(outcome):
    by_name = {each.element.name: each for each in outcome.received}
    upper, lower, footing = (by_name[n] for n in ("C-B2-1", "C-B2", "F-B2"))

    for case, value in lower.total.items():
        assert value == pytest.approx(lower.lines[case] + upper.total[case])
        assert footing.total[case] == pytest.approx(value)
    assert by_name["C-A3-1"].element.on == by_name["W-A"].element.global_id


def test_area_loads_arrive_at_the_ground_within_a_thousandth():
    text = (
        "cases: [{name: Q, nature: imposed, category: B}]\n"
        "area_actions: [{case: Q, on: {class: IfcSlab}, load: 3 kN/m2}]\n"
    )
    outcome = pipeline.run(SAMPLES / "quarry_lane_physical_ifc4.ifc", parse(text))
    stair = 2.4 * 2.8
    area = 19.2 * 11.6 - stair

    assert ground(outcome)["Q"] == pytest.approx(3e3 * area, rel=1e-3)


def test_an_element_stands_on_the_nearest_below_it_and_not_on_one_aside():
    def column(name, x, bottom, top):
        half = 0.15
        corners = ((x - half, -half), (x + half, -half), (x + half, half), (x - half, half))
        return Carrier(name, name, "IfcColumn", bottom, top, corners)

    found = standing_elements(
        Building(
            "physical", "IFC4",
            carriers=(
                column("low", 0.0, 0.0, 3.0), column("middle", 0.0, 3.2, 6.0),
                column("top", 0.1, 6.0, 9.0), column("aside", 1.0, 3.2, 6.0),
                column("beside", 0.0, 0.1, 3.1),
            ),
        )
    )  # fmt: skip

    on = {s.name: s.on for s in found}
    assert on == {"top": "middle", "middle": "beside", "aside": None, "low": None, "beside": None}


def test_an_element_of_absurd_extent_is_no_burden_and_still_carries():
    def box(name, ifc_class, half, bottom, top):
        corners = ((-half, -half), (half, -half), (half, half), (-half, half))
        return Carrier(name, name, ifc_class, bottom, top, corners)

    found = standing_elements(
        Building(
            "physical", "IFC4",
            carriers=(
                box("column", "IfcColumn", 0.2, 0.0, 3.0), box("raft", "IfcFooting", 5e7, -1.0, 0.0)
            ),
        )
    )  # fmt: skip

    assert {s.name: s.on for s in found} == {"column": "raft", "raft": None}
