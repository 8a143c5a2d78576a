"""From what the engineer chose to the changed bytes of the model, and a list of what changed."""

from __future__ import annotations

import tempfile
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from analysis_core.errors import IfcReadError, JobError
from analysis_core.ifc.materials.choice import choose
from analysis_core.ifc.relations import Relations
from analysis_core.ifc.source import open_model
from analysis_core.ifc.step.container import read_container
from analysis_core.ifc.step.index import StepIndex
from analysis_core.ifc.unreadable import READ_ERRORS, reason_of
from analysis_core.ifc.updating.associations import (
    associate,
    associate_anew,
    associate_properties,
)
from analysis_core.ifc.updating.chosen import Chooser
from analysis_core.ifc.updating.editor import Editor
from analysis_core.ifc.updating.shapes import Bodies, Sweep
from analysis_core.ifc.updating.statements import Statement, Statements
from analysis_core.ifc.updating.stock import alike
from analysis_core.model import Section
from analysis_core.settings import Settings


@dataclass(frozen=True, slots=True)
class Wish:
    """A profile or a material (by name) for some elements (by GlobalId).

    ``areas``: area of the section that each element is known to have, m²; ``density`` of its
    material, kg/m³.
    """

    elements: tuple[str, ...]
    profile: str = ""
    material: str = ""
    areas: Mapping[str, float] | None = None
    densities: Mapping[str, float] | None = None


@dataclass(frozen=True, slots=True)
class Change:
    """One thing that was changed in the model; ``new`` empty where it no longer fits."""

    element: str
    """GlobalId."""
    name: str
    what: str
    old: str
    new: str


@dataclass(frozen=True, slots=True)
class Updated:
    """The changed file in parts, in the wrapping of the old one, and all that was changed.

    ``expected``: area (m²) of the section that each element must have now.
    """

    parts: Sequence[bytes | memoryview]
    changes: tuple[Change, ...]
    expected: Mapping[str, float]


def update(path: str | Path, wishes: Iterable[Wish], settings: Settings) -> Updated:
    """Return the model at ``path``, which holds no results of ours, with what is wished for.

    Raises IfcReadError, and JobError where a name is not known or a body is no extrusion of its
    section.
    """
    stored = read_container(Path(path))
    base = stored.text
    name = Path(path).name
    with tempfile.TemporaryDirectory() as folder:
        copy = Path(folder) / f"{Path(path).stem}.ifc"
        copy.write_bytes(base)
        editor = Editor(open_model(copy))
        work = _Work(editor, settings)
        try:
            for wish in wishes:
                work.grant(wish)
        except READ_ERRORS as error:
            if isinstance(error, JobError):
                raise
            raise IfcReadError(
                f"'{name}' cannot be changed: {reason_of(error)}. Export it again, or change the "
                f"section where the model was made."
            ) from error
        index = StepIndex(base)
        if index.data_end is None:
            raise IfcReadError(f"'{name}' has no proper end; copy or export it again.")
        parts = [bytes(part) for part in editor.parts(index)]
    return Updated(list(stored.packed(parts)), tuple(work.changes), work.expected)


class _Work:
    def __init__(self, editor: Editor, settings: Settings) -> None:
        self._editor = editor
        self._chooser = Chooser(editor, settings)
        self._by_id = {e[0]: e for e in editor.file.by_type("IfcObject")}
        self._ties = _ties(editor.file)
        self.changes: list[Change] = []
        self.expected: dict[str, float] = {}

    def grant(self, wish: Wish) -> None:
        relations = Relations(self._editor.file)
        elements = self._with_tied([self._entity(g) for g in wish.elements])
        numbers = {e.id() for e in elements}
        types = [t for t, users in _occurrences(relations).items() if users <= numbers]
        whole = {t: self._editor.file.by_id(t) for t in types}
        inherited = {
            e.id(): select
            for e in elements
            if (t := relations.type_of.get(e.id())) is not None
            and t.id() not in whole
            and e.id() not in relations.material_of
            and (select := relations.material_of.get(t.id())) is not None
        }
        if wish.profile:
            self._put_profile(wish, elements, whole, inherited, relations)
        else:
            self._put_material(wish, elements, whole, inherited, relations)

    def _entity(self, global_id: str) -> Any:
        if global_id not in self._by_id:
            raise JobError(f"The model has no element with the GlobalId {global_id}.")
        return self._by_id[global_id]

    def _with_tied(self, elements: list[Any]) -> list[Any]:
        """The elements, and those that the model says are the same member."""
        found = {e.id(): e for e in elements}
        for each in elements:
            for other in self._ties.get(each.id(), ()):
                # A beam that stands for several members changes when all of them do.
                if {e.id() for e in self._ties.get(other.id(), ())} <= found.keys():
                    found.setdefault(other.id(), other)
        return [*found.values()]

    def _put_profile(
        self,
        wish: Wish,
        elements: list[Any],
        whole: Mapping[int, Any],
        inherited: Mapping[int, Any],
        relations: Relations,
    ) -> None:
        profile = self._chooser.profile(wish.profile)
        new = self._chooser.sections.section(profile)
        assert new is not None  # the chooser has seen to it
        bodies = Bodies(self._editor, self._chooser.sections, profile)
        before = {e.id(): choose(relations.material(e.id())) for e in elements}
        sweeps = {e.id(): self._sweep(e, bodies, wish) for e in elements}
        old = {
            e.id(): self._old_section(e, sweeps[e.id()], before[e.id()].profile) for e in elements
        }
        for element in elements:
            self._change_body(element, bodies, sweeps[element.id()], relations, whole, wish)
        objects = [*elements, *whole.values()]
        done = associate(self._editor, objects, inherited, profile=profile)
        if self._editor.schema == "IFC2X3":
            done |= associate_properties(self._editor, elements, profile)
        for each in objects:
            if each.id() in done:
                self._tell(each, Statement("profile association", done[each.id()], wish.profile))
        for element in elements:
            if element.id() not in done and sweeps[element.id()] is None:
                self._associate_anew(element, profile, before[element.id()].material)
            type_ = relations.type_of.get(element.id())
            self._state(element, old[element.id()], new, sweeps[element.id()], wish, type_, whole)
            self.expected[element[0]] = new.area
        for type_ in whole.values():
            users = [e for e in elements if relations.type_of.get(e.id()) == type_]
            self._state_type(type_, old[users[0].id()] if users else None, new, wish.profile)

    def _associate_anew(self, element: Any, profile: Any, material: Any) -> None:
        if self._editor.schema == "IFC2X3":
            raise JobError(
                f"{_label(element)} has neither a body nor a profile that could be changed."
            )
        associate_anew(self._editor, element, profile=profile, material=material)
        self._tell(element, Statement("profile association", "none", profile.ProfileName))

    def _sweep(self, element: Any, bodies: Bodies, wish: Wish) -> Sweep | None:
        """The extrusion to be changed; None where the element has no body."""
        body = _body(element)
        if body is None:
            return None
        area = (wish.areas or {}).get(element[0], 0.0)
        sweep = bodies.main_sweep(body.Items, area)
        if sweep is None:
            kinds = ", ".join(sorted({item.is_a() for item in body.Items}))
            raise JobError(
                f"The body of {_label(element)} ({kinds}) is no extrusion of its section, so it "
                f"cannot be given another. Change it where the model was made, or state area and "
                f"inertia in the job file (sections); nothing was written."
            )
        return sweep

    def _old_section(self, element: Any, sweep: Sweep | None, stated: Any) -> Section | None:
        entity = sweep.solid.SweptArea if sweep is not None else stated
        if entity is None:
            return None
        return self._chooser.sections.section(entity)

    def _change_body(
        self,
        element: Any,
        bodies: Bodies,
        sweep: Sweep | None,
        relations: Relations,
        whole: Mapping[int, Any],
        wish: Wish,
    ) -> None:
        if sweep is None:
            return
        body = _body(element)
        type_ = relations.type_of.get(element.id())
        with_type = type_ is not None and type_.id() in whole and _maps_own(body, type_)
        old_name = sweep.profile.name or "not named"
        items = bodies.changed_items(body, sweep, with_type=with_type)
        if items != list(body.Items):
            self._put_items(element, body, items)
        where = "body of its type" if with_type else "extruded body"
        self._tell(element, Statement(where, old_name, wish.profile))

    def _put_items(self, element: Any, body: Any, items: list[Any]) -> None:
        """Give the element these items; a body or shape that others use stays theirs."""
        shape = element.Representation
        if len(self._editor.users(body)) == 1:
            self._editor.set(body, "Items", items)
            return
        own = self._editor.copy(body, Items=items)
        others = [own if r == body else r for r in shape.Representations]
        if len(self._editor.users(shape)) == 1:
            self._editor.set(shape, "Representations", others)
        else:
            copy = self._editor.copy(shape, Representations=others)
            self._editor.set(element, "Representation", copy)

    def _state(
        self,
        element: Any,
        old: Section | None,
        new: Section,
        sweep: Sweep | None,
        wish: Wish,
        type_: Any,
        whole: Mapping[int, Any],
    ) -> None:
        statements = Statements(
            self._editor,
            {old.name: wish.profile} if old is not None and old.name else {},
            _differing(old, new),
            sweep.length if sweep is not None else 0.0,
            (wish.densities or {}).get(element[0], 0.0),
        )
        for told in statements.names_of(element, ("ObjectType", "Description")):
            self._tell(element, told)
        for told in statements.sets_of_element(element):
            self._tell(element, told)
        if type_ is not None and type_.id() not in whole:
            name = type_[2] or ""
            if statements.renamed(name) != name:
                self._tell(element, Statement("name of its type, which others share", name))

    def _state_type(self, type_: Any, old: Section | None, new: Section, name: str) -> None:
        names = {old.name: name} if old is not None and old.name else {}
        statements = Statements(self._editor, names, _differing(old, new))
        for told in statements.names_of(type_, ("Name", "ElementType", "Description")):
            self._tell(type_, told)
        for told in statements.sets_of_type(type_):
            self._tell(type_, told)

    def _put_material(
        self,
        wish: Wish,
        elements: list[Any],
        whole: Mapping[int, Any],
        inherited: Mapping[int, Any],
        relations: Relations,
    ) -> None:
        material = self._chooser.material(wish.material)
        before = {e.id(): choose(relations.material(e.id())).material for e in elements}
        objects = [*elements, *whole.values()]
        done = associate(self._editor, objects, inherited, material=material)
        for each in objects:
            if each.id() in done:
                self._tell(each, Statement("material association", done[each.id()], wish.material))
        for element in elements:
            if element.id() not in done:
                self._editor.rooted(
                    "IfcRelAssociatesMaterial", f"{element[0]}/{wish.material}",
                    RelatedObjects=[element], RelatingMaterial=material,
                )  # fmt: skip
                self._tell(element, Statement("material association", "none", wish.material))
            old = before[element.id()]
            names = {old.Name: wish.material} if old is not None and old.Name else {}
            for told in Statements(self._editor, names).sets_of_element(element):
                self._tell(element, told)
        for type_ in whole.values():
            users = [e for e in elements if relations.type_of.get(e.id()) == type_]
            old = before[users[0].id()] if users else None
            names = {old.Name: wish.material} if old is not None and old.Name else {}
            for told in Statements(self._editor, names).sets_of_type(type_):
                self._tell(type_, told)

    def _tell(self, entity: Any, told: Statement) -> None:
        if told.old == told.new:
            return
        self.changes.append(Change(entity[0], entity[2] or "", told.what, told.old, told.new))


def _differing(old: Section | None, new: Section) -> tuple[Section, Section] | None:
    """The sections where what states the old one no longer fits."""
    if old is None or (alike(old, new) and abs(old.depth - new.depth) <= 1e-6 * new.depth):
        return None
    return old, new


def _body(element: Any) -> Any:
    """The body of an element, None where it has none."""
    shape = getattr(element, "Representation", None)
    if shape is None or element.is_a("IfcStructuralItem"):
        return None
    found = [r for r in shape.Representations if r.RepresentationIdentifier == "Body"]
    return found[0] if found else None


def _maps_own(body: Any, type_: Any) -> bool:
    """Whether a body is mapped from the shapes of this type."""
    maps = {m.id() for m in getattr(type_, "RepresentationMaps", None) or ()}
    items = [item for item in body.Items if item.is_a("IfcMappedItem")]
    return bool(items) and all(item.MappingSource.id() in maps for item in items)


def _occurrences(relations: Relations) -> dict[int, set[int]]:
    """Numbers of the occurrences of each type, by its number."""
    found: dict[int, set[int]] = {}
    for element, type_ in relations.type_of.items():
        found.setdefault(type_.id(), set()).add(element)
    return found


def _ties(file: Any) -> dict[int, list[Any]]:
    """Which structural members and building elements stand for each other, both ways."""
    found: dict[int, list[Any]] = {}

    def tie(one: Any, other: Any) -> None:
        if one is not None and other is not None:
            found.setdefault(one.id(), []).append(other)
            found.setdefault(other.id(), []).append(one)

    for relation in file.by_type("IfcRelAssignsToProduct"):
        for item in relation.RelatedObjects or ():
            if item.is_a("IfcStructuralMember"):
                tie(item, relation.RelatingProduct)
    try:
        older = file.by_type("IfcRelConnectsStructuralElement")
    except RuntimeError:  # IFC2X3 alone has it
        older = []
    for relation in older:
        tie(relation.RelatedStructuralMember, relation.RelatingElement)
    return found


def _label(element: Any) -> str:
    name = f"'{element[2]}' " if element[2] else ""
    return f"{element.is_a()} {name}(GlobalId {element[0]})"
