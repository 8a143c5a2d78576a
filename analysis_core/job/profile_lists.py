"""Lists of profiles without a head, as FreeCAD keeps its own: one profile a row, lengths in mm.

A row holds category, name, class and the dimensions of the class, as FreeCAD's documentation and
its own lists state them:

    C    outside diameter, wall thickness                               tube
    H    width, depth, thickness of the web, of the flanges             I
    R    width, depth                                                   rectangle
    RH   width, depth, wall thickness                                   hollow rectangle
    U    depth of the channel, width of its flanges, web, flanges       channel (drawn lying there)

Rows that begin with # are remarks.  Whatever is not such a row is told of with its line number.
"""

from __future__ import annotations

import csv
import io
import math
from collections.abc import Mapping, Sequence
from dataclasses import replace
from typing import NamedTuple

from analysis_core.findings import Finding, listed
from analysis_core.settings import TableSection

_MM = 0.001
_FLANGED = ("web_thickness", "flange_thickness")
_CLASSES: dict[str, tuple[str, tuple[str, ...]]] = {
    "C": ("tube", ("diameter", "wall_thickness")),
    "H": ("I", ("width", "depth", *_FLANGED)),
    "R": ("rectangle", ("width", "depth")),
    "RH": ("hollow rectangle", ("width", "depth", "wall_thickness")),
    "U": ("channel", ("depth", "width", *_FLANGED)),
}
_MOST = 10  # line numbers in a message


class ProfileList(NamedTuple):
    """What a list holds, and what of it was not understood or was taken in a certain way."""

    sections: tuple[TableSection, ...]
    findings: tuple[Finding, ...]


class _NoProfileError(ValueError):
    """Why a row is no profile."""


def is_profile_list(text: str) -> bool:
    """Whether a table has this form: some row has a known class and numbers behind it."""
    return any(len(row) > 3 and row[2] in _CLASSES and _is_number(row[3]) for _, row in _rows(text))


def profile_list(text: str, name: str) -> ProfileList:
    """Return the profiles of a list; ``name`` is that of its file."""
    found: dict[str, TableSection] = {}
    lying: dict[str, None] = {}
    trouble: dict[str, list[int]] = {}
    for number, row in _rows(text):
        try:
            section, was_lying = _section(row, name)
            found[section.name] = _joined(found.get(section.name), section)
        except _NoProfileError as reason:
            trouble.setdefault(str(reason), []).append(number)
            continue
        if was_lying:
            lying[section.name] = None
    findings = [_left_out(name, why, numbers) for why, numbers in trouble.items()]
    if lying:
        findings.append(_turned(name, list(lying)))
    if any(s.shape in ("I", "channel", "hollow rectangle") for s in found.values()):
        findings.append(_without_fillets(name))
    return ProfileList(tuple(found.values()), tuple(findings))


def _rows(text: str) -> list[tuple[int, list[str]]]:
    """Number and cells of each row that is no remark; empty cells at its end are none."""
    found = []
    reader = csv.reader(io.StringIO(text))
    for row in reader:
        cells = [cell.strip() for cell in row]
        while cells and not cells[-1]:
            cells.pop()
        if cells and not cells[0].startswith("#"):
            found.append((reader.line_num, cells))
    return found


def _section(row: Sequence[str], origin: str) -> tuple[TableSection, bool]:
    """The section of a row, and whether it was stated lying on its side."""
    if len(row) < 3 or not row[1]:
        raise _NoProfileError("a row has category, name, class and dimensions")
    category, name, class_ = row[:3]
    if class_ not in _CLASSES:
        raise _NoProfileError(f"the class is none of {', '.join(_CLASSES)}")
    shape, keys = _CLASSES[class_]
    if len(row) - 3 != len(keys) or not all(_is_number(cell) for cell in row[3:]):
        raise _NoProfileError(
            f"the class {class_} has {len(keys)} numbers in mm: {', '.join(keys)}".replace("_", " ")
        )
    dimensions = {key: _MM * float(cell) for key, cell in zip(keys, row[3:], strict=True)}
    _check_room(shape, dimensions)
    lying = shape == "hollow rectangle" and dimensions["width"] > dimensions["depth"]
    if lying:
        dimensions |= {"width": dimensions["depth"], "depth": dimensions["width"]}
    return TableSection(name, shape, dimensions, (category,) if category else (), origin), lying


def _check_room(shape: str, of: Mapping[str, float]) -> None:
    if min(of.values()) <= 0.0:
        raise _NoProfileError("a dimension is not positive")
    room = {
        "tube": lambda: 2.0 * of["wall_thickness"] < of["diameter"],
        "hollow rectangle": lambda: 2.0 * of["wall_thickness"] < min(of["width"], of["depth"]),
        "I": lambda: 2.0 * of["flange_thickness"] < of["depth"] and _web_fits(of),
        "channel": lambda: 2.0 * of["flange_thickness"] < of["depth"] and _web_fits(of),
    }.get(shape)
    if room is not None and not room():
        raise _NoProfileError("its walls are thicker than the profile has room for")


def _web_fits(of: Mapping[str, float]) -> bool:
    return of["web_thickness"] < of["width"]


def _joined(known: TableSection | None, section: TableSection) -> TableSection:
    """A profile that stands in several categories is one profile."""
    if known is None:
        return section
    if (known.shape, known.dimensions) != (section.shape, section.dimensions):
        raise _NoProfileError("the name stands further up with other dimensions")
    return replace(known, categories=tuple(dict.fromkeys((*known.categories, *section.categories))))


def _is_number(cell: str) -> bool:
    try:
        return math.isfinite(float(cell))
    except ValueError:
        return False


def _left_out(name: str, why: str, numbers: Sequence[int]) -> Finding:
    which = listed(map(str, numbers), most=_MOST)
    lines = f"Line {which}" if len(numbers) == 1 else f"Lines {which}"
    return Finding(
        "warning",
        "profile-row",
        f"{lines} of the profile list '{name}' cannot be taken, so they are left out: {why}.",
    )


def _turned(name: str, lying: Sequence[str]) -> Finding:
    return Finding(
        "note",
        "profile-upright",
        f"The profile list '{name}' states {len(lying)} hollow sections wider than deep "
        f"({listed(lying, most=2)}). They are taken upright, the greater side as depth, as "
        f"EN 10210-2 and EN 10219-2 name them.",
    )


def _without_fillets(name: str) -> Finding:
    return Finding(
        "note",
        "profile-without-fillets",
        f"The profile list '{name}' states no fillets and rounded corners. Rolled sections are "
        f"some per cent heavier and stiffer than worked out here, hollow ones lighter and weaker.",
    )
