"""Coin nodes filled from NumPy arrays: a batch of lines, a batch of faces, a few labels."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from pivy import coin

from ..present.scene import Filled

Colour = tuple[float, float, float]
MOST_LABELS = 60
TRANSPARENCY = 0.35
BODY_TRANSPARENCY = 0.88
MOST_OUTLINED = 60_000  # quadrilaterals; beyond, outlines cost more than they show
_TRIANGLES = np.array([0, 1, 2, 0, 2, 3], dtype=np.int32)
_CURVE = np.array([3, 2], dtype=np.int32)
DEPTH_STEP = 2e-4


class Lines:
    """A batch of polylines in one colour, on a wider casing where one is asked for.

    The casing keeps lines readable on any ground, pale or dark.
    """

    def __init__(
        self,
        colour: Colour,
        width: float,
        *,
        casing: Colour | None = None,
        nearer: int = 2,
        pickable: bool = True,
        pattern: int = 0xFFFF,
    ) -> None:
        self.node = coin.SoSeparator()
        self._points = coin.SoCoordinate3()
        self._lines = coin.SoIndexedLineSet()
        self.node.addChild(self._points)
        if casing is not None:
            self.node.addChild(_stroke(casing, width + 3.0, self._lines, nearer=1, pickable=False))
        stroke = _stroke(
            colour, width, self._lines, nearer=nearer, pickable=pickable, pattern=pattern
        )
        self.node.addChild(stroke)
        self.set_segments(np.zeros((0, 2, 3)))  # Coin starts with a point at the origin

    def set_segments(self, ends: np.ndarray) -> None:
        """Draw straight segments (n, 2, 3)."""
        self.set_polylines(ends.reshape(-1, 3), [2] * len(ends))

    def set_polylines(self, points: np.ndarray, counts: Sequence[int]) -> None:
        """Draw polylines: all points (n, 3) in order, and how many belong to each."""
        _set_points(self._points, points)
        numbers = np.arange(len(points), dtype=np.int32)
        ends = np.cumsum(np.asarray(counts, dtype=np.int64))
        _set_numbers(self._lines.coordIndex, np.insert(numbers, ends, -1))


class Faces:
    """A batch of see-through quadrilaterals with the outline of their curve."""

    def __init__(self, colour: Colour, transparency: float = TRANSPARENCY) -> None:
        self.node = coin.SoSeparator()
        hints = coin.SoShapeHints()
        hints.vertexOrdering = coin.SoShapeHints.UNKNOWN_ORDERING  # seen from both sides
        blend = coin.SoTransparencyType()
        blend.value = coin.SoTransparencyType.DELAYED_BLEND  # sorting each face is slow
        pick = coin.SoPickStyle()
        pick.style = coin.SoPickStyle.UNPICKABLE
        self._material, self._base = coin.SoMaterial(), coin.SoMaterial()
        self._material.transparency = transparency
        style = coin.SoDrawStyle()
        style.lineWidth = 1.5
        self._points, self._faces = coin.SoCoordinate3(), coin.SoIndexedFaceSet()
        self._outline = coin.SoIndexedLineSet()
        for node in (
            pick, hints, blend, self._points, self._material, self._faces, self._base, style,
            self._outline,
        ):  # fmt: skip
            self.node.addChild(node)
        self._colour: Colour | None = None
        self._count = -1
        self.set_colour(colour)
        self.clear()

    def set_colour(self, colour: Colour) -> None:
        """Show faces and outline in another colour."""
        if colour == self._colour:
            return
        self._colour = colour
        self._material.diffuseColor = colour
        self._base.diffuseColor = colour

    def set_filled(self, drawn: Filled) -> None:
        """Draw the quadrilaterals and the outline of a diagram."""
        count = len(drawn.corners)
        _set_points(self._points, drawn.corners.reshape(-1, 3))
        if count == self._count:
            return  # which corners belong together follows from their number alone
        self._count = count
        first = 4 * np.arange(count, dtype=np.int32)[:, None]
        # Two triangles each, and the side that is the curve.
        _set_index(self._faces.coordIndex, (first + _TRIANGLES).reshape(-1, 3))
        outlined = first if count <= MOST_OUTLINED else first[:0]
        _set_index(self._outline.coordIndex, outlined + _CURVE)

    def clear(self) -> None:
        """Draw nothing."""
        self.set_filled(Filled(np.zeros((0, 4, 3))))


class Body:
    """Faint bodies: see-through faces and thin edges that share their points."""

    def __init__(self, colour: Colour) -> None:
        self.node = coin.SoSeparator()
        hints = coin.SoShapeHints()
        hints.vertexOrdering = coin.SoShapeHints.UNKNOWN_ORDERING
        material = coin.SoMaterial()
        material.diffuseColor = colour
        material.transparency = BODY_TRANSPARENCY
        pick = coin.SoPickStyle()
        pick.style = coin.SoPickStyle.UNPICKABLE
        self._points, self._faces = coin.SoCoordinate3(), coin.SoIndexedFaceSet()
        self._edges = coin.SoIndexedLineSet()
        for node in (pick, hints, self._points, material, self._faces):
            self.node.addChild(node)
        thin = coin.SoMaterial()
        thin.diffuseColor = colour
        thin.transparency = 0.5
        style = coin.SoDrawStyle()
        style.lineWidth = 1.0
        for node in (thin, style, self._edges):
            self.node.addChild(node)
        self.clear()

    def clear(self) -> None:
        """Show nothing."""
        none = np.zeros((0, 3))
        self.set(none, none.astype(np.int32), np.zeros((0, 2), dtype=np.int32))

    def set(self, points: np.ndarray, triangles: np.ndarray, edges: np.ndarray) -> None:
        """Show triangles (t, 3) and edges (e, 2) between points (n, 3)."""
        _set_points(self._points, points)
        for field, rows in ((self._faces.coordIndex, triangles), (self._edges.coordIndex, edges)):
            _set_index(field, rows)


class Labels:
    """A few texts at points, always facing the viewer."""

    def __init__(self, colour: Colour) -> None:
        self.node = coin.SoSeparator()
        pick = coin.SoPickStyle()
        pick.style = coin.SoPickStyle.UNPICKABLE
        base, font = coin.SoBaseColor(), coin.SoFont()
        base.rgb = colour
        font.size = 15.0
        for node in (pick, base, font):
            self.node.addChild(node)
        self._kept = self.node.getNumChildren()

    def set(self, labels: Sequence[tuple[Sequence[float], str]]) -> None:
        """Show texts at points (mm); no more than MOST_LABELS."""
        while self.node.getNumChildren() > self._kept:
            self.node.removeChild(self._kept)
        for point, text in labels[:MOST_LABELS]:
            place, place_of, words = coin.SoSeparator(), coin.SoTranslation(), coin.SoText2()
            place_of.translation = tuple(point)
            words.string = text
            place.addChild(place_of)
            place.addChild(words)
            self.node.addChild(place)


def _stroke(
    colour: Colour,
    width: float,
    lines: coin.SoIndexedLineSet,
    *,
    nearer: int,
    pickable: bool,
    pattern: int = 0xFFFF,
) -> coin.SoSeparator:
    stroke = coin.SoSeparator()
    # Lines over lines of the same place: each level lies a hair nearer to the eye.
    depth = coin.SoDepthBuffer()
    depth.range = (0.0, 1.0 - DEPTH_STEP * nearer)
    stroke.addChild(depth)
    pick, base, style = coin.SoPickStyle(), coin.SoBaseColor(), coin.SoDrawStyle()
    pick.style = coin.SoPickStyle.SHAPE if pickable else coin.SoPickStyle.UNPICKABLE
    base.rgb = colour
    style.lineWidth = width
    style.linePattern = pattern
    for node in (pick, base, style, lines):
        stroke.addChild(node)
    return stroke


def _set_points(node: coin.SoCoordinate3, points: np.ndarray) -> None:
    # setNum first, or the tail of a longer former array stays.
    node.point.setNum(len(points))
    if len(points):
        node.point.setValues(0, len(points), np.ascontiguousarray(points, dtype=np.float32))


def _set_index(field: coin.SoMFInt32, rows: np.ndarray) -> None:
    """Set the corners (n, k) of n faces or lines, each closed by -1."""
    ends = np.full((len(rows), 1), -1, dtype=np.int32)
    _set_numbers(field, np.hstack([rows, ends]).ravel())


def _set_numbers(field: coin.SoMFInt32, values: np.ndarray) -> None:
    field.setNum(len(values))
    if len(values):
        field.setValues(0, len(values), np.ascontiguousarray(values, dtype=np.int32))
