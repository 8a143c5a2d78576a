"""From a file to a Building: which elements are beams, where they lie, what carries them."""

import math
from dataclasses import replace

import numpy as np
import pytest
from body_makers import Maker, slugs

from analysis_core.ifc.physical.reader import read_physical
from analysis_core.ifc.source import open_model
from analysis_core.settings import (
    ActionSetting,
    Analysis,
    AreaActionSetting,
    BeamRules,
    Selector,
    Settings,
)


def beam(maker, name="B", length=6000.0, size=(200.0, 300.0), **more):
    solid = maker.extrusion(maker.rectangle(*size), length, maker.lying())
    return maker.element("IfcBeam", name, [solid], **more)


def finding(building, slug):
    return next(f for f in building.findings if f.slug == slug)


def ends(member):
    return np.array([member.start, member.end])


# Axis and body


def test_the_axis_gives_direction_and_extent_and_the_body_the_position(tmp_path):
    # The axis lies on the top face and reaches from column axis to column axis.
    maker = Maker()
    solid = maker.extrusion(maker.rectangle(200.0, 300.0), 5700.0, maker.lying((150, 0, -150)))
    maker.element("IfcBeam", "B", [solid], axis=maker.line((0, 0, 0), (6000, 0, 0)))

    building = maker.read(tmp_path)

    (member,) = building.members
    assert ends(member) == pytest.approx(np.array([[0, 0, -0.15], [6.0, 0, -0.15]]))
    assert member.modelled_start == pytest.approx((0.15, 0, -0.15))
    assert member.modelled_end == pytest.approx((5.85, 0, -0.15))
    assert member.axis_offset == pytest.approx(0.15)
    assert "150 to 150 mm" in finding(building, "axis-offset").message


def test_an_axis_in_the_plane_only_is_read_too(tmp_path):
    maker = Maker("IFC2X3")
    solid = maker.extrusion(maker.rectangle(200.0, 300.0), 6000.0, maker.lying())
    maker.element("IfcBeam", "B", [solid], axis=maker.line((6000, 0), (0, 0)), at=(0, 0, 3000))

    (member,) = maker.read(tmp_path).members

    # The member starts where its axis starts.
    assert ends(member) == pytest.approx(np.array([[6.0, 0, 3.0], [0, 0, 3.0]]))


@pytest.mark.parametrize(
    "axis", [((0, 0, 0), (0, 6000, 0)), ((0, 0, 0), (1000, 0, 0)), ((0, 0, 0), (20000, 0, 0))]
)
def test_an_axis_that_contradicts_its_body_is_passed_over(tmp_path, axis):
    maker = Maker()
    beam(maker, axis=maker.line(*axis))

    building = maker.read(tmp_path)

    assert ends(building.members[0]) == pytest.approx(np.array([[0, 0, 0], [6.0, 0, 0]]))
    assert "the body was taken" in finding(building, "body-assumed").message


@pytest.mark.parametrize(
    ("cardinal_point", "height"), [(2, 0.15), (5, 0.0), (8, -0.15), (10, 0.0), (0, 0.0)]
)
def test_an_axis_without_a_body_takes_its_profile_by_the_cardinal_point(
    tmp_path, cardinal_point, height
):
    maker = Maker()
    element = maker.element("IfcBeam", "B", axis=maker.line((0, 0, 3000), (6000, 0, 3000)))
    part = maker.make("IfcMaterialProfile", Material=maker.make("IfcMaterial", "S355"),
                      Profile=maker.rectangle(200.0, 300.0, "R"))  # fmt: skip
    usage = maker.make(
        "IfcMaterialProfileSetUsage",
        maker.make("IfcMaterialProfileSet", MaterialProfiles=[part]),
        cardinal_point or None,
    )
    maker.associate(usage, element)

    (member,) = maker.read(tmp_path).members

    assert ends(member) == pytest.approx(np.array([[0, 0, 3 + height], [6.0, 0, 3 + height]]))
    assert member.section.inertia == pytest.approx(0.2 * 0.3**3 / 12.0)
    assert member.material.elastic_modulus == 210e9


def test_a_profile_that_contradicts_the_body_is_reported(tmp_path):
    maker = Maker()
    element = beam(maker)
    part = maker.make("IfcMaterialProfile", Material=maker.make("IfcMaterial", "C30/37"),
                      Profile=maker.rectangle(200.0, 400.0, "200x400"))  # fmt: skip
    maker.associate(maker.make("IfcMaterialProfileSet", MaterialProfiles=[part]), element)

    building = maker.read(tmp_path)

    assert building.members[0].section.depth == pytest.approx(0.3)
    assert "'200x400' of 800 cm²" in finding(building, "profile-disagrees").message


# Places


def test_parents_are_placed_before_their_children(tmp_path):
    maker = Maker()
    storey = maker.make("IfcLocalPlacement", None, maker.axes((0, 0, 3000), (0, 0, 1), (0, 1, 0)))
    assembly = maker.make("IfcLocalPlacement", storey, maker.axes((1000, 0, 0)))
    beam(maker, at=(0, 500, 0), parent=assembly)

    (member,) = maker.read(tmp_path).members

    # Turned by 90°: x of the storey is y of the world.
    assert ends(member) == pytest.approx(np.array([[-0.5, 1.0, 3.0], [-0.5, 7.0, 3.0]]))


def test_map_coordinates_of_a_thousand_kilometres_lose_nothing(tmp_path):
    maker = Maker()
    far = maker.make(
        "IfcLocalPlacement", None, maker.axes((1186e6, -702e6, 45e3), (0, 0, 1), (0.6, 0.8, 0))
    )
    beam(maker, parent=far)

    (member,) = maker.read(tmp_path).members

    assert math.dist(member.start, member.end) == pytest.approx(6.0, abs=1e-9)
    assert member.section.inertia == pytest.approx(0.2 * 0.3**3 / 12.0, rel=1e-12)
    assert member.start == pytest.approx((1186e3, -702e3, 45.0), abs=1e-9)


def test_a_body_drawn_in_map_coordinates_loses_nothing(tmp_path):
    # Brep corners written a thousand kilometres off, in metres with nine decimals.
    from body_makers import box_faces, box_points

    maker = Maker(metres=True)
    points = [(1e6 + x, 2e6 + y, z) for x, y, z in box_points(6.0, 0.2, 0.3)]
    maker.element("IfcBeam", "B", [maker.brep(points, box_faces())], kind="Brep")

    (member,) = maker.read(tmp_path).members

    assert member.section.inertia == pytest.approx(0.2 * 0.3**3 / 12.0, rel=1e-7)
    assert ends(member) == pytest.approx(
        np.array([[1e6, 2e6 + 0.1, 0.15], [1e6 + 6.0, 2e6 + 0.1, 0.15]]), abs=1e-8
    )


def grid(maker):
    def axis(tag, *points):
        return maker.make("IfcGridAxis", tag, maker.line(*points), True)

    u = [axis("A", (0, 0), (20000, 0)), axis("B", (0, 6000), (20000, 6000))]
    v = [axis("1", (0, 0), (0, 20000)), axis("2", (7000, 0), (7000, 20000))]
    placement = maker.make("IfcLocalPlacement", None, maker.axes((0, 0, 4000)))
    maker.root("IfcGrid", "G", ObjectPlacement=placement, UAxes=u, VAxes=v)
    return u, v


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4"])
def test_an_element_placed_on_a_grid(tmp_path, schema):
    maker = Maker(schema)
    u, v = grid(maker)
    here = maker.make("IfcVirtualGridIntersection", [u[1], v[1]], [500.0, 0.0, 250.0])
    there = maker.make("IfcVirtualGridIntersection", [u[1], v[0]], [500.0, 0.0, 250.0])
    element = beam(maker)
    element.ObjectPlacement = maker.make(
        "IfcGridPlacement", PlacementLocation=here, PlacementRefDirection=there
    )
    beam(maker, "other", at=(0, 0, 9000))

    building = maker.read(tmp_path)

    member = next(m for m in building.members if m.name == "B")
    # Crossing of B (offset 0.5 m to its left) and 2, 0.25 m up, x towards axis 1.
    assert ends(member) == pytest.approx(np.array([[7.0, 6.5, 4.25], [1.0, 6.5, 4.25]]))
    assert len(building.members) == 2


def test_a_placement_that_cannot_be_resolved_names_its_element_and_no_other(tmp_path):
    maker = Maker()
    u, _ = grid(maker)
    nowhere = maker.make("IfcVirtualGridIntersection", [u[0], u[1]], [0.0, 0.0])  # parallel
    element = beam(maker, "lost")
    element.ObjectPlacement = maker.make("IfcGridPlacement", PlacementLocation=nowhere)
    beam(maker, "found")

    building = maker.read(tmp_path)

    assert [m.name for m in building.members] == ["found"]
    found = finding(building, "no-representation")
    assert "'lost'" in found.message
    assert "grid axes of its placement are parallel" in found.message


def test_placements_nested_in_a_circle_end(tmp_path):
    maker = Maker()
    first = maker.make("IfcLocalPlacement", None, maker.axes((0, 0, 0)))
    second = maker.make("IfcLocalPlacement", first, maker.axes((0, 0, 0)))
    first.PlacementRelTo = second
    beam(maker, "round", parent=second)

    building = maker.read(tmp_path)

    assert "nested in a circle" in finding(building, "no-representation").message


def test_an_element_placed_along_an_alignment(tmp_path):
    maker = Maker("IFC4X3")
    line = maker.line((0, 0, 0), (10000, 0, 0), (10000, 10000, 0))
    along = maker.make(
        "IfcPointByDistanceExpression", maker.make("IfcLengthMeasure", 14000.0), 500.0, 300.0,
        None, line,
    )  # fmt: skip
    element = beam(maker)
    element.ObjectPlacement = maker.make(
        "IfcLinearPlacement", None, maker.make("IfcAxis2PlacementLinear", along)
    )

    (member,) = maker.read(tmp_path).members

    # 4 m up the second leg, 0.5 m to the left of it, 0.3 m above.
    assert ends(member) == pytest.approx(np.array([[9.5, 4.0, 0.3], [9.5, 10.0, 0.3]]))


# What is a beam


def test_what_is_no_beam_by_its_proportions_is_named_with_the_reason(tmp_path):
    maker = Maker()
    beam(maker, "good")
    beam(maker, "stub", length=400.0)
    beam(maker, "block", length=1500.0, size=(300.0, 900.0))
    beam(maker, "rod", length=900.0, size=(24.0, 24.0))
    beam(maker, "strip", length=4000.0, size=(150.0, 12.0))
    beam(maker, "panel", length=9000.0, size=(200.0, 2400.0))
    beam(maker, "deck", length=8000.0, size=(2000.0, 200.0))

    building = maker.read(tmp_path)

    assert [m.name for m in building.members] == ["good"]
    left_out = [f for f in building.findings if f.slug == "not-a-beam"]
    said = {f.message.split("(")[1].split(")")[0]: f.message for f in left_out}
    for name, words in (
        ("'stub'", "shorter than 0.5 m"),
        ("'block'", "shorter than 3 times"),
        ("'rod'", "thinner than 40 mm"),
        ("'strip'", "thinner than 20 mm"),
        ("'panel'", "a wall panel"),
        ("'deck'", "a slab strip"),
    ):
        assert words in said[name], name
    assert {e for f in left_out for e in f.elements} == {
        e.GlobalId for e in maker.file.by_type("IfcBeam") if e.Name != "good"
    }
    # Panels and decks may still carry what rests on them.
    assert {c.ifc_class for c in building.carriers} == {
        "IfcBeam (wall panel)",
        "IfcBeam (slab strip)",
    }
    assert building.counts["IfcBeam"] == 7
    assert building.counts["taken as beams"] == 1
    assert building.counts["left out"] == 6


def test_the_rules_can_be_changed(tmp_path):
    maker = Maker()
    beam(maker, "stub", length=400.0, size=(100.0, 100.0))
    rules = BeamRules(least_length=0.3)

    building = maker.read(tmp_path, Settings(beams=rules))

    assert [m.name for m in building.members] == ["stub"]


def test_a_steep_beam_is_a_column_and_a_pile_too(tmp_path):
    maker = Maker()
    upright = maker.extrusion(maker.rectangle(200.0, 300.0), 4000.0)
    maker.element("IfcBeam", "post", [upright])
    raking = maker.extrusion(
        maker.rectangle(200.0, 300.0), 4000.0, maker.axes((0, 0, 0), (0.3, 0, 1), (0, 1, 0))
    )
    maker.element("IfcMember", "raker", [raking], at=(5000, 0, 0))
    maker.element("IfcPile", "pile", [upright], at=(9000, 0, -4000))

    building = maker.read(tmp_path)

    assert not building.members
    by_name = {c.name: c for c in building.carriers}
    assert by_name["post"].start == pytest.approx((0, 0, 0))
    assert by_name["post"].end == pytest.approx((0, 0, 4.0))
    assert by_name["raker"].end[2] > by_name["raker"].start[2]
    assert by_name["pile"].top == pytest.approx(0.0)
    assert building.counts["taken as columns"] == 2
    (told,) = [f for f in building.findings if f.slug == "steep-member"]
    assert len(told.elements) == 2
    assert "steeper than 60 degrees and taken as columns" in told.message


def test_members_are_judged_by_their_role(tmp_path):
    maker = Maker()
    wall = maker.root("IfcCurtainWall", "facade")
    solid = maker.extrusion(maker.rectangle(60.0, 120.0), 3000.0, maker.lying())
    transom = maker.element("IfcMember", "transom", [solid])
    maker.root("IfcRelAggregates", RelatingObject=wall, RelatedObjects=[transom])
    for place, (name, role) in enumerate(
        (("mullion", "MULLION"), ("tie", "BRACE"), ("purlin", "PURLIN")), start=1
    ):
        maker.element("IfcMember", name, [solid], at=(0, 1000 * place, 0), PredefinedType=role)

    building = maker.read(tmp_path)

    assert [m.name for m in building.members] == ["purlin"]
    text = " ".join(f.message for f in building.findings if f.slug == "not-a-beam")
    for words in ("part of a curtain wall", "a mullion", "a brace"):
        assert words in text
    everything = maker.read(tmp_path, Settings(beams=BeamRules(judge_by_role=False)))
    assert len(everything.members) == 4


def test_other_classes_can_be_included(tmp_path):
    maker = Maker()
    solid = maker.extrusion(maker.rectangle(200.0, 300.0), 6000.0, maker.lying())
    maker.element("IfcBuildingElementProxy", "proxy", [solid])
    settings = Settings(analysis=Analysis(include=("IfcBuildingElementProxy", "IfcNothing")))

    building = maker.read(tmp_path, settings)

    assert [m.ifc_class for m in building.members] == ["IfcBuildingElementProxy"]
    assert "IfcNothing" in finding(building, "unknown-class").message
    assert not maker.read(tmp_path).members


# Identity


def test_a_beam_drawn_twice_is_taken_once(tmp_path):
    maker = Maker()
    beam(maker, "first")
    beam(maker, "second", at=(3, 2, 1))
    beam(maker, "beside", at=(0, 500, 0))
    beam(maker, "turned", at=(6000, 0, 0), z=(0, 0, 1), x=(-1, 0, 0))

    building = maker.read(tmp_path)

    assert [m.name for m in building.members] == ["first", "beside"]
    doubled = [f for f in building.findings if f.slug == "duplicate-member"]
    assert {f.message.split("'")[1] for f in doubled} == {"second", "turned"}


def test_two_beams_of_one_global_id_cannot_be_told_apart(tmp_path):
    maker = Maker()
    first = beam(maker, "first")
    beam(maker, "second", at=(0, 5000, 0), GlobalId=first.GlobalId)

    building = maker.read(tmp_path)

    assert [m.name for m in building.members] == ["first"]
    found = [f for f in building.findings if f.slug == "duplicate-global-id"]
    assert found[-1].severity == "error"
    assert "'second'" in found[-1].message


def test_an_element_in_two_containers_is_taken_once(tmp_path):
    maker = Maker()
    element = beam(maker)
    ground = maker.root("IfcBuildingStorey", "Ground")
    first = maker.root("IfcBuildingStorey", "First")
    maker.contain(ground, element)
    maker.contain(first, element)

    building = maker.read(tmp_path)

    assert building.members[0].storey == "Ground"
    assert "'Ground', 'First'" in finding(building, "two-containers").message


@pytest.mark.parametrize(
    ("ifc_class", "severity"), [("IfcBeam", "error"), ("IfcMember", "warning")]
)
def test_an_element_without_a_body_is_named(tmp_path, ifc_class, severity):
    """A beam that is missing from the analysis must not end in the status of full success."""
    maker = Maker()
    element = maker.element(ifc_class, "bare")

    building = maker.read(tmp_path)

    found = finding(building, "no-representation")
    assert (found.severity, found.elements) == (severity, (element.GlobalId,))
    assert "it has no representation" in found.message


def test_an_extrusion_without_depth_is_named(tmp_path):
    maker = Maker()
    solid = maker.extrusion(maker.rectangle(200.0, 300.0), 0.0, maker.lying())
    maker.element("IfcBeam", "flat", [solid])

    building = maker.read(tmp_path)

    assert "no extent" in finding(building, "no-representation").message


def test_a_whole_is_read_by_its_parts(tmp_path):
    maker = Maker()
    whole = maker.element("IfcBeam", "whole", at=(0, 0, 3000))
    solid = maker.extrusion(maker.rectangle(200.0, 300.0), 6000.0, maker.lying())
    part = maker.element("IfcBuildingElementPart", "part", [solid], parent=whole.ObjectPlacement,
                         at=(0, 100, 0))  # fmt: skip
    maker.root("IfcRelAggregates", RelatingObject=whole, RelatedObjects=[part])

    (member,) = maker.read(tmp_path).members

    assert ends(member) == pytest.approx(np.array([[0, 0.1, 3.0], [6.0, 0.1, 3.0]]))


def test_beams_within_beams_are_read_once(tmp_path):
    maker = Maker()
    whole = beam(maker, "whole", at=(0, 0, 3000))
    inner = beam(maker, "layer", size=(200.0, 100.0), at=(0, 0, 3100))
    maker.root("IfcRelAggregates", RelatingObject=whole, RelatedObjects=[inner])
    shell = maker.element("IfcBeam", "shell")
    left, right = beam(maker, "left", 3000.0), beam(maker, "right", 3000.0, at=(3000, 0, 0))
    maker.root("IfcRelAggregates", RelatingObject=shell, RelatedObjects=[left, right])

    building = maker.read(tmp_path)

    assert {m.name for m in building.members} == {"whole", "left", "right"}
    text = " ".join(f.message for f in building.findings if f.slug == "not-a-beam")
    assert "('layer') not taken as beams: part of a beam that is read as a whole" in text
    assert "('shell') not taken as beams: drawn by its parts" in text


def test_a_column_that_lies_flat_is_a_beam(tmp_path):
    maker = Maker()
    solid = maker.extrusion(maker.rectangle(200.0, 300.0), 6000.0, maker.lying())
    maker.element("IfcColumn", "C", [solid])

    building = maker.read(tmp_path)

    assert [m.name for m in building.members] == ["C"]
    assert "lying-column" in slugs(building)


# Storeys, types, names


def test_storeys_by_level_and_through_assemblies(tmp_path):
    maker = Maker()
    upper = maker.make("IfcLocalPlacement", None, maker.axes((0, 0, 6500)))
    roof = maker.root("IfcBuildingStorey", "Roof", ObjectPlacement=upper, Elevation=9999.0)
    floor = maker.root("IfcBuildingStorey", "Floor", Elevation=3000.0)
    assembly = maker.root("IfcElementAssembly", "A")
    element = beam(maker)
    maker.root("IfcRelAggregates", RelatingObject=assembly, RelatedObjects=[element])
    maker.contain(roof, assembly)
    space = maker.root("IfcSpace", "hall")
    other = beam(maker, "other", at=(0, 0, 3000))
    maker.root("IfcRelAggregates", RelatingObject=floor, RelatedObjects=[space])
    maker.contain(space, other)

    building = maker.read(tmp_path)

    # The placement of a storey counts before its stated elevation.
    assert building.storeys == (("Floor", pytest.approx(3.0)), ("Roof", pytest.approx(6.5)))
    assert {m.name: m.storey for m in building.members} == {"B": "Roof", "other": "Floor"}


def test_the_type_gives_its_name_to_a_profile_without_one(tmp_path):
    maker = Maker()
    element = beam(maker)
    kind = maker.root("IfcBeamType", "RB 200/300", PredefinedType="BEAM")
    maker.root("IfcRelDefinesByType", RelatedObjects=[element], RelatingType=kind)

    (member,) = maker.read(tmp_path).members

    assert (member.type_name, member.section.name) == ("RB 200/300", "RB 200/300")


def test_openings_in_beams_are_named(tmp_path):
    maker = Maker()
    element = beam(maker)
    hole = maker.element("IfcOpeningElement", "hole")
    maker.root("IfcRelVoidsElement", RelatingBuildingElement=element, RelatedOpeningElement=hole)

    building = maker.read(tmp_path)

    assert finding(building, "openings-ignored").elements == (element.GlobalId,)


# What carries


def test_columns_have_axis_outline_and_levels(tmp_path):
    maker = Maker()
    profile = maker.profile("IfcCircleProfileDef", None, Position=maker.axes_2d(), Radius=250.0)
    maker.element("IfcColumn", "C", [maker.extrusion(profile, 4000.0)], at=(1000, 2000, -500))

    (column,) = maker.read(tmp_path).carriers

    assert column.start == pytest.approx((1.0, 2.0, -0.5))
    assert column.end == pytest.approx((1.0, 2.0, 3.5))
    assert (column.bottom, column.top) == pytest.approx((-0.5, 3.5))
    assert len(column.corners) >= 12
    radii = [math.dist(corner, (1.0, 2.0)) for corner in column.corners]
    assert radii == pytest.approx([0.25] * len(radii))
    assert column.section.inertia == pytest.approx(math.pi * 0.25**4 / 4.0)


def test_a_column_keeps_the_orientation_of_its_section(tmp_path):
    maker = Maker()
    solid = maker.extrusion(maker.rectangle(200.0, 400.0), 3000.0)
    maker.element("IfcColumn", "C", [solid], z=(0, 0, 1), x=(0, 1, 0))

    (column,) = maker.read(tmp_path).carriers

    # The profile's depth (400) runs along -x of the world.
    assert np.abs(column.up) == pytest.approx(np.array([1.0, 0.0, 0.0]), abs=1e-9)
    assert column.section.inertia == pytest.approx(0.2 * 0.4**3 / 12.0)


def test_a_wall_cut_by_a_roof_ends_where_it_is_cut(tmp_path):
    maker = Maker()
    solid = maker.extrusion(maker.rectangle(6000.0, 200.0), 5000.0)
    roof = maker.make("IfcPlane", maker.axes((0, 0, 3000), (0.5, 0, 1), (1, 0, -0.5)))
    half = maker.make("IfcHalfSpaceSolid", roof, False)
    clipped = maker.make("IfcBooleanClippingResult", "DIFFERENCE", solid, half)
    maker.element("IfcWall", "W", [clipped], kind="Clipping")

    (wall,) = maker.read(tmp_path).carriers

    # Highest at the left end: 3 m plus half of 3 m.
    assert wall.top == pytest.approx(4.5)
    assert np.array(sorted(wall.corners)) == pytest.approx(
        np.array([(-3.0, -0.1), (-3.0, 0.1), (3.0, -0.1), (3.0, 0.1)])
    )


def test_walls_come_with_their_openings(tmp_path):
    maker = Maker()
    body = maker.extrusion(maker.rectangle(6000.0, 200.0), 3000.0)
    wall = maker.element("IfcWall", "W", [body], at=(3000, 0, 1000))
    hole = maker.extrusion(maker.rectangle(900.0, 400.0), 2100.0)
    door = maker.element("IfcOpeningElement", "door", [hole], at=(500, 0, 0),
                         parent=wall.ObjectPlacement)  # fmt: skip
    maker.root("IfcRelVoidsElement", RelatingBuildingElement=wall, RelatedOpeningElement=door)

    (carrier,) = maker.read(tmp_path).carriers

    (opening,) = carrier.openings
    assert (opening.bottom, opening.top) == pytest.approx((1.0, 3.1))
    xs = [x for x, _ in opening.corners]
    assert (min(xs), max(xs)) == pytest.approx((3.05, 3.95))


def test_slabs_are_areas_with_their_openings(tmp_path):
    maker = Maker()
    shape = [(0, 0), (8000, 0), (8000, 3000), (5000, 3000), (5000, 7000), (0, 7000)]
    slab = maker.element("IfcSlab", "S", [maker.extrusion(maker.polygon(shape), 200.0)],
                         at=(1000, 0, 3000))  # fmt: skip
    for name, origin, depth in (("stair", (2000, 1000), 300.0), ("recess", (4000, 5000), 50.0),
                                ("edge", (7500, 1000), 300.0)):  # fmt: skip
        hole = maker.extrusion(maker.polygon([(0, 0), (900, 0), (900, 900), (0, 900)]), depth)
        opening = maker.element("IfcOpeningElement", name, [hole], at=(*origin, -50),
                                parent=slab.ObjectPlacement)  # fmt: skip
        maker.root(
            "IfcRelVoidsElement", RelatingBuildingElement=slab, RelatedOpeningElement=opening
        )

    building = maker.read(tmp_path)

    (area,) = building.areas
    expected = np.array([(1.0 + x / 1e3, y / 1e3) for x, y in shape])
    assert np.array(area.outline) == pytest.approx(expected)
    assert (area.bottom, area.top) == pytest.approx((3.0, 3.2))
    # The recess does not go through, the edge opening cuts the outline: it is named.
    (void,) = area.voids
    assert np.array(sorted(void)) == pytest.approx(
        np.array([(3.0, 1.0), (3.0, 1.9), (3.9, 1.0), (3.9, 1.9)])
    )
    assert "opening-at-edge" in slugs(building)
    assert building.carriers[0].ifc_class == "IfcSlab"


def test_spaces_are_read_where_area_loads_are_stated(tmp_path):
    maker = Maker()
    room = maker.polygon([(0, 0), (4000, 0), (4000, 5000), (0, 5000)])
    maker.element("IfcSpace", "hall", [maker.extrusion(room, 2800.0)], at=(0, 0, 3000))
    load = AreaActionSetting("Q", Selector(ifc_class="IfcSpace"), 3000.0)

    without = maker.read(tmp_path)
    building = maker.read(tmp_path, Settings(area_actions=(load,)))

    assert not without.areas
    (area,) = building.areas
    assert (area.bottom, area.top) == pytest.approx((3.0, 3.0))


def test_a_slab_of_faces_keeps_its_true_outline(tmp_path):
    maker = Maker()
    ring = [(0, 0), (8000, 0), (8000, 3000), (5000, 3000), (5000, 7000), (0, 7000)]
    points = [(x, y, z) for z in (0.0, 200.0) for x, y in ring]
    count = len(ring)
    faces = [tuple(range(count - 1, -1, -1)), tuple(range(count, 2 * count))]
    faces += [(i, (i + 1) % count, (i + 1) % count + count, i + count) for i in range(count)]
    maker.element("IfcSlab", "S", [maker.brep(points, faces)], kind="Brep")

    (area,) = maker.read(tmp_path).areas

    expected = np.array(sorted((x / 1e3, y / 1e3) for x, y in ring))
    assert np.array(sorted(area.outline)) == pytest.approx(expected)


# Releases


def with_property(maker, element, name, value, measure="IfcLabel"):
    item = maker.make("IfcPropertySingleValue", name, None, maker.make(measure, value))
    group = maker.root("IfcPropertySet", "Structural", HasProperties=[item])
    maker.root(
        "IfcRelDefinesByProperties",
        RelatedObjects=[element],
        RelatingPropertyDefinition=group,
    )


def test_unmistakable_releases_in_property_sets_are_taken(tmp_path):
    maker = Maker()
    element = beam(maker)
    with_property(maker, element, "Start Release", "Pinned")
    with_property(maker, element, "End Release", "Fixed")
    other = beam(maker, "other", at=(0, 3000, 0))
    with_property(maker, other, "End_Release_My", True, "IfcBoolean")
    vague = beam(maker, "vague", at=(0, 6000, 0))
    with_property(maker, vague, "Start Release", "User")
    with_property(maker, vague, "End Release", True, "IfcBoolean")
    with_property(maker, vague, "Release date", "Fixed")

    members = {m.name: m.end_stiffness for m in maker.read(tmp_path).members}

    assert members == {"B": (0.0, math.inf), "other": (None, 0.0), "vague": (None, None)}


# Schemas and the whole


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
def test_all_schemas_read_alike(tmp_path, schema):
    maker = Maker(schema)
    element = beam(maker, at=(0, 0, 3000))
    maker.associate(maker.make("IfcMaterial", "GL24h"), element)
    storey = maker.root("IfcBuildingStorey", "First")
    maker.contain(storey, element)
    maker.element("IfcColumn", "C", [maker.extrusion(maker.rectangle(300.0, 300.0), 3000.0)])
    maker.element("IfcWall", "W", [maker.extrusion(maker.rectangle(4000.0, 200.0), 3000.0)])
    maker.element("IfcFooting", "F", [maker.extrusion(maker.rectangle(900.0, 900.0), 500.0)])

    building = maker.read(tmp_path)

    (member,) = building.members
    assert building.schema == schema
    assert (member.storey, member.material.elastic_modulus) == ("First", 11.5e9)
    assert {c.ifc_class for c in building.carriers} == {"IfcColumn", "IfcWall", "IfcFooting"}
    assert not [f for f in building.findings if f.severity != "note"], building.findings


def test_inches_are_metres_inside(tmp_path):
    maker = Maker()
    size = maker.make(
        "IfcMeasureWithUnit",
        maker.make("IfcLengthMeasure", 0.0254),
        maker.make("IfcSIUnit", UnitType="LENGTHUNIT", Name="METRE"),
    )
    one = maker.make("IfcDimensionalExponents", 1, 0, 0, 0, 0, 0, 0)
    inch = maker.make("IfcConversionBasedUnit", one, "LENGTHUNIT", "INCH", size)
    maker.project.UnitsInContext.Units = [inch, maker.project.UnitsInContext.Units[1]]
    beam(maker, length=240.0, size=(8.0, 12.0))

    (member,) = maker.read(tmp_path).members

    assert ends(member) == pytest.approx(np.array([[0, 0, 0], [6.096, 0, 0]]))
    assert member.section.inertia == pytest.approx(8.0 * 12.0**3 / 12.0 * 0.0254**4)


def test_the_garbage_collector_runs_again_after_an_error(tmp_path):
    import gc

    maker = Maker()
    source = open_model(maker.write(tmp_path))
    broken = replace(Settings(), analysis=None)  # a programmer's slip

    with pytest.raises(AttributeError):
        read_physical(source, broken)

    assert gc.isenabled()


def test_nothing_is_said_about_actions_here(tmp_path):
    # Actions of the job file are the idealisation's business.
    maker = Maker()
    beam(maker)
    action = ActionSetting("Q", Selector(), "uniform", (5000.0,))

    assert maker.read(tmp_path, Settings(actions=(action,))).actions == ()


@pytest.mark.parametrize("as_faces", [False, True])
def test_a_shaft_carries_by_its_walls_and_not_by_what_it_encloses(tmp_path, as_faces):
    # A U-shaped core wall, 4 x 3 m, 250 thick, open to the right, turned by 20°.
    maker = Maker()
    ring = [(0, 0), (4000, 0), (4000, 250), (250, 250), (250, 2750), (4000, 2750), (4000, 3000),
            (0, 3000)]  # fmt: skip
    if as_faces:
        count = len(ring)
        points = [(x, y, z) for z in (0.0, 9000.0) for x, y in ring]
        faces = [tuple(range(count - 1, -1, -1)), tuple(range(count, 2 * count))]
        faces += [(i, (i + 1) % count, (i + 1) % count + count, i + count) for i in range(count)]
        body = maker.brep(points, faces)
    else:
        body = maker.extrusion(maker.polygon(ring), 9000.0)
    turn = math.radians(20.0)
    wall = maker.element("IfcWall", "core", [body], z=(0, 0, 1),
                         x=(math.cos(turn), math.sin(turn), 0))  # fmt: skip

    pieces = maker.read(tmp_path).carriers

    assert {p.global_id for p in pieces} == {wall.GlobalId}
    assert len(pieces) == 3
    areas = []
    for piece in pieces:
        x, y = np.array(piece.corners).T
        areas.append(abs(0.5 * (x * np.roll(y, -1) - np.roll(x, -1) * y).sum()))
    assert sum(areas) == pytest.approx(4.0 * 3.0 - 3.75 * 2.5)
    assert {(p.bottom, p.top) for p in pieces} == {(0.0, 9.0)}


def test_a_ring_of_walls_and_a_triangle(tmp_path):
    maker = Maker()
    outer = [(0, 0), (3000, 0), (3000, 3000), (0, 3000)]
    inner = [(200, 200), (2800, 200), (2800, 2800), (200, 2800)]
    shaft = maker.extrusion(maker.polygon(outer, voids=[inner]), 3000.0)
    maker.element("IfcWall", "shaft", [shaft])
    wedge = maker.extrusion(maker.polygon([(0, 0), (3000, 0), (0, 2000)]), 3000.0)
    maker.element("IfcWall", "wedge", [wedge], at=(5000, 0, 0))

    carriers = maker.read(tmp_path).carriers

    assert [c.name for c in carriers].count("shaft") == 4
    assert [c.name for c in carriers].count("wedge") == 1
