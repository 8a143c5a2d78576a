"""Progress, a button to stop, and the last message, below the list of lines."""

from __future__ import annotations

from typing import Any

from ..qt import Qt, QtCore, QtWidgets, Signal
from ..texts import tr, translate

PATIENCE_MS = 300


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
        self._waiting = QtCore.QTimer(self)
        self._waiting.setSingleShot(True)
        self._waiting.setInterval(PATIENCE_MS)
        self._waiting.timeout.connect(self._appear)
        self.end()

    def begin(self) -> None:
        """Work began; what is over within PATIENCE_MS is shown by its result alone.

        Most edits are.  A bar that comes and goes would make the docks lay themselves out, and
        paint the window, twice over.
        """
        self._waiting.start()
        self.bar.setValue(0)

    def show_progress(self, step: str, part: float) -> None:
        """Show how far it is."""
        if not self.bar.isHidden():
            self.bar.setFormat(f"{tr(step)} %p %")
            self.bar.setValue(round(100.0 * part))

    def end(self) -> None:
        """Show that nothing runs."""
        self._waiting.stop()
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

    def _appear(self) -> None:
        self.clear()
        self.bar.show()
        self.stop.show()
