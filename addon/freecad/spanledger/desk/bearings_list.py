"""The list of what columns, walls and nodes receive."""

from __future__ import annotations

from typing import Any

from analysis_core.units import DisplayUnits

from ..present.load_path import BearingRow
from ..qt import Qt, QtWidgets, Signal
from ..texts import translate


class BearingsList(QtWidgets.QWidget):
    """Filter above, elements below; Enter or a double click shows the line that bears there."""

    wanted = Signal(object)

    def __init__(self, parent: Any = None) -> None:
        super().__init__(parent)
        self._rows: list[BearingRow] = []
        self.words = QtWidgets.QLineEdit()
        self.words.setObjectName("SpanledgerBearingFilter")
        self.words.setClearButtonEnabled(True)
        self.words.setPlaceholderText(translate("Spanledger", "Element, line or GlobalId"))
        self.tree = QtWidgets.QTreeWidget()
        self.tree.setObjectName("SpanledgerBearings")
        self.tree.setRootIsDecorated(False)
        self.tree.setUniformRowHeights(True)
        self.tree.setAlternatingRowColors(True)
        self.tree.setSortingEnabled(True)
        self.tree.sortByColumn(1, Qt.SortOrder.DescendingOrder)
        self.tree.setAccessibleName(translate("Spanledger", "Reactions by supporting element"))
        layout = QtWidgets.QVBoxLayout(self)
        layout.setContentsMargins(4, 4, 4, 4)
        layout.addWidget(self.words)
        layout.addWidget(self.tree, 1)
        self.words.textChanged.connect(lambda _text: self._fill())
        self.tree.itemActivated.connect(lambda item, _column: self._show(item))

    def show_rows(self, rows: list[BearingRow], units: DisplayUnits) -> None:
        """Show these elements."""
        if rows == self._rows:
            return
        self._rows = rows
        force = units.symbol("force")
        self.tree.setHeaderLabels(
            [
                translate("Spanledger", "Element"),
                translate("Spanledger", "Largest, {unit}").format(unit=force),
                translate("Spanledger", "Smallest, {unit}").format(unit=force),
                translate("Spanledger", "Lines"),
            ]
        )
        self._fill()

    def _fill(self) -> None:
        wanted = self.words.text().lower().split()
        self.tree.setSortingEnabled(False)
        self.tree.clear()
        items = []
        for number, row in enumerate(self._rows):
            if all(word in row.search for word in wanted):
                item = _Item(list(row.texts))
                item.setData(0, Qt.ItemDataRole.UserRole, number)
                item.setToolTip(0, row.detail)
                for column, value in ((1, row.values[0]), (2, row.values[1])):
                    item.setData(column, _VALUE, value)
                    item.setTextAlignment(column, int(Qt.AlignmentFlag.AlignRight))
                items.append(item)
        self.tree.addTopLevelItems(items)
        self.tree.setSortingEnabled(True)
        for column in range(3):
            self.tree.resizeColumnToContents(column)

    def _show(self, item: Any) -> None:
        self.wanted.emit(self._rows[item.data(0, Qt.ItemDataRole.UserRole)])


_VALUE = int(Qt.ItemDataRole.UserRole) + 1


class _Item(QtWidgets.QTreeWidgetItem):
    """Sorts numbers as numbers."""

    def __lt__(self, other: Any) -> bool:
        column = self.treeWidget().sortColumn()
        mine, its = self.data(column, _VALUE), other.data(column, _VALUE)
        if mine is None or its is None:
            return self.text(column) < other.text(column)
        return mine < its
