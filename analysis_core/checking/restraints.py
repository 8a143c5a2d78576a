"""Where members are held sideways, and how far they run on where they are not."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache

from analysis_core.checks.design import Restraints
from analysis_core.effects.deflection_limits import Span
from analysis_core.findings import listed
from analysis_core.model import Line, LineModel, Member, Transfer
from analysis_core.settings import RestraintSetting, Settings
from analysis_core.solving.line_selection import chooses
from analysis_core.units import DisplayUnits, display_units

_STRAIGHT = 1e-3  # sine of the angle up to which members run straight on


@dataclass(frozen=True, slots=True)
class Run:
    """A member of a stretch: its own position ``s`` is ``offset + sign * s`` of the stretch."""

    member: Member
    offset: float
    sign: int = 1

    def at(self, s: float) -> float:
        """Return the place on the stretch of a place on the member."""
        return self.offset + self.sign * s


@dataclass(frozen=True, slots=True)
class Stretch:
    """What runs on straight from a member up to where it is held, and its ends.

    Coordinates start at the member's own start.  ``held``: places where both flanges are, by the
    joint; ``loose``: ends that nothing holds.
    """

    runs: tuple[Run, ...]
    held: tuple[float, ...]
    loose: tuple[float, ...]

    @property
    def length(self) -> float:
        """Length of the whole stretch, m."""
        return math.fsum(run.member.length for run in self.runs)


def stretch_of(line: Line, member: Member) -> Stretch:
    """Return the stretch that a member is part of."""
    runs = [Run(member, 0.0)]
    held: list[float] = []
    loose: list[float] = []
    for end, direction in ((member.start, -1), (member.end, 1)):
        joint, last = end, member
        edge = 0.0 if direction < 0 else member.length
        while True:
            if joint_held(line, joint):
                held.append(edge)
                break
            following = _following(line, joint, last)
            if following is None or any(run.member is following for run in runs):
                loose.append(edge)
                break
            forward = (following.start == joint) == (direction > 0)
            begin = edge if following.start == joint else edge + direction * following.length
            runs.append(Run(following, begin, 1 if forward else -1))
            edge += direction * following.length
            joint = following.end if following.start == joint else following.start
            last = following
    runs.sort(key=lambda run: min(run.at(0.0), run.at(run.member.length)))
    return Stretch(tuple(runs), tuple(sorted(held)), tuple(sorted(loose)))


def joint_held(line: Line, joint: int) -> bool:
    """Whether a joint is held sideways: it bears, or members meet there at an angle.

    Both are common practice: a bearing counts as a fork, and so does a corner of a frame.
    """
    support = line.joints[joint].support
    if support is not None and support.vertical > 0.0:
        return True
    meeting = [m for m in line.members if joint in (m.start, m.end)]
    return len(meeting) > 2 or (len(meeting) == 2 and not _straight(line, *meeting))


def restraints(
    line: Line,
    stretch: Stretch,
    member: Member,
    model: LineModel,
    settings: Settings,
    transfers: Sequence[Transfer],
) -> Restraints:
    """Return where the flanges of a member are held sideways, with the reason.

    Both flanges where the stretch bears, the top flange where another line bears on it or a slab
    lies on the member, and what the job file states.  ``transfers``: those of lines that bear
    directly on this one.
    """
    top, bottom = set(stretch.held), set(stretch.held)
    units = _units(settings.display.system, tuple(sorted(settings.display.units.items())))
    reasons = [_at_ends(stretch, member, units)]
    bearing: dict[str, list[str]] = {}
    for run in stretch.runs:
        upper = top if run.sign > 0 else bottom
        for transfer in transfers:
            if transfer.member == run.member.id:
                upper.add(run.at(transfer.position))
                if run.member is member:
                    place = units.text(transfer.position, "length")
                    marks = bearing.setdefault(place, [])
                    if transfer.from_line not in marks:
                        marks.append(transfer.from_line)
    reasons += [
        f"top flange at {place}, where {listed(marks)} {'bears' if len(marks) == 1 else 'bear'}"
        for place, marks in bearing.items()
    ]
    slab = model.held_by.get(member.element, "")
    top_all, bottom_all = bool(slab), False
    if slab:
        reasons.append(f"top flange all along by slab {slab}")
    for setting in settings.checks.restraints:
        for run in stretch.runs:
            if not chooses(setting.on, line, run.member, model):
                continue
            for flange, places in (("top", top), ("bottom", bottom)):
                if setting.flange in (flange, "both"):
                    places |= {run.at(s) for s in _places(setting, run.member)}
            if run.member is member:
                top_all |= setting.continuous and setting.flange in ("top", "both")
                bottom_all |= setting.continuous and setting.flange in ("bottom", "both")
                reasons.append(f"{setting.flange} flange as stated in the job file")
    return Restraints(
        tuple(sorted(top)), tuple(sorted(bottom)), top_all, bottom_all, "; ".join(reasons),
        stretch.loose,
    )  # fmt: skip


@lru_cache(maxsize=8)
def _units(system: str, overrides: tuple[tuple[str, str], ...]) -> DisplayUnits:
    """The display units of a job, once for all of its members."""
    return display_units(system, dict(overrides))


def continuous_ends(line: Line, span: Span) -> int:
    """Return how many ends of a span are kept from turning: it goes on there, or is held."""
    first, last = line.members[span.members[0]], line.members[span.members[-1]]
    ends = ((span.start, first), (span.end, last))
    return sum(_kept_from_turning(line, joint, member) for joint, member in ends)


def _kept_from_turning(line: Line, joint: int, member: Member) -> bool:
    if _spring(member, joint) == 0.0:
        return False
    support = line.joints[joint].support
    if support is not None and support.rotation > 0.0:
        return True
    return any(
        m is not member and joint in (m.start, m.end) and _spring(m, joint) > 0.0
        for m in line.members
    )


def _spring(member: Member, joint: int) -> float:
    return member.start_spring if member.start == joint else member.end_spring


def _following(line: Line, joint: int, member: Member) -> Member | None:
    others = [m for m in line.members if m is not member and joint in (m.start, m.end)]
    return others[0] if len(others) == 1 else None


def _straight(line: Line, one: Member, other: Member) -> bool:
    (ax, az), (bx, bz) = line.direction(one), line.direction(other)
    return abs(ax * bz - az * bx) <= _STRAIGHT


def _at_ends(stretch: Stretch, member: Member, units: DisplayUnits) -> str:
    places = [p for p in stretch.held if -1e-9 <= p <= member.length + 1e-9]
    if len(places) == 2:
        return "both flanges at the ends of the member"
    held = listed([units.text(p, "length") for p in stretch.held]) or "nowhere"
    free = listed([units.text(p, "length") for p in stretch.loose])
    return f"both flanges at {held}" + (f"; nothing holds it at {free}" if free else "")


def _places(setting: RestraintSetting, member: Member) -> list[float]:
    out = []
    for station in setting.stations:
        s = station - member.element_offset
        s = -s if member.reversed_ else s
        if 0.0 <= s <= member.length:
            out.append(s)
    return out
