"""Which products are beams at all: by proportion, slope and role, not by class name alone."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any

from analysis_core.ifc.physical.records import Record
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


class RoleJudge:
    """Judges elements by predefined type and by what they are part of."""

    def __init__(self, rules: BeamRules) -> None:
        self._rules = rules
        self._place_of_type: dict[str, int] = {}

    def excluded(self, record: Record, hosts: Iterable[Any]) -> str:
        """Return what an element is by its role where that is no beam, else ""."""
        if not self._rules.judge_by_role:
            return ""
        named = _NOT_BEAMS.get(self._predefined_type(record))
        if named:
            return named
        for host in hosts:
            for ifc_class, name in _HOSTS.items():
                if host.is_a(ifc_class):
                    return f"part of {name}"
        return ""

    def _predefined_type(self, record: Record) -> str:
        place = self._place_of_type.get(record.ifc_class)
        if place is None:
            entity = record.entity
            names = [entity.attribute_name(i) for i in range(len(entity))]
            place = names.index("PredefinedType") if "PredefinedType" in names else -1
            self._place_of_type[record.ifc_class] = place
        if place < 0:
            return ""
        value = record.entity.get_argument(place)
        return value if isinstance(value, str) else ""


def excluded_by_proportion(length: float, section: Section | None, rules: BeamRules) -> str:
    """Return what an element is by its proportions where that is no beam, else "".

    Where the section is unknown only the length counts.
    """
    if length < rules.least_length:
        return f"shorter than {rules.least_length:g} m"
    if section is None or section.depth <= 0.0 or section.width <= 0.0:
        return ""
    depth, width = section.depth, section.width
    largest, smallest = max(depth, width), min(depth, width)
    if largest < rules.least_depth:
        return f"thinner than {rules.least_depth * 1e3:g} mm (rods, strips, anchors)"
    solid = section.area > 0.6 * depth * width
    if solid and smallest < rules.least_thickness:
        return f"a plate or strip thinner than {rules.least_thickness * 1e3:g} mm"
    if length < rules.least_slenderness * largest:
        return f"shorter than {rules.least_slenderness:g} times its depth or width"
    if solid and depth > rules.panel_depth and depth > 4.0 * width:
        return f"a wall panel (solid, deeper than {rules.panel_depth:g} m)"
    if solid and width > rules.slab_width and width > 4.0 * depth:
        return f"a slab strip (solid, wider than {rules.slab_width:g} m)"
    return ""


def carrier_label(reason: str) -> str:
    """Return what something left out may still be to beams that rest on it, "" if nothing."""
    if reason.startswith("a wall panel"):
        return "wall panel"
    if reason.startswith("a slab strip"):
        return "slab strip"
    return ""
