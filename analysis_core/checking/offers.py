"""What there is to choose from: profiles of a model or of a section table, and which of them suit.

Names and categories of profiles are no standard, so the engineer can name those that are meant.
Where none are named, a member is offered what is made of its material as far as names and shapes
tell; what was left out is said.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass
from fnmatch import fnmatchcase

from analysis_core.errors import JobError
from analysis_core.findings import Finding, listed
from analysis_core.ifc.materials.table import kind_of
from analysis_core.ifc.updating.stock import Stock, Stocked, alike
from analysis_core.model import Material, Section
from analysis_core.settings import Settings, TableSection

MODEL, JOB = "model", "job"
# Of a profile of the same name in the model, with fillets say, area and outline may differ so.
_SAME_AREA, _SAME_OUTLINE = 0.1, 0.01
# Common practice, for profiles that say nothing of their material.
_WALLED = frozenset({"channel", "angle", "tube", "hollow rectangle", "zed", "lipped channel"})
_NOT_MADE_OF = {
    "steel": frozenset({"rectangle"}),
    "concrete": _WALLED,
    "timber": _WALLED | {"tee"},
}
_KINDS = {"glulam": "timber", "lvl": "timber", "hardwood": "timber", "lightweight concrete":
          "concrete", "stainless": "steel"}  # fmt: skip


@dataclass(frozen=True, slots=True)
class Candidate:
    """A section by its name; ``origin``: "model", "job" or the name of the list it stands in."""

    name: str
    section: Section
    categories: tuple[str, ...] = ()
    origin: str = MODEL

    @property
    def kind(self) -> str:
        """What name and categories say that it is made of: "steel", "timber", …, or ""."""
        return _kind(" ".join((*self.categories, self.name)))


@dataclass(frozen=True, slots=True)
class Offer:
    """Candidates in the order of their source, and what was noticed about them."""

    candidates: tuple[Candidate, ...]
    findings: tuple[Finding, ...] = ()


def of_model(stock: Stock) -> Offer:
    """Return the profiles of a model, without those whose name does not say which is meant."""
    found = tuple(
        Candidate(name, stocked.section())
        for name, stocked in stock.profiles.items()
        if name not in stock.ambiguous
    )
    told = [] if not stock.ambiguous else [_ambiguous(sorted(stock.ambiguous))]
    return Offer(found, tuple(told))


def of_table(
    stock: Stock,
    settings: Settings,
    draw: Callable[[TableSection], Stocked],
    only: Sequence[str] = (),
) -> Offer:
    """Return the sections of the section table that fit ``only``, as they would be written.

    A profile of the model takes the place of one from a list that has its name, whatever its
    spaces, and about its dimensions; one that is another altogether is left out.  Raises JobError
    where a section cannot be drawn, or where the engineer states one otherwise than the model has
    it.
    """
    found: list[Candidate] = []
    taken: list[str] = []
    clashing: list[str] = []
    by_key = {_key(name): name for name in stock.profiles}
    for row in settings.section_table:
        if not _fits(row.name, row.categories, only):
            continue
        section = draw(row).section()
        name = by_key.get(_key(row.name), row.name) if row.origin else row.name
        known = stock.profiles.get(name)
        own = known.section() if known is not None else None
        if own is None or alike(own, section):
            found.append(Candidate(row.name, section, row.categories, row.origin or JOB))
        elif not row.origin:
            raise JobError(
                f"The profile '{row.name}' of the model has other dimensions than that of the "
                f"section table. Give the one in the table another name."
            )
        elif _same_profile(own, section):
            taken.append(name)
            found.append(Candidate(name, own, row.categories, MODEL))
        elif name == row.name:
            clashing.append(name)
        else:
            found.append(Candidate(row.name, section, row.categories, row.origin))
    return Offer(tuple(found), tuple(_notes(taken, clashing)))


def only(candidates: Iterable[Candidate], patterns: Sequence[str]) -> list[Candidate]:
    """Return those whose name or category fits one of the patterns (wildcards, case ignored)."""
    return [c for c in candidates if _fits(c.name, c.categories, patterns)]


def made_of(
    candidates: Iterable[Candidate], material: Material
) -> tuple[list[Candidate], list[Candidate]]:
    """Return what can be made of a material, and what cannot.

    What says nothing of its material is judged by its shape: beams of steel are not solid
    rectangles, those of concrete and timber no hollow sections.
    """
    fitting: list[Candidate] = []
    others: list[Candidate] = []
    kind = _KINDS.get(material.category, material.category) or _kind(material.name)
    for candidate in candidates:
        (fitting if _can_be_of(candidate, kind) else others).append(candidate)
    return fitting, others


def _kind(text: str) -> str:
    told = kind_of(text)
    return _KINDS.get(told, told)


def _can_be_of(candidate: Candidate, material: str) -> bool:
    if candidate.kind and material:
        return candidate.kind == material
    return candidate.section.shape not in _NOT_MADE_OF.get(material, ())


def _fits(name: str, categories: Sequence[str], patterns: Sequence[str]) -> bool:
    return not patterns or any(
        fnmatchcase(text.casefold(), pattern.strip().casefold())
        for pattern in patterns
        for text in (name, *categories)
    )


def _key(name: str) -> str:
    """A name without what writers leave out or spell otherwise: "IPE 300", "ipe300"."""
    return re.sub(r"[\s_-]", "", name.casefold()).replace("×", "x")


def _same_profile(one: Section, other: Section) -> bool:
    return abs(one.area - other.area) <= _SAME_AREA * one.area and all(
        abs(a - b) <= _SAME_OUTLINE * a
        for a, b in ((one.depth, other.depth), (one.width, other.width))
    )


def _ambiguous(names: Sequence[str]) -> Finding:
    return Finding(
        "warning",
        "profile-ambiguous",
        f"{listed(names)}: the model has profiles of different dimensions with these names, so "
        f"they are not offered.",
    )


def _notes(taken: Sequence[str], clashing: Sequence[str]) -> Iterable[Finding]:
    if taken:
        yield Finding(
            "note",
            "profile-of-model",
            f"{listed(taken)}: the model has profiles of these names with slightly other "
            f"dimensions (fillets, say); they are used in place of those of the list.",
        )
    if clashing:
        yield Finding(
            "warning",
            "profile-clashes",
            f"{listed(clashing)}: the model has other profiles of these names, so those of the "
            f"list are left out.",
        )
