"""Where reactions go, and how lines are told apart in the 3D view."""

from dataclasses import replace

import demo
import pytest

from analysis_core.model import Transfer
from analysis_core.units import display_units
from freecad.spanledger.present.listing import rows_of
from freecad.spanledger.present.load_path import bearing_rows, paths_at_joint, paths_on_member
from freecad.spanledger.present.shades import (
    BY_CHANGE,
    BY_STATE,
    PLAIN,
    WAYS,
    largest_change,
    shade_numbers,
    shades,
)

UNITS = display_units()


@pytest.fixture
def outcome():
    """L2 bears with its joint 0 on the second span of L1, 1.5 m from its start."""
    first = demo.outcome()
    carried = Transfer("L2", 0, "L1", 1, 1.5)
    solution = first.lines[0].solution
    reactions = solution.reactions.copy()
    reactions[0, :, 1] = 29.0e3, 77.5e3, 13.5e3  # by equilibrium of the demo's spans
    loaded = replace(first.lines[0], solution=replace(solution, reactions=reactions))
    model = replace(first.model, transfers=(carried,), names={"COL-L1-1": "C-12"})
    return replace(first, model=model, lines=(loaded, first.lines[1]))


def test_a_joint_leads_to_the_line_that_carries_it(outcome):
    assert [p.line for p in paths_at_joint(outcome, 1, 0)] == [0]
    assert paths_at_joint(outcome, 1, 1) == []


def test_a_span_leads_to_the_lines_that_bear_on_it(outcome):
    (path,) = paths_on_member(outcome, 0, 1, UNITS)

    assert path.line == 1
    assert path.words == "↑ L2 at 1.500 m"
    assert paths_on_member(outcome, 0, 0, UNITS) == []


def test_supporting_elements_tell_what_each_case_brings(outcome):
    rows = {row.element: row for row in bearing_rows(outcome, UNITS)}

    assert rows["COL-L1-1"].texts[0] == "C-12"
    assert "L1 / Dead: 77.50 kN" in rows["COL-L1-1"].detail
    assert rows["COL-L1-1"].lines == (0,)


def test_classes_differ_in_colour_and_in_stroke():
    for way in WAYS:
        strokes = {(s.pattern, s.width) for s in shades(way)}
        roles = {s.role for s in shades(way)}
        assert len(strokes) == len(roles) == len(shades(way))


def test_lines_are_classed_by_state_and_by_what_a_decision_changed(outcome):
    rows = rows_of(outcome, UNITS, posted={"result-L2"})
    line = outcome.lines[0]
    envelope = line.envelopes["strength"]
    member = envelope.members[0]
    grown = replace(member, sagging=replace(member.sagging, value=1.1 * member.sagging.value))
    changed = replace(
        line,
        envelopes={
            **line.envelopes,
            "strength": replace(envelope, members=(grown, *envelope.members[1:])),
        },
    )
    after = replace(outcome, lines=(changed, outcome.lines[1]))

    by_state = shade_numbers(BY_STATE, rows, outcome, None)
    assert [shades(BY_STATE)[n].words for n in by_state] == ["balanced", "posted"]
    by_change = shade_numbers(BY_CHANGE, rows, after, outcome)
    assert [shades(BY_CHANGE)[n].words for n in by_change] == ["up to 20 %", "unchanged"]
    assert largest_change(line, changed) == pytest.approx(0.1 / 1.1)
    assert largest_change(None, changed) == float("inf")
    assert shade_numbers(PLAIN, rows, after, outcome) == [0, 0]
