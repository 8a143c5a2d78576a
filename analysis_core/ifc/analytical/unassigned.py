"""Members and nodes that stand beside the analysis models of a file instead of in one.

The standard puts an item into a model by IfcRelAssignsToGroup.  An item that was left out of the
model may be a remnant, or the assignment may be what was forgotten; the file does not say which.
It is analysed like the others, and named.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from analysis_core.findings import listed
from analysis_core.ifc.analytical.notes import MALFORMED, Notes, global_id, is_kind, name_of

_PLURALS = {
    "IfcStructuralCurveMember": "curve members",
    "IfcStructuralSurfaceMember": "surface members",
    "IfcStructuralPointConnection": "point connections",
}


def report_unassigned(file: Any, models: Sequence[Any], notes: Notes) -> None:
    """Name the items that belong to none of these models, where there are models at all."""
    if not models:
        return
    assigned = _assigned(file, models)
    for ifc_class, plural in _PLURALS.items():
        left = [item for item in file.by_type(ifc_class) if item.id() not in assigned]
        if left:
            ids = [global_id(item) for item in left]
            titles = listed(f"'{name_of(item)}' {global_id(item)}" for item in left)
            notes.add(
                "warning",
                "item-outside-models",
                f"{len(ids)} {plural} are assigned to no analysis model ({titles}). They were "
                f"read like the others: assign them (IfcRelAssignsToGroup), or delete them if they "
                f"are left over.",
                ids,
            )


def _assigned(file: Any, models: Sequence[Any]) -> set[int]:
    """Entity numbers of all that belongs to the models: through groups, and as parts of wholes."""
    below: dict[int, list[int]] = {}
    for relation in file.by_type("IfcRelAssignsToGroup"):
        _note_below(below, relation, whole=6, parts=4)
    for relation in file.by_type("IfcRelAggregates"):
        _note_below(below, relation, whole=4, parts=5)
    theirs = {model.id() for model in models}
    # A partial model that we posted holds what has results, assigned by the file or not.
    found = {m.id() for m in file.by_type("IfcStructuralAnalysisModel")} - theirs
    waiting = [*theirs]
    while waiting:
        number = waiting.pop()
        if number not in found:
            found.add(number)
            waiting += below.get(number, ())
    return found


def _note_below(below: dict[int, list[int]], relation: Any, *, whole: int, parts: int) -> None:
    try:
        if is_kind(relation[whole], "IfcObject"):
            items = [item.id() for item in relation[parts] or () if item is not None]
            below.setdefault(relation[whole].id(), []).extend(items)
    except MALFORMED:
        return  # the group reader reports it
