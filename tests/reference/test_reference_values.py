"""Handbook values, closed forms and independent computations, by both methods.

The sources stand beside the items in ``tests/data/reference``.  A printed coefficient holds to
one unit in its last printed place, a formula or a computed value to 1e-9 of the largest value
of its kind in the item.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from functools import cache

import pytest
from reference_items import CASE, Item, Structure, build, load
from reference_quantities import KINDS, formula_value, measure, quantity_of

from analysis_core import distribution
from analysis_core.errors import MechanismError
from analysis_core.model import Line
from analysis_core.results import LineSolution
from analysis_core.stiffness_check import largest_difference, solve_stiffness

FILES = (
    "fixed_end_moments",
    "stiffness_and_carry_over",
    "haunches",
    "equal_spans",
    "beam_lines",
    "movements_and_springs",
    "frames",
)
RELATIVE = 1e-9
ITEMS = {item["name"]: item for stem in FILES for item in load(stem)}
METHODS: dict[str, Callable[[Line, Sequence[str]], LineSolution]] = {
    "distribution": distribution.solve,
    "stiffness": solve_stiffness,
}

both_methods = pytest.mark.parametrize("method", METHODS)
every_item = pytest.mark.parametrize("name", ITEMS)


def test_the_data_hold_all_items_and_checks():
    # 188 items with 620 checks, 143 of them with a printed coefficient.
    checks = [check for item in ITEMS.values() for check in item["expect"]]

    assert len(ITEMS) == 188
    assert len(checks) == 620
    assert sum("printed" in check for check in checks) == 143


@every_item
@both_methods
def test_every_expected_value_is_met(name: str, method: str):
    structure, solution = solved(name, method)
    item = ITEMS[name]
    scales = _scales(item)

    for check in item["expect"]:
        kind = KINDS[quantity_of(check)[0]]
        found = measure(structure, solution, check)
        assert found == pytest.approx(check["is"], abs=RELATIVE * scales[kind]), check


@every_item
@both_methods
def test_every_formula_is_met(name: str, method: str):
    structure, solution = solved(name, method)
    item = ITEMS[name]
    scales = _scales(item)

    for check in item["expect"]:
        if "by" in check:
            expected = formula_value(check["by"], item.get("given", {}))
            kind = KINDS[quantity_of(check)[0]]
            found = measure(structure, solution, check)
            assert found == pytest.approx(expected, abs=RELATIVE * scales[kind]), check


@pytest.mark.parametrize(
    "name", [name for name, item in ITEMS.items() if any("printed" in c for c in item["expect"])]
)
@both_methods
def test_every_printed_coefficient_is_met_to_its_last_place(name: str, method: str):
    structure, solution = solved(name, method)

    for check in ITEMS[name]["expect"]:
        if "printed" in check:
            found = measure(structure, solution, check) / check["per"]
            low, high = _printed_range(check["printed"])
            assert low <= found <= high, check


@every_item
def test_both_methods_agree_on_every_item(name: str):
    _, solution = solved(name, "distribution")

    assert largest_difference(solution) < 1e-12


@pytest.mark.parametrize("item", load("mechanisms"), ids=lambda item: item["name"])
@both_methods
def test_a_mechanism_is_refused_with_the_joints_that_move(item: Item, method: str):
    structure = build(item)
    names = {joint: name for name, joint in structure.bearings.items()}

    with pytest.raises(MechanismError) as caught:
        METHODS[method](structure.line, [CASE])

    named = structure.line.kind == "frame"
    assert [names[j] if named else j for j in caught.value.joints] == item["moving"]
    assert caught.value.remedy


@cache
def solved(name: str, method: str) -> tuple[Structure, LineSolution]:
    """Return the structure of an item and its solution."""
    structure = build(ITEMS[name])
    return structure, METHODS[method](structure.line, [CASE])


def _printed_range(printed: str) -> tuple[float, float]:
    """Return the values one unit in the last printed place below and above.

    A printed fraction such as 1/185 has that unit in its denominator.
    """
    if printed.startswith("1/"):
        return 1.0 / (int(printed[2:]) + 1), 1.0 / (int(printed[2:]) - 1)
    unit = 10.0 ** -len(printed.partition(".")[2])
    return float(printed) - unit, float(printed) + unit


def _scales(item: Item) -> dict[str, float]:
    """Return the largest expected value of each kind."""
    scales: dict[str, float] = {}
    for check in item["expect"]:
        kind = KINDS[quantity_of(check)[0]]
        scales[kind] = max(scales.get(kind, 0.0), abs(check["is"]))
    return {kind: scale or 1.0 for kind, scale in scales.items()}
