"""Which line keeps which earlier mark, told by the elements that it shares with it."""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Mapping, Sequence

from analysis_core.idealise.draft import Draft


def renames(lines: Sequence[tuple[str, Sequence[str]]], known: Mapping[str, str]) -> dict[str, str]:
    """Return the mark that each line gets: ``lines`` are marks with the elements of each.

    ``known`` gives the earlier mark by GlobalId.  A line takes the mark that most of its elements
    had, if no other line has more claim to it; new lines get numbers that were not used.
    """
    claims = []
    for own, elements in lines:
        counts = Counter(known[e] for e in elements if e in known)
        claims += [(count, mark, own) for mark, count in counts.items()]
    found: dict[str, str] = {}
    given: set[str] = set()
    for _, mark, own in sorted(claims, key=lambda claim: (-claim[0], claim[1], claim[2])):
        if own not in found and mark not in given:
            found[own] = mark
            given.add(mark)
    taken = given | set(known.values())
    for own, _ in lines:
        if own not in found:
            found[own] = _free(own, taken)
            taken.add(found[own])
    return found


def keep_marks(drafts: Sequence[Draft], known: Mapping[str, str]) -> None:
    """Give drafts the marks that their elements had."""
    if not known:
        return
    new = renames([(draft.mark, draft.elements) for draft in drafts], known)
    for draft in drafts:
        draft.mark = new[draft.mark]


def _free(mark: str, taken: set[str]) -> str:
    """The mark itself, or the next number of its storey that was never used."""
    if mark not in taken:
        return mark
    stem, number = re.fullmatch(r"(.*?)(\d*)", mark).groups()  # type: ignore[union-attr]  # always
    width = max(len(number), 2)
    count = 1
    while f"{stem}{count:0{width}}" in taken:
        count += 1
    return f"{stem}{count:0{width}}"
