"""What changed between two revisions of a model, line by line, and what it did to the effects.

Elements are matched by GlobalId; those that an authoring tool gave new ones, by place and shape.
Lines are matched through their elements, so that a line that was cut in two or joined with
another is seen as such and not as gone and new.
"""

from __future__ import annotations

import difflib
import math
from collections import Counter
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field, replace

import numpy as np

from analysis_core.errors import JobError
from analysis_core.findings import listed
from analysis_core.model import Line, Point
from analysis_core.results import LineResult, Outcome
from analysis_core.revision.motion import STILL, Motion, common_motion
from analysis_core.revision.reasons import FOR_ALL, RECEIVES, differences, places

SAME_PLACE = 0.05
"""Ends of an element closer than this (m) are at the same place."""
SAME_EFFECT = 1e-9
"""Effects that differ by less than this part of the largest of their kind are the same."""
_KINDS = (("sagging", "hogging"), ("shear", "reaction_max", "reaction_min"), ("deflection",))
MOVED = 1e-4
"""A line whose joints moved by more than this (m) has moved."""


@dataclass(frozen=True, slots=True)
class Governing:
    """Governing effects of one line or of several: N·m, N, m; reactions in N, up positive."""

    sagging: float = 0.0
    hogging: float = 0.0
    shear: float = 0.0
    deflection: float = 0.0
    reaction_max: float = 0.0
    reaction_min: float = 0.0


@dataclass(frozen=True, slots=True)
class LineChange:
    """What happened to a line: ``state`` and the reasons, in sentences.

    ``state``: "unchanged", "changed", "new", "gone", "split", "merged", "regrouped".  ``moved`` is
    the largest distance that one of its joints moved, m.
    """

    state: str
    before: tuple[str, ...]
    after: tuple[str, ...]
    reasons: tuple[str, ...]
    moved: float
    effects_before: Governing | None
    effects_after: Governing | None

    @property
    def largest(self) -> float:
        """The largest relative change of an effect; infinite for a line that is new or gone."""
        if self.effects_before is None or self.effects_after is None:
            return math.inf
        before, after = self.effects_before, self.effects_after
        return max(_relative(before, after, kind) for kind in _KINDS)


@dataclass(frozen=True, slots=True)
class Reconciliation:
    """Two outcomes and the changes between them, largest first."""

    before: Outcome
    after: Outcome
    changes: tuple[LineChange, ...]
    renamed: Mapping[str, str]
    """GlobalId before to GlobalId after, of elements that were matched by place and shape."""
    solved_again: tuple[str, ...]
    """Marks of the lines of AFTER that had to be solved again."""
    motion: Motion = STILL
    """How the whole model was moved; what moved otherwise is told line by line."""
    storeys: Mapping[str, str] = field(default_factory=dict)
    """New name by old name of storeys that are called otherwise now."""


def reconcile(before: Outcome, after: Outcome, *, solved_again: Sequence[str]) -> Reconciliation:
    """Compare two outcomes of successive revisions."""
    motion = _motion(before.model.lines, after.model.lines)
    renamed = _matched_by_place(before.model.lines, after.model.lines, motion)
    groups = _groups(before, after, renamed)
    comparison = _Comparison(before, after, renamed, groups, motion)
    changes = [comparison.change(old, new) for old, new in groups]
    changes.sort(key=lambda c: (c.state == "unchanged", -c.largest, c.after or c.before))
    storeys = _storeys(before, after, groups)
    again = tuple(solved_again)
    return Reconciliation(before, after, tuple(changes), renamed, again, motion, storeys)


def of_lines(found: Reconciliation, marks: Sequence[str]) -> Reconciliation:
    """Return the changes of these lines alone (marks before or after); all where there are none.

    Raises JobError for a mark that neither revision has.
    """
    if not marks:
        return found
    known = sorted({mark for change in found.changes for mark in (*change.before, *change.after)})
    for mark in marks:
        if mark not in known:
            near = difflib.get_close_matches(mark, known, n=1, cutoff=0.0)
            hint = f"; the nearest is '{near[0]}'" if near else "; they have no lines"
            raise JobError(f"Neither revision has a line '{mark}'{hint}.")
    wanted = set(marks)
    chosen = tuple(c for c in found.changes if wanted & {*c.before, *c.after})
    return replace(found, changes=chosen)


def marks_before(before: Outcome, after: Iterable[Line]) -> dict[str, str]:
    """Return the mark that each element of ``after`` had in ``before``, for keeping marks."""
    after = list(after)
    found = {e: line.mark for line in before.model.lines for e in _elements(line)}
    motion = _motion(before.model.lines, after)
    renamed = _matched_by_place(before.model.lines, after, motion)
    return {**found, **{new: found[old] for old, new in renamed.items() if old in found}}


def governing(results: Iterable[LineResult]) -> Governing | None:
    """Return the governing effects over several results; None where none was analysed."""
    solved = [r for r in results if r.envelopes]
    if not solved:
        return None
    strength = [r.envelopes["strength"] for r in solved if "strength" in r.envelopes]
    service = [r.envelopes["serviceability"] for r in solved if "serviceability" in r.envelopes]
    members = [m for envelope in strength for m in envelope.members]
    reactions = [r for envelope in strength for r in envelope.reactions]
    deflections = [
        e.value for v in service for m in v.members for e in (m.deflection_down, m.deflection_up)
    ]
    shears = [e.value for m in members for e in (m.shear_max, m.shear_min)]
    return Governing(
        sagging=max((m.sagging.value for m in members), default=0.0),
        hogging=min((m.hogging.value for m in members), default=0.0),
        shear=max(shears, key=abs, default=0.0),
        deflection=max(deflections, key=abs, default=0.0),
        reaction_max=max((r.vertical_max.value for r in reactions), default=0.0),
        reaction_min=min((r.vertical_min.value for r in reactions), default=0.0),
    )


def _relative(before: Governing, after: Governing, kind: Sequence[str]) -> float:
    """Largest change of effects of one kind, each as a part of itself.

    What is nothing beside the largest of its kind has not changed.
    """
    pairs = [(getattr(before, name), getattr(after, name)) for name in kind]
    largest = max(abs(value) for pair in pairs for value in pair)
    changes = [
        abs(now - was) / max(abs(was), abs(now))
        for was, now in pairs
        if abs(now - was) > max(SAME_EFFECT * largest, 1e-12)
    ]
    return max(changes, default=0.0)


def _motion(before: Iterable[Line], after: Iterable[Line]) -> Motion:
    old, new = _extents(before), _extents(after)
    return common_motion([(ends, new[key]) for key, ends in old.items() if key in new])


def _matched_by_place(
    before: Iterable[Line], after: Iterable[Line], motion: Motion
) -> dict[str, str]:
    """Match elements that have no namesake by the places of their ends."""
    old = {key: (motion(a), motion(b)) for key, (a, b) in _extents(before).items()}
    new = _extents(after)
    left = {key: ends for key, ends in old.items() if key not in new}
    free = {key: ends for key, ends in new.items() if key not in old}
    cells: dict[tuple[int, ...], list[str]] = {}
    for key, ends in free.items():
        cells.setdefault(_cell(_middle(ends)), []).append(key)
    found: dict[str, str] = {}
    taken: set[str] = set()
    for key, ends in left.items():
        near = [k for cell in _around(_cell(_middle(ends))) for k in cells.get(cell, ())]
        best = min(near, key=lambda k: _apart(ends, free[k]), default=None)
        if best is not None and best not in taken and _apart(ends, free[best]) <= SAME_PLACE:
            found[key] = best
            taken.add(best)
    return found


def _extents(lines: Iterable[Line]) -> dict[str, tuple[Point, Point]]:
    """First and last world point of each element."""
    out: dict[str, tuple[Point, Point]] = {}
    for line in lines:
        for member in line.members:
            if not member.element:
                continue
            a, b = line.joints[member.start].point, line.joints[member.end].point
            known = out.get(member.element)
            out[member.element] = _farthest((a, b, *known)) if known else (a, b)
    return out


def _farthest(points: Sequence[Point]) -> tuple[Point, Point]:
    pairs = [(p, q) for i, p in enumerate(points) for q in points[i + 1 :]]
    return max(pairs, key=lambda pair: math.dist(*pair))


def _apart(one: tuple[Point, Point], other: tuple[Point, Point]) -> float:
    straight = max(math.dist(one[0], other[0]), math.dist(one[1], other[1]))
    turned = max(math.dist(one[0], other[1]), math.dist(one[1], other[0]))
    return min(straight, turned)


def _middle(ends: tuple[Point, Point]) -> Point:
    x, y, z = ((a + b) / 2.0 for a, b in zip(*ends, strict=True))
    return x, y, z


def _cell(point: Point) -> tuple[int, ...]:
    return tuple(math.floor(c / (2.0 * SAME_PLACE)) for c in point)


def _around(cell: tuple[int, ...]) -> list[tuple[int, ...]]:
    steps = (-1, 0, 1)
    return [(cell[0] + i, cell[1] + j, cell[2] + k) for i in steps for j in steps for k in steps]


def _groups(
    before: Outcome, after: Outcome, renamed: Mapping[str, str]
) -> list[tuple[tuple[str, ...], tuple[str, ...]]]:
    """Marks before and after that belong together through the elements they share.

    A pair of lines belongs together where each is, for one of the two, the line that shares most
    elements with it: a column that stands in two frames does not tie the two.
    """
    shared = _shared(before, after, renamed)
    most_old: dict[str, int] = {}
    most_new: dict[str, int] = {}
    for (old, new), count in shared.items():
        most_old[old] = max(count, most_old.get(old, 0))
        most_new[new] = max(count, most_new.get(new, 0))
    group = {(0, line.mark): {(0, line.mark)} for line in before.model.lines}
    group |= {(1, line.mark): {(1, line.mark)} for line in after.model.lines}
    for (old, new), count in shared.items():
        if count in (most_old[old], most_new[new]) and group[0, old] is not group[1, new]:
            joined = group[0, old] | group[1, new]
            group.update(dict.fromkeys(joined, joined))
    unique = {id(members): members for members in group.values()}.values()
    return [
        (tuple(sorted(m for side, m in g if side == 0)), tuple(sorted(m for side, m in g if side)))
        for g in unique
    ]


def _shared(
    before: Outcome, after: Outcome, renamed: Mapping[str, str]
) -> Counter[tuple[str, str]]:
    """Number of elements that a line before and a line after have in common."""
    holders: dict[str, list[str]] = {}
    for line in before.model.lines:
        for element in _elements(line):
            holders.setdefault(renamed.get(element, element), []).append(line.mark)
    return Counter(
        (old, line.mark)
        for line in after.model.lines
        for element in _elements(line)
        for old in holders.get(element, ())
    )


def _elements(line: Line) -> list[str]:
    return list(dict.fromkeys(m.element for m in line.members if m.element))


class _Comparison:
    """Compares lines that belong together."""

    def __init__(
        self,
        before: Outcome,
        after: Outcome,
        renamed: Mapping[str, str],
        groups: Iterable[tuple[tuple[str, ...], tuple[str, ...]]],
        motion: Motion,
    ) -> None:
        self._before = {r.line.mark: r for r in before.lines}
        self._after = {r.line.mark: r for r in after.lines}
        self._names = {**before.model.names, **after.model.names}
        self._motion = motion
        self._renamed = renamed
        alone = [(old[0], new[0]) for old, new in groups if len(old) == len(new) == 1]
        self._marks = {old: new for old, new in alone if old != new}
        self._was = {new: old for old, new in alone}

    def change(self, old: tuple[str, ...], new: tuple[str, ...]) -> LineChange:
        """Return what happened to the lines of these marks, before and after."""
        was = [self._before[mark] for mark in old]
        now = [self._after[mark] for mark in new]
        state = _state(len(was), len(now))
        moved = 0.0
        if len(was) == len(now) == 1:
            reasons = self._reasons(was[0], now[0])
            moved = _moved(was[0].line, now[0].line, self._motion)
            if moved > MOVED:
                reasons.append(f"moved by {moved:.3f} m")
            if was[0].status != now[0].status:
                reasons.append(f"{was[0].status} before, {now[0].status} now")
            state = "changed" if reasons else "unchanged"
        else:
            reasons = self._members(was, now)
        change = LineChange(
            state=state,
            before=old,
            after=new,
            reasons=tuple(reasons),
            moved=moved,
            effects_before=governing(was),
            effects_after=governing(now),
        )
        if reasons and all(map(_from_elsewhere, reasons)) and change.largest < SAME_EFFECT:
            # What bears on the line changed, or what all lines depend on, but not for this one.
            return replace(change, state="unchanged", reasons=())
        return change

    def _reasons(self, was: LineResult, now: LineResult) -> list[str]:
        known = _with_new_ids(was.basis, {**self._renamed, **self._marks})
        joints = {**places(was.line, self._names), **places(now.line, self._names)}
        found = differences(known, now.basis, self._names, joints)
        return [r for r in found if RECEIVES not in r or not self._hands_down_the_same(r)]

    def _hands_down_the_same(self, reason: str) -> bool:
        """Whether the line that a reason names hands down what it did before."""
        mark = reason.partition(f", {RECEIVES}")[0]
        was, now = self._before.get(self._was.get(mark, "")), self._after.get(mark)
        if was is None or now is None or was.solution is None or now.solution is None:
            return False
        one, other = was.solution, now.solution
        if one.cases != other.cases or one.reactions.shape != other.reactions.shape:
            return False
        largest = max(float(np.abs(one.reactions).max(initial=0.0)), 1e-9)
        difference = float(np.abs(one.reactions - other.reactions).max(initial=0.0))
        return difference <= SAME_EFFECT * largest

    def _members(self, was: Iterable[LineResult], now: Iterable[LineResult]) -> list[str]:
        """Say which elements lines have lost and got that are new, gone, split or merged."""
        old = dict.fromkeys(self._renamed.get(e, e) for r in was for e in _elements(r.line))
        new = dict.fromkeys(e for r in now for e in _elements(r.line))
        lost = [self._named(e) for e in old if e not in new]
        got = [self._named(e) for e in new if e not in old]
        return [
            *([f"without {listed(lost)}"] if lost else []),
            *([f"with {listed(got)}"] if got else []),
        ]

    def _named(self, element: str) -> str:
        return self._names.get(element) or element


def _from_elsewhere(reason: str) -> bool:
    return RECEIVES in reason or reason in FOR_ALL


def _storeys(
    before: Outcome,
    after: Outcome,
    groups: Iterable[tuple[tuple[str, ...], tuple[str, ...]]],
) -> dict[str, str]:
    """Storeys all of whose lines belong to a storey of another, new name now."""
    old = {line.mark: line.storey or "" for line in before.model.lines}
    new = {line.mark: line.storey or "" for line in after.model.lines}
    became: dict[str, set[str]] = {}
    for marks, others in groups:
        for mark in marks:
            became.setdefault(old[mark], set()).update(new[other] for other in others)
    return {
        name: found
        for name, (found, *more) in ((n, sorted(f)) for n, f in became.items() if n and f)
        if not more and found and found not in old.values() and name not in new.values()
    }


def _state(before: int, after: int) -> str:
    if before == 0:
        return "new"
    if after == 0:
        return "gone"
    if before == 1:
        return "split"
    return "merged" if after == 1 else "regrouped"


def _with_new_ids(basis: Mapping[str, str], renamed: Mapping[str, str]) -> dict[str, str]:
    out = {}
    for key, text in basis.items():
        subject, _, which = key.partition(" ")
        out[f"{subject} {renamed[which]}" if which in renamed else key] = text
    return out


def _moved(was: Line, now: Line, motion: Motion) -> float:
    """Largest distance between joints of the same number; 0 where their numbers differ."""
    if len(was.joints) != len(now.joints):
        return 0.0
    return max(
        math.dist(motion(a.point), b.point) for a, b in zip(was.joints, now.joints, strict=True)
    )
