"""The dock with the list of lines by storey: filter, sort, choose."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from analysis_core.units import DisplayUnits

from ..present.listing import COLUMNS, GLYPHS, QUANTITY_OF, STATES, Group, Row, grouped
from ..qt import Qt, QtCore, QtWidgets, Signal
from ..texts import tr, translate


class LineModel(QtCore.QAbstractItemModel):
    """Two levels: storeys, and their lines."""

    def __init__(self, parent: Any = None) -> None:
        super().__init__(parent)
        self._rows: list[Row] = []
        self._groups: list[Group] = []
        self._units: DisplayUnits | None = None
        self._words, self._states = "", tuple(STATES)
        self._column, self._descending = 0, False

    def set_rows(self, rows: list[Row], units: DisplayUnits) -> None:
        """Show these lines; where they stand where they stood, only those that differ change."""
        if units != self._units:
            self._units = units
            self.headerDataChanged.emit(Qt.Orientation.Horizontal, 0, len(COLUMNS) - 1)
        self._rows = rows
        groups = self._grouped()
        if _places(groups) == _places(self._groups):
            self._replace(groups)
        else:
            self._reset(groups)

    def filter(self, words: str, states: Sequence[str]) -> None:
        """Show only lines with these words, in these states."""
        self._words, self._states = words, tuple(states)
        self._reset(self._grouped())

    def sort(self, column: int, order: Any = Qt.SortOrder.AscendingOrder) -> None:
        """Sort within each storey; called by the view's header."""
        self._column, self._descending = column, order == Qt.SortOrder.DescendingOrder
        self._reset(self._grouped())

    def line_at(self, index: Any) -> int | None:
        """Return the number of the line at an index, None for a storey."""
        if not index.isValid() or not index.internalId():
            return None
        return self._groups[index.internalId() - 1].rows[index.row()].index

    def index_of(self, line: int) -> Any:
        """Return the index of a line, an invalid one where the filter hides it."""
        for number, group in enumerate(self._groups):
            for row, shown in enumerate(group.rows):
                if shown.index == line:
                    return self.createIndex(row, 0, number + 1)
        return QtCore.QModelIndex()

    def shown(self) -> int:
        """Return how many lines pass the filter."""
        return sum(len(group.rows) for group in self._groups)

    # What Qt asks; an internal id of 0 is a storey, n + 1 a line of storey n.
    def index(self, row: int, column: int, parent: Any = QtCore.QModelIndex()) -> Any:  # noqa: B008
        if not self.hasIndex(row, column, parent):
            return QtCore.QModelIndex()
        return self.createIndex(row, column, parent.row() + 1 if parent.isValid() else 0)

    def parent(self, index: Any = None) -> Any:
        if index is None:
            return super().parent()
        if not index.isValid() or not index.internalId():
            return QtCore.QModelIndex()
        return self.createIndex(index.internalId() - 1, 0, 0)

    def rowCount(self, parent: Any = QtCore.QModelIndex()) -> int:  # noqa: B008, N802
        if not parent.isValid():
            return len(self._groups)
        if parent.internalId() or parent.column() > 0:
            return 0
        return len(self._groups[parent.row()].rows)

    def columnCount(self, _parent: Any = None) -> int:  # noqa: N802
        return len(COLUMNS)

    def data(self, index: Any, role: int = int(Qt.ItemDataRole.DisplayRole)) -> Any:
        column = index.column()
        if role == Qt.ItemDataRole.TextAlignmentRole and column >= 2:
            return int(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
        if role not in (Qt.ItemDataRole.DisplayRole, Qt.ItemDataRole.ToolTipRole):
            return None
        if not index.internalId():
            group = self._groups[index.row()]
            return f"{group.storey} ({len(group.rows)})" if column == 0 else None
        row = self._groups[index.internalId() - 1].rows[index.row()]
        if role == Qt.ItemDataRole.ToolTipRole and column == 1 and row.reason:
            return row.reason
        if column == 1:
            return f"{GLYPHS[row.state]} {tr(row.state)}"
        return row.texts[column]

    def headerData(self, section: int, orientation: Any, role: int = 0) -> Any:  # noqa: N802
        if orientation != Qt.Orientation.Horizontal or role != Qt.ItemDataRole.DisplayRole:
            return None
        quantity = QUANTITY_OF[section]
        unit = f"\n{self._units.symbol(quantity)}" if self._units and quantity else ""
        return tr(COLUMNS[section]) + unit

    def _grouped(self) -> list[Group]:
        return grouped(
            self._rows, words=self._words, states=self._states, column=self._column,
            descending=self._descending,
        )  # fmt: skip

    def _reset(self, groups: list[Group]) -> None:
        self.beginResetModel()
        self._groups = groups
        self.endResetModel()

    def _replace(self, groups: list[Group]) -> None:
        """Take other rows in the same places."""
        before, self._groups = self._groups, groups
        last = len(COLUMNS) - 1
        for number, (old, new) in enumerate(zip(before, groups, strict=True), start=1):
            for row, (was, now) in enumerate(zip(old.rows, new.rows, strict=True)):
                if was != now:
                    self.dataChanged.emit(
                        self.createIndex(row, 0, number), self.createIndex(row, last, number)
                    )


def _places(groups: list[Group]) -> list[tuple[str, list[int]]]:
    """Which lines stand where."""
    return [(group.storey, [row.index for row in group.rows]) for group in groups]


class LineList(QtWidgets.QWidget):
    """Filter above, list below."""

    chosen = Signal(int)

    def __init__(self, parent: Any = None) -> None:
        super().__init__(parent)
        self.words = QtWidgets.QLineEdit()
        self.words.setObjectName("SpanledgerFilter")
        self.words.setPlaceholderText(translate("Spanledger", "Mark, storey, state or GlobalId"))
        self.words.setClearButtonEnabled(True)
        self.words.setToolTip(translate("Spanledger", "Show only lines with all of these words"))
        self.state = QtWidgets.QComboBox()
        self.state.setObjectName("SpanledgerStates")
        self.state.addItem(translate("Spanledger", "all states"), list(STATES))
        for state in STATES:
            self.state.addItem(f"{GLYPHS[state]} {tr(state)}", [state])
        self.count = QtWidgets.QLabel()
        self.count.setObjectName("SpanledgerCount")
        self.model = LineModel(self)
        self.tree = QtWidgets.QTreeView()
        self.tree.setObjectName("SpanledgerLines")
        self.tree.setModel(self.model)
        self.tree.setUniformRowHeights(True)  # thousands of lines stay quick
        self.tree.setAllColumnsShowFocus(True)
        self.tree.setAlternatingRowColors(True)
        self.tree.setIndentation(12)
        self.tree.header().setResizeContentsPrecision(60)  # rows looked at for a column's width
        self.tree.setSortingEnabled(True)
        self.tree.sortByColumn(0, Qt.SortOrder.AscendingOrder)
        self.tree.setAccessibleName(translate("Spanledger", "Lines by storey"))
        top = QtWidgets.QHBoxLayout()
        top.addWidget(self.words, 1)
        top.addWidget(self.state)
        layout = QtWidgets.QVBoxLayout(self)
        layout.setContentsMargins(4, 4, 4, 4)
        layout.addLayout(top)
        layout.addWidget(self.tree, 1)
        layout.addWidget(self.count)
        self.words.textChanged.connect(self._filter)
        self.state.currentIndexChanged.connect(self._filter)
        self.tree.selectionModel().currentChanged.connect(self._current_changed)
        self.model.modelReset.connect(self._after_reset)
        self._quiet = False
        self._line: int | None = None
        self._shown: list[Row] = []
        self._units: DisplayUnits | None = None

    def show_rows(self, rows: list[Row], units: DisplayUnits) -> None:
        """Show these lines."""
        if rows == self._shown and units == self._units:
            return
        widest = _widest(self._shown) if units == self._units else ()
        self._shown, self._units = rows, units
        self.model.set_rows(rows, units)
        for column, length in enumerate(_widest(rows)):
            if not widest or length > widest[column]:
                self.tree.resizeColumnToContents(column)

    def choose(self, line: int | None) -> None:
        """Show a line as chosen, without telling anybody."""
        self._line = line
        self._quiet = True
        index = self.model.index_of(line) if line is not None else QtCore.QModelIndex()
        self.tree.setCurrentIndex(index)
        if index.isValid():
            self.tree.scrollTo(index)
        self._quiet = False

    def _filter(self, *_changed: object) -> None:
        self.model.filter(self.words.text(), self.state.currentData() or STATES)

    def _current_changed(self, current: Any, _previous: Any) -> None:
        line = self.model.line_at(current)
        if line is not None and not self._quiet:
            self._line = line
            self.chosen.emit(line)

    def _after_reset(self) -> None:
        self.tree.expandAll()
        text = translate("Spanledger", "{shown} of {total} lines")
        self.count.setText(text.format(shown=self.model.shown(), total=len(self._shown)))
        if self._line is not None:
            self.choose(self._line)


def _widest(rows: Sequence[Row]) -> tuple[int, ...]:
    """How many characters the longest text of each column has."""
    texts = [row.texts for row in rows]
    return tuple(max(map(len, column)) for column in zip(*texts, strict=True))
