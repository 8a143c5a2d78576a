"""Section, material and orientation of the members of an analysis model.

From IFC4 on they come with one material association (profile set and usage).  IFC2X3 has none
of these: there the profile comes through IfcRelAssociatesProfileProperties, the material on its
own.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import Any

from analysis_core.findings import Finding, listed
from analysis_core.ifc.analytical.notes import MALFORMED, Notes, global_id, is_kind
from analysis_core.ifc.file_units import FileUnits
from analysis_core.ifc.materials.choice import NO_CHOICE, Choice
from analysis_core.ifc.materials.reader import MaterialReader, material_and_profile_of
from analysis_core.ifc.sections.profile_properties import Stated, stated_by_profile
from analysis_core.ifc.sections.reader import SectionReader, measures_of
from analysis_core.model import Material, Section
from analysis_core.settings import Settings

# Cardinal points of IfcMaterialProfileSetUsage that lie on the centroid, or say nothing.
_CENTRED = (0, 10)


@dataclass(frozen=True, slots=True)
class Properties:
    """What a member is made of and how its section lies.

    ``direction`` is an IfcDirection and ``angle`` (rad) a turn about the axis, as IFC2X3 states
    them; ``offset`` is how far the centroid lies below the axis, m.
    """

    section: Section | None = None
    end_section: Section | None = None
    material: Material | None = None
    direction: Any = None
    angle: float | None = None
    offset: float = 0.0
    note: str = ""


class MemberProperties:
    """Gives the properties of members, relations being walked once."""

    def __init__(self, source: Any, settings: Settings, notes: Notes) -> None:
        units: FileUnits = source.units
        self._units = units
        self._notes = notes
        self._profiles = _profile_relations(source.file)
        self._choices: Mapping[int, Choice] = {}
        self._materials: MaterialReader | None = None
        stated: Mapping[int, Stated] = {}
        try:
            self._choices = material_and_profile_of(source)
            self._materials = MaterialReader(source.file, units, settings)
            stated = stated_by_profile(source.file, units)
        except MALFORMED as error:
            self._report_malformed(error)
        self._sections = SectionReader(measures_of(units), stated)
        self._users: dict[Any, list[str]] = {}
        self._eccentric: dict[int, list[str]] = {}

    def of(self, entity: Any) -> Properties:
        """Return the properties of a curve member; None for what it does not state."""
        key = global_id(entity)
        choice = self._choices.get(entity.id(), NO_CHOICE)
        result = Properties(material=self._material(choice.material, key), note=choice.note)
        if choice.note:
            self._users.setdefault(_choice_finding(choice.note), []).append(key)
        relations = self._profiles.get(entity.id(), ())
        if choice.profile is None and relations:
            return self._by_relation(entity, relations, result)
        end = choice.end_profile
        result = replace(
            result,
            section=self._section(choice.profile, key),
            end_section=self._section(end, key) if end is not None else None,
        )
        return self._placed(result, choice.cardinal_point, key)

    def report(self) -> None:
        """Write down what was noticed about materials and profiles, with the members' ids."""
        for finding, members in self._users.items():
            self._notes.extend([replace(finding, elements=tuple(dict.fromkeys(members)))])
        for point, members in self._eccentric.items():
            self._notes.add(
                "note",
                "eccentric-section",
                f"{len(members)} members ({listed(members)}) have their section inserted at "
                f"cardinal point {point}, not at its centroid; bending is unaffected, and the "
                f"moment of axial forces about the centroid is neglected.",
                members,
            )

    def _material(self, entity: Any, key: str) -> Material | None:
        if entity is None or self._materials is None:
            return None
        material, findings = self._materials.read(entity)
        for finding in findings:
            self._users.setdefault(finding, []).append(key)
        return material

    def _section(self, profile: Any, key: str) -> Section | None:
        if profile is None:
            return None
        section = self._sections.section(profile)
        for finding in self._sections.findings(profile):
            self._users.setdefault(finding, []).append(key)
        return section

    def _report_malformed(self, error: Exception) -> None:
        self._notes.add(
            "error",
            "malformed-properties",
            f"The materials and sections of the file could not be read: what describes them is "
            f"not as the schema asks ({str(error).splitlines()[0][:120]}). Export the model "
            f"again, or state them in the job file (materials, sections).",
        )

    def _placed(self, result: Properties, point: int, key: str) -> Properties:
        section = result.section
        if section is None or point in _CENTRED:
            return result
        top, bottom = section.top, section.depth - section.top
        drop = {1: -bottom, 2: -bottom, 3: -bottom, 7: top, 8: top, 9: top}.get(point)
        middle = 0.5 * section.depth
        offset = drop if drop is not None else top - middle
        if abs(offset) <= 1e-6 and point in (4, 5, 6):
            return result
        self._eccentric.setdefault(point, []).append(key)
        return replace(result, offset=abs(offset))

    def _by_relation(
        self, entity: Any, relations: tuple[Any, ...], result: Properties
    ) -> Properties:
        """IFC2X3: the profile stands in the profile properties, with an orientation beside."""
        key = global_id(entity)
        orientation = next((r[7] for r in relations if r[7] is not None), None)
        if orientation is not None and is_kind(orientation, "IfcDirection"):
            result = replace(result, direction=orientation)
        elif orientation is not None:
            result = replace(result, angle=float(orientation.wrappedValue) * self._units.angle)
        found = [r[5] for r in relations if r[5] is not None]
        if len({properties.id() for properties in found}) > 1:
            self._notes.add(
                "warning",
                "varying-section",
                f"Member GlobalId {key} states {len(found)} sections along its "
                f"length; the first was taken throughout. State its inertia in the job file "
                f"(sections), or split the member.",
                (key,),
            )
        if not found:
            return result
        section = self._section(found[0][1], key)
        return replace(result, section=section or _section_of_properties(found[0], self._units))


def _choice_finding(note: str) -> Finding:
    return Finding(
        "warning",
        "material-choice",
        f"What members are made of is stated more than once: {note}. State what holds in the job "
        f"file (sections, materials) where that is wrong.",
    )


def _profile_relations(file: Any) -> dict[int, tuple[Any, ...]]:
    """Return the IfcRelAssociatesProfileProperties (IFC2X3 only) by entity number."""
    result: dict[int, tuple[Any, ...]] = {}
    try:
        relations = file.by_type("IfcRelAssociatesProfileProperties")
    except RuntimeError:  # the schema has no such class
        return result
    for relation in relations:
        try:
            for item in relation[4] or ():
                result[item.id()] = (*result.get(item.id(), ()), relation)
        except MALFORMED:
            continue
    return result


def _section_of_properties(properties: Any, units: FileUnits) -> Section | None:
    """Return the section that IfcStructuralProfileProperties (IFC2X3) state by their values."""
    if not is_kind(properties, "IfcStructuralProfileProperties"):
        return None
    area = units.to_si("AREAUNIT")
    inertia = units.to_si("MOMENTOFINERTIAUNIT")

    def value(index: int, factor: float) -> float:
        number = properties[index]
        return float(number) * factor if number is not None else 0.0

    if not value(9, inertia) > 0.0:
        return None
    return Section(
        name=properties[0] or "",
        shape="",
        area=value(6, area),
        inertia=value(9, inertia),
        inertia_lateral=value(10, inertia),
        inertia_product=value(8, inertia),
        torsion=value(7, inertia),
        shear_area=value(14, area),
        source="IfcStructuralProfileProperties",
    )
