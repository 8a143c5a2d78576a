"""What is found out about a line on request: states, deflections, faces, redistribution."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import cast

from analysis_core.effects.arrangements import Arrangements, SpanCases
from analysis_core.effects.deflection_limits import (
    DeflectionLimit,
    SpanDeflection,
    span_deflections,
)
from analysis_core.effects.envelopes import envelope
from analysis_core.effects.faces import SupportMoment, support_moments
from analysis_core.effects.redistribution import redistribute
from analysis_core.effects.redistribution_limits import Limit
from analysis_core.effects.redistribution_plan import Plan, plan_redistribution
from analysis_core.effects.states import State, governing_states
from analysis_core.errors import ModelError
from analysis_core.model import Combination, LineModel
from analysis_core.results import LineEnvelope, LineResult, LineSolution
from analysis_core.rules import RuleSet
from analysis_core.settings import Limits, Settings
from analysis_core.solving.line_selection import chooses


@dataclass(frozen=True, slots=True)
class Redistributed:
    """Strength effects after redistribution, beside the elastic ones of the line's result.

    ``plan``: the fractions by joint, what the rule set allows, and findings.  ``problem`` says why
    nothing was done where ``envelope`` is None.
    """

    plan: Plan
    envelope: LineEnvelope | None
    problem: str = ""
    solution: LineSolution | None = None
    """The parts of the cases with their support moments reduced."""

    @property
    def fractions(self) -> Mapping[int, float]:
        """Fraction of the support moment by joint."""
        return self.plan.fractions

    @property
    def limit(self) -> Limit | None:
        """What the rule set allows, and on what conditions."""
        return self.plan.limit


@dataclass(frozen=True, slots=True)
class LineDetail:
    """States behind the extremes, deflections against limits, moments at supports."""

    states: tuple[State, ...]
    deflections: tuple[SpanDeflection, ...]
    supports: tuple[SupportMoment, ...]
    redistributed: Redistributed | None
    given: DetailInput | None = None
    """What it was made of."""


@dataclass(frozen=True, slots=True)
class DetailInput:
    """All that a detail is made of."""

    spans: SpanCases
    parts: LineSolution
    envelopes: Mapping[str, LineEnvelope]
    combinations: tuple[Combination, ...]
    arrangements: Arrangements
    rule_set: RuleSet
    model: LineModel
    settings: Settings


def detail_of(result: LineResult) -> LineDetail:
    """Return the detail of a balanced line."""
    assert result.detail is not None
    return cast(LineDetail, result.detail())


def line_detail(given: DetailInput) -> LineDetail:
    """Return the details of one line.  Never raises for what a model or a job file may hold."""
    return LineDetail(
        _states(given), _deflections(given), _supports(given), _redistributed(given), given
    )


def _states(given: DetailInput) -> tuple[State, ...]:
    found = given.envelopes.get("strength")
    if found is None:
        return ()
    strength = [c for c in given.combinations if c.limit_state == "strength"]
    return governing_states(given.spans, given.parts, strength, given.arrangements, found)


def _deflections(given: DetailInput) -> tuple[SpanDeflection, ...]:
    """By span, the limit that uses most of all that apply to one of its members."""
    line = given.spans.line
    permanent = [c.name for c in given.model.cases if c.nature == "permanent"]
    best: dict[int, SpanDeflection] = {}
    for limits in given.settings.limits or (Limits(),):
        try:
            (found,) = span_deflections(
                [given.spans],
                [given.parts],
                given.combinations,
                _limit(limits),
                permanent=permanent,
                arrangements=given.arrangements,
            )
        except ValueError:  # no combination of that kind: the limit has nothing to hold against
            continue
        for span in found:
            members = [line.members[m] for m in span.span.members]
            if not any(chooses(limits.on, line, m, given.model) for m in members):
                continue
            known = best.get(span.span.number)
            if known is None or (span.utilisation or 0.0) >= (known.utilisation or 0.0):
                best[span.span.number] = span
    return tuple(best[number] for number in sorted(best))


def _limit(limits: Limits) -> DeflectionLimit:
    return DeflectionLimit(
        span_ratio=limits.span_ratio,
        cantilever_ratio=limits.cantilever_ratio,
        absolute=limits.absolute,
        camber=limits.camber,
        kind=limits.kind,
        variable_only=limits.variable_only,
    )


def _supports(given: DetailInput) -> tuple[SupportMoment, ...]:
    if not given.settings.rules.face_moments:
        return ()
    rule = given.rule_set.face_rule()
    return support_moments(
        given.spans, given.parts, given.combinations, rule, arrangements=given.arrangements
    )


def _redistributed(given: DetailInput) -> Redistributed | None:
    line = given.spans.line
    asked = next(
        (
            r for r in given.settings.rules.redistribution
            if any(chooses(r.on, line, m, given.model) for m in line.members)
        ),
        None,
    )  # fmt: skip
    if asked is None:
        return None
    rules = given.rule_set
    plan = plan_redistribution(line, asked, rules.redistribution, rules.values())
    if not plan.fractions:
        return Redistributed(plan, None, "No support moment of this line can be redistributed.")
    try:
        reduced = redistribute(line, given.parts, plan.fractions)
    except ModelError as error:
        return Redistributed(plan, None, str(error))
    found = envelope(
        given.spans,
        reduced,
        given.combinations,
        limit_state="strength",
        arrangements=given.arrangements,
    )
    return Redistributed(plan, found, solution=reduced)
