"""Reads the model again and balances its lines."""

from __future__ import annotations

from ..guard import guarded
from ..resources import icon
from ..texts import QT_TRANSLATE_NOOP


class BalanceLines:
    """Reads the model again and balances its lines."""

    def GetResources(self) -> dict[str, str]:  # noqa: N802  # FreeCAD's names, here and below
        return {
            "Pixmap": icon("balance.svg"),
            "MenuText": QT_TRANSLATE_NOOP("Spanledger_Balance", "Balance lines"),
            "ToolTip": QT_TRANSLATE_NOOP(
                "Spanledger_Balance",
                "Read the model and its job file again and balance all lines",
            ),
            "Accel": "L, B",
        }

    def IsActive(self) -> bool:  # noqa: N802
        from ..desk import the_desk

        return the_desk().can_run()

    def Activated(self) -> None:  # noqa: N802
        from ..desk import the_desk

        guarded(the_desk().run_again)
