"""The building as read from a file, before it is idealised: world coordinates, SI units.

This is the meeting point of ``ifc`` (which fills it) and ``idealise`` (which turns it into a
``LineModel``); neither knows the other.  Vectors are world vectors with z up.  Forces keep
their direction in space here: gravity is (0, 0, -1).
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Literal

from analysis_core.findings import Finding
from analysis_core.model import LimitState, Material, Nature, Point, Section, Tie

Vector = tuple[float, float, float]
Axes = tuple[Vector, Vector, Vector]
WORLD_AXES: Axes = ((1.0, 0.0, 0.0), (0.0, 1.0, 0.0), (0.0, 0.0, 1.0))


@dataclass(frozen=True, slots=True)
class Restraint:
    """Stiffness of a condition in six directions: infinite = fixed, 0 = free, else N/m, N·m/rad.

    ``axes`` are the world directions of its own x, y and z.
    """

    translation: Vector = (math.inf, math.inf, math.inf)
    rotation: Vector = (math.inf, math.inf, math.inf)
    axes: Axes = WORLD_AXES


FIXED = Restraint()


@dataclass(frozen=True, slots=True)
class Connection:
    """A node of an analysis model.  ``restraint`` None: free, held only by its members."""

    global_id: str
    name: str
    point: Point
    restraint: Restraint | None = None
    element: str | None = None
    """GlobalId of the physical element that the model says it stands for."""


@dataclass(frozen=True, slots=True)
class Attachment:
    """A member is attached to a connection at ``position`` m from the member's start.

    ``release`` holds the stiffness of the connection (FIXED: rigid).  ``eccentricity`` is the
    world vector from the connection's point to the point on the member's axis.
    """

    member: str
    connection: str
    position: float
    release: Restraint = FIXED
    eccentricity: Vector = (0.0, 0.0, 0.0)


@dataclass(frozen=True, slots=True)
class AxisMember:
    """A straight member: a structural curve member, or a beam-like physical element.

    ``up`` is the unit world vector along the section's depth (its z axis), perpendicular to the
    axis.  ``end_section`` is set where the section tapers linearly from start to end.
    ``modelled_start`` and ``modelled_end`` are the ends of the body as drawn, where the axis was
    taken longer or moved (physical route).
    """

    global_id: str
    name: str
    ifc_class: str
    start: Point
    end: Point
    up: Vector
    section: Section | None = None
    end_section: Section | None = None
    material: Material | None = None
    storey: str | None = None
    type_name: str = ""
    carries_moment: bool = True
    """False for members stated as pin-jointed, tie, cable or strut."""
    axis_offset: float = 0.0
    """Distance between the stated axis and the centroid of the body, m."""
    element: str | None = None
    """GlobalId of the physical element that an analytical member stands for."""
    note: str = ""
    end_stiffness: tuple[float | None, float | None] = (None, None)
    """Rotational stiffness of the joints at its start and end, where an authoring tool states it
    beyond doubt (physical route): 0 released, infinite rigid, else N·m/rad; None: not stated."""
    modelled_start: Point | None = None
    modelled_end: Point | None = None


@dataclass(frozen=True, slots=True)
class Opening:
    """A hole in a wall: its convex outline in plan (x, y) and its levels."""

    bottom: float
    top: float
    corners: tuple[tuple[float, float], ...]


@dataclass(frozen=True, slots=True)
class Carrier:
    """A physical element that beams may bear on: a column, wall, footing, slab or other beam.

    Columns have an axis (``start`` lower, ``end`` upper).  ``corners`` is the convex outline in
    plan (x, y), ``bottom`` and ``top`` its levels.
    """

    global_id: str
    name: str
    ifc_class: str
    bottom: float
    top: float
    corners: tuple[tuple[float, float], ...]
    start: Point | None = None
    end: Point | None = None
    section: Section | None = None
    material: Material | None = None
    storey: str | None = None
    up: Vector = (1.0, 0.0, 0.0)
    openings: tuple[Opening, ...] = ()


@dataclass(frozen=True, slots=True)
class Area:
    """A surface that takes area loads: a slab, a space, or a surface member of an analysis model.

    ``outline`` and ``voids`` are simple polygons in plan (x, y), in either sense of rotation.
    ``bottom`` and ``top`` are the levels between which it lies (a space: its floor twice).
    ``span`` is the direction (x, y) in which it carries one way, None where that is not stated.
    """

    global_id: str
    name: str
    ifc_class: str
    bottom: float
    top: float
    outline: tuple[tuple[float, float], ...]
    voids: tuple[tuple[tuple[float, float], ...], ...] = ()
    span: tuple[float, float] | None = None
    storey: str | None = None
    type_name: str = ""
    material: Material | None = None


@dataclass(frozen=True, slots=True)
class AreaAction:
    """Force per square metre of plan on an area, as a vector in the world, N/m²."""

    global_id: str
    name: str
    case: str
    area: str
    force: Vector


@dataclass(frozen=True, slots=True)
class AxisAction:
    """Forces on a member, as vectors in the world, already per true length of the member.

    ``shape`` "continuous": per metre, linear between ``stations`` (m from the member's start),
    zero outside; "discrete": N (and N·m) at each station.
    """

    global_id: str
    name: str
    case: str
    member: str
    shape: Literal["continuous", "discrete"]
    stations: tuple[float, ...]
    forces: tuple[Vector, ...]
    moments: tuple[Vector, ...] = ()


@dataclass(frozen=True, slots=True)
class NodeAction:
    """Force, couple or prescribed displacement at a connection."""

    global_id: str
    name: str
    case: str
    connection: str
    force: Vector = (0.0, 0.0, 0.0)
    moment: Vector = (0.0, 0.0, 0.0)
    displacement: Vector = (0.0, 0.0, 0.0)
    rotation: Vector = (0.0, 0.0, 0.0)


@dataclass(frozen=True, slots=True)
class TemperatureAction:
    """Temperature change along a member: uniform part, and difference across the section.

    ``difference_z`` = value at the section's +z face minus the value at the -z face, in K.
    """

    global_id: str
    name: str
    case: str
    member: str
    constant: float = 0.0
    difference_y: float = 0.0
    difference_z: float = 0.0


BuildingAction = AxisAction | NodeAction | TemperatureAction


@dataclass(frozen=True, slots=True)
class LoadCase:
    """A case of the file.  ``self_weight`` are the coefficients of gravity along x, y, z, or None.

    A coefficient of -1 along z is the full self weight downward.
    """

    name: str
    nature: Nature
    global_id: str = ""
    category: str = ""
    self_weight: Vector | None = None
    source: str = ""


@dataclass(frozen=True, slots=True)
class LoadCombination:
    """Factors by case name, nested groups multiplied out."""

    name: str
    limit_state: LimitState
    factors: Mapping[str, float]
    global_id: str = ""
    source: str = ""


@dataclass(frozen=True, slots=True)
class Building:
    """Everything that was read, with what could not be."""

    route: Literal["analytical", "physical"]
    schema: str
    name: str = ""
    members: tuple[AxisMember, ...] = ()
    connections: tuple[Connection, ...] = ()
    attachments: tuple[Attachment, ...] = ()
    carriers: tuple[Carrier, ...] = ()
    actions: tuple[BuildingAction, ...] = ()
    cases: tuple[LoadCase, ...] = ()
    combinations: tuple[LoadCombination, ...] = ()
    findings: tuple[Finding, ...] = ()
    areas: tuple[Area, ...] = ()
    area_actions: tuple[AreaAction, ...] = ()
    storeys: tuple[tuple[str, float], ...] = ()
    """Name and elevation (m, world) of each storey, lowest first."""
    counts: Mapping[str, int] = field(default_factory=dict)
    """What the file holds by class, for the survey."""
    ties: tuple[Tie, ...] = ()
    """Which building elements the items of an analysis model stand for."""
    known_marks: Mapping[str, str] = field(default_factory=dict)
    """Marks that lines had in an earlier run, by the GlobalIds of their elements."""
