"""Published coefficients of patterned equal spans, reached through arrangements of one action.

The loads are never set by hand span by span: the line carries the action everywhere and the
program finds the arrangement.  AISC Steel Construction Manual, tables 3-22 and 3-23 (cases 36 to
42; numbers from memory), AWC Design Aid No. 6, and Reynolds and Steedman, Reinforced Concrete
Designer's Handbook, tables of equal spans; figures as printed, from memory.
"""

import numpy as np
import pytest
from small_solver import PIN, beam_line, solve, uniform

from analysis_core.effects.arrangements import Arrangements, split_by_span
from analysis_core.effects.envelopes import envelope
from analysis_core.model import Combination, PointForce

SPAN, EI, LOAD, FORCE = 5.0, 12000.0, 8.0, 20.0

# spans: {quantity: (place, digits printed, the arrangement's name)}
UNIFORM = {
    2: [
        ("sagging", 1, "0.0957", "Q on span 1"),
        ("hogging", 1, "-0.125", "Q on all spans"),
        ("reaction", 1, "0.4375", "Q on span 1"),
        ("reaction", 2, "1.250", "Q on all spans"),
        ("uplift", 3, "-0.0625", "Q on span 1"),
        ("deflection", 1, "0.0092", "Q on span 1"),
    ],
    3: [
        ("sagging", 1, "0.1013", "Q on spans 1, 3"),
        ("sagging", 2, "0.075", "Q on span 2"),
        ("hogging", 1, "-0.1167", "Q on spans 1, 2"),
        ("reaction", 1, "0.450", "Q on spans 1, 3"),
        ("reaction", 2, "1.20", "Q on spans 1, 2"),
        ("deflection", 1, "0.0099", "Q on spans 1, 3"),
    ],
    4: [
        ("sagging", 1, "0.0996", "Q on spans 1, 3"),
        ("sagging", 3, "0.0805", "Q on spans 1, 3"),
        ("hogging", 1, "-0.1205", "Q on spans 1, 2, 4"),
        ("hogging", 2, "-0.1205", "Q on spans 1, 2, 4"),
        ("reaction", 1, "0.446", "Q on spans 1, 3"),
        ("reaction", 2, "1.223", "Q on spans 1, 2, 4"),
        ("uplift", 5, "-0.054", "Q on spans 1, 3"),
        ("deflection", 1, "0.0097", "Q on spans 1, 3"),
        ("deflection", 4, "0.0097", "Q on spans 2, 4"),
    ],
    5: [
        ("sagging", 1, "0.100", "Q on spans 1, 3, 5"),
        ("sagging", 2, "0.079", "Q on spans 2, 4"),
        ("sagging", 3, "0.086", "Q on spans 1, 3, 5"),
        ("hogging", 1, "-0.120", "Q on spans 1, 2, 4"),
        ("hogging", 3, "-0.111", "Q on spans 2, 3, 5"),
        ("reaction", 2, "1.218", "Q on spans 1, 2, 4"),
        ("reaction", 3, "1.167", "Q on spans 2, 3, 5"),
        ("uplift", 1, "-0.053", "Q on spans 2, 4"),
    ],
}
# A force at every midspan: Reynolds and Steedman.
POINT = {
    3: [
        ("sagging", 1, "0.213", "Q on spans 1, 3"),
        ("sagging", 2, "0.175", "Q on span 2"),
        ("hogging", 1, "-0.175", "Q on spans 1, 2"),
    ],
    4: [
        ("sagging", 1, "0.210", "Q on spans 1, 3"),
        ("sagging", 3, "0.183", "Q on spans 1, 3"),
        ("hogging", 1, "-0.181", "Q on spans 1, 2, 4"),
    ],
    5: [
        ("sagging", 1, "0.211", "Q on spans 1, 3, 5"),
        ("sagging", 3, "0.191", "Q on spans 1, 3, 5"),
        ("sagging", 2, "0.181", "Q on spans 2, 4"),
        ("hogging", 1, "-0.179", "Q on spans 1, 2, 4"),
        ("hogging", 3, "-0.167", "Q on spans 2, 3, 5"),
    ],
}
ALONE = [Combination("U1", "strength", {"Q": 1.0}, favourable={"Q": 0.0})]


def governing(spans, actions):
    line = beam_line([SPAN] * spans, [EI] * spans, [PIN] * (spans + 1), actions)
    split = split_by_span(line, ["Q"], ["Q"])
    return envelope(
        split,
        solve(split.line, split.cases),
        ALONE,
        limit_state="strength",
        arrangements=Arrangements("every", {"Q": 0.0}),
    )


def found(result, quantity, place):
    if quantity in ("sagging", "hogging"):
        return getattr(result.members[place - 1], quantity)
    if quantity == "deflection":
        return result.members[place - 1].deflection_down
    reaction = result.reactions[place - 1]
    return reaction.vertical_max if quantity == "reaction" else reaction.vertical_min


@pytest.mark.parametrize(
    ("spans", "quantity", "place", "printed", "arrangement"),
    [(n, *row) for n, rows in UNIFORM.items() for row in rows],
)
def test_uniform_load_arranged_by_span_gives_the_printed_coefficient(
    spans, quantity, place, printed, arrangement
):
    result = governing(spans, [uniform("Q", i, SPAN, LOAD) for i in range(spans)])
    scale = {
        "sagging": LOAD * SPAN**2,
        "hogging": LOAD * SPAN**2,
        "deflection": LOAD * SPAN**4 / EI,
    }.get(quantity, LOAD * SPAN)

    extreme = found(result, quantity, place)

    # One unit in the last printed place.
    last_place = 10.0 ** -len(printed.split(".")[1])
    assert extreme.value / scale == pytest.approx(float(printed), abs=last_place)
    assert extreme.source == f"U1 ({arrangement})"


@pytest.mark.parametrize(
    ("spans", "quantity", "place", "printed", "arrangement"),
    [(n, *row) for n, rows in POINT.items() for row in rows],
)
def test_midspan_forces_arranged_by_span_give_the_printed_coefficient(
    spans, quantity, place, printed, arrangement
):
    actions = [PointForce("Q", i, SPAN / 2, FORCE) for i in range(spans)]

    extreme = found(governing(spans, actions), quantity, place)

    assert extreme.value / (FORCE * SPAN) == pytest.approx(float(printed), abs=1e-3)
    assert extreme.source == f"U1 ({arrangement})"


def test_position_of_the_largest_moment_is_exact():
    # Two equal spans, the first loaded: at 7/16 of the span (AISC table 3-23).
    result = governing(2, [uniform("Q", i, SPAN, LOAD) for i in range(2)])

    assert result.members[0].sagging.x == pytest.approx(7 * SPAN / 16, rel=1e-12)
    assert result.members[0].sagging.value == pytest.approx(49 * LOAD * SPAN**2 / 512, rel=1e-12)


def test_stations_of_the_envelope_never_exceed_the_exact_extremes():
    result = governing(4, [uniform("Q", i, SPAN, LOAD) for i in range(4)])

    for member in result.members:
        assert np.max(member.moment_max) <= member.sagging.value * (1 + 1e-12)
        assert np.min(member.moment_min) >= member.hogging.value * (1 + 1e-12)
