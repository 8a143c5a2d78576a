"""GlobalIds of our sets and their relations, clear of those that the file has.

They follow from the element and the set, so that posting twice gives the same.  A set that was
posted earlier and given another name by somebody is theirs now, and keeps its GlobalId: ours then
takes another.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from analysis_core.findings import Finding, listed
from analysis_core.ifc.global_ids import derived_ids, global_id
from analysis_core.ifc.step.index import StepIndex

# A property of each of our sets, in quotes: without them, none of our sets is in the file.
_TRACES = (b"'SaggingMomentPosition'", b"'MomentMax'", b"'IndependentCheck'", b"'Vertical'")


def set_ids(
    index: StepIndex, elements: Sequence[str], names: Sequence[str]
) -> tuple[dict[str, tuple[list[str], list[str]]], list[Finding]]:
    """Return the GlobalIds of each set and of its relation by the set's name, one per element.

    With a finding on sets that somebody has renamed.
    """
    purposes = [p for name in names for p in (name, f"{name}/relation")]
    ids = derived_ids(elements, purposes)
    renamed: dict[str, None] = {}
    if any(trace in index.content for trace in _TRACES):
        taken = index.rooted(g for found in ids.values() for g in found)
        for purpose, found in ids.items():
            for row, element in enumerate(elements):
                if found[row] in taken:
                    found[row] = _another(index, taken, f"{element}/{purpose}")
                    renamed[element] = None
    paired = {name: (ids[name], ids[f"{name}/relation"]) for name in names}
    return paired, [_renamed([*renamed])] if renamed else []


def _another(index: StepIndex, taken: Mapping[str, object], purpose: str) -> str:
    number = 2
    while (name := global_id(f"{purpose}/{number}")) in taken or index.rooted([name]):
        number += 1
    return name


def _renamed(elements: Sequence[str]) -> Finding:
    return Finding(
        "warning",
        "set-renamed",
        f"Sets of results that were posted earlier have been given other names on {len(elements)} "
        f"elements ({listed(elements)}). They stay as they are and are no longer updated; delete "
        f"them where they are not meant to keep an earlier state.",
        tuple(elements),
    )
