"""The physical way in: beams, columns, walls, footings and slabs as the model draws them."""

from __future__ import annotations

import gc
import math
from collections.abc import Iterable, Iterator
from contextlib import contextmanager
from dataclasses import replace
from typing import Any

import numpy as np

from analysis_core.building import Area, AxisMember, Building, Carrier
from analysis_core.ifc.areas import AreaReader
from analysis_core.ifc.body_items import Shape
from analysis_core.ifc.elements import Elements
from analysis_core.ifc.end_releases import NOT_STATED, end_releases
from analysis_core.ifc.extents import Extent, ExtentReader
from analysis_core.ifc.frames import Frame, point
from analysis_core.ifc.main_prism import CurvedMemberError
from analysis_core.ifc.material_choice import Choice
from analysis_core.ifc.member_notes import (
    note_duplicates,
    note_openings,
    note_section,
    note_stick,
    note_two_containers,
    note_unreadable_relations,
)
from analysis_core.ifc.notes import Notes
from analysis_core.ifc.outline import Matrix
from analysis_core.ifc.records import Record
from analysis_core.ifc.roles import RoleJudge, carrier_label, excluded_by_proportion
from analysis_core.ifc.source import Source
from analysis_core.ifc.sticks import Layer, Lying, Stick, stick_of, with_profile
from analysis_core.ifc.unreadable import READ_ERRORS, UnreadableShapeError, reason_of
from analysis_core.model import Section
from analysis_core.settings import Settings

COLUMN_CLASSES = ("IfcColumn", "IfcPile")
OTHER_CARRIER_CLASSES = (
    "IfcWall",
    "IfcFooting",
    "IfcCaissonFoundation",
    "IfcBearing",
)

_FARTHEST = 1e8
# Classes asked for by default that some schemas do not have.
_KNOWN_ELSEWHERE = {
    "IfcBeamStandardCase",
    "IfcMemberStandardCase",
    "IfcCaissonFoundation",
    "IfcBearing",
}


def read_physical(source: Source, settings: Settings) -> Building:
    """Return the building drawn in a file: members that are beams, and what may carry them.

    Nothing is left out in silence: every element of the classes asked for (settings,
    ``analysis.include``) is a member, a carrier or named in a finding.
    """
    # Numbers beyond all measure are caught where they matter; NumPy need not warn as well.
    with _collector_paused(), np.errstate(all="ignore"):
        return _Reader(source, settings).building()


@contextmanager
def _collector_paused() -> Iterator[None]:
    """Stop the garbage collector: a bulk read makes many objects and no rubbish."""
    was_on = gc.isenabled()
    gc.disable()
    try:
        yield
    finally:
        if was_on:
            gc.enable()


class _Reader:
    def __init__(self, source: Source, settings: Settings) -> None:
        self._source = source
        self._settings = settings
        self._notes = Notes()
        self._elements = Elements(source, settings, self._notes)
        self._extents = ExtentReader()
        self._members: list[AxisMember] = []
        self._carriers: list[Carrier] = []
        self._counts: dict[str, int] = {}
        self._named_sections: dict[tuple[int, str], tuple[Section, Section]] = {}
        self._steepest = math.sin(settings.tolerances.beam_slope)
        self._ids: set[str] = set()
        self._roles = RoleJudge(settings.beams)
        self._layer = Layer()
        self._ends = end_releases(source.file)
        self._area_reader = AreaReader(self._elements, self._extents, self._notes)
        self._areas: list[Area] = []

    def building(self) -> Building:
        storeys = self._elements.storeys()
        done: set[int] = set()
        for ifc_class in self._settings.analysis.include:
            self._read_all(ifc_class, self._read_beam, done)
        for ifc_class in COLUMN_CLASSES:
            self._read_all(ifc_class, self._read_column, done)
        for ifc_class in OTHER_CARRIER_CLASSES:
            self._read_all(ifc_class, self._read_carrier, done)
        self._read_all("IfcSlab", self._read_slab, done)
        if self._settings.area_actions:
            self._read_all("IfcSpace", self._read_space, done)
        self._count("taken as beams", len(self._members))
        self._elements.note_materials()
        self._note_relations()
        note_duplicates(self._members, self._notes)
        return Building(
            route="physical",
            schema=self._source.schema,
            name=self._source.name,
            members=tuple(self._members),
            carriers=tuple(self._carriers),
            findings=(*self._notes.findings(), *self._source.units.findings()),
            areas=tuple(self._areas),
            storeys=storeys,
            counts=self._counts,
        )

    def _count(self, what: str, number: int = 1) -> None:
        self._counts[what] = self._counts.get(what, 0) + number

    def _read_all(self, ifc_class: str, reader: Any, done: set[int]) -> None:
        found = self._elements.of_class(ifc_class)
        if found is None:
            if ifc_class not in _KNOWN_ELSEWHERE:
                self._notes.unknown_class(ifc_class, self._source.schema)
            return
        for entity in found:
            record = Record.of(entity)
            if record.id in done:
                continue
            done.add(record.id)
            self._count(record.ifc_class)
            if not record.global_id or record.global_id in self._ids:
                self._notes.no_identity(record)
                continue
            self._ids.add(record.global_id)
            try:
                reader(record)
            except READ_ERRORS as error:
                self._notes.no_shape(record, reason_of(error))

    def _read_beam(self, record: Record) -> None:
        elements = self._elements
        role = self._roles.excluded(record, elements.relations.wholes(record.id))
        if role:
            self._leave_out(role, record)
            return
        frame = elements.frame(record)
        shape = elements.shape(record)
        choice = elements.choice(record)
        try:
            stick = self._stick(shape, choice)
        except CurvedMemberError as error:
            self._count("curved")
            self._notes.curved(record, str(error))
            return
        lying = self._layer.lay(stick, frame)
        _check_place(lying.start + lying.end)
        size, rise = stick.length, lying.end[2] - lying.start[2]
        section, end_section = self._sections(record, stick, lying.matrix)
        if section is None and choice.profile is not None:
            # No outline, but perhaps values in the property sets of the associated profile.
            section = elements.sections.section(choice.profile)
        reason = excluded_by_proportion(size, section, self._settings.beams)
        if reason:
            self._leave_out(reason, record)
            label = carrier_label(reason)
            if label and shape.items:
                self._add_carrier(record, shape, frame, choice, f"{record.ifc_class} ({label})")
            return
        if abs(rise) > self._steepest * size:
            self._count("taken as columns")
            self._add_column(record, shape, frame, stick, choice)
            return
        self._note_member(record, stick, choice, section)
        self._members.append(
            AxisMember(
                global_id=record.global_id,
                name=record.name,
                ifc_class=record.ifc_class,
                start=lying.start,
                end=lying.end,
                up=lying.up,
                section=section,
                end_section=end_section,
                material=elements.material(record, choice),
                storey=elements.storey(record),
                type_name=elements.type_name(record),
                axis_offset=stick.offset,
                note="; ".join(stick.remarks),
                end_stiffness=self._ends.get(record.id, NOT_STATED),
                modelled_start=point(frame, *stick.body_start) if stick.body_start else None,
                modelled_end=point(frame, *stick.body_end) if stick.body_end else None,
            )
        )

    def _leave_out(self, reason: str, record: Record) -> None:
        self._count("left out")
        self._notes.left_out(reason, record)

    def _stick(self, shape: Shape, choice: Choice) -> Stick:
        stick = stick_of(shape)
        if stick.profile is None and choice.profile is not None:
            profile = self._elements.sections.profile(choice.profile)
            if profile is not None:
                return with_profile(stick, profile, choice.profile, choice.cardinal_point)
        return stick

    def _note_member(
        self, record: Record, stick: Stick, choice: Choice, section: Section | None
    ) -> None:
        sections = self._elements.sections
        if sections.noticed:
            for profile in (stick.entity, stick.end_entity):
                for finding in sections.findings(profile) if profile is not None else ():
                    self._notes.add(finding, record.global_id)
        note_stick(record, stick, self._notes)
        stated = None
        if choice.profile is not None and choice.profile != stick.entity:
            stated = sections.profile(choice.profile)
        note_section(record, section, stick.profile, stated, self._notes)

    def _sections(
        self, record: Record, stick: Stick, matrix: Matrix
    ) -> tuple[Section | None, Section | None]:
        if stick.profile is None:
            return None, None
        oriented = self._elements.sections.oriented
        section = self._named(oriented(stick.profile, matrix, stick.entity), record)
        if stick.end_profile is None:
            return section, None
        return section, self._named(oriented(stick.end_profile, matrix, stick.end_entity), record)

    def _named(self, section: Section, record: Record) -> Section:
        """Give a section without a name that of the element's type; one object per name."""
        if section.name:
            return section
        name = self._elements.type_name(record)
        if not name:
            return section
        key = (id(section), name)
        if key not in self._named_sections:
            self._named_sections[key] = (section, replace(section, name=name))
        return self._named_sections[key][1]

    def _read_column(self, record: Record) -> None:
        frame = self._elements.frame(record)
        shape = self._elements.shape(record)
        choice = self._elements.choice(record)
        try:
            stick = self._stick(shape, choice)
        except UnreadableShapeError:
            self._add_carrier(record, shape, frame, choice, record.ifc_class)
            return
        self._add_column(record, shape, frame, stick, choice)

    def _read_carrier(self, record: Record) -> None:
        frame = self._elements.frame(record)
        shape = self._elements.shape(record)
        self._add_carrier(record, shape, frame, self._elements.choice(record), record.ifc_class)

    def _read_slab(self, record: Record) -> None:
        frame = self._elements.frame(record)
        shape = self._elements.shape(record)
        extent = self._add_carrier(
            record, shape, frame, self._elements.choice(record), record.ifc_class
        )
        self._add_area(record, shape, frame, extent)

    def _read_space(self, record: Record) -> None:
        frame = self._elements.frame(record)
        shape = self._elements.shape(record)
        extent = self._extents.extent(shape.items, frame)
        if extent is None:
            raise UnreadableShapeError("; ".join(shape.troubles) or "it has no body")
        self._add_area(record, shape, frame, extent)

    def _add_area(self, record: Record, shape: Shape, frame: Frame, extent: Extent) -> None:
        area = self._area_reader.area(record, shape.items, frame, extent)
        if area is not None:
            self._areas.append(area)

    def _add_column(
        self, record: Record, shape: Shape, frame: Frame, stick: Stick, choice: Choice
    ) -> None:
        extent = self._extents.extent(shape.items, frame)
        if extent is None:
            extent = self._extents.of_stick(stick, frame)
        lying = self._layer.lay(stick, frame)
        if lying.start[2] > lying.end[2]:
            stick = stick.reversed()
            lying = self._layer.lay(stick, frame)
        section, _ = self._sections(record, stick, lying.matrix)
        self._append(record, record.ifc_class, extent, choice, lying, section)

    def _add_carrier(
        self, record: Record, shape: Shape, frame: Frame, choice: Choice, ifc_class: str
    ) -> Extent:
        extent = self._extents.extent(shape.items, frame)
        if extent is None:
            raise UnreadableShapeError("; ".join(shape.troubles) or "it has no body")
        for piece in self._extents.pieces(shape.items, frame):
            self._append(record, ifc_class, piece, choice)
        return extent

    def _append(
        self,
        record: Record,
        ifc_class: str,
        extent: Extent,
        choice: Choice,
        lying: Lying | None = None,
        section: Section | None = None,
    ) -> None:
        _check_place((extent.bottom, extent.top, *(v for corner in extent.corners for v in corner)))
        elements = self._elements
        self._carriers.append(
            Carrier(
                global_id=record.global_id,
                name=record.name,
                ifc_class=ifc_class,
                bottom=extent.bottom,
                top=extent.top,
                corners=extent.corners,
                start=lying.start if lying else None,
                end=lying.end if lying else None,
                section=section,
                material=elements.material(record, choice) if lying else None,
                storey=elements.storey(record),
                up=lying.up if lying else (1.0, 0.0, 0.0),
            )
        )

    def _note_relations(self) -> None:
        relations, file = self._elements.relations, self._source.file
        mine = {member.global_id for member in self._members}
        note_unreadable_relations(relations.unreadable, self._notes)
        for key, containers in relations.twice_contained.items():
            record = Record.of(file.by_id(key))
            if record.global_id in mine:
                note_two_containers(record, containers, self._notes)
        for key in self._area_reader.openings:
            record = Record.of(file.by_id(key))
            if record.global_id in mine:
                note_openings(record, self._notes)


def _check_place(coordinates: Iterable[float]) -> None:
    """Raise UnreadableShapeError for numbers that are nowhere on earth (m)."""
    if not all(-_FARTHEST < value < _FARTHEST for value in coordinates):
        raise UnreadableShapeError(
            f"its coordinates are no finite numbers below {_FARTHEST / 1e3:,.0f} km"
        )
