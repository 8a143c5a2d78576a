"""Watches what happens outside the desk: FreeCAD's documents, and the files on the disk."""

from __future__ import annotations

from collections.abc import Iterable
from pathlib import Path
from typing import Any

import FreeCAD

from ..qt import QtCore, Signal


class DocumentWatch:
    """An observer of FreeCAD's documents, for as long as the program runs."""

    def __init__(self, desk: Any) -> None:
        self._desk = desk
        FreeCAD.addDocumentObserver(self)

    def slotDeletedDocument(self, doc: Any) -> None:  # noqa: N802  # FreeCAD's names
        """A document is being closed."""
        self._desk.forget(doc.Name)

    def slotActivateDocument(self, _doc: Any) -> None:  # noqa: N802
        """Another document is active; show its lines once FreeCAD is done."""
        QtCore.QTimer.singleShot(0, self._desk.document_changed)


class FileWatch(QtCore.QObject):
    """Tells when a model or a job file was written."""

    changed = Signal()

    def __init__(self) -> None:
        super().__init__()
        self._watcher = QtCore.QFileSystemWatcher(self)
        self._watcher.fileChanged.connect(lambda _path: self.changed.emit())

    def watch(self, paths: Iterable[Path]) -> None:
        """Watch these files and no others; call again after a change, since a file that was
        replaced as a whole is lost from sight."""
        watched = self._watcher.files()
        if watched:
            self._watcher.removePaths(watched)
        for path in paths:
            if path.exists():
                self._watcher.addPath(str(path))
