"""Checks on the sheet: formula, numbers, clause and result of every step."""

from __future__ import annotations

import math
import re
from collections.abc import Sequence

from analysis_core.checks.working import Check, Step
from analysis_core.sheet.html import Markup, join, tag
from analysis_core.sheet.symbols import bounded, formula, numbers, symbols, value_text
from analysis_core.sheet.table import table
from analysis_core.units import DisplayUnits

_UNCONFIRMED = "†"
NOTE = f"{_UNCONFIRMED} Not compared with the standard: see Cautions."


def line_checks(
    members: Sequence[tuple[str, str, str, Sequence[Check]]], units: DisplayUnits
) -> list[Markup]:
    """Return the checks of the members of a line: a table of results, then the working.

    ``members``: name, code, how it is held sideways, and its checks.
    """
    several = len({code for _, code, _, _ in members}) > 1
    rows = [
        (name, *_row(check, units, "" if several else _named(code)))
        for name, code, _, checks in members
        for check in checks
    ]
    codes = ", ".join(dict.fromkeys(_named(code) for _, code, _, _ in members if code))
    parts = [
        table(
            ("Member", "Check", "Demand", "Resistance", "Use", "At", "Result", "Clause"),
            ("", "", "", "", "", units.symbol("length"), "", ""),
            rows,
            caption=f"Checks{f' by {codes}' if codes else ''}",
            texts=(0, 1, 6, 7),
        )
    ]
    held: dict[str, list[str]] = {}
    for name, _, restraints, _ in members:
        held.setdefault(restraints, []).append(name)
    sentences = [f"{', '.join(names)}: {restraints}." for restraints, names in held.items()]
    parts.append(tag("p", "Held sideways. ", " ".join(sentences), class_="verification"))
    said = ""
    for name, _, _, checks in members:
        for check in checks:
            if check.steps:
                parts.append(_working(name, check, units, said=said))
                said = check.not_covered
    return parts


def _named(code: str) -> str:
    """The name of a code as its clauses have it: "EN 1993-1-1"."""
    return code.upper().replace("-", " ", 1)


def _row(check: Check, units: DisplayUnits, code: str) -> tuple[Markup | str, ...]:
    """``code`` stands in the caption and is left out of the clause."""
    clause = re.sub(rf"^{re.escape(code)}[^,]*, ", "", check.clause) if code else check.clause
    if check.status == "not checked":
        return (check.name, "", "", "", "", tag("strong", f"not checked: {check.reason}"),
                clause)  # fmt: skip
    good = check.status == "satisfied"
    result = check.status if good else tag("strong", check.status, class_="fail")
    return (
        check.name,
        _value(abs(check.demand), check.quantity, units),
        _value(check.resistance, check.quantity, units),
        f"{check.use:.3f}" if math.isfinite(check.use) else "∞",
        units.number(check.x, "length") if check.source and check.quantity else "–",
        result,
        f"{clause}\xa0{_UNCONFIRMED}",
    )


def _working(name: str, check: Check, units: DisplayUnits, *, said: str) -> Markup:
    """``said``: what the check before does not cover, which need not be repeated."""
    items = [tag("li", _step(step, units)) for step in check.steps]
    governed = f", {check.source}" if check.source else ""
    left = "Not covered: as before." if check.not_covered == said else check.not_covered
    closing = tag("p", symbols(left), class_="aside") if check.not_covered else ""
    return tag(
        "div",
        tag("p", f"{check.name[0].upper()}{check.name[1:]}, {name}{governed}", class_="working"),
        tag("ol", items, class_="steps"),
        closing,
        class_="keep",
    )


def _step(step: Step, units: DisplayUnits) -> Markup:
    parts: list[Markup | str] = [tag("i", symbols(step.symbol))]
    if step.formula:
        parts += [" = ", formula(step)]
        if step.operands:
            parts += [" = ", numbers(step, units)]
        if bounded(step):
            parts += ["; ", tag("i", symbols(step.symbol))]
    parts.append(f" = {_value(step.value, step.quantity, units)}")
    if step.note:
        parts += ["; ", symbols(step.note)]
    if step.clause:
        parts.append(tag("small", f"  {step.clause}"))
    return join(*parts)


def _value(value: float, quantity: str, units: DisplayUnits) -> str:
    if not math.isfinite(value):
        return "none suffices"
    return value_text(value, quantity, units)
