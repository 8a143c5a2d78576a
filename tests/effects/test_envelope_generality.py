"""Envelopes of frames, haunched and shear-flexible members, empty cases and many rows."""

import math
import time

import numpy as np
import pytest
from small_solver import FIXED, PIN, beam_line, solve, uniform

from analysis_core import distribution
from analysis_core.effects.arrangements import (
    Arrangements,
    PatternRule,
    split_by_span,
    whole_cases,
)
from analysis_core.effects.envelopes import envelope
from analysis_core.effects.stations import stations
from analysis_core.model import (
    Combination,
    DistributedForce,
    ImposedCurvature,
    Joint,
    JointForce,
    Line,
    Member,
    Piece,
    PointForce,
    PointMoment,
    Support,
)

FOUND = Support(vertical=math.inf, horizontal=math.inf, rotation=2.0e7)


def frame():
    """Two bays with an inclined rafter, a haunched beam and shear-flexible columns."""
    at = [(0.0, 0.0), (0.0, 4.0), (6.0, 5.0), (6.0, 0.0), (12.0, 5.0), (12.0, 0.5)]
    supports = {0: FOUND, 3: FIXED, 5: Support(math.inf, math.inf, 0.0)}
    joints = tuple(Joint(i, x, z, support=supports.get(i)) for i, (x, z) in enumerate(at))

    def pieces(a, b, *, haunch=False, shear=None):
        length = math.dist(at[a], at[b])
        if haunch:
            return (
                Piece(0.2 * length, (400.0, -150.0), 3.0, shear),
                Piece(0.8 * length, (250.0,), 3.0, shear),
            )
        return (Piece(length, (1.2e7,), 1.0, shear),)

    ends = [(0, 1), (1, 2), (3, 2), (2, 4), (5, 4)]
    members = tuple(
        Member(
            i, a, b,
            pieces(a, b, haunch=i == 3, shear=(4.0e7,) if i in (0, 2) else None),
            role="span" if i in (1, 3) else "leg", span={1: 1, 3: 2}.get(i),
        )
        for i, (a, b) in enumerate(ends)
    )  # fmt: skip
    rafter = members[1].length
    actions = (
        DistributedForce("G", 1, 0.0, rafter, (5e3,), (900.0,)),
        DistributedForce("G", 3, 0.0, 6.0, (5e3,)),
        DistributedForce("Q", 1, 0.0, rafter, (4e3, 300.0)),
        PointForce("Q", 3, 2.2, 18e3),
        PointMoment("Q", 3, 4.1, 6e3),
        DistributedForce("W", 0, 0.0, 4.0, (2e3,)),
        JointForce("W", 1, horizontal=8e3),
        ImposedCurvature("T", 3, 0.0, 6.0, 4e-4),
    )
    return Line("F-1", joints, members, actions, kind="frame")


CASES = ["G", "Q", "W", "T"]
COMBINATIONS = [
    Combination("U1", "strength", {"G": 1.35, "Q": 1.5, "W": 0.9, "T": 0.9},
                favourable={"Q": 0.0, "W": 0.0, "T": 0.0}),
    Combination("U2", "strength", {"G": 1.0, "Q": 1.05, "W": -1.5},
                favourable={"Q": 0.0, "W": 0.0}),
]  # fmt: skip


def adverse(values, names, combinations, split):
    """Largest and least of the sums of adverse parts, straight from the definition."""
    tops, bottoms = [], []
    for c in combinations:
        high = low = 0.0
        for name, value in zip(names, values, strict=True):
            case = split[name]
            factor = c.factors.get(case, 0.0)
            other = c.favourable.get(case, factor)
            high = high + np.maximum(factor * value, other * value)
            low = low + np.minimum(factor * value, other * value)
        tops.append(high)
        bottoms.append(low)
    return np.max(tops, axis=0), np.min(bottoms, axis=0)


def test_frame_with_haunches_shear_and_inclined_members_against_dense_sums():
    line = frame()
    split = split_by_span(line, CASES, ["Q"])
    solution = distribution.solve(split.line, split.cases)
    found = envelope(
        split, solution, COMBINATIONS, limit_state="strength",
        arrangements=Arrangements("every", {"Q": 0.0}),
    )  # fmt: skip
    dense = stations(split.line, solution, 2001)
    cases = {p.name: p.case for p in split.parts}

    assert {p.place for p in split.parts if p.case == "Q"} == {"span 1", "span 2"}
    for m in found.members:
        for field, top, bottom, high, low in (
            ("moment", m.moment_max, m.moment_min, m.sagging, m.hogging),
            ("shear", m.shear_max_at, m.shear_min_at, m.shear_max, m.shear_min),
            ("deflection", m.deflection_max, m.deflection_min, m.deflection_down, m.deflection_up),
        ):
            above, below = adverse(
                getattr(dense, field)[:, m.member], dense.names, COMBINATIONS, cases
            )
            scale = max(np.abs(above).max(), np.abs(below).max())
            assert above.max() <= high.value + 1e-10 * scale
            assert below.min() >= low.value - 1e-10 * scale
            if field != "shear":
                # A station misses the force at 2.2 m by up to 1.5 mm, 3e-4 of the moment.
                assert above.max() >= high.value - 5e-4 * scale
                assert below.min() <= low.value + 5e-4 * scale
            np.testing.assert_allclose(top[1:-1], above[100:-100:100], atol=1e-9 * scale)
            np.testing.assert_allclose(bottom[1:-1], below[100:-100:100], atol=1e-9 * scale)


def test_actions_on_legs_form_a_part_of_their_own():
    split = split_by_span(frame(), CASES, ["Q", "W"])

    # A force at the head of a column belongs to the span that begins there.
    assert [p.place for p in split.parts if p.case == "W"] == ["span 1", "leg 0"]


def test_a_line_without_actions_has_an_envelope_of_nothing():
    line = beam_line([5.0, 4.0], [1e7] * 2, [PIN] * 3)
    whole = whole_cases(line, ["G", "Q"])
    both = [Combination("U1", "strength", {"G": 1.35, "Q": 1.5}, favourable={"Q": 0.0})]

    for arrangements in (None, Arrangements("every", {"Q": 0.0})):
        found = envelope(
            whole, solve(line, ["G", "Q"]), both, limit_state="strength", arrangements=arrangements
        )
        for m in found.members:
            assert m.sagging.value == m.hogging.value == m.deflection_down.value == 0.0
            assert not np.any(m.moment_max)
            assert m.sagging.source == "U1"


def test_a_combination_of_no_case_on_the_line_counts_as_nothing():
    line = beam_line([5.0], [1e7], [PIN] * 2, [uniform("Q", 0, 5.0, -4e3)])
    whole = whole_cases(line, ["Q"])
    two = [
        Combination("U1", "strength", {"Q": 1.5}),
        Combination("U2", "strength", {"absent": 1.0}),
    ]

    found = envelope(whole, solve(line, ["Q"]), two, limit_state="strength")

    assert found.members[0].sagging.value == 0.0
    assert found.members[0].hogging.value == pytest.approx(-1.5 * 4e3 * 25 / 8, rel=1e-12)


def test_a_missing_part_and_a_missing_limit_state_are_slips_of_the_caller():
    line = beam_line([5.0], [1e7], [PIN] * 2, [uniform("Q", 0, 5.0, 4e3)])
    one = [Combination("U1", "strength", {"Q": 1.5})]

    with pytest.raises(ValueError, match="no combination is of the limit state 'serviceability'"):
        envelope(whole_cases(line, ["Q"]), solve(line, ["Q"]), one, limit_state="serviceability")
    with pytest.raises(ValueError, match="the solution lacks the case 'G'"):
        envelope(whole_cases(line, ["G"]), solve(line, ["Q"]), one, limit_state="strength")


def test_twenty_spans_with_every_listed_arrangement_stay_quick():
    # Live load by ACI's list and snow by that of ASCE 7: 23 x 44 arrangements of each combination.
    spans = [5.0 + 0.1 * i for i in range(20)]
    actions = [uniform(c, i, length, 4e3) for c in "GQS" for i, length in enumerate(spans)]
    line = beam_line(spans, [1e7] * 20, [PIN] * 21, actions)
    split = split_by_span(line, ["G", "Q", "S"], ["Q", "S"])
    listed = Arrangements(
        "aci", {"Q": 0.0, "S": 0.5},
        listed=(
            PatternRule(("Q",), ("all", "alternate", "adjacent")),
            PatternRule(("S",), ("all", "exterior", "but-exterior", "adjacent"), 0.5),
        ),
    )  # fmt: skip
    some = [Combination("U1", "strength", {"G": 1.2, "Q": 1.6, "S": 0.5},
                        favourable={"Q": 0.0, "S": 0.0})]  # fmt: skip
    solution = solve(split.line, split.cases)

    start = time.process_time()
    found = envelope(split, solution, some, limit_state="strength", arrangements=listed)

    assert time.process_time() - start < 10.0
    every = envelope(
        split, solution, some, limit_state="strength",
        arrangements=Arrangements("every", {"Q": 0.0, "S": 0.5}),
    )  # fmt: skip
    for a, b in zip(found.members, every.members, strict=True):
        assert a.sagging.value <= b.sagging.value * (1 + 1e-12)
    assert "S on" in found.members[3].sagging.source


def test_hinges_and_releases_pass_through():
    # A drop-in span between two overhangs: the hinge carries no moment in any combination.
    x = [0.0, 6.0, 7.5, 11.0, 12.5, 18.5]
    supports = [PIN, PIN, None, None, PIN, PIN]
    joints = tuple(
        Joint(i, at, 0.0, support=s) for i, (at, s) in enumerate(zip(x, supports, strict=True))
    )
    springs = {1: {"end_spring": 0.0}, 3: {"start_spring": 0.0}}
    members = tuple(
        Member(i, i, i + 1, (Piece(x[i + 1] - x[i], (1e7,)),), span=s, **springs.get(i, {}))
        for i, s in enumerate((1, 2, 2, 2, 3))
    )
    actions = [uniform("Q", i, x[i + 1] - x[i], 6e3) for i in range(5)]
    line = Line("H-1", joints, members, tuple(actions))
    split = split_by_span(line, ["Q"], ["Q"])
    q = [Combination("U1", "strength", {"Q": 1.5}, favourable={"Q": 0.0})]

    found = envelope(
        split, distribution.solve(split.line, split.cases), q, limit_state="strength",
        arrangements=Arrangements("every", {"Q": 0.0}),
    )  # fmt: skip

    assert found.members[2].sagging.value == pytest.approx(1.5 * 6e3 * 3.5**2 / 8, rel=1e-9)
    assert found.members[2].start_moment == pytest.approx((0.0, 0.0), abs=1e-6)
    # Root moment of the overhang: its own load and the half of the drop-in span at its tip.
    root = 1.5 * 6e3 * (1.5**2 / 2 + 3.5 / 2 * 1.5)
    assert found.members[0].hogging.value == pytest.approx(-root, rel=1e-9)
    assert found.members[0].hogging.source == "U1 (Q on span 2)"
