"""Section and material of each member, with what the job file states laid over the model."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from fnmatch import fnmatchcase
from typing import Any

from analysis_core.building import AxisMember
from analysis_core.idealise.selectors import Chooser
from analysis_core.model import Material, Section
from analysis_core.settings import MaterialSetting, SectionSetting, Settings

# Common practice: every structural material lies well inside this range (Pa); a value outside it
# is a slip of units (kN/m² read as N/m², a modulus written in a unit of mass).
PLAUSIBLE_MODULUS = (0.5e9, 1000e9)


@dataclass(frozen=True, slots=True)
class Properties:
    """What a member is made of.  ``fault`` says why it has no rigidity, "" where it has."""

    section: Section | None
    end_section: Section | None
    material: Material | None
    taper: tuple[tuple[float, float], ...] = ()
    fault: str = ""


class PropertyTable:
    """Gives the properties of members; the same material is overlaid only once."""

    def __init__(self, settings: Settings, chooser: Chooser) -> None:
        self._settings = settings
        self._chooser = chooser
        self._members: dict[str, Properties] = {}
        self._materials: dict[Material | None, Material | None] = {}

    def of(self, member: AxisMember) -> Properties:
        """Return the section and material of a member as they are to be used."""
        found = self._members.get(member.global_id)
        if found is None:
            found = self._members[member.global_id] = self._settle(member)
        return found

    def _settle(self, member: AxisMember) -> Properties:
        material = self._material(member.material)
        section, end_section = member.section, member.end_section
        taper: tuple[tuple[float, float], ...] = ()
        for setting in self._settings.sections:
            if self._chooser.chooses(setting.on, member, where=setting.source or "sections"):
                section = _overlaid_section(section, setting)
                end_section = None if _states_stiffness(setting) else end_section
                taper = setting.taper or taper
        fault = _fault(section, end_section, material)
        return Properties(section, end_section, material, taper, fault)

    def _material(self, stated: Material | None) -> Material | None:
        if stated not in self._materials:
            result = stated
            for setting in self._settings.materials:
                name = result.name if result else ""
                if fnmatchcase(name.casefold(), setting.name.casefold()):
                    result = _overlaid_material(result, setting)
            self._materials[stated] = result
        return self._materials[stated]


def _overlaid_material(stated: Material | None, setting: MaterialSetting) -> Material:
    base = stated or Material(name=setting.name, elastic_modulus=0.0)
    changes: dict[str, Any] = {}
    for name in ("elastic_modulus", "shear_modulus", "density", "thermal_expansion"):
        given, present = getattr(setting, name), getattr(base, name)
        if given > 0.0 and (setting.override or not present > 0.0):
            changes[name] = given
    strength = dict(base.strength)
    for name, value in setting.strength.items():
        if setting.override or name not in strength:
            strength[name] = value
    category = base.category
    if setting.category and (setting.override or not category):
        category = setting.category
    return replace(
        base,
        **changes,
        strength=tuple(strength.items()),
        category=category,
        source="job file" if changes else base.source,
    )


def _overlaid_section(stated: Section | None, setting: SectionSetting) -> Section | None:
    names = ("area", "inertia", "shear_area", "depth", "width")
    changes = {name: getattr(setting, name) for name in names if getattr(setting, name) > 0.0}
    if not changes:
        return stated
    base = stated or Section(name="job file", shape="", area=0.0, inertia=0.0)
    return replace(base, **changes, source="job file")


def _states_stiffness(setting: SectionSetting) -> bool:
    return setting.inertia > 0.0 or bool(setting.taper)


def _fault(section: Section | None, end: Section | None, material: Material | None) -> str:
    if section is None:
        return (
            "it has no section that could be read. Give its inertia in the job file "
            "(sections: on, inertia)"
        )
    if any(s is not None and not _positive(s.inertia) for s in (section, end)):
        return (
            f"its section '{section.name}' has a second moment of area of {section.inertia:.3g} m4;"
            f" it must be positive. Give its inertia in the job file (sections: on, inertia)"
        )
    if material is None:
        return (
            "it has no material that could be read. Give the modulus of elasticity in the job "
            "file (materials: name '*', elastic_modulus)"
        )
    modulus = material.elastic_modulus
    advice = (
        f"Give it in the job file (materials: name '{material.name}', elastic_modulus), or put "
        f"the material and its units right in the model"
    )
    if not _positive(modulus):
        return f"its material '{material.name}' states no modulus of elasticity. {advice}"
    low, high = PLAUSIBLE_MODULUS
    if not low <= modulus <= high:
        return (
            f"its material '{material.name}' has a modulus of elasticity of "
            f"{modulus / 1e6:.4g} MPa, which no structural material has (permitted: "
            f"{low / 1e9:g} to {high / 1e9:g} GPa). {advice}"
        )
    return ""


def _positive(value: float) -> bool:
    return math.isfinite(value) and value > 0.0
