"""The desk: ties the open models, the docks and the 3D view together."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import FreeCAD
import FreeCADGui

from .. import document
from ..present.diagrams import ordinates_of, views_of
from ..present.findings import finding_rows
from ..present.listing import rows_of
from ..present.moved import moved_words
from ..present.scene import Scene
from ..present.strip import strip_of
from ..qt import Qt, QtCore, QtWidgets
from ..session import Session
from ..texts import translate
from ..worker import Progress, Work
from .findings_list import FindingsList
from .line_desk import LineDesk
from .line_list import LineList
from .running import RunningBar
from .selection import SelectionLink


class Desk(QtCore.QObject):
    """One per window.  Sessions are kept by document name."""

    def __init__(self) -> None:
        super().__init__()
        self.sessions: dict[str, Session] = {}
        self.scenes: dict[str, Scene] = {}
        self.line: int | None = None
        self.work: Work | None = None
        self.behind: Work | None = None
        self.building_shown = True
        self._arranged = False
        window = FreeCADGui.getMainWindow()
        self.spot: tuple[str, int] | None = None
        self.running = RunningBar()
        self.list = LineList()
        self.findings = FindingsList()
        self.tabs = QtWidgets.QTabWidget()
        self.tabs.setObjectName("SpanledgerTabs")
        self.tabs.addTab(self.list, translate("Spanledger", "Lines"))
        self.tabs.addTab(self.findings, translate("Spanledger", "Findings"))
        self.strip = LineDesk()
        self.list_dock = _dock(
            window, "SpanledgerLinesDock", translate("Spanledger", "Beam lines"),
            _stacked(self.tabs, self.running),
            Qt.DockWidgetArea.RightDockWidgetArea,
        )  # fmt: skip
        self.strip_dock = _dock(
            window, "SpanledgerStripDock", translate("Spanledger", "Line strip"), self.strip,
            Qt.DockWidgetArea.BottomDockWidgetArea,
        )  # fmt: skip
        self.list.chosen.connect(self.choose_line)
        self.strip.view_changed.connect(lambda _view: self.refresh_results())
        self.strip.quantity_changed.connect(lambda _quantity: self.refresh_diagram())
        self.strip.canvas.picked.connect(self.choose_spot)
        self.strip.inspector.decided.connect(self.decide)
        self.findings.wanted.connect(self.show_finding)
        self.running.cancel_asked.connect(self.cancel)
        self.link = SelectionLink(self)

    # What the commands ask.
    @property
    def session(self) -> Session | None:
        """The model of the active document."""
        active = FreeCAD.ActiveDocument
        return self.sessions.get(active.Name) if active else None

    def appear(self) -> None:
        """Show the docks, when the workbench is chosen."""
        window = FreeCADGui.getMainWindow()
        for dock in (self.list_dock, self.strip_dock):
            dock.show()
            dock.raise_()
        if not self._arranged:
            self._arranged = True
            width, height = window.width(), window.height()
            window.resizeDocks([self.list_dock], [width * 3 // 10], Qt.Orientation.Horizontal)
            window.resizeDocks([self.strip_dock], [height * 2 // 5], Qt.Orientation.Vertical)
        self.link.start()

    def disappear(self) -> None:
        """Hide the docks, when another workbench is chosen."""
        for dock in (self.list_dock, self.strip_dock):
            dock.hide()
        self.link.stop()

    def toggle(self) -> None:
        """Show the docks, or hide them where they are shown."""
        if self.list_dock.isVisible() or self.strip_dock.isVisible():
            self.disappear()
        else:
            self.appear()

    def can_run(self) -> bool:
        """Whether a model is open and nothing runs."""
        return self.session is not None and self.work is None

    def can_undo(self) -> bool:
        """Whether a decision can be taken back."""
        return self.can_run() and bool(self.session.done)

    def can_redo(self) -> bool:
        """Whether a decision can be taken again."""
        return self.can_run() and bool(self.session.undone)

    def can_post(self) -> bool:
        """Whether there are results to write."""
        return self.can_run() and self.session.outcome is not None

    def ask_for_model(self) -> None:
        """Let the user choose an IFC file, and open it."""
        title = translate("Spanledger", "Open IFC model")
        kinds = translate("Spanledger", "IFC models (*.ifc *.ifczip)")
        path, _kind = QtWidgets.QFileDialog.getOpenFileName(
            FreeCADGui.getMainWindow(), title, "", kinds
        )
        if path:
            self.open_model(path)

    def open_model(self, path: str | Path, job_path: str | Path | None = None) -> None:
        """Open a model in the active document, or in a new one where it holds another model."""
        from analysis_core.errors import AnalysisError

        try:
            session = Session.open(path, job_path)
        except AnalysisError as error:
            self.tell(str(error))
            return
        active = FreeCAD.ActiveDocument
        if active is None or document.find_beam_lines(active) is not None:
            active = FreeCAD.newDocument(session.path.stem)
        self.sessions[active.Name] = session
        self.line = None
        self._run(active.Name)

    def run_again(self) -> None:
        """Read the model again and balance it."""
        self._run(FreeCAD.ActiveDocument.Name)

    def decide(self, title: str, change: Any) -> None:
        """Take a decision: a change of the job file's text; and balance again."""
        session = self.session
        if session is None or self.work is not None:
            self.tell(translate("Spanledger", "Something is still running; wait, or stop it."))
            return
        self._decide(lambda: session.decide(title, change(session.text)), title)

    def undo(self) -> None:
        """Take the last decision back."""
        title = translate("Spanledger", "Undone")
        self._decide(self.session.undo, title)

    def redo(self) -> None:
        """Take a decision again."""
        title = translate("Spanledger", "Done again")
        self._decide(self.session.redo, title)

    def ask_to_post(self) -> None:
        """Let the user choose where to write the results, and write them."""
        session = self.session
        proposed = session.path.with_name(f"{session.path.stem}_posted{session.path.suffix}")
        path, _kind = QtWidgets.QFileDialog.getSaveFileName(
            FreeCADGui.getMainWindow(),
            translate("Spanledger", "Post results into a copy"),
            str(proposed),
            translate("Spanledger", "IFC models (*.ifc *.ifczip)"),
        )
        if path:
            self.post(path)

    def post(self, target: str | Path) -> None:
        """Write the results into a copy of the model."""
        from analysis_core import pipeline

        session = self.session

        def task(progress: Progress) -> Any:
            return pipeline.post(session.outcome, session.path, target, progress=progress)

        def done(report: Any) -> None:
            session.posted |= {r.fingerprint for r in session.outcome.lines if r.fingerprint}
            self.refresh_list()
            self.tell(report.summary, problem=False)

        self._start(task, done)

    def cancel(self) -> None:
        """Stop what runs at its next step."""
        if self.work is not None:
            self.work.cancel()

    def tell(self, message: str, *, problem: bool = True) -> None:
        """Show a sentence, without stopping the user."""
        self.running.tell(message, problem=problem)
        print_it = FreeCAD.Console.PrintWarning if problem else FreeCAD.Console.PrintMessage
        print_it(message + "\n")

    # Showing.
    def choose_line(self, line: int | None) -> None:
        """Show a line in the list, the strip and the 3D view."""
        if line != self.line:
            self.spot = None
        self.line = line
        self.list.choose(line)
        self.refresh_strip()
        self.link.show(line)

    def refresh_all(self, name: str) -> None:
        """Show the outcome of the model of a document."""
        session = self.sessions[name]
        doc = FreeCAD.getDocument(name)
        first = document.find_beam_lines(doc) is None
        obj = document.find_beam_lines(doc) or self._add_object(doc, session)
        rows = rows_of(session.outcome, session.units, stale=session.stale, posted=session.posted)
        self.scenes[name] = document.show_outcome(obj, session.outcome, [row.state for row in rows])
        self.strip.show_views(views_of(session.outcome))
        self.refresh_list()
        self.refresh_diagram()
        if self.line is None or self.line >= len(session.outcome.lines):
            self.line = 0 if session.outcome.lines else None
        self.choose_line(self.line)
        if first:
            _look_at_all(doc)

    def refresh_results(self) -> None:
        """Show another case, combination or envelope."""
        self.refresh_strip()
        self.refresh_diagram()

    def refresh_list(self) -> None:
        """Show the list of the active model."""
        session = self.session
        if session is None or session.outcome is None:
            return
        rows = rows_of(session.outcome, session.units, stale=session.stale, posted=session.posted)
        self.list.show_rows(rows, session.units)
        found = finding_rows(session.outcome)
        self.findings.show_rows(found)
        title = translate("Spanledger", "Findings ({count})").format(count=len(found))
        self.tabs.setTabText(1, title)

    def refresh_strip(self) -> None:
        """Show the chosen line."""
        session, view = self.session, self.strip.current_view()
        if session is None or session.outcome is None or self.line is None or view is None:
            return
        result = session.outcome.lines[self.line]
        before = _before(session, result.line.mark)
        strip = strip_of(result, view, session.units, before=before)
        self.strip.show_strip(strip, session.units)
        self.strip.canvas.choose(self.spot)
        self.refresh_inspector()

    def refresh_inspector(self) -> None:
        """Show the chosen spot of the chosen line."""
        session, view = self.session, self.strip.current_view()
        result = session.outcome.lines[self.line]
        inspector, outcome, units = self.strip.inspector, session.outcome, session.units
        kind, number = self.spot or ("", 0)
        if kind == "joint" and number < len(result.line.joints):
            inspector.show_joint(result, number, view, outcome, units)
        elif kind == "member" and number < len(result.line.members):
            inspector.show_member(result, number, outcome, units)
        elif kind == "action" and number < len(result.line.actions):
            shown = self.strip.canvas.strip.actions
            action = result.line.actions[number]
            words = next((a.words for a in shown if a.action is action), "")
            inspector.show_action(result, number, words, session.text, units)
        else:
            inspector.show_line(result, outcome, units)

    def choose_spot(self, spot: Any) -> None:
        """Show a joint, a span or an action in the inspector; None shows the line."""
        self.spot = None if spot is None else (spot.kind, spot.number)
        if self.session is not None and self.session.outcome is not None and self.line is not None:
            self.strip.canvas.choose(self.spot)
            self.refresh_inspector()

    def show_finding(self, row: Any) -> None:
        """Choose the line that a finding is about, and look at it in the 3D view."""
        if row.line is None:
            self.tell(translate("Spanledger", "This finding is about no line that is drawn."))
            return
        self.choose_line(row.line)
        self.link.look_at(row.line, row.elements)

    def refresh_diagram(self) -> None:
        """Show the diagrams of all lines in the 3D view."""
        session, view = self.session, self.strip.current_view()
        active = FreeCAD.ActiveDocument
        obj = document.find_beam_lines(active)
        if session is None or session.outcome is None or view is None or obj is None:
            return
        quantity = self.strip.in_3d.currentData()
        ordinates = ordinates_of(session.outcome.lines, view, quantity)
        document.show_diagram(obj, self.scenes[active.Name], ordinates)

    # Running.
    def _run(self, name: str, title: str = "") -> None:
        from analysis_core import pipeline

        session = self.sessions[name]
        settings = session.settings

        def task(progress: Progress) -> Any:
            return pipeline.run(session.path, settings, progress=progress)

        def done(outcome: Any) -> None:
            if self.sessions.get(name) is not session:
                return  # the document was closed meanwhile
            session.receive(outcome)
            self.refresh_all(name)
            self._tell_what_moved(session, title)
            if session.shape is None:
                self._make_building(name)

        self._start(task, done)

    def _decide(self, change: Any, title: str) -> None:
        from analysis_core.errors import AnalysisError

        try:
            change()
        except AnalysisError as error:
            self.tell(str(error))
            return
        self._run(FreeCAD.ActiveDocument.Name, title)

    def _make_building(self, name: str) -> None:
        """Make the bodies of the building behind everything else; it holds nobody up."""
        session = self.sessions[name]

        def task(progress: Progress) -> Any:
            from analysis_core.ifc.shapes import building_shape
            from analysis_core.ifc.source import open_model

            return building_shape(open_model(session.path), progress=progress)

        def done(shape: Any) -> None:
            if self.sessions.get(name) is session:
                session.shape = shape
                self._show_building(name)

        if self.behind is not None:
            self.behind.cancel()
        self.behind = Work(task, self)
        self.behind.succeeded.connect(done)
        self.behind.failed.connect(lambda message: FreeCAD.Console.PrintLog(message + "\n"))
        self.behind.start()

    def _show_building(self, name: str) -> None:
        obj = document.find_beam_lines(FreeCAD.getDocument(name))
        if obj is not None:
            shape = self.sessions[name].shape if self.building_shown else None
            obj.ViewObject.Proxy.show_building(shape)

    def toggle_building(self) -> None:
        """Show the building faintly, or hide it."""
        self.building_shown = not self.building_shown
        if self.session is not None:
            self._show_building(FreeCAD.ActiveDocument.Name)

    def _tell_what_moved(self, session: Session, title: str) -> None:
        if session.previous is None or self.line is None:
            self.running.clear()
            return
        mark = session.outcome.lines[self.line].line.mark
        words = moved_words(session.previous, session.outcome, mark, session.units)
        self.tell(f"{title}. {words}" if title else words, problem=False)

    def _start(self, task: Any, done: Any) -> None:
        if self.work is not None:
            self.tell(translate("Spanledger", "Something is still running; wait, or stop it."))
            return
        work = Work(task, self)
        work.progressed.connect(self.running.show_progress)
        work.succeeded.connect(done)
        work.failed.connect(self.tell)
        work.cancelled.connect(
            lambda: self.tell(translate("Spanledger", "Stopped; nothing was changed."))
        )
        work.finished.connect(self._finished)
        self.work = work
        self.running.begin()
        work.start()

    def _finished(self) -> None:
        self.running.end()
        if self.work is not None:
            self.work.deleteLater()
        self.work = None

    def _add_object(self, doc: Any, session: Session) -> Any:
        from ..draw.view import BeamLinesView

        obj = document.add_beam_lines(doc)
        obj.IfcFile, obj.JobFile = str(session.path), str(session.job_path)
        BeamLinesView(obj.ViewObject)
        obj.ViewObject.DisplayMode = obj.ViewObject.Proxy.getDefaultDisplayMode()
        return obj


def _before(session: Session, mark: str) -> Any:
    if session.previous is None:
        return None
    return next((r for r in session.previous.lines if r.line.mark == mark), None)


def _look_at_all(doc: Any) -> None:
    gui = FreeCADGui.getDocument(doc.Name)
    view = gui.activeView() if gui else None
    if view is not None and hasattr(view, "viewIsometric"):
        view.viewIsometric()
        QtCore.QTimer.singleShot(0, view.fitAll)  # once the docks have taken their room


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
