"""What runs off the interface thread: one piece of work in front, one behind everything else."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import FreeCAD

from ..collecting import CollectorPause
from ..guard import guarded
from ..qt import QtCore
from ..texts import translate
from ..worker import Work
from .running import RunningBar

PAUSE_MS = 120


class Runs(QtCore.QObject):
    """At most one work in front, with progress and a button to stop it."""

    def __init__(self, bar: RunningBar, tell: Callable[[str], None]) -> None:
        super().__init__()
        self._bar, self._tell = bar, tell
        self._collector = CollectorPause()
        self._front: Work | None = None
        self._behind: Work | None = None
        self._pause = QtCore.QTimer(self)
        self._pause.setSingleShot(True)
        self._pause.setInterval(PAUSE_MS)
        self._pause.timeout.connect(self._start_waiting)
        bar.cancel_asked.connect(self.cancel)

    @property
    def busy(self) -> bool:
        """Whether something runs in front."""
        return self._front is not None

    @property
    def busy_behind(self) -> bool:
        """Whether something runs behind."""
        return self._behind is not None

    def start(self, task: Callable[..., Any], done: Callable[[Any], None]) -> None:
        """Run ``task(progress)``; its result goes to ``done`` in the window's thread."""
        if self.busy:
            self._tell(translate("Spanledger", "Something is still running; wait, or stop it."))
            return
        work = Work(task, self)
        work.progressed.connect(self._bar.show_progress)
        work.succeeded.connect(lambda result: guarded(lambda: done(result)))
        work.failed.connect(self._tell)
        work.cancelled.connect(
            lambda: self._tell(translate("Spanledger", "Stopped; nothing was changed."))
        )
        work.finished.connect(self._front_finished)
        self._front = work
        self._bar.begin()
        self._start(work)

    def start_behind(self, task: Callable[..., Any], done: Callable[[Any], None]) -> None:
        """Run something that nobody waits for; a failure is only logged.

        It begins a moment later: the picture of what came before is to be painted first, and
        Python lets one thread work at a time.
        """
        self.cancel_behind()
        work = Work(task, self)
        work.succeeded.connect(lambda result: guarded(lambda: done(result)))
        work.failed.connect(lambda message: FreeCAD.Console.PrintLog(message + "\n"))
        self._behind = work
        self._pause.start()

    def cancel(self) -> None:
        """Stop what runs in front at its next step."""
        if self._front is not None:
            self._front.cancel()

    def cancel_behind(self) -> None:
        """Stop what runs behind at its next step."""
        if self._behind is None:
            return
        if self._pause.isActive():
            self._pause.stop()
            self._behind.deleteLater()
            self._behind = None
        else:
            self._behind.cancel()

    def _start_waiting(self) -> None:
        if self._behind is not None:
            self._start(self._behind)

    def _start(self, work: Work) -> None:
        work.finished.connect(lambda: self._ended(work))
        self._collector.begin()
        work.start()

    def _ended(self, work: Work) -> None:
        """A thread is over, in front or behind: let go of what it held."""
        self._collector.end()
        if self._behind is work:
            self._behind = None
        work.deleteLater()

    def _front_finished(self) -> None:
        self._bar.end()
        self._front = None
