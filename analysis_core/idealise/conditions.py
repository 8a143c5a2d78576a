"""Supports and releases of an analysis model, put on the joints and bars of a draft."""

from __future__ import annotations

import math

from analysis_core.building import Restraint
from analysis_core.idealise.draft import Bar, Draft, DraftJoint
from analysis_core.idealise.log import Log, named
from analysis_core.idealise.network import Limb, Network, Node
from analysis_core.idealise.supports import direct, in_plane, in_series
from analysis_core.idealise.vectors import UP, Vector, cross, unit
from analysis_core.model import FREE, RIGID


def put_supports(draft: Draft, network: Network, log: Log) -> None:
    """Set the support of every joint whose connection states one."""
    for joint in draft.joints:
        node = network.nodes[joint.key]
        if node.connection is None:
            joint.reason = "free end; no connection is stated here"
            continue
        joint.elements.append(node.connection.global_id)
        if node.connection.restraint is None:
            joint.reason = "free node; held by its members only"
            continue
        _support(draft, joint, node, node.connection.restraint, log)


def _support(draft: Draft, joint: DraftJoint, node: Node, restraint: Restraint, log: Log) -> None:
    connection = node.connection
    assert connection is not None
    held = in_plane(restraint, draft.plane)
    if held.skew and draft.kind == "frame":
        draft.faults.append(
            (
                "skew-support",
                f"the support at connection {named(connection)} holds the frame in a slanting "
                f"direction only; supports of a frame are vertical and horizontal. Turn its "
                f"axes, or replace the slanting roller by a short pin-ended member",
            )
        )
    elif held.skew:
        log.add(
            "note",
            "skew-support",
            f"Connection {named(connection)} holds line {draft.mark} in a slanting direction; the "
            f"line does not slide along its axis, so it is held vertically.",
            (connection.global_id,),
            draft.mark,
        )
    if held.twisted:
        log.add(
            "warning",
            "skew-support",
            f"Connection {named(connection)} holds rotation about axes that are turned against "
            f"the plane of {draft.mark}; rotations out of the plane are taken as nil.",
            (connection.global_id,),
            draft.mark,
        )
    joint.vertical, joint.horizontal, joint.rotation = (
        held.vertical,
        held.horizontal,
        held.rotation,
    )
    if joint.support is not None:
        joint.element = connection.global_id
        joint.reason = f"as stated at connection {named(connection)}: {_worded(joint)}"


def put_releases(draft: Draft, network: Network, log: Log) -> None:
    """Set the end springs of bars from the releases of their attachments."""
    joint_of = draft.joint_of
    for global_id in draft.elements:
        limb = network.limbs[global_id]
        if not limb.member.carries_moment:
            for bar in draft.bars:
                if bar.member is limb.member:
                    bar.start_spring = bar.end_spring = FREE
        for grip in limb.grips:
            if grip.attachment is not None:
                _release(draft, joint_of[grip.node], limb, grip.attachment.release, log)


def _release(draft: Draft, index: int, limb: Limb, release: Restraint, log: Log) -> None:
    joint = draft.joints[index]
    spring = in_plane(release, draft.plane).rotation
    at_joint = [bar for bar in draft.bars if index in (bar.start, bar.end)]
    own = [bar for bar in at_joint if bar.member is limb.member]
    if spring < RIGID:
        if len(own) == 1:
            _loosen(own[0], index, spring)
        else:  # the member runs on; what else is joined here turns against it
            others = [bar for bar in at_joint if bar.member is not limb.member]
            for bar in others:
                _loosen(bar, index, spring)
            joint.rotation = in_series(joint.rotation, spring)
    _sliding(draft, joint, limb, release, alone=len(at_joint) == 1, log=log)


def _loosen(bar: Bar, joint: int, spring: float) -> None:
    if bar.start == joint:
        bar.start_spring = in_series(bar.start_spring, spring)
    else:
        bar.end_spring = in_series(bar.end_spring, spring)


def _sliding(
    draft: Draft, joint: DraftJoint, limb: Limb, release: Restraint, *, alone: bool, log: Log
) -> None:
    """A translational release, along the member and across it within the plane."""
    across = unit(cross(draft.plane.clockwise, limb.direction))
    lengthwise, crosswise = direct(release, limb.direction), direct(release, across)
    where = f"member {named(limb.member)} at joint {joint.key}"
    if crosswise < RIGID:
        if alone and _level(limb.direction):
            joint.vertical = in_series(joint.vertical, crosswise)
        elif alone and _plumb(limb.direction):
            joint.horizontal = in_series(joint.horizontal, crosswise)
        else:
            draft.faults.append(
                (
                    "sliding-release",
                    f"{where} is free to slide across its axis where it meets other members, which "
                    f"cannot be represented. Put the release at a support, or remove it",
                )
            )
    if lengthwise < RIGID and draft.kind == "line":
        log.add(
            "note",
            "axial-release",
            f"The release along the axis of {where} has no effect: a beam line is held along its "
            f"axis as a whole.",
            (limb.member.global_id,),
            draft.mark,
        )
    elif lengthwise < RIGID:
        if alone and _level(limb.direction):
            joint.horizontal = in_series(joint.horizontal, lengthwise)
        elif alone and _plumb(limb.direction):
            joint.vertical = in_series(joint.vertical, lengthwise)
        else:
            draft.faults.append(
                (
                    "sliding-release",
                    f"{where} is free to slide along its axis, which cannot be represented in a "
                    f"frame of axially rigid members. Put the release at a support, or remove it",
                )
            )


def _level(direction: Vector) -> bool:
    return abs(direction[2]) < 1e-3


def _plumb(direction: Vector) -> bool:
    return math.hypot(direction[0], direction[1]) < 1e-3


def _worded(joint: DraftJoint) -> str:
    parts = []
    for label, value, unit_name in (
        ("vertically", joint.vertical, "N/m"),
        ("horizontally", joint.horizontal, "N/m"),
        ("against rotation", joint.rotation, "N·m/rad"),
    ):
        if value == RIGID:
            parts.append(f"held {label}")
        elif value > FREE:
            parts.append(f"{value:.4g} {unit_name} {label}")
    return ", ".join(parts)


def vertical_stiffness(restraint: Restraint | None) -> float:
    """Return the stiffness of a restraint against vertical movement alone."""
    return FREE if restraint is None else direct(restraint, UP)
