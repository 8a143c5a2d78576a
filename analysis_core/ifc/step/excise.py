"""Takes entities out of a file, with what only they refer to; every other byte stays.

Relations that name a removed entity among others are rewritten without it; what would be left
of a relation with nobody goes too.  Nothing that others refer to is ever taken.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from analysis_core.ifc.schema_classes import is_a
from analysis_core.ifc.step.append import mark_spans
from analysis_core.ifc.step.index import StepIndex
from analysis_core.ifc.step.tokens import reference, rendered

_APPLICATION = "'Spanledger'"
_OWNER_CLASSES = frozenset(
    {
        "IFCOWNERHISTORY",
        "IFCPERSON",
        "IFCORGANIZATION",
        "IFCPERSONANDORGANIZATION",
        "IFCAPPLICATION",
    }
)


def excise(
    index: StepIndex,
    doomed: Iterable[int],
    *,
    marks_of: str = "",
    rewritten: Mapping[int, list[object]] | None = None,
) -> bytes:
    """Return the file without these entities.

    ``marks_of``: without the comments around our block of that kind too.  ``rewritten`` gives
    instances that stay with other attributes.
    """
    job = _Excision(index, set(doomed))
    for instance, attributes in (rewritten or {}).items():
        job.rewrite(instance, attributes)
    job.follow_up()
    job.follow_down()
    return job.result(marks_of)


class _Excision:
    def __init__(self, index: StepIndex, doomed: set[int]) -> None:
        self._index = index
        self._doomed = doomed
        self._rewritten: dict[int, str] = {}

    def follow_up(self) -> None:
        """Relations to what goes: rewrite them, or let them go as well."""
        fresh = set(self._doomed)
        while fresh:
            referrers = set().union(*self._index.referrers(fresh).values())
            fresh = {r for r in referrers - self._doomed if not self._spare(r)}
            self._doomed |= fresh
        for instance in self._doomed:
            self._rewritten.pop(instance, None)

    def follow_down(self) -> None:
        """What only removed entities refer to goes with them, rooted entities never."""
        fresh = set(self._doomed)
        while fresh:
            named = {n for i in fresh for n in self._index.references(i)} - self._doomed
            named = {n for n in named if n in self._index and self._may_go(n)}
            referrers = self._index.referrers(named)
            fresh = {n for n in named if referrers.get(n, set()) <= self._doomed}
            self._doomed |= fresh

    def rewrite(self, instance: int, attributes: list[object]) -> None:
        """Give an instance other attributes."""
        keyword = self._index.kind(instance)
        self._rewritten[instance] = f"#{instance}={keyword}{rendered(attributes)};"

    def result(self, marks_of: str) -> bytes:
        """Return the file without what goes."""
        data = self._index.data
        cuts: list[tuple[int, int, bytes]] = []
        for instance in self._doomed:
            cuts.append((*_whole_line(data, *self._index.span(instance)), b""))
        for instance, text in self._rewritten.items():
            cuts.append((*self._index.span(instance), text.encode("utf-8", "surrogateescape")))
        if marks_of:
            cuts += [(*span, b"") for span in mark_spans(data, self._index.comments, marks_of)]
        parts, at = [], 0
        for start, end, new in sorted(cuts):
            parts += [data[at:start], new]
            at = end
        return b"".join([*parts, data[at:]])

    def _spare(self, referrer: int) -> bool:
        """Note a referrer without what goes; False where it has to go itself."""
        attributes = self._index.arguments(referrer)
        relation = self._is_a(referrer, "IfcRelationship", unknown=False)
        for place, token in enumerate(attributes):
            if isinstance(token, list):
                kept = [t for t in token if reference(t) not in self._doomed]
                if len(kept) < len(token):
                    if not kept and relation:
                        return False
                    attributes[place] = kept or "$"
            elif reference(token) in self._doomed:
                if relation:
                    return False
                attributes[place] = "$"
        self.rewrite(referrer, attributes)
        return True

    def _may_go(self, instance: int) -> bool:
        keyword = self._index.kind(instance)
        if keyword in _OWNER_CLASSES:
            return self._is_our_owner(instance)
        return not self._is_a(instance, "IfcRoot", unknown=True)

    def _is_our_owner(self, instance: int) -> bool:
        """Whether an owner history, or a part of one, names our application."""
        waiting, seen = [instance], set()
        while waiting:
            number = waiting.pop()
            if number in seen or number not in self._index:
                continue
            seen.add(number)
            if _APPLICATION in self._index.text(number):
                return True
            waiting += self._index.references(number)
        return False

    def _is_a(self, instance: int, ancestor: str, *, unknown: bool) -> bool:
        """Whether an instance is of a class; ``unknown`` where the schema does not know its own."""
        keyword = self._index.kind(instance)
        return is_a(self._index.schema, keyword, ancestor, unknown=unknown)


def _whole_line(data: bytes, start: int, end: int) -> tuple[int, int]:
    """Widen a span to its line where nothing else stands on it."""
    first = start
    while first > 0 and data[first - 1] in b" \t":
        first -= 1
    if first > 0 and data[first - 1] not in b"\r\n":
        return start, end
    last = end
    while last < len(data) and data[last] in b" \t":
        last += 1
    if data[last : last + 2] == b"\r\n":
        return first, last + 2
    if data[last : last + 1] in (b"\n", b"\r"):
        return first, last + 1
    return start, end
