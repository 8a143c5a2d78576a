"""Scenes with an outcome made by hand."""

import sys
from pathlib import Path

import FreeCAD
from host_tools import activate, count_pixels, picture_of_screen, picture_of_view, settle

sys.path.append(str(Path(__file__).resolve().parents[1] / "addon"))


def on_white(palette, role):
    """Return the colour of a role in a picture on white; diagrams are see-through."""
    from freecad.spanledger.draw.nodes import TRANSPARENCY

    through = TRANSPARENCY if role in ("sagging", "hogging") else 0.0
    return [round((1.0 - through) * part + through * 255) for part in palette[role]]


def draw():
    """Show an outcome: list, strip and diagrams."""
    desk = activate()
    import demo

    from freecad.spanledger.opened_model import OpenedModel
    from freecad.spanledger.present.look import VIEW

    doc = FreeCAD.newDocument("Demo")
    opened = OpenedModel(Path("demo.ifc"), Path("demo.yaml"))
    opened.receive(demo.outcome())
    desk.opened_models[doc.Name] = opened
    desk._show_all(doc.Name)
    settle()
    box = doc.BeamLines.ViewObject.Proxy.extent()
    picture_of_screen("demo_window")
    image = picture_of_view("demo_view")
    return {
        role: count_pixels(image, on_white(VIEW, role), 12)
        for role in ("line", "sagging", "hogging")
    } | {"shown": desk.panels.list.model.shown(), "extent": box}
