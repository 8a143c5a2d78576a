"""Takes a decision again that was undone."""

from __future__ import annotations

from ..guard import guarded
from ..resources import icon
from ..texts import QT_TRANSLATE_NOOP


class RedoDecision:
    """Takes a decision again that was undone."""

    def GetResources(self) -> dict[str, str]:  # noqa: N802  # FreeCAD's names, here and below
        return {
            "Pixmap": icon("redo.svg"),
            "MenuText": QT_TRANSLATE_NOOP("Spanledger_Redo", "Redo decision"),
            "ToolTip": QT_TRANSLATE_NOOP(
                "Spanledger_Redo",
                "Take the decision again that was undone last",
            ),
            "Accel": "L, R",
        }

    def IsActive(self) -> bool:  # noqa: N802
        from ..desk import the_desk

        return the_desk().can_redo()

    def Activated(self) -> None:  # noqa: N802
        from ..desk import the_desk

        guarded(the_desk().redo)
