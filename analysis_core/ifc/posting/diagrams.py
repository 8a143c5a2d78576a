"""Diagrams as IfcPropertyTableValue, many at a time.

A table that is the same for several elements is written once: beams of a building repeat.
"""

from __future__ import annotations

from collections.abc import Sequence

from analysis_core.ifc.posting.governing import Curve
from analysis_core.ifc.posting.measures import Measures
from analysis_core.ifc.step.append import Lines
from analysis_core.ifc.step.number_text import Row, printed

# Values are printed to this many digits of the largest in their table, positions to more: two
# that differ by a thousandth of a millimetre must stay two.
_DIGITS = 9
_POSITION_DIGITS = 12
STEP_WIDTH = 1e-6
"""Where a diagram jumps, its two values stand this far apart, m: positions must differ."""


class DiagramWriter:
    """Writes the diagrams of elements into one file."""

    def __init__(self, lines: Lines, measures: Measures, schema: str) -> None:
        self._lines = lines
        self._length = measures.length
        self._measures = {
            "Moment": measures.torque,
            "Shear": measures.force,
            "Deflection": measures.length,
        }
        # The attribute CurveInterpolation is new in IFC4.
        self._tail = ")" if schema == "IFC2X3" else ",.LINEAR.)"
        self._tables: dict[tuple[str, bytes, bytes], int] = {}

    def write(self, elements: Sequence[Sequence[Curve]]) -> list[list[int] | None]:
        """Return the properties of each element's curves, None where a value is no number."""
        curves = [curve for element in elements for curve in element]
        rows = self._rows(curves)
        # The curves of one limit state share one array of positions.
        shared = {id(curve.positions): curve.positions for curve in curves}
        ascending = printed(
            list(shared.values()),
            digits=_POSITION_DIGITS,
            before=f"{self._length.kind}(",
            after="),",
            factor=self._length.factor,
            apart=STEP_WIDTH,
        )
        places = dict(zip(shared, ascending, strict=True))
        result: list[list[int] | None] = []
        at = 0
        for element in elements:
            numbers: list[int] | None = []
            for i, curve in enumerate(element, at):
                where, row = places[id(curve.positions)], rows[i]
                if where is None or row is None or numbers is None:
                    numbers = None
                else:
                    numbers.append(self._table(curve.name, where, row))
            at += len(element)
            result.append(numbers)
        return result

    def _rows(self, curves: Sequence[Curve]) -> list[Row | None]:
        """The values of the curves as text, those of one quantity at a time."""
        rows: list[Row | None] = [None] * len(curves)
        for quantity, measure in self._measures.items():
            chosen = [i for i, curve in enumerate(curves) if curve.name.startswith(quantity)]
            found = printed(
                [curves[i].values for i in chosen],
                digits=_DIGITS,
                before=f"{measure.kind}(",
                after="),",
                factor=measure.factor,
            )
            for i, row in zip(chosen, found, strict=True):
                rows[i] = row
        return rows

    def _table(self, name: str, where: Row, row: Row) -> int:
        key = (name, where.key, row.key)
        number = self._tables.get(key)
        if number is None:
            unit = self._measures[name[:-3]].unit
            number = self._tables[key] = self._lines.add(
                f"IFCPROPERTYTABLEVALUE('{name}',$,({where.text}),({row.text}),$,"
                f"{self._length.unit},{unit}{self._tail}"
            )
        return number
