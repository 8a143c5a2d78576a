"""Every way a straight member's body is modelled: line, section and orientation in the world."""

import math

import ifcopenshell.geom
import numpy as np
import pytest
from body_makers import Maker, box_faces, box_points, slugs

I_HALF = [(60, -120), (60, -110.2), (3.1, -110.2), (3.1, 110.2), (60, 110.2), (60, 120)]
I_POINTS = [*I_HALF, *((-x, y) for x, y in reversed(I_HALF))]
I_INERTIA = (120.0 * 240.0**3 - 113.8 * 220.4**3) / 12.0 * 1e-12
BOX_INERTIA = 0.2 * 0.3**3 / 12.0


def only_member(maker, folder):
    building = maker.read(folder)
    assert len(building.members) == 1, building.findings
    return building.members[0]


def ends(member):
    return np.array([member.start, member.end])


def library_box(maker, element):
    """Bounding box in the world by the general-purpose geometry library."""
    settings = ifcopenshell.geom.settings()
    settings.set("use-world-coords", True)
    shape = ifcopenshell.geom.create_shape(settings, element)
    points = np.array(shape.geometry.verts).reshape(-1, 3)
    return points.min(axis=0), points.max(axis=0)


def fits_library_box(maker, element, member):
    """The member's line, thickened by its section, fills the library's bounding box."""
    low, high = library_box(maker, element)
    along = np.subtract(member.end, member.start)
    along /= np.linalg.norm(along)
    up = np.array(member.up)
    side = np.cross(up, along)
    s = member.section
    corners = []
    for end in ends(member):
        for y in (-0.5 * s.width, 0.5 * s.width):
            for z in (s.top, s.top - s.depth):
                corners.append(end + y * side + z * up)
    mine = np.array(corners)
    return np.allclose(mine.min(axis=0), low, atol=1e-6) and np.allclose(
        mine.max(axis=0), high, atol=1e-6
    )


def test_an_extrusion_in_a_turned_and_raised_element(tmp_path):
    maker = Maker()
    solid = maker.extrusion(maker.rectangle(200.0, 300.0), 6000.0, maker.lying((0, 0, -150)))
    beam = maker.element(
        "IfcBeam", "B", [solid], at=(1000, 2000, 3000), z=(0, 0, 1), x=(0.6, 0.8, 0)
    )

    member = only_member(maker, tmp_path)

    assert ends(member) == pytest.approx(np.array([[1.0, 2.0, 2.85], [4.6, 6.8, 2.85]]))
    assert member.up == pytest.approx((0.0, 0.0, 1.0))
    assert member.section.inertia == pytest.approx(BOX_INERTIA)
    assert (member.section.width, member.section.depth) == pytest.approx((0.2, 0.3))
    assert beam.GlobalId == member.global_id


def test_a_section_lying_on_its_side_bends_about_its_other_axis(tmp_path):
    maker = Maker()
    flat = maker.axes((0, 0, 0), (1, 0, 0), (0, 0, 1))  # the profile's x is up
    solid = maker.extrusion(maker.rectangle(200.0, 300.0), 6000.0, flat)
    beam = maker.element("IfcBeam", "B", [solid])

    member = only_member(maker, tmp_path)

    assert member.section.inertia == pytest.approx(0.3 * 0.2**3 / 12.0)
    assert dict(member.section.dimensions)["roll"] == pytest.approx(math.pi / 2, abs=1e-9) or dict(
        member.section.dimensions
    )["roll"] == pytest.approx(-math.pi / 2, abs=1e-9)
    assert fits_library_box(maker, beam, member)


def test_a_tilted_section_has_a_product_of_inertia(tmp_path):
    maker = Maker()
    tilt = math.radians(30.0)
    position = maker.axes((0, 0, 0), (1, 0, 0), (0, math.cos(tilt), math.sin(tilt)))
    maker.element(
        "IfcBeam", "B", [maker.extrusion(maker.rectangle(100.0, 300.0), 6000.0, position)]
    )

    section = only_member(maker, tmp_path).section

    y, z = 0.1 * 0.3**3 / 12.0, 0.3 * 0.1**3 / 12.0
    c, s = math.cos(tilt), math.sin(tilt)
    assert section.inertia == pytest.approx(y * c * c + z * s * s)
    assert abs(section.inertia_product) == pytest.approx(abs((y - z) * s * c))
    assert section.depth == pytest.approx(0.3 * c + 0.1 * s)


def test_a_rafter_keeps_its_section_upright_in_its_vertical_plane(tmp_path):
    maker = Maker()
    along = (math.cos(math.radians(35)), 0, math.sin(math.radians(35)))
    position = maker.axes((0, 0, 0), along, (0, 1, 0))
    solid = maker.extrusion(maker.rectangle(80.0, 160.0), 5000.0, position)
    maker.element("IfcMember", "R", [solid])

    member = only_member(maker, tmp_path)

    assert member.up == pytest.approx((-along[2], 0.0, along[0]))
    assert member.section.inertia == pytest.approx(0.08 * 0.16**3 / 12.0)
    assert member.section.inertia_product == pytest.approx(0.0, abs=1e-12)


def test_an_oblique_extrusion_has_the_section_across_its_line(tmp_path):
    # Extruded 45° off the profile's normal: the cross-section is narrower by cos 45°.
    maker = Maker()
    solid = maker.extrusion(
        maker.rectangle(200.0, 300.0), 6000.0 * math.sqrt(2), maker.lying(), along=(1.0, 0.0, 1.0)
    )
    maker.element("IfcBeam", "B", [solid])

    member = only_member(maker, tmp_path)

    assert ends(member) == pytest.approx(np.array([[0, 0, 0], [6.0, 6.0, 0]]))
    assert member.section.width == pytest.approx(0.2 * math.cos(math.pi / 4))
    assert member.section.depth == pytest.approx(0.3)


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
def test_a_mapped_unit_extrusion_stretched_to_its_length(tmp_path, schema):
    # Reading Depth alone would give a beam of one millimetre.
    maker = Maker(schema)
    unit = maker.extrusion(maker.rectangle(1.0, 1.0), 1.0, maker.lying())
    item = maker.mapped(unit, Scale=5400.0, Scale2=200.0, Scale3=300.0)
    beam = maker.element("IfcBeam", "B", [item], kind="MappedRepresentation", at=(500, 0, 0))

    member = only_member(maker, tmp_path)

    assert ends(member) == pytest.approx(np.array([[0.5, 0, 0], [5.9, 0, 0]]))
    assert member.section.inertia == pytest.approx(BOX_INERTIA)
    assert member.section.shape == "rectangle"
    assert fits_library_box(maker, beam, member)


def test_a_mapping_that_mirrors_and_turns(tmp_path):
    maker = Maker()
    profile = maker.profile(
        "IfcLShapeProfileDef", "L", Position=maker.axes_2d(), Depth=150.0, Width=100.0,
        Thickness=10.0,
    )  # fmt: skip
    solid = maker.extrusion(profile, 3000.0, maker.lying())
    item = maker.mapped(
        solid,
        Axis1=maker.direction(0, 1, 0),
        Axis2=maker.direction(1, 0, 0),  # x and y exchanged: a reflection
        Axis3=maker.direction(0, 0, 1),
    )
    beam = maker.element("IfcBeam", "B", [item], kind="MappedRepresentation")

    member = only_member(maker, tmp_path)

    along = np.subtract(member.end, member.start) / 3.0
    assert np.abs(along) == pytest.approx(np.array([0.0, 1.0, 0.0]), abs=1e-9)
    low, high = library_box(maker, beam)
    assert member.start[2] + member.section.top == pytest.approx(high[2], abs=1e-6)
    assert member.start[2] + member.section.top - member.section.depth == pytest.approx(
        low[2], abs=1e-6
    )


def test_half_spaces_shorten_the_line_where_they_cut_it(tmp_path):
    maker = Maker()
    solid = maker.extrusion(maker.rectangle(200.0, 300.0), 6000.0, maker.lying())
    # Cut at x = 400 by an upright plane and at the far end by a bevel through (5700, 0, 0).
    first = maker.make("IfcHalfSpaceSolid", maker.make("IfcPlane", maker.axes((400, 0, 0),
                                                                             (1, 0, 0), (0, 1, 0))),
                       True)  # fmt: skip
    bevel = maker.make(
        "IfcHalfSpaceSolid",
        maker.make("IfcPlane", maker.axes((5700, 0, 0), (1, 0, 1), (0, 1, 0))),
        False,
    )
    once = maker.make("IfcBooleanClippingResult", "DIFFERENCE", solid, first)
    twice = maker.make("IfcBooleanClippingResult", "DIFFERENCE", once, bevel)
    maker.element("IfcBeam", "B", [twice], kind="Clipping")

    assert ends(only_member(maker, tmp_path)) == pytest.approx(np.array([[0.4, 0, 0], [5.7, 0, 0]]))


def test_a_notch_by_a_bounded_half_space_does_not_shorten_the_line(tmp_path):
    maker = Maker()
    solid = maker.extrusion(maker.rectangle(200.0, 300.0), 6000.0, maker.lying())
    square = maker.line((0, 0), (500, 0), (500, 500), (0, 500), (0, 0))
    notch = maker.make(
        "IfcPolygonalBoundedHalfSpace",
        maker.make("IfcPlane", maker.axes((200, 0, 0), (1, 0, 0), (0, 1, 0))),
        True,
        maker.axes((0, 50, 0), (1, 0, 0), (0, 1, 0)),  # beside the centroid line
        square,
    )
    clipped = maker.make("IfcBooleanClippingResult", "DIFFERENCE", solid, notch)
    maker.element("IfcBeam", "B", [clipped], kind="Clipping")

    assert ends(only_member(maker, tmp_path)) == pytest.approx(np.array([[0, 0, 0], [6.0, 0, 0]]))


def test_csg_blocks_and_boolean_trees(tmp_path):
    maker = Maker()
    block = maker.make("IfcBlock", maker.axes((0, -100, -150)), 6000.0, 200.0, 300.0)
    hole = maker.make("IfcRightCircularCylinder", maker.axes((3000, 0, -200)), 400.0, 50.0)
    tree = maker.make("IfcBooleanResult", "DIFFERENCE", block, hole)
    maker.element("IfcBeam", "B", [maker.make("IfcCsgSolid", tree)], kind="CSG")

    member = only_member(maker, tmp_path)

    assert ends(member) == pytest.approx(np.array([[0, 0, 0], [6.0, 0, 0]]))
    assert member.section.inertia == pytest.approx(BOX_INERTIA)


def tessellated(maker, points, faces):
    """Triangles of polygon faces (fans; the faces must be convex or listed as triangles)."""
    coordinates = maker.make("IfcCartesianPointList3D", [[float(c) for c in p] for p in points])
    triangles = [
        [face[0] + 1, face[i] + 1, face[i + 1] + 1]
        for face in faces
        for i in range(1, len(face) - 1)
    ]
    return maker.make("IfcTriangulatedFaceSet", coordinates, None, True, triangles)


def long_i_beam(maker, length, as_triangles):
    """An I as faces: the sides as quads, the ends cut into rectangles."""
    count = len(I_POINTS)
    points = [(x, p[0], p[1]) for x in (0.0, length) for p in I_POINTS]
    sides = [(i, (i + 1) % count, (i + 1) % count + count, i + count) for i in range(count)]
    if as_triangles:
        caps = [(0, 1, 10, 11), (2, 3, 8, 9), (4, 5, 6, 7)]
        faces = [*sides, *caps, *(tuple(i + count for i in reversed(cap)) for cap in caps)]
        # The web's caps do not share their corners' edges with the flanges: still one section.
        return tessellated(maker, points, faces)
    ends_ = [tuple(range(count)), tuple(range(2 * count - 1, count - 1, -1))]
    coordinates = maker.make("IfcCartesianPointList3D", points)
    made = [
        maker.make("IfcIndexedPolygonalFace", [i + 1 for i in face]) for face in [*sides, *ends_]
    ]
    return maker.make("IfcPolygonalFaceSet", coordinates, True, made)


@pytest.mark.parametrize("as_triangles", [True, False])
def test_an_i_beam_written_as_faces_keeps_its_inertia(tmp_path, as_triangles):
    maker = Maker()
    item = long_i_beam(maker, 6000.0, as_triangles)
    beam = maker.element("IfcBeam", "B", [item], kind="Tessellation", at=(0, 0, 3000),
                         z=(0, 0, 1), x=(1, 1, 0))  # fmt: skip

    member = only_member(maker, tmp_path)

    assert member.section.inertia == pytest.approx(I_INERTIA, rel=1e-9)
    assert member.section.shape == "I"
    reach = 6.0 / math.sqrt(2.0)
    assert ends(member) == pytest.approx(np.array([[0, 0, 3.0], [reach, reach, 3.0]]), abs=1e-9)
    assert fits_library_box(maker, beam, member)


def test_a_brep_rafter_with_bevelled_ends_and_a_birdsmouth(tmp_path):
    # Side view (x, z) of a 160 deep rafter under 30°, cut upright at both ends and notched.
    maker = Maker()
    run, rise = math.cos(math.radians(30)), math.sin(math.radians(30))
    depth = 160.0 / run  # upright depth

    def top(x):
        return x * rise / run + depth

    def bottom(x):
        return x * rise / run

    side = [(0.0, bottom(0.0)), (900.0, bottom(900.0)), (900.0, bottom(900.0) + 40.0),
            (970.0, bottom(970.0)), (5000.0, bottom(5000.0)), (5000.0, top(5000.0)),
            (0.0, top(0.0))]  # fmt: skip
    count = len(side)
    points = [(x, y, z) for y in (0.0, 80.0) for x, z in side]
    faces = [tuple(range(count)), tuple(range(2 * count - 1, count - 1, -1))]
    faces += [(i, (i + 1) % count, (i + 1) % count + count, i + count) for i in range(count)]
    maker.element("IfcBeam", "R", [maker.brep(points, faces)], kind="Brep")

    member = only_member(maker, tmp_path)

    # The centroid line runs half the upright depth above the underside, cut to cut.
    expected = [[0.0, 0.04, 0.5 * depth / 1e3],
                [5.0, 0.04, (bottom(5000.0) + 0.5 * depth) / 1e3]]  # fmt: skip
    assert ends(member) == pytest.approx(np.array(expected), abs=1e-6)
    assert member.section.inertia == pytest.approx(0.08 * 0.16**3 / 12.0, rel=1e-6)
    assert member.up == pytest.approx((-rise, 0.0, run), abs=1e-6)


def test_an_open_surface_model_gets_its_convex_outline_and_a_note(tmp_path):
    maker = Maker()
    made = [maker.point(*p) for p in box_points(6000.0, 200.0, 300.0)]
    faces = [
        maker.make("IfcFace", [maker.make("IfcFaceBound", maker.make("IfcPolyLoop", [
            made[i] for i in face]), True)])
        for face in box_faces()[:4]
    ]  # fmt: skip
    shell = maker.make("IfcOpenShell", faces[1:])  # the bottom and the ends are missing
    item = maker.make("IfcShellBasedSurfaceModel", [shell])
    maker.element("IfcBeam", "B", [item], kind="SurfaceModel")

    building = maker.read(tmp_path)

    (member,) = building.members
    assert member.section.inertia == pytest.approx(BOX_INERTIA, rel=1e-6)
    assert "body-assumed" in slugs(building)


def test_a_plate_extruded_across_its_thickness_is_seen_lengthwise(tmp_path):
    # Drawn in elevation, 6000 x 300, and extruded 120 across.
    maker = Maker()
    upright = maker.axes((0, 60, 0), (0, -1, 0), (1, 0, 0))  # profile x along x, y up
    profile = maker.polygon([(0, -150), (6000, -150), (6000, 150), (0, 150)])
    maker.element("IfcBeam", "P", [maker.extrusion(profile, 120.0, upright)])

    member = only_member(maker, tmp_path)

    assert ends(member) == pytest.approx(np.array([[0, 0, 0], [6.0, 0, 0]]), abs=1e-9)
    assert member.section.inertia == pytest.approx(0.12 * 0.3**3 / 12.0)
    assert member.section.width == pytest.approx(0.12)


def test_a_haunched_plate_is_said_to_taper(tmp_path):
    # Depth 300 at the start, 600 at the end, in elevation.
    maker = Maker()
    upright = maker.axes((0, 60, 0), (0, -1, 0), (1, 0, 0))
    profile = maker.polygon([(0, 0), (6000, 0), (6000, 600), (0, 300)])
    maker.element("IfcBeam", "P", [maker.extrusion(profile, 120.0, upright)])

    member = only_member(maker, tmp_path)

    # The line runs from middle to middle, 1.4° up; the sections are at right angles to it.
    assert member.start[2] == pytest.approx(0.15, abs=0.005)
    assert member.end[2] == pytest.approx(0.3, abs=0.005)
    assert member.section.depth == pytest.approx(0.3, rel=0.01)
    assert member.end_section.depth == pytest.approx(0.6, rel=0.01)


def test_a_haunch_at_one_end_only_is_named(tmp_path):
    maker = Maker()
    upright = maker.axes((0, 60, 0), (0, -1, 0), (1, 0, 0))
    profile = maker.polygon([(0, 0), (1500, 0), (2400, 300), (6000, 300), (6000, 600), (0, 600)])
    maker.element("IfcBeam", "P", [maker.extrusion(profile, 120.0, upright)])

    building = maker.read(tmp_path)

    assert building.members[0].end_section is None
    assert building.members[0].section.depth == pytest.approx(0.3, rel=1e-6)
    text = " ".join(f.message for f in building.findings if f.slug == "body-assumed")
    assert "varies along it" in text


def test_a_haunch_that_runs_out_in_an_edge_leaves_the_beam_and_is_said(tmp_path):
    # A beam 200 x 400, 6 m long; under its start a wedge 300 deep that runs out after 1 m.
    maker = Maker()
    beam = maker.extrusion(maker.rectangle(200.0, 400.0), 6000.0, maker.lying())
    upright = maker.axes((0, 100, 0), (0, -1, 0), (1, 0, 0))
    wedge = maker.polygon([(0, -200), (0, -500), (1000, -200)])
    maker.element("IfcBeam", "B", [beam, maker.extrusion(wedge, 200.0, upright)])

    building = maker.read(tmp_path)

    (member,) = building.members
    assert ends(member) == pytest.approx(np.array([[0, 0, 0], [6.0, 0, 0]]), abs=1e-9)
    assert member.section.inertia == pytest.approx(0.2 * 0.4**3 / 12.0)
    text = " ".join(f.message for f in building.findings if f.slug == "body-assumed")
    assert "its body has 2 parts" in text


def test_a_plate_girder_of_three_extrusions_is_one_section(tmp_path):
    # Flanges 200 x 20, web 10 x 360: the section of an I without fillets.
    maker = Maker()
    plates = [
        maker.extrusion(maker.rectangle(w, h), 6000.0, maker.lying((0, 0, z)))
        for w, h, z in ((200.0, 20.0, 190.0), (10.0, 360.0, 0.0), (200.0, 20.0, -190.0))
    ]
    beam = maker.element("IfcBeam", "G", plates)

    building = maker.read(tmp_path)

    (member,) = building.members
    exact = (200.0 * 400.0**3 - 190.0 * 360.0**3) / 12.0 * 1e-12
    assert member.section.inertia == pytest.approx(exact, rel=1e-12)
    assert member.section.depth == pytest.approx(0.4)
    assert ends(member) == pytest.approx(np.array([[0, 0, 0], [6.0, 0, 0]]), abs=1e-9)
    assert fits_library_box(maker, beam, member)
    assert "3 parts that run side by side" in building.findings[0].message
    # Twisted, each plate resists for itself: about (2 b tf³ + h tw³)/3 (thin-walled, open).
    thin = (2.0 * 200.0 * 20.0**3 + 360.0 * 10.0**3) / 3.0 * 1e-12
    assert member.section.torsion == pytest.approx(thin, rel=0.07)


def test_a_plate_girder_of_three_bodies_with_faces_is_one_section(tmp_path):
    maker = Maker()
    plates = []
    for w, h, z in ((200.0, 20.0, 180.0), (10.0, 360.0, -180.0), (200.0, 20.0, -200.0)):
        points = [(x, y - 0.5 * w, v + z) for x, y, v in box_points(6000.0, w, h)]
        plates.append(maker.brep(points, box_faces()))
    maker.element("IfcBeam", "G", plates, kind="Brep")

    member = only_member(maker, tmp_path)

    exact = (200.0 * 400.0**3 - 190.0 * 360.0**3) / 12.0 * 1e-12
    assert member.section.inertia == pytest.approx(exact, rel=1e-9)


def test_a_solid_taken_away_shortens_the_line_at_an_end_only(tmp_path):
    maker = Maker()
    solid = maker.extrusion(maker.rectangle(200.0, 300.0), 6000.0, maker.lying())
    end_cut = maker.extrusion(maker.rectangle(400.0, 600.0), 500.0, maker.lying((-250, 0, 0)))
    hole = maker.extrusion(maker.rectangle(100.0, 100.0), 800.0, maker.axes((3000, 0, -400)))
    once = maker.make("IfcBooleanResult", "DIFFERENCE", solid, end_cut)
    twice = maker.make("IfcBooleanResult", "DIFFERENCE", once, hole)
    maker.element("IfcBeam", "B", [twice], kind="CSG")

    assert ends(only_member(maker, tmp_path)) == pytest.approx(
        np.array([[0.25, 0, 0], [6.0, 0, 0]]), abs=1e-6
    )


def test_the_origin_of_a_map_counts_as_the_geometry_library_counts_it(tmp_path):
    maker = Maker()
    solid = maker.extrusion(maker.rectangle(200.0, 300.0), 6000.0, maker.lying())
    inner = maker.make("IfcShapeRepresentation", maker.context, "Body", "SweptSolid", [solid])
    source = maker.make("IfcRepresentationMap", maker.axes((1000, 0, 0)), inner)
    target = maker.make(
        "IfcCartesianTransformationOperator3D", LocalOrigin=maker.point(0.0, 2000.0, 0.0)
    )
    item = maker.make("IfcMappedItem", source, target)
    beam = maker.element("IfcBeam", "B", [item], kind="MappedRepresentation")

    assert fits_library_box(maker, beam, only_member(maker, tmp_path))


def test_a_tapered_extrusion_has_two_sections(tmp_path):
    maker = Maker()
    start, end = maker.rectangle(200.0, 300.0), maker.rectangle(200.0, 500.0)
    solid = maker.make(
        "IfcExtrudedAreaSolidTapered", start, maker.lying(), maker.direction(0, 0, 1), 6000.0, end
    )
    maker.element("IfcBeam", "B", [solid], kind="AdvancedSweptSolid")

    member = only_member(maker, tmp_path)

    assert member.section.inertia == pytest.approx(BOX_INERTIA)
    assert member.end_section.inertia == pytest.approx(0.2 * 0.5**3 / 12.0)


def test_a_tapered_extrusion_against_its_axis_turns_both_sections(tmp_path):
    maker = Maker()
    start, end = maker.rectangle(200.0, 300.0), maker.rectangle(200.0, 500.0)
    solid = maker.make(
        "IfcExtrudedAreaSolidTapered", start, maker.lying(), maker.direction(0, 0, 1), 6000.0, end
    )
    axis = maker.line((6000, 0, 0), (0, 0, 0))
    maker.element("IfcBeam", "B", [solid], axis=axis)

    member = only_member(maker, tmp_path)

    assert member.start == pytest.approx((6.0, 0.0, 0.0))
    assert member.section.depth == pytest.approx(0.5)
    assert member.end_section.depth == pytest.approx(0.3)


def test_swept_disks_and_directrices_that_run_straight(tmp_path):
    maker = Maker()
    bar = maker.make("IfcSweptDiskSolid", maker.line((0, 0, 0), (4000, 0, 0)), 60.0, 50.0)
    maker.element("IfcMember", "pipe", [bar], kind="AdvancedSweptSolid")
    swept = maker.make(
        "IfcFixedReferenceSweptAreaSolid",
        maker.rectangle(200.0, 300.0),
        maker.axes((0, 0, 0)),
        maker.line((0, 2000, 0), (3000, 2000, 0), (7000, 2000, 0)),
        None,
        None,
        maker.direction(0, 0, 1),
    )
    maker.element("IfcBeam", "swept", [swept], kind="AdvancedSweptSolid")

    building = maker.read(tmp_path)

    by_name = {member.name: member for member in building.members}
    assert by_name["pipe"].section.inertia == pytest.approx(math.pi / 4.0 * (0.06**4 - 0.05**4))
    assert by_name["pipe"].section.shape == "tube"
    assert ends(by_name["swept"]) == pytest.approx(np.array([[0, 2, 0], [7.0, 2, 0]]))


def test_the_fixed_reference_turns_the_profile(tmp_path):
    # The reference gives the direction of the profile's x axis: 200 upright, 300 across.
    maker = Maker()
    swept = maker.make(
        "IfcFixedReferenceSweptAreaSolid",
        maker.rectangle(200.0, 300.0),
        maker.axes((0, 0, 0)),
        maker.line((0, 2000, 0), (7000, 2000, 0)),
        None,
        None,
        maker.direction(0, 0, 1),
    )
    beam = maker.element("IfcBeam", "B", [swept], kind="AdvancedSweptSolid")

    member = only_member(maker, tmp_path)

    assert (member.section.depth, member.section.width) == pytest.approx((0.2, 0.3))
    assert fits_library_box(maker, beam, member)


def test_a_sectioned_spine_tapers_between_its_positions(tmp_path):
    maker = Maker("IFC2X3")
    spine = maker.make(
        "IfcSectionedSpine",
        maker.make(
            "IfcCompositeCurve",
            [maker.make("IfcCompositeCurveSegment", "CONTINUOUS", True,
                        maker.line((0, 0, 0), (5000, 0, 0)))],
            False,
        ),
        [maker.rectangle(200.0, 300.0), maker.rectangle(200.0, 400.0)],
        [maker.axes((x, 0, 0), (1, 0, 0), (0, 1, 0)) for x in (0, 5000)],
    )  # fmt: skip
    maker.element("IfcBeam", "B", [spine], kind="SectionedSpine")

    member = only_member(maker, tmp_path)

    assert (member.section.depth, member.end_section.depth) == pytest.approx((0.3, 0.4))
    assert member.section.width == pytest.approx(0.2)


def alignment(maker, straight):
    """An alignment of IFC4X3 curve segments: 20 m straight, then 15 m of arc unless straight."""

    def segment(place, ref, length, parent):
        return maker.make(
            "IfcCurveSegment",
            "CONTINUOUS",
            maker.make("IfcAxis2Placement2D", maker.point(*place), maker.direction(*ref)),
            maker.make("IfcLengthMeasure", 0.0),
            maker.make("IfcLengthMeasure", length),
            parent,
        )

    vector = maker.make("IfcVector", maker.direction(1, 0), 1.0)
    line = maker.make("IfcLine", maker.point(0, 0), vector)
    parts = [segment((0, 0), (1, 0), 20000.0, line)]
    if not straight:
        circle = maker.make("IfcCircle", maker.axes_2d(), 30000.0)
        parts.append(segment((20000, 0), (1, 0), 15000.0, circle))
    base = maker.make("IfcCompositeCurve", parts, False)
    rise = segment((0, 1000), (1, 0.01), 35000.0, line)
    return maker.make("IfcGradientCurve", [rise], False, base, None)


def test_a_sectioned_solid_along_an_alignment(tmp_path):
    # From 2 m to 14 m along, 1.5 m to the left, the profile's foot on the gradient of 1 %.
    maker = Maker("IFC4X3")
    curve = alignment(maker, straight=True)
    places = [
        maker.make(
            "IfcAxis2PlacementLinear",
            maker.make("IfcPointByDistanceExpression", maker.make("IfcLengthMeasure", d), 1500.0,
                       None, None, curve),
        )
        for d in (2000.0, 14000.0)
    ]  # fmt: skip
    profile = maker.rectangle(400.0, 900.0)
    solid = maker.make("IfcSectionedSolidHorizontal", curve, [profile, profile], places)
    maker.element("IfcBeam", "girder", [solid], kind="AdvancedSweptSolid")

    member = only_member(maker, tmp_path)

    # Distances along an alignment are those in plan.
    assert ends(member) == pytest.approx(np.array([[2, 1.5, 1.02], [14, 1.5, 1.14]]), abs=1e-6)
    assert (member.section.width, member.section.depth) == pytest.approx((0.4, 0.9))


def test_a_sectioned_solid_round_a_bend_is_reported_as_curved(tmp_path):
    maker = Maker("IFC4X3")
    curve = alignment(maker, straight=False)
    places = [
        maker.make(
            "IfcAxis2PlacementLinear",
            maker.make("IfcPointByDistanceExpression", maker.make("IfcLengthMeasure", d), None,
                       None, None, curve),
        )
        for d in (2000.0, 33000.0)
    ]  # fmt: skip
    profile = maker.rectangle(400.0, 900.0)
    solid = maker.make("IfcSectionedSolidHorizontal", curve, [profile, profile], places)
    maker.element("IfcBeam", "girder", [solid], kind="AdvancedSweptSolid")

    assert "curved-member" in slugs(maker.read(tmp_path))


def test_an_advanced_brep_is_read_by_its_vertices(tmp_path):
    maker = Maker()
    points = box_points(6000.0, 200.0, 300.0)
    vertices = [maker.make("IfcVertexPoint", maker.point(*p)) for p in points]

    def oriented(a, b):
        vector = maker.make("IfcVector", maker.direction(1, 0, 0), 1.0)
        line = maker.make("IfcLine", maker.point(*points[a]), vector)
        edge = maker.make("IfcEdgeCurve", vertices[a], vertices[b], line, True)
        return maker.make("IfcOrientedEdge", EdgeElement=edge, Orientation=True)

    faces = []
    for face in box_faces():
        loop = [oriented(a, b) for a, b in zip(face, face[1:] + face[:1], strict=True)]
        bound = maker.make("IfcFaceOuterBound", maker.make("IfcEdgeLoop", loop), True)
        plane = maker.make("IfcPlane", maker.axes(points[face[0]]))
        faces.append(maker.make("IfcAdvancedFace", [bound], plane, True))
    solid = maker.make("IfcAdvancedBrep", maker.make("IfcClosedShell", faces))
    maker.element("IfcBeam", "B", [solid], kind="AdvancedBrep", at=(0, -100, -150))

    member = only_member(maker, tmp_path)

    assert ends(member) == pytest.approx(np.array([[0, 0, 0], [6.0, 0, 0]]), abs=1e-9)
    assert member.section.inertia == pytest.approx(BOX_INERTIA)


def test_a_bounding_box_is_better_than_nothing(tmp_path):
    maker = Maker()
    box = maker.make("IfcBoundingBox", maker.point(0, -100, -150), 6000.0, 200.0, 300.0)
    maker.element("IfcBeam", "B", [box], kind="BoundingBox", identifier="Box")

    building = maker.read(tmp_path)

    assert building.members[0].section.inertia == pytest.approx(BOX_INERTIA)
    assert "body-assumed" in slugs(building)


def test_curved_bodies_and_axes_are_reported(tmp_path):
    maker = Maker()
    turn = maker.make(
        "IfcRevolvedAreaSolid",
        maker.rectangle(200.0, 300.0),
        maker.axes((8000, 0, 0)),
        maker.make("IfcAxis1Placement", maker.point(-8000.0, 0.0, 0.0), maker.direction(0, 1, 0)),
        0.6,
    )
    maker.element("IfcBeam", "ring", [turn])
    points = maker.make(
        "IfcCartesianPointList3D", [(0.0, 0.0, 0.0), (3000.0, 0.0, 900.0), (6000.0, 0.0, 0.0)]
    )
    arc = maker.make("IfcIndexedPolyCurve", points, [maker.make("IfcArcIndex", [1, 2, 3])])
    solid = maker.extrusion(maker.rectangle(200.0, 300.0), 6000.0, maker.lying())
    maker.element("IfcBeam", "arch", [solid], axis=arc)

    building = maker.read(tmp_path)

    found = [f for f in building.findings if f.slug == "curved-member"]
    assert not building.members
    assert {f.message.split("'")[1] for f in found} == {"ring", "arch"}
    assert all(len(f.elements) == 1 for f in found)
    assert "900 mm off the straight line over 6.00 m" in " ".join(f.message for f in found)


def test_a_curved_body_of_faces_is_reported(tmp_path):
    maker = Maker()
    rings = []
    for k in range(13):
        angle = 0.8 * k / 12
        for radius, z in ((7900, 0), (8100, 0), (8100, 300), (7900, 300)):
            rings.append((radius * math.cos(angle), radius * math.sin(angle), z))
    faces = [(3, 2, 1, 0), tuple(range(48, 52))]
    for k in range(12):
        for i in range(4):
            j = (i + 1) % 4
            faces.append((4 * k + i, 4 * k + j, 4 * k + 4 + j, 4 * k + 4 + i))
    maker.element("IfcBeam", "ring", [maker.brep(rings, faces)], kind="Brep")

    building = maker.read(tmp_path)

    assert not building.members
    assert "curved-member" in slugs(building)


def test_two_parts_in_a_row_are_one_member(tmp_path):
    maker = Maker()
    first = maker.extrusion(maker.rectangle(200.0, 300.0), 4000.0, maker.lying())
    second = maker.extrusion(maker.rectangle(200.0, 300.0), 2500.0, maker.lying((4000, 0, 0)))
    plate = maker.extrusion(maker.rectangle(10.0, 10.0), 100.0, maker.lying((0, 0, 300)))
    maker.element("IfcBeam", "B", [first, second, plate])

    building = maker.read(tmp_path)

    assert ends(building.members[0]) == pytest.approx(np.array([[0, 0, 0], [6.5, 0, 0]]))
    assert "body-assumed" in slugs(building)


@pytest.mark.parametrize("kind", ["pyramid", "cone"])
def test_spires_are_read_half_way(tmp_path, kind):
    maker = Maker()
    place = maker.axes((0, 0, 0), (1, 0, 0))
    if kind == "pyramid":
        spire = maker.make("IfcRectangularPyramid", place, 200.0, 300.0, 6000.0)
        area = 0.2 * 0.3 / 4.0
    else:
        spire = maker.make("IfcRightCircularCone", place, 6000.0, 120.0)
        area = math.pi * 0.12**2 / 4.0
    maker.element("IfcBeam", "B", [maker.make("IfcCsgSolid", spire)], kind="CSG")

    member = only_member(maker, tmp_path)

    # Half-way both sides are half as long; 24 chords round a cone, and a principal axis that
    # tilts a little with so few corners: 2 %.
    assert member.section.area == pytest.approx(area, rel=0.02)
    along = np.subtract(member.end, member.start)
    assert abs(along[0]) / np.linalg.norm(along) == pytest.approx(1.0, abs=1e-3)


def test_bounded_planes_of_a_geometric_set_make_a_body(tmp_path):
    maker = Maker()
    surfaces = []
    points = box_points(6000.0, 200.0, 300.0)
    for face in box_faces():
        a, b, c, d = (np.array(points[i]) for i in face)
        normal = np.cross(b - a, d - a)
        plane = maker.make("IfcPlane", maker.axes(a.tolist(), normal.tolist(), (b - a).tolist()))
        x, y = (b - a) / np.linalg.norm(b - a), (d - a) / np.linalg.norm(d - a)
        ring = [((p - a) @ x, (p - a) @ y) for p in (a, b, c, d)]
        edge = maker.ring([(float(u), float(v)) for u, v in ring])
        surfaces.append(maker.make("IfcCurveBoundedPlane", plane, edge, []))
    maker.element("IfcBeam", "B", [maker.make("IfcGeometricSet", surfaces)], kind="GeometricSet")

    member = only_member(maker, tmp_path)

    assert member.section.inertia == pytest.approx(BOX_INERTIA)


def test_a_body_of_a_kind_without_a_rule_is_named(tmp_path):
    maker = Maker()
    ball = maker.make("IfcSphere", maker.axes((0, 0, 0)), 500.0)
    maker.element("IfcBeam", "B", [maker.make("IfcCsgSolid", ball)], kind="CSG")

    building = maker.read(tmp_path)

    (found,) = building.findings
    assert found.slug == "no-representation"
    assert "IfcSphere" in found.message
