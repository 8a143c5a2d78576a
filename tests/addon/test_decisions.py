"""Decisions become entries of the job file; undo and redo bring texts back."""

from dataclasses import replace

import demo
import pytest

from analysis_core.errors import JobError
from analysis_core.job import reader as job
from analysis_core.job.edit import entries
from analysis_core.units import display_units
from freecad.spanledger.opened_model import OpenedModel, job_beside
from freecad.spanledger.present import decisions

UNITS = display_units()


@pytest.fixture
def line():
    return demo.outcome().lines[0].line


def test_a_joint_is_named_by_the_end_of_an_element(line):
    assert decisions.where_is(line, 0) == decisions.Where("GID-L1-0", "start")
    assert decisions.where_is(line, 2) == decisions.Where("GID-L1-1", "end")


def test_a_joint_along_an_element_is_named_by_its_distance(line):
    # One element of 10 m over three bearings: the middle one is at neither end.
    members = tuple(
        replace(m, element="GID", element_offset=offset)
        for m, offset in zip(line.members, (0.0, demo.A), strict=True)
    )
    one = replace(line, members=members)

    assert decisions.where_is(one, 1) == decisions.Where("GID", at=demo.A)
    assert decisions.where_is(one, 1).keys == {"on": {"id": "GID"}, "at": "6 m"}
    assert decisions.where_is(one, 2) == decisions.Where("GID", "end")


def test_a_reversed_element_counts_from_its_own_start(line):
    members = (replace(line.members[0], element_offset=demo.A, reversed_=True), line.members[1])
    turned = replace(line, members=members)

    assert decisions.where_is(turned, 0) == decisions.Where("GID-L1-0", "end")
    assert decisions.end_of(turned, 0, at_end=True) == decisions.Where("GID-L1-0", "start")


def test_a_second_decision_about_the_same_joint_replaces_the_first():
    where = decisions.Where("GID", "start")
    text = decisions.decide_support("# mine\n", where, "fixed")
    text = decisions.decide_support(text, decisions.Where("GID", "end"), "free")
    text = decisions.decide_support(text, where, {"vertical": "25 kN/mm", "rotation": "free"})

    assert text.startswith("# mine\n")
    settings = job.parse(text).supports
    assert [(s.end, s.vertical, s.rotation) for s in settings] == [
        ("start", 25e6, 0.0), ("end", 0.0, 0.0),
    ]  # fmt: skip


def test_releases_movements_sections_and_rules_are_read_back_as_decided():
    text = decisions.decide_release("", decisions.Where("GID", "end"), "free")
    text = decisions.decide_movement(text, "COL", "Settlement", "12 mm")
    text = decisions.decide_section(text, "GID", {"inertia": "8356 cm4"})
    text = decisions.decide_section(text, "GID", {"area": "53.8 cm2"})
    text = decisions.decide_rules(text, "asce-7-22")
    text = decisions.decide_nature(text, "Dead", "permanent")

    settings = job.parse(text)
    assert settings.releases[0].rotation == 0.0
    assert settings.movements[0].down == pytest.approx(0.012)
    assert settings.sections[0].inertia == pytest.approx(8356e-8)
    assert settings.sections[0].area == pytest.approx(53.8e-4)
    assert settings.rules.name == "asce-7-22"
    assert settings.cases[0].nature == "permanent"


def test_actions_are_added_changed_and_taken_out():
    text = decisions.decide_action("", "GID", case="Dead", shape="uniform", value="12 kN/m")
    text = decisions.decide_action(text, "GID", case="Dead", shape="point", value="5 kN", at="50 %")
    text = decisions.change_action(text, "actions[0]", "15 kN/m")

    assert job.parse(text).actions[0].values == (15e3,)
    assert decisions.changeable_value(text, "actions[1]") == ("point", "5 kN")
    assert len(entries(decisions.drop_action(text, "actions[1]"), "actions")) == 1
    assert decisions.action_index("2O2Fr$t4X7Zf8NOew3FLOH") == -1


def test_a_bare_number_is_taken_in_the_units_on_screen():
    assert decisions.quantity_text("12,5", "line load", UNITS) == "12.5 kN/m"
    assert decisions.quantity_text("10", "settlement", UNITS) == "10 mm"
    assert decisions.quantity_text("1.5 kip/ft", "line load", UNITS) == "1.5 kip/ft"


@pytest.mark.parametrize("typed", ["", "twelve", "12 kN", "1e999 kN/m"])
def test_what_is_no_such_quantity_is_refused_in_a_sentence(typed):
    with pytest.raises(JobError) as caught:
        decisions.quantity_text(typed, "line load", UNITS)

    assert str(caught.value).endswith(".")


def test_decisions_are_written_and_undone_and_done_again(tmp_path):
    path = tmp_path / "house.ifc"
    job_beside(path).write_text("title: House  # ours\n")
    opened = OpenedModel.open(path)
    decided = decisions.decide_support(opened.text, decisions.Where("GID", "end"), "fixed")

    opened.decide("Joint 1 fixed", decided)
    assert job_beside(path).read_text() == decided
    assert opened.undo() == "Joint 1 fixed"
    assert job_beside(path).read_text() == "title: House  # ours\n"
    assert opened.redo() == "Joint 1 fixed"
    assert job_beside(path).read_text() == decided
    assert opened.undo()
    assert not opened.undo()


def test_a_new_decision_forgets_what_was_undone(tmp_path):
    opened = OpenedModel.open(tmp_path / "house.ifc")
    opened.decide("A", "title: A\n")
    opened.undo()
    opened.decide("B", "title: B\n")

    assert opened.redo() == ""
    assert opened.text == "title: B\n"


def test_a_decision_that_cannot_be_written_changes_nothing(tmp_path):
    opened = OpenedModel.open(tmp_path / "missing" / "house.ifc")

    with pytest.raises(JobError, match="was not kept"):
        opened.decide("A", "title: A\n")

    assert opened.text == ""
    assert not opened.done


def test_a_decision_that_is_not_understood_changes_nothing(tmp_path):
    opened = OpenedModel.open(tmp_path / "house.ifc")

    with pytest.raises(JobError):
        opened.decide("A", "titel: A\n")

    assert not opened.job_path.exists()


def test_redistribution_is_stated_per_line_and_taken_back():
    text = decisions.decide_rules("", "en-1990")
    text = decisions.decide_redistribution(text, "L1", "15 %")
    text = decisions.decide_redistribution(text, "L2", "10")
    text = decisions.decide_redistribution(text, "L1", "20")

    found = {r.on.line: r.fraction for r in job.parse(text).rules.redistribution}
    assert found == {"L1": pytest.approx(0.20), "L2": pytest.approx(0.10)}
    text = decisions.decide_redistribution(text, "L2", "0 %")
    assert [r.on.line for r in job.parse(text).rules.redistribution] == ["L1"]
    with pytest.raises(JobError, match="no part"):
        decisions.decide_redistribution(text, "L1", "much")


def test_what_somebody_else_wrote_into_the_job_file_is_not_overwritten(tmp_path):
    opened = OpenedModel.open(tmp_path / "house.ifc")
    opened.decide("first", "title: First\n")
    by_hand = "title: By hand\n"
    opened.job_path.write_text(by_hand, encoding="utf-8")

    for act in (lambda: opened.decide("second", "title: Second\n"), opened.undo):
        with pytest.raises(JobError, match=r"changed by somebody else .* Balance the lines again"):
            act()

    assert opened.job_path.read_text(encoding="utf-8") == by_hand
    assert opened.text == "title: First\n"
    assert len(opened.done) == 1
    opened.read_again()
    opened.decide("third", "title: Third\n")
    assert opened.job_path.read_text(encoding="utf-8") == "title: Third\n"
