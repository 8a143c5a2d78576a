"""Which members a change of section or material is meant for."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from analysis_core.model import Line, Member
from analysis_core.results import Outcome

from .words import say


@dataclass(frozen=True, slots=True)
class Scope:
    """Members that are changed together: their elements by GlobalId, and what they have now."""

    key: str
    """"span", "line", "alike" or "every"."""
    words: str
    marks: tuple[str, ...]
    elements: tuple[str, ...]
    sections: tuple[str, ...]
    materials: tuple[str, ...]
    density: float = 0.0
    """kg/m³, of the first member; 0 where it is not known."""
    category: str = ""
    """What the first member is made of: "steel", say."""


def scopes(outcome: Outcome, line: int, member: int | None) -> list[Scope]:
    """Return what can be meant where a line, and perhaps a span of it, is chosen."""
    from analysis_core.checking.choosing import kinds

    chosen = outcome.lines[line].line
    found = []
    if member is not None and len(_spans(chosen)) > 1 and chosen.members[member].role == "span":
        part = chosen.members[member]
        number = part.span if part.span is not None else part.id
        words = say("span {number} of {mark}", number=number, mark=chosen.mark)
        found.append(_scope("span", words, (chosen.mark,), [part]))
    found.append(
        _scope("line", say("line {mark}", mark=chosen.mark), (chosen.mark,), _spans(chosen))
    )
    groups = kinds(outcome.model, [chosen.mark], alike=True)
    marks = groups[0] if groups else ()
    if len(marks) > 1:
        lines = [x for x in outcome.model.lines if x.mark in marks]
        spans = [m for x in lines for m in _spans(x)]
        words = say(
            "all {count} lines of {section}", count=len(marks), section=_name(spans[0]) or "–"
        )
        found.append(_scope("alike", words, tuple(marks), spans))
    return found


def every_kind(outcome: Outcome) -> Scope:
    """Return all lines, one section for those of a kind."""
    spans = [m for line in outcome.model.lines for m in _spans(line)]
    return _scope("every", say("all lines, kind by kind"), (), spans)


def elements_of(outcome: Outcome, marks: Iterable[str]) -> tuple[str, ...]:
    """Return the elements of the spans of lines."""
    wanted = set(marks)
    lines = [line for line in outcome.model.lines if line.mark in wanted]
    return _elements(m for line in lines for m in _spans(line))


def _scope(key: str, words: str, marks: tuple[str, ...], spans: list[Member]) -> Scope:
    first = spans[0].material if spans else None
    return Scope(
        key,
        words,
        marks,
        _elements(spans),
        tuple(dict.fromkeys(_name(m) for m in spans)),
        tuple(dict.fromkeys(m.material.name if m.material else "" for m in spans)),
        first.density if first else 0.0,
        first.category if first else "",
    )


def _spans(line: Line) -> list[Member]:
    return [m for m in line.members if m.role == "span"]


def _elements(spans: Iterable[Member]) -> tuple[str, ...]:
    return tuple(dict.fromkeys(m.element for m in spans if m.element))


def _name(member: Member) -> str:
    return member.section.name if member.section else ""
