"""The one place that imports Qt, so that one code base runs on FreeCAD 0.20 and later.

FreeCAD's ``PySide`` stands for the Qt binding it was built with.  In 0.20 it has no
``QtWidgets``; the widgets are in ``QtGui`` there.  Nothing later than 0.20 has been run.
"""

from PySide import QtCore, QtGui

try:
    from PySide import QtWidgets
except ImportError:  # FreeCAD 0.20
    QtWidgets = QtGui

Qt = QtCore.Qt
Signal = QtCore.Signal
Slot = QtCore.Slot

__all__ = ["Qt", "QtCore", "QtGui", "QtWidgets", "Signal", "Slot"]
