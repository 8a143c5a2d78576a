"""The one movement that most of a model has made: its site was placed anew.

Nothing in a beam changes by that, so it is told once, and places are compared after it.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from statistics import median

from analysis_core.model import Point

Ends = tuple[Point, Point]

_LEAST = 3
"""Elements that must agree; fewer have simply been moved."""
_MOST = 0.8
"""Part of the elements that must agree."""
_AGREEMENT = 1e-3
"""m: how close an element must come to where the movement would put it."""


@dataclass(frozen=True, slots=True)
class Motion:
    """Turned by ``turn`` (rad, counter-clockwise seen from above) about the origin, then shifted.

    ``shift`` in m, world coordinates.
    """

    turn: float = 0.0
    shift: Point = (0.0, 0.0, 0.0)

    def __call__(self, point: Point) -> Point:
        x, y = _turned(point, self.turn)
        return x + self.shift[0], y + self.shift[1], point[2] + self.shift[2]

    def sentence(self) -> str:
        """Say what happened."""
        parts = []
        if self.turn:
            parts.append(
                f"turned by {math.degrees(self.turn):.4f}° about the origin (counter-clockwise, "
                f"seen from above)"
            )
        if any(self.shift):
            parts.append("shifted by ({:.3f}, {:.3f}, {:.3f}) m".format(*self.shift))
        return f"The whole model was {' and then '.join(parts)}."


STILL = Motion()


def common_motion(pairs: Sequence[tuple[Ends, Ends]]) -> Motion:
    """Return the movement of most elements, from their ends before and after; else ``STILL``."""
    moved = [(was, now) for was, now in pairs if not _agrees(STILL, was, now)]
    if len(moved) < max(_LEAST, _MOST * len(pairs)):
        return STILL
    turn = _common_turn(moved)
    for angle in (turn, turn + math.pi):
        motion = _with_shift(angle, moved)
        fitting = sum(_agrees(motion, was, now) for was, now in pairs)
        if fitting >= max(_LEAST, _MOST * len(pairs)):
            return motion
    return STILL


def _common_turn(pairs: Iterable[tuple[Ends, Ends]]) -> float:
    """The usual angle, up to half a turn, between elements that do not stand upright."""
    angles = [_angle(now) - _angle(was) for was, now in pairs if _flat(was) > 0.1 < _flat(now)]
    if not angles:
        return 0.0
    near = angles[0]
    usual = median(near + (a - near + math.pi / 2) % math.pi - math.pi / 2 for a in angles)
    return 0.0 if abs(math.remainder(usual, math.pi)) < 1e-9 else usual


def _with_shift(angle: float, pairs: Iterable[tuple[Ends, Ends]]) -> Motion:
    angle = math.remainder(angle, 2.0 * math.pi)
    if abs(angle) < 1e-9:
        angle = 0.0
    middles = [(_middle(was), _middle(now)) for was, now in pairs]
    turned = [(*_turned(was, angle), was[2]) for was, _ in middles]
    shift = [
        median(now[i] - t[i] for t, (_, now) in zip(turned, middles, strict=True)) for i in range(3)
    ]
    x, y, z = (0.0 if abs(s) < 1e-6 else s for s in shift)
    return Motion(angle, (x, y, z))


def _agrees(motion: Motion, was: Ends, now: Ends) -> bool:
    a, b = motion(was[0]), motion(was[1])
    straight = max(math.dist(a, now[0]), math.dist(b, now[1]))
    return min(straight, max(math.dist(a, now[1]), math.dist(b, now[0]))) <= _AGREEMENT


def _turned(point: Point, angle: float) -> tuple[float, float]:
    cos, sin = math.cos(angle), math.sin(angle)
    return cos * point[0] - sin * point[1], sin * point[0] + cos * point[1]


def _angle(ends: Ends) -> float:
    return math.atan2(ends[1][1] - ends[0][1], ends[1][0] - ends[0][0])


def _flat(ends: Ends) -> float:
    return math.dist(ends[0][:2], ends[1][:2])


def _middle(ends: Ends) -> Point:
    x, y, z = ((a + b) / 2.0 for a, b in zip(*ends, strict=True))
    return x, y, z
