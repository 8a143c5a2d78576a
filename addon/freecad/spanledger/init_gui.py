"""Registers the workbench; FreeCAD imports this once at its start, so it imports little."""

from __future__ import annotations

import FreeCAD
import FreeCADGui

from .resources import FOLDER, icon

translate = FreeCAD.Qt.translate


class SpanledgerWorkbench(FreeCADGui.Workbench):
    """Beam lines from IFC: read, decided, balanced, posted."""

    MenuText = "Spanledger"
    ToolTip = translate("Spanledger", "Beam lines from IFC: read, decided, balanced, posted")
    Icon = icon("spanledger.svg")

    def Initialize(self) -> None:  # noqa: N802  # FreeCAD's names, here and below
        from . import finder

        preferences = FreeCAD.ParamGet("User parameter:BaseApp/Preferences/Mod/Spanledger")
        self.problem = finder.make_importable(preferences.GetString("SitePackages"))
        if self.problem:
            FreeCAD.Console.PrintError(self.problem + "\n")
            return
        from . import commands

        names = commands.register()
        title = translate("Workbench", "Spanledger")
        self.appendToolbar(title, names)
        self.appendMenu(title, names)

    def Activated(self) -> None:  # noqa: N802
        if self.problem:
            FreeCADGui.getMainWindow().statusBar().showMessage(self.problem)
            return
        from .desk import the_desk

        the_desk().appear()

    def Deactivated(self) -> None:  # noqa: N802
        if self.problem:
            return
        from .desk import the_desk

        the_desk().disappear()

    def GetClassName(self) -> str:  # noqa: N802
        return "Gui::PythonWorkbench"


FreeCADGui.addLanguagePath(str(FOLDER / "translations"))
FreeCADGui.updateLocale()
FreeCADGui.addWorkbench(SpanledgerWorkbench())
