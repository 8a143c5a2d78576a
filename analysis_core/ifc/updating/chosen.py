"""The profile or material that the engineer chose: of the model, or of the job file."""

from __future__ import annotations

import difflib
from collections.abc import Iterable
from typing import Any

from analysis_core.errors import JobError
from analysis_core.ifc.sections.profile_properties import stated_by_profile
from analysis_core.ifc.sections.reader import SectionReader, measures_of
from analysis_core.ifc.updating.editor import Editor
from analysis_core.ifc.updating.made import made_profile
from analysis_core.ifc.updating.stock import alike
from analysis_core.model import Section
from analysis_core.settings import MaterialSetting, Settings, TableSection

_MECHANICAL = {  # our name: name in the standard's sets, measure
    "elastic_modulus": ("YoungModulus", "IfcModulusOfElasticityMeasure"),
    "shear_modulus": ("ShearModulus", "IfcModulusOfElasticityMeasure"),
    "thermal_expansion": ("ThermalExpansionCoefficient", "IfcThermalExpansionCoefficientMeasure"),
}


class Chooser:
    """Finds what is chosen by name, and adds to the model what only the job file has."""

    def __init__(self, editor: Editor, settings: Settings) -> None:
        self._editor = editor
        self._settings = settings
        stated = stated_by_profile(editor.file, editor.units)
        self.sections = SectionReader(measures_of(editor.units), stated)

    def profile(self, name: str) -> Any:
        """Return the profile of this name.  Raises JobError where it is not known, or not one."""
        found = self._of_model(name)
        stated = next((s for s in self._settings.section_table if s.name == name), None)
        if stated is None and not found:
            raise JobError(self._unknown_profile(name))
        if stated is None or (found and stated.origin):  # a list of others gives way to the model
            return self._one_of(name, found)
        made = self._made(stated)
        if found and not alike(self._section(found[0]), self._section(made)):
            raise JobError(
                f"The profile '{name}' of the model has other dimensions than that of the section "
                f"table. Give the one in the table another name."
            )
        return made

    def material(self, name: str) -> Any:
        """Return the material of this name.  Raises JobError where it is not known."""
        for entity in self._editor.file.by_type("IfcMaterial"):
            if (entity[0] or "").strip() == name:
                return entity
        for setting in self._settings.materials:
            if setting.name == name:
                return self._made_material(setting)
        known = [e[0] for e in self._editor.file.by_type("IfcMaterial")]
        known += [m.name for m in self._settings.materials if not set(m.name) & set("*?[")]
        raise JobError(
            f"There is no material '{name}' in the model or the job file{_nearest(name, known)}."
        )

    def _of_model(self, name: str) -> list[Any]:
        """Profiles of this name that have an outline, plain ones first."""
        found = [
            p
            for p in self._editor.file.by_type("IfcProfileDef")
            if (p.ProfileName or "").strip() == name and self.sections.profile(p) is not None
        ]
        return sorted(found, key=lambda p: (not p.is_a("IfcParameterizedProfileDef"), p.id()))

    def _one_of(self, name: str, found: list[Any]) -> Any:
        first = self._section(found[0])
        if not all(alike(first, self._section(other)) for other in found[1:]):
            raise JobError(
                f"The model has profiles of different dimensions with the name '{name}', so it "
                f"does not say which is meant. Put the one that is meant into the section table "
                f"of the job file under a name of its own."
            )
        return found[0]

    def _section(self, profile: Any) -> Section:
        section = self.sections.section(profile)
        assert section is not None  # only readable profiles come here
        return section

    def _made(self, stated: TableSection) -> Any:
        made = made_profile(self._editor.new, stated, length=self._editor.units.length)
        if self.sections.profile(made) is None:
            raise JobError(
                f"The section '{stated.name}' of the section table cannot be drawn: "
                f"{self.sections.reason(made)}. Correct its dimensions."
            )
        return made

    def _made_material(self, setting: MaterialSetting) -> Any:
        new, units = self._editor.new, self._editor.units
        old = self._editor.schema == "IFC2X3"
        category = {} if old or not setting.category else {"Category": setting.category}
        material = new("IfcMaterial", Name=setting.name, **category)
        values = {
            name: (measure, getattr(setting, ours) / units.of_measure(measure))
            for ours, (name, measure) in _MECHANICAL.items()
            if getattr(setting, ours) > 0.0
        }
        density = setting.density / units.of_measure("IfcMassDensityMeasure")
        if old:
            if values:
                plain = {name: value for name, (_, value) in values.items()}
                new("IfcMechanicalMaterialProperties", Material=material, **plain)
            if density:
                new("IfcGeneralMaterialProperties", Material=material, MassDensity=density)
            return material
        common = {"MassDensity": ("IfcMassDensityMeasure", density)} if density else {}
        for name, stated in (("Pset_MaterialMechanical", values), ("Pset_MaterialCommon", common)):
            if stated:
                properties = [
                    new("IfcPropertySingleValue", Name=key,
                        NominalValue=self._editor.file.create_entity(measure, value))
                    for key, (measure, value) in stated.items()
                ]  # fmt: skip
                new("IfcMaterialProperties", Name=name, Properties=properties, Material=material)
        return material

    def _unknown_profile(self, name: str) -> str:
        known = [p.ProfileName for p in self._editor.file.by_type("IfcProfileDef")]
        known += [s.name for s in self._settings.section_table]
        return (
            f"There is no profile '{name}' in the model or in a section table of the job file"
            f"{_nearest(name, known)}. State it there (section_table: name, shape, dimensions)."
        )


def _nearest(name: str, known: Iterable[str | None]) -> str:
    near = difflib.get_close_matches(name, sorted({k for k in known if k}), n=3, cutoff=0.0)
    return f"; the nearest are {', '.join(repr(n) for n in near)}" if near else ""
