"""Load cases and combinations of an analysis model."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from analysis_core.ifc.analysis_model.text import ModelText
from analysis_core.ifc.step.values import real, references
from analysis_core.model import Case, Combination

# Action type and source by nature; the reader reads them the other way round.
_TYPES = {
    "permanent": ("PERMANENT_G", "DEAD_LOAD_G"),
    "imposed": ("VARIABLE_Q", "LIVE_LOAD_Q"),
    "snow": ("VARIABLE_Q", "SNOW_S"),
    "wind": ("VARIABLE_Q", "WIND_W"),
    "temperature": ("VARIABLE_Q", "TEMPERATURE_T"),
    "settlement": ("VARIABLE_Q", "SETTLEMENT_U"),
}
_PURPOSES = {"strength": "ULS", "serviceability": "SLS"}


def write_cases(
    text: ModelText, cases: Sequence[Case], actions: Mapping[str, Sequence[int]]
) -> dict[str, int]:
    """Write a group for each case that has actions; return their instances by name."""
    groups: dict[str, int] = {}
    for case in cases:
        if not actions.get(case.name):
            continue  # a group must hold something in IFC2X3
        kind, source = _TYPES.get(case.nature, ("NOTDEFINED", "NOTDEFINED"))
        keyword = "IFCSTRUCTURALLOADGROUP" if text.old else "IFCSTRUCTURALLOADCASE"
        weight = [] if text.old else ["$"]  # self weight is among the actions
        groups[case.name] = text.object(
            keyword, f"case {case.name}", case.name, ".LOAD_CASE.", f".{kind}.", f".{source}.",
            "$", "$", *weight,
        )  # fmt: skip
        text.rooted(
            "IFCRELASSIGNSTOGROUP", f"case {case.name}/actions",
            references(actions[case.name]), "$", f"#{groups[case.name]}",
        )  # fmt: skip
    return groups


def write_combinations(
    text: ModelText, combinations: Sequence[Combination], groups: Mapping[str, int]
) -> list[int]:
    """Write the combinations of what there is; return their instances."""
    written = []
    for number, combination in enumerate(combinations):
        factors = {
            case: float(factor)
            for case, factor in combination.factors.items()
            if factor and case in groups
        }
        if not factors:
            continue
        key = f"combination {number}"
        purpose = _PURPOSES[combination.limit_state]
        whole = text.object(
            "IFCSTRUCTURALLOADGROUP", key, combination.name, ".LOAD_COMBINATION.", ".NOTDEFINED.",
            ".NOTDEFINED.", "$", f"'{purpose}'",
        )  # fmt: skip
        assign = _assign_old if text.old else _assign
        assign(text, key, whole, factors, groups)
        written.append(whole)
    return written


def _assign(
    text: ModelText, key: str, whole: int, factors: Mapping[str, float], groups: Mapping[str, int]
) -> None:
    """From IFC4 on the factor stands on the relation."""
    for case, factor in factors.items():
        text.rooted(
            "IFCRELASSIGNSTOGROUPBYFACTOR", f"{key}/{case}", f"(#{groups[case]})", "$",
            f"#{whole}", real(factor),
        )  # fmt: skip


def _assign_old(
    text: ModelText, key: str, whole: int, factors: Mapping[str, float], groups: Mapping[str, int]
) -> None:
    """IFC2X3: a group between the combination and each case carries the factor."""
    between = []
    for case, factor in factors.items():
        group = text.object(
            "IFCSTRUCTURALLOADGROUP", f"{key}/{case}", f"{real(factor)} x {case}",
            ".LOAD_COMBINATION_GROUP.", ".NOTDEFINED.", ".NOTDEFINED.", real(factor), "$",
        )  # fmt: skip
        text.rooted(
            "IFCRELASSIGNSTOGROUP", f"{key}/{case}/case", f"(#{groups[case]})", "$", f"#{group}"
        )
        between.append(group)
    text.rooted("IFCRELASSIGNSTOGROUP", f"{key}/cases", references(between), "$", f"#{whole}")
