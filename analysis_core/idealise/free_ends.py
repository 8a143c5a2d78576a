"""Ends of physical lines that bear on nothing: overhangs, and what is nearest to them."""

from __future__ import annotations

import math

import numpy as np

from analysis_core.idealise.bearing_search import boxes_of_carriers
from analysis_core.idealise.bearings import kind_of
from analysis_core.idealise.draft import Draft, DraftJoint
from analysis_core.idealise.log import Log
from analysis_core.idealise.pairs import overlapping
from analysis_core.idealise.physical import PhysicalScheme
from analysis_core.idealise.plan import gap_to
from analysis_core.model import FREE

# How far a missing bearing is looked for, sideways and in height (m).
_REACH = np.array([2.0, 2.0, 1.5])
# Nearer than this (m) it would hold the end if it came from below.
_HERE = 0.05
# An overhang longer than this part of the next span is worth a warning.
_LONG = 0.5


def explain_free_ends(physical: PhysicalScheme, log: Log) -> None:
    """Say at every free end how far it overhangs, or what would be near enough to carry it."""
    ends = [
        (draft, joint)
        for draft in physical.scheme.drafts
        for joint in (draft.joints[0], draft.joints[-1])
        if joint.support is None and not joint.settled
    ]
    nearest = _nearest(physical, ends)
    for (draft, joint), text in zip(ends, nearest, strict=True):
        overhang, span = _overhang(draft, joint)
        if overhang is None:
            joint.reason = f"{joint.reason}; {text}" if joint.reason else text
            continue
        joint.reason = f"free end: overhangs its last bearing by {overhang:.2f} m"
        if span is not None and overhang > _LONG * span:
            log.add(
                "warning",
                "long-overhang",
                f"An end of line {draft.mark} overhangs its last bearing by {overhang:.2f} m, next "
                f"to a span of {span:.2f} m; {text}. State a support in the job file if it does "
                f"not overhang.",
                draft.elements,
                draft.mark,
            )


def _overhang(draft: Draft, joint: DraftJoint) -> tuple[float | None, float | None]:
    """Return the length of the overhang at an end, and of the span next to it."""
    here = math.hypot(joint.x - draft.joints[0].x, joint.z - draft.joints[0].z)
    places = sorted(
        (abs(math.hypot(j.x - draft.joints[0].x, j.z - draft.joints[0].z) - here))
        for j in draft.joints
        if j.vertical > FREE
    )
    fixed = any(j.rotation > FREE for j in draft.joints)
    if not places or (len(places) < 2 and not fixed):
        return None, None
    return places[0], places[1] - places[0] if len(places) > 1 else None


def _nearest(physical: PhysicalScheme, ends: list[tuple[Draft, DraftJoint]]) -> list[str]:
    if not ends:
        return []
    carriers = [c for c in physical.carriers if kind_of(c) not in (None, "slab")]
    points = np.array([draft.plane.world(j.x, j.z) for draft, j in ends]).reshape(-1, 3)
    best: dict[int, tuple[float, str]] = {}
    around = np.hstack([points - _REACH, points + _REACH])
    i, k = overlapping(around, boxes_of_carriers(carriers))
    for a, b in zip(i.tolist(), k.tolist(), strict=True):
        carrier = carriers[b]
        gap = gap_to(carrier.corners, (points[a][0], points[a][1]))
        rise = max(carrier.bottom - points[a][2], points[a][2] - carrier.top, 0.0)
        name = f"{kind_of(carrier)} '{carrier.name}' (GlobalId {carrier.global_id})"
        if gap + rise < _HERE:
            text = f"{name} is there, but does not come up to it from below"
        else:
            text = (
                f"the nearest is {name}, {gap * 1e3:.0f} mm away in plan and {rise * 1e3:.0f} mm "
                f"in height"
            )
        best[a] = min(best.get(a, (math.inf, "")), (gap + rise, text))
    nothing = "no column, wall or footing is within 2 m"
    return [best[a][1] if a in best else nothing for a in range(len(ends))]
