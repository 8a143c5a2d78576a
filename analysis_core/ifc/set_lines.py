"""Property sets as lines of the file: the set, its properties, its relation to the element."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from analysis_core.findings import Finding
from analysis_core.ifc.append import Lines
from analysis_core.ifc.global_ids import global_ids
from analysis_core.ifc.property_sets import PropertySet
from analysis_core.ifc.schema_classes import is_a
from analysis_core.ifc.step_index import StepIndex
from analysis_core.ifc.step_values import string


def set_name(made: PropertySet) -> str:
    """Return what the GlobalIds of a set and of its relation follow from."""
    return f"{made.element}/{made.name}"


def write_sets(
    sets: Sequence[PropertySet], elements: Mapping[str, int], lines: Lines, owner: str
) -> list[str]:
    """Add the sets to ``lines``; return their GlobalIds.  ``elements``: instances by GlobalId."""
    names = [set_name(made) for made in sets]
    set_ids = global_ids(names)
    relation_ids = global_ids(f"{name}/relation" for name in names)
    titles = {made.name: string(made.name) for made in sets}
    for made, set_id, relation_id in zip(sets, set_ids, relation_ids, strict=True):
        properties = lines.shared_list(made.properties)
        number = lines.add(f"IFCPROPERTYSET('{set_id}',{owner},{titles[made.name]},$,{properties})")
        lines.add(
            f"IFCRELDEFINESBYPROPERTIES('{relation_id}',{owner},$,$,"
            f"(#{elements[made.element]}),#{number})"
        )
    return set_ids


def find_elements(
    global_ids_wanted: Mapping[str, object], index: StepIndex
) -> tuple[dict[str, int], list[Finding]]:
    """Return the instance of each element by GlobalId, and findings on those that are not there.

    Where several entities share a GlobalId, the first object (not a relation or a set) is taken.
    """
    found: dict[str, int] = {}
    findings: list[Finding] = []
    rooted = index.rooted(global_ids_wanted)
    for global_id in global_ids_wanted:
        objects = [
            number
            for number in rooted.get(global_id, ())
            if is_a(index.schema, index.keyword(index.row(number)), "IfcObject")
        ]
        if objects:
            found[global_id] = objects[0]
        else:
            findings.append(_no_element(global_id))
        if len(objects) > 1:
            findings.append(_shared_id(global_id, len(objects)))
    return found, findings


def _no_element(global_id: str) -> Finding:
    return Finding(
        "warning",
        "element-not-in-file",
        f"The model holds no element with GlobalId {global_id!r}, so its results were not "
        f"written. Analyse the file that is posted to.",
        (global_id,),
    )


def _shared_id(global_id: str, count: int) -> Finding:
    return Finding(
        "warning",
        "shared-global-id",
        f"{count} elements share the GlobalId {global_id}; the results were written to the first "
        f"of them. Give each element a GlobalId of its own in the authoring tool.",
        (global_id,),
    )
