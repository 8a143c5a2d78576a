"""Puts a drawing on a paint device: fills, strokes, and words on a ground of their own."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from typing import Any

from ..present.drawing import Drawing, Fill, Stroke, Words
from ..present.look import Palette
from ..qt import Qt, QtCore, QtGui

_ALIGN = {
    "left": Qt.AlignmentFlag.AlignLeft,
    "centre": Qt.AlignmentFlag.AlignHCenter,
    "right": Qt.AlignmentFlag.AlignRight,
}
_AROUND = ((-1, 0), (1, 0), (0, -1), (0, 1))


@contextmanager
def painting(device: Any) -> Iterator[Any]:
    """A painter that is let go of whatever happens.

    One that is still at work when Qt paints the next widget, or when its pixmap is thrown away,
    ends the program; a fault's traceback would keep it so.
    """
    painter = QtGui.QPainter(device)
    try:
        yield painter
    finally:
        painter.end()


def paint(painter: Any, drawing: Drawing, palette: Palette, font: Any) -> None:
    """Paint a drawing, back to front."""
    painter.setRenderHint(QtGui.QPainter.RenderHint.Antialiasing)
    _paint_fills(painter, drawing.fills, palette)
    _paint_strokes(painter, drawing.strokes, palette)
    _paint_words(painter, drawing.words, palette, font)


def paint_box(painter: Any, palette: Palette, rows: list[str], x: float, area: Any) -> None:
    """Paint rows of text in a box beside the pixel ``x``, on the side where there is room."""
    metrics = painter.fontMetrics()
    width = max(metrics.boundingRect(row).width() for row in rows) + 16
    line = metrics.height() + 1
    height = line * len(rows) + 8
    left = x + 8 if x + 8 + width < area.width() else x - 8 - width
    box = QtCore.QRectF(left, 6, width, height)
    painter.setPen(colour_of(palette, "rule"))
    painter.setBrush(colour_of(palette, "ground"))
    painter.drawRoundedRect(box, 4, 4)
    painter.setPen(colour_of(palette, "ink"))
    for number, row in enumerate(rows):
        painter.drawText(QtCore.QPointF(left + 8, 6 + line * (number + 1) - 1), row)


def colour_of(palette: Palette, role: str, opacity: float = 1.0) -> Any:
    """Return the colour of a role."""
    colour = QtGui.QColor(*palette[role])
    colour.setAlphaF(opacity)
    return colour


def smaller(font: Any) -> Any:
    """Return a font for what stands beside the main words."""
    made = QtGui.QFont(font)
    if font.pointSizeF() > 0:
        made.setPointSizeF(0.9 * font.pointSizeF())
    return made


def _paint_fills(painter: Any, fills: Sequence[Fill], palette: Palette) -> None:
    painter.setPen(Qt.PenStyle.NoPen)
    for fill in fills:
        painter.setBrush(colour_of(palette, fill.role, fill.opacity))
        polygon = QtGui.QPolygonF([QtCore.QPointF(x, y) for x, y in fill.points])
        painter.drawPolygon(polygon)
        if fill.hatched:
            hatch = colour_of(palette, fill.role, 0.7)
            painter.setBrush(QtGui.QBrush(hatch, Qt.BrushStyle.BDiagPattern))
            painter.drawPolygon(polygon)
    painter.setBrush(Qt.BrushStyle.NoBrush)


def _paint_strokes(painter: Any, strokes: Sequence[Stroke], palette: Palette) -> None:
    for stroke in strokes:
        style = Qt.PenStyle.DashLine if stroke.dashed else Qt.PenStyle.SolidLine
        painter.setPen(QtGui.QPen(colour_of(palette, stroke.role), stroke.width, style))
        path = QtGui.QPainterPath()
        for run in (stroke.points, *stroke.more):
            path.moveTo(*run[0])
            for x, y in run[1:]:
                path.lineTo(x, y)
        painter.drawPath(path)


def _paint_words(painter: Any, texts: Sequence[Words], palette: Palette, font: Any) -> None:
    halo = colour_of(palette, "ground", 0.75)  # keeps words readable over lines
    fonts: dict[tuple[bool, bool], Any] = {}
    for words in texts:
        kind = words.small, words.bold
        if kind not in fonts:
            fonts[kind] = smaller(font) if words.small else QtGui.QFont(font)
            fonts[kind].setBold(words.bold)
        painter.setFont(fonts[kind])
        left = {"left": words.x, "centre": words.x - 200.0, "right": words.x - 400.0}[words.align]
        box = QtCore.QRectF(left, words.y - 10.0, 400.0, 20.0)
        flags = int(_ALIGN[words.align] | Qt.AlignmentFlag.AlignVCenter)
        painter.setPen(halo)
        for dx, dy in _AROUND:
            painter.drawText(box.translated(dx, dy), flags, words.text)
        painter.setPen(colour_of(palette, words.role))
        painter.drawText(box, flags, words.text)
