"""The section table of a job file: sections by name, shape and dimensions."""

from __future__ import annotations

import csv
import io
from collections.abc import Mapping, Sequence
from typing import Any

from analysis_core.errors import JobError
from analysis_core.settings import TableSection

_FLANGED = ("depth", "width", "web_thickness", "flange_thickness")
# Dimensions that each shape must have, and those that it may.
_SHAPES: dict[str, tuple[tuple[str, ...], tuple[str, ...]]] = {
    "I": (_FLANGED, ("fillet_radius",)),
    "rectangle": (("depth", "width"), ()),
    "hollow rectangle": (("depth", "width", "wall_thickness"), ("outer_radius", "inner_radius")),
    "tube": (("diameter", "wall_thickness"), ()),
    "circle": (("diameter",), ()),
    "channel": (_FLANGED, ("fillet_radius",)),
    "tee": (_FLANGED, ("fillet_radius",)),
    "angle": (("depth", "width", "thickness"), ("fillet_radius",)),
}


def table_sections(rows: Sequence[Mapping[str, Any]]) -> tuple[TableSection, ...]:
    """Return the sections of checked rows (lengths in m).  Raises JobError."""
    sections = tuple(_section(row, f"section_table[{i}]") for i, row in enumerate(rows))
    names = [section.name for section in sections]
    for name in names:
        if names.count(name) > 1:
            raise JobError(f"'section_table' has the name '{name}' more than once.")
    return sections


def csv_rows(text: str) -> list[dict[str, str]]:
    """Return the rows of a table in CSV: a head of keys, then one section a row, with units.

    Empty cells state nothing.  Semicolons part the cells where the head has some.
    """
    head = text.partition("\n")[0]
    reader = csv.reader(io.StringIO(text), delimiter=";" if ";" in head else ",")
    rows = [[cell.strip() for cell in row] for row in reader]
    rows = [row for row in rows if any(row)]
    if not rows:
        return []
    keys = rows[0]
    for number, row in enumerate(rows[1:], start=2):
        if len(row) > len(keys):
            raise JobError(
                f"Row {number} of the section table has {len(row)} cells; its head has {len(keys)}."
            )
    return [{k: v for k, v in zip(keys, row, strict=False) if v} for row in rows[1:]]


def _section(row: Mapping[str, Any], where: str) -> TableSection:
    name, shape = row["name"].strip(), row["shape"]
    needed, possible = _SHAPES[shape]
    given = {k: v for k, v in row.items() if k not in ("name", "shape", "category")}
    category = row.get("category", "").strip()
    missing = [k for k in needed if k not in given]
    if not name:
        raise JobError(f"'{where}' has an empty name.")
    if missing:
        raise JobError(
            f"'{where}' ('{name}') is of the shape '{shape}' and lacks {', '.join(missing)}."
        )
    for key, value in given.items():
        if key not in (*needed, *possible):
            raise JobError(
                f"'{where}' ('{name}') states '{key}', which the shape '{shape}' does not have "
                f"(it has {', '.join((*needed, *possible))})."
            )
        if value < 0.0 or (key in needed and value == 0.0):
            raise JobError(f"'{where}' ('{name}') has a {key} of {value:g} m; it must be positive.")
    return TableSection(name, shape, given, (category,) if category else ())
