"""The elements that results belong to, found in a file by GlobalId."""

from __future__ import annotations

from collections.abc import Mapping

from analysis_core.findings import Finding
from analysis_core.ifc.schema_classes import is_a
from analysis_core.ifc.step.index import StepIndex


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
            if is_a(index.schema, index.kind(number), "IfcObject")
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
