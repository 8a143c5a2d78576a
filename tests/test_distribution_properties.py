"""What every linear structure does: superposition, reciprocity, symmetry, scaling; scikit-fem."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import numpy as np
import pytest
import skfem
from random_lines import beam_line, frame, plain_line
from skfem import BilinearForm, ElementLineHermite, InteriorBasis, MeshLine
from skfem.helpers import dd, ddot

from analysis_core.distribution import solve
from analysis_core.errors import ModelError
from analysis_core.model import (
    FREE,
    RIGID,
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

FORCES = ("end_moments", "end_shears", "axial", "reactions")
MOVEMENTS = ("rotations", "end_rotations", "displacements")


def stable(maker: Any, first: int, count: int) -> list[Line]:
    """The first few random structures that stand."""
    found: list[Line] = []
    seed = first
    while len(found) < count:
        line = maker(seed)
        seed += 1
        try:
            solve(line, ["q"])
        except ModelError:
            continue
        found.append(line)
    return found


STRUCTURES = [
    *stable(plain_line, 7000, 6),
    *stable(beam_line, 7100, 8),
    *stable(frame, 7200, 8),
]


def assert_close(one: Any, other: Any, scale: float, name: str) -> None:
    np.testing.assert_allclose(one, other, rtol=0.0, atol=1e-11 * scale, err_msg=name)


def scales(solution: LineSolution) -> dict[str, float]:
    sizes = {n: max(float(np.abs(getattr(solution, n)).max()), 1.0) for n in FORCES}
    return sizes | {n: max(float(np.abs(getattr(solution, n)).max()), 1e-4) for n in MOVEMENTS}


def scaled(action: Action, factor: float) -> Action:
    if isinstance(action, DistributedForce):
        return replace(
            action,
            transverse=tuple(factor * c for c in action.transverse),
            axial=tuple(factor * c for c in action.axial),
        )
    if isinstance(action, PointForce):
        return replace(action, transverse=factor * action.transverse, axial=factor * action.axial)
    if isinstance(action, PointMoment):
        return replace(action, moment=factor * action.moment)
    if isinstance(action, ImposedCurvature):
        return replace(action, curvature=factor * action.curvature)
    if isinstance(action, JointForce):
        return replace(
            action,
            horizontal=factor * action.horizontal,
            vertical=factor * action.vertical,
            moment=factor * action.moment,
        )
    return replace(
        action,
        horizontal=factor * action.horizontal,
        vertical=factor * action.vertical,
        rotation=factor * action.rotation,
    )


@pytest.mark.parametrize("line", STRUCTURES, ids=lambda line: line.mark)
def test_actions_superpose(line: Line) -> None:
    parts = [
        replace(action, case=("odd" if i % 2 else "even")) for i, action in enumerate(line.actions)
    ]
    both = [scaled(replace(a, case="both"), 1.0 if a.case == "odd" else -2.5) for a in parts]
    solution = solve(replace(line, actions=(*parts, *both)), ["odd", "even", "both"])

    for name, scale in scales(solution).items():
        odd, even, sum_ = getattr(solution, name)
        assert_close(sum_, odd - 2.5 * even, scale, name)


@pytest.mark.parametrize("line", STRUCTURES, ids=lambda line: line.mark)
def test_movements_scale_with_the_flexibility_and_forces_do_not(line: Line) -> None:
    """Everything 8 times stiffer under forces: the same forces, an eighth of the movements."""
    forces = tuple(a for a in line.actions if not isinstance(a, ImposedCurvature | JointMovement))
    loaded = replace(line, actions=forces)
    stiff = replace(
        loaded,
        members=tuple(_stiffer(m) for m in line.members),
        joints=tuple(
            replace(
                j,
                support=j.support
                and Support(
                    8 * j.support.vertical, 8 * j.support.horizontal, 8 * j.support.rotation
                ),
            )
            for j in line.joints
        ),
    )
    soft, hard = solve(loaded, ["q"]), solve(stiff, ["q"])

    for name, scale in scales(soft).items():
        factor = 8.0 if name in MOVEMENTS else 1.0
        assert_close(factor * getattr(hard, name), getattr(soft, name), scale, name)


def _stiffer(member: Member) -> Member:
    return replace(
        member,
        pieces=tuple(
            replace(
                p,
                flexural=tuple(c * 8.0 ** (1.0 / p.power) for c in p.flexural),
                shear=p.shear and tuple(8.0 * c for c in p.shear),
            )
            for p in member.pieces
        ),
        start_spring=8 * member.start_spring,
        end_spring=8 * member.end_spring,
    )


@pytest.mark.parametrize("line", STRUCTURES, ids=lambda line: line.mark)
def test_forces_and_movements_are_reciprocal(line: Line) -> None:
    """Betti and Maxwell: a unit action here moves there as much as one there moves here."""
    spots = [
        (joint.id, direction)
        for joint in line.joints
        for direction in ("horizontal", "vertical", "moment")
        if _can_take(line, joint.id, direction)
    ][::3]
    actions = [JointForce(str(i), j, **{d: 1.0}) for i, (j, d) in enumerate(spots)]
    solution = solve(replace(line, actions=tuple(actions)), [str(i) for i in range(len(spots))])

    moved = np.array(
        [
            [
                solution.rotations[i, j]
                if d == "moment"
                else solution.displacements[i, j, 0 if d == "horizontal" else 1]
                for j, d in spots
            ]
            for i in range(len(spots))
        ]
    )
    np.testing.assert_allclose(moved, moved.T, atol=1e-12 * max(np.abs(moved).max(), 1e-9))


def _can_take(line: Line, joint: int, direction: str) -> bool:
    if direction != "moment":
        return True
    ends = [
        spring
        for m in line.members
        for spring, at in ((m.start_spring, m.start), (m.end_spring, m.end))
        if at == joint
    ]
    support = line.joints[joint].support
    return any(ends) or bool(support and support.rotation)


@pytest.mark.parametrize("seed", range(6))
def test_a_mirrored_line_gives_the_mirrored_moments(seed: int) -> None:
    line = _level(stable(plain_line, 7300 + 50 * seed, 1)[0])
    count, reach = len(line.members), line.joints[-1].x
    joints = tuple(replace(j, id=i, x=reach - j.x) for i, j in enumerate(reversed(line.joints)))
    members = tuple(
        Member(
            i,
            i,
            i + 1,
            tuple(_turned_round(p) for p in reversed(m.pieces)),
            start_spring=m.end_spring,
            end_spring=m.start_spring,
        )
        for i, m in enumerate(reversed(line.members))
    )
    actions = tuple(_mirrored(line, a, count) for a in line.actions)
    one = solve(line, ["q"])
    other = solve(replace(line, joints=joints, members=members, actions=actions), ["q"])

    sizes = scales(one)
    assert_close(
        -other.end_moments[:, ::-1, ::-1], one.end_moments, sizes["end_moments"], "moments"
    )
    assert_close(-other.end_shears[:, ::-1, ::-1], one.end_shears, sizes["end_shears"], "shears")
    assert_close(-other.rotations[:, ::-1], one.rotations, sizes["rotations"], "rotations")
    assert_close(
        other.displacements[:, ::-1, 1],
        one.displacements[..., 1],
        sizes["displacements"],
        "displacements",
    )


def _level(line: Line) -> Line:
    """The same line laid level, nothing acting along it."""
    x, joints = 0.0, []
    for joint, member in zip(line.joints, (None, *line.members), strict=True):
        x += member.length if member else 0.0
        joints.append(replace(joint, x=x, z=0.0))
    actions = [
        replace(a, axial=() if isinstance(a, DistributedForce) else 0.0)
        if isinstance(a, DistributedForce | PointForce)
        else replace(a, horizontal=0.0)
        if isinstance(a, JointForce)
        else a
        for a in line.actions
    ]
    return replace(line, joints=tuple(joints), actions=tuple(actions))


def _turned_round(piece: Piece) -> Piece:
    flip = np.polynomial.Polynomial([1.0, -1.0])
    return replace(
        piece,
        flexural=tuple(np.polynomial.Polynomial(piece.flexural)(flip).coef.tolist()),
    )


def _mirrored(line: Line, action: Action, count: int) -> Action:
    if isinstance(action, JointForce):
        return replace(action, joint=count - action.joint, moment=-action.moment)
    if isinstance(action, JointMovement):
        return replace(action, joint=count - action.joint, rotation=-action.rotation)
    length = line.members[action.member].length
    member = count - 1 - action.member
    if isinstance(action, PointForce):
        return replace(action, member=member, position=length - action.position)
    if isinstance(action, PointMoment):
        return replace(
            action, member=member, position=length - action.position, moment=-action.moment
        )
    low, high = length - action.end, length - action.start
    if isinstance(action, ImposedCurvature):
        return replace(action, member=member, start=low, end=high)
    # Intensity as a polynomial from the other end.
    back = np.polynomial.Polynomial([action.end - action.start, -1.0])
    shape = np.polynomial.Polynomial(action.transverse)(back).coef.tolist()
    return replace(action, member=member, start=low, end=high, transverse=tuple(shape))


@pytest.mark.parametrize("seed", range(8))
def test_a_random_line_agrees_with_finite_elements(seed: int) -> None:
    """Hermite elements of scikit-fem are exact at nodes for prismatic members and forces there."""
    rng = np.random.default_rng(seed)
    count = int(rng.integers(2, 6))
    lengths = rng.uniform(1.5, 8.0, count)
    rigidities = 10.0 ** rng.uniform(5.0, 7.0, count)
    loads = rng.uniform(-3e3, 9e3, count)
    springs = np.where(rng.random(count + 1) < 0.4, 10.0 ** rng.uniform(5.0, 6.0), 0.0)
    xs = np.concatenate([[0.0], np.cumsum(lengths)])
    line = Line(
        f"fem {seed}",
        tuple(
            Joint(i, xs[i], 0.0, support=Support(RIGID, FREE, springs[i])) for i in range(count + 1)
        ),
        tuple(
            Member(i, i, i + 1, (Piece(xs[i + 1] - xs[i], (rigidities[i],)),)) for i in range(count)
        ),
        tuple(DistributedForce("q", i, 0.0, xs[i + 1] - xs[i], (loads[i],)) for i in range(count)),
    )

    turns = _finite_element_rotations(xs, rigidities, loads, springs)

    found = solve(line, ["q"])
    np.testing.assert_allclose(found.rotations[0], turns, rtol=1e-9, atol=1e-12)


def _finite_element_rotations(xs: Any, rigidities: Any, loads: Any, springs: Any) -> Any:
    mesh = MeshLine(xs)
    basis = InteriorBasis(mesh, ElementLineHermite())
    rigid = rigidities[:, None] * np.ones((1, basis.X.shape[1]))
    load = loads[:, None] * np.ones((1, basis.X.shape[1]))

    @BilinearForm
    def bending(u: Any, v: Any, w: Any) -> Any:
        return w["rigid"] * ddot(dd(u), dd(v))

    @skfem.LinearForm
    def work(v: Any, w: Any) -> Any:
        return w["load"] * v

    matrix = bending.assemble(basis, rigid=rigid).tolil()
    right = work.assemble(basis, load=load)
    slopes = basis.nodal_dofs[1]
    for slope, spring in zip(slopes, springs, strict=True):
        matrix[slope, slope] += spring
    solved = skfem.solve(*skfem.condense(matrix.tocsr(), right, D=basis.nodal_dofs[0]))
    return solved[slopes]
