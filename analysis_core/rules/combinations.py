"""Combinations of the cases of a model by the expressions of a rule set."""

from __future__ import annotations

import itertools
from collections.abc import Collection, Iterator, Mapping, Sequence
from dataclasses import dataclass

from analysis_core.effects.arrangements import Arrangements, PatternRule
from analysis_core.errors import JobError
from analysis_core.findings import Finding
from analysis_core.model import Case, Combination
from analysis_core.rules.model import ActionClass, Expression, RuleSet

Factors = dict[str, float]


@dataclass(frozen=True, slots=True)
class Classified:
    """Cases with the kind of action each was taken for, and what was assumed in doing so."""

    actions: Mapping[str, ActionClass]
    findings: tuple[Finding, ...] = ()


def classify(rules: RuleSet, cases: Sequence[Case]) -> Classified:
    """Return the kind of action of each case by its nature and category.

    A case without a category takes the first kind of its nature, with a note where there are
    several; an unknown category or nature takes it with a warning.
    """
    actions: dict[str, ActionClass] = {}
    findings = []
    for case in cases:
        kinds = [a for a in rules.actions.values() if a.nature == case.nature]
        found = next((a for a in kinds if _means(a, case.category)), None) if kinds else None
        if found is None and kinds:
            found = kinds[0]
            if case.category or len(kinds) > 1:
                findings.append(_taken(case, found, kinds))
        if found is None:
            found = next((a for a in rules.actions.values() if a.nature == "other"), None)
            findings.append(_not_covered(rules, case, found))
        elif case.nature == "other":
            findings.append(_not_covered(rules, case, found))
        if found is not None:
            actions[case.name] = found
    return Classified(actions, tuple(findings))


def combinations(
    rules: RuleSet,
    cases: Sequence[Case],
    *,
    permanent_by_span: bool = False,
    taken: Collection[str] = (),
) -> tuple[Combination, ...]:
    """Return the combinations of ``cases``, each once; those that cannot govern are left out.

    A variable action that is favourable is absent (``favourable`` 0), so a combination whose
    variable factors are all smaller than another's with the same permanent ones adds nothing.
    Permanent action that is favourable has combinations of its own, or, with
    ``permanent_by_span``, its favourable factor in the same combination.  ``taken`` are names not
    to be used again.
    """
    classified = classify(rules, cases).actions
    by_span = permanent_by_span or rules.arrangements.permanent_by_span
    out: list[Combination] = []
    numbers: dict[str, int] = {}
    wanted = dict.fromkeys((e.limit_state, e.kind) for e in rules.expressions)
    for limit_state, kind in sorted(wanted, key=lambda pair: pair[0] != "strength"):
        chosen = [e for e in rules.expressions if (e.limit_state, e.kind) == (limit_state, kind)]
        found = [
            _Sum(e, factors, favourable)
            for e in chosen
            for factors, favourable in _sums(rules, e, classified, by_span)
        ]
        for each in _undominated(found, classified):
            prefix = each.expression.prefix
            name = _next_name(prefix, numbers, taken)
            out.append(
                Combination(
                    name=name,
                    limit_state=limit_state,
                    factors=each.factors,
                    kind=kind,
                    rule=each.expression.clause,
                    source=rules.name,
                    favourable=each.favourable,
                )
            )
    return tuple(out)


def formula(combination: Combination) -> str:
    """Return a combination as people write it: "1.35 G + 1.5 Q"."""
    text = ""
    for case, factor in combination.factors.items():
        if factor:
            sign = (" - " if factor < 0 else " + ") if text else ("-" if factor < 0 else "")
            number = f"{abs(round(factor, 4)):g}"
            text += f"{sign}{number if '.' in number else f'{number}.0'} {case}"
    return text or "0"


def arrangements(
    rules: RuleSet,
    cases: Sequence[Case],
    *,
    chosen: str = "",
    permanent_by_span: bool = False,
    one_by_one: Mapping[str, bool] | None = None,
) -> Arrangements:
    """Return how the cases are arranged by span.

    ``chosen``: "" as the rule set says, "none", "every", or a set that it lists.  ``one_by_one``
    says of single cases whether they are loaded span by span.  Raises JobError for a set that is
    not listed.
    """
    own = rules.arrangements
    name = chosen or own.default
    if name not in ("none", "every", *own.sets):
        raise JobError(
            f"'rules.arrangements' is '{name}'; it must be one of "
            f"{', '.join(('none', 'every', *own.sets))}."
        )
    by_span = permanent_by_span or own.permanent_by_span
    permanent = tuple(c.name for c in cases if by_span and c.nature == "permanent")
    decided = one_by_one or {}
    listed = own.sets.get(name)
    if listed is not None:
        patterns = tuple(
            PatternRule(
                tuple(
                    c.name
                    for c in cases
                    if c.nature in r.natures and decided.get(c.name) is not False
                ),
                r.patterns,
                r.elsewhere,
            )
            for r in listed.rules
        )
        patterns = tuple(p for p in patterns if p.cases)
        shares = {c: p.elsewhere for p in patterns for c in p.cases}
        return Arrangements(name, shares, permanent, patterns, listed.clause)
    shares = {}
    for case in cases:
        wanted = decided.get(case.name)
        usual = name == "every" and case.nature in own.by_span
        if wanted or (wanted is None and usual):
            shares[case.name] = own.by_span.get(case.nature, 0.0)
    clause = own.clause if shares else ""
    return Arrangements(name, shares, permanent, (), clause)


@dataclass(frozen=True, slots=True)
class _Sum:
    expression: Expression
    factors: Factors
    favourable: Factors


def _sums(
    rules: RuleSet, e: Expression, actions: Mapping[str, ActionClass], by_span: bool
) -> Iterator[tuple[Factors, Factors]]:
    permanent = [case for case, action in actions.items() if action.nature == "permanent"]
    if e.needs and not any(a.group == e.needs for a in actions.values()):
        return
    values = list(dict.fromkeys(rules.value(f) for f in e.permanent))
    if not permanent:
        values = values[:1]
    for variable in _variable(rules, e, actions):
        for value in values[:1] if by_span else values:
            factors = dict.fromkeys(permanent, value) | variable
            favourable = dict.fromkeys(variable, 0.0)
            if by_span:
                favourable |= {case: min(values) for case in permanent}
            # In the order of the cases, so that they read as the model has them.
            yield (
                {c: factors[c] for c in actions if factors.get(c)},
                {c: favourable[c] for c in actions if c in favourable and factors.get(c)},
            )


def _variable(
    rules: RuleSet, e: Expression, actions: Mapping[str, ActionClass]
) -> Iterator[Factors]:
    """The variable part of an expression, every leading action and every choice in turn."""
    for present in _at_once(rules, actions):
        groups = dict.fromkeys(actions[case].group for case in present)
        for plan in _plans(rules, e, list(groups)):
            yield {
                case: rules.value(plan[actions[case].group], actions[case].name)
                for case in present
                if actions[case].group in plan
            }


def _at_once(rules: RuleSet, actions: Mapping[str, ActionClass]) -> Iterator[list[str]]:
    """Variable cases that act at the same time: of some groups one case after the other."""
    choices: list[list[list[str]]] = []
    for group in rules.groups.values():
        own = [case for case, action in actions.items() if action.group == group.name]
        if own:
            choices.append([own] if group.several == "together" else [[case] for case in own])
    for choice in itertools.product(*choices):
        yield [case for cases in choice for case in cases]


def _plans(rules: RuleSet, e: Expression, groups: list[str]) -> Iterator[dict[str, str]]:
    """Which factor each group takes: group to factor, as text."""
    fixed = {g: f for g, f in e.always.items() if g in groups}
    options = [[(g, f) for g, f in option.items() if g in groups] for option in e.one_of]
    for chosen in itertools.product(*(option for option in options if option)):
        start = fixed | dict(chosen)
        rest = [g for g in groups if g not in start]
        if not e.leading and not e.accompanying:
            yield start
        elif not e.leading or not rest:
            for company in _compatible(rules, rest):
                yield start | dict.fromkeys(company, e.accompanying)
        else:
            for leader in rest:
                others = [g for g in rest if g != leader and not _apart(rules, leader, g)]
                for company in _compatible(rules, others if e.accompanying else []):
                    yield start | {leader: e.leading} | dict.fromkeys(company, e.accompanying)


def _compatible(rules: RuleSet, groups: Sequence[str]) -> Iterator[tuple[str, ...]]:
    """The largest choices of groups of which none excludes another."""
    found: list[set[str]] = []
    for size in range(len(groups), -1, -1):
        for choice in itertools.combinations(groups, size):
            good = not any(_apart(rules, a, b) for a, b in itertools.combinations(choice, 2))
            if good and not any(set(choice) < larger for larger in found):
                found.append(set(choice))
                yield choice


def _apart(rules: RuleSet, a: str, b: str) -> bool:
    return b in rules.groups[a].not_with or a in rules.groups[b].not_with


def _undominated(sums: Sequence[_Sum], actions: Mapping[str, ActionClass]) -> list[_Sum]:
    """Without repetitions and without those that a stronger one covers."""
    kept: list[_Sum] = []
    for each in sums:
        if not each.factors or any(_covers(other, each, actions) for other in kept):
            continue
        kept = [other for other in kept if not _covers(each, other, actions)]
        kept.append(each)
    return kept


def _covers(strong: _Sum, weak: _Sum, actions: Mapping[str, ActionClass]) -> bool:
    for case, action in actions.items():
        a, b = strong.factors.get(case, 0.0), weak.factors.get(case, 0.0)
        if action.nature == "permanent":
            if a != b or strong.favourable.get(case) != weak.favourable.get(case):
                return False
        elif not min(0.0, a) <= b <= max(0.0, a):
            return False
    return True


def _next_name(prefix: str, numbers: dict[str, int], taken: Collection[str]) -> str:
    while True:
        numbers[prefix] = numbers.get(prefix, 0) + 1
        if (name := f"{prefix}{numbers[prefix]}") not in taken:
            return name


def _means(action: ActionClass, category: str) -> bool:
    word = category.strip().casefold().removeprefix("category").strip()
    return bool(word) and word in {w.casefold() for w in (action.name, *action.words)}


def _taken(case: Case, found: ActionClass, kinds: Sequence[ActionClass]) -> Finding:
    known = ", ".join(a.name for a in kinds)
    given = f"the category '{case.category}'" if case.category else "no category"
    return Finding(
        "warning" if case.category else "note",
        "category-assumed",
        f"Load case '{case.name}' ({case.nature}) has {given}; it was taken as '{found.name}' "
        f"(known: {known}). State its category in the job file.",
        (case.global_id,) if case.global_id else (),
    )


def _not_covered(rules: RuleSet, case: Case, found: ActionClass | None) -> Finding:
    done = (
        f"was combined like a variable action of the kind '{found.name}'"
        if found is not None
        else "was left out of all combinations"
    )
    return Finding(
        "warning",
        "nature-assumed",
        f"Load case '{case.name}' has the nature '{case.nature}', which the rule set "
        f"'{rules.name}' does not cover; it {done}. State its nature in the job file, or give "
        f"the combinations there.",
        (case.global_id,) if case.global_id else (),
    )
