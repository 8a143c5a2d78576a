"""Curves as chains of lines and arcs, against closed forms and SciPy."""

import math

import numpy as np
import pytest
from body_makers import Maker
from scipy.special import fresnel

from analysis_core.ifc.geometry.curves import read_path
from analysis_core.ifc.geometry.paths import Measures, closed_loop, sampled
from analysis_core.ifc.unreadable import UnreadableShapeError

MM = Measures(1e-3)


def length_of(points):
    return float(np.linalg.norm(np.diff(points, axis=0), axis=1).sum())


def test_an_arc_through_three_points_in_space_keeps_its_length():
    # A quarter of a circle of radius 2 m in a tilted plane.
    maker = Maker()
    u, v = np.array([0.6, 0.8, 0.0]), np.array([0.0, 0.0, 1.0])
    at = lambda t: (1000.0 + 2000.0 * (math.cos(t) * u + math.sin(t) * v)).tolist()  # noqa: E731
    points = maker.make("IfcCartesianPointList3D", [at(0.0), at(0.6), at(math.pi / 2.0)])
    curve = maker.make("IfcIndexedPolyCurve", points, [maker.make("IfcArcIndex", [1, 2, 3])])

    path = sampled(read_path(curve, MM))

    # 32 chords to the quarter: (pi/64)²/6 = 4e-4 short.
    assert length_of(path) == pytest.approx(2.0 * math.pi / 2.0, rel=5e-4)
    radii = np.linalg.norm(path - 1.0, axis=1)
    assert radii == pytest.approx(np.full(len(path), 2.0), rel=1e-9)


def test_an_arc_may_go_the_long_way_round():
    maker = Maker()
    points = maker.make("IfcCartesianPointList2D", [(1000.0, 0.0), (-1000.0, 0.0), (0.0, -1000.0)])
    curve = maker.make("IfcIndexedPolyCurve", points, [maker.make("IfcArcIndex", [1, 2, 3])])

    assert length_of(sampled(read_path(curve, MM))) == pytest.approx(1.5 * math.pi, rel=5e-4)


def test_a_trimmed_ellipse_by_chords():
    maker = Maker()
    ellipse = maker.make("IfcEllipse", maker.axes_2d(), 2000.0, 1000.0)
    curve = maker.make(
        "IfcTrimmedCurve", ellipse, [maker.make("IfcParameterValue", 0.0)],
        [maker.make("IfcParameterValue", math.pi)], True, "PARAMETER",
    )  # fmt: skip

    path = read_path(curve, MM)
    area = abs(np.trapz(sampled(path)[:, 1], sampled(path)[:, 0]))

    assert not path.exact
    assert path.end == pytest.approx((-2.0, 0.0), abs=1e-12)
    assert area == pytest.approx(math.pi * 2.0 * 1.0 / 2.0, rel=1e-3)


def test_a_curve_trimmed_against_its_sense_runs_backwards():
    maker = Maker()
    circle = maker.make("IfcCircle", maker.axes_2d(), 1000.0)
    curve = maker.make(
        "IfcTrimmedCurve", circle, [maker.point(1000.0, 0.0)], [maker.point(0.0, 1000.0)], False,
        "CARTESIAN",
    )  # fmt: skip

    path = sampled(read_path(curve, MM))

    assert length_of(path) == pytest.approx(1.5 * math.pi, rel=5e-4)
    assert path[1][1] < 0.0


def test_a_bezier_of_ifc2x3():
    maker = Maker("IFC2X3")
    control = [maker.point(*p) for p in ((0.0, 0.0), (1000.0, 2000.0), (2000.0, 0.0))]
    curve = maker.make("IfcBezierCurve", 2, control, "UNSPECIFIED", False, False)

    points = sampled(read_path(curve, MM))

    # The parabola with its top at half the height of the middle control point.
    assert points[:, 1].max() == pytest.approx(1.0)
    assert points[len(points) // 2] == pytest.approx((1.0, 1.0))


def test_an_offset_curve_keeps_its_distance():
    maker = Maker()
    basis = maker.line((0.0, 0.0), (4000.0, 0.0), (4000.0, 3000.0))
    curve = maker.make("IfcOffsetCurve2D", basis, 200.0, False)

    points = sampled(read_path(curve, MM))

    # To the left: inwards here, with the corner mitred.
    assert points == pytest.approx(np.array([[0.0, 0.2], [3.8, 0.2], [3.8, 3.0]]))


def segment(maker, parent, length, start=0.0):
    return maker.make(
        "IfcCurveSegment",
        "CONTINUOUS",
        maker.make("IfcAxis2Placement2D", maker.point(1000.0, 2000.0), maker.direction(0.0, 1.0)),
        maker.make("IfcLengthMeasure", start),
        maker.make("IfcLengthMeasure", length),
        parent,
    )


def of_segments(maker, *segments):
    return read_path(maker.make("IfcCompositeCurve", list(segments), False), MM)


@pytest.mark.parametrize("turn", [1.0, -1.0])
def test_an_arc_segment_of_an_alignment(turn):
    maker = Maker("IFC4X3")
    circle = maker.make("IfcCircle", maker.axes_2d(), 5000.0)

    path = of_segments(maker, segment(maker, circle, turn * 5000.0 * math.pi))

    # Half a circle to the left (or right) of the direction (0, 1) from (1, 2).
    assert path.end == pytest.approx((1.0 - turn * 10.0, 2.0))
    assert path.exact


def test_a_clothoid_ends_where_fresnel_says():
    # Constant A: curvature s/A²; coordinates A sqrt(pi) (C, S)(s/(A sqrt(pi))).
    maker = Maker("IFC4X3")
    a, length = 80.0, 60.0
    clothoid = maker.make("IfcClothoid", maker.axes_2d(), a * 1000.0)

    path = of_segments(maker, segment(maker, clothoid, length * 1000.0))

    scale = a * math.sqrt(math.pi)
    s, c = fresnel(length / scale)
    # The direction (0, 1) turns x into y; left is -x.
    assert path.end == pytest.approx((1.0 - scale * s, 2.0 + scale * c), rel=1e-8)


def test_a_parabola_of_an_alignment():
    maker = Maker("IFC4X3")
    place = maker.axes_2d()
    parabola = maker.make("IfcPolynomialCurve", place, [0.0, 1.0], [0.0, 0.0, 1e-5])

    path = of_segments(maker, segment(maker, parabola, 10000.0))

    # y = 1e-5 x² in mm: 1000 at 10,000; turned so that x runs along (0, 1).  The first chord
    # stands for the tangent: 0.08 mm per metre.
    assert path.end == pytest.approx((1.0 - 1.0, 2.0 + 10.0), abs=2e-2)


@pytest.mark.parametrize(
    "make",
    [
        lambda m: m.make("IfcLine", m.point(0.0, 0.0), m.make("IfcVector", m.direction(1, 0), 1.0)),
        lambda m: m.line((1.0, 1.0), (1.0, 1.0)),
        lambda m: m.make(
            "IfcIndexedPolyCurve",
            m.make("IfcCartesianPointList2D", [(0.0, 0.0), (1.0, 0.0)]),
            [m.make("IfcLineIndex", [1, 7])],
        ),
        lambda m: m.make(
            "IfcBSplineCurveWithKnots", 2, [m.point(0.0, 0.0), m.point(1.0, 1.0)], "UNSPECIFIED",
            False, False, [3, 3], [0.0, 1.0], "UNSPECIFIED",
        ),
    ],
)  # fmt: skip
def test_curves_that_cannot_be_read(make):
    with pytest.raises(UnreadableShapeError, match=r"supported|length|point 7|knots"):
        read_path(make(Maker()), MM)


def test_an_outline_of_two_corners_is_none():
    maker = Maker()

    with pytest.raises(UnreadableShapeError, match="fewer than three"):
        closed_loop(read_path(maker.line((0.0, 0.0), (1.0, 0.0), (0.0, 0.0)), MM))
