"""What is written in the manner of IFC4 and IFC4X3."""

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


def stiffness(made: Any, value: float, kind: str) -> Any:
    """Return a boolean for fixed and free, else a measure."""
    if value in (0.0, math.inf):
        return made.create("IfcBoolean", value != 0.0)
    measure = (
        "IfcLinearStiffnessMeasure"
        if kind == "LINEARSTIFFNESSUNIT"
        else "IfcRotationalStiffnessMeasure"
    )
    return made.create(measure, made.units.of(value, kind))


def write_sticks(made: Any, sticks: Sequence[Stick]) -> None:
    """Write curve members with material profile sets."""
    materials: dict[MaterialSpec, Any] = {}
    usages: dict[tuple[Any, ...], list[Any]] = {}
    for stick in sticks:
        edge = made.create("IfcEdge", made.vertex(stick.start), made.vertex(stick.end))
        axis = made.direction(stick.axis) if stick.axis is not None else None
        member = made.rooted(
            "IfcStructuralCurveMember", stick.name, None, None, made.origin,
            made.shape(edge, "Edge"), stick.kind, axis,
        )  # fmt: skip
        if stick.material not in materials:
            materials[stick.material] = _material(made, stick.material)
        key = (stick.section, stick.end_section, stick.material, stick.cardinal_point)
        usages.setdefault(key, []).append(member)
    for number, ((section, end, spec, point), members) in enumerate(usages.items()):
        usage = _usage(made, section, end, materials[spec], point)
        made.relate("IfcRelAssociatesMaterial", f"material {number}", members, usage)


def profile(made: Any, section: SectionSpec) -> Any:
    """Create a parametric profile."""
    of = made.units.of
    width, depth = of(section.width, "LENGTHUNIT"), of(section.depth, "LENGTHUNIT")
    position = made.create("IfcAxis2Placement2D", made.create("IfcCartesianPoint", (0.0, 0.0)))
    head = ("AREA", section.name, position, width, depth)
    if not section.web:
        return made.create("IfcRectangleProfileDef", *head)
    web, flange = of(section.web, "LENGTHUNIT"), of(section.flange, "LENGTHUNIT")
    return made.create("IfcIShapeProfileDef", *head, web, flange)


def curve_action(
    made: Any, name: str, load: Any, *, local: bool, projected: bool = False, kind: str = "CONST"
) -> Any:
    """Create a curve action all over what it acts on."""
    return made.rooted(
        "IfcStructuralCurveAction", name, None, None, None, None, load,
        "LOCAL_COORDS" if local else "GLOBAL_COORDS", None,
        "PROJECTED_LENGTH" if projected else "TRUE_LENGTH", kind,
    )  # fmt: skip


def write_spread(made: Any, action: SpreadLoad) -> Any:
    """Write forces along a member: plain, or as a load configuration."""
    moments = action.moments or ((0.0, 0.0, 0.0),) * len(action.forces)
    loads = [
        made.six("IfcStructuralLoadLinearForce", "line", (*force, *moment))
        for force, moment in zip(action.forces, moments, strict=True)
    ]
    options = {"local": action.local, "projected": action.projected}
    if len(loads) == 1:
        kind = action.wave or "CONST"
        return curve_action(made, action.name, loads[0], kind=kind, **options)
    places = [[made.units.of(s, "LENGTHUNIT")] for s in action.stations] or None
    load = made.create("IfcStructuralLoadConfiguration", None, loads, places)
    kind = "LINEAR" if len(loads) == 2 else "POLYGONAL"
    return curve_action(made, action.name, load, kind=kind, **options)


def write_point(made: Any, action: PointLoad) -> Any:
    """Write a force on a member: with a vertex of its own, or as a discrete configuration."""
    values = (*action.force, *action.moment)
    load = made.six("IfcStructuralLoadSingleForce", "force", values)
    if action.as_vertex:
        where = made.stick_point(action.member, action.position)
        return made.point_action(action.name, load, where=where, local=action.local)
    place = [[made.units.of(action.position, "LENGTHUNIT")]]
    load = made.create("IfcStructuralLoadConfiguration", None, [load], place)
    return curve_action(made, action.name, load, local=action.local, kind="DISCRETE")


def write_case(made: Any, case: Case, actions: list[Any]) -> None:
    """Write a load case with its actions, through a load group where it asks for one."""
    weight = None if case.self_weight is None else [float(v) for v in case.self_weight]
    entity = made.rooted(
        "IfcStructuralLoadCase", case.name, None, None, "LOAD_CASE", case.action_type,
        case.source, case.coefficient, None, weight,
    )  # fmt: skip
    if case.group and actions:
        group = made.rooted(
            "IfcStructuralLoadGroup", case.group, None, None, "LOAD_GROUP", "NOTDEFINED",
            "NOTDEFINED", None, None,
        )  # fmt: skip
        made.relate("IfcRelAssignsToGroup", f"in {case.group}", actions, None, group)
        actions = [group]
    if actions:
        made.relate("IfcRelAssignsToGroup", f"in {case.name}", actions, None, entity)


def write_combination(made: Any, combination: Combination) -> None:
    """Write a combination with a factor on each relation."""
    entity = made.rooted(
        "IfcStructuralLoadGroup", combination.name, None, None, "LOAD_COMBINATION",
        "NOTDEFINED", "NOTDEFINED", combination.coefficient, combination.purpose,
    )  # fmt: skip
    for case, factor in combination.factors.items():
        made.relate(
            "IfcRelAssignsToGroupByFactor",
            f"{case} in {combination.name}",
            [made.by_name[case]],
            None,
            entity,
            factor,
        )


def _material(made: Any, spec: MaterialSpec) -> Any:
    material = made.create("IfcMaterial", spec.name)
    of = made.units.of
    for set_name, values in (
        ("Pset_MaterialCommon", (
            ("MassDensity", "IfcMassDensityMeasure", of(spec.density, "MASSDENSITYUNIT")),
        )),
        ("Pset_MaterialMechanical", (
            ("YoungModulus", "IfcModulusOfElasticityMeasure",
             of(spec.modulus, "MODULUSOFELASTICITYUNIT")),
            ("ShearModulus", "IfcModulusOfElasticityMeasure",
             of(spec.shear_modulus, "MODULUSOFELASTICITYUNIT")),
            ("ThermalExpansionCoefficient", "IfcThermalExpansionCoefficientMeasure",
             spec.expansion),
        )),
    ):  # fmt: skip
        properties = [
            made.create("IfcPropertySingleValue", name, None, made.create(measure, value))
            for name, measure, value in values
        ]
        made.create("IfcMaterialProperties", set_name, None, properties, material)
    return material


def _usage(
    made: Any, section: SectionSpec, end: SectionSpec | None, material: Any, point: int
) -> Any:
    start_set = _profile_set(made, section, material)
    if end is None:
        return made.create("IfcMaterialProfileSetUsage", start_set, point)
    return made.create(
        "IfcMaterialProfileSetUsageTapering", start_set, point, None,
        _profile_set(made, end, material), point,
    )  # fmt: skip


def _profile_set(made: Any, section: SectionSpec, material: Any) -> Any:
    shape = profile(made, section)
    item = made.create("IfcMaterialProfile", section.name, None, material, shape)
    return made.create("IfcMaterialProfileSet", None, None, [item])
