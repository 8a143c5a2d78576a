"""The dock that shows a distribution row by row, as one would write it down."""

from __future__ import annotations

from typing import Any

from ..present.distribution import ORDER_WORDS, ORDERS, Recorded, Step
from ..qt import Qt, QtWidgets, Signal
from ..texts import tr, translate
from .fields import button, choice


class RecordDesk(QtWidgets.QWidget):
    """Buttons to step with above, the table below."""

    released = Signal(object)  # joints
    order_changed = Signal(str)

    def __init__(self, parent: Any = None) -> None:
        super().__init__(parent)
        self._recorded: Recorded | None = None
        self._step = 0
        self.first = button("SpanledgerRecordFirst", "|◀", translate("Spanledger", "Start again"))
        self.back = button("SpanledgerRecordBack", "◀", translate("Spanledger", "One step back"))
        self.next = button("SpanledgerRecordNext", "▶", translate("Spanledger", "Next step"))
        self.last = button("SpanledgerRecordLast", "▶|", translate("Spanledger", "To the end"))
        self.order = choice("SpanledgerRecordOrder", [ORDER_WORDS[order] for order in ORDERS])
        self.order.setToolTip(translate("Spanledger", "The order in which joints are released"))
        self.words = QtWidgets.QLabel()
        self.words.setObjectName("SpanledgerRecordWords")
        self.words.setWordWrap(True)
        self.table = QtWidgets.QTableWidget()
        self.table.setObjectName("SpanledgerRecordTable")
        self.table.setEditTriggers(QtWidgets.QAbstractItemView.EditTrigger.NoEditTriggers)
        self.table.setAccessibleName(translate("Spanledger", "Distribution table"))
        self.notes = QtWidgets.QLabel()
        self.notes.setObjectName("SpanledgerRecordNotes")
        self.notes.setWordWrap(True)
        top = QtWidgets.QHBoxLayout()
        for widget in (self.first, self.back, self.next, self.last):
            widget.setMaximumWidth(44)
            top.addWidget(widget)
        top.addWidget(self.order)
        top.addWidget(self.words, 1)
        layout = QtWidgets.QVBoxLayout(self)
        layout.setContentsMargins(4, 4, 4, 4)
        layout.addLayout(top)
        layout.addWidget(self.table, 1)
        layout.addWidget(self.notes)
        self.first.clicked.connect(lambda: self.go_to(0))
        self.back.clicked.connect(lambda: self.go_to(self._step - 1))
        self.next.clicked.connect(lambda: self.go_to(self._step + 1))
        self.last.clicked.connect(lambda: self.go_to(len(self._steps()) - 1))
        self.order.currentIndexChanged.connect(lambda index: self.order_changed.emit(ORDERS[index]))

    def chosen_order(self) -> str:
        """Return the order in which joints are to be released."""
        return ORDERS[self.order.currentIndex()]

    def show_record(self, shown: Recorded | str) -> None:
        """Show a distribution, whole at first; or why there is none."""
        self._recorded = shown if isinstance(shown, Recorded) else None
        self.table.setRowCount(0)
        self.table.setColumnCount(0)
        self.notes.setText("")
        self.words.setText("" if self._recorded else str(shown))
        self._step = len(self._steps()) - 1
        self._fill()

    def go_to(self, step: int) -> None:
        """Show the table as it is after a step."""
        steps = self._steps()
        if steps:
            self._step = min(max(step, 0), len(steps) - 1)
            self._fill()
            self.released.emit(steps[self._step].joints)

    def keyPressEvent(self, event: Any) -> None:  # noqa: N802  # Qt's name
        step = {Qt.Key.Key_PageUp: -1, Qt.Key.Key_PageDown: 1}.get(event.key())
        if step is None:
            super().keyPressEvent(event)
        else:
            self.go_to(self._step + step)

    def _steps(self) -> tuple[Step, ...]:
        return self._recorded.steps if self._recorded else ()

    def _fill(self) -> None:
        steps = self._steps()
        for widget, on in (
            (self.first, self._step > 0), (self.back, self._step > 0),
            (self.next, self._step < len(steps) - 1), (self.last, self._step < len(steps) - 1),
        ):  # fmt: skip
            widget.setEnabled(bool(steps) and on)
        if not steps or self._recorded is None:
            return
        step = steps[self._step]
        table = self._recorded.tables[step.table]
        self.words.setText(step.words)
        self.table.setColumnCount(len(table.columns))
        self.table.setHorizontalHeaderLabels(list(table.columns))
        self.table.setRowCount(step.rows)
        self.table.setVerticalHeaderLabels([self._name(row) for row in table.rows[: step.rows]])
        for number, row in enumerate(table.rows[: step.rows]):
            for column, text in enumerate(row.cells):
                self.table.setItem(number, column, _cell(text, number >= step.rows - step.new))
        self.table.resizeColumnsToContents()
        self.table.scrollToBottom()
        notes = [*table.notes] if step.rows == len(table.rows) else []
        if self._step == len(steps) - 1:
            notes.append(self._recorded.closing)
        self.notes.setText(" ".join(note if note.endswith(".") else f"{note}." for note in notes))

    def _name(self, row: Any) -> str:
        """Return the name of a row; the first row of moments states the unit of them all."""
        unit = f", {self._recorded.unit}" if row.kind == "held" and self._recorded else ""
        return tr(row.name) + unit


def _cell(text: str, new: bool) -> Any:
    item = QtWidgets.QTableWidgetItem(text)
    item.setTextAlignment(int(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter))
    font = item.font()
    font.setBold(new)  # what the last step wrote
    item.setFont(font)
    return item
