"""The units of a file: what the project's unit assignment says, and only that.

A unit that is merely declared somewhere in the file counts for nothing.  A kind of unit that is
not assigned is put together from assigned ones (a line load from force and length) or taken as SI;
either way a finding says so, once for each kind that was really used.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from typing import Any

from analysis_core.findings import Finding
from analysis_core.ifc.unit_tables import (
    KINDS,
    KNOWN_SIZES,
    MEASURES,
    PREFIXES,
    SI_UNITS,
    Dimension,
)

_DEEPEST = 8
_NAMED_SIZE_TOLERANCE = 0.01
# Kinds that projects assign in many ways.  Others are kilograms, kelvins and their like.
_DOUBTFUL = frozenset(
    kind
    for kind, (dimension, _, _) in KINDS.items()
    if dimension[1] or (dimension[0] and dimension[2])
) - {"MASSDENSITYUNIT", "MASSPERLENGTHUNIT", "ACCELERATIONUNIT"}

# Kinds made of a force: loads, moments, stiffnesses, moduli.
_OF_FORCE = frozenset(kind for kind, (size, _, _) in KINDS.items() if size[0] and size[2])


class UnitError(ValueError):
    """A unit whose size in SI cannot be told; the message says why."""


class FileUnits:
    """SI factors by kind of unit: value in the file times factor is the value in SI.

    ``entities`` holds the entity number of each assigned unit by kind.  What was asked for is
    remembered, so that ``findings`` can name the assumptions that mattered.
    """

    def __init__(
        self, factors: Mapping[str, float], entities: Mapping[str, int], file_name: str = ""
    ) -> None:
        self._factors = dict(factors)
        self.entities: Mapping[str, int] = dict(entities)
        self._file_name = file_name
        self._assumed: dict[str, tuple[float, str]] = {}
        self._by_entity: dict[int, float] = {}

    @property
    def length(self) -> float:
        """Metres per unit of length of the file."""
        return self.to_si("LENGTHUNIT")

    @property
    def force(self) -> float:
        """Newtons per unit of force of the file."""
        return self.to_si("FORCEUNIT")

    @property
    def angle(self) -> float:
        """Radians per unit of plane angle of the file."""
        return self.to_si("PLANEANGLEUNIT")

    def to_si(self, kind: str) -> float:
        """Return the SI factor of a kind of unit such as "LINEARFORCEUNIT"."""
        factor = self._factors.get(kind)
        return factor if factor is not None else self._assume(kind)

    def from_si(self, kind: str) -> float:
        """Return what an SI value is multiplied by to be written into this file."""
        return 1.0 / self.to_si(kind)

    def of_measure(self, measure: str) -> float:
        """Return the SI factor for a measure such as "IfcForceMeasure"; 1 if it has no unit."""
        kind = MEASURES.get(measure)
        return self.to_si(kind) if kind else 1.0

    def of_entity(self, unit: Any) -> float:
        """Return the SI factor of a unit entity, as properties may carry one of their own.

        Raises UnitError where its size cannot be told.
        """
        key = unit.id()
        if key not in self._by_entity:
            self._by_entity[key] = unit_size(unit)[0]
        return self._by_entity[key]

    def value(self, measure: Any, unit: Any | None = None) -> float:
        """Return a typed measure (IfcForceMeasure, say) in SI; ``unit`` overrides the file's.

        Raises UnitError as ``of_entity``, TypeError where it holds no number.
        """
        number = measure.wrappedValue
        if isinstance(number, bool) or not isinstance(number, int | float):
            raise TypeError(f"{measure} is no number")
        factor = self.of_entity(unit) if unit is not None else self.of_measure(measure.is_a())
        return float(number) * factor

    def missing(self, *kinds: str) -> tuple[str, ...]:
        """Return those of the kinds that the file does not assign; of all known kinds if none."""
        return tuple(kind for kind in kinds or KINDS if kind not in self._factors)

    def findings(self) -> tuple[Finding, ...]:
        """Return a finding for each kind that was used without being assigned.

        None where no unit is assigned at all (``read_units`` says that), none for angles (every
        program takes an angle without a unit in radians), and none where the assigned units lead
        to the SI unit anyway.
        """
        if not self._factors:
            return ()
        return tuple(
            Finding(
                "warning" if kind in (_DOUBTFUL if basis == "SI" else _OF_FORCE) else "note",
                "missing-unit",
                f"'{self._file_name}' assigns no unit of {_kind_name(kind)} ({kind}); values were "
                f"taken as {_basis_text(basis)}. Assign the unit in the project if that is wrong.",
            )
            for kind, (factor, basis) in sorted(self._assumed.items())
            if kind != "PLANEANGLEUNIT" and (basis == "SI" or factor != 1.0)
        )

    def _assume(self, kind: str) -> float:
        if kind not in self._assumed:
            parts = KINDS[kind][2] if kind in KINDS else ()
            if parts and all(self._has_basis(part) for part, _ in parts):
                names = " and ".join(dict.fromkeys(map(_kind_name, self._basis(kind))))
                self._assumed[kind] = (self._quiet(kind), names)
            else:
                self._assumed[kind] = (1.0, "SI")
        return self._assumed[kind][0]

    def _basis(self, kind: str) -> list[str]:
        """Return the assigned kinds of which a kind is made."""
        if kind in self._factors:
            return [kind]
        return [base for part, _ in KINDS[kind][2] for base in self._basis(part)]

    def _has_basis(self, kind: str) -> bool:
        if kind in self._factors:
            return True
        parts = KINDS[kind][2]
        return bool(parts) and all(self._has_basis(part) for part, _ in parts)

    def _quiet(self, kind: str) -> float:
        """SI factor without remembering that it was asked for."""
        if kind in self._factors:
            return self._factors[kind]
        return math.prod(self._quiet(part) ** power for part, power in KINDS[kind][2])


def read_units(file: Any, file_name: str) -> tuple[FileUnits, list[Finding]]:
    """Return the units that the project assigns, and findings on those that make no sense."""
    findings: list[Finding] = []
    factors: dict[str, float] = {}
    entities: dict[str, int] = {}
    for unit in _assigned_units(file):
        try:
            kind = str(unit.UnitType)
            factor, dimension = unit_size(unit)
        except (AttributeError, RuntimeError):
            continue  # a currency, or no unit at all
        except UnitError as error:
            findings.append(_not_understood(unit, str(error), file_name))
            continue
        if kind in factors:
            if not math.isclose(factor, factors[kind], rel_tol=1e-12):
                findings.append(_assigned_twice(kind, unit, file_name))
            continue
        factors[kind] = factor
        entities[kind] = unit.id()
        findings += _size_findings(kind, unit, factor, dimension, file_name)
    if not factors:
        findings.append(
            Finding(
                "warning",
                "no-units",
                f"'{file_name}' assigns no units; all values are taken as SI (metres, newtons). "
                f"Check one known length, or assign units in the project.",
            )
        )
    return FileUnits(factors, entities, file_name), findings


def unit_size(unit: Any, depth: int = 0) -> tuple[float, Dimension | None]:
    """Return the SI factor of a unit entity and its dimension, None where not told.

    Raises UnitError where the unit is not understood or refers to itself.
    """
    if depth > _DEEPEST:
        raise UnitError("it refers to itself")
    if unit.is_a("IfcSIUnit"):
        return _si_size(unit)
    if unit.is_a("IfcConversionBasedUnit"):
        return _converted_size(unit, depth)
    if unit.is_a("IfcDerivedUnit"):
        return _derived_size(unit, depth)
    raise UnitError(f"{unit.is_a()} has no size in SI")


def _assigned_units(file: Any) -> Iterable[Any]:
    for project in file.by_type("IfcProject"):
        assignment = project.UnitsInContext
        if assignment is not None and assignment.is_a("IfcUnitAssignment"):
            return [unit for unit in assignment.Units or () if hasattr(unit, "is_a")]
    return []


def _si_size(unit: Any) -> tuple[float, Dimension | None]:
    name, prefix = str(unit.Name), unit.Prefix
    factor, power, dimension = SI_UNITS.get(name, (1.0, 1, None))
    return factor * PREFIXES.get(str(prefix), 1.0) ** power, dimension


def _converted_size(unit: Any, depth: int) -> tuple[float, Dimension | None]:
    conversion = unit.ConversionFactor
    if conversion is None or conversion.UnitComponent is None:
        raise UnitError("it states no conversion factor")
    size, dimension = unit_size(conversion.UnitComponent, depth + 1)
    return _positive(conversion.ValueComponent) * size, dimension


def _derived_size(unit: Any, depth: int) -> tuple[float, Dimension | None]:
    factor = 1.0
    total: list[int] | None = [0, 0, 0, 0]
    if not unit.Elements:
        raise UnitError("it is made of nothing")
    for element in unit.Elements:
        if element.Unit is None or not isinstance(element.Exponent, int):
            raise UnitError("one of its elements is not stated")
        size, dimension = unit_size(element.Unit, depth + 1)
        try:
            factor *= size**element.Exponent
        except OverflowError:
            raise UnitError("its size is beyond all measure") from None
        if total is not None and dimension is not None:
            total = [t + element.Exponent * d for t, d in zip(total, dimension, strict=True)]
        else:
            total = None
    if not (math.isfinite(factor) and factor > 0.0):
        raise UnitError("its size is beyond all measure")
    return factor, (total[0], total[1], total[2], total[3]) if total is not None else None


def _positive(value: Any) -> float:
    number = getattr(value, "wrappedValue", value)
    if isinstance(number, bool) or not isinstance(number, int | float):
        raise UnitError("its conversion factor is no number")
    if not (math.isfinite(number) and number > 0.0):
        raise UnitError(f"its conversion factor is {number:g}; it must be positive")
    return float(number)


def _size_findings(
    kind: str, unit: Any, factor: float, dimension: Dimension | None, file_name: str
) -> list[Finding]:
    findings = []
    name = str(getattr(unit, "Name", None) or "")
    known = KNOWN_SIZES.get(kind, {}).get(name.strip().lower().replace("_", " "))
    if known is not None and abs(factor / known - 1.0) > _NAMED_SIZE_TOLERANCE:
        findings.append(
            Finding(
                "warning",
                "unit-size",
                f"'{file_name}' states the {_kind_name(kind)} unit '{name}' (#{unit.id()}) as "
                f"{factor:g} in SI; it is {known:g}. It was taken as stated. Check one known "
                f"{_kind_name(kind)}, and correct the conversion factor.",
            )
        )
    expected = KINDS[kind][0] if kind in KINDS else None
    if expected is not None and dimension is not None and dimension != expected:
        findings.append(
            Finding(
                "warning",
                "unit-dimension",
                f"'{file_name}' assigns as unit of {_kind_name(kind)} (#{unit.id()}) one of the "
                f"dimension {_dimension_text(dimension)}; it should be "
                f"{_dimension_text(expected)}. Its size {factor:g} was taken as stated. Correct "
                f"the unit.",
            )
        )
    return findings


def _not_understood(unit: Any, reason: str, file_name: str) -> Finding:
    return Finding(
        "warning",
        "unit-not-understood",
        f"'{file_name}': the unit #{unit.id()} ({unit.is_a()}, {unit.UnitType}) cannot be used: "
        f"{reason}. Values of this kind are taken as if no unit were assigned. Correct the unit.",
    )


def _assigned_twice(kind: str, unit: Any, file_name: str) -> Finding:
    return Finding(
        "warning",
        "unit-assigned-twice",
        f"'{file_name}' assigns two units of {_kind_name(kind)} of different size; the first one "
        f"was used and #{unit.id()} passed over. Assign only one.",
    )


def _kind_name(kind: str) -> str:
    return KINDS[kind][1] if kind in KINDS else kind


def _basis_text(basis: str) -> str:
    return "SI" if basis == "SI" else f"made of its units of {basis}"


def _dimension_text(dimension: Dimension) -> str:
    names = ("mass", "length", "time", "temperature")
    parts = [f"{n}^{d}" if d != 1 else n for n, d in zip(names, dimension, strict=True) if d]
    return " ".join(parts) or "none"
