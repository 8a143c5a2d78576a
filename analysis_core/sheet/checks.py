"""Checks on the sheet: formula, numbers, clause and result of every step."""

from __future__ import annotations

import re
from collections.abc import Callable, Sequence

from analysis_core.checks.working import Check, Step
from analysis_core.sheet.html import Markup, join, tag
from analysis_core.sheet.table import table
from analysis_core.units import DisplayUnits

_UNCONFIRMED = "†"
NOTE = (
    f"{_UNCONFIRMED} Clause and figure were written from memory of the standard and have not been "
    f"compared with it; the licensed engineer must do so."
)


def member_checks(
    name: str, code: str, restraints: str, checks: Sequence[Check], units: DisplayUnits
) -> Markup:
    """Return the checks of one member: a table of results, then the working of each."""
    rows = [_row(check, units) for check in checks]
    parts = [
        table(
            ("Check", "Demand", "Resistance", "Use", "At", "Result", "Clause"),
            ("", "", "", "", units.symbol("length"), "", ""),
            rows,
            caption=f"Checks of {name}{f' by {code.upper()}' if code else ''}",
            texts=(0, 5, 6),
        ),
        tag("p", f"Held sideways: {restraints}.", class_="verification"),
    ]
    parts += [_working(check, units) for check in checks if check.steps]
    return tag("div", parts, class_="checks")


def _row(check: Check, units: DisplayUnits) -> tuple[Markup | str, ...]:
    if check.status == "not checked":
        return (check.name, "", "", "", "", tag("strong", f"not checked: {check.reason}"),
                check.clause)  # fmt: skip
    good = check.status == "satisfied"
    result = tag("span", check.status, class_="pass" if good else "fail")
    return (
        check.name,
        _value(abs(check.demand), check.quantity, units),
        _value(check.resistance, check.quantity, units),
        f"{check.use:.3f}",
        units.number(check.x, "length"),
        result,
        f"{check.clause} {_UNCONFIRMED}",
    )


def _working(check: Check, units: DisplayUnits) -> Markup:
    items = [tag("li", _step(step, units)) for step in check.steps]
    governed = f", {check.source}" if check.source else ""
    closing = tag("p", check.not_covered, class_="verification") if check.not_covered else ""
    return join(
        tag("p", f"{check.name}{governed}:", class_="working"), tag("ol", items, class_="steps"),
        closing,
    )  # fmt: skip


def _step(step: Step, units: DisplayUnits) -> Markup:
    parts: list[Markup | str] = [tag("span", step.symbol, class_="symbol")]
    if step.formula:
        parts.append(f" = {_symbols(step.formula)}")
        if step.operands:
            parts.append(f" = {_numbers(step, units)}")
    parts.append(f" = {_value(step.value, step.quantity, units)}")
    if step.note:
        parts.append(f"; {step.note}")
    if step.clause:
        parts.append(tag("small", f"  {step.clause}"))
    return join(*parts)


def _symbols(formula: str) -> str:
    return _filled(formula, lambda name: name.replace("gamma", "γ"))


def _numbers(step: Step, units: DisplayUnits) -> str:
    values = {name: _value(value, quantity, units) for name, value, quantity in step.operands}
    return _filled(step.formula, lambda name: values.get(name, name))


def _filled(formula: str, word: Callable[[str], str]) -> str:
    return re.sub(r"\{([^}]*)\}", lambda match: word(match[1]), formula)


def _value(value: float, quantity: str, units: DisplayUnits) -> str:
    return units.text(value, quantity) if quantity else f"{value:.3f}"
