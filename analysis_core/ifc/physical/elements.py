"""What belongs to an element: its place and shape, material, storey, type; each looked up once."""

from __future__ import annotations

from contextlib import suppress
from typing import Any

from analysis_core.findings import Finding
from analysis_core.ifc.bodies.items import Shape
from analysis_core.ifc.bodies.reader import BodyReader
from analysis_core.ifc.geometry import frames
from analysis_core.ifc.geometry.frames import Frame
from analysis_core.ifc.geometry.placements import Placements
from analysis_core.ifc.materials.choice import NO_CHOICE, Choice, choose
from analysis_core.ifc.materials.reader import MaterialReader
from analysis_core.ifc.physical.notes import Notes
from analysis_core.ifc.physical.records import Record
from analysis_core.ifc.relations import Relations
from analysis_core.ifc.sections.profile_properties import stated_by_profile
from analysis_core.ifc.sections.reader import SectionReader, measures_of
from analysis_core.ifc.source import Source
from analysis_core.ifc.unreadable import READ_ERRORS, UnreadableShapeError, text_of
from analysis_core.model import Material
from analysis_core.settings import Settings


class Elements:
    """Look-ups for the elements of one file."""

    def __init__(self, source: Source, settings: Settings, notes: Notes) -> None:
        self.file = source.entities
        self._notes = notes
        self._length = source.units.length
        measures = measures_of(source.units)
        self.relations = Relations(self.file)
        self.placements = Placements(self.file, measures)
        self.sections = SectionReader(measures, stated_by_profile(self.file, source.units))
        self._bodies = BodyReader(self.sections, self.placements, measures)
        self._materials = MaterialReader(self.file, source.units, settings)
        self._choices: dict[int, Choice] = {}
        self._storeys: dict[int, str] = {}
        self._storey_names: dict[int, str | None] = {}
        self._type_names: dict[int, str] = {}
        self._materials_used: dict[int, tuple[Material | None, tuple[Finding, ...], list[str]]] = {}

    def of_class(self, ifc_class: str) -> tuple[Any, ...] | None:
        """Return the entities of a class and its subclasses, None where the schema lacks it."""
        try:
            return tuple(self.file.by_type(ifc_class))
        except RuntimeError:
            return None

    def storeys(self) -> tuple[tuple[str, float], ...]:
        """Return name and level of each storey, lowest first."""
        found = []
        for storey in self.file.by_type("IfcBuildingStorey"):
            name = text_of(storey.Name) or text_of(storey.LongName) or text_of(storey[0])
            self._storeys[storey.id()] = name
            elevation = 0.0
            with suppress(*READ_ERRORS):
                elevation = (storey.Elevation or 0.0) * self._length
                if storey.ObjectPlacement is not None:
                    elevation = self.placements.frame(storey.ObjectPlacement)[11]
            found.append((name, elevation))
        return tuple(sorted(found, key=lambda pair: pair[1]))

    def storey(self, record: Record) -> str | None:
        """Return the name of the storey that holds an element."""
        container = self.relations.container_of.get(record.id)
        if container is None:
            if record.id not in self.relations.whole_of:
                return None
            container = self.relations.container(record.entity)
            if container is None:
                return None
        key = container.id()
        if key not in self._storey_names:
            storey = self.relations.storey_above(container)
            self._storey_names[key] = None if storey is None else self._storeys.get(storey.id())
        return self._storey_names[key]

    def type_name(self, record: Record) -> str:
        """Return the name of an element's type, else its ObjectType."""
        type_ = self.relations.type_of.get(record.id)
        if type_ is None:
            return record.object_type
        key = type_.id()
        if key not in self._type_names:
            self._type_names[key] = text_of(type_[2])
        return self._type_names[key] or record.object_type

    def choice(self, record: Record) -> Choice:
        """Return material and profile associated with an element."""
        select = self.relations.material(record.id)
        if select is None:
            return NO_CHOICE
        key = select.id()
        if key not in self._choices:
            self._choices[key] = choose(select)
        return self._choices[key]

    def material(self, record: Record, choice: Choice) -> Material | None:
        """Return the material of an element; what was noticed goes to the notes at the end."""
        if choice.material is None:
            return None
        if choice.note:
            self._notes.group("note", "material-choice", f": {choice.note}", "", record)
        key = choice.material.id()
        known = self._materials_used.get(key)
        if known is None:
            material, found = self._materials.read(choice.material)
            known = self._materials_used[key] = (material, found, [])
        known[2].append(record.global_id)
        return known[0]

    def note_materials(self) -> None:
        """Note what was noticed about the materials that were used."""
        for _, found, users in self._materials_used.values():
            for finding in found:
                self._notes.add_for(finding, users)

    def unnoted_material(self, choice: Choice) -> Material | None:
        """Return a material without noting anything: its name is all that is wanted."""
        return self._materials.read(choice.material)[0] if choice.material is not None else None

    def frame(self, record: Record) -> Frame:
        """Return the world frame of an element.  Raises UnreadableShapeError."""
        try:
            return self.placements.frame(record.placement)
        except UnreadableShapeError:
            raise
        except READ_ERRORS as error:
            raise UnreadableShapeError("its placement does not fit the standard") from error

    def shape(self, record: Record) -> Shape:
        """Return the shape of an element, or of its parts where it has none of its own.

        A body of an unsupported kind stays unread: the geometry library could mesh it, but it
        takes the whole program with it on damaged files.
        """
        shape = self._bodies.read(record.shape)
        if shape.items:
            return shape
        items = shape.items
        for entity in self.relations.parts_of.get(record.id, ()):
            if entity.is_a("IfcElement") and entity[6] is not None:
                with suppress(*READ_ERRORS):
                    part = Record.of(entity)
                    relative = frames.compose(frames.inverse(self.frame(record)), self.frame(part))
                    inner = self._bodies.read(part.shape)
                    items += tuple(item.moved(relative) for item in inner.items)
        return shape._replace(items=items)
