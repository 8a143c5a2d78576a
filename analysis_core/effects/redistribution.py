"""Moments at supports reduced, spans rebuilt from statics.

A redistribution changes the moments at supports; between supports the change is linear, so
that equilibrium is kept whatever the actions.  A stated fraction applies to every combination and
every arrangement alike, never to the envelope: the change of each part of each case is the same
fraction of its own support moment, so that sums of adverse parts stay exact.
"""

from __future__ import annotations

import itertools
from collections.abc import Mapping
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from analysis_core.errors import ModelError
from analysis_core.model import RIGID, Line, Member
from analysis_core.results import LineSolution

Floats = NDArray[np.float64]

_LEVEL = 1e-6  # of the length: how far an end may lie above the other


@dataclass(frozen=True, slots=True)
class Redistributable:
    """Whether the moment at a support can be redistributed, and why not."""

    joint: int
    possible: bool
    reason: str = ""


def redistributable(line: Line) -> tuple[Redistributable, ...]:
    """Return for each support of the line whether its moment can be redistributed.

    It cannot where statics alone settle it: beside an overhang, at a pinned end, or where a
    hinge stands in a span beside it.  Frames, legs and inclined members are not covered.
    """
    whole = _not_covered(line)
    ordered = _ordered(line)
    supports = [j for j in ordered if _supported(line, j)]
    out = []
    for number, joint in enumerate(supports):
        reason = whole or _reason(line, ordered, supports, number)
        out.append(Redistributable(joint, not reason, reason))
    return tuple(out)


def redistribute(
    line: Line, solution: LineSolution, fractions: Mapping[int, float]
) -> LineSolution:
    """Return the solution with the moments at supports reduced by ``fractions`` (joint: part).

    0.15 leaves 85 % of the elastic moment.  End moments, shears and reactions follow from
    statics; movements stay those of the elastic solution.  Raises ModelError for a support where
    the moment cannot be redistributed, and for a fraction that is not below 1.
    """
    chosen = {joint: part for joint, part in fractions.items() if part}
    _check(line, chosen)
    change = _change_at_joints(line, solution, chosen)  # (C, J)
    moments, shears = solution.end_moments.copy(), solution.end_shears.copy()
    reactions = solution.reactions.copy()
    for member in line.members:
        start, end = change[:, member.start], change[:, member.end]
        moments[:, member.id, 0] += start
        moments[:, member.id, 1] -= end
        shear = (end - start) / member.length
        shears[:, member.id] += shear[:, None]
        reactions[:, member.start, 1] += shear
        reactions[:, member.end, 1] -= shear
        # What the joint no longer takes over from the member, its support does not either.
        reactions[:, member.start, 2] += start
        reactions[:, member.end, 2] -= end
    for joint in line.joints:
        if not _supported(line, joint.id):
            reactions[:, joint.id] = solution.reactions[:, joint.id]
        elif not _turns_stiffly(line, joint.id):
            reactions[:, joint.id, 2] = solution.reactions[:, joint.id, 2]
    for array in (moments, shears, reactions):
        array.flags.writeable = False
    return replace(
        solution,
        end_moments=moments,
        end_shears=shears,
        reactions=reactions,
        method=f"{solution.method}, redistributed",
    )


def chosen_fractions(
    line: Line, fraction: float, per_joint: Mapping[int, float] | None = None
) -> dict[int, float]:
    """Return the fraction at every support where redistribution is possible.

    ``per_joint`` overrides ``fraction`` for single joints.
    """
    own = per_joint or {}
    return {
        r.joint: own.get(r.joint, fraction)
        for r in redistributable(line)
        if r.possible and own.get(r.joint, fraction)
    }


def support_moments_before_and_after(
    line: Line, elastic: LineSolution, redistributed: LineSolution
) -> list[tuple[int, Floats, Floats]]:
    """Return joint, elastic and redistributed diagram moments (C) at each support, N·m."""
    out = []
    for joint in (j for j in _ordered(line) if _supported(line, j)):
        before, after = (_moment_at(line, s, joint) for s in (elastic, redistributed))
        out.append((joint, before, after))
    return out


def _check(line: Line, fractions: Mapping[int, float]) -> None:
    reasons = {r.joint: r for r in redistributable(line)}
    for joint, fraction in fractions.items():
        where = f"Line {line.mark}, joint {joint}"
        found = reasons.get(joint)
        if found is None:
            known = ", ".join(str(j) for j in reasons)
            raise ModelError(f"{where} is no support; its supports are the joints {known}.")
        if not found.possible:
            raise ModelError(
                f"{where}: the moment cannot be redistributed: {found.reason}. Leave this joint "
                f"out of the redistribution."
            )
        if not fraction < 1.0:
            raise ModelError(
                f"{where}: a redistribution by {100 * fraction:g} % would leave no moment; it "
                f"must be below 100 %."
            )


def _change_at_joints(line: Line, solution: LineSolution, fractions: Mapping[int, float]) -> Floats:
    """The change of the diagram moment at every joint: stated at supports, linear between."""
    ordered = _ordered(line)
    change = np.zeros((len(solution.cases), len(line.joints)))
    for joint, fraction in fractions.items():
        change[:, joint] = -fraction * _moment_at(line, solution, joint)
    supports = [j for j in ordered if _supported(line, j)]
    for a, b in itertools.pairwise(supports):
        low, high = line.joints[a].x, line.joints[b].x
        for joint in ordered[ordered.index(a) + 1 : ordered.index(b)]:
            part = (line.joints[joint].x - low) / (high - low)
            change[:, joint] = (1.0 - part) * change[:, a] + part * change[:, b]
    return change


def _moment_at(line: Line, solution: LineSolution, joint: int) -> Floats:
    """Diagram moment at a joint (C); the mean of both sides where a couple acts on it."""
    sides = []
    for member in line.members:
        if member.start == joint:
            sides.append(solution.end_moments[:, member.id, 0])
        elif member.end == joint:
            sides.append(-solution.end_moments[:, member.id, 1])
    return np.asarray(sum(sides) / len(sides))


def _not_covered(line: Line) -> str:
    if line.kind == "frame":
        return "the moments of a frame depend on its sway"
    for member in line.members:
        if member.role == "leg":
            return "columns take part of the moments at the supports"
        a, b = line.joints[member.start], line.joints[member.end]
        if abs(b.z - a.z) > _LEVEL * member.length:
            return "the line is not level"
    return ""


def _reason(line: Line, ordered: list[int], supports: list[int], number: int) -> str:
    joint = supports[number]
    at = ordered.index(joint)
    left, right = _member_to(line, joint, "end"), _member_to(line, joint, "start")
    if left is None and right is None:
        return "no member meets it"
    if (left is None or right is None) and not _turns_stiffly(line, joint):
        return "the end is free to turn"
    if number == 0 and at > 0:
        return "the part beyond it has no support of its own, so statics settles the moment"
    if number == len(supports) - 1 and at < len(ordered) - 1:
        return "the part beyond it has no support of its own, so statics settles the moment"
    for side, near in ((left, "end"), (right, "start")):
        if side is not None and _spring(side, near) == 0.0:
            return "a member is released there"
    for step in (-1, 1):
        if _hinged(line, ordered, supports, number, step):
            return "a hinge in the span beside it settles the moment"
    return ""


def _hinged(line: Line, ordered: list[int], supports: list[int], number: int, step: int) -> bool:
    """Whether a hinge stands between this support and the next one."""
    other = number + step
    if not 0 <= other < len(supports):
        return False
    low, high = sorted((ordered.index(supports[number]), ordered.index(supports[other])))
    for i in range(low, high):
        member = next(m for m in line.members if {m.start, m.end} == {ordered[i], ordered[i + 1]})
        for end, joint in (("start", member.start), ("end", member.end)):
            inside = joint not in (supports[number], supports[other])
            if inside and _spring(member, end) == 0.0:
                return True
    return False


def _ordered(line: Line) -> list[int]:
    """Joints of the spans, left to right."""
    used = {j for m in line.members if m.role == "span" for j in (m.start, m.end)}
    return sorted(used, key=lambda j: line.joints[j].x)


def _supported(line: Line, joint: int) -> bool:
    support = line.joints[joint].support
    return support is not None and support.vertical > 0.0


def _turns_stiffly(line: Line, joint: int) -> bool:
    support = line.joints[joint].support
    return support is not None and support.rotation > 0.0


def _member_to(line: Line, joint: int, end: str) -> Member | None:
    return next((m for m in line.members if (m.end if end == "end" else m.start) == joint), None)


def _spring(member: Member, end: str) -> float:
    spring = member.start_spring if end == "start" else member.end_spring
    return 0.0 if spring == 0.0 else RIGID
