"""Marks stay with their elements when lines come and go."""

from dataclasses import replace
from math import inf

import pytest

from analysis_core.findings import Finding
from analysis_core.model import Joint, Line, LineModel, Member, Piece, Support, Transfer
from analysis_core.revision.kept_marks import with_kept_marks


def line(mark, *elements):
    joints = tuple(
        Joint(i, 5.0 * i, 0.0, support=Support(inf), reason=f"carried by line {mark}")
        for i in range(len(elements) + 1)
    )
    members = tuple(
        Member(i, i, i + 1, (Piece(5.0, (1e7,)),), element=e) for i, e in enumerate(elements)
    )
    return Line(mark, joints, members, elements=elements)


@pytest.fixture
def model():
    return LineModel(
        (line("L1-01", "new"), line("L1-02", "a", "b"), line("L1-03", "c")),
        transfers=(Transfer("L1-03", 0, "L1-02", 0, 1.0),),
        findings=(Finding("note", "n", "L1-02 and L1-020 and L1-03.", ("a",), "L1-02"),),
    )


def test_lines_take_the_marks_of_their_elements_and_new_ones_unused_numbers(model):
    kept = with_kept_marks(model, {"a": "L1-01", "b": "L1-01", "c": "L1-02", "gone": "L1-03"})

    assert [x.mark for x in kept.lines] == ["L1-04", "L1-01", "L1-02"]


def test_everything_that_names_a_line_follows(model):
    kept = with_kept_marks(model, {"a": "L1-01", "c": "L1-02"})

    assert (kept.transfers[0].from_line, kept.transfers[0].to_line) == ("L1-02", "L1-01")
    assert kept.findings[0].line == "L1-01"
    assert kept.findings[0].message == "L1-01 and L1-020 and L1-02."
    assert kept.lines[1].joints[0].reason == "carried by line L1-01"


def test_of_two_halves_the_one_with_more_of_the_elements_keeps_the_mark():
    halves = LineModel((line("L1-01", "a"), line("L1-02", "b", "c")))

    kept = with_kept_marks(halves, dict.fromkeys("abc", "L1-07"))

    assert [x.mark for x in kept.lines] == ["L1-01", "L1-07"]


def test_nothing_known_changes_nothing(model):
    assert with_kept_marks(model, {}) is model
    assert replace(model) == with_kept_marks(model, {})
