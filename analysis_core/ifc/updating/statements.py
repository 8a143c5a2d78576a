"""What property sets, quantities and names state of a section or material, brought up to date.

A text is changed where it is, or contains as a word, the old name; a number where it has the name
of a value of the section and states the old one.  What a changed section outdates without our
knowing the new value is told, not changed.
"""

from __future__ import annotations

import math
import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import Any

from analysis_core.ifc.file_units import UnitError
from analysis_core.ifc.posting.property_sets import PREFIX
from analysis_core.ifc.updating.editor import Editor
from analysis_core.model import Section

_AGREEMENT = 5e-3
# Names (letters only, lower case) as the standard's sets and common practice spell them: the
# value of the section, the power of length, the kind of unit.
_NAMES: dict[str, tuple[str, int]] = {
    **dict.fromkeys(("crosssectionarea", "sectionarea", "area"), ("area", 2)),
    **dict.fromkeys(("depth", "overalldepth", "profiledepth", "sectiondepth", "height",
                     "sectionheight", "profileheight", "h", "d"), ("depth", 1)),
    **dict.fromkeys(("width", "overallwidth", "profilewidth", "sectionwidth", "flangewidth",
                     "b", "bf"), ("width", 1)),
    **dict.fromkeys(("webthickness", "tw"), ("web_thickness", 1)),
    **dict.fromkeys(("flangethickness", "tf"), ("flange_thickness", 1)),
    **dict.fromkeys(("wallthickness", "thickness", "t"), ("wall_thickness", 1)),
    **dict.fromkeys(("diameter",), ("diameter", 1)),
    **dict.fromkeys(("momentofinertiay", "iy", "ix"), ("inertia", 4)),
    **dict.fromkeys(("momentofinertiaz", "iz"), ("inertia_lateral", 4)),
}  # fmt: skip
_KINDS = {1: "LENGTHUNIT", 2: "AREAUNIT", 3: "VOLUMEUNIT", 4: "MOMENTOFINERTIAUNIT"}
_WITH_AREA = ("volume", "weight", "mass")
_OUTDATED = ("surfacearea", "perimeter", "modulus")


@dataclass(frozen=True, slots=True)
class Statement:
    """One thing that was brought up to date, or (``new`` empty) that no longer fits."""

    what: str
    old: str
    new: str = ""


class Statements:
    """Brings up to date what is stated of one old section (or material) and the new one.

    ``length`` of the element in m, 0 where not known.
    """

    def __init__(
        self,
        editor: Editor,
        names: Mapping[str, str],
        sections: tuple[Section, Section] | None = None,
        length: float = 0.0,
        density: float = 0.0,
    ) -> None:
        self._editor = editor
        self._length = length
        self._density = density
        self._names = {old.casefold(): new for old, new in names.items() if old}
        words = "|".join(re.escape(old) for old in sorted(self._names, key=len, reverse=True))
        self._pattern = re.compile(rf"(?<!\w)(?:{words})(?!\w)", re.IGNORECASE) if words else None
        self._sections = sections

    def renamed(self, text: str) -> str:
        """Return a text with the old name replaced where it stands as a word."""
        if self._pattern is None:
            return text
        return self._pattern.sub(lambda m: self._names[m[0].casefold()], text)

    def names_of(self, entity: Any, attributes: tuple[str, ...]) -> Iterator[Statement]:
        """Bring attributes of an element or type up to date that name the old section."""
        for attribute in attributes:
            text = getattr(entity, attribute, None)
            if isinstance(text, str) and (new := self.renamed(text)) != text:
                self._editor.set(entity, attribute, new)
                yield Statement(attribute, text, new)

    def sets_of_element(self, element: Any) -> Iterator[Statement]:
        """Bring the property sets and quantities of an element up to date."""
        for relation in list(self._editor.file.by_type("IfcRelDefinesByProperties")):
            if element not in (relation.RelatedObjects or ()):
                continue
            definition = relation.RelatingPropertyDefinition
            if not hasattr(definition, "is_a"):
                continue
            told: list[Statement] = []
            shared = len(relation.RelatedObjects) > 1 or len(self._editor.users(definition)) > 1
            changed = self._changed(definition, told, shared)
            if changed is not None:
                self._editor.move(
                    relation, f"{element[0]}/{definition.Name}", [element],
                    RelatingPropertyDefinition=changed,
                )  # fmt: skip
            yield from told

    def sets_of_type(self, type_: Any) -> Iterator[Statement]:
        """Bring the property sets of a type up to date."""
        own = type_.HasPropertySets or ()
        told: list[Statement] = []
        sets = []
        for each in own:
            shared = len(self._editor.users(each)) > 1
            sets.append(self._changed(each, told, shared) or each)
        if sets != list(own):
            self._editor.set(type_, "HasPropertySets", sets)
        yield from told

    def _changed(self, definition: Any, told: list[Statement], shared: bool) -> Any:
        """A copy of a shared set that states the new values; None where it was changed itself."""
        attribute = {"IfcPropertySet": "HasProperties", "IfcElementQuantity": "Quantities"}.get(
            definition.is_a()
        )
        if attribute is None or (definition.Name or "").startswith(PREFIX):
            return None
        items = []
        for item in getattr(definition, attribute) or ():
            new, statement = self._item(item, definition.Name or "", shared)
            items.append(new)
            if statement is not None:
                told.append(statement)
        if items == list(getattr(definition, attribute) or ()):
            return None
        if shared:
            purpose = f"{definition[0]}/{'/'.join(self._names.values())}"
            return self._editor.copy(definition, purpose, **{attribute: items})
        self._editor.set(definition, attribute, items)
        return None

    def _item(self, item: Any, set_name: str, shared: bool) -> tuple[Any, Statement | None]:
        """A property or quantity as it should be, and what to tell of it."""
        if not (item.is_a("IfcPropertySingleValue") or item.is_a("IfcPhysicalSimpleQuantity")):
            return item, None
        what = f"{set_name}.{item.Name}"
        place = "NominalValue" if item.is_a("IfcPropertySingleValue") else item.attribute_name(3)
        value = getattr(item, place)
        typed = hasattr(value, "is_a")
        plain = value[0] if typed else value
        if isinstance(plain, str):
            new: Any = self.renamed(plain)
            if new == plain:
                return item, None
        elif isinstance(plain, bool) or not isinstance(plain, int | float):
            return item, None
        else:
            found = self._number(item, float(plain))
            if found is None:
                return item, None
            if math.isnan(found):
                return item, Statement(what, _shown(plain))
            new = found
        wrapped = self._editor.file.create_entity(value.is_a(), new) if typed else new
        told = Statement(what, _shown(plain), _shown(new))
        if shared or len(self._editor.users(item)) > 1:
            return self._editor.copy(item, **{place: wrapped}), told
        self._editor.set(item, place, wrapped)
        return item, told

    def _number(self, item: Any, number: float) -> float | None:
        """The new number; not a number where it is outdated, None where it is no such value."""
        if self._sections is None or not number:
            return None
        old, new = self._sections
        name = re.sub(r"[^a-z]", "", (item.Name or "").casefold())
        if name in _NAMES:
            ours, power = _NAMES[name]
            before, after = _value(old, ours), _value(new, ours)
            if before and self._states(item, number, before, power):
                return _scaled(number, after / before) if after else math.nan
            return None
        if any(word in name for word in _WITH_AREA):
            return self._with_area(item, number, name)
        if any(word in name for word in _OUTDATED):
            return math.nan
        return None

    def _with_area(self, item: Any, number: float, name: str) -> float:
        """Volume and weight go with the area, where they are those of the whole section."""
        assert self._sections is not None  # the caller has seen to it
        old, new = self._sections
        volume = old.area * self._length
        per_length = "perlength" in name or "permetre" in name or "permeter" in name
        expected = {"volume": volume}.get(
            "volume" if "volume" in name else "",
            self._density * (old.area if per_length else volume),
        )
        power = 3 if "volume" in name else 0
        if expected and self._states(item, number, expected, power):
            return _scaled(number, new.area / old.area)
        return math.nan

    def _states(self, item: Any, number: float, si: float, power: int) -> bool:
        """Whether a number states an SI value, in its own unit or one that files take for it."""
        return any(
            abs(number * factor - si) <= _AGREEMENT * si for factor in self._factors(item, power)
        )

    def _factors(self, item: Any, power: int) -> Iterator[float]:
        units = self._editor.units
        unit = getattr(item, "Unit", None)
        try:
            if unit is not None:
                yield units.of_entity(unit)
                return
        except (UnitError, AttributeError):
            return
        if power:
            yield from (units.to_si(_KINDS[power]), units.length**power, 1.0, 0.01**power)
            yield 0.001**power
        else:
            yield from (units.to_si("MASSUNIT"), 1.0)


def _value(section: Section, name: str) -> float:
    if name in ("area", "inertia", "inertia_lateral", "depth", "width"):
        return float(getattr(section, name))
    return dict(section.dimensions).get(name, 0.0)


def _scaled(number: float, ratio: float) -> float:
    return float(f"{number * ratio:.12g}")


def _shown(value: object) -> str:
    return f"{value:.9g}" if isinstance(value, float) else str(value)
