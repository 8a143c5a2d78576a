"""Rule sets: which actions are combined, with which factors, in which arrangements."""

from analysis_core.rules.combinations import (
    Classified,
    arrangements,
    classify,
    combinations,
    formula,
)
from analysis_core.rules.describe import describe
from analysis_core.rules.loader import load, names, schema
from analysis_core.rules.model import Figure, RuleSet

__all__ = [
    "Classified",
    "Figure",
    "RuleSet",
    "arrangements",
    "classify",
    "combinations",
    "describe",
    "formula",
    "load",
    "names",
    "schema",
]
