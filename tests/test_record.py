"""The recorded distribution: factors, every release, the short cuts, and how far off it ends."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from random_lines import beam_line, frame, plain_line

from analysis_core.distribution import solve
from analysis_core.distribution.record import DistributionRecord, distribute
from analysis_core.errors import ConvergenceError, MechanismError, ModelError
from analysis_core.model import (
    RIGID,
    Action,
    DistributedForce,
    Joint,
    JointForce,
    Line,
    Member,
    Piece,
    PointForce,
    Support,
)

FIXED = Support(RIGID, RIGID, RIGID)
PINNED = Support(RIGID)


def beam(
    spans: list[tuple[float, float]], supports: list[Support | None], *actions: Action
) -> Line:
    """Spans as (length, EI)."""
    joints, members, x = [Joint(0, 0.0, 0.0, support=supports[0])], [], 0.0
    for i, (length, rigidity) in enumerate(spans):
        x += length
        joints.append(Joint(i + 1, x, 0.0, support=supports[i + 1]))
        members.append(Member(i, i, i + 1, (Piece(length, (rigidity,)),), span=i + 1))
    return Line("beam", tuple(joints), tuple(members), actions)


def uniform(member: int, length: float, load: float) -> DistributedForce:
    return DistributedForce("G", member, 0.0, length, (load,))


def three_spans() -> Line:
    """Stiffness 4EI/L as 2 : 3 : 4; fixed at the left, on rollers else."""
    return beam(
        [(6.0, 3.0e6), (8.0, 6.0e6), (5.0, 5.0e6)],
        [FIXED, PINNED, PINNED, PINNED],
        uniform(0, 6.0, 10e3),
        uniform(1, 8.0, 9e3),
        uniform(2, 5.0, 24e3),
    )


def test_a_table_holds_what_one_works_out_by_hand() -> None:
    # Worked by hand.  EI/L = 0.5, 0.75, 1.0 MN·m; stiffness 2, 3, and 3 for the last span, whose
    # far end is pinned.  Fixed-end moments 30, 48 kN·m; w L²/8 = 75 kN·m in the last span.
    record = distribute(three_spans(), "G", order="together")
    table = record.tables[0]

    assert [(e.joint, e.member, e.side) for e in table.ends] == [
        (0, 0, 0),
        (1, 0, 1),
        (1, 1, 0),
        (2, 1, 1),
        (2, 2, 0),
        (3, 2, 1),
    ]
    np.testing.assert_allclose([e.stiffness for e in table.ends[:5]], [2e6, 2e6, 3e6, 3e6, 3e6])
    np.testing.assert_allclose([e.factor for e in table.ends], [0, 0.4, 0.6, 0.5, 0.5, 0])
    np.testing.assert_allclose([e.carry_over for e in table.ends[:5]], [0.5, 0.5, 0.5, 0.5, 0])
    assert [e.note for e in table.ends] == ["", "", "", "", "far end pinned", ""]
    np.testing.assert_allclose(table.held, [-30e3, 30e3, -48e3, 48e3, -50e3, 50e3])
    np.testing.assert_allclose(table.start, [-30e3, 30e3, -48e3, 48e3, -75e3, 0], atol=1e-10)

    first, second = table.rows[0], table.rows[1]
    assert first.joints == (1, 2)
    np.testing.assert_allclose(first.unbalance, [(1, -18e3), (2, -27e3)])
    np.testing.assert_allclose(first.balanced, [(1, 7.2e3), (2, 10.8e3), (3, 13.5e3), (4, 13.5e3)])
    np.testing.assert_allclose(first.carried, [(1, 0, 3.6e3), (2, 3, 5.4e3), (3, 2, 6.75e3)])
    np.testing.assert_allclose(second.unbalance, [(1, 6.75e3), (2, 5.4e3)])
    np.testing.assert_allclose(
        second.balanced, [(1, -2.7e3), (2, -4.05e3), (3, -2.7e3), (4, -2.7e3)]
    )


def test_the_largest_unbalance_goes_first() -> None:
    table = distribute(three_spans(), "G").tables[0]

    assert table.rows[0].joints == (2,)
    np.testing.assert_allclose(table.rows[0].unbalance, [(2, -27e3)])
    # Half of the 13.5 that member 1 took at joint 2 comes on top at joint 1.
    assert table.rows[1].joints == (1,)
    np.testing.assert_allclose(table.rows[1].unbalance, [(1, -11.25e3)])


def test_it_stops_below_one_per_cent_of_the_largest_fixed_end_moment() -> None:
    record = distribute(three_spans(), "G")

    assert record.stop == 0.01
    assert record.largest_fixed_end == pytest.approx(50e3)
    assert record.limit == pytest.approx(500.0)
    assert 0.0 < record.tables[0].left <= 500.0
    exact = solve(three_spans(), ["G"]).end_moments[0]
    np.testing.assert_allclose(record.exact, exact, atol=1e-9)
    np.testing.assert_allclose(record.end_moments, exact, atol=500.0)
    assert record.difference == pytest.approx(np.abs(record.end_moments - exact).max())
    assert not record.end_moments.flags.writeable


def free_spans(count: int) -> Line:
    """Spans of different stiffness with free rotations at every joint, loaded unevenly."""
    return beam(
        [(4.0 + i, 1e6 * (1 + i % 3)) for i in range(count)],
        [PINNED] * (count + 1),
        *(JointForce("G", joint, moment=1e3 * (1 + joint)) for joint in range(count + 1)),
    )


def unbalances(record: DistributionRecord) -> list[float]:
    """Sum of the unbalances before each cycle of releases."""
    return [sum(u for _, u in row.unbalance) for row in record.tables[0].rows]


def test_releasing_all_joints_at_once_halves_the_unbalance() -> None:
    # Whatever the stiffnesses: half of what balances is carried over, with the opposite sign.
    record = distribute(free_spans(6), "G", order="together", short_cuts=False, stop=1e-6)
    sums = unbalances(record)

    assert len(sums) > 15
    np.testing.assert_allclose(np.array(sums[1:]) / np.array(sums[:-1]), -0.5, rtol=1e-9)


def test_alternating_joints_quarter_the_unbalance() -> None:
    record = distribute(free_spans(6), "G", order="alternate", short_cuts=False, stop=1e-9)
    sums = unbalances(record)

    assert record.tables[0].rows[0].joints == (0, 2, 4, 6)
    assert record.tables[0].rows[1].joints == (1, 3, 5)
    # From one round of both halves to the next.
    np.testing.assert_allclose(np.array(sums[3::2]) / np.array(sums[1:-2:2]), 0.25, rtol=1e-9)


@pytest.mark.parametrize(
    ("sign", "parity", "modified"), [(1, "symmetric", 2), (-1, "antisymmetric", 6)]
)
def test_a_symmetric_line_is_written_down_by_half(sign: int, parity: str, modified: float) -> None:
    line = beam(
        [(5.0, 2e6), (7.0, 3e6), (5.0, 2e6)],
        [PINNED] * 4,
        uniform(0, 5.0, 8e3),
        uniform(2, 5.0, sign * 8e3),
    )
    record = distribute(line, "G")
    table = record.tables[0]

    assert table.parity == parity
    assert [e.joint for e in table.ends] == [0, 1, 1]
    assert table.ends[2].stiffness == pytest.approx(modified * 3e6 / 7.0)
    assert table.ends[2].carry_over == 0.0
    # One joint left to release: exact at once.
    assert len(table.rows) == 1
    np.testing.assert_allclose(record.end_moments, record.exact, atol=1e-10)


def test_a_joint_on_the_axis_is_fixed_or_free_by_symmetry() -> None:
    spans = [(5.0, 2e6), (7.0, 3e6), (7.0, 3e6), (5.0, 2e6)]
    even = beam(spans, [PINNED] * 5, uniform(0, 5.0, 8e3), uniform(3, 5.0, 8e3))
    odd = beam(spans, [PINNED] * 5, uniform(0, 5.0, 8e3), uniform(3, 5.0, -8e3))

    fixed, free = (distribute(line, "G").tables[0] for line in (even, odd))

    assert fixed.ends[2].stiffness == pytest.approx(4 * 3e6 / 7.0)
    assert fixed.ends[2].carry_over == pytest.approx(0.5)
    assert free.ends[2].stiffness == pytest.approx(3 * 3e6 / 7.0)
    assert free.ends[2].note == "far end pinned"
    for line in (even, odd):
        record = distribute(line, "G")
        np.testing.assert_allclose(record.end_moments, record.exact, atol=1e-10)


def test_a_joint_on_the_axis_with_a_spring_turns_under_antisymmetric_load() -> None:
    line = beam(
        [(5.0, 2e6), (7.0, 3e6), (7.0, 3e6), (5.0, 2e6)],
        [FIXED, PINNED, Support(RIGID, rotation=2e6), PINNED, FIXED],
        uniform(1, 7.0, 8e3),
        uniform(2, 7.0, -8e3),
    )
    record = distribute(line, "G", stop=1e-9)
    table = record.tables[0]

    assert table.parity == "antisymmetric"
    # Its left column stands for both: 4EI/L twice, and the spring.
    middle = next(e for e in table.ends if e.joint == 2 and e.bar is not None)
    assert middle.weight == 2.0
    assert middle.factor == pytest.approx((12e6 / 7) / (24e6 / 7 + 2e6))
    # Half of what joint 1 takes arrives there, from both sides.
    at_1 = next(row for row in table.rows if row.joints == (1,))
    carried = next(m for column, to, m in at_1.carried if table.ends[to].joint == 2)
    after = next(row for row in table.rows[table.rows.index(at_1) + 1 :] if row.joints == (2,))
    assert dict(after.unbalance)[2] == pytest.approx(2.0 * carried, rel=1e-9)
    np.testing.assert_allclose(record.end_moments, record.exact, atol=1e-4)


def test_unlike_supports_are_not_symmetric() -> None:
    line = beam([(5.0, 2e6)], [PINNED, FIXED], uniform(0, 5.0, 8e3))

    record = distribute(line, "G")

    assert record.tables[0].parity == ""
    np.testing.assert_allclose(record.end_moments, [[0.0, 25e3]], atol=1e-10)


def test_an_overhang_is_a_known_moment() -> None:
    line = beam(
        [(2.0, 2e6), (6.0, 2e6), (5.0, 2e6)],
        [None, PINNED, PINNED, FIXED],
        uniform(0, 2.0, 5e3),
        PointForce("G", 1, 2.0, 30e3),
    )
    record = distribute(line, "G")
    table = record.tables[0]

    assert record.overhangs == ((0, 0.0, pytest.approx(10e3)),)
    # The span beside it never carries over to the overhang's joint, whose moment is known.
    assert table.ends[1].note == "far end with a known moment"
    assert table.ends[1].stiffness == pytest.approx(3 * 2e6 / 6.0)
    assert table.start[0] == pytest.approx(-10e3)
    np.testing.assert_allclose(record.end_moments, record.exact, atol=record.limit)


def test_support_springs_take_their_share() -> None:
    line = beam(
        [(5.0, 2e6), (6.0, 3e6)],
        [FIXED, Support(RIGID, rotation=1e6), FIXED],
        uniform(0, 5.0, 8e3),
    )
    table = distribute(line, "G").tables[0]

    spring = table.ends[-1]
    assert (spring.bar, spring.member, spring.note) == (None, None, "support")
    assert spring.factor == pytest.approx(1e6 / (1e6 + 4 * 2e6 / 5 + 4 * 3e6 / 6))
    moments = dict(table.rows[0].balanced)
    assert moments[4] == pytest.approx(-spring.factor * 8e3 * 25 / 12)


def sway_frame() -> Line:
    return Line(
        "frame",
        (
            Joint(0, 0.0, 0.0, support=FIXED),
            Joint(1, 0.0, 4.0),
            Joint(2, 6.0, 4.0),
            Joint(3, 6.0, 0.0, support=Support(RIGID, RIGID)),
        ),
        (
            Member(0, 0, 1, (Piece(4.0, (2e6,)),)),
            Member(1, 1, 2, (Piece(6.0, (4e6,)),)),
            Member(2, 3, 2, (Piece(4.0, (3e6,)),)),
        ),
        (JointForce("G", 1, horizontal=20e3), uniform(1, 6.0, 9e3)),
        kind="frame",
    )


def test_each_translation_has_a_table_of_its_own() -> None:
    record = distribute(sway_frame(), "G")
    locked, sway = record.tables

    assert locked.title == "Translations locked"
    assert sway.title == "joint 1 to the right by 1 mm"
    # 6EI d/h² at the fixed foot, for 1 mm.
    assert sway.held[0] == pytest.approx(-6 * 2e6 * 1e-3 / 16.0)
    exact = solve(sway_frame(), ["G"])
    assert sway.size * 1e-3 == pytest.approx(exact.displacements[0, 1, 0], rel=0.05)
    assert record.relative_difference <= 0.01
    sums = np.array([locked.sums[i] + sway.size * sway.sums[i] for i in range(6)])
    np.testing.assert_allclose(sums.reshape(3, 2), record.end_moments, atol=1e-8)


def test_a_tighter_stop_comes_closer() -> None:
    differences = [distribute(sway_frame(), "G", stop=s).difference for s in (1e-2, 1e-5, 1e-9)]

    assert differences[2] < differences[1] < differences[0]
    assert differences[2] < 1e-3


@pytest.mark.parametrize("order", ["largest", "together", "alternate"])
@pytest.mark.parametrize("maker", [plain_line, beam_line, frame])
def test_the_sums_of_any_line_agree_with_the_exact_moments(maker: object, order: str) -> None:
    solved = 0
    for seed in range(8000, 8020):
        line = maker(seed)  # type: ignore[operator]
        try:
            record = distribute(line, "q", order=order, stop=1e-8, max_sweeps=2000)  # type: ignore[arg-type]
        except (MechanismError, ModelError):
            continue
        solved += 1
        assert record.difference <= 1e-6 * max(record.largest_fixed_end, 1.0)
    assert solved > 10


def test_running_out_of_sweeps_is_an_error_with_what_is_left() -> None:
    with pytest.raises(ConvergenceError, match=r"after 1 sweeps with .* N·m unbalanced at joint"):
        distribute(three_spans(), "G", stop=1e-9, max_sweeps=1)


def test_a_stop_of_nothing_is_refused() -> None:
    with pytest.raises(ValueError, match="stop must be positive"):
        distribute(three_spans(), "G", stop=0.0)


def test_an_idle_case_needs_no_release() -> None:
    record = distribute(replace(three_spans(), actions=()), "G")

    assert record.tables[0].rows == ()
    assert record.relative_difference == 0.0
