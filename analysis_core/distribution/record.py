"""Moment distribution as one would write it down: every release kept, and how far off it ends.

The same line as ``solve``, by cycles that stop at a stated unbalance.  Where the line has
independent translations, one table is for the line with its translations locked and one more for
each of them; the sizes of the translations follow from the equilibrium of the recorded sums.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.bar_actions import member_moments
from analysis_core.distribution.columns import Columns, columns
from analysis_core.distribution.cycles import Cycles, End, Order, Row, distribute_ends
from analysis_core.distribution.loads import gather
from analysis_core.distribution.mechanisms import refuse_idle_couples
from analysis_core.distribution.mirror import Mirror, Parity, mirror, parity
from analysis_core.distribution.skeleton import (
    times,
    translation_sizes,
)
from analysis_core.distribution.sway import Balanced, balance
from analysis_core.model import Line

__all__ = ["DistributionRecord", "End", "Row", "Table", "distribute"]

Floats = NDArray[np.float64]

DEFAULT_STOP = 0.01
UNIT = 1e-3
"""The translation that a table of its own is for, m."""
_TIGHTER = 10.0
_LEAST = 1e-12


@dataclass(frozen=True, slots=True)
class Table:
    """One distribution: locked, or for one translation of ``UNIT``.

    title: what it is for; ends: its columns; held: fixed-end moments of the columns, all joints
    held, N·m; start: the same once the known ends are set; rows: the releases in order; sums: the
    moments of the columns at the end; left: the largest unbalance that remains; size: of the
    translation, in multiples of ``UNIT`` (1 for the locked table); parity: "symmetric" or
    "antisymmetric" where only the left half is written down, "" otherwise.
    """

    title: str
    ends: tuple[End, ...]
    held: tuple[float, ...]
    start: tuple[float, ...]
    rows: tuple[Row, ...]
    sums: tuple[float, ...]
    left: float
    size: float = 1.0
    parity: str = ""


@dataclass(frozen=True, slots=True, eq=False)
class DistributionRecord:
    """The recorded distribution of one case of a line.

    stop: part of the largest fixed-end moment that was let stand as unbalance; limit: the same
    in N·m for the locked table; end_moments, exact (M, 2): sums and exact end moments of all
    members, N·m clockwise; difference: the largest between them, N·m; overhangs: (member,
    moment at start, moment at end) known from statics.
    """

    line: Line
    case: str
    order: Order
    stop: float
    limit: float
    tables: tuple[Table, ...]
    overhangs: tuple[tuple[int, float, float], ...]
    end_moments: Floats
    exact: Floats
    difference: float
    largest_fixed_end: float

    @property
    def relative_difference(self) -> float:
        """The difference as a part of the largest fixed-end moment (0 if there is none)."""
        return self.difference / self.largest_fixed_end if self.largest_fixed_end else 0.0


def distribute(
    line: Line,
    case: str,
    *,
    stop: float = DEFAULT_STOP,
    order: Order = "largest",
    max_sweeps: int = 200,
    short_cuts: bool = True,
) -> DistributionRecord:
    """Distribute one case of a line in recorded cycles.

    ``stop``: the largest unbalance to let stand, as a part of the largest fixed-end moment.
    ``order``: "largest" unbalance first, joint by joint; "together", all joints at once;
    "alternate", every second joint.  ``short_cuts``: never lock ends whose moment is known, and
    write down half of what is symmetric (see ``columns``).

    Translations can magnify what is left over: the stop is tightened tenfold until the sums agree
    with the exact moments within the stop that was asked for; ``stop`` of the record says which
    was used.  Raises what ``solve`` raises, and ConvergenceError where ``max_sweeps`` releases of
    every joint do not suffice.
    """
    if not stop > 0.0:
        raise ValueError(f"stop must be positive; got {stop}")
    refuse_idle_couples(line, (case,))
    balanced = balance(line, gather(line, (case,)))
    recorder = _Recorder(balanced, case, order, max_sweeps, short_cuts)
    used = stop
    while True:
        record = recorder.record(used)
        enough = record.difference <= stop * record.largest_fixed_end
        if enough or len(record.tables) == 1 or used <= _LEAST:
            return record
        used /= _TIGHTER


class _Recorder:
    def __init__(
        self, balanced: Balanced, case: str, order: Order, max_sweeps: int, short_cuts: bool
    ) -> None:
        self.balanced, self.frame = balanced, balanced.frame
        self.short_cuts = short_cuts
        self.case, self.order, self.max_sweeps = case, order, max_sweeps
        frame = self.frame
        self.held = frame.held.astype(np.float64)
        self.held[..., 1:] *= UNIT
        self.couples = np.zeros((len(frame.line.joints), self.held.shape[2]))
        self.couples[list(frame.joints), 0] = frame.couples[:, 0]
        self.mirrored = None
        if frame.bars and short_cuts:
            self.mirrored = mirror(frame.line, frame.bars, frame.joints)
        self.exact = self._per_member(balanced.moments)

    def record(self, stop: float) -> DistributionRecord:
        frame = self.frame
        tables, sums = [], np.zeros_like(self.held)
        for number in range(self.held.shape[2]):
            table, sums[..., number] = self._table(number, stop)
            tables.append(table)
        locked, swayed = sums[..., :1].astype(np.longdouble), sums[..., 1:] / UNIT
        sizes, _ = translation_sizes(frame, locked, swayed.astype(np.longdouble))
        total = np.concatenate([locked + times(swayed, sizes), frame.tails.moments])
        moments = self._per_member(total.astype(np.float64))
        largest = self._largest(0)
        sized = [
            table if number == 0 else replace(table, size=float(sizes[number - 1, 0]) / UNIT)
            for number, table in enumerate(tables)
        ]
        return DistributionRecord(
            line=frame.line,
            case=self.case,
            order=self.order,
            stop=stop,
            limit=stop * largest,
            tables=tuple(sized),
            overhangs=self._overhangs(),
            end_moments=_read_only(moments),
            exact=_read_only(self.exact),
            difference=float(np.abs(moments - self.exact).max(initial=0.0)),
            largest_fixed_end=largest,
        )

    def _largest(self, number: int) -> float:
        """The largest fixed-end moment of a table; couples on joints count as well."""
        return float(
            max(
                np.abs(self.held[..., number]).max(initial=0.0),
                np.abs(self.couples[:, number]).max(initial=0.0),
            )
        )

    def _table(self, number: int, stop: float) -> tuple[Table, Floats]:
        frame = self.frame
        held, couples = self.held[..., number], self.couples[:, number]
        kind = parity(self.mirrored, held, couples) if self.mirrored and held.any() else None
        half = (self.mirrored, kind) if self.mirrored and kind else None
        given = columns(
            frame.line,
            frame.bars,
            frame.joints,
            held,
            couples,
            half=half,
            known_ends=self.short_cuts,
        )
        cycles = distribute_ends(
            given.ends,
            given.start,
            given.couples,
            limit=stop * self._largest(number),
            order=self.order,
            max_sweeps=self.max_sweeps,
        )
        title = "Translations locked" if len(frame.moves.modes) else "Distribution"
        if number:
            title = f"{frame.moves.name(number - 1)} by {UNIT * 1e3:g} mm"
        table = Table(
            title=title,
            ends=given.ends,
            held=tuple(0.0 if e.bar is None else float(held[e.bar, e.side]) for e in given.ends),
            start=given.start,
            rows=cycles.rows,
            sums=cycles.sums,
            left=cycles.left,
            parity=kind or "",
        )
        return table, _on_bars(len(frame.bars), given, cycles, half)

    def _overhangs(self) -> tuple[tuple[int, float, float], ...]:
        members = [number for bar, _ in self.frame.reduction.tails for number in bar.members]
        return tuple((m, float(self.exact[m, 0]), float(self.exact[m, 1])) for m in members)

    def _per_member(self, moments: Floats) -> Floats:
        """End moments (M, 2) of the members from those of all bars (B, 2, 1), tails last."""
        found = np.zeros((len(self.frame.line.members), 2))
        for index, bar in enumerate(self.balanced.bars):
            spread = member_moments(bar, self.balanced.actions[index], *moments[index])
            found[list(bar.members)] = spread[..., 0]
        return found


def _on_bars(
    count: int, given: Columns, cycles: Cycles, half: tuple[Mirror, Parity] | None
) -> Floats:
    """The sums of a table as end moments (B, 2); those of the right half are the left's images."""
    sums = np.zeros((count, 2))
    for end, moment in zip(given.ends, cycles.sums, strict=True):
        if end.bar is None:
            continue
        sums[end.bar, end.side] = moment
        if half is not None:
            mirrored, kind = half
            sums[mirrored.image(end.bar, end.side)] = -moment if kind == "symmetric" else moment
    return sums


def _read_only(array: Floats) -> Floats:
    array.flags.writeable = False
    return array
