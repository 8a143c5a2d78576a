"""What members can be given: the named profiles and materials of a model, sections of a table."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, field

import ifcopenshell

from analysis_core.errors import JobError
from analysis_core.ifc.geometry.outline import IDENTITY, Matrix
from analysis_core.ifc.geometry.paths import Measures
from analysis_core.ifc.materials.reader import MaterialReader, named_material
from analysis_core.ifc.sections.profile_properties import Stated, stated_by_profile
from analysis_core.ifc.sections.reader import Profile, SectionReader, measures_of, section_of
from analysis_core.ifc.source import Source
from analysis_core.ifc.unreadable import text_of
from analysis_core.ifc.updating.made import made_profile
from analysis_core.model import Material, Section
from analysis_core.settings import MaterialSetting, Settings, TableSection

_SAME = 1e-6


@dataclass(frozen=True, slots=True, eq=False)
class Stocked:
    """A profile that can be laid into a member; ``stated``: values of its property sets."""

    profile: Profile
    stated: Stated | None = None

    def section(self, roll: float = 0.0) -> Section:
        """Return its section, turned by ``roll`` (rad) as it lies in a member."""
        matrix = _turning(roll)
        section = section_of(self.profile, matrix)
        if self.stated is None:
            return section
        return self.stated.applied(section, self.profile.moments, matrix)


@dataclass(frozen=True, slots=True, eq=False)
class Stock:
    """Profiles and materials of a model by their names."""

    profiles: Mapping[str, Stocked] = field(default_factory=dict)
    ambiguous: frozenset[str] = frozenset()
    """Names that profiles of different dimensions have."""
    materials: Mapping[str, Material] = field(default_factory=dict)


def read_stock(source: Source, settings: Settings) -> Stock:
    """Return what a model has: profiles with a name, an outline and a known shape; materials."""
    stated = stated_by_profile(source.file, source.units)
    reader = SectionReader(measures_of(source.units), stated)
    profiles: dict[str, Stocked] = {}
    first: dict[str, Section] = {}
    ambiguous = set()
    for entity in source.file.by_type("IfcProfileDef"):
        name = text_of(entity[1]).strip()
        profile = reader.profile(entity) if name else None
        section = reader.section(entity) if profile is not None else None
        if profile is None or section is None or not section.shape:
            continue
        if name not in profiles:
            profiles[name] = Stocked(profile, stated.get(entity.id()))
            first[name] = section
        elif not alike(first[name], section):
            ambiguous.add(name)
    return Stock(profiles, frozenset(ambiguous), _materials(source, settings))


def table_profile(stated: TableSection) -> Stocked:
    """Return the profile of a section table.  Raises JobError where it cannot be drawn."""
    reader = SectionReader(Measures(1.0))
    file = ifcopenshell.file(schema="IFC4")
    profile = reader.profile(made_profile(file.create_entity, stated, length=1.0, digits=15))
    if profile is None:
        raise JobError(f"The section '{stated.name}' of the section table cannot be drawn.")
    return Stocked(profile)


def stated_material(stated: MaterialSetting, settings: Settings) -> Material:
    """Return a material that only the job file has: what its name tells; see ``materials``."""
    return named_material(stated.name, stated.category, settings)


def alike(one: Section, other: Section) -> bool:
    """Whether two sections are the same, upright or lying."""
    pairs = (
        (one.area, other.area),
        (one.inertia + one.inertia_lateral, other.inertia + other.inertia_lateral),
    )
    return all(abs(a - b) <= _SAME * max(abs(a), abs(b)) for a, b in pairs)


def _materials(source: Source, settings: Settings) -> dict[str, Material]:
    reader = MaterialReader(source.file, source.units, settings)
    found: dict[str, Material] = {}
    for entity in source.file.by_type("IfcMaterial"):
        name = text_of(entity[0]).strip()
        material = reader.read(entity)[0] if name and name not in found else None
        if material is not None:
            found[name] = material
    return found


def _turning(roll: float) -> Matrix:
    if not roll:
        return IDENTITY
    cosine, sine = math.cos(roll), math.sin(roll)
    return ((cosine, -sine), (sine, cosine))
