"""Supports and releases of an analysis model: what stiffness is stated in which direction.

IFC4 on: a boolean (true: fixed, false: free) or a stiffness.  IFC2X3: a number, where -1 is
fixed and 0 free.  In both, nothing stated means that the condition is not known.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

from analysis_core.building import Attachment, Axes, Connection, Restraint
from analysis_core.findings import listed
from analysis_core.ifc.analytical.members import Local
from analysis_core.ifc.analytical.notes import MALFORMED, Notes, global_id, is_kind, name_of, titled
from analysis_core.ifc.analytical.targets import Target
from analysis_core.ifc.analytical.topology import Topology
from analysis_core.ifc.file_units import FileUnits
from analysis_core.ifc.geometry import frames
from analysis_core.ifc.geometry.frames import Frame, Vector
from analysis_core.settings import Tolerances

_KINDS = ("LINEARSTIFFNESSUNIT",) * 3 + ("ROTATIONALSTIFFNESSUNIT",) * 3
_SAME_POINT = 1e-6  # m
_DIRECTIONS = ("x", "y", "z", "x (rotation)", "y (rotation)", "z (rotation)")


class Node:
    """A point connection with the axes of its "global" system."""

    __slots__ = ("axes", "connection", "frame")

    def __init__(self, connection: Connection, frame: Frame, axes: Axes) -> None:
        self.connection = connection
        self.frame = frame
        self.axes = axes


class ConditionReader:
    """Reads point connections and the attachments of members to them."""

    def __init__(
        self,
        topology: Topology,
        units: FileUnits,
        shared: Mapping[int, Any],
        elements: Mapping[int, str],
        notes: Notes,
    ) -> None:
        self._topology = topology
        self._units = units
        self._shared = shared
        self._elements = elements
        self._notes = notes
        self._unknown: dict[str, list[str]] = {}
        self._seen: set[str] = set()
        self._lengths: list[str] = []
        self._taken: dict[str, int] = {}

    def connections(self, entities: Any) -> dict[int, Node]:
        """Return the point connections by entity number."""
        nodes: dict[int, Node] = {}
        for entity in entities:
            try:
                node = self._node(entity)
            except MALFORMED as error:
                self._notes.malformed(entity, error)
                continue
            if node is not None:
                nodes[entity.id()] = node
        return nodes

    def attachments(
        self, relations: Any, members: Mapping[int, Target], nodes: Mapping[int, Node],
        tolerances: Tolerances,
    ) -> list[Attachment]:  # fmt: skip
        """Return where members are attached to point connections, in file order."""
        result: dict[tuple[str, str], Attachment] = {}
        for relation in relations:
            try:
                if relation[4] is None or relation[5] is None:
                    self._report_loose(relation)
                    continue
                target, node = members.get(relation[4].id()), nodes.get(relation[5].id())
                if target is None or node is None:
                    continue  # the missing one has its own finding
                attached = [
                    self._attachment(relation, local, node, tolerances)
                    for local in target.parts_at(node.connection.point)
                ]
            except MALFORMED as error:
                self._notes.malformed(relation, error)
                continue
            for attachment in attached:
                pair = attachment.member, attachment.connection
                if pair in result:
                    self._report_twice(relation, attachment)
                else:
                    result[pair] = attachment
        found = list(result.values())
        found += self._by_place(members, nodes, found)
        self._report_unknown()
        self._report_lengths()
        return found

    def _by_place(
        self, members: Mapping[int, Target], nodes: Mapping[int, Node], attached: list[Attachment]
    ) -> list[Attachment]:
        """Attach connections that no relation names to the members that end where they are."""
        related = {attachment.connection for attachment in attached}
        loose = [n.connection for n in nodes.values() if n.connection.global_id not in related]
        if not loose:
            return []
        ends: dict[tuple[int, int, int], list[tuple[Local, float]]] = {}
        singles = [target.first for target in members.values() if len(target.parts) == 1]
        for local in singles:
            ends.setdefault(_cell(local.member.start), []).append((local, 0.0))
            ends.setdefault(_cell(local.member.end), []).append((local, local.length))
        result = []
        for connection in loose:
            for local, position in ends.get(_cell(connection.point), ()):
                release = Restraint(axes=(local.x, local.y, local.z))
                result.append(
                    Attachment(local.member.global_id, connection.global_id, position, release)
                )
        if result:
            names = list(dict.fromkeys(attachment.connection for attachment in result))
            self._notes.add(
                "warning",
                "attachment-by-place",
                f"{len(names)} connections ({listed(names)}) are related to no member; they were "
                f"taken to join the members that end there, rigidly. Relate them by "
                f"IfcRelConnectsStructuralMember.",
                names,
            )
        return result

    def _node(self, entity: Any) -> Node | None:
        if not self._notes.identified(entity, self._taken):
            return None
        key = global_id(entity)
        frame = self._topology.frame(entity, self._shared.get(entity.id()))
        point = self._topology.point(entity, frame)
        if point is None:
            self._notes.add(
                "error",
                "connection-without-point",
                f"{titled(entity)} was left out: it has no vertex point. Give it a topology "
                f"representation with an IfcVertexPoint.",
                (key,),
            )
            return None
        axes = self._axes(entity[8] if len(entity) > 8 else None, frame)
        condition = entity[7]
        restraint = None
        if condition is not None:
            restraint = self._restraint(condition, axes, entity, unknown=0.0)
        connection = Connection(
            key, name_of(entity), point, restraint, self._elements.get(entity.id())
        )
        return Node(connection, frame, axes)

    def _attachment(
        self, relation: Any, local: Local, node: Node, tolerances: Tolerances
    ) -> Attachment:
        point = node.connection.point
        on_member, apart = self._eccentric(relation, local, node)
        position = local.position_of(on_member if on_member is not None else point)
        # A node a little beyond the end holds the end.
        slack = tolerances.join
        if -slack <= position < 0.0:
            position = 0.0
        elif local.length < position <= local.length + slack:
            position = local.length
        release = Restraint(axes=(local.x, local.y, local.z))
        if relation[6] is not None:
            member_frame: Frame = (*local.x, *local.y, *local.z, 0.0, 0.0, 0.0)
            axes = self._axes(relation[9], member_frame)
            stated = self._restraint(relation[6], axes, relation, unknown=math.inf)
            release = stated if stated is not None else release
        self._report_additions(relation)
        if relation[8] is not None:
            self._lengths.append(global_id(relation))
        return Attachment(
            local.member.global_id, node.connection.global_id, position, release, apart
        )

    def _eccentric(self, relation: Any, local: Local, node: Node) -> tuple[Vector | None, Vector]:
        """Return the point on the member and its distance from the node, where stated.

        IfcConnectionPointGeometry names a point on the member and one on the connection, both
        in the "global" system; IfcConnectionPointEccentricity may give the distance instead.
        """
        constraint = relation[10] if len(relation) > 10 else None
        if constraint is None:
            return None, (0.0, 0.0, 0.0)
        if not is_kind(constraint, "IfcConnectionPointGeometry"):
            self._report_constraint(relation, constraint)
            return None, (0.0, 0.0, 0.0)
        here = node.connection.point
        stated = self._topology.vertex(constraint[0])
        there = frames.point(local.frame, *stated) if stated is not None else here
        unsaid = frames.length(frames.minus(there, here)) <= _SAME_POINT
        if is_kind(constraint, "IfcConnectionPointEccentricity") and unsaid:
            there = self._by_distance(constraint, local, here)
        return there, frames.minus(there, here)

    def _by_distance(self, constraint: Any, local: Local, here: Vector) -> Vector:
        """Return the point on the member from its distance along the axes of its placement.

        The standard does not say from which of both the distance runs: whichever way meets the
        member is meant.
        """
        length = self._units.length
        offsets = [float(constraint[index] or 0.0) * length for index in (2, 3, 4)]
        apart = frames.direction(local.frame, *offsets)
        return min(
            (frames.plus(here, apart), frames.minus(here, apart)),
            key=lambda point: round(local.clear_of(point), 6),
        )

    def _axes(self, placement: Any, frame: Frame) -> Axes:
        """Return the world directions of a condition's axes."""
        if placement is not None:
            frame = frames.compose(frame, self._topology.placements.axes(placement))
        return frames.unit(frame[0:3]), frames.unit(frame[3:6]), frames.unit(frame[6:9])

    def _restraint(
        self, condition: Any, axes: Axes, owner: Any, *, unknown: float
    ) -> Restraint | None:
        """Return the stiffness of a condition, ``unknown`` where a direction is not stated."""
        if not is_kind(condition, "IfcBoundaryNodeCondition"):
            self._notes.add(
                "warning",
                "condition-not-understood",
                f"{titled(owner)} has a condition of class {condition.is_a()}, which does not "
                f"belong to a point; it was passed over. Use IfcBoundaryNodeCondition.",
                (global_id(owner),),
            )
            return None
        get = condition.get_argument
        values = [self._stiffness(get(i + 1), i, owner, unknown=unknown) for i in range(6)]
        if is_kind(condition, "IfcBoundaryNodeConditionWarping") and condition[7] is not None:
            self._once(
                "warping-condition",
                f"{titled(owner)} states a condition on warping, which has no effect here: "
                f"warping is not analysed.",
                owner,
            )
        if unknown == 0.0 and not any(values):
            return None  # free in every direction: a node, no support
        return Restraint((values[0], values[1], values[2]), (values[3], values[4], values[5]), axes)

    def _stiffness(self, value: Any, index: int, owner: Any, *, unknown: float) -> float:
        plain = value is None or isinstance(value, float | int)
        number = value if plain else value.get_argument(0)
        if number is None:
            kind = "free" if unknown == 0.0 else "rigid"
            self._unknown.setdefault(kind, []).append(global_id(owner))
            return unknown
        if isinstance(number, bool):
            return math.inf if number else 0.0
        if number in ("T", "F"):  # logical values come as text
            return math.inf if number == "T" else 0.0
        stiffness = float(number)
        if stiffness == -1.0:
            if isinstance(value, float | int):
                return math.inf  # IFC2X3
            self._once(
                "stiffness-minus-one",
                f"{titled(owner)} states a stiffness of -1 in direction {_DIRECTIONS[index]}, as "
                f"IFC2X3 writes a fixed one; it was taken as fixed. Write the boolean TRUE.",
                owner,
            )
            return math.inf
        if not math.isfinite(stiffness) or stiffness < 0.0:
            self._once(
                "negative-stiffness",
                f"{titled(owner)} states a stiffness of {stiffness:g} in direction "
                f"{_DIRECTIONS[index]}; it must not be negative. It was taken as free.",
                owner,
            )
            return 0.0
        return stiffness * self._units.to_si(_KINDS[index]) if stiffness else 0.0

    def _once(self, slug: str, message: str, owner: Any) -> None:
        if (key := slug + str(owner.id())) not in self._seen:
            self._seen.add(key)
            self._notes.add("warning", slug, message, (global_id(owner),))

    def _report_additions(self, relation: Any) -> None:
        if relation[7] is not None:
            self._notes.add(
                "warning",
                "connection-behaviour",
                f"{titled(relation)} states further conditions ({relation[7].is_a()}) such as "
                f"slip or failure; they have no effect here.",
                (global_id(relation), global_id(relation[4]), global_id(relation[5])),
            )

    def _report_lengths(self) -> None:
        if self._lengths:
            self._notes.add(
                "note",
                "supported-length",
                f"{len(self._lengths)} connections of members state a supported length "
                f"({listed(self._lengths)}); members are taken to be held at a point.",
                self._lengths,
            )

    def _report_loose(self, relation: Any) -> None:
        self._notes.add(
            "warning",
            "relation-to-nothing",
            f"{titled(relation)} does not name both a member and a connection; it has no effect.",
            (global_id(relation),),
        )

    def _report_twice(self, relation: Any, attachment: Attachment) -> None:
        self._notes.add(
            "warning",
            "attached-twice",
            f"{titled(relation)} attaches member {attachment.member} once more to connection "
            f"{attachment.connection}; only the first relation was used. Remove one of them.",
            (global_id(relation), attachment.member, attachment.connection),
        )

    def _report_constraint(self, relation: Any, constraint: Any) -> None:
        self._notes.add(
            "warning",
            "eccentricity-not-understood",
            f"{titled(relation)} states its eccentricity by {constraint.is_a()}; for a point "
            f"connection it must be IfcConnectionPointGeometry. It was taken as nil.",
            (global_id(relation), global_id(relation[4])),
        )

    def _report_unknown(self) -> None:
        for kind, owners in self._unknown.items():
            unique = list(dict.fromkeys(owners))
            what = "supports" if kind == "free" else "releases"
            self._notes.add(
                "warning",
                "condition-unknown",
                f"{len(unique)} {what} leave directions unstated ({listed(unique)}); those were "
                f"taken as {kind}. State every direction of the condition.",
                unique,
            )


def _cell(point: Vector) -> tuple[int, int, int]:
    """Return the millimetre in which a point lies."""
    return round(point[0] * 1e3), round(point[1] * 1e3), round(point[2] * 1e3)
