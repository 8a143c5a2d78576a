"""What is shown before results are written."""

from dataclasses import replace

import demo
import pytest

from analysis_core.units import display_units
from freecad.spanledger.present.posting import preview

UNITS = display_units()


@pytest.fixture
def shown():
    return preview(demo.outcome(), UNITS)


def test_every_member_and_every_support_is_listed_with_its_sets(shown):
    names = {(s.element, s.name) for s in shown.sets}

    assert ("GID-L1-0", "Spanledger_Effects") in names
    assert ("GID-L1-0", "Spanledger_Diagrams") in names
    assert ("COL-L1-1", "Spanledger_Reactions") in names
    assert (shown.elements, shown.supports, shown.lines) == (3, 5, 2)


def test_values_are_those_that_will_be_written_in_the_units_on_screen(shown):
    effects = next(
        dict(s.values)
        for s in shown.sets
        if (s.element, s.name) == ("GID-L1-0", "Spanledger_Effects")
    )

    assert effects["LineMark"] == "L1"
    assert effects["SaggingMoment"].startswith("35.04 kN·m @ 2.417 m")  # 29²/24 at 29/12 m
    assert effects["EndMoment"] == "-42.00 … -42.00 kN·m"


def test_lines_that_are_not_written_are_named():
    outcome = demo.outcome()
    failed = replace(outcome.lines[1], status="not analysed", solution=None, envelopes={})

    shown = preview(replace(outcome, lines=(outcome.lines[0], failed)), UNITS)

    assert shown.left_out == ("L2",)
    assert "L2" in shown.summary
