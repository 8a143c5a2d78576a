"""Whether the content of a file fits the schema that its header names.

A parser that trusts the header drops what the schema does not know, and cuts off attributes that
it does not have: loads and materials vanish without a word.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache

from ifcopenshell import ifcopenshell_wrapper

from analysis_core.errors import IfcReadError
from analysis_core.findings import Finding

Shapes = Mapping[tuple[str, int], int]

# The name the parser knows, for each name in a header that means the same entities.  The
# corrections of one release (ADD, TC) changed no entity that is read here.
_READ_AS = {
    "IFC2X3": "IFC2X3",
    "IFC2X3_TC1": "IFC2X3",
    "IFC4": "IFC4",
    "IFC4_ADD1": "IFC4",
    "IFC4_ADD2": "IFC4",
    "IFC4_ADD2_TC1": "IFC4",
    "IFC4X3": "IFC4X3_ADD2",
    "IFC4X3_TC1": "IFC4X3_ADD2",
    "IFC4X3_ADD1": "IFC4X3_ADD2",
    "IFC4X3_ADD2": "IFC4X3_ADD2",
}
_PUBLIC_NAMES = {"IFC2X3": "IFC2X3", "IFC4": "IFC4", "IFC4X3_ADD2": "IFC4X3"}
# Where attributes of these are cut off, loads or stiffness are lost.
_STRUCTURAL = ("IFCSTRUCTURAL", "IFCBOUNDARY", "IFCRELCONNECTS", "IFCMATERIAL", "IFCFAILURE")


@dataclass(frozen=True, slots=True)
class Fit:
    """How a content fits a schema: instances by unknown class, and by wrong attribute count."""

    unknown: Mapping[str, int]
    miscounted: Mapping[tuple[str, int], int]

    @property
    def lost(self) -> int:
        """Number of instances that the parser would drop."""
        return sum(self.unknown.values())

    @property
    def cut(self) -> int:
        """Number of structural instances that would lose attributes."""
        return sum(
            count
            for (name, _), count in self.miscounted.items()
            if name.startswith(_STRUCTURAL) or name.endswith(("PROFILEDEF", "PROFILEPROPERTIES"))
        )


def parser_schema(names: tuple[str, ...], file_name: str) -> str:
    """Return the parser's name of the schema in a header.

    Raises IfcReadError where there is none, several, or one that is not read.
    """
    known = "IFC2X3, IFC4 and IFC4X3"
    if len(names) != 1:
        stated = " and ".join(f"'{name}'" for name in names[:3]) or "no schema"
        raise IfcReadError(
            f"'{file_name}' names {stated} in FILE_SCHEMA of its header; it must be one of "
            f"{known}. Export the model again."
        )
    name = names[0].upper()
    if name not in _READ_AS:
        raise IfcReadError(
            f"'{file_name}' uses schema '{_printable(names[0])}'; this reader accepts {known}. "
            f"Export the model in one of them."
        )
    return _READ_AS[name]


def public_name(parser_name: str) -> str:
    """Return "IFC2X3", "IFC4" or "IFC4X3"."""
    return _PUBLIC_NAMES[parser_name]


def check_fit(shapes: Shapes, parser_name: str, file_name: str) -> list[Finding]:
    """Return findings on attributes that are missing or too many.

    Raises IfcReadError where the content belongs to another schema.  Reading it under that other
    schema would work, but every other program would still lose the data, results included: so
    the file is refused until its header tells the truth.
    """
    fit = fit_of(shapes, parser_name)
    if not fit.lost and not fit.miscounted:
        return []
    others = {name: fit_of(shapes, name) for name in _PUBLIC_NAMES if name != parser_name}
    better = [name for name, other in others.items() if not other.lost and not other.cut]
    better.sort(key=lambda name: len(others[name].miscounted))
    if fit.lost or (fit.cut and better):
        raise IfcReadError(_misfit_message(fit, parser_name, better, file_name))
    return [_miscount_finding(fit, parser_name, file_name)]


def fit_of(shapes: Shapes, parser_name: str) -> Fit:
    """Return how instances counted by (class, attributes) fit a schema."""
    unknown: Counter[str] = Counter()
    miscounted: Counter[tuple[str, int]] = Counter()
    for (name, attributes), count in shapes.items():
        declared = declared_attributes(parser_name, name)
        if declared < 0:
            unknown[name] += count
        elif declared != attributes:
            miscounted[name, attributes] += count
    return Fit(unknown, miscounted)


@cache
def declared_attributes(parser_name: str, class_name: str) -> int:
    """Return how many attributes a schema gives a class, or -1 where it does not know it."""
    schema = ifcopenshell_wrapper.schema_by_name(parser_name)
    try:
        entity = schema.declaration_by_name(class_name).as_entity()
    except RuntimeError:
        return -1
    return -1 if entity is None or entity.is_abstract() else int(entity.attribute_count())


def _misfit_message(fit: Fit, parser_name: str, better: list[str], file_name: str) -> str:
    if fit.lost:
        names = ", ".join(_printable(name) for name in sorted(fit.unknown)[:3])
        more = ", …" if len(fit.unknown) > 3 else ""
        trouble = (
            f"holds {fit.lost} entities of {len(fit.unknown)} classes that this schema does not "
            f"have ({names}{more}), which would vanish"
        )
    else:
        name, found = next(iter(sorted(fit.miscounted)))
        trouble = (
            f"holds {fit.cut} entities with more or fewer attributes than this schema has "
            f"({name} with {found}), which would be read wrongly"
        )
    remedy = (
        f"its content fits {public_name(better[0])}: correct FILE_SCHEMA to '{better[0]}' "
        f"or export it again"
        if better
        else "export it again under the schema it was made for"
    )
    return f"'{file_name}' says that it is {public_name(parser_name)} but {trouble}; {remedy}."


def _miscount_finding(fit: Fit, parser_name: str, file_name: str) -> Finding:
    total = sum(fit.miscounted.values())
    examples = ", ".join(
        f"{name} has {found}, expected {declared_attributes(parser_name, name)}"
        for name, found in sorted(fit.miscounted)[:3]
    )
    return Finding(
        "warning",
        "attribute-count",
        f"'{file_name}' holds {total} entities with more or fewer attributes than "
        f"{public_name(parser_name)} gives them ({examples}); missing ones were taken as not "
        f"stated, surplus ones were passed over. Export the model again.",
    )


def _printable(text: str) -> str:
    return "".join(letter if letter.isprintable() else "?" for letter in text)[:60]
