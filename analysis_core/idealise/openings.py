"""Bearings over openings in walls: doors and windows may have left nothing to bear on."""

from __future__ import annotations

from analysis_core.building import Carrier, Opening
from analysis_core.idealise.draft import Draft
from analysis_core.idealise.log import Log, named
from analysis_core.idealise.physical import PhysicalScheme
from analysis_core.idealise.plan import gap_to
from analysis_core.model import FREE

_SLUG = "bearing-over-opening"
# An opening within this of a beam's underside leaves no lintel (m).
_NO_LINTEL = 0.05
# A hole that goes less far below the underside is the pocket of the beam itself.
_POCKET = 0.3
# With this much wall above it an opening no longer concerns the bearing.
_DEEP = 1.5


def report_openings(physical: PhysicalScheme, log: Log) -> None:
    """Name bearings on a wall where an opening lies under the beam."""
    walls: dict[str, Carrier] = {c.global_id: c for c in physical.carriers if c.openings}
    if not walls:
        return
    for draft in physical.scheme.drafts:
        for number, joint in enumerate(draft.joints):
            wall = walls.get(joint.element or "")
            if wall is not None and joint.vertical > FREE and not joint.settled:
                _report(draft, number, wall, log)


def _report(draft: Draft, number: int, wall: Carrier, log: Log) -> None:
    point = draft.point(number)
    bar = next(bar for bar in draft.bars if number in (bar.start, bar.end))
    section = bar.member.section
    underside = point[2] - (section.depth - section.top if section else 0.0)
    for hole in wall.openings:
        if gap_to(hole.corners, (point[0], point[1])) > 0.0 or not _concerns(hole, underside):
            continue
        lintel = min(underside, wall.top) - hole.top
        bare = lintel < _NO_LINTEL
        what = (
            "so that nothing is there to carry it. Give the model what carries it, or state the "
            "support in the job file (supports: on, end)"
            if bare
            else f"with {lintel * 1e3:.0f} mm of wall between. The lintel must be able to carry it"
        )
        log.add(
            "warning" if bare else "note",
            _SLUG,
            f"Line {draft.mark} bears on wall {named(wall)} over an opening, {what}.",
            (*draft.elements, wall.global_id),
            draft.mark,
        )


def _concerns(hole: Opening, underside: float) -> bool:
    return hole.bottom < underside - _POCKET and hole.top > underside - _DEEP
