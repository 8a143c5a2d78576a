"""Shows or hides the docks."""

from __future__ import annotations

from ..guard import guarded
from ..resources import icon
from ..texts import QT_TRANSLATE_NOOP


class ShowDesk:
    """Shows or hides the docks."""

    def GetResources(self) -> dict[str, str]:  # noqa: N802  # FreeCAD's names, here and below
        return {
            "Pixmap": icon("desk.svg"),
            "MenuText": QT_TRANSLATE_NOOP("Spanledger_Desk", "Show or hide the desk"),
            "ToolTip": QT_TRANSLATE_NOOP(
                "Spanledger_Desk",
                "Show or hide the list of lines and the strip",
            ),
            "Accel": "L, D",
        }

    def IsActive(self) -> bool:  # noqa: N802
        return True

    def Activated(self) -> None:  # noqa: N802
        from ..desk import the_desk

        guarded(the_desk().toggle)
