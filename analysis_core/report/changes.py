"""The changes between two revisions: on screen, as data and as a spreadsheet."""

from __future__ import annotations

import math
from typing import Any

from analysis_core.report.csv_text import csv_text
from analysis_core.report.tables import CAUTION, findings_text, safe, table
from analysis_core.revision.motion import STILL
from analysis_core.revision.reconcile import Governing, LineChange, Reconciliation
from analysis_core.units import DisplayUnits

_EFFECTS = {
    "sagging": "moment",
    "hogging": "moment",
    "shear": "force",
    "deflection": "deflection",
    "reaction_max": "force",
    "reaction_min": "force",
}


def changes_text(found: Reconciliation, units: DisplayUnits) -> str:
    """Return the changes as tables in display units, largest first."""
    changed = [c for c in found.changes if c.state != "unchanged"]
    same = len(found.changes) - len(changed)
    head = (
        f"{safe(found.before.file)} to {safe(found.after.file)}: {len(changed)} lines changed, "
        f"{same} unchanged; {len(found.solved_again)} of {len(found.after.lines)} solved again."
    )
    parts = [head]
    if found.renamed:
        parts.append(f"{len(found.renamed)} elements have new GlobalIds and were matched by place.")
    if found.motion != STILL:
        parts.append(f"{found.motion.sentence()} Places are compared after that.")
    for old, new in found.storeys.items():
        parts.append(f"Storey '{safe(old)}' is called '{safe(new)}' now.")
    if changed:
        parts.append(_effects_table(changed, units))
        parts.append("\n".join(_reasons(change) for change in changed))
    parts += [findings_text(found.after.findings), CAUTION]
    return "\n\n".join(part for part in parts if part)


def changes_document(found: Reconciliation) -> dict[str, Any]:
    """Return the changes as plain data in SI."""
    return {
        "format": "spanledger-changes",
        "version": 1,
        "before": _model(found.before),
        "after": _model(found.after),
        "renamed": dict(found.renamed),
        "motion": {"turn": found.motion.turn, "shift": list(found.motion.shift)},
        "storeys": dict(found.storeys),
        "solved_again": list(found.solved_again),
        "changes": [_change(change) for change in found.changes],
    }


def changes_csv(found: Reconciliation, units: DisplayUnits) -> str:
    """Return the changes as CSV in display units, a row per line."""
    head = ["state", "line before", "line after", "reasons"]
    for name, quantity in _EFFECTS.items():
        label = f"{name.replace('_', ' ')} [{units.symbol(quantity)}]"
        head += [f"{label} before", f"{label} after", f"{label} change"]
    return csv_text([head, *(_csv_row(change, units) for change in found.changes)])


def _effects_table(changes: list[LineChange], units: DisplayUnits) -> str:
    head = ["line", "state"]
    below = ["", ""]
    for name, quantity in _EFFECTS.items():
        head += [name.replace("_", " "), "now"]
        below += [units.symbol(quantity)] * 2
    rows = []
    for change in changes:
        row = [_marks(change), change.state]
        for name, quantity in _EFFECTS.items():
            for effects in (change.effects_before, change.effects_after):
                row.append(
                    "-" if effects is None else units.number(getattr(effects, name), quantity)
                )
        rows.append(row)
    return table(head, below, rows)


def _reasons(change: LineChange) -> str:
    return "\n".join(
        [f"{_marks(change)} {change.state}", *(f"  {safe(reason)}" for reason in change.reasons)]
    )


def _marks(change: LineChange) -> str:
    before, after = ", ".join(change.before), ", ".join(change.after)
    if before == after or not before or not after:
        return safe(after or before)
    return safe(f"{before} -> {after}")


def _model(outcome: Any) -> dict[str, str]:
    return {
        "file": outcome.file,
        "schema": outcome.schema,
        "fingerprint": outcome.fingerprint,
    }


def _change(change: LineChange) -> dict[str, Any]:
    return {
        "state": change.state,
        "before": list(change.before),
        "after": list(change.after),
        "reasons": list(change.reasons),
        "moved": change.moved,
        "largest_relative_change": None if math.isinf(change.largest) else change.largest,
        "effects_before": _effects(change.effects_before),
        "effects_after": _effects(change.effects_after),
    }


def _effects(effects: Governing | None) -> dict[str, float] | None:
    if effects is None:
        return None
    return {name: getattr(effects, name) for name in _EFFECTS}


def _csv_row(change: LineChange, units: DisplayUnits) -> list[str | float | None]:
    row: list[str | float | None] = [
        change.state, ", ".join(change.before), ", ".join(change.after), "; ".join(change.reasons),
    ]  # fmt: skip
    for name, quantity in _EFFECTS.items():
        values = [
            None if e is None else units.value(getattr(e, name), quantity)
            for e in (change.effects_before, change.effects_after)
        ]
        before, after = values
        row += [*values, None if before is None or after is None else after - before]
    return row
