"""What changed between an earlier revision and the model in hand, as rows."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

from analysis_core.report.tables import safe
from analysis_core.units import DisplayUnits

from .words import noop, say

if TYPE_CHECKING:
    from analysis_core.revision.reconcile import LineChange, Reconciliation

# Told apart by shape, not by colour alone.
GLYPHS = {
    noop("unchanged"): "=",
    noop("changed"): "≠",
    noop("new"): "+",
    noop("gone"): "−",
    noop("split"): "Y",
    noop("merged"): "⅄",
    noop("regrouped"): "⇄",
}
_EFFECTS = (
    ("sagging", noop("sagging"), "moment"),
    ("hogging", noop("hogging"), "moment"),
    ("shear", noop("shear"), "force"),
    ("deflection", noop("deflection"), "deflection"),
    ("reaction_max", noop("largest reaction"), "force"),
    ("reaction_min", noop("smallest reaction"), "force"),
)


@dataclass(frozen=True, slots=True)
class ChangeRow:
    """One line, or several that became one: its state, marks, largest change and reasons."""

    texts: tuple[str, str, str, str]
    line: int | None
    detail: str
    unchanged: bool


def change_rows(found: Reconciliation, units: DisplayUnits) -> list[ChangeRow]:
    """Return the changes, largest first; unchanged lines come last."""
    number_of = {result.line.mark: i for i, result in enumerate(found.after.lines)}
    return [_row(change, number_of, units) for change in found.changes]


def summary(found: Reconciliation) -> str:
    """Return how much changed, in a sentence."""
    changed = sum(change.state != "unchanged" for change in found.changes)
    return say(
        "{before} to {after}: {changed} of {all} lines changed; {again} solved again.",
        before=safe(found.before.file),
        after=safe(found.after.file),
        changed=changed,
        all=len(found.changes),
        again=len(found.solved_again),
    )


def _row(change: LineChange, number_of: dict[str, int], units: DisplayUnits) -> ChangeRow:
    before, after = (safe(", ".join(marks)) or "–" for marks in (change.before, change.after))
    marks = before if before == after else f"{before} → {after}"
    if change.state == "unchanged":
        largest = "–"
    else:
        largest = "–" if math.isinf(change.largest) else f"{100.0 * change.largest:.1f} %"
    reasons = safe(" ".join(change.reasons))
    line = next((number_of[mark] for mark in change.after if mark in number_of), None)
    texts = (f"{GLYPHS.get(change.state, '?')} {change.state}", marks, largest, reasons)
    return ChangeRow(texts, line, _detail(change, units), change.state == "unchanged")


def _detail(change: LineChange, units: DisplayUnits) -> str:
    lines = [safe(reason) for reason in change.reasons]
    old, new = change.effects_before, change.effects_after
    if old is not None and new is not None:
        for name, words, quantity in _EFFECTS:
            a, b = getattr(old, name), getattr(new, name)
            if units.number(a, quantity) != units.number(b, quantity):
                lines.append(
                    f"{say(words)}: {units.number(a, quantity)} → {units.text(b, quantity)}"
                )
    return "\n".join(lines)
