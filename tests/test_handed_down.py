"""Reactions handed down part by part: where they stand on the line that carries them counts."""

import pytest

from analysis_core import rules as rule_sets
from analysis_core.effects.arrangements import Arrangements, PatternRule
from analysis_core.model import (
    RIGID,
    Case,
    Combination,
    DistributedForce,
    Joint,
    Line,
    LineModel,
    Member,
    Piece,
    Support,
    Transfer,
)
from analysis_core.settings import Settings
from analysis_core.solving.lines import Rules, solve_lines

ALTERNATE = Arrangements("listed", {"Q": 0.0}, listed=(PatternRule(("Q",), ("alternate",)),))
EVERY = Arrangements("every", {"Q": 0.0})
U = Combination("U", "strength", {"Q": 1.5}, favourable={"Q": 0.0})


def line(mark, spans, *actions):
    places = [sum(spans[:i]) for i in range(len(spans) + 1)]
    joints = tuple(Joint(i, x, 0.0, support=Support(RIGID)) for i, x in enumerate(places))
    members = tuple(
        Member(i, i, i + 1, (Piece(length, (1e7,)),), span=i + 1) for i, length in enumerate(spans)
    )
    return Line(mark, joints, members, actions)


def solved(lines, transfers, arrangements):
    model = LineModel(tuple(lines), (Case("Q", "imposed"),), (U,), tuple(transfers))
    rules = Rules((U,), arrangements, "test", rule_sets.load("en-1990"))
    results, findings = solve_lines(model, rules, Settings(), lambda step, part: None)
    assert findings == []
    return {r.line.mark: r.envelopes["strength"] for r in results}


@pytest.mark.parametrize("arrangements", [ALTERNATE, EVERY])
def test_a_joist_between_girders_stands_on_another_span_of_each(arrangements):
    # It bears on span 2 of A and on span 1 of B; with B out of the model A must not change.
    joist = line("J", [4.0], DistributedForce("Q", 0, 0.0, 4.0, (10e3,)))
    own = DistributedForce("Q", 0, 0.0, 6.0, (7e3,))
    a, b = line("A", [6.0, 6.0, 6.0], own), line("B", [6.0, 7.0])
    on_a, on_b = Transfer("J", 0, "A", 1, 3.0), Transfer("J", 1, "B", 0, 2.0)

    both = solved([joist, a, b], [on_a, on_b], arrangements)
    alone = solved([joist, a], [on_a], arrangements) | solved([joist, b], [on_b], arrangements)

    for mark in "AB":
        found, wanted = (
            [(m.sagging, m.hogging) for m in each[mark].members] for each in (both, alone)
        )
        assert found == wanted
        assert both[mark].reactions == alone[mark].reactions
    # Span 2 of A sags most without the load of span 1: 3-moment equation, 20 kN amid 6 m of
    # three equal spans gives support moments of -3PL/40 = -9 kN·m, and 30 - 9 = 21 kN·m in between.
    assert both["A"].members[1].sagging.value == pytest.approx(1.5 * 21e3)
