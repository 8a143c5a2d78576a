"""What scenes share inside FreeCAD: waiting, clicking, and pictures."""

import os
import time
from pathlib import Path

import FreeCAD
import FreeCADGui
from PySide import QtCore, QtGui

QtWidgets = QtGui  # FreeCAD 0.20: PySide.QtGui holds the widgets too
PICTURES = Path(os.environ["SPANLEDGER_PICTURES"])


def settle(seconds=0.4):
    """Let the window work off its events; too early shows old texts."""
    end = time.monotonic() + seconds
    while time.monotonic() < end:
        QtWidgets.QApplication.processEvents()
        time.sleep(0.01)


def wait_until(true, seconds=30.0, what="it"):
    """Work off events until something is true."""
    end = time.monotonic() + seconds
    while not true():
        assert time.monotonic() < end, f"waited {seconds} s for {what}"
        QtWidgets.QApplication.processEvents()
        time.sleep(0.005)


def window():
    return FreeCADGui.getMainWindow()


def widget(kind, name):
    """Return a widget of the window by its object name."""
    found = window().findChild(kind, name)
    assert found is not None, f"no {kind.__name__} named {name}"
    return found


def click(target, where=None, button=QtCore.Qt.LeftButton):
    """Click on a widget like a mouse."""
    from PySide2 import QtTest

    if where is None:
        QtTest.QTest.mouseClick(target, button)
    else:
        QtTest.QTest.mouseClick(target, button, QtCore.Qt.NoModifier, where)
    settle(0.2)


def picture_of_screen(name):
    """Keep a picture of the whole window, 3D view included."""
    settle(0.5)
    window().statusBar().clearMessage()  # what other add-ons say at the start
    settle(0.05)
    window().screen().grabWindow(0).save(str(PICTURES / f"{name}.png"))


def picture_of_view(name, size=(1000, 700)):
    """Keep a picture of the 3D view alone and return it as an image."""
    settle(0.3)
    path = str(PICTURES / f"{name}.png")
    FreeCADGui.ActiveDocument.ActiveView.saveImage(path, *size, "White")
    return QtGui.QImage(path)


def count_pixels(image, colour, spread=40):
    """Return how many pixels are near a colour."""
    import numpy as np

    image = image.convertToFormat(QtGui.QImage.Format_RGB32)
    pixels = np.frombuffer(image.constBits(), dtype=np.uint8).reshape(-1, 4)[:, 2::-1]
    near = np.abs(pixels.astype(int) - np.array(colour)) <= spread
    return int(near.all(axis=1).sum())


def activate():
    """Choose the workbench as the user does, and return its desk."""
    window().showNormal()
    window().setGeometry(0, 0, 1600, 1000)
    FreeCADGui.activateWorkbench("SpanledgerWorkbench")
    settle()
    from freecad.spanledger.desk import the_desk

    return the_desk()


def close_documents():
    for name in list(FreeCAD.listDocuments()):
        FreeCAD.closeDocument(name)
