"""What is worth telling about members as they were read: offsets, profiles, duplicates."""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import combinations
from typing import Any

import numpy as np

from analysis_core.building import AxisMember
from analysis_core.findings import Finding
from analysis_core.ifc.bodies.sticks import Stick
from analysis_core.ifc.physical.notes import Notes
from analysis_core.ifc.physical.records import Record
from analysis_core.ifc.sections.reader import Profile
from analysis_core.ifc.unreadable import text_of
from analysis_core.model import Section

_OFFSET_WORTH_TELLING = 0.01
_PROFILES_AGREE = 0.02
_SAME_PLACE = 0.02
_MOST_IN_ONE_PLACE = 20


def note_stick(record: Record, stick: Stick, notes: Notes) -> None:
    """Note what had to be assumed about a member's line, and how far its drawn axis is off."""
    if stick.offset <= _OFFSET_WORTH_TELLING and not stick.remarks:
        return
    for remark in stick.remarks:
        notes.group("note", "body-assumed", f": {remark}", "", record)
    if stick.offset > _OFFSET_WORTH_TELLING:
        notes.spread(
            "note",
            "axis-offset",
            "drawn axis lies off the centroid line of the body; direction and extent were taken "
            "from the axis, the position from the body",
            stick.offset,
            record,
        )


def note_section(
    record: Record,
    section: Section | None,
    drawn: Profile | None,
    stated: Profile | None,
    notes: Notes,
) -> None:
    """Note a missing section, and an associated profile that contradicts the body."""
    if section is None:
        notes.no_section(record)
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
                record,
            )


def note_two_containers(record: Record, containers: Sequence[Any], notes: Notes) -> None:
    """Note an element that several storeys (or other containers) claim."""
    names = ", ".join(f"'{text_of(c[2]) or text_of(c[0])}'" for c in containers)
    notes.group(
        "note",
        "two-containers",
        f"contained in more than one place ({names}); the first was taken",
        "Contain each element once.",
        record,
    )


def note_openings(record: Record, notes: Notes) -> None:
    """Note a member with openings."""
    notes.group(
        "note",
        "openings-ignored",
        "with openings; their sections were taken without them",
        "Check the section at the opening by hand.",
        record,
    )


def note_unreadable_relations(relations: Sequence[Any], notes: Notes) -> None:
    """Note relations whose attributes do not fit the standard."""
    if relations:
        named = ", ".join(f"{r.is_a()} #{r.id()}" for r in relations[:3])
        notes.add(
            Finding(
                "warning",
                "relation-unreadable",
                f"{len(relations)} relations hold values that do not fit the standard ({named}); "
                f"what they say of storeys, types, parts or materials is missing. Export the "
                f"model again.",
            )
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
    gone: set[int] = set()
    for first, second in _candidates(members):
        if first not in gone and second not in gone and _same(members[first], members[second]):
            gone.add(second)
            found.append((members[first], members[second]))
    return found


def _candidates(members: Sequence[AxisMember]) -> list[tuple[int, int]]:
    """Pairs whose middles share a cell of a grid, tried with eight grids half a cell apart."""
    if len(members) < 2:
        return []
    ends = np.array([(member.start, member.end) for member in members])
    middles = ends.mean(axis=1)
    middles -= middles[0]
    pairs: set[tuple[int, int]] = set()
    for shift in range(8):
        offset = np.array([shift & 1, shift >> 1 & 1, shift >> 2]) * 0.5
        cells = np.floor(middles / (2.0 * _SAME_PLACE) + offset).astype(np.int64)
        order = np.lexsort(cells.T)
        new = np.concatenate([[True], (cells[order][1:] != cells[order][:-1]).any(axis=1), [True]])
        starts = np.flatnonzero(new)
        for i in np.flatnonzero(np.diff(starts) > 1).tolist():
            group = sorted(order[starts[i] : starts[i + 1]].tolist())
            pairs.update(combinations(group[:_MOST_IN_ONE_PLACE], 2))
    return sorted(pairs)


def _same(a: AxisMember, b: AxisMember) -> bool:
    straight = max(math.dist(a.start, b.start), math.dist(a.end, b.end))
    crossed = max(math.dist(a.start, b.end), math.dist(a.end, b.start))
    if min(straight, crossed) > _SAME_PLACE:
        return False
    if a.section is None or b.section is None:
        return a.section is b.section
    return abs(a.section.area - b.section.area) < 0.02 * a.section.area
