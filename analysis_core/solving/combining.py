"""Which combinations and arrangements a model is solved for."""

from __future__ import annotations

from dataclasses import replace

from analysis_core import rules as rule_sets
from analysis_core.findings import Finding
from analysis_core.model import Combination, LineModel
from analysis_core.settings import Settings
from analysis_core.solving.lines import Rules

_NO_CASES = (
    "The model states no load case and self weight is off, so there is nothing to combine. State "
    "cases and actions in the job file."
)


def choose(model: LineModel, settings: Settings) -> tuple[Rules, list[Finding]]:
    """Return what the lines are combined by, and what was assumed about the cases.

    The combinations of the model and the job file come first; those of the rule set are added
    where nothing states any for a limit state, or where the job file asks for both.  Raises
    JobError for a rule set or an arrangement that does not exist.
    """
    asked = settings.rules
    rule_set = rule_sets.load(asked.name, asked.replace)
    findings = list(rule_sets.classify(rule_set, model.cases).findings)
    if model.lines and not model.cases:
        findings.append(Finding("warning", "no-cases", _NO_CASES))
    arrangements = rule_sets.arrangements(
        rule_set,
        model.cases,
        chosen=asked.arrangements,
        permanent_by_span=asked.permanent_by_span,
        one_by_one={c.name: c.one_by_one for c in settings.cases if c.one_by_one is not None},
    )
    stated = model.combinations
    own = rule_sets.combinations(
        rule_set,
        model.cases,
        permanent_by_span=asked.permanent_by_span,
        taken=[combination.name for combination in stated],
    )
    if asked.use_rule_combinations is False:
        own = ()
    elif asked.use_rule_combinations is None:
        states = {combination.limit_state for combination in stated}
        own = tuple(c for c in own if c.limit_state not in states)
        findings += _filled(stated, own, rule_set.title)
    name = f"{rule_set.title} ({rule_set.edition})"
    return Rules((*stated, *own), arrangements, name, rule_set), findings


def with_combinations(model: LineModel, rules: Rules) -> LineModel:
    """Return the model with the combinations it is solved for."""
    return replace(model, combinations=rules.combinations)


def _filled(
    stated: tuple[Combination, ...], own: tuple[Combination, ...], title: str
) -> list[Finding]:
    """Say so where the model states combinations for one limit state alone."""
    states = sorted({combination.limit_state for combination in own})
    if not stated or not states:
        return []
    message = (
        f"The model states no combinations for {' and '.join(states)}; those of {title} are used. "
        f"Set 'rules: {{combinations: model}}' in the job file to do without."
    )
    return [Finding("note", "combinations-from-rules", message)]
