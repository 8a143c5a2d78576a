"""The commands of the workbench, one small file each."""

from __future__ import annotations

import FreeCADGui

from . import (
    balance_lines,
    choose_section,
    compare_revision,
    find_lightest,
    open_model,
    post_results,
    redo_decision,
    show_building,
    show_desk,
    undo_decision,
    use_job,
    write_sheet,
)

SEPARATOR = "Separator"


def register() -> list[str]:
    """Make the commands known to FreeCAD; return their names in the order of the toolbar."""
    commands = {
        "Spanledger_Open": open_model.OpenModel(),
        "Spanledger_Job": use_job.UseJob(),
        "Spanledger_Balance": balance_lines.BalanceLines(),
        "Spanledger_Undo": undo_decision.UndoDecision(),
        "Spanledger_Redo": redo_decision.RedoDecision(),
        "Spanledger_Section": choose_section.ChooseSection(),
        "Spanledger_Lightest": find_lightest.FindLightest(),
        "Spanledger_Compare": compare_revision.CompareRevision(),
        "Spanledger_Post": post_results.PostResults(),
        "Spanledger_Sheet": write_sheet.WriteSheet(),
        "Spanledger_Building": show_building.ShowBuilding(),
        "Spanledger_Desk": show_desk.ShowDesk(),
    }
    for name, command in commands.items():
        FreeCADGui.addCommand(name, command)
    return [
        "Spanledger_Open", "Spanledger_Job", "Spanledger_Balance", SEPARATOR,
        "Spanledger_Undo", "Spanledger_Redo", SEPARATOR,
        "Spanledger_Section", "Spanledger_Lightest", SEPARATOR,
        "Spanledger_Compare", "Spanledger_Post", "Spanledger_Sheet", SEPARATOR,
        "Spanledger_Building", "Spanledger_Desk",
    ]  # fmt: skip
