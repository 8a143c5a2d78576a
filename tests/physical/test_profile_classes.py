"""Every class of profile: outline against the general-purpose geometry library, turns, mirrors,
composites, centre lines, property sets, and what cannot be read."""

import math

import ifcopenshell.geom
import numpy as np
import pytest
from body_makers import Maker

from analysis_core.ifc.file_units import read_units
from analysis_core.ifc.geometry.outline import flattened
from analysis_core.ifc.sections.profiles import ProfileDrawer
from analysis_core.ifc.sections.reader import SectionReader, measures_of, read_section

PARAMETRIC = {
    "rectangle": ("IfcRectangleProfileDef", {"XDim": 120, "YDim": 310}),
    "rounded": ("IfcRoundedRectangleProfileDef", {"XDim": 120, "YDim": 310, "RoundingRadius": 20}),
    "box": (
        "IfcRectangleHollowProfileDef",
        {"XDim": 120, "YDim": 310, "WallThickness": 9, "InnerFilletRadius": 8,
         "OuterFilletRadius": 15},
    ),
    "circle": ("IfcCircleProfileDef", {"Radius": 90}),
    "pipe": ("IfcCircleHollowProfileDef", {"Radius": 90, "WallThickness": 11}),
    "ellipse": ("IfcEllipseProfileDef", {"SemiAxis1": 90, "SemiAxis2": 150}),
    "trapezium": (
        "IfcTrapeziumProfileDef",
        {"BottomXDim": 300, "TopXDim": 150, "YDim": 200, "TopXOffset": 40},
    ),
    "I": (
        "IfcIShapeProfileDef",
        {"OverallWidth": 180, "OverallDepth": 400, "WebThickness": 8.6, "FlangeThickness": 13.5,
         "FilletRadius": 21},
    ),
    "unequal I": (
        "IfcAsymmetricIShapeProfileDef",
        {"BottomFlangeWidth": 250, "OverallDepth": 400, "WebThickness": 10,
         "BottomFlangeThickness": 20, "BottomFlangeFilletRadius": 12, "TopFlangeWidth": 150,
         "TopFlangeThickness": 14, "TopFlangeFilletRadius": 9},
    ),
    "T": (
        "IfcTShapeProfileDef",
        {"Depth": 200, "FlangeWidth": 160, "WebThickness": 10, "FlangeThickness": 16,
         "FilletRadius": 9},
    ),
    "U": (
        "IfcUShapeProfileDef",
        {"Depth": 200, "FlangeWidth": 80, "WebThickness": 6, "FlangeThickness": 11,
         "FilletRadius": 13},
    ),
    "L": (
        "IfcLShapeProfileDef",
        {"Depth": 150, "Width": 100, "Thickness": 10, "FilletRadius": 12, "EdgeRadius": 6},
    ),
    "C": (
        "IfcCShapeProfileDef",
        {"Depth": 200, "Width": 75, "WallThickness": 2.5, "Girth": 20,
         "InternalFilletRadius": 4},
    ),
    "Z": (
        "IfcZShapeProfileDef",
        {"Depth": 200, "FlangeWidth": 80, "WebThickness": 8, "FlangeThickness": 12,
         "FilletRadius": 10},
    ),
}  # fmt: skip


def units_of(maker):
    return read_units(maker.file, "test")[0]


def drawn(maker, profile):
    return ProfileDrawer(measures_of(units_of(maker))).draw(profile)


def corners_by_library(maker, profile):
    """Corners (m) of the profile as the geometry library extrudes it, and the volume per m."""
    solid = maker.extrusion(profile, 1000.0)
    body = maker.make("IfcShapeRepresentation", maker.context, "Body", "SweptSolid", [solid])
    settings = ifcopenshell.geom.settings()
    settings.set("mesher-linear-deflection", 1e-5)
    settings.set("mesher-angular-deflection", 0.02)
    geometry = ifcopenshell.geom.create_shape(settings, body)
    points = np.array(geometry.verts).reshape(-1, 3)
    triangles = points[np.array(geometry.faces).reshape(-1, 3)]
    a, b, c = triangles.transpose(1, 0, 2)
    volume = abs(float(np.einsum("ij,ij->i", a, np.cross(b, c)).sum()) / 6.0)
    return points[:, :2], volume


# The library counts the flange of a Z from the middle of the web; DIN 1027 from its outer face.
@pytest.mark.parametrize("name", [name for name in PARAMETRIC if name != "Z"])
def test_outlines_lie_where_the_geometry_library_puts_them(name):
    ifc_class, measures = PARAMETRIC[name]
    maker = Maker()
    profile = maker.profile(
        ifc_class, name, Position=maker.axes_2d(30.0, -20.0, 0.4), **{k: float(v) for k, v in
                                                                      measures.items()}
    )  # fmt: skip
    points, area = corners_by_library(maker, profile)

    section, findings = read_section(profile, units_of(maker))

    assert not findings
    # The library flattens arcs by chords: a hundredth of a millimetre, 0.1 % of the area.
    assert section.width == pytest.approx(np.ptp(points[:, 0]), abs=2e-5)
    assert section.depth == pytest.approx(np.ptp(points[:, 1]), abs=2e-5)
    assert section.area == pytest.approx(area, rel=1e-3)
    profile_ = SectionReader(measures_of(units_of(maker))).profile(profile)
    assert profile_.corners.min(axis=0) == pytest.approx(points.min(axis=0), abs=2e-5)


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
def test_all_schemas_give_the_same_section(schema):
    maker = Maker(schema)
    profile = maker.profile(
        "IfcIShapeProfileDef",
        "IPE 400",
        Position=maker.axes_2d(),
        OverallWidth=180.0,
        OverallDepth=400.0,
        WebThickness=8.6,
        FlangeThickness=13.5,
        FilletRadius=21.0,
    )

    section, _ = read_section(profile, units_of(maker))

    assert section.inertia * 1e8 == pytest.approx(23128, abs=1.0)  # EN 10365: 23130
    assert section.name == "IPE 400"


def test_the_unequal_i_of_ifc2x3_states_its_bottom_flange_as_the_symmetric_one():
    old, new = Maker("IFC2X3"), Maker("IFC4")
    before = old.profile(
        "IfcAsymmetricIShapeProfileDef", None, Position=old.axes_2d(), OverallWidth=250.0,
        OverallDepth=400.0, WebThickness=10.0, FlangeThickness=20.0, FilletRadius=12.0,
        TopFlangeWidth=150.0, TopFlangeThickness=14.0, TopFlangeFilletRadius=9.0,
    )  # fmt: skip
    after = new.profile(
        "IfcAsymmetricIShapeProfileDef", None, Position=new.axes_2d(),
        **{k: float(v) for k, v in PARAMETRIC["unequal I"][1].items()},
    )  # fmt: skip

    first, _ = read_section(before, units_of(old))
    second, _ = read_section(after, units_of(new))

    assert first == second
    # The heavier flange is at the bottom: the centroid lies below the middle.
    assert first.top > 0.5 * first.depth
    d = dict(first.dimensions)
    assert d["section_modulus_bottom"] > d["section_modulus_top"]
    assert first.inertia / d["section_modulus_top"] == pytest.approx(first.top)


@pytest.mark.parametrize(
    ("ifc_class", "measures", "area"),
    [
        (
            "IfcCraneRailFShapeProfileDef",
            {"OverallHeight": 80, "HeadWidth": 100, "HeadDepth2": 30, "HeadDepth3": 40,
             "WebThickness": 60, "BaseDepth1": 12, "BaseDepth2": 20},
            # Head and foot 100 wide, web 60, tapers of 10 and 8 between them.
            100 * 30 + 80 * 10 + 60 * (80 - 40 - 20) + 80 * 8 + 100 * 12,
        ),
        (
            "IfcCraneRailAShapeProfileDef",
            {"OverallHeight": 95, "BaseWidth2": 200, "HeadWidth": 100, "HeadDepth2": 40,
             "HeadDepth3": 48, "WebThickness": 60, "BaseWidth4": 120, "BaseDepth1": 10,
             "BaseDepth2": 20, "BaseDepth3": 30},
            200 * 10 + 160 * 10 + 90 * 10 + 60 * (95 - 48 - 30) + 80 * 8 + 100 * 40,
        ),
    ],
)  # fmt: skip
def test_crane_rails_of_ifc2x3(ifc_class, measures, area):
    maker = Maker("IFC2X3")
    profile = maker.profile(
        ifc_class, "rail", Position=maker.axes_2d(), **{k: float(v) for k, v in measures.items()}
    )

    section, findings = read_section(profile, units_of(maker))

    assert section.area * 1e6 == pytest.approx(area, rel=1e-9)
    assert [f.slug for f in findings] == ["section-approximate"]


def test_a_polygon_drawn_as_an_i_is_called_one_and_keeps_its_own_properties():
    maker = Maker()
    half = [(60, -120), (60, -110.2), (3.1, -110.2), (3.1, 110.2), (60, 110.2), (60, 120)]
    points = [*half, *((-x, y) for x, y in reversed(half))]
    profile = maker.polygon(points, "IPE240")

    section, _ = read_section(profile, units_of(maker))

    d = dict(section.dimensions)
    assert section.shape == "I"
    assert d["flange_thickness"] == pytest.approx(0.0098)
    assert d["web_thickness"] == pytest.approx(0.0062)
    assert d["fillet_radius"] == 0.0
    exact = (120.0 * 240.0**3 - 113.8 * 220.4**3) / 12.0  # outer box less both voids, mm⁴
    assert section.inertia * 1e12 == pytest.approx(exact, rel=1e-12)


@pytest.mark.parametrize("name", [n for n in PARAMETRIC if n not in ("ellipse", "rounded")])
@pytest.mark.parametrize("turn", [0.0, 0.5, math.pi / 2.0])
def test_shapes_are_recognised_from_their_outlines_however_they_are_turned(name, turn):
    ifc_class, measures = PARAMETRIC[name]
    maker = Maker()
    profile = maker.profile(
        ifc_class, name, Position=maker.axes_2d(0.0, 0.0, turn),
        **{k: float(v) for k, v in measures.items()},
    )  # fmt: skip
    known = drawn(maker, profile)
    rings = []
    for rows in known.loops:
        rings.append([(x * 1e3, y * 1e3) for x, y, _ in flattened(rows, 48).tolist()])
    again = drawn(maker, maker.polygon(rings[0], voids=rings[1:]))

    assert again.shape == known.shape
    for key in ("web_thickness", "flange_thickness", "wall_thickness", "thickness", "lip"):
        if key in known.dimensions:
            assert again.dimensions[key] == pytest.approx(known.dimensions[key], rel=0.03), key
    sides = [known.dimensions["width"], known.dimensions["depth"]]
    if name in ("rectangle", "box", "L"):  # a quarter turn more or less is the same shape
        sides.sort()
        assert sorted([again.dimensions["width"], again.dimensions["depth"]]) == pytest.approx(
            sides
        )
    elif name not in ("circle", "pipe"):
        found = [again.dimensions["width"], again.dimensions["depth"]]
        assert found == pytest.approx(sides, rel=0.005)
        # The shape's own upright axis is found again, up to a half turn.
        assert abs(math.sin(again.roll - known.roll)) < 0.01


def test_an_l_drawn_as_a_polygon_with_round_toes_is_an_angle():
    # As exporters write L 3-1/2x3x3/8: toes rounded over the whole thickness.
    maker = Maker()
    points = [(0.0, 0.0), (88.9, 0.0), (88.9, 76.2), (82.165, 73.41), (79.375, 66.675),
              (79.375, 9.525), (9.525, 9.525), (2.79, 6.735)]  # fmt: skip
    section, _ = read_section(maker.polygon(points), units_of(maker))

    assert section.shape == "angle"
    assert dict(section.dimensions)["thickness"] == pytest.approx(0.0095, abs=5e-5)


def test_indexed_arcs_count_as_arcs():
    maker = Maker()
    coordinates = [(100.0, 0.0), (0.0, 100.0), (-100.0, 0.0), (0.0, -100.0)]
    points = maker.make("IfcCartesianPointList2D", coordinates)
    arcs = [maker.make("IfcArcIndex", [1, 2, 3]), maker.make("IfcArcIndex", [3, 4, 1])]
    curve = maker.make("IfcIndexedPolyCurve", points, arcs)
    profile = maker.profile("IfcArbitraryClosedProfileDef", None, OuterCurve=curve)

    section, findings = read_section(profile, units_of(maker))

    assert section.inertia == pytest.approx(math.pi * 0.1**4 / 4.0, rel=1e-12)
    assert section.shape == "circle"
    assert not findings


@pytest.mark.parametrize("by", ["points", "angles"])
@pytest.mark.parametrize("degrees", [False, True])
def test_composite_curves_of_lines_and_trimmed_circles(by, degrees):
    # A stadium: a rectangle 200 x 100 with half circles at its ends.
    maker = Maker(degrees=degrees)
    turn = 90.0 if degrees else math.pi / 2.0

    def half(x, first, last):
        circle = maker.make("IfcCircle", maker.axes_2d(x, 0.0), 50.0)
        if by == "angles":
            trims = [[maker.make("IfcParameterValue", first * turn)],
                     [maker.make("IfcParameterValue", last * turn)]]  # fmt: skip
        else:
            at = lambda k: (x + 50.0 * round(math.cos(k * math.pi / 2)),  # noqa: E731
                            50.0 * round(math.sin(k * math.pi / 2)))  # fmt: skip
            trims = [[maker.point(*at(first))], [maker.point(*at(last))]]
        master = "PARAMETER" if by == "angles" else "CARTESIAN"
        return maker.make("IfcTrimmedCurve", circle, trims[0], trims[1], True, master)

    parts = [
        (maker.line((-100.0, -50.0), (100.0, -50.0)), True),
        (half(100.0, -1, 1), True),
        (maker.line((-100.0, 50.0), (100.0, 50.0)), False),  # drawn the other way round
        (half(-100.0, 1, 3), True),
    ]
    segments = [
        maker.make("IfcCompositeCurveSegment", "CONTINUOUS", sense, curve) for curve, sense in parts
    ]
    curve = maker.make("IfcCompositeCurve", segments, False)
    profile = maker.profile("IfcArbitraryClosedProfileDef", None, OuterCurve=curve)

    section, findings = read_section(profile, units_of(maker))

    assert section.area == pytest.approx(0.2 * 0.1 + math.pi * 0.05**2, rel=1e-12)
    assert section.inertia == pytest.approx(
        0.2 * 0.1**3 / 12.0 + math.pi * 0.05**4 / 4.0, rel=1e-12
    )
    assert section.width == pytest.approx(0.3, rel=1e-12)
    assert not findings


def test_a_closed_spline_is_taken_by_chords_and_said_so():
    # Degree 2, rational: an exact quarter of a circle of radius 100, closed by two lines.
    maker = Maker()
    control = [maker.point(100.0, 0.0), maker.point(100.0, 100.0), maker.point(0.0, 100.0)]
    spline = maker.make(
        "IfcRationalBSplineCurveWithKnots", 2, control, "CIRCULAR_ARC", False, False, [3, 3],
        [0.0, 1.0], "UNSPECIFIED", [1.0, math.sqrt(0.5), 1.0],
    )  # fmt: skip
    rest = maker.line((0.0, 100.0), (0.0, 0.0), (100.0, 0.0))
    segments = [
        maker.make("IfcCompositeCurveSegment", "CONTINUOUS", True, part) for part in (spline, rest)
    ]
    curve = maker.make("IfcCompositeCurve", segments, False)
    profile = maker.profile("IfcArbitraryClosedProfileDef", "quarter", OuterCurve=curve)

    section, findings = read_section(profile, units_of(maker))

    # 24 chords to the quarter lose (2/3)(sweep/48)² of the area: below 0.1 %.
    assert section.area == pytest.approx(math.pi * 0.1**2 / 4.0, rel=1e-3)
    assert [f.slug for f in findings] == ["section-approximate"]


def test_mirrored_and_derived_profiles_mirror_their_parent():
    maker = Maker()
    parent = maker.profile(
        "IfcLShapeProfileDef", "L", Position=maker.axes_2d(),
        **{k: float(v) for k, v in PARAMETRIC["L"][1].items()},
    )  # fmt: skip
    flip = maker.make(
        "IfcCartesianTransformationOperator2D",
        maker.direction(-1.0, 0.0),
        maker.direction(0.0, 1.0),
        maker.point(0.0, 0.0),
        1.0,
    )
    mirrored = maker.profile("IfcMirroredProfileDef", "M", ParentProfile=parent)
    derived = maker.profile("IfcDerivedProfileDef", "D", ParentProfile=parent, Operator=flip)

    straight, _ = read_section(parent, units_of(maker))
    for profile in (mirrored, derived):
        turned, _ = read_section(profile, units_of(maker))
        assert turned.inertia == pytest.approx(straight.inertia, rel=1e-12)
        assert turned.inertia_product == pytest.approx(-straight.inertia_product, rel=1e-9)
        assert turned.shape == "angle"


def test_a_derived_profile_stretched_unevenly():
    maker = Maker()
    parent = maker.rectangle(100.0, 100.0)
    operator = maker.make(
        "IfcCartesianTransformationOperator2DnonUniform",
        LocalOrigin=maker.point(0.0, 0.0),
        Scale=2.0,
        Scale2=3.0,
    )
    profile = maker.profile("IfcDerivedProfileDef", "D", ParentProfile=parent, Operator=operator)

    section, _ = read_section(profile, units_of(maker))

    assert section.inertia == pytest.approx(0.2 * 0.3**3 / 12.0, rel=1e-12)
    assert (section.width, section.depth, section.shape) == (
        pytest.approx(0.2), pytest.approx(0.3), "rectangle",
    )  # fmt: skip


def test_a_composite_profile_adds_its_parts():
    # Two channels back to back, 20 mm apart: parallel axes.
    maker = Maker()
    measures = {k: float(v) for k, v in PARAMETRIC["U"][1].items()}
    right = maker.profile("IfcUShapeProfileDef", "R", Position=maker.axes_2d(50.0, 0.0), **measures)
    left = maker.profile(
        "IfcUShapeProfileDef", "L", Position=maker.axes_2d(-50.0, 0.0, math.pi), **measures
    )
    both = maker.profile("IfcCompositeProfileDef", "2 U", Profiles=[left, right])

    one, _ = read_section(right, units_of(maker))
    two, _ = read_section(both, units_of(maker))

    assert two.area == pytest.approx(2.0 * one.area, rel=1e-12)
    assert two.inertia == pytest.approx(2.0 * one.inertia, rel=1e-12)
    back = 0.010 + 0.0256  # to the back of the web, plus e = 2.56 cm (UPE 200, EN 10365)
    lateral = 2.0 * (one.inertia_lateral + one.area * back**2)
    assert two.inertia_lateral == pytest.approx(lateral, rel=1e-3)
    assert two.inertia_product == pytest.approx(0.0, abs=1e-12)
    assert two.shape == "composite"


def test_a_centre_line_profile_is_its_line_thickened():
    # A lipped channel 200 x 75 x 20, 2 mm thick, by its centre line with sharp corners.
    maker = Maker()
    line = maker.line((74.0, 20.0), (74.0, 1.0), (1.0, 1.0), (1.0, 199.0), (74.0, 199.0),
                      (74.0, 180.0))  # fmt: skip
    profile = maker.profile("IfcCenterLineProfileDef", "C", Curve=line, Thickness=2.0)
    solid = maker.profile(
        "IfcCShapeProfileDef", "C", Position=maker.axes_2d(), Depth=200.0, Width=75.0,
        WallThickness=2.0, Girth=20.0,
    )  # fmt: skip

    by_line, _ = read_section(profile, units_of(maker))
    by_shape, _ = read_section(solid, units_of(maker))

    assert by_line.area == pytest.approx(by_shape.area, rel=1e-12)
    assert by_line.inertia == pytest.approx(by_shape.inertia, rel=1e-12)
    assert by_line.inertia_lateral == pytest.approx(by_shape.inertia_lateral, rel=1e-12)


def test_a_centre_line_profile_along_arcs():
    # A half ring of mean radius 100 and thickness 10.
    maker = Maker()
    points = maker.make("IfcCartesianPointList2D", [(100.0, 0.0), (0.0, 100.0), (-100.0, 0.0)])
    curve = maker.make("IfcIndexedPolyCurve", points, [maker.make("IfcArcIndex", [1, 2, 3])])
    profile = maker.profile("IfcCenterLineProfileDef", "half ring", Curve=curve, Thickness=10.0)

    section, _ = read_section(profile, units_of(maker))

    assert section.area == pytest.approx(math.pi * 0.1 * 0.01, rel=1e-12)
    outer, inner = 0.105, 0.095
    lateral = math.pi / 8.0 * (outer**4 - inner**4)
    assert section.inertia_lateral == pytest.approx(lateral, rel=1e-10)


def profile_set(maker, profile, **values):
    measures = {
        "CrossSectionArea": "IfcAreaMeasure",
        "MomentOfInertiaY": "IfcMomentOfInertiaMeasure",
        "MomentOfInertiaZ": "IfcMomentOfInertiaMeasure",
        "TorsionalConstantX": "IfcMomentOfInertiaMeasure",
    }
    properties = [
        maker.make("IfcPropertySingleValue", name, None, maker.make(measures[name], value))
        for name, value in values.items()
    ]
    return maker.make("IfcProfileProperties", "Pset_ProfileMechanical", None, properties, profile)


def test_stated_values_are_used_and_agree_silently():
    maker = Maker()
    profile = maker.rectangle(100.0, 300.0, "R")
    # No unit of area or inertia is assigned; the file writes mm² and mm⁴.
    profile_set(maker, profile, CrossSectionArea=30100.0, MomentOfInertiaY=2.26e8)

    section, findings = read_section(profile, units_of(maker))

    assert section.area == pytest.approx(0.0301)
    assert section.inertia == pytest.approx(2.26e-4)
    assert "Pset_ProfileMechanical" in section.source
    assert not findings


def test_stated_values_that_disagree_are_used_and_reported():
    maker = Maker()
    profile = maker.rectangle(100.0, 300.0, "R")
    profile_set(maker, profile, MomentOfInertiaY=3.0e8)

    section, findings = read_section(profile, units_of(maker))

    assert section.inertia == pytest.approx(3.0e-4)
    assert [f.slug for f in findings] == ["section-disagrees"]
    assert "3e+04 cm⁴ stated, 2.25e+04 cm⁴ drawn" in findings[0].message


def test_exchanged_axes_of_a_property_set_are_noticed():
    maker = Maker()
    profile = maker.rectangle(100.0, 300.0, "R")
    profile_set(maker, profile, MomentOfInertiaY=2.5e7, MomentOfInertiaZ=2.25e8)

    section, findings = read_section(profile, units_of(maker))

    assert section.inertia == pytest.approx(2.25e-4)
    assert "exchanged" in findings[0].message


def test_a_profile_of_a_name_only_gets_its_section_from_its_property_set():
    maker = Maker()
    profile = maker.profile("IfcProfileDef", "IPE 300")
    nothing, findings = read_section(profile, units_of(maker))
    profile_set(maker, profile, CrossSectionArea=0.00538, MomentOfInertiaY=8.356e-5)

    section, _ = read_section(profile, units_of(maker))

    assert nothing is None
    assert [f.slug for f in findings] == ["profile-unreadable"]
    assert section.inertia == pytest.approx(8.356e-5)
    assert section.name == "IPE 300"


def test_property_sets_of_ifc2x3():
    maker = Maker("IFC2X3")
    profile = maker.rectangle(100.0, 300.0, "R")
    maker.make(
        "IfcStructuralSteelProfileProperties",
        ProfileName="R",
        ProfileDefinition=profile,
        CrossSectionArea=0.031,
        MomentOfInertiaY=2.3e-4,
        TorsionalConstantX=7.9e-5,
    )

    section, findings = read_section(profile, units_of(maker))

    assert (section.area, section.inertia, section.torsion) == pytest.approx(
        (0.031, 2.3e-4, 7.9e-5)
    )
    assert [f.slug for f in findings] == ["section-disagrees"]


@pytest.mark.parametrize(
    "make",
    [
        lambda m: m.profile("IfcCircleHollowProfileDef", "p", Position=m.axes_2d(), Radius=10.0,
                            WallThickness=12.0),
        lambda m: m.profile("IfcArbitraryOpenProfileDef", "p", Curve=m.line((0.0, 0.0), (1.0, 1))),
        lambda m: m.polygon([(0.0, 0.0), (1.0, 1.0), (2.0, 2.0)], "p"),
        lambda m: m.profile("IfcIShapeProfileDef", "p", Position=m.axes_2d(), OverallWidth=100.0,
                            OverallDepth=20.0, WebThickness=5.0, FlangeThickness=15.0),
        lambda m: m.profile("IfcRectangleProfileDef", "p", Position=m.axes_2d(), XDim=-1.0,
                            YDim=20.0),
    ],
)  # fmt: skip
def test_impossible_profiles_become_a_finding(make):
    maker = Maker()

    section, findings = read_section(make(maker), units_of(maker))

    assert section is None
    assert [f.slug for f in findings] == ["profile-unreadable"]
    assert "'p'" in findings[0].message
