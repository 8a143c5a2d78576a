"""Plain beam lines with the same supports in a row, as arrays: members, actions, layout.

Arrays have the member or joint first, then the case, then the line, so that every operation runs
along lines that lie side by side in memory.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.direct import SpanStiffness, prismatic
from analysis_core.distribution.plain_lines import PlainLine

Floats = NDArray[np.float64]
Flags = NDArray[np.bool_]


@dataclass(frozen=True, slots=True)
class Layout:
    """n members in a row: kept, the joints with supports; bars, the members between each two
    (first, one past the last).  ``first`` members overhang at the left, those from ``last`` on at
    the right.
    """

    count: int
    kept: tuple[int, ...]
    bars: tuple[tuple[int, int], ...]

    @property
    def first(self) -> int:
        """The first joint with a support."""
        return self.kept[0]

    @property
    def last(self) -> int:
        """The last joint with a support."""
        return self.kept[-1]


def layout(bare: Sequence[bool]) -> Layout:
    """Return the layout of lines whose joints are bare or supported as given."""
    kept = tuple(joint for joint, empty in enumerate(bare) if not empty)
    return Layout(len(bare) - 1, kept, tuple(pairwise(kept)))


@dataclass(frozen=True, slots=True, eq=False)
class Rows:
    """n members of L lines: (n, L), ``held`` in stiffness (n + 1, L), cosine and sine (L,).

    length m; rigidity N·m² (an equivalent one of special members); stiffness: of each member by
    itself, springs and releases included; total, centre, own: elastic weights as in
    ElasticWeights, ``own`` being spread + slip; near, far, cross: end rotations per end couple of
    the member by itself, rad/(N·m); gives (2, n, L): flexibility of the end springs, ``released``
    (2, n, L) marks releases; hold (L,): the joint that keeps the line from sliding.
    """

    length: Floats
    rigidity: Floats
    stiffness: SpanStiffness
    total: Floats
    centre: Floats
    own: Floats
    near: Floats
    far: Floats
    cross: Floats
    gives: Floats
    released: Flags
    cosine: Floats
    sine: Floats
    hold: NDArray[np.intp]
    special: bool
    lateral: bool


@dataclass(frozen=True, slots=True, eq=False)
class RowActions:
    """Actions on n members and n + 1 joints of L lines in C cases: (n, C, L), (n + 1, C, L).

    moments, rotations, forces (2, n, C, L): as in EndActions; total N, lever N·m, along N:
    resultants; right, down N and couples N·m on joints; settlements m, turns rad of supports;
    None where there are none.
    """

    moments: Floats
    rotations: Floats
    forces: Floats
    total: Floats
    lever: Floats
    along: Floats
    right: Floats | None
    down: Floats | None
    couples: Floats | None
    settlements: Floats | None
    turns: Floats | None


def rows_of(lines: Sequence[PlainLine]) -> Rows:
    """Return the members of lines that all have the same number of them."""
    length = _turned([line.lengths for line in lines])
    rigidity = _turned([line.rigidities for line in lines])
    held = _turned([line.held for line in lines])
    special = any(line.special for line in lines)
    for index, line in enumerate(lines if special else ()):
        for member, own in line.special.items():
            # So that the formulas for prismatic members do no harm.
            rigidity[member, index] = own.weights.length / own.weights.total
    cosine, sine = np.array([line.direction for line in lines]).T
    total = length / rigidity
    third: Floats = total / 3.0
    rows = Rows(
        length=length,
        rigidity=rigidity,
        stiffness=prismatic(length, rigidity, held),
        total=total,
        centre=length / 2.0,
        own=total * length * length / 12.0,
        near=third,
        far=third.copy() if special else third,
        cross=total / -6.0,
        gives=np.zeros((2, *length.shape)) if special else np.zeros((2, 1, 1)),
        released=np.zeros((2, *length.shape), dtype=bool),
        cosine=cosine,
        sine=sine,
        hold=np.array([line.hold for line in lines]),
        special=special,
        lateral=any(line.lateral for line in lines),
    )
    if special:
        _put_special(lines, rows)
    return rows


def _turned(rows: list[list[float]]) -> Floats:
    return np.ascontiguousarray(np.array(rows).T)


def _put_special(lines: Sequence[PlainLine], rows: Rows) -> None:
    stiffness = rows.stiffness
    for index, line in enumerate(lines):
        for member, own in line.special.items():
            at = (member, index)
            ends, weights = own.stiffness, own.weights
            stiffness.near[at], stiffness.far[at] = ends.near, ends.far
            stiffness.carried[at], stiffness.both[at] = ends.carried, ends.both
            rows.total[at], rows.centre[at] = weights.total, weights.centre
            rows.own[at] = weights.spread + weights.slip
            left = weights.centre / weights.length
            right = 1.0 - left
            stretch = (weights.spread + weights.slip) / weights.length**2
            rows.near[at] = weights.total * right * right + stretch
            rows.far[at] = weights.total * left * left + stretch
            rows.cross[at] = stretch - weights.total * left * right
            for end, give in enumerate((own.start_give, own.end_give)):
                if math.isinf(give):
                    rows.released[end, member, index] = True
                else:
                    rows.gives[end, member, index] = give


def actions_on(lines: Sequence[PlainLine], rows: Rows, cases: int) -> RowActions:
    """Return the actions on lines, summed up per member and joint."""
    count, width = rows.length.shape
    shape, joints = (count, cases, width), (count + 1, cases, width)
    intensity = _summed((line.uniform for line in lines), shape)
    values = np.zeros((9, *shape)) if intensity is None else _uniform(intensity[0], rows)
    others = _summed((line.others for line in lines), shape)
    if others is not None:
        values += others
    forces = _summed((line.forces for line in lines), joints)
    moved = _summed((line.movements for line in lines), joints)
    return RowActions(
        moments=values[0:2],
        rotations=values[2:4],
        forces=values[4:6],
        total=values[6],
        lever=values[7],
        along=values[8],
        right=_or_none(forces, 0),
        down=_or_none(forces, 1),
        couples=_or_none(forces, 2),
        settlements=_or_none(moved, 0),
        turns=_or_none(moved, 1),
    )


def _or_none(values: Floats | None, row: int) -> Floats | None:
    return values[row] if values is not None and values[row].any() else None


def _summed(
    per_line: Iterable[Sequence[tuple[float, ...]]], shape: tuple[int, ...]
) -> Floats | None:
    """Sum values given per line as (case, place, value, ...) into (values, *shape)."""
    rows: list[tuple[float, ...]] = []
    owners: list[int] = []
    for index, own in enumerate(per_line):
        rows += own
        owners += [index] * len(own)
    if not rows:
        return None
    _, cases, width = shape
    table = np.array(rows, dtype=np.float64).T
    places = (table[1] * cases + table[0]) * width + owners
    at, size = places.astype(np.intp), math.prod(shape)
    return np.stack([np.bincount(at, column, size).reshape(shape) for column in table[2:]])


def _uniform(intensity: Floats, rows: Rows) -> Floats:
    """EndActions and resultants of uniform forces (n, C, L) over whole prismatic members."""
    length = rows.length[:, None]
    total = intensity * length
    moment = total * (length / 12.0)
    turn = moment * (length / (2.0 * rows.rigidity[:, None]))
    force = total * 0.5
    return np.stack(
        [-moment, moment, turn, -turn, force, force, total, force * length, np.zeros_like(total)]
    )


def across(rows: Rows, actions: RowActions) -> Floats | None:
    """Return the forces (n + 1, C, L) on joints across the line, along its local down."""
    if actions.right is None:
        return None if actions.down is None else actions.down * rows.cosine
    pushed = actions.right * rows.sine
    return pushed if actions.down is None else pushed + actions.down * rows.cosine
