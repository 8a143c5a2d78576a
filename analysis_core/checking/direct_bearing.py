"""Which lines bear directly on which: those hold its top flange, what comes down a column not."""

from __future__ import annotations

import math
from collections.abc import Mapping

from analysis_core.model import Line, LineModel, Transfer

_SAME_PLACE = 0.01  # m

ByLine = Mapping[str, tuple[Transfer, ...]]


def direct_bearing(model: LineModel) -> ByLine:
    """Return the transfers from lines that bear directly, by the line that they act on.

    A line bears directly where the element that supports its joint is of the other line, or where
    both have one node.  What a column standing on a beam hands down holds nothing sideways.
    """
    lines = {line.mark: line for line in model.lines}
    out: dict[str, list[Transfer]] = {}
    for transfer in model.transfers:
        upper, lower = lines.get(transfer.from_line), lines.get(transfer.to_line)
        if upper is not None and lower is not None and _direct(transfer, upper, lower):
            out.setdefault(lower.mark, []).append(transfer)
    return {mark: tuple(found) for mark, found in out.items()}


def _direct(transfer: Transfer, upper: Line, lower: Line) -> bool:
    joint = upper.joints[transfer.joint]
    member = lower.members[transfer.member]
    if joint.element is not None and joint.element in (member.element, *lower.elements):
        return True
    a, b = lower.joints[member.start].point, lower.joints[member.end].point
    part = transfer.position / member.length
    place = tuple(p + part * (q - p) for p, q in zip(a, b, strict=True))
    return math.dist(place, joint.point) <= _SAME_PLACE
