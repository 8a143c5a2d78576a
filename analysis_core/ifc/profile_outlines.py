"""Parametric profiles of the standard as outlines with named dimensions.

Each profile is drawn about the centre of its bounding box, x to the right and y up, as the
standard places it.  Where a flange tapers, its thickness is taken a quarter of the flange width
from the tip (I, T) or half-way along the flange (channel), a leg's half-way (angle, web of a T):
the places where DIN 1024, 1025-1 and 1026-1 measure it; the standard itself leaves it open.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from itertools import pairwise
from typing import Any, NamedTuple

from analysis_core.ifc import outline
from analysis_core.ifc.curves import Measures
from analysis_core.ifc.outline import Loops
from analysis_core.ifc.unreadable import UnreadableShapeError


class Drawn(NamedTuple):
    """An outline with the shape's name, its dimensions (m) by name, and how it is turned.

    The named dimensions hold in the shape's own axes (depth along its y); ``roll`` is the angle
    by which those are turned anticlockwise.  ``exact`` is False where chords stand for curves
    or details were left out.
    """

    loops: Loops
    shape: str
    dimensions: Mapping[str, float]
    roll: float = 0.0
    exact: bool = True


Corner = tuple[float, float, float]


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


def _lengths(profile: Any, measures: Measures, *names: str) -> list[float]:
    values = []
    for name in names:
        value = getattr(profile, name)
        if value is None or not value > 0.0:
            raise UnreadableShapeError(
                f"{profile.is_a()} has {name} = {value}; it must be greater than zero"
            )
        values.append(value * measures.length)
    return values


def _optional(profile: Any, measures: Measures, name: str) -> float:
    return (getattr(profile, name, None) or 0.0) * measures.length


def _slope(profile: Any, measures: Measures, name: str) -> float:
    slope = getattr(profile, name, None) or 0.0
    return math.tan(slope * measures.angle) if slope else 0.0


def _box(width: float, depth: float, radius: float = 0.0) -> outline.Floats:
    x, y = 0.5 * width, 0.5 * depth
    return outline.rounded([(-x, -y, radius), (x, -y, radius), (x, y, radius), (-x, y, radius)])


def _rectangle(profile: Any, measures: Measures) -> Drawn:
    width, depth = _lengths(profile, measures, "XDim", "YDim")
    radius = _optional(profile, measures, "RoundingRadius")
    dimensions = {"width": width, "depth": depth}
    if radius:
        dimensions["corner_radius"] = radius
    return Drawn((_box(width, depth, radius),), "rectangle", dimensions)


def _hollow_rectangle(profile: Any, measures: Measures) -> Drawn:
    width, depth, wall = _lengths(profile, measures, "XDim", "YDim", "WallThickness")
    if 2.0 * wall >= min(width, depth):
        raise UnreadableShapeError("the walls of a hollow rectangle fill it")
    outer = _optional(profile, measures, "OuterFilletRadius")
    inner = _optional(profile, measures, "InnerFilletRadius")
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
    (radius,) = _lengths(profile, measures, "Radius")
    size = 2.0 * radius
    dimensions = {"diameter": size, "width": size, "depth": size}
    return Drawn((outline.circle(radius),), "circle", dimensions)


def _tube(profile: Any, measures: Measures) -> Drawn:
    radius, wall = _lengths(profile, measures, "Radius", "WallThickness")
    if wall >= radius:
        raise UnreadableShapeError("the wall of a tube fills it")
    void = outline.clockwise(outline.circle(radius - wall))
    size = 2.0 * radius
    dimensions = {"diameter": size, "width": size, "depth": size, "wall_thickness": wall}
    return Drawn((outline.circle(radius), void), "tube", dimensions)


def _ellipse(profile: Any, measures: Measures) -> Drawn:
    a, b = _lengths(profile, measures, "SemiAxis1", "SemiAxis2")
    chords = outline.flattened(outline.circle(1.0), chords=240)
    # Chords inside the curve lose (2/3) (pi/n)² of the area: swell them by half of that.
    swell = 1.0 / math.sqrt(math.sin(2.0 * math.pi / 240) / (2.0 * math.pi / 240))
    chords[:, 0] *= a * swell
    chords[:, 1] *= b * swell
    return Drawn((chords,), "ellipse", {"width": 2.0 * a, "depth": 2.0 * b})


def _trapezium(profile: Any, measures: Measures) -> Drawn:
    bottom, top, depth = _lengths(profile, measures, "BottomXDim", "TopXDim", "YDim")
    offset = (profile.TopXOffset or 0.0) * measures.length
    x, y = 0.5 * bottom, 0.5 * depth
    rows = outline.loop([(-x, -y), (x, -y), (-x + offset + top, y), (-x + offset, y)])
    width = max(x, -x + offset + top) - min(-x, -x + offset)
    dimensions = {"width": width, "depth": depth, "bottom_width": bottom, "top_width": top}
    return Drawn((rows,), "trapezium", dimensions)


def _i_shape(profile: Any, measures: Measures) -> Drawn:
    width, depth, web, flange = _lengths(
        profile, measures, "OverallWidth", "OverallDepth", "WebThickness", "FlangeThickness"
    )
    fillet = _optional(profile, measures, "FilletRadius")
    edge = _optional(profile, measures, "FlangeEdgeRadius")
    slope = _slope(profile, measures, "FlangeSlope")
    same = _Flange(width, flange, fillet, edge, slope)
    return draw_i(depth, web, bottom=same, top=same)


def _asymmetric_i_shape(profile: Any, measures: Measures) -> Drawn:
    if hasattr(profile, "BottomFlangeWidth"):
        below, edges = "BottomFlange", ("BottomFlangeEdgeRadius", "BottomFlangeSlope")
    else:  # IFC2X3 states the bottom flange as that of the symmetric shape
        below, edges = "", ("", "")
    names = (
        ("BottomFlangeWidth", "BottomFlangeThickness", "BottomFlangeFilletRadius")
        if below
        else ("OverallWidth", "FlangeThickness", "FilletRadius")
    )
    depth, web, width = _lengths(profile, measures, "OverallDepth", "WebThickness", names[0])
    (thickness,) = _lengths(profile, measures, names[1])
    (top_width,) = _lengths(profile, measures, "TopFlangeWidth")
    bottom = _Flange(
        width,
        thickness,
        _optional(profile, measures, names[2]),
        _optional(profile, measures, edges[0]) if below else 0.0,
        _slope(profile, measures, edges[1]) if below else 0.0,
    )
    top = _Flange(
        top_width,
        # A missing thickness of the top flange means that of the bottom flange.
        _optional(profile, measures, "TopFlangeThickness") or thickness,
        _optional(profile, measures, "TopFlangeFilletRadius"),
        _optional(profile, measures, "TopFlangeEdgeRadius"),
        _slope(profile, measures, "TopFlangeSlope"),
    )
    return draw_i(depth, web, bottom=bottom, top=top)


class _Flange(NamedTuple):
    width: float
    thickness: float
    fillet: float = 0.0
    edge: float = 0.0
    slope: float = 0.0

    def right_half(self, web: float) -> list[Corner]:
        """Corners of the right half of a bottom flange, its outer face at y = 0, upwards."""
        tip, face = 0.5 * self.width, 0.5 * web
        at_tip = self.thickness + self.slope * (0.25 * self.width - tip)
        at_web = self.thickness + self.slope * (0.25 * self.width - face)
        return [(tip, 0.0, 0.0), (tip, at_tip, self.edge), (face, at_web, self.fillet)]


def draw_i(depth: float, web: float, *, bottom: _Flange, top: _Flange) -> Drawn:
    """Draw an I-section, its flanges centred on the web."""
    if bottom.thickness + top.thickness >= depth or web > min(bottom.width, top.width):
        raise UnreadableShapeError("the flanges or the web of an I-section do not fit into it")
    y = 0.5 * depth
    right = [(px, -y + py, r) for px, py, r in bottom.right_half(web)]
    right += [(px, y - py, r) for px, py, r in reversed(top.right_half(web))]
    corners = right + [(-px, py, r) for px, py, r in reversed(right)]
    dimensions = {"width": max(bottom.width, top.width), "depth": depth, "web_thickness": web}
    for name, flange in (("top", top), ("bottom", bottom)):
        dimensions[f"{name}_flange_width"] = flange.width
        dimensions[f"{name}_flange_thickness"] = flange.thickness
        dimensions[f"{name}_fillet_radius"] = flange.fillet
    if bottom == top:
        dimensions["flange_thickness"] = bottom.thickness
        dimensions["fillet_radius"] = bottom.fillet
    return Drawn((outline.rounded(corners),), "I", dimensions)


def _tee(profile: Any, measures: Measures) -> Drawn:
    depth, width, web, flange = _lengths(
        profile, measures, "Depth", "FlangeWidth", "WebThickness", "FlangeThickness"
    )
    if flange >= depth or web >= width:
        raise UnreadableShapeError("the flange or the web of a T-section does not fit into it")
    fillet, edge, toe = (
        _optional(profile, measures, name)
        for name in ("FilletRadius", "FlangeEdgeRadius", "WebEdgeRadius")
    )
    slope = _slope(profile, measures, "FlangeSlope")
    taper = _slope(profile, measures, "WebSlope")
    x, y = 0.5 * width, 0.5 * depth

    # The web's half thickness at height v, and the flange's thickness at distance u.
    def half(v: float) -> float:
        return 0.5 * web + taper * v

    def under(u: float) -> float:
        return y - flange - slope * (0.5 * x - u)

    junction = under(half(y - flange))
    right = [
        (half(-y), -y, toe),
        (half(junction), junction, fillet),
        (x, under(x), edge),
        (x, y, 0.0),
    ]
    corners = right + [(-px, py, r) for px, py, r in reversed(right)]
    return Drawn(
        (outline.rounded(corners),),
        "tee",
        {
            "width": width,
            "depth": depth,
            "web_thickness": web,
            "flange_thickness": flange,
            "fillet_radius": fillet,
        },
    )


def _channel(profile: Any, measures: Measures) -> Drawn:
    depth, width, web, flange = _lengths(
        profile, measures, "Depth", "FlangeWidth", "WebThickness", "FlangeThickness"
    )
    if 2.0 * flange >= depth or web >= width:
        raise UnreadableShapeError("the flanges or the web of a channel do not fit into it")
    fillet, edge = (_optional(profile, measures, n) for n in ("FilletRadius", "EdgeRadius"))
    slope = _slope(profile, measures, "FlangeSlope")
    x, y = 0.5 * width, 0.5 * depth
    at_tip, at_web = flange - slope * x, flange + slope * (x - web)
    lower = [
        (-x, -y, 0.0),
        (x, -y, 0.0),
        (x, -y + at_tip, edge),
        (-x + web, -y + at_web, fillet),
    ]
    corners = lower + [(px, -py, r) for px, py, r in reversed(lower)]
    return Drawn(
        (outline.rounded(corners),),
        "channel",
        {
            "width": width,
            "depth": depth,
            "web_thickness": web,
            "flange_thickness": flange,
            "fillet_radius": fillet,
        },
    )


def _angle(profile: Any, measures: Measures) -> Drawn:
    depth, thickness = _lengths(profile, measures, "Depth", "Thickness")
    width = _optional(profile, measures, "Width") or depth
    if thickness >= min(width, depth):
        raise UnreadableShapeError("the legs of an angle are thicker than they are long")
    fillet, edge = (_optional(profile, measures, n) for n in ("FilletRadius", "EdgeRadius"))
    slope = _slope(profile, measures, "LegSlope")
    x, y = 0.5 * width, 0.5 * depth
    # Inner faces: y = a + m (x - middle), both legs by the same slope, meeting at the root.
    lower_tip = -y + thickness - slope * x
    left_tip = -x + thickness - slope * y
    root_x, root_y = _meeting(lower_tip, left_tip, slope, x, y)
    corners = [
        (-x, -y, 0.0),
        (x, -y, 0.0),
        (x, lower_tip, edge),
        (root_x, root_y, fillet),
        (left_tip, y, edge),
        (-x, y, 0.0),
    ]
    dimensions = {"width": width, "depth": depth, "thickness": thickness, "fillet_radius": fillet}
    return Drawn((outline.rounded(corners),), "angle", dimensions)


def _meeting(lower: float, left: float, slope: float, x: float, y: float) -> tuple[float, float]:
    """Where ``v = lower + slope (x - u)`` meets ``u = left + slope (y - v)``."""
    u = (left + slope * (y - lower - slope * x)) / (1.0 - slope * slope)
    return u, lower + slope * (x - u)


def _lipped_channel(profile: Any, measures: Measures) -> Drawn:
    depth, width, wall, girth = _lengths(
        profile, measures, "Depth", "Width", "WallThickness", "Girth"
    )
    inner = _optional(profile, measures, "InternalFilletRadius")
    outer = inner + wall if inner else 0.0
    x, y = 0.5 * width, 0.5 * depth
    if 2.0 * girth >= depth or 2.0 * wall >= min(width, depth):
        raise UnreadableShapeError("the lips of a lipped channel do not fit into it")
    lower = [
        (-x, -y, outer),
        (x, -y, outer),
        (x, -y + girth, 0.0),
        (x - wall, -y + girth, 0.0),
        (x - wall, -y + wall, inner),
        (-x + wall, -y + wall, inner),
    ]
    corners = lower + [(px, -py, r) for px, py, r in reversed(lower)]
    return Drawn(
        (outline.rounded(corners),),
        "lipped channel",
        {
            "width": width,
            "depth": depth,
            "thickness": wall,
            "lip": girth,
            "inner_radius": inner,
        },
    )


def _zed(profile: Any, measures: Measures) -> Drawn:
    depth, flange_width, web, flange = _lengths(
        profile, measures, "Depth", "FlangeWidth", "WebThickness", "FlangeThickness"
    )
    if 2.0 * flange >= depth or web >= flange_width:
        raise UnreadableShapeError("the flanges or the web of a Z-section do not fit into it")
    fillet, edge = (_optional(profile, measures, n) for n in ("FilletRadius", "EdgeRadius"))
    face, tip, y = 0.5 * web, flange_width - 0.5 * web, 0.5 * depth
    half = [
        (-face, -y, 0.0),
        (tip, -y, 0.0),
        (tip, -y + flange, edge),
        (face, -y + flange, fillet),
    ]
    corners = half + [(-px, -py, r) for px, py, r in half]
    return Drawn(
        (outline.rounded(corners),),
        "zed",
        {
            "width": 2.0 * flange_width - web,
            "depth": depth,
            "web_thickness": web,
            "flange_thickness": flange,
            "flange_width": flange_width,
            "fillet_radius": fillet,
        },
    )


def _rail_a(profile: Any, measures: Measures) -> Drawn:
    """Crane rail with a wide foot (DIN 536-1): head, web, two-step foot; roundings left out."""
    height, base, head, head2, head3, web, base4, depth1, depth2, depth3 = _lengths(
        profile, measures, "OverallHeight", "BaseWidth2", "HeadWidth", "HeadDepth2", "HeadDepth3",
        "WebThickness", "BaseWidth4", "BaseDepth1", "BaseDepth2", "BaseDepth3",
    )  # fmt: skip
    y = 0.5 * height
    right = [
        (0.5 * base, -y, 0.0),
        (0.5 * base, -y + depth1, 0.0),
        (0.5 * base4, -y + depth2, 0.0),
        (0.5 * web, -y + depth3, 0.0),
        (0.5 * web, y - head3, 0.0),
        (0.5 * head, y - head2, 0.0),
        (0.5 * head, y, 0.0),
    ]
    return _rail(right, base, height, head, web)


def _rail_f(profile: Any, measures: Measures) -> Drawn:
    """Crane rail with a flat foot (DIN 536-2): head, web and foot of one width."""
    height, head, head2, head3, web, depth1, depth2 = _lengths(
        profile, measures, "OverallHeight", "HeadWidth", "HeadDepth2", "HeadDepth3",
        "WebThickness", "BaseDepth1", "BaseDepth2",
    )  # fmt: skip
    y = 0.5 * height
    right = [
        (0.5 * head, -y, 0.0),
        (0.5 * head, -y + depth1, 0.0),
        (0.5 * web, -y + depth2, 0.0),
        (0.5 * web, y - head3, 0.0),
        (0.5 * head, y - head2, 0.0),
        (0.5 * head, y, 0.0),
    ]
    return _rail(right, head, height, head, web)


def _rail(right: list[Corner], base: float, height: float, head: float, web: float) -> Drawn:
    if any(later[1] < earlier[1] for earlier, later in pairwise(right)):
        raise UnreadableShapeError("the parts of a crane rail are higher than the rail")
    corners = right + [(-px, py, r) for px, py, r in reversed(right)]
    return Drawn(
        (outline.rounded(corners),),
        "rail",
        {
            "width": max(base, head),
            "depth": height,
            "web_thickness": web,
            "head_width": head,
            "base_width": base,
        },
        exact=False,
    )


_DRAWERS: dict[str, Callable[[Any, Measures], Drawn]] = {
    "IfcRectangleProfileDef": _rectangle,
    "IfcRoundedRectangleProfileDef": _rectangle,
    "IfcRectangleHollowProfileDef": _hollow_rectangle,
    "IfcCircleProfileDef": _circle,
    "IfcCircleHollowProfileDef": _tube,
    "IfcEllipseProfileDef": _ellipse,
    "IfcTrapeziumProfileDef": _trapezium,
    "IfcIShapeProfileDef": _i_shape,
    "IfcAsymmetricIShapeProfileDef": _asymmetric_i_shape,
    "IfcTShapeProfileDef": _tee,
    "IfcUShapeProfileDef": _channel,
    "IfcLShapeProfileDef": _angle,
    "IfcCShapeProfileDef": _lipped_channel,
    "IfcZShapeProfileDef": _zed,
    "IfcCraneRailAShapeProfileDef": _rail_a,
    "IfcCraneRailFShapeProfileDef": _rail_f,
}
