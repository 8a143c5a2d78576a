"""A plain description of an analysis model: SI units, world axes with z up.

Everything that can be told apart in a file has its own small class; names are what a test refers
to.  GlobalIds are made from the names, so that they are the same in every run.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

Point = tuple[float, float, float]
Six = tuple[float, float, float, float, float, float]

RIGID = math.inf
FREE = 0.0


def pinned() -> Six:
    """Held in every direction, free to rotate in the vertical plane through x (about y)."""
    return (RIGID, RIGID, RIGID, RIGID, FREE, RIGID)


def roller() -> Six:
    """Held vertically and sideways, free along x, free to rotate about y."""
    return (FREE, RIGID, RIGID, RIGID, FREE, RIGID)


def fixed() -> Six:
    """Held against everything."""
    return (RIGID,) * 6


@dataclass(frozen=True)
class Joint:
    """A point connection.  ``support``: stiffness along and about x, y, z; None: a free node.

    ``axes`` are the directions (z, x) of the support's own axes, None: the model's.
    """

    name: str
    point: Point
    support: Six | None = None
    axes: tuple[Point, Point] | None = None


@dataclass(frozen=True)
class Link:
    """A member is attached to a joint.

    ``release``: stiffness along and about the member's x, y, z; None: rigid.  ``on_member`` is
    the point of the member that is joined, where it is not the joint's own (eccentric).
    """

    joint: str
    release: Six | None = None
    on_member: Point | None = None


@dataclass(frozen=True)
class SectionSpec:
    """A rectangle (width, depth in m) or, where ``web`` is given, an I-section."""

    name: str = "R 200x400"
    width: float = 0.2
    depth: float = 0.4
    web: float = 0.0
    flange: float = 0.0


@dataclass(frozen=True)
class MaterialSpec:
    """Modulus and shear modulus in Pa, density in kg/m³, thermal expansion in 1/K."""

    name: str = "Test steel"
    modulus: float = 210e9
    shear_modulus: float = 81e9
    density: float = 7850.0
    expansion: float = 12e-6


@dataclass(frozen=True)
class Stick:
    """A straight curve member from ``start`` to ``end``; links in any order.

    ``axis`` is the direction of its local z (IFC4 on) or of the section's z (IFC2X3).
    """

    name: str
    start: Point
    end: Point
    links: tuple[Link, ...] = ()
    section: SectionSpec = SectionSpec()
    end_section: SectionSpec | None = None
    material: MaterialSpec = MaterialSpec()
    kind: str = "RIGID_JOINED_MEMBER"
    axis: Point | None = (0.0, 0.0, 1.0)
    cardinal_point: int = 10


@dataclass(frozen=True)
class SpreadLoad:
    """Force (N/m) and couple (N·m/m) along a member.

    ``stations`` (m from its start) go with ``forces``; empty: one force all over it.  ``local``:
    in the member's axes.  ``projected``: per length of the projection.  ``wave``: "SINUS" or
    "PARABOLA", the force being the largest.
    """

    name: str
    case: str
    member: str
    forces: tuple[Point, ...]
    stations: tuple[float, ...] = ()
    moments: tuple[Point, ...] = ()
    local: bool = False
    projected: bool = False
    wave: str = ""


@dataclass(frozen=True)
class PointLoad:
    """Force (N) and couple (N·m) on a member, m from its start.

    ``as_vertex``: as an action with a vertex of its own, else as a load configuration (IFC4 on).
    """

    name: str
    case: str
    member: str
    position: float
    force: Point = (0.0, 0.0, 0.0)
    moment: Point = (0.0, 0.0, 0.0)
    as_vertex: bool = True
    local: bool = False


@dataclass(frozen=True)
class NodeLoad:
    """Force (N) and couple (N·m) on a joint."""

    name: str
    case: str
    joint: str
    force: Point = (0.0, 0.0, 0.0)
    moment: Point = (0.0, 0.0, 0.0)


@dataclass(frozen=True)
class MoveJoint:
    """Prescribed displacement (m) and rotation (rad) of a joint."""

    name: str
    case: str
    joint: str
    displacement: Point = (0.0, 0.0, 0.0)
    rotation: Point = (0.0, 0.0, 0.0)


@dataclass(frozen=True)
class Warmth:
    """Temperature change (K) of a member: even, and + face minus - face along y and z."""

    name: str
    case: str
    member: str
    constant: float = 0.0
    along_y: float = 0.0
    along_z: float = 0.0


Action = SpreadLoad | PointLoad | NodeLoad | MoveJoint | Warmth


@dataclass(frozen=True)
class Case:
    """A load case; ``group``: its actions stand in a load group within it."""

    name: str
    action_type: str = "NOTDEFINED"
    source: str = "NOTDEFINED"
    self_weight: Point | None = None
    coefficient: float | None = None
    group: str = ""


@dataclass(frozen=True)
class Combination:
    """Factors by case name; ``purpose`` "ULS" or "SLS"."""

    name: str
    factors: Mapping[str, float]
    purpose: str = "ULS"
    coefficient: float | None = None


@dataclass(frozen=True)
class Model:
    """The whole; ``origin`` and ``turn`` (rad about z) place its "global" system in the world."""

    joints: tuple[Joint, ...]
    sticks: tuple[Stick, ...]
    actions: tuple[Action, ...] = ()
    cases: tuple[Case, ...] = ()
    combinations: tuple[Combination, ...] = ()
    name: str = "Test model"
    origin: Point = (0.0, 0.0, 0.0)
    turn: float = 0.0


def continuous_beam(
    spans: Sequence[float],
    *,
    supports: Sequence[Six | None] | None = None,
    actions: Sequence[Action] = (),
    cases: Sequence[Case] = (),
    combinations: Sequence[Combination] = (),
    section: SectionSpec = SectionSpec(),
    material: MaterialSpec = MaterialSpec(),
    releases: Mapping[str, Six] | None = None,
) -> Model:
    """Return a beam along x with one member for each span.

    Joints are called J0, J1, …, members M1, M2, …; the first support is pinned, the others are
    rollers where ``supports`` is not given.  ``releases`` by "M1 start" or "M1 end".
    """
    places = [0.0]
    for span in spans:
        places.append(places[-1] + span)
    given = list(supports) if supports is not None else [pinned(), *[roller()] * len(spans)]
    loose = releases or {}
    joints = tuple(Joint(f"J{i}", (x, 0.0, 0.0), given[i]) for i, x in enumerate(places))
    sticks = tuple(
        Stick(
            f"M{i + 1}",
            joints[i].point,
            joints[i + 1].point,
            # The end first: a reader must not take the first relation for the start.
            (
                Link(f"J{i + 1}", loose.get(f"M{i + 1} end")),
                Link(f"J{i}", loose.get(f"M{i + 1} start")),
            ),
            section,
            material=material,
        )
        for i in range(len(spans))
    )
    return Model(joints, sticks, tuple(actions), tuple(cases), tuple(combinations))
