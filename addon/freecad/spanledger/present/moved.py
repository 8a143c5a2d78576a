"""What moved between two runs, in a sentence."""

from __future__ import annotations

from analysis_core.results import LineResult, Outcome
from analysis_core.units import DisplayUnits

from .listing import governing
from .words import noop, say

_NAMES = (noop("sagging"), noop("hogging"), noop("shear"), noop("deflection"))
_QUANTITIES = ("moment", "moment", "force", "deflection")
_NOTHING = 1e-9  # of the larger value


def moved_lines(before: Outcome, after: Outcome) -> list[str]:
    """Return the marks of lines whose governing effects differ, new and lost ones included."""
    old = {result.line.mark: governing(result) for result in before.lines}
    new = {result.line.mark: governing(result) for result in after.lines}
    both = [mark for mark in new if mark in old and _differ(old[mark], new[mark])]
    return both + [m for m in new if m not in old] + [m for m in old if m not in new]


def moved_words(before: Outcome, after: Outcome, mark: str, units: DisplayUnits) -> str:
    """Return what changed for the line in hand, and how many others did."""
    moved = moved_lines(before, after)
    if not moved:
        return say("No governing effect changed.")
    parts = []
    old, new = _named(before, mark), _named(after, mark)
    if old is not None and new is not None and mark in moved:
        changes = [
            f"{say(name)} {_words(a, quantity, units)} → {_words(b, quantity, units)} "
            f"{units.symbol(quantity)}"
            for name, quantity, a, b in zip(
                _NAMES, _QUANTITIES, governing(old), governing(new), strict=True
            )
            if _differ((a,), (b,))
        ]
        parts.append(f"{mark}: {', '.join(changes)}.")
    others = [m for m in moved if m != mark]
    if others:
        listed = ", ".join(others[:4]) + (" …" if len(others) > 4 else "")
        if len(others) == 1:
            parts.append(say("1 other line changed: {lines}.", lines=listed))
        else:
            parts.append(
                say("{count} other lines changed: {lines}.", count=len(others), lines=listed)
            )
    return " ".join(parts)


def _named(outcome: Outcome, mark: str) -> LineResult | None:
    return next((r for r in outcome.lines if r.line.mark == mark), None)


def _differ(old: tuple[float | None, ...], new: tuple[float | None, ...]) -> bool:
    return any(
        (a is None) != (b is None)
        or (a is not None and b is not None and abs(a - b) > _NOTHING * max(abs(a), abs(b)))
        for a, b in zip(old, new, strict=True)
    )


def _words(value: float | None, quantity: str, units: DisplayUnits) -> str:
    return "–" if value is None else units.number(value, quantity)
