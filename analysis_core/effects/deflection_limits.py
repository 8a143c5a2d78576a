"""Deflections of spans measured from their supports, against limits.

Of a span: from the straight line between its two supports.  Of a cantilever: from its root, so
that what the rotation of the root adds is part of it.  Limits are a part of the span, or a length.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from analysis_core.effects.arrangements import Arrangements, SpanCases
from analysis_core.effects.envelopes import in_order, named_extremes, tables
from analysis_core.effects.factors import FactorTable, parts_of
from analysis_core.effects.fields import end_movements, fields
from analysis_core.effects.sweep import sweep_effect
from analysis_core.model import Combination, Line, Member
from analysis_core.results import Extreme, LineSolution

Floats = NDArray[np.float64]

_STATIONS = 21


@dataclass(frozen=True, slots=True)
class Span:
    """One span of a line: its members left to right, its ends, and whether it is a cantilever.

    ``start`` and ``end`` are joints; of a cantilever ``root`` is the supported one.
    """

    number: int
    members: tuple[int, ...]
    start: int
    end: int
    length: float
    cantilever: bool = False
    root: int | None = None


@dataclass(frozen=True, slots=True)
class DeflectionLimit:
    """What the deflection of a span is held against; 0: not checked.

    ``camber`` (m, upwards) is taken off the deflection down.  ``kind`` names the combinations,
    "" all serviceability ones; ``variable_only`` leaves permanent actions out.
    """

    span_ratio: float = 250.0
    cantilever_ratio: float = 125.0
    absolute: float = 0.0
    camber: float = 0.0
    kind: str = ""
    variable_only: bool = False


@dataclass(frozen=True, slots=True)
class SpanDeflection:
    """Largest deflections of a span from its supports, m, and how much of the limit they use.

    ``limit`` in m with ``rule`` in words ("span / 250"); None where nothing is checked.  The
    ``x`` of an extreme is measured from the start of the member named beside it.
    """

    span: Span
    down: Extreme
    down_member: int
    up: Extreme
    up_member: int
    limit: float | None
    rule: str
    utilisation: float | None
    camber: float = 0.0


def spans_of(line: Line) -> tuple[Span, ...]:
    """Return the spans of a line, left to right; legs are no spans."""
    by_number: dict[int, list[Member]] = {}
    for member in line.members:
        if member.span is not None:
            by_number.setdefault(member.span, []).append(member)
    out = []
    for number in sorted(by_number):
        members = sorted(by_number[number], key=lambda m: line.joints[m.start].x)
        start, end = members[0].start, members[-1].end
        held = [j for j in (start, end) if _held(line, j)]
        out.append(
            Span(
                number,
                tuple(m.id for m in members),
                start,
                end,
                float(sum(m.length for m in members)),
                cantilever=len(held) == 1,
                root=held[0] if len(held) == 1 else None,
            )
        )
    return tuple(out)


def span_deflections(
    lines: Sequence[SpanCases],
    solutions: Sequence[LineSolution],
    combinations: Sequence[Combination],
    limit: DeflectionLimit,
    *,
    permanent: Sequence[str] = (),
    arrangements: Arrangements | None = None,
) -> list[tuple[SpanDeflection, ...]]:
    """Return the largest deflections of every span of every line, exact, against one limit.

    ``solutions`` hold the parts of ``lines``; ``permanent`` are the names of permanent cases,
    needed where only variable actions count.  Raises ValueError where no serviceability
    combination is of the limit's kind.
    """
    chosen = _chosen(combinations, limit, permanent)
    out: list[tuple[SpanDeflection, ...]] = [()] * len(lines)
    for table, members in tables(lines, chosen, arrangements or Arrangements()):
        batch = [lines[i] for i in members]
        ordered = [in_order(solutions[i], lines[i].cases) for i in members]
        for i, found in zip(members, _extremes(batch, ordered, table), strict=True):
            line = lines[i].line
            out[i] = tuple(_against(span, found, limit) for span in spans_of(line))
    return out


def _chosen(
    combinations: Sequence[Combination], limit: DeflectionLimit, permanent: Sequence[str]
) -> list[Combination]:
    chosen = [
        c for c in combinations if c.limit_state == "serviceability" and limit.kind in ("", c.kind)
    ]
    if not chosen:
        known = sorted({c.kind for c in combinations if c.limit_state == "serviceability"})
        raise ValueError(
            f"no serviceability combination is of the kind '{limit.kind}' "
            f"(known: {', '.join(known) or 'none'})"
        )
    if not limit.variable_only:
        return chosen
    return [
        replace(c, factors={k: v for k, v in c.factors.items() if k not in permanent})
        for c in chosen
    ]


def _extremes(
    batch: Sequence[SpanCases], solutions: Sequence[LineSolution], table: FactorTable
) -> list[dict[int, tuple[Extreme, Extreme]]]:
    """Deflection down and up of every member of every line, from the supports of its span."""
    lines = [spans.line for spans in batch]
    moved = end_movements(lines, solutions) - _of_supports(lines, solutions)
    out: list[dict[int, tuple[Extreme, Extreme]]] = [{} for _ in lines]
    of_lines = parts_of(batch)
    for block in fields(lines, solutions, movements=moved):
        swept = sweep_effect(block, block.deflection, table, _STATIONS)
        parts = of_lines.taken(block.line)
        down = named_extremes(swept.highest, table, parts, largest=True)
        up = named_extremes(swept.lowest, table, parts, largest=False)
        numbers = zip(block.line.tolist(), block.member.tolist(), strict=True)
        for b, (i, m) in enumerate(numbers):
            out[i][m] = down[b], up[b]
    return out


def _of_supports(lines: Sequence[Line], solutions: Sequence[LineSolution]) -> Floats:
    """What the supports' own movements give at both ends of every member: (C, members, 2)."""
    out = []
    for line, solution in zip(lines, solutions, strict=True):
        moved = np.zeros((len(solution.cases), len(line.members), 2))
        for span in spans_of(line):
            for m in span.members:
                moved[:, m] = _of_span(line, solution, span, line.members[m])
        out.append(moved)
    return np.concatenate(out, axis=1)


def _of_span(line: Line, solution: LineSolution, span: Span, member: Member) -> Floats:
    cos, sin = line.direction(member)

    def across(joint: int) -> Floats:
        right, down = (solution.displacements[:, joint, i] for i in (0, 1))
        return np.asarray(right * sin + down * cos)

    if span.root is not None:
        return np.asarray(across(span.root)[:, None])
    low, high = line.joints[span.start].x, line.joints[span.end].x
    places = np.array([line.joints[j].x for j in (member.start, member.end)])
    if high == low:  # upright
        return np.asarray(across(span.start)[:, None])
    part = (places - low) / (high - low)
    return np.asarray((1.0 - part) * across(span.start)[:, None] + part * across(span.end)[:, None])


def _against(
    span: Span, found: Mapping[int, tuple[Extreme, Extreme]], limit: DeflectionLimit
) -> SpanDeflection:
    down_member = max(span.members, key=lambda m: found[m][0].value)
    up_member = min(span.members, key=lambda m: found[m][1].value)
    down, up = found[down_member][0], found[up_member][1]
    allowed, rule = _allowed(span, limit)
    used = None
    if allowed is not None:
        used = max(down.value - limit.camber, -up.value, 0.0) / allowed
    return SpanDeflection(span, down, down_member, up, up_member, allowed, rule, used, limit.camber)


def _allowed(span: Span, limit: DeflectionLimit) -> tuple[float | None, str]:
    ratio = limit.cantilever_ratio if span.cantilever else limit.span_ratio
    found = []
    if ratio > 0.0:
        what = "cantilever" if span.cantilever else "span"
        found.append((span.length / ratio, f"{what} / {ratio:g}"))
    if limit.absolute > 0.0:
        found.append((limit.absolute, "stated length"))
    return min(found) if found else (None, "")


def _held(line: Line, joint: int) -> bool:
    """Whether a joint is supported, or other members go on from it."""
    support = line.joints[joint].support
    if support is not None and support.vertical > 0.0:
        return True
    return any(m.role == "leg" and joint in (m.start, m.end) for m in line.members)
