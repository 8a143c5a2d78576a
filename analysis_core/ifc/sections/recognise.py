"""Telling the shape of an outline drawn point by point: an I, a rectangle, a tube, ….

Exporters often write a rolled section as a polygon.  Its properties come from the polygon all
the same; the name of the shape and its dimensions are for the checks and for the reader.  A
shape is named only if a section drawn from the dimensions found has the same area and inertias
within 5 %.
"""

from __future__ import annotations

import math

import numpy as np

from analysis_core.ifc.geometry import outline
from analysis_core.ifc.geometry.outline import Floats, Loops, Moments
from analysis_core.ifc.sections.drawn import Drawn
from analysis_core.ifc.sections.upright_outline import AGREEMENT, Found, UprightOutline

_MOST_CORNERS = 400


def recognise(loops: Loops, *, exact: bool = True) -> Drawn:
    """Name the shape of ``loops`` (see ``outline``): loops round material first, then voids."""
    found = None
    if sum(len(rows) for rows in loops) <= _MOST_CORNERS:
        found = _solid(loops[0]) if len(loops) == 1 else _hollow(loops)
    if found is None:
        return Drawn(loops, "polygon" if len(loops) == 1 else "hollow polygon", {}, exact=exact)
    shape, dimensions, roll = found
    return Drawn(loops, shape, dimensions, roll=roll, exact=exact)


def _hollow(loops: Loops) -> Found | None:
    if len(loops) != 2:
        return None
    outer, inner = _solid(loops[0]), _solid(outline.anticlockwise(loops[1]))
    if outer is None or inner is None or outer[0] != inner[0]:
        return None
    whole, void = outline.moments((loops[0],)), outline.moments((outline.anticlockwise(loops[1]),))
    d, v = outer[1], inner[1]
    size = max(d["width"], d["depth"])
    if math.hypot(whole.x - void.x, whole.y - void.y) > 0.01 * size:
        return None
    wall = 0.5 * (d["depth"] - v["depth"])
    if abs(0.5 * (d["width"] - v["width"]) - wall) > 0.02 * size:
        return None
    if outer[0] == "circle":
        return "tube", {**d, "wall_thickness": wall}, 0.0
    if outer[0] != "rectangle" or abs(math.sin(2.0 * (outer[2] - inner[2]))) > 0.01:
        return None
    dimensions = {
        "width": d["width"],
        "depth": d["depth"],
        "wall_thickness": wall,
        "outer_radius": d.get("corner_radius", 0.0),
        "inner_radius": v.get("corner_radius", 0.0),
    }
    return "hollow rectangle", dimensions, outer[2]


def _solid(rows: Floats) -> Found | None:
    real = outline.moments((rows,))
    diameter = _round(rows, real)
    if diameter:
        return "circle", {"diameter": diameter, "width": diameter, "depth": diameter}, 0.0
    tilt = _direction_of_longest_edge(rows)
    # A quarter turn more: the web may lie flat.
    for roll in (tilt, tilt + 0.5 * math.pi):
        c, s = math.cos(roll), math.sin(roll)
        upright = outline.transformed((rows,), ((c, s), (-s, c)), 0.0, 0.0)[0]
        shape = UprightOutline(upright)
        found = shape.named()
        if found is not None:
            name, dimensions, half_turn = found
            return name, dimensions, _principal_turn(roll + half_turn)
    return None


def _principal_turn(angle: float) -> float:
    return math.remainder(angle, 2.0 * math.pi) if abs(angle) > 1e-9 else 0.0


def _round(rows: Floats, real: Moments) -> float:
    """Diameter if every corner is as far from the centroid as every other, else 0."""
    corners = rows[:, :2] if not rows[:, 2].any() else outline.flattened(rows, 48)[:, :2]
    if len(corners) < 12:
        return 0.0
    radii = np.hypot(corners[:, 0] - real.x, corners[:, 1] - real.y)
    radius = float(radii.mean())
    if float(np.abs(radii - radius).max()) > 0.01 * radius:
        return 0.0
    close = abs(real.area - math.pi * radius**2) < AGREEMENT * real.area
    return 2.0 * radius if close else 0.0


def _direction_of_longest_edge(rows: Floats) -> float:
    """Angle of the longest straight edge, brought to -45° to 45°."""
    steps = np.roll(rows[:, :2], -1, axis=0) - rows[:, :2]
    lengths = np.where(rows[:, 2] == 0.0, np.hypot(steps[:, 0], steps[:, 1]), 0.0)
    x, y = steps[int(lengths.argmax())].tolist()
    angle = math.remainder(math.atan2(y, x), 0.5 * math.pi)
    return angle if abs(angle) > 1e-6 else 0.0
