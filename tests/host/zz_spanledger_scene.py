"""Run by FreeCAD itself: calls one scene of ``host_scenes`` and writes down what it found.

FreeCAD imports this by its name, which must be unlike any other module's.  Leaving through
``os._exit`` is the one way that always ends the window with the right status.
"""

import importlib
import json
import os
import sys
import traceback
from pathlib import Path

import FreeCAD

sys.path.append(str(Path(__file__).resolve().parent))
sys.path.append(str(Path(__file__).resolve().parents[1] / "addon"))


def guarded():
    found, status = {}, 1
    try:
        module, name = os.environ["SPANLEDGER_SCENE"].split(":")
        found, status = getattr(importlib.import_module(module), name)(), 0
    except BaseException:
        found = {"error": traceback.format_exc()}
    with open(os.environ["SPANLEDGER_RESULT"], "w", encoding="utf-8") as file:
        json.dump(found, file)
    sys.stdout.flush()
    sys.stderr.flush()
    os._exit(status)


if FreeCAD.GuiUp:
    from PySide import QtCore

    QtCore.QTimer.singleShot(0, guarded)  # once the event loop is up
else:
    guarded()
