"""Members: edges in every guise, local axes, types, sections; one bad file for each finding."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

import pytest
from analytical_reading import SCHEMAS, by_name, finding, read, slugs
from ifc_makers import (
    AnalysisFile,
    Case,
    Joint,
    Link,
    Model,
    PointLoad,
    SectionSpec,
    SpreadLoad,
    Stick,
    continuous_beam,
    fixed,
)

from analysis_core.ifc.analytical.reader import read_analytical
from analysis_core.ifc.source import open_model

START, END = (1.0, 2.0, 3.0), (1.0, 6.0, 6.0)


def stick(schema: str = "IFC4", **changes: Any) -> AnalysisFile:
    """One member of 5 m from START to END, on two joints."""
    joints = (Joint("A", START, fixed()), Joint("B", END))
    member = Stick("M", START, END, (Link("B"), Link("A")), **changes)
    return AnalysisFile(Model(joints, (member,)), schema=schema)


def put_item(made: AnalysisFile, item: Any, name: str = "M") -> None:
    """Replace the item of a product's representation."""
    made.by_name[name].Representation.Representations[0].Items = [item]


def only_member(made: AnalysisFile, folder: Path) -> Any:
    building = read(made, folder)
    assert not [f for f in building.findings if f.severity == "error"]
    (member,) = building.members
    return member


def check_place(member: Any, start: Any = START, end: Any = END) -> None:
    assert member.start == pytest.approx(start, abs=1e-9)
    assert member.end == pytest.approx(end, abs=1e-9)


# -- reference curves ------------------------------------------------------------------------


def test_an_oriented_edge_may_run_backwards(tmp_path: Path) -> None:
    made = stick()
    edge = made.create("IfcEdge", made.vertex(END), made.vertex(START))
    put_item(made, made.create("IfcOrientedEdge", EdgeElement=edge, Orientation=False))
    check_place(only_member(made, tmp_path))


def test_a_subedge_is_a_part_of_its_parent(tmp_path: Path) -> None:
    made = stick()
    whole = made.create("IfcEdge", made.vertex((0.0, 0.0, 0.0)), made.vertex((9.0, 9.0, 9.0)))
    part = made.create("IfcSubedge", made.vertex(START), made.vertex(END), whole)
    put_item(made, part)
    check_place(only_member(made, tmp_path))


@pytest.mark.parametrize("same_sense", [True, False])
def test_an_edge_curve_on_a_line_is_straight(tmp_path: Path, same_sense: bool) -> None:
    made = stick()
    vector = made.create("IfcVector", made.direction((0.0, 4.0, 3.0)), 1.0)
    line = made.create("IfcLine", made.point(START), vector)
    put_item(
        made,
        made.create("IfcEdgeCurve", made.vertex(START), made.vertex(END), line, same_sense),
    )
    check_place(only_member(made, tmp_path))


def test_an_edge_curve_on_a_straight_polyline_is_straight(tmp_path: Path) -> None:
    made = stick()
    middle = tuple((a + b) / 2 for a, b in zip(START, END, strict=True))
    line = made.create("IfcPolyline", [made.point(p) for p in (START, middle, END)])
    put_item(made, made.create("IfcEdgeCurve", made.vertex(START), made.vertex(END), line, True))
    check_place(only_member(made, tmp_path))


def test_a_path_of_collinear_edges_is_one_member(tmp_path: Path) -> None:
    made = stick()
    middle = (1.0, 4.0, 4.5)
    edges = [
        made.create("IfcOrientedEdge", EdgeElement=edge, Orientation=True)
        for edge in (
            made.create("IfcEdge", made.vertex(START), made.vertex(middle)),
            made.create("IfcEdge", made.vertex(middle), made.vertex(END)),
        )
    ]
    put_item(made, made.create("IfcPath", edges))
    check_place(only_member(made, tmp_path))


def test_the_edge_is_found_by_its_class_whatever_the_representation_is_called(
    tmp_path: Path,
) -> None:
    made = stick()
    topology = made.by_name["M"].Representation.Representations[0]
    topology.RepresentationIdentifier, topology.RepresentationType = "Body", "Brep"
    first = made.create(
        "IfcShapeRepresentation", made.context, "Axis", "Curve3D",
        [made.create("IfcPolyline", [made.point((0.0, 0.0, 0.0)), made.point((9.0, 0.0, 0.0))])],
    )  # fmt: skip
    made.by_name["M"].Representation.Representations = [first, topology]
    check_place(only_member(made, tmp_path))


@pytest.mark.parametrize("schema", SCHEMAS)
def test_a_polyline_in_a_mapped_item_is_placed_by_the_mapping(tmp_path: Path, schema: str) -> None:
    made = stick(schema)
    # A unit line along x from (1, 0, 0), mapped with scale 5 along (0, 0.8, 0.6) to START.
    line = made.create("IfcPolyline", [made.point((1.0, 0.0, 0.0)), made.point((2.0, 0.0, 0.0))])
    inner = made.create("IfcShapeRepresentation", made.context, "Axis", "Curve3D", [line])
    origin = made.create(
        "IfcAxis2Placement3D", made.point((1.0, 0.0, 0.0)), made.direction((0.0, 0.0, 1.0)),
        made.direction((1.0, 0.0, 0.0)),
    )  # fmt: skip
    source = made.create("IfcRepresentationMap", origin, inner)
    target = made.create(
        "IfcCartesianTransformationOperator3D", made.direction((0.0, 0.8, 0.6)), None,
        made.point(START), 5.0, made.direction((1.0, 0.0, 0.0)),
    )  # fmt: skip
    put_item(made, made.create("IfcMappedItem", source, target))
    check_place(only_member(made, tmp_path))


def test_an_item_without_a_placement_takes_that_of_its_model(tmp_path: Path) -> None:
    model = continuous_beam([4.0])
    made = AnalysisFile(Model(model.joints, model.sticks, origin=(10.0, 20.0, 30.0)))
    for name in ("M1", "J0", "J1"):
        made.by_name[name].ObjectPlacement = None
    building = read(made, tmp_path)
    check_place(building.members[0], (10.0, 20.0, 30.0), (14.0, 20.0, 30.0))
    assert by_name(building.connections)["J1"].point == pytest.approx((14.0, 20.0, 30.0))
    assert sorted(a.position for a in building.attachments) == pytest.approx([0.0, 4.0])


def test_nested_placements_add_up(tmp_path: Path) -> None:
    made = stick()
    axes = made.create("IfcAxis2Placement3D", made.point((0.0, 0.0, 7.0)))
    made.origin.PlacementRelTo = made.create("IfcLocalPlacement", None, axes)
    check_place(only_member(made, tmp_path), (1.0, 2.0, 10.0), (1.0, 6.0, 13.0))


def arc(made: AnalysisFile) -> Any:
    placement = made.create("IfcAxis2Placement3D", made.point(START))
    return made.create("IfcCircle", placement, 5.0)


def test_a_curved_member_is_named_and_left_out(tmp_path: Path) -> None:
    made = stick()
    circle = arc(made)
    put_item(made, made.create("IfcEdgeCurve", made.vertex(START), made.vertex(END), circle, True))
    building = read(made, tmp_path)
    assert building.members == ()
    found = finding(building, "curved-member")
    assert (found.severity, found.elements) == ("error", (made.by_name["M"].GlobalId,))


def test_a_bent_polyline_is_curved(tmp_path: Path) -> None:
    made = stick()
    line = made.create("IfcPolyline", [made.point(p) for p in (START, (1.0, 4.1, 4.5), END)])
    put_item(made, line)
    assert "curved-member" in slugs(read(made, tmp_path))


@pytest.mark.parametrize("case", ["no representation", "no edge", "bare vertex", "circle of edges"])
def test_a_member_without_an_axis_is_named_and_left_out(tmp_path: Path, case: str) -> None:
    made = stick()
    if case == "no representation":
        made.by_name["M"].Representation = None
    elif case == "no edge":
        put_item(made, made.vertex(START))
    elif case == "bare vertex":
        put_item(made, made.create("IfcEdge", made.create("IfcVertex"), made.vertex(END)))
    else:
        edge = made.create("IfcOrientedEdge", Orientation=True)
        edge.EdgeElement = edge
        put_item(made, edge)
    building = read(made, tmp_path)
    assert building.members == ()
    assert finding(building, "member-without-axis").elements == (made.by_name["M"].GlobalId,)


def test_a_member_without_length_is_named_and_left_out(tmp_path: Path) -> None:
    made = stick()
    put_item(made, made.create("IfcEdge", made.vertex(START), made.vertex(START)))
    building = read(made, tmp_path)
    assert building.members == ()
    assert finding(building, "member-without-length").elements


def test_a_malformed_member_is_named_and_the_others_are_read(tmp_path: Path) -> None:
    made = AnalysisFile(continuous_beam([3.0, 4.0]))
    shape = made.by_name["M1"].Representation.id()
    path = tmp_path / "t.ifc"
    path.write_text(made.file.to_string().replace(f",#{shape},.RIGID", ",7.5,.RIGID"))

    building = read_analytical(open_model(path))

    assert [m.name for m in building.members] == ["M2"]
    assert finding(building, "malformed-entity").elements == (made.by_name["M1"].GlobalId,)


# -- local axes ------------------------------------------------------------------------------


@pytest.mark.parametrize("schema", SCHEMAS)
def test_the_stated_axis_gives_the_local_z(tmp_path: Path, schema: str) -> None:
    # Axis (1, 0, 1) on a member along (0, 0.8, 0.6): taking off 0.6 along the member leaves
    # (1, -0.48, 0.64), of length sqrt(1.64).
    member = only_member(stick(schema, axis=(1.0, 0.0, 1.0)), tmp_path)
    size = math.sqrt(1.64)
    assert member.up == pytest.approx((1.0 / size, -0.48 / size, 0.64 / size))


@pytest.mark.parametrize("schema", SCHEMAS)
def test_without_an_axis_the_depth_is_upright(tmp_path: Path, schema: str) -> None:
    building = read(stick(schema, axis=None), tmp_path)
    assert building.members[0].up == pytest.approx((0.0, -0.6, 0.8))
    # From IFC4 on the axis is mandatory; in IFC2X3 this is what is meant.
    assert ("orientation-assumed" in slugs(building)) == (schema != "IFC2X3")


@pytest.mark.parametrize("schema", SCHEMAS)
def test_without_an_axis_the_depth_of_a_column_is_along_x(tmp_path: Path, schema: str) -> None:
    joints = (Joint("A", (0.0, 0.0, 0.0), fixed()), Joint("B", (0.0, 0.0, 4.0)))
    column = Stick("M", joints[0].point, joints[1].point, (Link("A"), Link("B")), axis=None)
    building = read(Model(joints, (column,)), tmp_path, schema=schema)
    assert building.members[0].up == pytest.approx((1.0, 0.0, 0.0))
    assert finding(building, "orientation-assumed").elements


@pytest.mark.parametrize(
    ("end", "degrees", "expected"),
    [
        ((5.0, 0.0, 0.0), 90.0, (0.0, -1.0, 0.0)),
        ((5.0, 0.0, 0.0), 30.0, (0.0, -0.5, math.sqrt(0.75))),
        ((0.0, 0.0, 5.0), 90.0, (0.0, 1.0, 0.0)),
        ((0.0, 0.0, 5.0), 30.0, (math.sqrt(0.75), 0.5, 0.0)),
    ],
)
def test_ifc2x3_may_turn_the_section_by_an_angle(
    tmp_path: Path, end: Any, degrees: float, expected: Any
) -> None:
    # IFC2X3, IfcRelAssociatesProfileProperties: counted from z for beams, from x for columns;
    # turning about the member's x takes z towards -y, and for an upright member x towards y.
    joints = (Joint("A", (0.0, 0.0, 0.0), fixed()), Joint("B", end))
    member = Stick("M", joints[0].point, end, (Link("A"), Link("B")))
    made = AnalysisFile(Model(joints, (member,)), schema="IFC2X3", units="mm_kN")
    (relation,) = made.file.by_type("IfcRelAssociatesProfileProperties")
    relation.ProfileOrientation = made.create("IfcPlaneAngleMeasure", degrees)
    assert read(made, tmp_path).members[0].up == pytest.approx(expected, abs=1e-12)


def test_an_axis_along_the_member_is_a_finding(tmp_path: Path) -> None:
    building = read(stick(axis=(0.0, 4.0, 3.0)), tmp_path)
    assert building.members[0].up == pytest.approx((0.0, -0.6, 0.8))
    assert finding(building, "axis-along-member").severity == "warning"


# -- type, section, ties ---------------------------------------------------------------------


@pytest.mark.parametrize(
    "kind", ["PIN_JOINED_MEMBER", "CABLE", "TENSION_MEMBER", "COMPRESSION_MEMBER"]
)
def test_members_for_axial_force_carry_no_moment(tmp_path: Path, kind: str) -> None:
    building = read(stick(kind=kind), tmp_path)
    assert not building.members[0].carries_moment
    assert kind in finding(building, "axial-member").message


def test_a_tapered_member_has_two_sections(tmp_path: Path) -> None:
    member = only_member(stick(end_section=SectionSpec("R 200x600", 0.2, 0.6)), tmp_path)
    assert member.section.inertia == pytest.approx(0.2 * 0.4**3 / 12)
    assert member.end_section.inertia == pytest.approx(0.2 * 0.6**3 / 12)


@pytest.mark.parametrize(("point", "offset"), [(8, 0.2), (2, 0.2), (5, 0.0), (10, 0.0)])
def test_a_section_off_the_axis_is_noted(tmp_path: Path, point: int, offset: float) -> None:
    building = read(stick(cardinal_point=point), tmp_path)
    assert building.members[0].axis_offset == pytest.approx(offset)
    assert ("eccentric-section" in slugs(building)) == (offset > 0.0)


def test_ifc2x3_sections_may_be_stated_by_values_alone(tmp_path: Path) -> None:
    made = stick("IFC2X3")
    (relation,) = made.file.by_type("IfcRelAssociatesProfileProperties")
    relation.RelatingProfileProperties = made.create(
        "IfcStructuralProfileProperties", ProfileName="HE test", CrossSectionArea=5.38e-3,
        MomentOfInertiaY=3.692e-5, MomentOfInertiaZ=1.336e-5, ShearDeformationAreaZ=1.3e-3,
    )  # fmt: skip
    section = only_member(made, tmp_path).section
    assert (section.name, section.area, section.inertia) == ("HE test", 5.38e-3, 3.692e-5)
    assert (section.inertia_lateral, section.shear_area) == (1.336e-5, 1.3e-3)


def test_the_first_of_several_profiles_is_taken_and_said(tmp_path: Path) -> None:
    made = stick()
    (usage,) = made.file.by_type("IfcMaterialProfileSetUsage")
    whole = usage.ForProfileSet
    deeper = made.create("IfcRectangleProfileDef", "AREA", "deep", None, 0.2, 0.8)
    second = made.create("IfcMaterialProfile", None, None, None, deeper)
    whole.MaterialProfiles = [*whole.MaterialProfiles, second]
    building = read(made, tmp_path)
    assert building.members[0].section.depth == pytest.approx(0.4)
    found = finding(building, "material-choice")
    assert (found.severity, found.elements) == ("warning", (made.by_name["M"].GlobalId,))
    assert "of 2 profiles" in found.message


def test_several_sections_along_an_ifc2x3_member_are_a_finding(tmp_path: Path) -> None:
    made = stick("IFC2X3")
    other = made.create("IfcGeneralProfileProperties", "other")
    made.relate("IfcRelAssociatesProfileProperties", "second", [made.by_name["M"]], other)
    building = read(made, tmp_path)
    assert building.members[0].section.depth == pytest.approx(0.4)
    assert finding(building, "varying-section").elements == (made.by_name["M"].GlobalId,)


def test_an_implausible_modulus_is_a_finding_with_its_members(tmp_path: Path) -> None:
    made = AnalysisFile(continuous_beam([3.0, 4.0]))
    for value in made.file.by_type("IfcPropertySingleValue"):
        if value.Name == "YoungModulus":
            value.NominalValue = made.create("IfcModulusOfElasticityMeasure", 210e3)
    found = finding(read(made, tmp_path), "implausible-modulus")
    assert "0.00021 GPa" in found.message
    assert set(found.elements) == {made.by_name["M1"].GlobalId, made.by_name["M2"].GlobalId}


@pytest.mark.parametrize("way", ["item first", "element first", "IFC2X3 relation"])
def test_members_are_tied_to_the_elements_they_stand_for(tmp_path: Path, way: str) -> None:
    made = stick("IFC2X3" if way == "IFC2X3 relation" else "IFC4")
    beam = made.rooted("IfcBeam", "the beam")
    member = made.by_name["M"]
    if way == "IFC2X3 relation":
        made.relate("IfcRelConnectsStructuralElement", "tie", beam, member)
    else:
        pair = (member, beam) if way == "item first" else (beam, member)
        made.relate("IfcRelAssignsToProduct", "tie", [pair[0]], None, pair[1])
    assert only_member(made, tmp_path).element == beam.GlobalId


def test_a_varying_member_is_read_as_its_parts_and_loaded_as_a_whole(tmp_path: Path) -> None:
    made = AnalysisFile(
        continuous_beam(
            [3.0, 5.0],
            cases=[Case("G")],
            actions=[
                SpreadLoad("ramp", "G", "M1", ((0.0, 0.0, 0.0), (0.0, 0.0, -8e3)), (2.0, 6.0))
            ],
        )
    )
    parts = [made.by_name["M1"], made.by_name["M2"]]
    whole = made.rooted(
        "IfcStructuralCurveMemberVarying", "whole", None, None, made.origin, None,
        "RIGID_JOINED_MEMBER", made.direction((0.0, 0.0, 1.0)),
    )  # fmt: skip
    made.relate("IfcRelAggregates", "parts", whole, parts)
    (relation,) = made.file.by_type("IfcRelConnectsStructuralActivity")
    relation.RelatingElement = whole
    building = read(made, tmp_path)
    assert [m.name for m in building.members] == ["M1", "M2"]
    names = {m.global_id: m.name for m in building.members}
    first, second = sorted(building.actions, key=lambda a: names[a.member])
    assert first.stations == pytest.approx((2.0, 3.0))
    assert [f[2] for f in first.forces] == pytest.approx([0.0, -2e3])
    assert second.stations == pytest.approx((0.0, 3.0))
    assert [f[2] for f in second.forces] == pytest.approx([-2e3, -8e3])


def test_forces_on_a_varying_member_fall_on_the_part_where_they_act(tmp_path: Path) -> None:
    loads = [
        PointLoad(f"P{at}", "G", "M1", at, (0.0, 0.0, -1e3), as_vertex=False)
        for at in (0.0, 1.0, 2.5, 3.0, 5.0)
    ]
    made = AnalysisFile(continuous_beam([3.0, 5.0], cases=[Case("G")], actions=loads))
    parts = [made.by_name["M1"], made.by_name["M2"]]
    whole = made.rooted(
        "IfcStructuralCurveMemberVarying", "whole", PredefinedType="RIGID_JOINED_MEMBER"
    )
    made.relate("IfcRelAggregates", "parts", whole, parts)
    for relation in made.file.by_type("IfcRelConnectsStructuralActivity"):
        relation.RelatingElement = whole
    building = read(made, tmp_path)
    names = {m.global_id: m.name for m in building.members}
    found = {a.name: (names[a.member], a.stations[0]) for a in building.actions}
    assert found == {
        "P0.0": ("M1", 0.0), "P1.0": ("M1", 1.0), "P2.5": ("M1", 2.5), "P3.0": ("M2", 0.0),
        "P5.0": ("M2", 2.0),
    }  # fmt: skip


def test_a_varying_member_is_attached_by_its_parts(tmp_path: Path) -> None:
    made = AnalysisFile(continuous_beam([3.0, 5.0]))
    parts = [made.by_name["M1"], made.by_name["M2"]]
    whole = made.rooted(
        "IfcStructuralCurveMemberVarying", "whole", PredefinedType="RIGID_JOINED_MEMBER"
    )
    made.relate("IfcRelAggregates", "parts", whole, parts)
    for relation in made.file.by_type("IfcRelConnectsStructuralMember"):
        if relation.RelatedStructuralConnection.Name == "J1" and relation.Name.startswith("M1"):
            made.file.remove(relation)
        else:
            relation.RelatingStructuralMember = whole
    building = read(made, tmp_path)
    names = {x.global_id: x.name for x in (*building.members, *building.connections)}
    found = {(names[a.member], names[a.connection], a.position) for a in building.attachments}
    assert found == {("M1", "J0", 0.0), ("M1", "J1", 3.0), ("M2", "J1", 0.0), ("M2", "J2", 5.0)}


@pytest.mark.parametrize("name", ["M2", "J2"])
@pytest.mark.parametrize("global_id", ["as M1", "none"])
def test_what_has_no_global_id_of_its_own_is_named_and_left_out(
    tmp_path: Path, name: str, global_id: str
) -> None:
    made = AnalysisFile(continuous_beam([3.0, 5.0]))
    other = made.by_name["M1" if name == "M2" else "J0"]
    text = made.file.to_string()
    own = f"'{made.by_name[name].GlobalId}'"
    text = text.replace(own, f"'{other.GlobalId}'" if global_id == "as M1" else "$")
    path = tmp_path / "t.ifc"
    path.write_text(text)
    building = read_analytical(open_model(path))
    assert name not in {x.name for x in (*building.members, *building.connections)}
    found = finding(building, "no-own-global-id")
    assert found.severity == "error"
    assert f"#{made.by_name[name].id()}" in found.message


# -- the model -------------------------------------------------------------------------------


def test_several_models_are_read_together_with_a_note(tmp_path: Path) -> None:
    made = stick()
    made.rooted("IfcStructuralAnalysisModel", "second", None, None, "LOADING_3D")
    assert len(finding(read(made, tmp_path), "several-analysis-models").elements) == 2


@pytest.mark.parametrize("schema", SCHEMAS)
def test_items_outside_the_analysis_model_are_read_and_named(tmp_path: Path, schema: str) -> None:
    made = AnalysisFile(continuous_beam([4.0, 5.0]), schema=schema)
    (relation,) = [
        r for r in made.file.by_type("IfcRelAssignsToGroup")
        if r.RelatingGroup.is_a("IfcStructuralAnalysisModel")
    ]  # fmt: skip
    member = made.file.by_type("IfcStructuralCurveMember")[1]
    relation.RelatedObjects = [o for o in relation.RelatedObjects if o != member]
    building = read(made, tmp_path)

    found = finding(building, "item-outside-models")
    assert found.elements == (member.GlobalId,)
    assert found.severity == "warning"
    assert len(building.members) == 2


def test_items_in_a_group_of_the_model_are_not_outside(tmp_path: Path) -> None:
    made = AnalysisFile(continuous_beam([4.0, 5.0]), schema="IFC4")
    (relation,) = [
        r for r in made.file.by_type("IfcRelAssignsToGroup")
        if r.RelatingGroup.is_a("IfcStructuralAnalysisModel")
    ]  # fmt: skip
    inner = made.rooted("IfcGroup", "Storey 1")
    made.relate("IfcRelAssignsToGroup", "inner", list(relation.RelatedObjects), None, inner)
    relation.RelatedObjects = [inner]

    assert "item-outside-models" not in slugs(read(made, tmp_path))


def test_members_without_a_model_are_read_with_a_note(tmp_path: Path) -> None:
    made = stick()
    for relation in made.file.by_type("IfcRelAssignsToGroup"):
        made.file.remove(relation)
    made.file.remove(made.by_name["Test model analysis"])
    building = read(made, tmp_path)
    assert len(building.members) == 1
    assert "no-analysis-model" in slugs(building)


def test_storeys_come_with_their_levels(tmp_path: Path) -> None:
    made = stick()
    made.rooted("IfcBuildingStorey", "upper", Elevation=7.2)
    axes = made.create("IfcAxis2Placement3D", made.point((0.0, 0.0, 3.6)))
    placed = made.create("IfcLocalPlacement", None, axes)
    made.rooted("IfcBuildingStorey", "ground", ObjectPlacement=placed, Elevation=99.0)
    assert read(made, tmp_path).storeys == (("ground", 3.6), ("upper", 7.2))


def test_a_file_counts_what_it_holds(tmp_path: Path) -> None:
    counts = read(stick(), tmp_path).counts
    assert counts["IfcStructuralCurveMember"] == 1
    assert counts["IfcStructuralPointConnection"] == 2
