"""The line model: joints, members, supports, actions, cases and combinations.

Frozen; a changed model is a new model (``dataclasses.replace``).  Inside: metres, newtons,
newton-metres, radians, kelvin, unmarked.

Sign convention, stated once for the whole program
---------------------------------------------------
A line or frame lies in a vertical plane, seen so that its horizontal axis ``x`` runs left to
right; ``z`` is up::

      z                      member from start to end:   t = (cos a, sin a)
      ^    down = local n    its local "down" direction:  n = (sin a, -cos a)
      |     |                (t turned clockwise by a right angle)
      +-----|--> x
            v                clockwise is positive for rotations, couples and end moments

* Actions and deflections: positive downward; across an inclined member along ``n``.
* Reactions: vertical positive upward, horizontal positive to the right, moment clockwise,
  all acting on the line.
* End moments: acting on the member, clockwise positive.  Diagram moment (sagging positive,
  tension on the ``n`` side) at the start = end moment at the start, at the end = minus it.
* Shear: positive where the part to the left (towards the start) is pushed up.
* Axial force: tension positive.

Everything is checked once, when a ``Line`` is built; the solver trusts its input.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import Literal

from analysis_core.errors import ModelError
from analysis_core.findings import Finding

Point = tuple[float, float, float]
Role = Literal["span", "leg"]
Kind = Literal["line", "frame"]
Nature = Literal["permanent", "imposed", "snow", "wind", "temperature", "settlement", "other"]
LimitState = Literal["strength", "serviceability"]

RIGID = math.inf
FREE = 0.0

# Beyond these no structure is meant, and products in the solver would leave the range of numbers.
_LARGEST_ACTION = 1e25  # N, N/m, N·m, 1/m, m or rad
_LONGEST_MEMBER = 1e6  # m
_RIGIDITIES = (1e-12, 1e25)  # N·m²; from a hair to beyond any cross-section


@dataclass(frozen=True, slots=True)
class Section:
    """Cross-section as read: SI units, y horizontal and z along the depth of the member.

    ``inertia`` bends the member in its vertical plane (about the horizontal section axis),
    ``inertia_lateral`` about the axis along the depth, ``inertia_product`` between the two
    (not zero: the section does not bend in its plane alone).  ``shear_area`` goes with
    ``inertia``; 0 where unknown.  ``dimensions`` keeps the profile's own measures by name, for
    the member checks.  ``source`` says where the values came from.
    """

    name: str
    shape: str
    area: float
    inertia: float
    inertia_lateral: float = 0.0
    inertia_product: float = 0.0
    torsion: float = 0.0
    shear_area: float = 0.0
    depth: float = 0.0
    width: float = 0.0
    top: float = 0.0
    """Distance from the centroid to the topmost fibre, m."""
    dimensions: tuple[tuple[str, float], ...] = ()
    source: str = ""

    @property
    def title(self) -> str:
        """Its name, else its shape and size."""
        if self.name or not (self.width and self.depth):
            return self.name or self.shape
        return f"{self.shape} {1e3 * self.width:.0f} x {1e3 * self.depth:.0f} mm".strip()


@dataclass(frozen=True, slots=True)
class Material:
    """Elastic moduli in Pa, density in kg/m³ (0 where unknown), strength by name in Pa."""

    name: str
    elastic_modulus: float
    shear_modulus: float = 0.0
    density: float = 0.0
    thermal_expansion: float = 0.0
    category: str = ""
    """"steel", "stainless", "concrete", "timber", "hardwood", "glulam", "lvl"; "": not known."""
    strength: tuple[tuple[str, float], ...] = ()
    source: str = ""

    @property
    def usable_shear_modulus(self) -> float:
        """The shear modulus to work with, Pa: as stated where it can be true, else from E.

        0 where none is stated that can be true and the category tells no ratio.
        """
        if self.shear_modulus_is_plausible:
            return self.shear_modulus
        ratio = _MODULUS_RATIOS.get(self.category)
        return self.elastic_modulus / ratio[0] if ratio else 0.0

    @property
    def analysed_shear_modulus(self) -> float:
        """The shear modulus of an analysis that is flexible in shear, Pa.

        As stated even where no structural material has it, since sections that stand for lattices
        or sandwiches are modelled so; not where it can only be a slip of units.
        """
        ratio = self.elastic_modulus / self.shear_modulus if self.shear_modulus > 0.0 else 0.0
        low, high = _SLIP_OF_UNITS
        return self.shear_modulus if low < ratio < high else self.usable_shear_modulus

    @property
    def shear_modulus_is_plausible(self) -> bool:
        """Whether the stated shear modulus goes with the modulus of elasticity."""
        low, high = _MODULUS_RATIOS.get(self.category, (0.0, *_ANY_RATIO))[1:]
        return low * self.shear_modulus <= self.elastic_modulus <= high * self.shear_modulus


_WOOD = (16.0, 8.0, 40.0)
# E over G, and the least and the largest ratio that can be true.  Steel: Poisson's ratio of 0.3
# (EN 1993-1-1, 3.2.6) give or take a tenth; concrete: 0.2 (EN 1992-1-1, 3.1.3), cracked 0; timber:
# EN 338 has 16 throughout, EN 14080 up to 22.  A value far from it is a slip of units.
_MODULUS_RATIOS = {
    "steel": (2.6, 2.34, 2.89), "stainless": (2.6, 2.34, 2.89), "concrete": (2.4, 1.8, 3.3),
    "timber": _WOOD, "hardwood": _WOOD, "glulam": _WOOD, "lvl": _WOOD,
}  # fmt: skip
_ANY_RATIO = (1.8, 60.0)
# E over G beyond these: kilo-, mega- or gigapascals, or pounds and inches, were mixed up.
_SLIP_OF_UNITS = (0.1, 1000.0)


@dataclass(frozen=True, slots=True)
class Piece:
    """A stretch of a member along which the rigidity is one smooth function.

    With ``u`` from 0 to 1 along the piece, the flexural rigidity is
    ``(flexural[0] + flexural[1]*u + flexural[2]*u**2 + ...) ** power`` in N·m².  ``shear``
    gives the shear rigidity (effective shear area times shear modulus, N) in the same way,
    without the power; None: rigid in shear.
    """

    length: float
    flexural: tuple[float, ...]
    power: float = 1.0
    shear: tuple[float, ...] | None = None

    def flexural_at(self, u: float) -> float:
        """Return the flexural rigidity in N·m² at ``u`` (0 to 1) along the piece."""
        return float(sum(c * u**i for i, c in enumerate(self.flexural)) ** self.power)


@dataclass(frozen=True, slots=True)
class Support:
    """Stiffness against each movement of a joint: RIGID (infinite), FREE (0) or N/m, N·m/rad."""

    vertical: float = FREE
    horizontal: float = FREE
    rotation: float = FREE


@dataclass(frozen=True, slots=True)
class Joint:
    """A point where members meet, end or are supported.

    ``x``, ``z`` are coordinates in the plane of the line, ``point`` the same place in the world.
    ``element`` is the GlobalId of the supporting element or point connection.  ``reason`` says
    in a sentence how the support was decided, ``width`` is the width of the bearing along the
    line (0 where unknown), ``elements`` further elements that meet here.
    """

    id: int
    x: float
    z: float
    point: Point = (0.0, 0.0, 0.0)
    support: Support | None = None
    element: str | None = None
    elements: tuple[str, ...] = ()
    reason: str = ""
    width: float = 0.0


@dataclass(frozen=True, slots=True)
class Member:
    """A straight member between two joints, rigid axially.

    ``start_spring`` and ``end_spring`` are the rotational stiffness of the connection between
    the member's end and the joint: RIGID, FREE (a release) or N·m/rad.  ``span`` numbers the
    spans of a line from 1, left to right; members of one span share the number; legs have none.
    Position ``s`` on the member lies at ``element_offset + s`` from the start of ``element``, or
    at ``element_offset - s`` where ``reversed_``.
    """

    id: int
    start: int
    end: int
    pieces: tuple[Piece, ...]
    role: Role = "span"
    start_spring: float = RIGID
    end_spring: float = RIGID
    span: int | None = None
    element: str = ""
    element_offset: float = 0.0
    reversed_: bool = False
    section: Section | None = None
    end_section: Section | None = None
    material: Material | None = None

    @property
    def length(self) -> float:
        """Length in m."""
        return math.fsum(piece.length for piece in self.pieces)

    @property
    def flexural_rigidity(self) -> float:
        """Flexural rigidity at the start in N·m²."""
        return self.pieces[0].flexural_at(0.0)

    @property
    def prismatic(self) -> bool:
        """Whether the rigidity is constant and the member is rigid in shear."""
        first = self.pieces[0].flexural_at(0.0)
        return all(
            piece.shear is None and not any(piece.flexural[1:]) and piece.flexural_at(0.0) == first
            for piece in self.pieces
        )

    @property
    def shear_parameter(self) -> float | None:
        """Φ = 12 EI/(G A_s L²) of a member that bends and shears alike all along, else None."""
        first = self.pieces[0]
        alike = all(
            (piece.shear, piece.flexural, piece.power) == (first.shear, first.flexural, first.power)
            for piece in self.pieces
        )
        if first.shear is None or not alike or any((*first.shear[1:], *first.flexural[1:])):
            return None
        return 12.0 * first.flexural_at(0.0) / (first.shear[0] * self.length**2)


@dataclass(frozen=True, slots=True)
class DistributedForce:
    """Force per length of member from ``start`` to ``end`` (m from the member's start).

    Intensity in N/m is a polynomial in ``v = s - start``: ``transverse[0] + transverse[1]*v + ...``
    positive along the member's local down ``n``; ``axial`` likewise, positive from start to end.
    """

    case: str
    member: int
    start: float
    end: float
    transverse: tuple[float, ...] = ()
    axial: tuple[float, ...] = ()
    source: str = ""
    """GlobalId of the action, or where it came from."""

    def transverse_at(self, s: float) -> float:
        """Intensity in N/m across the member, ``s`` m from its start."""
        v = s - self.start
        return float(sum(c * v**i for i, c in enumerate(self.transverse)))


@dataclass(frozen=True, slots=True)
class PointForce:
    """Force in N at ``position`` (m from the member's start); directions as DistributedForce."""

    case: str
    member: int
    position: float
    transverse: float = 0.0
    axial: float = 0.0
    source: str = ""


@dataclass(frozen=True, slots=True)
class PointMoment:
    """Couple in N·m at ``position``, clockwise positive."""

    case: str
    member: int
    position: float
    moment: float
    source: str = ""


@dataclass(frozen=True, slots=True)
class ImposedCurvature:
    """Curvature in 1/m that the member would take if free, from ``start`` to ``end``.

    Positive where it makes the member sag.  Temperature: alpha * (bottom - top) / depth.
    """

    case: str
    member: int
    start: float
    end: float
    curvature: float
    source: str = ""


@dataclass(frozen=True, slots=True)
class JointForce:
    """Force on a joint: ``horizontal`` to the right, ``vertical`` down, ``moment`` clockwise."""

    case: str
    joint: int
    horizontal: float = 0.0
    vertical: float = 0.0
    moment: float = 0.0
    source: str = ""


@dataclass(frozen=True, slots=True)
class JointMovement:
    """Prescribed movement of a support: right, down (settlement), clockwise; m and rad.

    Where the support is a spring, the ground below the spring moves by this much.
    """

    case: str
    joint: int
    horizontal: float = 0.0
    vertical: float = 0.0
    rotation: float = 0.0
    source: str = ""


MemberAction = DistributedForce | PointForce | PointMoment | ImposedCurvature
JointAction = JointForce | JointMovement
Action = MemberAction | JointAction


@dataclass(frozen=True, slots=True)
class Case:
    """A load case.  ``category`` refines the nature (an imposed-load category, say)."""

    name: str
    nature: Nature = "other"
    category: str = ""
    global_id: str = ""
    source: str = ""
    """How the nature was settled: from the model, the job file, or a stated default."""


@dataclass(frozen=True, slots=True)
class Combination:
    """Factors by case name.  ``rule`` names the clause; ``kind`` refines the limit state."""

    name: str
    limit_state: LimitState
    factors: Mapping[str, float]
    kind: str = ""
    rule: str = ""
    source: str = ""
    favourable: Mapping[str, float] = field(default_factory=dict)
    """Factor of a case where its action is favourable; a case not named keeps its factor."""


@dataclass(frozen=True, slots=True)
class Line:
    """A beam line (``kind`` "line") or a plane frame ("frame"), ready to be solved.

    Joint ids index ``joints``, member ids index ``members``.  Along a line, spans run left to
    right.  A line (not a frame) is held horizontally as a whole: its axis does not slide.
    Raises ModelError where the parts do not fit together.
    """

    mark: str
    joints: tuple[Joint, ...]
    members: tuple[Member, ...]
    actions: tuple[Action, ...] = ()
    kind: Kind = "line"
    storey: str | None = None
    elements: tuple[str, ...] = ()
    origin: Point = (0.0, 0.0, 0.0)
    """World point of x = z = 0."""
    axis: Point = (1.0, 0.0, 0.0)
    """World direction of x, horizontal."""
    fault: str = ""
    """Why the line must not be solved, "" where nothing speaks against it.  Where a member has
    no rigidity, its pieces then hold 1 N·m² so that the line can be listed and drawn."""

    def __post_init__(self) -> None:
        _check_numbering(self)
        for member in self.members:
            _check_member(self, member)
        lengths = [member.length for member in self.members]
        for action in self.actions:
            _check_action(self, action, lengths)

    def direction(self, member: Member) -> tuple[float, float]:
        """Return the unit vector (cos a, sin a) from the member's start to its end."""
        a, b = self.joints[member.start], self.joints[member.end]
        length = math.hypot(b.x - a.x, b.z - a.z)
        return (b.x - a.x) / length, (b.z - a.z) / length


@dataclass(frozen=True, slots=True)
class Transfer:
    """The reaction at ``joint`` of ``from_line`` acts on ``to_line``.

    It acts at ``position`` m from the start of ``member`` of that line.
    """

    from_line: str
    joint: int
    to_line: str
    member: int
    position: float


@dataclass(frozen=True, slots=True)
class Tie:
    """An item of an analysis model stands for a building element; both by GlobalId.

    Position ``p`` on a member lies at ``offset + p`` m from the start of the element, or at
    ``offset - p`` where ``reversed_``.
    """

    item: str
    element: str
    offset: float = 0.0
    reversed_: bool = False


@dataclass(frozen=True, slots=True)
class LineModel:
    """All lines of a building with the cases and combinations they are solved for."""

    lines: tuple[Line, ...]
    cases: tuple[Case, ...] = ()
    combinations: tuple[Combination, ...] = ()
    transfers: tuple[Transfer, ...] = ()
    findings: tuple[Finding, ...] = ()
    title: str = ""
    names: Mapping[str, str] = field(default_factory=dict)
    """Name by GlobalId of everything that lines and findings refer to."""
    direct: tuple[tuple[str, str, float], ...] = ()
    """What goes straight to an element that is no line: its GlobalId, the case, N downward."""
    held_by: Mapping[str, str] = field(default_factory=dict)
    """Name of the slab that holds a member's top sideways all along, by the member's GlobalId."""
    ties: tuple[Tie, ...] = ()
    """Which building elements get the results of the items of an analysis model too."""


def _check_numbering(line: Line) -> None:
    if not line.members:
        raise ModelError(f"Line {line.mark} has no members; a line needs at least one.")
    for what, items in (("joint", line.joints), ("member", line.members)):
        for index, item in enumerate(items):
            if item.id != index:  # type: ignore[attr-defined]
                raise ModelError(
                    f"Line {line.mark}: {what} number {index} has id {item.id}; "  # type: ignore[attr-defined]
                    f"ids count from 0 in order."
                )


def _check_member(line: Line, member: Member) -> None:
    trouble = _trouble_of(line, member)
    if trouble:
        name = member.element or "no element"
        raise ModelError(f"Line {line.mark}, member {member.id} ({name}) {trouble}")


def _trouble_of(line: Line, member: Member) -> str:
    """What keeps a member from being analysed, as the rest of a sentence; "" where nothing does."""
    for end in (member.start, member.end):
        if not 0 <= end < len(line.joints):
            return f"refers to joint {end}; the line has {len(line.joints)}."
    a, b = line.joints[member.start], line.joints[member.end]
    distance = math.hypot(b.x - a.x, b.z - a.z)
    if not distance > 0.0:
        return f"has no length: both its joints are at x = {a.x:.3f} m."
    if not distance <= _LONGEST_MEMBER:
        return (
            f"is {distance:.3g} m long; at most {_LONGEST_MEMBER:.0e} m are permitted. "
            f"Check its geometry and the length unit of the file."
        )
    if abs(distance - member.length) > 1e-6 * distance:
        return (
            f"is {member.length:.6f} m long by its pieces and {distance:.6f} m between its joints."
        )
    for piece in member.pieces:
        looks = 1 if len(piece.flexural) == 1 else 9
        values = [piece.flexural_at(u / 8.0) for u in range(looks)]
        low, high = _RIGIDITIES
        wrong = [v for v in values if not low <= v <= high]
        if wrong:
            return (
                f"has flexural rigidity {wrong[0]:.3g} N·m²; it must be positive, from "
                f"{low:.0e} to {high:.0e}. Check its section and its modulus of elasticity."
            )
    for spring in (member.start_spring, member.end_spring):
        if not spring >= 0.0:
            return f"has an end spring of {spring}; it must not be negative."
    return ""


def _check_action(line: Line, action: Action, lengths: Sequence[float]) -> None:
    trouble = _trouble_with(line, action, lengths)
    if trouble:
        raise ModelError(f"Line {line.mark}, case '{action.case}': an action {trouble}")


def _trouble_with(line: Line, action: Action, lengths: Sequence[float]) -> str:
    """What is wrong with an action, as ``_trouble_of``; ``lengths`` are those of the members."""
    values = _values(action)
    if not all(abs(value) <= _LARGEST_ACTION for value in values):
        largest = max(math.inf if math.isnan(value) else abs(value) for value in values)
        return (
            f"has the value {largest:.3g} (SI); it must be a number of at most "
            f"{_LARGEST_ACTION:.0e} ({action.source or 'no source'}). Correct it, or check the "
            f"units of the file."
        )
    if isinstance(action, JointForce | JointMovement):
        joint = action.joint
        missing = not 0 <= joint < len(line.joints)
        return f"refers to joint {joint}, which is missing." if missing else ""
    if not 0 <= action.member < len(lengths):
        return f"refers to member {action.member}; there is none."
    length = lengths[action.member]
    slack = 1e-9 * length
    if isinstance(action, PointForce | PointMoment):
        low = high = action.position
    else:
        low, high = action.start, action.end
    if not (-slack <= low <= high <= length + slack):
        return (
            f"from {low:.3f} m to {high:.3f} m lies outside member "
            f"{action.member}, which is {length:.3f} m long ({action.source or 'no source'})."
        )
    return ""


def _values(action: Action) -> tuple[float, ...]:
    """Everything in an action that says how large it is."""
    match action:
        case DistributedForce():
            return (*action.transverse, *action.axial)
        case PointForce():
            return (action.transverse, action.axial)
        case PointMoment():
            return (action.moment,)
        case ImposedCurvature():
            return (action.curvature,)
        case JointForce():
            return (action.horizontal, action.vertical, action.moment)
        case JointMovement():
            return (action.horizontal, action.vertical, action.rotation)
