"""Choices of sections on the screen and as data."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any

from analysis_core.checking.choosing import Choice, Effect
from analysis_core.report.tables import safe, table
from analysis_core.units import DisplayUnits


def choices_text(choices: Sequence[Choice], units: DisplayUnits) -> str:
    """Return what was tried for each group of lines, what was chosen, and what it does."""
    parts = [_one(choice, units) for choice in choices]
    chosen = [(mark, c.chosen) for c in choices if c.chosen != c.before and c.chosen
              for mark in c.marks]  # fmt: skip
    if chosen:
        options = " ".join(f"--section {_quoted(f'{mark}={name}')}" for mark, name in chosen)
        parts.append(f"Nothing is changed yet. To apply: spanledger post MODEL -o OUT {options}")
    return "\n\n".join(parts)


def choices_data(choices: Sequence[Choice]) -> list[dict[str, Any]]:
    """Return the same as plain data, SI."""
    return [
        {
            "lines": list(c.marks), "before": c.before, "chosen": c.chosen or None,
            "mass_per_length": {"before": c.mass_before, "after": c.mass_after},
            "length": c.length, "reason": c.reason or None,
            "tried": [
                {"name": t.name, "mass_per_length": t.mass, "use": _finite(t.use),
                 "governed_by": t.governed_by, "suits": t.suits, "reason": t.reason or None}
                for t in c.tried
            ],
            "effects": [
                {"line": e.mark, "own": e.own,
                 "largest_reaction": {"before": e.reaction_before, "after": e.reaction_after},
                 "use": {"before": _finite(e.use_before), "after": _finite(e.use_after)}}
                for e in c.effects
            ],
        }
        for c in choices
    ]  # fmt: skip


def _one(choice: Choice, units: DisplayUnits) -> str:
    marks = ", ".join(map(safe, choice.marks))
    title = f"Lightest section for {marks} (now {safe(choice.before) or 'none'})"
    if choice.reason:
        return f"{title}\nNothing was tried: {safe(choice.reason)}."
    rows = [
        (safe(t.name), f"{t.mass:.1f}", _use(t.use), safe(t.governed_by),
         "chosen" if t.suits else safe(t.reason) or "too weak")
        for t in choice.tried
    ]  # fmt: skip
    head = ("candidate", "mass", "use", "governed by", "")
    parts = [title, table(head, ("", "kg/m", "", "", ""), rows)]
    if not choice.chosen:
        return "\n".join([*parts, "None of them suits."])
    if choice.chosen == choice.before:
        return "\n".join([*parts, f"{safe(choice.chosen)} stays: nothing lighter suits."])
    saved = (choice.mass_before - choice.mass_after) * choice.length
    word = "less" if saved >= 0.0 else "more"
    parts.append(
        f"{safe(choice.chosen)}: {choice.mass_after:.1f} kg/m instead of "
        f"{choice.mass_before:.1f} kg/m, {abs(saved):.0f} kg {word} over {choice.length:.2f} m."
    )
    if choice.effects:
        force = units.symbol("force")
        effects = [_effect(e, units) for e in choice.effects]
        parts.append(
            table(("line that changes", "largest reaction", "becomes", "use", "becomes"),
                  ("", force, force, "", ""), effects)
        )  # fmt: skip
    return "\n".join(parts)


def _effect(e: Effect, units: DisplayUnits) -> tuple[str, ...]:
    return (
        safe(e.mark) + (" (itself)" if e.own else ""),
        units.number(e.reaction_before, "force"), units.number(e.reaction_after, "force"),
        _use(e.use_before), _use(e.use_after),
    )  # fmt: skip


def _use(value: float | None) -> str:
    return "-" if value is None or not math.isfinite(value) else f"{value:.3f}"


def _finite(value: float | None) -> float | None:
    return value if value is not None and math.isfinite(value) else None


def _quoted(text: str) -> str:
    return '"' + safe(text).replace('"', '\\"') + '"'
