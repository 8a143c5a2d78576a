"""Writes the results into a copy of the model."""

from __future__ import annotations

from ..guard import guarded
from ..resources import icon
from ..texts import QT_TRANSLATE_NOOP


class PostResults:
    """Writes the results into a copy of the model."""

    def GetResources(self) -> dict[str, str]:  # noqa: N802  # FreeCAD's names, here and below
        return {
            "Pixmap": icon("post.svg"),
            "MenuText": QT_TRANSLATE_NOOP("Spanledger_Post", "Post results…"),
            "ToolTip": QT_TRANSLATE_NOOP(
                "Spanledger_Post",
                "Write the results into a copy of the model as property sets",
            ),
            "Accel": "L, P",
        }

    def IsActive(self) -> bool:  # noqa: N802
        from ..desk import the_desk

        return the_desk().can_post()

    def Activated(self) -> None:  # noqa: N802
        from ..desk import the_desk

        guarded(the_desk().ask_to_post)
