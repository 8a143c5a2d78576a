"""The lightest section of a list that satisfies strength and deflection, for one or more lines.

Self weight and stiffness follow each candidate, and the line is solved anew with everything that
bears on it.  What the change does to other lines is told before anything is written.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass, replace

from analysis_core.checking.members import MemberChecks, check_lines
from analysis_core.checking.offers import Candidate, made_of
from analysis_core.idealise.self_weight import CASE_NAME
from analysis_core.load_levels import levels
from analysis_core.model import Action, DistributedForce, Line, LineModel, Member, Section
from analysis_core.results import LineResult, Outcome
from analysis_core.settings import Settings

Solve = Callable[[LineModel], Outcome]
Progress = Callable[[str, float], None]
_SAME = 1e-6


@dataclass(frozen=True, slots=True)
class Tried:
    """One candidate: mass in kg/m, the largest use and its check; or why it was not suitable.

    Of one that is too weak for a line, the others were not tried: their use may be larger still.
    """

    name: str
    mass: float
    use: float
    governed_by: str
    suits: bool
    reason: str = ""
    deflection: float | None = None
    """Largest of the serviceability combinations, m, downward positive."""
    categories: tuple[str, ...] = ()
    origin: str = ""


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
    left_out: tuple[str, ...] = ()
    """Names of candidates that are not made of the material of the lines."""


def choose_lightest(
    model: LineModel,
    settings: Settings,
    candidates: Sequence[Candidate],
    groups: Sequence[Sequence[str]],
    solve: Solve,
    *,
    strict: bool = True,
    progress: Progress | None = None,
) -> list[Choice]:
    """Return the lightest section for each group of lines; what is chosen stays for the next.

    ``groups`` hold marks; what bears on others should come first (see ``kinds``).  ``solve``
    gives the outcome of a model.  ``strict``: leave out candidates of another material.
    """
    found = []
    for number, marks in enumerate(groups):

        def tell(part: float, done: int = number) -> None:
            if progress is not None:
                progress("Choosing", (done + part) / len(groups))

        search = _Search(model, settings, tuple(marks), solve, tell)
        choice, model = search.choose(candidates, strict=strict)
        found.append(choice)
        tell(1.0)
    return found


def kinds(model: LineModel, marks: Sequence[str], *, alike: bool) -> list[tuple[str, ...]]:
    """Return groups of lines, in the order of the load path.

    Each of ``marks`` by itself; with ``alike``, with all lines of its section and material; of no
    marks, every kind of the model.  A frame, and a line of several sections, is of no kind: asked
    for, it stands by itself, else see ``of_no_kind``.
    """
    order = [mark for level in levels([x.mark for x in model.lines], model.transfers)
             for group in level for mark in group]  # fmt: skip
    lines = {line.mark: line for line in model.lines}
    if marks and not alike:
        return [(mark,) for mark in order if mark in marks]
    wanted = {_kind(lines[mark]) for mark in (marks or order)}
    out: dict[tuple[str, ...], list[str]] = {}
    for mark in order:
        kind = _kind(lines[mark])
        if kind is not None and kind in wanted:
            out.setdefault(kind, []).append(mark)
        elif kind is None and mark in marks:
            out[(mark,)] = [mark]
    return [tuple(group) for group in out.values()]


def of_no_kind(model: LineModel) -> Choice | None:
    """Return that nothing was tried for lines which no kind holds; None where there are none."""
    marks = tuple(line.mark for line in model.lines if _kind(line) is None)
    if not marks:
        return None
    reason = "frames and lines of several sections are chosen for one by one, by their marks"
    return Choice(marks, "", "", 0.0, 0.0, 0.0, (), reason=reason)


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


class _Search:
    """The search for lines that get one section in common."""

    def __init__(
        self, model: LineModel, settings: Settings, marks: tuple[str, ...], solve: Solve,
        tell: Callable[[float], None],
    ) -> None:  # fmt: skip
        self._model, self._settings, self._marks = model, settings, marks
        self._solve, self._tell = solve, tell
        self._lines = [line for line in model.lines if line.mark in marks]
        self._spans = [m for line in self._lines for m in line.members if m.role == "span"]
        self._parts: dict[Sequence[str], LineModel] = {}
        self._present = {m.section.name: m.section for m in self._spans if m.section is not None}
        length = math.fsum(m.length for m in self._spans)
        mass = math.fsum(_mass(m) * m.length for m in self._spans) / (length or 1.0)
        self._kept = Choice(marks, ", ".join(self._present), "", mass, mass, length, ())

    def choose(self, candidates: Sequence[Candidate], *, strict: bool) -> tuple[Choice, LineModel]:
        """Return the choice, and the model with it."""
        reason = next((r for m in self._spans if (r := _unfit(m))), "")
        if not self._spans:
            reason = "it has no span"
        if reason:
            return replace(self._kept, reason=reason), self._model
        material = self._spans[0].material
        assert material is not None  # else it would be unfit
        others: list[Candidate] = []
        if strict:
            candidates, others = made_of(candidates, material)
        tried = self._tried(self._in_order(candidates), material.density)
        kept = replace(self._kept, tried=tried, left_out=tuple(c.name for c in others))
        if not tried or not tried[-1].suits:
            return kept, self._model
        best = tried[-1]
        if best.name in self._present:
            return replace(kept, chosen=kept.before), self._model
        section = next(c.section for c in candidates if c.name == best.name)
        after = _changed(self._model, self._marks, section)
        effects = _effects(
            self._solve(self._model), self._solve(after), self._settings, self._marks
        )
        return replace(kept, chosen=best.name, mass_after=best.mass, effects=effects), after

    def _in_order(self, candidates: Iterable[Candidate]) -> list[Candidate]:
        """The lightest first; what stands there is a candidate too."""
        known = {c.name: c for c in candidates}
        if len(self._present) == 1:
            ((name, section),) = self._present.items()
            known.setdefault(name, Candidate(name, section))
        return sorted(known.values(), key=lambda c: (c.section.area, c.name))

    def _tried(self, candidates: Sequence[Candidate], density: float) -> tuple[Tried, ...]:
        """Try each until one suits.

        A line that was too weak for the last one is asked first, by itself: of many lines hardly
        another than the worst decides.
        """
        tried: list[Tried] = []
        pilot = max(self._lines, key=_longest_span).mark
        for number, candidate in enumerate(candidates):
            self._tell(number / len(candidates))
            found, _ = self._judged(candidate, density, (pilot,))
            if found.suits and len(self._marks) > 1:
                found, pilot = self._judged(candidate, density, self._marks)
            tried.append(found)
            if found.suits:
                break
        return tuple(tried)

    def _judged(
        self, candidate: Candidate, density: float, marks: Sequence[str]
    ) -> tuple[Tried, str]:
        """How a candidate does in some of the lines, and the one in which it does worst."""
        if marks not in self._parts:
            self._parts[marks] = _above(self._model, marks)
        outcome = self._solve(_changed(self._parts[marks], self._marks, candidate.section))
        found, worst = _judged(
            candidate.name, candidate.section.area * density, outcome, self._settings, marks
        )
        return replace(found, categories=candidate.categories, origin=candidate.origin), worst


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
) -> tuple[Tried, str]:
    """What a candidate comes to in these lines, and the mark of the line that decides."""
    results = {r.line.mark: r for r in outcome.lines if r.line.mark in marks}
    failed = next((mark for mark, r in results.items() if r.status != "balanced"), None)
    if failed is not None:
        return Tried(name, mass, math.inf, "", False, "a line could not be analysed"), failed
    found = check_lines(replace(outcome, lines=tuple(results.values())), settings)
    spans = {
        mark: [c for c in found[mark] if result.line.members[c.member].role == "span"]
        for mark, result in results.items()
    }
    deflection = _deflection(results.values())
    for mark, each in spans.items():
        checks = (check for member in each for check in member.checks)
        left = next((c for c in checks if c.status == "not checked"), None)
        if left is not None:
            reason = f"not checked: {left.reason}"
            return Tried(name, mass, math.inf, left.name, False, reason, deflection), mark
    uses = {mark: _worst(each) for mark, each in spans.items()}
    worst = max(uses, key=lambda mark: uses[mark][0])
    use, check = uses[worst]
    return Tried(name, mass, use, check, use <= 1.0, deflection=deflection), worst


def _longest_span(line: Line) -> float:
    return max((m.length for m in line.members if m.role == "span"), default=0.0)


def _deflection(results: Iterable[LineResult]) -> float | None:
    """The largest deflection of the spans, m; None without serviceability combinations."""
    found: list[float] = []
    for result in results:
        envelope = result.envelopes.get("serviceability")
        for member in envelope.members if envelope is not None else ():
            found += [member.deflection_down.value, member.deflection_up.value]
    return max(found, key=abs, default=None)


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
