"""What stands in a file of results that were posted earlier: mark, fingerprint and its basis."""

from __future__ import annotations

import json
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from typing import Any

from analysis_core.ifc.posting.property_sets import EFFECTS, PREFIX, RECORD
from analysis_core.ifc.source import Source
from analysis_core.ifc.unreadable import READ_ERRORS

_TEXTS = ("LineMark", "Fingerprint", "Basis", "ComputedAt")


@dataclass(frozen=True, slots=True)
class Posted:
    """What was posted for an element as part of one line.

    ``mark`` is empty where the line could not be analysed, ``basis`` where none was recorded.
    """

    mark: str
    fingerprint: str
    basis: Mapping[str, str] = field(default_factory=dict)
    computed_at: str = ""


def read_posted(source: Source) -> dict[str, tuple[Posted, ...]]:
    """Return what was posted by GlobalId of the element: one entry for each of its lines.

    Empty, at the cost of a search through the bytes, where nothing was posted.
    """
    if not _mentioned(source):
        return {}
    texts: dict[str, dict[str, str]] = {}
    known: dict[int, tuple[str, str]] = {}
    for element, properties in _sets(source.entities):
        mine = texts.setdefault(element, {})
        for item in properties:
            key = item.id()
            if key not in known:  # the elements of a line share these properties
                known[key] = _text(item)
            name, text = known[key]
            if name in _TEXTS:
                mine[name] = text
    bases: dict[str, Any] = {}
    return {
        element: _entries(mine, bases) for element, mine in texts.items() if "Fingerprint" in mine
    }


def known_marks(posted: Mapping[str, tuple[Posted, ...]]) -> dict[str, str]:
    """Return the mark of each element that belonged to a single line."""
    return {
        element: entries[0].mark
        for element, entries in posted.items()
        if len(entries) == 1 and entries[0].mark
    }


def _mentioned(source: Source) -> bool:
    """Whether our sets are named in the file."""
    return f"'{PREFIX}".encode() in source.text.content


def _sets(file: Any) -> Iterator[tuple[str, tuple[Any, ...]]]:
    """Yield GlobalId and properties for each of our sets that an element has."""
    names: dict[int, tuple[Any, ...] | None] = {}
    for relation in file.by_type("IfcRelDefinesByProperties"):
        try:
            found = relation[5]
            for each in found if isinstance(found, tuple) else (found,):
                key = each.id()
                if key not in names:
                    ours = each.is_a("IfcPropertySet") and each[2] in (EFFECTS, RECORD)
                    names[key] = tuple(each[4] or ()) if ours else None
                properties = names[key]
                if properties:
                    yield from ((element[0], properties) for element in relation[4] or ())
        except READ_ERRORS:  # a relation that refers to nothing holds nothing of ours
            continue


def _text(item: Any) -> tuple[str, str]:
    if not item.is_a("IfcPropertySingleValue") or item[0] not in _TEXTS or item[2] is None:
        return "", ""
    return item[0], str(item[2][0])


def _entries(texts: Mapping[str, str], bases: dict[str, Any]) -> tuple[Posted, ...]:
    text = texts.get("Basis", "")
    if text not in bases:
        bases[text] = _data(text)
    data = bases[text]
    when = texts.get("ComputedAt", "")
    several = {m: _basis(b) for m, b in data.items() if isinstance(b, dict)}
    if not several:
        return (Posted(texts.get("LineMark", ""), texts["Fingerprint"], _basis(data), when),)
    analysed = texts.get("LineMark", "").split(", ")
    prints = texts["Fingerprint"].split("+")
    # Lines that are alike share a fingerprint, which is then written once.
    each = prints if len(prints) == len(several) else [""] * len(several)
    return tuple(
        Posted(mark if mark in analysed else "", print_, basis, when)
        for (mark, basis), print_ in zip(several.items(), each, strict=True)
    )


def _data(text: str) -> dict[str, Any]:
    try:
        data = json.loads(text) if text else {}
    except (ValueError, RecursionError):
        return {}
    return data if isinstance(data, dict) else {}


def _basis(data: Mapping[str, Any]) -> dict[str, str]:
    return {str(key): text for key, text in data.items() if isinstance(text, str)}
