"""What the search for the lightest section found: candidates, the choice, and its effects."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from analysis_core.report.tables import safe
from analysis_core.units import DisplayUnits

from .profiles import mass_text, origin_words
from .words import noop, say

if TYPE_CHECKING:
    from analysis_core.checking.choosing import Choice, Effect, Tried

COLUMNS = (
    noop("Candidate"), noop("Kind"), noop("Mass, kg/m"), noop("Use"), noop("Deflection"),
    noop("Governed by"), noop("Verdict"),
)  # fmt: skip
EFFECT_COLUMNS = (
    noop("Line"), noop("Largest reaction"), noop("becomes"), noop("Use"), noop("becomes"),
)  # fmt: skip
CHOSEN, TOO_WEAK, UNFIT = noop("lightest that suffices"), noop("too weak"), noop("not checked")
MOST = 200


@dataclass(frozen=True, slots=True)
class CandidateRow:
    """A candidate: its texts by column; ``reason`` in full where it could not be judged."""

    texts: tuple[str, ...]
    suits: bool
    reason: str = ""


@dataclass(frozen=True, slots=True)
class EffectRow:
    """What the choice does to a line; ``too_much``: its use grows beyond what is permitted."""

    mark: str
    texts: tuple[str, ...]
    own: bool
    too_much: bool


@dataclass(frozen=True, slots=True)
class ChoiceView:
    """One group of lines: the choice in a sentence, candidates (the best first), effects."""

    title: str
    summary: str
    rows: tuple[CandidateRow, ...]
    effects: tuple[EffectRow, ...]
    changes: bool
    """Whether there is something to apply."""
    warning: str = ""


def choice_view(choice: Choice, units: DisplayUnits) -> ChoiceView:
    """Return what is shown of a choice."""
    marks = ", ".join(map(safe, choice.marks[:6])) + (" …" if len(choice.marks) > 6 else "")
    tried = list(reversed(choice.tried))[:MOST]
    effects = tuple(_effect(e, units) for e in choice.effects)
    over = [row.mark for row in effects if row.too_much]
    return ChoiceView(
        title=marks,
        summary=_summary(choice),
        rows=tuple(_row(t, units) for t in tried),
        effects=effects,
        changes=bool(choice.chosen) and choice.chosen != choice.before,
        warning=say("The use of {lines} grows beyond 100 %.", lines=", ".join(over))
        if over
        else "",
    )


def total_words(choices: Sequence[Choice]) -> str:
    """Return how much lighter everything gets, in a sentence."""
    changed = [c for c in choices if c.chosen and c.chosen != c.before]
    if not changed:
        return say("Nothing lighter suffices; nothing would change.")
    saved = math.fsum((c.mass_before - c.mass_after) * c.length for c in changed)
    if saved < 0.0:
        return say("Sections that change: {count}; {mass} kg more in all.", count=len(changed),
                   mass=f"{-saved:.0f}")  # fmt: skip
    return say(
        "Sections that change: {count}; {mass} kg less in all.",
        count=len(changed),
        mass=f"{saved:.0f}",
    )


def _summary(choice: Choice) -> str:
    if choice.reason:
        return say("Nothing was tried: {reason}.", reason=safe(choice.reason))
    left = (
        " " + say("{count} of another material were left out.", count=len(choice.left_out))
        if choice.left_out
        else ""
    )
    if not choice.chosen:
        return say("None of {count} suffices.", count=len(choice.tried)) + left
    if choice.chosen == choice.before:
        return say("{section} stays: nothing lighter suffices.", section=safe(choice.before)) + left
    words = say(
        "{new} in place of {old}: {after} instead of {before} kg/m over {length} m.",
        new=safe(choice.chosen), old=safe(choice.before) or "–",
        after=mass_text(choice.mass_after), before=mass_text(choice.mass_before),
        length=f"{choice.length:.2f}",
    )  # fmt: skip
    return words + left


def _row(tried: Tried, units: DisplayUnits) -> CandidateRow:
    verdict = CHOSEN if tried.suits else UNFIT if tried.reason else TOO_WEAK
    deflection = "–"
    if tried.deflection is not None:
        deflection = units.text(tried.deflection, "deflection")
    return CandidateRow(
        (
            safe(tried.name),
            ", ".join(map(safe, tried.categories)) or origin_words(tried.origin),
            mass_text(tried.mass),
            _use(tried.use),
            deflection,
            say(safe(tried.governed_by)),
            say(verdict),
        ),
        tried.suits,
        safe(tried.reason),
    )


def _effect(effect: Effect, units: DisplayUnits) -> EffectRow:
    after = effect.use_after
    return EffectRow(
        effect.mark,
        (
            safe(effect.mark) + (" " + say("(itself)") if effect.own else ""),
            units.text(effect.reaction_before, "force"),
            units.text(effect.reaction_after, "force"),
            _use(effect.use_before),
            _use(after),
        ),
        effect.own,
        after is not None and after > 1.0 and (effect.use_before or 0.0) < after,
    )


def _use(value: float | None) -> str:
    return "–" if value is None or not math.isfinite(value) else f"{100.0 * value:.1f} %"
