"""Takes another job file for the open model."""

from __future__ import annotations

from ..guard import guarded
from ..resources import icon
from ..texts import QT_TRANSLATE_NOOP


class UseJob:
    """Takes another job file for the open model."""

    def GetResources(self) -> dict[str, str]:  # noqa: N802  # FreeCAD's names, here and below
        return {
            "Pixmap": icon("job.svg"),
            "MenuText": QT_TRANSLATE_NOOP("Spanledger_Job", "Use job file…"),
            "ToolTip": QT_TRANSLATE_NOOP(
                "Spanledger_Job",
                "Take the decisions for the open model from another job file",
            ),
            "Accel": "L, J",
        }

    def IsActive(self) -> bool:  # noqa: N802
        from ..desk import the_desk

        return the_desk().can_run()

    def Activated(self) -> None:  # noqa: N802
        from ..desk import the_desk

        guarded(the_desk().ask_for_job)
