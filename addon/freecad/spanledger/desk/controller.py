"""The desk: what the commands and the docks ask for is done here, in the open models."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import Any

import FreeCAD
import FreeCADGui

from .. import document
from ..opened_model import OpenedModel
from ..present.checked import largest_uses
from ..present.listing import Row, rows_of
from ..present.moved import moved_words
from ..present.shades import shade_numbers, shades
from ..qt import QtCore, QtWidgets
from ..texts import translate
from ..worker import Progress
from .choosing import Choosing
from .panels import Panels
from .picture import Picture
from .posting_desk import PostingDesk
from .runs import Runs
from .selection import SelectionLink
from .watch import DocumentWatch, FileWatch

Change = Callable[[str], str]


class Desk(QtCore.QObject):
    """One per window.  Opened models are kept by document name."""

    def __init__(self) -> None:
        super().__init__()
        self.opened_models: dict[str, OpenedModel] = {}
        self.line: int | None = None
        self.spot: tuple[str, int] | None = None
        self.panels, self.picture = Panels(), Picture()
        self.runs = Runs(self.panels.running, self.tell)
        self.link = SelectionLink(self)
        self.documents, self.files = DocumentWatch(self), FileWatch()
        self.choosing, self.posting = Choosing(self), PostingDesk(self)
        self.panels.list.chosen.connect(self.choose_line)
        self.panels.findings.wanted.connect(self.show_finding)
        strip = self.panels.strip
        strip.view_changed.connect(lambda _view: self._show_view())
        strip.quantity_changed.connect(lambda _quantity: self._show_diagram())
        strip.canvas.picked.connect(self.choose_spot)
        strip.inspector.decided.connect(self.decide)
        strip.inspector.line_wanted.connect(self.choose_line)
        strip.inspector.section_wanted.connect(self.choosing.ask_for_section)
        strip.inspector.lightest_wanted.connect(self.choosing.ask_for_lightest)
        strip.shading_changed.connect(lambda _way: self._shade())
        self.panels.bearings.wanted.connect(self.show_bearing)
        self.panels.changes.line_wanted.connect(self.choose_line)
        self.panels.record.order_changed.connect(lambda _order: self._show_record())
        self.panels.record.released.connect(self._show_released)
        self.panels.record_dock.visibilityChanged.connect(lambda _on: self._show_record())
        self.files.changed.connect(self._files_changed)

    @property
    def opened(self) -> OpenedModel | None:
        """The model of the active document."""
        active = FreeCAD.ActiveDocument
        return self.opened_models.get(active.Name) if active else None

    @property
    def solved(self) -> OpenedModel | None:
        """The model of the active document, where it has an outcome to show."""
        opened = self.opened
        return opened if opened is not None and opened.outcome is not None else None

    # The docks.
    def appear(self) -> None:
        """Show the docks, when the workbench is chosen."""
        self.panels.appear()
        self.link.start()
        self.document_changed()

    def disappear(self) -> None:
        """Hide the docks, when another workbench is chosen."""
        self.panels.disappear()
        self.link.stop()

    def toggle(self) -> None:
        """Show the docks, or hide them where they are shown."""
        if self.panels.visible:
            self.disappear()
        else:
            self.appear()

    # What is possible now.
    def can_run(self) -> bool:
        """Whether a model is open and nothing runs."""
        return self.opened is not None and not self.runs.busy

    def can_undo(self) -> bool:
        """Whether a decision can be taken back."""
        return self.can_run() and bool(self.opened.done)

    def can_redo(self) -> bool:
        """Whether a decision can be taken again."""
        return self.can_run() and bool(self.opened.undone)

    def can_post(self) -> bool:
        """Whether there are results to write."""
        return self.solved is not None and not self.runs.busy

    def can_choose(self) -> bool:
        """Whether a line is chosen that can be given other sections."""
        return self.can_post() and self.line is not None

    # Models.
    def ask_for_model(self) -> None:
        """Let the user choose an IFC file, and open it."""
        path, _kind = QtWidgets.QFileDialog.getOpenFileName(
            FreeCADGui.getMainWindow(), translate("Spanledger", "Open IFC model"), "",
            translate("Spanledger", "IFC models (*.ifc *.ifczip)"),
        )  # fmt: skip
        if path:
            self.open_model(path)

    def ask_for_job(self) -> None:
        """Let the user choose another job file for the open model."""
        path, _kind = QtWidgets.QFileDialog.getOpenFileName(
            FreeCADGui.getMainWindow(), translate("Spanledger", "Use a job file"),
            str(self.opened.job_path.parent),
            translate("Spanledger", "Job files (*.yaml *.yml)"),
        )  # fmt: skip
        if path:
            self.use_job(path)

    def open_model(self, path: str | Path, job_path: str | Path | None = None) -> None:
        """Open a model in the active document, or in a new one where it holds another model."""
        opened = self._tried(lambda: OpenedModel.open(path, job_path))
        if opened is None:
            return
        active = FreeCAD.ActiveDocument
        if active is None or not self._may_hold(active, opened.path):
            active = FreeCAD.newDocument(opened.path.stem)
        self.opened_models[active.Name] = opened
        self.line = self.spot = None
        self._run(active.Name)

    def use_job(self, path: str | Path) -> None:
        """Go on with another job file."""
        opened = self._tried(lambda: OpenedModel.open(self.opened.path, path))
        if opened is None:
            return
        name = FreeCAD.ActiveDocument.Name
        opened.reading, opened.stamp = self.opened.reading, self.opened.stamp
        opened.outcome, opened.shape = self.opened.outcome, self.opened.shape
        self.opened_models[name] = opened
        obj = document.find_beam_lines(FreeCAD.ActiveDocument)
        if obj is not None:
            obj.JobFile = str(opened.job_path)
        self._run(name)

    def ask_for_earlier(self) -> None:
        """Let the user choose an earlier revision, and compare."""
        path, _kind = QtWidgets.QFileDialog.getOpenFileName(
            FreeCADGui.getMainWindow(), translate("Spanledger", "Earlier revision"),
            str(self.opened.path.parent),
            translate("Spanledger", "IFC models (*.ifc *.ifczip)"),
        )  # fmt: skip
        if path:
            self.compare(path)

    def compare(self, earlier: str | Path) -> None:
        """Compare with an earlier revision of the model."""
        opened, name = self.opened, FreeCAD.ActiveDocument.Name
        settings = opened.settings

        def task(progress: Progress) -> Any:
            return opened.compare(Path(earlier), settings, progress)

        def done(found: Any) -> None:
            if self.opened_models.get(name) is opened:
                opened.take_compared(found)
                self._show_all(name)
                if self.opened is opened:
                    self.panels.show_changes(found, opened)
                    self.panels.running.clear()
                self._look_closer(name, found.after, settings)

        self.runs.start(task, done)

    def run_again(self) -> None:
        """Read the model and its job file again and balance the lines."""
        opened = self.opened
        if self._tried(lambda: opened.read_again() or True):
            self._run(FreeCAD.ActiveDocument.Name)

    def document_changed(self) -> None:
        """Show the lines of the document that is active now; read them where it was reopened."""
        active = FreeCAD.ActiveDocument
        if not self.panels.visible:
            return
        if self.solved is not None:
            self.line = self.spot = None
            self._show_all(active.Name)
        elif self.opened is None:
            self.line = self.spot = None
            self.panels.clear()
            obj = document.find_beam_lines(active)
            if obj is not None and obj.IfcFile:
                self._take_up(obj)

    def forget(self, name: str) -> None:
        """A document was closed: stop its work and forget its model."""
        if self.opened_models.pop(name, None) is not None:
            self.runs.cancel()
            self.runs.cancel_behind()
        self.picture.forget(name)
        self._watch()
        QtCore.QTimer.singleShot(0, self.document_changed)

    # Decisions.
    def decide(self, title: str, change: Change) -> None:
        """Take a decision: a change of the job file's text; and balance again."""
        opened = self.opened
        self._decide(lambda: opened.decide(title, change(opened.text)), title)

    def undo(self) -> None:
        """Take the last decision back."""
        self._decide(self.opened.undo, translate("Spanledger", "Undone"))

    def redo(self) -> None:
        """Take a decision again."""
        self._decide(self.opened.redo, translate("Spanledger", "Done again"))

    # Posting.
    def ask_to_post(self) -> None:
        """Show what will be written, and write it when the user says so."""
        self.posting.ask()

    def post(self, target: str | Path) -> None:
        """Write the results into a copy of the model, or into the model itself."""
        self.posting.post(target, members=False)

    def posted(self, name: str, opened: OpenedModel) -> None:
        """Show that results were written."""
        self._watch()
        if self.opened_models.get(name) is opened:
            self._show_states(name)

    # Choosing.
    def choose_line(self, line: int | None) -> None:
        """Show a line in the list, the strip and the 3D view."""
        if line != self.line:
            self.spot = None
        self.line = line
        self.panels.list.choose(line)
        if line is not None and self.solved is not None:
            self.panels.show_line(self.solved, line, self.spot)
        else:
            self.panels.show_no_line()
        self.link.show(line)

    def choose_spot(self, spot: Any) -> None:
        """Show a joint, a span or an action in the inspector; None shows the line."""
        self.spot = None if spot is None else (spot.kind, spot.number)
        if self.solved is not None and self.line is not None:
            self.panels.show_spot(self.solved, self.line, self.spot)

    def show_finding(self, row: Any) -> None:
        """Choose the line that a finding is about, and look at it in the 3D view."""
        if row.line is None:
            self.tell(translate("Spanledger", "This finding is about no line that is drawn."))
            return
        self.choose_line(row.line)
        self.link.look_at(row.line, row.elements)

    def show_bearing(self, row: Any) -> None:
        """Choose the first line that bears on an element, at the joint where it does."""
        if not row.lines or self.solved is None:
            return
        self.choose_line(row.lines[0])
        joints = self.solved.outcome.lines[row.lines[0]].line.joints
        number = next((j.id for j in joints if j.element == row.element), None)
        if number is not None:
            self.spot = ("joint", number)
            self.panels.show_spot(self.solved, row.lines[0], self.spot)

    def toggle_building(self) -> None:
        """Show the building faintly, or hide it."""
        self.picture.building_shown = not self.picture.building_shown
        if self.opened is not None:
            self.picture.show_building(FreeCAD.ActiveDocument.Name, self.opened)

    def tell(self, message: str, *, problem: bool = True) -> None:
        """Show a sentence, without stopping the user."""
        self.panels.running.tell(message, problem=problem)
        console = FreeCAD.Console
        (console.PrintWarning if problem else console.PrintMessage)(message + "\n")

    # Inside.
    def _run(self, name: str, title: str = "") -> None:
        opened = self.opened_models[name]
        settings = opened.settings

        def task(progress: Progress) -> Any:
            return opened.run(settings, progress)

        def done(outcome: Any) -> None:
            if self.opened_models.get(name) is not opened:
                return  # the document was closed meanwhile
            opened.receive(outcome)
            opened.checks = opened.known_checks(outcome, settings)
            self._show_all(name)
            self._watch()
            self._tell_what_moved(opened, title)
            self.panels.lay_out()
            self.picture.redraw(name)
            self._look_closer(name, outcome, settings)

        self.runs.start(task, done)

    def _look_closer(self, name: str, outcome: Any, settings: Any) -> None:
        """Check members, and make the bodies of the building, behind everything else."""
        opened = self.opened_models[name]

        def task(progress: Progress) -> Any:
            checks = opened.check(outcome, settings, progress)
            return checks, opened.shape or opened.building(progress)

        def done(found: Any) -> None:
            if self.opened_models.get(name) is not opened or opened.outcome is not outcome:
                return
            opened.checks, opened.shape = found
            self.picture.show_building(name, opened)
            self._show_states(name)
            if self.opened is opened and self.line is not None:
                self.panels.show_checks(opened, self.line, self.spot)

        self.runs.start_behind(task, done)

    def _show_all(self, name: str) -> None:
        opened = self.opened_models[name]
        rows = self._rows(opened)
        self.picture.show(name, opened, [row.state for row in rows])
        if FreeCAD.ActiveDocument is None or FreeCAD.ActiveDocument.Name != name:
            return  # the docks show the active document; this one's turn comes with it
        self.panels.show_opened(opened, rows)
        self._show_diagram()
        count = len(opened.outcome.lines)
        if self.line is None or self.line >= count:
            self.line = 0 if count else None
        self._shade(rows)
        self.choose_line(self.line)
        self.picture.show_building(name, opened)

    def _shade(self, rows: list[Row] | None = None) -> None:
        """Tell the lines of the active model apart in the 3D view as is asked for."""
        way = self.panels.strip.shaded_by.currentData()
        self.panels.strip.legend.show_shades(shades(way))
        opened = self.solved
        if opened is not None:
            rows = rows or self._rows(opened)
            numbers = shade_numbers(way, rows, opened.outcome, opened.previous)
            self.picture.shade(FreeCAD.ActiveDocument.Name, way, numbers)

    def _show_view(self) -> None:
        if self.solved is not None and self.line is not None:
            self.panels.show_line(self.solved, self.line, self.spot)
            self._show_diagram()

    def _show_record(self) -> None:
        if self.solved is not None and self.line is not None:
            self.panels.show_record(self.solved, self.line)

    def _show_released(self, joints: tuple[int, ...]) -> None:
        """Mark the joint on the strip that a step of the distribution released."""
        self.panels.strip.canvas.choose(("joint", joints[0]) if joints else self.spot)

    def _show_diagram(self) -> None:
        view = self.panels.strip.current_view()
        if self.solved is not None and view is not None:
            quantity = self.panels.strip.in_3d.currentData()
            self.picture.show_diagram(FreeCAD.ActiveDocument.Name, self.solved, view, quantity)

    def _show_states(self, name: str) -> None:
        rows = self._rows(self.opened_models[name])
        self.picture.show_states(name, [row.state for row in rows])
        if FreeCAD.ActiveDocument is not None and FreeCAD.ActiveDocument.Name == name:
            self.panels.list.show_rows(rows, self.opened_models[name].units)
            self._shade(rows)

    def _rows(self, opened: OpenedModel) -> list[Row]:
        return rows_of(
            opened.outcome,
            opened.units,
            stale=opened.stale,
            posted=opened.posted,
            in_file=opened.in_file,
            uses=largest_uses(opened.checks),
        )

    def _decide(self, change: Callable[[], Any], title: str) -> None:
        if self.opened is None or self.runs.busy:
            self.tell(translate("Spanledger", "Something is still running; wait, or stop it."))
        elif self._tried(lambda: (change(),)):
            self._run(FreeCAD.ActiveDocument.Name, title)

    def _tried(self, action: Callable[[], Any]) -> Any:
        """Return what an action returns; where it is refused, tell why and return None."""
        from analysis_core.errors import AnalysisError

        try:
            return action()
        except AnalysisError as error:
            self.tell(str(error))
            return None

    def _may_hold(self, doc: Any, path: Path) -> bool:
        """Whether a model may be opened in a document: it holds none, or this one."""
        if doc.Name in self.opened_models:
            return False
        obj = document.find_beam_lines(doc)
        return obj is None or not obj.IfcFile or Path(obj.IfcFile) == path

    def _take_up(self, obj: Any) -> None:
        """Go on with the model of a document that was reopened."""
        path, job = Path(obj.IfcFile), Path(obj.JobFile) if obj.JobFile else None
        if path.is_file():
            self.open_model(path, job)
            return
        text = translate(
            "Spanledger",
            "'{path}' is not there; the lines are shown as they were kept. Open the model again "
            "from where it is now.",
        )
        self.tell(text.format(path=path))

    def _watch(self) -> None:
        self.files.watch(p for s in self.opened_models.values() for p in s.files)

    def _files_changed(self) -> None:
        """A model or a job file was written by somebody else: its lines are stale."""
        if self.runs.busy:
            return
        for name, opened in self.opened_models.items():
            if opened.outcome is not None and not opened.stale and opened.changed_on_disk():
                opened.stale = True
                text = translate(
                    "Spanledger", "'{name}' or its job file changed; balance its lines again."
                )
                self.tell(text.format(name=opened.path.name))
                self._show_states(name)
        self._watch()

    def _tell_what_moved(self, opened: OpenedModel, title: str) -> None:
        if self.opened is not opened:
            return  # another document was made active meanwhile
        if opened.previous is None or self.line is None:
            self.panels.running.clear()
            return
        mark = opened.outcome.lines[self.line].line.mark
        words = moved_words(opened.previous, opened.outcome, mark, opened.units)
        self.tell(f"{title}. {words}" if title else words, problem=False)
