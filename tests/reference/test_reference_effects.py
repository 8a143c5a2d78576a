"""Extremes and values along members of the reference items, as the program's effects give them."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from reference_items import CASE, Structure, build, load
from reference_quantities import KINDS, quantity_of
from test_reference_values import FILES, RELATIVE, _printed_range, _scales

from analysis_core import distribution
from analysis_core.effects.arrangements import whole_cases
from analysis_core.effects.envelopes import envelope
from analysis_core.effects.fields import fields, sample
from analysis_core.model import Combination
from analysis_core.results import Extreme, LineSolution, MemberEnvelope

ALONE = (Combination("alone", "strength", {CASE: 1.0}),)
EXTREMES = {
    "largest moment": "sagging",
    "least moment": "hogging",
    "largest deflection": "deflection_down",
    "least deflection": "deflection_up",
    "place of largest moment": "sagging",
    "place of largest deflection": "deflection_down",
}
ALONG = ("moment", "shear", "deflection")
WANTED = {
    item["name"]: item
    for stem in FILES
    for item in load(stem)
    if any(quantity_of(check)[0] in (*EXTREMES, *ALONG) for check in item["expect"])
}


@pytest.mark.parametrize("name", WANTED)
def test_extremes_and_values_along_members_are_met(name: str):
    item = WANTED[name]
    structure = build(item)
    solution = distribution.solve(structure.line, [CASE])
    found = envelope(whole_cases(structure.line, (CASE,)), solution, ALONE, limit_state="strength")
    scales = _scales(item)

    for check in item["expect"]:
        quantity, where = quantity_of(check)
        if quantity in EXTREMES:
            value = _extreme(structure, found.members, quantity, where[0])
        elif quantity in ALONG:
            value = _along(structure, solution, quantity, where)
        else:
            continue
        assert value == pytest.approx(check["is"], abs=RELATIVE * scales[KINDS[quantity]]), check
        if "printed" in check:
            low, high = _printed_range(check["printed"])
            assert low <= value / check["per"] <= high, check


def test_the_effects_of_many_items_are_asked_for():
    checks = [c for item in WANTED.values() for c in item["expect"]]

    assert sum(quantity_of(c)[0] in (*EXTREMES, *ALONG) for c in checks) == 122


def _extreme(
    structure: Structure, members: tuple[MemberEnvelope, ...], quantity: str, span: Any
) -> float:
    by_id = {member.member: member for member in members}
    found: list[tuple[float, Extreme]] = [
        (offset, getattr(by_id[index], EXTREMES[quantity]))
        for index, offset in structure.spans[span]
    ]
    choose = min if quantity.startswith("least") else max
    offset, extreme = choose(found, key=lambda pair: pair[1].value)
    return offset + extreme.x if quantity.startswith("place") else extreme.value


def _along(structure: Structure, solution: LineSolution, quantity: str, where: list[Any]) -> float:
    """Value at a distance from the start of a span, just left of anything that stands there."""
    span, x = where
    for member, offset in structure.spans[span]:
        if x - offset <= structure.line.members[member].length * (1.0 + 1e-12):
            break
    for block in fields([structure.line], [solution]):
        place = np.flatnonzero(block.member == member)
        if place.size:
            at = np.full((1, len(block.member)), x - offset)
            values = sample(getattr(block, quantity), block.cuts, at, left=True)
            return float(values[0, 0, place[0]])
    raise AssertionError(f"no fields for member {member}")
