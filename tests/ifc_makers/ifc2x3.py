"""What is written in the manner of IFC2X3.

No public file shows a correct one, so this follows the published documentation of the schema:
conditions are numbers (-1 rigid, 0 free), sections come through IfcRelAssociatesProfileProperties,
linear actions have an edge of their own, all groups are IfcStructuralLoadGroup, and factors sit
on combination groups.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any

from ifc_makers.description import (
    Case,
    Combination,
    MaterialSpec,
    PointLoad,
    SectionSpec,
    SpreadLoad,
    Stick,
)
from ifc_makers.ifc4 import profile


def stiffness(made: Any, value: float, kind: str) -> float:
    """Return -1 for fixed, 0 for free, else the stiffness."""
    if math.isinf(value):
        return -1.0
    return float(made.units.of(value, kind)) if value else 0.0


def write_sticks(made: Any, sticks: Sequence[Stick]) -> None:
    """Write curve members with profile properties and materials."""
    sections: dict[tuple[SectionSpec, Any], list[Any]] = {}
    materials: dict[MaterialSpec, list[Any]] = {}
    for stick in sticks:
        edge = made.create("IfcEdge", made.vertex(stick.start), made.vertex(stick.end))
        member = made.rooted(
            "IfcStructuralCurveMember", stick.name, None, None, made.origin,
            made.shape(edge, "Edge"), stick.kind,
        )  # fmt: skip
        sections.setdefault((stick.section, stick.axis), []).append(member)
        materials.setdefault(stick.material, []).append(member)
    for number, ((section, axis), members) in enumerate(sections.items()):
        properties = made.create(
            "IfcGeneralProfileProperties", section.name, profile(made, section)
        )
        made.relate(
            "IfcRelAssociatesProfileProperties", f"section {number}", members, properties, None,
            made.direction(axis) if axis is not None else None,
        )  # fmt: skip
    for spec, members in materials.items():
        made.relate(
            "IfcRelAssociatesMaterial", f"made of {spec.name}", members, _material(made, spec)
        )


def _material(made: Any, spec: MaterialSpec) -> Any:
    material = made.create("IfcMaterial", spec.name)
    of = made.units.of
    made.create(
        "IfcMechanicalMaterialProperties", material, None,
        of(spec.modulus, "MODULUSOFELASTICITYUNIT"),
        of(spec.shear_modulus, "MODULUSOFELASTICITYUNIT"), None, spec.expansion,
    )  # fmt: skip
    made.create(
        "IfcGeneralMaterialProperties", material, None, None,
        of(spec.density, "MASSDENSITYUNIT"),
    )  # fmt: skip
    return material


def curve_action(
    made: Any, name: str, load: Any, *, local: bool, projected: bool = False,
    edge: Any = None, varying: tuple[Any, list[Any]] | None = None,
) -> Any:  # fmt: skip
    """Create a linear action, with an edge of its own where it covers part of a member."""
    shape = made.shape(edge, "Edge") if edge is not None else None
    placement = made.origin if edge is not None else None
    values = [
        None, None, placement, shape, load, "LOCAL_COORDS" if local else "GLOBAL_COORDS", False,
        None, "PROJECTED_LENGTH" if projected else "TRUE_LENGTH",
    ]  # fmt: skip
    if varying is None:
        return made.rooted("IfcStructuralLinearAction", name, *values)
    return made.rooted("IfcStructuralLinearActionVarying", name, *values, *varying)


def write_spread(made: Any, action: SpreadLoad) -> Any:
    """Write forces along a member: constant, or varying between points."""
    moments = action.moments or ((0.0, 0.0, 0.0),) * len(action.forces)
    loads = [
        made.six("IfcStructuralLoadLinearForce", "line", (*force, *moment))
        for force, moment in zip(action.forces, moments, strict=True)
    ]
    if action.wave:
        raise ValueError("IFC2X3 knows no half waves")
    stations = action.stations or ((0.0, _length(made, action.member)) if len(loads) == 2 else ())
    edge = None
    if stations:
        ends = [made.vertex(made.stick_point(action.member, s)) for s in stations]
        edge = made.create("IfcEdge", ends[0], ends[-1])
    if len(loads) == 1 or all(load == loads[0] for load in loads):
        varying = None
    else:
        varying = (_aspect(made, action, stations), loads[1:])
    return curve_action(
        made, action.name, loads[0], local=action.local, projected=action.projected, edge=edge,
        varying=varying,
    )  # fmt: skip


def _aspect(made: Any, action: SpreadLoad, stations: Sequence[float]) -> Any:
    """Return the shape aspect with one point for each value."""
    places = [
        made.create(
            "IfcShapeRepresentation", made.context, "Reference", "Point",
            [made.point(made.stick_point(action.member, station))],
        )
        for station in stations
    ]  # fmt: skip
    whole = made.by_name[action.member].Representation
    return made.create("IfcShapeAspect", places, None, None, False, whole)


def _length(made: Any, member: str) -> float:
    stick = next(s for s in made.model.sticks if s.name == member)
    return math.dist(stick.start, stick.end)


def write_point(made: Any, action: PointLoad) -> Any:
    """Write a force on a member as a point action with a vertex of its own."""
    load = made.six("IfcStructuralLoadSingleForce", "force", (*action.force, *action.moment))
    where = made.stick_point(action.member, action.position)
    return made.point_action(action.name, load, where=where, local=action.local)


def write_case(made: Any, case: Case, actions: list[Any]) -> None:
    """Write a load case; IFC2X3 cannot state self weight."""
    if case.self_weight is not None:
        raise ValueError("IFC2X3 has no self-weight coefficients")
    entity = _group(made, case.name, "LOAD_CASE", case.action_type, case.source, case.coefficient)
    if case.group and actions:
        group = _group(made, case.group, "LOAD_GROUP")
        made.relate("IfcRelAssignsToGroup", f"in {case.group}", actions, None, group)
        actions = [group]
    if actions:
        made.relate("IfcRelAssignsToGroup", f"in {case.name}", actions, None, entity)


def write_combination(made: Any, combination: Combination) -> None:
    """Write a combination; each factor is the coefficient of a group of its own."""
    groups = []
    for case, factor in combination.factors.items():
        name = f"{factor:g} x {case} in {combination.name}"
        group = _group(made, name, "LOAD_COMBINATION_GROUP", coefficient=factor)
        made.relate("IfcRelAssignsToGroup", f"{case} in {name}", [made.by_name[case]], None, group)
        groups.append(group)
    entity = _group(
        made, combination.name, "LOAD_COMBINATION", coefficient=combination.coefficient,
        purpose=combination.purpose,
    )  # fmt: skip
    made.relate("IfcRelAssignsToGroup", f"in {combination.name}", groups, None, entity)


def _group(
    made: Any, name: str, kind: str, action_type: str = "NOTDEFINED", source: str = "NOTDEFINED",
    coefficient: float | None = None, purpose: str | None = None,
) -> Any:  # fmt: skip
    return made.rooted(
        "IfcStructuralLoadGroup", name, None, None, kind, action_type, source, coefficient, purpose
    )
