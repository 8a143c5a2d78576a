"""The main job in the real window, by clicks."""

import pytest

pytestmark = pytest.mark.host


def test_a_model_is_opened_balanced_and_seen(in_freecad):
    found = in_freecad("scenes_model:tour")

    assert found["lines"] == 11
    assert found["states"] == ["balanced"]
    assert found["shape"] > 40


def test_decisions_are_taken_undone_and_kept_by_clicks(in_freecad):
    found = in_freecad("scenes_model:decide")

    pinned, fixed, undone, redone, loaded = found["sagging"]
    assert found["was"] == "pinned"
    assert "fixed" in found["offered"]
    assert fixed < pinned  # a fixed end takes moment off its span
    assert undone == pinned
    assert redone == fixed
    assert "condition: fixed" in found["job"]
    assert "# Job file of Quarry Lane Workshops" in found["job"]  # remarks stay
    assert "sagging" in found["moved"]
    assert found["dashed"] > 0  # the curves before stand beside
    assert found["undone"]
    assert found["redone"]
    assert "nonsense" in found["refused"]
    assert found["still"]
    assert "uniform: 30 kN/m" in found["added"]
    assert loaded != redone
