"""Gives members another section or material."""

from __future__ import annotations

from ..guard import guarded
from ..resources import icon
from ..texts import QT_TRANSLATE_NOOP


class ChooseSection:
    """Gives members another section or material."""

    def GetResources(self) -> dict[str, str]:  # noqa: N802  # FreeCAD's names, here and below
        return {
            "Pixmap": icon("section.svg"),
            "MenuText": QT_TRANSLATE_NOOP("Spanledger_Section", "Section and material…"),
            "ToolTip": QT_TRANSLATE_NOOP(
                "Spanledger_Section",
                "Give the chosen line or span another section or material",
            ),
            "Accel": "L, S",
        }

    def IsActive(self) -> bool:  # noqa: N802
        from ..desk import the_desk

        return the_desk().can_choose()

    def Activated(self) -> None:  # noqa: N802
        from ..desk import the_desk

        guarded(the_desk().choosing.ask_for_section)
