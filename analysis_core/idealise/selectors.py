"""Choosing elements by what a job file says about them: GlobalId, name, class, type and so on."""

from __future__ import annotations

from collections.abc import Iterable
from fnmatch import fnmatchcase

from analysis_core.building import Area, AxisMember, Carrier, Connection
from analysis_core.idealise.draft import Draft
from analysis_core.idealise.log import Log
from analysis_core.settings import Selector

Chosen = AxisMember | Carrier | Connection | Area
_CLASS_SUFFIX = "standardcase"


class Chooser:
    """Tells whether a selector chooses an element, and remembers which selectors never did."""

    def __init__(self) -> None:
        self._marks: dict[str, tuple[str, ...]] = {}
        self._storeys: dict[str, str] = {}
        self._used: dict[str, bool] = {}
        self._selectors: dict[str, Selector] = {}

    def know(self, drafts: Iterable[Draft]) -> None:
        """Learn the marks of the lines in which members lie, and their storeys."""
        for draft in drafts:
            for element in draft.elements:
                self._marks[element] = (*self._marks.get(element, ()), draft.mark)
                if draft.storey:
                    self._storeys[element] = draft.storey

    def chooses(self, selector: Selector, element: Chosen, *, where: str) -> bool:
        """Return whether ``selector`` chooses ``element``; ``where`` names it in a finding."""
        self._used.setdefault(where, False)
        self._selectors[where] = selector
        key = element.global_id
        if not matches(selector, element, self._marks.get(key, ()), self._storeys.get(key, "")):
            return False
        self._used[where] = True
        return True

    def fits_line(self, selector: Selector, mark: str) -> bool:
        """Return whether a line of this mark is meant, where the selector names lines."""
        return _fits(selector.line, mark)

    def report_unused(self, log: Log) -> None:
        """Write a finding for every selector that chose nothing."""
        for where, used in self._used.items():
            if used:
                continue
            log.add(
                "warning",
                "selector-matches-nothing",
                f"{where} in the job file chooses elements by {described(self._selectors[where])}; "
                f"nothing in the model matches, so it has no effect. `survey` lists names, "
                f"classes and GlobalIds.",
            )


def matches(
    selector: Selector, element: Chosen, marks: Iterable[str] = (), storey: str = ""
) -> bool:
    """Return whether every pattern that the selector states fits the element.

    ``marks`` and ``storey`` are those of its lines; a storey of its own comes first.
    """
    if selector.global_ids and element.global_id not in selector.global_ids:
        own = getattr(element, "element", None)  # the physical element that it stands for
        if own is None or own not in selector.global_ids:
            return False
    if not _fits(selector.name, element.name):
        return False
    if selector.type_name and not _fits(selector.type_name, getattr(element, "type_name", "")):
        return False
    if selector.material:
        material = getattr(element, "material", None)
        if not _fits(selector.material, material.name if material else ""):
            return False
    if selector.storey and not _fits(selector.storey, getattr(element, "storey", None) or storey):
        return False
    if selector.ifc_class and not _fits_class(selector.ifc_class, element):
        return False
    return not selector.line or any(_fits(selector.line, mark) for mark in marks)


def described(selector: Selector) -> str:
    """Return what a selector asks for, for messages."""
    parts = []
    if selector.global_ids:
        parts.append(f"GlobalId {', '.join(selector.global_ids)}")
    for label, pattern in (
        ("name", selector.name),
        ("class", selector.ifc_class),
        ("type", selector.type_name),
        ("material", selector.material),
        ("storey", selector.storey),
        ("line", selector.line),
    ):
        if pattern:
            parts.append(f"{label} '{pattern}'")
    return " and ".join(parts) or "nothing in particular"


def _fits(pattern: str, text: str) -> bool:
    return not pattern or fnmatchcase(text.casefold(), pattern.casefold())


def _fits_class(pattern: str, element: Chosen) -> bool:
    name = getattr(element, "ifc_class", "IfcStructuralPointConnection")
    plain = name.casefold().removesuffix(_CLASS_SUFFIX)
    return _fits(pattern, name) or fnmatchcase(plain, pattern.casefold())
