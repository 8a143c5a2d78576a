"""Members that lie in one vertical plane and hang together in it."""

from __future__ import annotations

import math
from collections import deque
from dataclasses import dataclass, field

from analysis_core.idealise.network import Limb, Network
from analysis_core.idealise.planes import Plane, view_axis
from analysis_core.idealise.vectors import Vector, dot, horizontal, length, unit
from analysis_core.settings import Tolerances


@dataclass(slots=True)
class Group:
    """``beams`` and vertical ``columns`` (GlobalIds) of one vertical plane."""

    plane: Plane
    beams: list[str] = field(default_factory=list)
    columns: list[str] = field(default_factory=list)

    @property
    def members(self) -> list[str]:
        """All members, beams first."""
        return self.beams + self.columns


def is_vertical(direction: Vector, tolerances: Tolerances) -> bool:
    """Return whether a direction is plumb within the angle by which lines may be out of true."""
    return length(horizontal(direction)) <= math.sin(tolerances.collinear)


def plane_groups(network: Network, tolerances: Tolerances) -> list[Group]:
    """Return the groups of a network; every member that is not plumb is in exactly one.

    A group grows from its longest member, whose direction is the most certain, along shared
    nodes and up and down columns.  Columns belong to every plane that they hold up.
    """
    loose = {
        key: limb
        for key, limb in network.limbs.items()
        if not is_vertical(limb.direction, tolerances)
    }
    groups = []
    for key in sorted(loose, key=lambda k: (-round(loose[k].length, 3), k)):
        if key in loose:
            groups.append(_grow(network, loose, key, tolerances))
    return groups + _lone_columns(network, groups, tolerances)


def _grow(network: Network, loose: dict[str, Limb], seed: str, tolerances: Tolerances) -> Group:
    first = loose.pop(seed)
    plane = Plane(first.member.start, unit(horizontal(first.direction)))
    group = Group(plane, [seed])
    queue, seen = deque([seed]), {seed}
    while queue:
        limb = network.limbs[queue.popleft()]
        for grip in limb.grips:
            for key in network.at_node[grip.node]:
                if key in seen:
                    continue
                other = network.limbs[key]
                if is_vertical(other.direction, tolerances):
                    group.columns.append(key)
                elif key in loose and _lies_in(other, plane, tolerances):
                    group.beams.append(key)
                    del loose[key]
                else:
                    continue
                seen.add(key)
                queue.append(key)
    group.columns.sort()
    return group


def _lies_in(limb: Limb, plane: Plane, tolerances: Tolerances) -> bool:
    flat = unit(horizontal(limb.direction))
    if abs(dot(flat, plane.clockwise)) > math.sin(tolerances.collinear):
        return False
    ends = (limb.member.start, limb.member.end)
    return all(abs(plane.off(point)) <= tolerances.offset for point in ends)


def _lone_columns(network: Network, groups: list[Group], tolerances: Tolerances) -> list[Group]:
    """Columns that hold up no beam: seen in the plane in which they are deepest."""
    taken = {key for group in groups for key in group.columns}
    lone: list[Group] = []
    for key, limb in sorted(network.limbs.items()):
        if key in taken or not is_vertical(limb.direction, tolerances):
            continue
        up = limb.member.up
        flat = horizontal(up) if length(horizontal(up)) > 0.5 else (1.0, 0.0, 0.0)
        group = Group(Plane(limb.member.start, view_axis(flat)))
        queue = deque([key])
        while queue:
            current = queue.popleft()
            if current in taken:
                continue
            taken.add(current)
            group.columns.append(current)
            for grip in network.limbs[current].grips:
                queue.extend(k for k in network.at_node[grip.node] if k not in taken)
        group.columns.sort()
        lone.append(group)
    return lone
