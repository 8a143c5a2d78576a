"""Takes the last decision back."""

from __future__ import annotations

from ..guard import guarded
from ..resources import icon
from ..texts import QT_TRANSLATE_NOOP


class UndoDecision:
    """Takes the last decision back."""

    def GetResources(self) -> dict[str, str]:  # noqa: N802  # FreeCAD's names, here and below
        return {
            "Pixmap": icon("undo.svg"),
            "MenuText": QT_TRANSLATE_NOOP("Spanledger_Undo", "Undo decision"),
            "ToolTip": QT_TRANSLATE_NOOP(
                "Spanledger_Undo",
                "Take the last decision back and balance again",
            ),
            "Accel": "L, U",
        }

    def IsActive(self) -> bool:  # noqa: N802
        from ..desk import the_desk

        return the_desk().can_undo()

    def Activated(self) -> None:  # noqa: N802
        from ..desk import the_desk

        guarded(the_desk().undo)
