"""The physical way in: beams, columns, walls, footings and slabs as the model draws them."""

from __future__ import annotations

import gc
import math
from collections.abc import Iterable, Iterator
from contextlib import contextmanager, suppress
from dataclasses import replace
from typing import Any

from analysis_core.building import AxisMember, Building, Carrier
from analysis_core.ifc import frames, roles
from analysis_core.ifc.bodies import BodyReader, Shape
from analysis_core.ifc.curves import UnreadableShapeError
from analysis_core.ifc.extents import Extent, ExtentReader
from analysis_core.ifc.frames import Frame, Vector
from analysis_core.ifc.material_choice import NO_CHOICE, Choice, choose
from analysis_core.ifc.materials import MaterialReader
from analysis_core.ifc.notes import Notes
from analysis_core.ifc.placements import Placements
from analysis_core.ifc.relations import Relations
from analysis_core.ifc.sections import SectionReader, measures_of
from analysis_core.ifc.source import Source
from analysis_core.ifc.sticks import (
    CurvedMemberError,
    Stick,
    section_matrix,
    stick_of,
    upright,
)
from analysis_core.model import Material, Section
from analysis_core.settings import Settings

COLUMN_CLASSES = ("IfcColumn", "IfcPile")
WALL_CLASSES = ("IfcWall",)
SLAB_CLASSES = ("IfcSlab",)
FOOTING_CLASSES = ("IfcFooting", "IfcCaissonFoundation", "IfcBearing")
_OBLIQUE = 0.05


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
        self.source = source
        self.file = source.file
        self.settings = settings
        measures = measures_of(source.units)
        self.measures = measures
        self.notes = Notes()
        self.relations = Relations(self.file)
        self.placements = Placements(self.file, measures)
        self.sections = SectionReader(measures)
        self.bodies = BodyReader(self.sections, self.placements, measures)
        self.extents = ExtentReader()
        self.materials = MaterialReader(self.file, source.units, settings)
        self.members: list[AxisMember] = []
        self.carriers: list[Carrier] = []
        self.counts: dict[str, int] = {}
        self._choices: dict[int, Choice] = {}
        self._storeys: dict[int, str] = {}
        self._named_sections: dict[tuple[Section, str], Section] = {}
        self._seen: set[str] = set()

    def building(self) -> Building:
        storeys = self._read_storeys()
        done: set[int] = set()
        for ifc_class in self.settings.analysis.include:
            for entity in self._by_type(ifc_class):
                if entity.id() not in done:
                    done.add(entity.id())
                    self._read_beam(entity)
        for classes, reader in (
            (COLUMN_CLASSES, self._read_column),
            (WALL_CLASSES + FOOTING_CLASSES + SLAB_CLASSES, self._read_carrier),
        ):
            for ifc_class in classes:
                for entity in self._by_type(ifc_class):
                    if entity.id() not in done:
                        done.add(entity.id())
                        reader(entity)
        findings = [*self.notes.findings(), *self.source.units.findings()]
        return Building(
            route="physical",
            schema=self.source.schema,
            name=self.source.name,
            members=tuple(self.members),
            carriers=tuple(self.carriers),
            findings=tuple(findings),
            storeys=storeys,
            counts=self.counts,
        )

    def _by_type(self, ifc_class: str) -> Iterable[Any]:
        try:
            return tuple(self.file.by_type(ifc_class))
        except RuntimeError:
            return ()  # not a class of this schema

    def _read_storeys(self) -> tuple[tuple[str, float], ...]:
        found = []
        for storey in self.file.by_type("IfcBuildingStorey"):
            name = storey.Name or storey.LongName or storey[0]
            self._storeys[storey.id()] = name
            elevation = (storey.Elevation or 0.0) * self.measures.length
            if storey.ObjectPlacement is not None:
                with suppress(UnreadableShapeError):
                    elevation = self.placements.frame(storey.ObjectPlacement)[11]
            found.append((name, elevation))
        return tuple(sorted(found, key=lambda pair: pair[1]))

    def _storey(self, entity: Any) -> str | None:
        storey = self.relations.storey(entity)
        return None if storey is None else self._storeys.get(storey.id())

    def _choice(self, entity: Any) -> Choice:
        select = self.relations.material(entity)
        if select is None:
            return NO_CHOICE
        key = select.id()
        if key not in self._choices:
            self._choices[key] = choose(select)
        return self._choices[key]

    def _material(self, entity: Any, choice: Choice) -> Material | None:
        if choice.material is None:
            return None
        material, found = self.materials.read(choice.material)
        for finding in found:
            self.notes.add(finding, entity[0])
        return material

    def _shape(self, entity: Any) -> Shape:
        shape = self.bodies.read(entity[6])
        if not shape.items and shape.axis is None:
            # A whole may be drawn by its parts alone.
            for part in self.relations.parts_of.get(entity.id(), ()):
                if len(part) > 6 and part.is_a("IfcElement") and part[6] is not None:
                    inner = self.bodies.read(part[6])
                    try:
                        relative = frames.compose(
                            frames.inverse(self.placements.frame(entity[5])),
                            self.placements.frame(part[5]),
                        )
                    except UnreadableShapeError:
                        continue
                    moved = tuple(item.moved(relative) for item in inner.items)
                    shape = shape._replace(items=shape.items + moved)
        return shape

    def _read_beam(self, entity: Any) -> None:
        ifc_class = entity.is_a()
        self.counts[ifc_class] = self.counts.get(ifc_class, 0) + 1
        hosts = self.relations.wholes(entity)
        role = roles.excluded_by_role(entity, hosts, self.settings.beams)
        if role:
            self.notes.left_out(role, entity)
            return
        try:
            frame = self.placements.frame(entity[5])
            shape = self._shape(entity)
            stick = stick_of(shape).moved(frame)
        except CurvedMemberError as error:
            self.notes.curved(entity, str(error))
            return
        except UnreadableShapeError as error:
            self.notes.no_shape(entity, str(error))
            return
        choice = self._choice(entity)
        slope = abs(stick.end[2] - stick.start[2]) / max(stick.length, 1e-12)
        if slope > math.sin(self.settings.tolerances.beam_slope):
            self._add_column(entity, shape, frame, stick, choice)
            self.counts["steep"] = self.counts.get("steep", 0) + 1
            return
        up = upright(stick.start, stick.end, stick.y_axis)
        section, end_section = self._sections(entity, stick, choice, up)
        sizes = roles.Sizes.of(stick.length, stick.end[2] - stick.start[2], section)
        reason = roles.excluded_by_proportion(sizes, self.settings.beams)
        if reason:
            self.notes.left_out(reason, entity)
            if "panel" in reason or "slab" in reason:
                label = "wall panel" if "panel" in reason else "slab strip"
                self._add_carrier(entity, shape, frame, choice, f"{ifc_class} ({label})")
            return
        if section is None:
            self.notes.no_section(entity)
        member = AxisMember(
            global_id=entity[0],
            name=entity[2] or "",
            ifc_class=ifc_class,
            start=stick.start,
            end=stick.end,
            up=up,
            section=section,
            end_section=end_section,
            material=self._material(entity, choice),
            storey=self._storey(entity),
            type_name=self._type_name(entity),
            carries_moment=roles.carries_moment(entity),
            axis_offset=stick.offset,
        )
        self.members.append(member)

    def _sections(
        self, entity: Any, stick: Stick, choice: Choice, up: Vector
    ) -> tuple[Section | None, Section | None]:
        if stick.profile is None:
            return None, None
        matrix = section_matrix(stick, up)
        section = self._named(self.sections.oriented(stick.profile, matrix, stick.entity), entity)
        end = None
        if stick.end_profile is not None:
            end = self._named(
                self.sections.oriented(stick.end_profile, matrix, stick.end_entity), entity
            )
        return section, end

    def _named(self, section: Section, entity: Any) -> Section:
        if section.name:
            return section
        name = self._type_name(entity)
        if not name:
            return section
        key = (section, name)
        if key not in self._named_sections:
            self._named_sections[key] = replace(section, name=name)
        return self._named_sections[key]

    def _type_name(self, entity: Any) -> str:
        type_ = self.relations.type_of.get(entity.id())
        return (type_[2] if type_ is not None else None) or entity[4] or ""

    def _read_column(self, entity: Any) -> None:
        ifc_class = entity.is_a()
        self.counts[ifc_class] = self.counts.get(ifc_class, 0) + 1
        try:
            frame = self.placements.frame(entity[5])
            shape = self._shape(entity)
        except UnreadableShapeError as error:
            self.notes.no_shape(entity, str(error))
            return
        choice = self._choice(entity)
        try:
            stick = stick_of(shape).moved(frame)
        except UnreadableShapeError:
            self._add_carrier(entity, shape, frame, choice, ifc_class)
            return
        self._add_column(entity, shape, frame, stick, choice)

    def _read_carrier(self, entity: Any) -> None:
        ifc_class = entity.is_a()
        self.counts[ifc_class] = self.counts.get(ifc_class, 0) + 1
        try:
            frame = self.placements.frame(entity[5])
            shape = self._shape(entity)
        except UnreadableShapeError as error:
            self.notes.no_shape(entity, str(error))
            return
        self._add_carrier(entity, shape, frame, self._choice(entity), ifc_class)

    def _add_column(
        self, entity: Any, shape: Shape, frame: Frame, stick: Stick, choice: Choice
    ) -> None:
        extent = self.extents.extent(shape.items, frame)
        if extent is None:
            self.notes.no_shape(entity, "it has an axis but no body")
            return
        start, end = stick.start, stick.end
        if start[2] > end[2]:
            start, end = end, start
        up = upright(start, end, stick.y_axis)
        section, _ = self._sections(entity, stick._replace(start=start, end=end), choice, up)
        self._append(entity, entity.is_a(), extent, choice, start, end, section, up)

    def _add_carrier(
        self, entity: Any, shape: Shape, frame: Frame, choice: Choice, ifc_class: str
    ) -> None:
        extent = self.extents.extent(shape.items, frame)
        if extent is None:
            self.notes.no_shape(entity, "; ".join(shape.troubles) or "it has no representation")
            return
        self._append(entity, ifc_class, extent, choice)

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
        self.carriers.append(
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
                material=self._material(entity, choice) if start is not None else None,
                storey=self._storey(entity),
                up=up,
            )
        )
