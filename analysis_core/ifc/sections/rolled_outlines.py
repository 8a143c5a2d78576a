"""Outlines of I, T, channel, angle, lipped channel, Z and rail profiles.

Where a flange tapers, its thickness is taken a quarter of the flange width from the tip (I, T) or
half-way along the flange (channel), a leg's half-way (angle, web of a T): the places where DIN
1024, 1025-1 and 1026-1 measure it; the standard itself leaves it open.
"""

from __future__ import annotations

from itertools import pairwise
from typing import Any, NamedTuple

from analysis_core.ifc.geometry import outline
from analysis_core.ifc.geometry.paths import Measures
from analysis_core.ifc.sections.drawn import Corner, Drawn, lengths, optional, slope_of
from analysis_core.ifc.unreadable import UnreadableShapeError


def i_shape(profile: Any, measures: Measures) -> Drawn:
    """Draw an IfcIShapeProfileDef."""
    width, depth, web, flange = lengths(
        profile, measures, "OverallWidth", "OverallDepth", "WebThickness", "FlangeThickness"
    )
    fillet = optional(profile, measures, "FilletRadius")
    edge = optional(profile, measures, "FlangeEdgeRadius")
    slope = slope_of(profile, measures, "FlangeSlope")
    same = _Flange(width, flange, fillet, edge, slope)
    return _draw_i(depth, web, bottom=same, top=same)


def asymmetric_i_shape(profile: Any, measures: Measures) -> Drawn:
    """Draw an IfcAsymmetricIShapeProfileDef, as IFC2X3 or later states it."""
    if hasattr(profile, "BottomFlangeWidth"):
        below, edges = "BottomFlange", ("BottomFlangeEdgeRadius", "BottomFlangeSlope")
    else:  # IFC2X3 states the bottom flange as that of the symmetric shape
        below, edges = "", ("", "")
    names = (
        ("BottomFlangeWidth", "BottomFlangeThickness", "BottomFlangeFilletRadius")
        if below
        else ("OverallWidth", "FlangeThickness", "FilletRadius")
    )
    depth, web, width = lengths(profile, measures, "OverallDepth", "WebThickness", names[0])
    (thickness,) = lengths(profile, measures, names[1])
    (top_width,) = lengths(profile, measures, "TopFlangeWidth")
    bottom = _Flange(
        width,
        thickness,
        optional(profile, measures, names[2]),
        optional(profile, measures, edges[0]) if below else 0.0,
        slope_of(profile, measures, edges[1]) if below else 0.0,
    )
    top = _Flange(
        top_width,
        # A missing thickness of the top flange means that of the bottom flange.
        optional(profile, measures, "TopFlangeThickness") or thickness,
        optional(profile, measures, "TopFlangeFilletRadius"),
        optional(profile, measures, "TopFlangeEdgeRadius"),
        slope_of(profile, measures, "TopFlangeSlope"),
    )
    return _draw_i(depth, web, bottom=bottom, top=top)


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


def _draw_i(depth: float, web: float, *, bottom: _Flange, top: _Flange) -> Drawn:
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


def tee(profile: Any, measures: Measures) -> Drawn:
    """Draw an IfcTShapeProfileDef: flange up."""
    depth, width, web, flange = lengths(
        profile, measures, "Depth", "FlangeWidth", "WebThickness", "FlangeThickness"
    )
    if flange >= depth or web >= width:
        raise UnreadableShapeError("the flange or the web of a T-section does not fit into it")
    fillet, edge, toe = (
        optional(profile, measures, name)
        for name in ("FilletRadius", "FlangeEdgeRadius", "WebEdgeRadius")
    )
    slope = slope_of(profile, measures, "FlangeSlope")
    taper = slope_of(profile, measures, "WebSlope")
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


def channel(profile: Any, measures: Measures) -> Drawn:
    """Draw an IfcUShapeProfileDef: open to the right."""
    depth, width, web, flange = lengths(
        profile, measures, "Depth", "FlangeWidth", "WebThickness", "FlangeThickness"
    )
    if 2.0 * flange >= depth or web >= width:
        raise UnreadableShapeError("the flanges or the web of a channel do not fit into it")
    fillet, edge = (optional(profile, measures, n) for n in ("FilletRadius", "EdgeRadius"))
    slope = slope_of(profile, measures, "FlangeSlope")
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


def angle(profile: Any, measures: Measures) -> Drawn:
    """Draw an IfcLShapeProfileDef: corner at the lower left."""
    depth, thickness = lengths(profile, measures, "Depth", "Thickness")
    width = optional(profile, measures, "Width") or depth
    if thickness >= min(width, depth):
        raise UnreadableShapeError("the legs of an angle are thicker than they are long")
    fillet, edge = (optional(profile, measures, n) for n in ("FilletRadius", "EdgeRadius"))
    slope = slope_of(profile, measures, "LegSlope")
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


def lipped_channel(profile: Any, measures: Measures) -> Drawn:
    """Draw an IfcCShapeProfileDef: open to the right."""
    depth, width, wall, girth = lengths(
        profile, measures, "Depth", "Width", "WallThickness", "Girth"
    )
    inner = optional(profile, measures, "InternalFilletRadius")
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


def zed(profile: Any, measures: Measures) -> Drawn:
    """Draw an IfcZShapeProfileDef, its flange counted from the outer face of the web."""
    depth, flange_width, web, flange = lengths(
        profile, measures, "Depth", "FlangeWidth", "WebThickness", "FlangeThickness"
    )
    if 2.0 * flange >= depth or web >= flange_width:
        raise UnreadableShapeError("the flanges or the web of a Z-section do not fit into it")
    fillet, edge = (optional(profile, measures, n) for n in ("FilletRadius", "EdgeRadius"))
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


def rail_a(profile: Any, measures: Measures) -> Drawn:
    """Crane rail with a wide foot (DIN 536-1): head, web, two-step foot; roundings left out."""
    height, base, head, head2, head3, web, base4, depth1, depth2, depth3 = lengths(
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


def rail_f(profile: Any, measures: Measures) -> Drawn:
    """Crane rail with a flat foot (DIN 536-2): head, web and foot of one width."""
    height, head, head2, head3, web, depth1, depth2 = lengths(
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
