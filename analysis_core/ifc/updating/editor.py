"""A model that is changed entity by entity, and put back into the bytes it came from.

Changed instances are written anew where they stood, new ones before the end of the data; every
other byte of the file stays.
"""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any

from analysis_core.errors import IfcWriteError
from analysis_core.ifc.global_ids import global_id
from analysis_core.ifc.source import Source
from analysis_core.ifc.step.index import StepIndex

_LARGEST_NUMBER = 2**31 - 1
# What refers to a shape without being part of the building: its style and its layer.
_LOOKS = ("IfcStyledItem", "IfcPresentationLayerAssignment")


class Editor:
    """Changes entities of a file and remembers which."""

    def __init__(self, source: Source) -> None:
        self.file: Any = source.file
        self.schema = source.schema
        self.units = source.units
        self._changed: dict[int, None] = {}
        self._new: dict[int, None] = {}
        self._ids = {entity[0] for entity in self.file.by_type("IfcRoot")}
        self._owner: Any = None

    @property
    def touched(self) -> bool:
        """Whether anything was changed."""
        return bool(self._changed or self._new)

    def set(self, entity: Any, attribute: str, value: Any) -> None:
        """Give an attribute of an entity another value."""
        setattr(entity, attribute, value)
        if entity.id() not in self._new:
            self._changed[entity.id()] = None

    def new(self, ifc_class: str, **attributes: Any) -> Any:
        """Add an entity; attributes that are not named stay unset."""
        entity = self.file.create_entity(ifc_class, **attributes)
        if entity.id() > _LARGEST_NUMBER:
            raise IfcWriteError(
                "The numbers of the entities in this file reach the limit of what programs read, "
                "so nothing can be added to it. Export the model again."
            )
        self._new[entity.id()] = None
        return entity

    def rooted(self, ifc_class: str, purpose: str, **attributes: Any) -> Any:
        """Add an entity with a GlobalId, which follows from its class and ``purpose``."""
        key, count = f"update/{ifc_class}/{purpose}", 0
        while (name := global_id(f"{key}/{count}")) in self._ids:
            count += 1
        self._ids.add(name)
        return self.new(ifc_class, GlobalId=name, OwnerHistory=self._history(), **attributes)

    def copy(self, entity: Any, purpose: str = "", **changes: Any) -> Any:
        """Add a copy of an entity, with some attributes changed; what it refers to is shared."""
        attributes = {
            name: value
            for name, value in entity.get_info(recursive=False).items()
            if name not in ("id", "type", "GlobalId", "OwnerHistory")
        }
        attributes.update(changes)
        attributes = {name: value for name, value in attributes.items() if value is not None}
        if entity.is_a("IfcRoot"):
            return self.rooted(entity.is_a(), purpose, **attributes)
        return self.new(entity.is_a(), **attributes)

    def users(self, entity: Any) -> list[Any]:
        """Return what refers to an entity, styles and layers left out."""
        return [u for u in self.file.get_inverse(entity) if not any(u.is_a(k) for k in _LOOKS)]

    def dress(self, old: Any, new: Any) -> None:
        """Give a new shape the styles and layers of the old one."""
        for user in list(self.file.get_inverse(old)):
            if user.is_a("IfcStyledItem"):
                self.copy(user, Item=new)
            elif user.is_a("IfcPresentationLayerAssignment"):
                self.set(user, "AssignedItems", (*user.AssignedItems, new))

    def move(self, relation: Any, purpose: str, objects: Iterable[Any], **changes: Any) -> None:
        """Give some of the objects of a relation a relation of their own.

        Where they are all that it relates, it is changed itself.
        """
        mine = {o.id() for o in objects}
        rest = [o for o in relation.RelatedObjects if o.id() not in mine]
        moved = [o for o in relation.RelatedObjects if o.id() in mine]
        if not rest:
            for attribute, value in changes.items():
                self.set(relation, attribute, value)
            return
        self.set(relation, "RelatedObjects", rest)
        self.copy(relation, purpose, RelatedObjects=moved, **changes)

    def parts(self, index: StepIndex) -> list[bytes | memoryview]:
        """Return the file with all changes, in parts; ``index`` is of the bytes it came from."""
        assert index.data_end is not None  # the caller has seen to it
        view, at = memoryview(index.data), 0
        parts: list[bytes | memoryview] = []
        for start, end, number in sorted((*index.span(n), n) for n in self._changed):
            parts += [view[at:start], self._text(number)]
            at = end
        added = b"".join(self._text(number) + index.newline for number in self._new)
        return [*parts, view[at : index.data_end], added, view[index.data_end :]]

    def _text(self, number: int) -> bytes:
        text: str = self.file.by_id(number).to_string()
        return text.encode("ascii") + b";"

    def _history(self) -> Any:
        """The owner history of the file, which IFC2X3 asks for; later schemas do without."""
        if self._owner is None and self.schema == "IFC2X3":
            found = self.file.by_type("IfcOwnerHistory")
            self._owner = found[0] if found else self._new_history()
        return self._owner

    def _new_history(self) -> Any:
        person = self.new("IfcPerson", FamilyName="Spanledger")
        organization = self.new("IfcOrganization", Name="Spanledger")
        both = self.new("IfcPersonAndOrganization", ThePerson=person, TheOrganization=organization)
        application = self.new(
            "IfcApplication", ApplicationDeveloper=organization, Version="1",
            ApplicationFullName="Spanledger", ApplicationIdentifier="Spanledger",
        )  # fmt: skip
        return self.new(
            "IfcOwnerHistory", OwningUser=both, OwningApplication=application,
            ChangeAction="MODIFIED", CreationDate=0,
        )  # fmt: skip
