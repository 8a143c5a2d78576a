"""Links the choice of a line with FreeCAD's own selection, both ways."""

from __future__ import annotations

from typing import Any

import FreeCAD
import FreeCADGui

from .. import document
from ..guard import guarded
from ..qt import QtCore


class SelectionLink:
    """An observer of FreeCAD's selection while the desk is shown."""

    def __init__(self, desk: Any) -> None:
        self.desk = desk
        self._watching = False
        self._busy = False
        self._marked: tuple[Any, ...] = ()

    def start(self) -> None:
        """Begin to watch."""
        if not self._watching:
            FreeCADGui.Selection.addObserver(self)
            self._watching = True

    def stop(self) -> None:
        """Watch no longer."""
        self._changed()
        if self._watching:
            FreeCADGui.Selection.removeObserver(self)
            self._watching = False

    def show(self, line: int | None) -> None:
        """Mark a line in the 3D view and select its members."""
        obj = document.find_beam_lines(FreeCAD.ActiveDocument)
        if obj is None or self._busy:
            return
        view = obj.ViewObject.Proxy
        view.choose(line)
        members = [] if line is None else view.members_of(line).tolist()
        marked = obj.Document.Name, obj.Name, members
        if marked != self._marked:
            self._select(obj, members)
            self._marked = marked

    def look_at(self, line: int, elements: tuple[str, ...]) -> None:
        """Select the members meant, the whole line where none is named, and look at them."""
        obj = document.find_beam_lines(FreeCAD.ActiveDocument)
        if obj is None:
            return
        members = obj.ViewObject.Proxy.members_of(line)
        meant = [m for m in members if obj.Elements[m] in elements] or list(members)
        self._select(obj, meant)
        obj.ViewObject.Proxy.look_at(FreeCADGui.ActiveDocument.ActiveView, meant)

    def addSelection(self, doc: str, name: str, part: str, _point: Any) -> None:  # noqa: N802
        """FreeCAD tells that something was selected.

        It tells so in the midst of going through the scene for a click; nodes may change only
        once it is out of there.
        """
        self._changed()
        if self._busy or not part.startswith("Member"):
            return
        obj = FreeCAD.getDocument(doc).getObject(name)
        if obj is document.find_beam_lines(FreeCAD.getDocument(doc)):
            line = obj.MemberLine[int(part.removeprefix("Member"))]
            QtCore.QTimer.singleShot(0, lambda: guarded(lambda: self._follow(doc, name, line)))

    def removeSelection(self, *_what: Any) -> None:  # noqa: N802
        """FreeCAD tells that something is selected no longer."""
        self._changed()

    def clearSelection(self, *_what: Any) -> None:  # noqa: N802
        """FreeCAD tells that nothing is selected any more."""
        self._changed()

    def setSelection(self, *_what: Any) -> None:  # noqa: N802
        """FreeCAD tells that other things were selected."""
        self._changed()

    def _changed(self) -> None:
        """What is selected is no longer what was selected here."""
        self._marked = ()

    def _select(self, obj: Any, members: list[int]) -> None:
        """Select these members and nothing else."""
        self._busy = True
        try:
            FreeCADGui.Selection.clearSelection()
            for member in members:
                FreeCADGui.Selection.addSelection(obj.Document.Name, obj.Name, f"Member{member}")
        finally:
            self._busy = False

    def _follow(self, doc: str, name: str, line: int) -> None:
        """Show the line that was selected in the 3D view."""
        if doc not in FreeCAD.listDocuments():
            return  # closed meanwhile
        obj = FreeCAD.getDocument(doc).getObject(name)
        self._busy = True
        try:
            self.desk.choose_line(line)
            obj.ViewObject.Proxy.choose(line)
        finally:
            self._busy = False
