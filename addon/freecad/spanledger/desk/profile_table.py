"""The table of sections to pick from, with a filter above it."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from analysis_core.checking.offers import Candidate
from analysis_core.units import DisplayUnits

from ..present.profiles import COLUMNS, QUANTITIES, ProfileRow, fitting, kinds_of, profile_rows
from ..qt import Qt, QtCore, QtWidgets, Signal
from ..texts import tr, translate
from .fields import entry


class ProfileModel(QtCore.QAbstractTableModel):
    """Rows as they are filtered and sorted; a thousand of them must not be widgets."""

    def __init__(self, parent: Any = None) -> None:
        super().__init__(parent)
        self.rows: list[ProfileRow] = []
        self._heads = [tr(words) for words in COLUMNS]
        self._column, self._descending = 5, False

    def set_rows(self, rows: Sequence[ProfileRow], units: DisplayUnits) -> None:
        """Show these rows."""
        self.beginResetModel()
        self.rows = list(rows)
        symbols = ["kg/m" if q == "mass per length" else q and units.symbol(q) for q in QUANTITIES]
        self._heads = [
            f"{tr(words)}\n{symbol}" if symbol else tr(words)
            for words, symbol in zip(COLUMNS, symbols, strict=True)
        ]
        self._arrange()
        self.endResetModel()

    def rowCount(self, parent: Any = QtCore.QModelIndex()) -> int:  # noqa: B008, N802
        return 0 if parent.isValid() else len(self.rows)

    def columnCount(self, _parent: Any = None) -> int:  # noqa: N802
        return len(COLUMNS)

    def data(self, index: Any, role: int = int(Qt.ItemDataRole.DisplayRole)) -> Any:
        if role == Qt.ItemDataRole.TextAlignmentRole and index.column() >= 3:
            return int(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
        if role == Qt.ItemDataRole.DisplayRole:
            return self.rows[index.row()].texts[index.column()]
        return None

    def headerData(self, section: int, orientation: Any, role: int = 0) -> Any:  # noqa: N802
        if orientation == Qt.Orientation.Horizontal and role == Qt.ItemDataRole.DisplayRole:
            return self._heads[section]
        return None

    def sort(self, column: int, order: Any = Qt.SortOrder.AscendingOrder) -> None:
        """Sort by a column; called by the head of the table."""
        self._column, self._descending = column, order == Qt.SortOrder.DescendingOrder
        self.layoutAboutToBeChanged.emit()
        self._arrange()
        self.layoutChanged.emit()

    def _arrange(self) -> None:
        self.rows.sort(key=lambda row: row.order[self._column], reverse=self._descending)


class ProfileTable(QtWidgets.QWidget):
    """Filter and kind above, sections below."""

    picked = Signal(object)

    def __init__(self, parent: Any = None) -> None:
        super().__init__(parent)
        self._kinds: list[str] | None = None
        self._rows: list[ProfileRow] = []
        self._units: DisplayUnits | None = None
        self.words = entry(
            "SpanledgerProfileFilter", hint=translate("Spanledger", "Name, kind or source"),
            tip=translate("Spanledger", "Show only sections with all of these words"),
        )  # fmt: skip
        self.words.setClearButtonEnabled(True)
        self.words.setAccessibleName(translate("Spanledger", "Filter of the sections"))
        self.kind = QtWidgets.QComboBox()
        self.kind.setObjectName("SpanledgerProfileKind")
        self.kind.setAccessibleName(translate("Spanledger", "Kind of section"))
        self.kind.setToolTip(translate("Spanledger", "Show only sections of this kind"))
        self.model = ProfileModel(self)
        self.tree = QtWidgets.QTreeView()
        self.tree.setObjectName("SpanledgerProfiles")
        self.tree.setModel(self.model)
        self.tree.setRootIsDecorated(False)
        self.tree.setUniformRowHeights(True)
        self.tree.setAllColumnsShowFocus(True)
        self.tree.setAlternatingRowColors(True)
        self.tree.setSortingEnabled(True)
        self.tree.sortByColumn(5, Qt.SortOrder.AscendingOrder)
        self.tree.setAccessibleName(translate("Spanledger", "Sections to pick from"))
        self.count = QtWidgets.QLabel()
        self.count.setObjectName("SpanledgerProfileCount")
        top = QtWidgets.QHBoxLayout()
        top.addWidget(self.words, 1)
        top.addWidget(self.kind)
        layout = QtWidgets.QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.addLayout(top)
        layout.addWidget(self.tree, 1)
        layout.addWidget(self.count)
        self.words.textChanged.connect(lambda _text: self._filter())
        self.kind.currentIndexChanged.connect(lambda _index: self._filter())
        self.tree.selectionModel().currentChanged.connect(
            lambda _current, _old: self.picked.emit(self.candidate())
        )

    def show_candidates(
        self, candidates: Sequence[Candidate], density: float, units: DisplayUnits
    ) -> None:
        """Show these sections; ``density`` of the members they are for, kg/m³."""
        self._rows, self._units = profile_rows(candidates, density, units), units
        kinds = kinds_of(candidates)
        if kinds != self._kinds:
            kept, self._kinds = self.kind.currentData(), kinds
            self.kind.blockSignals(True)
            self.kind.clear()
            self.kind.addItem(translate("Spanledger", "all kinds"), "")
            for kind in kinds:
                self.kind.addItem(kind, kind)
            self.kind.setCurrentIndex(max(self.kind.findData(kept), 0))
            self.kind.blockSignals(False)
        self._filter()
        for column in range(len(COLUMNS)):
            self.tree.resizeColumnToContents(column)

    def candidate(self) -> Candidate | None:
        """Return the section that is picked."""
        index = self.tree.currentIndex()
        return self.model.rows[index.row()].candidate if index.isValid() else None

    def pick(self, name: str) -> None:
        """Pick a section by its name, where it is shown."""
        for number, row in enumerate(self.model.rows):
            if row.candidate.name == name:
                index = self.model.index(number, 0)
                self.tree.setCurrentIndex(index)
                self.tree.scrollTo(index, QtWidgets.QAbstractItemView.ScrollHint.PositionAtCenter)
                return

    def _filter(self) -> None:
        if self._units is None:
            return
        kept = self.candidate()
        shown = fitting(self._rows, self.words.text(), self.kind.currentData() or "")
        self.model.set_rows(shown, self._units)
        text = translate("Spanledger", "{shown} of {total} sections")
        self.count.setText(text.format(shown=len(shown), total=len(self._rows)))
        if kept is not None:
            self.pick(kept.name)
        self.picked.emit(self.candidate())
