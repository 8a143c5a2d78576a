"""Self weight of the members: density times area times gravity, along the stated direction."""

from __future__ import annotations

from collections.abc import Sequence, Set

from analysis_core.building import Building, LoadCase
from analysis_core.findings import listed
from analysis_core.idealise.draft import Draft
from analysis_core.idealise.log import Log
from analysis_core.idealise.placing import Pair, Placer
from analysis_core.idealise.properties import Properties, PropertyTable
from analysis_core.idealise.sharing import shared
from analysis_core.idealise.vectors import Vector
from analysis_core.settings import Settings

# 3rd CGPM (1901): standard gravity, m/s².
GRAVITY = 9.80665
CASE_NAME = "Self weight"
DOWN: Vector = (0.0, 0.0, -1.0)


def weight_cases(building: Building, settings: Settings, log: Log) -> list[LoadCase]:
    """Return the cases that carry self weight, with coefficients along x, y, z.

    The analytical way follows the model's own load groups unless the job file says otherwise;
    the physical way has self weight on.
    """
    wanted = settings.analysis.self_weight
    stated = [case for case in building.cases if case.self_weight and any(case.self_weight)]
    if wanted is False:
        for case in stated:
            log.add(
                "note",
                "self-weight-left-out",
                f"Load case '{case.name}' states self weight; the job file switches it off.",
                (case.global_id,) if case.global_id else (),
            )
        return []
    if stated:
        return stated
    if wanted or building.route == "physical":
        return [LoadCase(CASE_NAME, "permanent", self_weight=DOWN, source="default")]
    if building.members:
        log.add(
            "note",
            "self-weight-not-stated",
            "No load case of the model states self weight, so none acts here unless the model's "
            "actions hold it. The job file can add it (analysis: self_weight: true).",
        )
    return []


def put_self_weight(
    cases: Sequence[LoadCase],
    placer: Placer,
    own: Set[str],
    table: PropertyTable,
    log: Log,
) -> None:
    """Put the weight of every member that lies in a line, over the whole of its bars.

    ``own``: the members of the building; columns that are legs do not hang on the line.
    """
    if not cases:
        return
    missing: dict[str, list[str]] = {}
    done: set[str] = set()
    for draft in placer.drafts:
        for bar in draft.bars:
            member = bar.member
            if member.global_id in done or member.global_id not in own:
                continue
            done.add(member.global_id)
            weights = _weights(table.of(member))
            if weights is None:
                missing.setdefault(_lacking(table.of(member)), []).append(member.global_id)
                continue
            for case in cases:
                _put(case, member.global_id, weights, placer, log)
    for what, elements in missing.items():
        log.add(
            "warning",
            "no-self-weight",
            f"{len(elements)} members have no self weight: {what} ({listed(elements)}). State it "
            f"in the job file, or switch self weight off (analysis: self_weight: false).",
            elements,
        )


def _put(
    case: LoadCase, member: str, weights: tuple[float, float], placer: Placer, log: Log
) -> None:
    assert case.self_weight is not None
    drafts = placer.drafts_of(member)
    parts, rest = shared(case.self_weight, [draft.plane.axis for draft in drafts])
    for index, (draft, part) in enumerate(zip(drafts, parts, strict=True)):
        up = case.self_weight[2] if index == 0 else 0.0
        ends: tuple[Pair, Pair] = (
            (part * weights[0], up * weights[0]),
            (part * weights[1], up * weights[1]),
        )
        if any(ends[0]) or any(ends[1]):
            placer.fill(draft, member, case.name, ends, case.global_id or CASE_NAME)
    if abs(rest[0]) + abs(rest[1]) > 1e-9:
        _report_sideways(case, member, drafts, log)


def _weights(properties: Properties) -> tuple[float, float] | None:
    """Return the weight per metre at a member's start and end, N/m."""
    section, material = properties.section, properties.material
    if section is None or material is None or material.density <= 0.0 or section.area <= 0.0:
        return None
    end = properties.end_section or section
    factor = material.density * GRAVITY
    return factor * section.area, factor * (end.area or section.area)


def _lacking(properties: Properties) -> str:
    material = properties.material
    if material is None:
        return "no material is known"
    if material.density <= 0.0:
        return f"material '{material.name}' states no density"
    return "the area of the section is not known"


def _report_sideways(case: LoadCase, member: str, drafts: list[Draft], log: Log) -> None:
    log.add(
        "warning",
        "out-of-plane-action",
        f"Load case '{case.name}' has gravity act sideways; its part across the plane of "
        f"{drafts[0].mark} is not analysed.",
        (case.global_id,) if case.global_id else (),
        drafts[0].mark,
    )
