"""Stiffness and carry-over: closed forms, published frame constants, SymPy."""

from __future__ import annotations

import math

import numpy as np
import pytest
import sympy as sp
from scipy.integrate import quad

from analysis_core.distribution.quadrature import panel_ends
from analysis_core.distribution.stiffness_factors import (
    elastic_weights,
    end_rotations,
    end_stiffness,
    in_a_row,
    stiffness_and_carry_over,
    with_point_weights,
)
from analysis_core.errors import ConvergenceError
from analysis_core.model import FREE, RIGID, Member, Piece

LENGTH, RIGIDITY = 5.3, 7.1e6


def member(*pieces: Piece, start: float = RIGID, end: float = RIGID) -> Member:
    return Member(0, 0, 1, pieces, start_spring=start, end_spring=end)


def haunched(shape: str, share: float, rise: float) -> Member:
    """Equal haunches at both ends; EI follows the cube of the depth, 1 in the middle."""
    profile = {"straight": (1.0 + rise, -rise), "parabolic": (1.0 + rise, -2.0 * rise, rise)}[shape]
    mirrored = {"straight": (1.0, rise), "parabolic": (1.0, 0.0, rise)}[shape]
    return member(
        Piece(share, profile, 3.0), Piece(1.0 - 2.0 * share, (1.0,)), Piece(share, mirrored, 3.0)
    )


def test_a_prismatic_member_has_4_and_one_half() -> None:
    # Hardy Cross, Proc. ASCE, May 1930.
    found = stiffness_and_carry_over(member(Piece(LENGTH, (RIGIDITY,))))

    assert found.start_stiffness == pytest.approx(4.0 * RIGIDITY / LENGTH, rel=1e-15)
    assert found.end_stiffness == pytest.approx(4.0 * RIGIDITY / LENGTH, rel=1e-15)
    assert found.start_carry_over == pytest.approx(0.5, rel=1e-15)


def test_a_released_far_end_gives_3_and_carries_nothing() -> None:
    found = stiffness_and_carry_over(member(Piece(LENGTH, (RIGIDITY,)), end=FREE))

    assert found.start_stiffness == pytest.approx(3.0 * RIGIDITY / LENGTH, rel=1e-15)
    assert found.start_carry_over == 0.0
    assert found.end_stiffness == 0.0


# Portland Cement Association, Handbook of Frame Constants (1958), as printed; from memory.
@pytest.mark.parametrize(
    ("shape", "share", "rise", "stiffness", "carry_over"),
    [("parabolic", 0.2, 1.0, 6.41, 0.619), ("straight", 0.3, 1.0, 10.85, 0.705)],
)
def test_haunched_members_have_the_published_frame_constants(
    shape: str, share: float, rise: float, stiffness: float, carry_over: float
) -> None:
    found = stiffness_and_carry_over(haunched(shape, share, rise))

    assert found.start_stiffness == pytest.approx(stiffness, abs=0.01)
    assert found.start_carry_over == pytest.approx(carry_over, abs=0.001)
    assert found.end_stiffness == pytest.approx(found.start_stiffness, rel=1e-14)


@pytest.mark.parametrize(("ratio", "power"), [(2.0, 3), (0.4, 3), (1.7, 2), (0.55, 1), (3.0, 4)])
def test_a_tapered_member_agrees_with_symbolic_integration(ratio: float, power: int) -> None:
    u = sp.symbols("u")
    r = sp.Rational(str(ratio))
    flexible = 1 / (1 + (r - 1) * u) ** power
    near, far, cross = (
        sp.N(sp.integrate(sp.apart(sp.expand(m) * flexible, u), (u, 0, 1)), 30)
        for m in ((1 - u) ** 2, u**2, -u * (1 - u))
    )
    size = RIGIDITY / LENGTH / float(near * far - cross**2)

    tapered = member(
        Piece(LENGTH, (RIGIDITY ** (1 / power), RIGIDITY ** (1 / power) * (ratio - 1.0)), power)
    )
    found = stiffness_and_carry_over(tapered)

    assert found.start_stiffness == pytest.approx(float(far) * size, rel=2e-14)
    assert found.end_stiffness == pytest.approx(float(near) * size, rel=2e-14)
    assert found.start_carry_over == pytest.approx(float(-cross / far), rel=2e-14)


def test_a_shear_flexible_member_has_the_textbook_factors() -> None:
    # Przemieniecki, Theory of Matrix Structural Analysis (1968), section 5.6: (4 + p)/(1 + p)
    # EI/L and (2 - p)/(4 + p), p = 12 EI/(GA L²); from memory.
    shear = 9.0e5
    p = 12.0 * RIGIDITY / (shear * LENGTH**2)

    found = stiffness_and_carry_over(member(Piece(LENGTH, (RIGIDITY,), 1.0, (shear,))))

    assert found.start_stiffness == pytest.approx((4 + p) / (1 + p) * RIGIDITY / LENGTH, rel=1e-14)
    assert found.start_carry_over == pytest.approx((2 - p) / (4 + p), rel=1e-13)


def test_end_springs_follow_the_fixity_factors() -> None:
    # Monforton and Wu, Matrix analysis of semi-rigidly connected frames, J. Struct. Div. ASCE
    # 89 (1963): with f = 1/(1 + 3EI/(L k)) the stiffness is 12 f_a/(4 - f_a f_b) EI/L and the
    # carry-over f_b/2.
    k_a, k_b = 3.0e6, 8.0e7
    f_a, f_b = (1.0 / (1.0 + 3.0 * RIGIDITY / (LENGTH * k)) for k in (k_a, k_b))

    found = stiffness_and_carry_over(member(Piece(LENGTH, (RIGIDITY,)), start=k_a, end=k_b))

    slim = RIGIDITY / LENGTH
    assert found.start_stiffness == pytest.approx(12 * f_a / (4 - f_a * f_b) * slim, rel=1e-14)
    assert found.end_stiffness == pytest.approx(12 * f_b / (4 - f_a * f_b) * slim, rel=1e-14)
    assert found.start_carry_over == pytest.approx(f_b / 2.0, rel=1e-13)
    assert found.end_carry_over == pytest.approx(f_a / 2.0, rel=1e-13)


@pytest.mark.parametrize("spring", [1e-6, 1.0, 1e9, 1e18])
def test_springs_of_any_size_keep_reciprocity(spring: float) -> None:
    found = stiffness_and_carry_over(member(Piece(LENGTH, (RIGIDITY,)), start=spring))

    assert found.start_stiffness * found.start_carry_over == pytest.approx(
        found.end_stiffness * found.end_carry_over, rel=1e-12
    )


def test_stiffness_undoes_the_flexibility_of_the_same_member() -> None:
    weights = elastic_weights(
        (Piece(1.7, (2e6, -1e6, 4e5), 1.0, (8e5, 2e5)), Piece(2.9, (60.0, 40.0), 3.0))
    )
    ends = end_stiffness(weights)

    turned = np.array(
        [
            end_rotations(weights, ends.near, ends.carried),
            end_rotations(weights, ends.carried, ends.far),
        ]
    )

    np.testing.assert_allclose(turned, np.eye(2), atol=1e-13)
    assert ends.both == pytest.approx(ends.near * ends.far - ends.carried**2, rel=1e-12)


def test_weights_in_a_row_are_those_of_the_whole() -> None:
    whole = elastic_weights((Piece(2.0, (4e6,)), Piece(3.5, (9e6,)), Piece(1.1, (2e6,))))
    parts = in_a_row(
        elastic_weights((piece,))
        for piece in (Piece(2.0, (4e6,)), Piece(3.5, (9e6,)), Piece(1.1, (2e6,)))
    )

    np.testing.assert_allclose(parts, whole, rtol=1e-15)


def test_a_hinge_inside_leaves_two_cantilevers_that_meet() -> None:
    # Tips at the hinge share their displacement: k = 3EI/a³ and 3EI/b³ in a row; the moments at
    # the ends are k·d·a and k·d·b for a rotation that lifts the tip by d = a.
    a, b = 2.0, 3.5
    weights = elastic_weights((Piece(a + b, (RIGIDITY,)),))
    shared = 1.0 / ((a**3 + b**3) / (3.0 * RIGIDITY))

    ends = with_point_weights(weights, [(a, math.inf)])

    assert ends.near == pytest.approx(shared * a * a, rel=1e-14)
    assert ends.far == pytest.approx(shared * b * b, rel=1e-14)
    assert ends.carried == pytest.approx(shared * a * b, rel=1e-14)
    assert ends.both == 0.0


def test_a_very_deep_taper_is_integrated_to_rounding() -> None:
    # Depth 1:50, EI 1:125,000; SciPy integrates the flexibility independently.
    depth, ratio = 20.0, 50.0
    piece = Piece(LENGTH, (depth, depth * (ratio - 1.0)), 3.0)
    weights = elastic_weights((piece,))

    expected, _ = quad(
        lambda u: LENGTH / (depth * (1.0 + (ratio - 1.0) * u)) ** 3, 0.0, 1.0, epsrel=1e-13
    )

    assert weights.total == pytest.approx(expected, rel=1e-12)
    assert weights.total == pytest.approx(
        LENGTH / depth**3 * (1.0 - ratio**-2.0) / (2.0 * (ratio - 1.0)), rel=1e-15
    )
    assert len(panel_ends(piece)) > 3


def test_a_rigidity_that_vanishes_is_refused() -> None:
    with pytest.raises(ConvergenceError, match="flexibility cannot be integrated"):
        elastic_weights((Piece(2.0, (1e3, -1e3), 3.0),))
