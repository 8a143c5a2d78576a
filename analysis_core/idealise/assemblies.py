"""From the members of one vertical plane to a draft: a beam line where they are collinear,
else a frame."""

from __future__ import annotations

import itertools
import math

from analysis_core.idealise.draft import Bar, Draft, DraftJoint
from analysis_core.idealise.lines import line_direction, runs_forward
from analysis_core.idealise.network import Limb, Network
from analysis_core.idealise.plane_groups import Group
from analysis_core.idealise.planes import Plane, view_axis
from analysis_core.idealise.snapping import snap
from analysis_core.idealise.vectors import (
    Vector,
    along,
    dot,
    horizontal,
    length,
    off_line,
    scale,
    subtract,
    unit,
)
from analysis_core.model import Point, Role
from analysis_core.settings import Tolerances

# Joints of a frame closer in level than this are listed as one storey, left to right (m).
_SAME_LEVEL = 0.05


def assemble(network: Network, group: Group, tolerances: Tolerances) -> Draft:
    """Return the draft of a group, without supports; its joints are keyed by node."""
    limbs = [network.limbs[key] for key in group.members]
    ordered = _collinear(network, limbs, group, tolerances)
    if ordered is not None:
        return _line(network, ordered)
    return _frame(network, limbs, group, tolerances)


def _collinear(
    network: Network, limbs: list[Limb], group: Group, tolerances: Tolerances
) -> list[Limb] | None:
    """Return the limbs in order along one straight line, None where there is no such line."""
    if group.columns:
        return None
    longest = max(limbs, key=lambda limb: (round(limb.length, 3), limb.member.global_id))
    direction = longest.direction
    origin = longest.member.start
    for limb in limbs:
        if length(_across(limb.direction, direction)) > math.sin(tolerances.collinear):
            return None
        ends = (limb.member.start, limb.member.end)
        if any(off_line(p, origin, direction) > tolerances.offset for p in ends):
            return None

    def middle(limb: Limb) -> float:
        centre = along(limb.member.start, limb.direction, limb.length / 2.0)
        return dot(subtract(centre, origin), direction)

    ordered = sorted(limbs, key=middle)
    reach = -math.inf
    for limb in ordered:  # members side by side are no line
        first, last = (
            dot(subtract(p, origin), direction) for p in (limb.member.start, limb.member.end)
        )
        if min(first, last) < reach - tolerances.join:
            return None
        reach = max(first, last)
    return ordered


def _line(network: Network, ordered: list[Limb]) -> Draft:
    members = [limb.member for limb in ordered]
    direction = line_direction(members)
    if not runs_forward(members, direction):
        direction = scale(direction, -1.0)
        ordered = ordered[::-1]
    anchor = ordered[0].member.start
    keys = list(dict.fromkeys(grip.node for limb in ordered for grip in limb.grips))
    run = {key: dot(subtract(network.nodes[key].point, anchor), direction) for key in keys}
    keys.sort(key=lambda key: (run[key], key))
    plane = Plane(along(anchor, direction, run[keys[0]]), unit(horizontal(direction)))
    slope = (length(horizontal(direction)), direction[2])
    first = run[keys[0]]
    joints = [DraftJoint((run[k] - first) * slope[0], (run[k] - first) * slope[1], k) for k in keys]
    joint_of = {key: index for index, key in enumerate(keys)}
    draft = Draft(plane, "line", joints, [])
    for limb in ordered:
        draft.bars.extend(_line_bars(limb, direction, anchor, run, joint_of))
    draft.bars.sort(key=lambda bar: (bar.start, bar.end))
    return draft


def _line_bars(
    limb: Limb, direction: Vector, anchor: Point, run: dict[str, float], joint_of: dict[str, int]
) -> list[Bar]:
    """The bars of one limb; where a node lies beyond the member, the bar reaches the node."""
    sense = 1.0 if dot(limb.direction, direction) > 0.0 else -1.0
    stations = []
    for grip in limb.grips:
        axis_point = limb.point_at(grip.position)
        beyond = run[grip.node] - dot(subtract(axis_point, anchor), direction)
        beyond = 0.0 if abs(beyond) < 1e-9 else beyond
        stations.append((joint_of[grip.node], grip.position + sense * beyond))
    stations.sort(key=lambda pair: pair[0])
    return [Bar(limb.member, a[0], b[0], a[1], b[1]) for a, b in itertools.pairwise(stations)]


def _frame(network: Network, limbs: list[Limb], group: Group, tolerances: Tolerances) -> Draft:
    keys = sorted({grip.node for limb in limbs for grip in limb.grips})
    points = [network.nodes[key].point for key in keys]
    axis = view_axis(group.plane.axis)
    seen = Plane(points[0], axis)
    lowest = min(p[2] for p in points)
    left = min(points, key=lambda p: seen.place(p)[0])
    plane = Plane((left[0], left[1], lowest), axis)
    placed = sorted((plane.place(point), key) for point, key in zip(points, keys, strict=True))
    placed.sort(key=lambda item: (_level(item[0][1]), round(item[0][0], 4), item[1]))
    joints = [DraftJoint(x, z, key) for (x, z), key in placed]
    joint_of = {joint.key: index for index, joint in enumerate(joints)}
    draft = Draft(plane, "frame", joints, [])
    for limb in limbs:
        draft.bars.extend(_frame_bars(limb, draft, joint_of, tolerances))
    snap(draft)
    draft.bars.sort(key=lambda bar: _bar_order(draft, bar))
    return draft


def _frame_bars(
    limb: Limb, draft: Draft, joint_of: dict[str, int], tolerances: Tolerances
) -> list[Bar]:
    """Spans run left to right, legs (steeper than a beam) upward."""
    role: Role = "span"
    if abs(limb.direction[2]) > math.sin(tolerances.beam_slope):
        role = "leg"
    stations = [(joint_of[grip.node], grip.position) for grip in limb.grips]
    first, last = draft.joints[stations[0][0]], draft.joints[stations[-1][0]]
    rises = last.z > first.z if role == "leg" else last.x > first.x
    if not rises:
        stations.reverse()
    return [
        Bar(limb.member, a[0], b[0], a[1], b[1], role=role) for a, b in itertools.pairwise(stations)
    ]


def _bar_order(draft: Draft, bar: Bar) -> tuple[bool, int, float, str]:
    a, b = draft.joints[bar.start], draft.joints[bar.end]
    middle = (_level((a.z + b.z) / 2.0), round((a.x + b.x) / 2.0, 4))
    return bar.role == "leg", middle[0], middle[1], bar.member.global_id


def _level(z: float) -> int:
    return round(z / _SAME_LEVEL)


def _across(a: Vector, b: Vector) -> Vector:
    part = dot(a, b)
    return subtract(a, scale(b, part))
