"""Stiffness, density and strength of materials: as the model states them, else by their names."""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from contextlib import suppress
from dataclasses import dataclass, replace
from fnmatch import fnmatchcase
from typing import Any

import ifcopenshell

from analysis_core.findings import Finding
from analysis_core.ifc.file_units import FileUnits, UnitError
from analysis_core.ifc.materials.choice import Choice, choose
from analysis_core.ifc.materials.table import Known, kind_of, known_material
from analysis_core.ifc.relations import Relations
from analysis_core.ifc.unreadable import READ_ERRORS, reason_of, text_of
from analysis_core.model import Material
from analysis_core.settings import Settings

PLAUSIBLE_MODULUS = (0.5e9, 1000e9)
_PLAUSIBLE_DENSITY = (50.0, 25e3)  # kg/m³: from foamed concrete to well beyond steel and lead
"""Pa; common practice: every structural material lies well inside."""

_CATEGORY = {
    "glulam": "glulam", "lvl": "lvl", "hardwood": "hardwood", "timber": "timber",
    "concrete": "concrete", "lightweight concrete": "concrete", "steel": "steel",
    "stainless": "stainless",
}  # fmt: skip

# Names of properties as the standard's sets (Pset_MaterialMechanical, …Common, …Concrete,
# …Steel) and common practice spell them, without spaces and marks, in lower case.
_NAMES = {
    "youngmodulus": "elastic_modulus",
    "youngsmodulus": "elastic_modulus",
    "modulusofelasticity": "elastic_modulus",
    "elasticmodulus": "elastic_modulus",
    "emodulus": "elastic_modulus",
    "shearmodulus": "shear_modulus",
    "poissonratio": "poisson",
    "poissonsratio": "poisson",
    "massdensity": "density",
    "density": "density",
    "thermalexpansioncoefficient": "thermal_expansion",
    "coefficientofthermalexpansion": "thermal_expansion",
    "yieldstress": "fy",
    "yieldstrength": "fy",
    "ultimatestress": "fu",
    "ultimatestrength": "fu",
    "tensilestrength": "fu",
    "compressivestrength": "fck",
}
_MEASURE = {  # what IFC2X3 attributes and untyped numbers are measured in
    "elastic_modulus": "IfcModulusOfElasticityMeasure",
    "shear_modulus": "IfcModulusOfElasticityMeasure",
    "density": "IfcMassDensityMeasure",
    "thermal_expansion": "IfcThermalExpansionCoefficientMeasure",
    "fy": "IfcPressureMeasure",
    "fu": "IfcPressureMeasure",
    "fck": "IfcPressureMeasure",
}
_IFC2X3_CLASSES = {
    "IfcMechanicalMaterialProperties", "IfcMechanicalConcreteMaterialProperties",
    "IfcMechanicalSteelMaterialProperties", "IfcGeneralMaterialProperties",
}  # fmt: skip


@dataclass(frozen=True, slots=True)
class Stated:
    """Values that property sets state for one material, in SI by our names; and their sources."""

    values: Mapping[str, float]
    sources: tuple[str, ...]
    troubles: tuple[str, ...] = ()


class MaterialReader:
    """Reads the materials of one file, each once; property sets are walked once."""

    def __init__(self, file: Any, units: FileUnits, settings: Settings) -> None:
        self._units = units
        self._settings = settings
        self._stated = _stated_by_material(file, units)
        self._known: dict[int, tuple[Material | None, tuple[Finding, ...]]] = {}

    def read(self, entity: Any) -> tuple[Material | None, tuple[Finding, ...]]:
        """Return an IfcMaterial in SI; elastic modulus 0 where nothing tells it."""
        if entity is None:
            return None, ()
        key = entity.id()
        if key not in self._known:
            stated = self._stated.get(key, Stated({}, ()))
            self._known[key] = _material(entity, stated, self._settings)
        return self._known[key]


def read_material(
    entity: Any, units: FileUnits, settings: Settings
) -> tuple[Material | None, list[Finding]]:
    """Return the material of any IfcMaterialSelect, None where it holds none.

    Values come from the property sets of the material, else from its name.  Findings name the
    material; the caller adds the elements that are made of it.
    """
    choice = choose(entity)
    if choice.material is None:
        return None, []
    stated = _stated(_properties_of(choice.material), units)
    material, findings = _material(choice.material, stated, settings)
    return material, [*_choice_findings(choice), *findings]


def named_material(name: str, category: str, settings: Settings) -> Material:
    """Return the material of which no more is known than its name and category."""
    entity = ifcopenshell.file(schema="IFC4").create_entity(
        "IfcMaterial", Name=name, Category=category or None
    )
    return _material(entity, Stated({}, ()), settings)[0]


def material_and_profile_of(source: Any) -> dict[int, Choice]:
    """Return material, profile and cardinal point by entity number of each element.

    Elements take what is associated with themselves, else with their type.
    """
    relations = Relations(source.entities)
    choices: dict[int, Choice] = {}
    result: dict[int, Choice] = {}
    for key, select in relations.material_of.items():
        number = select.id()
        if number not in choices:  # thousands of elements share one
            choices[number] = choose(select)
        result[key] = choices[number]
    for key, type_ in relations.type_of.items():
        if key not in result and type_.id() in result:
            result[key] = result[type_.id()]
    return result


def _choice_findings(choice: Choice) -> list[Finding]:
    if not choice.note:
        return []
    return [Finding("note", "material-choice", f"{choice.note[0].upper()}{choice.note[1:]}.")]


def _material(
    entity: Any, stated: Stated, settings: Settings
) -> tuple[Material, tuple[Finding, ...]]:
    name = text_of(entity[0]).strip()
    stated_kind = text_of(getattr(entity, "Category", None))
    known = known_material(name, stated_kind)
    values = stated.values
    modulus = values.get("elastic_modulus", 0.0)
    by_name = not modulus > 0.0 and known is not None
    if by_name and known is not None:
        modulus = known.elastic_modulus
    kind = kind_of(name) or kind_of(stated_kind)
    material = Material(
        name=name,
        elastic_modulus=modulus,
        shear_modulus=_shear_modulus(values, modulus, known if by_name else None, kind),
        density=values.get("density") or (known.density if known else 0.0),
        thermal_expansion=values.get("thermal_expansion")
        or (known.thermal_expansion if known else 0.0),
        category=known.category if known else _CATEGORY.get(kind, ""),
        strength=tuple(_strength(values, known).items()),
        source=_source(stated, known, by_name),
    )
    findings = [_trouble(name, trouble) for trouble in stated.troubles]
    findings += _modulus_findings(material, known if by_name else None, settings)
    findings += _density_findings(material, settings)
    return material, tuple(findings)


def _shear_modulus(
    values: Mapping[str, float], modulus: float, known: Known | None, kind: str
) -> float:
    if values.get("shear_modulus", 0.0) > 0.0:
        return values["shear_modulus"]
    if known is not None:
        return known.shear_modulus
    poisson = values.get("poisson", -1.0)
    if 0.0 <= poisson <= 0.5:
        return modulus / (2.0 * (1.0 + poisson))
    return Material("", modulus, category=_CATEGORY.get(kind, "")).usable_shear_modulus


def _strength(values: Mapping[str, float], known: Known | None) -> dict[str, float]:
    strength = dict(known.strength) if known else {}
    for symbol in ("fy", "fu", "fck"):
        if values.get(symbol, 0.0) > 0.0 and (symbol != "fck" or not strength.get("fy")):
            strength[symbol] = values[symbol]
    return strength


def _source(stated: Stated, known: Known | None, by_name: bool) -> str:
    parts = list(dict.fromkeys(stated.sources))
    if known is not None and (by_name or not stated.sources):
        parts.append(f"name, read as {known.grade} ({known.source}; from memory)")
    return "; ".join(parts)


def _modulus_findings(material: Material, known: Known | None, settings: Settings) -> list[Finding]:
    if _settled_by(settings, material.name):
        return []
    if known is not None and known.assumed:
        return [
            Finding(
                "note",
                "material-assumed",
                f"Material '{material.name}' states no properties; by its name it was taken as "
                f"{known.grade}, assumed: {known.assumed} ({known.source}). State its grade or its "
                f"modulus in the model, "
                f"or in the job file (materials).",
            )
        ]
    modulus = material.elastic_modulus
    if modulus == 0.0:
        return [
            Finding(
                "warning",
                "no-material-stiffness",
                f"Material '{material.name}' states no modulus of elasticity and its name tells "
                f"none. Give it in the model, or in the job file (materials: name "
                f"'{material.name}', elastic_modulus).",
            )
        ]
    low, high = PLAUSIBLE_MODULUS
    if not low <= modulus <= high:
        return [
            Finding(
                "warning",
                "implausible-modulus",
                f"Material '{material.name}' states a modulus of elasticity of "
                f"{modulus / 1e9:.4g} GPa; structural materials have {low / 1e9:g} to "
                f"{high / 1e9:g} GPa. Check its unit, or give it in the job file (materials).",
            )
        ]
    return []


def _density_findings(material: Material, settings: Settings) -> list[Finding]:
    low, high = _PLAUSIBLE_DENSITY
    name = material.name.casefold()
    if material.density == 0.0 or low <= material.density <= high:
        return []
    if any(s.density > 0.0 and fnmatchcase(name, s.name.casefold()) for s in settings.materials):
        return []
    return [
        Finding(
            "warning",
            "implausible-density",
            f"Material '{material.name}' states a density of {material.density:.4g} kg/m³; "
            f"structural materials have {low:g} to {high:g} kg/m³. Self weight is computed from "
            f"it as stated. Check its unit, or give it in the job file (materials: density).",
        )
    ]


def _settled_by(settings: Settings, name: str) -> bool:
    return any(
        setting.elastic_modulus > 0.0 and fnmatchcase(name.casefold(), setting.name.casefold())
        for setting in settings.materials
    )


def _trouble(name: str, trouble: str) -> Finding:
    return Finding(
        "warning",
        "material-property",
        f"Material '{name}': {trouble}. It was left out; correct it in the model.",
    )


def _stated_by_material(file: Any, units: FileUnits) -> dict[int, Stated]:
    sets: dict[int, list[Any]] = {}
    for properties in file.by_type("IfcMaterialProperties"):
        with suppress(*READ_ERRORS):  # a set for nothing that is a material
            sets.setdefault(properties.Material.id(), []).append(properties)
    return {key: _stated(found, units) for key, found in sets.items()}


def _properties_of(material: Any) -> list[Any]:
    if hasattr(material, "HasProperties"):
        return list(material.HasProperties)
    file = material.file
    return [e for e in file.get_inverse(material) if e.is_a("IfcMaterialProperties")]


def _stated(sets: Iterable[Any], units: FileUnits) -> Stated:
    values: dict[str, float] = {}
    sources: list[str] = []
    troubles: list[str] = []
    for properties in sets:
        before = len(values)
        try:
            if properties.is_a() in _IFC2X3_CLASSES:
                _from_attributes(properties, units, values)
            else:
                _from_properties(properties, units, values, troubles)
        except UnitError as error:
            troubles.append(f"{properties.is_a()} #{properties.id()}: {error}")
        except READ_ERRORS as error:
            troubles.append(f"{properties.is_a()} #{properties.id()}: {reason_of(error)}")
        if len(values) > before:
            sources.append(text_of(getattr(properties, "Name", None)) or properties.is_a())
    return Stated(values, tuple(sources), tuple(troubles))


def _from_attributes(properties: Any, units: FileUnits, values: dict[str, float]) -> None:
    for attribute, value in properties.get_info(recursive=False).items():
        ours = _NAMES.get(attribute.lower())
        if ours is None or not isinstance(value, int | float):
            continue
        factor = units.of_measure(_MEASURE[ours]) if ours in _MEASURE else 1.0
        values.setdefault(ours, float(value) * factor)


def _from_properties(
    properties: Any, units: FileUnits, values: dict[str, float], troubles: list[str]
) -> None:
    items = properties[2] if properties.is_a("IfcMaterialProperties") else ()
    if properties.is_a("IfcExtendedMaterialProperties"):
        items = properties.ExtendedProperties
    for item in items or ():
        ours = _NAMES.get(re.sub(r"[^a-z]", "", text_of(item[0]).lower()))
        if ours is None or not item.is_a("IfcPropertySingleValue") or item[2] is None:
            continue
        try:
            value = _number(item, ours, units)
        except (UnitError, TypeError, ValueError) as error:
            troubles.append(f"property {item[0]} ({error})")
            continue
        values.setdefault(ours, value)


def _number(item: Any, ours: str, units: FileUnits) -> float:
    """Value of a property in SI; a bare number is taken in the unit its meaning has."""
    measure, unit = item[2], item[3]
    if unit is None and measure.is_a() in ("IfcReal", "IfcNumericMeasure", "IfcInteger"):
        return float(measure[0]) * units.of_measure(_MEASURE.get(ours, ""))
    return units.value(measure, unit)


def with_elements(finding: Finding, elements: Iterable[str]) -> Finding:
    """Return the finding for the given elements."""
    return replace(finding, elements=tuple(elements))
