"""The exact envelope against listing all 2^n arrangements, and extremes against dense sampling."""

import itertools
import re
from dataclasses import fields, replace

import numpy as np
import pytest
from small_solver import FIXED, PIN, beam_line, solve

from analysis_core.effects.arrangements import (
    Arrangements,
    Part,
    PatternRule,
    split_by_span,
    whole_cases,
)
from analysis_core.effects.combinations import combine, combine_line
from analysis_core.effects.envelopes import envelope, envelopes
from analysis_core.effects.factors import PartsOf, factor_table
from analysis_core.effects.fields import fields as diagrams
from analysis_core.effects.stations import stations
from analysis_core.effects.survey import survey, values_only
from analysis_core.model import (
    Combination,
    DistributedForce,
    ImposedCurvature,
    JointForce,
    PointForce,
    PointMoment,
    Support,
)

EVERY = Arrangements("every", {"Q": 0.0})
SLAB = [
    Combination("U1", "strength", {"G": 1.35, "Q": 1.5}, favourable={"Q": 0.0}),
    Combination("U2", "strength", {"G": 1.0, "Q": 1.5}, favourable={"Q": 0.0}),
]


def lopsided(spans, seed):
    """A line of unequal spans and rigidities with an overhang, many actions and two cases."""
    rng = np.random.default_rng(seed)
    lengths = rng.uniform(3.0, 9.0, spans)
    supports = [PIN] * (spans + 1)
    supports[-1] = None  # an overhang
    lengths[-1] = 1.5
    if seed % 2:
        supports[0] = FIXED
    if seed % 3 == 0 and spans > 2:
        supports[1] = Support(vertical=4.0e6)
    actions = []
    for i, length in enumerate(lengths):
        actions.append(DistributedForce("G", i, 0.0, length, (rng.uniform(2e3, 9e3),)))
        a, b = sorted(rng.uniform(0.0, length, 2))
        actions.append(DistributedForce("Q", i, a, b, tuple(rng.uniform(-2e3, 9e3, 2))))
        actions.append(DistributedForce("Q", i, 0.0, length, (rng.uniform(2e3, 9e3),)))
        actions.append(PointForce("Q", i, rng.uniform(0.2, 0.8) * length, rng.uniform(1e3, 3e4)))
        if i % 2:
            actions.append(PointMoment("Q", i, rng.uniform(0, 1) * length, rng.uniform(-2e4, 2e4)))
    actions.append(JointForce("Q", spans, vertical=4e3))
    return beam_line(lengths, rng.uniform(0.5e7, 4e7, spans), supports, actions)


def enumerated(line, combinations, case, count):
    """Every arrangement as a combination of its own: largest and least at dense stations."""
    split = split_by_span(line, ["G", case], [case])
    solution = solve(split.line, split.cases)
    movable = [p.name for p in split.parts if p.case == case]
    listed = []
    for c in combinations:
        for bits in itertools.product((0.0, 1.0), repeat=len(movable)):
            factors = {"G": c.factors["G"]}
            factors |= {n: b * c.factors[case] for n, b in zip(movable, bits, strict=True)}
            listed.append(Combination(f"{c.name} {bits}", "strength", factors))
    at = stations(split.line, solution, count)
    names = list(at.names)
    table = np.array([[c.factors.get(n, 0.0) for n in names] for c in listed])
    fields = {
        key: np.tensordot(table, getattr(at, key), axes=1)
        for key in ("moment", "shear", "deflection")
    }
    reactions = np.tensordot(table, solution.reactions, axes=1)
    return fields, reactions, split, solution, listed


@pytest.mark.parametrize(("spans", "seed"), [(2, 1), (3, 2), (4, 3), (5, 4), (7, 5), (12, 6)])
def test_exact_envelope_equals_every_arrangement_listed(spans, seed):
    line = lopsided(spans, seed)
    count = 21 if spans < 12 else 11

    fields, reactions, split, solution, _ = enumerated(line, SLAB, "Q", count)
    found = envelope(split, solution, SLAB, limit_state="strength", arrangements=EVERY, count=count)

    for m in found.members:
        # Stations where a force or couple stands have two values; none does here.
        for key, top, bottom in (
            ("moment", m.moment_max, m.moment_min),
            ("shear", m.shear_max_at, m.shear_min_at),
            ("deflection", m.deflection_max, m.deflection_min),
        ):
            field = fields[key][:, m.member]
            scale = np.abs(fields[key]).max()
            np.testing.assert_allclose(top, field.max(axis=0), atol=1e-11 * scale, rtol=0)
            np.testing.assert_allclose(bottom, field.min(axis=0), atol=1e-11 * scale, rtol=0)
    for r in found.reactions:
        own = reactions[:, r.joint]
        scale = np.abs(reactions).max()
        assert r.vertical_max.value == pytest.approx(own[:, 1].max(), abs=1e-11 * scale)
        assert r.vertical_min.value == pytest.approx(own[:, 1].min(), abs=1e-11 * scale)
        assert r.moment_max.value == pytest.approx(own[:, 2].max(), abs=1e-11 * scale)


@pytest.mark.parametrize(("spans", "seed"), [(1, 7), (2, 8), (3, 9), (4, 10), (5, 11)])
def test_extremes_are_those_of_the_governing_arrangement_solved_alone(spans, seed):
    line = lopsided(spans, seed)
    split = split_by_span(line, ["G", "Q"], ["Q"])
    solution = solve(split.line, split.cases)
    found = envelope(split, solution, SLAB, limit_state="strength", arrangements=EVERY)
    parts = [p.name for p in split.parts if p.case == "Q"]
    listed = [
        Combination(
            f"{c.name} {bits}",
            "strength",
            {"G": c.factors["G"]} | {n: 1.5 * b for n, b in zip(parts, bits, strict=True)},
        )
        for c in SLAB
        for bits in itertools.product((0.0, 1.0), repeat=len(parts))
    ]
    plain = whole_cases(split.line, split.cases)
    alone = [
        envelope(plain, solution, [c], limit_state="strength", arrangements=Arrangements())
        for c in listed
    ]

    for i, m in enumerate(found.members):
        for name, pick in (
            ("sagging", max), ("hogging", min), ("shear_max", max), ("shear_min", min),
            ("deflection_down", max), ("deflection_up", min),
        ):  # fmt: skip
            wanted = pick(getattr(e.members[i], name).value for e in alone)
            scale = (
                max(
                    abs(getattr(e.members[i], n).value)
                    for e in alone
                    for n in ("sagging", "hogging")
                )
                if "ging" in name
                else abs(wanted)
            )
            assert getattr(m, name).value == pytest.approx(wanted, rel=1e-11, abs=1e-11 * scale)


@pytest.mark.parametrize("seed", range(12, 18))
def test_extremes_bound_a_dense_sampling_and_are_reached(seed):
    line = lopsided(3, seed)
    split = split_by_span(line, ["G", "Q"], ["Q"])
    solution = solve(split.line, split.cases)
    found = envelope(split, solution, SLAB, limit_state="strength", arrangements=EVERY, count=4001)
    exact = envelope(split, solution, SLAB, limit_state="strength", arrangements=EVERY, count=3)

    for dense, m in zip(found.members, exact.members, strict=True):
        for top, bottom, high, low in (
            (dense.moment_max, dense.moment_min, m.sagging, m.hogging),
            (dense.shear_max_at, dense.shear_min_at, m.shear_max, m.shear_min),
            (dense.deflection_max, dense.deflection_min, m.deflection_down, m.deflection_up),
        ):
            scale = max(np.abs(top).max(), np.abs(bottom).max())
            assert top.max() <= high.value + 1e-12 * scale
            assert bottom.min() >= low.value - 1e-12 * scale
            # A grid of 4001 misses a smooth peak by about 1/8 (1/4000)^2 of the load's share and
            # a jump of the shear by one step.
            assert top.max() >= high.value - 2e-3 * scale
            assert bottom.min() <= low.value + 2e-3 * scale


def spans_named(source):
    """The spans in "U1 (Q on spans 1, 3)"; all where the source says so."""
    if "all spans" in source:
        return set(range(1, 100))
    return {int(w) for w in re.findall(r"\d+", source.partition("(")[2])}


def test_the_named_arrangement_reaches_the_value_at_the_place_given():
    line = lopsided(4, 20)
    split = split_by_span(line, ["G", "Q"], ["Q"])
    solution = solve(split.line, split.cases)
    found = envelope(split, solution, SLAB, limit_state="strength", arrangements=EVERY, count=9)

    for m in found.members:
        for extreme, name in ((m.sagging, "sagging"), (m.hogging, "hogging")):
            loaded = spans_named(extreme.source)
            factors = {"G": 1.35 if extreme.source.startswith("U1") else 1.0} | {
                p.name: 1.5 for p in split.parts if p.case == "Q" and p.span in loaded
            }
            only = [Combination("only", "strength", factors)]
            whole = whole_cases(split.line, split.cases)
            alone = envelope(whole, solution, only, limit_state="strength").members[m.member]
            assert getattr(alone, name).value == pytest.approx(extreme.value, rel=1e-9, abs=1e-3)
            assert getattr(alone, name).x == pytest.approx(extreme.x, abs=1e-6)


def test_listed_sets_never_exceed_the_exact_envelope_and_contain_their_own_patterns():
    line = lopsided(5, 21)
    split = split_by_span(line, ["G", "Q"], ["Q"])
    solution = solve(split.line, split.cases)
    listed = Arrangements(
        "alternate-adjacent",
        {"Q": 0.0},
        listed=(PatternRule(("Q",), ("alternate", "adjacent")),),
    )
    exact = envelope(split, solution, SLAB, limit_state="strength", arrangements=EVERY)
    found = envelope(split, solution, SLAB, limit_state="strength", arrangements=listed)

    sets = [(1, 3, 5), (2, 4), (1, 2), (2, 3), (3, 4), (4, 5), ()]
    at = stations(split.line, solution, 21)
    for m, e in zip(found.members, exact.members, strict=True):
        values = [
            f * at.moment[at.names.index("G"), m.member]
            + sum(
                1.5 * at.moment[at.names.index(p.name), m.member]
                for p in split.parts
                if p.case == "Q" and p.span in chosen
            )
            for f in (1.35, 1.0)
            for chosen in sets
        ]
        np.testing.assert_allclose(m.moment_max, np.max(values, axis=0), atol=1e-6)
        np.testing.assert_allclose(m.moment_min, np.min(values, axis=0), atol=1e-6)
        assert m.sagging.value <= e.sagging.value * (1 + 1e-12)
        assert m.hogging.value >= e.hogging.value * (1 + 1e-12)


def test_a_listed_arrangement_is_named():
    line = beam_line([5.0] * 3, [1e7] * 3, [PIN] * 4, [
        DistributedForce("Q", i, 0.0, 5.0, (8e3,)) for i in range(3)
    ])  # fmt: skip
    split = split_by_span(line, ["Q"], ["Q"])
    listed = Arrangements("x", {"Q": 0.0}, listed=(PatternRule(("Q",), ("alternate", "adjacent")),))
    q = [Combination("U1", "strength", {"Q": 1.5}, favourable={"Q": 0.0})]

    found = envelope(
        split, solve(split.line, split.cases), q, limit_state="strength", arrangements=listed
    )

    assert found.members[0].sagging.source == "U1 (Q on spans 1, 3)"
    assert found.members[0].hogging.source == "U1 (Q on spans 1, 2)"


def test_partial_snow_leaves_half_elsewhere():
    # ASCE 7-16 7.5.1: full on some spans, half on the others; two equal spans of 6 m.
    line = beam_line([6.0] * 2, [1e7] * 2, [PIN] * 3, [
        DistributedForce("S", i, 0.0, 6.0, (10e3,)) for i in range(2)
    ])  # fmt: skip
    split = split_by_span(line, ["S"], ["S"])
    solution = solve(split.line, split.cases)
    snow = [Combination("U1", "strength", {"S": 1.6}, favourable={"S": 0.0})]
    rules = Arrangements(
        "x", {"S": 0.5}, listed=(PatternRule(("S",), ("all", "exterior", "adjacent"), 0.5),)
    )

    exact = envelope(
        split,
        solution,
        snow,
        limit_state="strength",
        arrangements=Arrangements("every", {"S": 0.5}),
    )
    listed = envelope(split, solution, snow, limit_state="strength", arrangements=rules)

    # Left reaction: 7/16 wL from the own span, -1/16 of the half on the other.
    wanted = 1.6 * 10e3 * 6.0 * (7 / 16 - 0.5 / 16)
    for found in (exact, listed):
        assert found.reactions[0].vertical_max.value == pytest.approx(wanted, rel=1e-12)
        assert found.reactions[0].vertical_min.value == pytest.approx(0.0, abs=1e-9)
    assert exact.reactions[0].vertical_max.source == "U1 (S on span 1, 0.5 of it elsewhere)"
    assert listed.reactions[0].vertical_max.source == "U1 (S on span 1, 0.5 of it elsewhere)"


def test_permanent_action_by_span_takes_both_factors():
    # EN 1990 Table A1.2(A): 1.1 and 0.9 by span; uplift of the left support of an overhang.
    line = beam_line([6.0, 2.5], [1e7] * 2, [PIN, PIN, None], [
        DistributedForce("G", i, 0.0, length, (10e3,)) for i, length in enumerate((6.0, 2.5))
    ])  # fmt: skip
    split = split_by_span(line, ["G"], ["G"])
    both = [Combination("U1", "strength", {"G": 1.1}, favourable={"G": 0.9})]

    found = envelope(
        split,
        solve(split.line, split.cases),
        both,
        limit_state="strength",
        arrangements=Arrangements("every", permanent=("G",)),
    )

    # wL/2 at 0.9 from the span, w a^2 / (2 L) at 1.1 from the overhang.
    wanted = 0.9 * 10e3 * 3.0 - 1.1 * 10e3 * 2.5**2 / 12.0
    assert found.reactions[0].vertical_min.value == pytest.approx(wanted, rel=1e-12)
    assert "G on span 2" in found.reactions[0].vertical_min.source


def test_a_favourable_whole_action_is_left_out_and_said_so():
    line = beam_line([6.0, 2.5], [1e7] * 2, [PIN, PIN, None], [
        DistributedForce("G", 0, 0.0, 6.0, (10e3,)),
        DistributedForce("W", 1, 0.0, 2.5, (5e3,)),
    ])  # fmt: skip
    wind = [Combination("U1", "strength", {"G": 1.0, "W": 1.5}, favourable={"W": 0.0})]
    whole = whole_cases(line, ["G", "W"])

    found = envelope(whole, solve(line, ["G", "W"]), wind, limit_state="strength")

    assert found.members[0].sagging.value == pytest.approx(10e3 * 36 / 8, rel=1e-12)
    assert found.members[0].sagging.source == "U1 (without W)"
    assert found.members[1].hogging.source == "U1"


def test_temperature_joins_like_any_action():
    line = beam_line([6.0, 5.0], [1e7, 2e7], [FIXED, PIN, PIN], [
        DistributedForce("G", 0, 0.0, 6.0, (10e3,)),
        ImposedCurvature("T", 0, 1.0, 4.0, 1e-3),
        ImposedCurvature("T", 1, 0.0, 5.0, -2e-3),
    ])  # fmt: skip
    whole = whole_cases(line, ["G", "T"])
    c = [Combination("C1", "serviceability", {"G": 1.0, "T": 1.0})]
    solution = solve(line, ["G", "T"])

    found = envelope(whole, solution, c, limit_state="serviceability", count=11)
    direct = stations(combine_line(line, c), combine(solution, c), 11)

    for m in found.members:
        np.testing.assert_allclose(m.moment_max, direct.moment[0, m.member], rtol=1e-12, atol=1e-8)
        np.testing.assert_allclose(
            m.deflection_max, direct.deflection[0, m.member], rtol=1e-9, atol=1e-13
        )


def same_bits(one, other):
    assert one.reactions == other.reactions
    for a, b in zip(one.members, other.members, strict=True):
        for field in fields(a):
            left, right = getattr(a, field.name), getattr(b, field.name)
            if isinstance(left, np.ndarray):
                np.testing.assert_array_equal(left, right)
            else:
                assert left == right


def plain(seed):
    rng = np.random.default_rng(seed)
    lengths = rng.uniform(3.0, 8.0, 4)
    actions = [
        DistributedForce(c, i, 0.0, length, (rng.uniform(-1e3, 9e3),))
        for c in "GQ"
        for i, length in enumerate(lengths)
    ]
    return beam_line(lengths, rng.uniform(1e7, 4e7, 4), [FIXED, *[PIN] * 3, None], actions)


@pytest.mark.parametrize("make", [lopsided, plain])
@pytest.mark.parametrize("arrangements", [EVERY, Arrangements()])
@pytest.mark.parametrize("favourable", [{"Q": 0.0}, {}])
def test_lines_together_give_the_same_bits_as_each_alone(make, arrangements, favourable):
    # A changed line is enveloped again by itself; its figures must be those of a full run.
    lines = [lopsided(3, n) if make is lopsided else plain(n) for n in range(30, 70)]
    split = [split_by_span(line, ["G", "Q"], arrangements.split) for line in lines]
    solutions = [solve(s.line, s.cases) for s in split]
    combinations = [replace(c, favourable=favourable) for c in SLAB]
    how = {"limit_state": "strength", "arrangements": arrangements}

    together = envelopes(split, solutions, combinations, **how)

    for s, solution, found in zip(split, solutions, together, strict=True):
        same_bits(envelope(s, solution, combinations, **how), found)


def pinned_with(*actions):
    line = beam_line([1.0], [1.0], [PIN] * 2, actions)
    cases = list(dict.fromkeys(a.case for a in actions))
    return whole_cases(line, cases), solve(line, cases)


@pytest.mark.parametrize("sign", [1.0, -1.0])
@pytest.mark.parametrize("absent", [{}, {"X": 0.0, "Y": 0.0}])
def test_a_peak_between_two_stations_is_not_lost_to_one_on_a_station(sign, absent):
    # Deflections over L = EI = 1.  X: uniform load, peak 5 q/384 at 0.5, on a station.  Y: couple
    # at the right end, m t (1 - t^2)/6 with its peak m/(9 sqrt 3) at 1/sqrt 3, between stations
    # at 0.55 and 0.6, where it is lower than X.  (Standard cases of a simple beam.)
    m = -6.0 * sign
    peak = 6.0 / (9.0 * np.sqrt(3.0))  # 0.38490; 0.38400 at 0.6
    q = sign * 0.3845 * 384.0 / 5.0
    whole, solution = pinned_with(
        DistributedForce("X", 0, 0.0, 1.0, (q,)), JointForce("Y", 1, moment=m)
    )
    two = [
        Combination("U1", "strength", {"X": 1.0}, favourable=absent),
        Combination("U2", "strength", {"Y": 1.0}, favourable=absent),
    ]

    (found,) = envelope(whole, solution, two, limit_state="strength").members

    extreme = found.deflection_down if sign > 0 else found.deflection_up
    assert extreme.value == pytest.approx(sign * peak, rel=1e-12)
    assert extreme.x == pytest.approx(1.0 / np.sqrt(3.0), abs=1e-9)
    assert extreme.source == "U2"


@pytest.mark.parametrize("sign", [1.0, -1.0])
@pytest.mark.parametrize(
    ("slope", "zero", "value", "x", "source"),
    [
        # G: 4 t (1 - t); Q: slope (t - zero), adverse to the right of zero alone.  With Q the sum
        # peaks at 0.5 + slope/8 with 1 + slope^2/16 - slope (zero - 0.5); without it at 0.5.
        (0.2, 0.51, 1.0005, 0.525, "U1"),
        (0.258, 0.52, 1.0, 0.5, "U1 (without Q)"),
    ],
)
def test_a_peak_beside_the_place_where_a_part_becomes_adverse(sign, slope, zero, value, x, source):
    whole, solution = pinned_with(
        DistributedForce("G", 0, 0.0, 1.0, (sign * 8.0,)),
        JointForce("Q", 0, moment=-sign * slope * zero),
        JointForce("Q", 1, moment=-sign * slope * (1.0 - zero)),
    )
    both = [Combination("U1", "strength", {"G": 1.0, "Q": 1.0}, favourable={"Q": 0.0})]

    (found,) = envelope(whole, solution, both, limit_state="strength").members

    extreme = found.sagging if sign > 0 else found.hogging
    assert extreme.value == pytest.approx(sign * value, rel=1e-12)
    assert extreme.x == pytest.approx(x, abs=1e-9)
    assert extreme.source == source


def test_a_simple_beam_hogs_nowhere_and_says_so_at_its_start():
    # Both ends are free of moment but for rounding, which must not decide the place.
    line = beam_line([6.4], [3e7], [PIN] * 2, [DistributedForce("G", 0, 0.0, 6.4, (7.3e3, 311.0))])
    one = [Combination("U1", "strength", {"G": 1.35})]

    (found,) = envelope(
        whole_cases(line, ["G"]), solve(line, ["G"]), one, limit_state="strength"
    ).members

    assert (found.hogging.value, found.hogging.x) == (0.0, 0.0)
    assert (found.deflection_up.value, found.deflection_up.x) == (0.0, 0.0)


@pytest.mark.parametrize("sign", [1.0, -1.0])
def test_a_part_that_turns_adverse_only_between_two_stations(sign):
    # G: 4 t (1 - t), 1 at the middle.  Q: 3 ((t - 0.5)^2 - 0.0004) + 0.02 (t - 0.5), adverse but
    # within about 0.02 of the middle; there it is left out.
    q = 3.0
    end = q * (0.25 - 0.0004)
    whole, solution = pinned_with(
        DistributedForce("G", 0, 0.0, 1.0, (sign * 8.0,)),
        DistributedForce("Q", 0, 0.0, 1.0, (-sign * 2.0 * q,)),
        JointForce("Q", 0, moment=sign * (end - 0.01)),
        JointForce("Q", 1, moment=-sign * (end + 0.01)),
    )
    both = [Combination("U1", "strength", {"G": 1.0, "Q": 1.0}, favourable={"Q": 0.0})]

    (found,) = envelope(whole, solution, both, limit_state="strength").members

    extreme = found.sagging if sign > 0 else found.hogging
    assert (extreme.value, extreme.x) == pytest.approx((sign, 0.5), rel=1e-12)
    assert extreme.source == "U1 (without Q)"


def three_spans(loaded):
    actions = [DistributedForce("Q", i, 0.0, 5.0, (8e3,)) for i in loaded]
    return beam_line([5.0] * 3, [1e7] * 3, [PIN] * 4, actions)


def test_lines_alike_but_for_where_the_parts_stand_keep_their_own_arrangements():
    listed = Arrangements("x", {"Q": 0.0}, listed=(PatternRule(("Q",), ("alternate",)),))
    split = [split_by_span(three_spans(loaded), ["Q"], ["Q"]) for loaded in ((0, 1), (1, 2))]
    solutions = [solve(s.line, s.cases) for s in split]
    q = [Combination("U1", "strength", {"Q": 1.5}, favourable={"Q": 0.0})]

    for arrangements in (listed, EVERY):
        together = envelopes(split, solutions, q, limit_state="strength", arrangements=arrangements)
        for s, solution, found in zip(split, solutions, together, strict=True):
            alone = envelope(s, solution, q, limit_state="strength", arrangements=arrangements)
            assert [m.sagging for m in found.members] == [m.sagging for m in alone.members]
            assert found.reactions == alone.reactions


def test_parts_handed_down_keep_their_names_where_lines_are_alike():
    def carrying(mark):
        names = {n: Part(f"Q @ {mark} span {n}", "Q", f"{mark} span {n}", 1) for n in (1, 2)}
        forces = [PointForce(p.name, 0, 1.0 + n, 10e3) for n, p in names.items()]
        forces.append(DistributedForce("Q", 1, 0.0, 5.0, (4e3,)))
        line = beam_line([5.0, 5.0], [1e7] * 2, [PIN] * 3, forces, mark=f"on {mark}")
        known = {part.name: part for part in names.values()}
        return split_by_span(line, ["Q"], ["Q"], known=known)

    split = [carrying("A-1"), carrying("B-2")]
    q = [Combination("U1", "strength", {"Q": 1.5}, favourable={"Q": 0.0})]

    found = envelopes(
        split, [solve(s.line, s.cases) for s in split], q, limit_state="strength",
        arrangements=EVERY,
    )  # fmt: skip

    for one, mark in zip(found, ("A-1", "B-2"), strict=True):
        first, second = one.members
        assert first.sagging.source == f"U1 (Q on {mark} span 1, {mark} span 2)"
        assert second.sagging.source == "U1 (Q on span 2)"
        assert first.hogging.source == "U1 (Q on all spans)"


def test_a_part_without_influence_is_not_named():
    parts = tuple(Part(f"Q @ span {n}", "Q", f"span {n}", n) for n in (1, 2, 3))
    q = [Combination("U1", "strength", {"Q": 1.5}, favourable={"Q": 0.0})]
    table = factor_table(q, parts, EVERY, (1, 2, 3))

    (source,) = table.sources(
        np.array([0]),
        np.array([[5.0e3], [1e-9], [-2.0e3]]),
        PartsOf([parts], np.array([0])),
        largest=True,
    )

    assert source == "U1 (Q on span 1)"


def test_cases_that_keep_a_share_elsewhere_may_be_absent_one_by_one_and_together():
    cases = ("S3", "S1", "S2")
    parts = tuple(Part(f"{c} @ span 1", c, "span 1", 1) for c in cases)
    snow = Arrangements("x", dict.fromkeys(cases, 0.5))
    every = [Combination("U1", "strength", dict.fromkeys(cases, 1.6))]

    table = factor_table(every, parts, snow, (1,))

    # In the order of the cases, so that equal results are named alike in every run.
    assert table.labels == (
        "", "without S3", "without S1", "without S2",
        "without S3, S1", "without S3, S2", "without S1, S2", "without S3, S1, S2",
    )  # fmt: skip
    np.testing.assert_array_equal(table.low[4], [0.0, 0.0, 0.8])
    np.testing.assert_array_equal(table.high[4], [0.0, 0.0, 1.6])


def test_extremes_of_many_parts_are_named_together_as_each_alone():
    # 70 parts leave 140 marks, more than one integer holds; B extremes of two lines' parts.
    rng = np.random.default_rng(8)
    lines = [
        tuple(Part(f"Q @ {at} {n}", "Q", f"{at} {n}", n) for n in range(70)) for at in ("span", "x")
    ]
    combinations = [
        Combination(f"U{n}", "strength", {"Q": 1.0 + n}, favourable={"Q": 0.0}) for n in range(3)
    ]
    table = factor_table(combinations, lines[0], EVERY, range(70))
    contributions = rng.normal(size=(70, 40))
    contributions[:, 20:] = contributions[:, :20]  # every second half needs the words of the first
    rows = np.tile(rng.integers(3, size=20), 2)
    parts = PartsOf(lines, np.arange(40) % 2)

    together = table.sources(rows, contributions, parts, largest=True)

    for b in range(40):
        one = slice(b, b + 1)
        (alone,) = table.sources(
            rows[one], contributions[:, one], parts.taken(np.array([b])), largest=True
        )
        on = np.flatnonzero(contributions[:, b] > 0.0)
        places = ", ".join(f"{'' if b % 2 == 0 else 'x '}{n}" for n in on)
        assert together[b] == alone
        assert alone == f"U{rows[b]} (Q on {'spans ' if b % 2 == 0 else ''}{places})"
    assert len(set(together)) == 20


def test_an_action_on_a_joint_belongs_to_the_span_on_its_left():
    line = beam_line([5.0] * 2, [1e7] * 2, [PIN] * 3, [JointForce("Q", 1, moment=3e3)])

    (part,) = split_by_span(line, ["Q"], ["Q"]).parts

    assert (part.name, part.place, part.span) == ("Q @ span 1", "span 1", 1)


def test_values_alone_are_those_of_the_survey():
    lines = [plain(n) for n in range(3)] * 20
    split = [split_by_span(line, ["G", "Q"], ["Q"]) for line in lines]
    solutions = [solve(s.line, s.cases) for s in split]
    for some, favourable in ((lines[:1], {"Q": 0.0}), (lines, {"Q": 0.0}), (lines, {})):
        chosen = [replace(c, favourable=favourable) for c in SLAB]
        shares = EVERY if favourable else Arrangements()
        table = factor_table(chosen, split[0].parts, shares, (1, 2, 3, 4))
        for block in diagrams([s.line for s in split[: len(some)]], solutions[: len(some)]):
            for effect in (block.moment, block.shear, block.deflection):
                found = survey(effect, table, 21)
                top, bottom = values_only(effect, table, 21)
                np.testing.assert_array_equal(top, found.top)
                np.testing.assert_array_equal(bottom, found.bottom)
