"""The physical way in: beams, columns, walls, footings and slabs as the model draws them."""

from __future__ import annotations

import gc
import math
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import replace
from typing import Any

from analysis_core.building import Area, AxisMember, Building, Carrier
from analysis_core.ifc import roles
from analysis_core.ifc.areas import AreaReader
from analysis_core.ifc.body_items import Shape
from analysis_core.ifc.elements import Elements
from analysis_core.ifc.end_releases import NOT_STATED, end_releases
from analysis_core.ifc.extents import Extent, ExtentReader
from analysis_core.ifc.frames import Frame, Vector
from analysis_core.ifc.main_prism import CurvedMemberError
from analysis_core.ifc.material_choice import Choice
from analysis_core.ifc.member_notes import note_duplicates, note_section, note_stick
from analysis_core.ifc.notes import Notes
from analysis_core.ifc.source import Source
from analysis_core.ifc.sticks import Stick, section_matrix, stick_of, upright, with_profile
from analysis_core.ifc.unreadable import UnreadableShapeError
from analysis_core.model import Section
from analysis_core.settings import Settings

COLUMN_CLASSES = ("IfcColumn", "IfcPile")
OTHER_CARRIER_CLASSES = (
    "IfcWall",
    "IfcFooting",
    "IfcCaissonFoundation",
    "IfcBearing",
)

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
    with _collector_paused():
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
            key = entity.id()
            if key in done:
                continue
            done.add(key)
            self._count(entity.is_a())
            global_id = entity[0]
            if not global_id or global_id in self._ids:
                self._notes.no_identity(entity)
                continue
            self._ids.add(global_id)
            try:
                reader(entity)
            except UnreadableShapeError as error:
                self._notes.no_shape(entity, str(error))

    def _read_beam(self, entity: Any) -> None:
        elements, rules = self._elements, self._settings.beams
        role = roles.excluded_by_role(entity, elements.relations.wholes(entity), rules)
        if role:
            self._leave_out(role, entity)
            return
        frame = elements.frame(entity)
        shape = elements.shape(entity)
        choice = elements.choice(entity)
        try:
            stick = self._stick(shape, choice).moved(frame)
        except CurvedMemberError as error:
            self._count("curved")
            self._notes.curved(entity, str(error))
            return
        size, rise = stick.length, stick.end[2] - stick.start[2]
        up = upright(stick.start, stick.end, stick.y_axis)
        section, end_section = self._sections(entity, stick, up)
        if section is None and choice.profile is not None:
            # No outline, but perhaps values in the property sets of the associated profile.
            section = elements.sections.section(choice.profile)
        sizes = roles.Sizes.of(size, rise, section)
        reason = roles.excluded_by_proportion(sizes, rules)
        if reason:
            self._leave_out(reason, entity)
            label = roles.carrier_label(reason)
            if label and shape.items:
                self._add_carrier(entity, shape, frame, choice, f"{entity.is_a()} ({label})")
            return
        if abs(rise) > self._steepest * size:
            self._count("taken as columns")
            self._add_column(entity, shape, frame, stick, choice)
            return
        self._note_member(entity, stick, choice, section)
        self._members.append(
            AxisMember(
                global_id=entity[0],
                name=entity[2] or "",
                ifc_class=entity.is_a(),
                start=stick.start,
                end=stick.end,
                up=up,
                section=section,
                end_section=end_section,
                material=elements.material(entity, choice),
                storey=elements.storey(entity),
                type_name=elements.type_name(entity),
                axis_offset=stick.offset,
                note="; ".join(stick.remarks),
                end_stiffness=self._ends.get(entity.id(), NOT_STATED),
                modelled_start=stick.body_start,
                modelled_end=stick.body_end,
            )
        )

    def _leave_out(self, reason: str, entity: Any) -> None:
        self._count("left out")
        self._notes.left_out(reason, entity)

    def _stick(self, shape: Shape, choice: Choice) -> Stick:
        stick = stick_of(shape)
        if stick.profile is None and choice.profile is not None:
            profile = self._elements.sections.profile(choice.profile)
            if profile is not None:
                return with_profile(stick, profile, choice.profile, choice.cardinal_point)
        return stick

    def _note_member(
        self, entity: Any, stick: Stick, choice: Choice, section: Section | None
    ) -> None:
        sections = self._elements.sections
        for profile in (stick.entity, stick.end_entity):
            if profile is not None:
                for finding in sections.findings(profile):
                    self._notes.add(finding, entity[0])
        note_stick(entity, stick, self._notes)
        stated = None
        if choice.profile is not None and choice.profile != stick.entity:
            stated = sections.profile(choice.profile)
        note_section(entity, section, stick.profile, stated, self._notes)

    def _sections(
        self, entity: Any, stick: Stick, up: Vector
    ) -> tuple[Section | None, Section | None]:
        if stick.profile is None:
            return None, None
        matrix = section_matrix(stick, up)
        oriented = self._elements.sections.oriented
        section = self._named(oriented(stick.profile, matrix, stick.entity), entity)
        if stick.end_profile is None:
            return section, None
        return section, self._named(oriented(stick.end_profile, matrix, stick.end_entity), entity)

    def _named(self, section: Section, entity: Any) -> Section:
        """Give a section without a name that of the element's type; one object per name."""
        if section.name:
            return section
        name = self._elements.type_name(entity)
        if not name:
            return section
        key = (id(section), name)
        if key not in self._named_sections:
            self._named_sections[key] = (section, replace(section, name=name))
        return self._named_sections[key][1]

    def _read_column(self, entity: Any) -> None:
        frame = self._elements.frame(entity)
        shape = self._elements.shape(entity)
        choice = self._elements.choice(entity)
        try:
            stick = self._stick(shape, choice).moved(frame)
        except UnreadableShapeError:
            self._add_carrier(entity, shape, frame, choice, entity.is_a())
            return
        self._add_column(entity, shape, frame, stick, choice)

    def _read_carrier(self, entity: Any) -> None:
        frame = self._elements.frame(entity)
        shape = self._elements.shape(entity)
        self._add_carrier(entity, shape, frame, self._elements.choice(entity), entity.is_a())

    def _read_slab(self, entity: Any) -> None:
        frame = self._elements.frame(entity)
        shape = self._elements.shape(entity)
        extent = self._add_carrier(
            entity, shape, frame, self._elements.choice(entity), entity.is_a()
        )
        self._add_area(entity, shape, frame, extent)

    def _read_space(self, entity: Any) -> None:
        frame = self._elements.frame(entity)
        shape = self._elements.shape(entity)
        extent = self._extents.extent(shape.items, frame)
        if extent is None:
            raise UnreadableShapeError("; ".join(shape.troubles) or "it has no body")
        self._add_area(entity, shape, frame, extent)

    def _add_area(self, entity: Any, shape: Shape, frame: Frame, extent: Extent) -> None:
        area = self._area_reader.area(entity, shape.items, frame, extent)
        if area is not None:
            self._areas.append(area)

    def _add_column(
        self, entity: Any, shape: Shape, frame: Frame, stick: Stick, choice: Choice
    ) -> None:
        extent = self._extents.extent(shape.items, frame)
        if extent is None:
            extent = self._extents.of_stick(stick)
        start, end = stick.start, stick.end
        if start[2] > end[2]:
            start, end = end, start
        up = upright(start, end, stick.y_axis)
        section, _ = self._sections(entity, stick._replace(start=start, end=end), up)
        self._append(entity, entity.is_a(), extent, choice, start, end, section, up)

    def _add_carrier(
        self, entity: Any, shape: Shape, frame: Frame, choice: Choice, ifc_class: str
    ) -> Extent:
        extent = self._extents.extent(shape.items, frame)
        if extent is None:
            raise UnreadableShapeError("; ".join(shape.troubles) or "it has no body")
        for piece in self._extents.pieces(shape.items, frame):
            self._append(entity, ifc_class, piece, choice)
        return extent

    def _append(
        self,
        entity: Any,
        ifc_class: str,
        extent: Extent,
        choice: Choice,
        start: Vector | None = None,
        end: Vector | None = None,
        section: Section | None = None,
        up: Vector = (1.0, 0.0, 0.0),
    ) -> None:
        elements = self._elements
        self._carriers.append(
            Carrier(
                global_id=entity[0],
                name=entity[2] or "",
                ifc_class=ifc_class,
                bottom=extent.bottom,
                top=extent.top,
                corners=extent.corners,
                start=start,
                end=end,
                section=section,
                material=elements.material(entity, choice) if start is not None else None,
                storey=elements.storey(entity),
                up=up,
            )
        )

    def _note_relations(self) -> None:
        relations = self._elements.relations
        mine = {member.global_id for member in self._members}
        for key, containers in relations.twice_contained.items():
            entity = self._source.file.by_id(key)
            if entity[0] in mine:
                names = ", ".join(f"'{c[2] or c[0]}'" for c in containers)
                self._notes.group(
                    "note",
                    "two-containers",
                    f"contained in more than one place ({names}); the first was taken",
                    "Contain each element once.",
                    entity,
                )
        for relation in self._source.file.by_type("IfcRelVoidsElement"):
            entity = relation[4]
            if entity is not None and entity[0] in mine:
                self._notes.group(
                    "note",
                    "openings-ignored",
                    "with openings; their sections were taken without them",
                    "Check the section at the opening by hand.",
                    entity,
                )
