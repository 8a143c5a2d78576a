"""Relations of a file, each class walked once and spread to the elements by entity number."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any

from analysis_core.ifc.unreadable import READ_ERRORS

Grouped = dict[int, Any]


class Relations:
    """Types, materials, containers, wholes and parts of elements, by entity number.

    ``twice_contained`` lists elements (entity number) that several containers claim,
    ``unreadable`` relations whose attributes do not fit the standard.
    """

    def __init__(self, file: Any) -> None:
        self.type_of: Grouped = {}
        self.material_of: Grouped = {}
        self.container_of: Grouped = {}
        self.whole_of: Grouped = {}
        self.parts_of: dict[int, tuple[Any, ...]] = {}
        self.twice_contained: dict[int, list[Any]] = {}
        self.unreadable: list[Any] = []
        self._spread(file, "IfcRelDefinesByType", self.type_of)
        self._spread(file, "IfcRelAssociatesMaterial", self.material_of)
        self._contain(file)
        self._aggregate(file)

    def material(self, key: int) -> Any:
        """Return the material selected for an element: its own, else that of its type."""
        found = self.material_of.get(key)
        if found is None:
            type_ = self.type_of.get(key)
            if type_ is not None:
                found = self.material_of.get(type_.id())
        return found

    def container(self, element: Any) -> Any:
        """Return the spatial element that holds an element, or the whole it is part of."""
        here = element
        for _ in range(20):
            found = self.container_of.get(here.id())
            if found is not None:
                return found
            here = self.whole_of.get(here.id())
            if here is None:
                return None
        return None

    def storey_above(self, spatial: Any) -> Any:
        """Return the IfcBuildingStorey that a spatial element is or is part of, or None."""
        here = spatial
        for _ in range(20):
            if here is None or here.is_a("IfcBuildingStorey"):
                return here
            here = self.whole_of.get(here.id())
        return None

    def wholes(self, key: int) -> Iterable[Any]:
        """Yield the elements that an element is part of, nearest first."""
        here = self.whole_of.get(key)
        for _ in range(20):
            if here is None:
                return
            yield here
            here = self.whole_of.get(here.id())

    def _spread(self, file: Any, ifc_class: str, target: Grouped) -> None:
        for relation in file.by_type(ifc_class):
            try:
                related, relating = relation[4], relation[5]
                if relating is None or relating.id() == 0:
                    continue
                for item in related or ():
                    target.setdefault(item.id(), relating)
            except READ_ERRORS:
                self.unreadable.append(relation)

    def _contain(self, file: Any) -> None:
        for relation in file.by_type("IfcRelContainedInSpatialStructure"):
            try:
                related, relating = relation[4], relation[5]
                if relating is None:
                    continue
                for item in related or ():
                    key = item.id()
                    known = self.container_of.setdefault(key, relating)
                    if known.id() != relating.id():
                        self.twice_contained.setdefault(key, [known]).append(relating)
            except READ_ERRORS:
                self.unreadable.append(relation)

    def _aggregate(self, file: Any) -> None:
        for ifc_class in ("IfcRelAggregates", "IfcRelNests"):
            for relation in file.by_type(ifc_class):
                try:
                    whole, parts = relation[4], relation[5] or ()
                    if whole is None:
                        continue
                    for part in parts:
                        self.whole_of.setdefault(part.id(), whole)
                    known = self.parts_of.get(whole.id(), ())
                    self.parts_of[whole.id()] = known + tuple(parts)
                except READ_ERRORS:
                    self.unreadable.append(relation)
