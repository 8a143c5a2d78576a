"""Shows or hides the building behind its lines."""

from __future__ import annotations

from ..guard import guarded
from ..resources import icon
from ..texts import QT_TRANSLATE_NOOP


class ShowBuilding:
    """Shows or hides the building behind its lines."""

    def GetResources(self) -> dict[str, str]:  # noqa: N802  # FreeCAD's names, here and below
        return {
            "Pixmap": icon("building.svg"),
            "MenuText": QT_TRANSLATE_NOOP("Spanledger_Building", "Show or hide the building"),
            "ToolTip": QT_TRANSLATE_NOOP(
                "Spanledger_Building",
                "Show the bodies of the building faintly behind its lines, or hide them",
            ),
            "Accel": "L, H",
        }

    def IsActive(self) -> bool:  # noqa: N802
        from ..desk import the_desk

        return the_desk().opened is not None

    def Activated(self) -> None:  # noqa: N802
        from ..desk import the_desk

        guarded(the_desk().toggle_building)
