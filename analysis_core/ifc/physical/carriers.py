"""Columns, walls, footings and slabs as what beams may bear on, and as areas that take loads."""

from __future__ import annotations

from collections.abc import Iterable

from analysis_core.building import Area, Carrier, Opening
from analysis_core.ifc.bodies.extents import Extent, ExtentReader
from analysis_core.ifc.physical.areas import AreaReader
from analysis_core.ifc.physical.elements import Elements
from analysis_core.ifc.physical.laid import Laid, LaidReader, Placed
from analysis_core.ifc.physical.notes import Notes
from analysis_core.ifc.physical.records import Record
from analysis_core.ifc.unreadable import UnreadableShapeError

_FARTHEST = 1e8


class CarrierReader:
    """Collects carriers and areas.  Its methods raise UnreadableShapeError."""

    def __init__(self, elements: Elements, laying: LaidReader, notes: Notes) -> None:
        self._elements = elements
        self._laying = laying
        self._extents = ExtentReader()
        self.areas_of = AreaReader(elements, self._extents, notes)
        self.carriers: list[Carrier] = []
        self.areas: list[Area] = []

    def add_column(self, record: Record, placed: Placed, laid: Laid) -> None:
        """Add a member that stands: with its axis, lower end first, and its section."""
        extent = self._extents.extent(placed.shape.items, placed.frame)
        if extent is None:
            extent = self._extents.of_stick(laid.stick, placed.frame)
        laid = self._laying.rising(record, laid, placed)
        self._append(record, record.ifc_class, extent, placed, laid)

    def add(self, record: Record, placed: Placed, ifc_class: str) -> Extent:
        """Add an element by its outline, in several convex pieces where it is not convex."""
        extent = self._extent(placed)
        openings = self.areas_of.wall_openings(record) if "Wall" in record.ifc_class else ()
        for piece in self._extents.pieces(placed.shape.items, placed.frame):
            self._append(record, ifc_class, piece, placed, openings=openings)
        return extent

    def add_slab(self, record: Record) -> None:
        """Add a slab: beams may bear on it, and it takes area loads."""
        placed = self._laying.placed(record)
        self._add_area(record, placed, self.add(record, placed, record.ifc_class))

    def add_space(self, record: Record) -> None:
        """Add the floor of a space as an area."""
        placed = self._laying.placed(record)
        self._add_area(record, placed, self._extent(placed))

    def _extent(self, placed: Placed) -> Extent:
        extent = self._extents.extent(placed.shape.items, placed.frame)
        if extent is None:
            raise UnreadableShapeError("; ".join(placed.shape.troubles) or "it has no body")
        return extent

    def _add_area(self, record: Record, placed: Placed, extent: Extent) -> None:
        area = self.areas_of.area(record, placed.shape.items, placed.frame, extent)
        if area is not None:
            self.areas.append(area)

    def _append(
        self,
        record: Record,
        ifc_class: str,
        extent: Extent,
        placed: Placed,
        laid: Laid | None = None,
        openings: tuple[Opening, ...] = (),
    ) -> None:
        check_place((extent.bottom, extent.top, *(v for corner in extent.corners for v in corner)))
        elements = self._elements
        lying = laid.lying if laid else None
        self.carriers.append(
            Carrier(
                global_id=record.global_id,
                name=record.name,
                ifc_class=ifc_class,
                bottom=extent.bottom,
                top=extent.top,
                corners=extent.corners,
                start=lying.start if lying else None,
                end=lying.end if lying else None,
                section=laid.section if laid else None,
                material=elements.material(record, placed.choice) if laid else None,
                storey=elements.storey(record),
                up=lying.up if lying else (1.0, 0.0, 0.0),
                openings=openings,
            )
        )


def check_place(coordinates: Iterable[float]) -> None:
    """Raise UnreadableShapeError for numbers that are nowhere on earth (m)."""
    if not all(-_FARTHEST < value < _FARTHEST for value in coordinates):
        raise UnreadableShapeError(
            f"its coordinates are no finite numbers below {_FARTHEST / 1e3:,.0f} km"
        )
