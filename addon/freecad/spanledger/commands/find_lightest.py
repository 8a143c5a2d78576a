"""Seeks the lightest section that suffices."""

from __future__ import annotations

from ..guard import guarded
from ..resources import icon
from ..texts import QT_TRANSLATE_NOOP


class FindLightest:
    """Seeks the lightest section that suffices."""

    def GetResources(self) -> dict[str, str]:  # noqa: N802  # FreeCAD's names, here and below
        return {
            "Pixmap": icon("lightest.svg"),
            "MenuText": QT_TRANSLATE_NOOP("Spanledger_Lightest", "Lightest section…"),
            "ToolTip": QT_TRANSLATE_NOOP(
                "Spanledger_Lightest",
                "Find the lightest section that suffices, and see first what it does",
            ),
            "Accel": "L, L",
        }

    def IsActive(self) -> bool:  # noqa: N802
        from ..desk import the_desk

        return the_desk().can_choose()

    def Activated(self) -> None:  # noqa: N802
        from ..desk import the_desk

        guarded(the_desk().choosing.ask_for_lightest)
