"""Scenes with an outcome made by hand."""

import sys
from pathlib import Path

import FreeCAD
from host_tools import activate, count_pixels, picture_of_screen, picture_of_view, settle

sys.path.append(str(Path(__file__).resolve().parents[1] / "addon"))


def draw():
    """Show an outcome: list, strip and diagrams."""
    desk = activate()
    import demo
    from freecad.spanledger.present.look import VIEW
    from freecad.spanledger.session import Session

    doc = FreeCAD.newDocument("Demo")
    session = Session(Path("demo.ifc"), Path("demo.yaml"))
    session.receive(demo.outcome())
    desk.sessions[doc.Name] = session
    desk.refresh_all(doc.Name)
    settle()
    picture_of_screen("demo_window")
    image = picture_of_view("demo_view")
    return {
        role: count_pixels(image, VIEW[role], 60) for role in ("line", "sagging", "hogging")
    } | {"shown": desk.list.model.shown()}
