"""The members of an analysis model and the nodes that join them."""

from __future__ import annotations

import itertools
from collections.abc import Mapping
from dataclasses import dataclass, field

from analysis_core.building import Attachment, AxisMember, Building, Connection
from analysis_core.idealise.log import Log, named
from analysis_core.idealise.vectors import Vector, along, distance, subtract, unit
from analysis_core.model import Point
from analysis_core.settings import Tolerances

# Positions on a member closer than this to its end are its end (m).
_SAME_PLACE = 1e-3


@dataclass(frozen=True, slots=True)
class Node:
    """A place where members are joined; ``connection`` None: the free end of a member."""

    key: str
    point: Point
    connection: Connection | None = None


@dataclass(frozen=True, slots=True)
class Grip:
    """A member holds on to a node at ``position`` m from its start."""

    position: float
    node: str
    attachment: Attachment | None = None


@dataclass(frozen=True, slots=True)
class Limb:
    """A member with its grips in order of position; the first and last are its ends."""

    member: AxisMember
    direction: Vector
    length: float
    grips: tuple[Grip, ...]

    def point_at(self, position: float) -> Point:
        """Return the world point on the axis ``position`` m from the start."""
        return along(self.member.start, self.direction, position)


@dataclass(slots=True)
class Network:
    """Limbs by GlobalId, nodes by key, and the limbs at each node."""

    limbs: dict[str, Limb] = field(default_factory=dict)
    nodes: dict[str, Node] = field(default_factory=dict)
    at_node: dict[str, list[str]] = field(default_factory=dict)

    def add(self, limb: Limb) -> None:
        """Enter a limb at all its nodes."""
        self.limbs[limb.member.global_id] = limb
        for key in dict.fromkeys(grip.node for grip in limb.grips):
            self.at_node.setdefault(key, []).append(limb.member.global_id)


def network_of(building: Building, tolerances: Tolerances, log: Log) -> Network:
    """Return the network of an analytical building.

    Order in the file plays no part: members are entered by GlobalId.
    """
    connections = {c.global_id: c for c in building.connections}
    attachments: dict[str, list[Attachment]] = {}
    members = {m.global_id for m in building.members}
    for attachment in building.attachments:
        if attachment.member in members and attachment.connection in connections:
            attachments.setdefault(attachment.member, []).append(attachment)
            continue
        log.add(
            "warning",
            "attachment-to-nothing",
            f"Member {attachment.member} is said to be attached to connection "
            f"{attachment.connection}, but the model does not hold both as straight members and "
            f"point connections; the attachment has no effect.",
            (attachment.member, attachment.connection),
        )
    network = Network()
    for member in sorted(building.members, key=lambda m: m.global_id):
        size = distance(member.start, member.end)
        if size <= _SAME_PLACE:
            log.add(
                "error",
                "member-without-length",
                f"Member {named(member)} is {size * 1e3:.3g} mm long; it cannot be analysed. "
                f"Check its geometry and the length unit of the file.",
                (member.global_id,),
            )
            continue
        own = attachments.get(member.global_id, [])
        limb = _limb(member, size, own, log)
        if _report_coinciding(limb, connections, log):
            continue
        _enter_nodes(network, limb, connections)
        network.add(limb)
        _report_gaps(limb, connections, tolerances, log)
    _report_lonely(building, network, log)
    _report_apart(network, tolerances, log)
    return network


def _limb(member: AxisMember, size: float, own: list[Attachment], log: Log) -> Limb:
    grips: list[Grip] = []
    for attachment in sorted(own, key=lambda a: (a.position, a.connection)):
        position = attachment.position
        if position < -_SAME_PLACE or position > size + _SAME_PLACE:
            log.add(
                "warning",
                "attachment-beyond-member",
                f"Member {named(member)} is attached to connection {attachment.connection} at "
                f"{position:.3f} m, but is {size:.3f} m long; its nearest end is used. Check the "
                f"geometry of the connection.",
                (member.global_id, attachment.connection),
            )
        position = 0.0 if position <= _SAME_PLACE else position
        position = size if position >= size - _SAME_PLACE else position
        if not any(g.node == attachment.connection for g in grips):
            grips.append(Grip(position, attachment.connection, attachment))
    if not grips or grips[0].position > 0.0:
        grips.insert(0, Grip(0.0, f"{member.global_id} start"))
    if grips[-1].position < size:
        grips.append(Grip(size, f"{member.global_id} end"))
    return Limb(member, unit(subtract(member.end, member.start)), size, tuple(grips))


def _enter_nodes(network: Network, limb: Limb, connections: Mapping[str, Connection]) -> None:
    for grip in limb.grips:
        connection = connections.get(grip.node) if grip.attachment else None
        point = connection.point if connection else limb.point_at(grip.position)
        network.nodes.setdefault(grip.node, Node(grip.node, point, connection))


def _report_coinciding(limb: Limb, connections: Mapping[str, Connection], log: Log) -> bool:
    """Whether places along a member are attached to connections that lie at one point."""
    for near, far in itertools.pairwise(limb.grips):
        here, there = (
            connections[grip.node].point if grip.attachment else limb.point_at(grip.position)
            for grip in (near, far)
        )
        if distance(here, there) > _SAME_PLACE:
            continue
        log.add(
            "error",
            "member-without-length",
            f"Member {named(limb.member)} is attached {far.position - near.position:.3f} m apart "
            f"to {near.node} and {far.node}, which lie at one point; it cannot be analysed. Check "
            f"the geometry of the member and of the connections.",
            (limb.member.global_id, *(g.node for g in (near, far) if g.attachment)),
        )
        return True
    return False


def _report_gaps(
    limb: Limb, connections: Mapping[str, Connection], tolerances: Tolerances, log: Log
) -> None:
    """A member that does not reach its node: stated as eccentric, or drawn so."""
    for grip in limb.grips:
        if grip.attachment is None:
            continue
        connection = connections[grip.node]
        gap = distance(limb.point_at(grip.position), connection.point)
        if gap <= _SAME_PLACE:
            continue
        where = f"{gap * 1e3:.0f} mm from connection {named(connection)}"
        elements = (limb.member.global_id, connection.global_id)
        if any(grip.attachment.eccentricity) or gap > tolerances.join:
            log.add(
                "warning" if gap > tolerances.join else "note",
                "eccentric-connection",
                f"Member {named(limb.member)} is joined {where}. It is taken as reaching the "
                f"connection, with its own rigidity in between; the moment of its end force "
                f"across that distance is neglected.",
                elements,
            )
        else:
            log.add(
                "warning",
                "end-moved",
                f"Member {named(limb.member)} ended {where} and was moved onto it (limit "
                f"{tolerances.join * 1e3:.0f} mm).",
                elements,
            )


def _report_lonely(building: Building, network: Network, log: Log) -> None:
    lonely = [c for c in building.connections if c.global_id not in network.at_node]
    for connection in lonely:
        log.add(
            "warning",
            "connection-without-member",
            f"Connection {named(connection)} joins no straight member; it is left out.",
            (connection.global_id,),
        )


def _report_apart(network: Network, tolerances: Tolerances, log: Log) -> None:
    """Two nodes at one place that nothing joins: probably one node drawn twice."""
    size = max(tolerances.join, 1e-3)
    cells: dict[tuple[int, int, int], list[Node]] = {}
    for node in network.nodes.values():
        cell = tuple(int(c // size) for c in node.point)
        near = [
            other
            for dx in (-1, 0, 1)
            for dy in (-1, 0, 1)
            for dz in (-1, 0, 1)
            for other in cells.get((cell[0] + dx, cell[1] + dy, cell[2] + dz), ())
        ]
        for other in near:
            gap = distance(node.point, other.point)
            if gap <= tolerances.join and not _share_member(network, node, other):
                _report_pair(network, node, other, gap, log)
        cells.setdefault((cell[0], cell[1], cell[2]), []).append(node)


def _share_member(network: Network, a: Node, b: Node) -> bool:
    return bool(set(network.at_node[a.key]) & set(network.at_node[b.key]))


def _report_pair(network: Network, a: Node, b: Node, gap: float, log: Log) -> None:
    members = sorted({*network.at_node[a.key], *network.at_node[b.key]})
    log.add(
        "warning",
        "nodes-not-joined",
        f"Two ends or connections lie {gap * 1e3:.0f} mm apart without being joined "
        f"({a.key}; {b.key}). They are taken as separate; attach the members to one connection "
        f"if they belong together.",
        members,
    )
