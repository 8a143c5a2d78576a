"""An outline with its longest edge along x or y, and what chords through it tell of its shape."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from itertools import pairwise

from analysis_core.ifc.geometry import outline
from analysis_core.ifc.geometry.outline import Floats

AGREEMENT = 0.05

_TIP = 0.02

Interval = tuple[float, float]

Found = tuple[str, dict[str, float], float]


class UprightOutline:
    """An outline with its longest edge along x or y, and what chords through it tell."""

    def __init__(self, rows: Floats) -> None:
        self.rows = rows
        self.real = outline.moments((rows,))
        corners = outline.split_at_extremes(rows)
        self.x0, self.y0 = (float(v) for v in corners[:, :2].min(axis=0))
        self.x1, self.y1 = (float(v) for v in corners[:, :2].max(axis=0))
        self.width, self.depth = self.x1 - self.x0, self.y1 - self.y0
        self.points: list[tuple[float, float]] = [
            (x, y) for x, y, _ in outline.flattened(rows, 32).tolist()
        ]
        # Radii of roundings drawn as arcs: inner corners turn right, toes turn left.
        self.inner_radius, self.toe_radius = _arc_radii(rows)

    def named(self) -> Found | None:
        """Return shape, dimensions and half turn (0 or pi) if it is one of the known shapes."""
        if self.width <= 0.0 or self.depth <= 0.0:
            return None
        left = self._up_and_down(self.x0 + _TIP * self.width)
        right = self._up_and_down(self.x1 - _TIP * self.width)
        middle = self._across(self.y0 + 0.5 * self.depth)
        if self.real.area >= 0.94 * self.width * self.depth:
            return self._rectangle()
        attempts: tuple[Callable[..., Found | None], ...] = ()
        if len(middle) == 1 and len(left) == len(right) == 2:
            attempts = (self._i_section,)
        elif len(middle) == 1 and len(left) == len(right) == 1:
            attempts = (self._i_section, self._tee, self._angle, self._zed, self._trapezium)
        elif len(middle) == 1 and {len(left), len(right)} == {1, 2}:
            attempts = (self._channel, self._lipped_channel)
        for attempt in attempts:
            found = attempt(left, right, middle)
            if found is not None:
                return found
        return None

    def _rectangle(self) -> Found:
        dimensions = {"width": self.width, "depth": self.depth}
        missing = self.width * self.depth - self.real.area
        radius = math.sqrt(max(missing, 0.0) / (4.0 - math.pi))
        if radius > 0.01 * min(self.width, self.depth):
            dimensions["corner_radius"] = radius
        return "rectangle", dimensions, 0.0

    def _i_section(
        self, left: list[Interval], right: list[Interval], middle: list[Interval]
    ) -> Found | None:
        (a, b), axis = middle[0], self.x0 + 0.5 * self.width
        if not a < axis < b or abs(0.5 * (a + b) - axis) > 0.02 * self.width:
            return None
        chords = [self._up_and_down(a - share * (a - self.x0)) for share in (0.5, 0.35, 0.2)]
        quarter = next((chord for chord in chords if len(chord) == 2), [])
        if not quarter:
            return None
        bottom, top = (high - low for low, high in quarter)
        widths = [
            sum(q - p for p, q in self._across(y))
            for y in (self.y0 + 0.3 * bottom, self.y1 - 0.3 * top)
        ]
        web = b - a
        flanges = ((widths[1], top), (widths[0], bottom))
        sharp = sum(w * t for w, t in flanges) + (self.depth - top - bottom) * web
        fillet = self._fillet(sharp, 4)
        if fillet is None:
            return None
        d = {"width": self.width, "depth": self.depth, "web_thickness": web}
        for name, (width, thickness) in zip(("top", "bottom"), flanges, strict=True):
            d[f"{name}_flange_width"] = width
            d[f"{name}_flange_thickness"] = thickness
            d[f"{name}_fillet_radius"] = fillet
        if abs(top - bottom) < 1e-3 * top and abs(widths[0] - widths[1]) < 1e-3 * widths[0]:
            d["flange_thickness"] = top
            d["fillet_radius"] = fillet
        half = [(0.5 * widths[0], 0.0), (0.5 * widths[0], bottom), (0.5 * web, bottom)]
        half += [(0.5 * web, self.depth - top), (0.5 * widths[1], self.depth - top)]
        half += [(0.5 * widths[1], self.depth)]
        return ("I", d, 0.0) if self._agrees(half, (2, 3), fillet, (1, 4), mirrored=True) else None

    def _tee(
        self, left: list[Interval], right: list[Interval], middle: list[Interval]
    ) -> Found | None:
        (a, b), axis = middle[0], self.x0 + 0.5 * self.width
        if abs(0.5 * (a + b) - axis) > 0.02 * self.width or b - a > 0.7 * self.width:
            return None
        quarter = self._up_and_down(self.x0 + 0.25 * self.width)
        low, high = quarter[0] if quarter else left[0]
        flange, web = high - low, b - a
        flange_up = self.y1 - high < low - self.y0
        sharp = self.width * flange + (self.depth - flange) * web
        fillet = self._fillet(sharp, 2)
        if fillet is None or flange > 0.8 * self.depth:
            return None
        levels = [0.0, self.depth - flange, self.depth]
        half = [(0.5 * web, levels[0]), (0.5 * web, levels[1]), (0.5 * self.width, levels[1])]
        half += [(0.5 * self.width, levels[2])]
        d = {
            "width": self.width,
            "depth": self.depth,
            "web_thickness": web,
            "flange_thickness": flange,
            "fillet_radius": fillet,
        }
        turn = 0.0 if flange_up else math.pi
        return ("tee", d, turn) if self._agrees(half, (1,), fillet, (2,), mirrored=True) else None

    def _channel(
        self, left: list[Interval], right: list[Interval], middle: list[Interval]
    ) -> Found | None:
        a, b = middle[0]
        web = b - a
        if min(a - self.x0, self.x1 - b) > 0.02 * self.width or web > 0.6 * self.width:
            return None
        quarter = self._up_and_down(self.x0 + 0.5 * self.width)
        if len(quarter) != 2:
            return None
        bottom, top = (high - low for low, high in quarter)
        if abs(bottom - top) > 0.05 * top:
            return None
        flange = 0.5 * (bottom + top)
        fillet = self._fillet(2.0 * self.width * flange + (self.depth - 2.0 * flange) * web, 2)
        if fillet is None:
            return None
        w, h = self.width, self.depth
        corners = [(0.0, 0.0), (w, 0.0), (w, flange), (web, flange), (web, h - flange)]
        corners += [(w, h - flange), (w, h), (0.0, h)]
        d = {
            "width": w,
            "depth": h,
            "web_thickness": web,
            "flange_thickness": flange,
            "fillet_radius": fillet,
        }
        return ("channel", d, 0.0) if self._agrees(corners, (3, 4), fillet, (2, 5)) else None

    def _angle(
        self, left: list[Interval], right: list[Interval], middle: list[Interval]
    ) -> Found | None:
        (a, b), w, h = middle[0], self.width, self.depth
        thickness = b - a
        upright_leg = left[0] if a - self.x0 < self.x1 - b else right[0]
        across = self._up_and_down(self.x0 + 0.5 * w)
        if upright_leg[1] - upright_leg[0] < 0.8 * h or len(across) != 1:
            return None
        other = across[0][1] - across[0][0]
        fillet = self._fillet(w * other + (h - other) * thickness, 1)
        if fillet is None or abs(other - thickness) > 0.05 * thickness:
            return None
        t = 0.5 * (other + thickness)
        corners = [(0.0, 0.0), (w, 0.0), (w, t), (t, t), (t, h), (0.0, h)]
        d = {"width": w, "depth": h, "thickness": t, "fillet_radius": fillet}
        # Toes rounded by a few chords weigh more in a thin angle than elsewhere.
        like = self._agrees(corners, (3,), fillet, (2, 4), within=2.0 * AGREEMENT)
        return ("angle", d, 0.0) if like else None

    def _zed(
        self, left: list[Interval], right: list[Interval], middle: list[Interval]
    ) -> Found | None:
        (a, b), w, h = middle[0], self.width, self.depth
        web = b - a
        if abs(0.5 * (a + b) - self.x0 - 0.5 * w) > 0.03 * w or web > 0.4 * w:
            return None
        flange = 0.5 * sum(high - low for low, high in (left[0], right[0]))
        width = 0.5 * (w + web)
        fillet = self._fillet(2.0 * width * flange + (h - 2.0 * flange) * web, 2)
        if fillet is None:
            return None
        half = [(-0.5 * web, -0.5 * h), (0.5 * w, -0.5 * h), (0.5 * w, -0.5 * h + flange)]
        half += [(0.5 * web, -0.5 * h + flange)]
        corners = half + [(-x, -y) for x, y in half]
        d = {
            "width": w,
            "depth": h,
            "web_thickness": web,
            "flange_thickness": flange,
            "flange_width": width,
            "fillet_radius": fillet,
        }
        return ("zed", d, 0.0) if self._agrees(corners, (3, 7), fillet, (2, 6)) else None

    def _lipped_channel(
        self, left: list[Interval], right: list[Interval], middle: list[Interval]
    ) -> Found | None:
        (a, b), w, h = middle[0], self.width, self.depth
        t = b - a
        on_right = a - self.x0 < self.x1 - b
        lips = right if on_right else left
        if len(lips) != 2:
            return None
        lip = 0.5 * (lips[0][1] - self.y0 + self.y1 - lips[1][0])
        if lip < 1.2 * t or min(a - self.x0, self.x1 - b) > 0.02 * w:
            return None
        half = [(0.0, 0.0), (w, 0.0), (w, lip), (w - t, lip), (w - t, t), (t, t)]
        corners = half + [(x, h - y) for x, y in reversed(half)]
        sharp = abs(outline.signed_area(outline.loop(corners)))
        # Each folded corner loses (1 - pi/4)((r + t)² - r²).
        lost = (sharp - self.real.area) / (4.0 - math.pi)
        radius = max(0.5 * (lost / t - t), 0.0)
        radii = (radius + t, radius + t, 0.0, 0.0, radius, radius) if radius else (0.0,) * 6
        rows = [(x, y, r) for (x, y), r in zip(corners, radii + radii[::-1], strict=True)]
        d = {"width": w, "depth": h, "thickness": t, "lip": lip, "inner_radius": radius}
        drawn = outline.anticlockwise(outline.rounded(rows))
        return ("lipped channel", d, 0.0) if self._like(drawn) else None

    def _trapezium(
        self, left: list[Interval], right: list[Interval], middle: list[Interval]
    ) -> Found | None:
        low = self._across(self.y0 + 0.001 * self.depth)
        high = self._across(self.y1 - 0.001 * self.depth)
        if len(low) != 1 or len(high) != 1:
            return None
        bottom, top = low[0][1] - low[0][0], high[0][1] - high[0][0]
        if abs(0.5 * (bottom + top) * self.depth - self.real.area) > 0.003 * self.real.area:
            return None
        if min(bottom, top) < 0.02 * self.width:
            return None
        d = {"width": self.width, "depth": self.depth, "bottom_width": bottom, "top_width": top}
        return "trapezium", d, 0.0

    def _fillet(self, sharp_area: float, count: int) -> float | None:
        """Radius of ``count`` equal fillets that make up the area; None if that cannot be.

        Where material is missing instead, toes of that radius are assumed (at least two).
        """
        if self.inner_radius:
            return self.inner_radius
        spandrel = 1.0 - 0.25 * math.pi
        missing = (self.real.area - sharp_area) / spandrel
        if missing < 0.0:
            toe = math.sqrt(-missing / max(count, 2))
            self.toe_radius = self.toe_radius or toe
            return 0.0 if -missing * spandrel < 0.05 * self.real.area else None
        radius = math.sqrt(missing / count)
        if radius > 0.5 * min(self.width, self.depth):
            return None
        return radius if radius > 1e-3 * min(self.width, self.depth) else 0.0

    def _agrees(
        self,
        corners: Sequence[tuple[float, float]],
        filleted: tuple[int, ...],
        radius: float,
        toes: tuple[int, ...],
        mirrored: bool = False,
        within: float = AGREEMENT,
    ) -> bool:
        radii = dict.fromkeys(filleted, radius) | dict.fromkeys(toes, self.toe_radius)
        rows = [(x, y, radii.get(i, 0.0)) for i, (x, y) in enumerate(corners)]
        if mirrored:
            rows += [(-x, y, r) for x, y, r in reversed(rows)]
        return self._like(outline.anticlockwise(outline.rounded(rows)), within)

    def _like(self, rows: Floats, within: float = AGREEMENT) -> bool:
        drawn = outline.moments((rows,))
        return all(
            abs(mine - theirs) <= within * theirs
            for mine, theirs in (
                (drawn.area, self.real.area),
                (drawn.xx, self.real.xx),
                (drawn.yy, self.real.yy),
            )
        )

    def _across(self, y: float) -> list[Interval]:
        return _chords([(p[1], p[0]) for p in self.points], y)

    def _up_and_down(self, x: float) -> list[Interval]:
        return _chords(self.points, x)


def _arc_radii(rows: Floats) -> tuple[float, float]:
    """Mean radius of the arcs that turn right and of those that turn left, 0 where none."""
    radii: tuple[list[float], list[float]] = ([], [])
    for (x, y, bulge), (x2, y2, _) in pairwise([*rows.tolist(), rows[0].tolist()]):
        if bulge:
            radii[bulge > 0.0].append(outline.arc_of(x, y, x2, y2, bulge)[2])
    right, left = (sum(r) / len(r) if r else 0.0 for r in radii)
    return right, left


def _chords(points: Sequence[tuple[float, float]], at: float) -> list[Interval]:
    """Intervals of the second coordinate inside the polygon where the first equals ``at``."""
    hits = []
    for (u, v), (u2, v2) in pairwise([*points, points[0]]):
        if (u <= at) != (u2 <= at):
            hits.append(v + (v2 - v) * (at - u) / (u2 - u))
    hits.sort()
    return list(zip(hits[::2], hits[1::2], strict=False))
