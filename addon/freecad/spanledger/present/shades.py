"""Classes by which lines are told apart in the 3D view, each with its own colour and stroke."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from analysis_core.results import LineResult, Outcome

from .listing import STATES, Row, governing
from .words import noop

PLAIN, BY_STATE, BY_CHANGE, BY_USE = "plain", "state", "change", "use"
WAYS = (PLAIN, BY_STATE, BY_CHANGE, BY_USE)
# Bits of a stroke, long to short; solid where every line is alike in this respect.
SOLID, LONG, SHORT, DOTS = 0xFFFF, 0xFFF0, 0xF0F0, 0xCCCC
CHANGES = (0.001, 0.05, 0.20)
USES = (0.5, 0.8, 1.0)


@dataclass(frozen=True, slots=True)
class Shade:
    """A class of lines: what it is, its colour by role, its stroke and width in pixels."""

    words: str
    role: str
    pattern: int = SOLID
    width: float = 2.5


_BY_STATE = {
    "needs a decision": Shade(noop("needs a decision"), "bad", DOTS, 3.5),
    "ready": Shade(noop("ready"), "faint", SHORT),
    "balanced": Shade(noop("balanced"), "line"),
    "stale": Shade(noop("stale"), "attention", LONG, 3.0),
    "posted": Shade(noop("posted"), "good", SOLID, 3.5),
}
_BY_CHANGE = (
    Shade(noop("unchanged"), "line"),
    Shade(noop("up to 5 %"), "deflection", LONG, 3.0),
    Shade(noop("up to 20 %"), "attention", SHORT, 3.5),
    Shade(noop("more than 20 %, or new"), "bad", DOTS, 4.0),
)
_BY_USE = (
    Shade(noop("up to half used"), "good"),
    Shade(noop("up to 80 % used"), "deflection", LONG, 3.0),
    Shade(noop("up to all used"), "attention", SHORT, 3.5),
    Shade(noop("more than all"), "bad", DOTS, 4.5),
    Shade(noop("not checked"), "faint", LONG, 2.0),
)


def shades(way: str) -> tuple[Shade, ...]:
    """Return the classes of a way to tell lines apart, for the legend."""
    if way == BY_STATE:
        return tuple(_BY_STATE[state] for state in STATES)
    return {BY_CHANGE: _BY_CHANGE, BY_USE: _BY_USE}.get(way, (Shade("", "line"),))


def shade_numbers(
    way: str, rows: Sequence[Row], outcome: Outcome, before: Outcome | None
) -> list[int]:
    """Return the class of every line, as a number into ``shades(way)``."""
    if way == BY_STATE:
        return [STATES.index(row.state) for row in rows]
    if way == BY_USE:
        return [_use_class(row.values[-1]) for row in rows]
    if way != BY_CHANGE or before is None:
        return [0] * len(rows)
    old = {result.line.mark: result for result in before.lines}
    return [_change_class(old.get(r.line.mark), r) for r in outcome.lines]


def largest_change(before: LineResult | None, after: LineResult) -> float:
    """Return the largest relative change of a governing effect; infinite for a new line."""
    if before is None:
        return float("inf")
    changes = [0.0]
    for a, b in zip(governing(before), governing(after), strict=True):
        if (a is None) != (b is None):
            return float("inf")
        if a is not None and b is not None and max(abs(a), abs(b)) > 0.0:
            # By size: a shear that governs at the other end of the line has the other sign.
            changes.append(abs(abs(a) - abs(b)) / max(abs(a), abs(b)))
    return max(changes)


def _use_class(use: float | None) -> int:
    return len(USES) + 1 if use is None else sum(use > limit for limit in USES)


def _change_class(before: LineResult | None, after: LineResult) -> int:
    change = largest_change(before, after)
    return sum(change > limit for limit in CHANGES)
