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
