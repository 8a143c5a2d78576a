"""The lightest section of a list that satisfies strength and deflection, for one or more lines.

Self weight and stiffness follow each candidate, and the line is solved anew with everything that
bears on it.  What the change does to other lines is told before anything is written.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass, replace

from analysis_core.checking.members import MemberChecks, check_lines
from analysis_core.errors import JobError
from analysis_core.idealise.self_weight import CASE_NAME
from analysis_core.load_levels import levels
from analysis_core.model import Action, DistributedForce, Line, LineModel, Member, Section
from analysis_core.results import LineResult, Outcome
from analysis_core.settings import Settings

Solve = Callable[[LineModel], Outcome]
_SAME = 1e-6


@dataclass(frozen=True, slots=True)
class Tried:
    """One candidate: mass in kg/m, the largest use and its check; or why it was not suitable."""

    name: str
    mass: float
    use: float
    governed_by: str
    suits: bool
    reason: str = ""


@dataclass(frozen=True, slots=True)
class Effect:
    """What the change did to a line: its largest reaction (N) and use, before and after."""

    mark: str
    own: bool
    reaction_before: float
    reaction_after: float
    use_before: float | None
    use_after: float | None


@dataclass(frozen=True, slots=True)
class Choice:
    """The choice for lines that get one section in common; ``chosen`` "" where none suits."""

    marks: tuple[str, ...]
    before: str
    chosen: str
    mass_before: float
    mass_after: float
    length: float
    tried: tuple[Tried, ...]
    effects: tuple[Effect, ...] = ()
    reason: str = ""
    """Why nothing was tried."""


def choose_lightest(
    model: LineModel,
    settings: Settings,
    candidates: Mapping[str, Section],
    groups: Sequence[Sequence[str]],
    solve: Solve,
) -> list[Choice]:
    """Return the lightest section for each group of lines; what is chosen stays for the next.

    ``groups`` hold marks; what bears on others should come first (see ``kinds``).  ``solve``
    gives the outcome of a model.
    """
    found = []
    for marks in groups:
        choice, model = _choose(model, settings, candidates, tuple(marks), solve)
        found.append(choice)
    return found


def kinds(model: LineModel, marks: Sequence[str], *, alike: bool) -> list[tuple[str, ...]]:
    """Return groups of lines, in the order of the load path.

    Each of ``marks`` by itself; with ``alike``, with all lines of its section and material; of no
    marks, every kind of the model.
    """
    order = [mark for level in levels([x.mark for x in model.lines], model.transfers)
             for group in level for mark in group]  # fmt: skip
    lines = {line.mark: line for line in model.lines}
    if marks and not alike:
        return [(mark,) for mark in order if mark in marks]
    wanted = {_kind(lines[mark]) for mark in (marks or order)}
    out: dict[tuple[str, str], list[str]] = {}
    for mark in order:
        kind = _kind(lines[mark])
        if kind is not None and kind in wanted:
            out.setdefault(kind, []).append(mark)
    return [tuple(group) for group in out.values()]


def with_section(line: Line, section: Section, weight_sources: Iterable[str]) -> Line:
    """Return a line whose spans have another section: stiffness and self weight follow."""
    sources = {CASE_NAME, *weight_sources}
    members, scale = [], {}
    for member in line.members:
        if member.role != "span" or member.section is None or member.material is None:
            members.append(member)
            continue
        scale[member.id] = section.area / member.section.area
        members.append(_with_section(member, section))
    actions = tuple(_reweighed(action, scale, sources) for action in line.actions)
    return replace(line, members=tuple(members), actions=actions)


def _choose(
    model: LineModel, settings: Settings, candidates: Mapping[str, Section],
    marks: tuple[str, ...], solve: Solve,
) -> tuple[Choice, LineModel]:  # fmt: skip
    lines = [line for line in model.lines if line.mark in marks]
    spans = [m for line in lines for m in line.members if m.role == "span"]
    sections = list(dict.fromkeys(m.section.name for m in spans if m.section is not None))
    before, length = ", ".join(sections), math.fsum(m.length for m in spans)
    mass = math.fsum(_mass(m) * m.length for m in spans) / length
    reason = next((r for m in spans if (r := _unfit(m))), "")
    if reason:
        return Choice(marks, before, "", mass, mass, length, (), reason=reason), model
    density = spans[0].material.density if spans[0].material else 0.0
    present = {m.section.name: m.section for m in spans if m.section is not None}
    if len(present) == 1:  # what stands there is a candidate too
        candidates = {**present, **candidates}
    tried: list[Tried] = []
    small = _above(model, marks)
    for name, section in sorted(candidates.items(), key=lambda pair: (pair[1].area, pair[0])):
        outcome = solve(_changed(small, marks, section))
        tried.append(_judged(name, section.area * density, outcome, settings, marks))
        if tried[-1].suits:
            break
    if not tried or not tried[-1].suits:
        return Choice(marks, before, "", mass, mass, length, tuple(tried)), model
    chosen = tried[-1]
    if chosen.name in present:
        return Choice(marks, before, before, mass, mass, length, tuple(tried)), model
    after = _changed(model, marks, candidates[chosen.name])
    effects = _effects(solve(model), solve(after), settings, marks)
    return (
        Choice(
            marks, before, chosen.name, mass, chosen.mass, length, tuple(tried), effects
        ),
        after,
    )  # fmt: skip


def _unfit(member: Member) -> str:
    """Why the section of a member cannot be exchanged; "" where it can."""
    section, material = member.section, member.material
    if section is None or material is None or material.density <= 0.0:
        return "a member has no section, or its material no density"
    if member.end_section is not None or len(member.pieces) > 1 or member.pieces[0].flexural[1:]:
        return "a member varies along its length"
    if dict(section.dimensions).get("roll"):
        return f"the section {section.name} lies turned in its member"
    stiffness = material.elastic_modulus * section.inertia
    if abs(member.flexural_rigidity - stiffness) > 1e-3 * stiffness:
        return f"a member does not bend about the strong axis of {section.name}, or is cracked"
    return ""


def _with_section(member: Member, section: Section) -> Member:
    assert member.section is not None
    assert member.material is not None
    (piece,) = member.pieces
    shear = piece.shear
    if shear is not None and member.section.shear_area > 0.0:
        factor = section.shear_area / member.section.shear_area
        shear = tuple(factor * s for s in shear) if section.shear_area > 0.0 else None
    flexural = (member.material.elastic_modulus * section.inertia,)
    return replace(
        member, section=section, pieces=(replace(piece, flexural=flexural, shear=shear),)
    )


def _reweighed(action: Action, scale: Mapping[int, float], sources: set[str]) -> Action:
    if not isinstance(action, DistributedForce) or action.source not in sources:
        return action
    factor = scale.get(action.member, 1.0)
    return replace(
        action,
        transverse=tuple(factor * q for q in action.transverse),
        axial=tuple(factor * q for q in action.axial),
    )


def _changed(model: LineModel, marks: Sequence[str], section: Section) -> LineModel:
    sources = [case.global_id for case in model.cases if case.global_id]
    return replace(
        model,
        lines=tuple(
            with_section(line, section, sources) if line.mark in marks else line
            for line in model.lines
        ),
    )


def _above(model: LineModel, marks: Sequence[str]) -> LineModel:
    """The lines themselves and everything that bears on them, directly or through others."""
    kept, grown = set(marks), True
    while grown:
        more = {t.from_line for t in model.transfers if t.to_line in kept}
        grown = not more <= kept
        kept |= more
    return replace(
        model,
        lines=tuple(line for line in model.lines if line.mark in kept),
        transfers=tuple(t for t in model.transfers if t.to_line in kept),
    )


def _judged(
    name: str, mass: float, outcome: Outcome, settings: Settings, marks: Sequence[str]
) -> Tried:
    results = {r.line.mark: r for r in outcome.lines if r.line.mark in marks}
    if any(r.status != "balanced" for r in results.values()):
        return Tried(name, mass, math.inf, "", False, "a line could not be analysed")
    found = check_lines(replace(outcome, lines=tuple(results.values())), settings)
    spans = [
        (result.line.members[each.member], each)
        for mark, result in results.items()
        for each in found[mark]
        if result.line.members[each.member].role == "span"
    ]
    for _, each in spans:
        left = next((c for c in each.checks if c.status == "not checked"), None)
        if left is not None:
            return Tried(name, mass, math.inf, left.name, False, f"not checked: {left.reason}")
    use, check = _worst(each for _, each in spans)
    return Tried(name, mass, use, check, use <= 1.0)


def _worst(checks: Iterable[MemberChecks]) -> tuple[float, str]:
    worst = [each.worst for each in checks]
    made = [check for check in worst if check is not None]
    top = max(made, key=lambda check: check.use, default=None)
    return (0.0, "nothing to check") if top is None else (top.use, top.name)


def _effects(
    before: Outcome, after: Outcome, settings: Settings, marks: Sequence[str]
) -> tuple[Effect, ...]:
    """The lines whose reactions changed, with their largest one and their use."""
    out = []
    earlier = {r.line.mark: r for r in before.lines}
    touched = [r for r in after.lines if _moved(earlier[r.line.mark], r) or r.line.mark in marks]
    uses = [
        check_lines(replace(o, lines=tuple(x for x in o.lines if x in rs)), settings)
        for o, rs in ((before, [earlier[r.line.mark] for r in touched]), (after, touched))
    ]
    for result in touched:
        mark = result.line.mark
        old, new = (_worst(found[mark])[0] if mark in found else None for found in uses)
        out.append(
            Effect(mark, mark in marks, _reaction(earlier[mark]), _reaction(result), old, new)
        )
    return tuple(out)


def _moved(before: LineResult, after: LineResult) -> bool:
    one, two = _reactions(before), _reactions(after)
    largest = max(map(abs, one), default=0.0)
    return len(one) != len(two) or any(
        abs(a - b) > _SAME * largest for a, b in zip(one, two, strict=True)
    )


def _reactions(result: LineResult) -> list[float]:
    strength = result.envelopes.get("strength")
    found = strength.reactions if strength is not None else ()
    return [v for r in found for v in (r.vertical_max.value, r.vertical_min.value)]


def _reaction(result: LineResult) -> float:
    return max(_reactions(result), key=abs, default=0.0)


def _mass(member: Member) -> float:
    if member.section is None or member.material is None:
        return 0.0
    return member.section.area * member.material.density


def _kind(line: Line) -> tuple[str, str] | None:
    """Section and material of a line of one section; None for frames and mixed lines."""
    found = {
        (m.section.name, m.material.name) if m.section and m.material else None
        for m in line.members
        if m.role == "span"
    }
    return found.pop() if len(found) == 1 and line.kind == "line" else None


def check_candidates(candidates: Mapping[str, Section], where: str) -> None:
    """Raise JobError where there is nothing to choose from."""
    if not candidates:
        raise JobError(f"{where} holds no section to choose from.")
