"""Checks of members on the screen and as data."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

from analysis_core.checking.members import FIGURES, TITLES, MemberChecks
from analysis_core.checks.working import Check
from analysis_core.report.tables import safe, table
from analysis_core.results import Outcome
from analysis_core.units import DisplayUnits

ByLine = Mapping[str, tuple[MemberChecks, ...]]
_UNCONFIRMED = " †"
CAUTION = (
    "† Clauses and figures of the checks were written from memory of the standards and not "
    "compared with them; a licensed engineer must do so."
)


def checks_text(outcome: Outcome, found: ByLine, units: DisplayUnits) -> str:
    """Return a row per check, the members in the order of their lines."""
    rows = []
    for result in outcome.lines:
        for member in found.get(result.line.mark, ()):
            name = _name(outcome, result.line.members[member.member].element, member.member)
            rows += [_row(result.line.mark, name, check, units) for check in member.checks]
    if not rows:
        return "No member was checked."
    head = ("line", "member", "check", "demand", "resistance", "use", "result", "clause")
    text = table(head, ("",) * len(head), rows)
    return f"Checks of members\n{text}\n{CAUTION}"


def figures_text(code: str, replaced: Mapping[str, object]) -> str:
    """Return the figures of a code of the checks, with clause, meaning and mark.

    ``replaced``: figures that a project puts its own in place of.
    """
    rows = [
        (
            name,
            f"{figure.value:g}" + (f" (here {replaced[name]})" if name in replaced else ""),
            "national" if figure.national else "",
            figure.clause,
            figure.meaning + ("" if figure.confirmed else _UNCONFIRMED),
        )
        for name, figure in FIGURES[code].items()
    ]
    text = table(("figure", "value (SI)", "", "clause", "meaning"), ("",) * 5, rows)
    return (
        f"{TITLES[code]}: figures of the checks\n{text}\n{CAUTION}\nA job file replaces them: "
        f"checks: {{replace: {{{rows[0][0]}: {FIGURES[code][rows[0][0]].value:g}}}}}."
    )


def figures_data(code: str, replaced: Mapping[str, object]) -> dict[str, Any]:
    """Return the same as plain data."""
    return {
        "name": code,
        "title": TITLES[code],
        "figures": {
            name: {"value": replaced.get(name, figure.value), "of_code": figure.value,
                   "clause": figure.clause, "meaning": figure.meaning,
                   "national": figure.national, "confirmed": figure.confirmed}
            for name, figure in FIGURES[code].items()
        },
    }  # fmt: skip


def checks_data(found: tuple[MemberChecks, ...]) -> list[dict[str, Any]]:
    """Return the checks of a line as plain data, SI."""
    return [
        {
            "member": each.member,
            "code": each.code,
            "restraints": each.restraints,
            "checks": [_data(check) for check in each.checks],
        }
        for each in found
    ]


def _data(check: Check) -> dict[str, Any]:
    return {
        "name": check.name,
        "status": check.status,
        "clause": check.clause,
        "demand": _finite(check.demand),
        "resistance": _finite(check.resistance),
        "use": _finite(check.use),
        "x": check.x,
        "source": check.source,
        "confirmed": bool(check.steps) and all(s.confirmed for s in check.steps),
        "reason": check.reason,
        "not_covered": check.not_covered,
        "steps": [
            {"symbol": s.symbol, "formula": s.formula, "value": _finite(s.value),
             "clause": s.clause, "note": s.note, "confirmed": s.confirmed}
            for s in check.steps
        ],
    }  # fmt: skip


def _finite(value: float) -> float | None:
    return value if math.isfinite(value) else None


def _name(outcome: Outcome, element: str, member: int) -> str:
    return safe(outcome.model.names.get(element) or element or str(member))


def _row(mark: str, name: str, check: Check, units: DisplayUnits) -> tuple[str, ...]:
    if check.status == "not checked":
        return (safe(mark), name, check.name, "-", "-", "-", f"not checked: {safe(check.reason)}",
                check.clause)  # fmt: skip
    return (
        safe(mark), name, check.name, _value(abs(check.demand), check.quantity, units),
        _value(check.resistance, check.quantity, units), f"{check.use:.3f}", check.status,
        f"{check.clause}{_UNCONFIRMED if _of_standard(check) else ''}",
    )  # fmt: skip


def _of_standard(check: Check) -> bool:
    """Whether a check rests on a clause that was not compared with its standard."""
    return any(step.clause and not step.confirmed for step in check.steps)


def _value(value: float, quantity: str, units: DisplayUnits) -> str:
    if not math.isfinite(value):
        return "none suffices"
    return units.text(value, quantity) if quantity else f"{value:.2f}"
