"""The actions of an analysis model, placed on its members and connections, in world directions."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from analysis_core.building import AxisAction, BuildingAction, NodeAction, TemperatureAction
from analysis_core.ifc import frames
from analysis_core.ifc.analytical_conditions import Node
from analysis_core.ifc.analytical_loads import (
    NIL,
    Load,
    LoadError,
    curve_load,
    movement,
    point_force,
    temperatures,
    varying_load,
)
from analysis_core.ifc.analytical_members import Local
from analysis_core.ifc.analytical_notes import MALFORMED, Notes, global_id, listed, name_of, titled
from analysis_core.ifc.analytical_topology import Topology
from analysis_core.ifc.file_units import FileUnits
from analysis_core.ifc.frames import Frame, Vector
from analysis_core.settings import Tolerances

Cases = Sequence[tuple[str, float]]

_ON_AXIS = 1e-3
_NOT_STATED = ("NOTDEFINED", "USERDEFINED", "None", "")


@dataclass(frozen=True, slots=True)
class Target:
    """What an action acts on: a member, or the members of which a varying one is made.

    ``parts`` are members with how far along the whole each begins, m.
    """

    parts: tuple[tuple[Local, float], ...]

    @property
    def first(self) -> Local:
        """The member at the start."""
        return self.parts[0][0]

    @property
    def length(self) -> float:
        """Length of the whole, m."""
        last, offset = self.parts[-1]
        return offset + last.length


class ActionReader:
    """Reads actions; what cannot be placed becomes a finding with its GlobalId."""

    def __init__(
        self,
        topology: Topology,
        units: FileUnits,
        members: Mapping[int, Target],
        nodes: Mapping[int, Node],
        tolerances: Tolerances,
        notes: Notes,
    ) -> None:
        self._topology = topology
        self._units = units
        self._members = members
        self._nodes = nodes
        self._tolerances = tolerances
        self._notes = notes
        self._relative: list[str] = []

    def read(
        self,
        actions: Iterable[Any],
        targets: Mapping[int, Sequence[Any]],
        cases: Mapping[int, Cases],
    ) -> list[BuildingAction]:
        """Return what acts on members and connections, once for each case."""
        result: list[BuildingAction] = []
        for action in actions:
            items = targets.get(action.id(), ())
            if not items:
                self._left_out(action, "it acts on nothing that the model names", slug="no-target")
                continue
            if len(items) > 1:
                self._report_several(action, items)
            for item in items:
                try:
                    result += self._on(action, item, cases.get(action.id(), ()))
                except LoadError as error:
                    self._left_out(action, str(error), item)
                except MALFORMED as error:
                    self._notes.malformed(action, error)
        self._report_relative()
        return result

    def _on(self, action: Any, item: Any, cases: Cases) -> list[BuildingAction]:
        load = action[7]
        if action.is_a("IfcStructuralSurfaceAction") or action.is_a("IfcStructuralPlanarAction"):
            self._left_out(
                action, "it acts on a surface, and surface actions are not spread to members yet",
                item, slug="surface-action",
            )  # fmt: skip
            return []
        if load is None:
            self._left_out(action, "it states no load", item)
            return []
        target, node = self._members.get(item.id()), self._nodes.get(item.id())
        if node is not None:
            return self._on_node(action, load, node, cases)
        if target is None:
            self._off_target(action, item)
            return []
        if action.is_a("IfcStructuralPointAction"):
            return self._point_on_member(action, load, target, cases)
        return self._along_member(action, load, target, cases)

    # -- on a connection ---------------------------------------------------------------------

    def _on_node(self, action: Any, load: Any, node: Node, cases: Cases) -> list[BuildingAction]:
        axes = node.axes if action[8] == "LOCAL_COORDS" else _axes(node.frame)
        force = moment = displacement = rotation = NIL
        if load.is_a("IfcStructuralLoadSingleForce"):
            force, moment = _both(point_force(load, self._units), axes)
            self._report_warping(action, load)
        elif load.is_a("IfcStructuralLoadSingleDisplacement"):
            displacement, rotation = _both(movement(load, self._units), axes)
        else:
            raise LoadError(f"a load of class {load.is_a()} does not act on a point")
        if not any((*force, *moment, *displacement, *rotation)):
            self._report_empty(action)
            return []
        head = (global_id(action), name_of(action))
        return [
            NodeAction(
                *head,
                case,
                node.connection.global_id,
                _times(force, factor),
                _times(moment, factor),
                _times(displacement, factor),
                _times(rotation, factor),
            )
            for case, factor in cases
        ]

    # -- at a point of a member --------------------------------------------------------------

    def _point_on_member(
        self, action: Any, load: Any, target: Target, cases: Cases
    ) -> list[BuildingAction]:
        if not load.is_a("IfcStructuralLoadSingleForce"):
            raise LoadError(
                f"a load of class {load.is_a()} does not act at a point of a member. Put a "
                f"displacement on a point connection"
            )
        frame = self._frame(action, target)
        point = self._topology.point(action, frame)
        if point is None:
            raise LoadError(
                "it has no vertex that tells where on the member it acts. Give it a topology "
                "representation with an IfcVertexPoint"
            )
        local, offset = target.parts[0]
        position = offset + local.position_of(point)
        aside = local.distance_to(point)
        if aside > _ON_AXIS:
            self._report_aside(action, local, aside)
        self._report_warping(action, load)
        force, moment = point_force(load, self._units)
        place = self._clamped(position, target.length)
        sample = Load("discrete", (force,), (moment,), (place,))
        return self._placed(action, sample, target, cases, projected=False)

    # -- along a member ----------------------------------------------------------------------

    def _along_member(
        self, action: Any, load: Any, target: Target, cases: Cases
    ) -> list[BuildingAction]:
        if load.is_a("IfcStructuralLoadTemperature"):
            return self._temperature(action, load, target, cases)
        begin, end = self._extent(action, target)
        if action.is_a("IfcStructuralLinearActionVarying"):
            loads = [load, *(action[13] or ())]
            samples = varying_load(loads, self._varying_places(action, target), self._units)
            begin = 0.0  # the places are counted on the member
        else:
            distribution = str(getattr(action, "PredefinedType", None) or "")
            samples = curve_load(load, distribution, self._units)
            self._check_distribution(action, load, distribution)
        if samples.stations is not None:
            self._check_relative(action, samples.stations, target)
        samples = samples.over(begin, end)
        if samples.note:
            self._notes.add(
                "note",
                "action-read-as",
                f"{titled(action)}: {samples.note}.",
                (global_id(action),),
            )
        projected = str(getattr(action, "ProjectedOrTrue", None)) == "PROJECTED_LENGTH"
        if projected and action[8] == "LOCAL_COORDS":
            self._notes.add(
                "warning",
                "projected-local-action",
                f"{titled(action)} is stated per projected length in local axes, which the "
                f"standard excludes; it was taken per true length.",
                (global_id(action),),
            )
            projected = False
        return self._placed(action, samples, target, cases, projected=projected)

    def _temperature(
        self, action: Any, load: Any, target: Target, cases: Cases
    ) -> list[BuildingAction]:
        constant, along_y, along_z = temperatures(load, self._units)
        if not (constant or along_y or along_z):
            self._report_empty(action)
            return []
        begin, end = self._extent(action, target)
        if begin > 1e-6 or end < target.length - 1e-6:
            raise LoadError("a temperature over part of a member cannot be analysed yet")
        return [
            TemperatureAction(
                global_id(action),
                name_of(action),
                case,
                local.member.global_id,
                constant * factor,
                along_y * factor,
                along_z * factor,
            )
            for local, _ in target.parts
            for case, factor in cases
        ]

    def _placed(
        self, action: Any, load: Load, target: Target, cases: Cases, *, projected: bool
    ) -> list[BuildingAction]:
        """Return the load in world directions, part by part of the target, case by case."""
        if load.empty:
            self._report_empty(action)
            return []
        local = target.first
        axes = local.x, local.y, local.z
        shares: tuple[float, ...] = (1.0, 1.0, 1.0)
        if action[8] != "LOCAL_COORDS":
            axes = _axes(self._frame(action, target))
            if projected:  # per length of the projection across the direction of the force
                shares = tuple(_across(local.x, axis) for axis in axes)
        forces = [
            _turned((f[0] * shares[0], f[1] * shares[1], f[2] * shares[2]), axes)
            for f in load.forces
        ]
        moments = [_turned(m, axes) for m in load.moments]
        stations = [self._clamped(station, target.length) for station in load.stations or ()]
        result: list[BuildingAction] = []
        for part, offset in target.parts:
            cut = _cut(load.shape, stations, forces, moments, offset, part, target)
            if cut is None:
                continue
            places, own_forces, own_moments = cut
            has_moments = any(any(m) for m in own_moments)
            result += [
                AxisAction(
                    global_id(action),
                    name_of(action),
                    case,
                    part.member.global_id,
                    load.shape,
                    places,
                    tuple(_times(f, factor) for f in own_forces),
                    tuple(_times(m, factor) for m in own_moments) if has_moments else (),
                )
                for case, factor in cases
            ]
        return result

    # -- where -------------------------------------------------------------------------------

    def _frame(self, action: Any, target: Target) -> Frame:
        """Return the "global" system: that of the action if it has one, else the member's."""
        if action[5] is not None:
            return self._topology.placements.frame(action[5])
        return target.first.frame

    def _extent(self, action: Any, target: Target) -> tuple[float, float]:
        """Return from where to where on the target an action reaches, m.

        An edge of its own (IFC2X3 asks for one) may cover only part of the member.
        """
        whole = 0.0, target.length
        if not self._topology.has_shape(action):
            return whole
        ends = self._topology.straight(action, self._frame(action, target))
        if ends is None:
            return whole
        local = target.first
        aside = max(local.distance_to(end) for end in ends)
        if aside > _ON_AXIS:
            self._report_aside(action, local, aside)
        begin, end = sorted(local.position_of(point) for point in ends)
        if not end > begin:
            raise LoadError("its own edge has no length along the member")
        return self._clamped(begin, target.length), self._clamped(end, target.length)

    def _varying_places(self, action: Any, target: Target) -> list[float]:
        """IFC2X3: one point in each representation of a shape aspect, for each value."""
        frame = self._frame(action, target)
        local = target.first
        places = []
        for representation in action[12][0] or ():
            item = representation[3][0]
            if item.is_a("IfcCartesianPoint") and len(item[0]) < 3:
                # Fewer coordinates are counted along the curve itself.
                places.append(float(item[0][0]) * self._units.length)
                continue
            point = self._topology.vertex(item)
            if point is None:
                raise LoadError(f"the place of a value is given by {item.is_a()}")
            places.append(local.position_of(frames.point(frame, *point)))
        return places

    def _clamped(self, station: float, length: float) -> float:
        slack = min(_ON_AXIS, 0.01 * length)
        if -slack <= station < 0.0:
            return 0.0
        return length if length < station <= length + slack else station

    # -- findings ----------------------------------------------------------------------------

    def _check_distribution(self, action: Any, load: Any, distribution: str) -> None:
        if distribution == "EQUIDISTANT":
            self._notes.add(
                "note",
                "action-read-as",
                f"{titled(action)}: its values are taken as evenly spaced and straight between "
                f"(EQUIDISTANT states no more).",
                (global_id(action),),
            )

    def _check_relative(self, action: Any, stations: Sequence[float], target: Target) -> None:
        """Locations are lengths; from exactly 0 to exactly 1 they look like fractions."""
        length = self._units.length
        low, high = stations[0] / length, stations[-1] / length
        if low >= 0.0 and abs(high - 1.0) < 1e-9 and target.length / length > 1.5:
            self._relative.append(global_id(action))

    def _report_relative(self) -> None:
        if self._relative:
            self._notes.add(
                "warning",
                "locations-look-relative",
                f"{len(self._relative)} actions ({listed(self._relative)}) end at location 1 "
                f"exactly. Locations are lengths by the standard and were taken so; if they are "
                f"meant as fractions of the member, multiply them by its length.",
                self._relative,
            )

    def _left_out(
        self, action: Any, reason: str, item: Any = None, *, slug: str = "action-not-understood"
    ) -> None:
        on = f" on {titled(item)}" if item is not None else ""
        self._notes.add(
            "warning",
            slug,
            f"{titled(action)}{on} was left out: {reason}.",
            (global_id(action), global_id(item) if item is not None else ""),
        )

    def _off_target(self, action: Any, item: Any) -> None:
        reasons: tuple[tuple[str, str], ...] = (
            ("IfcStructuralCurveMember", "the member it acts on was left out itself"),
            ("IfcStructuralPointConnection", "the connection it acts on was left out itself"),
            ("IfcStructuralCurveConnection", "actions on curve connections are not analysed"),
            ("IfcStructuralSurfaceMember", "surface members are not analysed"),
            ("IfcStructuralSurfaceConnection", "surface connections are not analysed"),
            ("IfcElement", "it acts on a physical element, not on a member of the analysis model"),
        )
        reason = next((text for name, text in reasons if item.is_a(name)), "nothing is known of it")
        self._left_out(action, reason, item, slug="action-without-member")

    def _report_several(self, action: Any, items: Sequence[Any]) -> None:
        self._notes.add(
            "warning",
            "action-on-several",
            f"{titled(action)} acts on {len(items)} items; it was put on each of them in full.",
            (global_id(action), *(global_id(item) for item in items)),
        )

    def _report_empty(self, action: Any) -> None:
        self._notes.add(
            "note",
            "empty-action",
            f"{titled(action)} states no value other than zero; it has no effect.",
            (global_id(action),),
        )

    def _report_aside(self, action: Any, local: Local, aside: float) -> None:
        near = aside <= self._tolerances.join
        self._notes.add(
            "note" if near else "warning",
            "action-off-axis",
            f"{titled(action)} acts {aside * 1e3:.0f} mm beside the axis of member "
            f"{local.member.global_id}; it was moved onto the axis, and the couple that this "
            f"would add is neglected.",
            (global_id(action), local.member.global_id),
        )

    def _report_warping(self, action: Any, load: Any) -> None:
        if load.is_a("IfcStructuralLoadSingleForceWarping") and load[7]:
            self._notes.add(
                "warning",
                "warping-moment",
                f"{titled(action)} states a warping moment, which is not analysed.",
                (global_id(action),),
            )


def chained(parts: Sequence[Local]) -> Target | None:
    """Return the target made of the parts of a varying member, None where they do not line up."""
    first = min(parts, key=lambda local: local.position_of(local.member.start))
    ordered = sorted(parts, key=lambda local: first.position_of(local.member.start))
    placed: list[tuple[Local, float]] = []
    reach = 0.0
    for local in ordered:
        straight = frames.dot(local.x, ordered[0].x) > math.cos(math.radians(0.1))
        gap = abs(ordered[0].position_of(local.member.start) - reach)
        if not straight or gap > 1e-3 or ordered[0].distance_to(local.member.start) > 1e-3:
            return None
        placed.append((local, reach))
        reach += local.length
    return Target(tuple(placed))


def _cut(
    shape: str,
    stations: Sequence[float],
    forces: Sequence[Vector],
    moments: Sequence[Vector],
    offset: float,
    part: Local,
    target: Target,
) -> tuple[tuple[float, ...], tuple[Vector, ...], tuple[Vector, ...]] | None:
    """Return the samples that fall on one part, counted from its start."""
    if len(target.parts) == 1:
        return tuple(stations), tuple(forces), tuple(moments)
    low, high = offset, offset + part.length
    if shape == "discrete":
        last = part is target.parts[-1][0]
        kept = [i for i, s in enumerate(stations) if low <= s < high or (last and s >= high)]
        chosen: list[tuple[float, Vector, Vector]] = [
            (stations[i] - offset, forces[i], moments[i]) for i in kept
        ]
    else:
        chosen = []
        for i in range(len(stations) - 1):
            a, b = max(stations[i], low), min(stations[i + 1], high)
            if b <= a:
                continue
            for s in (a, b):
                u = (s - stations[i]) / (stations[i + 1] - stations[i])
                chosen.append((s - offset, _between(forces, i, u), _between(moments, i, u)))
    if not chosen:
        return None
    places, own_forces, own_moments = zip(*chosen, strict=True)
    return places, own_forces, own_moments


def _between(vectors: Sequence[Vector], i: int, u: float) -> Vector:
    a, b = vectors[i], vectors[i + 1]
    return frames.plus(_times(a, 1.0 - u), b, u)


def _axes(frame: Frame) -> tuple[Vector, Vector, Vector]:
    unit: Callable[[Sequence[float]], Vector] = frames.unit
    return unit(frame[0:3]), unit(frame[3:6]), unit(frame[6:9])


def _turned(vector: Vector, axes: tuple[Vector, Vector, Vector]) -> Vector:
    """Return the world vector of components along ``axes``."""
    x, y, z = axes
    a, b, c = vector
    return (
        a * x[0] + b * y[0] + c * z[0],
        a * x[1] + b * y[1] + c * z[1],
        a * x[2] + b * y[2] + c * z[2],
    )


def _across(direction: Vector, axis: Vector) -> float:
    """Return the sine of the angle between two unit vectors."""
    return frames.length(frames.cross(direction, axis))


def _both(
    pair: tuple[Vector, Vector], axes: tuple[Vector, Vector, Vector]
) -> tuple[Vector, Vector]:
    return _turned(pair[0], axes), _turned(pair[1], axes)


def _times(vector: Vector, factor: float) -> Vector:
    return vector[0] * factor, vector[1] * factor, vector[2] * factor
