"""Which results that stand in a file still hold: told by fingerprints, without solving.

A line is *current* where every element of it carries results of the fingerprint that the line has
now, *stale* where some carry others (or none while others do), *not posted* where none does.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Literal

from analysis_core.ifc.posting.posted import Posted
from analysis_core.model import Line, LineModel
from analysis_core.revision.fingerprints import fingerprint
from analysis_core.revision.reasons import differences, places

State = Literal["current", "stale", "not posted"]
Entries = Mapping[str, Sequence[Posted]]

_NO_BASIS = "what the results depend on was not recorded with them, and has changed since"


@dataclass(frozen=True, slots=True)
class PostedState:
    """Whether the results of a line in the file hold; ``reasons`` say in sentences why not.

    ``computed_at``: when they were computed, as the file states it; empty where not posted.
    """

    state: State
    reasons: tuple[str, ...] = ()
    computed_at: str = ""


def posted_states(
    model: LineModel, bases: Mapping[str, Mapping[str, str]], posted: Entries
) -> dict[str, PostedState]:
    """Return the state of each line by its mark: ``bases`` as ``line_bases`` gives them."""
    return {line.mark: _state(line, bases[line.mark], posted, model.names) for line in model.lines}


def _state(
    line: Line, basis: Mapping[str, str], posted: Entries, names: Mapping[str, str]
) -> PostedState:
    own = fingerprint(basis)
    elements = [*dict.fromkeys(m.element for m in line.members if m.element)]
    found = {e: entry for e in elements if (entry := _entry(line.mark, own, posted.get(e, ())))}
    if not found:
        return PostedState("not posted")
    when = max(entry.computed_at for entry in found.values())
    reasons: dict[str, None] = {}
    for entry in found.values():
        if _print(entry) != own:
            joints = places(line, names)
            told = differences(entry.basis, basis, names, joints) if entry.basis else []
            reasons.update(dict.fromkeys(told or [_NO_BASIS]))
    reasons.update(
        {f"{names.get(e) or e} has no results": None for e in elements if e not in found}
    )
    return PostedState("stale" if reasons else "current", tuple(reasons), when)


def _entry(mark: str, own: str, entries: Sequence[Posted]) -> Posted | None:
    """What was posted for this line: of its fingerprint, else of its mark, else whatever it is.

    An element of several lines carries the results of each.
    """
    for entry in entries:
        if _print(entry) == own:
            return entry
    for entry in entries:
        if entry.mark == mark:
            return entry
    return entries[0] if len(entries) == 1 else None


def _print(entry: Posted) -> str:
    return entry.fingerprint or fingerprint(entry.basis)
