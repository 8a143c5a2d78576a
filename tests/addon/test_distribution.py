"""The distribution that is stepped through in the window."""

import demo
import pytest

from analysis_core.units import display_units
from freecad.spanledger.present.diagrams import View
from freecad.spanledger.present.distribution import ORDERS, recorded

UNITS = display_units()
DEAD = View("case", "Dead", (("Dead", 1.0),))


@pytest.fixture
def result():
    return demo.outcome().lines[0]


def test_rows_appear_step_by_step_until_all_are_there(result):
    shown = recorded(result, DEAD, UNITS)

    rows = [step.rows for step in shown.steps]
    assert rows == sorted(rows)
    assert shown.steps[-1].rows == len(shown.tables[-1].rows)
    assert sum(step.new for step in shown.steps) == len(shown.tables[0].rows)


def test_the_step_of_a_release_names_its_joint(result):
    shown = recorded(result, DEAD, UNITS)

    released = [step.joints for step in shown.steps if step.joints]
    assert released == [(1,)]  # both outer ends are pinned: the middle joint settles it at once


def test_the_last_row_is_the_support_moment_of_the_three_moment_equation(result):
    shown = recorded(result, DEAD, UNITS)

    table = shown.tables[0]
    column = table.columns.index("1-0")
    exact = next(row for row in table.rows if row.kind == "exact")
    assert float(exact.cells[column]) == pytest.approx(-demo.SUPPORT_MOMENT / 1e3, abs=0.005)


def test_a_combination_is_distributed_with_its_factors(result):
    single = recorded(result, DEAD, UNITS).tables[0]
    shown = recorded(result, View("combination", "U1", (("Dead", 2.0),)), UNITS).tables[0]

    held = [next(r for r in t.rows if r.kind == "held").cells for t in (single, shown)]
    assert [2.0 * float(cell) for cell in held[0]] == pytest.approx([float(c) for c in held[1]])


@pytest.mark.parametrize("order", ORDERS)
def test_every_order_ends_at_the_same_moments(result, order):
    shown = recorded(result, DEAD, UNITS, order)

    assert shown.tables[0].rows[-1].cells == recorded(result, DEAD, UNITS).tables[0].rows[-1].cells


def test_where_there_is_no_table_a_sentence_says_why(result):
    assert "Choose a case" in recorded(result, View("envelope", "strength"), UNITS)
    assert "Nothing acts" in recorded(result, View("case", "Snow", (("Snow", 1.0),)), UNITS)
