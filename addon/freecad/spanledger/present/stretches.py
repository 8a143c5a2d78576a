"""Members in order along the axis of the strip, each with a stretch to itself."""

from __future__ import annotations

from dataclasses import dataclass

from analysis_core.model import Line, Member


@dataclass(frozen=True, slots=True)
class Stretch:
    """A member on the axis of the strip: from ``start`` to ``end``, m."""

    member: Member
    start: float
    end: float

    def to_axis(self, s: float) -> float:
        """Return where position ``s`` of the member lies on the axis."""
        return self.start + s


def stretches_of(line: Line) -> tuple[Stretch, ...]:
    """Return the members in order along the axis of the strip."""
    spans = [m for m in line.members if m.role == "span"] if line.kind == "line" else []
    rest = [m for m in line.members if m not in spans]
    first = min((line.joints[m.start].x for m in spans), default=0.0)
    placed = []
    for member in spans:
        start = line.joints[member.start].x - first
        placed.append(Stretch(member, start, start + member.length))
    at = max((s.end for s in placed), default=0.0)
    gap = 0.12 * max(at, max(m.length for m in line.members))
    for member in rest:
        at += gap if placed else 0.0
        placed.append(Stretch(member, at, at + member.length))
        at += member.length
    return tuple(placed)
