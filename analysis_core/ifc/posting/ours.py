"""Which entities of a file are ours: told by name, whoever wrote the file last.

Property sets by the beginning of their name, objects by that of their ObjectType.  Everything
else of ours (properties, relations, loads, units) is only ever reached from these.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field

from analysis_core.ifc.posting.property_sets import PREFIX
from analysis_core.ifc.step.append import MODEL, RESULTS
from analysis_core.ifc.step.index import StepIndex
from analysis_core.ifc.step.tokens import reference
from analysis_core.ifc.step.values import decoded

RESULT_TYPE = "Spanledger_Result"
MODEL_TYPE = "Spanledger_Idealisation"
_NAME, _OBJECT_TYPE = 2, 4
_MENTION = re.compile(rb"'" + PREFIX.encode())


@dataclass(frozen=True, slots=True)
class Ours:
    """Our rooted entities by part (``append.RESULTS``, ``append.MODEL``): instance numbers.

    ``sets`` by number: the GlobalId and the name of each property set.
    """

    by_part: dict[str, set[int]]
    sets: dict[int, tuple[str, str]] = field(default_factory=dict)


def find_ours(index: StepIndex) -> Ours:
    """Return the entities of ours that a file holds."""
    ours = Ours({RESULTS: set(), MODEL: set()})
    seen: set[int] = set()
    for match in _MENTION.finditer(index.content):
        instance = index.instance_at(match.start())
        if instance is None or instance in seen:
            continue
        seen.add(instance)
        _sort_in(ours, index, instance)
    return ours


def _sort_in(ours: Ours, index: StepIndex, instance: int) -> None:
    keyword = index.kind(instance)
    attributes = index.arguments(instance)
    if keyword == "IFCPROPERTYSET":
        name = _text(attributes, _NAME)
        if name.startswith(PREFIX):
            ours.by_part[RESULTS].add(instance)
            ours.sets[instance] = _text(attributes, 0), name
        return
    kind = _text(attributes, _OBJECT_TYPE)
    if kind.startswith(MODEL_TYPE):
        ours.by_part[MODEL].add(instance)
    elif kind.startswith(RESULT_TYPE):
        ours.by_part[RESULTS].add(instance)


def related_elements(index: StepIndex, sets: dict[int, tuple[str, str]]) -> dict[int, set[int]]:
    """Return the elements that each of the property sets is given to."""
    elements: dict[int, set[int]] = {number: set() for number in sets}
    for number, referrers in index.referrers(sets).items():
        for relation in referrers:
            if index.kind(relation) == "IFCRELDEFINESBYPROPERTIES":
                related = index.arguments(relation)[4]
                found = map(reference, related) if isinstance(related, list) else ()
                elements[number].update(n for n in found if n is not None)
    return elements


def _text(attributes: list[object], place: int) -> str:
    token = attributes[place] if place < len(attributes) else ""
    return decoded(token) if isinstance(token, str) and token.startswith("'") else ""
