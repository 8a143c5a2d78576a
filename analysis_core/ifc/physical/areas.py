"""Slabs and spaces as areas in plan: true outlines with voids, not convex ones."""

from __future__ import annotations

from collections.abc import Sequence
from contextlib import suppress
from typing import Any, NamedTuple

import numpy as np

from analysis_core.building import Area, Opening
from analysis_core.ifc.bodies.extents import Extent, ExtentReader, plan_rings
from analysis_core.ifc.bodies.items import Item, Mesh, Prism
from analysis_core.ifc.bodies.mesh_cuts import hull
from analysis_core.ifc.geometry.frames import Frame
from analysis_core.ifc.geometry.outline import Floats
from analysis_core.ifc.physical.elements import Elements
from analysis_core.ifc.physical.notes import Notes
from analysis_core.ifc.physical.records import Record
from analysis_core.ifc.unreadable import READ_ERRORS

Ring = tuple[tuple[float, float], ...]
_THROUGH = 0.02
_SAME_AREA = 0.01


class _Plan(NamedTuple):
    outline: Floats
    voids: tuple[Floats, ...]


class AreaReader:
    """Reads areas; ``openings`` lists those of each host by its entity number."""

    def __init__(self, elements: Elements, extents: ExtentReader, notes: Notes) -> None:
        self._elements = elements
        self._extents = extents
        self._notes = notes
        self.openings: dict[int, list[Any]] = {}
        for relation in elements.of_class("IfcRelVoidsElement") or ():
            with suppress(*READ_ERRORS):
                self.openings.setdefault(relation[4].id(), []).append(relation[5])

    def area(
        self, record: Record, items: Sequence[Item], frame: Frame, extent: Extent
    ) -> Area | None:
        """Return a slab or space as an area, None where it has no plan outline."""
        plans = [plan for item in items if (plan := _plan(item, frame)) is not None]
        if not plans:
            return None
        plans.sort(key=lambda plan: -abs(_area(plan.outline)))
        plan = plans[0]
        whole = abs(_area(hull(np.array(extent.corners))))
        if len(plans) > 1 and abs(_area(plan.outline)) < (1.0 - _SAME_AREA) * whole:
            plan = _Plan(np.array(extent.corners), ())
            self._notes.group(
                "note",
                "area-outline",
                ": its body has several parts; area loads take their convex outline",
                "Draw the slab as one body where that is too much.",
                record,
            )
        voids = [*plan.voids, *self._opening_rings(record, plan, extent)]
        elements = self._elements
        space = record.ifc_class == "IfcSpace"
        return Area(
            global_id=record.global_id,
            name=record.name,
            ifc_class=record.ifc_class,
            bottom=extent.bottom,
            top=extent.bottom if space else extent.top,
            outline=_ring(plan.outline),
            voids=tuple(_ring(void) for void in voids),
            storey=elements.storey(record),
            type_name="" if space else elements.type_name(record),
            material=None if space else elements.unnoted_material(elements.choice(record)),
        )

    def wall_openings(self, record: Record) -> tuple[Opening, ...]:
        """Return the openings of a wall that can be read."""
        found = []
        for opening in self.openings.get(record.id, ()):
            with suppress(*READ_ERRORS):
                hole = Record.of(opening)
                items = self._elements.shape(hole).items
                reach = self._extents.extent(items, self._elements.frame(hole))
                if reach is not None:
                    found.append(Opening(reach.bottom, reach.top, reach.corners))
        return tuple(found)

    def _opening_rings(self, record: Record, plan: _Plan, extent: Extent) -> list[Floats]:
        rings: list[Floats] = []
        for opening in self.openings.get(record.id, ()):
            try:
                hole_record = Record.of(opening)
                frame = self._elements.frame(hole_record)
                items = self._elements.shape(hole_record).items
            except READ_ERRORS:
                continue
            reach = self._extents.extent(items, frame)
            if reach is None or not _goes_through(reach, extent):
                continue
            for item in items:
                hole = _plan(item, frame)
                if hole is None:
                    continue
                if all(_holds(plan.outline, x, y) for x, y in hole.outline.tolist()):
                    rings.append(hole.outline)
                else:
                    self._notes.group(
                        "note",
                        "opening-at-edge",
                        "with an opening that cuts the edge; area loads take them without it",
                        "Draw the slab's outline as it is where that matters.",
                        record,
                    )
        return rings


def _goes_through(hole: Extent, slab: Extent) -> bool:
    return hole.top > slab.top - _THROUGH and hole.bottom < slab.bottom + _THROUGH


def _plan(item: Item, frame: Frame) -> _Plan | None:
    """The outline of a body seen from above."""
    if isinstance(item, Prism):
        return _prism_plan(item, frame)
    if isinstance(item, Mesh):
        return _mesh_plan(item, frame)
    return None


def _prism_plan(prism: Prism, frame: Frame) -> _Plan | None:
    rings = plan_rings(prism, frame)
    if rings:
        return _Plan(rings[0], tuple(rings[1:]))
    # Carried sideways: what it sweeps.
    reach = ExtentReader().extent([prism], frame)
    if reach is None or len(reach.corners) < 3:
        return None
    return _Plan(np.array(reach.corners), ())


def _mesh_plan(mesh: Mesh, frame: Frame) -> _Plan | None:
    rings = plan_rings(mesh, frame)
    corners = hull(mesh.moved(frame).points[:, :2])
    if not rings or abs(_area(rings[0])) < 0.6 * abs(_area(corners)):
        # Sloping slabs are not cut whole by a level plane.
        rings = [corners]
    if len(rings[0]) < 3:
        return None
    return _Plan(rings[0], tuple(ring for ring in rings[1:] if _area(ring) < 0.0))


def _area(ring: Floats) -> float:
    x, y = ring[:, 0] - ring[0, 0], ring[:, 1] - ring[0, 1]
    return float(0.5 * (x * np.roll(y, -1) - np.roll(x, -1) * y).sum())


def _ring(points: Floats) -> Ring:
    return tuple((x, y) for x, y in points.tolist())


def _holds(ring: Floats, x: float, y: float) -> bool:
    inside = False
    x0, y0 = ring[-1].tolist()
    for x1, y1 in ring.tolist():
        if (y0 > y) != (y1 > y) and x < x0 + (x1 - x0) * (y - y0) / (y1 - y0):
            inside = not inside
        x0, y0 = x1, y1
    return inside
