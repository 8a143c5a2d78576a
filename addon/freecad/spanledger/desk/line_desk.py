"""The dock for one line: what is looked at, the strip, and what the chosen spot says."""

from __future__ import annotations

from typing import Any

from analysis_core.units import DisplayUnits

from ..present.diagrams import View
from ..present.shades import WAYS
from ..present.strip import Strip
from ..present.words import noop
from ..qt import Qt, QtCore, QtWidgets, Signal
from ..texts import tr, translate
from .canvas import Canvas
from .inspector import Inspector
from .legend import Legend


class LineDesk(QtWidgets.QWidget):
    """Chooser of the view above, canvas and inspector below."""

    view_changed = Signal(object)
    spot_picked = Signal(object)
    quantity_changed = Signal(str)
    shading_changed = Signal(str)

    def __init__(self, parent: Any = None) -> None:
        super().__init__(parent)
        self._views: list[View] = []
        self.title = QtWidgets.QLabel()
        self.title.setObjectName("SpanledgerTitle")
        self.title.setMinimumWidth(60)  # a long title must not widen the window
        self.title.setSizePolicy(
            QtWidgets.QSizePolicy.Policy.Ignored, QtWidgets.QSizePolicy.Policy.Preferred
        )
        self.view = QtWidgets.QComboBox()
        self.view.setObjectName("SpanledgerView")
        self.view.setSizeAdjustPolicy(QtWidgets.QComboBox.SizeAdjustPolicy.AdjustToContents)
        self.view.setToolTip(translate("Spanledger", "Envelope, combination or load case"))
        self.curves: dict[str, Any] = {}
        top = QtWidgets.QHBoxLayout()
        top.addWidget(self.view)
        for quantity in ("moment", "shear", "deflection"):
            box = QtWidgets.QCheckBox(tr(quantity.capitalize()))
            box.setObjectName(f"SpanledgerShow_{quantity}")
            box.setChecked(True)
            box.toggled.connect(self._curves_changed)
            self.curves[quantity] = box
            top.addWidget(box)
        self.in_3d = QtWidgets.QComboBox()
        self.in_3d.setObjectName("SpanledgerIn3D")
        for quantity in ("moment", "shear", "deflection"):
            text = translate("Spanledger", "3D: {quantity}").format(quantity=tr(quantity))
            self.in_3d.addItem(text, quantity)
        self.in_3d.setToolTip(translate("Spanledger", "What the 3D view shows along all lines"))
        top.addWidget(self.in_3d)
        self.shaded_by = QtWidgets.QComboBox()
        self.shaded_by.setObjectName("SpanledgerShadedBy")
        for way in WAYS:
            text = translate("Spanledger", "lines: {way}").format(way=tr(_WAYS[way]))
            self.shaded_by.addItem(text, way)
        self.shaded_by.setToolTip(translate("Spanledger", "How lines are told apart in 3D"))
        self.legend = Legend()
        top.addWidget(self.shaded_by)
        top.addWidget(self.legend)
        top.addWidget(self.title, 1)
        self.canvas = Canvas()
        layout = QtWidgets.QVBoxLayout(self)
        layout.setContentsMargins(4, 4, 4, 4)
        layout.addLayout(top)
        self.inspector = Inspector()
        middle = QtWidgets.QHBoxLayout()
        middle.addWidget(_scrolled(self.canvas), 1)
        middle.addWidget(self.inspector)
        layout.addLayout(middle, 1)
        self.view.currentIndexChanged.connect(self._view_changed)
        self.in_3d.currentIndexChanged.connect(
            lambda _index: self.quantity_changed.emit(self.in_3d.currentData())
        )
        self.canvas.picked.connect(self.spot_picked)
        self.shaded_by.currentIndexChanged.connect(
            lambda _index: self.shading_changed.emit(self.shaded_by.currentData())
        )

    def show_views(self, views: list[View]) -> None:
        """Offer these views; the one that was chosen stays if it is among them."""
        kept = self.current_view()
        if views == self._views:
            return
        self._views = views
        blocker = QtCore.QSignalBlocker(self.view)
        self.view.clear()
        for view in views:
            name = tr(view.name) if view.kind == "envelope" else view.name
            self.view.addItem(f"{tr(_KINDS[view.kind])}: {name}")
        names = [(view.kind, view.name) for view in views]
        if kept is not None and (kept.kind, kept.name) in names:
            self.view.setCurrentIndex(names.index((kept.kind, kept.name)))
        blocker.unblock()

    def current_view(self) -> View | None:
        """Return what is looked at."""
        index = self.view.currentIndex()
        return self._views[index] if 0 <= index < len(self._views) else None

    def show_strip(
        self, strip: Strip | None, units: DisplayUnits, chosen: tuple[str, int] | None = None
    ) -> None:
        """Show a line, and the spot that is worked on."""
        self.title.setText(strip.title if strip else "")
        self.canvas.show_strip(strip, units, chosen)

    def _view_changed(self, _index: int) -> None:
        view = self.current_view()
        if view is not None:
            self.view_changed.emit(view)

    def _curves_changed(self, _on: bool) -> None:
        self.canvas.show_quantities(tuple(q for q, box in self.curves.items() if box.isChecked()))


def _scrolled(widget: Any) -> Any:
    area = QtWidgets.QScrollArea()
    area.setWidgetResizable(True)
    area.setFrameShape(QtWidgets.QFrame.Shape.NoFrame)
    area.setFocusPolicy(Qt.FocusPolicy.NoFocus)
    area.setMinimumHeight(200)
    area.setWidget(widget)
    return area


_WAYS = {
    "plain": noop("alike"),
    "state": noop("by state"),
    "change": noop("by change"),
    "use": noop("by use"),
}
_KINDS = {
    "envelope": noop("Envelope"),
    "combination": noop("Combination"),
    "case": noop("Case"),
}
