"""Temperature on members: the difference across the depth curves them, the mean does nothing."""

from __future__ import annotations

from collections.abc import Mapping

from analysis_core.building import AxisMember, Building, TemperatureAction
from analysis_core.idealise.draft import Draft
from analysis_core.idealise.log import Log, named
from analysis_core.idealise.placing import Placer
from analysis_core.idealise.properties import PropertyTable
from analysis_core.idealise.vectors import Vector, cross, distance, dot, subtract, unit
from analysis_core.model import Material

# Linear expansion in 1/K where only the kind of material is known: EN 1991-1-5:2003, table C.1
# (steel 12e-6, concrete 10e-6, timber along the grain 5e-6), from memory.
_EXPANSION = {
    "steel": 12e-6, "stainless": 16e-6, "concrete": 10e-6, "timber": 5e-6, "hardwood": 5e-6,
    "glulam": 5e-6, "lvl": 5e-6,
}  # fmt: skip


def put_temperature_actions(
    building: Building,
    placer: Placer,
    members: Mapping[str, AxisMember],
    table: PropertyTable,
    log: Log,
) -> None:
    """Put every temperature action of the model onto the lines as imposed curvature."""
    for action in building.actions:
        if not isinstance(action, TemperatureAction):
            continue
        drafts = placer.drafts_of(action.member)
        if not drafts or action.member not in members:
            log.add(
                "warning",
                "action-without-line",
                f"Temperature action '{action.name}' (GlobalId {action.global_id}) acts on "
                f"{action.member}, which is part of no line; it is not analysed.",
                (action.global_id, action.member),
            )
            continue
        member = members[action.member]
        if action.constant:
            log.add(
                "note",
                "uniform-temperature",
                f"Action '{action.name}' (GlobalId {action.global_id}) warms member "
                f"{named(member)} evenly by {action.constant:.4g} K; members are rigid axially, so "
                f"that part has no effect.",
                (action.global_id, member.global_id),
            )
        for draft in drafts:
            _curve(action, member, draft, placer, table, log)


def _curve(
    action: TemperatureAction,
    member: AxisMember,
    draft: Draft,
    placer: Placer,
    table: PropertyTable,
    log: Log,
) -> None:
    """Sagging curvature is alpha times (hotter below), per depth, for each section axis.

    A face's share in "below" is the cosine between its direction and the side that is local
    down; the temperature difference is top minus bottom along the section's z (and y).
    """
    lateral = cross(member.up, unit(subtract(member.end, member.start)))
    upper = upper_side(placer, draft, member)
    section = table.of(member).section
    gradient = 0.0
    for difference, side, size, word in (
        (action.difference_z, dot(member.up, upper), section.depth if section else 0.0, "depth"),
        (action.difference_y, dot(lateral, upper), section.width if section else 0.0, "width"),
    ):
        if not difference or abs(side) < 1e-6:
            continue
        if size <= 0.0:
            _report_missing(action.name, action.global_id, member, f"{word} of its section", log)
            return
        gradient -= difference * side / size
    if not gradient:
        _report_sideways(action, member, draft, log)
        return
    alpha = expansion(table.of(member).material, member, log)
    if alpha <= 0.0:
        _report_missing(action.name, action.global_id, member, "thermal expansion", log)
        return
    whole = (0.0, distance(member.start, member.end))
    placer.bend(draft, member.global_id, action.case, whole, alpha * gradient, action.global_id)


def upper_side(placer: Placer, draft: Draft, member: AxisMember) -> Vector:
    """Return the world direction opposite to local "down" of a member's bars in a draft."""
    seat = placer.seats(draft, member.global_id)[0]
    cos, sin = draft.direction(seat.bar)
    axis = draft.plane.axis
    return -sin * axis[0], -sin * axis[1], cos


def expansion(material: Material | None, member: AxisMember, log: Log) -> float:
    """Return the thermal expansion of a material in 1/K, 0 where it is not known."""
    if material is None:
        return 0.0
    if material.thermal_expansion > 0.0:
        return material.thermal_expansion
    assumed = _EXPANSION.get(material.category, 0.0)
    if assumed:
        log.add(
            "note",
            "assumed-thermal-expansion",
            f"Material '{material.name}' states no thermal expansion; {assumed:.3g} 1/K is taken "
            f"for {material.category}. State it in the job file (materials: thermal_expansion).",
        )
    return assumed


def _report_sideways(action: TemperatureAction, member: AxisMember, draft: Draft, log: Log) -> None:
    if not action.difference_y and not action.difference_z:
        return
    log.add(
        "note",
        "out-of-plane-action",
        f"Action '{action.name}' (GlobalId {action.global_id}) curves member {named(member)} out "
        f"of the plane of {draft.mark}; that part is not analysed.",
        (action.global_id, member.global_id),
        draft.mark,
    )


def _report_missing(name: str, source: str, member: AxisMember, what: str, log: Log) -> None:
    log.add(
        "warning",
        "temperature-not-applied",
        f"Temperature action '{name}' on member {named(member)} is left out: the {what} is not "
        f"known. State it in the job file (materials: thermal_expansion; sections: depth).",
        tuple(i for i in (source, member.global_id) if i),
    )
