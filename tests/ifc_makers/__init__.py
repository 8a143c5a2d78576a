"""Write small IFC files for tests, from plain descriptions in SI.

``write_analysis_model`` writes an analysis model in any of the three schemas and in any of the
unit sets of ``units.UNIT_SETS``; ``AnalysisFile`` gives access to the entities, to bend them.
"""

from ifc_makers.analysis_file import AnalysisFile, write_analysis_model
from ifc_makers.description import (
    FREE,
    RIGID,
    Case,
    Combination,
    Joint,
    Link,
    MaterialSpec,
    Model,
    MoveJoint,
    NodeLoad,
    PointLoad,
    SectionSpec,
    SpreadLoad,
    Stick,
    Warmth,
    continuous_beam,
    fixed,
    pinned,
    roller,
)
from ifc_makers.units import UNIT_SETS

__all__ = [
    "FREE", "RIGID", "UNIT_SETS", "AnalysisFile", "Case", "Combination", "Joint", "Link",
    "MaterialSpec", "Model", "MoveJoint", "NodeLoad", "PointLoad", "SectionSpec", "SpreadLoad",
    "Stick", "Warmth", "continuous_beam", "fixed", "pinned", "roller", "write_analysis_model",
]  # fmt: skip
