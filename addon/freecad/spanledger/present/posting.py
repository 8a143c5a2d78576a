"""What posting will write, as a tree to read before it is written."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from analysis_core.report.tables import safe
from analysis_core.results import Outcome
from analysis_core.units import DisplayUnits

from .words import say

if TYPE_CHECKING:
    from analysis_core.ifc.posting.governing import ElementEffects
    from analysis_core.ifc.posting.support_reactions import SupportReactions
    from analysis_core.ifc.posting.writer import PostReport
    from analysis_core.ifc.updating import Change

MOST_ELEMENTS = 1000


@dataclass(frozen=True, slots=True)
class PostedSet:
    """One property set on one element: (property, value in words)."""

    element: str
    name: str
    values: tuple[tuple[str, str], ...]


@dataclass(frozen=True, slots=True)
class MemberChange:
    """One thing of an element that would be changed; ``new`` "" where it stays, fitting or not."""

    element: str
    what: str
    old: str
    new: str


@dataclass(frozen=True, slots=True)
class PostPreview:
    """Sets in the order of the elements, and what is left out of the list."""

    sets: tuple[PostedSet, ...]
    elements: int
    supports: int
    lines: int
    left_out: tuple[str, ...]
    """Marks of lines that were not analysed."""
    changes: tuple[MemberChange, ...] = ()
    """What the members given others would change in the model."""
    refusal: str = ""
    """Why they cannot be changed in the model."""

    @property
    def summary(self) -> str:
        """Return how much will be written, in a sentence."""
        words = say(
            "{lines} lines: property sets on {members} members and {supports} supporting elements.",
            lines=self.lines,
            members=self.elements,
            supports=self.supports,
        )
        if self.left_out:
            left = ", ".join(self.left_out)
            words += " " + say("Not analysed, so not written: {lines}.", lines=left)
        return words


def preview(
    outcome: Outcome,
    units: DisplayUnits,
    changes: Sequence[Change] = (),
    refusal: str = "",
) -> PostPreview:
    """Return what posting this outcome will write, and ``changes`` of members before it."""
    from analysis_core.ifc.posting.governing import element_effects, element_parts  # late: start-up
    from analysis_core.ifc.posting.support_reactions import support_reactions

    names = dict(outcome.model.names)
    parts = element_parts(outcome)
    reactions = support_reactions(outcome)
    sets: list[PostedSet] = []
    for element, own in list(parts.items())[:MOST_ELEMENTS]:
        effects = element_effects(element, own)
        if effects is not None:
            sets += _member_sets(effects, _name(element, names), outcome, units)
    for element, found in list(reactions.items())[:MOST_ELEMENTS]:
        sets.append(_reaction_set(found, _name(element, names), units))
    balanced = [r for r in outcome.lines if r.status == "balanced"]
    return PostPreview(
        sets=tuple(sets),
        elements=len(parts),
        supports=len(reactions),
        lines=len(balanced),
        left_out=tuple(safe(r.line.mark) for r in outcome.lines if r.status != "balanced"),
        changes=tuple(
            MemberChange(_name(c.element, {c.element: c.name}), safe(c.what), safe(c.old),
                         safe(c.new))
            for c in changes
        ),
        refusal=safe(refusal),
    )  # fmt: skip


def posted_words(report: PostReport, target: str) -> str:
    """Return what posting did, in a sentence."""
    parts = [
        f"{count} {word}"
        for count, word in (
            (report.written, say("written")),
            (report.updated, say("brought up to date")),
            (report.unchanged, say("unchanged")),
        )
        if count
    ]
    sets = ", ".join(parts) or say("none")
    return say("Posted into '{target}': property sets {sets}.", target=target, sets=sets)


def _member_sets(
    effects: ElementEffects, element: str, outcome: Outcome, units: DisplayUnits
) -> list[PostedSet]:
    marks = ", ".join(safe(r.line.mark) for r in effects.results)
    values = [("LineMark", marks)]
    for name, extreme, quantity in (
        ("SaggingMoment", effects.sagging, "moment"),
        ("HoggingMoment", effects.hogging, "moment"),
        ("Shear", effects.shear, "force"),
        ("Deflection", effects.deflection, "deflection"),
    ):
        where = units.text(extreme.x, "length")
        source = f" ({safe(extreme.source)})" if extreme.source else ""
        values.append((name, f"{units.text(extreme.value, quantity)} @ {where}{source}"))
    for name, bounds in (
        ("StartMoment", effects.start_moment),
        ("EndMoment", effects.end_moment),
    ):
        values.append((name, _range(bounds, "moment", units)))
    sets = [PostedSet(element, "Spanledger_Effects", tuple(values))]
    if effects.curves:
        curves = tuple(
            (curve.name, say("{count} positions", count=len(curve.positions)))
            for curve in effects.curves
        )
        sets.append(PostedSet(element, "Spanledger_Diagrams", curves))
    record = (
        ("Rules", safe(outcome.rules)),
        ("Fingerprint", ", ".join(r.fingerprint[:12] for r in effects.results)),
    )
    sets.append(PostedSet(element, "Spanledger_Record", record))
    return sets


def _reaction_set(found: SupportReactions, element: str, units: DisplayUnits) -> PostedSet:
    values = []
    for component, quantity in (
        ("Vertical", "force"),
        ("Horizontal", "force"),
        ("Moment", "moment"),
    ):
        total = found.total(component)
        if total is not None and (component == "Vertical" or any(total)):
            values.append((component, _range(total, quantity, units)))
    values += [
        (f"{safe(mark)} / {safe(case)}", units.text(value, "force"))
        for (mark, case), value in found.cases.items()
    ]
    return PostedSet(element, "Spanledger_Reactions", tuple(values))


def _range(bounds: tuple[float, float], quantity: str, units: DisplayUnits) -> str:
    return f"{units.number(bounds[0], quantity)} … {units.text(bounds[1], quantity)}"


def _name(element: str, names: Mapping[str, str]) -> str:
    return f"{safe(names[element])}  {safe(element)}" if names.get(element) else safe(element)
