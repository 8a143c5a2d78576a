"""The list of lines and the list of findings."""

from dataclasses import replace

import demo
import pytest

from analysis_core.findings import Finding
from analysis_core.revision.posted_states import PostedState
from analysis_core.units import display_units
from freecad.spanledger.present.findings import counts_words, finding_rows, matching
from freecad.spanledger.present.listing import GLYPHS, STATES, grouped, rows_of
from freecad.spanledger.present.moved import moved_lines, moved_words

UNITS = display_units()


@pytest.fixture
def outcome():
    return demo.outcome()


@pytest.fixture
def many(outcome):
    """Lines L1 … L12, out of order, with moments that grow with the number."""
    first = outcome.lines[0]
    lines = []
    for number in (10, 2, 1, 12):
        line = replace(first.line, mark=f"L{number}")
        lines.append(replace(first, line=line, fingerprint=f"f{number}"))
    return replace(outcome, lines=tuple(lines))


def marks(groups):
    return [[row.mark for row in group.rows] for group in groups]


def test_lines_stand_under_their_storey_with_governing_values(outcome):
    groups = grouped(rows_of(outcome, UNITS))

    assert [g.storey for g in groups] == ["First floor", "Roof"]
    assert groups[0].rows[0].texts == (
        "L1", f"{GLYPHS['balanced']} balanced", "2", "35.04", "-42.00", "-43.00",
        UNITS.number(groups[0].rows[0].values[3], "deflection"),
        "–",
    )  # fmt: skip


def test_marks_are_sorted_as_a_person_counts(many):
    assert marks(grouped(rows_of(many, UNITS))) == [["L1", "L2", "L10", "L12"]]
    assert marks(grouped(rows_of(many, UNITS), descending=True)) == [["L12", "L10", "L2", "L1"]]


def test_every_word_of_the_filter_must_occur(outcome):
    rows = rows_of(outcome, UNITS)

    assert marks(grouped(rows, words="roof bal")) == [["L2"]]
    assert marks(grouped(rows, words="gid-l1-1")) == [["L1"]]
    assert grouped(rows, words="roof stale") == []


def test_states_tell_what_the_engineer_has_to_do(outcome):
    failed = replace(outcome.lines[0], status="not analysed", solution=None, envelopes={})
    finding = Finding("error", "no-support", "Nothing holds it.", (), "L1")
    broken = replace(outcome, lines=(failed, outcome.lines[1]), findings=(finding,))

    states = [row.state for row in rows_of(broken, UNITS, posted={"result-L2"})]

    assert states == ["needs a decision", "posted"]
    in_file = {"L1": PostedState("current"), "L2": PostedState("stale", ("a load changed",))}
    rows = rows_of(outcome, UNITS, in_file=in_file)
    assert [row.state for row in rows] == ["posted", "stale"]
    assert rows[1].reason == "a load changed"
    assert {row.state for row in rows_of(outcome, UNITS, stale=True)} == {"stale"}
    assert rows_of(broken, UNITS)[0].texts[3] == "–"


def test_only_the_asked_states_are_shown(outcome):
    rows = rows_of(outcome, UNITS, posted={"result-L2"})

    assert marks(grouped(rows, states=("posted",))) == [["L2"]]


def test_every_state_has_a_mark_of_its_own_shape():
    assert len({GLYPHS[state] for state in STATES}) == len(STATES)


def test_findings_come_gravest_first_with_the_line_they_are_about(outcome):
    rows = finding_rows(
        replace(outcome, findings=(*outcome.findings, Finding("error", "x", "Bad.", ("GID-L2-0",))))
    )

    assert [row.severity for row in rows] == ["error", "warning", "note"]
    assert [row.line for row in rows] == [1, 0, None]
    assert counts_words(rows) == "1 error, 1 warning, 1 note"
    assert [r.message for r in matching(rows, "demo note")] == ["Something assumed."]


def test_control_characters_of_a_message_are_shown_and_not_obeyed(outcome):
    bad = Finding("note", "x", "name \x1b[31m\u202eevil")

    (row,) = finding_rows(replace(outcome, findings=(bad,)))

    assert "\x1b" not in row.message
    assert "\u202e" not in row.message


def test_what_moved_is_told_for_the_line_in_hand_and_counted_for_others(outcome):
    line = outcome.lines[0]
    envelope = line.envelopes["strength"]
    member = replace(envelope.members[0], sagging=replace(envelope.members[0].sagging, value=4e4))
    after = replace(
        line,
        envelopes={
            **line.envelopes,
            "strength": replace(envelope, members=(member, *envelope.members[1:])),
        },
    )
    changed = replace(outcome, lines=(after, outcome.lines[1]))

    assert moved_lines(outcome, changed) == ["L1"]
    assert moved_words(outcome, changed, "L1", UNITS) == "L1: sagging 35.04 → 40.00 kN·m."
    assert moved_words(outcome, changed, "L2", UNITS) == "1 other line changed: L1."
    assert moved_words(outcome, outcome, "L1", UNITS) == "No governing effect changed."


def test_lines_are_sorted_by_use_of_capacity_once_that_is_known(outcome):
    rows = rows_of(outcome, UNITS, uses={"L2": 0.83})

    assert [row.texts[-1] for row in rows] == ["–", "83 %"]
    first = grouped(rows, column=7, descending=True)
    assert [group.rows[0].mark for group in first] == ["L1", "L2"]  # each in its storey
    assert rows[1].values[-1] == 0.83
