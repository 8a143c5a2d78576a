"""The independent translations of a line's joints.

Members keep their length, so the joints of a frame cannot move each by itself.  Joints at the
same end of a horizontal bar share their movement to the right, those of a vertical bar their
movement down; inclined bars tie the shared movements together by linear equations.  What is
left free are the independent translations (storey sway, a hinge or a spring going down, ...).
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.bars import STRAIGHT, Bar
from analysis_core.distribution.loads import Loads, holds
from analysis_core.errors import ModelError
from analysis_core.model import RIGID, Line

Floats = NDArray[np.float64]

_SMALL = 1e-9
_WORDS = ("to the right", "down")


@dataclass(frozen=True, slots=True, eq=False)
class Translations:
    """Movements of J joints: prescribed ones for C cases, and m independent ones.

    given (J, 2, C) m; modes (m, J, 2); anchors: for each mode the (joint, direction) whose
    movement is its size.
    """

    given: Floats
    modes: Floats
    anchors: tuple[tuple[int, int], ...]

    def name(self, mode: int) -> str:
        """Return a mode in words: "joint 3 to the right"."""
        joint, direction = self.anchors[mode]
        return f"joint {joint} {_WORDS[direction]}"


def held_horizontally(line: Line, joints: Sequence[int]) -> set[int]:
    """Return the joints at which a line is held against sliding.

    A line is held as a whole: where legs meet it (they do not lean), and where its supports hold
    it horizontally; if neither, at its first supported joint (else its first).
    """
    if line.kind != "line":
        return set()
    spans = {end for m in line.members if m.role == "span" for end in (m.start, m.end)}
    legs = {end for m in line.members if m.role == "leg" for end in (m.start, m.end)}
    held = (legs & spans) & set(joints)
    rigid = [j for j in joints if j in spans and holds(line.joints[j])["horizontal"] == RIGID]
    if held or rigid:
        return held
    candidates = [j for j in joints if j in spans] or list(joints)
    for key in ("horizontal", "vertical", "rotation"):
        found = [j for j in candidates if holds(line.joints[j])[key]]
        if found:
            return {found[0]}
    return {candidates[0]}


def independent_translations(
    line: Line, bars: Sequence[Bar], joints: Sequence[int], loads: Loads
) -> Translations:
    """Return how the joints of a line can translate, and what is prescribed.

    Raises ModelError where prescribed movements cannot be followed by members that keep their
    length.
    """
    shared = _Shared(len(line.joints))
    for bar in bars:
        if bar.slides is None:
            shared.tie(bar)
    fixed = _fixed_movements(line, joints, loads, shared)
    rows, known = _inclined(bars, shared, fixed, loads.forces.shape[2])
    free = sorted({shared.root(j, d) for j in joints for d in (0, 1)} - set(fixed))
    solved, values, independent = _eliminate(line, rows, known, free)
    return _spread(line, joints, shared, fixed, solved, values, independent, loads)


class _Shared:
    """Which joints share a movement: sets of (joint, direction), numbered 2·joint + direction."""

    def __init__(self, joints: int) -> None:
        self._parent = list(range(2 * joints))

    def root(self, joint: int, direction: int) -> int:
        item = 2 * joint + direction
        while self._parent[item] != item:
            self._parent[item] = self._parent[self._parent[item]]
            item = self._parent[item]
        return item

    def tie(self, bar: Bar) -> None:
        for direction in (0, 1):
            if abs(bar.direction[1 - direction]) <= STRAIGHT:
                one, other = self.root(bar.start, direction), self.root(bar.end, direction)
                self._parent[max(one, other)] = min(one, other)


def _fixed_movements(
    line: Line, joints: Sequence[int], loads: Loads, shared: _Shared
) -> dict[int, Floats]:
    """Return the prescribed movement (C,) of every shared movement that a support holds."""
    held = held_horizontally(line, joints)
    supported, carried = [], [(joint, 0) for joint in joints if joint in held]
    for joint in joints:
        stiffness = holds(line.joints[joint])
        for direction, key in enumerate(("horizontal", "vertical")):
            if stiffness[key] == RIGID:
                supported.append((joint, direction))
    fixed: dict[int, Floats] = {}
    first: dict[int, int] = {}
    for joint, direction in supported + carried:
        own = (joint, direction) in supported
        root = shared.root(joint, direction)
        movement = loads.movements[joint, direction] if own else None
        if root not in fixed:
            fixed[root] = np.zeros(loads.movements.shape[2]) if movement is None else movement
            first[root] = joint
        elif movement is not None and not np.allclose(movement, fixed[root], rtol=_SMALL, atol=0.0):
            raise ModelError(
                f"Line {line.mark}: joints {first[root]} and {joint} are prescribed to move "
                f"{_WORDS[direction]} by different amounts, but members that keep their "
                f"length join them. Prescribe the same movement for both, or let the support "
                f"of one of them go that way."
            )
    return fixed


def _inclined(
    bars: Sequence[Bar], shared: _Shared, fixed: dict[int, Floats], cases: int
) -> tuple[list[dict[int, float]], list[Floats]]:
    """Return an equation per inclined bar over the shared movements, and its right-hand side."""
    rows, known = [], []
    for bar in bars:
        cosine, sine = bar.direction
        if bar.slides is not None or abs(cosine) <= STRAIGHT or abs(sine) <= STRAIGHT:
            continue
        row: dict[int, float] = {}
        value = np.zeros(cases)
        for joint, sign in ((bar.end, 1.0), (bar.start, -1.0)):
            for direction, factor in ((0, cosine * sign), (1, -sine * sign)):
                root = shared.root(joint, direction)
                if root in fixed:
                    value = value - factor * fixed[root]
                else:
                    row[root] = factor  # ends of a sloping bar share no movement
        rows.append(row)
        known.append(value)
    return rows, known


def _eliminate(
    line: Line, rows: list[dict[int, float]], known: list[Floats], free: list[int]
) -> tuple[dict[int, dict[int, float]], dict[int, Floats], list[int]]:
    """Solve the equations for as many movements as they settle (Gauss-Jordan, full pivoting).

    Returns each settled movement as a combination of the others, its prescribed part, and the
    independent ones.
    """
    place = {root: column for column, root in enumerate(free)}
    matrix = np.zeros((len(rows), len(free)))
    for index, row in enumerate(rows):
        for root, factor in row.items():
            matrix[index, place[root]] = factor
    right = np.array(known) if rows else np.zeros((0, 0))
    pivots: list[tuple[int, int]] = []
    open_rows = list(range(len(rows)))
    while open_rows:
        block = np.abs(matrix[open_rows])
        at = int(block.argmax()) if block.size else 0
        if not block.size or block.flat[at] <= _SMALL:
            break
        row_index, column = open_rows[at // len(free)], at % len(free)
        open_rows.remove(row_index)
        pivots.append((row_index, column))
        right[row_index] /= matrix[row_index, column]
        matrix[row_index] /= matrix[row_index, column]
        others = [i for i in range(len(rows)) if i != row_index and matrix[i, column]]
        factors = matrix[others, column].copy()
        matrix[others] -= factors[:, None] * matrix[row_index]
        right[others] -= factors[:, None] * right[row_index]
        matrix[others, column] = 0.0
    _check_consistent(line, right[open_rows], right)
    settled = {free[column] for _, column in pivots}
    independent = [root for root in free if root not in settled]
    solved = {
        free[column]: {root: -matrix[row, place[root]] for root in independent}
        for row, column in pivots
    }
    return solved, {free[column]: right[row] for row, column in pivots}, independent


def _check_consistent(line: Line, left_over: Floats, right: Floats) -> None:
    """Refuse prescribed movements that would stretch a member of a frame.

    In a beam line on a slope they are let pass: its supports bend it as they settle, and the
    stretch is left aside as everything axial is.
    """
    if line.kind == "line" or not left_over.size:
        return
    if np.abs(left_over).max() > _SMALL * max(np.abs(right).max(), _SMALL):
        raise ModelError(
            f"Line {line.mark}: its members keep their length and cannot follow the prescribed "
            f"movements of its supports (one of them would have to change its length by "
            f"{np.abs(left_over).max():.3g} m). Take a movement out, or let a support go along."
        )


def _spread(
    line: Line,
    joints: Iterable[int],
    shared: _Shared,
    fixed: dict[int, Floats],
    solved: dict[int, dict[int, float]],
    values: dict[int, Floats],
    independent: list[int],
    loads: Loads,
) -> Translations:
    count, cases = len(line.joints), loads.forces.shape[2]
    given = np.zeros((count, 2, cases))
    modes = np.zeros((len(independent), count, 2))
    rank = {root: index for index, root in enumerate(independent)}
    for joint in joints:
        for direction in (0, 1):
            root = shared.root(joint, direction)
            if root in fixed:
                given[joint, direction] = fixed[root]
            elif root in rank:
                modes[rank[root], joint, direction] = 1.0
            else:
                given[joint, direction] = values[root]
                for other, factor in solved[root].items():
                    modes[rank[other], joint, direction] = factor
    anchors = tuple(divmod(root, 2) for root in independent)
    return Translations(given, modes, anchors)
