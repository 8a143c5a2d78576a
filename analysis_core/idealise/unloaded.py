"""What a physical model shows but does not load: findings, so that nobody takes it for counted."""

from __future__ import annotations

from collections.abc import Container, Iterable

from analysis_core.building import Building
from analysis_core.findings import listed
from analysis_core.idealise.draft import Draft
from analysis_core.idealise.log import Log
from analysis_core.idealise.selectors import Chooser
from analysis_core.model import Case
from analysis_core.settings import Settings


def report_unloaded(
    building: Building,
    settings: Settings,
    chooser: Chooser,
    drafts: Iterable[Draft],
    cases: Iterable[Case],
    used: Container[str],
    weight: Container[str],
    log: Log,
) -> None:
    """Say where nothing acts but the members' own weight, and of slabs that weigh nothing here.

    ``used``: the names of the cases in which something acts; ``weight``: those of self weight.
    """
    storeys = {draft.storey for draft in drafts}
    if building.route != "physical" or not storeys:
        return
    cases = tuple(cases)
    if not any(case.name in used and case.name not in weight for case in cases):
        log.add(
            "warning",
            "only-self-weight",
            "Nothing acts here but the members' own weight: the model states no loads. Slabs, "
            "walls, finishes, imposed load, snow and wind are for the job file to state "
            "(area_actions, actions); until then results say little.",
        )
    permanent = {case.name.casefold() for case in cases if case.nature == "permanent"}
    loads = [
        (setting.on, setting.source or f"area_actions[{number}]")
        for number, setting in enumerate(settings.area_actions)
        if setting.case.casefold() in permanent
    ]
    bare = [
        area.global_id
        for area in building.areas
        if area.ifc_class.startswith("IfcSlab")
        and area.storey in storeys
        and not any(chooser.chooses(on, area, where=where) for on, where in loads)
    ]
    if bare:
        others = any(a.case.casefold() in permanent for a in settings.actions)
        log.add(
            "note" if others else "warning",
            "slab-weight-left-out",
            f"No permanent area load acts on {_slabs(len(bare))} ({listed(bare)}). Self weight is "
            f"that of the analysed members alone; state the weight of slabs, and of what stands "
            f"on them, in the job file (area_actions), unless actions on the beams hold it.",
            bare,
        )


def _slabs(count: int) -> str:
    return "1 slab" if count == 1 else f"{count} slabs"
