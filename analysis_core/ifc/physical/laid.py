"""An element as it lies in the world: its line, its section turned upright, its material."""

from __future__ import annotations

from dataclasses import replace
from typing import NamedTuple

from analysis_core.ifc.bodies.items import Shape
from analysis_core.ifc.bodies.sticks import Layer, Lying, Stick, stick_of, with_profile
from analysis_core.ifc.geometry.frames import Frame
from analysis_core.ifc.geometry.outline import Matrix
from analysis_core.ifc.materials.choice import Choice
from analysis_core.ifc.physical.elements import Elements
from analysis_core.ifc.physical.records import Record
from analysis_core.model import Section


class Placed(NamedTuple):
    """An element's frame in the world, its shape in its own coordinates, what it is made of."""

    frame: Frame
    shape: Shape
    choice: Choice


class Laid(NamedTuple):
    """A placed element that is a straight member."""

    stick: Stick
    lying: Lying
    section: Section | None
    end_section: Section | None

    @property
    def rise(self) -> float:
        """Part of the length by which it rises or falls: the sine of its slope."""
        return abs(self.lying.end[2] - self.lying.start[2]) / self.stick.length


class LaidReader:
    """Lays elements; sections and orientations are worked out once."""

    def __init__(self, elements: Elements) -> None:
        self._elements = elements
        self._layer = Layer()
        self._named: dict[tuple[int, str], tuple[Section, Section]] = {}

    def placed(self, record: Record) -> Placed:
        """Return where an element is and what it is.  Raises UnreadableShapeError."""
        elements = self._elements
        return Placed(elements.frame(record), elements.shape(record), elements.choice(record))

    def laid(self, record: Record, placed: Placed) -> Laid:
        """Return a member with its section.

        Raises CurvedMemberError and UnreadableShapeError as ``stick_of``.
        """
        choice = placed.choice
        stick = stick_of(placed.shape)
        if stick.profile is None and choice.profile is not None:
            profile = self._elements.sections.profile(choice.profile)
            if profile is not None:
                stick = with_profile(stick, profile, choice.profile, choice.cardinal_point)
        return self._laid(record, stick, placed)

    def rising(self, record: Record, laid: Laid, placed: Placed) -> Laid:
        """Return the member run upwards."""
        if laid.lying.start[2] <= laid.lying.end[2]:
            return laid
        return self._laid(record, laid.stick.reversed(), placed)

    def _laid(self, record: Record, stick: Stick, placed: Placed) -> Laid:
        lying = self._layer.lay(stick, placed.frame)
        section, end_section = self._sections(record, stick, lying.matrix)
        if section is None and placed.choice.profile is not None:
            # No outline, but perhaps values in the property sets of the associated profile.
            section = self._elements.sections.section(placed.choice.profile)
        return Laid(stick, lying, section, end_section)

    def _sections(
        self, record: Record, stick: Stick, matrix: Matrix
    ) -> tuple[Section | None, Section | None]:
        if stick.profile is None:
            return None, None
        oriented = self._elements.sections.oriented
        section = self._with_name(oriented(stick.profile, matrix, stick.entity), record)
        if stick.end_profile is None:
            return section, None
        end = oriented(stick.end_profile, matrix, stick.end_entity)
        return section, self._with_name(end, record)

    def _with_name(self, section: Section, record: Record) -> Section:
        """Give a section without a name that of the element's type; one object per name."""
        if section.name:
            return section
        name = self._elements.type_name(record)
        if not name:
            return section
        key = (id(section), name)
        if key not in self._named:
            self._named[key] = (section, replace(section, name=name))
        return self._named[key][1]
