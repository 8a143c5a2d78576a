"""Choices of sections on the screen and as data."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any

from analysis_core.checking.choosing import Choice, Effect, Tried
from analysis_core.findings import listed
from analysis_core.report.tables import safe, table
from analysis_core.units import DisplayUnits

_MOST = 25  # rows of a table of candidates


def choices_text(choices: Sequence[Choice], units: DisplayUnits, table_file: str = "") -> str:
    """Return what was tried for each group of lines, what was chosen, and what it does.

    ``table_file``: the table that was chosen from, where it is none of the model or the job.
    """
    parts = [_one(choice, units) for choice in choices]
    chosen = [(mark, c.chosen) for c in choices if c.chosen != c.before and c.chosen
              for mark in c.marks]  # fmt: skip
    if chosen:
        options = " ".join(f"--section {_quoted(f'{mark}={name}')}" for mark, name in chosen)
        if table_file:
            options += f" --table {_quoted(table_file)}"
        parts.append(f"Nothing is changed yet. To apply: spanledger post MODEL -o OUT {options}")
    return "\n\n".join(parts)


def choices_data(choices: Sequence[Choice]) -> list[dict[str, Any]]:
    """Return the same as plain data, SI."""
    return [
        {
            "lines": list(c.marks), "before": c.before, "chosen": c.chosen or None,
            "mass_per_length": {"before": c.mass_before, "after": c.mass_after},
            "length": c.length, "reason": c.reason or None, "left_out": list(c.left_out),
            "tried": [
                {"name": t.name, "mass_per_length": t.mass, "use": _finite(t.use),
                 "deflection": t.deflection, "governed_by": t.governed_by, "suits": t.suits,
                 "reason": t.reason or None, "categories": list(t.categories),
                 "origin": t.origin}
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
    shown = choice.tried[-_MOST:]
    rows = [
        (safe(t.name), f"{t.mass:.1f}", _use(t.use), _deflection(t, units), safe(t.governed_by),
         _verdict(t))
        for t in shown
    ]  # fmt: skip
    head = ("candidate", "mass", "use", "deflection", "governed by", "")
    parts = [title]
    if choice.left_out:
        parts.append(
            f"Left out as made of another material ({len(choice.left_out)}): "
            f"{safe(listed(choice.left_out))}."
        )
    if len(choice.tried) > len(shown):
        hidden = len(choice.tried) - len(shown)
        parts.append(f"The {hidden} lightest did not suit and are not listed here; --json has all.")
    if not rows:
        return "\n".join([*parts, "There is nothing to choose from."])
    deflection = units.symbol("deflection")
    parts.append(table(head, ("", "kg/m", "", deflection, "", ""), rows))
    parts += [f"  {safe(t.name)}: {safe(t.reason)}" for t in shown if t.reason]
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


def _verdict(tried: Tried) -> str:
    if tried.suits:
        return "chosen"
    return safe(tried.reason.partition(":")[0]) or "too weak"


def _deflection(tried: Tried, units: DisplayUnits) -> str:
    return "-" if tried.deflection is None else units.number(tried.deflection, "deflection")


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
