"""Load cases and combinations: nesting, factors, natures; one bad file for each finding."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest
from analytical_reading import SCHEMAS, by_name, finding, read, slugs
from ifc_makers import (
    AnalysisFile,
    Case,
    Combination,
    MoveJoint,
    NodeLoad,
    PointLoad,
    SpreadLoad,
    Warmth,
    continuous_beam,
)

from analysis_core.ifc.analytical.groups import UNASSIGNED

LOAD = (0.0, 0.0, -1e3)


def beam(schema: str = "IFC4", **parts: Any) -> AnalysisFile:
    """One span with the action g in case G, and case Q with q."""
    given = {
        "cases": [Case("G"), Case("Q")],
        "actions": [
            SpreadLoad("g", "G", "M1", (LOAD,)),
            SpreadLoad("q", "Q", "M1", (LOAD,)),
        ],
    } | parts
    return AnalysisFile(continuous_beam([6.0], **given), schema=schema)


def group(made: AnalysisFile, name: str, kind: str, coefficient: float | None = None) -> Any:
    return made.rooted(
        "IfcStructuralLoadGroup", name, None, None, kind, "NOTDEFINED", "NOTDEFINED", coefficient
    )


def put(made: AnalysisFile, item: str, into: str, factor: float | None = None) -> None:
    values = ([made.by_name[item]], None, made.by_name[into])
    name = f"{item} into {into}"
    if factor is None:
        made.relate("IfcRelAssignsToGroup", name, *values)
    else:
        made.relate("IfcRelAssignsToGroupByFactor", name, *values, factor)


def take_out(made: AnalysisFile, item: str) -> None:
    for relation in made.file.by_type("IfcRelAssignsToGroup"):
        if [x.Name for x in relation.RelatedObjects] == [item]:
            made.file.remove(relation)


def forces(building: Any) -> dict[tuple[str, str], float]:
    """Return the vertical force of each action in each case, in kN/m downward."""
    return {(a.name, a.case): round(-a.forces[0][2] / 1e3, 9) for a in building.actions}


# -- factors ---------------------------------------------------------------------------------


@pytest.mark.parametrize("schema", SCHEMAS)
def test_coefficients_multiply_from_the_action_up_to_its_case(tmp_path: Path, schema: str) -> None:
    made = beam(schema, cases=[Case("G", coefficient=1.1, group="inner"), Case("Q")])
    made.by_name["inner"].Coefficient = 3.0
    building = read(made, tmp_path)
    assert forces(building) == {("g", "G"): 3.3, ("q", "Q"): 1.0}
    factors = [f.message for f in building.findings if f.slug == "load-factor"]
    assert len(factors) == 2
    assert any("coefficient 3;" in message for message in factors)


def test_coefficients_multiply_every_kind_of_action(tmp_path: Path) -> None:
    actions = [
        NodeLoad("n", "G", "J1", LOAD, (0.0, 5.0, 0.0)),
        MoveJoint("m", "G", "J1", (0.0, 0.0, -0.01), (0.0, 0.002, 0.0)),
        Warmth("t", "G", "M1", 10.0, 2.0, 4.0),
        PointLoad("p", "G", "M1", 1.0, LOAD, (0.0, 7.0, 0.0)),
    ]
    made = beam(cases=[Case("G", coefficient=3.0)], actions=actions)
    found = by_name(read(made, tmp_path).actions)
    assert (found["n"].force[2], found["n"].moment[1]) == (-3e3, 15.0)
    assert found["m"].displacement[2] == pytest.approx(-0.03)
    assert found["m"].rotation[1] == pytest.approx(0.006)
    assert (found["t"].constant, found["t"].difference_y, found["t"].difference_z) == (30, 6, 12)
    assert (found["p"].forces[0][2], found["p"].moments[0][1]) == (-3e3, 21.0)


def test_factors_on_relations_multiply_too_and_may_be_negative(tmp_path: Path) -> None:
    made = beam(combinations=[Combination("C", {"G": 1.35, "Q": -1.5}, coefficient=2.0)])
    building = read(made, tmp_path)
    assert building.combinations[0].factors == {"G": 2.7, "Q": -3.0}
    # A combination is made of factors; there is nothing to remark.
    assert slugs(building) == set()


def test_self_weight_is_not_multiplied_by_the_coefficient_of_its_case(tmp_path: Path) -> None:
    made = beam(cases=[Case("G", coefficient=1.5, self_weight=(0.0, 0.0, -1.0)), Case("Q")])
    building = read(made, tmp_path)
    assert by_name(building.cases)["G"].self_weight == (0.0, 0.0, -1.0)
    assert forces(building)["g", "G"] == 1.5


def test_an_action_in_two_cases_acts_in_both(tmp_path: Path) -> None:
    made = beam()
    put(made, "g", "Q")
    assert set(forces(read(made, tmp_path))) == {("g", "G"), ("g", "Q"), ("q", "Q")}


def test_a_group_in_two_cases_acts_in_both_with_the_factor_of_each(tmp_path: Path) -> None:
    made = beam()
    group(made, "shared", "LOAD_GROUP")
    take_out(made, "g")
    put(made, "g", "shared")
    put(made, "shared", "G", 2.0)
    put(made, "shared", "Q", 0.5)
    assert forces(read(made, tmp_path)) == {("g", "G"): 2.0, ("g", "Q"): 0.5, ("q", "Q"): 1.0}


def test_a_combination_of_combinations_multiplies_out(tmp_path: Path) -> None:
    made = beam(combinations=[Combination("inner", {"G": 1.2, "Q": 0.5})])
    made.by_name["outer"] = group(made, "outer", "LOAD_COMBINATION")
    made.by_name["outer"].Purpose = "SLS"
    put(made, "inner", "outer", 2.0)
    put(made, "G", "outer", 0.1)
    found = by_name(read(made, tmp_path).combinations)
    assert found["outer"].factors == pytest.approx({"G": 2.5, "Q": 1.0})
    assert found["inner"].factors == {"G": 1.2, "Q": 0.5}


def test_a_combination_group_of_ifc2x3_is_no_combination_of_its_own(tmp_path: Path) -> None:
    made = beam("IFC2X3", combinations=[Combination("C", {"G": 1.35, "Q": 1.5})])
    assert [c.name for c in read(made, tmp_path).combinations] == ["C"]


def test_a_zero_coefficient_is_a_warning(tmp_path: Path) -> None:
    made = beam(cases=[Case("G", coefficient=0.0), Case("Q")])
    building = read(made, tmp_path)
    assert forces(building)["g", "G"] == 0.0
    assert finding(building, "load-factor").severity == "warning"


# -- grouping that is out of the ordinary ----------------------------------------------------


def test_a_load_group_without_a_case_is_taken_as_one(tmp_path: Path) -> None:
    made = beam()
    take_out(made, "g")
    group(made, "loose", "LOAD_GROUP", 2.0)
    put(made, "g", "loose")
    building = read(made, tmp_path)
    assert forces(building)["g", "loose"] == 2.0
    assert finding(building, "group-as-case").elements == (made.by_name["loose"].GlobalId,)


@pytest.mark.parametrize("kind", ["USERDEFINED", "NOTDEFINED", "LOAD_GROUP"])
def test_of_nested_groups_without_a_case_the_outermost_is_the_case(
    tmp_path: Path, kind: str
) -> None:
    made = beam(combinations=[Combination("C", {"Q": 1.5})])
    take_out(made, "g")
    for name in ("outer", "inner"):
        group(made, name, kind if name == "outer" else "LOAD_GROUP")
    put(made, "g", "inner")
    put(made, "inner", "outer")
    put(made, "outer", "C", 0.9)
    building = read(made, tmp_path)
    assert forces(building)["g", "outer"] == 1.0
    assert building.combinations[0].factors == {"Q": 1.5, "outer": 0.9}


def test_an_undefined_group_of_cases_is_a_combination(tmp_path: Path) -> None:
    made = beam()
    made.by_name["all"] = group(made, "all", "NOTDEFINED")
    made.by_name["all"].Purpose = "ULS"
    put(made, "G", "all", 1.2)
    put(made, "Q", "all")
    (combination,) = read(made, tmp_path).combinations
    assert (combination.name, combination.factors) == ("all", {"G": 1.2, "Q": 1.0})


def test_plain_groups_between_are_passed_through(tmp_path: Path) -> None:
    made = beam()
    take_out(made, "g")
    made.rooted("IfcGroup", "plain")
    put(made, "g", "plain")
    put(made, "plain", "G")
    assert forces(read(made, tmp_path))["g", "G"] == 1.0


@pytest.mark.parametrize("size", [1, 2, 3])
def test_a_circle_of_groups_is_cut_with_a_finding(tmp_path: Path, size: int) -> None:
    made = beam()
    names = [f"ring {i}" for i in range(size)]
    for name in names:
        group(made, name, "LOAD_GROUP")
    for i, name in enumerate(names):
        put(made, name, names[(i + 1) % size])
    take_out(made, "g")
    put(made, "g", names[0])
    put(made, names[-1], "G")
    building = read(made, tmp_path)
    assert forces(building)["g", "G"] == 1.0
    found = finding(building, "group-cycle")
    assert set(found.elements) == {made.by_name[name].GlobalId for name in names}


def test_actions_directly_in_a_combination_get_a_case_of_their_own(tmp_path: Path) -> None:
    made = beam(combinations=[Combination("C", {"Q": 1.5}, coefficient=2.0)])
    take_out(made, "g")
    put(made, "g", "C", 0.5)
    building = read(made, tmp_path)
    (combination,) = building.combinations
    assert combination.factors == {"Q": 3.0, "C (own actions)": 2.0}
    assert forces(building)["g", "C (own actions)"] == 0.5
    assert finding(building, "action-in-combination").elements == (made.by_name["C"].GlobalId,)


def test_a_combination_of_nothing_but_actions_is_kept(tmp_path: Path) -> None:
    made = beam()
    take_out(made, "g")
    group(made, "ULS", "LOAD_COMBINATION")
    put(made, "g", "ULS")
    (combination,) = read(made, tmp_path).combinations
    assert combination.factors == {"ULS (own actions)": 1.0}


def test_an_empty_combination_is_left_out_with_a_finding(tmp_path: Path) -> None:
    made = beam(combinations=[Combination("C", {})])
    building = read(made, tmp_path)
    assert building.combinations == ()
    assert "empty-combination" in slugs(building)


@pytest.mark.parametrize("schema", SCHEMAS)
def test_actions_without_a_group_are_shown_in_a_case_of_their_own(
    tmp_path: Path, schema: str
) -> None:
    made = beam(schema)
    take_out(made, "g")
    building = read(made, tmp_path)
    assert forces(building)["g", UNASSIGNED] == 1.0
    assert by_name(building.cases)[UNASSIGNED].source == "default"
    assert finding(building, "action-without-case").elements == (made.by_name["g"].GlobalId,)


def test_cases_and_combinations_of_the_same_name_are_told_apart(tmp_path: Path) -> None:
    made = beam(combinations=[Combination("C", {"G": 1.0}), Combination("D", {"Q": 1.0})])
    made.by_name["Q"].Name = "g"
    made.by_name["G"].Name = "g"
    made.by_name["D"].Name = "C"
    building = read(made, tmp_path)
    assert [c.name for c in building.cases] == ["g", "g (2)"]
    assert [(c.name, c.factors) for c in building.combinations] == [
        ("C", {"g": 1.0}), ("C (2)", {"g (2)": 1.0})
    ]  # fmt: skip
    assert "case-renamed" in slugs(building)


def test_a_case_without_a_name_gets_one(tmp_path: Path) -> None:
    made = beam()
    made.by_name["G"].Name = None
    assert read(made, tmp_path).cases[0].name == f"Load case #{made.by_name['G'].id()}"


# -- natures and limit states ----------------------------------------------------------------


@pytest.mark.parametrize(
    ("action_type", "source", "nature", "category"),
    [
        ("PERMANENT_G", "DEAD_LOAD_G", "permanent", ""),
        ("PERMANENT_G", "COMPLETION_G1", "permanent", ""),
        ("VARIABLE_Q", "LIVE_LOAD_Q", "imposed", ""),
        ("VARIABLE_Q", "SNOW_S", "snow", ""),
        ("VARIABLE_Q", "WIND_W", "wind", ""),
        ("VARIABLE_Q", "TEMPERATURE_T", "temperature", ""),
        ("PERMANENT_G", "SETTLEMENT_U", "settlement", ""),
        ("EXTRAORDINARY_A", "EARTHQUAKE_E", "other", "seismic"),
        ("EXTRAORDINARY_A", "IMPACT", "other", "accidental"),
        ("PERMANENT_G", "NOTDEFINED", "permanent", ""),
        ("VARIABLE_Q", "NOTDEFINED", "imposed", ""),
        ("EXTRAORDINARY_A", "USERDEFINED", "other", "accidental"),
        ("NOTDEFINED", "NOTDEFINED", "other", ""),
    ],
)
def test_natures_come_from_the_source_and_else_from_the_type(
    tmp_path: Path, action_type: str, source: str, nature: str, category: str
) -> None:
    made = beam(cases=[Case("G", action_type, source), Case("Q")])
    case = read(made, tmp_path).cases[0]
    assert (case.nature, case.category) == (nature, category)
    stated = source if source not in ("NOTDEFINED", "USERDEFINED") else action_type
    assert case.source.endswith(stated if stated != "NOTDEFINED" else "")
    assert bool(case.source) == (stated != "NOTDEFINED")


@pytest.mark.parametrize(
    ("name", "purpose", "expected", "assumed"),
    [
        ("C1", "ULS", "strength", False),
        ("C1", "SLS", "serviceability", False),
        ("C1", "Serviceability, quasi-permanent", "serviceability", False),
        ("SLS 3", None, "serviceability", False),
        ("SLS 3", "ULS", "strength", False),
        ("Accidental A", None, "strength", False),
        ("C1", None, "strength", True),
    ],
)
def test_limit_states_come_from_the_purpose_and_else_from_the_name(
    tmp_path: Path, name: str, purpose: str | None, expected: str, assumed: bool
) -> None:
    made = beam(combinations=[Combination(name, {"G": 1.0}, purpose=purpose or "")])
    made.by_name[name].Purpose = purpose
    building = read(made, tmp_path)
    assert building.combinations[0].limit_state == expected
    assert ("limit-state-assumed" in slugs(building)) == assumed
