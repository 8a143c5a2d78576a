"""Buildings for the tests of ``idealise``, put together without any file."""

from __future__ import annotations

import math
import random
from collections.abc import Sequence
from dataclasses import replace

from analysis_core.building import (
    FIXED,
    Attachment,
    AxisAction,
    AxisMember,
    Building,
    Connection,
    LoadCase,
    NodeAction,
    Restraint,
    TemperatureAction,
)
from analysis_core.idealise.vectors import Vector, cross, length, subtract, unit
from analysis_core.model import Line, LineModel, Material, Section

FREE3 = (0.0, 0.0, 0.0)
PINNED = Restraint(rotation=FREE3)
ROLLER = Restraint(translation=(0.0, math.inf, math.inf), rotation=FREE3)
HINGE = Restraint(rotation=(math.inf, 0.0, math.inf))

STEEL = Material("S235", 210e9, 81e9, density=7850.0, thermal_expansion=12e-6, category="steel")
# An invented lopsided section: no two of its values can be taken for each other.
SECTION = Section(
    "T1",
    "",
    area=0.01,
    inertia=2e-4,
    inertia_lateral=3e-5,
    shear_area=0.004,
    depth=0.4,
    width=0.2,
    top=0.2,
)
RIGIDITY = 210e9 * 2e-4


def member(
    global_id: str,
    start: Vector,
    end: Vector,
    *,
    up: Vector | None = None,
    section: Section | None = SECTION,
    material: Material | None = STEEL,
    **more: object,
) -> AxisMember:
    """Return a steel member whose depth stands upright (a column: along X)."""
    if up is None:
        axis = unit(subtract(end, start))
        side = cross((0.0, 0.0, 1.0), axis)
        up = (1.0, 0.0, 0.0) if length(side) < 1e-6 else unit(cross(axis, unit(side)))
    return AxisMember(
        global_id,
        global_id,
        "IfcStructuralCurveMember",
        start,
        end,
        up,
        section,
        material=material,
        **more,  # type: ignore[arg-type]
    )


def node(global_id: str, point: Vector, restraint: Restraint | None = None) -> Connection:
    """Return a connection."""
    return Connection(global_id, global_id, point, restraint)


def attached(members: Sequence[AxisMember], nodes: Sequence[Connection]) -> list[Attachment]:
    """Return an attachment, rigid, wherever a connection lies on a member."""
    found = []
    for m in members:
        axis = unit(subtract(m.end, m.start))
        size = length(subtract(m.end, m.start))
        for n in nodes:
            apart = subtract(n.point, m.start)
            along = sum(a * b for a, b in zip(apart, axis, strict=True))
            off = length(subtract(apart, tuple(along * c for c in axis)))  # type: ignore[arg-type]
            if off < 1e-6 and -1e-6 <= along <= size + 1e-6:
                found.append(Attachment(m.global_id, n.global_id, along))
    return found


def model(
    members: Sequence[AxisMember],
    nodes: Sequence[Connection],
    *,
    actions: Sequence[AxisAction | NodeAction | TemperatureAction] = (),
    cases: Sequence[LoadCase] = (LoadCase("G", "permanent", "case-G"),),
    attachments: Sequence[Attachment] | None = None,
    **more: object,
) -> Building:
    """Return an analytical building."""
    return Building(
        "analytical",
        "IFC4",
        members=tuple(members),
        connections=tuple(nodes),
        attachments=tuple(attached(members, nodes) if attachments is None else attachments),
        actions=tuple(actions),
        cases=tuple(cases),
        **more,  # type: ignore[arg-type]
    )


def uniform(
    global_id: str, target: str, force: Vector, size: float, *, case: str = "G", start: float = 0.0
) -> AxisAction:
    """Return a uniform action over ``start``..``size`` of a member."""
    return AxisAction(
        global_id, global_id, case, target, "continuous", (start, size), (force, force)
    )


def released(
    building: Building, target: str, connection: str, release: Restraint = HINGE
) -> Building:
    """Return the building with one attachment released."""
    changed = tuple(
        replace(a, release=release) if (a.member, a.connection) == (target, connection) else a
        for a in building.attachments
    )
    assert changed != building.attachments
    return replace(building, attachments=changed)


def turned(building: Building, angle: float, offset: Vector = FREE3) -> Building:
    """Return the building turned in plan and moved."""
    c, s = math.cos(angle), math.sin(angle)

    def v(a: Vector) -> Vector:
        return c * a[0] - s * a[1], s * a[0] + c * a[1], a[2]

    def p(a: Vector) -> Vector:
        b = v(a)
        return b[0] + offset[0], b[1] + offset[1], b[2] + offset[2]

    def r(restraint: Restraint | None) -> Restraint | None:
        if restraint is None:
            return None
        axes = tuple(v(axis) for axis in restraint.axes)
        return replace(restraint, axes=axes)  # type: ignore[arg-type]

    def act(action: object) -> object:
        if isinstance(action, AxisAction):
            return replace(
                action,
                forces=tuple(v(f) for f in action.forces),
                moments=tuple(v(m) for m in action.moments),
            )
        if isinstance(action, NodeAction):
            return replace(
                action,
                force=v(action.force),
                moment=v(action.moment),
                displacement=v(action.displacement),
                rotation=v(action.rotation),
            )
        return action

    return replace(
        building,
        members=tuple(
            replace(m, start=p(m.start), end=p(m.end), up=v(m.up)) for m in building.members
        ),
        connections=tuple(
            replace(n, point=p(n.point), restraint=r(n.restraint)) for n in building.connections
        ),
        attachments=tuple(
            replace(a, release=r(a.release) or FIXED, eccentricity=v(a.eccentricity))
            for a in building.attachments
        ),
        actions=tuple(act(a) for a in building.actions),  # type: ignore[misc]
        carriers=tuple(
            replace(
                k,
                bottom=k.bottom + offset[2],
                top=k.top + offset[2],
                corners=tuple(p((x, y, 0.0))[:2] for x, y in k.corners),
                start=None if k.start is None else p(k.start),
                end=None if k.end is None else p(k.end),
                up=v(k.up),
            )
            for k in building.carriers
        ),
    )


def shuffled(building: Building, seed: int) -> Building:
    """Return the same building with everything in another order."""
    rng = random.Random(seed)

    def mixed(items: Sequence[object]) -> tuple[object, ...]:
        return tuple(rng.sample(list(items), len(items)))

    return replace(
        building,
        members=mixed(building.members),
        connections=mixed(building.connections),
        attachments=mixed(building.attachments),
        carriers=mixed(building.carriers),
        actions=mixed(building.actions),
    )  # type: ignore[arg-type]


def only(found: LineModel) -> Line:
    """Return the single line of a model."""
    assert len(found.lines) == 1, [line.mark for line in found.lines]
    return found.lines[0]


def slugs(found: LineModel) -> list[str]:
    """Return the slugs of all findings."""
    return [finding.slug for finding in found.findings]


def finding(found: LineModel, slug: str) -> object:
    """Return the single finding with a slug."""
    matching = [f for f in found.findings if f.slug == slug]
    assert len(matching) == 1, slugs(found)
    return matching[0]


def spans(line: Line) -> list[float]:
    """Return the lengths of the members of a line, rounded to 0.1 mm."""
    return [round(m.length, 4) for m in line.members]
