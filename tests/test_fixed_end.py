"""Fixed-end moments and end rotations of every action, against SymPy and handbook formulas."""

from __future__ import annotations

from typing import Any

import pytest
import sympy as sp

from analysis_core.distribution.fixed_end import end_actions, fixed_end_moments
from analysis_core.model import (
    FREE,
    RIGID,
    DistributedForce,
    ImposedCurvature,
    Member,
    MemberAction,
    Piece,
    PointForce,
    PointMoment,
)

LENGTH = 6.4
RIGIDITY = 2.3e6
SHEAR = 4.1e5
DEPTH = RIGIDITY ** (1.0 / 3.0)

PRISMATIC = (Piece(LENGTH, (RIGIDITY,)),)
SHEAR_FLEXIBLE = (Piece(LENGTH, (RIGIDITY,), 1.0, (SHEAR,)),)
STEPPED = (Piece(2.1, (RIGIDITY,)), Piece(LENGTH - 2.1, (3.0 * RIGIDITY,)))
TAPERED = (Piece(LENGTH, (DEPTH, -0.6 * DEPTH), 3.0),)
TAPERED_SHEAR = (Piece(LENGTH, (DEPTH, 0.8 * DEPTH), 3.0, (SHEAR, 0.8 * SHEAR)),)

ACTIONS: dict[str, MemberAction] = {
    "uniform": DistributedForce("q", 0, 0.0, LENGTH, (4.2e3,)),
    "partial": DistributedForce("q", 0, 1.3, 4.9, (-2.7e3,)),
    "trapezoidal": DistributedForce("q", 0, 0.4, 5.5, (1.1e3, 2.9e3)),
    "cubic": DistributedForce("q", 0, 2.5, LENGTH, (1.0e3, -7.0e2, 3.0e2, -9.0e1)),
    "point force": PointForce("q", 0, 4.4, 1.7e4),
    "point moment": PointMoment("q", 0, 1.9, -8.3e3),
    "curvature": ImposedCurvature("q", 0, 0.7, 5.1, 1.4e-3),
}


def member(pieces: tuple[Piece, ...], start: float = RIGID, end: float = RIGID) -> Member:
    return Member(0, 0, 1, pieces, start_spring=start, end_spring=end)


def exact_slopes(pieces: tuple[Piece, ...], action: MemberAction) -> tuple[float, float]:
    """Integrate M0/EI and V0/GA of the simple beam numerically to 30 digits with mpmath."""
    import mpmath as mp

    with mp.workdps(30):
        moment, shear, breaks = _simple_beam(action)
        start, end, reached = mp.mpf(0), mp.mpf(0), 0.0
        for piece in pieces:
            marks = sorted(
                {reached, reached + piece.length}
                | {b for b in breaks if reached < b < reached + piece.length}
            )

            def curvature(x: Any, piece: Piece = piece, reached: float = reached) -> Any:
                u = (x - reached) / piece.length
                rigid = sum(c * u**i for i, c in enumerate(piece.flexural)) ** piece.power
                own = moment(x) / rigid
                if isinstance(action, ImposedCurvature):
                    own = action.curvature if action.start <= x <= action.end else 0
                return own

            def slip(x: Any, piece: Piece = piece, reached: float = reached) -> Any:
                if piece.shear is None:
                    return mp.mpf(0)
                u = (x - reached) / piece.length
                return shear(x) / sum(c * u**i for i, c in enumerate(piece.shear))

            start += mp.quad(lambda x: curvature(x) * (1 - x / LENGTH) - slip(x) / LENGTH, marks)
            end -= mp.quad(lambda x: curvature(x) * x / LENGTH + slip(x) / LENGTH, marks)
            reached += piece.length
        return float(start), float(end)


def _simple_beam(action: MemberAction) -> Any:
    if isinstance(action, PointForce):
        a, p = action.position, action.transverse
        left = p * (LENGTH - a) / LENGTH
        return (
            lambda x: left * x - (p * (x - a) if x > a else 0),
            lambda x: left - (p if x > a else 0),
            [a],
        )
    if isinstance(action, PointMoment):
        a, m = action.position, action.moment
        return lambda x: -m * x / LENGTH + (m if x > a else 0), lambda x: -m / LENGTH, [a]
    if isinstance(action, ImposedCurvature):
        return lambda x: 0, lambda x: 0, [action.start, action.end]
    x, y = sp.symbols("x y")
    s, e = (sp.Rational(str(v)) for v in (action.start, action.end))
    load = sum(sp.Rational(str(c)) * (y - s) ** i for i, c in enumerate(action.transverse))
    total = sp.integrate(load, (y, s, e))
    about_end = sp.integrate(load * (sp.Rational(str(LENGTH)) - y), (y, s, e))
    left = about_end / sp.Rational(str(LENGTH))
    inside = sp.lambdify(x, left * x - sp.integrate(load * (x - y), (y, s, x)), "mpmath")
    cut = sp.lambdify(x, left - sp.integrate(load, (y, s, x)), "mpmath")
    beyond = sp.lambdify(x, left * x - sp.integrate(load * (x - y), (y, s, e)), "mpmath")
    low, high, first, last = float(s), float(e), float(left), float(left - total)
    return (
        lambda v: inside(v) if low < v < high else beyond(v) if v >= high else float(left) * v,
        lambda v: cut(v) if low < v < high else last if v >= high else first,
        [low, high],
    )


@pytest.mark.parametrize("pieces", [PRISMATIC, SHEAR_FLEXIBLE, STEPPED, TAPERED, TAPERED_SHEAR])
@pytest.mark.parametrize("name", ACTIONS)
def test_end_rotations_are_the_integrals_of_the_simple_beam(
    name: str, pieces: tuple[Piece, ...]
) -> None:
    found = end_actions(member(pieces), ACTIONS[name])
    start, end = exact_slopes(pieces, ACTIONS[name])

    scale = max(abs(start), abs(end))
    assert found.start_rotation == pytest.approx(start, abs=2e-13 * scale)
    assert found.end_rotation == pytest.approx(end, abs=2e-13 * scale)


@pytest.mark.parametrize("name", ACTIONS)
def test_closed_fixed_end_moments_undo_the_end_rotations(name: str) -> None:
    # Slope deflection with both ends held: M = -(4, 2; 2, 4) EI/L times the simple-beam slopes.
    found = end_actions(member(PRISMATIC), ACTIONS[name])
    slim = RIGIDITY / LENGTH

    start = -slim * (4.0 * found.start_rotation + 2.0 * found.end_rotation)
    end = -slim * (2.0 * found.start_rotation + 4.0 * found.end_rotation)
    scale = max(abs(start), abs(end))
    assert found.start_moment == pytest.approx(start, abs=4e-15 * scale)
    assert found.end_moment == pytest.approx(end, abs=4e-15 * scale)


@pytest.mark.parametrize("name", ACTIONS)
def test_a_pinned_far_end_adds_half_of_what_it_gives_up(name: str) -> None:
    # M_A (far end pinned) = M_A - M_B/2 for a prismatic member.
    fixed = fixed_end_moments(member(PRISMATIC), [ACTIONS[name]])
    pinned = fixed_end_moments(member(PRISMATIC, end=FREE), [ACTIONS[name]])
    other = fixed_end_moments(member(PRISMATIC, start=FREE), [ACTIONS[name]])

    assert pinned[0] == pytest.approx(fixed[0] - fixed[1] / 2.0, rel=1e-13)
    assert pinned[1] == 0.0
    assert other[1] == pytest.approx(fixed[1] - fixed[0] / 2.0, rel=1e-13)


# AISC Steel Construction Manual, table 3-23, and Roark's Formulas for Stress and Strain, table
# 8.1 (from memory): with w = 7, P = 11, m = 5, L = 6.4, a = 4.4, b = 2.0.
W, P, M, A, B = 7.0, 11.0, 5.0, 4.4, 2.0


@pytest.mark.parametrize(
    ("action", "start", "end"),
    [
        (DistributedForce("q", 0, 0, LENGTH, (W,)), -W * LENGTH**2 / 12, W * LENGTH**2 / 12),
        (
            DistributedForce("q", 0, 0, LENGTH, (0.0, W / LENGTH)),
            -W * LENGTH**2 / 30,
            W * LENGTH**2 / 20,
        ),
        (
            DistributedForce("q", 0, 0, LENGTH / 2, (W,)),
            -11 * W * LENGTH**2 / 192,
            5 * W * LENGTH**2 / 192,
        ),
        (PointForce("q", 0, A, P), -P * A * B**2 / LENGTH**2, P * A**2 * B / LENGTH**2),
        (
            PointMoment("q", 0, A, M),
            M * B * (2 * A - B) / LENGTH**2,
            M * A * (2 * B - A) / LENGTH**2,
        ),
        (ImposedCurvature("q", 0, 0, LENGTH, 1e-3), -RIGIDITY * 1e-3, RIGIDITY * 1e-3),
    ],
)
def test_fixed_end_moments_are_those_of_the_handbooks(
    action: MemberAction, start: float, end: float
) -> None:
    found = fixed_end_moments(member(PRISMATIC), [action])

    assert found == pytest.approx((start, end), rel=1e-14)


def test_a_force_near_an_end_keeps_its_digits() -> None:
    near = 1e-6
    found = end_actions(member(PRISMATIC), PointForce("q", 0, LENGTH - near, 3.0))
    spread = end_actions(
        member(PRISMATIC), DistributedForce("q", 0, LENGTH - near, LENGTH, (3.0 / near,))
    )

    rest = LENGTH - (LENGTH - near)  # the distance as it is in binary
    assert found.end_moment == pytest.approx(3.0 * rest, rel=1e-6)
    # A uniform force over c at the end: w c²/2 to first order.
    assert spread.end_moment == pytest.approx(3.0 * rest / 2.0, rel=1e-6)
    assert spread.start_moment == pytest.approx(-3.0 * rest**2 / 3.0 / LENGTH, rel=1e-6)


def test_shear_strain_leaves_uniform_fixed_end_moments_alone() -> None:
    stiff = fixed_end_moments(member(PRISMATIC), [ACTIONS["uniform"]])
    soft = fixed_end_moments(member(SHEAR_FLEXIBLE), [ACTIONS["uniform"]])

    assert soft == pytest.approx(stiff, rel=1e-14)


def test_axial_parts_add_up_along_the_member() -> None:
    found = end_actions(member(TAPERED), DistributedForce("q", 0, 1.0, 4.0, (), (200.0, 60.0)))

    assert found.axial == pytest.approx(200.0 * 3.0 + 60.0 * 4.5, rel=1e-14)
    # Integral of (200 + 60 v)(L - 1 - v) for v from 0 to 3.
    lever = 200.0 * ((LENGTH - 1.0) * 3.0 - 4.5) + 60.0 * ((LENGTH - 1.0) * 4.5 - 9.0)
    assert found.axial_lever == pytest.approx(lever, rel=1e-14)
    assert found.start_force == found.end_force == 0.0
