"""Section values stated in the property sets of a profile: used where given, and compared.

IFC4 on: IfcProfileProperties (Pset_ProfileMechanical); IFC2X3: IfcGeneralProfileProperties,
IfcStructuralProfileProperties, IfcStructuralSteelProfileProperties.  There y is the section's
horizontal axis and z the one along its depth, so "MomentOfInertiaY" is our ``inertia``.

Files often assign no unit of area or inertia.  Such values may be meant in SI or in powers of
the unit of length; where the profile has an outline, the reading nearer to it is taken.
"""

from __future__ import annotations

import math
import re
from collections.abc import Iterable, Mapping
from contextlib import suppress
from dataclasses import dataclass, replace
from typing import Any

from analysis_core.findings import Finding
from analysis_core.ifc.file_units import FileUnits, UnitError
from analysis_core.ifc.geometry.outline import Matrix, Moments
from analysis_core.ifc.unreadable import READ_ERRORS, reason_of, text_of
from analysis_core.model import Section

_AGREEMENT = 0.02

# Name in the sets (lower case, letters only): ours, measure, power of length.
_NAMES = {
    "crosssectionarea": ("area", "IfcAreaMeasure", 2),
    "momentofinertiay": ("inertia", "IfcMomentOfInertiaMeasure", 4),
    "momentofinertiaz": ("inertia_lateral", "IfcMomentOfInertiaMeasure", 4),
    "momentofinertiayz": ("inertia_product", "IfcMomentOfInertiaMeasure", 4),
    "torsionalconstantx": ("torsion", "IfcMomentOfInertiaMeasure", 4),
    "sheardeformationareaz": ("shear_area", "IfcAreaMeasure", 2),
    "sheardeformationareay": ("shear_area_lateral", "IfcAreaMeasure", 2),
    "warpingconstant": ("warping", "IfcWarpingConstantMeasure", 6),
}
_COMPARED = {"area": "area", "inertia": "yy", "inertia_lateral": "xx"}
_UNIT_TEXT = {2: "cm²", 4: "cm⁴", 6: "cm⁶"}


@dataclass(frozen=True, slots=True)
class Stated:
    """Values as written, and the factors to SI that they may have: the first is the file's own.

    ``values`` maps our names to (number, possible factors, power of length).
    """

    values: Mapping[str, tuple[float, tuple[float, ...], int]]
    source: str
    troubles: tuple[str, ...] = ()

    def value(self, name: str, drawn: float | None = None) -> float | None:
        """Return a value in SI, the reading nearest to ``drawn`` where its unit is in doubt."""
        if name not in self.values:
            return None
        number, factors, _ = self.values[name]
        if drawn is None or not drawn > 0.0 or len(factors) == 1:
            return number * factors[0]
        return min((number * f for f in factors), key=lambda v: abs(math.log(v / drawn)))

    def section(self, name: str, matrix: Matrix) -> Section | None:
        """Return the section that the values alone make up, None without area or inertia."""
        area, inertia = self.value("area"), self.value("inertia")
        if not area or not inertia:
            return None
        lateral = self.value("inertia_lateral") or 0.0
        moments = Moments(area, 0.0, 0.0, lateral, inertia, 0.0).transformed(matrix)
        upright = _upright(matrix)
        return Section(
            name=name,
            shape="",
            area=moments.area,
            inertia=moments.yy,
            inertia_lateral=moments.xx,
            inertia_product=moments.xy,
            torsion=self.value("torsion") or 0.0,
            shear_area=(self.value("shear_area") or 0.0) if upright else 0.0,
            source=self.source,
        )

    def applied(self, section: Section, drawn: Moments, matrix: Matrix) -> Section:
        """Return a section drawn from the outline with the stated values put in."""
        exchanged = self._exchanged(drawn)
        area = self.value("area", drawn.area) or drawn.area
        yy, xx = drawn.yy, drawn.xx
        if not exchanged:
            yy = self.value("inertia", drawn.yy) or yy
            xx = self.value("inertia_lateral", drawn.xx) or xx
        stated = Moments(area, drawn.x, drawn.y, xx, yy, drawn.xy).transformed(matrix)
        dimensions = dict(section.dimensions)
        ratio = stated.yy / section.inertia
        for name in ("section_modulus_top", "section_modulus_bottom", "plastic_modulus"):
            if name in dimensions:
                dimensions[name] *= ratio
        dimensions["inertia_major"], dimensions["inertia_minor"] = stated.principal
        warping = self.value("warping", dimensions.get("warping"))
        if warping:
            dimensions["warping"] = warping
        shear = self.value("shear_area", section.shear_area) if _upright(matrix) else None
        return replace(
            section,
            area=stated.area,
            inertia=stated.yy,
            inertia_lateral=stated.xx,
            inertia_product=stated.xy,
            torsion=self.value("torsion", section.torsion) or section.torsion,
            shear_area=shear or section.shear_area,
            dimensions=tuple(dimensions.items()),
            source=f"{self.source}; {section.source}",
        )

    def compared(self, name: str, drawn: Moments) -> list[Finding]:
        """Return findings where stated values and the outline differ by more than 2 %."""
        findings = [
            Finding(
                "warning",
                "profile-property",
                f"Profile '{name}': {trouble}. It was left out; correct it in the model.",
            )
            for trouble in self.troubles
        ]
        if self._exchanged(drawn):
            findings.append(
                Finding(
                    "warning",
                    "section-disagrees",
                    f"Profile '{name}': the second moments of area about y and z that "
                    f"{self.source} states are exchanged against the outline; the outline was "
                    f"taken. Correct the property set.",
                )
            )
            return findings
        differing = []
        for ours, theirs in _COMPARED.items():
            from_outline = getattr(drawn, theirs)
            value = self.value(ours, from_outline)
            if value is not None and abs(value - from_outline) > _AGREEMENT * from_outline:
                power = self.values[ours][2]
                scale = 100.0**power
                differing.append(
                    f"{ours.replace('_', ' ')} {value * scale:.4g} {_UNIT_TEXT[power]} stated, "
                    f"{from_outline * scale:.4g} {_UNIT_TEXT[power]} drawn"
                )
        if differing:
            findings.append(
                Finding(
                    "warning",
                    "section-disagrees",
                    f"Profile '{name}': {self.source} and the outline differ by more than 2 %: "
                    f"{'; '.join(differing)}. The stated values were used. Correct one of them.",
                )
            )
        return findings

    def _exchanged(self, drawn: Moments) -> bool:
        """Whether y and z change places against an outline whose axes differ clearly."""
        y, z = self.value("inertia", drawn.xx), self.value("inertia_lateral", drawn.yy)
        if y is None or z is None or abs(drawn.xx - drawn.yy) < 0.1 * drawn.yy:
            return False
        return abs(y - drawn.xx) < 0.05 * drawn.xx and abs(z - drawn.yy) < 0.05 * drawn.yy


def stated_by_profile(file: Any, units: FileUnits) -> dict[int, Stated]:
    """Return what property sets state, by entity number of the profile; each class walked once."""
    sets: dict[int, list[Any]] = {}
    for properties in file.by_type("IfcProfileProperties"):
        with suppress(*READ_ERRORS):  # IFC2X3 lets a set name its profile only
            sets.setdefault(properties.ProfileDefinition.id(), []).append(properties)
    found = {key: _stated(group, units) for key, group in sets.items()}
    return {key: stated for key, stated in found.items() if stated is not None}


def stated_for(profile: Any, units: FileUnits) -> Stated | None:
    """Return what property sets state for one profile, None where they state nothing."""
    inverses = profile.file.get_inverse(profile)
    return _stated([e for e in inverses if e.is_a("IfcProfileProperties")], units)


def _stated(sets: Iterable[Any], units: FileUnits) -> Stated | None:
    values: dict[str, tuple[float, tuple[float, ...], int]] = {}
    sources: list[str] = []
    troubles: list[str] = []
    for properties in sorted(sets, key=lambda entity: int(entity.id())):
        before = len(values)
        try:
            found = list(_numbers(properties, units, troubles))
        except READ_ERRORS as error:
            troubles.append(f"{_source(properties)}: {reason_of(error)}")
            continue
        for name, number, factors in found:
            ours, _, power = _NAMES[name]
            if math.isfinite(number) and (number > 0.0 or ours == "inertia_product"):
                values.setdefault(ours, (number, factors, power))
            else:
                troubles.append(f"{name} is {number:g}; it must be positive")
        if len(values) > before:
            sources.append(_source(properties))
    if not values:
        return None
    return Stated(values, " and ".join(dict.fromkeys(sources)), tuple(troubles))


def _numbers(
    properties: Any, units: FileUnits, troubles: list[str]
) -> Iterable[tuple[str, float, tuple[float, ...]]]:
    """Yield name, number and possible factors of everything in a set that has a place here."""
    if properties.is_a("IfcGeneralProfileProperties"):  # IFC2X3: plain attributes
        for attribute, value in properties.get_info(recursive=False).items():
            name = attribute.lower()
            if name in _NAMES and isinstance(value, int | float):
                yield name, float(value), _factors(name, units)
        return
    for item in getattr(properties, "Properties", None) or ():
        name = re.sub(r"[^a-z]", "", text_of(item[0]).lower())
        if name not in _NAMES or not item.is_a("IfcPropertySingleValue") or item[2] is None:
            continue
        number = item[2][0]
        if isinstance(number, bool) or not isinstance(number, int | float):
            troubles.append(f"property {item[0]} holds no number")
            continue
        try:
            factors = (units.of_entity(item[3]),) if item[3] is not None else _factors(name, units)
        except UnitError as error:
            troubles.append(f"property {item[0]} ({error})")
            continue
        yield name, float(number), factors


def _factors(name: str, units: FileUnits) -> tuple[float, ...]:
    _, measure, power = _NAMES[name]
    kind = {2: "AREAUNIT", 4: "MOMENTOFINERTIAUNIT", 6: "WARPINGCONSTANTUNIT"}[power]
    if not units.missing(kind):
        return (units.of_measure(measure),)
    return tuple(dict.fromkeys((1.0, units.length**power)))


def _source(properties: Any) -> str:
    name = text_of(properties.Name) if properties.is_a("IfcExtendedProperties") else ""
    return name or str(properties.is_a())


def _upright(matrix: Matrix) -> bool:
    return abs(matrix[0][1]) < 1e-6 and abs(matrix[1][0]) < 1e-6
