"""Symmetry of a line about its middle, and of the moments that are distributed along it."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.bars import Bar
from analysis_core.distribution.loads import holds
from analysis_core.model import Line

Floats = NDArray[np.float64]
Parity = Literal["symmetric", "antisymmetric"]

_ALIKE = 1e-9
_NEAR = 1e-6


@dataclass(frozen=True, slots=True)
class Mirror:
    """joints: the image of each joint; bars: of each bar, and whether its start meets the end.

    ``left`` are the joints to the left of the axis.
    """

    joints: dict[int, int]
    bars: tuple[tuple[int, bool], ...]
    left: frozenset[int]

    def image(self, bar: int, end: int) -> tuple[int, int]:
        """Return the bar end opposite to one."""
        other, crossed = self.bars[bar]
        return other, 1 - end if crossed else end


def mirror(line: Line, bars: Sequence[Bar], joints: Sequence[int]) -> Mirror | None:
    """Return how the bars of a line mirror themselves about its middle, None if they do not."""
    xs = [line.joints[joint].x for joint in joints]
    middle, reach = (max(xs) + min(xs)) / 2.0, max(xs) - min(xs)
    if not reach:
        return None
    image = {joint: _opposite(line, joints, joint, middle, _NEAR * reach) for joint in joints}
    found = {joint: other for joint, other in image.items() if other is not None}
    if len(found) < len(joints) or not all(_same_support(line, *ab) for ab in found.items()):
        return None
    places = {(bar.start, bar.end): index for index, bar in enumerate(bars)}
    if len(places) < len(bars):
        return None
    pairs = [_opposite_bar(bars, places, found, index) for index in range(len(bars))]
    sure = tuple(pair for pair in pairs if pair is not None)
    if len(sure) < len(bars):
        return None
    left = frozenset(j for j in joints if line.joints[j].x < middle - _NEAR * reach)
    right = frozenset(found[joint] for joint in left)
    for index, bar in enumerate(bars):
        if {bar.start, bar.end} & left and {bar.start, bar.end} & right and sure[index][0] != index:
            return None  # two bars that cross each other on the axis
    return Mirror(found, sure, left)


def parity(mirrored: Mirror, held: Floats, couples: Floats) -> Parity | None:
    """Return whether held moments (B, 2) and couples on joints (J,) are symmetric or the opposite.

    Moments turn the other way in a mirror: under symmetric loading opposite ends have opposite
    clockwise moments.
    """
    scale = max(np.abs(held).max(initial=0.0), np.abs(couples).max(initial=0.0))
    images = [
        [held[mirrored.image(bar, end)] for end in (0, 1)] for bar in range(len(mirrored.bars))
    ]
    opposite = np.array(images).reshape(held.shape)
    joints = list(mirrored.joints)
    turned = couples[[mirrored.joints[joint] for joint in joints]]
    for name, sign in (("symmetric", -1.0), ("antisymmetric", 1.0)):
        apart = max(
            np.abs(opposite - sign * held).max(initial=0.0),
            np.abs(turned - sign * couples[joints]).max(initial=0.0),
        )
        if apart <= _ALIKE * scale:
            return name  # type: ignore[return-value]
    return None


def _opposite(
    line: Line, joints: Sequence[int], joint: int, middle: float, near: float
) -> int | None:
    own = line.joints[joint]
    for other in joints:
        place = line.joints[other]
        if abs(place.x + own.x - 2.0 * middle) <= near and abs(place.z - own.z) <= near:
            return other
    return None


def _same_support(line: Line, one: int, other: int) -> bool:
    a, b = (holds(line.joints[joint])["rotation"] for joint in (one, other))
    return a == b or abs(a - b) <= _ALIKE * min(a, b)


def _opposite_bar(
    bars: Sequence[Bar],
    places: dict[tuple[int, int], int],
    image: dict[int, int],
    index: int,
) -> tuple[int, bool] | None:
    bar = bars[index]
    start, end = image[bar.start], image[bar.end]
    for key, crossed in (((end, start), True), ((start, end), False)):
        other = places.get(key)
        if other is not None and _same_stiffness(bar, bars[other], crossed):
            return other, crossed
    return None


def _same_stiffness(one: Bar, other: Bar, crossed: bool) -> bool:
    a, b = one.stiffness, other.stiffness
    ends = (b.far, b.near) if crossed else (b.near, b.far)
    values = zip((a.near, a.far, a.carried), (*ends, b.carried), strict=True)
    return all(abs(x - y) <= _ALIKE * max(abs(x), abs(y)) for x, y in values)
