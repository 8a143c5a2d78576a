"""Keeps a fault of ours from reaching the user as a traceback."""

from __future__ import annotations

import traceback
from collections.abc import Callable
from typing import Any

import FreeCAD

from .texts import translate


def guarded(action: Callable[[], Any]) -> None:
    """Run what was asked for; a fault becomes a sentence, its details go to the log."""
    try:
        action()
    except Exception as error:  # whatever it is, the host and the user's work must stay
        FreeCAD.Console.PrintLog(traceback.format_exc())
        text = translate(
            "Spanledger",
            "Spanledger met something it does not handle ({kind}). Nothing was changed. Please "
            "report it with the model; the report view's log has more.",
        )
        FreeCAD.Console.PrintError(text.format(kind=type(error).__name__) + "\n")
