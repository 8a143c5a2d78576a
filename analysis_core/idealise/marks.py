"""Marks by which an engineer knows a line: storey and number in plan order."""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Sequence
from dataclasses import dataclass

from analysis_core.idealise.draft import Draft
from analysis_core.idealise.planes import view_axis
from analysis_core.model import Point

# Lines nearer than this to each other, sideways, are in one row of the plan (m).
_ROW = 0.2
# Lines of a row that start nearer to each other than this start together (m).
_START = 0.02
# Levels nearer than this to each other are one level (m).
_LEVEL = 0.5
_NAMELESS = {"undefined", "not defined", "notdefined", "default", "unnamed", "unknown", "storey"}
_NUMBERED = re.compile(
    r"(?:level|storey|story|floor|stage|etage|geschoss|niveau|lvl|l)[\s._]*(-?\d+)(?![\w.])|(-?\d+)$",
    re.IGNORECASE,
)


@dataclass(frozen=True, slots=True)
class _Place:
    """Where a draft lies: its level, whether it runs along Y, its row and its start along it."""

    level: float
    along_y: bool
    row: float
    run: float


def put_marks(drafts: list[Draft], storeys: Sequence[tuple[str, float]]) -> None:
    """Give every draft its storey and a mark: "L2-04", and "F-03" for frames.

    Lines count storey by storey, first those along X from low to high Y, left to right, then
    those along Y.  Order in the file plays no part.  Lines without a storey take the nearest
    below or at their level; where the model has none, levels are numbered from the lowest.
    """
    frames = [d for d in drafts if d.kind == "frame"]
    lines = [d for d in drafts if d.kind == "line"]
    places = {id(d): _place(d) for d in drafts}
    _put_storeys(lines, storeys, places)
    prefixes = _prefixes(lines, storeys, places)
    groups: dict[str, list[Draft]] = {}
    for draft in lines:
        groups.setdefault(prefixes[id(draft)], []).append(draft)
    if frames:
        groups["F"] = frames if "F" not in groups else groups["F"] + frames
    for prefix, group in groups.items():
        width = max(2, len(str(len(group))))
        for number, draft in enumerate(_plan_order(group, places), start=1):
            draft.mark = f"{prefix}-{number:0{width}d}"


def short_name(storey: str) -> str:
    """Return the storey's name as it stands in marks: "Level 2" is L2, "Ground Floor" GF.

    Empty where the name says nothing.
    """
    text = storey.strip()
    match = _NUMBERED.match(text)
    if match:
        return f"L{int(match[1] or match[2])}"
    if text.casefold() in _NAMELESS:
        return ""
    words: list[str] = re.findall(r"[^\W_]+", text)
    if not words:
        return ""
    if len(words) == 1:
        return str(words[0])[:4].upper()
    return "".join(w if w.isdigit() else w[0] for w in words).upper()[:4]


def _put_storeys(
    lines: list[Draft], storeys: Sequence[tuple[str, float]], places: dict[int, _Place]
) -> None:
    for draft in lines:
        lengths: dict[str, float] = {}
        for bar in draft.bars:
            if bar.member.storey and bar.role == "span":
                name = bar.member.storey
                lengths[name] = lengths.get(name, 0.0) + draft.length(bar)
        if lengths:
            draft.storey = max(sorted(lengths), key=lambda name: round(lengths[name], 3))
        elif storeys:
            draft.storey = min(storeys, key=lambda s: abs(s[1] - places[id(draft)].level))[0]


def _prefixes(
    lines: list[Draft], storeys: Sequence[tuple[str, float]], places: dict[int, _Place]
) -> dict[int, str]:
    """Return the first part of each line's mark; two storeys never share one."""
    elevation = dict(storeys)
    names = sorted(
        {d.storey for d in lines if d.storey}, key=lambda n: (elevation.get(n, math.inf), n)
    )
    known = [name for name, _ in sorted(storeys, key=lambda s: (s[1], s[0]))]
    ordered = list(dict.fromkeys(known + names))
    short: dict[str, str] = {}
    taken: set[str] = set()
    for index, name in enumerate(ordered, start=1):
        base = candidate = short_name(name) or f"L{index}"
        count = 2
        while candidate in taken:
            candidate = f"{base}{chr(ord('a') + count - 2)}"
            count += 1
        short[name] = candidate
        taken.add(candidate)
    loose = sorted((d for d in lines if not d.storey), key=lambda d: places[id(d)].level)
    levels = _clusters([places[id(d)].level for d in loose], _LEVEL)
    result = {id(d): short[d.storey] for d in lines if d.storey}
    for draft, level in zip(loose, levels, strict=True):
        name = f"L{level + 1}"
        result[id(draft)] = name if name not in taken else f"N{level + 1}"
    return result


def _plan_order(group: list[Draft], places: dict[int, _Place]) -> list[Draft]:
    """Order as a plan is read; rows are bands, so that a millimetre never changes a mark."""
    ordered: list[Draft] = []
    for along_y in (False, True):
        part = [d for d in group if places[id(d)].along_y is along_y]
        for row in _bands(part, lambda d: places[id(d)].row, _ROW):
            for run in _bands(row, lambda d: places[id(d)].run, _START):
                for level in _bands(run, lambda d: places[id(d)].level, _START):
                    ordered.extend(sorted(level, key=lambda d: d.elements))
    return ordered


def _bands(drafts: list[Draft], value: Callable[[Draft], float], gap: float) -> list[list[Draft]]:
    """Return the drafts in rising order of ``value``, those nearer than ``gap`` together."""
    rising = sorted(drafts, key=value)
    bands: list[list[Draft]] = []
    for draft, band in zip(rising, _clusters([value(d) for d in rising], gap), strict=True):
        if band == len(bands):
            bands.append([])
        bands[band].append(draft)
    return bands


def _clusters(values: list[float], gap: float) -> list[int]:
    """Return a band number for each of the rising ``values``."""
    bands, band = [], 0
    for index, value in enumerate(values):
        if index and value - values[index - 1] > gap:
            band += 1
        bands.append(band)
    return bands


def _place(draft: Draft) -> _Place:
    axis = view_axis(draft.plane.axis)
    along_y = abs(axis[1]) > abs(axis[0]) + 1e-6
    points = [draft.plane.world(j.x, j.z) for j in draft.joints]
    centre: Point = (
        math.fsum(p[0] for p in points) / len(points),
        math.fsum(p[1] for p in points) / len(points),
        math.fsum(p[2] for p in points) / len(points),
    )
    if along_y:
        return _Place(centre[2], True, centre[0], min(p[1] for p in points))
    return _Place(centre[2], False, centre[1], min(p[0] for p in points))
