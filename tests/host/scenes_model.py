"""Scenes with a model of ours, from the file to the posted copy, by real clicks."""

import shutil
from pathlib import Path

import FreeCADGui
from host_tools import (
    PICTURES,
    QtWidgets,
    activate,
    click,
    picture_of_screen,
    picture_of_view,
    settle,
    wait_until,
    widget,
)
from PySide import QtCore

SAMPLES = Path(__file__).resolve().parents[2] / "sample_models"
PHYSICAL, JOB = "quarry_lane_physical_ifc4.ifc", "quarry_lane.yaml"


def copied(model=PHYSICAL, job=JOB):
    """Return a copy of a sample model with its job file beside it."""
    folder = PICTURES / "work"
    shutil.rmtree(folder, ignore_errors=True)
    folder.mkdir()
    path = folder / model
    shutil.copy(SAMPLES / model, path)
    if job:
        shutil.copy(SAMPLES / job, path.with_suffix(".yaml"))
    return path


def opened(desk, path):
    """Open a model as the user does, and wait for its lines."""
    desk.open_model(path)
    wait_until(lambda: not desk.runs.busy, what="the run")
    assert desk.session.outcome is not None, desk.panels.running.message.text()
    wait_until(lambda: not desk.runs.busy_behind, what="the building")
    settle()


def tour():
    """Open a model and look at it."""
    desk = activate()
    opened(desk, copied())
    settle()
    picture_of_screen("model_window")
    picture_of_view("model_view")
    return {
        "lines": desk.panels.list.model.shown(),
        "states": sorted({row.state for row in desk.panels.list.model._rows}),
        "message": desk.panels.running.message.text(),
        "shape": len(desk.session.shape.elements),
    }


def decide():
    """Fix a bearing, take it back, do it again; then add an action and change it."""
    desk = activate()
    from freecad.spanledger.present.listing import governing

    path = copied()
    opened(desk, path)
    job = path.with_suffix(".yaml")
    before = job.read_text(encoding="utf-8")
    canvas = widget(QtWidgets.QWidget, "SpanledgerCanvas")
    found = {"sagging": [governing(desk.session.outcome.lines[0])[0]]}

    def pick(kind, number):
        spot = next(s for s in canvas.drawing.spots if (s.kind, s.number) == (kind, number))
        x = (spot.left + spot.right) / 2
        if kind == "member":  # clear of the bearings and actions
            x = spot.left + 0.3 * (spot.right - spot.left)
        place = QtCore.QPoint(round(x), round((spot.top + spot.bottom) / 2))
        click(canvas, place)

    def then():
        wait_until(lambda: not desk.runs.busy, what="the run")
        settle(0.2)
        found["sagging"].append(governing(desk.session.outcome.lines[0])[0])

    pick("joint", 0)
    picture_of_screen("decide_joint")
    box = widget(QtWidgets.QComboBox, "SpanledgerSupport")
    found["offered"] = [box.itemText(i) for i in range(box.count())]
    found["was"] = box.currentText()
    box.setCurrentIndex(box.findData("fixed"))
    click(widget(QtWidgets.QPushButton, "SpanledgerDecideSupport"))
    then()
    found["moved"] = desk.panels.running.message.text()
    found["job"] = job.read_text(encoding="utf-8")
    found["dashed"] = sum(s.dashed for s in canvas.drawing.strokes)
    picture_of_screen("decide_fixed")
    FreeCADGui.runCommand("Spanledger_Undo")
    then()
    found["undone"] = job.read_text(encoding="utf-8") == before
    FreeCADGui.runCommand("Spanledger_Redo")
    then()
    found["redone"] = job.read_text(encoding="utf-8") == found["job"]

    pick("member", 1)
    picture_of_screen("decide_member")
    widget(QtWidgets.QLineEdit, "SpanledgerActionValue").setText("nonsense")
    click(widget(QtWidgets.QPushButton, "SpanledgerDecideAction"))
    found["refused"] = desk.panels.running.message.text()
    found["still"] = job.read_text(encoding="utf-8") == found["job"]
    widget(QtWidgets.QLineEdit, "SpanledgerActionValue").setText("30")
    click(widget(QtWidgets.QPushButton, "SpanledgerDecideAction"))
    then()
    found["added"] = job.read_text(encoding="utf-8")
    picture_of_screen("decide_added")
    return found
