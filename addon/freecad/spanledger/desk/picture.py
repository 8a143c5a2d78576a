"""The 3D view of the open models: lines, diagrams, and the building behind them."""

from __future__ import annotations

from typing import Any

import FreeCAD
import FreeCADGui

from .. import document
from ..opened_model import OpenedModel
from ..present.diagrams import View, ordinates_of
from ..present.scene import drawn_stations
from ..present.shades import shades
from ..qt import QtCore
from ..texts import translate


class Picture:
    """Keeps the document objects in step with the opened_models."""

    def __init__(self) -> None:
        self.building_shown = True
        self._drawn: dict[str, document.Drawn] = {}
        self._shapes: dict[str, Any] = {}  # a building as large as a town is not sent twice

    def show(self, name: str, opened: OpenedModel, states: list[str]) -> None:
        """Draw the lines of a model into its document, in one step where it is the first."""
        doc = FreeCAD.getDocument(name)
        obj = document.find_beam_lines(doc)
        if obj is not None:
            before = self._drawn.get(name)
            self._drawn[name] = document.show_outcome(obj, opened.outcome, states, before)
            return
        self._shapes.pop(name, None)
        doc.openTransaction(translate("Spanledger", "Beam lines"))
        try:
            obj = _add_object(doc, opened)
            self._drawn[name] = document.show_outcome(obj, opened.outcome, states)
        except Exception:
            doc.abortTransaction()
            raise
        doc.commitTransaction()
        _look_at_all(doc)

    def show_diagram(self, name: str, opened: OpenedModel, view: View, quantity: str) -> None:
        """Draw a quantity along all lines."""
        obj = document.find_beam_lines(FreeCAD.getDocument(name))
        if obj is not None and name in self._drawn:
            scene, _supports = self._drawn[name]
            stations = drawn_stations(len(scene.ends))
            ordinates = ordinates_of(opened.outcome.lines, view, quantity, stations)
            document.show_diagram(obj, scene, ordinates)

    def shade(self, name: str, way: str, numbers: list[int]) -> None:
        """Tell lines apart by a class each."""
        obj = document.find_beam_lines(FreeCAD.getDocument(name))
        if obj is not None:
            obj.ViewObject.Proxy.shade(shades(way), numbers)

    def show_states(self, name: str, states: list[str]) -> None:
        """Write down the states of the lines."""
        obj = document.find_beam_lines(FreeCAD.getDocument(name))
        if obj is not None:
            obj.States = states

    def show_building(self, name: str, opened: OpenedModel) -> None:
        """Draw the building faintly, or not where it is switched off."""
        obj = document.find_beam_lines(FreeCAD.getDocument(name))
        shape = opened.shape if self.building_shown else None
        if obj is not None and self._shapes.get(name) is not shape:
            self._shapes[name] = shape
            obj.ViewObject.Proxy.show_building(shape)

    def redraw(self, name: str) -> None:
        """Let the 3D view be painted together with the docks, and not a moment later."""
        gui = FreeCADGui.getDocument(name)
        view = gui.activeView() if gui else None
        if view is not None and hasattr(view, "redraw"):
            view.redraw()

    def forget(self, name: str) -> None:
        """A document was closed."""
        self._drawn.pop(name, None)
        self._shapes.pop(name, None)


def _add_object(doc: Any, opened: OpenedModel) -> Any:
    from ..draw.view import BeamLinesView

    obj = document.add_beam_lines(doc)
    obj.IfcFile, obj.JobFile = str(opened.path), str(opened.job_path)
    BeamLinesView(obj.ViewObject)
    obj.ViewObject.DisplayMode = obj.ViewObject.Proxy.getDefaultDisplayMode()
    return obj


def _look_at_all(doc: Any) -> None:
    gui = FreeCADGui.getDocument(doc.Name)
    view = gui.activeView() if gui else None
    if view is not None and hasattr(view, "viewIsometric"):
        view.viewIsometric()
        name = doc.Name
        QtCore.QTimer.singleShot(0, lambda: _fit(name))  # once the docks have taken their room


def _fit(name: str) -> None:
    """Look at all of a document; it may have been closed since, and its view be gone."""
    gui = FreeCADGui.getDocument(name) if name in FreeCAD.listDocuments() else None
    view = gui.activeView() if gui else None
    if view is not None and hasattr(view, "fitAll"):
        view.fitAll()
