"""Lines through the solver in the order of the load path, enveloped and verified.

Secondary lines come first.  Each part of a case (what stands on one span) hands its own reaction
down, so that the arrangement that governs a carrying line is found over the spans of everything
that bears on it, and a source says which: "Q on spans 1, 3 and L2-04 span 1".
"""

from __future__ import annotations

from collections.abc import Callable, Hashable, Mapping, Sequence
from dataclasses import dataclass, field, replace
from functools import cache, partial

import numpy as np

from analysis_core import distribution, stiffness_check
from analysis_core.effects.arrangements import (
    Arrangements,
    Part,
    SpanCases,
    SpanSplitter,
    merged_lines,
    recased,
    whole_cases,
    with_recased,
)
from analysis_core.effects.combinations import combine
from analysis_core.effects.envelopes import envelopes_by_state
from analysis_core.errors import AnalysisError, MechanismError
from analysis_core.findings import Finding
from analysis_core.load_levels import levels
from analysis_core.model import Action, Combination, Line, LineModel, PointForce, Transfer
from analysis_core.results import LineEnvelope, LineResult, LineSolution, Verification
from analysis_core.revision.line_fingerprints import line_fingerprints
from analysis_core.rules import RuleSet
from analysis_core.settings import Settings
from analysis_core.solving.line_details import DetailInput, detail_of, line_detail

Progress = Callable[[str, float], None]


@dataclass(frozen=True, slots=True)
class _Solved:
    """A line with what was handed down to it, solved for the parts of its cases."""

    line: Line
    spans: SpanCases
    parts: LineSolution
    whole: LineSolution


@dataclass(frozen=True, slots=True)
class _Kept:
    """What was found for a line of exactly these joints, members and actions."""

    parts: LineSolution
    difference: float
    envelopes: dict[str, LineEnvelope]


@dataclass(slots=True)
class Memory:
    """What earlier runs found, by content: equal lines are not solved again.

    ``again``: marks of the lines that the last run had to solve.
    """

    kept: dict[Hashable, _Kept] = field(default_factory=dict)
    again: list[str] = field(default_factory=list)


@dataclass(frozen=True, slots=True)
class Rules:
    """What lines are combined by: combinations, arrangements, and the rule set with its title."""

    combinations: tuple[Combination, ...]
    arrangements: Arrangements
    name: str
    rule_set: RuleSet


def solve_lines(
    model: LineModel,
    rules: Rules,
    settings: Settings,
    tell: Progress,
    memory: Memory | None = None,
) -> tuple[tuple[LineResult, ...], list[Finding]]:
    """Return a result per line, in the order of the model's lines, and what went wrong.

    With a ``memory``, lines that an earlier run solved under the same actions and rules are taken
    from it, to the last digit.
    """
    solver = _Solver(model, rules, memory)
    order = levels([line.mark for line in model.lines], model.transfers)
    for done, level in enumerate(order):
        tell("Solving", done / len(order))
        solver.solve_level(level)
    tell("Solving", 1.0)
    results = _results(model, rules, settings, solver, tell)
    if settings.rules.redistribution:
        solver.findings += _redistribution_findings(results)
    return results, solver.findings


def _redistribution_findings(results: Sequence[LineResult]) -> list[Finding]:
    found = [detail_of(r).redistributed for r in results if r.detail is not None]
    return [finding for each in found if each is not None for finding in each.plan.findings]


class _Solver:
    def __init__(self, model: LineModel, rules: Rules, memory: Memory | None) -> None:
        self.lines = {line.mark: line for line in model.lines}
        self.cases = [case.name for case in model.cases]
        self.rules = rules
        self.solved: dict[str, _Solved] = {}
        self.findings: list[Finding] = []
        self.memory = memory
        self._rules_key = _rules_key(rules) if memory is not None else None
        if memory is not None:
            memory.again.clear()
        self._known: dict[str, Part] = {}
        self._splitter = SpanSplitter(self.cases, rules.arrangements.split, known=self._known)
        self._into: dict[str, list[Transfer]] = {}
        for transfer in model.transfers:
            self._into.setdefault(transfer.to_line, []).append(transfer)

    def transfers_into(self, mark: str) -> list[Transfer]:
        """Return what other lines bear on this one."""
        return self._into.get(mark, [])

    def solve_level(self, level: Sequence[tuple[str, ...]]) -> None:
        """Solve the groups of one level; none needs another of the same level."""
        single = [group[0] for group in level if len(group) == 1]
        loaded = [line for mark in single if (line := self._loaded(mark, ())) is not None]
        self._solve(loaded)
        for group in level:
            if len(group) > 1:
                self._solve_circle(group)

    def _loaded(self, mark: str, circle: Sequence[str]) -> Line | None:
        """The line with the reactions handed down to it; None where it cannot be solved."""
        line = self.lines[mark]
        if line.fault:
            return None
        actions: list[Action] = []
        for transfer in self.transfers_into(mark):
            if transfer.from_line in circle:
                continue
            bearing = self.solved.get(transfer.from_line)
            if bearing is None:
                self._refuse_broken(line, transfer)
                return None
            actions += self._handed_down(bearing, transfer, line)
        return replace(line, actions=(*line.actions, *actions)) if actions else line

    def _handed_down(self, bearing: _Solved, transfer: Transfer, line: Line) -> list[Action]:
        reactions = bearing.parts.reactions[:, transfer.joint, 1]
        return [
            self._force(bearing.line.mark, part, float(reaction), transfer, line)
            for part, reaction in zip(bearing.spans.parts, reactions, strict=True)
            if reaction != 0.0
        ]

    def _force(
        self, mark: str, part: Part, reaction: float, transfer: Transfer, line: Line
    ) -> Action:
        """The reaction (up on what bears) as a downward force, in a case of its own part."""
        case = part.case
        if case in self.rules.arrangements.split:
            place = f"{mark} {part.place}" if part.place.startswith("span") else part.place
            case = f"{part.case} @ {place or mark}"
            self._known[case] = Part(case, part.case, place or mark)
        cos, sin = line.direction(line.members[transfer.member])
        return PointForce(
            case, transfer.member, transfer.position, cos * reaction, -sin * reaction,
            source=f"reaction of {mark}",
        )  # fmt: skip

    def _solve(self, lines: Sequence[Line]) -> None:
        split = [self._splitter.split(line) for line in lines]
        known = [self.kept(spans) for spans in split]
        new = iter(_solve_parts([s for s, k in zip(split, known, strict=True) if k is None]))
        solved: list[tuple[Line, SpanCases, LineSolution]] = []
        for line, spans, kept in zip(lines, split, known, strict=True):
            solution = next(new) if kept is None else replace(kept.parts, line=spans.line)
            if kept is None and self.memory is not None:
                self.memory.again.append(line.mark)
            if isinstance(solution, AnalysisError):
                self._refuse(line, solution)
            else:
                solved.append((self._whole_cases(line), spans, solution))
        if solved:
            self._keep(*zip(*solved, strict=True))

    def key(self, spans: SpanCases) -> Hashable:
        """Everything that the results of a line depend on, and nothing else."""
        line = spans.line
        joints = tuple((j.x, j.z, j.support) for j in line.joints)
        members = tuple(
            (m.start, m.end, m.pieces, m.role, m.start_spring, m.end_spring, m.span)
            for m in line.members
        )
        actions = tuple(replace(a, source="") for a in line.actions)
        return (self._rules_key, line.kind, joints, members, actions, spans.parts)

    def kept(self, spans: SpanCases) -> _Kept | None:
        """Return what the memory has of an equal line."""
        return self.memory.kept.get(self.key(spans)) if self.memory is not None else None

    def _whole_cases(self, line: Line) -> Line:
        """The line with what was handed down to it in the cases that it belongs to."""
        actions = (
            recased(a, self._known[a.case].case) if a.case in self._known else a
            for a in line.actions
        )
        return with_recased(line, tuple(actions))

    def _keep(
        self,
        lines: Sequence[Line],
        split: Sequence[SpanCases],
        solutions: Sequence[LineSolution],
    ) -> None:
        whole = merged_lines(split, solutions, self.cases, lines)
        for found in map(_Solved, lines, split, solutions, whole):
            self.solved[found.line.mark] = found

    def _solve_circle(self, group: Sequence[str]) -> None:
        """Solve lines that bear on each other.

        With F the forces at the places where they bear, F = F0 + A F: F0 from the actions proper,
        A from a unit force at each place, one at a time.
        """
        loaded = {mark: self._loaded(mark, group) for mark in group}
        lines = [line for line in loaded.values() if line is not None]
        inner = [t for mark in group for t in self.transfers_into(mark) if t.from_line in group]
        if len(lines) < len(group):
            for line in lines:
                self._refuse_broken(line, next(t for t in inner if t.to_line == line.mark))
            return
        split = [self._splitter.split(line) for line in lines]
        parts = _solve_parts(split)
        units = _solve_parts([_unit_forces(line, inner) for line in lines])
        failed = [s for s in (*parts, *units) if isinstance(s, AnalysisError)]
        forces = None if failed else _circle_forces(lines, inner, split, parts, units)
        if forces is None:
            for line in lines:
                self._refuse(line, failed[0] if failed else None)
            return
        self._solve([self._with_circle(line, inner, forces) for line in lines])

    def _with_circle(
        self, line: Line, inner: Sequence[Transfer], forces: Mapping[tuple[str, Part], list[float]]
    ) -> Line:
        actions = [
            self._force(mark, part, force[i], transfer, line)
            for i, transfer in enumerate(inner)
            if transfer.to_line == line.mark
            for (mark, part), force in forces.items()
            if force[i] != 0.0
        ]
        return replace(line, actions=(*line.actions, *actions))

    def _refuse(self, line: Line, error: AnalysisError | None) -> None:
        slug = "mechanism" if isinstance(error, MechanismError) else "not-analysed"
        message = str(error) if error else (
            f"Line {line.mark} bears on others in a circle that nothing holds. "
            f"Support one of them."
        )  # fmt: skip
        self.findings.append(Finding("error", slug, message, line.elements, line.mark))

    def _refuse_broken(self, line: Line, transfer: Transfer) -> None:
        message = (
            f"Line {line.mark} carries {transfer.from_line}, which could not be analysed; its "
            f"reaction is not known. Settle {transfer.from_line} first."
        )
        self.findings.append(
            Finding("error", "load-path-broken", message, line.elements, line.mark)
        )


def _solve_parts(split: Sequence[SpanCases]) -> list[LineSolution | AnalysisError]:
    """Solve lines for their parts, those with equal names of parts in one batch."""
    out: list[LineSolution | AnalysisError | None] = [None] * len(split)
    batches: dict[tuple[str, ...], list[int]] = {}
    for i, spans in enumerate(split):
        batches.setdefault(spans.cases, []).append(i)
    for cases, members in batches.items():
        solutions = distribution.solve_lines([split[i].line for i in members], cases)
        for i, solution in zip(members, solutions, strict=True):
            out[i] = solution
    return [solution for solution in out if solution is not None]


def _unit_forces(line: Line, inner: Sequence[Transfer]) -> SpanCases:
    """The line under 1 N downward at each place where the circle bears on it, one case each."""
    actions = []
    for i, transfer in enumerate(inner):
        if transfer.to_line == line.mark:
            cos, sin = line.direction(line.members[transfer.member])
            actions.append(PointForce(str(i), transfer.member, transfer.position, cos, -sin))
    return whole_cases(replace(line, actions=tuple(actions)), [str(i) for i in range(len(inner))])


def _circle_forces(
    lines: Sequence[Line], inner: Sequence[Transfer], split: Sequence[SpanCases],
    parts: Sequence[LineSolution | AnalysisError], units: Sequence[LineSolution | AnalysisError],
) -> dict[tuple[str, Part], list[float]] | None:  # fmt: skip
    """Forces in N at each place of the circle, by the line and part that cause them."""
    at = {line.mark: i for i, line in enumerate(lines)}
    count = len(inner)
    influence = np.zeros((count, count))
    for row, transfer in enumerate(inner):
        unit = units[at[transfer.from_line]]
        assert isinstance(unit, LineSolution)
        influence[row] = unit.reactions[:, transfer.joint, 1]
    system = np.eye(count) - influence
    if np.linalg.cond(system) > 1e12:
        return None
    forces: dict[tuple[str, Part], list[float]] = {}
    for line, spans, solution in zip(lines, split, parts, strict=True):
        assert isinstance(solution, LineSolution)
        for k, part in enumerate(spans.parts):
            own = [
                solution.reactions[k, t.joint, 1] if t.from_line == line.mark else 0.0
                for t in inner
            ]
            forces[line.mark, part] = [float(f) for f in np.linalg.solve(system, own)]
    return forces


def _results(
    model: LineModel, rules: Rules, settings: Settings, solver: _Solver, tell: Progress
) -> tuple[LineResult, ...]:
    solved = [solver.solved[line.mark] for line in model.lines if line.mark in solver.solved]
    found = _finished(solved, rules, solver, tell)
    kept = {s.line.mark: (s, each) for s, each in zip(solved, found, strict=True)}
    prints = line_fingerprints(
        model, combinations=rules.combinations, rules=rules.name, settings=settings
    )
    results = []
    for line in model.lines:
        mine = prints[line.mark]
        if line.mark in kept:
            result = _balanced(*kept[line.mark], rules, model, settings)
        else:
            result = LineResult(line, "not analysed")
        results.append(replace(result, fingerprint=mine.text, basis=mine.basis))
    return tuple(results)


def _balanced(
    s: _Solved, found: _Kept, rules: Rules, model: LineModel, settings: Settings
) -> LineResult:
    """The result of a line; what few ask for is found out on request, once."""
    given = DetailInput(
        s.spans,
        s.parts,
        found.envelopes,
        rules.combinations,
        rules.arrangements,
        rules.rule_set,
        model,
        settings,
    )
    return LineResult(
        line=s.line,
        status="balanced",
        solution=s.whole,
        combine=cache(partial(combine, s.whole, rules.combinations)),
        parts=s.parts,
        detail=cache(partial(line_detail, given)),
        envelopes=found.envelopes,
        verification=Verification(
            s.whole.joint_residual, s.whole.continuity_residual, found.difference
        ),
    )


def _finished(
    solved: Sequence[_Solved], rules: Rules, solver: _Solver, tell: Progress
) -> list[_Kept]:
    """Verify and envelope each solved line, or take both from the memory."""
    known = [solver.kept(s.spans) for s in solved]
    new = [s for s, kept in zip(solved, known, strict=True) if kept is None]
    tell("Verifying", 0.0)
    differences = stiffness_check.largest_differences([s.whole for s in new])
    tell("Verifying", 1.0)
    tell("Enveloping", 0.0)
    by_line = envelopes_by_state(
        [s.spans for s in new],
        [s.parts for s in new],
        rules.combinations,
        arrangements=rules.arrangements,
    )
    tell("Enveloping", 1.0)
    fresh = [
        _Kept(s.parts, difference, envelope)
        for s, difference, envelope in zip(new, differences, by_line, strict=True)
    ]
    if solver.memory is not None:
        solver.memory.kept.update(
            (solver.key(s.spans), kept) for s, kept in zip(new, fresh, strict=True)
        )
    rest = iter(fresh)
    return [kept if kept is not None else next(rest) for kept in known]


def _rules_key(rules: Rules) -> Hashable:
    return (repr(rules.combinations), repr(rules.arrangements))
