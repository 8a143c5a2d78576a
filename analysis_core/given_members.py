"""Members that the job file gives another section or material than the model does.

The lines are solved with what is given; ``post --members`` writes it into the model, where the
same comes out.
"""

from __future__ import annotations

import difflib
from collections.abc import Iterable
from dataclasses import dataclass, replace

from analysis_core.building import AxisMember, Building
from analysis_core.errors import JobError
from analysis_core.findings import Finding
from analysis_core.idealise.selectors import described, matches
from analysis_core.ifc.updating import stock as stocks
from analysis_core.ifc.updating.stock import Stock
from analysis_core.model import Material, Section
from analysis_core.settings import Settings


@dataclass(frozen=True, slots=True)
class Given:
    """Names of profile and material given to each element, by GlobalId."""

    profiles: dict[str, str]
    materials: dict[str, str]


def given(building: Building, settings: Settings) -> Given:
    """Return what the job file gives to which members; the later of two entries holds."""
    found = Given({}, {})
    for setting in settings.members:
        for member in building.members:
            if matches(setting.on, member):
                if setting.profile:
                    found.profiles[member.global_id] = setting.profile
                if setting.material:
                    found.materials[member.global_id] = setting.material
    return found


def with_given(
    building: Building, stock: Stock, settings: Settings
) -> tuple[Building, tuple[Finding, ...]]:
    """Return the building with the members as the job file gives them, and what to tell of it.

    A name that is not known changes nothing and is an error among the findings.
    """
    wanted = given(building, settings)
    log = _Log()
    shelf = _Shelf(stock, settings)
    members = []
    for member in building.members:
        section = material = None
        try:
            section = shelf.section(wanted.profiles.get(member.global_id), member)
            material = shelf.material(wanted.materials.get(member.global_id))
        except JobError as reason:
            log.failed(member, str(reason))
        members.append(_changed(member, section, material, log))
    unused = [_unused(s.source, described(s.on)) for s in settings.members
              if not any(matches(s.on, m) for m in building.members)]  # fmt: skip
    return replace(building, members=tuple(members)), (*log.findings(), *unused)


def outstanding(building: Building, stock: Stock, settings: Settings) -> Given:
    """Return what the job file gives members that the model does not have yet.

    Raises JobError where a name is not known.
    """
    after, findings = with_given(building, stock, settings)
    for finding in findings:
        if finding.severity == "error":
            raise JobError(finding.message)
    wanted, left = given(building, settings), Given({}, {})
    for old, new in zip(building.members, after.members, strict=True):
        key = old.global_id
        if (
            new.section is not None
            and new.section is not old.section
            and not _as_is(old, new.section)
        ):
            left.profiles[key] = wanted.profiles[key]
        if new.material is not None and (
            old.material is None or old.material.name != new.material.name
        ):
            left.materials[key] = wanted.materials[key]
    return left


def _changed(
    member: AxisMember, section: Section | None, material: Material | None, log: _Log
) -> AxisMember:
    if section is not None:
        if not _as_is(member, section):
            log.told(member, "section", member.section.name if member.section else "", section.name)
        member = replace(member, section=section, end_section=None)
    if material is not None:
        old = member.material.name if member.material else ""
        if old != material.name:
            log.told(member, "material", old, material.name)
        member = replace(member, material=material)
    return member


def _as_is(member: AxisMember, section: Section) -> bool:
    return (
        member.section is not None
        and member.end_section is None
        and member.section.name == section.name
        and stocks.alike(member.section, section)
    )


class _Shelf:
    """Sections and materials by name, each made once."""

    def __init__(self, stock: Stock, settings: Settings) -> None:
        self._stock, self._settings = stock, settings
        self._sections: dict[tuple[str, float], Section] = {}
        self._materials: dict[str, Material] = {}

    def section(self, name: str | None, member: AxisMember) -> Section | None:
        if not name:
            return None
        roll = dict(member.section.dimensions).get("roll", 0.0) if member.section else 0.0
        key = (name, round(roll, 9))
        if key not in self._sections:
            made = self._stocked(name).section(roll)
            self._sections[key] = replace(made, name=name)
        return self._sections[key]

    def _stocked(self, name: str) -> stocks.Stocked:
        known = self._stock.profiles.get(name)
        row = next((s for s in self._settings.section_table if s.name == name), None)
        if known is None and row is None:
            names = [*self._stock.profiles, *(s.name for s in self._settings.section_table)]
            raise JobError(
                f"there is no profile '{name}' in the model or the section table"
                f"{_near(name, names)}"
            )
        if row is None or (known is not None and row.origin):
            assert known is not None
            if name in self._stock.ambiguous:
                raise JobError(f"the model has different profiles with the name '{name}'")
            return known
        made = stocks.table_profile(row)
        if known is not None and not stocks.alike(known.section(), made.section()):
            raise JobError(f"model and section table state '{name}' with different dimensions")
        return made

    def material(self, name: str | None) -> Material | None:
        if not name:
            return None
        if name not in self._materials:
            self._materials[name] = self._material(name)
        return self._materials[name]

    def _material(self, name: str) -> Material:
        known = self._stock.materials.get(name)
        if known is not None:
            return known
        stated = next((m for m in self._settings.materials if m.name == name), None)
        if stated is None:
            names = [*self._stock.materials, *(m.name for m in self._settings.materials)]
            raise JobError(
                f"there is no material '{name}' in the model or the job file{_near(name, names)}"
            )
        return stocks.stated_material(stated, self._settings)


class _Log:
    """What was changed and what could not be, gathered over the members."""

    def __init__(self) -> None:
        self._told: dict[tuple[str, str, str], list[str]] = {}
        self._failed: dict[str, list[str]] = {}

    def told(self, member: AxisMember, what: str, old: str, new: str) -> None:
        self._told.setdefault((what, old, new), []).append(member.global_id)

    def failed(self, member: AxisMember, reason: str) -> None:
        self._failed.setdefault(reason, []).append(member.global_id)

    def findings(self) -> Iterable[Finding]:
        for (what, old, new), members in self._told.items():
            model = f"'{old}' of the model" if old else "what the model has"
            yield Finding(
                "warning",
                "member-given",
                f"{_count(members)} solved with the {what} '{new}' that the job file gives, not "
                f"with {model}. `post --members` writes it into the model.",
                tuple(members),
            )
        for reason, members in self._failed.items():
            yield Finding(
                "error",
                "member-not-given",
                f"{_count(members)} solved as the model has them, not as the job file (members) "
                f"wants: {reason}.",
                tuple(members),
            )


def _count(members: list[str]) -> str:
    return "1 member is" if len(members) == 1 else f"{len(members)} members are"


def _unused(source: str, what: str) -> Finding:
    return Finding(
        "warning",
        "selector-matches-nothing",
        f"{source} in the job file chooses elements by {what}; nothing in the model matches, so "
        f"it has no effect. `survey` lists names, classes and GlobalIds.",
    )


def _near(name: str, known: Iterable[str]) -> str:
    near = difflib.get_close_matches(name, sorted({k for k in known if k}), n=3, cutoff=0.0)
    return f"; the nearest are {', '.join(repr(n) for n in near)}" if near else ""
