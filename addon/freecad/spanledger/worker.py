"""Work off the interface thread, with progress and cancel."""

from __future__ import annotations

import time
import traceback
from collections.abc import Callable
from typing import Any

import FreeCAD

from .qt import QtCore, Signal
from .texts import translate

Progress = Callable[[str, float], None]


class CancelledError(Exception):
    """The user stopped the work."""


class Work(QtCore.QThread):
    """Runs ``task(progress)`` in a thread of its own; its signals arrive in the window's thread."""

    progressed = Signal(str, float)
    succeeded = Signal(object)
    failed = Signal(str)
    cancelled = Signal()

    def __init__(self, task: Callable[[Progress], Any], parent: Any = None) -> None:
        super().__init__(parent)
        self._task = task
        self._stop = False
        self._told = 0.0

    def cancel(self) -> None:
        """Ask the work to stop at its next step."""
        self._stop = True

    def run(self) -> None:
        """Do the task; called by Qt in the new thread."""
        from analysis_core.errors import AnalysisError

        try:
            result = self._task(self._progress)
        except CancelledError:
            self.cancelled.emit()
        except AnalysisError as error:
            self.failed.emit(str(error))
        except MemoryError:
            text = translate(
                "Spanledger", "The model does not fit into memory; close other work or split it."
            )
            self.failed.emit(text)
        except OSError as error:
            where = f"'{error.filename}': " if error.filename else ""
            self.failed.emit(f"{where}{error.strerror or error}.")
        except Exception as error:  # the host must stay up, whatever a file does to us
            FreeCAD.Console.PrintLog(traceback.format_exc())
            text = translate(
                "Spanledger",
                "Spanledger met something it does not handle ({kind}). Nothing was changed. "
                "Please report it with the model; the report view's log has more.",
            )
            self.failed.emit(text.format(kind=type(error).__name__))
        else:
            if self._stop:
                self.cancelled.emit()
            else:
                self.succeeded.emit(result)

    def _progress(self, step: str, part: float) -> None:
        if self._stop:
            raise CancelledError
        now = time.monotonic()
        if part >= 1.0 or now - self._told > 0.05:  # a signal per line would flood the window
            self._told = now
            self.progressed.emit(step, part)
