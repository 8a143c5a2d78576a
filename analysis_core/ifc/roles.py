"""Which products are beams at all: by proportion, slope and role, not by class name alone."""

from __future__ import annotations

import math
from collections.abc import Iterable
from typing import Any, NamedTuple

from analysis_core.model import Section
from analysis_core.settings import BeamRules

_NOT_BEAMS = {
    "MULLION": "a mullion",
    "PLATE": "a plate by its predefined type",
    "STIFFENING_RIB": "a stiffening rib",
    "CORNICE": "a cornice",
    "BRACE": "a brace",
    "STRUT": "a strut",
    "TIEBAR": "a tie",
    "STAY_CABLE": "a cable",
    "SUSPENSION_CABLE": "a cable",
    "SUSPENDER": "a hanger",
    "STRUCTURALCABLE": "a cable",
}
_HOSTS = {
    "IfcCurtainWall": "a curtain wall",
    "IfcRailing": "a railing",
    "IfcWindow": "a window",
    "IfcDoor": "a door",
    "IfcCovering": "a covering",
    "IfcFurnishingElement": "furniture",
    "IfcFurniture": "furniture",
    "IfcDistributionElement": "a building service",
}


class Sizes(NamedTuple):
    """What proportions are judged by, in m and rad: length, slope, and the section's extents."""

    length: float
    slope: float
    depth: float
    width: float
    solid: bool

    @classmethod
    def of(cls, length: float, rise: float, section: Section | None) -> Sizes:
        """Return the sizes of a member of that length that rises by ``rise``."""
        slope = math.asin(min(1.0, abs(rise) / length)) if length > 0.0 else 0.0
        if section is None:
            return cls(length, slope, 0.0, 0.0, False)
        fill = section.area / max(section.depth * section.width, 1e-12)
        return cls(length, slope, section.depth, section.width, fill > 0.6)


def excluded_by_role(entity: Any, hosts: Iterable[Any], rules: BeamRules) -> str:
    """Return what an element is by its role where that is no beam, else ""."""
    if not rules.judge_by_role:
        return ""
    named = _NOT_BEAMS.get(predefined_type(entity))
    if named:
        return named
    for host in hosts:
        for ifc_class, name in _HOSTS.items():
            if host.is_a(ifc_class):
                return f"part of {name}"
    return ""


def excluded_by_proportion(sizes: Sizes, rules: BeamRules) -> str:
    """Return what an element is by its proportions where that is no beam, else "".

    Where the section is unknown only the length counts.
    """
    if sizes.length < rules.least_length:
        return f"shorter than {rules.least_length:g} m"
    largest, smallest = max(sizes.depth, sizes.width), min(sizes.depth, sizes.width)
    if largest <= 0.0:
        return ""
    if largest < rules.least_depth:
        return f"thinner than {rules.least_depth * 1e3:g} mm (rods, strips, anchors)"
    if sizes.solid and smallest < rules.least_thickness:
        return f"a plate or strip thinner than {rules.least_thickness * 1e3:g} mm"
    if sizes.length < rules.least_slenderness * largest:
        return f"shorter than {rules.least_slenderness:g} times its depth or width"
    if sizes.solid and sizes.depth > rules.panel_depth and sizes.depth > 4.0 * sizes.width:
        return f"a wall panel (solid, deeper than {rules.panel_depth:g} m)"
    if sizes.solid and sizes.width > rules.slab_width and sizes.width > 4.0 * sizes.depth:
        return f"a slab strip (solid, wider than {rules.slab_width:g} m)"
    return ""


def carrier_label(reason: str) -> str:
    """Return what something left out may still be to beams that rest on it, "" if nothing."""
    if reason.startswith("a wall panel"):
        return "wall panel"
    if reason.startswith("a slab strip"):
        return "slab strip"
    return ""


def predefined_type(entity: Any) -> str:
    """Return the PredefinedType of an element, "" where its schema or the file has none."""
    value = getattr(entity, "PredefinedType", None)
    return value if isinstance(value, str) and value != "NOTDEFINED" else ""
