"""Reaction schedules, reduction of imposed load, and deflections against limits."""

import math
from dataclasses import replace

import pytest
from small_solver import FIXED, PIN, beam_line, solve, uniform

from analysis_core import rules
from analysis_core.effects.arrangements import Arrangements, merged, split_by_span, whole_cases
from analysis_core.effects.deflection_limits import DeflectionLimit, span_deflections, spans_of
from analysis_core.effects.envelopes import envelope
from analysis_core.effects.live_load_reduction import (
    asce_7,
    en_1991_area,
    en_1991_storeys,
    reduction,
)
from analysis_core.effects.reactions import governing, schedule, schedule_table, unfactored
from analysis_core.effects.stations import stations
from analysis_core.model import Combination, JointMovement, Support
from analysis_core.report.csv_text import csv_text
from analysis_core.results import LineResult
from analysis_core.units import display_units

W, L, EI = 12e3, 6.0, 3e7
EVERY = Arrangements("every", {"Q": 0.0})
STRENGTH = [Combination("U1", "strength", {"G": 1.35, "Q": 1.5}, favourable={"Q": 0.0})]
SERVICE = [
    Combination("C1", "serviceability", {"G": 1.0, "Q": 1.0}, "characteristic",
                favourable={"Q": 0.0}),
    Combination("P1", "serviceability", {"G": 1.0, "Q": 0.3}, "quasi-permanent",
                favourable={"Q": 0.0}),
]  # fmt: skip
EN = {k: f.value for k, f in rules.load("en-1990").figures.items()}
ASCE = {k: f.value for k, f in rules.load("asce-7-16").figures.items()}


def two_spans():
    return beam_line(
        [L, L], [EI, EI], [PIN] * 3,
        [uniform(c, i, L, q) for c, q in (("G", W), ("Q", 2 * W)) for i in range(2)],
        element=("C-1", "=cmd", "C-3"),
    )  # fmt: skip


def result_of(line):
    split = split_by_span(line, ["G", "Q"], ["Q"])
    solution = solve(split.line, split.cases)
    found = envelope(split, solution, STRENGTH, limit_state="strength", arrangements=EVERY)
    whole = merged(split, solution, ["G", "Q"], line)
    return LineResult(line, "balanced", whole, envelopes={"strength": found})


def test_unfactored_reactions_per_support_and_case():
    # Two equal spans: 3/8 wL, 5/4 wL, 3/8 wL.
    rows = list(unfactored(two_spans(), result_of(two_spans()).solution))

    found = {(r.joint, r.name): r.vertical for r in rows}
    for case, q in (("G", W), ("Q", 2 * W)):
        assert found[0, case] == pytest.approx(0.375 * q * L, rel=1e-12)
        assert found[1, case] == pytest.approx(1.25 * q * L, rel=1e-12)
    assert all(r.horizontal == 0.0 and r.moment == 0.0 for r in rows)


def test_governing_reactions_name_their_arrangement():
    rows = list(governing(two_spans(), result_of(two_spans()).envelopes["strength"]))

    highest = {r.joint: r for r in rows if r.state == "strength, highest"}
    assert highest[0].vertical == pytest.approx(
        (1.35 * 0.375 * W + 1.5 * 0.4375 * 2 * W) * L, rel=1e-12
    )
    assert highest[0].source == "U1 (Q on span 1)"
    assert {r.name for r in rows} == {"highest vertical", "lowest vertical"}


def test_the_schedule_opens_in_a_spreadsheet_as_text_and_numbers():
    units = display_units("metric")

    table = list(schedule_table(schedule([result_of(two_spans())]), units, {"=cmd": "@SUM(A1)"}))
    text = csv_text(table)

    assert table[0][7] == "Vertical, up [kN]"
    assert "'@SUM(A1)" in text
    assert "'=cmd" in text
    first = table[1]
    assert first[:2] == ["T-1", 0]
    assert first[7] == pytest.approx(0.375 * W * L / 1e3, abs=0.005)
    assert ",=cmd" not in text


def test_us_units_are_shown_as_such():
    table = list(schedule_table(schedule([result_of(two_spans())]), display_units("us")))

    assert table[0][7] == "Vertical, up [kip]"
    assert table[1][7] == pytest.approx(0.375 * W * L / 4448.2216, abs=0.005)


def test_en_1991_area_reduction_on_worked_numbers():
    # EN 1991-1-1 (6.1): 5/7 * 0.7 + 10/40 = 0.75; category C at least 0.6; 1 at most.
    assert en_1991_area(EN, psi0=0.7, area=40.0, category="B").factor == pytest.approx(0.75)
    assert en_1991_area(EN, psi0=0.7, area=400.0, category="B").factor == pytest.approx(0.525)
    assert en_1991_area(EN, psi0=0.7, area=400.0, category="C").factor == pytest.approx(0.6)
    assert en_1991_area(EN, psi0=0.7, area=15.0, category="A").factor == 1.0
    assert en_1991_area(EN, psi0=1.0, area=400.0, category="E").factor == 1.0
    with pytest.raises(ValueError, match="must be positive"):
        en_1991_area(EN, psi0=0.7, area=0.0, category="A")


def test_en_1991_storey_reduction_on_worked_numbers():
    # EN 1991-1-1 (6.2): (2 + 3 * 0.7)/5 = 0.82.
    assert en_1991_storeys(psi0=0.7, storeys=5).factor == pytest.approx(0.82)
    assert en_1991_storeys(psi0=0.7, storeys=2).factor == 1.0


def test_asce_7_live_load_reduction_on_worked_numbers():
    # ASCE 7 4.7.2 in feet: 0.25 + 15/sqrt(900) = 0.75 for K_LL A_T = 900 ft2.
    ft2 = 0.3048**2

    def factor(feet, **more):
        return asce_7(
            ASCE, area=feet * ft2 / 2.0, element_factor=2.0, intensity=2400.0, **more
        ).factor

    # 4.57 m is 15 ft rounded: within 0.1 %.
    assert factor(900.0) == pytest.approx(0.25 + 15.0 / math.sqrt(900.0), rel=1e-3)
    assert factor(399.0) == 1.0
    assert factor(10_000.0) == 0.5
    assert factor(40_000.0, floors=2) == 0.4
    assert factor(900.0, assembly=True) == 1.0
    heavy = {"area": 900.0 * ft2 / 2.0, "element_factor": 2.0, "intensity": 6000.0}
    assert asce_7(ASCE, **heavy).factor == 1.0
    assert asce_7(ASCE, **heavy, floors=2).factor == pytest.approx(0.8)


def test_the_rule_of_the_rule_set_is_used():
    en = reduction("en-1991", EN, area=40.0, category="B", psi0=0.7)
    us = reduction("asce-7", ASCE, area=450.0 * 0.3048**2, intensity=2400.0)

    assert (en.factor, en.clause) == (pytest.approx(0.75), "EN 1991-1-1 6.3.1.2(10)")
    assert us.factor == pytest.approx(0.75, rel=1e-3)
    assert reduction("", {}, area=40.0).factor == 1.0


def deflections(line, limit, cases=("G", "Q"), arrangements=EVERY, combinations=SERVICE):
    split = split_by_span(line, list(cases), arrangements.split)
    (found,) = span_deflections(
        [split], [solve(split.line, split.cases)], combinations, limit,
        permanent=("G",), arrangements=arrangements,
    )  # fmt: skip
    return found


def test_deflection_of_a_simple_span_against_span_over_250():
    # 5 w L^4 / (384 EI).
    line = beam_line([L], [EI], [PIN] * 2, [uniform("G", 0, L, W)])

    (only,) = deflections(line, DeflectionLimit(), cases=["G"], arrangements=Arrangements())

    wanted = 5 * W * L**4 / (384 * EI)
    assert only.down.value == pytest.approx(wanted, rel=1e-12)
    assert only.limit == L / 250
    assert only.rule == "span / 250"
    assert only.utilisation == pytest.approx(wanted / (L / 250), rel=1e-12)


def test_camber_is_taken_off():
    line = beam_line([L], [EI], [PIN] * 2, [uniform("G", 0, L, W)])
    limit = DeflectionLimit(camber=0.004)

    (only,) = deflections(line, limit, cases=["G"], arrangements=Arrangements())

    wanted = (5 * W * L**4 / (384 * EI) - 0.004) / (L / 250)
    assert only.utilisation == pytest.approx(wanted, rel=1e-12)


def test_the_smaller_of_ratio_and_length_governs():
    line = beam_line([L], [EI], [PIN] * 2, [uniform("G", 0, L, W)])

    (absolute,) = deflections(
        line, DeflectionLimit(absolute=0.015), cases=["G"], arrangements=Arrangements()
    )
    (none,) = deflections(
        line, DeflectionLimit(span_ratio=0.0), cases=["G"], arrangements=Arrangements()
    )

    assert (absolute.limit, absolute.rule) == (0.015, "stated length")
    assert (none.limit, none.utilisation) == (None, None)


def test_cantilever_is_measured_from_its_root_and_held_to_its_own_limit():
    # A settling root lowers the tip by as much, which is not deflection of the cantilever; its
    # rotation is: w a^4/(8 EI) and the rotation w a^2 L/(6 EI) of the span's end, times a.
    a = 2.0
    line = beam_line(
        [L, a], [EI, EI], [PIN, PIN, None],
        [uniform("G", 1, a, W), JointMovement("G", 0, vertical=0.01),
         JointMovement("G", 1, vertical=0.01)],
    )  # fmt: skip

    span, cantilever = deflections(
        line, DeflectionLimit(), cases=["G"], arrangements=Arrangements()
    )

    assert cantilever.span.cantilever
    assert cantilever.span.root == 1
    assert cantilever.rule == "cantilever / 125"
    rotation = W * a**2 / 2 * L / (3 * EI)
    assert cantilever.down.value == pytest.approx(W * a**4 / (8 * EI) + rotation * a, rel=1e-9)
    # Up between the supports by M L^2/(9 sqrt(3) EI), M = w a^2/2 at one end.
    up = W * a**2 / 2 * L**2 / (9 * math.sqrt(3) * EI)
    assert span.up.value == pytest.approx(-up, rel=1e-9)


def test_span_is_measured_from_the_line_between_its_supports():
    supports = [PIN, Support(vertical=5e6), PIN]
    line = beam_line([L, L], [EI, EI], supports, [uniform("G", i, L, W) for i in range(2)])
    whole = whole_cases(line, ["G"])
    solution = solve(line, ["G"])

    left, _ = deflections(line, DeflectionLimit(), cases=["G"], arrangements=Arrangements())

    absolute = envelope(whole, solution, SERVICE, limit_state="serviceability")
    sunk = solution.displacements[0, 1, 1]
    assert sunk > 0.0
    assert left.down.value < absolute.members[0].deflection_down.value
    # Dense check: deflection less the straight line.
    at = stations(line, solution, 2001)
    relative = at.deflection[0, 0] - sunk * at.x[0] / L
    assert left.down.value == pytest.approx(relative.max(), rel=1e-6)


def test_kind_and_variable_only_choose_what_counts():
    line = two_spans()

    all_kinds = deflections(line, DeflectionLimit())
    quasi = deflections(line, DeflectionLimit(kind="quasi-permanent"))
    variable = deflections(line, DeflectionLimit(kind="characteristic", variable_only=True))

    assert all_kinds[0].down.source == "C1 (Q on span 1)"
    assert quasi[0].down.source == "P1 (Q on span 1)"
    # AISC table 3-23, two equal spans, one loaded: 0.0092 w L^4/EI (from memory).
    assert variable[0].down.value == pytest.approx(0.0092 * 2 * W * L**4 / EI, rel=0.006)
    with pytest.raises(ValueError, match="no serviceability combination is of the kind 'frequent'"):
        deflections(line, DeflectionLimit(kind="frequent"))


def test_a_span_of_several_members_is_one_span():
    line = beam_line([2.0, 4.0, L], [EI] * 3, [PIN, None, PIN, FIXED], [
        uniform("G", 0, 2.0, W), uniform("G", 1, 4.0, W),
    ])  # fmt: skip
    members = tuple(replace(m, span=1 if m.id < 2 else 2) for m in line.members)
    line = replace(line, members=members)

    spans = spans_of(line)
    first, _ = deflections(line, DeflectionLimit(), cases=["G"], arrangements=Arrangements())

    assert [(s.members, s.length, s.cantilever) for s in spans] == [
        ((0, 1), 6.0, False),
        ((2,), L, False),
    ]
    assert first.limit == 6.0 / 250
    assert first.down_member == 1
    assert first.down.value > 0.0
