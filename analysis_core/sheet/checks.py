"""Checks on the sheet: formula, numbers, clause and result of every step."""

from __future__ import annotations

import math
from collections.abc import Sequence

from analysis_core.checks.working import Check, Step
from analysis_core.sheet.html import Markup, join, tag
from analysis_core.sheet.symbols import formula, numbers, symbols, value_text
from analysis_core.sheet.table import table
from analysis_core.units import DisplayUnits

_UNCONFIRMED = "†"
NOTE = (
    f"{_UNCONFIRMED} Clause and figure were written from memory of the standard and have not been "
    f"compared with it; the licensed engineer must do so."
)


def line_checks(
    members: Sequence[tuple[str, str, str, Sequence[Check]]], units: DisplayUnits
) -> list[Markup]:
    """Return the checks of the members of a line: a table of results, then the working.

    ``members``: name, code, how it is held sideways, and its checks.
    """
    rows = [(name, *_row(check, units)) for name, _, _, checks in members for check in checks]
    codes = ", ".join(dict.fromkeys(code.upper() for _, code, _, _ in members if code))
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
    parts += [
        _working(name, check, units)
        for name, _, _, checks in members
        for check in checks
        if check.steps
    ]
    return parts


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
        f"{check.use:.3f}" if math.isfinite(check.use) else "∞",
        units.number(check.x, "length") if check.source else "–",
        result,
        f"{check.clause}\xa0{_UNCONFIRMED}",
    )


def _working(name: str, check: Check, units: DisplayUnits) -> Markup:
    items = [tag("li", _step(step, units)) for step in check.steps]
    governed = f", {check.source}" if check.source else ""
    closing = tag("p", check.not_covered, class_="aside") if check.not_covered else ""
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
            parts.append(f" = {numbers(step, units)}")
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
