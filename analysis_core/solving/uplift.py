"""Bearings that are pulled up: a rigid support holds both ways, a wall under a beam does not."""

from __future__ import annotations

from collections.abc import Container, Iterable, Iterator, Mapping

from analysis_core.findings import Finding, Severity, listed
from analysis_core.model import Joint
from analysis_core.results import LineResult, reaction_bounds

# Less than this part of the greatest reaction of the line is rounding, or nothing to tie down.
_WORTH = 5e-3


def uplift(results: Iterable[LineResult], names: Mapping[str, str]) -> Iterator[Finding]:
    """Yield a finding for each line with a negative vertical reaction under strength.

    Ends that frame into other lines are joined to them and not named.  Where the model or the
    job file states the support, that it holds down is stated too: a note.
    """
    results = tuple(results)
    members = {m.element for result in results for m in result.line.members}
    for result in results:
        pulled = list(_pulled(result, members))
        if not pulled:
            continue
        assumed = any(not _stated(joint) for joint, _ in pulled)
        severity: Severity = "warning" if assumed else "note"
        places = [
            f"joint {joint.id} ({names.get(joint.element or '') or joint.element or 'no element'}) "
            f"by {force / 1e3:.3g} kN"
            for joint, force in pulled
        ]
        line = result.line
        yield Finding(
            severity,
            "uplift",
            f"Line {line.mark} pulls up at {listed(places, most=4)} under strength combinations. "
            f"Its supports are taken as holding it down; see that they do. Where they cannot, the "
            f"line lifts off and its results do not hold.",
            tuple(joint.element for joint, _ in pulled if joint.element),
            line.mark,
        )


def _pulled(result: LineResult, members: Container[str]) -> Iterator[tuple[Joint, float]]:
    envelope = result.envelopes.get("strength")
    if envelope is None:
        return
    bounds = reaction_bounds(envelope)
    greatest = max((abs(v) for b in bounds for v in (b.lowest[0], b.highest[0])), default=0.0)
    for bound in bounds:
        joint = result.line.joints[bound.joint]
        if bound.lowest[0] < -_WORTH * greatest and joint.element not in members:
            yield joint, -bound.lowest[0]


def _stated(joint: Joint) -> bool:
    return "as stated" in joint.reason
