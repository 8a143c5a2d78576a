"""Progress, a button to stop, and the last message, below the list of lines."""

from __future__ import annotations

from typing import Any

from ..qt import Qt, QtWidgets, Signal
from ..texts import tr, translate


class RunningBar(QtWidgets.QWidget):
    """Stands in a dock: in the status bar, FreeCAD's own messages would cover it."""

    cancel_asked = Signal()

    def __init__(self, parent: Any = None) -> None:
        super().__init__(parent)
        self.message = QtWidgets.QLabel()
        self.message.setObjectName("SpanledgerMessage")
        self.message.setWordWrap(True)
        self.message.setTextFormat(Qt.TextFormat.PlainText)
        self.message.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.bar = QtWidgets.QProgressBar()
        self.bar.setObjectName("SpanledgerProgress")
        self.bar.setRange(0, 100)
        self.stop = QtWidgets.QPushButton(translate("Spanledger", "Stop"))
        self.stop.setObjectName("SpanledgerStop")
        self.stop.clicked.connect(self.cancel_asked)
        row = QtWidgets.QHBoxLayout()
        row.addWidget(self.bar, 1)
        row.addWidget(self.stop)
        layout = QtWidgets.QVBoxLayout(self)
        layout.setContentsMargins(6, 2, 6, 4)
        layout.addWidget(self.message)
        layout.addLayout(row)
        self.end()

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
