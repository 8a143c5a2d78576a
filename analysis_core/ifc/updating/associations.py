"""Material associations, and the profile properties of IFC2X3, with something else in them."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from analysis_core.ifc.materials.choice import Choice, choose
from analysis_core.ifc.updating.editor import Editor

_DEEPEST_NESTING = 10


def associate(
    editor: Editor,
    objects: Sequence[Any],
    inherited: Mapping[int, Any],
    *,
    profile: Any = None,
    material: Any = None,
) -> dict[int, str]:
    """Give objects another profile or material; return what was changed, by entity number.

    ``objects`` are elements, members and types; ``inherited`` gives, by entity number, the
    association that an object without its own has from its type.  An association that others
    share stays theirs.
    """
    done: dict[int, str] = {}
    numbers = {o.id() for o in objects}
    name = profile.ProfileName if profile is not None else material.Name
    made: dict[int, Any] = {}

    def changed(select: Any) -> Any:
        if select.id() not in made:
            own = all(
                u.is_a("IfcRelAssociatesMaterial")
                and {o.id() for o in u.RelatedObjects or ()} <= numbers
                for u in editor.users(select)
            )
            made[select.id()] = _changed(editor, select, profile, material, own=own)
        return made[select.id()]

    for relation in editor.file.by_type("IfcRelAssociatesMaterial"):
        select = relation.RelatingMaterial
        mine = [o for o in relation.RelatedObjects or () if o.id() in numbers]
        if not mine or select is None:
            continue
        done |= {o.id(): "" for o in mine}
        old = _told(choose(select), profile)
        if (other := changed(select)) is not None:
            if other != select:
                editor.move(relation, f"{mine[0][0]}/{name}", mine, RelatingMaterial=other)
            done |= {o.id(): old for o in mine}
    for each in objects:
        select = inherited.get(each.id())
        if each.id() in done or select is None or each.is_a("IfcTypeObject"):
            continue
        old = _told(choose(select), profile)
        if (other := changed(select)) is not None:
            _relate(editor, each, name, other)
            done[each.id()] = old
    return {number: text for number, text in done.items() if text}


def associate_anew(editor: Editor, element: Any, *, profile: Any, material: Any) -> None:
    """Give an element that names no profile an association that does (from IFC4 on)."""
    with_material = {} if material is None else {"Material": material}
    name = profile.ProfileName
    one = editor.new("IfcMaterialProfile", Name=name, Profile=profile, **with_material)
    whole = editor.new("IfcMaterialProfileSet", Name=name, MaterialProfiles=[one])
    for relation in editor.file.by_type("IfcRelAssociatesMaterial"):
        if element in (relation.RelatedObjects or ()):
            editor.move(relation, f"{element[0]}/{name}", [element], RelatingMaterial=whole)
            return
    _relate(editor, element, name, whole)


def associate_properties(editor: Editor, elements: Sequence[Any], profile: Any) -> dict[int, str]:
    """Give members of an IFC2X3 file the properties of another profile; return as above."""
    done: dict[int, str] = {}
    numbers = {e.id() for e in elements}
    for relation in editor.file.by_type("IfcRelAssociatesProfileProperties"):
        mine = [e for e in relation.RelatedObjects or () if e.id() in numbers]
        if mine:
            old = relation.RelatingProfileProperties
            editor.move(
                relation, f"{mine[0][0]}/{profile.ProfileName}", mine,
                RelatingProfileProperties=_properties(editor, profile),
            )  # fmt: skip
            done |= {e.id(): (old[0] if old is not None else "") or "not named" for e in mine}
    for element in elements:
        if element.id() not in done and element.is_a("IfcStructuralMember"):
            editor.rooted(
                "IfcRelAssociatesProfileProperties", f"{element[0]}/{profile.ProfileName}",
                RelatedObjects=[element], RelatingProfileProperties=_properties(editor, profile),
            )  # fmt: skip
            done[element.id()] = "none"
    return done


def _properties(editor: Editor, profile: Any) -> Any:
    for user in editor.users(profile):
        if user.is_a("IfcProfileProperties"):
            return user
    return editor.new(
        "IfcGeneralProfileProperties", ProfileName=profile.ProfileName, ProfileDefinition=profile
    )


def _relate(editor: Editor, element: Any, name: str, select: Any) -> None:
    editor.rooted(
        "IfcRelAssociatesMaterial", f"{element[0]}/{name}",
        RelatedObjects=[element], RelatingMaterial=select,
    )  # fmt: skip


def _changed(editor: Editor, select: Any, profile: Any, material: Any, *, own: bool) -> Any:
    """The association with the profile or material exchanged; None where it holds none.

    A usage that no others have (``own``) is changed itself: it may not be left without users.
    """
    old = choose(select)
    swaps: dict[int, Any] = {}
    names: dict[str, str] = {}
    if profile is not None:
        if old.profile is None:
            return None
        swaps[old.profile.id()] = profile
        names = _renamed(old.profile.ProfileName, profile.ProfileName)
    if material is not None:
        if old.material is None:
            return None
        swaps[old.material.id()] = material
        names |= _renamed(old.material.Name, material.Name)
    if own and select.is_a().startswith("IfcMaterial") and "Usage" in select.is_a():
        for attribute in ("ForProfileSet", "ForProfileEndSet", "ForLayerSet"):
            part = getattr(select, attribute, None)
            if part is not None and (other := _rebuilt(editor, part, swaps, names, 0)) is not None:
                editor.set(select, attribute, other)
        return select
    return _rebuilt(editor, select, swaps, names, 0)


def _renamed(old: str | None, new: str) -> dict[str, str]:
    return {old: new} if old else {}


def _rebuilt(
    editor: Editor, entity: Any, swaps: Mapping[int, Any], names: Mapping[str, str], depth: int
) -> Any:
    """A copy of what holds an exchanged entity; None where nothing below is exchanged."""
    if entity.id() in swaps:
        return swaps[entity.id()]
    if depth > _DEEPEST_NESTING or not entity.is_a().startswith("IfcMaterial"):
        return None
    changes: dict[str, Any] = {}
    for attribute, value in entity.get_info(recursive=False).items():
        if attribute in ("id", "type"):
            continue
        many = isinstance(value, tuple)
        parts = [v for v in (value if many else (value,)) if hasattr(v, "is_a")]
        built = [_rebuilt(editor, part, swaps, names, depth + 1) for part in parts]
        if any(b is not None for b in built):
            whole = [p if b is None else b for p, b in zip(parts, built, strict=True)]
            changes[attribute] = whole if many else whole[0]
    if not changes:
        return None
    for attribute in ("Name", "LayerSetName"):
        text = getattr(entity, attribute, None)
        if text is not None and text in names:
            changes[attribute] = names[text]
    return editor.copy(entity, **changes)


def _told(old: Choice, profile: Any) -> str:
    if profile is None:
        return (old.material.Name if old.material is not None else "") or "not named"
    return (old.profile.ProfileName if old.profile is not None else "") or "not named"
