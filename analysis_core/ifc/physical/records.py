"""The attributes of an element that reading asks for again and again, fetched once."""

from __future__ import annotations

from typing import Any, NamedTuple

from analysis_core.ifc.unreadable import text_of


class Record(NamedTuple):
    """An element (IfcElement or IfcSpatialElement) with its attributes by name.

    ``shape`` is its IfcProductDefinitionShape, ``placement`` its object placement; both may be
    None.  ``global_id`` is "" where the file states none.
    """

    entity: Any
    id: int
    ifc_class: str
    global_id: str
    name: str
    object_type: str
    placement: Any
    shape: Any

    @classmethod
    def of(cls, entity: Any) -> Record:
        """Fetch the attributes of an entity; their places are the same in all schemas."""
        get = entity.get_argument
        return cls(
            entity,
            entity.id(),
            entity.is_a(),
            text_of(get(0)),
            text_of(get(2)),
            text_of(get(4)),
            get(5),
            get(6),
        )

    @property
    def called(self) -> str:
        """How a message calls the element."""
        return f"{self.ifc_class} '{self.name or 'without a name'}'"

    @property
    def key(self) -> str:
        """GlobalId, or the entity number where there is none."""
        return self.global_id or f"#{self.id}"
