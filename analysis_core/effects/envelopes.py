"""Governing effects of lines over a set of combinations and every arrangement they allow."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from analysis_core.effects.arrangements import Arrangements, SpanCases
from analysis_core.effects.extremes import Peaks, largest
from analysis_core.effects.factors import FactorTable, factor_table
from analysis_core.effects.fields import Fields, fields, sample
from analysis_core.effects.sampling import both, sampled
from analysis_core.model import Combination, Line
from analysis_core.results import (
    Extreme,
    LineEnvelope,
    LineSolution,
    MemberEnvelope,
    ReactionEnvelope,
)

Floats = NDArray[np.float64]

_SAMPLES = 9  # per segment, where a member has several
_NOTHING = 1e-12  # of the largest value on the member: less than this is rounding


def envelope(
    spans: SpanCases,
    solution: LineSolution,
    combinations: Sequence[Combination],
    *,
    limit_state: str,
    arrangements: Arrangements | None = None,
    count: int = 21,
) -> LineEnvelope:
    """Return the governing effects of one line; see ``envelopes``."""
    (only,) = envelopes(
        [spans],
        [solution],
        combinations,
        limit_state=limit_state,
        arrangements=arrangements,
        count=count,
    )
    return only


def envelopes(
    lines: Sequence[SpanCases],
    solutions: Sequence[LineSolution],
    combinations: Sequence[Combination],
    *,
    limit_state: str,
    arrangements: Arrangements | None = None,
    count: int = 21,
) -> list[LineEnvelope]:
    """Return the governing effects of each line over the combinations of ``limit_state``.

    ``solutions`` hold the parts of ``lines`` (their ``cases``).  Extremes are exact, with the place
    and with what governs; the arrays are the envelope at ``count`` stations per member.  Raises
    ValueError where a solution lacks a part or no combination is of the limit state.
    """
    chosen = [c for c in combinations if c.limit_state == limit_state]
    if not chosen:
        raise ValueError(f"no combination is of the limit state '{limit_state}'")
    arrangements = arrangements or Arrangements()
    out: list[LineEnvelope | None] = [None] * len(lines)
    for table, members in _alike(lines, chosen, arrangements):
        batch = [lines[i].line for i in members]
        ordered = [_ordered(solutions[i], lines[i].cases) for i in members]
        by_line = _member_envelopes(batch, ordered, [lines[i] for i in members], table, count)
        for i, solution, found in zip(members, ordered, by_line, strict=True):
            own = replace(table, parts=lines[i].parts)
            out[i] = LineEnvelope(limit_state, found, _reactions(solution, own))
    return [envelope for envelope in out if envelope is not None]


def span_numbers(line: Line) -> tuple[int, ...]:
    """Return the numbers of the spans of a line, left to right; overhangs count."""
    return tuple(sorted({m.span for m in line.members if m.span is not None}))


def _alike(
    lines: Sequence[SpanCases], combinations: Sequence[Combination], arrangements: Arrangements
) -> list[tuple[FactorTable, list[int]]]:
    """Lines whose parts take the same factors, so that one table serves them all."""
    tables: dict[object, tuple[FactorTable, list[int]]] = {}
    for i, line in enumerate(lines):
        numbers = span_numbers(line.line)
        key = (numbers, tuple((p.case, p.span, bool(p.place)) for p in line.parts))
        if key not in tables:
            table = factor_table(combinations, line.parts, arrangements, numbers)
            tables[key] = table, []
        tables[key][1].append(i)
    return list(tables.values())


def _ordered(solution: LineSolution, cases: Sequence[str]) -> LineSolution:
    if tuple(solution.cases) == tuple(cases):
        return solution
    missing = [case for case in cases if case not in solution.cases]
    if missing:
        raise ValueError(f"the solution lacks the case '{missing[0]}'")
    index = [solution.cases.index(case) for case in cases]
    return replace(
        solution,
        cases=tuple(cases),
        end_moments=solution.end_moments[index],
        end_shears=solution.end_shears[index],
        axial=solution.axial[index],
        rotations=solution.rotations[index],
        end_rotations=solution.end_rotations[index],
        displacements=solution.displacements[index],
        reactions=solution.reactions[index],
    )


@dataclass(frozen=True, slots=True, eq=False)
class _Effect:
    """One effect of a block: envelope at the stations (G, B) and the peaks both ways."""

    top: Floats
    bottom: Floats
    highest: Peaks
    lowest: Peaks


def _member_envelopes(
    lines: Sequence[Line],
    solutions: Sequence[LineSolution],
    spans: Sequence[SpanCases],
    table: FactorTable,
    count: int,
) -> list[tuple[MemberEnvelope, ...]]:
    out: list[list[MemberEnvelope | None]] = [[None] * len(line.members) for line in lines]
    for block in fields(lines, solutions):
        x = np.linspace(0.0, 1.0, count)[:, None] * block.length
        moment = _effect(block, block.moment, table, x)
        shear = _effect(block, block.shear, table, x)
        deflection = _effect(block, block.deflection, table, x)
        x = x.T.copy()
        for b, (i, m) in enumerate(zip(block.line, block.member, strict=True)):
            own = replace(table, parts=spans[i].parts)
            out[i][m] = _member(int(m), b, x[b], moment, shear, deflection, own)
    return [tuple(m for m in members if m is not None) for members in out]


def _effect(block: Fields, polynomials: Floats, table: FactorTable, x: Floats) -> _Effect:
    single = polynomials.shape[1] == 1 and len(x) >= _SAMPLES
    samples = len(x) if single else _SAMPLES
    taken = sampled(polynomials, table, samples)
    highest = largest(polynomials, block.cuts, table, taken.highest, samples)
    # The least value is the largest of the negative: the same factors lead to it.
    lowest = largest(-polynomials, block.cuts, table, -taken.lowest, samples)
    lowest = replace(lowest, value=-lowest.value, contributions=-lowest.contributions)
    if single:
        top, bottom = taken.top[:, 0], taken.bottom[:, 0]
    else:
        top, bottom = _at_stations(block, polynomials, table, x)
    nothing = _NOTHING * np.maximum(np.abs(highest.value), np.abs(lowest.value))
    for values in (top, bottom, highest.value, lowest.value):
        values[np.abs(values) <= nothing] = 0.0
    return _Effect(_settled(top), _settled(bottom), highest, lowest)


def _at_stations(
    block: Fields, polynomials: Floats, table: FactorTable, x: Floats
) -> tuple[Floats, Floats]:
    """Where a station lies at a cut, both sides count."""
    right, left = (sample(polynomials, block.cuts, x, left=side) for side in (False, True))
    high, low = both(np.concatenate([right, left]), table)
    top, bottom = np.max(high, axis=1), np.min(low, axis=1)
    half = len(x)
    return np.maximum(top[:half], top[half:]), np.minimum(bottom[:half], bottom[half:])


def _settled(values: Floats) -> Floats:
    """Values (G, B) as (B, G), read-only."""
    out = np.ascontiguousarray(values.T)
    out.flags.writeable = False
    return out


def _member(
    number: int,
    b: int,
    x: Floats,
    moment: _Effect,
    shear: _Effect,
    deflection: _Effect,
    table: FactorTable,
) -> MemberEnvelope:
    tops, bottoms = moment.top[b], moment.bottom[b]
    return MemberEnvelope(
        member=number,
        sagging=_extreme(moment.highest, b, table, largest=True),
        hogging=_extreme(moment.lowest, b, table, largest=False),
        shear_max=_extreme(shear.highest, b, table, largest=True),
        shear_min=_extreme(shear.lowest, b, table, largest=False),
        deflection_down=_extreme(deflection.highest, b, table, largest=True),
        deflection_up=_extreme(deflection.lowest, b, table, largest=False),
        start_moment=(float(bottoms[0]), float(tops[0])),
        end_moment=(float(bottoms[-1]), float(tops[-1])),
        x=x,
        moment_max=tops,
        moment_min=bottoms,
        shear_max_at=shear.top[b],
        shear_min_at=shear.bottom[b],
        deflection_max=deflection.top[b],
        deflection_min=deflection.bottom[b],
    )


def _extreme(peaks: Peaks, b: int, table: FactorTable, *, largest: bool) -> Extreme:
    source = table.source(int(peaks.row[b]), peaks.contributions[:, b], largest=largest)
    return Extreme(float(peaks.value[b]), float(peaks.x[b]), source)


def _reactions(solution: LineSolution, table: FactorTable) -> tuple[ReactionEnvelope, ...]:
    out = []
    values = np.moveaxis(solution.reactions, 0, 1)  # (J, C, 3)
    high, low = both(values, table)  # (J, N, 3)
    for joint in solution.line.joints:
        if joint.support is None:
            continue
        found = []
        for d in (1, 0, 2):
            for largest_, rows in ((True, high[joint.id, :, d]), (False, low[joint.id, :, d])):
                row = int(np.argmax(rows) if largest_ else np.argmin(rows))
                source = table.source(row, values[joint.id, :, d], largest=largest_)
                found.append(Extreme(float(rows[row]), joint.x, source))
        out.append(ReactionEnvelope(joint.id, *found))
    return tuple(out)
