"""Joints of frames on common levels, common verticals and straight lines.

Members are rigid axially, so a node that lies a hair off the straight line of a braced beam would
act as the crown of a three-hinged strut and hold what nothing holds.  Distances up to a
millimetre are taken for what they are: noise of a model.
"""

from __future__ import annotations

from collections.abc import Sequence

from analysis_core.idealise.draft import Bar, Draft, DraftJoint

NOISE = 1e-3
"""Joints this near (m) to a level, a vertical or a straight line are meant to be on it."""


def snap(draft: Draft) -> None:
    """Move the joints of a frame onto common levels and verticals, then onto straight members."""
    for joint, x in zip(draft.joints, _clustered([j.x for j in draft.joints]), strict=True):
        joint.x = x
    for joint, z in zip(draft.joints, _clustered([j.z for j in draft.joints]), strict=True):
        joint.z = z
    _straighten(draft)


def _clustered(values: Sequence[float]) -> list[float]:
    """Replace values that follow each other within the noise by the middle of their range."""
    order = sorted(range(len(values)), key=values.__getitem__)
    out = list(values)
    group: list[int] = []
    for index in order:
        if group and values[index] - values[group[0]] > NOISE:
            _level(group, values, out)
            group = []
        group.append(index)
    _level(group, values, out)
    return out


def _level(group: Sequence[int], values: Sequence[float], out: list[float]) -> None:
    if len(group) > 1:
        middle = (values[group[0]] + values[group[-1]]) / 2.0
        for index in group:
            out[index] = middle


def _straighten(draft: Draft) -> None:
    """Put joints inside one straight member back onto the line between its ends."""
    members: dict[str, list[Bar]] = {}
    for bar in draft.bars:
        members.setdefault(bar.member.global_id, []).append(bar)
    for bars in members.values():
        if len(bars) > 1:
            ends = [joint for bar in bars for joint in (bar.start, bar.end)]
            outer = [joint for joint in dict.fromkeys(ends) if ends.count(joint) == 1]
            if len(outer) == 2:
                first, last = (draft.joints[joint] for joint in outer)
                for joint in set(ends) - set(outer):
                    _onto(draft.joints[joint], first, last)


def _onto(joint: DraftJoint, first: DraftJoint, last: DraftJoint) -> None:
    dx, dz = last.x - first.x, last.z - first.z
    size = dx * dx + dz * dz
    if size == 0.0:
        return
    part = ((joint.x - first.x) * dx + (joint.z - first.z) * dz) / size
    x, z = first.x + part * dx, first.z + part * dz
    if max(abs(x - joint.x), abs(z - joint.z)) <= NOISE:
        joint.x, joint.z = x, z
