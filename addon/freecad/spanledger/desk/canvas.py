"""The canvas that paints a strip and answers the mouse and the keyboard."""

from __future__ import annotations

from typing import Any

from analysis_core.units import DisplayUnits, display_units

from ..present.drawing import Drawing, Spot
from ..present.layout import lay_out, least_height
from ..present.look import Palette, palette_for
from ..present.strip import Strip, values_at
from ..qt import Qt, QtCore, QtGui, QtWidgets, Signal
from ..texts import tr, translate

_ALIGN = {
    "left": Qt.AlignmentFlag.AlignLeft,
    "centre": Qt.AlignmentFlag.AlignHCenter,
    "right": Qt.AlignmentFlag.AlignRight,
}
_STEP = 0.01
_LEAST = (420, 240)


class Canvas(QtWidgets.QWidget):
    """Elevation and curves of one line."""

    picked = Signal(object)  # Spot, or None

    def __init__(self, parent: Any = None) -> None:
        super().__init__(parent)
        self.setObjectName("SpanledgerCanvas")
        self.setMinimumSize(*_LEAST)
        self.setMouseTracking(True)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setAccessibleName(translate("Spanledger", "Elevation and curves of the chosen line"))
        self.strip: Strip | None = None
        self.drawing: Drawing | None = None
        self.units: DisplayUnits = display_units()
        self.quantities: tuple[str, ...] = ("moment", "shear", "deflection")
        self.chosen: tuple[str, int] | None = None
        self.cursor: float | None = None

    def show_strip(
        self, strip: Strip | None, units: DisplayUnits, chosen: tuple[str, int] | None = None
    ) -> None:
        """Show a line, and the spot that is worked on; None shows nothing."""
        self.strip, self.units, self.chosen = strip, units, chosen
        self._take_room()
        self._lay_out()

    def choose(self, chosen: tuple[str, int] | None) -> None:
        """Mark the spot that is worked on."""
        if chosen != self.chosen:
            self.chosen = chosen
            self._lay_out()

    def show_quantities(self, quantities: tuple[str, ...]) -> None:
        """Show only these curves."""
        self.quantities = quantities
        self._take_room()
        self._lay_out()

    def palette_now(self) -> Palette:
        """Return the palette that suits the window's theme."""
        # Style sheets colour the main window for sure, and other widgets only where they say so.
        ground = self.window().palette().color(QtGui.QPalette.ColorRole.Window)
        return palette_for((ground.red(), ground.green(), ground.blue()))

    def spot_at(self, x: float, y: float) -> Spot | None:
        """Return what lies at a pixel."""
        return self.drawing.spot_at(x, y) if self.drawing else None

    def sizeHint(self) -> Any:  # noqa: N802  # Qt's names, here and below
        return QtCore.QSize(900, 420)

    def resizeEvent(self, _event: Any) -> None:  # noqa: N802
        self._lay_out()

    def paintEvent(self, _event: Any) -> None:  # noqa: N802
        painter = QtGui.QPainter(self)
        painter.setRenderHint(QtGui.QPainter.RenderHint.Antialiasing)
        palette = self.palette_now()
        painter.fillRect(self.rect(), _colour(palette, "ground"))
        if self.drawing is None:
            painter.setPen(_colour(palette, "faint"))
            text = translate("Spanledger", "Choose a line in the list or in the 3D view.")
            painter.drawText(self.rect(), Qt.AlignmentFlag.AlignCenter, text)
        else:
            _paint(painter, self.drawing, palette, self.font())
            self._paint_cursor(painter, palette)
        painter.end()

    def mouseMoveEvent(self, event: Any) -> None:  # noqa: N802
        place = _place(event)
        if self.drawing is None:
            return
        self._move_cursor(self.drawing.to_axis(place.x()))
        spot = self.spot_at(place.x(), place.y())
        self.setToolTip(spot.tip if spot else "")
        shape = Qt.CursorShape.PointingHandCursor if spot else Qt.CursorShape.ArrowCursor
        self.setCursor(QtGui.QCursor(shape))

    def leaveEvent(self, _event: Any) -> None:  # noqa: N802
        self._move_cursor(None)

    def mousePressEvent(self, event: Any) -> None:  # noqa: N802
        place = _place(event)
        self.picked.emit(self.spot_at(place.x(), place.y()))

    def keyPressEvent(self, event: Any) -> None:  # noqa: N802
        key = event.key()
        if self.strip is not None and key in (Qt.Key.Key_Left, Qt.Key.Key_Right):
            length = max(s.end for s in self.strip.stretches)
            step = _STEP * length * (1.0 if key == Qt.Key.Key_Right else -1.0)
            at = self.cursor if self.cursor is not None else length / 2.0
            self._move_cursor(min(max(at + step, 0.0), length))
        else:
            super().keyPressEvent(event)

    def _move_cursor(self, x: float | None) -> None:
        if self.strip is not None and x is not None:
            length = max(s.end for s in self.strip.stretches)
            x = x if 0.0 <= x <= length else None
        self.cursor = x
        self.update()

    def _take_room(self) -> None:
        """Ask for the height that can be read; the area around scrolls where it has less."""
        width, height = _LEAST
        if self.strip is not None:
            height = max(height, round(least_height(self.strip, self.quantities)))
        self.setMinimumSize(width, height)

    def _lay_out(self) -> None:
        if self.strip is None:
            self.drawing = None
        else:
            metrics = QtGui.QFontMetricsF(_small(self.font()))
            advance = getattr(metrics, "horizontalAdvance", metrics.width)
            self.drawing = lay_out(
                self.strip, self.width(), self.height(), self.units, measure=advance,
                quantities=self.quantities, chosen=self.chosen,
            )  # fmt: skip
        self.update()

    def _paint_cursor(self, painter: Any, palette: Palette) -> None:
        if self.cursor is None or self.strip is None or self.drawing is None:
            return
        x = self.drawing.to_pixel(self.cursor)
        painter.setPen(QtGui.QPen(_colour(palette, "chosen"), 1.0, Qt.PenStyle.DashLine))
        painter.drawLine(QtCore.QPointF(x, 0.0), QtCore.QPointF(x, float(self.height())))
        rows = [f"x = {self.units.text(self.cursor, 'length')}"]
        rows += [
            f"{tr(name)}: {words}" for name, words in values_at(self.strip, self.cursor, self.units)
        ]
        _paint_box(painter, palette, rows, x, self.rect())


def _paint(painter: Any, drawing: Drawing, palette: Palette, font: Any) -> None:
    for fill in drawing.fills:
        colour = _colour(palette, fill.role)
        colour.setAlphaF(fill.opacity)
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(colour)
        polygon = QtGui.QPolygonF([QtCore.QPointF(x, y) for x, y in fill.points])
        painter.drawPolygon(polygon)
        if fill.hatched:
            colour.setAlphaF(0.7)
            painter.setBrush(QtGui.QBrush(colour, Qt.BrushStyle.BDiagPattern))
            painter.drawPolygon(polygon)
    painter.setBrush(Qt.BrushStyle.NoBrush)
    for stroke in drawing.strokes:
        style = Qt.PenStyle.DashLine if stroke.dashed else Qt.PenStyle.SolidLine
        painter.setPen(QtGui.QPen(_colour(palette, stroke.role), stroke.width, style))
        path = QtGui.QPainterPath()
        for run in (stroke.points, *stroke.more):
            path.moveTo(*run[0])
            for x, y in run[1:]:
                path.lineTo(x, y)
        painter.drawPath(path)
    for words in drawing.words:
        chosen = _small(font) if words.small else QtGui.QFont(font)
        chosen.setBold(words.bold)
        painter.setFont(chosen)
        left = {"left": words.x, "centre": words.x - 200.0, "right": words.x - 400.0}[words.align]
        box = QtCore.QRectF(left, words.y - 10.0, 400.0, 20.0)
        flags = int(_ALIGN[words.align] | Qt.AlignmentFlag.AlignVCenter)
        halo = _colour(palette, "ground")
        halo.setAlphaF(0.75)
        painter.setPen(halo)  # a ground of their own keeps words readable over lines
        for dx, dy in ((-1, 0), (1, 0), (0, -1), (0, 1)):
            painter.drawText(box.translated(dx, dy), flags, words.text)
        painter.setPen(_colour(palette, words.role))
        painter.drawText(box, flags, words.text)


def _paint_box(painter: Any, palette: Palette, rows: list[str], x: float, area: Any) -> None:
    metrics = painter.fontMetrics()
    width = max(metrics.boundingRect(row).width() for row in rows) + 16
    line = metrics.height() + 1
    height = line * len(rows) + 8
    left = x + 8 if x + 8 + width < area.width() else x - 8 - width
    box = QtCore.QRectF(left, 6, width, height)
    painter.setPen(_colour(palette, "rule"))
    painter.setBrush(_colour(palette, "ground"))
    painter.drawRoundedRect(box, 4, 4)
    painter.setPen(_colour(palette, "ink"))
    for number, row in enumerate(rows):
        painter.drawText(QtCore.QPointF(left + 8, 6 + line * (number + 1) - 1), row)


def _colour(palette: Palette, role: str) -> Any:
    return QtGui.QColor(*palette[role])


def _small(font: Any) -> Any:
    small = QtGui.QFont(font)
    if font.pointSizeF() > 0:
        small.setPointSizeF(0.9 * font.pointSizeF())
    return small


def _place(event: Any) -> Any:
    return event.position() if hasattr(event, "position") else event.pos()
