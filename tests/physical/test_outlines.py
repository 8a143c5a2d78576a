"""Moments of outlines with arcs, against closed forms and SymPy."""

import math

import numpy as np
import pytest
import sympy

from analysis_core.ifc.geometry import outline
from analysis_core.ifc.sections import slices
from analysis_core.ifc.unreadable import UnreadableShapeError


def test_a_rectangle_off_the_origin_has_the_moments_of_the_textbook():
    rows = outline.loop([(1.0, 2.0), (4.0, 2.0), (4.0, 7.0), (1.0, 7.0)])

    found = outline.moments((rows,))

    assert (found.area, found.x, found.y) == pytest.approx((15.0, 2.5, 4.5), rel=1e-14)
    assert found.xx == pytest.approx(5.0 * 3.0**3 / 12.0, rel=1e-13)
    assert found.yy == pytest.approx(3.0 * 5.0**3 / 12.0, rel=1e-13)
    assert found.xy == pytest.approx(0.0, abs=1e-12)


def test_a_triangle_has_the_product_of_inertia_of_the_textbook():
    # Right-angled with legs b along x and h along y: I_xy about the centroid is -b²h²/72.
    found = outline.moments((outline.loop([(0.0, 0.0), (3.0, 0.0), (0.0, 4.0)]),))

    assert found.xy == pytest.approx(-(3.0**2) * 4.0**2 / 72.0, rel=1e-13)
    assert found.yy == pytest.approx(3.0 * 4.0**3 / 36.0, rel=1e-13)


def test_a_circle_is_exact():
    found = outline.moments((outline.circle(0.3, 5.0, -7.0),))

    assert found.area == pytest.approx(math.pi * 0.09, rel=1e-13)
    assert (found.x, found.y) == pytest.approx((5.0, -7.0), rel=1e-13)
    assert found.xx == pytest.approx(math.pi * 0.3**4 / 4.0, rel=1e-12)


def test_an_outline_a_thousand_kilometres_away_keeps_its_moments():
    near = outline.moments((outline.rounded([(0, 0, 0), (0.2, 0, 0.03), (0.1, 0.4, 0.02)]),))
    far = outline.rounded([(1e6, 1e6, 0.0), (1e6 + 0.2, 1e6, 0.03), (1e6 + 0.1, 1e6 + 0.4, 0.02)])

    found = outline.moments((far,))

    # A double holds 1e6 m to 1.2e-10 m: 1e-9 of a side of 0.1 m, times three for the moments.
    assert found.yy == pytest.approx(near.yy, rel=3e-8)


def test_the_circular_segment_agrees_with_integration_by_sympy():
    # Cap of a disc above y = r cos a, a = 60°, swept by the angle t from the y axis: at
    # y = r cos t the half width is r sin t, and dy = -r sin t dt.
    r, a = sympy.Rational(3, 10), sympy.pi / 3
    t = sympy.symbols("t", real=True)
    y, half_width = r * sympy.cos(t), r * sympy.sin(t)

    def over_the_cap(integrand):
        return float(sympy.integrate(sympy.expand(integrand * r * sympy.sin(t)), (t, 0, a)))

    area = over_the_cap(2 * half_width)
    first = over_the_cap(2 * half_width * y)
    second = over_the_cap(2 * half_width * y**2)
    across = over_the_cap(sympy.Rational(2, 3) * half_width**3)

    half = 0.3 * math.sin(math.pi / 3)
    rows = np.array([(half, 0.15, math.tan(math.pi / 6)), (-half, 0.15, 0.0)])
    found = outline.moments((rows,))

    assert found.area == pytest.approx(area, rel=1e-12)
    assert found.y == pytest.approx(first / area, rel=1e-12)
    assert found.yy == pytest.approx(second - first**2 / area, rel=1e-10)
    assert found.xx == pytest.approx(across, rel=1e-11)


def test_a_fillet_adds_what_sympy_says():
    # The spandrel in a square corner, between its sides and the arc (r - r cos t, r - r sin t).
    r = 0.02
    t = sympy.symbols("t", real=True)
    x, y = 1 - sympy.cos(t), 1 - sympy.sin(t)
    step = sympy.diff(x, t)
    area = r**2 * float(sympy.integrate(sympy.expand(y * step), (t, 0, sympy.pi / 2)))
    first = r**3 * float(sympy.integrate(sympy.expand(x * y * step), (t, 0, sympy.pi / 2)))
    assert area == pytest.approx(r**2 * (1.0 - math.pi / 4.0))
    sharp = [(0, 0, 0), (0.3, 0, 0), (0.3, 0.05, 0), (0.05, 0.05, 0), (0.05, 0.4, 0), (0, 0.4, 0)]
    soft = [(px, py, r if i == 3 else 0.0) for i, (px, py, _) in enumerate(sharp)]

    before, after = (outline.moments((outline.rounded(c),)) for c in (sharp, soft))

    assert after.area - before.area == pytest.approx(area, rel=1e-9)
    moved = after.area * after.x - before.area * before.x
    assert moved == pytest.approx(area * 0.05 + first, rel=1e-9)


def test_voids_subtract():
    outer = outline.loop([(0, 0), (2, 0), (2, 3), (0, 3)])
    void = outline.clockwise(outline.loop([(0.5, 0.5), (1.5, 0.5), (1.5, 2.5), (0.5, 2.5)]))

    found = outline.moments((outer, void))

    assert found.area == pytest.approx(4.0)
    assert found.yy == pytest.approx(2 * 3**3 / 12 - 1 * 2**3 / 12)


def test_moments_after_a_transformation_are_those_of_the_transformed_outline():
    rows = outline.rounded([(0, 0, 0), (0.3, 0.1, 0.02), (0.2, 0.4, 0.05), (-0.1, 0.3, 0.0)])
    matrix = ((-1.3, 0.4), (0.4, 1.3))  # mirrors, turns and stretches evenly

    moved = outline.moments(outline.transformed((rows,), matrix, 0.7, -0.2))
    computed = outline.moments((rows,)).transformed(matrix)

    assert (moved.area, moved.xx, moved.yy, moved.xy) == pytest.approx(
        (computed.area, computed.xx, computed.yy, computed.xy), rel=1e-9
    )


def test_an_outline_without_area_is_refused():
    with pytest.raises(UnreadableShapeError, match="area of 0 m²"):
        outline.moments((outline.loop([(0, 0), (1, 0), (2, 0)]),))


def test_shear_area_of_rectangle_and_circle_are_those_of_the_textbooks():
    box = outline.loop([(0, 0), (0.2, 0), (0.2, 0.5), (0, 0.5)])
    disc = outline.circle(0.1)

    for rows, share, tolerance in ((box, 5.0 / 6.0, 1e-12), (disc, 0.9, 1e-6)):
        m = outline.moments((rows,))
        area = slices.shear_area(slices.cut((rows,)), m.y, m.yy)
        # 5/6 and 9/10 of the area: S. Timoshenko, Strength of Materials I.
        assert area == pytest.approx(share * m.area, rel=tolerance)


def test_plastic_modulus_of_rectangle_circle_and_triangle():
    box = outline.loop([(0, 0), (0.2, 0), (0.2, 0.5), (0, 0.5)])
    disc = outline.circle(0.1)
    triangle = outline.loop([(-0.3, 0.0), (0.3, 0.0), (0.0, 0.6)])

    found = [slices.plastic_modulus((r,), slices.cut((r,))) for r in (box, disc, triangle)]

    assert found[0] == pytest.approx(0.2 * 0.5**2 / 4.0, rel=1e-12)
    assert found[1] == pytest.approx(4.0 / 3.0 * 0.1**3, rel=1e-7)
    # Triangle: b h² (2 - sqrt 2)/6 (Roark's Formulas, table A.1).
    assert found[2] == pytest.approx(0.6 * 0.6**2 * (2.0 - math.sqrt(2.0)) / 6.0, rel=1e-9)


def test_a_bulge_through_three_points_finds_the_arc():
    angles = (0.3, 1.9, 4.4)
    points = [(2.0 + 3.0 * math.cos(t), -1.0 + 3.0 * math.sin(t)) for t in angles]

    bulge = outline.bulge_of(*points)
    cx, cy, radius, _, sweep = outline.arc_of(*points[0], *points[2], bulge)

    assert (cx, cy, radius, sweep) == pytest.approx((2.0, -1.0, 3.0, 4.1), rel=1e-12)
