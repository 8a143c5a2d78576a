"""The bar in the status line: progress, a button to stop, and the last message."""

from __future__ import annotations

from typing import Any

from ..qt import QtWidgets, Signal
from ..texts import tr, translate


class RunningBar(QtWidgets.QWidget):
    """Sits in FreeCAD's status bar, where it hides nothing."""

    cancel_asked = Signal()

    def __init__(self, window: Any) -> None:
        super().__init__(window)
        self.message = QtWidgets.QLabel()
        self.message.setObjectName("SpanledgerMessage")
        self.bar = QtWidgets.QProgressBar()
        self.bar.setObjectName("SpanledgerProgress")
        self.bar.setRange(0, 100)
        self.bar.setMaximumWidth(220)
        self.stop = QtWidgets.QPushButton(translate("Spanledger", "Stop"))
        self.stop.setObjectName("SpanledgerStop")
        self.stop.clicked.connect(self.cancel_asked)
        layout = QtWidgets.QHBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        for widget in (self.message, self.bar, self.stop):
            layout.addWidget(widget)
        self.end()
        window.statusBar().addWidget(self, 1)

    def begin(self) -> None:
        """Show that work began."""
        self.message.setText("")
        self.bar.setValue(0)
        self.bar.show()
        self.stop.show()

    def show_progress(self, step: str, part: float) -> None:
        """Show how far it is."""
        self.bar.setFormat(f"{tr(step)} %p %")
        self.bar.setValue(round(100.0 * part))

    def end(self) -> None:
        """Show that nothing runs."""
        self.bar.hide()
        self.stop.hide()

    def tell(self, message: str, *, problem: bool) -> None:
        """Show a sentence; a mark in front tells a problem from news."""
        self.message.setText(("⚠ " if problem else "✓ ") + message)
        self.message.setToolTip(message)

    def clear(self) -> None:
        """Show no sentence."""
        self.message.setText("")
        self.message.setToolTip("")
