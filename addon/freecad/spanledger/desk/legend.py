"""The legend of the 3D view: a sample stroke and words for each class of lines."""

from __future__ import annotations

from typing import Any

from ..present.look import VIEW
from ..present.shades import SOLID, Shade
from ..qt import Qt, QtCore, QtGui, QtWidgets
from ..texts import tr
from .painting import painting


class Legend(QtWidgets.QWidget):
    """A row of samples; empty where all lines are drawn alike."""

    def __init__(self, parent: Any = None) -> None:
        super().__init__(parent)
        self.setObjectName("SpanledgerLegend")
        self._shades: tuple[Shade, ...] = ()
        self._layout = QtWidgets.QHBoxLayout(self)
        self._layout.setContentsMargins(0, 0, 0, 0)
        self._layout.setSpacing(4)

    def show_shades(self, shades: tuple[Shade, ...]) -> None:
        """Show these classes."""
        if shades == self._shades:
            return
        self._shades = shades
        while self._layout.count():
            self._layout.takeAt(0).widget().deleteLater()
        for shade in shades:
            if shade.words:
                sample = QtWidgets.QLabel()
                sample.setPixmap(_sample(shade))
                words = QtWidgets.QLabel(tr(shade.words))
                self._layout.addWidget(sample)
                self._layout.addWidget(words)


def _sample(shade: Shade) -> Any:
    picture = QtGui.QPixmap(34, 14)
    picture.fill(QtGui.QColor(*VIEW["ground"]))
    pen = QtGui.QPen(QtGui.QColor(*VIEW[shade.role]), shade.width)
    if shade.pattern != SOLID:
        pen.setDashPattern(_dashes(shade))
    pen.setCapStyle(Qt.PenCapStyle.FlatCap)
    with painting(picture) as painter:
        painter.setPen(pen)
        painter.drawLine(QtCore.QPointF(2, 7), QtCore.QPointF(32, 7))
    return picture


def _dashes(shade: Shade) -> list[float]:
    """The runs of set and unset bits of a pattern, in widths of the pen."""
    bits = f"{shade.pattern:016b}"
    runs, last = [1], bits[0]
    for bit in bits[1:]:
        if bit == last:
            runs[-1] += 1
        else:
            runs.append(1)
            last = bit
    if len(runs) % 2:
        runs.append(1)
    return [max(run / shade.width, 0.5) for run in runs]
