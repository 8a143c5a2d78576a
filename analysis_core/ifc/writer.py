"""Posting: results are written into a copy of their model, or into the model itself.

The road: read the bytes, take out what we posted earlier, write down the new instances as text,
put them before the end of the data, replace the target as a whole.  Every byte of the model stays
where it was; ``append`` says how, ``clearing`` how our entities are found when another program
has rewritten the file.
"""

from __future__ import annotations

import os
from collections.abc import Callable, Collection, Sequence
from dataclasses import dataclass
from datetime import UTC, datetime
from pathlib import Path
from typing import Literal

from analysis_core.errors import IfcReadError, IfcWriteError
from analysis_core.findings import Finding
from analysis_core.ifc import append, atomic, clearing
from analysis_core.ifc.analysis_model_out import write_analysis_model
from analysis_core.ifc.container import Container, read_container
from analysis_core.ifc.diagrams import DiagramWriter
from analysis_core.ifc.find_elements import find_elements
from analysis_core.ifc.governing import ElementEffects, Part, element_effects, element_parts
from analysis_core.ifc.measures import file_units, measures
from analysis_core.ifc.owner import owner_history
from analysis_core.ifc.property_sets import (
    DIAGRAMS,
    EFFECTS,
    REACTIONS,
    RECORD,
    EffectsWriter,
    RecordWriter,
    SetWriter,
)
from analysis_core.ifc.result_groups import (
    CaseStations,
    ResultGroups,
    reaction_id,
    rewritten_ids,
)
from analysis_core.ifc.set_contents import contents_in_block, timeless
from analysis_core.ifc.step_index import StepIndex
from analysis_core.ifc.support_reactions import support_reactions, write_reactions
from analysis_core.results import Outcome

_BATCH = 512
"""Elements whose diagrams are printed together."""

Progress = Callable[[str, float], None]


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


@dataclass(frozen=True, slots=True)
class RemoveReport:
    """What was taken out: the number of property sets.

    ``path`` is "append" where our blocks were as we had written them: then the file is again, bit
    for bit, what it was before posting.
    """

    removed: int
    path: Literal["append", "general"]


def post(
    source_path: str | Path,
    target_path: str | Path,
    outcome: Outcome,
    *,
    analysis_model: bool = False,
    only: Collection[str] = (),
    stations: CaseStations | None = None,
    progress: Progress | None = None,
    computed_at: datetime | None = None,
) -> PostReport:
    """Write an outcome into a copy of its model; the same path twice replaces it.

    ``outcome`` holds all lines of the model.  ``only``: marks of the lines to be written, all
    where empty; then what was posted for others stays.  Otherwise everything posted earlier gives
    way.  ``stations`` gives the section forces of a line's cases along its members, for the
    curve reactions of an analysis model; at the ends only where None.  ``computed_at``: now
    where None.

    Raises IfcReadError where the model cannot be read, IfcWriteError where the target cannot be
    written.
    """
    tell = progress or _silent
    job = _Job(outcome, only, stations, computed_at or datetime.now(UTC), tell)
    job.analysis_model = analysis_model
    source = Path(source_path)
    with atomic.writing_to(target_path) as target:
        guard = _Guard(source, target)
        stored = read_container(source)
        parts, report = job.written(stored, source.name)
        guard.check()
        atomic.replace_file(target, stored.packed(parts))
    tell("Posting", 1.0)
    return report


def remove(source_path: str | Path, target_path: str | Path) -> RemoveReport:
    """Write a copy of a model without anything of ours; the same path twice replaces it.

    Raises IfcReadError where the model cannot be read, IfcWriteError where the target cannot be
    written.
    """
    source = Path(source_path)
    with atomic.writing_to(target_path) as target:
        guard = _Guard(source, target)
        stored = read_container(source)
        base, count, path = clearing.removed(stored.text)
        guard.check()
        content = stored.packed([base]) if base != stored.text else [stored.stored]
        atomic.replace_file(target, content)
    return RemoveReport(count, path)


class _Job:
    """One posting: what is wanted, and what it becomes in a file."""

    def __init__(
        self,
        outcome: Outcome,
        only: Collection[str],
        stations: CaseStations | None,
        moment: datetime,
        tell: Progress,
    ) -> None:
        self._outcome = outcome
        self._stations = stations
        self._moment = moment
        self._tell = tell
        self.analysis_model = False
        self._findings: list[Finding] = []
        self._only = only
        self._parts = element_parts(outcome)
        self._supports = support_reactions(outcome)
        if only:
            self._restrict(frozenset(only))

    def written(self, stored: Container, name: str) -> tuple[list[bytes | memoryview], PostReport]:
        """Return the file with the results, in parts."""
        self._tell("Posting", 0.0)
        cleared = self._cleared(stored.text)
        self._tell("Posting", 0.2)
        index = StepIndex(cleared.base)
        _check(index, name)
        if self.analysis_model:
            index = StepIndex(self._with_model(index, name))
        self._findings += _file_findings(index, stored, self._outcome, cleared, name)
        elements, findings = find_elements({**self._parts, **self._supports}, index)
        self._findings += findings
        self._tell("Posting", 0.4)
        lines = append.Lines(append.first_free(index, cleared.kept), index.newline)
        owner, units = owner_history(index, lines), measures(index, lines)
        sets = SetWriter(lines, elements, schema=index.schema, owner=owner, measures=units)
        self._write_sets(sets, elements, index.schema)
        self._tell("Posting", 0.8)
        groups = ResultGroups(index, lines, owner, units, self._stations, cleared.retained)
        count = groups.write(self._outcome, self._supports, self._parts, elements)
        new = [cleared.kept, *lines.chunks()]
        report = self._report(cleared, new, sets.written, count)
        return append.with_block(index, new, append.RESULTS), report

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
        return b"".join(append.with_block(index, written.chunks(), append.MODEL))

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

    def _cleared(self, data: bytes) -> clearing.Cleared:
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

    def _write_sets(self, sets: SetWriter, elements: dict[str, int], schema: str) -> None:
        effects = EffectsWriter(sets)
        diagrams = DiagramWriter(sets.lines, sets.measures, schema)
        record = RecordWriter(sets, schema, self._outcome.rules, self._moment)
        known = [(e, parts) for e, parts in self._parts.items() if e in elements]
        for begin in range(0, len(known), _BATCH):
            batch = self._effects(known[begin : begin + _BATCH], record)
            for found, tables in zip(batch, diagrams.write([f.curves for f in batch]), strict=True):
                if tables is None:
                    self._findings.append(_not_finite(found.element, found.results[0].line.mark))
                    continue
                effects.write(found)
                if tables:
                    sets.add(found.element, DIAGRAMS, tables)
                record.write(found.element, found.results)
        for element, reactions in self._supports.items():
            if element in elements:
                if reactions.finite:
                    write_reactions(reactions, sets)
                else:
                    self._findings.append(_not_finite(element, None))

    def _effects(
        self, elements: Sequence[tuple[str, list[Part]]], record: RecordWriter
    ) -> list[ElementEffects]:
        """What governs these elements, those left out whose values are no numbers."""
        batch = []
        for element, parts in elements:
            found = element_effects(element, parts)
            if found is None:
                record.write(element, list({id(p.result): p.result for p in parts}.values()))
            elif not found.finite:
                self._findings.append(_not_finite(element, found.results[0].line.mark))
            else:
                batch.append(found)
                if len(found.results) > 1:
                    self._findings.append(_several_lines(element, found.marks))
        return batch

    def _report(
        self,
        cleared: clearing.Cleared,
        new: Sequence[bytes],
        written: Sequence[str],
        groups: int,
    ) -> PostReport:
        findings = tuple(dict.fromkeys(self._findings))
        if cleared.replaced and timeless(cleared.replaced) == timeless(b"".join(new)):
            return PostReport(0, 0, len(written), cleared.path, findings, groups)
        known = [g for g in written if g in cleared.before]
        changed = 0
        if known:
            changed = cleared.before.changed(contents_in_block(b"".join(new)), known)
        return PostReport(
            len(written) - len(known), changed, len(known) - changed, cleared.path, findings, groups
        )


class _Guard:
    """Sees that a model written in place is not changed by others meanwhile."""

    def __init__(self, source: Path, target: Path) -> None:
        self._source = source
        try:
            self._in_place = os.path.samefile(source, target)
        except OSError:
            self._in_place = False
        self._before = self._state()

    def check(self) -> None:
        if self._in_place and self._state() != self._before:
            raise IfcWriteError(
                f"'{self._source.name}' was changed by another program while results were written "
                f"down; nothing was written. Run again."
            )

    def _state(self) -> tuple[int, int, int] | None:
        try:
            status = os.stat(self._source)
        except OSError:
            return None
        return status.st_ino, status.st_size, status.st_mtime_ns


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


def _silent(_: str, __: float) -> None:
    pass
