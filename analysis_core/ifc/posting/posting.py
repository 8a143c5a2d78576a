"""One posting: what an outcome becomes in the bytes of one file.

What was posted earlier is taken out, then the new instances are written down as text, batch by
batch, and handed on as they come: the whole of it is never held.
"""

from __future__ import annotations

import hashlib
from collections.abc import Callable, Collection, Iterator, Sequence
from dataclasses import dataclass
from datetime import datetime
from typing import Literal

from analysis_core.errors import IfcReadError
from analysis_core.findings import Finding
from analysis_core.ifc.analysis_model.out import write_analysis_model
from analysis_core.ifc.posting import clearing
from analysis_core.ifc.posting.diagrams import DiagramWriter
from analysis_core.ifc.posting.find_elements import find_elements
from analysis_core.ifc.posting.governing import ElementEffects, Part, element_effects, element_parts
from analysis_core.ifc.posting.lone_members import lone_members
from analysis_core.ifc.posting.measures import file_units, measures
from analysis_core.ifc.posting.owner import owner_history
from analysis_core.ifc.posting.property_sets import (
    DIAGRAMS,
    EFFECTS,
    REACTIONS,
    RECORD,
    SET_NAMES,
    EffectsWriter,
    RecordWriter,
    SetWriter,
)
from analysis_core.ifc.posting.result_groups import ResultGroups, reaction_id, rewritten_ids
from analysis_core.ifc.posting.section_forces import CaseStations
from analysis_core.ifc.posting.set_contents import contents_in_block, timeless
from analysis_core.ifc.posting.set_ids import set_ids
from analysis_core.ifc.posting.support_reactions import ReactionsWriter, support_reactions
from analysis_core.ifc.step import append
from analysis_core.ifc.step.container import Container
from analysis_core.ifc.step.index import StepIndex
from analysis_core.results import Outcome

Progress = Callable[[str, float], None]

_BATCH = 512
"""Elements whose diagrams are printed together."""


@dataclass(frozen=True, slots=True)
class PostReport:
    """What posting did: property sets that are new, that have changed, and that have not.

    ``path`` is "append" where bytes were only added to the model, "general" where entities of
    ours that another program had rewritten were taken out first.  ``groups``: result groups
    written for analysis models.
    """

    written: int
    updated: int
    unchanged: int
    path: Literal["append", "general"]
    findings: tuple[Finding, ...] = ()
    groups: int = 0


class Posting:
    """What is wanted of one outcome: ``prepare`` it, take its ``parts``, then the ``report``."""

    def __init__(
        self,
        outcome: Outcome,
        only: Collection[str],
        stations: CaseStations | None,
        moment: datetime,
        tell: Progress,
        *,
        analysis_model: bool,
    ) -> None:
        self._outcome = outcome
        self._stations = stations
        self._moment = moment
        self._tell = tell
        self._analysis_model = analysis_model
        self._digest = hashlib.sha256()
        self._kept: list[bytes] = []
        self._written: list[str] = []
        self._groups = 0
        self._findings: list[Finding] = []
        self._only = only
        self._parts = element_parts(outcome)
        self._supports = support_reactions(outcome)
        if only:
            self._restrict(frozenset(only))

    def prepare(self, stored: Container, name: str) -> None:
        """Look at a file and take out what is replaced.  Raises IfcReadError."""
        self._tell("Posting", 0.0)
        self._cleared = self._without_old(stored.text)
        self._tell("Posting", 0.2)
        index = StepIndex(self._cleared.base)
        _check(index, name)
        if self._analysis_model:
            index = StepIndex(self._with_model(index, name))
        self._index = index
        self._findings += _file_findings(index, stored, self._outcome, self._cleared, name)
        self._elements, findings = find_elements({**self._parts, **self._supports}, index)
        self._findings += findings
        self._tell("Posting", 0.3)

    def parts(self) -> Iterator[bytes | memoryview]:
        """Return the prepared file with the results, part by part."""
        return append.with_block(self._index, self._compared(self._lines()), append.RESULTS)

    def report(self) -> PostReport:
        """Return what was done, once all parts were taken."""
        findings = tuple(dict.fromkeys(self._findings))
        path, before, written = self._cleared.path, self._cleared.before, self._written
        if self._cleared.replaced and self._digest_of_old() == self._digest.digest():
            return PostReport(0, 0, len(written), path, findings, self._groups)
        known = [g for g in written if g in before]
        changed = 0
        if known:
            changed = before.changed(contents_in_block(b"".join(self._kept)), known)
        return PostReport(
            len(written) - len(known), changed, len(known) - changed, path, findings, self._groups
        )

    def _compared(self, pieces: Iterator[bytes]) -> Iterator[bytes]:
        """Pass the lines on; digest them without their time, keep them where some were there."""
        keep = bool(self._cleared.before)
        for piece in pieces:
            self._digest.update(timeless(piece))
            if keep:
                self._kept.append(piece)
            yield piece

    def _digest_of_old(self) -> bytes:
        return hashlib.sha256(timeless(self._cleared.replaced)).digest()

    def _lines(self) -> Iterator[bytes]:
        """The lines of the block, those that stay first."""
        index, cleared = self._index, self._cleared
        yield cleared.kept
        if not self._elements:
            return  # not even units, where nothing carries results
        lines = append.Lines(append.first_free(index, cleared.kept), index.newline)
        owner, units = owner_history(index, lines), measures(index, lines)
        ids, renamed = set_ids(index, [*self._elements], SET_NAMES)
        self._findings += renamed
        sets = SetWriter(
            lines, self._elements, ids, schema=index.schema, owner=owner, measures=units
        )
        known = [(e, parts) for e, parts in self._parts.items() if e in self._elements]
        for done in self._write_sets(sets, known, index.schema):
            yield lines.taken()
            self._tell("Posting", 0.3 + 0.6 * done / max(1, len(known)))
        groups = ResultGroups(index, lines, owner, units, self._stations, cleared.retained)
        self._groups = groups.write(self._outcome, self._supports, self._parts, self._elements)
        yield lines.taken()
        self._written = sets.written

    def _with_model(self, index: StepIndex, name: str) -> bytes:
        """Return the file with the idealisation as an analysis model, in a block of its own."""
        lines = [result.line for result in self._outcome.lines]
        wanted = [member.element for line in lines for member in line.members]
        wanted += [joint.element or "" for line in lines for joint in line.joints]
        elements, _ = find_elements(dict.fromkeys(filter(None, wanted)), index)
        if any(index.kind(n).startswith("IFCSTRUCTURAL") for n in elements.values()):
            self._findings.append(_has_model(name))
            return index.data
        index = StepIndex(clearing.cleared_of_all(index.data, append.MODEL).base)
        if index.instances_of("IFCSTRUCTURALANALYSISMODEL"):
            self._findings.append(_has_model(name))
            return index.data
        written = append.Lines(append.first_free(index), index.newline)
        self._findings += write_analysis_model(
            self._outcome, elements, index, written,
            owner=owner_history(index, written), units=file_units(index),
        )  # fmt: skip
        return b"".join(append.with_block(index, iter([written.taken()]), append.MODEL))

    def _restrict(self, only: frozenset[str]) -> None:
        """Keep the elements of some lines, and what these bear on."""
        self._parts = {
            element: parts
            for element, parts in self._parts.items()
            if any(part.result.line.mark in only for part in parts)
        }
        self._supports = {
            element: found for element, found in self._supports.items() if found.lines & only
        }

    def _without_old(self, data: bytes) -> clearing.Cleared:
        if not self._only:
            return clearing.cleared_of_all(data)
        wanted = {(e, name) for e in self._parts for name in (EFFECTS, DIAGRAMS, RECORD)}
        wanted |= {(element, REACTIONS) for element in self._supports}
        cases = self._outcome.model.cases
        items = [*self._parts, *self._supports]
        reactions = [reaction_id(item, case) for item in items for case in cases]
        return clearing.cleared_of_some(
            data, wanted, reactions, lambda index: rewritten_ids(index, cases)
        )

    def _write_sets(
        self, sets: SetWriter, known: Sequence[tuple[str, list[Part]]], schema: str
    ) -> Iterator[int]:
        """Write all sets; yield after each batch how many elements are done."""
        effects = EffectsWriter(sets)
        diagrams = DiagramWriter(sets.lines, sets.measures, schema)
        record = RecordWriter(
            sets, schema, self._outcome.rules, self._moment, self._outcome.findings
        )
        for begin in range(0, len(known), _BATCH):
            batch = self._effects(known[begin : begin + _BATCH], record)
            for found, tables in zip(batch, diagrams.write([f.curves for f in batch]), strict=True):
                if tables is None:
                    self._findings.append(_not_finite(found.element, found.results[0].line.mark))
                    continue
                effects.write(found)
                if tables:
                    sets.add(found.element, DIAGRAMS, tables)
                record.write(found.element, found.results, self._members(found.element))
            yield begin
        bearing = ReactionsWriter(sets)
        for element, reactions in self._supports.items():
            if element in self._elements:
                if reactions.finite:
                    bearing.write(reactions)
                else:
                    self._findings.append(_not_finite(element, None))
        yield len(known)

    def _members(self, element: str) -> list[str]:
        """The structural members that stand for a building element."""
        members = (part.member.element for part in self._parts[element])
        return [m for m in dict.fromkeys(members) if m != element]

    def _effects(
        self, elements: Sequence[tuple[str, list[Part]]], record: RecordWriter
    ) -> list[ElementEffects]:
        """What governs these elements, those left out whose values are no numbers."""
        batch = []
        lone = lone_members(elements)
        for element, parts in elements:
            found = lone.get(element) or element_effects(element, parts)
            if found is None:
                results = list({id(p.result): p.result for p in parts}.values())
                record.write(element, results, self._members(element))
            elif not found.finite:
                self._findings.append(_not_finite(element, found.results[0].line.mark))
            else:
                batch.append(found)
                if len(found.results) > 1:
                    self._findings.append(_several_lines(element, found.marks))
        return batch


def _check(index: StepIndex, name: str) -> None:
    if index.open_string or index.data_end is None:
        raise IfcReadError(
            f"'{name}' has no proper end (ENDSEC; and END-ISO-10303-21; are wanted), so "
            f"nothing can be added to it. Copy or export it again."
        )


def _file_findings(
    index: StepIndex, stored: Container, outcome: Outcome, cleared: clearing.Cleared, name: str
) -> list[Finding]:
    findings = []
    if index.signed:
        findings.append(
            Finding(
                "warning",
                "signature-broken",
                f"'{name}' is signed. The signature was kept and no longer fits: the file has "
                f"more in it now. Taking the results out makes it fit again.",
            )
        )
    analysed_this = outcome.fingerprint in ("", stored.fingerprint)
    if not analysed_this and not cleared.replaced and not cleared.kept:
        findings.append(
            Finding(
                "warning",
                "model-changed",
                f"'{name}' is not the file that was analysed, or has changed since. The results "
                f"were written all the same; analyse it again.",
            )
        )
    return findings


def _has_model(name: str) -> Finding:
    return Finding(
        "note",
        "analysis-model-there",
        f"'{name}' has an analysis model already; none was added to it.",
    )


def _not_finite(element: str, mark: str | None) -> Finding:
    return Finding(
        "error",
        "result-not-finite",
        f"The results of {element} hold a value that is not a number; they were not written. "
        f"Check stiffness and actions of its line.",
        (element,),
        mark,
    )


def _several_lines(element: str, marks: str) -> Finding:
    return Finding(
        "note",
        "element-of-several-lines",
        f"{element} belongs to several lines ({marks}): the governing values are those over all of "
        f"them, the diagrams those of the line with the larger moments.",
        (element,),
    )
