"""What is worth telling about members as they were read: offsets, profiles, duplicates."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any

from analysis_core.building import AxisMember
from analysis_core.findings import Finding
from analysis_core.ifc.notes import Notes
from analysis_core.ifc.sections import Profile
from analysis_core.ifc.sticks import Stick
from analysis_core.model import Section

_OFFSET_WORTH_TELLING = 0.01
_PROFILES_AGREE = 0.02
_SAME_PLACE = 0.02
_CELL = 1.0


def note_stick(entity: Any, stick: Stick, notes: Notes) -> None:
    """Note what had to be assumed about a member's line, and how far its drawn axis is off."""
    for remark in stick.remarks:
        notes.group("note", "body-assumed", f": {remark}", "", entity)
    if stick.offset > _OFFSET_WORTH_TELLING:
        notes.spread(
            "note",
            "axis-offset",
            "drawn axis lies off the centroid line of the body; direction and extent were taken "
            "from the axis, the position from the body",
            stick.offset,
            entity,
        )


def note_section(
    entity: Any,
    section: Section | None,
    drawn: Profile | None,
    stated: Profile | None,
    notes: Notes,
) -> None:
    """Note a missing section, and an associated profile that contradicts the body."""
    if section is None:
        notes.no_section(entity)
        return
    if drawn is not None and stated is not None:
        pairs = (
            (drawn.moments.area, stated.moments.area),
            (drawn.moments.yy, stated.moments.yy),
            (drawn.moments.xx, stated.moments.xx),
        )
        if any(abs(mine - theirs) > _PROFILES_AGREE * theirs for mine, theirs in pairs):
            notes.group(
                "warning",
                "profile-disagrees",
                f"whose body is '{drawn.name or drawn.drawn.shape}' of "
                f"{drawn.moments.area * 1e4:.4g} cm², while the associated profile is "
                f"'{stated.name or stated.drawn.shape}' of {stated.moments.area * 1e4:.4g} cm²; "
                f"the body was taken",
                "Correct the body or the profile.",
                entity,
            )


def note_duplicates(members: list[AxisMember], notes: Notes) -> None:
    """Take out members drawn twice in the same place, and say so."""
    doubled = _doubles(members)
    for first, second in doubled:
        notes.add(
            Finding(
                "warning",
                "duplicate-member",
                f"{second.ifc_class} '{second.name}' lies where {first.ifc_class} '{first.name}' "
                f"lies, with the same section; it was left out. Delete one of them.",
                (second.global_id, first.global_id),
            )
        )
    gone = {second.global_id for _, second in doubled}
    members[:] = [member for member in members if member.global_id not in gone]


def _doubles(members: Sequence[AxisMember]) -> list[tuple[AxisMember, AxisMember]]:
    found = []
    seen: dict[tuple[int, int, int], list[AxisMember]] = {}
    for member in members:
        cells = _cells(member)
        twin = next(
            (other for cell in cells for other in seen.get(cell, ()) if _same(member, other)), None
        )
        if twin is not None:
            found.append((twin, member))
        else:
            for cell in cells:
                seen.setdefault(cell, []).append(member)
    return found


def _cells(member: AxisMember) -> set[tuple[int, int, int]]:
    """Cells of a coarse grid in which the middle lies, its neighbours too where it is near."""
    (x, y, z), (x2, y2, z2) = member.start, member.end
    middle = (0.5 * (x + x2), 0.5 * (y + y2), 0.5 * (z + z2))
    low = [math.floor((c - 0.5 * _SAME_PLACE) / _CELL) for c in middle]
    high = [math.floor((c + 0.5 * _SAME_PLACE) / _CELL) for c in middle]
    if low == high:
        return {(low[0], low[1], low[2])}
    return {(i, j, k) for i in (low[0], high[0]) for j in (low[1], high[1])
            for k in (low[2], high[2])}  # fmt: skip


def _same(a: AxisMember, b: AxisMember) -> bool:
    straight = max(math.dist(a.start, b.start), math.dist(a.end, b.end))
    crossed = max(math.dist(a.start, b.end), math.dist(a.end, b.start))
    if min(straight, crossed) > _SAME_PLACE:
        return False
    if a.section is None or b.section is None:
        return a.section is b.section
    return abs(a.section.area - b.section.area) < 0.02 * a.section.area
