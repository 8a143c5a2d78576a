"""Joints put into a draft after it was laid out: supports and hinges along a member."""

from __future__ import annotations

from analysis_core.idealise.draft import Bar, Draft, DraftJoint
from analysis_core.model import RIGID

_ONE_JOINT = 1e-3


def joint_at(draft: Draft, element: str, station: float, key: str) -> int:
    """Return the joint at a station of a member, new (with ``key``) where there was none.

    A station beyond the member's bars means the nearest end.  Joints of a line stay in order, so
    numbers got before may change; keys do not.
    """
    bars = sorted(
        (bar for bar in draft.bars if bar.member.global_id == element),
        key=lambda bar: min(bar.station_start, bar.station_end),
    )
    for bar in bars:
        high = max(bar.station_start, bar.station_end)
        if station > high + _ONE_JOINT and bar is not bars[-1]:
            continue
        share = (station - bar.station_start) / (bar.station_end - bar.station_start)
        size = draft.length(bar)
        if share * size <= _ONE_JOINT:
            return bar.start
        if share * size >= size - _ONE_JOINT:
            return bar.end
        return _split(draft, bar, share, key)
    raise ValueError(f"member {element} has no bar in line {draft.mark}")


def end_joint(draft: Draft, element: str, *, last: bool) -> int:
    """Return the joint at the start or end of a member, as it is drawn."""
    bars = [bar for bar in draft.bars if bar.member.global_id == element]
    ends = [(bar.station_start, bar.start) for bar in bars]
    ends += [(bar.station_end, bar.end) for bar in bars]
    return max(ends)[1] if last else min(ends)[1]


def bars_at(draft: Draft, joint: int) -> list[Bar]:
    """Return the bars that meet at a joint."""
    return [bar for bar in draft.bars if joint in (bar.start, bar.end)]


def _split(draft: Draft, bar: Bar, share: float, key: str) -> int:
    a, b = draft.joints[bar.start], draft.joints[bar.end]
    joint = DraftJoint(a.x + share * (b.x - a.x), a.z + share * (b.z - a.z), key)
    number = bar.start + 1 if draft.kind == "line" else len(draft.joints)
    for other in draft.bars:  # make room
        other.start += other.start >= number
        other.end += other.end >= number
    draft.joints.insert(number, joint)
    station = bar.station_start + share * (bar.station_end - bar.station_start)
    second = Bar(
        bar.member, number, bar.end, station, bar.station_end, RIGID, bar.end_spring, bar.role
    )
    bar.end, bar.station_end, bar.end_spring = number, station, RIGID
    draft.bars.insert(draft.bars.index(bar) + 1, second)
    return number


def member_at(draft: Draft, distance: float) -> tuple[str, float]:
    """Return the member and its station at a distance along a line from its first joint."""
    covered = 0.0
    spans = [bar for bar in draft.bars if bar.role == "span"]
    for bar in spans:
        size = draft.length(bar)
        if distance <= covered + size or bar is spans[-1]:
            share = min(1.0, max(0.0, (distance - covered) / size))
            station = bar.station_start + share * (bar.station_end - bar.station_start)
            return bar.member.global_id, station
        covered += size
    raise ValueError(f"line {draft.mark} has no bars")
