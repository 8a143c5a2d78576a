"""Spans measured between the faces of bearings instead of between their axes."""

from __future__ import annotations

from analysis_core.idealise.draft import Draft
from analysis_core.idealise.log import Log

# A bearing takes at most this part of a span from each of its ends.
_MOST = 0.25


def measure_clear(drafts: list[Draft], log: Log) -> None:
    """Shorten every span of every line by half the width of the bearings at its ends.

    Joints keep their place in the world; along the line they move together.  What acts over the
    width of a bearing goes to it directly.
    """
    shortened = [draft.mark for draft in drafts if draft.kind == "line" and _shorten(draft)]
    if shortened:
        log.add(
            "note",
            "clear-spans",
            f"Spans of {len(shortened)} lines are measured between the faces of their bearings, as "
            f"the job file says (spans: face); joints lie at the axes.",
        )


def _shorten(draft: Draft) -> bool:
    bars = [bar for bar in draft.bars if bar.role == "span"]
    points = [draft.point(number) for number in range(len(draft.joints))]
    lengths = []
    for bar in bars:
        size = draft.length(bar)
        cuts = [
            min(draft.joints[number].width / 2.0, _MOST * size) for number in (bar.start, bar.end)
        ]
        bar.cuts = cuts[0], cuts[1]
        share = [cut / size for cut in cuts]
        run = bar.station_end - bar.station_start
        bar.station_start += share[0] * run
        bar.station_end -= share[1] * run
        lengths.append(size - sum(cuts))
    if not bars:
        return False
    before = [draft.length(bar) for bar in bars]
    cos, sin = draft.direction(bars[0])
    at = 0.0
    first = draft.joints[bars[0].start]
    x, z = first.x, first.z
    for bar, size in zip(bars, lengths, strict=True):
        at += size
        joint = draft.joints[bar.end]
        joint.x, joint.z = x + at * cos, z + at * sin
    for joint, point in zip(draft.joints, points, strict=True):
        joint.point = point
    return before != lengths
