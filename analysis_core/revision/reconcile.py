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
from dataclasses import dataclass, replace

from analysis_core.errors import JobError
from analysis_core.model import Line, Point
from analysis_core.results import LineResult, Outcome
from analysis_core.revision.fingerprints import RECEIVES, differences

SAME_PLACE = 0.05
"""Ends of an element closer than this (m) are at the same place."""
SAME_EFFECT = 1e-9
"""Effects that differ by less than this part of themselves are the same."""
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
        return max(
            _relative(getattr(self.effects_before, name), getattr(self.effects_after, name))
            for name in Governing.__dataclass_fields__
        )


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


def reconcile(before: Outcome, after: Outcome, *, solved_again: Sequence[str]) -> Reconciliation:
    """Compare two outcomes of successive revisions."""
    renamed = _matched_by_place(before.model.lines, after.model.lines)
    changes = [
        _change(before, after, old, new, renamed) for old, new in _groups(before, after, renamed)
    ]
    changes.sort(key=lambda c: (c.state == "unchanged", -c.largest, c.after or c.before))
    return Reconciliation(before, after, tuple(changes), renamed, tuple(solved_again))


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
    found = {e: line.mark for line in before.model.lines for e in _elements(line)}
    renamed = _matched_by_place(before.model.lines, after)
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


def _relative(before: float, after: float) -> float:
    scale = max(abs(before), abs(after))
    return abs(after - before) / scale if scale > 1e-9 else 0.0


def _matched_by_place(before: Iterable[Line], after: Iterable[Line]) -> dict[str, str]:
    """Match elements that have no namesake by the places of their ends."""
    old, new = _extents(before), _extents(after)
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


def _change(
    before: Outcome,
    after: Outcome,
    old: tuple[str, ...],
    new: tuple[str, ...],
    renamed: Mapping[str, str],
) -> LineChange:
    was = [r for r in before.lines if r.line.mark in old]
    now = [r for r in after.lines if r.line.mark in new]
    state = _state(len(was), len(now))
    reasons: list[str] = []
    moved = 0.0
    if len(was) == len(now) == 1:
        names = {**before.model.names, **after.model.names}
        reasons = differences(_with_new_ids(was[0].basis, renamed), now[0].basis, names)
        moved = _moved(was[0].line, now[0].line)
        if moved > MOVED:
            reasons.append(f"moved by {moved:.3f} m")
        if was[0].status != now[0].status:
            reasons.append(f"{was[0].status} before, {now[0].status} now")
        state = "changed" if reasons else "unchanged"
    change = LineChange(
        state=state,
        before=old,
        after=new,
        reasons=tuple(reasons),
        moved=moved,
        effects_before=governing(was),
        effects_after=governing(now),
    )
    if reasons and all(RECEIVES in reason for reason in reasons) and change.largest < SAME_EFFECT:
        # What bears on the line changed, but not what it hands down.
        return replace(change, state="unchanged", reasons=())
    return change


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


def _moved(was: Line, now: Line) -> float:
    """Largest distance between joints of the same number; 0 where their numbers differ."""
    if len(was.joints) != len(now.joints):
        return 0.0
    return max(math.dist(a.point, b.point) for a, b in zip(was.joints, now.joints, strict=True))
