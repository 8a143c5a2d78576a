"""Supports, releases and attachments; one bad file for each finding."""

from __future__ import annotations

import math
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest
from analytical_reading import SCHEMAS, by_name, finding, read, slugs
from ifc_makers import (
    FREE,
    RIGID,
    AnalysisFile,
    Joint,
    Link,
    Model,
    Stick,
    continuous_beam,
    fixed,
    pinned,
)

from analysis_core.ifc.analytical.reader import read_analytical
from analysis_core.ifc.source import open_model


def beam(schema: str = "IFC4", units: str = "m_N") -> AnalysisFile:
    return AnalysisFile(continuous_beam([6.0]), schema=schema, units=units)


def set_condition(made: AnalysisFile, values: list[Any], ifc_class: str = "") -> None:
    """Give J0 a condition of these attribute values."""
    condition = made.create(ifc_class or "IfcBoundaryNodeCondition", None, *values)
    made.by_name["J0"].AppliedCondition = condition


def boolean(made: AnalysisFile, value: bool) -> Any:
    return made.create("IfcBoolean", value)


def restraint(building: Any, name: str = "J0") -> Any:
    return by_name(building.connections)[name].restraint


# -- stiffness -------------------------------------------------------------------------------


def test_springs_are_read_in_the_units_of_the_file(tmp_path: Path) -> None:
    made = beam(units="mm_kN")
    degree = math.pi / 180.0
    stiffness = made.create("IfcLinearStiffnessMeasure", 25.0)  # kN/mm
    rotation = made.create("IfcRotationalStiffnessMeasure", 3.0)  # kN·mm per degree
    false = boolean(made, False)
    set_condition(made, [false, false, stiffness, false, rotation, false])
    found = restraint(read(made, tmp_path))
    assert found.translation == pytest.approx((0.0, 0.0, 25e6))
    assert found.rotation == pytest.approx((0.0, 3.0 / degree, 0.0))


def test_numbers_of_ifc2x3_are_minus_one_for_fixed_and_zero_for_free(tmp_path: Path) -> None:
    made = beam("IFC2X3")
    set_condition(made, [-1.0, 0.0, 5e6, -1.0, 2e5, 0.0])
    found = restraint(read(made, tmp_path))
    assert found.translation == (RIGID, 0.0, 5e6)
    assert found.rotation == (RIGID, 2e5, 0.0)


@pytest.mark.parametrize("schema", SCHEMAS)
def test_a_condition_that_is_free_in_every_direction_is_no_support(
    tmp_path: Path, schema: str
) -> None:
    model = continuous_beam([6.0], supports=[fixed(), (FREE,) * 6])
    assert restraint(read(model, tmp_path, schema=schema), "J1") is None


def test_a_connection_without_a_condition_is_a_free_node(tmp_path: Path) -> None:
    assert restraint(read(continuous_beam([6.0], supports=[fixed(), None]), tmp_path), "J1") is None


@pytest.mark.parametrize("schema", SCHEMAS)
def test_unstated_directions_are_free_in_supports_and_rigid_in_releases(
    tmp_path: Path, schema: str
) -> None:
    made = beam(schema)
    true = -1.0 if schema == "IFC2X3" else boolean(made, True)
    set_condition(made, [true, true, true, None, None, None])
    (relation,) = [r for r in made.file.by_type("IfcRelConnectsStructuralMember")
                   if r.RelatedStructuralConnection.Name == "J1"]  # fmt: skip
    false = 0.0 if schema == "IFC2X3" else boolean(made, False)
    relation.AppliedCondition = made.create(
        "IfcBoundaryNodeCondition", None, None, None, None, None, false, None
    )

    building = read(made, tmp_path)

    assert restraint(building).rotation == (0.0, 0.0, 0.0)
    release = next(a.release for a in building.attachments if a.position > 1.0)
    assert release.translation == (RIGID,) * 3
    assert release.rotation == (RIGID, 0.0, RIGID)
    found = [f for f in building.findings if f.slug == "condition-unknown"]
    assert sorted(f.message.split(" were taken as ")[1][:5] for f in found) == ["free.", "rigid"]
    assert made.by_name["J0"].GlobalId in {e for f in found for e in f.elements}


def test_minus_one_as_a_measure_is_taken_as_fixed_with_a_finding(tmp_path: Path) -> None:
    made = beam()
    minus = made.create("IfcLinearStiffnessMeasure", -1.0)
    true = boolean(made, True)
    set_condition(made, [true, true, minus, true, true, true])
    building = read(made, tmp_path)
    assert restraint(building).translation[2] == RIGID
    assert finding(building, "stiffness-minus-one").elements == (made.by_name["J0"].GlobalId,)


@pytest.mark.parametrize("schema", SCHEMAS)
def test_negative_stiffness_is_free_with_a_finding(tmp_path: Path, schema: str) -> None:
    made = beam(schema)
    value = -5e3 if schema == "IFC2X3" else made.create("IfcLinearStiffnessMeasure", -5e3)
    true = -1.0 if schema == "IFC2X3" else boolean(made, True)
    set_condition(made, [true, true, value, true, true, true])
    building = read(made, tmp_path)
    assert restraint(building).translation[2] == 0.0
    assert "-5000" in finding(building, "negative-stiffness").message


def test_a_condition_on_warping_is_a_finding(tmp_path: Path) -> None:
    made = beam()
    true = boolean(made, True)
    set_condition(made, [true] * 7, "IfcBoundaryNodeConditionWarping")
    building = read(made, tmp_path)
    assert restraint(building).rotation == (RIGID,) * 3
    assert "warping-condition" in slugs(building)


def test_a_condition_of_an_edge_on_a_point_is_a_finding(tmp_path: Path) -> None:
    made = beam()
    set_condition(made, [boolean(made, True)] * 6, "IfcBoundaryEdgeCondition")
    building = read(made, tmp_path)
    assert restraint(building) is None
    assert "IfcBoundaryEdgeCondition" in finding(building, "condition-not-understood").message


def test_the_axes_of_a_support_are_world_directions(tmp_path: Path) -> None:
    # A roller on a slope of 30°: its own z leans over; the model itself is turned by 90°.
    c, s = math.cos(math.radians(30.0)), 0.5
    flat = continuous_beam([6.0])
    joints = (
        replace(flat.joints[0], axes=((-s, 0.0, c), (c, 0.0, s))),
        flat.joints[1],
    )
    building = read(Model(joints, flat.sticks, turn=math.pi / 2), tmp_path)
    axes = restraint(building).axes
    assert axes[0] == pytest.approx((0.0, c, s), abs=1e-12)
    assert axes[1] == pytest.approx((-1.0, 0.0, 0.0), abs=1e-12)
    assert axes[2] == pytest.approx((0.0, -s, c), abs=1e-12)


def test_the_axes_of_a_release_are_those_of_the_member_or_relative_to_them(tmp_path: Path) -> None:
    start, end = (0.0, 0.0, 0.0), (0.0, 6.0, 0.0)
    hinge = (RIGID, RIGID, RIGID, RIGID, FREE, RIGID)
    joints = (Joint("A", start, pinned()), Joint("B", end, pinned()))
    member = Stick("M", start, end, (Link("A", hinge), Link("B", hinge)))
    made = AnalysisFile(Model(joints, (member,)))
    (relation,) = [r for r in made.file.by_type("IfcRelConnectsStructuralMember")
                   if r.RelatedStructuralConnection.Name == "B"]  # fmt: skip
    # Turned by 90° about the member's own x: its y is then the member's z.
    relation.ConditionCoordinateSystem = made.placement((0.0, -1.0, 0.0), (1.0, 0.0, 0.0))
    releases = {round(a.position): a.release.axes for a in read(made, tmp_path).attachments}
    assert releases[0][0] == pytest.approx((0.0, 1.0, 0.0))
    assert releases[0][1] == pytest.approx((-1.0, 0.0, 0.0))
    assert releases[6][0] == pytest.approx((0.0, 1.0, 0.0), abs=1e-12)
    assert releases[6][1] == pytest.approx((0.0, 0.0, 1.0), abs=1e-12)


# -- attachments -----------------------------------------------------------------------------


@pytest.mark.parametrize("schema", SCHEMAS)
def test_a_node_along_a_member_is_attached_where_it_lies(tmp_path: Path, schema: str) -> None:
    joints = (
        Joint("A", (0.0, 0.0, 0.0), pinned()), Joint("B", (2.75, 0.0, 0.0), pinned()),
        Joint("C", (6.0, 0.0, 0.0), pinned()),
    )  # fmt: skip
    member = Stick("M", joints[0].point, joints[2].point, (Link("C"), Link("B"), Link("A")))
    building = read(Model(joints, (member,)), tmp_path, schema=schema, units="ft_kip")
    names = {c.global_id: c.name for c in building.connections}
    found = {names[a.connection]: a.position for a in building.attachments}
    assert found == pytest.approx({"A": 0.0, "B": 2.75, "C": 6.0}, abs=1e-9)


@pytest.mark.parametrize("schema", SCHEMAS)
def test_an_eccentric_connection_states_where_it_holds_the_member(
    tmp_path: Path, schema: str
) -> None:
    joints = (Joint("A", (0.0, 0.0, -0.8), pinned()), Joint("B", (6.0, 0.0, 0.0), pinned()))
    ends = (0.0, 0.0, 0.0), (6.0, 0.0, 0.0)
    member = Stick("M", *ends, (Link("A", on_member=(0.5, 0.0, 0.0)), Link("B")))
    building = read(Model(joints, (member,)), tmp_path, schema=schema, units="mm_kN")
    first = min(building.attachments, key=lambda a: a.position)
    assert first.position == pytest.approx(0.5)
    assert first.eccentricity == pytest.approx((0.5, 0.0, 0.8))


@pytest.mark.parametrize("schema", SCHEMAS)
@pytest.mark.parametrize("sense", [1.0, -1.0])
def test_an_eccentricity_by_distance_reaches_the_member_whichever_way_it_runs(
    tmp_path: Path, schema: str, sense: float
) -> None:
    """IFC4, IfcConnectionPointEccentricity: distances between two points, from which is open."""
    joints = (Joint("A", (0.0, 0.0, -0.8), pinned()), Joint("B", (6.0, 0.0, 0.0), pinned()))
    ends = (0.0, 0.0, 0.0), (6.0, 0.0, 0.0)
    member = Stick("M", *ends, (Link("A", on_member=(0.5, 0.0, 0.0)), Link("B")))
    made = AnalysisFile(Model(joints, (member,)), schema=schema, units="mm_kN")
    (relation,) = made.file.by_type("IfcRelConnectsWithEccentricity")
    apart = [sense * made.units.of(value, "LENGTHUNIT") for value in (0.5, 0.0, 0.8)]
    at_node = made.vertex(joints[0].point)
    relation.ConnectionConstraint = made.create(
        "IfcConnectionPointEccentricity", at_node, None, *apart
    )
    building = read(made, tmp_path)
    first = min(building.attachments, key=lambda a: a.position)
    assert first.position == pytest.approx(0.5)
    assert first.eccentricity == pytest.approx((0.5, 0.0, 0.8))


def test_an_eccentricity_that_belongs_to_an_edge_is_a_finding(tmp_path: Path) -> None:
    joints = (Joint("A", (0.0, 0.0, 0.0), pinned()), Joint("B", (6.0, 0.0, 0.0), pinned()))
    member = Stick(
        "M", joints[0].point, joints[1].point, (Link("A", on_member=(0.5, 0.0, 0.0)), Link("B"))
    )
    made = AnalysisFile(Model(joints, (member,)))
    (relation,) = made.file.by_type("IfcRelConnectsWithEccentricity")
    edge = made.create("IfcEdge", made.vertex((0.0, 0.0, 0.0)), made.vertex((6.0, 0.0, 0.0)))
    relation.ConnectionConstraint = made.create("IfcConnectionCurveGeometry", edge)
    building = read(made, tmp_path)
    assert all(a.eccentricity == (0.0, 0.0, 0.0) for a in building.attachments)
    assert "eccentricity-not-understood" in slugs(building)


@pytest.mark.parametrize(("beyond", "position"), [(0.02, 6.0), (-0.02, 5.98), (0.2, 6.2)])
def test_a_node_a_little_beyond_the_end_holds_the_end(
    tmp_path: Path, beyond: float, position: float
) -> None:
    joints = (Joint("A", (0.0, 0.0, 0.0), pinned()), Joint("B", (6.0 + beyond, 0.0, 0.0)))
    member = Stick("M", (0.0, 0.0, 0.0), (6.0, 0.0, 0.0), (Link("A"), Link("B")))
    building = read(Model(joints, (member,)), tmp_path)
    assert max(a.position for a in building.attachments) == pytest.approx(position)


def test_connections_that_no_relation_names_join_the_members_that_end_there(
    tmp_path: Path,
) -> None:
    made = AnalysisFile(continuous_beam([6.0, 4.0]))
    for relation in made.file.by_type("IfcRelConnectsStructuralMember"):
        if relation.RelatedStructuralConnection.Name == "J1":
            made.file.remove(relation)
    building = read(made, tmp_path)
    joint = made.by_name["J1"].GlobalId
    found = sorted(a.position for a in building.attachments if a.connection == joint)
    assert found == pytest.approx([0.0, 6.0])
    assert finding(building, "attachment-by-place").elements == (joint,)


def test_the_same_attachment_twice_is_a_finding(tmp_path: Path) -> None:
    made = beam()
    made.relate(
        "IfcRelConnectsStructuralMember", "again", made.by_name["M1"], made.by_name["J0"],
        made.condition((FREE,) * 6),
    )  # fmt: skip
    building = read(made, tmp_path)
    assert len(building.attachments) == 2
    assert all(a.release.rotation == (RIGID,) * 3 for a in building.attachments)
    assert made.by_name["again"].GlobalId in finding(building, "attached-twice").elements


def test_slip_and_supported_lengths_are_named(tmp_path: Path) -> None:
    made = beam()
    first, second = made.file.by_type("IfcRelConnectsStructuralMember")
    first.AdditionalConditions = made.create("IfcSlippageConnectionCondition", SlippageX=0.001)
    second.SupportedLength = 0.25
    building = read(made, tmp_path)
    assert "IfcSlippageConnectionCondition" in finding(building, "connection-behaviour").message
    assert finding(building, "supported-length").elements == (second.GlobalId,)


def test_a_connection_without_a_point_is_named_and_left_out(tmp_path: Path) -> None:
    made = beam()
    made.by_name["J0"].Representation = None
    building = read(made, tmp_path)
    assert [c.name for c in building.connections] == ["J1"]
    assert finding(building, "connection-without-point").severity == "error"


def test_a_relation_to_nothing_is_named(tmp_path: Path) -> None:
    made = beam()
    name = made.by_name["M1 to J1"].GlobalId
    path = tmp_path / "t.ifc"
    joint = made.by_name["J1"].id()
    text = made.file.to_string()
    relation = made.by_name["M1 to J1"].id()
    line = next(x for x in text.splitlines() if x.startswith(f"#{relation}="))
    path.write_text(text.replace(line, line.replace(f",#{joint},", ",$,")))
    found = finding(read_analytical(open_model(path)), "relation-to-nothing")
    assert found.elements == (name,)


def test_edges_that_hold_members_are_named(tmp_path: Path) -> None:
    made = beam()
    edge = made.create("IfcEdge", made.vertex((0.0, 0.0, 0.0)), made.vertex((6.0, 0.0, 0.0)))
    shape = made.shape(edge, "Edge")
    true = boolean(made, True)
    held = made.create("IfcBoundaryEdgeCondition", None, *[true] * 6)
    axis = made.direction((0.0, 0.0, 1.0))
    for name, condition in (("bed", held), ("seam", None), ("joint", None)):
        made.rooted(
            "IfcStructuralCurveConnection", name, None, None, made.origin, shape, condition, axis
        )
        if name != "joint":
            made.relate(
                "IfcRelConnectsStructuralMember", f"on {name}", made.by_name["M1"],
                made.by_name[name],
            )  # fmt: skip
    made.rooted("IfcStructuralSurfaceConnection", "face")
    made.rooted("IfcStructuralSurfaceMember", "slab", PredefinedType="SHELL")
    building = read(made, tmp_path)
    ids = {name: made.by_name[name].GlobalId for name in ("bed", "seam", "joint", "face", "slab")}
    assert set(finding(building, "line-support").elements) == {
        ids["bed"], made.by_name["M1"].GlobalId
    }  # fmt: skip
    seams = {e for f in building.findings if f.slug == "curve-connection" for e in f.elements}
    assert seams == {ids["seam"], ids["joint"], made.by_name["M1"].GlobalId}
    assert finding(building, "surface-connection").elements == (ids["face"],)
    assert finding(building, "surface-member").elements == (ids["slab"],)
