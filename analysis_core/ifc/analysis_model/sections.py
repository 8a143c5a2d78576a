"""Materials and sections of an analysis model: what its members are made of, by their values.

The values are those that were analysed, whoever stated them.  A section is a named profile with
its area and second moments of area as profile properties; the modulus is a property of the
material, and second moment times modulus is exactly the rigidity that was analysed.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from analysis_core.ifc.analysis_model.bars import Bar
from analysis_core.ifc.analysis_model.text import ModelText
from analysis_core.ifc.step.values import label, real, references
from analysis_core.model import Material, Section

# Where only the rigidity is known (a stiffness from the job file): what goes with it.
_ANY_MODULUS = 210e9
_ANY_AREA = 0.01
_NOT_STATED = Material("Not stated", 0.0)
_BY_STIFFNESS = Section("By stiffness", "", 0.0, 0.0)

_METRE = "IFCSIUNIT(*,.LENGTHUNIT.,$,.METRE.)"
_KILOGRAM = "IFCSIUNIT(*,.MASSUNIT.,.KILO.,.GRAM.)"
_KELVIN = "IFCSIUNIT(*,.THERMODYNAMICTEMPERATUREUNIT.,$,.KELVIN.)"
# SI units of measures: a unit by itself, or (kind, parts with their powers).
_SI: Mapping[str, str | tuple[str, tuple[tuple[str, int], ...]]] = {
    "IFCMODULUSOFELASTICITYMEASURE": "IFCSIUNIT(*,.PRESSUREUNIT.,$,.PASCAL.)",
    "IFCAREAMEASURE": "IFCSIUNIT(*,.AREAUNIT.,$,.SQUARE_METRE.)",
    "IFCMOMENTOFINERTIAMEASURE": ("MOMENTOFINERTIAUNIT", ((_METRE, 4),)),
    "IFCMASSDENSITYMEASURE": ("MASSDENSITYUNIT", ((_KILOGRAM, 1), (_METRE, -3))),
    "IFCTHERMALEXPANSIONCOEFFICIENTMEASURE": (
        "THERMALEXPANSIONCOEFFICIENTUNIT",
        ((_KELVIN, -1),),
    ),
}


@dataclass(frozen=True, slots=True)
class Made:
    """What a bar is made of, in SI; bars that are made alike share their entities."""

    material: str
    category: str
    elastic_modulus: float
    shear_modulus: float
    density: float
    thermal_expansion: float
    section: str
    area: float
    inertia: float
    inertia_lateral: float
    torsion: float
    shear_area: float


def made_of(bar: Bar) -> Made:
    """Return what a bar is made of, its second moment of area such that the rigidity is exact."""
    material = bar.member.material or _NOT_STATED
    section = bar.member.section or _BY_STIFFNESS
    modulus = material.elastic_modulus or _ANY_MODULUS
    shear_area = section.shear_area
    if bar.shear is not None and material.shear_modulus:
        shear_area = bar.shear / material.shear_modulus
    return Made(
        material.name or _NOT_STATED.name,
        material.category,
        modulus,
        material.shear_modulus,
        material.density,
        material.thermal_expansion,
        section.name or "Section",
        section.area or _ANY_AREA,
        bar.flexural / modulus,
        section.inertia_lateral,
        section.torsion,
        shear_area,
    )


def write_made(text: ModelText, users: Mapping[tuple[Made, int], Sequence[int]]) -> None:
    """Give members their materials and sections.

    ``users``: members by what they are made of and the direction of their depth.
    """
    for number, ((made, upward), members) in enumerate(users.items()):
        if text.old:
            _associate_separately(text, made, upward, members, number)
        else:
            _associate_together(text, made, members, number)


def _associate_together(text: ModelText, made: Made, members: Sequence[int], number: int) -> None:
    """From IFC4 on: one profile set usage, inserted at the centroid (cardinal point 10)."""
    lines = text.lines
    category = label(made.category) if made.category else "$"
    material = _described(
        text, f"IFCMATERIAL({label(made.material)},$,{category})", "IFCMATERIALPROPERTIES",
        {
            "Pset_MaterialMechanical": [
                ("YoungModulus", "IFCMODULUSOFELASTICITYMEASURE", made.elastic_modulus),
                ("ShearModulus", "IFCMODULUSOFELASTICITYMEASURE", made.shear_modulus),
                ("ThermalExpansionCoefficient", "IFCTHERMALEXPANSIONCOEFFICIENTMEASURE",
                 made.thermal_expansion),
            ],
            "Pset_MaterialCommon": [("MassDensity", "IFCMASSDENSITYMEASURE", made.density)],
        },
    )  # fmt: skip
    profile = _described(
        text, f"IFCPROFILEDEF(.AREA.,{label(made.section)})", "IFCPROFILEPROPERTIES",
        {
            "Pset_ProfileMechanical": [
                ("CrossSectionArea", "IFCAREAMEASURE", made.area),
                ("MomentOfInertiaY", "IFCMOMENTOFINERTIAMEASURE", made.inertia),
                ("MomentOfInertiaZ", "IFCMOMENTOFINERTIAMEASURE", made.inertia_lateral),
                ("TorsionalConstantX", "IFCMOMENTOFINERTIAMEASURE", made.torsion),
                ("ShearDeformationAreaZ", "IFCAREAMEASURE", made.shear_area),
            ],
        },
    )  # fmt: skip
    entry = lines.shared(f"IFCMATERIALPROFILE($,$,#{material},#{profile},$,$)")
    group = lines.shared(f"IFCMATERIALPROFILESET($,$,(#{entry}),$)")
    usage = lines.shared(f"IFCMATERIALPROFILESETUSAGE(#{group},10,$)")
    text.rooted("IFCRELASSOCIATESMATERIAL", f"made {number}", references(members), f"#{usage}")


def _described(
    text: ModelText,
    body: str,
    keyword: str,
    sets: Mapping[str, Sequence[tuple[str, str, float]]],
) -> int:
    """Return a material or profile that has just these properties; alike ones are one.

    What is not known (0) is not stated.
    """
    stated = {
        name: text.lines.shared_list(
            f"IFCPROPERTYSINGLEVALUE('{title}',$,{measure}({real(value)}),#{_unit(text, measure)})"
            for title, measure, value in values
            if value
        )
        for name, values in sets.items()
        if any(value for *_, value in values)
    }
    key = (body, *stated.items())
    known = text.described.get(key)
    if known is None:
        known = text.described[key] = text.lines.add(body)
        for name, properties in stated.items():
            text.lines.add(f"{keyword}('{name}',$,{properties},#{known})")
    return known


def _unit(text: ModelText, measure: str) -> int:
    unit = _SI[measure]
    if isinstance(unit, str):
        return text.lines.shared(unit)
    kind, parts = unit
    elements = text.lines.shared_list(
        f"IFCDERIVEDUNITELEMENT(#{text.lines.shared(part)},{power})" for part, power in parts
    )
    name = ",$" if text.schema == "IFC4X3" else ""
    return text.lines.shared(f"IFCDERIVEDUNIT({elements},.{kind}.,${name})")


def _associate_separately(
    text: ModelText, made: Made, upward: int, members: Sequence[int], number: int
) -> None:
    """IFC2X3: the material, and the profile by its properties, with a direction for its depth."""
    lines = text.lines
    key = (made.material, made.elastic_modulus, made.shear_modulus, made.density,
           made.thermal_expansion)  # fmt: skip
    material = text.described.get(key)
    if material is None:
        material = text.described[key] = lines.add(f"IFCMATERIAL({label(made.material)})")
        modulus = text.measured(made.elastic_modulus, "MODULUSOFELASTICITYUNIT")
        lines.add(
            f"IFCMECHANICALMATERIALPROPERTIES(#{material},$,{modulus},"
            f"{_or_none(text, made.shear_modulus, 'MODULUSOFELASTICITYUNIT')},$,"
            f"{_or_none(text, made.thermal_expansion, 'THERMALEXPANSIONCOEFFICIENTUNIT')})"
        )
        if made.density:
            density = text.measured(made.density, "MASSDENSITYUNIT")
            lines.add(f"IFCGENERALMATERIALPROPERTIES(#{material},$,$,{density})")
    text.rooted("IFCRELASSOCIATESMATERIAL", f"made {number}", references(members), f"#{material}")
    inertia = "MOMENTOFINERTIAUNIT"
    values = [
        label(made.section), "$", "$", "$", "$", "$",
        text.measured(made.area, "AREAUNIT"),
        _or_none(text, made.torsion, inertia), "$",
        text.measured(made.inertia, inertia),
        _or_none(text, made.inertia_lateral, inertia), "$", "$", "$",
        _or_none(text, made.shear_area, "AREAUNIT"),
        *["$"] * 8,
    ]  # fmt: skip
    properties = lines.shared(f"IFCSTRUCTURALPROFILEPROPERTIES({','.join(values)})")
    text.rooted(
        "IFCRELASSOCIATESPROFILEPROPERTIES", f"section {number}", references(members),
        f"#{properties}", "$", f"#{upward}",
    )  # fmt: skip


def _or_none(text: ModelText, si: float, kind: str) -> str:
    return text.measured(si, kind) if si else "$"
