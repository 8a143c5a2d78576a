"""What stands in each of our property sets, and how it is written.

Names and types are those that others rely on (README.md, "What is written into the model").
Each set is a few lines of the file: properties of its own, references to properties that many
sets share, the set itself, and its relation to the element.
"""

from __future__ import annotations

import json
import math
from collections.abc import Collection, Mapping, Sequence
from datetime import UTC, datetime

from analysis_core import __version__
from analysis_core.findings import Finding
from analysis_core.ifc.posting.governing import ElementEffects
from analysis_core.ifc.posting.measures import Measures
from analysis_core.ifc.step.append import Lines
from analysis_core.ifc.step.values import label, real, reals, string
from analysis_core.results import LineResult

PREFIX = "Spanledger_"
EFFECTS = "Spanledger_Effects"
DIAGRAMS = "Spanledger_Diagrams"
RECORD = "Spanledger_Record"
REACTIONS = "Spanledger_Reactions"
SET_NAMES = (EFFECTS, DIAGRAMS, RECORD, REACTIONS)

METHOD = "Moment distribution, exact"
CAUTION = "Computed from the model as idealised; to be verified by a licensed engineer before use."


class SetWriter:
    """Writes sets into one file: its schema, measures and owner, and the time of posting.

    ``elements``: instance of each element by GlobalId; ``ids``: as ``set_ids`` gives them.
    """

    def __init__(
        self,
        lines: Lines,
        elements: Mapping[str, int],
        ids: Mapping[str, tuple[Sequence[str], Sequence[str]]],
        *,
        schema: str,
        owner: str,
        measures: Measures,
    ) -> None:
        self.lines = lines
        self.measures = measures
        self._elements = elements
        self._owner = owner
        # The attribute SetPointValue is new in IFC4.
        self.bounded_end = ")" if schema == "IFC2X3" else ",$)"
        self._rows = {element: row for row, element in enumerate(elements)}
        self._ids = ids
        self._forms = {name: lines.form(self.forms(name, "%s")) for name in SET_NAMES}
        self.written: list[str] = []
        """GlobalIds of the sets written so far."""

    def forms(self, name: str, properties: str) -> tuple[str, str]:
        """Return the bodies of a set and its relation, with places for what differs.

        GlobalId and ``properties`` of the set; GlobalId, element and set of the relation.
        """
        return (
            f"IFCPROPERTYSET('%s',{self._owner},'{name}',$,({properties}))",
            f"IFCRELDEFINESBYPROPERTIES('%s',{self._owner},$,$,(#%d),#%d)",
        )

    def ids(self, element: str, name: str) -> tuple[str, str, int]:
        """Return the GlobalIds of a set that is written and of its relation, and the element."""
        row = self._rows[element]
        ids, relations = self._ids[name]
        self.written.append(ids[row])
        return ids[row], relations[row], self._elements[element]

    def add(self, element: str, name: str, properties: Sequence[int] | str) -> None:
        """Add a set of these properties (numbers, or references as text) to an element."""
        refs = properties if isinstance(properties, str) else ",".join(f"#{n}" for n in properties)
        own_id, relation_id, number = self.ids(element, name)
        n = self.lines.next
        self.lines.add_text(self._forms[name] % (n, own_id, refs, n + 1, relation_id, number, n), 2)

    def text(self, name: str, kind: str, text: str) -> int:
        """Return a property that holds a text; equal ones are written once."""
        return self.lines.shared(f"IFCPROPERTYSINGLEVALUE('{name}',$,{kind}({label(text)}),$)")


class EffectsWriter:
    """Writes Spanledger_Effects: all lines of a set by one format string."""

    def __init__(self, sets: SetWriter) -> None:
        m = sets.measures
        self._sets = sets
        self._factors = (m.torque.factor, m.force.factor, m.length.factor)
        bodies = [
            f"IFCPROPERTYSINGLEVALUE('{title}',$,{each.kind}(%s),{each.unit})"
            for name, measure in (
                ("SaggingMoment", m.torque),
                ("HoggingMoment", m.torque),
                ("Shear", m.force),
                ("Deflection", m.length),
            )
            for title, each in ((name, measure), (f"{name}Position", m.length))
        ]
        bodies += [
            f"IFCPROPERTYBOUNDEDVALUE('{name}',$,{m.torque.kind}(%s),{m.torque.kind}(%s),"
            f"{m.torque.unit}{sets.bounded_end}"
            for name in ("StartMoment", "EndMoment")
        ]
        self._form = sets.lines.form([*bodies, *sets.forms(EFFECTS, ",".join(["#%d"] * 15))])
        self._sources: dict[tuple[str, str], int] = {}

    def write(self, found: ElementEffects) -> None:
        """Write the set of one element."""
        torque, force, length = self._factors
        sag, hog, shear, sink = found.sagging, found.hogging, found.shear, found.deflection
        start, end = found.start_moment, found.end_moment
        v = reals([
            float(sag.value) / torque, float(sag.x) / length,
            float(hog.value) / torque, float(hog.x) / length,
            float(shear.value) / force, float(shear.x) / length,
            float(sink.value) / length, float(sink.x) / length,
            float(start[1]) / torque, float(start[0]) / torque,
            float(end[1]) / torque, float(end[0]) / torque,
        ])  # fmt: skip
        mark = self._source("LineMark", found.marks)
        a = self._source("SaggingMomentSource", sag.source)
        b = self._source("HoggingMomentSource", hog.source)
        c = self._source("ShearSource", shear.source)
        d = self._source("DeflectionSource", sink.source)
        n = self._sets.lines.next
        own_id, relation_id, element = self._sets.ids(found.element, EFFECTS)
        self._sets.lines.add_text(
            self._form % (
                n, v[0], n + 1, v[1], n + 2, v[2], n + 3, v[3], n + 4, v[4], n + 5, v[5],
                n + 6, v[6], n + 7, v[7], n + 8, v[8], v[9], n + 9, v[10], v[11],
                n + 10, own_id, mark, n, n + 1, a, n + 2, n + 3, b, n + 4, n + 5, c, n + 6, n + 7,
                d, n + 8, n + 9, n + 11, relation_id, element, n + 10,
            ),
            12,
        )  # fmt: skip

    def _source(self, name: str, text: str) -> int:
        key = name, text
        number = self._sources.get(key)
        if number is None:
            number = self._sources[key] = self._sets.text(name, "IFCLABEL", text)
        return number


class RecordWriter:
    """Writes Spanledger_Record: how the results came about, the same for a whole line."""

    def __init__(
        self,
        sets: SetWriter,
        schema: str,
        rules: str,
        moment: datetime,
        findings: Sequence[Finding] = (),
    ) -> None:
        self._given = [f for f in findings if f.slug == "member-given"]
        time = moment.astimezone(UTC).strftime("%Y-%m-%dT%H:%M:%SZ")
        kind = "IFCLABEL" if schema == "IFC2X3" else "IFCDATETIME"
        self._sets = sets
        self._method = sets.text("Method", "IFCLABEL", METHOD)
        self._rules = sets.text("Rules", "IFCLABEL", rules)
        self._rest = (
            sets.text("ComputedAt", kind, time),
            sets.text("Version", "IFCLABEL", __version__),
        )
        self._known: dict[tuple[int, ...], str] = {}

    def write(
        self, element: str, results: Sequence[LineResult], members: Collection[str] = ()
    ) -> None:
        """Write the set of one element of these lines.

        ``members``: GlobalIds of the structural members that stand for a building element.
        """
        key = tuple(map(id, results))
        refs = self._known.get(key)
        if refs is None:
            numbers = [self._method, *self._checks(results), self._rules,
                       self._fingerprint(results), *self._basis(results), *self._rest,
                       self._caution(results)]  # fmt: skip
            refs = self._known[key] = ",".join(f"#{n}" for n in numbers)
        if members:
            named = string(", ".join(members))
            body = f"IFCPROPERTYSINGLEVALUE('AnalysedAs',$,IFCTEXT({named}),$)"
            refs += f",#{self._sets.lines.shared(body)}"
        self._sets.add(element, RECORD, refs)

    def _caution(self, results: Sequence[LineResult]) -> int:
        """The caution; it also tells of members that were solved otherwise than modelled."""
        elements = {m.element for result in results for m in result.line.members}
        told = [f.message for f in self._given if not elements.isdisjoint(f.elements)]
        text = string(" ".join([CAUTION, *told]))
        return self._sets.lines.shared(f"IFCPROPERTYSINGLEVALUE('Caution',$,IFCTEXT({text}),$)")

    def _checks(self, results: Sequence[LineResult]) -> list[int]:
        checks = [r.verification for r in results if r.verification is not None]
        if not checks:
            return []
        lines, torque = self._sets.lines, self._sets.measures.torque
        residual = max(check.joint_residual for check in checks)
        difference = max(check.independent_check for check in checks)
        numbers = []
        if math.isfinite(residual):
            numbers.append(
                lines.shared(
                    f"IFCPROPERTYSINGLEVALUE('JointResidual',$,{torque.typed(residual)},"
                    f"{torque.unit})"
                )
            )
        if math.isfinite(difference):
            numbers.append(
                lines.shared(
                    f"IFCPROPERTYSINGLEVALUE('IndependentCheck',$,IFCREAL({real(difference)}),$)"
                )
            )
        return numbers

    def _fingerprint(self, results: Sequence[LineResult]) -> int:
        prints = dict.fromkeys(r.fingerprint for r in results if r.fingerprint)
        return self._sets.text("Fingerprint", "IFCIDENTIFIER", "+".join(prints))

    def _basis(self, results: Sequence[LineResult]) -> list[int]:
        """What the fingerprint was taken of, as JSON; by mark where there are several lines."""
        bases = {r.line.mark: dict(r.basis) for r in results if r.basis}
        if not bases:
            return []
        data = bases if len(results) > 1 else next(iter(bases.values()))
        value = f"IFCTEXT({string(json.dumps(data, separators=(',', ':')))})"
        return [self._sets.lines.shared(f"IFCPROPERTYSINGLEVALUE('Basis',$,{value},$)")]
