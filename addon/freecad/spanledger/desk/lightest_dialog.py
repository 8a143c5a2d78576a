"""The window in which the lightest section that suffices is sought and applied."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from analysis_core.checking.choosing import Choice
from analysis_core.checking.offers import JOB, MODEL
from analysis_core.units import DisplayUnits

from ..present.choices import COLUMNS, EFFECT_COLUMNS, ChoiceView, choice_view, total_words
from ..present.profiles import HOST, kinds_of
from ..present.scopes import Scope
from ..profile_shelf import Shelf
from ..qt import Qt, QtGui, QtWidgets, Signal
from ..texts import tr, translate
from .fields import button, entry


class LightestDialog(QtWidgets.QDialog):
    """Stays open beside FreeCAD's window; nothing is changed before "Apply" is pressed."""

    sought = Signal(object, str, object)
    """Scope, source of sections, patterns."""
    stop_asked = Signal()
    applied = Signal(object)
    """The choices."""
    progressed = Signal(str, float)
    """May be emitted from another thread."""
    stopped = Signal(str)
    """The search ended without a result, and why."""

    def __init__(
        self, scopes: Sequence[Scope], shelf: Shelf, units: DisplayUnits, parent: Any = None
    ) -> None:
        super().__init__(parent)
        self.setObjectName("SpanledgerLightest")
        self.setWindowTitle(translate("Spanledger", "Lightest section"))
        self._scopes, self._shelf, self._units = scopes, shelf, units
        self._choices: Sequence[Choice] = ()
        self._views: list[ChoiceView] = []
        self._make_fields()
        self._make_results()
        self._lay_out()
        self._connect()
        self._show_kinds()
        self._show_running(False)

    def show_choices(self, choices: Sequence[Choice]) -> None:
        """Show what was found."""
        self._choices = choices
        self._views = [choice_view(choice, self._units) for choice in choices]
        self._show_running(False)
        self.groups.blockSignals(True)
        self.groups.clear()
        for view, choice in zip(self._views, choices, strict=True):
            mark = "●" if view.changes else "○"
            item = QtWidgets.QListWidgetItem(f"{mark} {view.title}")
            item.setToolTip(", ".join(choice.marks))
            self.groups.addItem(item)
        self.groups.blockSignals(False)
        first = next((i for i, view in enumerate(self._views) if view.changes), 0)
        self.groups.setCurrentRow(first)
        self.groups.setVisible(len(self._views) > 1)
        self._show_group(first)
        self.message.setText(total_words(choices) if len(choices) > 1 else "")
        self.apply.setEnabled(any(view.changes for view in self._views))
        if self.apply.isEnabled():
            self.apply.setFocus()

    # Parts.
    def _make_fields(self) -> None:
        self.scope = QtWidgets.QComboBox()
        self.scope.setObjectName("SpanledgerLightestScope")
        self.scope.setAccessibleName(translate("Spanledger", "Lines to choose for"))
        for scope in self._scopes:
            self.scope.addItem(scope.words)
        self.source = QtWidgets.QComboBox()
        self.source.setObjectName("SpanledgerLightestSource")
        self.source.setAccessibleName(translate("Spanledger", "Sections to choose from"))
        for key, words in (
            (MODEL, translate("Spanledger", "profiles of the model ({count})")),
            (JOB, translate("Spanledger", "section table of the job file ({count})")),
            (HOST, translate("Spanledger", "profiles that FreeCAD has ({count})")),
        ):
            count = len(self._shelf.offers[key].candidates)
            if count:
                self.source.addItem(words.format(count=count), key)
        self.kinds = QtWidgets.QListWidget()
        self.kinds.setObjectName("SpanledgerLightestKinds")
        self.kinds.setAccessibleName(translate("Spanledger", "Kinds of section to choose among"))
        self.kinds.setToolTip(
            translate(
                "Spanledger",
                "None ticked: whatever is made of the material of the lines, as far as names and "
                "shapes tell",
            )
        )
        self.kinds.setFlow(QtWidgets.QListView.Flow.LeftToRight)
        self.kinds.setWrapping(True)
        self.kinds.setResizeMode(QtWidgets.QListView.ResizeMode.Adjust)
        self.kinds.setSpacing(2)
        self.kinds.setMaximumHeight(84)
        self.names = entry(
            "SpanledgerLightestOnly", hint=translate("Spanledger", "all names; or IPE*, HEA*"),
            tip=translate("Spanledger", "Only sections of these names; * stands for anything"),
        )  # fmt: skip
        self.names.setAccessibleName(translate("Spanledger", "Names of sections"))
        self.notes = QtWidgets.QLabel()
        self.notes.setObjectName("SpanledgerLightestNotes")
        self.notes.setWordWrap(True)
        self.find = button(
            "SpanledgerFindLightest", translate("Spanledger", "Find"),
            translate("Spanledger", "Tries the sections from the lightest on; changes nothing"),
        )  # fmt: skip
        self.find.setDefault(True)
        self.find.setSizePolicy(
            QtWidgets.QSizePolicy.Policy.Maximum, QtWidgets.QSizePolicy.Policy.Fixed
        )
        self.stop = button("SpanledgerStopLightest", translate("Spanledger", "Stop"))
        self.bar = QtWidgets.QProgressBar()
        self.bar.setObjectName("SpanledgerLightestProgress")
        self.bar.setRange(0, 100)

    def _make_results(self) -> None:
        self.groups = QtWidgets.QListWidget()
        self.groups.setObjectName("SpanledgerLightestGroups")
        self.groups.setAccessibleName(translate("Spanledger", "Lines that get one section"))
        self.groups.setMaximumWidth(180)
        self.groups.setTextElideMode(Qt.TextElideMode.ElideRight)
        self.groups.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.groups.hide()
        self.summary = _words("SpanledgerLightestSummary")
        font = self.summary.font()
        font.setBold(True)
        self.summary.setFont(font)
        self.candidates = _tree(
            "SpanledgerCandidates", translate("Spanledger", "Sections that were tried"), COLUMNS
        )
        self.effects = _tree(
            "SpanledgerEffects", translate("Spanledger", "What it does to the lines"),
            EFFECT_COLUMNS,
        )  # fmt: skip
        self.effects.header().setStretchLastSection(False)
        self.warning = _words("SpanledgerLightestWarning")
        self.message = _words("SpanledgerLightestMessage")
        self.apply = button(
            "SpanledgerApplyLightest", translate("Spanledger", "Apply"),
            translate("Spanledger", "Solves the lines with the sections found; can be undone"),
        )  # fmt: skip
        self.apply.setEnabled(False)
        self.close_it = button("SpanledgerLightestClose", translate("Spanledger", "Close"))

    def _lay_out(self) -> None:
        form = QtWidgets.QFormLayout()
        form.addRow(translate("Spanledger", "For"), self.scope)
        form.addRow(translate("Spanledger", "From"), self.source)
        self.kinds_label = QtWidgets.QLabel(translate("Spanledger", "Kinds"))
        form.addRow(self.kinds_label, self.kinds)
        form.addRow(translate("Spanledger", "Names"), self.names)
        running = QtWidgets.QHBoxLayout()
        running.addWidget(self.find)
        running.addWidget(self.bar, 1)
        running.addWidget(self.stop)
        running.addStretch(0)
        lists = QtWidgets.QVBoxLayout()
        lists.addWidget(self.summary)
        lists.addWidget(self.candidates, 3)
        self.effects_label = QtWidgets.QLabel(translate("Spanledger", "What it does to the lines"))
        lists.addWidget(self.effects_label)
        lists.addWidget(self.effects, 2)
        lists.addWidget(self.warning)
        both = QtWidgets.QHBoxLayout()
        both.addWidget(self.groups)
        both.addLayout(lists, 1)
        buttons = QtWidgets.QHBoxLayout()
        buttons.addWidget(self.message, 1)
        buttons.addWidget(self.apply)
        buttons.addWidget(self.close_it)
        layout = QtWidgets.QVBoxLayout(self)
        layout.addLayout(form)
        layout.addWidget(self.notes)
        layout.addLayout(running)
        layout.addLayout(both, 1)
        layout.addLayout(buttons)
        self.resize(940, 760)

    def _connect(self) -> None:
        self.source.currentIndexChanged.connect(lambda _index: self._show_kinds())
        self.groups.currentRowChanged.connect(self._show_group)
        self.find.clicked.connect(self._seek)
        self.stop.clicked.connect(self.stop_asked)
        self.apply.clicked.connect(self._apply)
        self.close_it.clicked.connect(self.reject)
        self.finished.connect(lambda _result: self.stop.isEnabled() and self.stop_asked.emit())
        self.progressed.connect(self._show_progress)
        self.stopped.connect(self._show_stopped)

    # What is shown.
    def _show_kinds(self) -> None:
        offer = self._shelf.offers.get(self.source.currentData())
        kinds = kinds_of(offer.candidates) if offer is not None else []
        self.kinds.clear()
        for kind in kinds:
            item = QtWidgets.QListWidgetItem(kind)
            item.setFlags(item.flags() | Qt.ItemFlag.ItemIsUserCheckable)
            item.setCheckState(Qt.CheckState.Unchecked)
            self.kinds.addItem(item)
        self.kinds.setVisible(bool(kinds))
        self.kinds_label.setVisible(bool(kinds))
        told = offer.findings if offer is not None else ()
        if self.source.currentData() == HOST:
            told = self._shelf.findings
        self.notes.setText("\n".join(finding.message for finding in told))
        self.notes.setVisible(bool(told))

    def _show_running(self, on: bool) -> None:
        self.bar.setVisible(on)
        self.stop.setVisible(on)
        self.stop.setEnabled(on)
        self.find.setEnabled(not on and self.source.count() > 0)
        for field in (self.scope, self.source, self.kinds, self.names):
            field.setEnabled(not on)

    def _show_progress(self, step: str, part: float) -> None:
        self.bar.setFormat(f"{tr(step)} %p %")
        self.bar.setValue(round(100.0 * part))

    def _show_stopped(self, why: str) -> None:
        self._show_running(False)
        self.message.setText(why)

    def _show_group(self, number: int) -> None:
        if not 0 <= number < len(self._views):
            return
        view = self._views[number]
        self.summary.setText(view.summary)
        self.candidates.clear()
        for row in view.rows:
            item = QtWidgets.QTreeWidgetItem([*row.texts])
            for column in (2, 3, 4):
                item.setTextAlignment(column, _RIGHT)
            for column in range(len(COLUMNS)):
                item.setToolTip(column, row.reason)
                if row.suits:
                    item.setFont(column, _bold(item.font(column)))
            self.candidates.addTopLevelItem(item)
        self.effects.clear()
        for effect in view.effects:
            item = QtWidgets.QTreeWidgetItem([*effect.texts])
            for column in range(1, len(EFFECT_COLUMNS)):
                item.setTextAlignment(column, _RIGHT)
                if effect.too_much:
                    item.setFont(column, _bold(item.font(column)))
            self.effects.addTopLevelItem(item)
        shown = bool(view.effects)
        self.effects.setVisible(shown)
        self.effects_label.setVisible(shown)
        self.warning.setText(f"⚠ {view.warning}" if view.warning else "")
        for tree in (self.candidates, self.effects):
            for column in range(tree.columnCount()):
                tree.resizeColumnToContents(column)
        if self.candidates.topLevelItemCount():
            self.candidates.setCurrentItem(self.candidates.topLevelItem(0))

    # What is asked for.
    def _seek(self) -> None:
        items = [self.kinds.item(i) for i in range(self.kinds.count())]
        kinds = [i.text() for i in items if i.checkState() == Qt.CheckState.Checked]
        names = [part.strip() for part in self.names.text().split(",") if part.strip()]
        self._choices, self._views = (), []
        self.groups.hide()
        for tree in (self.candidates, self.effects):
            tree.clear()
        for label in (self.summary, self.warning, self.message):
            label.setText("")
        self.apply.setEnabled(False)
        self.bar.setValue(0)
        self._show_running(True)
        scope = self._scopes[self.scope.currentIndex()]
        self.sought.emit(scope, self.source.currentData(), (kinds, names))

    def _apply(self) -> None:
        self.accept()
        self.applied.emit(self._choices)


_RIGHT = int(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)


def _tree(name: str, spoken: str, heads: Sequence[str]) -> Any:
    tree = QtWidgets.QTreeWidget()
    tree.setObjectName(name)
    tree.setAccessibleName(spoken)
    tree.setRootIsDecorated(False)
    tree.setUniformRowHeights(True)
    tree.setAlternatingRowColors(True)
    tree.setHeaderLabels([tr(words) for words in heads])
    return tree


def _words(name: str) -> Any:
    label = QtWidgets.QLabel()
    label.setObjectName(name)
    label.setWordWrap(True)
    return label


def _bold(font: Any) -> Any:
    font = QtGui.QFont(font)
    font.setBold(True)
    return font
