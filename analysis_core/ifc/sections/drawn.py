"""An outline together with what it is called and how large its parts are."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any, NamedTuple

from analysis_core.ifc.geometry.outline import Loops
from analysis_core.ifc.geometry.paths import Measures
from analysis_core.ifc.unreadable import UnreadableShapeError


class Drawn(NamedTuple):
    """An outline with the shape's name, its dimensions (m) by name, and how it is turned.

    The named dimensions hold in the shape's own axes (depth along its y); ``roll`` is the angle
    by which those are turned anticlockwise.  ``exact`` is False where chords stand for curves
    or details were left out.
    """

    loops: Loops
    shape: str
    dimensions: Mapping[str, float]
    roll: float = 0.0
    exact: bool = True


Corner = tuple[float, float, float]


def lengths(profile: Any, measures: Measures, *names: str) -> list[float]:
    """Return attributes of a profile in m; raises UnreadableShapeError unless all are positive."""
    values = []
    for name in names:
        value = getattr(profile, name)
        if value is None or not value > 0.0:
            raise UnreadableShapeError(
                f"{profile.is_a()} has {name} = {value}; it must be greater than zero"
            )
        values.append(value * measures.length)
    return values


def optional(profile: Any, measures: Measures, name: str) -> float:
    """Return a length of a profile in m, 0 where it is missing."""
    return (getattr(profile, name, None) or 0.0) * measures.length


def slope_of(profile: Any, measures: Measures, name: str) -> float:
    """Return the tangent of an angle of a profile, 0 where it is missing."""
    slope = getattr(profile, name, None) or 0.0
    return math.tan(slope * measures.angle) if slope else 0.0
