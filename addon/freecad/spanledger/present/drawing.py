"""A drawing in pixels: strokes, fills, words, and spots that answer a click."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Literal

Place = tuple[float, float]
Align = Literal["left", "centre", "right"]


@dataclass(frozen=True, slots=True)
class Stroke:
    """A polyline; ``role`` names its colour in the palette.

    ``more`` are further polylines in the same pen: many short ones are painted much faster at once.
    """

    points: tuple[Place, ...]
    role: str
    width: float = 1.4
    dashed: bool = False
    more: tuple[tuple[Place, ...], ...] = ()


@dataclass(frozen=True, slots=True)
class Fill:
    """A polygon, tinted; hatched where it must differ from its neighbour without colour."""

    points: tuple[Place, ...]
    role: str
    opacity: float = 0.25
    hatched: bool = False


@dataclass(frozen=True, slots=True)
class Words:
    """A text; (x, y) is the middle of its height."""

    x: float
    y: float
    text: str
    role: str = "ink"
    align: Align = "centre"
    bold: bool = False
    small: bool = False


@dataclass(frozen=True, slots=True)
class Spot:
    """A rectangle that answers a click: a joint, a member or an action, by its number."""

    left: float
    top: float
    right: float
    bottom: float
    kind: Literal["joint", "member", "action"]
    number: int
    tip: str

    def holds(self, x: float, y: float) -> bool:
        """Whether a point lies in it."""
        return self.left <= x <= self.right and self.top <= y <= self.bottom


@dataclass(slots=True)
class Drawing:
    """Everything to paint, back to front, and how the axis maps to pixels."""

    width: float
    height: float
    origin: float = 0.0
    scale: float = 1.0
    fills: list[Fill] = field(default_factory=list)
    strokes: list[Stroke] = field(default_factory=list)
    words: list[Words] = field(default_factory=list)
    spots: list[Spot] = field(default_factory=list)

    def to_pixel(self, x: float) -> float:
        """Return the pixel of a place on the axis (m)."""
        return self.origin + self.scale * x

    def to_axis(self, pixel: float) -> float:
        """Return the place on the axis (m) of a pixel."""
        return (pixel - self.origin) / self.scale

    def spot_at(self, x: float, y: float) -> Spot | None:
        """Return what lies at a pixel; joints lie over members."""
        found = [spot for spot in self.spots if spot.holds(x, y)]
        order = {"joint": 0, "action": 1, "member": 2}
        return min(found, key=lambda spot: order[spot.kind], default=None)
