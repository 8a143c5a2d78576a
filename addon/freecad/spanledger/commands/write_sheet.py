"""Writes the calculation sheet."""

from __future__ import annotations

from ..guard import guarded
from ..resources import icon
from ..texts import QT_TRANSLATE_NOOP


class WriteSheet:
    """Writes the calculation sheet."""

    def GetResources(self) -> dict[str, str]:  # noqa: N802  # FreeCAD's names, here and below
        return {
            "Pixmap": icon("sheet.svg"),
            "MenuText": QT_TRANSLATE_NOOP("Spanledger_Sheet", "Calculation sheet…"),
            "ToolTip": QT_TRANSLATE_NOOP(
                "Spanledger_Sheet",
                "Write the calculation sheet, checks of the members included, as one HTML file",
            ),
            "Accel": "L, K",
        }

    def IsActive(self) -> bool:  # noqa: N802
        from ..desk import the_desk

        return the_desk().can_post()

    def Activated(self) -> None:  # noqa: N802
        from ..desk import the_desk
        from ..desk.sheet_writing import ask_for_sheet

        guarded(lambda: ask_for_sheet(the_desk()))
