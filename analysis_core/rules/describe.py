"""A rule set as text, for the ``rules`` command."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from analysis_core.effects.arrangements import PATTERNS
from analysis_core.rules.model import Expression, Figure, RuleSet


def describe(rules: RuleSet) -> str:
    """Return everything the rule set states, with clauses and marks, as plain text."""
    out = [f"{rules.name}: {rules.title}", rules.edition]
    if rules.note:
        out.append(rules.note)
    out += ["", "Marks: m from memory, compare with the clause; ? the memory itself was unsure;"]
    out += ["       N nationally determined; P stated by the project", "", "Expressions"]
    out += [line for e in rules.expressions for line in _expression(rules, e)]
    out += ["", "Figures"]
    out += _table([_figure_row(f) for f in rules.figures.values() if not f.name.startswith("psi")])
    psi = _psi_rows(rules)
    if psi:
        out += [
            "",
            "Combination values",
            *_table([("action", "psi0", "psi1", "psi2", "", ""), *psi]),
        ]
    out += ["", "Arrangements", *_arrangements(rules)]
    return "\n".join(out) + "\n"


def _expression(rules: RuleSet, e: Expression) -> list[str]:
    permanent = " or ".join(e.permanent)
    terms = [f"({permanent}) permanent" if len(e.permanent) > 1 else f"{permanent} permanent"]
    terms += [f"{factor} {group}" for group, factor in e.always.items()]
    for option in e.one_of:
        terms.append("(" + " or ".join(f"{f} {g}" for g, f in option.items()) + ")")
    if e.leading:
        terms.append(f"{e.leading} leading")
    if e.accompanying:
        terms.append(
            f"{e.accompanying} accompanying" if e.leading else f"{e.accompanying} variable"
        )
    marks = _marks(e.confirmed, e.unsure)
    head = f"  {e.prefix}  {e.limit_state}, {e.kind}: {e.clause}{f'  [{marks}]' if marks else ''}"
    return [head, f"       {' + '.join(terms)}"]


def _figure_row(figure: Figure) -> tuple[str, ...]:
    marks = _marks(figure.confirmed, figure.unsure, figure.national, figure.replaced is not None)
    meaning = figure.meaning
    if figure.replaced is not None:
        meaning += f" (in the rule set {figure.replaced:g})"
    value = f"{figure.value:g} {figure.unit}".strip()
    return figure.name, value, marks, figure.clause, meaning


def _psi_rows(rules: RuleSet) -> list[tuple[str, ...]]:
    rows = []
    for name in rules.actions:
        own = [rules.figures.get(f"{psi}.{name}") for psi in ("psi0", "psi1", "psi2")]
        found = [f for f in own if f is not None]
        if len(found) == 3:
            marks = _marks(
                all(f.confirmed for f in found),
                any(f.unsure for f in found),
                any(f.national for f in found),
                any(f.replaced is not None for f in found),
            )
            rows.append((name, *(f"{f.value:g}" for f in found), marks, found[0].clause))
    return rows


def _arrangements(rules: RuleSet) -> list[str]:
    own = rules.arrangements
    out = [f"  used unless stated otherwise: {own.default}"]
    every = ", ".join(
        nature + (f" (at least {share:g} of it elsewhere)" if share else "")
        for nature, share in own.by_span.items()
    )
    out.append(f"  every: {every or 'no nature'}, each span loaded or not; {own.clause}")
    for listed in own.sets.values():
        out.append(f"  {listed.name}: {listed.clause}")
        for rule in listed.rules:
            rest = f", {rule.elsewhere:g} elsewhere" if rule.elsewhere else ""
            what = "; ".join(PATTERNS[p] for p in rule.patterns)
            out.append(f"     {', '.join(rule.natures)}: {what}{rest}")
    out.append("  none: every action on all spans")
    if own.permanent_by_span:
        out.append("  permanent action may be favourable on one span and not on the next")
    return out


def _marks(confirmed: bool, unsure: bool, national: bool = False, project: bool = False) -> str:
    marks = ("P" if project else "") + ("N" if national else "")
    return marks + ("" if confirmed else "m") + ("?" if unsure else "")


def _table(rows: Iterable[Sequence[str]]) -> list[str]:
    rows = list(rows)
    if not rows:
        return ["  none"]
    widths = [max(len(row[i]) for row in rows) for i in range(len(rows[0]))]
    return [
        "  " + "  ".join(cell.ljust(w) for cell, w in zip(row, widths, strict=True)).rstrip()
        for row in rows
    ]
