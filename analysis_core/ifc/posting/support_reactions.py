"""What each supporting element receives from the lines that bear on it."""

from __future__ import annotations

import math
from collections.abc import Container, Iterable
from dataclasses import dataclass, field

from analysis_core.ifc.posting.governing import STRENGTH, tied_elements
from analysis_core.ifc.posting.property_sets import REACTIONS, SetWriter
from analysis_core.ifc.step.values import LABEL_LENGTH, label, reals
from analysis_core.results import LineResult, Outcome, ReactionBounds, reaction_bounds

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
        by_joint = {r.joint: r for r in reaction_bounds(envelope)} if envelope is not None else {}
        for joint in result.line.joints:
            if joint.support is None or not joint.element:
                continue
            for element in filter(None, (joint.element, tied.get(joint.element))):
                entry = found.get(element)
                if entry is None:
                    entry = found[element] = SupportReactions(element)
                _add(entry, result, joint.id, by_joint.get(joint.id))
    return found


class ReactionsWriter:
    """Writes Spanledger_Reactions, all lines of a set by one format string.

    ``Vertical`` bounds the sum of all lines.  ``Horizontal`` and ``Moment`` are there where the
    support gives such a reaction at all.
    """

    def __init__(self, sets: SetWriter) -> None:
        self._sets = sets
        self._forms: dict[tuple[object, ...], str] = {}

    def write(self, found: SupportReactions) -> None:
        """Write the set of one element, if anything is known."""
        measures = self._sets.measures
        values: list[float] = []
        components = []
        for component in _COMPONENTS:
            bounds = found.total(component)
            if bounds is not None and (component == "Vertical" or any(bounds)):
                factor = measures.torque.factor if component == "Moment" else measures.force.factor
                values += (bounds[1] / factor, bounds[0] / factor)
                components.append(component)
        values += [value / measures.force.factor for value in found.cases.values()]
        if not values:
            return
        numbers = iter(reals(values))
        n = self._sets.lines.next
        filled: list[object] = []
        for _ in components:
            filled += (n, next(numbers), next(numbers))
            n += 1
        for text in numbers:
            filled += (n, text)
            n += 1
        own_id, relation_id, element = self._sets.ids(found.element, REACTIONS)
        filled += (n, own_id, *range(self._sets.lines.next, n), n + 1, relation_id, element, n)
        form = self._form(tuple(components), tuple(found.cases))
        self._sets.lines.add_text(form % tuple(filled), n + 2 - self._sets.lines.next)

    def _form(self, components: tuple[str, ...], cases: tuple[tuple[str, str], ...]) -> str:
        """The set with these properties; supports of one line mostly have the same."""
        form = self._forms.get((components, cases))
        if form is None:
            m, end = self._sets.measures, self._sets.bounded_end
            bodies = []
            for component in components:
                each = m.torque if component == "Moment" else m.force
                bodies.append(
                    f"IFCPROPERTYBOUNDEDVALUE('{component}',$,{each.kind}(%s),{each.kind}(%s),"
                    f"{each.unit}{end}"
                )
            for name in _names(cases):
                literal = label(name).replace("%", "%%")
                bodies.append(
                    f"IFCPROPERTYSINGLEVALUE({literal},$,{m.force.kind}(%s),{m.force.unit})"
                )
            references = ",".join(["#%d"] * len(bodies))
            form = self._sets.lines.form([*bodies, *self._sets.forms(REACTIONS, references)])
            self._forms[components, cases] = form
        return form


def _names(cases: Iterable[tuple[str, str]]) -> list[str]:
    """Names of properties, all different: "L1-01 / Dead"."""
    taken: dict[str, None] = dict.fromkeys(_COMPONENTS)
    for mark, case in cases:
        taken[_distinct(f"{mark} / {case}", taken)] = None
    return list(taken)[len(_COMPONENTS) :]


def _distinct(name: str, taken: Container[str]) -> str:
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
    bounds: ReactionBounds | None,
) -> None:
    mark = result.line.mark
    if bounds is not None:
        for component, low, high in zip(_COMPONENTS, bounds.lowest, bounds.highest, strict=True):
            by_line = entry.bounds.setdefault(component, {})
            before = by_line.get(mark, (0.0, 0.0))
            by_line[mark] = before[0] + low, before[1] + high
    if result.solution is not None:
        vertical = result.solution.reactions[:, joint, 1].tolist()
        for case, value in zip(result.solution.cases, vertical, strict=True):
            key = mark, case
            entry.cases[key] = entry.cases.get(key, 0.0) + value
