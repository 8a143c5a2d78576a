"""Members cut into segments along which every action and the rigidity are one polynomial.

The cuts of a member are the same for all its cases: where a piece begins, where a distributed
force or an imposed curvature begins or ends, and where a force or couple stands.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from analysis_core.effects.flexibility import Part, parts
from analysis_core.model import (
    DistributedForce,
    ImposedCurvature,
    Line,
    Member,
    MemberAction,
    PointForce,
    PointMoment,
)

Floats = NDArray[np.float64]

_SAME_PLACE = 1e-9  # of the member's length


@dataclass(frozen=True, slots=True)
class Row:
    """One member of one line with its actions and cuts, before it joins others in a block."""

    line: int
    member: Member
    actions: tuple[MemberAction, ...]
    cuts: tuple[float, ...]
    parts: tuple[Part, ...]
    shape: tuple[int, int, int, int]
    """Number of segments, and of coefficients: of the load, of 1/EI and of 1/GA."""


@dataclass(frozen=True, slots=True, eq=False)
class Block:
    """B rows alike in shape, for C cases; K segments, along each t runs from 0 to 1.

    cuts (K+1, B) m; load (D, K, C, B) N/m in powers of t; force and couple (K+1, C, B) N and N·m
    at the cuts; curvature (K, C, B) 1/m; bending (R, K, B) 1/(N·m²); shear (S, K, B) 1/N.
    A row with fewer segments ends in segments of no length.
    """

    rows: tuple[Row, ...]
    cuts: Floats
    load: Floats
    force: Floats
    couple: Floats
    curvature: Floats
    bending: Floats
    shear: Floats


def rows(lines: Sequence[Line]) -> list[Row]:
    """Return a row for every member of every line, in order."""
    out = []
    for index, line in enumerate(lines):
        by_member: list[list[MemberAction]] = [[] for _ in line.members]
        degrees = [1] * len(line.members)
        for action in line.actions:
            if isinstance(action, DistributedForce):
                by_member[action.member].append(action)
                degrees[action.member] = max(degrees[action.member], len(action.transverse))
            elif isinstance(action, PointForce | PointMoment | ImposedCurvature):
                by_member[action.member].append(action)
        for member, actions, degree in zip(line.members, by_member, degrees, strict=True):
            own = parts(member)
            cuts = _cuts(member.length, own, actions)
            bend, shear = (
                max(len(values) for values in each)
                for each in ([p.bending for p in own], [p.shear for p in own])
            )
            shape = len(cuts) - 1, degree, bend, shear
            out.append(Row(index, member, tuple(actions), cuts, own, shape))
    return out


def block(chosen: Sequence[Row], columns: Sequence[dict[str, int]], count: int) -> Block:
    """Return the rows as one block; ``columns`` gives each line's column by case name.

    ``count`` is the number of columns.  Actions of a case without a column are left out: their
    case was not asked for.
    """
    segments, degree, bend, shear = (max(v) for v in zip(*(r.shape for r in chosen), strict=True))
    size = len(chosen)
    out = Block(
        rows=tuple(chosen),
        cuts=np.empty((segments + 1, size)),
        load=np.zeros((degree, segments, count, size)),
        force=np.zeros((segments + 1, count, size)),
        couple=np.zeros((segments + 1, count, size)),
        curvature=np.zeros((segments, count, size)),
        bending=np.zeros((bend, segments, size)),
        shear=np.zeros((shear, segments, size)),
    )
    for b, row in enumerate(chosen):
        own = len(row.cuts) - 1
        out.cuts[: own + 1, b] = row.cuts
        out.cuts[own + 1 :, b] = row.cuts[-1]
        _flexibility(out, b, row)
        column = columns[row.line]
        for action in row.actions:
            if action.case in column:
                _action(out, b, row, action, column[action.case])
    return out


def _cuts(length: float, own: Iterable[Part], actions: Iterable[MemberAction]) -> tuple[float, ...]:
    places = {part.start for part in own}
    for action in actions:
        if isinstance(action, PointForce | PointMoment):
            places.add(action.position)
        else:
            places.update((action.start, action.end))
    slack = _SAME_PLACE * length
    cuts = [0.0]
    if len(places) > 1 or places != {0.0}:
        for place in sorted(places):
            if place > cuts[-1] + slack and place < length - slack:
                cuts.append(place)
    return (*cuts, length)


def _flexibility(out: Block, b: int, row: Row) -> None:
    if len(row.parts) == 1 and len(row.parts[0].bending) == 1 and len(row.parts[0].shear) <= 1:
        out.bending[0, :, b] = row.parts[0].bending[0]
        out.shear[:1, :, b] = row.parts[0].shear[0] if row.parts[0].shear else 0.0
        return
    at = 0
    for k, (low, high) in enumerate(zip(row.cuts, row.cuts[1:], strict=False)):
        middle = 0.5 * (low + high)
        while at + 1 < len(row.parts) and middle > row.parts[at].end:
            at += 1
        bending, shear = row.parts[at].over(low, high)
        out.bending[: len(bending), k, b] = bending
        out.shear[: len(shear), k, b] = shear


def _action(out: Block, b: int, row: Row, action: MemberAction, c: int) -> None:
    own = len(row.cuts) - 1
    if isinstance(action, DistributedForce):
        whole = action.end - action.start > 0.5 * row.cuts[-1]
        if own == 1 and len(action.transverse) == 1 and whole:
            out.load[0, 0, c, b] += action.transverse[0]
            return
        first, last = _segment(row, action.start), _segment(row, action.end)
        for k in range(first, last):
            low, width = row.cuts[k], row.cuts[k + 1] - row.cuts[k]
            for d, value in enumerate(_shifted(action.transverse, low - action.start, width)):
                out.load[d, k, c, b] += value
    elif isinstance(action, ImposedCurvature):
        first, last = _segment(row, action.start), _segment(row, action.end)
        out.curvature[first:last, c, b] += action.curvature
    else:
        cut = _segment(row, action.position)
        # A force at the very end belongs after the segments of no length.
        cut = len(out.cuts) - 1 if cut == own else cut
        if isinstance(action, PointForce):
            out.force[cut, c, b] += action.transverse
        else:
            out.couple[cut, c, b] += action.moment


def _segment(row: Row, place: float) -> int:
    """The number of the cut at ``place``, which is one of the row's own."""
    if place <= 0.0:
        return 0
    if place >= row.cuts[-1]:
        return len(row.cuts) - 1
    return min(range(len(row.cuts)), key=lambda k: abs(row.cuts[k] - place))


def _shifted(powers: tuple[float, ...], offset: float, width: float) -> list[float]:
    """The polynomial in v as one in t, where v = offset + width*t."""
    if len(powers) <= 1:
        return list(powers)
    return [
        math.fsum(a * math.comb(i, d) * offset ** (i - d) for i, a in enumerate(powers) if i >= d)
        * width**d
        for d in range(len(powers))
    ]
