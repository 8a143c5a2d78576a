"""Actions: directions, distributions, places; one bad file for each finding."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from analytical_reading import SCHEMAS, finding, read, slugs
from ifc_makers import (
    AnalysisFile,
    Case,
    Joint,
    Link,
    Model,
    NodeLoad,
    PointLoad,
    SpreadLoad,
    Stick,
    Warmth,
    continuous_beam,
    pinned,
)

from analysis_core.building import AxisAction

DOWN = (0.0, 0.0, -10e3)


def one_span(*actions: Any, schema: str = "IFC4", units: str = "m_N") -> AnalysisFile:
    """A beam of 6 m with actions in the case G."""
    model = continuous_beam([6.0], cases=[Case("G")], actions=actions)
    return AnalysisFile(model, schema=schema, units=units)


def rafter(*actions: Any, schema: str = "IFC4") -> AnalysisFile:
    """A member of 5 m, 4 m along x and 3 m up."""
    joints = (Joint("A", (0.0, 0.0, 0.0), pinned()), Joint("B", (4.0, 0.0, 3.0), pinned()))
    member = Stick("M1", joints[0].point, joints[1].point, (Link("B"), Link("A")))
    model = Model(joints, (member,), actions=actions, cases=(Case("G"),))
    return AnalysisFile(model, schema=schema)


def only_action(made: AnalysisFile, folder: Path) -> Any:
    (action,) = read(made, folder).actions
    return action


def total(action: AxisAction) -> Any:
    """Return the resultant of a continuous action, N."""
    forces = np.array(action.forces)
    steps = np.diff(action.stations)
    return ((forces[1:] + forces[:-1]) / 2 * steps[:, None]).sum(axis=0)


def set_load(made: AnalysisFile, load: Any, name: str = "g", **attributes: Any) -> None:
    made.by_name[name].AppliedLoad = load
    for attribute, value in attributes.items():
        setattr(made.by_name[name], attribute, value)


def line(made: AnalysisFile, fz: float) -> Any:
    return made.six("IfcStructuralLoadLinearForce", "line", (0.0, 0.0, fz, 0.0, 0.0, 0.0))


def single(made: AnalysisFile, fz: float) -> Any:
    return made.six("IfcStructuralLoadSingleForce", "force", (0.0, 0.0, fz, 0.0, 0.0, 0.0))


def configuration(made: AnalysisFile, values: Any, places: Any) -> Any:
    locations = None if places is None else [[float(x)] for x in places]
    return made.create("IfcStructuralLoadConfiguration", None, list(values), locations)


# -- directions ------------------------------------------------------------------------------


@pytest.mark.parametrize("schema", SCHEMAS)
def test_a_load_per_projected_length_is_spread_over_the_true_length(
    tmp_path: Path, schema: str
) -> None:
    # Snow of 10 kN per metre of plan on a 3-4-5 rafter: 40 kN in all, 8 kN per metre of rafter.
    made = rafter(SpreadLoad("g", "G", "M1", (DOWN,), projected=True), schema=schema)
    action = only_action(made, tmp_path)
    assert action.forces[0] == pytest.approx((0.0, 0.0, -8e3))
    assert total(action) == pytest.approx((0.0, 0.0, -40e3))


def test_each_component_of_a_projected_load_has_its_own_projection(tmp_path: Path) -> None:
    # Along x the rafter shows 3 m of its 5 m, along z 4 m, across it all of it.
    load = SpreadLoad("g", "G", "M1", ((1e3, 1e3, 1e3),), projected=True)
    assert only_action(rafter(load), tmp_path).forces[0] == pytest.approx((600.0, 1e3, 800.0))


@pytest.mark.parametrize("schema", SCHEMAS)
def test_local_directions_are_along_across_and_up_from_the_member(
    tmp_path: Path, schema: str
) -> None:
    load = SpreadLoad("g", "G", "M1", ((100.0, 20.0, -5.0),), local=True)
    # x = (0.8, 0, 0.6), z = (-0.6, 0, 0.8), y = z × x = (0, 1, 0).
    expected = (100 * 0.8 + 5 * 0.6, 20.0, 100 * 0.6 - 5 * 0.8)
    action = only_action(rafter(load, schema=schema), tmp_path)
    assert action.forces[0] == pytest.approx(expected)


def test_local_couples_turn_about_the_members_own_axes(tmp_path: Path) -> None:
    load = PointLoad("g", "G", "M1", 2.0, moment=(7.0, 30.0, 5.0), local=True)
    action = only_action(rafter(load), tmp_path)
    assert action.moments[0] == pytest.approx((7 * 0.8 - 5 * 0.6, 30.0, 7 * 0.6 + 5 * 0.8))
    assert action.stations == pytest.approx((2.0,))


def test_a_projected_load_in_local_axes_is_a_finding(tmp_path: Path) -> None:
    made = rafter(SpreadLoad("g", "G", "M1", (DOWN,), local=True, projected=True))
    building = read(made, tmp_path)
    (action,) = building.actions
    assert math.hypot(*action.forces[0]) == pytest.approx(10e3)
    assert "projected-local-action" in slugs(building)


def test_a_node_load_in_local_axes_follows_the_axes_of_the_support(tmp_path: Path) -> None:
    made = one_span(NodeLoad("g", "G", "J1", (1e3, 0.0, 0.0)))
    made.by_name["g"].GlobalOrLocal = "LOCAL_COORDS"
    made.by_name["J1"].ConditionCoordinateSystem = made.placement((0.0, 0.0, 1.0), (0.6, 0.8, 0.0))
    assert only_action(made, tmp_path).force == pytest.approx((600.0, 800.0, 0.0))


# -- distributions ---------------------------------------------------------------------------


@pytest.mark.parametrize(("wave", "share"), [("SINUS", 2 / math.pi), ("PARABOLA", 2 / 3)])
def test_half_waves_keep_their_total_and_nearly_their_moment(
    tmp_path: Path, wave: str, share: float
) -> None:
    made = one_span(SpreadLoad("g", "G", "M1", (DOWN,), wave=wave))
    building = read(made, tmp_path)
    (action,) = building.actions
    assert total(action)[2] == pytest.approx(-10e3 * share * 6.0, rel=1e-12)
    # Largest moment of a simple beam: p L²/π² and 5 p L²/48 (Roark's Formulas, table 8.1).
    exact = 10e3 * 36.0 * {"SINUS": 1 / math.pi**2, "PARABOLA": 5 / 48}[wave]
    assert middle_moment(action, 6.0) == pytest.approx(exact, rel=1e-3)
    assert wave in finding(building, "action-read-as").message


def middle_moment(action: AxisAction, length: float) -> float:
    """Moment at the middle of a simple beam under a symmetric load: ∫ q(x) x dx over half of it
    plus the share of the middle, by fine trapezoids."""
    x = np.linspace(0.0, length / 2, 20001)
    q = -np.interp(x, action.stations, [f[2] for f in action.forces])
    y = q * x
    return float(((y[1:] + y[:-1]) / 2 * np.diff(x)).sum())


def test_values_without_places_are_evenly_spaced(tmp_path: Path) -> None:
    made = one_span(SpreadLoad("g", "G", "M1", (DOWN,)))
    values = [line(made, -1e3), line(made, -4e3), line(made, -2e3)]
    set_load(made, configuration(made, values, None), PredefinedType="EQUIDISTANT")
    building = read(made, tmp_path)
    (action,) = building.actions
    assert action.stations == pytest.approx((0.0, 3.0, 6.0))
    assert [f[2] for f in action.forces] == [-1e3, -4e3, -2e3]
    assert "evenly spaced" in finding(building, "action-read-as").message


@pytest.mark.parametrize("kind", ["LINEAR", "POLYGONAL"])
def test_a_polygon_keeps_its_steps(tmp_path: Path, kind: str) -> None:
    # Two samples at one place are a step; the order within the step stays.
    made = one_span(SpreadLoad("g", "G", "M1", (DOWN,)))
    values = [line(made, v) for v in (-1e3, -2e3, -7e3, -5e3)]
    set_load(made, configuration(made, values, (0.5, 2.0, 2.0, 4.0)), PredefinedType=kind)
    action = only_action(made, tmp_path)
    assert action.stations == pytest.approx((0.5, 2.0, 2.0, 4.0))
    assert [f[2] for f in action.forces] == [-1e3, -2e3, -7e3, -5e3]


def test_places_out_of_order_are_put_in_order_with_a_note(tmp_path: Path) -> None:
    made = one_span(SpreadLoad("g", "G", "M1", (DOWN,)))
    values = [line(made, v) for v in (-1e3, -2e3)]
    set_load(made, configuration(made, values, (4.0, 1.5)), PredefinedType="LINEAR")
    building = read(made, tmp_path)
    (action,) = building.actions
    assert action.stations == pytest.approx((1.5, 4.0))
    assert [f[2] for f in action.forces] == [-2e3, -1e3]
    assert "put in order" in finding(building, "action-read-as").message


def test_one_value_for_a_linear_distribution_is_constant_with_a_note(tmp_path: Path) -> None:
    made = one_span(SpreadLoad("g", "G", "M1", (DOWN,)))
    made.by_name["g"].PredefinedType = "LINEAR"
    building = read(made, tmp_path)
    assert total(building.actions[0])[2] == pytest.approx(-60e3)
    assert "taken as constant" in finding(building, "action-read-as").message


def test_point_forces_may_stand_in_a_configuration(tmp_path: Path) -> None:
    made = one_span(SpreadLoad("g", "G", "M1", (DOWN,)), units="mm_kN")
    values = [single(made, -5e3), single(made, -8e3)]
    set_load(made, configuration(made, values, (1500.0, 4250.0)), PredefinedType="DISCRETE")
    action = only_action(made, tmp_path)
    assert action.shape == "discrete"
    assert action.stations == pytest.approx((1.5, 4.25))
    assert [f[2] for f in action.forces] == pytest.approx([-5e3, -8e3])


def test_locations_from_0_to_1_are_lengths_but_look_like_fractions(tmp_path: Path) -> None:
    made = one_span(SpreadLoad("g", "G", "M1", (DOWN,)))
    values = [line(made, -1e3), line(made, -1e3)]
    set_load(made, configuration(made, values, (0.0, 1.0)), PredefinedType="LINEAR")
    building = read(made, tmp_path)
    assert building.actions[0].stations == (0.0, 1.0)
    assert finding(building, "locations-look-relative").elements == (made.by_name["g"].GlobalId,)


# -- edges and vertices of their own ---------------------------------------------------------


@pytest.mark.parametrize("schema", SCHEMAS)
def test_an_edge_of_its_own_limits_a_load_to_part_of_the_member(
    tmp_path: Path, schema: str
) -> None:
    made = one_span(SpreadLoad("g", "G", "M1", (DOWN,)), schema=schema, units="ft_kip")
    edge = made.create("IfcEdge", made.vertex((1.25, 0.0, 0.0)), made.vertex((4.0, 0.0, 0.0)))
    made.by_name["g"].Representation = made.shape(edge, "Edge")
    action = only_action(made, tmp_path)
    assert action.stations == pytest.approx((1.25, 4.0), abs=1e-9)
    assert total(action)[2] == pytest.approx(-27.5e3)


def test_an_edge_that_runs_against_the_member_counts_from_its_own_start(tmp_path: Path) -> None:
    made = one_span(SpreadLoad("g", "G", "M1", (DOWN,)))
    edge = made.create("IfcEdge", made.vertex((5.0, 0.0, 0.0)), made.vertex((1.0, 0.0, 0.0)))
    values = [line(made, -1e3), line(made, -3e3)]
    set_load(
        made, configuration(made, values, (0.5, 3.0)), PredefinedType="LINEAR",
        Representation=made.shape(edge, "Edge"),
    )  # fmt: skip
    action = only_action(made, tmp_path)
    assert action.stations == pytest.approx((2.0, 4.5))
    assert [f[2] for f in action.forces] == [-3e3, -1e3]


def test_an_edge_against_the_member_leaves_local_axes_in_doubt(tmp_path: Path) -> None:
    made = one_span(SpreadLoad("g", "G", "M1", (DOWN,), local=True))
    edge = made.create("IfcEdge", made.vertex((5.0, 0.0, 0.0)), made.vertex((1.0, 0.0, 0.0)))
    made.by_name["g"].Representation = made.shape(edge, "Edge")
    building = read(made, tmp_path)
    assert building.actions == ()
    assert "runs against the member" in finding(building, "action-not-understood").message


@pytest.mark.parametrize("way", ["point", "one coordinate", "on line", "on polyline"])
def test_ifc2x3_names_the_places_of_varying_loads_in_several_ways(tmp_path: Path, way: str) -> None:
    load = SpreadLoad("g", "G", "M1", (DOWN, (0.0, 0.0, -2e3)), (1.5, 4.5))
    made = one_span(load, schema="IFC2X3", units="mm_kN")
    places = made.by_name["g"].VaryingAppliedLoadLocation.ShapeRepresentations
    for representation, station in zip(places, (1.5, 4.5), strict=True):
        if way == "one coordinate":
            item = made.create("IfcCartesianPoint", [station * 1e3])
        elif way == "on line":
            vector = made.create("IfcVector", made.direction((1.0, 0.0, 0.0)), 3000.0)
            curve = made.create("IfcLine", made.point((0.0, 0.0, 0.0)), vector)
            item = made.create("IfcPointOnCurve", curve, station / 3.0)
        elif way == "on polyline":
            points = [made.point((x, 0.0, 0.0)) for x in (0.0, 2.0, 6.0)]
            curve = made.create("IfcPolyline", points)
            parameter = station / 2.0 if station < 2.0 else 1.0 + (station - 2.0) / 4.0
            item = made.create("IfcPointOnCurve", curve, parameter)
        else:
            continue
        representation.Items = [item]
    action = only_action(made, tmp_path)
    assert action.stations == pytest.approx((1.5, 4.5))
    assert [f[2] for f in action.forces] == pytest.approx([-10e3, -2e3])


def test_ifc2x3_places_and_values_must_be_as_many(tmp_path: Path) -> None:
    load = SpreadLoad("g", "G", "M1", (DOWN, (0.0, 0.0, -2e3)), (1.5, 4.5))
    made = one_span(load, schema="IFC2X3")
    made.by_name["g"].SubsequentAppliedLoads = [line(made, -1.0), line(made, -2.0)]
    assert "3 values for 2 places" in finding(read(made, tmp_path), "action-not-understood").message


@pytest.mark.parametrize(("aside", "severity"), [(0.03, "note"), (0.4, "warning")])
def test_a_force_beside_the_axis_is_moved_onto_it_with_a_finding(
    tmp_path: Path, aside: float, severity: str
) -> None:
    made = one_span(PointLoad("g", "G", "M1", 2.0, DOWN))
    vertex = made.vertex((2.0, aside, 0.0))
    made.by_name["g"].Representation = made.shape(vertex, "Vertex")
    building = read(made, tmp_path)
    assert building.actions[0].stations == pytest.approx((2.0,))
    found = finding(building, "action-off-axis")
    assert found.severity == severity
    assert f"{aside * 1e3:.0f} mm" in found.message


# -- what cannot be placed -------------------------------------------------------------------


def left_out(made: AnalysisFile, folder: Path, slug: str = "action-not-understood") -> str:
    building = read(made, folder)
    assert building.actions == ()
    found = finding(building, slug)
    assert made.by_name["g"].GlobalId in found.elements
    assert found.severity == "warning"
    return found.message


def test_a_force_on_a_member_without_a_vertex_is_left_out(tmp_path: Path) -> None:
    made = one_span(PointLoad("g", "G", "M1", 2.0, DOWN))
    made.by_name["g"].Representation = None
    assert "no vertex" in left_out(made, tmp_path)


def test_an_action_without_a_load_is_left_out(tmp_path: Path) -> None:
    made = one_span(SpreadLoad("g", "G", "M1", (DOWN,)))
    made.by_name["g"].AppliedLoad = None
    assert "it states no load" in left_out(made, tmp_path)


def test_a_displacement_all_along_a_member_is_left_out(tmp_path: Path) -> None:
    made = one_span(SpreadLoad("g", "G", "M1", (DOWN,)))
    set_load(made, made.create("IfcStructuralLoadSingleDisplacement", DisplacementZ=-0.01))
    assert "does not act along a member" in left_out(made, tmp_path)


def bad_loads() -> list[tuple[str, Any, dict[str, Any], str]]:
    def force(made: AnalysisFile) -> Any:
        return single(made, -1e3)

    def area(made: AnalysisFile) -> Any:
        return made.create("IfcStructuralLoadPlanarForce", None, None, None, -1e3)

    def mixed(made: AnalysisFile) -> Any:
        return configuration(made, [line(made, -1.0), single(made, -1.0)], (0.0, 1.0))

    def uneven(made: AnalysisFile) -> Any:
        load = configuration(made, [line(made, -1.0), line(made, -1.0)], (0.0, 1.0))
        load.Locations = [[0.0]]
        return load

    def flat(made: AnalysisFile) -> Any:
        load = configuration(made, [line(made, -1.0), line(made, -1.0)], (0.0, 1.0))
        load.Locations = [[0.0, 0.0], [1.0, 2.0]]
        return load

    def nowhere(made: AnalysisFile) -> Any:
        return configuration(made, [single(made, -1.0)], None)

    def lines(made: AnalysisFile) -> Any:
        return configuration(made, [line(made, -1.0), line(made, -1.0)], (0.0, 1.0))

    def areas(made: AnalysisFile) -> Any:
        return configuration(made, [area(made)], (0.0,))

    return [
        ("a single force", force, {}, "without a place"),
        ("a force per area", area, {}, "IfcStructuralLoadPlanarForce does not act along"),
        ("mixed values", mixed, {}, "mixes"),
        ("too few places", uneven, {}, "2 values for 1 locations"),
        ("two coordinates", flat, {}, "two coordinates"),
        ("points nowhere", nowhere, {}, "have no locations"),
        ("discrete lines", lines, {"PredefinedType": "DISCRETE"}, "forces per length"),
        ("areas in a list", areas, {}, "IfcStructuralLoadPlanarForce, which"),
    ]


@pytest.mark.parametrize(
    ("make", "attributes", "reason"),
    [case[1:] for case in bad_loads()], ids=[case[0] for case in bad_loads()],
)  # fmt: skip
def test_loads_that_make_no_sense_are_left_out_with_the_reason(
    tmp_path: Path, make: Any, attributes: dict[str, Any], reason: str
) -> None:
    made = one_span(SpreadLoad("g", "G", "M1", (DOWN,)))
    set_load(made, make(made), **attributes)
    assert reason in left_out(made, tmp_path)


def test_a_load_per_length_on_a_node_is_left_out(tmp_path: Path) -> None:
    made = one_span(NodeLoad("g", "G", "J1", DOWN))
    set_load(made, line(made, -1.0))
    assert "does not act on a point" in left_out(made, tmp_path)


def test_a_displacement_along_a_member_is_left_out(tmp_path: Path) -> None:
    made = one_span(PointLoad("g", "G", "M1", 2.0, DOWN))
    set_load(made, made.create("IfcStructuralLoadSingleDisplacement", DisplacementZ=-0.01))
    assert "Put a displacement on a point connection" in left_out(made, tmp_path)


def test_a_temperature_over_part_of_a_member_is_left_out(tmp_path: Path) -> None:
    made = one_span(Warmth("g", "G", "M1", 10.0))
    edge = made.create("IfcEdge", made.vertex((1.0, 0.0, 0.0)), made.vertex((4.0, 0.0, 0.0)))
    made.by_name["g"].Representation = made.shape(edge, "Edge")
    assert "part of a member" in left_out(made, tmp_path)


def test_an_action_on_nothing_is_left_out(tmp_path: Path) -> None:
    made = one_span(SpreadLoad("g", "G", "M1", (DOWN,)))
    for relation in made.file.by_type("IfcRelConnectsStructuralActivity"):
        made.file.remove(relation)
    assert "acts on nothing" in left_out(made, tmp_path, "no-target")


@pytest.mark.parametrize(
    ("ifc_class", "reason"),
    [
        ("IfcBeam", "physical element"),
        ("IfcStructuralSurfaceMember", "surface members are not analysed"),
        ("IfcStructuralCurveConnection", "curve connections"),
        ("IfcStructuralSurfaceConnection", "surface connections"),
    ],
)
def test_an_action_on_something_else_is_left_out(
    tmp_path: Path, ifc_class: str, reason: str
) -> None:
    made = one_span(SpreadLoad("g", "G", "M1", (DOWN,)))
    (relation,) = made.file.by_type("IfcRelConnectsStructuralActivity")
    relation.RelatingElement = made.rooted(ifc_class, "other")
    assert reason in left_out(made, tmp_path, "action-without-member")


def test_an_action_on_a_member_that_was_left_out_says_so(tmp_path: Path) -> None:
    made = one_span(SpreadLoad("g", "G", "M1", (DOWN,)))
    made.by_name["M1"].Representation = None
    assert "left out itself" in left_out(made, tmp_path, "action-without-member")


@pytest.mark.parametrize("schema", SCHEMAS)
def test_an_action_on_a_surface_is_named(tmp_path: Path, schema: str) -> None:
    made = one_span(SpreadLoad("x", "G", "M1", (DOWN,)), schema=schema)
    slab = made.rooted("IfcStructuralSurfaceMember", "slab", PredefinedType="SHELL")
    load = made.create("IfcStructuralLoadPlanarForce", None, None, None, -5e3)
    extra = {"DestabilizingLoad": False} if schema == "IFC2X3" else {"PredefinedType": "CONST"}
    made.rooted(
        "IfcStructuralPlanarAction", "g", AppliedLoad=load, GlobalOrLocal="GLOBAL_COORDS",
        ProjectedOrTrue="TRUE_LENGTH", **extra,
    )  # fmt: skip
    made.relate("IfcRelConnectsStructuralActivity", "on slab", slab, made.by_name["g"])
    found = finding(read(made, tmp_path), "surface-action")
    assert set(found.elements) == {made.by_name["g"].GlobalId, slab.GlobalId}


def test_an_action_on_two_members_is_put_on_both_with_a_finding(tmp_path: Path) -> None:
    model = continuous_beam(
        [6.0, 4.0], cases=[Case("G")], actions=[SpreadLoad("g", "G", "M1", (DOWN,))]
    )
    made = AnalysisFile(model)
    made.relate("IfcRelConnectsStructuralActivity", "again", made.by_name["M2"], made.by_name["g"])
    building = read(made, tmp_path)
    assert [a.stations[-1] for a in building.actions] == pytest.approx([6.0, 4.0])
    assert made.by_name["M2"].GlobalId in finding(building, "action-on-several").elements


@pytest.mark.parametrize(
    "action",
    [
        SpreadLoad("g", "G", "M1", ((0.0, 0.0, 0.0),)),
        NodeLoad("g", "G", "J1"),
        PointLoad("g", "G", "M1", 2.0),
        Warmth("g", "G", "M1"),
    ],
    ids=["along", "node", "point", "temperature"],
)
def test_an_action_of_nothing_has_no_effect_and_says_so(tmp_path: Path, action: Any) -> None:
    made = one_span(action)
    building = read(made, tmp_path)
    assert building.actions == ()
    assert finding(building, "empty-action").elements == (made.by_name["g"].GlobalId,)


def test_a_warping_moment_is_a_finding(tmp_path: Path) -> None:
    made = one_span(NodeLoad("g", "G", "J1", DOWN))
    load = made.create("IfcStructuralLoadSingleForceWarping", ForceZ=-1e3, WarpingMoment=5.0)
    set_load(made, load)
    building = read(made, tmp_path)
    assert building.actions[0].force == (0.0, 0.0, -1e3)
    assert "warping-moment" in slugs(building)
