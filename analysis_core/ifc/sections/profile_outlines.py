"""Parametric profiles of the standard as outlines with named dimensions.

Each profile is drawn about the centre of its bounding box, x to the right and y up, as the
standard places it.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Any

from analysis_core.ifc.geometry import outline
from analysis_core.ifc.geometry.paths import Measures
from analysis_core.ifc.sections import rolled_outlines
from analysis_core.ifc.sections.drawn import Drawn, lengths, optional
from analysis_core.ifc.unreadable import UnreadableShapeError


def draw_parametric(profile: Any, measures: Measures) -> Drawn:
    """Draw a parametric profile about its own origin (its ``Position`` is not applied).

    Raises UnreadableShapeError for a class that is not parametric or for impossible dimensions.
    """
    drawer = _DRAWERS.get(profile.is_a())
    if drawer is None:
        raise UnreadableShapeError(f"{profile.is_a()} is not a parametric profile")
    drawn = drawer(profile, measures)
    bad = {k: v for k, v in drawn.dimensions.items() if not (math.isfinite(v) and v >= 0.0)}
    if bad:
        raise UnreadableShapeError(f"{profile.is_a()} has impossible dimensions: {bad}")
    return drawn


def _box(width: float, depth: float, radius: float = 0.0) -> outline.Floats:
    x, y = 0.5 * width, 0.5 * depth
    return outline.rounded([(-x, -y, radius), (x, -y, radius), (x, y, radius), (-x, y, radius)])


def _rectangle(profile: Any, measures: Measures) -> Drawn:
    width, depth = lengths(profile, measures, "XDim", "YDim")
    radius = optional(profile, measures, "RoundingRadius")
    dimensions = {"width": width, "depth": depth}
    if radius:
        dimensions["corner_radius"] = radius
    return Drawn((_box(width, depth, radius),), "rectangle", dimensions)


def _hollow_rectangle(profile: Any, measures: Measures) -> Drawn:
    width, depth, wall = lengths(profile, measures, "XDim", "YDim", "WallThickness")
    if 2.0 * wall >= min(width, depth):
        raise UnreadableShapeError("the walls of a hollow rectangle fill it")
    outer = optional(profile, measures, "OuterFilletRadius")
    inner = optional(profile, measures, "InnerFilletRadius")
    void = outline.clockwise(_box(width - 2.0 * wall, depth - 2.0 * wall, inner))
    return Drawn(
        (_box(width, depth, outer), void),
        "hollow rectangle",
        {
            "width": width,
            "depth": depth,
            "wall_thickness": wall,
            "outer_radius": outer,
            "inner_radius": inner,
        },
    )


def _circle(profile: Any, measures: Measures) -> Drawn:
    (radius,) = lengths(profile, measures, "Radius")
    size = 2.0 * radius
    dimensions = {"diameter": size, "width": size, "depth": size}
    return Drawn((outline.circle(radius),), "circle", dimensions)


def _tube(profile: Any, measures: Measures) -> Drawn:
    radius, wall = lengths(profile, measures, "Radius", "WallThickness")
    if wall >= radius:
        raise UnreadableShapeError("the wall of a tube fills it")
    void = outline.clockwise(outline.circle(radius - wall))
    size = 2.0 * radius
    dimensions = {"diameter": size, "width": size, "depth": size, "wall_thickness": wall}
    return Drawn((outline.circle(radius), void), "tube", dimensions)


def _ellipse(profile: Any, measures: Measures) -> Drawn:
    a, b = lengths(profile, measures, "SemiAxis1", "SemiAxis2")
    chords = outline.flattened(outline.circle(1.0), chords=240)
    # Chords inside the curve lose (2/3) (pi/n)² of the area: swell them by half of that.
    swell = 1.0 / math.sqrt(math.sin(2.0 * math.pi / 240) / (2.0 * math.pi / 240))
    chords[:, 0] *= a * swell
    chords[:, 1] *= b * swell
    return Drawn((chords,), "ellipse", {"width": 2.0 * a, "depth": 2.0 * b})


def _trapezium(profile: Any, measures: Measures) -> Drawn:
    bottom, top, depth = lengths(profile, measures, "BottomXDim", "TopXDim", "YDim")
    offset = (profile.TopXOffset or 0.0) * measures.length
    x, y = 0.5 * bottom, 0.5 * depth
    rows = outline.loop([(-x, -y), (x, -y), (-x + offset + top, y), (-x + offset, y)])
    width = max(x, -x + offset + top) - min(-x, -x + offset)
    dimensions = {"width": width, "depth": depth, "bottom_width": bottom, "top_width": top}
    return Drawn((rows,), "trapezium", dimensions)


_DRAWERS: dict[str, Callable[[Any, Measures], Drawn]] = {
    "IfcRectangleProfileDef": _rectangle,
    "IfcRoundedRectangleProfileDef": _rectangle,
    "IfcRectangleHollowProfileDef": _hollow_rectangle,
    "IfcCircleProfileDef": _circle,
    "IfcCircleHollowProfileDef": _tube,
    "IfcEllipseProfileDef": _ellipse,
    "IfcTrapeziumProfileDef": _trapezium,
    "IfcIShapeProfileDef": rolled_outlines.i_shape,
    "IfcAsymmetricIShapeProfileDef": rolled_outlines.asymmetric_i_shape,
    "IfcTShapeProfileDef": rolled_outlines.tee,
    "IfcUShapeProfileDef": rolled_outlines.channel,
    "IfcLShapeProfileDef": rolled_outlines.angle,
    "IfcCShapeProfileDef": rolled_outlines.lipped_channel,
    "IfcZShapeProfileDef": rolled_outlines.zed,
    "IfcCraneRailAShapeProfileDef": rolled_outlines.rail_a,
    "IfcCraneRailFShapeProfileDef": rolled_outlines.rail_f,
}
