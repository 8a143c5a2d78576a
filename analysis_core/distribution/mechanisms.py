"""Mechanisms: which joints can move without any member bending, and what would stop them.

Decided by geometry alone, whatever the stiffnesses: the movements (right, down, rotation) of all
joints that change no member's length, bend no member and strain no support.  Soft springs count
as much as rigid ones here.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.bars import reduce
from analysis_core.distribution.loads import holds
from analysis_core.distribution.translations import held_horizontally
from analysis_core.errors import MechanismError, ModelError
from analysis_core.model import FREE, JointForce, Line, Member

Floats = NDArray[np.float64]

_RANK = 1e-9
_VISIBLE = 1e-6
_MOST_REMEDIES = 4


def refuse_if_loose(line: Line) -> None:
    """Raise MechanismError if parts of ``line`` can move freely."""
    movements = free_movements(line)
    if not len(movements):
        return
    moving = _moving_joints(line, movements)
    remedy = _remedy(line, movements)
    names = ", ".join(_name(line, joint) for joint in moving)
    raise MechanismError(
        f"Line {line.mark} is a mechanism: {names} can move freely while no member bends. "
        f"To stop that, {remedy}.",
        joints=moving,
        remedy=remedy,
    )


def refuse_idle_couples(line: Line, cases: Sequence[str]) -> None:
    """Raise ModelError for a couple on a joint where nothing resists rotation.

    The rotation of a joint at which every member end is released is harmless as long as nothing
    turns it.
    """
    turned = {
        action.joint: action
        for action in line.actions
        if isinstance(action, JointForce) and action.moment and action.case in cases
    }
    if not turned:
        return
    released = _all_released(line)
    for joint, action in turned.items():
        if joint in released:
            raise ModelError(
                f"A moment of {action.moment:g} N·m acts on {_name(line, joint)} of line "
                f"{line.mark} (case '{action.case}'), where nothing resists rotation: all "
                f"{released[joint]} member ends are released and the support is not held against "
                f"rotation. Fix one end, or move the moment."
            )


def free_movements(line: Line) -> Floats:
    """Return an orthonormal basis (k, 3J) of the movements that nothing resists.

    The unknowns of joint j are 3j (right), 3j + 1 (down) and 3j + 2 (rotation, times the mean
    length of the members).  k = 0 for a stable line.
    """
    count = 3 * len(line.joints)
    rows = [_row(count, entries) for entries in _resisted(line)]
    matrix = np.array(rows) if rows else np.zeros((1, count))
    _, values, basis = np.linalg.svd(matrix)
    rank = int((values > _RANK * max(values.max(initial=0.0), 1.0)).sum())
    return np.asarray(basis[rank:])


Entries = list[tuple[int, float]]


def _row(count: int, entries: Entries) -> Floats:
    row = np.zeros(count)
    for column, value in entries:
        row[column] += value
    size = float(np.abs(row).max())
    return row / size if size else row


def _resisted(line: Line) -> list[Entries]:
    """Return every combination of joint movements that something resists."""
    held = held_horizontally(line, range(len(line.joints)))
    sliding = {bar.members[0] for bar in reduce(line).bars if bar.slides is not None}
    rows: list[Entries] = []
    for joint in line.joints:
        stiffness = holds(joint)
        if stiffness["horizontal"] or joint.id in held:
            rows.append([(3 * joint.id, 1.0)])
        if stiffness["vertical"]:
            rows.append([(3 * joint.id + 1, 1.0)])
        if stiffness["rotation"]:
            rows.append([(3 * joint.id + 2, 1.0)])
    rows += [[(3 * joint + 2, 1.0)] for joint in _all_released(line)]
    for member in line.members:
        cosine, sine = line.direction(member)
        if member.id not in sliding:
            rows.append(_across_ends(member, cosine, -sine))
        for spring, end in (
            (member.start_spring, member.start),
            (member.end_spring, member.end),
        ):
            if spring != FREE:
                rows.append(_fastened(line, member, end))
    return rows


def _across_ends(member: Member, right: float, down: float) -> Entries:
    """The movement of the end less that of the start, in a direction."""
    return [
        (3 * member.end, right),
        (3 * member.end + 1, down),
        (3 * member.start, -right),
        (3 * member.start + 1, -down),
    ]


def _fastened(line: Line, member: Member, joint: int) -> Entries:
    """The rotation of the chord less that of the joint, times the member's length."""
    cosine, sine = line.direction(member)
    return [
        *_across_ends(member, sine, cosine),
        (3 * joint + 2, -member.length / _mean_length(line)),
    ]


def _mean_length(line: Line) -> float:
    return sum(member.length for member in line.members) / len(line.members)


def _all_released(line: Line) -> dict[int, int]:
    """Return the joints that nothing holds against rotation: joint -> number of member ends."""
    ends: dict[int, list[float]] = {joint.id: [] for joint in line.joints}
    for member in line.members:
        ends[member.start].append(member.start_spring)
        ends[member.end].append(member.end_spring)
    return {
        joint: len(springs)
        for joint, springs in ends.items()
        if not any(springs) and not holds(line.joints[joint])["rotation"]
    }


def _moving_joints(line: Line, movements: Floats) -> tuple[int, ...]:
    """Return the joints that change place; where none does, those that turn."""
    parts = np.abs(movements).reshape(len(movements), len(line.joints), 3).max(0)
    moving = np.flatnonzero(parts[:, :2].max(1) > _VISIBLE)
    if not moving.size:
        moving = np.flatnonzero(parts[:, 2] > _VISIBLE)
    return tuple(int(joint) for joint in moving)


def _name(line: Line, joint: int) -> str:
    place = line.joints[joint]
    if line.kind == "line":
        return f"joint {joint} (x = {place.x:.3f} m)"
    return f"joint {joint} (x = {place.x:.3f} m, z = {place.z:.3f} m)"


def _remedy(line: Line, movements: Floats) -> str:
    """Return restraints in words: one alternative list for each free movement."""
    count = movements.shape[1]
    candidates = [(text, _row(count, entries)) for text, entries in _restraints(line)]
    left = movements
    steps: list[str] = []
    while len(left) and len(steps) < _MOST_REMEDIES:
        effects = [float(np.linalg.norm(left @ row)) for _, row in candidates]
        useful = sorted(range(len(effects)), key=lambda i: (-round(effects[i], 6), i))
        best = useful[0]
        if effects[best] <= _VISIBLE:
            break
        steps.append(" or ".join(_alternatives(candidates, effects, useful, best)))
        left = _stopped(left, candidates[best][1])
    return "; and ".join(steps) if steps else "hold one of these joints"


def _alternatives(
    candidates: list[tuple[str, Floats]], effects: list[float], useful: list[int], best: int
) -> list[str]:
    """Return the most effective restraint, and the most effective one of each other kind."""
    chosen = [candidates[best][0]]
    kinds = {chosen[0].split()[0]}
    for index in useful:
        kind = candidates[index][0].split()[0]
        if kind not in kinds and effects[index] > _VISIBLE:
            kinds.add(kind)
            chosen.append(candidates[index][0])
    return chosen


def _restraints(line: Line) -> list[tuple[str, Entries]]:
    """Return what one could add, in words, with the movement that it resists."""
    found: list[tuple[str, Entries]] = []
    for joint in line.joints:
        name, stiffness = _name(line, joint.id), holds(joint)
        if not stiffness["vertical"]:
            found.append((f"support {name} vertically", [(3 * joint.id + 1, 1.0)]))
        if not stiffness["horizontal"] and line.kind == "frame":
            found.append((f"hold {name} horizontally", [(3 * joint.id, 1.0)]))
    for member in line.members:
        for spring, end in (
            (member.start_spring, member.start),
            (member.end_spring, member.end),
        ):
            if spring == FREE:
                text = f"close the release of member {member.id} at joint {end}"
                found.append((text, _fastened(line, member, end)))
    for joint in line.joints:
        stiffness = holds(joint)
        if not stiffness["rotation"] and (stiffness["vertical"] or stiffness["horizontal"]):
            text = f"fix {_name(line, joint.id)} against rotation"
            found.append((text, [(3 * joint.id + 2, 1.0)]))
    return found


def _stopped(movements: Floats, row: Floats) -> Floats:
    """Return the free movements that are left once ``row`` is resisted."""
    effect = movements @ row
    _, _, basis = np.linalg.svd(effect[None, :])
    return np.asarray(basis[1:] @ movements)
