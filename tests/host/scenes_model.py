"""Scenes with a model of ours, from the file to the posted copy, by real clicks."""

import os
import shutil
from pathlib import Path

import FreeCAD
import FreeCADGui
from host_tools import (
    PICTURES,
    QtWidgets,
    activate,
    click,
    count_pixels,
    picture_of_screen,
    picture_of_view,
    settle,
    wait_until,
    widget,
)
from PySide import QtCore
from PySide2 import QtTest

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
    assert desk.opened.outcome is not None, desk.panels.running.message.text()
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
        "shape": len(desk.opened.shape.elements),
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
    found = {"sagging": [governing(desk.opened.outcome.lines[0])[0]]}

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
        found["sagging"].append(governing(desk.opened.outcome.lines[0])[0])

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


def post_and_reopen():
    """Post into a copy after reading the preview, save the document, close and reopen it."""
    desk = activate()
    path = copied()
    opened(desk, path)
    FreeCADGui.runCommand("Spanledger_Post")
    settle()
    tree = widget(QtWidgets.QTreeWidget, "SpanledgerPostTree")
    picture_of_screen("post_preview")
    target = path.with_name("posted.ifc")
    widget(QtWidgets.QLineEdit, "SpanledgerPostPath").setText(str(target))
    click(widget(QtWidgets.QPushButton, "SpanledgerPostNow"))
    wait_until(lambda: not desk.runs.busy, what="posting")
    settle()
    found = {
        "previewed": tree.topLevelItemCount(),
        "told": desk.panels.running.message.text(),
        "members": len({m.element for r in desk.solved.outcome.lines for m in r.line.members}),
        "written": target.read_text(encoding="utf-8").count("'Spanledger_Effects'"),
        "source_untouched": path.read_bytes() == (SAMPLES / PHYSICAL).read_bytes(),
        "states": sorted({row.state for row in desk.panels.list.model._rows}),
    }
    picture_of_screen("posted")

    document = path.with_name("kept.FCStd")
    FreeCAD.ActiveDocument.saveAs(str(document))
    FreeCAD.closeDocument(FreeCAD.ActiveDocument.Name)
    settle()
    found["after_close"] = desk.panels.list.model.shown()
    FreeCAD.openDocument(str(document))
    wait_until(lambda: desk.opened is not None and desk.opened.outcome, what="the reopened run")
    wait_until(lambda: not desk.runs.busy, what="the reopened run")
    settle()
    found["after_reopen"] = desk.panels.list.model.shown()
    from freecad.spanledger.document import find_beam_lines
    from freecad.spanledger.draw.nodes import TRANSPARENCY
    from freecad.spanledger.present.look import VIEW

    obj = find_beam_lines(FreeCAD.ActiveDocument)
    found["proxy"] = type(obj.ViewObject.Proxy).__module__
    colour = [round((1 - TRANSPARENCY) * c + TRANSPARENCY * 255) for c in VIEW["sagging"]]
    found["sagging"] = count_pixels(picture_of_view("reopened_view"), colour, 12)
    return found


def choose():
    """Filter the list, choose in the list and in the 3D view, and look at a finding."""
    desk = activate()
    opened(desk, copied())
    found = {}
    words = widget(QtWidgets.QLineEdit, "SpanledgerFilter")
    words.setText("roof")
    settle(0.2)
    found["filtered"] = desk.panels.list.model.shown()
    found["count"] = widget(QtWidgets.QLabel, "SpanledgerCount").text()
    words.setText("")
    settle(0.2)

    tree = widget(QtWidgets.QTreeView, "SpanledgerLines")
    index = desk.panels.list.model.index_of(2)
    click(tree.viewport(), tree.visualRect(index).center())
    found["by_list"] = [desk.line, [s.SubElementNames for s in selection()]]

    view = FreeCADGui.ActiveDocument.ActiveView
    view.viewIsometric()
    view.fitAll()
    settle(0.3)
    found["by_view"] = click_member(view, desk, line=8)

    tabs = widget(QtWidgets.QTabWidget, "SpanledgerTabs")
    tabs.setCurrentIndex(1)
    settle(0.2)
    rows = desk.panels.findings
    number = next(i for i, row in enumerate(rows._rows) if row.line == 1)
    rows.tree.setCurrentItem(rows.tree.topLevelItem(number))
    found["message"] = widget(QtWidgets.QLabel, "SpanledgerFindingMessage").text()
    click(widget(QtWidgets.QPushButton, "SpanledgerShowMe"))
    found["by_finding"] = desk.line
    picture_of_screen("finding")

    view_box = widget(QtWidgets.QComboBox, "SpanledgerView")
    shown = []
    for i in range(view_box.count()):
        view_box.setCurrentIndex(i)
        settle(0.05)
        obj = FreeCAD.ActiveDocument.BeamLines
        shown.append([view_box.itemText(i), obj.Shown, max(obj.Upper, default=0.0)])
    found["views"] = shown
    canvas = widget(QtWidgets.QWidget, "SpanledgerCanvas")
    QtTest.QTest.mouseMove(canvas, QtCore.QPoint(canvas.width() // 2, 120))
    settle(0.2)
    found["cursor"] = canvas.cursor
    QtTest.QTest.keyClick(canvas, QtCore.Qt.Key_Right)
    found["cursor_after_key"] = canvas.cursor
    picture_of_screen("cursor")
    return found


def selection():
    return FreeCADGui.Selection.getSelectionEx()


def click_member(view, desk, line):
    """Click in the 3D view on a member of a line; return the line that was chosen."""
    proxy = FreeCAD.ActiveDocument.BeamLines.ViewObject.Proxy
    member = int(proxy.members_of(line)[0])
    start, end = proxy.scene.ends[member]
    x, y = view.getPointOnScreen(FreeCAD.Vector(*(start + 0.37 * (end - start))))
    port = view.graphicsView().viewport()
    place = QtCore.QPoint(x, port.height() - 1 - y)
    QtTest.QTest.mouseMove(port, place)
    settle(0.2)
    QtTest.QTest.mouseClick(port, QtCore.Qt.LeftButton, QtCore.Qt.NoModifier, place)
    settle(0.4)
    return desk.line


def trouble():
    """What must not bring the host down: bad files, lost files, closed documents, no rights."""
    desk = activate()
    found = {}

    def told():
        return desk.panels.running.message.text()

    def open_and_wait(path):
        desk.open_model(path)
        wait_until(lambda: not desk.runs.busy, what="the run")
        settle(0.2)
        return told()

    folder = PICTURES / "trouble"
    shutil.rmtree(folder, ignore_errors=True)
    folder.mkdir()
    bad = folder / "bad.ifc"
    bad.write_bytes((SAMPLES / PHYSICAL).read_bytes()[:5000])
    found["truncated"] = open_and_wait(bad)
    found["missing"] = open_and_wait(folder / "nothing.ifc")
    (folder / "wrong.ifc").write_bytes((SAMPLES / PHYSICAL).read_bytes())
    (folder / "wrong.yaml").write_text("titel: x\n", encoding="utf-8")
    found["bad_job"] = open_and_wait(folder / "wrong.ifc")
    for name in list(FreeCAD.listDocuments()):
        FreeCAD.closeDocument(name)
    settle(0.3)

    path = copied()
    desk.open_model(path)
    FreeCAD.closeDocument(FreeCAD.ActiveDocument.Name)  # in the middle of the run
    wait_until(lambda: not desk.runs.busy, what="the run")
    settle(0.3)
    found["closed_mid_run"] = [len(FreeCAD.listDocuments()), desk.panels.list.model.shown()]

    desk.open_model(path)
    desk.runs.cancel()
    wait_until(lambda: not desk.runs.busy, what="the run")
    settle(0.2)
    found["cancelled"] = told()
    FreeCAD.closeDocument(FreeCAD.ActiveDocument.Name)
    settle(0.3)

    opened(desk, path)
    first = FreeCAD.ActiveDocument.Name
    other = PICTURES / "work" / "other.ifc"
    shutil.copy(SAMPLES / "quarry_lane_analytical_ifc4.ifc", other)
    opened(desk, other)
    found["two"] = [desk.opened.path.name, len(FreeCAD.listDocuments())]
    FreeCAD.setActiveDocument(first)
    settle(0.5)
    found["back"] = [desk.opened.path.name, desk.panels.list.model.shown()]

    path.with_suffix(".yaml").write_text("title: Another\n", encoding="utf-8")
    wait_until(lambda: desk.opened.stale, what="the change to be noticed")
    found["stale"] = [told(), sorted({row.state for row in desk.panels.list.model._rows})]
    FreeCADGui.runCommand("Spanledger_Balance")
    wait_until(lambda: not desk.runs.busy, what="the run")
    settle(0.2)
    found["balanced_again"] = sorted({row.state for row in desk.panels.list.model._rows})

    path.unlink()
    FreeCADGui.runCommand("Spanledger_Balance")
    wait_until(lambda: not desk.runs.busy, what="the run")
    found["deleted"] = told()
    found["still_shown"] = desk.panels.list.model.shown()
    desk.post(folder / "no such folder" / "out.ifc")
    wait_until(lambda: not desk.runs.busy, what="posting")
    found["not_written"] = told()
    return found


def look():
    """Take a picture in the theme and at the scale that the test asks for."""
    desk = activate()
    opened(desk, copied())
    desk.choose_line(1)
    canvas = widget(QtWidgets.QWidget, "SpanledgerCanvas")
    spot = next(s for s in canvas.drawing.spots if (s.kind, s.number) == ("joint", 1))
    click(canvas, QtCore.QPoint(round((spot.left + spot.right) / 2), round(spot.bottom - 4)))
    FreeCADGui.ActiveDocument.ActiveView.fitAll()
    settle()
    picture_of_screen(os.environ["SPANLEDGER_LOOK"])
    return {
        "palette": canvas.palette_now().name,
        "ratio": canvas.devicePixelRatioF(),
        "spot": list(desk.spot or ()),
    }


def distribution():
    """Step through the distribution of a case."""
    desk = activate()
    opened(desk, copied())
    desk.choose_line(1)
    view = widget(QtWidgets.QComboBox, "SpanledgerView")
    dock = widget(QtWidgets.QDockWidget, "SpanledgerRecordDock")
    dock.raise_()
    settle(0.3)
    words = widget(QtWidgets.QLabel, "SpanledgerRecordWords")
    table = widget(QtWidgets.QTableWidget, "SpanledgerRecordTable")
    found = {"envelope": words.text()}
    view.setCurrentIndex(next(i for i in range(view.count()) if "Finishes" in view.itemText(i)))
    settle(0.2)
    found["whole"] = table.rowCount()
    found["names"] = [table.verticalHeaderItem(i).text() for i in range(table.rowCount())]
    found["notes"] = widget(QtWidgets.QLabel, "SpanledgerRecordNotes").text()
    click(widget(QtWidgets.QPushButton, "SpanledgerRecordFirst"))
    found["first"] = table.rowCount()
    found["rows"], found["marked"] = [], []
    for _ in range(4):
        click(widget(QtWidgets.QPushButton, "SpanledgerRecordNext"))
        found["rows"].append(table.rowCount())
        found["marked"].append(desk.panels.strip.canvas.chosen)
    picture_of_screen("distribution")
    return found


def shade():
    """Tell lines apart by change after a decision, and follow a reaction down."""
    desk = activate()
    opened(desk, copied())
    from freecad.spanledger.present import decisions
    from freecad.spanledger.present.look import VIEW

    tabs = widget(QtWidgets.QTabWidget, "SpanledgerTabs")
    tabs.setCurrentIndex(2)
    settle(0.2)
    tree = widget(QtWidgets.QTreeWidget, "SpanledgerBearings")
    found = {"bearings": tree.topLevelItemCount()}
    picture_of_screen("reactions")
    line = desk.solved.outcome.lines[0].line
    where = decisions.where_is(line, 0)
    desk.decide("fixed", lambda text: decisions.decide_support(text, where, "fixed"))
    wait_until(lambda: not desk.runs.busy, what="the run")
    box = widget(QtWidgets.QComboBox, "SpanledgerShadedBy")
    box.setCurrentIndex(box.findData("change"))
    desk.choose_line(10)
    image = picture_of_view("shaded_view")
    picture_of_screen("shaded")
    found["changed"] = count_pixels(image, VIEW["attention"], 30)
    box.setCurrentIndex(box.findData("plain"))
    found["plain"] = count_pixels(picture_of_view("plain_view"), VIEW["attention"], 30)

    desk.choose_line(3)
    canvas = widget(QtWidgets.QWidget, "SpanledgerCanvas")
    spot = next(s for s in canvas.drawing.spots if (s.kind, s.number) == ("joint", 0))
    click(canvas, QtCore.QPoint(round((spot.left + spot.right) / 2), round(spot.bottom - 4)))
    lead = widget(QtWidgets.QPushButton, "SpanledgerPath0")
    found["words"] = lead.text()
    click(lead)
    found["carried_by"] = desk.line
    return found


def compare():
    """Compare a model with an earlier revision, in which one profile was less deep."""
    desk = activate()
    path = copied()
    earlier = path.with_name("earlier.ifc")
    shutil.copy(path, earlier)
    text = path.read_text(encoding="utf-8")
    before, name, after = text.partition("'IPE 300'")
    _, _position, width, depth, _ = after.split(",", 4)
    deeper = after.replace(f",{width},{depth},", f",{width},{1.5 * float(depth)},", 1)
    path.write_text(before + name + deeper, encoding="utf-8")
    found = {}
    opened(desk, path)
    desk.compare(earlier)
    wait_until(lambda: not desk.runs.busy, what="the comparison")
    settle()
    tree = widget(QtWidgets.QTreeWidget, "SpanledgerChanges")
    found["changed"] = tree.topLevelItemCount()
    found["summary"] = widget(QtWidgets.QLabel, "SpanledgerChangeSummary").text()
    found["reasons"] = [tree.topLevelItem(i).text(3) for i in range(tree.topLevelItemCount())]
    tree.setCurrentItem(tree.topLevelItem(0))
    settle(0.2)
    found["line"] = desk.solved.outcome.lines[desk.line].line.mark
    found["first"] = tree.topLevelItem(0).text(1)
    found["dashed"] = sum(s.dashed for s in desk.panels.strip.canvas.drawing.strokes)
    widget(QtWidgets.QCheckBox, "SpanledgerChangeEvery").setChecked(True)
    found["every"] = tree.topLevelItemCount()
    picture_of_screen("compare")
    return found


def language():
    """Show the desk in another language."""
    desk = activate()
    opened(desk, copied())
    canvas = widget(QtWidgets.QWidget, "SpanledgerCanvas")
    picture_of_screen("language")
    model = desk.panels.list.model
    bar = widget(QtWidgets.QTabWidget, "SpanledgerTabs")
    return {
        "tabs": [bar.tabText(i) for i in range(bar.count())],
        "title": widget(QtWidgets.QLabel, "SpanledgerTitle").text(),
        "words": [w.text for w in canvas.drawing.words],
        "states": [model.data(model.index_of(0).siblingAtColumn(1))],
    }


def every_model():
    """Open each model in turn, look at every line and every view of it."""
    desk = activate()
    found = {}
    for path in os.environ["SPANLEDGER_MODELS"].split(os.pathsep):
        copy = PICTURES / "work" / Path(path).name
        copy.parent.mkdir(exist_ok=True)
        shutil.copy(path, copy)
        desk.open_model(copy)
        wait_until(lambda: not desk.runs.busy, 120.0, f"the run of {copy.name}")
        if desk.solved is None:
            found[copy.name] = desk.panels.running.message.text()
            continue
        wait_until(lambda: not desk.runs.busy_behind, 120.0, "the building")
        views = widget(QtWidgets.QComboBox, "SpanledgerView")
        count = len(desk.solved.outcome.lines)
        for line in range(min(count, 12)):
            desk.choose_line(line)
            views.setCurrentIndex(line % max(views.count(), 1))
            for kind in ("joint", "member", "action"):
                spots = desk.panels.strip.canvas.drawing.spots
                desk.choose_spot(next((s for s in spots if s.kind == kind), None))
        settle(0.2)
        picture_of_screen(f"model_{copy.stem}")
        found[copy.name] = count
    return found


def use():
    """Tell lines apart by use of capacity, redistribute moments, and reopen what was posted."""
    desk = activate()
    path = copied()
    opened(desk, path)
    found = {}
    tree = desk.panels.list.model
    wait_until(lambda: tree.index_of(0).isValid() and bool(desk.opened.checks), what="the checks")
    settle(0.2)
    found["use"] = tree.data(tree.index_of(0).siblingAtColumn(7))
    box = widget(QtWidgets.QComboBox, "SpanledgerShadedBy")
    box.setCurrentIndex(box.findData("use"))
    canvas = widget(QtWidgets.QWidget, "SpanledgerCanvas")
    spot = next(s for s in canvas.drawing.spots if (s.kind, s.number) == ("member", 1))
    desk.choose_spot(spot)
    picture_of_screen("use")
    found["facts"] = " ".join(
        label.text() for label in desk.panels.strip.findChildren(QtWidgets.QLabel)
        if label.objectName() == "SpanledgerFacts"
    )  # fmt: skip
    desk.choose_spot(None)
    widget(QtWidgets.QLineEdit, "SpanledgerRedistribution").setText("15 %")
    click(widget(QtWidgets.QPushButton, "SpanledgerDecideRedistribution"))
    wait_until(lambda: not desk.runs.busy, what="the run")
    settle(0.3)
    strip = canvas.strip
    found["redistributed"] = strip.curves["moment"].redistributed is not None
    picture_of_screen("redistributed")

    target = path.with_name("posted.ifc")
    desk.post(target)
    wait_until(lambda: not desk.runs.busy, what="posting")
    shutil.copy(path.with_suffix(".yaml"), target.with_suffix(".yaml"))
    opened(desk, target)
    found["reopened"] = sorted({row.state for row in tree._rows})
    line = desk.solved.outcome.lines[0].line
    from freecad.spanledger.present import decisions

    where = decisions.where_is(line, 0)
    desk.decide("fixed", lambda text: decisions.decide_support(text, where, "fixed"))
    wait_until(lambda: not desk.runs.busy, what="the run")
    settle(0.3)
    rows = {row.mark: row for row in tree._rows}
    found["after"] = rows["FF-01"].state
    found["reason"] = rows["FF-01"].reason
    found["others"] = sorted({row.state for mark, row in rows.items() if mark != "FF-01"})
    return found
