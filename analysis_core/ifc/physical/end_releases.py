"""How authoring tools say in property sets that a beam's end is released or fixed.

The standard has no property for that in a physical model.  Only what cannot be misunderstood is
taken: a property named for the start or the end of the member and for its release or fixity, with
a value that says pinned or fixed, or a yes or no for bending about the strong axis.
"""

from __future__ import annotations

import math
import re
from typing import Any

from analysis_core.ifc.source import Source
from analysis_core.ifc.unreadable import text_of

_END = re.compile(r"^(start|begin|iend|jend|end)")
_TOPIC = re.compile(r"release|fixity|fixing|endcondition|endtype")
_BENDING = re.compile(r"(my|ryy?|rotationy|bendingy|momenty|bendingmoment|majoraxis)$")
_PINNED = {"pinned", "pin", "hinged", "hinge", "released", "bendingmoment", "simple"}
_FIXED = {"fixed", "rigid", "fullyfixed", "fullfixity", "continuous", "encastre"}

_WORDS = (b"elease", b"ELEASE", b"ixity", b"IXITY", b"ixing", b"IXING")

Ends = tuple[float | None, float | None]
NOT_STATED: Ends = (None, None)


def end_releases(source: Source) -> dict[int, Ends]:
    """Return rotational stiffness at start and end by entity number of the element.

    0 where released, infinite where fixed, None where not stated.
    """
    file = source.entities
    if not _may_state(source):
        return {}
    properties = {}
    for item in file.by_type("IfcPropertySingleValue"):
        name = text_of(item.get_argument(0))
        if "elease" in name.lower() or "ixity" in name.lower() or "ixing" in name.lower():
            meaning = _meaning(name, item.get_argument(2))
            if meaning is not None:
                properties[item.id()] = meaning
    if not properties:
        return {}
    found: dict[int, Ends] = {}
    for set_, ends in _sets(file, properties).items():
        for relation in file.get_inverse(file.by_id(set_)):
            if not relation.is_a("IfcRelDefinesByProperties"):
                continue
            for element in relation[4] or ():
                start, end = found.get(element.id(), NOT_STATED)
                found[element.id()] = (
                    ends[0] if start is None else start,
                    ends[1] if end is None else end,
                )
    return found


def _may_state(source: Source) -> bool:
    """Whether the words occur in the file at all: hardly any does, and properties are many."""
    return any(word in source.text.content for word in _WORDS)


def _sets(file: Any, properties: dict[int, tuple[int, float]]) -> dict[int, Ends]:
    sets: dict[int, list[float | None]] = {}
    for number, (end, stiffness) in properties.items():
        for owner in file.get_inverse(file.by_id(number)):
            if owner.is_a("IfcPropertySet"):
                sets.setdefault(owner.id(), [None, None])[end] = stiffness
    return {key: (ends[0], ends[1]) for key, ends in sets.items()}


def _meaning(name: str, value: Any) -> tuple[int, float] | None:
    """Which end (0 or 1) and its stiffness, None where it is not unmistakable."""
    plain = re.sub(r"[^a-z]", "", name.lower())
    which = _END.match(plain)
    if which is None or value is None:
        return None
    rest = plain[which.end() :]
    topic = _TOPIC.search(rest)
    if topic is None:
        return None
    end = 0 if which.group(1) in ("start", "begin", "iend") else 1
    content = value[0]
    if isinstance(content, bool):
        bending = _BENDING.search(rest[topic.end() :] or rest[: topic.start()])
        if bending is None or topic.group(0) != "release":
            return None
        return end, 0.0 if content else math.inf
    if isinstance(content, str):
        said = re.sub(r"[^a-z]", "", content.lower())
        if said in _PINNED:
            return end, 0.0
        if said in _FIXED:
            return end, math.inf
    return None
