"""Decisions of the engineer as changes of the job file's text.

Each function takes the text and returns the changed one.  A decision about the same thing takes
the place of the one before, so that the file stays as short as what was decided.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from analysis_core.errors import JobError
from analysis_core.job.edit import (
    entries,
    stated,
    with_entry,
    with_replaced,
    with_value,
    without_entry,
)
from analysis_core.model import Line
from analysis_core.units import DisplayUnits, parse_quantity

from .words import noop

CONDITIONS = (noop("pinned"), noop("fixed"), noop("guided"), noop("free"))
SHAPES = (noop("uniform"), noop("point"), noop("moment"))
_QUANTITY = {"uniform": "line load", "point": "force", "moment": "moment"}
_SAME_PLACE = 1e-6  # m


@dataclass(frozen=True, slots=True)
class Where:
    """A place on an element: one of its ends, or ``at`` m from its start."""

    element: str
    end: str = ""
    at: float | None = None

    @property
    def keys(self) -> dict[str, Any]:
        """Return the place as the keys of a job file's entry."""
        if self.at is None:
            return {"on": {"id": self.element}, "end": self.end}
        return {"on": {"id": self.element}, "at": f"{self.at:.9g} m"}


def where_is(line: Line, joint: int) -> Where | None:
    """Return a place on an element that tells where a joint is; ends before places between."""
    found = [
        _place(line, member.id, at_end=at_end)
        for member in line.members
        for at_end, end in ((False, member.start), (True, member.end))
        if end == joint and member.element
    ]
    return min(found, key=lambda where: where.at is not None, default=None)


def end_of(line: Line, member: int, *, at_end: bool) -> Where | None:
    """Return the place of a member's own start or end on its element."""
    return _place(line, member, at_end=at_end) if line.members[member].element else None


def decide_support(text: str, where: Where, stiffness: Mapping[str, str] | str) -> str:
    """Hold a joint: by a condition of the trade, or by stiffness texts with units."""
    entry = dict(where.keys)
    if isinstance(stiffness, str):
        entry["condition"] = stiffness
    else:
        entry.update({key: value for key, value in stiffness.items() if value})
    return _decided(text, "supports", entry, ("on", "end", "at"))


def decide_release(text: str, where: Where, rotation: str) -> str:
    """Join a member's end: ``rotation`` is "rigid", "0 kN*m/rad" (released) or a stiffness."""
    entry = {**where.keys, "rotation": rotation}
    return _decided(text, "releases", entry, ("on", "end", "at"))


def decide_movement(text: str, support: str, case: str, down: str) -> str:
    """Move the support that an element gives, in a case."""
    entry = {"case": case, "on": {"id": support}, "down": down}
    return _decided(text, "movements", entry, ("case", "on"))


def decide_action(
    text: str,
    element: str,
    *,
    case: str,
    shape: str,
    value: str,
    at: str = "",
    start: str = "",
    end: str = "",
) -> str:
    """Put one more action on an element."""
    entry: dict[str, Any] = {"case": case, "on": {"id": element}, shape: value}
    for key, words in (("at", at), ("from", start), ("to", end)):
        if words:
            entry[key] = words
    return with_entry(text, "actions", entry)


def change_action(text: str, source: str, value: str) -> str:
    """Give an action of the job file another value; ``source`` is as in "actions[2]"."""
    index = action_index(source)
    entry = dict(entries(text, "actions")[index])
    shape = next(s for s in SHAPES if s in entry)
    entry[shape] = value
    return with_replaced(text, "actions", index, entry)


def drop_action(text: str, source: str) -> str:
    """Take an action of the job file out."""
    return without_entry(text, "actions", action_index(source))


def action_index(source: str) -> int:
    """Return the number of an action in the job file, -1 where it comes from the model."""
    if source.startswith("actions[") and source.endswith("]"):
        number = source.removeprefix("actions[").removesuffix("]")
        return int(number) if number.isdecimal() else -1
    return -1


def changeable_value(text: str, source: str) -> tuple[str, str] | None:
    """Return (shape, value) of an action that has a single value in the job file."""
    index = action_index(source)
    listed = entries(text, "actions")
    if not 0 <= index < len(listed):
        return None
    return next(((s, str(listed[index][s])) for s in SHAPES if s in listed[index]), None)


def decide_section(text: str, element: str, values: Mapping[str, str]) -> str:
    """State section values of an element, "inertia" say."""
    listed = entries(text, "sections")
    same = [i for i, e in enumerate(listed) if e.get("on") == {"id": element}]
    kept = dict(listed[same[-1]]) if same else {"on": {"id": element}}
    entry = {**kept, **{key: value for key, value in values.items() if value}}
    return _decided(text, "sections", entry, ("on",))


def decide_rules(text: str, name: str) -> str:
    """Take another rule set."""
    return with_value(text, "rules", "set", name)


def decide_redistribution(text: str, mark: str, part: str) -> str:
    """Redistribute a part of the support moments of a line; "0 %" takes it back."""
    typed = part.strip().replace(",", ".")
    number = typed.removesuffix("%").strip()
    try:
        share = float(number)
    except ValueError:
        raise JobError(f"'{part}' is no part of a moment; state one such as '15 %'.") from None
    target = {"line": mark}
    kept = [e for e in stated(text, "rules", "redistribution") or [] if e.get("on") != target]
    if share:
        kept.append({"on": target, "fraction": f"{number} %"})
    return with_value(text, "rules", "redistribution", kept)


def decide_nature(text: str, case: str, nature: str) -> str:
    """Say what kind of action a load case holds."""
    return _decided(text, "cases", {"name": case, "nature": nature}, ("name",))


def quantity_text(typed: str, quantity: str, units: DisplayUnits) -> str:
    """Return what was typed as text with a unit; a bare number is in the units on screen.

    Raises JobError in one sentence where it is no such quantity.
    """
    typed = typed.strip().replace(",", ".")
    shown = {"length": "length", "settlement": "deflection"}.get(quantity, quantity)
    kind = "length" if quantity == "settlement" else quantity
    try:
        float(typed)
    except ValueError:
        words = typed
    else:
        words = f"{typed} {units.symbol(shown)}"
    try:
        parse_quantity(words, kind)
    except ValueError as error:
        raise JobError(f"{str(error)[:1].upper()}{str(error)[1:]}.") from None
    return words


def action_quantity(shape: str) -> str:
    """Return the kind of quantity that an action of a shape has."""
    return _QUANTITY[shape]


def _place(line: Line, number: int, *, at_end: bool) -> Where:
    member = line.members[number]
    positions = [
        m.element_offset + (-s if m.reversed_ else s)
        for m in line.members
        if m.element == member.element
        for s in (0.0, m.length)
    ]
    s = member.length if at_end else 0.0
    position = member.element_offset + (-s if member.reversed_ else s)
    if abs(position) <= _SAME_PLACE:
        return Where(member.element, "start")
    if abs(position - max(positions)) <= _SAME_PLACE:
        return Where(member.element, "end")
    return Where(member.element, at=position)


def _decided(text: str, section: str, entry: dict[str, Any], target: tuple[str, ...]) -> str:
    """Replace the entry with the same target, or add one."""
    wanted = {key: entry.get(key) for key in target}
    for index, old in enumerate(entries(text, section)):
        if isinstance(old, dict) and {key: old.get(key) for key in target} == wanted:
            kept = {k: v for k, v in old.items() if k == "category"} | entry
            return with_replaced(text, section, index, kept)
    return with_entry(text, section, entry)
