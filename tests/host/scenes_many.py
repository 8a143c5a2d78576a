"""Scenes with very many lines, and how long things take."""

import sys
import time
from dataclasses import replace
from pathlib import Path

import FreeCAD
import FreeCADGui
from host_tools import QtWidgets, activate, picture_of_view, settle, wait_until, widget
from PySide import QtCore

sys.path.append(str(Path(__file__).resolve().parents[1] / "addon"))
MANY = 10_000


def many_lines():
    """Draw 10,000 lines, turn them, choose among them, filter them."""
    FreeCADGui.addWorkbench(EmptyWorkbench())
    empty_start = started("EmptyWorkbench")
    start = started("SpanledgerWorkbench")
    early = sorted({"ifcopenshell", "scipy", "analysis_core.pipeline"} & set(sys.modules))
    desk = activate()
    from freecad.spanledger.opened_model import OpenedModel

    outcome = many_outcome()
    doc = FreeCAD.newDocument("Many")
    empty = frame_time()
    opened = OpenedModel(Path("many.ifc"), Path("many.yaml"))
    opened.receive(outcome)
    desk.opened_models[doc.Name] = opened
    found = {"start": start - empty_start, "early": early, "empty_frame": empty}
    found |= {"yard": yardstick(), "processor_yard": yardstick(time.process_time)}
    found["show"] = timed(lambda: desk._show_all(doc.Name))
    found["show_again"] = timed(lambda: desk._show_all(doc.Name))
    settle(1.0)
    picture_of_view("many_view")
    found["frame"] = frame_time()
    found["choose"] = timed(lambda: desk.choose_line(7777))
    words = widget(QtWidgets.QLineEdit, "SpanledgerFilter")
    found["filter"] = timed(lambda: words.setText("roof"))
    found["shown"] = desk.panels.list.model.shown()
    box = widget(QtWidgets.QComboBox, "SpanledgerIn3D")
    found["quantity"] = timed(lambda: box.setCurrentIndex(2))
    return found


class EmptyWorkbench(FreeCADGui.Workbench):
    """A workbench that does nothing, to compare with."""

    MenuText = "Empty"

    def Initialize(self):  # noqa: N802
        pass

    def GetClassName(self):  # noqa: N802
        return "Gui::PythonWorkbench"


def started(name):
    """Return the processor time that it takes to choose a workbench for the first time."""
    began = time.process_time()
    FreeCADGui.activateWorkbench(name)
    QtWidgets.QApplication.processEvents()
    return time.process_time() - began


def many_outcome():
    """Return 10,000 lines of two and of one span, in a field of 100 by 100."""
    import demo

    first = demo.outcome()
    results = []
    for number in range(MANY):
        result = first.lines[number % 2]
        dx, dy, dz = 12.0 * (number % 100), 5.0 * (number // 100), 3.5 * (number % 2)
        joints = tuple(
            replace(j, point=(j.point[0] + dx, j.point[1] + dy, j.point[2] + dz))
            for j in result.line.joints
        )
        line = replace(result.line, joints=joints, mark=f"N{number:05d}")
        results.append(replace(result, line=line, fingerprint=f"f{number}"))
    model = replace(first.model, lines=tuple(r.line for r in results))
    return replace(first, model=model, lines=tuple(results))


def timed(action):
    began = time.perf_counter()
    action()
    QtWidgets.QApplication.processEvents()
    return time.perf_counter() - began


def frame_time(seconds=1.5):
    """Return how long one picture takes while the view is turned."""
    view = FreeCADGui.ActiveDocument.ActiveView
    view.fitAll()
    settle(0.5)
    camera = view.getCameraNode()
    from pivy import coin

    turn = coin.SbRotation(coin.SbVec3f(0.0, 0.0, 1.0), 0.02)
    frames, end = 0, time.perf_counter() + seconds
    while time.perf_counter() < end:
        camera.orientation = camera.orientation.getValue() * turn
        view.redraw()
        QtWidgets.QApplication.processEvents(QtCore.QEventLoop.ExcludeUserInputEvents)
        frames += 1
    return seconds / frames


class Painted(QtCore.QObject):
    """Tells which of some widgets Qt has painted."""

    def __init__(self, *widgets):
        super().__init__()
        self._seen = dict.fromkeys(widgets, False)
        for target in widgets:
            target.installEventFilter(self)

    def forget(self):
        self._seen = dict.fromkeys(self._seen, False)

    def all(self):
        return all(self._seen.values())

    def eventFilter(self, target, event):  # noqa: N802
        if event.type() == QtCore.QEvent.Paint:
            self._seen[target] = True
        return False


def edits():
    """Take twenty decisions on a real model, each from the click to the drawn picture.

    No two are alike, so that nothing is known from before.  The picture is there once both the
    strip and the 3D view were painted after the outcome came.
    """
    import statistics

    from scenes_model import copied, opened

    desk = activate()
    opened(desk, copied())
    from freecad.spanledger.present import decisions

    view = FreeCADGui.ActiveDocument.ActiveView
    painted = Painted(desk.panels.strip.canvas, view.graphicsView().viewport())
    line = desk.solved.outcome.lines[0].line
    where = decisions.where_is(line, 0)
    times, processor = [], []
    for number in range(20):
        held = {"vertical": "rigid", "rotation": f"{2000 + 500 * number} kN*m/rad"}
        before = desk.solved.outcome
        began = time.perf_counter(), time.process_time()
        desk.decide("edit", lambda text, h=held: decisions.decide_support(text, where, h))
        while desk.solved.outcome is before:
            painted.forget()
            QtWidgets.QApplication.processEvents(QtCore.QEventLoop.WaitForMoreEvents)
        while not painted.all():
            QtWidgets.QApplication.processEvents(QtCore.QEventLoop.WaitForMoreEvents)
        times.append(time.perf_counter() - began[0])
        processor.append(time.process_time() - began[1])
        wait_until(lambda: not desk.runs.busy and not desk.runs.busy_behind)
        settle(0.1)
    return {
        "median": statistics.median(times), "worst": max(times), "best": min(times),
        "processor": statistics.median(processor), "frame": redrawn(view),
        "yard": yardstick(), "processor_yard": yardstick(time.process_time),
    }  # fmt: skip


def redrawn(view):
    """Return the processor time that one picture of the 3D view takes by itself."""
    port, times = view.graphicsView().viewport(), []
    for _ in range(10):
        began = time.process_time()
        port.repaint()
        settle(0.02)
        times.append(time.process_time() - began)
    return min(times)


def yardstick(clock=time.perf_counter):
    """Return how long a fixed piece of plain work takes here and now (best of three)."""
    times = []
    for _ in range(3):
        began = clock()
        sum(number * number for number in range(1_000_000))
        times.append(clock() - began)
    return min(times)
