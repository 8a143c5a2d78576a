"""What the strip shows of a line: its curves, words and spots."""

from dataclasses import replace

import demo
import numpy as np
import pytest

from analysis_core.model import PointForce
from analysis_core.units import display_units
from freecad.spanledger.present.diagrams import View, ordinates_of, views_of
from freecad.spanledger.present.layout import lay_out
from freecad.spanledger.present.strip import joint_places, stretches_of, strip_of, values_at

UNITS = display_units()
ENVELOPE = View("envelope", "strength")
DEAD = View("case", "Dead", (("Dead", 1.0),))


@pytest.fixture
def result():
    return demo.outcome().lines[0]


@pytest.fixture
def strip(result):
    return strip_of(result, ENVELOPE, UNITS)


def test_views_are_envelopes_first_then_cases():
    assert [v.title for v in views_of(demo.outcome())] == [
        "strength envelope", "serviceability envelope", "Dead",
    ]  # fmt: skip


def test_spans_lie_behind_one_another(strip):
    assert [(s.start, s.end) for s in strip.stretches] == [(0.0, 6.0), (6.0, 10.0)]
    assert [(x, joint.id) for x, joint in joint_places(strip)] == [(0.0, 0), (6.0, 1), (10.0, 2)]


def test_a_leg_follows_behind_the_last_span_with_a_gap(result):
    line = result.line
    leg = replace(line.members[1], role="leg", span=None)

    stretches = stretches_of(replace(line, members=(line.members[0], leg)))

    assert stretches[1].start > stretches[0].end


def test_values_at_the_cursor_are_those_of_the_closed_form(strip, result):
    x = 2.4  # m; on the grid of the envelope's 21 stations, so nothing is between points
    moment = demo.LOAD * x * (demo.A - x) / 2.0 + demo.SUPPORT_MOMENT * x / demo.A
    shear = demo.LOAD * (demo.A / 2.0 - x) + demo.SUPPORT_MOMENT / demo.A

    words = dict(values_at(strip, x, UNITS))

    assert words["moment"] == "≈ " + UNITS.text(moment, "moment")  # an envelope is sampled
    assert words["shear"] == "≈ " + UNITS.text(shear, "force")
    exact = dict(values_at(strip_of(result, DEAD, UNITS), x, UNITS))
    assert exact["moment"] == UNITS.text(moment, "moment")


def test_the_curves_of_a_case_are_the_closed_form_as_well(result):
    strip = strip_of(result, DEAD, UNITS)
    curve = strip.curves["moment"]
    x = curve.x[curve.x < demo.A]
    expected = demo.LOAD * x * (demo.A - x) / 2.0 + demo.SUPPORT_MOMENT * x / demo.A

    # 1e-9 of the largest moment: rounding only.
    assert curve.upper[curve.x < demo.A] == pytest.approx(expected, abs=1e-9 * 42e3)


def test_the_peak_of_a_case_is_exact_and_not_the_best_of_the_drawn_points(result):
    strip = strip_of(result, DEAD, UNITS)
    at = demo.A / 2.0 + demo.SUPPORT_MOMENT / (demo.A * demo.LOAD)
    top = demo.LOAD * at**2 / 2.0

    peak = max(strip.curves["moment"].peaks, key=lambda p: p.value)

    assert peak.x == pytest.approx(at, rel=1e-9)
    assert peak.value == pytest.approx(top, rel=1e-12)


def test_nothing_is_said_beyond_the_line(strip):
    assert values_at(strip, 10.5, UNITS) == []


def test_peaks_bear_their_value_and_place(strip):
    peaks = {p.words: p for p in strip.curves["moment"].peaks}

    assert peaks["-42.00"].x == pytest.approx(demo.A)  # three-moment equation: 42 kN·m
    assert peaks["35.04"].x == pytest.approx(29.0 / 12.0)  # 29²/(2·12) at 29/12 m


def test_both_spans_share_one_label_at_their_joint(strip):
    assert [p.words for p in strip.curves["moment"].peaks].count("-42.00") == 1


def test_only_actions_with_a_factor_are_shown_and_say_it(result):
    shown = strip_of(result, View("combination", "U1", (("Dead", 1.35),)), UNITS)
    hidden = strip_of(result, View("combination", "U2", (("Dead", 0.0),)), UNITS)

    assert shown.actions[0].words == "1.35 × 12.00 kN/m"
    assert hidden.actions == ()


def test_a_curve_that_moved_keeps_the_one_before_beside_it(result):
    envelope = result.envelopes["strength"]
    first = envelope.members[0]
    lower = replace(first, moment_max=0.5 * first.moment_max, moment_min=0.5 * first.moment_min)
    changed = replace(envelope, members=(lower, *envelope.members[1:]))
    before = replace(result, envelopes={"strength": changed})

    strip = strip_of(result, ENVELOPE, UNITS, before=before)

    assert strip.curves["moment"].before is not None
    assert strip.curves["shear"].before is None  # nothing moved there


def test_the_drawing_maps_the_axis_to_pixels_and_back(strip):
    drawing = lay_out(strip, 900.0, 500.0, UNITS)

    assert drawing.to_axis(drawing.to_pixel(3.7)) == pytest.approx(3.7)
    assert drawing.to_pixel(10.0) < 900.0
    assert all(0.0 <= x <= 900.0 for stroke in drawing.strokes for x, _ in stroke.points)


def test_a_click_finds_the_bearing_before_the_span(strip):
    drawing = lay_out(strip, 900.0, 500.0, UNITS)
    joint = next(s for s in drawing.spots if s.kind == "joint" and s.number == 1)

    found = drawing.spot_at((joint.left + joint.right) / 2.0, joint.top + 14.0)

    assert (found.kind, found.number) == ("joint", 1)
    assert "bears on a column" in found.tip


def test_sagging_lies_below_its_axis_and_hogging_above_and_is_hatched(strip):
    drawing = lay_out(strip, 900.0, 500.0, UNITS, quantities=("moment",))
    base = max(y for f in drawing.fills if f.role == "hogging" for _, y in f.points)

    sagging = [f for f in drawing.fills if f.role == "sagging"]

    assert sagging
    assert all(y >= base - 1e-9 for f in sagging for _, y in f.points)
    assert all(f.hatched for f in drawing.fills if f.role == "hogging")
    assert not any(f.hatched for f in sagging)


def test_an_action_answers_a_click_with_its_own_number(result):
    force = PointForce("Dead", 1, 2.0, 9.0e3)
    line = replace(result.line, actions=(*result.line.actions, force))
    strip = strip_of(replace(result, line=line), ENVELOPE, UNITS)

    drawing = lay_out(strip, 900.0, 500.0, UNITS)

    spot = next(s for s in drawing.spots if s.kind == "action" and s.number == 2)
    assert drawing.to_axis((spot.left + spot.right) / 2.0) == pytest.approx(8.0)
    assert "9.00 kN" in spot.tip


def test_the_ordinates_of_all_lines_come_in_the_order_of_their_members():
    outcome = demo.outcome()

    found = ordinates_of(outcome.lines, ENVELOPE, "moment", 3)

    assert found.upper.shape == (3, 3)
    assert found.upper[1, 0] == pytest.approx(demo.SUPPORT_MOMENT)
    assert found.upper[2, [0, 2]] == pytest.approx(-demo.LOAD_2 * demo.C**2 / 12.0)
    assert np.array_equal(found.upper, found.lower)


def test_a_line_without_actions_and_results_is_still_drawn(result):
    outcome = demo.outcome()
    bare = replace(result, line=replace(result.line, actions=()), status="not analysed",
                   solution=None, envelopes={})  # fmt: skip
    nothing = replace(outcome, lines=(bare,), model=replace(outcome.model, cases=()))

    (view,) = views_of(nothing)
    drawing = lay_out(strip_of(bare, view, UNITS), 900.0, 400.0, UNITS)

    assert any(spot.kind == "joint" for spot in drawing.spots)
    assert any(words.text == "no action here" for words in drawing.words)


def test_thinned_curves_keep_their_kinks_and_stay_within_a_sixth_of_a_pixel():
    from freecad.spanledger.present.layout import _thinned

    x = np.linspace(100.0, 430.0, 161)
    parabola = 0.0022 * (x - 100.0) * (430.0 - x)
    kinked = np.where(x < 222.0, 0.3 * (x - 100.0), 36.6 - 0.9 * (x - 222.0))
    for y in (parabola, kinked, np.zeros(161)):
        kept = np.array(_thinned(x, y))
        assert len(kept) < 35
        assert tuple(kept[0]) == (x[0], y[0])
        assert tuple(kept[-1]) == (x[-1], y[-1])
        assert np.abs(np.interp(x, *kept.T) - y).max() < 1.0 / 6.0
    short = np.array(_thinned(x[:5], parabola[:5]))
    assert len(short) == 5  # less than one block
