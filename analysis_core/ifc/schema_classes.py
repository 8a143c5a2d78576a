"""Which class is a kind of which, as the schema has it, for classes as they stand in a file."""

from __future__ import annotations

from functools import lru_cache

import ifcopenshell.ifcopenshell_wrapper as parser

# Families as they are called here, and the edition by which the parser knows them.
PARSER_SCHEMAS = {"IFC4X3": "IFC4X3_ADD2"}


@lru_cache(maxsize=4096)
def ancestors(schema: str, keyword: str) -> frozenset[str] | None:
    """Return a class and all it descends from; None where the schema does not know it.

    ``keyword`` is the class in capitals, as it stands in a file.
    """
    declarations = parser.schema_by_name(PARSER_SCHEMAS.get(schema, schema))
    try:
        entity = declarations.declaration_by_name(keyword).as_entity()
    except RuntimeError:
        return None
    found = set()
    while entity is not None:
        found.add(entity.name())
        entity = entity.supertype()
    return frozenset(found)


def is_a(schema: str, keyword: str, ancestor: str, *, unknown: bool = False) -> bool:
    """Whether a class is a kind of another; ``unknown`` where the schema does not know it."""
    found = ancestors(schema, keyword)
    return unknown if found is None else ancestor in found
