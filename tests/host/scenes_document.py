"""Scenes without a window: the document object and the add-on's description."""

import os
import sys
from pathlib import Path

import FreeCAD

ROOT = Path(__file__).resolve().parents[2]
sys.path.append(str(ROOT / "tests" / "addon"))


def keep():
    """Write an outcome into an object, save, reopen, and tell what is there."""
    _importable()
    import demo

    from freecad.spanledger import document
    from freecad.spanledger.present.diagrams import View, ordinates_of

    doc = FreeCAD.newDocument("Kept")
    obj = document.add_beam_lines(doc)
    outcome = demo.outcome()
    scene, _supports = document.show_outcome(obj, outcome, ["balanced", "stale"])
    ordinates = ordinates_of(outcome.lines, View("envelope", "strength"), "moment")
    document.show_diagram(obj, scene, ordinates)
    path = os.path.join(os.environ["SPANLEDGER_PICTURES"], "kept.FCStd")
    doc.saveAs(path)
    FreeCAD.closeDocument(doc.Name)

    again = FreeCAD.openDocument(path)
    obj = document.find_beam_lines(again)
    scene = document.scene_in(obj)
    return {
        "proxy": type(obj.Proxy).__module__ + "." + type(obj.Proxy).__name__,
        "label": obj.Label,
        "marks": list(obj.Marks),
        "states": list(obj.States),
        "elements": list(scene.elements),
        "ends": scene.ends.tolist(),
        "lowest": min(obj.Lower),
        "ordinates": len(obj.Upper),
        "stations": obj.Stations,
        "shown": obj.Shown,
        "schema": obj.Schema,
    }


def describe():
    """Read package.xml as FreeCAD does."""
    data = FreeCAD.Metadata(str(ROOT / "addon" / "package.xml"))
    workbench = data.Content["workbench"][0]
    return {
        "name": data.Name,
        "version": data.Version,
        "supported": data.supportsCurrentFreeCAD(),
        "class": workbench.Classname,
        "icons": [(ROOT / "addon" / icon).is_file() for icon in (data.Icon, workbench.Icon)],
        "licence": [(ROOT / "addon" / item["file"]).is_file() for item in data.License],
    }


def _importable():
    from freecad.spanledger import finder

    problem = finder.make_importable()
    assert not problem, problem
