"""Profiles of the standard made from the shapes of a section table."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any

from analysis_core.settings import TableSection

# Class and attributes of the standard for each shape of a section table.
_CLASSES: dict[str, tuple[str, Mapping[str, str]]] = {
    "I": ("IfcIShapeProfileDef", {
        "OverallDepth": "depth", "OverallWidth": "width", "WebThickness": "web_thickness",
        "FlangeThickness": "flange_thickness", "FilletRadius": "fillet_radius"}),
    "rectangle": ("IfcRectangleProfileDef", {"YDim": "depth", "XDim": "width"}),
    "hollow rectangle": ("IfcRectangleHollowProfileDef", {
        "YDim": "depth", "XDim": "width", "WallThickness": "wall_thickness",
        "OuterFilletRadius": "outer_radius", "InnerFilletRadius": "inner_radius"}),
    "tube": ("IfcCircleHollowProfileDef", {
        "Radius": "diameter", "WallThickness": "wall_thickness"}),
    "circle": ("IfcCircleProfileDef", {"Radius": "diameter"}),
    "channel": ("IfcUShapeProfileDef", {
        "Depth": "depth", "FlangeWidth": "width", "WebThickness": "web_thickness",
        "FlangeThickness": "flange_thickness", "FilletRadius": "fillet_radius"}),
    "tee": ("IfcTShapeProfileDef", {
        "Depth": "depth", "FlangeWidth": "width", "WebThickness": "web_thickness",
        "FlangeThickness": "flange_thickness", "FilletRadius": "fillet_radius"}),
    "angle": ("IfcLShapeProfileDef", {
        "Depth": "depth", "Width": "width", "Thickness": "thickness",
        "FilletRadius": "fillet_radius"}),
}  # fmt: skip


def made_profile(
    new: Callable[..., Any], stated: TableSection, *, length: float, digits: int = 9
) -> Any:
    """Return a profile made with ``new(class, **attributes)``; ``length``: the file's unit in m."""
    ifc_class, attributes = _CLASSES[stated.shape]
    values = {}
    for attribute, ours in attributes.items():
        if ours in stated.dimensions:
            value = stated.dimensions[ours] / length
            # The standard wants the radius where the trade states the diameter.
            values[attribute] = round(value / 2 if attribute == "Radius" else value, digits)
    origin = new("IfcCartesianPoint", Coordinates=(0.0, 0.0))
    return new(
        ifc_class, ProfileType="AREA", ProfileName=stated.name,
        Position=new("IfcAxis2Placement2D", Location=origin), **values,
    )  # fmt: skip
