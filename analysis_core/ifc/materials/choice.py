"""What a material association means for a beam: one material, a profile, a cardinal point."""

from __future__ import annotations

import re
from collections.abc import Sequence
from typing import Any, NamedTuple

_DEEPEST_NESTING = 10
_CORE_WORDS = re.compile(r"load|bear|struct|core|trag|kern|body|main|frame|web|beam", re.IGNORECASE)


class Choice(NamedTuple):
    """The material chosen from an association, and the profile that goes with it.

    ``cardinal_point`` says which point of the profile lies on the axis (1 to 19, as
    IfcMaterialProfileSetUsage numbers them; 0: not stated).  ``note`` says how one of several
    materials was chosen.
    """

    material: Any = None
    profile: Any = None
    end_profile: Any = None
    cardinal_point: int = 0
    note: str = ""


NO_CHOICE = Choice()


def choose(select: Any, depth: int = 0) -> Choice:
    """Return what an IfcMaterialSelect says for a beam or column."""
    if select is None or depth > _DEEPEST_NESTING:
        return NO_CHOICE
    kind = select.is_a()
    if kind == "IfcMaterial":
        return Choice(select)
    if kind in ("IfcMaterialProfileSetUsage", "IfcMaterialProfileSetUsageTapering"):
        found = choose(select.ForProfileSet, depth + 1)
        end = getattr(select, "ForProfileEndSet", None)
        return found._replace(
            cardinal_point=int(select.CardinalPoint or 0),
            end_profile=choose(end, depth + 1).profile if end else None,
        )
    if kind == "IfcMaterialProfileSet":
        return _of_profiles(select)
    if kind in ("IfcMaterialProfile", "IfcMaterialProfileWithOffsets"):
        return Choice(select.Material, select.Profile)
    if kind == "IfcMaterialLayerSetUsage":
        return choose(select.ForLayerSet, depth + 1)
    if kind == "IfcMaterialLayerSet":
        return _of_layers(select.MaterialLayers)
    if kind in ("IfcMaterialLayer", "IfcMaterialLayerWithOffsets", "IfcMaterialConstituent"):
        return Choice(select.Material)
    if kind == "IfcMaterialConstituentSet":
        return _of_constituents(select.MaterialConstituents or ())
    if kind == "IfcMaterialList":
        materials = select.Materials or ()
        return _first_of(list(materials), [m.Name for m in materials], "list")
    return NO_CHOICE


def _of_profiles(profile_set: Any) -> Choice:
    profiles = profile_set.MaterialProfiles or ()
    if not profiles:
        return NO_CHOICE
    composite = profile_set.CompositeProfile
    materials = [p.Material for p in profiles if p.Material is not None]
    names = list(dict.fromkeys(m.Name for m in materials))
    note = ""
    if len(profiles) > 1 and len(names) > 1:
        note = f"of {len(names)} materials in its profile set, '{names[0]}' was taken for all"
    if len(profiles) > 1 and composite is None:
        more = f"of {len(profiles)} profiles in its profile set, the first was taken"
        note = f"{note}; {more}" if note else more
    return Choice(
        materials[0] if materials else None,
        composite if composite is not None else profiles[0].Profile,
        note=note,
    )


def _of_layers(layers: Sequence[Any]) -> Choice:
    solid = [layer for layer in layers if layer.Material is not None]
    if not solid:
        return NO_CHOICE
    thickest = max(solid, key=lambda layer: layer.LayerThickness or 0.0)
    note = ""
    if len({layer.Material.Name for layer in solid}) > 1:
        note = f"of {len(solid)} layers, the thickest ('{thickest.Material.Name}') was taken"
    return Choice(thickest.Material, note=note)


def _of_constituents(constituents: Sequence[Any]) -> Choice:
    usable = [c for c in constituents if c.Material is not None]
    usable.sort(key=lambda c: -(c.Fraction or 0.0))
    core = [c for c in usable if _CORE_WORDS.search(f"{c.Name or ''} {c.Category or ''}")]
    ordered = core or usable
    return _first_of([c.Material for c in ordered], [c.Material.Name for c in usable], "set")


def _first_of(materials: list[Any], names: Sequence[str], what: str) -> Choice:
    if not materials:
        return NO_CHOICE
    note = ""
    if len(set(names)) > 1:
        listed = ", ".join(f"'{name}'" for name in dict.fromkeys(names))
        note = f"of the materials in its {what} ({listed}), '{materials[0].Name}' was taken"
    return Choice(materials[0], note=note)
