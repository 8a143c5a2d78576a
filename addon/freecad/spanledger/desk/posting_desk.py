"""Posting from the window: the preview, and what is written when the user says so."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any

import FreeCAD
import FreeCADGui

from analysis_core.errors import JobError

from ..present.posting import posted_words, preview
from ..qt import QtCore
from ..worker import Progress

if TYPE_CHECKING:
    from analysis_core.ifc.updating import Change

    from .controller import Desk


class PostingDesk(QtCore.QObject):
    """One per desk."""

    def __init__(self, desk: Desk) -> None:
        super().__init__()
        self._desk = desk
        self.dialog: Any = None

    def ask(self) -> None:
        """Show what will be written; where members were given others, what of the model changes."""
        from analysis_core import pipeline

        opened = self._desk.solved
        settings = opened.settings
        if not settings.members:
            self._show(opened, (), "")
            return

        def task(progress: Progress) -> tuple[Sequence[Change], str]:
            try:
                return pipeline.member_changes(opened.path, settings, progress=progress), ""
            except JobError as refusal:  # the results can be posted all the same
                return (), str(refusal)

        def done(found: tuple[Sequence[Change], str]) -> None:
            if self._desk.solved is opened:
                self._show(opened, *found)

        self._desk.runs.start(task, done)

    def post(self, target: str | Path, *, members: bool) -> None:
        """Write the results; with ``members``, the sections and materials given to them first."""
        from analysis_core import pipeline

        desk, opened, name = self._desk, self._desk.opened, FreeCAD.ActiveDocument.Name
        outcome, settings = opened.outcome, opened.settings

        def task(progress: Progress) -> Any:
            if members:
                done = pipeline.update_members(
                    opened.path, target, settings, given=True, progress=progress
                )
                return done.outcome, done.report
            return outcome, pipeline.post(outcome, opened.path, target, progress=progress)

        def done(found: Any) -> None:
            written, report = found
            opened.take_posted(written, Path(target))
            desk.posted(name, opened)
            desk.tell(posted_words(report, str(target)), problem=False)
            if members and Path(target) == opened.path:
                self._read_again(opened)  # what was given now stands in the model

        desk.runs.start(task, done)

    def _read_again(self, opened: Any) -> None:
        """Balance anew once the posting has ended altogether."""
        if self._desk.runs.busy:
            QtCore.QTimer.singleShot(20, lambda: self._read_again(opened))
        elif self._desk.opened is opened:
            self._desk.run_again()

    def _show(self, opened: Any, changes: Sequence[Change], refusal: str) -> None:
        from .post_dialog import PostDialog

        shown = preview(opened.outcome, opened.units, changes, refusal)
        self.dialog = PostDialog(opened.path, shown, FreeCADGui.getMainWindow())
        self.dialog.wanted.connect(lambda target, members: self.post(target, members=members))
        self.dialog.show()
