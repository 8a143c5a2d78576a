"""Governing effects of lines over a set of combinations and every arrangement they allow."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from analysis_core.effects.arrangements import Arrangements, Part, SpanCases
from analysis_core.effects.extremes import Peaks, together
from analysis_core.effects.factors import FactorTable, factor_table
from analysis_core.effects.fields import fields
from analysis_core.effects.sampling import both
from analysis_core.effects.sweep import Swept, sweep
from analysis_core.model import Combination, Line
from analysis_core.results import (
    Extreme,
    LineEnvelope,
    LineSolution,
    MemberEnvelope,
    ReactionEnvelope,
)

Floats = NDArray[np.float64]


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
    for table, members in tables(lines, chosen, arrangements):
        batch = [lines[i] for i in members]
        ordered = [in_order(solutions[i], lines[i].cases) for i in members]
        by_member = _member_envelopes(batch, ordered, table, count)
        by_joint = _reactions(batch, ordered, table)
        for i, found, reactions in zip(members, by_member, by_joint, strict=True):
            out[i] = LineEnvelope(limit_state, found, reactions)
    return [envelope for envelope in out if envelope is not None]


def span_numbers(line: Line) -> tuple[int, ...]:
    """Return the numbers of the spans of a line, left to right; overhangs count."""
    return tuple(sorted({m.span for m in line.members if m.span is not None}))


def tables(
    lines: Sequence[SpanCases], combinations: Sequence[Combination], arrangements: Arrangements
) -> list[tuple[FactorTable, list[int]]]:
    """Return each table of factors with the numbers of the lines that it serves."""
    out: dict[object, tuple[FactorTable, list[int]]] = {}
    for i, line in enumerate(lines):
        numbers = span_numbers(line.line) if arrangements.listed else ()
        spans = [p.span for p in line.parts] if arrangements.listed else ()
        key = (numbers, tuple(spans), tuple((p.case, bool(p.place)) for p in line.parts))
        if key not in out:
            table = factor_table(combinations, line.parts, arrangements, numbers)
            out[key] = table, []
        out[key][1].append(i)
    return list(out.values())


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


@dataclass(frozen=True, slots=True, eq=False)
class _Named:
    """One effect of a block: envelope at the stations (B, G) and the extremes both ways."""

    top: Floats
    bottom: Floats
    highest: list[Extreme]
    lowest: list[Extreme]


def _member_envelopes(
    batch: Sequence[SpanCases],
    solutions: Sequence[LineSolution],
    table: FactorTable,
    count: int,
) -> list[tuple[MemberEnvelope, ...]]:
    lines = [spans.line for spans in batch]
    out: list[list[MemberEnvelope | None]] = [[None] * len(line.members) for line in lines]
    for block in fields(lines, solutions):
        swept = sweep(block, table, count)
        of_lines = block.line.tolist()
        parts = [batch[i].parts for i in of_lines]
        effects = (swept.moment, swept.shear, swept.deflection)
        moment, shear, deflection = _named(effects, table, parts)
        places = _settled(np.linspace(0.0, 1.0, count)[:, None] * block.length)
        numbers = zip(of_lines, block.member.tolist(), strict=True)
        for b, (i, m) in enumerate(numbers):
            out[i][m] = _member(m, b, places[b], moment, shear, deflection)
    return [tuple(m for m in members if m is not None) for members in out]


def _named(
    effects: Sequence[Swept], table: FactorTable, parts: Sequence[tuple[Part, ...]]
) -> list[_Named]:
    """Effects of the same members, their extremes named together."""
    every = [own for _ in effects for own in parts]
    highest = named_extremes(together([e.highest for e in effects]), table, every, largest=True)
    lowest = named_extremes(together([e.lowest for e in effects]), table, every, largest=False)
    size = len(parts)
    return [
        _Named(
            top=_settled(effect.top),
            bottom=_settled(effect.bottom),
            highest=highest[i * size : (i + 1) * size],
            lowest=lowest[i * size : (i + 1) * size],
        )
        for i, effect in enumerate(effects)
    ]


def _settled(values: Floats) -> Floats:
    """Values (G, B) as (B, G), read-only."""
    out = np.ascontiguousarray(values.T)
    out.flags.writeable = False
    return out


def _member(
    number: int, b: int, x: Floats, moment: _Named, shear: _Named, deflection: _Named
) -> MemberEnvelope:
    tops, bottoms = moment.top[b], moment.bottom[b]
    return MemberEnvelope(
        member=number,
        sagging=moment.highest[b],
        hogging=moment.lowest[b],
        shear_max=shear.highest[b],
        shear_min=shear.lowest[b],
        deflection_down=deflection.highest[b],
        deflection_up=deflection.lowest[b],
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


def named_extremes(
    peaks: Peaks, table: FactorTable, parts: Sequence[tuple[Part, ...]], *, largest: bool
) -> list[Extreme]:
    """Return the extremes of B members; ``parts`` are those of the line that each belongs to."""
    sources = table.sources(peaks.row, peaks.contributions, parts, largest=largest)
    return list(map(Extreme, peaks.value.tolist(), peaks.x.tolist(), sources))


def _reactions(
    batch: Sequence[SpanCases], solutions: Sequence[LineSolution], table: FactorTable
) -> list[tuple[ReactionEnvelope, ...]]:
    values = np.concatenate([s.reactions for s in solutions], axis=1)
    joints = [(joint, spans.parts) for spans in batch for joint in spans.line.joints]
    chosen = [j for j, (joint, _) in enumerate(joints) if joint.support is not None]
    flat = values[:, chosen][..., [1, 0, 2]].reshape(len(values), -1)  # (C, joints * 3)
    x = np.repeat([joints[j][0].x for j in chosen], 3)
    parts = [joints[j][1] for j in chosen for _ in range(3)]
    high, low = both(flat[None], table)
    acting = np.flatnonzero(flat.any(axis=0))
    none = Extreme(0.0)
    extremes = []
    for rows, pick in ((high[0], np.argmax), (low[0], np.argmin)):
        row = pick(rows, axis=0)
        found = np.take_along_axis(rows, row[None], 0)[0]
        peaks = Peaks(found[acting], x[acting], row[acting], flat[:, acting])
        own = [parts[i] for i in acting.tolist()]
        named = [none] * len(parts)
        for i, extreme in zip(
            acting.tolist(),
            named_extremes(peaks, table, own, largest=pick is np.argmax),
            strict=True,
        ):
            named[i] = extreme
        extremes.append(named)
    top, bottom = extremes
    made = iter(
        ReactionEnvelope(
            joints[j][0].id, *(e for d in range(3) for e in (top[3 * i + d], bottom[3 * i + d]))
        )
        for i, j in enumerate(chosen)
    )
    return [
        tuple(next(made) for joint in spans.line.joints if joint.support is not None)
        for spans in batch
    ]
