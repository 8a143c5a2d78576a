"""The list of findings, with "show me"."""

from __future__ import annotations

from typing import Any

from ..present.findings import FindingRow, counts_words, matching
from ..qt import Qt, QtWidgets, Signal
from ..texts import tr, translate
from .fields import button

MOST_SHOWN = 2000


class FindingsList(QtWidgets.QWidget):
    """Filter above, findings below; Enter or a double click shows what one is about."""

    wanted = Signal(object)

    def __init__(self, parent: Any = None) -> None:
        super().__init__(parent)
        self._rows: list[FindingRow] = []
        self.words = QtWidgets.QLineEdit()
        self.words.setObjectName("SpanledgerFindingFilter")
        self.words.setClearButtonEnabled(True)
        self.words.setPlaceholderText(translate("Spanledger", "Severity, line, words or GlobalId"))
        self.tree = QtWidgets.QTreeWidget()
        self.tree.setObjectName("SpanledgerFindings")
        self.tree.setHeaderLabels(
            [translate("Spanledger", "Severity"), translate("Spanledger", "Line"),
             translate("Spanledger", "What was found")]
        )  # fmt: skip
        self.tree.setRootIsDecorated(False)
        self.tree.setUniformRowHeights(True)
        self.tree.setAlternatingRowColors(True)
        self.tree.setAccessibleName(translate("Spanledger", "Findings"))
        self.message = QtWidgets.QLabel()
        self.message.setObjectName("SpanledgerFindingMessage")
        self.message.setWordWrap(True)
        self.message.setTextFormat(Qt.TextFormat.PlainText)
        self.message.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.count = QtWidgets.QLabel()
        self.count.setObjectName("SpanledgerFindingCount")
        self.show_me = button(
            "SpanledgerShowMe", translate("Spanledger", "Show me"),
            translate("Spanledger", "Choose the line and look at the place in the 3D view"),
        )  # fmt: skip
        self.show_me.setEnabled(False)
        bottom = QtWidgets.QHBoxLayout()
        bottom.addWidget(self.count, 1)
        bottom.addWidget(self.show_me)
        layout = QtWidgets.QVBoxLayout(self)
        layout.setContentsMargins(4, 4, 4, 4)
        layout.addWidget(self.words)
        layout.addWidget(self.tree, 1)
        layout.addWidget(self.message)
        layout.addLayout(bottom)
        self.words.textChanged.connect(lambda _text: self._fill())
        self.tree.currentItemChanged.connect(lambda item, _old: self._current(item))
        self.tree.itemActivated.connect(lambda _item, _column: self._show())
        self.show_me.clicked.connect(self._show)

    def show_rows(self, rows: list[FindingRow]) -> None:
        """Show these findings."""
        if rows != self._rows:
            self._rows = rows
            self._fill()

    def _fill(self) -> None:
        shown = matching(self._rows, self.words.text())
        self.tree.clear()
        for row in shown[:MOST_SHOWN]:
            glyph, _, severity = row.texts[0].partition(" ")
            item = QtWidgets.QTreeWidgetItem([f"{glyph} {tr(severity)}", *row.texts[1:]])
            item.setData(0, Qt.ItemDataRole.UserRole, self._rows.index(row))
            item.setToolTip(2, row.message)
            self.tree.addTopLevelItem(item)
        self.tree.resizeColumnToContents(0)
        self.tree.resizeColumnToContents(1)
        words = counts_words(shown)
        if len(shown) > MOST_SHOWN:
            more = translate("Spanledger", "{words}; the first {most} are listed")
            words = more.format(words=words, most=MOST_SHOWN)
        self.count.setText(words)
        self._current(None)

    def _current(self, item: Any) -> None:
        row = self._row(item)
        self.message.setText(row.message if row else "")
        self.show_me.setEnabled(row is not None)

    def _show(self) -> None:
        row = self._row(self.tree.currentItem())
        if row is not None:
            self.wanted.emit(row)

    def _row(self, item: Any) -> FindingRow | None:
        return None if item is None else self._rows[item.data(0, Qt.ItemDataRole.UserRole)]
