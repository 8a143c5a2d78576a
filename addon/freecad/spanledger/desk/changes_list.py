"""The list of what changed since an earlier revision."""

from __future__ import annotations

from typing import Any

from ..present.changes import ChangeRow
from ..qt import Qt, QtWidgets, Signal
from ..texts import tr, translate


class ChangesList(QtWidgets.QWidget):
    """The changed lines; the unchanged on request."""

    line_wanted = Signal(int)

    def __init__(self, parent: Any = None) -> None:
        super().__init__(parent)
        self._rows: list[ChangeRow] = []
        self.summary = QtWidgets.QLabel()
        self.summary.setObjectName("SpanledgerChangeSummary")
        self.summary.setWordWrap(True)
        self.every = QtWidgets.QCheckBox(translate("Spanledger", "Unchanged lines too"))
        self.every.setObjectName("SpanledgerChangeEvery")
        self.tree = QtWidgets.QTreeWidget()
        self.tree.setObjectName("SpanledgerChanges")
        self.tree.setRootIsDecorated(False)
        self.tree.setUniformRowHeights(True)
        self.tree.setAlternatingRowColors(True)
        self.tree.setHeaderLabels(
            [translate("Spanledger", "State"), translate("Spanledger", "Line"),
             translate("Spanledger", "Largest"), translate("Spanledger", "Reasons")]
        )  # fmt: skip
        layout = QtWidgets.QVBoxLayout(self)
        layout.setContentsMargins(4, 4, 4, 4)
        layout.addWidget(self.summary)
        layout.addWidget(self.tree, 1)
        layout.addWidget(self.every)
        self.every.toggled.connect(lambda _on: self._fill())
        self.tree.currentItemChanged.connect(lambda item, _old: self._choose(item))

    def show_rows(self, rows: list[ChangeRow], summary: str) -> None:
        """Show these changes."""
        self._rows = rows
        self.summary.setText(summary)
        self._fill()

    def _fill(self) -> None:
        self.tree.clear()
        for number, row in enumerate(self._rows):
            if row.unchanged and not self.every.isChecked():
                continue
            glyph, _, state = row.texts[0].partition(" ")
            item = QtWidgets.QTreeWidgetItem([f"{glyph} {tr(state)}", *row.texts[1:]])
            item.setData(0, Qt.ItemDataRole.UserRole, number)
            for column in range(4):
                item.setToolTip(column, row.detail)
            self.tree.addTopLevelItem(item)
        for column in range(3):
            self.tree.resizeColumnToContents(column)

    def _choose(self, item: Any) -> None:
        if item is not None:
            line = self._rows[item.data(0, Qt.ItemDataRole.UserRole)].line
            if line is not None:
                self.line_wanted.emit(line)
