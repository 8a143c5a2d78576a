"""What stands in each of our property sets, as text of the properties.

Names and types are those that others rely on (README.md, "What is written into the model").
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass
from datetime import UTC, datetime

import numpy as np

from analysis_core import __version__
from analysis_core.ifc.governing import Curve, ElementEffects
from analysis_core.ifc.measures import Measure, Measures
from analysis_core.ifc.step_values import label, real, real_text, string
from analysis_core.results import Extreme, LineResult

PREFIX = "Spanledger_"
EFFECTS = "Spanledger_Effects"
DIAGRAMS = "Spanledger_Diagrams"
RECORD = "Spanledger_Record"
REACTIONS = "Spanledger_Reactions"

METHOD = "Moment distribution, exact"
CAUTION = "Computed from the model as idealised; to be verified by a licensed engineer before use."
# Stations of a diagram are written to this part of the largest value in it: shorter text, and
# values that are equal by symmetry read as equal.
_DIGITS = 10


@dataclass(frozen=True, slots=True)
class PropertySet:
    """One set of one element: the texts of its properties, without instance numbers."""

    element: str
    name: str
    properties: tuple[str, ...]


class SetMaker:
    """Makes the sets of one file: its schema and measures, and the time of posting."""

    def __init__(self, schema: str, measures: Measures, rules: str, moment: datetime) -> None:
        self.measures = measures
        self._bounded_tail = ",$)" if schema != "IFC2X3" else ")"
        self._table_tail = ",.LINEAR.)" if schema != "IFC2X3" else ")"
        time = moment.astimezone(UTC).strftime("%Y-%m-%dT%H:%M:%SZ")
        kind = "IFCLABEL" if schema == "IFC2X3" else "IFCDATETIME"
        self.computed_at = f"IFCPROPERTYSINGLEVALUE('ComputedAt',$,{kind}('{time}'),$)"
        self._fixed = (
            _text("Rules", "IFCLABEL", rules),
            self.computed_at,
            _text("Version", "IFCLABEL", __version__),
            f"IFCPROPERTYSINGLEVALUE('Caution',$,IFCTEXT({string(CAUTION)}),$)",
        )
        self._method = _text("Method", "IFCLABEL", METHOD)

    def effects(self, found: ElementEffects) -> PropertySet:
        """Return Spanledger_Effects."""
        m = self.measures
        properties = [_text("LineMark", "IFCLABEL", found.marks)]
        for name, extreme, measure in (
            ("SaggingMoment", found.sagging, m.torque),
            ("HoggingMoment", found.hogging, m.torque),
            ("Shear", found.shear, m.force),
            ("Deflection", found.deflection, m.length),
        ):
            properties += self._extreme(name, extreme, measure)
        properties.append(self.bounded("StartMoment", found.start_moment, m.torque))
        properties.append(self.bounded("EndMoment", found.end_moment, m.torque))
        return PropertySet(found.element, EFFECTS, tuple(properties))

    def diagrams(self, found: ElementEffects) -> PropertySet:
        """Return Spanledger_Diagrams."""
        kinds = {
            "Moment": self.measures.torque,
            "Shear": self.measures.force,
            "Deflection": self.measures.length,
        }
        texts: dict[int, str] = {}
        properties = []
        for name, curve in found.curves.items():
            key = id(curve.positions)
            if key not in texts:
                texts[key] = _typed_list(self.measures.length, curve.positions)
            properties.append(self._table(name, texts[key], curve, kinds[name[:-3]]))
        return PropertySet(found.element, DIAGRAMS, tuple(properties))

    def record(self, element: str, results: Iterable[LineResult]) -> PropertySet:
        """Return Spanledger_Record."""
        results = tuple(results)
        checks = [r.verification for r in results if r.verification is not None]
        properties = [self._method]
        if checks:
            residual = max(check.joint_residual for check in checks)
            difference = max(check.independent_check for check in checks)
            if math.isfinite(residual):
                properties.append(self.single("JointResidual", residual, self.measures.torque))
            if math.isfinite(difference):
                properties.append(
                    f"IFCPROPERTYSINGLEVALUE('IndependentCheck',$,IFCREAL({real(difference)}),$)"
                )
        fingerprint = "+".join(dict.fromkeys(r.fingerprint for r in results if r.fingerprint))
        properties.append(self._fixed[0])
        properties.append(_text("Fingerprint", "IFCIDENTIFIER", fingerprint))
        return PropertySet(element, RECORD, (*properties, *self._fixed[1:]))

    def single(self, name: str, si: float, measure: Measure) -> str:
        """Return a property with one measure; ``name`` is plain text."""
        return f"IFCPROPERTYSINGLEVALUE({label(name)},$,{measure.typed(si)},{measure.unit})"

    def bounded(self, name: str, bounds: tuple[float, float], measure: Measure) -> str:
        """Return a property with a lower and an upper bound."""
        low, high = bounds
        return (
            f"IFCPROPERTYBOUNDEDVALUE({label(name)},$,{measure.typed(high)},{measure.typed(low)},"
            f"{measure.unit}{self._bounded_tail}"
        )

    def _extreme(self, name: str, extreme: Extreme, measure: Measure) -> list[str]:
        length = self.measures.length
        return [
            self.single(name, extreme.value, measure),
            self.single(f"{name}Position", extreme.x, length),
            _text(f"{name}Source", "IFCLABEL", extreme.source),
        ]

    def _table(self, name: str, positions: str, curve: Curve, measure: Measure) -> str:
        values = _typed_list(measure, curve.values)
        return (
            f"IFCPROPERTYTABLEVALUE('{name}',$,{positions},{values},$,"
            f"{self.measures.length.unit},{measure.unit}{self._table_tail}"
        )


def _text(name: str, kind: str, text: str) -> str:
    return f"IFCPROPERTYSINGLEVALUE('{name}',$,{kind}({label(text)}),$)"


def _typed_list(measure: Measure, si: np.ndarray) -> str:  # type: ignore[type-arg]
    values = si / measure.factor
    largest = float(np.abs(values).max(initial=0.0))
    if largest > 0.0:
        decimals = _DIGITS - 1 - math.floor(math.log10(largest))
        values = np.round(values, decimals) + 0.0  # no minus zero
    text = real_text(repr(values.tolist())[1:-1]).replace(", ", f"),{measure.kind}(")
    return f"({measure.kind}({text}))"
