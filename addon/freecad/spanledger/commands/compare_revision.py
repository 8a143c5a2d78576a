"""Compares the open model with an earlier revision."""

from __future__ import annotations

from ..guard import guarded
from ..resources import icon
from ..texts import QT_TRANSLATE_NOOP


class CompareRevision:
    """Compares the open model with an earlier revision."""

    def GetResources(self) -> dict[str, str]:  # noqa: N802  # FreeCAD's names, here and below
        return {
            "Pixmap": icon("compare.svg"),
            "MenuText": QT_TRANSLATE_NOOP("Spanledger_Compare", "Compare with earlier revision…"),
            "ToolTip": QT_TRANSLATE_NOOP(
                "Spanledger_Compare",
                "Show what changed since an earlier revision of the model, line by line",
            ),
            "Accel": "L, C",
        }

    def IsActive(self) -> bool:  # noqa: N802
        from ..desk import the_desk

        return the_desk().can_run()

    def Activated(self) -> None:  # noqa: N802
        from ..desk import the_desk

        guarded(the_desk().ask_for_earlier)
