"""The canvas that paints a strip and answers the mouse and the keyboard."""

from __future__ import annotations

from typing import Any

from analysis_core.units import DisplayUnits, display_units

from ..guard import guarded
from ..present.drawing import Drawing, Spot
from ..present.layout import lay_out, least_height
from ..present.look import Palette, palette_for
from ..present.strip import Strip, values_at
from ..qt import Qt, QtCore, QtGui, QtWidgets, Signal
from ..texts import tr, translate
from .painting import colour_of, paint, paint_box, painting, smaller

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
        self._painted: tuple[Any, Any] | None = None

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
        with painting(self) as painter:
            guarded(lambda: self._paint(painter))

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
            metrics = QtGui.QFontMetricsF(smaller(self.font()))
            advance = getattr(metrics, "horizontalAdvance", metrics.width)
            self.drawing = lay_out(
                self.strip, self.width(), self.height(), self.units, measure=advance,
                quantities=self.quantities, chosen=self.chosen,
            )  # fmt: skip
        self._painted = None
        self.update()

    def _paint(self, painter: Any) -> None:
        palette = self.palette_now()
        if self.drawing is None:
            painter.fillRect(self.rect(), colour_of(palette, "ground"))
            painter.setPen(colour_of(palette, "faint"))
            text = translate("Spanledger", "Choose a line in the list or in the 3D view.")
            painter.drawText(self.rect(), Qt.AlignmentFlag.AlignCenter, text)
            return
        painter.drawPixmap(0, 0, self._picture(self.drawing, palette))
        self._paint_cursor(painter, palette)

    def _picture(self, drawing: Drawing, palette: Palette) -> Any:
        """Return the drawing as it was painted last, so that the cursor moves over it at once."""
        looks = palette.name, self.font().toString(), self.devicePixelRatioF()
        if self._painted is None or self._painted[0] != looks:
            picture = QtGui.QPixmap(self.size() * self.devicePixelRatioF())
            picture.setDevicePixelRatio(self.devicePixelRatioF())
            picture.fill(colour_of(palette, "ground"))
            with painting(picture) as painter:
                paint(painter, drawing, palette, self.font())
            self._painted = looks, picture
        return self._painted[1]

    def _paint_cursor(self, painter: Any, palette: Palette) -> None:
        if self.cursor is None or self.strip is None or self.drawing is None:
            return
        x = self.drawing.to_pixel(self.cursor)
        painter.setPen(QtGui.QPen(colour_of(palette, "chosen"), 1.0, Qt.PenStyle.DashLine))
        painter.drawLine(QtCore.QPointF(x, 0.0), QtCore.QPointF(x, float(self.height())))
        rows = [f"x = {self.units.text(self.cursor, 'length')}"]
        rows += [
            f"{tr(name)}: {words}" for name, words in values_at(self.strip, self.cursor, self.units)
        ]
        paint_box(painter, palette, rows, x, self.rect())


def _place(event: Any) -> Any:
    return event.position() if hasattr(event, "position") else event.pos()
