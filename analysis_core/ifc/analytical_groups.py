"""Load cases and combinations: who belongs to whom, and with what factor.

Grouping nests: combination, case, group, action.  A group's ``Coefficient`` multiplies what is
below it, the factor of an IfcRelAssignsToGroupByFactor what it assigns.  Self weight coefficients
are not multiplied by the case's own coefficient (IFC4, IfcStructuralLoadCase).
"""

from __future__ import annotations

import math
import re
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass, field
from typing import Any

from analysis_core.building import LoadCase, LoadCombination
from analysis_core.ifc import frames
from analysis_core.ifc.analytical_notes import MALFORMED, Notes, global_id, listed, name_of, titled
from analysis_core.ifc.frames import Frame
from analysis_core.model import LimitState, Nature

UNASSIGNED = "Not assigned to a load case"

# IfcActionSourceTypeEnum, and what the source means here: nature and category.
_SOURCES: dict[str, tuple[Nature, str]] = {
    "DEAD_LOAD_G": ("permanent", ""),
    "COMPLETION_G1": ("permanent", ""),
    "LIVE_LOAD_Q": ("imposed", ""),
    "SNOW_S": ("snow", ""),
    "WIND_W": ("wind", ""),
    "TEMPERATURE_T": ("temperature", ""),
    "SETTLEMENT_U": ("settlement", ""),
    "PRESTRESSING_P": ("permanent", "prestressing"),
    "SHRINKAGE": ("permanent", "shrinkage"),
    "CREEP": ("permanent", "creep"),
    "EARTHQUAKE_E": ("other", "seismic"),
    "FIRE": ("other", "accidental"),
    "IMPULSE": ("other", "accidental"),
    "IMPACT": ("other", "accidental"),
}
_TYPES: dict[str, tuple[Nature, str]] = {
    "PERMANENT_G": ("permanent", ""),
    "VARIABLE_Q": ("imposed", ""),
    "EXTRAORDINARY_A": ("other", "accidental"),
}
_SERVICE = re.compile(r"\b(sls|service\w*|characteristic|frequent|quasi\W?permanent)\b", re.I)
_STRENGTH = re.compile(r"\b(uls|als|ultimate|strength|accident\w*|seismic|fundamental)\b", re.I)
_DEEPEST_NESTING = 60


@dataclass(slots=True)
class Group:
    """A load group with what it holds: (entity number, factor of the relation)."""

    entity: Any
    members: list[tuple[int, float]] = field(default_factory=list)
    kind: str = ""


class GroupReader:
    """Reads the groups of a file into cases and combinations."""

    def __init__(self, file: Any, notes: Notes) -> None:
        self._notes = notes
        self._groups: dict[int, Group] = {}
        self._parents: dict[int, list[int]] = {}
        self._names: dict[int, str] = {}
        self._cases: dict[int, LoadCase] = {}
        self._collect(file)

    def read(
        self, actions: Iterable[int], frames_of: Mapping[int, Frame]
    ) -> tuple[list[LoadCase], list[LoadCombination], dict[int, list[tuple[str, float]]]]:
        """Return cases, combinations, and for each action its cases with factors.

        ``actions`` are the entity numbers of actions, ``frames_of`` the "global" system in
        which a case's self weight acts.
        """
        acting = set(actions)
        self._settle_kinds(acting)
        cases = [key for key, group in self._groups.items() if group.kind == "case"]
        for key in cases:
            self._names[key] = self._unique_name(key)
        found: dict[int, list[tuple[str, float]]] = {}
        for key in cases:
            self._cases[key] = self._case(key, frames_of)
            for action, factor in self._below(key, acting):
                found.setdefault(action, []).append((self._names[key], factor))
        combinations = [c for c in map(self._combination, self._tops()) if c is not None]
        combinations += self._direct(acting, found, combinations)
        extra = self._unassigned(acting, found)
        return [*self._cases.values(), *extra], _merged(combinations), found

    def _collect(self, file: Any) -> None:
        for entity in file.by_type("IfcStructuralLoadGroup"):
            self._groups[entity.id()] = Group(entity)
        for relation in file.by_type("IfcRelAssignsToGroup"):
            try:
                group = relation[6]
                if group is None or not group.is_a("IfcGroup"):
                    continue
                key = group.id()
                if key not in self._groups:
                    if group.is_a() != "IfcGroup":
                        continue  # a system, an analysis model, a result group
                    self._groups[key] = Group(group)
                factor = float(relation[7]) if len(relation) > 7 else 1.0
                for item in relation[4] or ():
                    self._groups[key].members.append((item.id(), factor))
                    self._parents.setdefault(item.id(), []).append(key)
            except MALFORMED as error:
                self._notes.malformed(relation, error)

    def _settle_kinds(self, acting: set[int]) -> None:
        """Decide which group is a case: as it says, else by what it holds and who holds it."""
        order = {"LOAD_CASE": "case", "LOAD_COMBINATION": "combination",
                 "LOAD_COMBINATION_GROUP": "combination"}  # fmt: skip
        for group in self._groups.values():
            stated = str(group.entity[5]) if len(group.entity) > 5 else ""
            group.kind = order.get(stated, "group")
        self._cut_circles()
        for key, group in self._groups.items():
            if group.kind != "group" or not self._topmost(key):
                continue
            below = self._all_below(key)
            if any(self._groups[k].kind == "case" for k in below if k in self._groups):
                # Only a load group has a factor; other groups are no combination.
                if group.entity.is_a("IfcStructuralLoadGroup"):
                    group.kind = "combination"
            elif acting.intersection(below):
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
        return all(self._groups[parent].kind == "combination" for parent in parents)

    def _all_below(self, key: int) -> set[int]:
        found: set[int] = set()
        todo = [key]
        while todo:
            for member, _ in self._groups[todo.pop()].members:
                if member not in found:
                    found.add(member)
                    if member in self._groups:
                        todo.append(member)
        return found

    def _cut_circles(self) -> None:
        """Drop the assignment that closes a circle of groups, with a finding."""
        state: dict[int, int] = {}

        def visit(start: int) -> None:
            stack: list[tuple[int, Iterator[tuple[int, float]]]] = [
                (start, iter(tuple(self._groups[start].members)))
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
                if child not in self._groups or state.get(child) == 2:
                    continue
                if state.get(child) == 1:
                    self._groups[key].members.remove(step)
                    self._parents[child].remove(key)
                    self._report_circle([k for k, _ in stack], child)
                    continue
                state[child] = 1
                stack.append((child, iter(tuple(self._groups[child].members))))

        for key in self._groups:
            if key not in state:
                visit(key)

    def _report_circle(self, path: list[int], closing: int) -> None:
        circle = path[path.index(closing) :]
        ids = [global_id(self._groups[key].entity) for key in circle]
        self._notes.add(
            "warning",
            "group-cycle",
            f"{len(circle)} groups contain each other in a circle ({listed(ids)}); the last "
            f"assignment, of the first to the last, was passed over. Correct the grouping.",
            ids,
        )

    def _below(self, key: int, acting: set[int]) -> list[tuple[int, float]]:
        """Return the actions below a case, with the product of all factors on the way."""
        result: dict[int, float] = {}
        todo: list[tuple[int, float, int]] = [(key, 1.0, 0)]
        while todo:
            here, factor, depth = todo.pop()
            own = factor * self._coefficient(here)
            for member, share in self._groups[here].members:
                if member in self._groups:
                    if depth < _DEEPEST_NESTING and self._groups[member].kind == "group":
                        todo.append((member, own * share, depth + 1))
                elif member in acting:
                    result[member] = result.get(member, 0.0) + own * share
        return list(result.items())

    def _coefficient(self, key: int) -> float:
        entity = self._groups[key].entity
        stated = entity[8] if len(entity) > 8 else None
        if stated is None:
            return 1.0
        value = float(stated)
        if not math.isfinite(value):
            return 1.0
        # A combination group of IFC2X3 is there for its factor; elsewhere one is unusual.
        if value != 1.0 and self._groups[key].kind != "combination":
            self._notes.add(
                "warning" if value == 0.0 else "note",
                "load-factor",
                f"{titled(entity)} has the coefficient {value:g}; what it holds was multiplied by "
                f"it.",
                (global_id(entity),),
            )
        return value

    def _unique_name(self, key: int) -> str:
        entity = self._groups[key].entity
        name = name_of(entity) or f"Load case #{key}"
        taken = {n.casefold() for n in self._names.values()}
        if name.casefold() not in taken:
            return name
        number = 2
        while f"{name} ({number})".casefold() in taken:
            number += 1
        self._notes.add(
            "note",
            "case-renamed",
            f"{titled(entity)} has the name of another load case; it is called "
            f"'{name} ({number})' here.",
            (global_id(entity),),
        )
        return f"{name} ({number})"

    def _case(self, key: int, frames_of: Mapping[int, Frame]) -> LoadCase:
        entity = self._groups[key].entity
        nature, category, source = _nature(entity)
        weight = None
        stated = entity[10] if len(entity) > 10 else None
        if stated is not None and len(stated) == 3 and any(stated):
            frame = frames_of.get(key)
            vector = (float(stated[0]), float(stated[1]), float(stated[2]))
            weight = frames.direction(frame, *vector) if frame is not None else vector
            if weight[2] > 0.0:
                self._notes.add(
                    "warning",
                    "self-weight-upward",
                    f"{titled(entity)} has self weight act upward ({weight[2]:g} along z). "
                    f"Downward is -1: correct its SelfWeightCoefficients.",
                    (global_id(entity),),
                )
        return LoadCase(self._names[key], nature, global_id(entity), category, weight, source)

    def _tops(self) -> list[int]:
        """Return the combinations, but not the parts of others (IFC2X3: combination groups)."""
        result = []
        for key, group in self._groups.items():
            if group.kind != "combination":
                continue
            parent_kinds = [self._groups[p].kind for p in self._parents.get(key, ())]
            part = (
                str(group.entity[5]) == "LOAD_COMBINATION_GROUP" and "combination" in parent_kinds
            )
            if not part:
                result.append(key)
        return result

    def _combination(self, key: int) -> LoadCombination | None:
        factors: dict[str, float] = {}
        todo: list[tuple[int, float, int]] = [(key, 1.0, 0)]
        while todo:
            here, factor, depth = todo.pop()
            own = factor * self._coefficient(here)
            for member, share in self._groups[here].members:
                if member in self._cases:
                    name = self._names[member]
                    factors[name] = factors.get(name, 0.0) + own * share
                elif member in self._groups and depth < _DEEPEST_NESTING:
                    todo.append((member, own * share, depth + 1))
        entity = self._groups[key].entity
        if not factors:
            self._notes.add(
                "warning",
                "empty-combination",
                f"{titled(entity)} holds no load case; it was left out.",
                (global_id(entity),),
            )
        order = [case.name for case in self._cases.values()]
        ordered = {name: factors[name] for name in sorted(factors, key=order.index)}
        return self._named_combination(entity, ordered) if factors else None

    def _named_combination(self, entity: Any, factors: Mapping[str, float]) -> LoadCombination:
        name = name_of(entity) or f"Combination #{entity.id()}"
        return LoadCombination(
            name, self._limit_state(entity, name), factors, global_id(entity), "model"
        )

    def _limit_state(self, entity: Any, name: str) -> LimitState:
        purpose = str(entity[9] or "") if len(entity) > 9 else ""
        for text in (purpose, name, str(entity[4] or ""), str(entity[3] or "")):
            if _STRENGTH.search(text):
                return "strength"
            if _SERVICE.search(text):
                return "serviceability"
        self._notes.add(
            "note",
            "limit-state-assumed",
            f"{titled(entity)} does not say which limit state it is for (Purpose 'ULS' or "
            f"'SLS'); it was taken for strength.",
            (global_id(entity),),
        )
        return "strength"

    def _direct(
        self,
        acting: set[int],
        found: dict[int, list[tuple[str, float]]],
        combinations: list[LoadCombination],
    ) -> list[LoadCombination]:
        """Put actions that stand in a combination without a case into a case of their own."""
        result = []
        for key, group in self._groups.items():
            direct = [(m, share) for m, share in group.members if m in acting]
            if group.kind != "combination" or not direct:
                continue
            entity = group.entity
            name = f"{name_of(entity) or f'#{key}'} (own actions)"
            self._cases[-key] = LoadCase(name, "other", global_id(entity), "", None, "model")
            self._notes.add(
                "warning",
                "action-in-combination",
                f"{titled(entity)} holds {len(direct)} actions directly, without a load case; "
                f"they were put into a case of their own, '{name}'.",
                (global_id(entity),),
            )
            for member, share in direct:
                found.setdefault(member, []).append((name, share))
            factor = self._coefficient(key)
            result += [
                LoadCombination(c.name, c.limit_state, {name: factor}, c.global_id, c.source)
                for c in combinations
                if c.global_id == global_id(entity)
            ]
        return result

    def _unassigned(
        self, acting: set[int], found: dict[int, list[tuple[str, float]]]
    ) -> list[LoadCase]:
        """Give actions without a group a case of their own: they are shown, not combined."""
        loose = sorted(acting.difference(found))
        for action in loose:
            found[action] = [(UNASSIGNED, 1.0)]
        return [LoadCase(UNASSIGNED, "other", source="default")] if loose else []


def _nature(entity: Any) -> tuple[Nature, str, str]:
    """Return nature, category and where they come from."""
    action_type = str(entity[6]) if len(entity) > 6 and entity[6] is not None else ""
    action_source = str(entity[7]) if len(entity) > 7 and entity[7] is not None else ""
    if action_source in _SOURCES:
        nature, category = _SOURCES[action_source]
        return nature, category, f"ActionSource {action_source}"
    if action_type in _TYPES:
        nature, category = _TYPES[action_type]
        return nature, category, f"ActionType {action_type}"
    return "other", "", ""


def _merged(combinations: Iterable[LoadCombination]) -> list[LoadCombination]:
    """Join what stands under one GlobalId, and tell combinations of the same name apart."""
    merged: dict[str, LoadCombination] = {}
    for each in combinations:
        known = merged.get(each.global_id)
        factors = dict(known.factors) if known else {}
        for name, factor in each.factors.items():
            factors[name] = factors.get(name, 0.0) + factor
        merged[each.global_id] = LoadCombination(
            each.name, each.limit_state, factors, each.global_id, each.source
        )
    names: set[str] = set()
    result = []
    for each in merged.values():
        name, number = each.name, 2
        while name in names:
            name, number = f"{each.name} ({number})", number + 1
        names.add(name)
        result.append(
            LoadCombination(name, each.limit_state, each.factors, each.global_id, each.source)
        )
    return result
