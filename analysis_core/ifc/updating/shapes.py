"""Extruded bodies of another profile: in the element's own shape, or in that of its type.

A body is changed where it is the extrusion of the element's section; a clipped one with its cuts.
The part of the section that lay on the axis (top, middle, bottom; left, middle, right) lies there
afterwards as well, and the profile keeps its turn.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import Any

import numpy as np

from analysis_core.ifc.sections.reader import Profile, SectionReader
from analysis_core.ifc.unreadable import UnreadableShapeError
from analysis_core.ifc.updating.editor import Editor

_ON_AXIS = 1e-3
"""m; an edge of the section nearer to the axis than this lies on it."""
_AGREEMENT = 1e-3
_DEEPEST_NESTING = 20


@dataclass(frozen=True, slots=True)
class Sweep:
    """A swept solid of a body: the area of its profile in m², and its length in m."""

    solid: Any
    profile: Profile
    length: float


class Bodies:
    """Puts one chosen profile into the bodies of elements and types."""

    def __init__(self, editor: Editor, sections: SectionReader, chosen: Any) -> None:
        self._editor = editor
        self._sections = sections
        self._chosen = chosen
        self._placed: dict[tuple[object, ...], Any] = {}
        self._done: set[int] = set()

    def main_sweep(self, items: Any, area: float) -> Sweep | None:
        """Return the solid that is the extrusion of the element's section; None where none is.

        ``area`` of the section in m², 0 where it is not known.
        """
        found = [s for item in items for s in self._sweeps(item, 0)]
        alike = [s for s in found if abs(s.profile.moments.area - area) <= _AGREEMENT * area]
        if not alike:
            # A beam may also be drawn as its elevation, swept sideways: that is no section.
            alike = [s for s in found if s.length >= 2.0 * max(s.profile.size)]
        return max(alike, key=lambda s: s.length * s.profile.moments.area, default=None)

    def changed_items(self, representation: Any, sweep: Sweep, *, with_type: bool) -> list[Any]:
        """Return the items of a body with the profile changed, shared with no other element.

        ``with_type``: what is mapped from a type is changed there, for all that use it.
        """
        return [self._item(item, sweep, with_type) for item in representation.Items]

    def _sweeps(self, item: Any, depth: int) -> Iterator[Sweep]:
        if depth > _DEEPEST_NESTING:
            return
        if item.is_a("IfcBooleanResult"):
            yield from self._sweeps(item.FirstOperand, depth + 1)
        elif item.is_a("IfcMappedItem"):
            for inner in item.MappingSource.MappedRepresentation.Items:
                yield from self._sweeps(inner, depth + 1)
        elif item.is_a() == "IfcExtrudedAreaSolid":
            profile = self._sections.profile(item.SweptArea)
            if profile is not None:
                yield Sweep(item, profile, item.Depth * self._editor.units.length)

    def _item(self, item: Any, sweep: Sweep, with_type: bool) -> Any:
        """The item with every extrusion of the old profile changed: in place unless shared."""
        if item.is_a("IfcBooleanResult"):
            first = self._item(item.FirstOperand, sweep, with_type)
            return self._with(item, FirstOperand=first)
        if item.is_a("IfcMappedItem"):
            if not with_type:
                return self._mapped(item, sweep)
            representation = item.MappingSource.MappedRepresentation
            items = self.changed_items(representation, sweep, with_type=True)
            if items != list(representation.Items):
                self._editor.set(representation, "Items", items)
            return item
        if item.is_a() == "IfcExtrudedAreaSolid" and self._is_alike(item, sweep):
            return self._with(item, SweptArea=self._profile_for(item))
        return item

    def _is_alike(self, item: Any, sweep: Sweep) -> bool:
        profile = self._sections.profile(item.SweptArea)
        if item.id() in self._done or profile is None:
            return False
        one, other = profile.moments, sweep.profile.moments
        return math.isclose(one.area, other.area, rel_tol=1e-9) and math.isclose(
            one.xx + one.yy, other.xx + other.yy, rel_tol=1e-9
        )

    def _with(self, item: Any, **changes: Any) -> Any:
        changes = {k: v for k, v in changes.items() if getattr(item, k) != v}
        if not changes:
            return item
        if len(self._editor.users(item)) > 1:
            copy = self._editor.copy(item, **changes)
            self._editor.dress(item, copy)
        else:
            copy = item
            for attribute, value in changes.items():
                self._editor.set(item, attribute, value)
        self._done.add(copy.id())
        return copy

    def _mapped(self, item: Any, sweep: Sweep) -> Any:
        """A mapped item of the element's own; the body that the type maps stays as it is."""
        source = item.MappingSource
        representation = source.MappedRepresentation
        items = [self._copied(inner, sweep) for inner in representation.Items]
        if items == list(representation.Items):
            return item
        body = self._editor.copy(representation, Items=items)
        self._editor.dress(representation, body)
        return self._editor.copy(
            item, MappingSource=self._editor.copy(source, MappedRepresentation=body)
        )

    def _copied(self, item: Any, sweep: Sweep) -> Any:
        """A copy of the item with the profile changed; the item itself where it holds none."""
        if item.is_a("IfcBooleanResult"):
            first = self._copied(item.FirstOperand, sweep)
            if first == item.FirstOperand:
                return item
            copy = self._editor.copy(item, FirstOperand=first)
        elif item.is_a("IfcMappedItem"):
            return self._mapped(item, sweep)
        elif item.is_a() == "IfcExtrudedAreaSolid" and self._is_alike(item, sweep):
            copy = self._editor.copy(item, SweptArea=self._profile_for(item))
        else:
            return item
        self._editor.dress(item, copy)
        self._done.add(copy.id())
        return copy

    def _profile_for(self, solid: Any) -> Any:
        """The chosen profile, turned and moved so that it lies to the axis as the old one did."""
        old = self._sections.profile(solid.SweptArea)
        assert old is not None  # or the solid would not be changed
        turned = self._turned(solid.SweptArea)
        new = self._sections.profile(turned)
        if new is None:
            raise UnreadableShapeError(self._sections.reason(turned))
        away = self._offset(solid)
        shift = tuple(
            _kept(old.corners[:, i] + away[i], new.corners[:, i] + away[i]) for i in (0, 1)
        )
        return self._moved(turned, shift)

    def _turned(self, old: Any) -> Any:
        """The chosen profile with the turn of the old one, where both state one."""
        chosen = self._chosen
        if not all(p.is_a("IfcParameterizedProfileDef") for p in (old, chosen)):
            return chosen
        turn, own = (_direction(p.Position) for p in (old, chosen))
        if math.dist(turn, own) < 1e-9:
            return chosen

        def made() -> Any:
            reference = self._editor.new("IfcDirection", DirectionRatios=turn)
            return self._editor.copy(
                chosen, Position=self._place(_location(chosen.Position), reference)
            )

        return self._once(("turned", *turn), made)

    def _moved(self, profile: Any, shift: tuple[float, ...]) -> Any:
        x, y = (round(s / self._editor.units.length, 6) for s in shift)
        if not x and not y:
            return profile

        def made() -> Any:
            if profile.is_a("IfcParameterizedProfileDef"):
                place = profile.Position
                at = _location(place)
                reference = place.RefDirection if place is not None else None
                return self._editor.copy(
                    profile, Position=self._place((at[0] + x, at[1] + y), reference)
                )
            origin = self._editor.new("IfcCartesianPoint", Coordinates=(x, y))
            operator = self._editor.new("IfcCartesianTransformationOperator2D", LocalOrigin=origin)
            return self._editor.new(
                "IfcDerivedProfileDef", ProfileType=profile.ProfileType,
                ProfileName=profile.ProfileName, ParentProfile=profile, Operator=operator,
            )  # fmt: skip

        return self._once(("moved", profile.id(), x, y), made)

    def _once(self, key: tuple[object, ...], make: Callable[[], Any]) -> Any:
        if key not in self._placed:
            self._placed[key] = make()
        return self._placed[key]

    def _place(self, at: tuple[float, float], reference: Any) -> Any:
        point = self._editor.new("IfcCartesianPoint", Coordinates=at)
        turn = {} if reference is None else {"RefDirection": reference}
        return self._editor.new("IfcAxis2Placement2D", Location=point, **turn)

    def _offset(self, solid: Any) -> tuple[float, float]:
        """Where the solid's own axes lie, seen from the element's, across the extrusion; m."""
        place = solid.Position
        if place is None or place.Location is None:
            return 0.0, 0.0
        at = np.array([*place.Location.Coordinates, 0.0][:3], dtype=float)
        z = _unit(place.Axis, (0.0, 0.0, 1.0))
        x = _unit(place.RefDirection, (1.0, 0.0, 0.0))
        x = x - z * float(x @ z)
        size = float(np.linalg.norm(x))
        if size < 1e-9:
            return 0.0, 0.0
        x = x / size
        length = self._editor.units.length
        return float(at @ x) * length, float(at @ np.cross(z, x)) * length


def _kept(old: Any, new: Any) -> float:
    """How far to move the new extent so that what lay on the axis (0) lies there again."""
    low, high = float(old.min()), float(old.max())
    middle = 0.5 * (low + high)
    new_low, new_high = float(new.min()), float(new.max())
    if abs(middle) > _ON_AXIS:
        if abs(high) <= _ON_AXIS:
            return high - new_high
        if abs(low) <= _ON_AXIS:
            return low - new_low
    return middle - 0.5 * (new_low + new_high)


def _direction(place: Any) -> tuple[float, float]:
    reference = place.RefDirection if place is not None else None
    if reference is None:
        return 1.0, 0.0
    x, y = reference.DirectionRatios[:2]
    size = math.hypot(x, y) or 1.0
    return x / size, y / size


def _location(place: Any) -> tuple[float, float]:
    if place is None:
        return 0.0, 0.0
    x, y = place.Location.Coordinates[:2]
    return float(x), float(y)


def _unit(direction: Any, default: tuple[float, float, float]) -> Any:
    vector = np.array(direction.DirectionRatios if direction is not None else default, dtype=float)
    size = float(np.linalg.norm(vector))
    return vector / size if size else np.array(default)
