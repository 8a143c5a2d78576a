"""The actions of an analysis model, placed on its members and connections, in world directions."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from typing import Any

from analysis_core.building import (
    AreaAction,
    AxisAction,
    BuildingAction,
    NodeAction,
    TemperatureAction,
)
from analysis_core.ifc.analytical.action_notes import ActionNotes
from analysis_core.ifc.analytical.conditions import Node
from analysis_core.ifc.analytical.loads import (
    NIL,
    Load,
    LoadError,
    curve_load,
    movement,
    point_force,
    temperatures,
    varying_load,
)
from analysis_core.ifc.analytical.members import Local
from analysis_core.ifc.analytical.notes import (
    MALFORMED,
    Notes,
    global_id,
    is_kind,
    name_of,
    titled,
)
from analysis_core.ifc.analytical.surfaces import SurfaceReader
from analysis_core.ifc.analytical.targets import Target, across, axes_of, both, cut, times, turned
from analysis_core.ifc.analytical.topology import Topology
from analysis_core.ifc.file_units import FileUnits
from analysis_core.ifc.geometry import frames
from analysis_core.ifc.geometry.frames import Frame, Vector
from analysis_core.settings import Tolerances

Cases = Sequence[tuple[str, float]]

_ON_AXIS = 1e-3
_ON_SURFACES = (
    "IfcStructuralSurfaceAction", "IfcStructuralPlanarAction", "IfcStructuralPlanarActionVarying",
)  # fmt: skip


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
        schema: str,
        surfaces: SurfaceReader,
    ) -> None:
        self.area_actions: list[AreaAction] = []
        self._surfaces = surfaces
        self._topology = topology
        self._units = units
        self._members = members
        self._nodes = nodes
        # IFC2X3 has CausedBy in the tenth place, and states the distribution by the class.
        self._has_distribution = schema != "IFC2X3"
        self._notes = notes
        self._report = ActionNotes(notes, tolerances, units.length)

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
                self._report.left_out(
                    action, "it acts on nothing that the model names", slug="no-target"
                )
                continue
            if len(items) > 1:
                self._report.several(action, items)
            for item in items:
                try:
                    result += self._on(action, item, cases.get(action.id(), ()))
                except LoadError as error:
                    self._report.left_out(action, str(error), item)
                except MALFORMED as error:
                    self._notes.malformed(action, error)
        self._report.finish()
        return result

    def _on(self, action: Any, item: Any, cases: Cases) -> list[BuildingAction]:
        load = action[7]
        if is_kind(action, "IfcStructuralSurfaceAction") or is_kind(
            action, "IfcStructuralPlanarAction"
        ):
            try:
                self.area_actions += self._surfaces.action(action, item, cases)
            except LoadError as error:
                self._report.left_out(action, str(error), item, slug="surface-action")
            return []
        if load is None:
            self._report.left_out(action, "it states no load", item)
            return []
        target, node = self._members.get(item.id()), self._nodes.get(item.id())
        if node is not None:
            return self._on_node(action, load, node, cases)
        if target is None:
            self._report.off_target(action, item)
            return []
        if is_kind(action, "IfcStructuralPointAction"):
            return self._point_on_member(action, load, target, cases)
        return self._along_member(action, load, target, cases)

    # -- on a connection ---------------------------------------------------------------------

    def _on_node(self, action: Any, load: Any, node: Node, cases: Cases) -> list[BuildingAction]:
        axes = node.axes if action[8] == "LOCAL_COORDS" else axes_of(node.frame)
        force = moment = displacement = rotation = NIL
        if is_kind(load, "IfcStructuralLoadSingleForce"):
            force, moment = both(point_force(load, self._units), axes)
            self._report.warping(action, load)
        elif is_kind(load, "IfcStructuralLoadSingleDisplacement"):
            displacement, rotation = both(movement(load, self._units), axes)
        else:
            raise LoadError(f"a load of class {load.is_a()} does not act on a point")
        if not any((*force, *moment, *displacement, *rotation)):
            self._report.empty(action)
            return []
        head = (global_id(action), name_of(action))
        return [
            NodeAction(
                *head,
                case,
                node.connection.global_id,
                times(force, factor),
                times(moment, factor),
                times(displacement, factor),
                times(rotation, factor),
            )
            for case, factor in cases
        ]

    # -- at a point of a member --------------------------------------------------------------

    def _point_on_member(
        self, action: Any, load: Any, target: Target, cases: Cases
    ) -> list[BuildingAction]:
        if not is_kind(load, "IfcStructuralLoadSingleForce"):
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
            self._report.aside(action, local, aside)
        self._report.warping(action, load)
        force, moment = point_force(load, self._units)
        place = self._clamped(position, target.length)
        sample = Load("discrete", (force,), (moment,), (place,))
        return self._placed(action, sample, target, cases, projected=False)

    # -- along a member ----------------------------------------------------------------------

    def _along_member(
        self, action: Any, load: Any, target: Target, cases: Cases
    ) -> list[BuildingAction]:
        if is_kind(load, "IfcStructuralLoadTemperature"):
            return self._temperature(action, load, target, cases)
        begin, end = self._extent(action, target)
        if is_kind(action, "IfcStructuralLinearActionVarying"):
            loads = [load, *(action[13] or ())]
            samples = varying_load(loads, self._varying_places(action, target), self._units)
            begin, end = 0.0, target.length  # the places are counted on the member
        else:
            distribution = str(action[11]) if self._has_distribution else ""
            samples = curve_load(load, distribution, self._units)
        if samples.stations is not None:
            self._report.relative(action, samples.stations, target)
        samples = samples.over(begin, end)
        if samples.note:
            self._notes.add(
                "note",
                "action-read-as",
                f"{titled(action)}: {samples.note}.",
                (global_id(action),),
            )
        projected = action[10 if self._has_distribution else 11] == "PROJECTED_LENGTH"
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
            self._report.empty(action)
            return []
        begin, end = sorted(self._extent(action, target))
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
            self._report.empty(action)
            return []
        local = target.first
        axes = local.x, local.y, local.z
        shares: tuple[float, ...] = (1.0, 1.0, 1.0)
        if action[8] != "LOCAL_COORDS":
            axes = axes_of(self._frame(action, target))
            if projected:  # per length of the projection across the direction of the force
                shares = tuple(across(local.x, axis) for axis in axes)
        forces = [
            turned((f[0] * shares[0], f[1] * shares[1], f[2] * shares[2]), axes)
            for f in load.forces
        ]
        world = Load(
            load.shape,
            tuple(forces),
            tuple(turned(m, axes) for m in load.moments),
            tuple(self._clamped(station, target.length) for station in load.stations or ()),
        )
        result: list[BuildingAction] = []
        for part, offset in target.parts:
            own = cut(world, target, part, offset)
            if own is not None:
                result += _axis_actions(action, own, part, cases)
        return result

    # -- where -------------------------------------------------------------------------------

    def _frame(self, action: Any, target: Target) -> Frame:
        """Return the "global" system: that of the action if it has one, else the member's."""
        if action[5] is not None:
            return self._topology.placements.frame(action[5])
        return target.first.frame

    def _extent(self, action: Any, target: Target) -> tuple[float, float]:
        """Return from where to where on the target an action reaches, m.

        An edge of its own (IFC2X3 asks for one) may cover only part of the member, and may run
        against it: then the first is the larger.
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
            self._report.aside(action, local, aside)
        begin, end = (self._clamped(local.position_of(p), target.length) for p in ends)
        if begin == end:
            raise LoadError("its own edge has no length along the member")
        if begin > end and action[8] == "LOCAL_COORDS":
            raise LoadError("its own edge runs against the member, so its local axes are in doubt")
        return begin, end

    def _varying_places(self, action: Any, target: Target) -> list[float]:
        """IFC2X3: one point in each representation of a shape aspect, for each value."""
        frame = self._frame(action, target)
        local = target.first
        places = []
        for representation in action[12][0] or ():
            item = representation[3][0]
            if is_kind(item, "IfcCartesianPoint") and len(item[0]) < 3:
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


def _axis_actions(action: Any, load: Load, part: Local, cases: Cases) -> list[BuildingAction]:
    """Return a load on one member, once for each case."""
    has_moments = any(any(m) for m in load.moments)
    return [
        AxisAction(
            global_id(action),
            name_of(action),
            case,
            part.member.global_id,
            load.shape,
            load.stations or (),
            _scaled(load.forces, factor),
            _scaled(load.moments, factor) if has_moments else (),
        )
        for case, factor in cases
    ]


def _scaled(vectors: tuple[Vector, ...], factor: float) -> tuple[Vector, ...]:
    return vectors if factor == 1.0 else tuple(times(vector, factor) for vector in vectors)
