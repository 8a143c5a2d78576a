"""All drafts of a building and how they rest on each other, whichever way they came."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field

from analysis_core.idealise.carrying import Body, Contact, standing
from analysis_core.idealise.draft import Draft
from analysis_core.model import FREE


@dataclass(slots=True)
class Rest:
    """Joint ``joint`` (by key) of ``carried`` rests on ``carrier``, at its joint ``at`` (by key)
    or else at ``station`` of its member ``member``."""

    carried: Draft
    joint: str
    carrier: Draft
    at: str = ""
    member: str = ""
    station: float = 0.0


@dataclass(slots=True)
class Scheme:
    """Drafts, which rests on which, and the draft that takes a vertical action on a shared node."""

    drafts: list[Draft]
    rests: list[Rest] = field(default_factory=list)
    carriers: dict[str, Draft] = field(default_factory=dict)
    contacts: list[Contact] = field(default_factory=list)


def body_of(draft: Draft) -> Body:
    """Return what ``carrying`` needs to know of a draft."""
    grounds = [(joint.x, joint.rotation > FREE) for joint in draft.joints if joint.vertical > FREE]
    return Body(draft.mark, grounds)


def fault_fallen(drafts: Iterable[Draft]) -> None:
    """Mark every draft that is held up by too little, counting the lines that carry it."""
    drafts = list(drafts)
    upright = standing([body_of(draft) for draft in drafts], ())
    for draft in drafts:
        if draft.mark not in upright:
            _fault(draft)


def _fault(draft: Draft) -> None:
    held = [joint for joint in draft.joints if joint.vertical > FREE]
    if not held:
        what = "nothing holds it up"
    else:
        what = f"it is held up at one place only, where it can turn ({held[0].reason})"
    free = [joint.reason for joint in draft.joints if joint.vertical == FREE and joint.reason]
    if free:
        what = f"{what}; {'; '.join(dict.fromkeys(free))}"
    message = (
        f"{what}. Give the model a support there, or state one in the job file (supports: on, end)"
    )
    draft.faults.append(("no-support", message))
