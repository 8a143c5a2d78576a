"""Members that lean out of the plane of what they hold up: no vertical plane has both."""

from __future__ import annotations

import math

from analysis_core.idealise.draft import Draft
from analysis_core.idealise.log import named
from analysis_core.model import RIGID
from analysis_core.settings import Tolerances


def fault_leaning(drafts: list[Draft], tolerances: Tolerances) -> None:
    """Refuse lines and frames that meet a leaning member outside their plane.

    A plane has the forces along such a member only in part, so neither side can be analysed
    alone.  Where the job file states a support at the joint, that stands in for the member.
    """
    leaning = [draft for draft in drafts if _leans(draft, tolerances)]
    for draft in leaning:
        keys = {joint.key for joint in draft.joints}
        met = False
        for other in drafts:
            if other is draft:
                continue
            joints = [j for j in other.joints if j.key in keys and j.vertical != RIGID]
            if joints and not all(joint.settled for joint in joints):
                met = True
                _fault(other, draft)
        if met:
            draft.faults.append(("not-in-a-vertical-plane", _own_clause(draft)))


def _leans(draft: Draft, tolerances: Tolerances) -> bool:
    """Whether a draft holds nothing but members steeper than a beam."""
    steepest = math.sin(tolerances.beam_slope)
    return all(abs(draft.direction(bar)[1]) > steepest for bar in draft.bars) and not all(
        abs(draft.direction(bar)[0]) < math.sin(tolerances.collinear) for bar in draft.bars
    )


def _fault(other: Draft, draft: Draft) -> None:
    names = " and ".join(dict.fromkeys(named(bar.member) for bar in draft.bars))
    other.faults.append(
        (
            "meets-leaning-member",
            f"member {names} leans out of its plane and meets it at a joint that nothing else "
            f"holds. State a support there in the job file (supports: on, end) in its place",
        )
    )


def _own_clause(draft: Draft) -> str:
    names = " and ".join(dict.fromkeys(named(bar.member) for bar in draft.bars))
    return (
        f"member {names} leans across the plane of the members that it meets, and no vertical "
        f"plane has them all. Only plane lines and frames are analysed; state a support in the "
        f"job file where it holds the others up"
    )
