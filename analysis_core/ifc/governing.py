"""What governs each element of a model: results of a line's members, seen from the element.

An element may be cut into several members (supports along it) and a member may run against its
element.  Positions here count from the element's own start; signs stay those of the line.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass

import numpy as np

from analysis_core.model import Member
from analysis_core.results import Extreme, Floats, LineResult, MemberEnvelope, Outcome

STRENGTH = "strength"
SERVICEABILITY = "serviceability"
STEP_WIDTH = 1e-6
"""Where a diagram jumps, its two values stand this far apart, m: positions must differ."""


@dataclass(frozen=True, slots=True)
class Part:
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
        length = self.member.length if self.member.reversed_ else 0.0
        return self.position(length)


@dataclass(frozen=True, slots=True, eq=False)
class Curve:
    """Values at strictly increasing positions (m) along an element."""

    positions: Floats
    values: Floats


@dataclass(frozen=True, slots=True, eq=False)
class ElementEffects:
    """Governing effects of one element; an ``Extreme`` here holds the element's position.

    ``curves`` by property name; empty where the limit state was not analysed.
    """

    element: str
    parts: tuple[Part, ...]
    sagging: Extreme
    hogging: Extreme
    shear: Extreme
    deflection: Extreme
    start_moment: tuple[float, float]
    end_moment: tuple[float, float]
    curves: Mapping[str, Curve]

    @property
    def results(self) -> tuple[LineResult, ...]:
        """The lines the element belongs to, each once."""
        return tuple({id(part.result): part.result for part in self.parts}.values())

    @property
    def marks(self) -> str:
        """The marks of these lines."""
        return ", ".join(dict.fromkeys(result.line.mark for result in self.results))

    @property
    def finite(self) -> bool:
        """Whether every value is a number that can be written."""
        extremes = (self.sagging, self.hogging, self.shear, self.deflection)
        numbers = [e.value for e in extremes] + [e.x for e in extremes]
        numbers += [*self.start_moment, *self.end_moment]
        return all(map(math.isfinite, numbers)) and all(
            np.isfinite(c.values).all() and np.isfinite(c.positions).all()
            for c in self.curves.values()
        )


def element_parts(outcome: Outcome) -> dict[str, list[Part]]:
    """Return the members of each element in every balanced line, in the order of the lines."""
    parts: dict[str, list[Part]] = {}
    for result in outcome.lines:
        if result.status != "balanced":
            continue
        for member in result.line.members:
            if member.element:
                parts.setdefault(member.element, []).append(Part(result, member))
    return parts


def element_effects(element: str, parts: Iterable[Part]) -> ElementEffects | None:
    """Return what governs over all members of an element, None where nothing was enveloped.

    Moments and shears govern over every limit state; deflections over serviceability, and over
    strength only where nothing else was analysed.
    """
    ordered = tuple(sorted(parts, key=lambda part: part.start))
    found = [(part, state, envelope) for part in ordered for state, envelope in _envelopes(part)]
    if not found:
        return None
    service = [f for f in found if f[1] == SERVICEABILITY] or found
    both = [(part, envelope) for part, _, envelope in found]
    serviceable = [(part, envelope) for part, _, envelope in service]
    return ElementEffects(
        element=element,
        parts=ordered,
        sagging=_governing(both, lambda e: [e.sagging], float),
        hogging=_governing(both, lambda e: [e.hogging], lambda v: -v),
        shear=_governing(both, lambda e: [e.shear_max, e.shear_min], abs),
        deflection=_governing(serviceable, lambda e: [e.deflection_down, e.deflection_up], abs),
        start_moment=_end_range(both, ordered[0], at_start=True),
        end_moment=_end_range(both, ordered[-1], at_start=False),
        curves=_curves(found),
    )


def _envelopes(part: Part) -> list[tuple[str, MemberEnvelope]]:
    """The part's envelopes, strength first, so that it is named where both are equal."""
    found = []
    for state in sorted(part.result.envelopes, key=lambda s: s != STRENGTH):
        members = part.result.envelopes[state].members
        number = part.member.id
        if number < len(members) and members[number].member == number:
            found.append((state, members[number]))
        else:
            found += [(state, m) for m in members if m.member == number]
    return found


def _governing(
    found: list[tuple[Part, MemberEnvelope]],
    pick: Callable[[MemberEnvelope], list[Extreme]],
    size: Callable[[float], float],
) -> Extreme:
    best, owner = None, found[0][0]
    for part, envelope in found:
        for extreme in pick(envelope):
            if best is None or size(extreme.value) > size(best.value):
                best, owner = extreme, part
    assert best is not None  # pick gives at least one
    return Extreme(float(best.value), owner.position(float(best.x)), best.source)


def _end_range(
    found: list[tuple[Part, MemberEnvelope]], end: Part, *, at_start: bool
) -> tuple[float, float]:
    """Lowest and highest diagram moment at the element's start or end."""
    ranges = [
        envelope.start_moment if part.member.reversed_ != at_start else envelope.end_moment
        for part, envelope in found
        if part is end
    ]
    return min(float(r[0]) for r in ranges), max(float(r[1]) for r in ranges)


_CURVES: tuple[tuple[str, str, str], ...] = (
    ("MomentMax", STRENGTH, "moment_max"),
    ("MomentMin", STRENGTH, "moment_min"),
    ("ShearMax", STRENGTH, "shear_max_at"),
    ("ShearMin", STRENGTH, "shear_min_at"),
    ("DeflectionMax", SERVICEABILITY, "deflection_max"),
    ("DeflectionMin", SERVICEABILITY, "deflection_min"),
)


def _curves(found: list[tuple[Part, str, MemberEnvelope]]) -> dict[str, Curve]:
    """The diagrams along the element; where two lines share it, those with the larger moments."""
    main = max(found, key=lambda f: max(f[2].sagging.value, -f[2].hogging.value))[0].result
    curves: dict[str, Curve] = {}
    for state in (STRENGTH, SERVICEABILITY):
        parts = [(p, e) for p, s, e in found if s == state and p.result is main]
        if not parts:
            continue
        positions = [_along(part, envelope.x) for part, envelope in parts]
        positions = [
            part.member.element_offset + (-x if part.member.reversed_ else x)
            for (part, _), x in zip(parts, positions, strict=True)
        ]
        order = _increasing(positions)
        for name, of_state, attribute in _CURVES:
            if of_state == state:
                values = [_along(part, getattr(e, attribute)) for part, e in parts]
                curves[name] = _curve(order, values)
    return curves


def _along(part: Part, values: Floats) -> Floats:
    """Values in the direction of the element."""
    return values[::-1] if part.member.reversed_ else values


def _increasing(positions: list[Floats]) -> Floats:
    """Strictly increasing positions: a repeated one moves on by STEP_WIDTH."""
    x = positions[0] if len(positions) == 1 else np.concatenate(positions)
    for i in np.flatnonzero(np.diff(x) < STEP_WIDTH) + 1:
        if x.base is not None or not x.flags.writeable:
            x = x.copy()
        x[i] = x[i - 1] + STEP_WIDTH
    return x


def _curve(positions: Floats, values: list[Floats]) -> Curve:
    return Curve(positions, values[0] if len(values) == 1 else np.concatenate(values))
