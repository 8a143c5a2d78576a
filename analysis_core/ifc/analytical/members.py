"""The straight members of an analysis model, with their sections, materials and local axes."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from typing import Any

from analysis_core.building import AxisMember
from analysis_core.findings import listed
from analysis_core.ifc.analytical.notes import MALFORMED, Notes, global_id, name_of, titled
from analysis_core.ifc.analytical.properties import MemberProperties, Properties
from analysis_core.ifc.analytical.topology import CurvedError, Topology
from analysis_core.ifc.geometry import frames
from analysis_core.ifc.geometry.frames import Frame, Vector
from analysis_core.ifc.unreadable import UnreadableShapeError

# Members of these types carry axial force only.
_PIN_ENDED = ("PIN_JOINED_MEMBER", "CABLE", "TENSION_MEMBER", "COMPRESSION_MEMBER")
_VERTICAL = math.cos(math.radians(0.5))
_PARALLEL = math.sin(math.radians(0.1))


@dataclass(frozen=True, slots=True)
class Local:
    """A member as the rest of the reader needs it: its place, axes and "global" system."""

    member: AxisMember
    frame: Frame
    x: Vector
    y: Vector
    z: Vector
    length: float

    def position_of(self, point: Vector) -> float:
        """Return how far along the axis a world point lies, m from the start."""
        return frames.dot(frames.minus(point, self.member.start), self.x)

    def distance_to(self, point: Vector) -> float:
        """Return how far a world point is from the line of the axis, m."""
        return frames.length(frames.cross(frames.minus(point, self.member.start), self.x))

    def clear_of(self, point: Vector) -> float:
        """Return how far a world point is from the nearest point of the member, m."""
        along = self.position_of(point)
        beyond = max(-along, along - self.length, 0.0)
        return math.hypot(self.distance_to(point), beyond)


class MemberReader:
    """Reads curve members; ``parts`` are the members of which a varying one is made."""

    def __init__(
        self,
        topology: Topology,
        properties: MemberProperties,
        shared: Mapping[int, Any],
        elements: Mapping[int, str],
        notes: Notes,
    ) -> None:
        self._topology = topology
        self._properties = properties
        self._shared = shared
        self._elements = elements
        self._notes = notes
        self._assumed_up: list[str] = []
        self._axial_only: dict[str, list[str]] = {}
        self._taken: dict[str, int] = {}

    def read(self, entities: Iterable[Any], varying: Mapping[int, Any]) -> dict[int, Local]:
        """Return the members that could be read, by entity number."""
        members: dict[int, Local] = {}
        for entity in entities:
            if entity.id() in varying:
                continue  # a whole made of parts; the parts are the members
            try:
                local = self._member(entity)
            except CurvedError:
                self._report_curved(entity)
            except UnreadableShapeError as error:
                self._report_shape(entity, str(error))
            except MALFORMED as error:
                self._notes.malformed(entity, error)
            else:
                if local is not None:
                    members[entity.id()] = local
        self._report_assumptions()
        self._properties.report()
        return members

    def _member(self, entity: Any) -> Local | None:
        if not self._notes.identified(entity, self._taken):
            return None
        key = global_id(entity)
        frame = self._topology.frame(entity, self._shared.get(entity.id()))
        ends = self._topology.straight(entity, frame)
        if ends is None:
            self._report_shape(entity, "it has no reference curve")
            return None
        start, end = ends
        span = frames.minus(end, start)
        size = frames.length(span)
        if not (math.isfinite(size) and size > 1e-9):
            self._notes.add(
                "error",
                "member-without-length",
                f"{titled(entity)} starts and ends at the same place; it cannot be analysed. "
                f"Check its geometry and the length unit of the file.",
                (key,),
            )
            return None
        x = frames.unit(span)
        found = self._properties.of(entity)
        z = self._up(entity, key, x, frame, found)
        kind = str(entity[7])
        if kind in _PIN_ENDED:
            self._axial_only.setdefault(kind, []).append(key)
        member = AxisMember(
            global_id=key,
            name=name_of(entity),
            ifc_class=entity.is_a(),
            start=start,
            end=end,
            up=z,
            section=found.section,
            end_section=found.end_section,
            material=found.material,
            type_name=entity[4] or "",
            carries_moment=kind not in _PIN_ENDED,
            axis_offset=found.offset,
            element=self._elements.get(entity.id()),
            note=found.note,
        )
        return Local(member, frame, x, frames.cross(z, x), z, size)

    def _up(self, entity: Any, key: str, x: Vector, frame: Frame, found: Properties) -> Vector:
        """Return the local z axis.

        IFC4: in the plane of the axis and ``Axis``, which is given in the "global" system.
        IFC2X3 (IfcRelAssociatesProfileProperties.ProfileOrientation): a direction as above, or
        an angle about the axis, counted for beams from the global z, for columns from the
        global x.  Where nothing is stated, that angle is taken as 0.
        """
        stated = entity[8] if len(entity) > 8 else None
        direction = stated if stated is not None else found.direction
        if direction is not None:
            wanted = frames.direction(frame, *self._topology.placements.direction(direction))
            across = _perpendicular(wanted, x)
            if across is not None:
                return across
            self._notes.add(
                "warning",
                "axis-along-member",
                f"{titled(entity)} states an Axis along itself, which cannot orient its section; "
                f"its depth is taken as upright. Correct its Axis.",
                (key,),
            )
        elif found.angle is None and (len(entity) > 8 or abs(x[2]) > _VERTICAL):
            self._assumed_up.append(key)  # IFC2X3 has no Axis; a beam's depth is upright there
        return _turned(x, frame, found.angle or 0.0)

    def _report_curved(self, entity: Any) -> None:
        self._notes.add(
            "error",
            "curved-member",
            f"{titled(entity)} is curved; only straight members are analysed, so it was left out. "
            f"Replace it by straight pieces.",
            (global_id(entity),),
        )

    def _report_shape(self, entity: Any, reason: str) -> None:
        self._notes.add(
            "error",
            "member-without-axis",
            f"{titled(entity)} was left out: {reason}. Give it a topology representation with an "
            f"edge between two vertices.",
            (global_id(entity),),
        )

    def _report_assumptions(self) -> None:
        if self._assumed_up:
            self._notes.add(
                "note",
                "orientation-assumed",
                f"{len(self._assumed_up)} members state no orientation of their section "
                f"({listed(self._assumed_up)}); the depth is taken as upright, for columns along "
                f"the model's x axis.",
                self._assumed_up,
            )
        for kind, members in self._axial_only.items():
            self._notes.add(
                "note",
                "axial-member",
                f"{len(members)} members are of type {kind} ({listed(members)}); they carry no "
                f"moment at their ends.",
                members,
            )


def _perpendicular(wanted: Vector, x: Vector) -> Vector | None:
    size = frames.length(wanted)
    across = frames.plus(wanted, x, -frames.dot(wanted, x))
    return frames.unit(across) if frames.length(across) > _PARALLEL * size else None


def _turned(x: Vector, frame: Frame, angle: float) -> Vector:
    """Return the z axis at ``angle`` about the member from where the standard counts it."""
    up = frames.unit(frame[6:9])
    upright = abs(frames.dot(x, up)) > _VERTICAL
    reference = frames.unit(frame[0:3]) if upright else up
    z = _perpendicular(reference, x) or frames.any_perpendicular(x)
    if not angle:
        return z
    y = frames.cross(z, x)
    cos, sin = math.cos(angle), math.sin(angle)
    # Turning about x takes y towards z, and z towards -y.
    return frames.plus((cos * z[0], cos * z[1], cos * z[2]), y, -sin)
