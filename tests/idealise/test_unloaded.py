"""What a physical model shows but does not load must not pass for counted."""

from __future__ import annotations

from dataclasses import replace

import pytest
from building_makers import finding, slugs
from physical_makers import beam, column, house

from analysis_core.building import Area, Building
from analysis_core.idealise import idealise
from analysis_core.settings import (
    ActionSetting,
    AreaActionSetting,
    CaseSetting,
    Selector,
    Settings,
)

OUTLINE = ((0.0, -2.0), (6.0, -2.0), (6.0, 2.0), (0.0, 2.0))
CASES = (CaseSetting("G", "permanent"), CaseSetting("Q", "imposed"))


def floor(storey: str = "1") -> Building:
    """A beam on two columns with a slab on it."""
    columns = [column(f"C{x}", x, 0.0, 0.0, 2.8) for x in (0.0, 6.0)]
    slab = Area("S", "S", "IfcSlab", 3.2, 3.4, OUTLINE, storey=storey)
    building = house([beam("B", (0.0, 0.0, 3.0), (6.0, 0.0, 3.0), storey="1")], columns)
    return replace(building, areas=(slab,))


def loaded(case: str) -> Settings:
    return Settings(
        cases=CASES,
        area_actions=(AreaActionSetting(case, Selector(ifc_class="IfcSlab"), 2e3),),
    )


def test_a_model_without_loads_is_said_to_carry_itself_alone():
    found = idealise(floor(), Settings())

    assert finding(found, "only-self-weight").severity == "warning"
    assert finding(found, "slab-weight-left-out").elements == ("S",)


def test_imposed_load_on_a_slab_does_not_stand_for_its_weight():
    found = idealise(floor(), loaded("Q"))

    assert "only-self-weight" not in slugs(found)
    assert finding(found, "slab-weight-left-out").severity == "warning"


def test_permanent_load_on_a_slab_is_taken_for_its_weight():
    assert not set(slugs(idealise(floor(), loaded("g")))) & {
        "only-self-weight",
        "slab-weight-left-out",
    }


def test_permanent_load_on_beams_makes_it_a_note():
    action = ActionSetting("G", Selector(ifc_class="IfcBeam"), "uniform", (9e3,))
    found = idealise(floor(), Settings(cases=CASES, actions=(action,)))

    assert finding(found, "slab-weight-left-out").severity == "note"


@pytest.mark.parametrize("storey", ["ground", "1"])
def test_slabs_of_storeys_without_lines_are_not_named(storey):
    found = idealise(floor(storey), Settings())

    assert ("slab-weight-left-out" in slugs(found)) == (storey == "1")
