"""The list of sections to pick from."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from analysis_core.checking.offers import JOB, MODEL, Candidate
from analysis_core.report.tables import safe
from analysis_core.units import DisplayUnits

from .words import noop, say

HOST = "host"
"""Origin of what FreeCAD and the user keep for all models."""
COLUMNS = (
    noop("Section"), noop("Kind"), noop("From"), noop("Depth"), noop("Width"), noop("Mass"),
    noop("Inertia"),
)  # fmt: skip
QUANTITIES = ("", "", "", "section length", "section length", "mass per length", "inertia")


@dataclass(frozen=True, slots=True)
class ProfileRow:
    """A section: its texts by column, what to sort by, and the candidate behind it."""

    texts: tuple[str, ...]
    order: tuple[str | float, ...]
    candidate: Candidate


def profile_rows(
    candidates: Iterable[Candidate], density: float, units: DisplayUnits
) -> list[ProfileRow]:
    """Return the rows; ``density`` (kg/m³) of the members, for the mass."""
    return [_row(candidate, density, units) for candidate in candidates]


def fitting(rows: Sequence[ProfileRow], words: str, kind: str) -> list[ProfileRow]:
    """Return the rows that hold all words, of one kind ("": of any)."""
    wanted = words.casefold().split()
    return [
        row
        for row in rows
        if (not kind or kind in row.candidate.categories)
        and all(any(w in text.casefold() for text in row.texts[:3]) for w in wanted)
    ]


def kinds_of(candidates: Iterable[Candidate]) -> list[str]:
    """Return the categories that candidates belong to, in their order."""
    return list(dict.fromkeys(kind for c in candidates for kind in c.categories))


def compared(
    old: Candidate | None, new: Candidate, densities: tuple[float, float], units: DisplayUnits
) -> str:
    """Return how a section differs from the one before, in a sentence.

    ``densities``: of the material before and after, kg/m³.
    """
    before, after = densities
    parts = [
        f"{say(words)} {_change(a, b, quantity, units)}"
        for words, quantity, a, b in (
            (noop("depth"), "section length", old and old.section.depth, new.section.depth),
            (noop("mass"), "mass per length", old and old.section.area * before,
             new.section.area * after),
            (noop("inertia"), "inertia", old and old.section.inertia, new.section.inertia),
        )
        if b or a
    ]  # fmt: skip
    return f"{safe(new.name)}: {', '.join(parts)}"


def mass_text(mass: float) -> str:
    """Return kg/m as a text without unit."""
    return f"{mass:.1f}"


def origin_words(origin: str) -> str:
    """Return where a section comes from."""
    known = {MODEL: say("model"), JOB: say("job file"), HOST: "FreeCAD"}
    return known.get(origin, safe(origin))


def _row(candidate: Candidate, density: float, units: DisplayUnits) -> ProfileRow:
    section = candidate.section
    mass = section.area * density
    kinds = ", ".join(map(safe, candidate.categories))
    origin = origin_words(candidate.origin)
    return ProfileRow(
        (
            safe(candidate.name), kinds, origin, units.number(section.depth, "section length"),
            units.number(section.width, "section length"), mass_text(mass) if mass else "–",
            units.number(section.inertia, "inertia"),
        ),
        (
            candidate.name.casefold(), kinds.casefold(), origin, section.depth, section.width,
            section.area, section.inertia,
        ),
        candidate,
    )  # fmt: skip


def _change(old: float | None, new: float, quantity: str, units: DisplayUnits) -> str:
    if quantity == "mass per length":
        shown, unit = mass_text, "kg/m"
    else:
        unit = units.symbol(quantity)

        def shown(value: float) -> str:
            return units.number(value, quantity)

    before = f"{shown(old)} → " if old else ""
    return f"{before}{shown(new)} {unit}"
