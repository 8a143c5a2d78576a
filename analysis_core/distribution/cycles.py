"""Recorded cycles: release a joint, distribute its unbalance, carry over; as one would by hand."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

from analysis_core.errors import ConvergenceError

Order = Literal["largest", "together", "alternate"]


@dataclass(frozen=True, slots=True)
class End:
    """One column of a distribution table: a member end, or the spring of a support.

    joint: where it is; bar, side: which bar of the line, 0 start or 1 end, None for a support;
    member: id of the line's member there.  stiffness N·m/rad, modified where ``note`` says so;
    factor: its share of an unbalance at the joint; carry_over: of what it takes, how much arrives
    at the column ``to``.  weight: 2 for one that stands for its mirror image at the same joint.
    """

    joint: int
    bar: int | None
    side: int
    member: int | None
    stiffness: float
    factor: float
    carry_over: float
    to: int | None
    note: str = ""
    weight: float = 1.0


@dataclass(frozen=True, slots=True)
class Row:
    """One step: the joints released, and what that did, in N·m.

    unbalance: (joint, moment) before the release; balanced: (column, moment); carried: (from
    column, to column, moment).
    """

    joints: tuple[int, ...]
    unbalance: tuple[tuple[int, float], ...]
    balanced: tuple[tuple[int, float], ...]
    carried: tuple[tuple[int, int, float], ...]


@dataclass(frozen=True, slots=True)
class Cycles:
    """All rows, the moments of all columns at the end, and the largest unbalance left, N·m."""

    rows: tuple[Row, ...]
    sums: tuple[float, ...]
    left: float


def distribute_ends(
    ends: Sequence[End],
    moments: Sequence[float],
    couples: dict[int, float],
    *,
    limit: float,
    order: Order = "largest",
    max_sweeps: int = 200,
) -> Cycles:
    """Release joints until no unbalance exceeds ``limit`` N·m.

    ``moments``: of the columns, joints held; ``couples``: applied to each joint that may be
    released.  ``order``: the joint with the largest unbalance first; all joints together; or
    every second joint in turn.  Raises ConvergenceError after ``max_sweeps`` releases per joint.
    """
    table = _Table(ends, list(moments), couples)
    rows: list[Row] = []
    groups = _groups(table, order)
    for turn in range(max_sweeps * len(groups if order != "largest" else couples)):
        if table.worst() <= limit:
            break
        chosen = [table.largest()] if order == "largest" else groups[turn % len(groups)]
        row = table.release([joint for joint in chosen if table.unbalance[joint]])
        if row.joints:
            rows.append(row)
    left = table.worst()
    if left > limit:
        joint = table.largest()
        raise ConvergenceError(
            f"Distribution stopped after {max_sweeps} sweeps with {left:.3g} N·m unbalanced at "
            f"joint {joint} (limit {limit:.3g} N·m). Raise max_sweeps, or look for a very stiff "
            f"member at joint {joint}."
        )
    return Cycles(tuple(rows), tuple(table.moments), left)


class _Table:
    def __init__(
        self, ends: Sequence[End], moments: list[float], couples: dict[int, float]
    ) -> None:
        self.ends, self.moments = ends, moments
        self.columns: dict[int, list[int]] = {joint: [] for joint in couples}
        self.unbalance = {joint: -couple for joint, couple in couples.items()}
        for index, end in enumerate(ends):
            if end.joint in self.columns:
                self.columns[end.joint].append(index)
                self.unbalance[end.joint] += end.weight * moments[index]

    def worst(self) -> float:
        return max((abs(value) for value in self.unbalance.values()), default=0.0)

    def largest(self) -> int:
        return max(self.unbalance, key=lambda joint: abs(self.unbalance[joint]))

    def release(self, joints: Sequence[int]) -> Row:
        """Balance some joints at once, then carry over."""
        before = tuple((joint, self.unbalance[joint]) for joint in joints)
        balanced: list[tuple[int, float]] = []
        carried: list[tuple[int, int, float]] = []
        for joint, unbalance in before:
            self.unbalance[joint] = 0.0
            for column in self.columns[joint]:
                end = self.ends[column]
                share = -end.factor * unbalance
                balanced.append((column, share))
                self.moments[column] += share
                if end.to is not None and end.carry_over:
                    carried.append((column, end.to, end.carry_over * share))
        for _, column, moment in carried:
            end = self.ends[column]
            self.moments[column] += moment
            if end.joint in self.unbalance:
                self.unbalance[end.joint] += end.weight * moment
        return Row(tuple(joints), before, tuple(balanced), tuple(carried))


def _groups(table: _Table, order: Order) -> list[list[int]]:
    """Return the joints that are released at the same time, in turn."""
    joints = list(table.columns)
    if order != "alternate":
        return [joints]
    colour: dict[int, int] = {}
    for first in joints:
        waiting = [first]
        while waiting:
            joint = waiting.pop()
            if joint in colour:
                continue
            beside = _beside(table, joint)
            taken = {colour[other] for other in beside if other in colour}
            colour[joint] = 0 if 1 in taken or not taken else 1
            waiting += beside
    halves = [[j for j in joints if colour[j] == value] for value in (0, 1)]
    return [half for half in halves if half]


def _beside(table: _Table, joint: int) -> list[int]:
    beside = []
    for column in table.columns[joint]:
        to = table.ends[column].to
        if to is not None and table.ends[to].joint in table.columns:
            beside.append(table.ends[to].joint)
    return beside
