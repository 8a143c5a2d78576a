"""What each supporting element receives from the lines that bear on it."""

from __future__ import annotations

import math
from dataclasses import dataclass, field

from analysis_core.ifc.posting.governing import STRENGTH, tied_elements
from analysis_core.ifc.posting.property_sets import REACTIONS, SetWriter
from analysis_core.ifc.step.values import LABEL_LENGTH
from analysis_core.results import LineResult, Outcome, ReactionEnvelope

Bounds = tuple[float, float]

_COMPONENTS = ("Vertical", "Horizontal", "Moment")


@dataclass(slots=True)
class SupportReactions:
    """Reactions at one element, all lines that it carries together: N, N, N·m.

    ``bounds`` by component and line mark over the strength combinations; ``cases`` the vertical
    force by (line mark, case).  A line that bears twice on the element (a wall along it, say)
    counts with the sum.
    """

    element: str
    bounds: dict[str, dict[str, Bounds]] = field(default_factory=dict)
    cases: dict[tuple[str, str], float] = field(default_factory=dict)

    def total(self, component: str) -> Bounds | None:
        """Return the sum over the lines: each at its own lowest or highest."""
        found = self.bounds.get(component)
        if not found:
            return None
        return math.fsum(b[0] for b in found.values()), math.fsum(b[1] for b in found.values())

    @property
    def lines(self) -> set[str]:
        """Marks of the lines that bear on the element."""
        marks = {mark for found in self.bounds.values() for mark in found}
        return marks | {mark for mark, _ in self.cases}

    @property
    def finite(self) -> bool:
        """Whether every value is a number that can be written."""
        numbers = [*self.cases.values()]
        numbers += [v for found in self.bounds.values() for b in found.values() for v in b]
        return all(map(math.isfinite, numbers))


def support_reactions(outcome: Outcome) -> dict[str, SupportReactions]:
    """Return the reactions of every supporting element, in the order of the lines.

    A building element that a node or member of an analysis model stands for has its reactions.
    """
    found: dict[str, SupportReactions] = {}
    tied = tied_elements(outcome.model.ties)
    for result in outcome.lines:
        if result.status != "balanced":
            continue
        envelope = result.envelopes.get(STRENGTH)
        by_joint = {r.joint: r for r in envelope.reactions} if envelope is not None else {}
        for joint in result.line.joints:
            if joint.support is None or not joint.element:
                continue
            for element in filter(None, (joint.element, tied.get(joint.element))):
                entry = found.get(element)
                if entry is None:
                    entry = found[element] = SupportReactions(element)
                _add(entry, result, joint.id, by_joint.get(joint.id))
    return found


def write_reactions(found: SupportReactions, sets: SetWriter) -> None:
    """Write Spanledger_Reactions, if anything is known.

    ``Vertical`` bounds the sum of all lines.  ``Horizontal`` and ``Moment`` are there where the
    support gives such a reaction at all.
    """
    m = sets.measures
    numbers = []
    for component in _COMPONENTS:
        bounds = found.total(component)
        if bounds is not None and (component == "Vertical" or any(bounds)):
            measure = m.torque if component == "Moment" else m.force
            numbers.append(sets.bounded(component, bounds, measure))
    taken: set[str] = set(_COMPONENTS)
    for (mark, case), value in found.cases.items():
        name = _distinct(f"{mark} / {case}", taken)
        taken.add(name)
        numbers.append(sets.single(name, value, m.force))
    if numbers:
        sets.add(found.element, REACTIONS, numbers)


def _distinct(name: str, taken: set[str]) -> str:
    """Return a name of permitted length that no other property of the set has."""
    short, number = name[:LABEL_LENGTH], 1
    while short in taken:
        number += 1
        tail = f" ({number})"
        short = name[: LABEL_LENGTH - len(tail)] + tail
    return short


def _add(
    entry: SupportReactions,
    result: LineResult,
    joint: int,
    envelope: ReactionEnvelope | None,
) -> None:
    mark = result.line.mark
    if envelope is not None:
        for component, low, high in (
            ("Vertical", envelope.vertical_min, envelope.vertical_max),
            ("Horizontal", envelope.horizontal_min, envelope.horizontal_max),
            ("Moment", envelope.moment_min, envelope.moment_max),
        ):
            by_line = entry.bounds.setdefault(component, {})
            before = by_line.get(mark, (0.0, 0.0))
            by_line[mark] = before[0] + float(low.value), before[1] + float(high.value)
    if result.solution is not None:
        vertical = result.solution.reactions[:, joint, 1].tolist()
        for case, value in zip(result.solution.cases, vertical, strict=True):
            key = mark, case
            entry.cases[key] = entry.cases.get(key, 0.0) + value
