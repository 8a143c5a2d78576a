"""Unit sets in which test files are written, and their factors to SI, written out by hand."""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from typing import Any

# International foot and pound (1959), standard gravity (1901).
FOOT, INCH = 0.3048, 0.0254
POUND_FORCE = 0.45359237 * 9.80665
KIP = 1000.0 * POUND_FORCE


@dataclass(frozen=True)
class UnitSet:
    """Length, force, angle: name and SI factor; SI names with prefix where they are SI units.

    ``derived``: whether units made of these are assigned as well.
    """

    length: tuple[str, float]
    force: tuple[str, float]
    angle: tuple[str, float] = ("RADIAN", 1.0)
    derived: bool = True
    prefixes: dict[str, str] = field(default_factory=dict)
    left_out: tuple[str, ...] = ()


UNIT_SETS = {
    "m_N": UnitSet(("METRE", 1.0), ("NEWTON", 1.0)),
    "mm_kN": UnitSet(
        ("METRE", 1e-3), ("NEWTON", 1e3), ("degree", math.pi / 180.0),
        prefixes={"LENGTHUNIT": "MILLI", "FORCEUNIT": "KILO"},
    ),
    "ft_kip": UnitSet(("foot", FOOT), ("kip", KIP)),
    "inch_lbf": UnitSet(("inch", INCH), ("pound-force", POUND_FORCE)),
    "m_kN_plain": UnitSet(
        ("METRE", 1.0), ("NEWTON", 1e3), derived=False, prefixes={"FORCEUNIT": "KILO"}
    ),
    "m_only": UnitSet(("METRE", 1.0), ("NEWTON", 1.0), derived=False,
                      left_out=("FORCEUNIT", "PLANEANGLEUNIT", "MASSUNIT")),
}  # fmt: skip

# Derived units: exponents of force, length, angle, mass, temperature.
DERIVED = {
    "LINEARFORCEUNIT": {"FORCEUNIT": 1, "LENGTHUNIT": -1},
    "PLANARFORCEUNIT": {"FORCEUNIT": 1, "LENGTHUNIT": -2},
    "LINEARMOMENTUNIT": {"FORCEUNIT": 1, "LENGTHUNIT": 0},
    "TORQUEUNIT": {"FORCEUNIT": 1, "LENGTHUNIT": 1},
    "LINEARSTIFFNESSUNIT": {"FORCEUNIT": 1, "LENGTHUNIT": -1},
    "ROTATIONALSTIFFNESSUNIT": {"FORCEUNIT": 1, "LENGTHUNIT": 1, "PLANEANGLEUNIT": -1},
    "MODULUSOFELASTICITYUNIT": {"FORCEUNIT": 1, "LENGTHUNIT": -2},
    "SHEARMODULUSUNIT": {"FORCEUNIT": 1, "LENGTHUNIT": -2},
    "MASSDENSITYUNIT": {"MASSUNIT": 1, "LENGTHUNIT": -3},
}


class Units:
    """Writes the assignment of a unit set and turns SI values into its units."""

    def __init__(self, file: Any, name: str) -> None:
        self.set = UNIT_SETS[name]
        self._file = file
        self._entities: dict[str, Any] = {}
        self._factors = {
            "LENGTHUNIT": self.set.length[1],
            "FORCEUNIT": self.set.force[1],
            "PLANEANGLEUNIT": self.set.angle[1],
            "MASSUNIT": 1.0,
            "THERMODYNAMICTEMPERATUREUNIT": 1.0,
        }
        for kind in self.set.left_out:
            self._factors[kind] = 1.0

    def of(self, si: float, kind: str) -> float:
        """Return an SI value in the file's unit of this kind."""
        return si / self.factor(kind)

    def factor(self, kind: str) -> float:
        """Return the SI factor of a kind of unit."""
        if kind in self._factors:
            return self._factors[kind]
        if kind == "THERMALEXPANSIONCOEFFICIENTUNIT":
            return 1.0
        if kind == "MASSDENSITYUNIT" and not self.set.derived:
            return 1.0
        parts = dict(DERIVED[kind])
        if not self.set.derived:
            parts.pop("PLANEANGLEUNIT", None)  # stiffness per radian where nothing is assigned
        return math.prod(self._factors[part] ** power for part, power in parts.items())

    def assignment(self) -> Any:
        """Return the IfcUnitAssignment."""
        units = [
            self._named(kind, *spec)
            for kind, spec in (
                ("LENGTHUNIT", self.set.length),
                ("FORCEUNIT", self.set.force),
                ("PLANEANGLEUNIT", self.set.angle),
                ("MASSUNIT", ("GRAM", 1.0)),
                ("THERMODYNAMICTEMPERATUREUNIT", ("KELVIN", 1.0)),
            )
            if kind not in self.set.left_out
        ]
        if self.set.derived:
            units += [self._derived(kind, parts) for kind, parts in DERIVED.items()]
        return self._file.create_entity("IfcUnitAssignment", units)

    def _named(self, kind: str, name: str, factor: float) -> Any:
        if name.isupper():
            prefix = self.set.prefixes.get(kind) or ("KILO" if name == "GRAM" else None)
            unit = self._file.create_entity("IfcSIUnit", UnitType=kind, Prefix=prefix, Name=name)
        else:
            base = {"LENGTHUNIT": "METRE", "FORCEUNIT": "NEWTON", "PLANEANGLEUNIT": "RADIAN"}
            si = self._file.create_entity("IfcSIUnit", UnitType=kind, Name=base[kind])
            value = self._file.create_entity("IfcReal", factor)
            dimensions = self._file.create_entity(
                "IfcDimensionalExponents", *_EXPONENTS[kind], 0, 0, 0, 0
            )
            unit = self._file.create_entity(
                "IfcConversionBasedUnit",
                dimensions,
                kind,
                name,
                self._file.create_entity("IfcMeasureWithUnit", value, si),
            )
        self._entities[kind] = unit
        return unit

    def _derived(self, kind: str, parts: dict[str, int]) -> Any:
        elements = [
            self._file.create_entity("IfcDerivedUnitElement", self._entities[part], power)
            for part, power in parts.items()
            if power
        ]
        return self._file.create_entity("IfcDerivedUnit", Elements=elements, UnitType=kind)


_EXPONENTS = {"LENGTHUNIT": (1, 0, 0), "FORCEUNIT": (1, 1, -2), "PLANEANGLEUNIT": (0, 0, 0)}
