"""What belongs to an element: its place and shape, material, storey, type; each looked up once."""

from __future__ import annotations

from contextlib import suppress
from typing import Any

from analysis_core.ifc import frames
from analysis_core.ifc.bodies import BodyReader
from analysis_core.ifc.body_items import Shape
from analysis_core.ifc.frames import Frame
from analysis_core.ifc.library_shape import library_mesh
from analysis_core.ifc.material_choice import NO_CHOICE, Choice, choose
from analysis_core.ifc.materials import MaterialReader
from analysis_core.ifc.notes import Notes
from analysis_core.ifc.placements import Placements
from analysis_core.ifc.profile_properties import stated_by_profile
from analysis_core.ifc.relations import Relations
from analysis_core.ifc.sections import SectionReader, measures_of
from analysis_core.ifc.source import Source
from analysis_core.ifc.unreadable import READ_ERRORS, UnreadableShapeError
from analysis_core.model import Material
from analysis_core.settings import Settings


class Elements:
    """Look-ups for the elements of one file."""

    def __init__(self, source: Source, settings: Settings, notes: Notes) -> None:
        self.file = source.file
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
            name = storey.Name or storey.LongName or storey[0]
            self._storeys[storey.id()] = name
            elevation = (storey.Elevation or 0.0) * self._length
            if storey.ObjectPlacement is not None:
                with suppress(*READ_ERRORS):
                    elevation = self.placements.frame(storey.ObjectPlacement)[11]
            found.append((name, elevation))
        return tuple(sorted(found, key=lambda pair: pair[1]))

    def storey(self, entity: Any) -> str | None:
        """Return the name of the storey that holds an element."""
        storey = self.relations.storey(entity)
        return None if storey is None else self._storeys.get(storey.id())

    def type_name(self, entity: Any) -> str:
        """Return the name of an element's type, else its ObjectType."""
        type_ = self.relations.type_of.get(entity.id())
        return (type_[2] if type_ is not None else None) or entity[4] or ""

    def choice(self, entity: Any) -> Choice:
        """Return material and profile associated with an element."""
        select = self.relations.material(entity)
        if select is None:
            return NO_CHOICE
        key = select.id()
        if key not in self._choices:
            self._choices[key] = choose(select)
        return self._choices[key]

    def material(self, entity: Any, choice: Choice) -> Material | None:
        """Return the material of an element; what was noticed goes to the notes."""
        if choice.material is None:
            return None
        material, found = self._materials.read(choice.material)
        for finding in found:
            self._notes.add(finding, entity[0])
        if choice.note:
            self._notes.group("note", "material-choice", f": {choice.note}", "", entity)
        return material

    def unnoted_material(self, choice: Choice) -> Material | None:
        """Return a material without noting anything: its name is all that is wanted."""
        return self._materials.read(choice.material)[0] if choice.material is not None else None

    def frame(self, entity: Any) -> Frame:
        """Return the world frame of an element.  Raises UnreadableShapeError."""
        try:
            return self.placements.frame(entity[5])
        except UnreadableShapeError:
            raise
        except READ_ERRORS as error:
            raise UnreadableShapeError("its placement does not fit the standard") from error

    def shape(self, entity: Any) -> Shape:
        """Return the shape of an element, or of its parts where it has none of its own.

        A body of an unsupported kind is left to the general-purpose geometry library.
        """
        definition = entity[6]
        shape = self._bodies.read(definition)
        if shape.items:
            return shape
        if definition is not None and shape.troubles:
            mesh = library_mesh(definition)
            if mesh is not None:
                return shape._replace(items=(mesh,), troubles=())
        items = shape.items
        for part in self.relations.parts_of.get(entity.id(), ()):
            if part.is_a("IfcElement") and part[6] is not None:
                with suppress(*READ_ERRORS):
                    relative = frames.compose(frames.inverse(self.frame(entity)), self.frame(part))
                    inner = self._bodies.read(part[6])
                    items += tuple(item.moved(relative) for item in inner.items)
        return shape._replace(items=items)
