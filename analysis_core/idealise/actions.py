"""Actions of the model, projected onto the planes of the lines."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass

from analysis_core.building import AxisAction, AxisMember, Building, NodeAction
from analysis_core.idealise.draft import Draft
from analysis_core.idealise.log import Log, named
from analysis_core.idealise.placing import Pair, Placer, between
from analysis_core.idealise.sharing import shared
from analysis_core.idealise.vectors import UP, Vector, distance, dot, length, subtract, unit
from analysis_core.model import FREE, JointMovement

# A component is worth a finding from this fraction of its action's size.
_NEGLIGIBLE = 1e-6
_SAME_PLACE = 1e-3


@dataclass(frozen=True, slots=True)
class _Projection:
    """What of a vector acts in each of several drafts, and how much acts in none."""

    parts: list[Pair]
    outside: float


def put_axis_actions(
    building: Building, placer: Placer, members: Mapping[str, AxisMember], log: Log
) -> None:
    """Put every action on members onto the lines; what has no place there becomes a finding."""
    for action in building.actions:
        if not isinstance(action, AxisAction):
            continue
        drafts = placer.drafts_of(action.member)
        if not drafts or action.member not in members:
            _report_nowhere(action, action.member, log)
            continue
        member = members[action.member]
        _report_beyond(action, member, log)
        _put_forces(action, member, drafts, placer, log)
        if any(any(m) for m in action.moments):
            _put_moments(action, member, drafts, placer, log)


def put_node_actions(
    building: Building, placer: Placer, carriers: Mapping[str, Draft], log: Log
) -> None:
    """Put actions on connections onto joints.

    ``carriers`` gives, for a node where one line carries another, the draft that carries.
    """
    joints: dict[str, list[tuple[Draft, int]]] = {}
    for draft in placer.drafts:
        for index, joint in enumerate(draft.joints):
            joints.setdefault(joint.key, []).append((draft, index))
    for action in building.actions:
        if not isinstance(action, NodeAction):
            continue
        places = joints.get(action.connection, [])
        if not places:
            _report_nowhere(action, action.connection, log)
            continue
        main = carriers.get(action.connection, places[0][0])
        places = sorted(places, key=lambda place: place[0] is not main)
        _put_node_force(action, places, placer, log)
        _put_node_movement(action, places, placer, log)


def _put_forces(
    action: AxisAction, member: AxisMember, drafts: list[Draft], placer: Placer, log: Log
) -> None:
    projections = [_projected(f, drafts) for f in action.forces]
    where = (member.global_id, action.case)
    for index, draft in enumerate(drafts):
        forces = [p.parts[index] for p in projections]
        if not any(any(f) for f in forces):
            continue
        if action.shape == "discrete":
            for station, force in zip(action.stations, forces, strict=True):
                if any(force):
                    placer.point(draft, *where, station, force, action.global_id)
        else:
            for stations, pair in _on_member(action, forces, distance(member.start, member.end)):
                placer.spread(draft, *where, stations, pair, action.global_id)
        _report_along(action, draft, forces, log)
    _report_outside(action, action.member, projections, action.forces, drafts, log)


def _on_member(
    action: AxisAction, forces: list[Pair], size: float
) -> Iterator[tuple[tuple[float, float], tuple[Pair, Pair]]]:
    """Yield the linear pieces of a continuous action, cut to the member's length."""
    for i in range(len(forces) - 1):
        stations = action.stations[i], action.stations[i + 1]
        pair = forces[i], forces[i + 1]
        low, high = max(stations[0], 0.0), min(stations[1], size)
        if high > low:
            yield (low, high), (between(stations, pair, low), between(stations, pair, high))


def _put_moments(
    action: AxisAction, member: AxisMember, drafts: list[Draft], placer: Placer, log: Log
) -> None:
    normals = [draft.plane.clockwise for draft in drafts]
    parts = [shared(m, normals) for m in action.moments]
    rest = [length((r[0], r[1], m[2])) for (_, r), m in zip(parts, action.moments, strict=True)]
    biggest = max(length(m) for m in action.moments)
    if max(rest) > _NEGLIGIBLE * biggest:
        axis = unit(subtract(member.end, member.start))
        twist = max(abs(dot(m, axis)) for m in action.moments)
        what = "twists the member" if twist > 0.5 * max(rest) else "bends it out of its plane"
        per = " per metre" if action.shape == "continuous" else ""
        log.add(
            "warning",
            "torsion" if twist > 0.5 * max(rest) else "out-of-plane-action",
            f"Action '{action.name}' (GlobalId {action.global_id}) has a couple of up to "
            f"{max(rest) / 1e3:.4g} kN·m{per} on member {named(member)} that {what}; that part is "
            f"not analysed.",
            (action.global_id, member.global_id),
            drafts[0].mark,
        )
    for index, draft in enumerate(drafts):
        couples = [p[index] for p, _ in parts]
        if not any(couples):
            continue
        if action.shape == "discrete":
            for station, couple in zip(action.stations, couples, strict=True):
                if couple:
                    placer.couple(
                        draft, member.global_id, action.case, station, couple, action.global_id
                    )
        else:
            _put_distributed_couple(action, member, draft, couples, placer, log)


def _put_distributed_couple(
    action: AxisAction,
    member: AxisMember,
    draft: Draft,
    couples: list[float],
    placer: Placer,
    log: Log,
) -> None:
    """Couples m(s) per metre act as forces -dm/ds across the member, and m at the ends.

    With m clockwise, dM/ds = V + m: the forces give the same bending moments and movements;
    the shear they give is V + m.
    """
    size = distance(member.start, member.end)
    pairs = [(c, 0.0) for c in couples]
    for (low, high), (first, last) in _on_member(action, pairs, size):
        start, end = (low, first[0]), (high, last[0])
        slope = (end[1] - start[1]) / (end[0] - start[0])
        for seat in placer.seats(draft, member.global_id):
            a, b = max(low, seat.low), min(high, seat.high)
            if b <= a:
                continue
            values = [start[1] + slope * (s - low) for s in (a, b)]
            positions = [seat.position(s) for s in (a, b)]
            if positions[0] > positions[1]:
                positions.reverse()
                values.reverse()
            placer.put_couples(draft, seat, action.case, positions, values, action.global_id)
    log.add(
        "note",
        "distributed-moment",
        f"Action '{action.name}' (GlobalId {action.global_id}) puts couples per metre on member "
        f"{named(member)}; they are applied as the forces that bend it alike, so that the shear "
        f"shown there includes the couple per metre.",
        (action.global_id, member.global_id),
        draft.mark,
    )


def _put_node_force(
    action: NodeAction, places: list[tuple[Draft, int]], placer: Placer, log: Log
) -> None:
    if not any(action.force) and not any(action.moment):
        return
    drafts = [draft for draft, _ in places]
    force = _projected(action.force, drafts)
    couples, rest = shared(action.moment, [draft.plane.clockwise for draft in drafts])
    for (draft, joint), part, couple in zip(places, force.parts, couples, strict=True):
        if any(part) or couple:
            placer.joint(draft, joint, action.case, part, couple, action.global_id)
        _report_along(action, draft, [part], log)
    _report_outside(action, action.connection, [force], (action.force,), drafts, log)
    outside = length((rest[0], rest[1], action.moment[2]))
    if outside > _NEGLIGIBLE * length(action.moment):
        log.add(
            "warning",
            "out-of-plane-action",
            f"Action '{action.name}' (GlobalId {action.global_id}) has a couple of "
            f"{outside / 1e3:.4g} kN·m out of the plane of {_marks(drafts)}; that part is not "
            f"analysed.",
            (action.global_id, action.connection),
            drafts[0].mark,
        )


def _put_node_movement(
    action: NodeAction, places: list[tuple[Draft, int]], placer: Placer, log: Log
) -> None:
    if not any(action.displacement) and not any(action.rotation):
        return
    applied = False
    held: dict[str, list[Vector]] = {"right": [], "down": [], "turn": []}
    for draft, index in places:
        joint, plane = draft.joints[index], draft.plane
        held["right"] += [plane.axis] if joint.horizontal > FREE else []
        held["down"] += [UP] if joint.vertical > FREE else []
        held["turn"] += [plane.clockwise] if joint.rotation > FREE else []
        right = dot(action.displacement, plane.axis) if joint.horizontal > FREE else 0.0
        down = -action.displacement[2] if joint.vertical > FREE else 0.0
        turn = dot(action.rotation, plane.clockwise) if joint.rotation > FREE else 0.0
        if right or down or turn:
            applied = True
            placer.put(
                draft, JointMovement(action.case, index, right, down, turn, action.global_id)
            )
    if not applied:
        log.add(
            "warning",
            "movement-without-support",
            f"Action '{action.name}' (GlobalId {action.global_id}) moves connection "
            f"{action.connection}, which is not held in that direction within "
            f"{_marks(draft for draft, _ in places)}; it has no effect. Only supports can be "
            f"moved.",
            (action.global_id, action.connection),
            places[0][0].mark,
        )
    elif lost := _lost_movement(action, held):
        log.add(
            "warning",
            "movement-without-support",
            f"Action '{action.name}' (GlobalId {action.global_id}) moves connection "
            f"{action.connection} also by {' and '.join(lost)} in directions in which it is not "
            f"held within {_marks(draft for draft, _ in places)}; that part has no effect.",
            (action.global_id, action.connection),
            places[0][0].mark,
        )


def _lost_movement(action: NodeAction, held: Mapping[str, list[Vector]]) -> list[str]:
    """What of a movement no support takes part in, in words."""
    moved, turned = action.displacement, action.rotation
    level = length(_rest(moved, held["right"]))
    upright = 0.0 if held["down"] else abs(moved[2])
    rest = _rest(turned, held["turn"])
    turn = length((rest[0], rest[1], turned[2]))
    lost = []
    for value, size, text in (
        (level, length(moved), f"{level * 1e3:.3g} mm sideways"),
        (upright, length(moved), f"{upright * 1e3:.3g} mm vertically"),
        (turn, length(turned), f"{turn:.3g} rad"),
    ):
        if value > _NEGLIGIBLE * size:
            lost.append(text)
    return lost


def _rest(vector: Vector, axes: list[Vector]) -> Vector:
    return shared(vector, axes)[1] if axes else (vector[0], vector[1], 0.0)


def _projected(force: Vector, drafts: list[Draft]) -> _Projection:
    """Horizontal parts are shared among the planes; the first takes the vertical part."""
    parts, rest = shared(force, [draft.plane.axis for draft in drafts])
    pairs = [(part, force[2] if i == 0 else 0.0) for i, part in enumerate(parts)]
    size = length(force)
    clean = [(0.0 if abs(x) <= 1e-12 * size else x, z) for x, z in pairs]
    return _Projection(clean, length(rest))


def _report_nowhere(action: AxisAction | NodeAction, target: str, log: Log) -> None:
    log.add(
        "warning",
        "action-without-line",
        f"Action '{action.name}' (GlobalId {action.global_id}) of case '{action.case}' acts on "
        f"{target}, which is part of no line; it is not analysed.",
        (action.global_id, target),
    )


def _report_beyond(action: AxisAction, member: AxisMember, log: Log) -> None:
    size = distance(member.start, member.end)
    low, high = min(action.stations), max(action.stations)
    if low >= -_SAME_PLACE and high <= size + _SAME_PLACE:
        return
    at = low if low < -_SAME_PLACE else high
    done = "it is put on the member's end"
    if action.shape == "continuous":
        done = "the part beyond it is left out"
    log.add(
        "warning",
        "action-beyond-member",
        f"Action '{action.name}' (GlobalId {action.global_id}) acts {at:.2f} m along member "
        f"{named(member)}, which is {size:.2f} m long; {done}. Move the load, or check the length "
        f"unit of the file.",
        (action.global_id, member.global_id),
    )


def _report_along(
    action: AxisAction | NodeAction, draft: Draft, forces: list[Pair], log: Log
) -> None:
    """A horizontal force on a beam line, which is held along its axis as a whole."""
    if draft.kind != "line" or not any(right for right, _ in forces):
        return
    held = [j for j in draft.joints if j.horizontal > FREE]
    largest = max(forces, key=lambda f: abs(f[0]))[0] / 1e3
    unit_name = "kN/m" if getattr(action, "shape", "") == "continuous" else "kN"
    if held:
        log.add(
            "note",
            "axial-action",
            f"Action '{action.name}' (GlobalId {action.global_id}) has a horizontal component of "
            f"{largest:.4g} {unit_name} along line {draft.mark}; it goes to the supports that hold "
            f"the line horizontally.",
            (action.global_id,),
            draft.mark,
        )
    else:
        log.add(
            "warning",
            "axial-unresisted",
            f"Action '{action.name}' (GlobalId {action.global_id}) has a horizontal component of "
            f"{largest:.4g} {unit_name} along line {draft.mark}, where no support holds it "
            f"horizontally. The line is analysed as held; see that something resists it.",
            (action.global_id,),
            draft.mark,
        )


def _report_outside(
    action: AxisAction | NodeAction,
    target: str,
    projections: list[_Projection],
    forces: tuple[Vector, ...],
    drafts: list[Draft],
    log: Log,
) -> None:
    outside = max(p.outside for p in projections)
    if outside <= _NEGLIGIBLE * max(length(f) for f in forces):
        return
    unit_name = "kN/m" if getattr(action, "shape", "") == "continuous" else "kN"
    log.add(
        "warning",
        "out-of-plane-action",
        f"Action '{action.name}' (GlobalId {action.global_id}) has a horizontal component of "
        f"{outside / 1e3:.4g} {unit_name} across the plane of {_marks(drafts)}; that part is not "
        f"analysed.",
        (action.global_id, target),
        drafts[0].mark,
    )


def _marks(drafts: Iterator[Draft] | list[Draft]) -> str:
    return " and ".join(dict.fromkeys(draft.mark for draft in drafts))
