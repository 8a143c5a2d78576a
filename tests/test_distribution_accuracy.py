"""Stiffness ratios of a million to one cost no accuracy: exact fractions and extended precision."""

from __future__ import annotations

import random
from fractions import Fraction

import numpy as np
import pytest
from distribution_oracle import exact

from analysis_core.distribution import solve, solve_lines
from analysis_core.distribution.direct import SpanStiffness, sweep, sweep_lines
from analysis_core.distribution.translations import held_horizontally
from analysis_core.model import (
    FREE,
    RIGID,
    DistributedForce,
    Joint,
    Line,
    Member,
    Piece,
    PointForce,
    Support,
)

# PERFORMANCE.md, goal 7: of the largest moment.
GOAL = 2e-15


def in_fractions(
    slim: list[float], start: list[float], end: list[float], held: list[float]
) -> list[Fraction]:
    """Solve the slope-deflection equations of one line exactly (pins, and clamped ends)."""
    k = [Fraction(v) for v in slim]
    count = len(k)
    main = [Fraction(v) for v in held]
    right = [Fraction(0)] * (count + 1)
    for j in range(count):
        main[j] += 4 * k[j]
        main[j + 1] += 4 * k[j]
        right[j] -= Fraction(start[j])
        right[j + 1] -= Fraction(end[j])
    for j in range(count):
        factor = 2 * k[j] / main[j]
        main[j + 1] -= factor * 2 * k[j]
        right[j + 1] -= factor * right[j]
    turns = [Fraction(0)] * (count + 1)
    turns[count] = right[count] / main[count]
    for j in range(count - 1, -1, -1):
        turns[j] = (right[j] - 2 * k[j] * turns[j + 1]) / main[j]
    found = []
    for j in range(count):
        found.append(Fraction(start[j]) + 4 * k[j] * turns[j] + 2 * k[j] * turns[j + 1])
        found.append(Fraction(end[j]) + 2 * k[j] * turns[j] + 4 * k[j] * turns[j + 1])
    return found


@pytest.mark.parametrize("seed", range(40))
def test_a_sweep_is_right_to_the_last_digits(seed: int) -> None:
    rng = random.Random(seed)
    count = rng.randint(1, 15)
    slim = [10.0 ** rng.uniform(0.0, 6.0) for _ in range(count)]
    start = [-rng.uniform(1.0, 100.0) for _ in range(count)]
    end = [rng.uniform(1.0, 100.0) for _ in range(count)]
    held = [rng.choice((0.0, 1e200)), *([0.0] * (count - 1)), rng.choice((0.0, 3e3))]
    expected = in_fractions(slim, start, end, held)
    largest = max(abs(float(v)) for v in expected) or 1.0
    stiffness = [[4 * k for k in slim], [4 * k for k in slim], [2 * k for k in slim]]
    stiffness += [[12 * k * k for k in slim], held]

    one = sweep(*stiffness, start, end, [0.0] * (count + 1))
    many = sweep_lines(
        SpanStiffness(*(np.array(row)[:, None] for row in stiffness)),
        np.array(start)[:, None, None],
        np.array(end)[:, None, None],
    )

    for found in (
        [v for pair in zip(one[0], one[1], strict=True) for v in pair],
        np.stack([many.start.ravel(), many.end.ravel()], 1).ravel().tolist(),
    ):
        worst = max(abs(float(Fraction(a) - b)) for a, b in zip(found, expected, strict=True))
        assert worst <= GOAL * largest


def uneven_line(seed: int, *, plain: bool) -> Line:
    """EI/L over six decades; if not plain with hinges, springs, bare joints and section changes."""
    rng = random.Random(seed)
    count = rng.randint(2, 8)
    joints, members, x = [Joint(0, 0.0, 0.0, support=Support(RIGID))], [], 0.0
    for index in range(count):
        length = round(rng.uniform(1.0, 9.0), 3)
        x += length
        length = x - joints[-1].x
        kind = rng.random()
        inner = not plain and index < count - 1 and joints[-1].support is not None
        support: Support | None = Support(RIGID)
        if inner and kind < 0.25:
            support = None
        elif inner and kind < 0.4:
            support = Support(10.0 ** rng.uniform(5.0, 7.0))
        hinge = inner and kind < 0.12
        joints.append(Joint(index + 1, x, 0.0, support=support))
        rigidity = length * 10.0 ** rng.uniform(3.0, 9.0)
        members.append(
            Member(
                index,
                index,
                index + 1,
                (Piece(length, (rigidity,)),),
                end_spring=FREE if hinge else RIGID,
            )
        )
    actions = [
        DistributedForce("G", m.id, 0.0, m.length, (rng.uniform(1e3, 9e3),)) for m in members
    ]
    actions += [
        PointForce("G", m.id, m.length * rng.random(), rng.uniform(-9e3, 2e4))
        for m in members
        if rng.random() < 0.4
    ]
    return Line(f"uneven {seed}", tuple(joints), tuple(members), tuple(actions))


@pytest.mark.parametrize("seed", range(12))
def test_a_line_with_any_stiffnesses_is_right_from_the_model_to_the_moments(seed: int) -> None:
    line = uneven_line(seed, plain=True)
    expected = np.array([[float(v) for v in row] for row in exact(line, "G", [0]).end_moments])

    for solution in (solve(line, ["G"]), solve_lines([line] * 12, ["G"])[7]):
        worst = np.abs(solution.end_moments[0] - expected).max()  # type: ignore[union-attr]
        assert worst <= GOAL * np.abs(expected).max()


@pytest.mark.parametrize("seed", range(100, 120))
def test_hinges_bare_joints_and_springs_cost_no_accuracy(seed: int) -> None:
    line = uneven_line(seed, plain=False)
    found = exact(line, "G", held_horizontally(line, range(len(line.joints))))
    expected = np.array([[float(v) for v in row] for row in found.end_moments])
    reactions = np.array([float(row[1]) for row in found.reactions])

    solution = solve(line, ["G"])

    assert np.abs(solution.end_moments[0] - expected).max() <= GOAL * np.abs(expected).max()
    worst = np.abs(solution.reactions[0, :, 1] - reactions).max()
    assert worst <= GOAL * np.abs(reactions).max()
