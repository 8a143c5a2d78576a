"""The docks: the list of lines and findings on the right, the strip of one line below."""

from __future__ import annotations

from typing import Any

import FreeCADGui

from analysis_core.units import display_units

from ..opened_model import OpenedModel
from ..present.changes import change_rows, summary
from ..present.diagrams import views_of
from ..present.findings import finding_rows
from ..present.listing import Row
from ..present.load_path import bearing_rows, paths_at_joint, paths_on_member
from ..present.strip import strip_of
from ..qt import Qt, QtCore, QtWidgets
from ..texts import translate
from .bearings_list import BearingsList
from .changes_list import ChangesList
from .findings_list import FindingsList
from .line_desk import LineDesk
from .line_list import LineList
from .record_desk import RecordDesk
from .running import RunningBar

Spot = tuple[str, int]


class Panels:
    """Shows opened_models; decides nothing."""

    def __init__(self) -> None:
        window = FreeCADGui.getMainWindow()
        self.running = RunningBar()
        self.list = LineList()
        self.findings = FindingsList()
        self.strip = LineDesk()
        self.tabs = QtWidgets.QTabWidget()
        self.tabs.setObjectName("SpanledgerTabs")
        self.tabs.addTab(self.list, translate("Spanledger", "Lines"))
        self.tabs.addTab(self.findings, translate("Spanledger", "Findings"))
        self.bearings = BearingsList()
        self.tabs.addTab(self.bearings, translate("Spanledger", "Reactions"))
        self.changes = ChangesList()  # becomes a tab once revisions are compared
        self._opened: OpenedModel | None = None
        self.tabs.currentChanged.connect(lambda _index: self._show_bearings())
        self.list_dock = _dock(
            window, "SpanledgerLinesDock", translate("Spanledger", "Beam lines"),
            _stacked(self.tabs, self.running), Qt.DockWidgetArea.RightDockWidgetArea,
        )  # fmt: skip
        self.strip_dock = _dock(
            window, "SpanledgerStripDock", translate("Spanledger", "Line strip"), self.strip,
            Qt.DockWidgetArea.BottomDockWidgetArea,
        )  # fmt: skip
        self.record = RecordDesk()
        self.record_dock = _dock(
            window, "SpanledgerRecordDock", translate("Spanledger", "Distribution"), self.record,
            Qt.DockWidgetArea.BottomDockWidgetArea,
        )  # fmt: skip
        window.tabifyDockWidget(self.strip_dock, self.record_dock)
        self._docks = (self.list_dock, self.record_dock, self.strip_dock)
        self._arranged = False

    @property
    def visible(self) -> bool:
        """Whether a dock is shown."""
        return any(dock.isVisible() for dock in self._docks)

    def appear(self) -> None:
        """Show the docks; the first time with a size that suits the window."""
        window = FreeCADGui.getMainWindow()
        for dock in self._docks:  # the strip last: it is the one in front
            dock.show()
            dock.raise_()
        if not self._arranged:
            self._arranged = True
            width, height = window.width(), window.height()
            window.resizeDocks([self.list_dock], [width * 3 // 8], Qt.Orientation.Horizontal)
            window.resizeDocks([self.strip_dock], [height * 9 // 20], Qt.Orientation.Vertical)

    def disappear(self) -> None:
        """Hide the docks."""
        for dock in self._docks:
            dock.hide()

    def show_opened(self, opened: OpenedModel, rows: list[Row]) -> None:
        """Show the lines and findings of a model."""
        self.strip.show_views(views_of(opened.outcome))
        self.list.show_rows(rows, opened.units)
        found = finding_rows(opened.outcome)
        self.findings.show_rows(found)
        self._opened = opened
        self._show_bearings()
        title = translate("Spanledger", "Findings ({count})").format(count=len(found))
        self.tabs.setTabText(1, title)

    def _show_bearings(self) -> None:
        """Fill the list of reactions when it is looked at; it may hold tens of thousands."""
        opened = self._opened
        if opened is not None and self.tabs.currentWidget() is self.bearings:
            self.bearings.show_rows(bearing_rows(opened.outcome, opened.units), opened.units)

    def show_changes(self, found: Any, opened: OpenedModel) -> None:
        """Show what changed since an earlier revision."""
        self.changes.show_rows(change_rows(found, opened.units), summary(found))
        if self.tabs.indexOf(self.changes) < 0:
            self.tabs.addTab(self.changes, translate("Spanledger", "Changes"))
        self.tabs.setCurrentWidget(self.changes)

    def show_line(self, opened: OpenedModel, line: int, spot: Spot | None) -> None:
        """Show one line, and what is chosen of it."""
        view = self.strip.current_view()
        if view is None:
            return
        result = opened.outcome.lines[line]
        strip = strip_of(
            result, view, opened.units, before=_before(opened, result.line.mark),
            redistributed=bool(opened.settings.rules.redistribution),
        )  # fmt: skip
        self.strip.show_strip(strip, opened.units, spot)
        self.show_spot(opened, line, spot)
        self.show_record(opened, line)

    def show_no_line(self) -> None:
        """Show that no line is chosen."""
        self.strip.show_strip(None, display_units())
        self.strip.inspector.clear()
        self.record.show_record("")

    def show_record(self, opened: OpenedModel, line: int) -> None:
        """Show how the moments of a line were distributed, where that is looked at."""
        view = self.strip.current_view()
        if view is None or not self.record_dock.isVisible():
            return
        from ..present.distribution import recorded

        result, order = opened.outcome.lines[line], self.record.chosen_order()
        self.record.show_record(recorded(result, view, opened.units, order))

    def show_spot(self, opened: OpenedModel, line: int, spot: Spot | None) -> None:
        """Show a joint, a span or an action in the inspector; None shows the line."""
        self.strip.canvas.choose(spot)
        view = self.strip.current_view()
        result, outcome, units = opened.outcome.lines[line], opened.outcome, opened.units
        inspector = self.strip.inspector
        kind, number = spot or ("", 0)
        if kind == "joint" and number < len(result.line.joints):
            inspector.show_joint(result, number, view, outcome, units)
            inspector.show_paths(paths_at_joint(outcome, line, number))
        elif kind == "member" and number < len(result.line.members):
            checks = opened.checks.get(result.line.mark, ())
            inspector.show_member(result, number, outcome, checks, units)
            inspector.show_paths(paths_on_member(outcome, line, number, units))
        elif kind == "action" and number < len(result.line.actions):
            action = result.line.actions[number]
            shown = self.strip.canvas.strip.actions
            words = next((a.words for a in shown if a.action is action), "")
            inspector.show_action(result, number, words, opened.text, units)
        else:
            inspector.show_line(result, outcome, opened.settings, units)

    def show_checks(self, opened: OpenedModel, line: int, spot: Spot | None) -> None:
        """Show the checks of the span in the inspector; what is being typed there stays."""
        if spot is not None and spot[0] == "member":
            result = opened.outcome.lines[line]
            checks = opened.checks.get(result.line.mark, ())
            self.strip.inspector.show_checks(result, spot[1], checks, opened.units)

    @staticmethod
    def lay_out() -> None:
        """Lay out now what has changed.

        Left to themselves, layouts do so level by level, and the window is painted in between:
        with a 3D view in it, each time costs as much as a frame of that view.
        """
        QtCore.QCoreApplication.sendPostedEvents(None, QtCore.QEvent.Type.LayoutRequest)

    def clear(self) -> None:
        """Show no model."""
        units = display_units()
        self.list.show_rows([], units)
        self.findings.show_rows([])
        self._opened = None
        self.bearings.show_rows([], units)
        if self.tabs.indexOf(self.changes) >= 0:
            self.tabs.removeTab(self.tabs.indexOf(self.changes))
        self.tabs.setTabText(1, translate("Spanledger", "Findings"))
        self.strip.show_views([])
        self.show_no_line()


def _before(opened: OpenedModel, mark: str) -> Any:
    if opened.previous is None:
        return None
    return next((r for r in opened.previous.lines if r.line.mark == mark), None)


def _stacked(*widgets: Any) -> Any:
    body = QtWidgets.QWidget()
    layout = QtWidgets.QVBoxLayout(body)
    layout.setContentsMargins(0, 0, 0, 0)
    layout.setSpacing(0)
    for widget in widgets:
        layout.addWidget(widget)
    return body


def _dock(window: Any, name: str, title: str, widget: Any, area: Any) -> Any:
    dock = QtWidgets.QDockWidget(title, window)
    dock.setObjectName(name)
    dock.setWidget(widget)
    beside = [
        other
        for other in window.findChildren(QtWidgets.QDockWidget)
        if other is not dock and other.isVisible() and window.dockWidgetArea(other) == area
    ]
    window.addDockWidget(area, dock)
    if beside:  # FreeCAD's own panels there stay one click away
        window.tabifyDockWidget(beside[0], dock)
    return dock
