"""Redistribution: statics, where it is possible, and the limits of the codes on worked numbers."""

from dataclasses import replace

import numpy as np
import pytest
from small_solver import FIXED, PIN, beam_line, solve, uniform

from analysis_core import rules
from analysis_core.effects.arrangements import Arrangements, split_by_span
from analysis_core.effects.combinations import combine
from analysis_core.effects.envelopes import envelope
from analysis_core.effects.redistribution import (
    chosen_fractions,
    redistributable,
    redistribute,
    support_moments_before_and_after,
)
from analysis_core.effects.redistribution_limits import Known, largest_allowed, unmet_conditions
from analysis_core.effects.redistribution_plan import plan_redistribution
from analysis_core.effects.stations import stations
from analysis_core.errors import ModelError
from analysis_core.model import Combination, Joint, Line, Material, Member, Piece, PointForce
from analysis_core.settings import Redistribution

W = 20e3
EN = {k: f.value for k, f in rules.load("en-1990").figures.items()}
ASCE = {k: f.value for k, f in rules.load("asce-7-16").figures.items()}


def line_of(spans, supports=None):
    actions = [uniform("G", i, length, W) for i, length in enumerate(spans)]
    return beam_line(spans, [1e7] * len(spans), supports or [PIN] * (len(spans) + 1), actions)


def test_two_equal_spans_reduced_by_15_percent_rebuild_the_span_from_statics():
    # M_B = -wL^2/8 * 0.85; span: R_A = wL/2 - |M_B|/L, M_max = R_A^2/(2w).
    line = line_of([6.0, 6.0])
    elastic = solve(line, ["G"])

    after = redistribute(line, elastic, {1: 0.15})

    support = 0.85 * W * 36 / 8
    left = W * 3.0 - support / 6.0
    assert after.end_moments[0, 0, 1] == pytest.approx(support, rel=1e-12)
    assert after.reactions[0, 0, 1] == pytest.approx(left, rel=1e-12)
    assert after.reactions[0, 1, 1] == pytest.approx(2 * (W * 6.0 - left), rel=1e-12)
    found = envelope(
        split_by_span(line, ["G"], []), after,
        [Combination("U1", "strength", {"G": 1.0})], limit_state="strength",
    )  # fmt: skip
    assert found.members[0].sagging.value == pytest.approx(left**2 / (2 * W), rel=1e-12)
    assert found.members[0].sagging.x == pytest.approx(left / W, rel=1e-12)
    assert found.members[0].hogging.value == pytest.approx(-support, rel=1e-12)


def test_the_elastic_solution_is_kept():
    line = line_of([6.0, 5.0, 7.0])
    elastic = solve(line, ["G"])
    before = elastic.end_moments.copy()

    after = redistribute(line, elastic, {1: 0.1, 2: 0.2})

    np.testing.assert_array_equal(elastic.end_moments, before)
    rows = support_moments_before_and_after(line, elastic, after)
    assert [row[0] for row in rows] == [0, 1, 2, 3]
    for joint, part in ((1, 0.9), (2, 0.8)):
        assert rows[joint][2][0] == pytest.approx(part * rows[joint][1][0], rel=1e-12)


def test_equilibrium_is_kept_under_any_actions():
    line = beam_line([6.0, 5.0, 7.0], [1e7, 2e7, 1.5e7], [FIXED, PIN, PIN, PIN], [
        uniform("G", 0, 6.0, W), PointForce("G", 1, 1.3, 50e3), uniform("Q", 2, 7.0, 5e3),
    ])  # fmt: skip
    after = redistribute(line, solve(line, ["G", "Q"]), {0: 0.2, 1: 0.1, 2: -0.05})

    at = stations(line, after, 3)
    for case, total in enumerate((W * 6.0 + 50e3, 5e3 * 7.0)):
        assert after.reactions[case, :, 1].sum() == pytest.approx(total, rel=1e-12)
        for m in range(2):
            # The moment has one value at each inner support.
            assert at.moment[case, m, -1] == pytest.approx(at.moment[case, m + 1, 0], abs=1e-6)
            jump = at.shear[case, m + 1, 0] - at.shear[case, m, -1]
            assert after.reactions[case, m + 1, 1] == pytest.approx(jump, abs=1e-6)
        about_start = after.reactions[case, :, 1] @ np.array([0.0, 6.0, 11.0, 18.0])
        loads = (W * 6.0 * 3.0 + 50e3 * 7.3, 5e3 * 7.0 * 14.5)[case]
        assert about_start - after.reactions[case, 0, 2] == pytest.approx(loads, rel=1e-9)


def test_every_arrangement_is_redistributed_by_itself_and_not_the_envelope():
    line = beam_line([6.0, 6.0], [1e7] * 2, [PIN] * 3, [
        *(uniform("G", i, 6.0, 10e3) for i in range(2)),
        *(uniform("Q", i, 6.0, W) for i in range(2)),
    ])  # fmt: skip
    split = split_by_span(line, ["G", "Q"], ["Q"])
    after = redistribute(split.line, solve(split.line, split.cases), {1: 0.2})
    both = [Combination("U1", "strength", {"G": 1.35, "Q": 1.5}, favourable={"Q": 0.0})]

    found = envelope(
        split, after, both, limit_state="strength", arrangements=Arrangements("every", {"Q": 0.0})
    )

    # Q on span 1: M_B = -(1.35 G 1/8 + 1.5 Q 1/16) L^2, four fifths of it left; by statics.
    q1 = 1.35 * 10e3 + 1.5 * W
    support = 0.8 * (1.35 * 10e3 / 8 + 1.5 * W / 16) * 36
    left = q1 * 3.0 - support / 6.0
    assert found.members[0].sagging.value == pytest.approx(left**2 / (2 * q1), rel=1e-12)
    assert found.members[0].sagging.source == "U1 (Q on span 1)"
    assert found.members[0].hogging.value == pytest.approx(-0.8 * q1 * 36 / 8, rel=1e-12)


def test_redistribution_commutes_with_superposition():
    line = line_of([6.0, 5.0, 7.0])
    both = [Combination("U1", "strength", {"G": 1.35})]

    a = combine(redistribute(line, solve(line, ["G"]), {1: 0.1}), both)
    b = redistribute(line, combine(solve(line, ["G"]), both), {1: 0.1})

    np.testing.assert_allclose(a.end_moments, b.end_moments, rtol=1e-12)


def test_where_statics_settles_the_moment_it_is_refused():
    overhang = line_of([6.0, 5.0, 2.0], [PIN, PIN, PIN, None])

    found = {r.joint: r for r in redistributable(overhang)}

    assert found[1].possible
    assert "no support of its own" in found[2].reason
    assert found[0].reason == "the end is free to turn"
    assert chosen_fractions(overhang, 0.15) == {1: 0.15}
    with pytest.raises(ModelError, match="joint 2: the moment cannot be redistributed: the part"):
        redistribute(overhang, solve(overhang, ["G"]), {2: 0.1})
    with pytest.raises(ModelError, match="joint 9 is no support; its supports are the joints 0, 1"):
        redistribute(overhang, solve(overhang, ["G"]), {9: 0.1})
    with pytest.raises(ModelError, match="must be below 100 %"):
        redistribute(overhang, solve(overhang, ["G"]), {1: 1.0})


def test_a_hinge_in_a_span_settles_the_moments_beside_it():
    x = [0.0, 6.0, 8.0, 12.0, 17.0]
    supports = [PIN, PIN, None, PIN, PIN]
    joints = tuple(
        Joint(i, at, 0.0, support=s) for i, (at, s) in enumerate(zip(x, supports, strict=True))
    )
    members = tuple(
        Member(i, i, i + 1, (Piece(x[i + 1] - x[i], (1e7,)),), span=span, end_spring=spring)
        for i, (span, spring) in enumerate([(1, np.inf), (2, 0.0), (2, np.inf), (3, np.inf)])
    )
    line = Line("L", joints, members)

    reasons = {r.joint: r.reason for r in redistributable(line)}

    assert "hinge" in reasons[1]
    assert "hinge" in reasons[3]


def test_members_between_supports_change_linearly():
    # The span of 8 m is cut in two members at 3 m: the change there is 5/8 of that at the left.
    spans = [6.0, 3.0, 5.0, 6.0]
    line = line_of(spans, [PIN, PIN, None, PIN, PIN])
    elastic = solve(line, ["G"])

    after = redistribute(line, elastic, {1: 0.3})

    change = -(after.end_moments - elastic.end_moments)[0]
    assert change[1, 1] == pytest.approx(5 / 8 * change[0, 1], rel=1e-12)
    assert after.reactions[0, 2, 1] == 0.0


def test_en_1992_limits_on_worked_numbers():
    # EN 1992-1-1 5.5(4): delta >= 0.44 + 1.25 * 0.25 = 0.7525 -> 24.75 %; k5 = 0.7, k6 = 0.8.
    def part(**known):
        return largest_allowed("en-1992", EN, Known(**known)).fraction

    assert part(neutral_axis_ratio=0.25, ductility="B") == pytest.approx(0.2475)
    assert part(neutral_axis_ratio=0.25, ductility="A") == pytest.approx(0.2)
    assert part(neutral_axis_ratio=0.25) == pytest.approx(0.2)  # class unknown: as class A
    assert part(neutral_axis_ratio=0.10, ductility="C") == pytest.approx(0.3)
    # Above 50 MPa: 0.54 + 1.25 * 0.2 = 0.79.
    assert part(neutral_axis_ratio=0.2, ductility="B", concrete_strength=60e6) == pytest.approx(
        0.21
    )
    assert part(neutral_axis_ratio=0.6, ductility="B") == 0.0
    unknown = largest_allowed("en-1992", EN, Known())
    assert unknown.fraction == 0.0
    assert "neutral axis" in unknown.missing


def test_en_1992_asks_for_spans_in_a_ratio_of_half_to_two():
    assert unmet_conditions("en-1992", line_of([6.0, 3.0])) == ()
    (broken,) = unmet_conditions("en-1992", line_of([6.0, 2.9]))
    assert "ratio of 2.07" in broken
    overhang = line_of([6.0, 5.0, 1.0], [PIN, PIN, PIN, None])
    assert unmet_conditions("en-1992", overhang) == ()


def test_en_1993_allows_15_percent_in_classes_1_and_2():
    assert largest_allowed("en-1993", EN, Known()).fraction == 0.15
    assert largest_allowed("en-1993", EN, Known(section_class=3)).fraction == 0.0


@pytest.mark.parametrize(
    ("strain", "part"), [(0.0074, 0.0), (0.0075, 0.075), (0.0123, 0.123), (0.02, 0.2), (0.03, 0.2)]
)
def test_aci_318_allows_1000_strain_percent_up_to_20(strain, part):
    # ACI 318-19 6.6.5.
    found = largest_allowed("aci-318", ASCE, Known(net_tensile_strain=strain))
    assert found.fraction == pytest.approx(part)


def test_aisc_360_raises_the_positive_moment_by_the_mean_of_the_negative_ones():
    # AISC 360 B3.3: nine tenths of the negative moments; at the middle of the span statics then
    # adds a tenth of their mean.
    line = line_of([6.0, 7.0, 5.0])
    elastic = solve(line, ["G"])
    part = largest_allowed("aisc-360", ASCE, Known()).fraction

    after = redistribute(line, elastic, chosen_fractions(line, part))

    before, now = (stations(line, s, 3).moment[0, 1] for s in (elastic, after))
    assert now[0] == pytest.approx(0.9 * before[0], rel=1e-12)
    assert now[2] == pytest.approx(0.9 * before[2], rel=1e-12)
    assert now[1] - before[1] == pytest.approx(-0.1 * (before[0] + before[2]) / 2, rel=1e-12)


def test_an_unknown_rule_is_a_slip_of_the_caller():
    with pytest.raises(ValueError, match="no rule for redistribution is called 'x'"):
        largest_allowed("x", EN, Known())


def of_material(line, category, **strength):
    material = Material("M", 210e9, category=category, strength=tuple(strength.items()))
    members = tuple(replace(m, material=material) for m in line.members)
    return replace(line, members=members, elements=("guid",))


def planned(line, wish, rule_set="en-1990"):
    loaded = rules.load(rule_set)
    return plan_redistribution(line, wish, loaded.redistribution, loaded.values())


def test_plan_takes_the_largest_allowed_for_the_material():
    steel = of_material(line_of([6.0, 5.0, 7.0]), "steel")

    found = planned(steel, Redistribution(largest=True))

    assert found.fractions == {1: 0.15, 2: 0.15}
    assert found.limit.clause == "EN 1993-1-1 5.4.1(4)B"
    assert found.findings == ()


def test_plan_warns_above_the_limit_and_where_a_condition_fails():
    concrete = of_material(line_of([6.0, 2.0]), "concrete", fck=30e6)
    wish = Redistribution(fraction=0.25, neutral_axis_ratio=0.3, ductility="B")

    found = planned(concrete, wish)

    # 1 - (0.44 + 1.25 * 0.3) = 18.5 %.
    assert found.fractions == {1: 0.25}
    over, ratio = found.findings
    assert over.slug == "redistribution-over-limit"
    assert "25.0 %" in over.message
    assert "18.5 %" in over.message
    assert ratio.slug == "redistribution-condition"
    assert ratio.line == "T-1"


def test_plan_without_the_needed_facts_redistributes_nothing_and_says_what_is_missing():
    concrete = of_material(line_of([6.0, 5.0]), "concrete")

    found = planned(concrete, Redistribution(largest=True))

    assert found.fractions == {}
    (finding,) = found.findings
    assert (finding.severity, finding.slug) == ("warning", "redistribution-limit-unknown")
    assert "xu/d" in finding.message


def test_plan_for_single_joints_reports_those_it_cannot_serve():
    steel = of_material(line_of([6.0, 5.0, 2.0], [PIN, PIN, PIN, None]), "steel")

    found = planned(steel, Redistribution(per_joint={1: 0.1, 2: 0.1, 8: 0.1}))

    assert found.fractions == {1: 0.1}
    assert [f.slug for f in found.findings] == ["not-redistributed"] * 2


def test_plan_for_an_unknown_material():
    line = line_of([6.0, 5.0])

    asked = planned(line, Redistribution(fraction=0.1))
    largest = planned(line, Redistribution(largest=True))

    assert (asked.fractions, [f.severity for f in asked.findings]) == ({1: 0.1}, ["note"])
    assert (largest.fractions, [f.severity for f in largest.findings]) == ({}, ["warning"])
