"""The document object that keeps the beam lines of one IFC model.

The file and its GlobalIds are the truth; the object keeps what is drawn, so that a saved
document shows it again, and opens even where the add-on is missing.  The module path of the class
is written into saved documents: it must not change.  Works without a window.
"""

from __future__ import annotations

from typing import Any

import FreeCAD
import numpy as np

from .present.diagrams import Ordinates
from .present.scene import Scene, Supports, diagram_height, scene_of, supports_of

TYPE = "Spanledger::BeamLines"
NAME = "BeamLines"

_PROPERTIES = (
    # type, name, group, description
    ("App::PropertyFile", "IfcFile", "Model", "The IFC file that the lines were read from"),
    ("App::PropertyFile", "JobFile", "Model", "The job file with the decisions"),
    ("App::PropertyString", "Schema", "Model", "Schema of the IFC file"),
    ("App::PropertyVector", "Origin", "Model", "World point (mm) that is drawn at the origin"),
    ("App::PropertyString", "Fingerprint", "Model", "Digest of the IFC file when it was read"),
    ("App::PropertyStringList", "Marks", "Lines", "Mark of each line"),
    ("App::PropertyStringList", "Storeys", "Lines", "Storey of each line"),
    ("App::PropertyStringList", "States", "Lines", "State of each line"),
    ("App::PropertyVectorList", "Ends", "Members", "Start and end of each member"),
    ("App::PropertyVectorList", "Down", "Members", "Direction of positive deflection"),
    ("App::PropertyIntegerList", "MemberLine", "Members", "Line that each member belongs to"),
    ("App::PropertyStringList", "Elements", "Members", "GlobalId of each member's element"),
    ("App::PropertyVectorList", "SupportAt", "Supports", "Joints that something holds"),
    ("App::PropertyVectorList", "SupportRight", "Supports", "Direction of the line at each"),
    ("App::PropertyFloatList", "SupportStiffness", "Supports", "Vertical, rotation; -1 is rigid"),
    ("App::PropertyString", "Shown", "Diagram", "What the diagram shows"),
    ("App::PropertyString", "Quantity", "Diagram", "moment, shear or deflection"),
    ("App::PropertyInteger", "Stations", "Diagram", "Ordinates per member"),
    ("App::PropertyFloatList", "Upper", "Diagram", "Largest ordinates"),
    ("App::PropertyFloatList", "Lower", "Diagram", "Smallest ordinates"),
    ("App::PropertyFloat", "Height", "Diagram", "Millimetres drawn per unit of the ordinate"),
    # Written last: drawing follows these alone, once all that belongs together is there.
    ("App::PropertyInteger", "LinesDrawn", "Drawing", "Counts how often lines were written"),
    ("App::PropertyInteger", "DiagramDrawn", "Drawing", "Counts how often a diagram was written"),
)


class BeamLines:
    """Proxy of the document object; it keeps nothing itself."""

    def __init__(self, obj: Any) -> None:
        obj.Proxy = self
        for kind, name, group, text in _PROPERTIES:
            obj.addProperty(kind, name, group, text)
            obj.setEditorMode(name, 1)  # shown, not typed into: the file is the truth

    def execute(self, obj: Any) -> None:
        """Nothing to recompute: the numbers come from a run."""

    def dumps(self) -> None:
        return None

    def loads(self, _state: object) -> None:
        return None

    __getstate__ = dumps  # names of 0.20
    __setstate__ = loads


def add_beam_lines(document: Any) -> Any:
    """Return a new, empty object in ``document``."""
    obj = document.addObject("App::FeaturePython", NAME)
    BeamLines(obj)
    return obj


def find_beam_lines(document: Any) -> Any | None:
    """Return the object of ``document``, None where it has none."""
    for obj in document.Objects if document else ():
        if isinstance(getattr(obj, "Proxy", None), BeamLines):
            return obj
    return None


Drawn = tuple[Scene, Supports]


def drawn_of(outcome: Any) -> Drawn:
    """Return what is drawn of the lines of a run."""
    scene = scene_of(outcome.model.lines)
    return scene, supports_of(outcome.model.lines, scene.origin)


def show_outcome(obj: Any, outcome: Any, states: list[str], before: Drawn | None = None) -> Drawn:
    """Write the lines of a run into the object, and return what is drawn of them.

    Where that is what was drawn ``before``, it stays; otherwise the diagram is emptied.
    """
    scene, supports = drawn_of(outcome)
    obj.Schema = outcome.schema
    obj.Fingerprint = outcome.fingerprint
    obj.Storeys = [line.storey or "" for line in outcome.model.lines]
    obj.States = states
    obj.Label = outcome.file
    if before is not None and scene.drawn_like(before[0]) and supports.drawn_like(before[1]):
        return before
    _write_lines(obj, scene, supports)
    return scene, supports


def _write_lines(obj: Any, scene: Scene, supports: Supports) -> None:
    obj.Origin = FreeCAD.Vector(*scene.origin)
    obj.Marks = list(scene.marks)
    obj.Ends = _vectors(scene.ends.reshape(-1, 3))
    obj.Down = _vectors(scene.down)
    obj.MemberLine = scene.line_index.tolist()
    obj.Elements = list(scene.elements)
    obj.SupportAt, obj.SupportRight = _vectors(supports.at), _vectors(supports.right)
    stiffness = np.where(np.isinf(supports.stiffness), -1.0, supports.stiffness)
    obj.SupportStiffness = stiffness.ravel().tolist()  # a saved document knows no infinity
    obj.Stations, obj.Upper, obj.Lower, obj.Shown = 0, [], [], ""
    obj.LinesDrawn += 1


def show_diagram(obj: Any, scene: Scene, ordinates: Ordinates) -> None:
    """Write a diagram into the object, scaled to suit the spans."""
    obj.Height = diagram_height(scene, ordinates.upper, ordinates.lower)
    obj.Stations = int(ordinates.upper.shape[1])
    obj.Quantity = ordinates.quantity
    obj.Shown = ordinates.title
    obj.Upper = ordinates.upper.ravel().tolist()
    obj.Lower = ordinates.lower.ravel().tolist()
    obj.DiagramDrawn += 1


def scene_in(obj: Any) -> Scene:
    """Return the members that the object keeps."""
    return Scene(
        ends=_array(obj.Ends).reshape(-1, 2, 3),
        down=_array(obj.Down),
        line_index=np.array(obj.MemberLine, dtype=np.int64),
        elements=tuple(obj.Elements),
        marks=tuple(obj.Marks),
        origin=tuple(obj.Origin),
    )


def supports_in(obj: Any) -> Supports:
    """Return the supports that the object keeps."""
    stiffness = np.array(obj.SupportStiffness, dtype=np.float64).reshape(-1, 2)
    return Supports(
        at=_array(obj.SupportAt),
        right=_array(obj.SupportRight),
        stiffness=np.where(stiffness < 0.0, np.inf, stiffness),
    )


def _vectors(points: np.ndarray) -> list[Any]:
    return [FreeCAD.Vector(x, y, z) for x, y, z in points.tolist()]


def _array(vectors: Any) -> np.ndarray:
    return np.array([tuple(v) for v in vectors], dtype=np.float64).reshape(-1, 3)
