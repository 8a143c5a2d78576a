"""Which members a slab holds sideways along their top."""

from __future__ import annotations

from collections.abc import Sequence

from analysis_core.building import Area, AxisMember, Building

_POINTS = 9
_NEAR = 0.15
"""A slab this close to the top of a member (m) bears on it; so far past its edge it still does."""


def held_by_slabs(building: Building) -> dict[str, str]:
    """Return the name of a slab by the GlobalId of each member that slabs cover all along."""
    slabs = [area for area in building.areas if area.ifc_class.startswith("IfcSlab")]
    out = {}
    for member in building.members:
        near = [slab for slab in slabs if _levels_meet(member, slab)]
        names = [_covering(point, near) for point in _points(member)]
        if near and all(names):
            out[member.global_id] = names[len(names) // 2]
    return out


def _levels_meet(member: AxisMember, slab: Area) -> bool:
    """The slab lies on the member's top or runs into it."""
    rise = member.section.top if member.section is not None else 0.0
    top = max(member.start[2], member.end[2]) + rise * member.up[2]
    return slab.bottom - _NEAR <= top <= slab.top + _NEAR


def _points(member: AxisMember) -> list[tuple[float, float]]:
    (ax, ay, _), (bx, by, _) = member.start, member.end
    steps = [(i + 0.5) / _POINTS for i in range(_POINTS)]
    return [(ax + t * (bx - ax), ay + t * (by - ay)) for t in steps]


def _covering(point: tuple[float, float], slabs: Sequence[Area]) -> str:
    for slab in slabs:
        if _inside(point, slab.outline) or _edge_distance(point, slab.outline) <= _NEAR:
            holes = [v for v in slab.voids if _inside(point, v)]
            if not any(_edge_distance(point, v) > _NEAR for v in holes):
                return slab.name or slab.global_id
    return ""


def _inside(point: tuple[float, float], outline: Sequence[tuple[float, float]]) -> bool:
    x, y = point
    inside = False
    for (x1, y1), (x2, y2) in zip(outline, [*outline[1:], outline[0]], strict=True):
        if (y1 > y) != (y2 > y) and x < x1 + (y - y1) * (x2 - x1) / (y2 - y1):
            inside = not inside
    return inside


def _edge_distance(point: tuple[float, float], outline: Sequence[tuple[float, float]]) -> float:
    x, y = point
    best = float("inf")
    for (x1, y1), (x2, y2) in zip(outline, [*outline[1:], outline[0]], strict=True):
        dx, dy = x2 - x1, y2 - y1
        size = dx * dx + dy * dy
        t = 0.0 if size == 0.0 else min(1.0, max(0.0, ((x - x1) * dx + (y - y1) * dy) / size))
        best = min(best, ((x - x1 - t * dx) ** 2 + (y - y1 - t * dy) ** 2) ** 0.5)
    return best
