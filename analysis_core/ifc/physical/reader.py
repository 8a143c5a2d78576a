"""The physical way in: beams, columns, walls, footings and slabs as the model draws them."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable
from typing import Any

import numpy as np

from analysis_core.building import AxisMember, Building
from analysis_core.collector import collector_paused
from analysis_core.ifc.bodies.main_prism import CurvedMemberError
from analysis_core.ifc.geometry.frames import point
from analysis_core.ifc.physical.carriers import CarrierReader, check_place
from analysis_core.ifc.physical.elements import Elements
from analysis_core.ifc.physical.end_releases import NOT_STATED, end_releases
from analysis_core.ifc.physical.laid import Laid, LaidReader, Placed
from analysis_core.ifc.physical.member_notes import (
    note_duplicates,
    note_openings,
    note_section,
    note_stick,
    note_two_containers,
    note_unreadable_relations,
)
from analysis_core.ifc.physical.notes import Notes
from analysis_core.ifc.physical.records import Record
from analysis_core.ifc.physical.roles import RoleJudge, carrier_label, excluded_by_proportion
from analysis_core.ifc.source import Source
from analysis_core.ifc.unreadable import READ_ERRORS, UnreadableShapeError, reason_of
from analysis_core.settings import Settings

COLUMN_CLASSES = ("IfcColumn", "IfcPile")
OTHER_CARRIER_CLASSES = ("IfcWall", "IfcFooting", "IfcCaissonFoundation", "IfcBearing")

_FLAT = math.sin(math.radians(30.0))  # a column that lies flatter is a beam
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
    with collector_paused(), np.errstate(all="ignore"):
        return _Reader(source, settings).building()


class _Reader:
    def __init__(self, source: Source, settings: Settings) -> None:
        self._source = source
        self._settings = settings
        self._notes = Notes()
        self._elements = Elements(source, settings, self._notes)
        self._laying = LaidReader(self._elements)
        self._bearing = CarrierReader(self._elements, self._laying, self._notes)
        self._roles = RoleJudge(settings.beams)
        self._steepest = math.sin(settings.tolerances.beam_slope)
        self._ends = end_releases(source)
        self._members: list[AxisMember] = []
        self._counts: dict[str, int] = {}
        self._ids: set[str] = set()
        self._beam_ids: set[int] = set()

    def building(self) -> Building:
        storeys = self._elements.storeys()
        done: set[int] = set()
        beams = {name: self._entities(name) for name in self._settings.analysis.include}
        self._beam_ids = {entity.id() for entities in beams.values() for entity in entities}
        for entities in beams.values():
            self._read_all(entities, self._read_beam, done)
        for ifc_class in COLUMN_CLASSES:
            self._read_all(self._entities(ifc_class), self._read_column, done)
        for ifc_class in OTHER_CARRIER_CLASSES:
            self._read_all(self._entities(ifc_class), self._read_carrier, done)
        self._read_all(self._entities("IfcSlab"), self._bearing.add_slab, done)
        if self._settings.area_actions:
            self._read_all(self._entities("IfcSpace"), self._bearing.add_space, done)
        note_duplicates(self._members, self._notes)
        self._count("taken as beams", len(self._members))
        self._elements.note_materials()
        self._note_relations()
        return Building(
            route="physical",
            schema=self._source.schema,
            name=self._source.name,
            members=tuple(self._members),
            carriers=tuple(self._bearing.carriers),
            findings=(*self._notes.findings(), *self._source.units.findings()),
            areas=tuple(self._bearing.areas),
            storeys=storeys,
            counts=self._counts,
        )

    def _count(self, what: str, number: int = 1) -> None:
        self._counts[what] = self._counts.get(what, 0) + number

    def _entities(self, ifc_class: str) -> tuple[Any, ...]:
        found = self._elements.of_class(ifc_class)
        if found is None and ifc_class not in _KNOWN_ELSEWHERE:
            self._notes.unknown_class(ifc_class, self._source.schema)
        return found or ()

    def _read_all(
        self, entities: Iterable[Any], reader: Callable[[Record], None], done: set[int]
    ) -> None:
        for entity in entities:
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
        role = self._roles.excluded(record, self._elements.relations.wholes(record.id))
        role = role or self._part_or_whole(record)
        if role:
            self._leave_out(role, record)
            return
        placed = self._laying.placed(record)
        try:
            laid = self._laying.laid(record, placed)
        except CurvedMemberError as error:
            self._count("curved")
            self._notes.curved(record, str(error))
            return
        reason = excluded_by_proportion(laid.stick.length, laid.section, self._settings.beams)
        if reason:
            self._leave_out(reason, record)
            label = carrier_label(reason)
            if label and placed.shape.items:
                self._bearing.add(record, placed, f"{record.ifc_class} ({label})")
        elif laid.rise > self._steepest:
            self._count("taken as columns")
            self._notes.steep(record, self._steepest)
            self._bearing.add_column(record, placed, laid)
        else:
            self._add_member(record, placed, laid)

    def _part_or_whole(self, record: Record) -> str:
        """Say where a beam is part of a beam that is read, or is read by parts that are beams."""
        relations = self._elements.relations
        for host in relations.wholes(record.id):
            if host.id() in self._beam_ids and host[6] is not None:
                return "part of a beam that is read as a whole"
        if record.shape is None:
            parts = relations.parts_of.get(record.id, ())
            if any(part.id() in self._beam_ids for part in parts):
                return "drawn by its parts, which are read one by one"
        return ""

    def _leave_out(self, reason: str, record: Record) -> None:
        self._count("left out")
        self._notes.left_out(reason, record)

    def _add_member(self, record: Record, placed: Placed, laid: Laid) -> None:
        stick, lying, elements = laid.stick, laid.lying, self._elements
        check_place(lying.start + lying.end)
        self._note_member(record, placed, laid)
        first, last = stick.body_start, stick.body_end
        self._members.append(
            AxisMember(
                global_id=record.global_id,
                name=record.name,
                ifc_class=record.ifc_class,
                start=lying.start,
                end=lying.end,
                up=lying.up,
                section=laid.section,
                end_section=laid.end_section,
                material=elements.material(record, placed.choice),
                storey=elements.storey(record),
                type_name=elements.type_name(record),
                axis_offset=stick.offset,
                note="; ".join(stick.remarks),
                end_stiffness=self._ends.get(record.id, NOT_STATED),
                modelled_start=point(placed.frame, *first) if first else None,
                modelled_end=point(placed.frame, *last) if last else None,
            )
        )

    def _note_member(self, record: Record, placed: Placed, laid: Laid) -> None:
        stick, sections, stated = laid.stick, self._elements.sections, placed.choice.profile
        if sections.noticed:
            for profile in (stick.entity, stick.end_entity):
                for finding in sections.findings(profile) if profile is not None else ():
                    self._notes.add(finding, record.global_id)
        note_stick(record, stick, self._notes)
        other = None
        if stated is not None and stated != stick.entity:
            other = sections.profile(stated)
        note_section(record, laid.section, stick.profile, other, self._notes)

    def _read_column(self, record: Record) -> None:
        placed = self._laying.placed(record)
        try:
            laid = self._laying.laid(record, placed)
        except UnreadableShapeError:
            self._bearing.add(record, placed, record.ifc_class)
            return
        rules = self._settings.beams
        if laid.rise < _FLAT and not excluded_by_proportion(laid.stick.length, laid.section, rules):
            self._notes.lying_column(record)
            self._add_member(record, placed, laid)
        else:
            self._bearing.add_column(record, placed, laid)

    def _read_carrier(self, record: Record) -> None:
        self._bearing.add(record, self._laying.placed(record), record.ifc_class)

    def _note_relations(self) -> None:
        relations, file = self._elements.relations, self._source.entities
        mine = {member.global_id for member in self._members}
        note_unreadable_relations(relations.unreadable, self._notes)
        for key, containers in relations.twice_contained.items():
            record = Record.of(file.by_id(key))
            if record.global_id in mine:
                note_two_containers(record, containers, self._notes)
        for key in self._bearing.areas_of.openings:
            record = Record.of(file.by_id(key))
            if record.global_id in mine:
                note_openings(record, self._notes)
