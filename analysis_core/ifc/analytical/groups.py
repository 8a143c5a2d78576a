"""Load cases and combinations: who belongs to whom, and with what factor.

Grouping nests: combination, case, group, action.  A group's ``Coefficient`` multiplies what is
below it, the factor of an IfcRelAssignsToGroupByFactor what it assigns.  Self weight coefficients
are not multiplied by the case's own coefficient (IFC4, IfcStructuralLoadCase).
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from dataclasses import replace
from typing import Any

from analysis_core.building import LoadCase, LoadCombination
from analysis_core.ifc.analytical.group_graph import GroupGraph
from analysis_core.ifc.analytical.notes import Notes, global_id, name_of, titled
from analysis_core.ifc.geometry import frames
from analysis_core.ifc.geometry.frames import WORLD, Frame
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


class GroupReader:
    """Reads the groups of a file into cases and combinations."""

    def __init__(self, file: Any, actions: Iterable[int], notes: Notes) -> None:
        self._notes = notes
        self._acting = set(actions)
        self._graph = GroupGraph(file, self._acting, notes)
        self._names: dict[int, str] = {}
        self._cases: dict[int, LoadCase] = {}

    def read(
        self, frames_of: Mapping[int, Frame]
    ) -> tuple[list[LoadCase], list[LoadCombination], dict[int, list[tuple[str, float]]]]:
        """Return cases, combinations, and for each action its cases with factors.

        ``frames_of`` are the "global" systems in which the self weight of a case acts.
        """
        cases = self._graph.of_kind("case")
        for key in cases:
            self._names[key] = self._unique_name(key)
        found: dict[int, list[tuple[str, float]]] = {}
        for key in cases:
            self._cases[key] = self._case(key, frames_of)
            for action, factor in self._graph.actions_below(key):
                found.setdefault(action, []).append((self._names[key], factor))
        combinations = []
        for key in self._graph.combinations():
            factors = self._factors(key)
            factors |= self._direct(key, found)
            combinations += self._combination(key, factors)
        extra = self._unassigned(found)
        return [*self._cases.values(), *extra], _told_apart(combinations), found

    def _unique_name(self, key: int) -> str:
        entity = self._graph.groups[key].entity
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
        entity = self._graph.groups[key].entity
        nature, category, source = _nature(entity)
        weight = None
        stated = entity[10] if len(entity) > 10 else None
        if isinstance(stated, tuple) and len(stated) == 3 and any(stated):
            frame = frames_of.get(key, WORLD)
            weight = frames.direction(frame, *(float(value) for value in stated))
            if weight[2] > 0.0:
                self._notes.add(
                    "warning",
                    "self-weight-upward",
                    f"{titled(entity)} has self weight act upward ({weight[2]:g} along z). "
                    f"Downward is -1: correct its SelfWeightCoefficients.",
                    (global_id(entity),),
                )
        return LoadCase(self._names[key], nature, global_id(entity), category, weight, source)

    def _factors(self, key: int) -> dict[str, float]:
        """Return the factors of the cases below a combination, nested groups multiplied out."""
        factors: dict[str, float] = {}
        todo: list[tuple[int, float, int]] = [(key, 1.0, 0)]
        while todo:
            here, factor, depth = todo.pop()
            own = factor * self._graph.coefficient(here)
            for member, share in self._graph.groups[here].members:
                if member in self._cases:
                    name = self._names[member]
                    factors[name] = factors.get(name, 0.0) + own * share
                elif member in self._graph.groups and depth < _DEEPEST_NESTING:
                    todo.append((member, own * share, depth + 1))
        order = list(self._names.values())
        return {name: factors[name] for name in sorted(factors, key=order.index)}

    def _combination(self, key: int, factors: Mapping[str, float]) -> list[LoadCombination]:
        entity = self._graph.groups[key].entity
        if not factors:
            self._notes.add(
                "warning",
                "empty-combination",
                f"{titled(entity)} holds no load case; it was left out.",
                (global_id(entity),),
            )
            return []
        name = name_of(entity) or f"Combination #{entity.id()}"
        limit_state = self._limit_state(entity, name)
        return [LoadCombination(name, limit_state, factors, global_id(entity), "model")]

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

    def _direct(self, key: int, found: dict[int, list[tuple[str, float]]]) -> dict[str, float]:
        """Put actions that stand in a combination without a case into a case of their own."""
        group = self._graph.groups[key]
        direct = [(member, share) for member, share in group.members if member in self._acting]
        if not direct:
            return {}
        entity = group.entity
        name = f"{name_of(entity) or f'#{key}'} (own actions)"
        self._cases[-key] = LoadCase(name, "other", global_id(entity), "", None, "model")
        self._notes.add(
            "warning",
            "action-in-combination",
            f"{titled(entity)} holds {len(direct)} actions directly, without a load case; they "
            f"were put into a case of their own, '{name}'.",
            (global_id(entity),),
        )
        for member, share in direct:
            found.setdefault(member, []).append((name, share))
        return {name: self._graph.coefficient(key)}

    def _unassigned(self, found: dict[int, list[tuple[str, float]]]) -> list[LoadCase]:
        """Give actions without a group a case of their own: they are shown, not combined."""
        loose = sorted(self._acting.difference(found))
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


def _told_apart(combinations: Iterable[LoadCombination]) -> list[LoadCombination]:
    """Number combinations of the same name."""
    names: set[str] = set()
    result = []
    for each in combinations:
        name, number = each.name, 2
        while name in names:
            name, number = f"{each.name} ({number})", number + 1
        names.add(name)
        result.append(replace(each, name=name))
    return result
