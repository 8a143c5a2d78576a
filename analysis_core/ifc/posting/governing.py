"""What governs each element of a model: results of a line's members, seen from the element.

An element may be cut into several members (supports along it) and a member may run against its
element.  Positions here count from the element's own start; signs stay those of the line.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Sequence
from dataclasses import replace
from typing import NamedTuple

import numpy as np

from analysis_core.model import Member, Tie
from analysis_core.results import Extreme, Floats, LineResult, MemberEnvelope, Outcome

STRENGTH = "strength"
SERVICEABILITY = "serviceability"
_NOWHERE: Floats = np.zeros(0)


class Part(NamedTuple):
    """One member of an element, with the result of its line."""

    result: LineResult
    member: Member

    def position(self, s: float) -> float:
        """Return the place of ``s`` (m from the member's start) on the element."""
        offset = self.member.element_offset
        return offset - s if self.member.reversed_ else offset + s

    @property
    def start(self) -> float:
        """Position of that end of the member which is nearer to the element's start."""
        return self.position(self.member.length if self.member.reversed_ else 0.0)


class Curve(NamedTuple):
    """Values of the property ``name`` at ascending positions (m) along an element.

    A position stands twice where the values jump.
    """

    name: str
    positions: Floats
    values: Floats


class ElementEffects(NamedTuple):
    """Governing effects of one element; an ``Extreme`` here holds the element's position.

    ``results`` are the lines it belongs to, ``curves`` its diagrams: none of a limit state that
    was not analysed.
    """

    element: str
    results: tuple[LineResult, ...]
    sagging: Extreme
    hogging: Extreme
    shear: Extreme
    deflection: Extreme
    start_moment: tuple[float, float]
    end_moment: tuple[float, float]
    curves: tuple[Curve, ...]

    @property
    def marks(self) -> str:
        """The marks of its lines."""
        return ", ".join(dict.fromkeys(result.line.mark for result in self.results))

    @property
    def finite(self) -> bool:
        """Whether every single value is a number; the curves are looked at in bulk elsewhere."""
        extremes = (self.sagging, self.hogging, self.shear, self.deflection)
        # A sum with an infinity or a not-a-number in it is not finite.
        total = sum(self.start_moment) + sum(self.end_moment)
        return math.isfinite(total + sum([e.value + e.x for e in extremes]))


class _Found(NamedTuple):
    part: Part
    state: str
    envelope: MemberEnvelope


def element_parts(outcome: Outcome) -> dict[str, list[Part]]:
    """Return the members of each element in every balanced line, in the order of the lines.

    A building element that members of an analysis model stand for has their parts.
    """
    parts: dict[str, list[Part]] = {}
    for result in outcome.lines:
        if result.status == "balanced":
            for member in result.line.members:
                if member.element:
                    parts.setdefault(member.element, []).append(Part(result, member))
    for tie in outcome.model.ties:
        for part in parts.get(tie.item, ()):
            on_element = Part(part.result, _tied(part.member, tie))
            parts.setdefault(tie.element, []).append(on_element)
    return parts


def tied_elements(ties: Iterable[Tie]) -> dict[str, str]:
    """Return the building element that each item of an analysis model stands for."""
    return {tie.item: tie.element for tie in ties}


def _tied(member: Member, tie: Tie) -> Member:
    offset = member.element_offset
    return replace(
        member,
        element_offset=tie.offset - offset if tie.reversed_ else tie.offset + offset,
        reversed_=member.reversed_ != tie.reversed_,
    )


def element_effects(element: str, parts: Sequence[Part]) -> ElementEffects | None:
    """Return what governs over all members of an element, None where nothing was enveloped.

    Moments and shears govern over every limit state; deflections over serviceability, and over
    strength only where nothing else was analysed.
    """
    ordered = sorted(parts, key=lambda part: part.start)
    found = [each for part in ordered for each in _envelopes(part)]
    if not found:
        return None
    service = [each for each in found if each.state == SERVICEABILITY] or found
    results = [part.result for part in ordered]
    return ElementEffects(
        element,
        tuple(results if len(results) == 1 else {id(r): r for r in results}.values()),
        _governing([(e.envelope.sagging, e.part) for e in found], max, _value),
        _governing([(e.envelope.hogging, e.part) for e in found], min, _value),
        _governing(
            [(x, e.part) for e in found for x in (e.envelope.shear_max, e.envelope.shear_min)],
            max,
            _size,
        ),
        _governing(
            [
                (x, e.part)
                for e in service
                for x in (e.envelope.deflection_down, e.envelope.deflection_up)
            ],
            max,
            _size,
        ),
        _end_range(found, ordered[0], at_start=True),
        _end_range(found, ordered[-1], at_start=False),
        tuple(_curves(found)),
    )


def _envelopes(part: Part) -> list[_Found]:
    """The part's envelopes, strength first, so that it is named where both are equal."""
    found = []
    number = part.member.id
    envelopes = part.result.envelopes
    for state in sorted(envelopes, key=_strength_first) if len(envelopes) > 1 else envelopes:
        members = envelopes[state].members
        if number < len(members) and members[number].member == number:
            found.append(_Found(part, state, members[number]))
        else:
            found += [_Found(part, state, m) for m in members if m.member == number]
    return found


def _strength_first(state: str) -> bool:
    return state != STRENGTH


_Candidate = tuple[Extreme, Part]


def _value(candidate: _Candidate) -> float:
    return candidate[0].value


def _size(candidate: _Candidate) -> float:
    return abs(candidate[0].value)


def _governing(
    candidates: list[_Candidate],
    choose: Callable[..., _Candidate],
    measure: Callable[[_Candidate], float],
) -> Extreme:
    """The first of the candidates that are equally large, at its place on the element."""
    extreme, part = choose(candidates, key=measure)
    if not part.member.element_offset and not part.member.reversed_:
        return extreme
    return Extreme(extreme.value, part.position(extreme.x), extreme.source)


def _end_range(found: list[_Found], end: Part, *, at_start: bool) -> tuple[float, float]:
    """Lowest and highest diagram moment at the element's start or end."""
    own_start = end.member.reversed_ != at_start
    ranges = [
        each.envelope.start_moment if own_start else each.envelope.end_moment
        for each in found
        if each.part is end
    ]
    return min(r[0] for r in ranges), max(r[1] for r in ranges)


_ALONG: dict[str, tuple[tuple[str, Callable[[MemberEnvelope], Floats]], ...]] = {
    STRENGTH: (
        ("MomentMax", lambda e: e.moment_max),
        ("MomentMin", lambda e: e.moment_min),
        ("ShearMax", lambda e: e.shear_max_at),
        ("ShearMin", lambda e: e.shear_min_at),
    ),
    SERVICEABILITY: (
        ("DeflectionMax", lambda e: e.deflection_max),
        ("DeflectionMin", lambda e: e.deflection_min),
    ),
}


def _curves(found: list[_Found]) -> list[Curve]:
    """The diagrams along the element; where two lines share it, those with the larger moments."""
    main = found[0].part.result
    if any(each.part.result is not main for each in found):
        sizes = [max(e.envelope.sagging.value, -e.envelope.hogging.value) for e in found]
        main = found[sizes.index(max(sizes))].part.result
    curves: list[Curve] = []
    for state, readings in _ALONG.items():
        parts = [each for each in found if each.state == state and each.part.result is main]
        positions = _chained([_places(each) for each in parts]) if parts else _NOWHERE
        if positions.size:
            curves += [
                Curve(
                    name, positions, _chained([_along(each, read(each.envelope)) for each in parts])
                )
                for name, read in readings
            ]
    return curves


def _places(each: _Found) -> Floats:
    member = each.part.member
    x = each.envelope.x
    if member.reversed_:
        return member.element_offset - x[::-1]
    return x + member.element_offset if member.element_offset else x


def _along(each: _Found, values: Floats) -> Floats:
    """Values in the direction of the element."""
    return values[::-1] if each.part.member.reversed_ else values


def _chained(pieces: list[Floats]) -> Floats:
    return pieces[0] if len(pieces) == 1 else np.concatenate(pieces)
