"""Opens an IFC model."""

from __future__ import annotations

from ..guard import guarded
from ..resources import icon
from ..texts import QT_TRANSLATE_NOOP


class OpenModel:
    """Opens an IFC model."""

    def GetResources(self) -> dict[str, str]:  # noqa: N802  # FreeCAD's names, here and below
        return {
            "Pixmap": icon("open.svg"),
            "MenuText": QT_TRANSLATE_NOOP("Spanledger_Open", "Open IFC model…"),
            "ToolTip": QT_TRANSLATE_NOOP(
                "Spanledger_Open",
                "Read beams, supports and actions from an IFC file and balance its lines",
            ),
            "Accel": "L, O",
        }

    def IsActive(self) -> bool:  # noqa: N802
        return True

    def Activated(self) -> None:  # noqa: N802
        from ..desk import the_desk

        guarded(the_desk().ask_for_model)
