"""The states behind the extremes: a combination in the arrangement that governs, as factors.

An envelope says what is largest; a check of stability and a distribution by hand need moments
that occur together.  A state is one: a factor for each part of the cases.
"""

from __future__ import annotations

from collections.abc import Hashable, Sequence
from dataclasses import dataclass, replace
from itertools import zip_longest

import numpy as np
from numpy.typing import NDArray

from analysis_core.effects.arrangements import Arrangements, SpanCases
from analysis_core.effects.combinations import factored
from analysis_core.effects.envelopes import span_numbers
from analysis_core.effects.factors import FactorTable, factor_table
from analysis_core.effects.stations import stations
from analysis_core.model import Action, Combination, DistributedForce, Line, PointForce
from analysis_core.results import Extreme, LineEnvelope, LineSolution, Stations

Floats = NDArray[np.float64]

_COUNT = 41
_NOTHING = 1e-9  # of the largest effect: an end that carries no moment has no governing state


@dataclass(frozen=True, slots=True)
class State:
    """Factors by the name of a part; ``source`` as the envelope names it."""

    source: str
    factors: tuple[tuple[str, float], ...]
    effects: tuple[str, ...] = ()
    """What it governs: "sagging of span 2"."""


def governing_states(
    spans: SpanCases,
    solution: LineSolution,
    combinations: Sequence[Combination],
    arrangements: Arrangements,
    envelope: LineEnvelope,
) -> tuple[State, ...]:
    """Return the states behind the extremes of ``envelope``, each once.

    ``combinations`` are those of its limit state; ``solution`` holds the parts of ``spans``.
    """
    line = spans.line
    table = factor_table(combinations, spans.parts, arrangements, span_numbers(line))
    at = stations(line, solution, _COUNT)
    found: dict[tuple[str, tuple[float, ...]], State] = {}
    for member in envelope.members:
        name = _name(line, member.member)
        for effect, extreme, largest, values in (
            ("sagging", member.sagging, True, at.moment),
            ("hogging", member.hogging, False, at.moment),
            ("shear", member.shear_max, True, at.shear),
            ("shear", member.shear_min, False, at.shear),
        ):
            if not extreme.source or abs(extreme.value) <= _NOTHING * np.abs(values).max():
                continue
            if effect != "shear" and (extreme.value > 0.0) is not largest:
                continue  # a span that never hogs has no governing hogging
            index = int(np.argmin(np.abs(at.x[member.member] - extreme.x)))
            parts = values[:, member.member, index]
            state = _state(table, extreme, parts, largest=largest)
            if state is None:
                continue
            key = state.source, tuple(f for _, f in state.factors)
            known = found.get(key, state)
            found[key] = replace(known, effects=(*known.effects, f"{effect} of {name}"))
    return tuple(found.values())


def state_line(line: Line, state: State, *, case: str) -> Line:
    """Return the line of the parts under the factored actions of a state, as one case.

    Forces that stand on the same stretch or at the same place are added up.
    """
    factors = dict(state.factors)
    acting = [
        factored(action, factors[action.case], case=case)
        for action in line.actions
        if factors.get(action.case)
    ]
    summed: dict[Hashable, Action] = {}
    for action in acting:
        key: Hashable = action
        if isinstance(action, DistributedForce):
            key = action.member, action.start, action.end
        elif isinstance(action, PointForce):
            key = action.member, action.position
        known = summed.get(key)
        summed[key] = action if known is None else _sum(known, action)
    return replace(line, actions=tuple(summed.values()))


def state_stations(solution: LineSolution, states: Sequence[State], count: int = 41) -> Stations:
    """Return the effects of states at stations; ``solution`` holds the parts."""
    combined = [Combination(s.source, "strength", dict(s.factors)) for s in states]
    at = stations(solution.line, solution, count)
    factors = np.array([[c.factors.get(p, 0.0) for p in solution.cases] for c in combined])
    factors = factors.reshape(len(combined), len(solution.cases))
    moment, shear, deflection = (
        np.tensordot(factors, values, axes=1) for values in (at.moment, at.shear, at.deflection)
    )
    return Stations(tuple(c.name for c in combined), at.x, moment, shear, deflection)


def _sum(one: Action, other: Action) -> Action:
    """Add two actions of one kind at one place."""
    if isinstance(one, DistributedForce) and isinstance(other, DistributedForce):
        return replace(
            one,
            transverse=_added(one.transverse, other.transverse),
            axial=_added(one.axial, other.axial),
            source="",
        )
    assert isinstance(one, PointForce)
    assert isinstance(other, PointForce)
    return replace(
        one,
        transverse=one.transverse + other.transverse,
        axial=one.axial + other.axial,
        source="",
    )


def _added(one: tuple[float, ...], other: tuple[float, ...]) -> tuple[float, ...]:
    return tuple(a + b for a, b in zip_longest(one, other, fillvalue=0.0))


def _state(table: FactorTable, extreme: Extreme, parts: Floats, *, largest: bool) -> State | None:
    """Of the rows that the source names, the one whose sum is the extreme one."""
    sign = 1.0 if largest else -1.0
    best: tuple[float, tuple[float, ...]] | None = None
    for row, name in enumerate(table.names):
        if extreme.source != name and not extreme.source.startswith(f"{name} ("):
            continue
        low, high = table.low[row], table.high[row]
        factors = np.where(sign * parts * high > sign * parts * low, high, low)
        factors = np.where(parts == 0.0, high, factors)
        value = sign * float(factors @ parts)
        if best is None or value > best[0]:
            best = value, tuple(float(f) for f in factors)
    if best is None:
        return None
    names = (part.name for part in table.parts)
    return State(extreme.source, tuple(zip(names, best[1], strict=True)))


def _name(line: Line, member: int) -> str:
    found = line.members[member]
    if found.span is not None:
        return f"span {found.span}"
    return f"{'leg' if found.role == 'leg' else 'member'} {member}"
