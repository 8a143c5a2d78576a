"""Members cut into segments along which every action and the rigidity are one polynomial.

The cuts of a member are the same for all its cases: where a piece begins, where a distributed
force or an imposed curvature begins or ends, and where a force or couple stands.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from typing import NamedTuple

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


class Row(NamedTuple):
    """One member of one line with its actions and cuts, before it joins others in a block.

    ``shape``: number of segments, and of coefficients: of the load, of 1/EI and of 1/GA.
    ``bending`` is 1/EI where that is all there is to its flexibility, else ``parts`` hold it.
    ``plain``: no action but uniform ones over the whole member.
    """

    line: int
    member: Member
    actions: Sequence[MemberAction]
    cuts: tuple[float, ...]
    shape: tuple[int, int, int, int]
    bending: float
    parts: tuple[Part, ...]
    plain: bool


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
        for action in line.actions:
            if isinstance(action, DistributedForce | PointForce | PointMoment | ImposedCurvature):
                by_member[action.member].append(action)
        for member, actions in zip(line.members, by_member, strict=True):
            out.append(_row(index, member, actions))
    return out


def _row(index: int, member: Member, actions: Sequence[MemberAction]) -> Row:
    piece = member.pieces[0]
    if len(member.pieces) == 1 and len(piece.flexural) == 1 and piece.shear is None:
        own: tuple[Part, ...] = ()
        length = piece.length
        bending = piece.flexural[0] ** -piece.power
        bend, shear = 1, 0
    else:
        own = parts(member)
        length, bending = member.length, 0.0
        bend = max(len(part.bending) for part in own)
        shear = max(len(part.shear) for part in own)
    slack = _SAME_PLACE * length
    if (
        all(
            isinstance(a, DistributedForce)
            and len(a.transverse) == 1
            and a.start <= slack
            and a.end >= length - slack
            for a in actions
        )
        and len(own) < 2
    ):
        return Row(index, member, actions, (0.0, length), (1, 1, bend, shear), bending, own, True)
    cuts = _cuts(length, own, actions)
    degree = max((len(a.transverse) for a in actions if isinstance(a, DistributedForce)), default=1)
    shape = len(cuts) - 1, max(degree, 1), bend, shear
    return Row(index, member, actions, cuts, shape, bending, own, False)


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
        if row.bending:
            out.bending[0, :, b] = row.bending
        else:
            _flexibility(out, b, row)
        column = columns[row.line]
        if row.plain:
            uniform = out.load[0, 0, :, b]
            for action in row.actions:
                c = column.get(action.case)
                if c is not None:
                    uniform[c] += action.transverse[0]  # type: ignore[union-attr,index]  # plain rows hold uniform forces alone
            continue
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
