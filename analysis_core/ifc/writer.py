"""Posting: results are written into a copy of their model, or into the model itself.

The road: read the bytes, take out what we posted earlier, write down the new instances as text,
put them before the end of the data, replace the target as a whole.  Every byte of the model stays
where it was; ``append`` says how, ``remove`` how our entities are found when another program has
rewritten the file.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from datetime import UTC, datetime
from pathlib import Path
from typing import Literal

from analysis_core.errors import IfcWriteError
from analysis_core.findings import Finding
from analysis_core.ifc import append, atomic
from analysis_core.ifc.container import read_container
from analysis_core.ifc.governing import element_effects, element_parts
from analysis_core.ifc.measures import measures
from analysis_core.ifc.owner import owner_history
from analysis_core.ifc.property_sets import PropertySet, SetMaker
from analysis_core.ifc.set_lines import write_sets
from analysis_core.ifc.step_index import StepIndex
from analysis_core.ifc.support_reactions import reaction_set, support_reactions
from analysis_core.results import Outcome

Progress = Callable[[str, float], None]


@dataclass(frozen=True, slots=True)
class PostReport:
    """What posting did.  Counts are of property sets.

    ``path`` is "append" where bytes were only added to the model, "general" where entities of
    ours that another program had rewritten were taken out first.
    """

    written: int
    updated: int
    unchanged: int
    path: Literal["append", "general"]
    findings: tuple[Finding, ...] = ()


def post(
    source_path: str | Path,
    target_path: str | Path,
    outcome: Outcome,
    *,
    analysis_model: bool = False,
    progress: Progress | None = None,
    computed_at: datetime | None = None,
) -> PostReport:
    """Write an outcome into a copy of its model; the same path twice replaces it.

    ``computed_at``: now where None.  Raises IfcReadError where the model cannot be read,
    IfcWriteError where the target cannot be written.
    """
    tell = progress or _silent
    with atomic.writing_to(target_path) as target:
        tell("Posting", 0.0)
        stored = read_container(Path(source_path))
        index = StepIndex(stored.text)
        _check(index, Path(source_path).name)
        maker_time = computed_at or datetime.now(UTC)
        lines = append.Lines(append.first_free(index))
        sets, findings = _sets(outcome, index, lines, maker_time)
        tell("Posting", 0.4)
        findings += write_sets(sets, index, lines, owner_history(index, lines))
        tell("Posting", 0.8)
        assert index.data_end is not None  # _check has seen to it
        parts = append.with_block(
            stored.text, index.data_end, lines.text(index.newline), append.RESULTS, index.newline
        )
        atomic.replace_file(target, stored.packed(parts))
        tell("Posting", 1.0)
    return PostReport(len(sets), 0, 0, "append", tuple(findings))


def _sets(
    outcome: Outcome, index: StepIndex, lines: append.Lines, moment: datetime
) -> tuple[list[PropertySet], list[Finding]]:
    maker = SetMaker(index.schema, measures(index, lines), outcome.rules, moment)
    sets: list[PropertySet] = []
    findings: list[Finding] = []
    for element, parts in element_parts(outcome).items():
        effects = element_effects(element, parts)
        if effects is None:
            continue
        if not effects.finite:
            findings.append(_not_finite(element, effects.results[0].line.mark))
            continue
        sets.append(maker.effects(effects))
        if effects.curves:
            sets.append(maker.diagrams(effects))
        sets.append(maker.record(element, effects.results))
    for element, found in support_reactions(outcome).items():
        if not found.finite:
            findings.append(_not_finite(element, None))
        elif (made := reaction_set(found, maker)) is not None:
            sets.append(made)
    return sets, findings


def _check(index: StepIndex, name: str) -> None:
    if index.open_string or index.data_end is None:
        raise IfcWriteError(
            f"'{name}' has no proper end (ENDSEC; and END-ISO-10303-21; are wanted), so "
            f"nothing can be added to it. Copy or export it again."
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


def _silent(_: str, __: float) -> None:
    pass
