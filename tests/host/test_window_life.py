"""Who destroys what, and when, in the real window."""

import pytest

pytestmark = pytest.mark.host


def test_no_thread_but_the_windows_collects_rubbish(in_freecad):
    found = in_freecad("scenes_life:rubbish")

    assert found["was_on"]
    assert not found["on_in_thread"]
    assert found["there"]  # a hundred thousand new objects later
    assert found["on_again"]
    assert found["gone"]
    assert found["in_window"]


def test_a_button_outlives_its_own_click(in_freecad):
    found = in_freecad("scenes_life:own_click")

    assert found["line"] == 0
    assert found["there"]
    assert found["gone"]
    assert found["windows"] == 1


def test_a_fault_in_painting_leaves_no_painter_at_work(in_freecad):
    found = in_freecad("scenes_life:faulty_painting")

    assert found["painter_ended"]
    assert found["painted_again"]
    assert "does not handle (AttributeError)" in found["log"]
    assert "Traceback" not in found["log"]


def test_a_run_that_ends_in_another_document_stays_out_of_its_docks(in_freecad):
    found = in_freecad("scenes_life:other_document")

    assert found["elsewhere"] == [0, ""]
    assert found["objects"] == 0
    assert found["back"] == 11
    assert found["fixed"]
    assert found["typed"] == "12.5"  # checks that arrive leave the form as it is
    assert "Traceback" not in found["log"]
    assert "does not handle" not in found["log"]
