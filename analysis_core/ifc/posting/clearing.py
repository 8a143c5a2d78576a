"""Before posting: what we posted earlier and now replace is taken out of the file.

Usually that is our whole block, cut out as bytes.  Only some lines are posted: the others keep
theirs.  Another program rewrote the file: our entities are found by name and taken out one by
one.
"""

from __future__ import annotations

from collections.abc import Callable, Collection, Mapping
from dataclasses import dataclass, field
from typing import Literal

from analysis_core.ifc.posting.ours import Ours, find_ours, related_elements
from analysis_core.ifc.posting.property_sets import PREFIX
from analysis_core.ifc.posting.set_contents import SetContents, contents_in_block, contents_in_file
from analysis_core.ifc.step.append import MODEL, RESULTS, cut_block
from analysis_core.ifc.step.excise import excise
from analysis_core.ifc.step.index import StepIndex
from analysis_core.ifc.step.tokens import reference

Path = Literal["append", "general"]


@dataclass(frozen=True, slots=True)
class Retained:
    """What stays while its group is written anew, by the group's GlobalId.

    ``members`` are assigned to the group, ``results`` are the result groups of a partial model.
    """

    members: Mapping[str, tuple[int, ...]] = field(default_factory=dict)
    results: Mapping[str, tuple[int, ...]] = field(default_factory=dict)


@dataclass(frozen=True, slots=True)
class Cleared:
    """``base``: the file to add to; ``kept``: lines of our block that stay in it, ``replaced``
    those that went as a whole.

    ``before``: the property sets that were taken out.
    """

    base: bytes
    kept: bytes = b""
    replaced: bytes = b""
    path: Path = "append"
    before: SetContents = field(default_factory=SetContents)
    retained: Retained = field(default_factory=Retained)


def cleared_of_all(data: bytes, kind: str = RESULTS) -> Cleared:
    """Return the file without everything of ours of one kind."""
    cut = cut_block(data, kind)
    if cut is not None and cut.intact:
        before = contents_in_block(cut.block) if kind == RESULTS else SetContents()
        if not _mentions(cut.base):
            return Cleared(cut.base, replaced=cut.block, before=before)
        index = StepIndex(cut.base)
        ours = find_ours(index)
        if not ours.by_part[kind]:
            return Cleared(cut.base, replaced=cut.block, before=before)
        # A block, and sets of ours outside it: somebody has copied them.
        before = before | contents_in_file(index, ours.sets)
        return Cleared(excise(index, ours.by_part[kind]), path="general", before=before)
    if not _mentions(data):
        return Cleared(data)
    index = StepIndex(data)
    ours = find_ours(index)
    if not ours.by_part[kind] and cut is None:
        return Cleared(data)
    base = excise(index, ours.by_part[kind], marks_of=kind)
    before = contents_in_file(index, ours.sets) if kind == RESULTS else SetContents()
    return Cleared(base, path="general", before=before)


def cleared_of_some(
    data: bytes,
    wanted: Collection[tuple[str, str]],
    objects: Collection[str],
    groups_of: Callable[[StepIndex], Collection[str]],
) -> Cleared:
    """Return the file without what is written anew; the results of other lines stay.

    ``wanted``: (GlobalId of the element, name of the set); ``objects``: GlobalIds of reactions;
    ``groups_of`` gives those of the groups that hold them.
    """
    if not _mentions(data):
        return Cleared(data)
    index = StepIndex(data)
    ours = find_ours(index)
    doomed, rewritten = _replaced_sets(index, ours, wanted)
    before = contents_in_file(index, {number: ours.sets[number] for number in doomed})
    groups = groups_of(index)
    rooted = index.rooted([*objects, *groups])
    doomed |= _of_ours(ours, rooted, [*objects, *groups])
    retained = Retained(
        _left(groups, rooted, lambda n: _members(index, n) - doomed),
        _left(groups, rooted, lambda n: _results(index, n) - doomed),
    )
    outside = cut_block(data, RESULTS)
    left = excise(index, doomed, rewritten=rewritten)
    cut = cut_block(left, RESULTS)
    base, kept = (cut.base, cut.block) if cut is not None else (left, b"")
    untouched = outside.base == base if outside is not None else not doomed
    path: Path = "append" if untouched else "general"
    return Cleared(base, kept, path=path, before=before, retained=retained)


def removed(data: bytes) -> tuple[bytes, int, Path]:
    """Return the file without anything of ours, the number of sets taken out, and the path."""
    results = cleared_of_all(data, RESULTS)
    model = cleared_of_all(results.base, MODEL)
    general = "general" in (results.path, model.path)
    return model.base, len(results.before), "general" if general else "append"


def _replaced_sets(
    index: StepIndex, ours: Ours, wanted: Collection[tuple[str, str]]
) -> tuple[set[int], dict[int, list[object]]]:
    """Our sets that are written anew, and relations that lose only some of their elements."""
    rooted = index.rooted({element for element, _ in wanted})
    names = {n: element for element, numbers in rooted.items() for n in numbers}
    doomed: set[int] = set()
    rewritten: dict[int, list[object]] = {}
    for number, elements in related_elements(index, ours.sets).items():
        _, name = ours.sets[number]
        replaced = {e for e in elements if (names.get(e, ""), name) in wanted}
        if replaced == elements and elements:
            doomed.add(number)
        elif replaced:
            for relation in index.referrers([number])[number]:
                attributes = index.arguments(relation)
                if isinstance(attributes[4], list):
                    attributes[4] = [t for t in attributes[4] if reference(t) not in replaced]
                    rewritten[relation] = attributes
    return doomed, rewritten


def _of_ours(ours: Ours, rooted: Mapping[str, list[int]], global_ids: Collection[str]) -> set[int]:
    found = {number for g in global_ids for number in rooted.get(g, ())}
    return found & ours.by_part[RESULTS]


def _left(
    groups: Collection[str],
    rooted: Mapping[str, list[int]],
    find: Callable[[int], set[int]],
) -> dict[str, tuple[int, ...]]:
    return {g: tuple(sorted(find(n))) for g in groups for n in rooted.get(g, ())}


def _results(index: StepIndex, group: int) -> set[int]:
    """The result groups of an analysis model."""
    if index.kind(group) != "IFCSTRUCTURALANALYSISMODEL":
        return set()
    results = index.arguments(group)[8]
    found = map(reference, results) if isinstance(results, list) else ()
    return {n for n in found if n is not None}


def _members(index: StepIndex, group: int) -> set[int]:
    """What is assigned to a group."""
    members: set[int] = set()
    for relation in index.referrers([group]).get(group, ()):
        if index.kind(relation) == "IFCRELASSIGNSTOGROUP":
            related = index.arguments(relation)[4]
            found = map(reference, related) if isinstance(related, list) else ()
            members.update(n for n in found if n is not None)
    return members - {group}


def _mentions(data: bytes) -> bool:
    return b"'" + PREFIX.encode() in data
