"""What members are checked for: effects that occur together, bearings, deflections."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from analysis_core.checking.restraints import (
    Stretch,
    continuous_ends,
    restraints,
    stretch_of,
)
from analysis_core.checks.design import (
    Bearing,
    EffectField,
    Governing,
    MemberDesign,
    Redistribution,
    Sag,
)
from analysis_core.checks.timber_en import DURATIONS
from analysis_core.distribution import solve
from analysis_core.effects.arrangements import SpanCases
from analysis_core.effects.deflection_limits import (
    DeflectionLimit,
    SpanDeflection,
    span_deflections,
    spans_of,
)
from analysis_core.effects.envelopes import envelope
from analysis_core.effects.states import State, governing_states, state_stations
from analysis_core.model import Combination, Line, LineModel, Member, Transfer
from analysis_core.results import Extreme, LineEnvelope, LineResult, LineSolution, Stations
from analysis_core.settings import Settings
from analysis_core.solving.line_details import DetailInput, detail_of

Floats = NDArray[np.float64]

_COUNT = 41
# Load duration by the nature of a case, EN 1995-1-1 table 2.2 (from memory; nationally determined).
_DURATION = {
    "permanent": "permanent", "imposed": "medium", "snow": "short", "wind": "short",
    "settlement": "permanent", "temperature": "medium", "other": "medium",
}  # fmt: skip


@dataclass(frozen=True, slots=True, eq=False)
class LineEffects:
    """What fields of effects are made of: the parts of the cases, extremes, and their states.

    ``shifts``: how far moments were redistributed, by member; empty where they are elastic.
    """

    parts: LineSolution
    strength: LineEnvelope
    states: tuple[State, ...]
    shifts: Mapping[int, Redistribution]


@dataclass(frozen=True, slots=True, eq=False)
class LineFields:
    """Effects that occur together, of all members of a line.

    ``axial`` (R, M, 2) N at the ends of members.  ``durations`` by the source of a field.
    """

    effects: LineEffects
    at: Stations
    axial: Floats
    durations: Mapping[str, str]
    envelopes: tuple[LineEnvelope, ...]
    """Whose extremes the states are; for timber one for each load duration."""
    bearings: bool = False
    """Whether the forces on bearings are wanted."""


def elastic_effects(result: LineResult) -> LineEffects:
    """Return the elastic effects of a line."""
    assert result.parts is not None
    strength = result.envelopes["strength"]
    return LineEffects(result.parts, strength, detail_of(result).states, {})


def redistributed_effects(result: LineResult) -> LineEffects | None:
    """Return the effects after redistribution; None where nothing was redistributed."""
    found, given = detail_of(result).redistributed, _given(result)
    if found is None or found.envelope is None or found.solution is None:
        return None
    strength = [c for c in given.combinations if c.limit_state == "strength"]
    states = governing_states(
        given.spans, found.solution, strength, given.arrangements, found.envelope
    )
    figures = given.rule_set.values()
    elastic = result.envelopes["strength"].members
    shifts = {}
    for member, before, after in zip(
        result.line.members, elastic, found.envelope.members, strict=True
    ):
        part = max(found.fractions.get(joint, 0.0) for joint in (member.start, member.end))
        sagging = 1.0
        if before.sagging.value > 0.0:
            sagging = max(after.sagging.value, 0.0) / before.sagging.value
        shifts[member.id] = Redistribution(part, figures, sagging, found.plan.ductility)
    return LineEffects(found.solution, found.envelope, states, shifts)


def line_fields(result: LineResult, effects: LineEffects) -> LineFields:
    """Return the states that govern moments and shears, and where axial forces act, more.

    Then the combinations with everything loaded come beside them.
    """
    states = list(effects.states)
    if result.combined is not None and np.abs(effects.parts.axial).max(initial=0.0) > 0.0:
        strength = [c for c in _given(result).combinations if c.limit_state == "strength"]
        states += [_everything(c, result) for c in strength]
    return _of_states(effects, states, {}, (effects.strength,))


def timber_fields(result: LineResult, model: LineModel, settings: Settings) -> LineFields:
    """Return the states that govern under each load duration (EN 1995-1-1, 3.1.3(2)).

    A combination without its shorter actions is smaller and weaker: it may govern.
    """
    given = _given(result)
    assert result.parts is not None
    states: list[State] = []
    durations: dict[str, str] = {}
    found = []
    for duration, combinations in by_duration(given.combinations, model, settings).items():
        of_class = envelope(
            given.spans, result.parts, combinations, limit_state="strength",
            arrangements=given.arrangements,
        )  # fmt: skip
        found.append(of_class)
        for state in governing_states(
            given.spans, result.parts, combinations, given.arrangements, of_class
        ):
            states.append(state)
            durations[state.source] = duration
        for reaction in of_class.reactions:
            durations[reaction.vertical_max.source] = duration
    return _of_states(elastic_effects(result), states, durations, tuple(found), bearings=True)


def by_duration(
    combinations: Sequence[Combination], model: LineModel, settings: Settings
) -> dict[str, list[Combination]]:
    """Return strength combinations, whole and without their shorter actions, by duration."""
    of_case = {
        case.name: settings.checks.durations.get(case.name, _DURATION[case.nature])
        for case in model.cases
    }
    rank = DURATIONS.index
    out: dict[str, list[Combination]] = {}
    seen: set[tuple[tuple[str, float], ...]] = set()
    for combination in combinations:
        if combination.limit_state != "strength":
            continue
        acting = {c: f for c, f in combination.factors.items() if f and c in of_case}
        classes = sorted({of_case[c] for c in acting}, key=rank, reverse=True)
        for duration in classes:
            kept = {c: f for c, f in acting.items() if rank(of_case[c]) <= rank(duration)}
            key = tuple(sorted(kept.items()))
            left = [c for c in acting if c not in kept]
            if key in seen and left:
                continue
            seen.add(key)
            name = f"{combination.name} without {', '.join(left)}" if left else combination.name
            out.setdefault(duration, []).append(replace(combination, name=name, factors=kept))
    return out


def designs(
    result: LineResult,
    fields: LineFields,
    model: LineModel,
    settings: Settings,
    transfers: Sequence[Transfer],
) -> list[MemberDesign | None]:
    """Return each member ready to be checked; None where section or material are missing.

    ``transfers``: those of lines that bear directly on this one.
    """
    line, strength = result.line, fields.effects.strength
    spans = {span.number: span for span in spans_of(line)}
    out: list[MemberDesign | None] = []
    for member, found in zip(line.members, strength.members, strict=True):
        if member.section is None or member.material is None:
            out.append(None)
            continue
        stretch = stretch_of(line, member)
        span = spans.get(member.span) if member.span is not None else None
        shear = max(found.shear_max, found.shear_min, key=lambda e: abs(e.value))
        out.append(
            MemberDesign(
                member.id, member.section, member.material, member.length,
                _fields(fields, stretch, member),
                Governing(found.sagging, found.hogging, shear),
                restraints(line, stretch, member, model, settings, transfers),
                cantilever=span.cantilever if span else bool(stretch.loose),
                continuous_ends=continuous_ends(line, span) if span else 0,
                span=span.length if span else stretch.length,
                bearings=_bearings(line, member, fields),
                redistribution=fields.effects.shifts.get(member.id),
            )
        )  # fmt: skip
    return out


def timber_sags(result: LineResult, creep: float) -> dict[int, tuple[Sag, ...]] | None:
    """Return deflections at once and in the end by the member where each is largest.

    In the end: the characteristic combination plus k_def times the quasi-permanent one, which is
    2.2.3(5) term by term.  Members count as flexible in shear whatever the job file says: E/G of
    16 makes a tenth of the deflection of a deep one.  None where the combinations do not have both
    kinds.
    """
    given = _given(result)
    of_kind = {
        kind: [c for c in given.combinations if c.kind == kind and c.limit_state != "strength"]
        for kind in ("characteristic", "quasi-permanent")
    }
    if not all(of_kind.values()):
        return None
    final = [
        _with_creep(c, slow, creep)
        for c in of_kind["characteristic"]
        for slow in of_kind["quasi-permanent"]
    ]
    spans, parts = _flexible_in_shear(given)
    out: dict[int, tuple[Sag, ...]] = {}
    for name, combinations in (("w_inst", of_kind["characteristic"]), ("w_net_fin", final)):
        (found,) = span_deflections(
            [spans], [parts], combinations, DeflectionLimit(), arrangements=given.arrangements
        )
        for span in found:
            member, sag = _sag(name, span)
            out[member] = (*out.get(member, ()), sag)
    return out


def _flexible_in_shear(given: DetailInput) -> tuple[SpanCases, LineSolution]:
    """The line with its solid timber members flexible in shear, solved anew by its parts."""
    line = given.spans.line
    members = tuple(_with_shear(member) for member in line.members)
    if members == line.members:
        return given.spans, given.parts
    spans = replace(given.spans, line=replace(line, members=members))
    return spans, solve(spans.line, spans.cases)


def _with_shear(member: Member) -> Member:
    section, material = member.section, member.material
    if section is None or material is None or section.shape != "rectangle":
        return member
    rigidity = material.usable_shear_modulus * section.area / 1.2
    if rigidity <= 0.0 or any(piece.shear is not None for piece in member.pieces):
        return member
    pieces = tuple(replace(piece, shear=(rigidity,)) for piece in member.pieces)
    return replace(member, pieces=pieces)


def _sag(name: str, found: SpanDeflection) -> tuple[int, Sag]:
    down = found.down.value >= -found.up.value
    worst, member = (found.down, found.down_member) if down else (found.up, found.up_member)
    span = found.span
    return member, Sag(name, worst.value, span.length, span.cantilever, worst.source, worst.x)


def _with_creep(fast: Combination, slow: Combination, creep: float) -> Combination:
    factors = dict(fast.factors)
    for case, factor in slow.factors.items():
        factors[case] = factors.get(case, 0.0) + creep * factor
    return replace(fast, name=f"{fast.name} + {creep:g} {slow.name}", factors=factors)


def _given(result: LineResult) -> DetailInput:
    given = detail_of(result).given
    assert given is not None
    return given


def _everything(combination: Combination, result: LineResult) -> State:
    """A combination with all of its actions on all spans."""
    parts = _given(result).spans.parts
    factors = tuple((p.name, combination.factors.get(p.case, 0.0)) for p in parts)
    return State(combination.name, factors)


def _of_states(
    effects: LineEffects,
    states: Sequence[State],
    durations: Mapping[str, str],
    found: tuple[LineEnvelope, ...],
    *,
    bearings: bool = False,
) -> LineFields:
    parts = effects.parts
    factors = np.array([[dict(s.factors).get(c, 0.0) for c in parts.cases] for s in states])
    factors = factors.reshape(len(states), len(parts.cases))
    axial = np.tensordot(factors, parts.axial, axes=1)
    at = state_stations(parts, states, _COUNT)
    return LineFields(effects, at, axial, durations, found, bearings)


_Extremes = Sequence[tuple[Extreme, bool]]
"""Extremes of a member, each with whether it is one of moments (or else of shears)."""


def _fields(fields: LineFields, stretch: Stretch, member: Member) -> tuple[EffectField, ...]:
    extremes = [
        (extreme, is_moment)
        for found in (of_line.members[member.id] for of_line in fields.envelopes)
        for extreme, is_moment in (
            (found.sagging, True), (found.hogging, True),
            (found.shear_max, False), (found.shear_min, False),
        )
    ]  # fmt: skip
    return tuple(
        _field(fields, row, stretch, member, [e for e in extremes if e[0].source == name])
        for row, name in enumerate(fields.at.names)
    )


def _field(
    fields: LineFields, row: int, stretch: Stretch, member: Member, extremes: _Extremes
) -> EffectField:
    at, m = fields.at, member.id
    along = None
    if len(stretch.runs) > 1:
        xs, moments = [], []
        for run in stretch.runs:
            order = slice(None, None, run.sign)
            xs.append((run.offset + run.sign * at.x[run.member.id])[order])
            moments.append((run.sign * at.moment[row, run.member.id])[order])
        along = np.concatenate(xs), np.concatenate(moments)
    x, moment, shear = _with_extremes(fields, row, m, extremes)
    low, high = sorted(fields.axial[row, m].tolist())
    return EffectField(at.names[row], x, moment, shear, along, (low, high))


def _with_extremes(
    fields: LineFields, row: int, member: int, extremes: _Extremes
) -> tuple[Floats, Floats, Floats]:
    """Effects at the stations, and at the exact places of the extremes that this state governs."""
    at = fields.at
    x, moment, shear = at.x[member], at.moment[row, member], at.shear[row, member]
    for extreme, is_moment in extremes:
        if np.abs(x - extreme.x).min() >= 1e-9:
            i = int(np.searchsorted(x, extreme.x))
            m, v = (float(np.interp(extreme.x, x, values)) for values in (moment, shear))
            m, v = (extreme.value, v) if is_moment else (m, extreme.value)
            x, moment, shear = (
                np.insert(a, i, new)
                for a, new in ((x, extreme.x), (moment, m), (shear, v))
            )  # fmt: skip
    return x, moment, shear


def _bearings(line: Line, member: Member, fields: LineFields) -> tuple[Bearing, ...]:
    """The bearings at the member's ends, each counted with one member alone."""
    if not fields.bearings:
        return ()
    out = []
    for joint in (member.start, member.end):
        support = line.joints[joint].support
        if support is None or support.vertical <= 0.0:
            continue
        meeting = [m for m in line.members if joint in (m.start, m.end)]
        if meeting[0] is not member:
            continue
        forces = []
        for found in fields.envelopes:
            of_joint = next((r for r in found.reactions if r.joint == joint), None)
            if of_joint is not None and of_joint.vertical_max.value > 0.0:
                forces.append((of_joint.vertical_max.source, of_joint.vertical_max.value))
        out.append(
            Bearing(joint, line.joints[joint].width, len(meeting) == 1, tuple(forces),
                    0.0 if joint == member.start else member.length)
        )  # fmt: skip
    return tuple(out)
