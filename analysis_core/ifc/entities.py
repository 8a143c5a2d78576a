"""The entities of a file, each read from its bytes when it is asked for.

A building of thousands of beams holds hundreds of thousands of entities, of which reading looks
at a part, and at most of these once.  So nothing is built beforehand but a table of where each
one stands.  Entities answer as those of the parser do: by place, by name, ``id`` and ``is_a``.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise
from typing import Any

import numpy as np
from ifcopenshell import ifcopenshell_wrapper
from numpy.typing import NDArray

from analysis_core.ifc.schema_classes import ancestors
from analysis_core.ifc.step.attributes import attributes, value
from analysis_core.ifc.step.census import Census, Ints

_SPARSE = 8
"""Numbers up to so many times the count of entities are looked up in a plain table."""


@dataclass(frozen=True, slots=True)
class Kind:
    """A class of the schema: its name, what it descends from, where its attributes stand.

    ``derived`` are the places of those that follow from others, whatever the file says.
    """

    name: str
    ancestors: frozenset[str]
    places: dict[str, int]
    derived: tuple[int, ...] = ()

    @classmethod
    def of(cls, schema: str, keyword: str) -> Kind:
        """Return the class, or the type of a value, that a word in a file means."""
        try:
            found = ifcopenshell_wrapper.schema_by_name(schema).declaration_by_name(keyword)
        except RuntimeError:  # a type that the schema does not have
            return cls(keyword, frozenset((keyword,)), {"wrappedValue": 0})
        entity = found.as_entity()
        if entity is None:  # a type such as IfcLabel
            return cls(found.name(), frozenset((found.name(),)), {"wrappedValue": 0})
        places = {attribute.name(): i for i, attribute in enumerate(entity.all_attributes())}
        derived = tuple(i for i, follows in enumerate(entity.derived()) if follows)
        return cls(entity.name(), ancestors(schema, keyword) or frozenset(), places, derived)


class Entity:
    """One entity of a file."""

    __slots__ = ("_number", "_row", "_texts", "file")

    def __init__(self, file: Entities, number: int, row: int) -> None:
        self.file = file
        self._number = number
        self._row = row
        self._texts: list[bytes] | None = None

    @property
    def _kind(self) -> Kind:
        return self.file.kind_in(self._row)

    def id(self) -> int:
        """Return the number that the file gives it, 0 for a value."""
        return self._number

    def is_a(self, name: str | None = None) -> Any:
        """Return its class, or whether it is of a class or one that descends from it."""
        kind = self._kind
        return kind.name if name is None else name in kind.ancestors

    def get_argument(self, place: int) -> Any:
        """Return an attribute; IndexError where its class has none there."""
        texts = self._texts
        if texts is None:
            texts = self._texts = self.file.texts(self._row)
        return value(texts[place], self.file)

    __getitem__ = get_argument

    def __len__(self) -> int:
        return len(self._kind.places)

    def __iter__(self) -> Iterator[Any]:
        return (self.get_argument(place) for place in range(len(self)))

    def __getattr__(self, name: str) -> Any:
        place = self._kind.places.get(name)
        if place is None:
            raise AttributeError(f"{self._kind.name} has no attribute {name}")
        return self.get_argument(place)

    def attribute_name(self, place: int) -> str:
        """Return the name of an attribute."""
        return list(self._kind.places)[place]

    def get_info(self, *, recursive: bool = False) -> dict[str, Any]:
        """Return number, class and attributes by name; what it refers to stays as it is."""
        values = dict(zip(self._kind.places, self, strict=True))
        return {"id": self._number, "type": self._kind.name, **values}

    def __eq__(self, other: object) -> bool:
        if not isinstance(other, Entity):
            return False
        return self.file is other.file and self._number == other.id()

    def __hash__(self) -> int:
        return hash(self._number)

    def __repr__(self) -> str:
        return f"#{self._number}={self._kind.name}{tuple(self)}"


class TypedValue(Entity):
    """A value that names its type, such as IFCLABEL('B12'); its only attribute is the value."""

    __slots__ = ("_type",)

    def __init__(self, file: Entities, type_: Kind, text: bytes) -> None:
        super().__init__(file, 0, -1)
        self._type = type_
        self._texts = [text]

    @property
    def _kind(self) -> Kind:
        return self._type

    def __eq__(self, other: object) -> bool:
        return isinstance(other, TypedValue) and (self._type, self[0]) == (other._type, other[0])

    def __hash__(self) -> int:
        return hash(self._type.name)


class Entities:
    """All entities of a file.

    ``content`` is its text without comments, ``census`` tells where in it they stand, ``schema``
    is its name as the parser knows it.
    """

    def __init__(self, content: bytes, census: Census, schema: str) -> None:
        self.schema = schema
        self._content = content
        self._census = census
        self._starts, self._ends = _view(census.starts), _view(census.ends)
        self._counts = _view(census.attributes)
        table, self._beyond = _rows(census.ids)
        self._rows, self._table_end = _view(table), table.size
        self._kinds: dict[str, Kind] = {}
        self._kinds_in_file = [self._kind(name) for name in census.names]
        self._kind_in_row = _view(census.kinds)

    def by_id(self, number: int) -> Entity:
        """Return an entity.  Raises RuntimeError where there is none of this number."""
        found = self.refer(number)
        if found is None:
            raise RuntimeError(f"there is no entity #{number}")
        return found

    def by_type(self, name: str) -> tuple[Entity, ...]:
        """Return the entities of a class and then, class by class, of those that descend from it.

        Those of one class come in the order of their numbers.  Raises RuntimeError where the
        schema does not know it.
        """
        declaration = ifcopenshell_wrapper.schema_by_name(self.schema).declaration_by_name(name)
        found: list[Entity] = []
        for keyword in _with_subtypes(declaration.as_entity()):
            if keyword in self._rows_of:
                rows = self._rows_of[keyword]
                numbers = self._census.ids[rows]
                pairs = zip(numbers.tolist(), rows.tolist(), strict=True)
                found += [Entity(self, number, row) for number, row in pairs]
        return tuple(found)

    def get_inverse(self, entity: Entity) -> tuple[Entity, ...]:
        """Return the entities that refer to one, in the order of the file: a search through it."""
        users = []
        mention = re.compile(rb"#\s*%d(?![0-9])" % entity.id())
        places = [match.start() for match in mention.finditer(self._content)]
        rows = np.unique(np.searchsorted(self._census.ends, places))
        for number in self._census.ids[rows[rows < self._census.ids.size]].tolist():
            user = self.by_id(number)
            if any(_holds(value, entity) for value in user):
                users.append(user)
        return tuple(users)

    def kind_in(self, row: int) -> Kind:
        """Return the class of the entity in a row."""
        return self._kinds_in_file[self._kind_in_row[row]]

    def texts(self, row: int) -> list[bytes]:
        """Return the attributes of an entity as they are written, as many as its class has."""
        content, end = self._content, self._ends[row]
        start = content.index(b"(", self._starts[row]) + 1
        found = attributes(content[start : content.rindex(b")", start, end)], self._counts[row])
        kind = self._kinds_in_file[self._kind_in_row[row]]
        expected = len(kind.places)
        if len(found) != expected:
            # Missing ones count as not stated, surplus ones are passed over; a finding says so.
            found = (found + [b"$"] * expected)[:expected]
        for place in kind.derived:
            found[place] = b"*"
        return found

    def refer(self, number: int) -> Entity | None:
        """Return an entity, None where there is none of this number."""
        row = self._rows[number] if number < self._table_end else self._beyond.get(number, -1)
        return Entity(self, number, row) if row >= 0 else None

    def named(self, keyword: str, text: bytes) -> TypedValue:
        """Return a value that names its type."""
        return TypedValue(self, self._kind(keyword), text)

    @cached_property
    def _rows_of(self) -> dict[str, Ints]:
        """The rows of the entities of each class in the file, by its name in capitals.

        In the order of their numbers, as the parser has them.
        """
        census = self._census
        order = np.lexsort((census.ids, census.kinds))
        bounds = np.searchsorted(census.kinds[order], np.arange(len(census.names) + 1))
        parts = [order[low:high] for low, high in pairwise(bounds.tolist())]
        return dict(zip(census.names, parts, strict=True))

    def _kind(self, keyword: str) -> Kind:
        if keyword not in self._kinds:
            self._kinds[keyword] = Kind.of(self.schema, keyword)
        return self._kinds[keyword]


def _rows(numbers: Ints) -> tuple[NDArray[np.int32], dict[int, int]]:
    """Return the row of each number, -1 for none: in a table or, beyond its end, by number."""
    end = min(int(numbers.max(initial=0)) + 1, _SPARSE * numbers.size)
    table = np.full(end, -1, np.int32)
    rows = np.arange(numbers.size)
    low = numbers < end
    table[numbers[low]] = rows[low]
    return table, dict(zip(numbers[~low].tolist(), rows[~low].tolist(), strict=True))


def _view(numbers: NDArray[np.integer[Any]]) -> memoryview:
    """Return an array as what gives single places quickly, as plain numbers."""
    return memoryview(numbers)  # type: ignore[arg-type]  # an array is a buffer


def _with_subtypes(declaration: Any) -> Iterator[str]:
    """Yield a class and, branch by branch, all that descend from it, in capitals."""
    yield declaration.name_uc()
    for below in declaration.subtypes():
        yield from _with_subtypes(below)


def _holds(value: Any, entity: Entity) -> bool:
    if isinstance(value, tuple):
        return any(_holds(item, entity) for item in value)
    return isinstance(value, Entity) and value.id() == entity.id()
