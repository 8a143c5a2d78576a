"""What holds for every linear structure: equilibrium, reciprocity, superposition, mirror, scale."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import replace

import numpy as np
import pytest
from exact_random import CASE, beam_line, gable

from analysis_core import distribution
from analysis_core.model import (
    Action,
    DistributedForce,
    ImposedCurvature,
    Joint,
    JointForce,
    JointMovement,
    Line,
    Member,
    Piece,
    PointForce,
    PointMoment,
    Support,
)
from analysis_core.results import LineSolution
from analysis_core.stiffness_check import solve_stiffness

METHODS: dict[str, Callable[[Line, Sequence[str]], LineSolution]] = {
    "distribution": distribution.solve,
    "stiffness": solve_stiffness,
}
SEEDS = range(400, 430)

both_methods = pytest.mark.parametrize("method", METHODS)
random_structures = pytest.mark.parametrize("seed", SEEDS)


@both_methods
@random_structures
def test_actions_and_reactions_are_in_equilibrium(seed: int, method: str):
    line = structure(seed)

    solution = METHODS[method](line, [CASE])

    right = down = about = 0.0
    size = 1.0
    for force_right, force_down, couple, x, z in _resultants(line):
        right, down = right + force_right, down + force_down
        about += couple + force_right * z + force_down * x
        size = max(size, abs(force_right), abs(force_down))
    for joint, (push, lift, couple) in zip(line.joints, solution.reactions[0], strict=True):
        right, down = right + push, down - lift
        about += couple + push * joint.z - lift * joint.x
        size = max(size, abs(push), abs(lift))
    reach = max(abs(joint.x) + abs(joint.z) for joint in line.joints)
    assert right == pytest.approx(0.0, abs=1e-12 * size)
    assert down == pytest.approx(0.0, abs=1e-12 * size)
    assert about == pytest.approx(0.0, abs=1e-12 * size * max(reach, 1.0))


@both_methods
@random_structures
def test_every_joint_is_in_equilibrium(seed: int, method: str):
    line = structure(seed)

    solution = METHODS[method](line, [CASE])

    for joint in line.joints:
        left = np.array([0.0, 0.0, 0.0])
        for action in line.actions:
            if isinstance(action, JointForce) and action.joint == joint.id:
                left += action.horizontal, action.vertical, action.moment
        for member in line.members:
            cosine, sine = line.direction(member)
            for k, (end, sign) in enumerate(((member.start, 1.0), (member.end, -1.0))):
                if end == joint.id:
                    shear = sign * solution.end_shears[0, member.id, k]
                    pull = sign * solution.axial[0, member.id, k]
                    left[0] += shear * sine + pull * cosine
                    left[1] += shear * cosine - pull * sine
                    left[2] -= solution.end_moments[0, member.id, k]
        left += solution.reactions[0, joint.id] * (1.0, -1.0, 1.0)
        force = max(np.abs(solution.end_shears).max(), np.abs(solution.axial).max(), 1.0)
        moment = max(np.abs(solution.end_moments).max(), 1.0)
        np.testing.assert_allclose(left[:2], 0.0, atol=1e-12 * force)
        np.testing.assert_allclose(left[2], 0.0, atol=1e-12 * moment)


@both_methods
@random_structures
def test_unit_actions_and_movements_are_reciprocal(seed: int, method: str):
    # Maxwell and Betti: what a unit action at A moves at B, the same action at B moves at A.
    line = structure(seed)
    units = [
        (joint.id, name) for joint in line.joints for name in ("horizontal", "vertical", "moment")
    ]
    actions = tuple(JointForce(f"{name} {joint}", joint, **{name: 1.0}) for joint, name in units)
    cases = [action.case for action in actions]

    solution = METHODS[method](replace(line, actions=actions), cases)

    moved = np.concatenate([solution.displacements, solution.rotations[..., None]], axis=-1)
    flexibility = moved.reshape(len(cases), -1)
    largest = np.sqrt(np.abs(np.outer(np.diag(flexibility), np.diag(flexibility))).max())
    np.testing.assert_allclose(flexibility, flexibility.T, rtol=0.0, atol=1e-12 * largest)
    assert np.diag(flexibility).min() >= -1e-12 * largest


@both_methods
@random_structures
def test_effects_of_actions_add_up(seed: int, method: str):
    line = structure(seed)
    parts = tuple(replace(action, case=str(i)) for i, action in enumerate(line.actions))
    cases = [action.case for action in parts] or ["none"]

    together = METHODS[method](line, [CASE])
    alone = METHODS[method](replace(line, actions=parts), cases)

    for kind in ("end_moments", "end_shears", "rotations", "displacements", "reactions"):
        values = getattr(alone, kind)
        bound = 1e-12 * max(np.abs(values).max(initial=0.0), 1e-100)
        np.testing.assert_allclose(values.sum(0), getattr(together, kind)[0], rtol=0, atol=bound)


@both_methods
@random_structures
def test_a_mirrored_structure_has_mirrored_effects(seed: int, method: str):
    line = structure(seed)

    straight = METHODS[method](line, [CASE])
    mirrored = METHODS[method](_mirrored(line), [CASE])

    flipped = mirrored.end_moments[0, ::-1, ::-1] if line.kind == "line" else None
    if flipped is None:
        flipped = mirrored.end_moments[0]
    bound = 1e-11 * max(np.abs(straight.end_moments).max(), 1.0)
    np.testing.assert_allclose(-flipped, straight.end_moments[0], rtol=0.0, atol=bound)
    order = slice(None, None, -1) if line.kind == "line" else slice(None)
    bound = 1e-11 * max(np.abs(straight.rotations).max(), 1e-100)
    np.testing.assert_allclose(
        -mirrored.rotations[0, order], straight.rotations[0], rtol=0.0, atol=bound
    )
    lifts = straight.reactions[0, :, 1]
    bound = 1e-11 * max(np.abs(straight.end_shears).max(), np.abs(lifts).max(), 1.0)
    np.testing.assert_allclose(mirrored.reactions[0, order, 1], lifts, rtol=0.0, atol=bound)


@both_methods
@random_structures
def test_longer_and_stiffer_structures_scale(seed: int, method: str):
    # Forces alone: lengths times 3 and rigidities times 7 (springs to match) leave forces as
    # they are, moments times 3, deflections times 27/7.
    line = structure(seed)
    acting = tuple(_forces_only(line))

    plain = METHODS[method](replace(line, actions=acting), [CASE])
    scaled = METHODS[method](_scaled(replace(line, actions=acting), 3.0, 7.0), [CASE])

    for kind, factor in (
        ("end_moments", 3.0),
        ("end_shears", 1.0),
        ("rotations", 9.0 / 7.0),
        ("displacements", 27.0 / 7.0),
    ):
        expected = factor * getattr(plain, kind)
        bound = 1e-11 * max(np.abs(expected).max(), 1e-100)
        if kind == "end_moments":
            bound = max(bound, 1e-11 * np.abs(plain.end_shears).max())
        np.testing.assert_allclose(getattr(scaled, kind), expected, rtol=0.0, atol=bound)


def structure(seed: int) -> Line:
    """Return a random line or frame, every third one with tapered members."""
    line = beam_line(seed) if seed % 2 else gable(seed)
    if seed % 3:
        return line
    members = list(line.members)
    for index in range(0, len(members), 2):
        length, root = members[index].length, 3e7 ** (1.0 / 3.0)
        taper = Piece(length, (root, 0.6 * root), 3.0, shear=(8e6, -3e6))
        members[index] = replace(members[index], pieces=(taper,))
    return replace(line, members=tuple(members))


def _resultants(line: Line) -> list[tuple[float, float, float, float, float]]:
    """Return (right, down, couple, x, z) of every action."""
    found = []
    for action in line.actions:
        if isinstance(action, JointForce):
            joint = line.joints[action.joint]
            found.append((action.horizontal, action.vertical, action.moment, joint.x, joint.z))
        elif isinstance(action, PointMoment):
            found.append((0.0, 0.0, action.moment, 0.0, 0.0))
        elif isinstance(action, PointForce):
            found.append(_placed(line, action.member, action.transverse, action.position))
        elif isinstance(action, DistributedForce):
            reach = action.end - action.start
            for i, c in enumerate(action.transverse):
                force = c * reach ** (i + 1) / (i + 1)
                centre = action.start + reach * (i + 1) / (i + 2)
                found.append(_placed(line, action.member, force, centre))
    return found


def _placed(
    line: Line, member: int, force: float, position: float
) -> tuple[float, float, float, float, float]:
    part = line.members[member]
    cosine, sine = line.direction(part)
    start = line.joints[part.start]
    x, z = start.x + cosine * position, start.z + sine * position
    return force * sine, force * cosine, 0.0, x, z


def _mirrored(line: Line) -> Line:
    """Return the line seen from behind: left and right change places, so do clockwise and not.

    A beam line is numbered from its other end.  A frame keeps its numbers; its members run as
    before, so that the local down of a leaning one may lie on its other side.
    """
    if line.kind == "line":
        return _reversed_line(line)
    joints = tuple(replace(joint, x=-joint.x) for joint in line.joints)
    flipped = replace(line, joints=joints, actions=())
    actions = []
    for action in line.actions:
        actions.append(_seen_from_behind(line, flipped, action))
    return replace(flipped, actions=tuple(actions))


def _seen_from_behind(line: Line, flipped: Line, action: Action) -> Action:
    if isinstance(action, JointForce):
        return replace(action, horizontal=-action.horizontal, moment=-action.moment)
    if isinstance(action, JointMovement):
        return replace(action, horizontal=-action.horizontal, rotation=-action.rotation)
    if isinstance(action, PointMoment):
        return replace(action, moment=-action.moment)
    member = line.members[action.member]
    cosine, sine = line.direction(member)
    cosine_behind, sine_behind = flipped.direction(member)
    # Local down (sine, cosine) becomes (-sine, cosine) in the mirror.
    sign = math.copysign(1.0, -sine * sine_behind + cosine * cosine_behind)
    if isinstance(action, DistributedForce):
        return replace(action, transverse=tuple(sign * c for c in action.transverse))
    if isinstance(action, PointForce):
        return replace(action, transverse=sign * action.transverse)
    return replace(action, curvature=sign * action.curvature)


def _reversed_line(line: Line) -> Line:
    last, total = len(line.joints) - 1, line.joints[-1].x
    joints = tuple(
        Joint(i, total - joint.x, 0.0, support=joint.support)
        for i, joint in enumerate(reversed(line.joints))
    )
    members = tuple(
        Member(
            i,
            last - member.end,
            last - member.start,
            tuple(_reversed_piece(piece) for piece in reversed(member.pieces)),
            "span",
            member.end_spring,
            member.start_spring,
        )
        for i, member in enumerate(reversed(line.members))
    )
    actions = tuple(_reversed_action(line, action) for action in line.actions)
    return Line(line.mark, joints, members, actions)


def _reversed_piece(piece: Piece) -> Piece:
    shear = None if piece.shear is None else _reflected(piece.shear, 1.0)
    return replace(piece, flexural=_reflected(piece.flexural, 1.0), shear=shear)


def _reflected(coefficients: tuple[float, ...], reach: float) -> tuple[float, ...]:
    """Return the coefficients of p(reach - v) for those of p(v)."""
    found = [0.0] * len(coefficients)
    for i, c in enumerate(coefficients):
        for k in range(i + 1):
            found[k] += c * math.comb(i, k) * reach ** (i - k) * (-1.0) ** k
    return tuple(found)


def _reversed_action(line: Line, action: Action) -> Action:
    if isinstance(action, JointForce):
        return replace(action, joint=len(line.joints) - 1 - action.joint, moment=-action.moment)
    if isinstance(action, JointMovement):
        return replace(action, joint=len(line.joints) - 1 - action.joint, rotation=-action.rotation)
    length = line.members[action.member].length
    member = len(line.members) - 1 - action.member
    if isinstance(action, PointForce):
        return replace(action, member=member, position=length - action.position)
    if isinstance(action, PointMoment):
        return replace(
            action, member=member, position=length - action.position, moment=-action.moment
        )
    low, high = length - action.end, length - action.start
    turned = replace(action, member=member, start=low, end=high)
    if isinstance(turned, ImposedCurvature):
        return turned
    return replace(turned, transverse=_reflected(turned.transverse, high - low))


def _forces_only(line: Line) -> list[Action]:
    """Return the forces of a line as they stand, couples and distributed ones left out."""
    return [
        replace(action, moment=0.0) if isinstance(action, JointForce) else action
        for action in line.actions
        if isinstance(action, PointForce | JointForce)
    ]


def _scaled(line: Line, size: float, stiffness: float) -> Line:
    turning, sinking = stiffness / size, stiffness / size**3
    joints = tuple(
        replace(
            joint,
            x=joint.x * size,
            z=joint.z * size,
            support=joint.support
            and Support(
                joint.support.vertical * sinking,
                joint.support.horizontal * sinking,
                joint.support.rotation * turning,
            ),
        )
        for joint in line.joints
    )
    members = tuple(
        replace(
            member,
            pieces=tuple(_scaled_piece(piece, size, stiffness) for piece in member.pieces),
            start_spring=member.start_spring * turning,
            end_spring=member.end_spring * turning,
        )
        for member in line.members
    )
    actions = tuple(
        replace(action, position=action.position * size)
        if isinstance(action, PointForce)
        else action
        for action in line.actions
    )
    return replace(line, joints=joints, members=members, actions=actions)


def _scaled_piece(piece: Piece, size: float, stiffness: float) -> Piece:
    root = stiffness ** (1.0 / piece.power)
    shear = piece.shear and tuple(c * stiffness / size**2 for c in piece.shear)
    return replace(
        piece,
        length=piece.length * size,
        flexural=tuple(c * root for c in piece.flexural),
        shear=shear,
    )
