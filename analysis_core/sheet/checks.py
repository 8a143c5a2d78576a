"""Checks on the sheet: formula, numbers, clause and result of every step."""

from __future__ import annotations

import math
import re
from collections.abc import Sequence
from dataclasses import dataclass, field

from analysis_core.checks.working import Check, Step
from analysis_core.sheet.html import Markup, join, tag
from analysis_core.sheet.symbols import bounded, formula, numbers, symbols, value_text
from analysis_core.sheet.table import table
from analysis_core.units import DisplayUnits

_UNCONFIRMED = "†"
_WORTH = 300
"""Characters from which on a working is worth a reference to an equal one."""
NOTE = f"{_UNCONFIRMED} Not compared with the standard: see Cautions."


@dataclass(slots=True)
class Told:
    """Workings written down so far, by their text: what they are called and where they stand."""

    places: dict[str, tuple[str, str]] = field(default_factory=dict)


def line_checks(
    members: Sequence[tuple[str, str, str, Sequence[Check]]],
    units: DisplayUnits,
    *,
    mark: str = "",
    told: Told | None = None,
) -> list[Markup]:
    """Return the checks of the members of a line: a table of results, then the working.

    ``members``: name, code, how it is held sideways, and its checks.  ``told`` keeps the workings
    of a sheet: one that is equal in every number to an earlier one refers to it by a link.
    """
    told = told or Told()
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
    parts.append(tag("p", "Where held sideways: ", " ".join(sentences), class_="verification"))
    said = ""
    for name, _, _, checks in members:
        for check in checks:
            if check.steps:
                parts.append(_working(f"{mark} {name}".strip(), check, units, said, told))
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


def _working(name: str, check: Check, units: DisplayUnits, said: str, told: Told) -> Markup:
    """``said``: what the check before does not cover, which need not be repeated."""
    governed = f", {check.source}" if check.source else ""
    title = f"{check.name[0].upper()}{check.name[1:]}, {name}"
    left = "Not covered: as before." if check.not_covered == said else check.not_covered
    closing = tag("p", symbols(left), class_="aside") if check.not_covered else ""
    steps = tag("ol", [tag("li", _step(step, units)) for step in check.steps], class_="steps")
    known = told.places.get(steps.text)
    if known is not None and len(steps.text) > _WORTH:
        same = tag("p", "Number by number as ", tag("a", known[0], href=f"#{known[1]}"),
                   ": ", _last(check, units), ".")  # fmt: skip
        return tag("div", tag("p", title, governed, class_="working"), same, closing, class_="keep")
    place = f"w{len(told.places) + 1}"
    told.places.setdefault(steps.text, (title, place))
    return tag(
        "div", tag("p", title, governed, class_="working"), steps, closing, id=place, class_="keep"
    )


def _last(check: Check, units: DisplayUnits) -> Markup:
    """What a working comes to: its last step."""
    step = check.steps[-1]
    return join(tag("i", symbols(step.symbol)), f" = {_value(step.value, step.quantity, units)}")


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
