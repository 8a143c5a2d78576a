"""The calculation sheet, written from the window."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

import FreeCADGui

from ..qt import QtWidgets
from ..texts import translate
from ..worker import Progress

if TYPE_CHECKING:
    from .controller import Desk


def ask_for_sheet(desk: Desk) -> None:
    """Let the user say where the calculation sheet goes, and write it."""
    path, _kind = QtWidgets.QFileDialog.getSaveFileName(
        FreeCADGui.getMainWindow(), translate("Spanledger", "Calculation sheet"),
        str(desk.solved.path.with_suffix(".html")),
        translate("Spanledger", "HTML files (*.html)"),
    )  # fmt: skip
    if path:
        write_sheet(desk, Path(path))


def write_sheet(desk: Desk, path: Path) -> None:
    """Write the calculation sheet of all lines, with the checks of their members."""
    from analysis_core import pipeline

    opened = desk.solved
    outcome, settings = opened.outcome, opened.settings
    if path.resolve() in (opened.path.resolve(), opened.job_path.resolve()):
        words = translate("Spanledger", "'{path}' would be overwritten; choose another file.")
        desk.tell(words.format(path=path))
        return

    def task(progress: Progress) -> None:
        progress("Writing", 0.0)
        text = pipeline.sheet(outcome, settings)
        progress("Writing", 0.9)
        path.write_text(text, encoding="utf-8", newline="")

    def done(_nothing: None) -> None:
        words = translate("Spanledger", "The calculation sheet is in '{path}'.")
        desk.tell(words.format(path=path), problem=False)

    desk.runs.start(task, done)
