"""Governing effects of lines over a set of combinations and every arrangement they allow."""

from __future__ import annotations

import itertools
from collections.abc import Callable, Mapping, Sequence
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from analysis_core.effects.arrangements import Arrangements, SpanCases
from analysis_core.effects.extremes import Peaks
from analysis_core.effects.factors import FactorTable, PartsOf, factor_table, parts_of
from analysis_core.effects.fields import fields
from analysis_core.effects.sampling import both
from analysis_core.effects.sweep import Swept, sweep
from analysis_core.model import Combination, Line
from analysis_core.results import (
    EffectEnvelope,
    Extremes,
    LineEnvelope,
    LineSolution,
    MemberEnvelopes,
    MemberRows,
    OnRequest,
    ReactionEnvelopes,
    ReactionRows,
)

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]


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
    found = envelopes_by_state(lines, solutions, chosen, arrangements=arrangements, count=count)
    return [states[limit_state] for states in found]


def envelopes_by_state(
    lines: Sequence[SpanCases],
    solutions: Sequence[LineSolution],
    combinations: Sequence[Combination],
    *,
    arrangements: Arrangements | None = None,
    count: int = 21,
) -> list[dict[str, LineEnvelope]]:
    """Return ``envelopes`` of each line for every limit state that the combinations are of."""
    by_state: dict[str, list[Combination]] = {}
    for combination in combinations:
        by_state.setdefault(combination.limit_state, []).append(combination)
    out: list[dict[str, LineEnvelope]] = [{} for _ in lines]
    for members in _alike(lines, arrangements or Arrangements()):
        batch = [lines[i] for i in members]
        ordered = [in_order(solutions[i], lines[i].cases) for i in members]
        tables = {
            state: _table(chosen, batch[0], arrangements or Arrangements())
            for state, chosen in by_state.items()
        }
        by_member = _member_envelopes(batch, ordered, tables, count)
        for state, table in tables.items():
            by_joint = _reactions(batch, ordered, table)
            for i, found, reactions in zip(members, by_member[state], by_joint, strict=True):
                out[i][state] = LineEnvelope(state, found, reactions)
    return out


def span_numbers(line: Line) -> tuple[int, ...]:
    """Return the numbers of the spans of a line, left to right; overhangs count."""
    return tuple(sorted({m.span for m in line.members if m.span is not None}))


def tables(
    lines: Sequence[SpanCases], combinations: Sequence[Combination], arrangements: Arrangements
) -> list[tuple[FactorTable, list[int]]]:
    """Return each table of factors with the numbers of the lines that it serves."""
    return [
        (_table(combinations, lines[members[0]], arrangements), members)
        for members in _alike(lines, arrangements)
    ]


def _alike(lines: Sequence[SpanCases], arrangements: Arrangements) -> list[list[int]]:
    """Numbers of the lines that one table of factors serves, whatever the combinations."""
    kinds: dict[int, tuple[object, ...]] = {}  # many lines share one tuple of parts
    out: dict[object, list[int]] = {}
    for i, line in enumerate(lines):
        parts = line.parts
        kind = kinds.get(id(parts))
        if kind is None:
            spans = tuple(p.span for p in parts) if arrangements.listed else ()
            kind = kinds[id(parts)] = (spans, tuple((p.case, bool(p.place)) for p in parts))
        numbers = span_numbers(line.line) if arrangements.listed else ()
        out.setdefault((numbers, kind), []).append(i)
    return list(out.values())


def _table(
    combinations: Sequence[Combination], line: SpanCases, arrangements: Arrangements
) -> FactorTable:
    numbers = span_numbers(line.line) if arrangements.listed else ()
    return factor_table(combinations, line.parts, arrangements, numbers)


def in_order(solution: LineSolution, cases: Sequence[str]) -> LineSolution:
    """Return the solution with exactly these cases.  Raises ValueError where it lacks one."""
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


def _member_envelopes(
    batch: Sequence[SpanCases],
    solutions: Sequence[LineSolution],
    tables: Mapping[str, FactorTable],
    count: int,
) -> dict[str, list[MemberRows]]:
    """The envelopes of the members of each line by limit state."""
    lines = [spans.line for spans in batch]
    first = np.cumsum([0, *(len(line.members) for line in lines)])
    # Of every member of all lines in order: its block, and its number in that.
    where = np.empty((first[-1], 2), dtype=np.int64)
    found: dict[str, list[MemberEnvelopes]] = {state: [] for state in tables}
    of_lines = parts_of(batch)
    for number, block in enumerate(fields(lines, solutions)):
        size = len(block.line)
        where[first[block.line] + block.member] = np.column_stack(
            [np.full(size, number), np.arange(size)]
        )
        parts = of_lines.taken(block.line)
        x = _settled(np.linspace(0.0, 1.0, count)[:, None] * block.length)
        for state, table in tables.items():
            swept = sweep(block, table, count)
            effects = _named((swept.moment, swept.shear, swept.deflection), table, parts)
            found[state].append(MemberEnvelopes(block.member, x, *effects))
    places = list(map(tuple, where.tolist()))
    return {
        state: [
            MemberRows(blocks, places, len(line.members), low)
            for line, low in zip(lines, first.tolist(), strict=False)
        ]
        for state, blocks in found.items()
    }


def _named(effects: Sequence[Swept], table: FactorTable, parts: PartsOf) -> list[EffectEnvelope]:
    return [
        EffectEnvelope(
            highest=named_extremes(effect.highest, table, parts, largest=True),
            lowest=named_extremes(effect.lowest, table, parts, largest=False),
            top=_settled(effect.top),
            bottom=_settled(effect.bottom),
        )
        for effect in effects
    ]


def _settled(values: Floats) -> Floats:
    """Values (G, B) as (B, G), read-only."""
    out = np.ascontiguousarray(values.T)
    out.flags.writeable = False
    return out


def named_extremes(peaks: Peaks, table: FactorTable, parts: PartsOf, *, largest: bool) -> Extremes:
    """Return the extremes of B members; ``parts`` are those of the line that each belongs to."""
    sources = table.sources(peaks.row, peaks.contributions, parts, largest=largest)
    return Extremes(peaks.value, peaks.x, sources)


def _reactions(
    batch: Sequence[SpanCases], solutions: Sequence[LineSolution], table: FactorTable
) -> list[ReactionRows]:
    values = np.concatenate([s.reactions for s in solutions], axis=1)
    supported = [[j for j in spans.line.joints if j.support is not None] for spans in batch]
    first = np.cumsum([0, *(len(spans.line.joints) for spans in batch)]).tolist()
    chosen = [low + j.id for low, own in zip(first, supported, strict=False) for j in own]
    flat = values[:, chosen][..., [1, 0, 2]].reshape(len(values), -1)  # (C, supports * 3)
    x = np.repeat([j.x for own in supported for j in own], 3)
    owner = np.repeat(np.arange(len(batch)), [3 * len(own) for own in supported])
    parts = parts_of(batch).taken(owner)
    high, low = both(flat[None], table)
    found = ReactionEnvelopes(
        np.array([j.id for own in supported for j in own], dtype=np.int64),
        _where_acting(high[0], np.argmax, flat, x, table, parts),
        _where_acting(low[0], np.argmin, flat, x, table, parts),
    )
    counts = [len(own) for own in supported]
    return [
        ReactionRows(found, count, low)
        for count, low in zip(counts, itertools.accumulate(counts, initial=0), strict=False)
    ]


def _where_acting(
    rows: Floats,
    pick: Callable[..., Integers],
    flat: Floats,
    x: Floats,
    table: FactorTable,
    parts: PartsOf,
) -> Extremes:
    """Of values (N, R) by row of the table the one that ``pick`` picks; nothing where none acts."""
    acting = flat.any(axis=0)
    row = pick(rows, axis=0)
    value = np.where(acting, np.take_along_axis(rows, row[None], 0)[0], 0.0)
    words = table.sources(row, flat, parts, largest=pick is np.argmax)
    sources = OnRequest(lambda r: words[r] if acting[r] else "", len(acting))
    return Extremes(value, np.where(acting, x, 0.0), sources)
