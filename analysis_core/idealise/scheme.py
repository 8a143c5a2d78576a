"""All drafts of a building and how they rest on each other, whichever way they came."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

from analysis_core.findings import listed
from analysis_core.idealise.carrying import Body, Contact, standing
from analysis_core.idealise.draft import Bar, Draft, DraftJoint
from analysis_core.idealise.log import Log
from analysis_core.idealise.properties import PropertyTable
from analysis_core.model import FREE

# Supports nearer to each other than this are one (m).
_APART = 0.05
# What is this many times as stiff as a line that rests on it is near enough to a rigid support.
_FIRM = 10.0


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


def stiffness_at(draft: Draft, x: float, element: str, table: PropertyTable) -> float:
    """Return roughly how stiff a draft is against a force at ``x``, N/m.

    As a simple beam of the member ``element`` between the supports on both sides, a and b away:
    3 EI L / (a² b²); beyond its supports as a cantilever: 3 EI / a³.
    """
    member = next(bar.member for bar in draft.bars if bar.member.global_id == element)
    properties = table.of(member)
    if properties.section is None or properties.material is None:
        return 0.0
    rigidity = 3.0 * properties.section.inertia * properties.material.elastic_modulus
    held = [j.x for j in draft.joints if j.vertical > FREE and abs(j.x - x) > 1e-3]
    a = min((x - other for other in held if other < x), default=0.0)
    b = min((other - x for other in held if other > x), default=0.0)
    if a > 0.0 and b > 0.0:
        return rigidity * (a + b) / (a * a * b * b)
    ends = [j.x for j in draft.joints]
    return rigidity / max(a, b, (max(ends) - min(ends)) / 2.0, 1e-3) ** 3


def yields_like(below: float, own: float) -> str:
    """Say how soft a carrier is (N/m) for a line that stands without it, "" where it is firm."""
    if below > _FIRM * own:
        return ""
    times = f"only {below / own:.2g} times as stiff" if own > 0.0 else "of unknown stiffness"
    return f"is taken as a rigid support although it is {times} against a force there"


def stands_without(draft: Draft, joint: DraftJoint) -> bool:
    """Whether two other places hold a draft up."""
    others = [j.x for j in draft.joints if j.vertical > FREE and j is not joint]
    return len(others) > 1 and max(others) - min(others) > _APART


def x_of(draft: Draft, member: str, station: float) -> float:
    """Return where a station of a member lies along a draft."""
    bars = [bar for bar in draft.bars if bar.member.global_id == member]

    def beyond(bar: Bar) -> float:
        low, high = sorted((bar.station_start, bar.station_end))
        return max(low - station, station - high)

    bar = min(bars, key=beyond)
    share = (station - bar.station_start) / (bar.station_end - bar.station_start)
    a, b = draft.joints[bar.start].x, draft.joints[bar.end].x
    return a + share * (b - a)


def fallen_of(drafts: Sequence[Draft]) -> frozenset[int]:
    """Return which drafts are held up by too little, counting the lines that carry them."""
    upright = standing([body_of(draft) for draft in drafts], ())
    return frozenset(n for n, draft in enumerate(drafts) if draft.mark not in upright)


def fault_fallen(drafts: Sequence[Draft]) -> None:
    """Mark every draft that is held up by too little, counting the lines that carry it."""
    for number in sorted(fallen_of(drafts)):
        _fault(drafts[number])


def report_on_faulty(scheme: Scheme, table: PropertyTable, log: Log) -> None:
    """Warn of lines that rest on one that cannot be analysed."""
    faulty = {
        draft.mark
        for draft in scheme.drafts
        if draft.faults or any(table.of(bar.member).fault for bar in draft.bars)
    }
    resting: dict[str, dict[str, None]] = {}
    for rest in scheme.rests:
        if rest.carrier.mark in faulty and rest.carried.mark not in faulty:
            resting.setdefault(rest.carrier.mark, {})[rest.carried.mark] = None
    for mark, carried in resting.items():
        log.add(
            "warning",
            "carrier-not-analysed",
            f"{listed(carried)} rest on line {mark}, which cannot be analysed; they are analysed "
            f"as if it held them, and what they hand to it goes nowhere.",
            (),
            mark,
        )


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
