"""The owner history that IFC2X3 asks of every rooted entity."""

from __future__ import annotations

from analysis_core import __version__
from analysis_core.ifc.step.append import Lines
from analysis_core.ifc.step.index import StepIndex
from analysis_core.ifc.step.values import label

APPLICATION = "Spanledger"


def owner_history(index: StepIndex, lines: Lines) -> str:
    """Return a reference to an owner history of the file; a new one where it has none.

    From IFC4 on it may be left out, and is.
    """
    if index.schema != "IFC2X3":
        return "$"
    existing = index.instances_of("IFCOWNERHISTORY")
    if existing:
        return f"#{existing[0]}"
    name = label(APPLICATION)
    person = lines.shared(f"IFCPERSON($,{name},$,$,$,$,$,$)")
    organization = lines.shared(f"IFCORGANIZATION($,{name},$,$,$)")
    both = lines.shared(f"IFCPERSONANDORGANIZATION(#{person},#{organization},$)")
    application = lines.shared(
        f"IFCAPPLICATION(#{organization},{label(__version__)},{name},{name})"
    )
    # No time: posting twice must give the same.  0 is the start of 1970.
    return f"#{lines.shared(f'IFCOWNERHISTORY(#{both},#{application},$,.ADDED.,$,$,$,0)')}"
