"""Scenes about who destroys what, and when: what goes wrong there ends the program."""

import gc
import threading
import weakref

import FreeCAD
import shiboken2
from host_tools import QtCore, QtGui, QtWidgets, activate, click, settle, wait_until, widget
from scenes_model import copied, opened


def rubbish():
    """Leave a widget in a circle of references while a thread makes very many objects."""
    desk = activate()
    found = {"was_on": gc.isenabled()}

    class Forgotten(QtWidgets.QLabel):
        pass

    def task(_progress):
        kept = [[] for _ in range(100_000)]
        found["on_in_thread"] = gc.isenabled()
        found["there"] = alive() is not None
        found["made"] = len(kept)

    window_thread = threading.get_ident()
    gc.collect()
    label = Forgotten()
    label.itself = label
    alive = weakref.ref(label)
    label.destroyed.connect(
        lambda *_: found.update(in_window=threading.get_ident() == window_thread)
    )
    del label
    desk.runs.start(task, lambda _result: None)
    wait_until(lambda: not desk.runs.busy, what="the thread")
    settle(0.1)
    found["on_again"] = gc.isenabled()
    gc.collect()
    found["gone"] = alive() is None
    return found


def own_click():
    """Follow a button to another line, which rebuilds the panel that the button stands on."""
    desk = activate()
    opened(desk, copied())
    desk.choose_line(3)
    spots = desk.panels.strip.canvas.drawing.spots
    desk.choose_spot(next(s for s in spots if (s.kind, s.number) == ("joint", 0)))
    lead = widget(QtWidgets.QPushButton, "SpanledgerPath0")
    found = {}
    # Called after the desk's own slot, in the same click.
    lead.clicked.connect(lambda: found.update(line=desk.line, there=shiboken2.isValid(lead)))
    click(lead)
    # What is to be deleted later waits for the event loop, which a scene never returns to.
    QtWidgets.QApplication.sendPostedEvents(None, QtCore.QEvent.DeferredDelete)
    found["gone"] = not shiboken2.isValid(lead)
    found["windows"] = sum(w.isVisible() for w in QtWidgets.QApplication.topLevelWidgets())
    return found


def faulty_painting():
    """Let the painting of the strip fail."""
    desk = activate()
    opened(desk, copied())
    from freecad.spanledger.desk import painting

    picture = QtGui.QPixmap(10, 10)
    found = {}
    try:
        with painting.painting(picture) as painter:
            raise ValueError
    except ValueError:
        found["painter_ended"] = not painter.isActive()
    canvas = desk.panels.strip.canvas
    canvas.drawing = object()  # what cannot be painted
    canvas.choose(None)
    canvas._painted = None
    canvas.repaint()
    settle(0.2)
    desk.choose_line(2)
    settle(0.2)
    found["painted_again"] = canvas._painted is not None
    return found


def other_document():
    """Make another document active while a run goes on, and come back; type while it goes on."""
    desk = activate()
    opened(desk, copied())
    from freecad.spanledger.present import decisions

    first = FreeCAD.ActiveDocument.Name
    FreeCAD.newDocument("Other")
    settle(0.2)
    FreeCAD.setActiveDocument(first)
    settle(0.2)
    desk.choose_line(10)
    where = decisions.where_is(desk.solved.outcome.lines[0].line, 0)
    desk.decide("fixed", lambda text: decisions.decide_support(text, where, "fixed"))
    FreeCAD.setActiveDocument("Other")
    wait_until(lambda: not desk.runs.busy, what="the run")
    settle(0.3)
    found = {"elsewhere": [desk.panels.list.model.shown(), desk.panels.strip.title.text()]}
    found["objects"] = len(FreeCAD.getDocument("Other").Objects)
    FreeCAD.setActiveDocument(first)
    settle(0.3)
    found["back"] = desk.panels.list.model.shown()
    support = desk.solved.outcome.lines[0].line.joints[0].support
    found["fixed"] = support.rotation > 0.0

    desk.choose_line(0)
    spots = desk.panels.strip.canvas.drawing.spots
    desk.choose_spot(next(s for s in spots if (s.kind, s.number) == ("member", 1)))
    widget(QtWidgets.QLineEdit, "SpanledgerActionValue").setText("12.5")
    name, model = FreeCAD.ActiveDocument.Name, desk.opened
    desk._look_closer(name, model.outcome, model.settings)
    wait_until(lambda: not desk.runs.busy_behind, what="the checks")
    settle(0.1)
    found["typed"] = widget(QtWidgets.QLineEdit, "SpanledgerActionValue").text()
    return found
