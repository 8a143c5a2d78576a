"""Typed measures of what we write: in the model's own units, or in SI with the unit stated.

Where the model assigns a unit to a quantity, a property without a unit of its own is read in
it.  Where it assigns none, the property carries its SI unit, which we add to the file.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from analysis_core.ifc.file_units import FileUnits, read_units
from analysis_core.ifc.step.append import Lines
from analysis_core.ifc.step.extract import extract
from analysis_core.ifc.step.index import StepIndex
from analysis_core.ifc.step.tokens import reference
from analysis_core.ifc.step.values import real

_UNITS_ATTRIBUTE = 8  # of IfcProject, in every schema
_METRE = "IFCSIUNIT(*,.LENGTHUNIT.,$,.METRE.)"
_NEWTON = "IFCSIUNIT(*,.FORCEUNIT.,$,.NEWTON.)"


@dataclass(frozen=True, slots=True)
class Measure:
    """How one quantity is written: its type, SI units per unit, and a reference to its unit."""

    kind: str
    factor: float
    unit: str = "$"

    def typed(self, si: float) -> str:
        """Return an SI value as a typed measure."""
        return f"{self.kind}({real(si / self.factor)})"


@dataclass(frozen=True, slots=True)
class Measures:
    """The quantities of our property sets, and ``units`` for attributes.

    An attribute cannot carry a unit of its own: what the model does not assign is written there
    as the reader takes it (``FileUnits.to_si``).
    """

    length: Measure
    force: Measure
    torque: Measure
    units: FileUnits

    def attribute(self, si: float, kind: str) -> str:
        """Return an SI value as a number for an attribute measured in a kind of unit."""
        return real(si / self.units.to_si(kind))


def measures(index: StepIndex, lines: Lines) -> Measures:
    """Return how to write lengths, forces and moments into a file; add the units it lacks."""
    units = file_units(index)
    missing = units.missing("LENGTHUNIT", "FORCEUNIT", "TORQUEUNIT")
    own = {"LENGTHUNIT": "$", "FORCEUNIT": "$", "TORQUEUNIT": "$"}
    if "LENGTHUNIT" in missing:
        own["LENGTHUNIT"] = f"#{lines.shared(_METRE)}"
    if "FORCEUNIT" in missing:
        own["FORCEUNIT"] = f"#{lines.shared(_NEWTON)}"
    if "TORQUEUNIT" in missing:
        parts = lines.shared_list(
            [f"IFCDERIVEDUNITELEMENT(#{lines.shared(unit)},1)" for unit in (_NEWTON, _METRE)]
        )
        name = ",$" if index.schema == "IFC4X3" else ""
        own["TORQUEUNIT"] = f"#{lines.shared(f'IFCDERIVEDUNIT({parts},.TORQUEUNIT.,${name})')}"

    def measure(kind: str, unit: str) -> Measure:
        return Measure(kind, 1.0 if unit in missing else units.to_si(unit), own[unit])

    return Measures(
        measure("IFCLENGTHMEASURE", "LENGTHUNIT"),
        measure("IFCFORCEMEASURE", "FORCEUNIT"),
        measure("IFCTORQUEMEASURE", "TORQUEUNIT"),
        units,
    )


def file_units(index: StepIndex) -> FileUnits:
    """Return the units of a file as the reader reads them.

    The project's units, some twenty instances, are copied into a file of their own, so that the
    model need not be opened for them.
    """
    small = _units_alone(index)
    return read_units(small, "")[0] if small is not None else FileUnits({}, {})


def _units_alone(index: StepIndex) -> Any:
    for project in index.instances_of("IFCPROJECT"):
        attributes = index.arguments(project)
        if len(attributes) > _UNITS_ATTRIBUTE and (units := reference(attributes[8])) is not None:
            own = f"IFCPROJECT('0000000000000000000000',$,$,$,$,$,$,$,#{units})"
            return extract(index, [units], own)
    return None
