"""Scenes with other sections and materials for members, by real clicks."""

import os

import FreeCADGui
from host_tools import (
    PICTURES,
    QtWidgets,
    activate,
    click,
    picture_of_screen,
    settle,
    wait_until,
    widget,
    window,
)
from PySide import QtCore
from PySide2 import QtTest
from scenes_model import PHYSICAL, SAMPLES, copied, opened


def look_of():
    return os.environ.get("SPANLEDGER_LOOK", "")


def wait_for_run(desk, what="the run"):
    wait_until(lambda: not desk.runs.busy, what=what, seconds=60.0)
    settle(0.2)


def dialog(name):
    """Return an open window of ours by its object name."""
    wait_until(lambda: _open(name) is not None, what=name)
    settle(0.2)
    return _open(name)


def _open(name):
    return next(
        (w for w in QtWidgets.QApplication.topLevelWidgets()
         if w.objectName() == name and w.isVisible()), None
    )  # fmt: skip


def child(of, kind, name):
    found = of.findChild(kind, name)
    assert found is not None, f"no {kind.__name__} named {name} in {of.objectName()}"
    return found


def choose_line(desk, mark):
    number = next(i for i, r in enumerate(desk.solved.outcome.lines) if r.line.mark == mark)
    desk.choose_line(number)
    settle(0.2)
    return number


def section_of(desk, mark):
    line = next(r.line for r in desk.solved.outcome.lines if r.line.mark == mark)
    return [(m.section.name, m.material.name) for m in line.members]


def give():
    """Give a line a section of the host and a material; undo, redo, take back; post."""
    desk = activate()
    path = copied()
    job = path.with_suffix(".yaml")
    before = job.read_text(encoding="utf-8")
    opened(desk, path)
    choose_line(desk, "FF-04")
    found = {"was": section_of(desk, "FF-04")}

    click(widget(QtWidgets.QPushButton, "SpanledgerChooseSection"))
    box = dialog("SpanledgerSection")
    scope = child(box, QtWidgets.QComboBox, "SpanledgerSectionScope")
    found["scopes"] = [scope.itemText(i) for i in range(scope.count())]
    table = box.table
    found["picked"] = table.candidate().name
    kinds = child(box, QtWidgets.QComboBox, "SpanledgerProfileKind")
    found["kinds"] = [kinds.itemText(i) for i in range(kinds.count())]
    found["of_steel"] = table.model.rowCount()
    others = child(box, QtWidgets.QCheckBox, "SpanledgerOtherMaterials")
    tick = QtCore.QPoint(8, others.height() // 2)
    click(others, tick)
    found["of_host"] = table.model.rowCount()
    found["all_kinds"] = [kinds.itemText(i) for i in range(kinds.count())]
    click(others, tick)
    child(box, QtWidgets.QLineEdit, "SpanledgerProfileFilter").setText("ipe 24 freecad")
    settle(0.3)
    found["filtered"] = [row.texts[0] for row in table.model.rows]
    table.pick("IPE240")
    settle(0.2)
    found["compared"] = child(box, QtWidgets.QLabel, "SpanledgerSectionChange").text()
    materials = child(box, QtWidgets.QComboBox, "SpanledgerMaterial")
    found["materials"] = [materials.itemText(i) for i in range(materials.count())]
    picture_of_screen("section" + look_of())
    click(child(box, QtWidgets.QPushButton, "SpanledgerTakeSection"))
    wait_for_run(desk)
    found["now"] = section_of(desk, "FF-04")
    found["moved"] = desk.panels.running.message.text()
    found["job"] = job.read_text(encoding="utf-8")
    found["findings"] = [f.message for f in desk.solved.outcome.findings
                         if f.slug == "member-given"]  # fmt: skip
    picture_of_screen("section_taken" + look_of())
    FreeCADGui.runCommand("Spanledger_Undo")
    wait_for_run(desk)
    found["undone"] = [section_of(desk, "FF-04"), job.read_text(encoding="utf-8") == before]
    FreeCADGui.runCommand("Spanledger_Redo")
    wait_for_run(desk)
    found["redone"] = section_of(desk, "FF-04")

    # The preview of what is written lists the members that change in the model.
    FreeCADGui.runCommand("Spanledger_Post")
    box = dialog("SpanledgerPost")
    tree = child(box, QtWidgets.QTreeWidget, "SpanledgerPostChanges")
    found["preview"] = [
        [tree.topLevelItem(i).text(c) for c in range(4)] for i in range(tree.topLevelItemCount())
    ]
    picture_of_screen("post_members" + look_of())
    target = path.with_name("posted.ifc")
    child(box, QtWidgets.QLineEdit, "SpanledgerPostPath").setText(str(target))
    click(child(box, QtWidgets.QPushButton, "SpanledgerPostNow"))
    wait_for_run(desk, "posting")
    found["told"] = desk.panels.running.message.text()
    found["untouched"] = path.read_bytes() == (SAMPLES / PHYSICAL).read_bytes()
    from analysis_core import pipeline

    after = pipeline.run(target)
    line = next(r.line for r in after.lines if r.line.mark == "FF-04")
    found["in_file"] = [m.section.name for m in line.members]

    # Back to what the model has.
    click(widget(QtWidgets.QPushButton, "SpanledgerChooseSection"))
    box = dialog("SpanledgerSection")
    found["known_now"] = box.table.candidate().name
    click(child(box, QtWidgets.QPushButton, "SpanledgerAsModelled"))
    wait_for_run(desk)
    found["taken_back"] = section_of(desk, "FF-04")
    return found


def in_place():
    """Give a line a profile of the model and write it into the model itself."""
    desk = activate()
    path = copied()
    opened(desk, path)
    choose_line(desk, "FF-04")
    FreeCADGui.runCommand("Spanledger_Section")
    box = dialog("SpanledgerSection")
    box.table.pick("IPE 270")
    click(child(box, QtWidgets.QPushButton, "SpanledgerTakeSection"))
    wait_for_run(desk)
    FreeCADGui.runCommand("Spanledger_Post")
    box = dialog("SpanledgerPost")
    found = {
        "changes": child(box, QtWidgets.QTreeWidget, "SpanledgerPostChanges").topLevelItemCount()
    }
    child(box, QtWidgets.QRadioButton, "SpanledgerPostItself").setChecked(True)
    click(child(box, QtWidgets.QPushButton, "SpanledgerPostNow"))
    before = desk.opened.outcome
    wait_until(lambda: desk.opened.outcome is not before, what="reading again")
    wait_for_run(desk)
    from analysis_core import pipeline

    after = pipeline.survey(path).model
    line = next(x for x in after.lines if x.mark == "FF-04")
    found["in_file"] = line.members[0].section.name
    found["now"] = section_of(desk, "FF-04")[0][0]
    slugs = {f.slug for f in desk.solved.outcome.findings}
    found["findings"] = sorted(slugs & {"member-given", "member-not-given"})
    found["states"] = sorted({row.state for row in desk.panels.list.model._rows})
    FreeCADGui.runCommand("Spanledger_Post")
    box = dialog("SpanledgerPost")
    found["nothing_left"] = box.members.isVisible()
    box.reject()
    return found


def lightest():
    """Seek the lightest section of the host, stop once, apply, undo."""
    desk = activate()
    path = copied()
    job = path.with_suffix(".yaml")
    before = job.read_text(encoding="utf-8")
    opened(desk, path)
    choose_line(desk, "FF-05")
    found = {}
    FreeCADGui.runCommand("Spanledger_Lightest")
    box = dialog("SpanledgerLightest")
    source = child(box, QtWidgets.QComboBox, "SpanledgerLightestSource")
    found["sources"] = [source.itemText(i) for i in range(source.count())]
    source.setCurrentIndex(source.findData("host"))
    kinds = child(box, QtWidgets.QListWidget, "SpanledgerLightestKinds")
    found["kinds"] = [kinds.item(i).text() for i in range(kinds.count())]
    scope = child(box, QtWidgets.QComboBox, "SpanledgerLightestScope")
    found["scopes"] = [scope.itemText(i) for i in range(scope.count())]
    find = child(box, QtWidgets.QPushButton, "SpanledgerFindLightest")

    click(find)
    wait_until(lambda: box.bar.value() > 0, what="progress")
    picture_of_screen("lightest_running" + look_of())
    found["running"] = [box.stop.isVisible(), find.isEnabled(), desk.runs.busy]
    click(child(box, QtWidgets.QPushButton, "SpanledgerStopLightest"))
    wait_for_run(desk, "the end of the search")
    found["stopped"] = child(box, QtWidgets.QLabel, "SpanledgerLightestMessage").text()
    found["may_apply"] = box.apply.isEnabled()

    for number in range(kinds.count()):
        if kinds.item(number).text() in ("IPE", "HEA"):
            kinds.item(number).setCheckState(QtCore.Qt.CheckState.Checked)
    scope.setCurrentIndex(1)
    click(find)
    wait_for_run(desk, "the search")
    found["summary"] = child(box, QtWidgets.QLabel, "SpanledgerLightestSummary").text()
    assert box.candidates.topLevelItemCount(), box.message.text()
    tree = child(box, QtWidgets.QTreeWidget, "SpanledgerCandidates")
    found["candidates"] = [
        [tree.topLevelItem(i).text(c) for c in range(7)] for i in range(tree.topLevelItemCount())
    ]
    effects = child(box, QtWidgets.QTreeWidget, "SpanledgerEffects")
    found["effects"] = [
        [effects.topLevelItem(i).text(c) for c in range(5)]
        for i in range(effects.topLevelItemCount())
    ]
    found["still"] = job.read_text(encoding="utf-8") == before
    picture_of_screen("lightest" + look_of())
    click(child(box, QtWidgets.QPushButton, "SpanledgerApplyLightest"))
    wait_for_run(desk)
    wait_until(lambda: not desk.runs.busy_behind, what="the checks")
    found["applied"] = {m: section_of(desk, m)[0][0] for m in ("FF-04", "FF-05", "FF-06", "FF-07")}
    found["use"] = max(c.worst.use for c in desk.opened.checks["FF-05"] if c.worst)
    found["job"] = job.read_text(encoding="utf-8")
    found["moved"] = desk.panels.running.message.text()
    picture_of_screen("lightest_applied" + look_of())
    FreeCADGui.runCommand("Spanledger_Undo")
    wait_for_run(desk)
    found["undone"] = job.read_text(encoding="utf-8") == before
    return found


def every_kind():
    """One section for all lines of a kind, for every kind, by keyboard alone."""
    desk = activate()
    opened(desk, copied())
    choose_line(desk, "FF-05")
    FreeCADGui.runCommand("Spanledger_Lightest")
    box = dialog("SpanledgerLightest")
    box.scope.setFocus()
    QtTest.QTest.keyClick(box.scope, QtCore.Qt.Key_End)
    found = {"scope": box.scope.currentText()}
    QtTest.QTest.keyClick(box, QtCore.Qt.Key_Return)
    wait_for_run(desk, "the search")
    groups = child(box, QtWidgets.QListWidget, "SpanledgerLightestGroups")
    found["groups"] = [groups.item(i).text() for i in range(groups.count())]
    found["summaries"] = []
    groups.setFocus()
    groups.setCurrentRow(0)
    for _ in range(groups.count()):
        found["summaries"].append(box.summary.text())
        QtTest.QTest.keyClick(groups, QtCore.Qt.Key_Down)
    found["total"] = box.message.text()
    picture_of_screen("lightest_kinds" + look_of())
    QtTest.QTest.keyClick(box, QtCore.Qt.Key_Escape)
    settle(0.2)
    found["closed"] = not box.isVisible()
    found["spoken"] = sorted(
        w.objectName()
        for w in box.findChildren(QtWidgets.QWidget)
        if w.focusPolicy() != QtCore.Qt.NoFocus
        and w.objectName().startswith("Spanledger")
        and not (w.accessibleName() or getattr(w, "text", str)())
    )
    return found


def sheet():
    """A section table beside the job file is found; the sheet is written with its checks."""
    desk = activate()
    path = copied()
    job = path.with_suffix(".yaml")
    (path.parent / "own.csv").write_text(
        "name,shape,depth,width\nMy 200x400,rectangle,400 mm,200 mm\n", encoding="utf-8"
    )
    job.write_text(job.read_text(encoding="utf-8") + "\nsection_table: own.csv\n", "utf-8")
    opened(desk, path)
    found = {"table": [s.name for s in desk.opened.settings.section_table]}
    choose_line(desk, "FF-02")
    click(widget(QtWidgets.QPushButton, "SpanledgerChooseSection"))
    box = dialog("SpanledgerSection")
    box.table.pick("My 200x400")
    settle(0.2)
    click(child(box, QtWidgets.QPushButton, "SpanledgerTakeSection"))
    wait_for_run(desk)
    found["given"] = section_of(desk, "FF-02")[0][0]
    found["listed"] = "own.csv" in job.read_text(encoding="utf-8")

    from freecad.spanledger.desk.sheet_writing import write_sheet

    found["command"] = FreeCADGui.Command.get("Spanledger_Sheet").isActive()
    target = PICTURES / "work" / "sheet.html"
    write_sheet(desk, target)
    wait_for_run(desk, "the sheet")
    found["told"] = desk.panels.running.message.text()
    text = target.read_text(encoding="utf-8")
    found["checks"] = text.count("1992-1-1") + text.count("1993-1-1")
    found["section"] = "My 200x400" in text
    write_sheet(desk, path)
    found["refused"] = desk.panels.running.message.text()
    found["model"] = path.read_bytes() == (SAMPLES / PHYSICAL).read_bytes()
    actions = [a.text() for a in window().findChildren(QtWidgets.QAction)]
    found["menu"] = [t for t in actions if "heet…" in t]
    return found
