"""The groups of a file as a graph: who holds whom, with what factor, and what each group is."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass, field
from typing import Any

from analysis_core.findings import listed
from analysis_core.ifc.analytical.notes import MALFORMED, Notes, global_id, is_kind, titled

_DEEPEST_NESTING = 60
_KINDS = {
    "LOAD_CASE": "case",
    "LOAD_COMBINATION": "combination",
    "LOAD_COMBINATION_GROUP": "combination",  # IFC2X3: a part of a combination, with a factor
}


@dataclass(slots=True)
class Group:
    """A load group with what it holds: (entity number, factor of the relation)."""

    entity: Any
    members: list[tuple[int, float]] = field(default_factory=list)
    kind: str = ""


class GroupGraph:
    """Load groups and plain groups by entity number, free of circles.

    ``acting`` are the entity numbers of actions.
    """

    def __init__(self, file: Any, acting: set[int], notes: Notes) -> None:
        self._notes = notes
        self._acting = acting
        self.groups: dict[int, Group] = {}
        self._parents: dict[int, list[int]] = {}
        self._collect(file)
        self._cut_circles()
        self._settle_kinds()

    def of_kind(self, kind: str) -> list[int]:
        """Return the groups of a kind: "case", "combination" or "group"."""
        return [key for key, group in self.groups.items() if group.kind == kind]

    def combinations(self) -> list[int]:
        """Return the combinations, but not the parts of others (IFC2X3: combination groups)."""
        result = []
        for key, group in self.groups.items():
            if group.kind != "combination":
                continue
            parent_kinds = [self.groups[p].kind for p in self._parents.get(key, ())]
            part = (
                str(group.entity[5]) == "LOAD_COMBINATION_GROUP" and "combination" in parent_kinds
            )
            if not part:
                result.append(key)
        return result

    def actions_below(self, key: int) -> list[tuple[int, float]]:
        """Return the actions below a case, with the product of all factors on the way."""
        result: dict[int, float] = {}
        todo: list[tuple[int, float, int]] = [(key, 1.0, 0)]
        while todo:
            here, factor, depth = todo.pop()
            own = factor * self.coefficient(here)
            for member, share in self.groups[here].members:
                if member in self.groups:
                    if depth < _DEEPEST_NESTING and self.groups[member].kind == "group":
                        todo.append((member, own * share, depth + 1))
                elif member in self._acting:
                    result[member] = result.get(member, 0.0) + own * share
        return list(result.items())

    def coefficient(self, key: int) -> float:
        """Return the factor that a group puts on what it holds."""
        entity = self.groups[key].entity
        stated = entity[8] if len(entity) > 8 else None
        if stated is None:
            return 1.0
        try:
            value = float(stated)
        except MALFORMED as error:
            self._notes.malformed(entity, error)
            return 1.0
        if not math.isfinite(value):
            return 1.0
        # A combination group of IFC2X3 is there for its factor; elsewhere one is unusual.
        if value != 1.0 and self.groups[key].kind != "combination":
            self._notes.add(
                "warning" if value == 0.0 else "note",
                "load-factor",
                f"{titled(entity)} has the coefficient {value:g}; what it holds was multiplied by "
                f"it.",
                (global_id(entity),),
            )
        return value

    def _collect(self, file: Any) -> None:
        for entity in file.by_type("IfcStructuralLoadGroup"):
            self.groups[entity.id()] = Group(entity)
        for relation in file.by_type("IfcRelAssignsToGroup"):
            try:
                group = relation[6]
                if group is None or not is_kind(group, "IfcGroup"):
                    continue
                key = group.id()
                if key not in self.groups:
                    if group.is_a() != "IfcGroup":
                        continue  # a system, an analysis model, a result group
                    self.groups[key] = Group(group)
                factor = float(relation[7]) if len(relation) > 7 else 1.0
                for item in relation[4] or ():
                    self.groups[key].members.append((item.id(), factor))
                    self._parents.setdefault(item.id(), []).append(key)
            except MALFORMED as error:
                self._notes.malformed(relation, error)

    def _settle_kinds(self) -> None:
        """Decide which group is a case: as it says, else by what it holds and who holds it."""
        for group in self.groups.values():
            stated = str(group.entity[5]) if len(group.entity) > 5 else ""
            group.kind = _KINDS.get(stated, "group")
        for key, group in self.groups.items():
            if group.kind != "group" or not self._topmost(key):
                continue
            below = self._all_below(key)
            if any(self.groups[k].kind == "case" for k in below if k in self.groups):
                # Only a load group has a factor; other groups are no combination.
                if is_kind(group.entity, "IfcStructuralLoadGroup"):
                    group.kind = "combination"
            elif self._acting.intersection(below):
                group.kind = "case"
                self._notes.add(
                    "note",
                    "group-as-case",
                    f"{titled(group.entity)} holds actions and belongs to no load case; it was "
                    f"taken as a load case of its own.",
                    (global_id(group.entity),),
                )

    def _topmost(self, key: int) -> bool:
        """Whether a group is part of no case and of no other group, but at most combined."""
        parents = self._parents.get(key, ())
        return all(self.groups[parent].kind == "combination" for parent in parents)

    def _all_below(self, key: int) -> set[int]:
        found: set[int] = set()
        todo = [key]
        while todo:
            for member, _ in self.groups[todo.pop()].members:
                if member not in found:
                    found.add(member)
                    if member in self.groups:
                        todo.append(member)
        return found

    def _cut_circles(self) -> None:
        """Drop the assignment that closes a circle of groups, with a finding."""
        state: dict[int, int] = {}

        def visit(start: int) -> None:
            stack: list[tuple[int, Iterator[tuple[int, float]]]] = [
                (start, iter(tuple(self.groups[start].members)))
            ]
            state[start] = 1
            while stack:
                key, members = stack[-1]
                step = next(members, None)
                if step is None:
                    state[key] = 2
                    stack.pop()
                    continue
                child = step[0]
                if child not in self.groups or state.get(child) == 2:
                    continue
                if state.get(child) == 1:
                    self.groups[key].members.remove(step)
                    self._parents[child].remove(key)
                    self._report_circle([k for k, _ in stack], child)
                    continue
                state[child] = 1
                stack.append((child, iter(tuple(self.groups[child].members))))

        # From the top down, so that what hangs on the circle stays below its case.
        for key in sorted(self.groups, key=lambda k: (bool(self._parents.get(k)), k)):
            if key not in state:
                visit(key)

    def _report_circle(self, path: list[int], closing: int) -> None:
        circle = path[path.index(closing) :]
        ids = [global_id(self.groups[key].entity) for key in circle]
        self._notes.add(
            "warning",
            "group-cycle",
            f"{len(circle)} groups contain each other in a circle ({listed(ids)}); the last "
            f"assignment, of the first to the last, was passed over. Correct the grouping.",
            ids,
        )
