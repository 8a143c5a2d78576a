"""Sections built up of several prisms side by side: plate girders, double beams."""

from __future__ import annotations

import math
from collections.abc import Sequence

from analysis_core.ifc.bodies.items import Prism
from analysis_core.ifc.geometry import frames, outline
from analysis_core.ifc.geometry.outline import Loops, Matrix
from analysis_core.ifc.sections.drawn import Drawn
from analysis_core.ifc.sections.reader import profile_of

_PARALLEL = math.cos(math.radians(0.2))
_SAME_EXTENT = 0.1


def runs_beside(main: Prism, other: Prism) -> bool:
    """Whether a prism runs beside another from end to end, so that both make one section."""
    size = frames.length(main.vector)
    along = frames.unit(main.vector)
    reach = frames.dot(other.vector, along)
    if abs(reach) < _PARALLEL * frames.length(other.vector):
        return False
    first = frames.dot(frames.minus(other.frame[9:12], main.frame[9:12]), along)
    low, high = min(first, first + reach), max(first, first + reach)
    slack = _SAME_EXTENT * size
    return abs(low) < slack and abs(high - size) < slack and _far_enough(main, other)


def joined_section(main: Prism, others: Sequence[Prism]) -> Prism:
    """Return the main prism with the profiles of the others beside it in its section."""
    loops: Loops = main.profile.drawn.loops
    for other in others:
        loops += _seen_from(main, other)
    drawn = Drawn(
        loops, "composite", {"parts": float(1 + len(others))}, exact=main.profile.drawn.exact
    )
    profile = profile_of(main.profile.name, main.profile.ifc_class, drawn)
    return main._replace(profile=profile, entity=None, end_profile=None, end_entity=None)


def _far_enough(main: Prism, other: Prism) -> bool:
    """Whether the centroids lie apart: two bodies in one place are one drawn twice."""
    a, b = main.profile.moments, other.profile.moments
    here = frames.point(main.frame, a.x, a.y, 0.0)
    there = frames.point(other.frame, b.x, b.y, 0.0)
    along = frames.unit(main.vector)
    arm = frames.minus(there, here)
    across = frames.plus(arm, along, -frames.dot(arm, along))
    return frames.length(across) > 0.1 * math.sqrt(min(a.area, b.area))


def _seen_from(main: Prism, other: Prism) -> Loops:
    """Loops of another prism's profile in the axes of the main one, projected along it."""
    back = frames.inverse((*main.frame[:6], *main.vector, *main.frame[9:12]))
    x = frames.direction(back, *other.frame[0:3])
    y = frames.direction(back, *other.frame[3:6])
    origin = frames.point(back, *other.frame[9:12])
    matrix: Matrix = ((x[0], y[0]), (x[1], y[1]))
    return outline.transformed(other.profile.drawn.loops, matrix, origin[0], origin[1])
