"""Lines and frames by finite elements: scikit-fem's Hermite beam elements within every member.

A member is meshed so that nodes fall on everything that begins or ends along it, reduced to its
ends by static condensation, and the structure put together with Lagrange multipliers for members
that keep their length.  Members bend only (no shear strain).  For constant rigidity the ends are
exact whatever the mesh; else their error falls with the fourth power of the element size.
"""

from __future__ import annotations

import itertools
from dataclasses import dataclass

import numpy as np
from skfem import Basis, BilinearForm, ElementLineHermite, LinearForm, MeshLine
from skfem.helpers import dd

from analysis_core.model import (
    FREE,
    RIGID,
    DistributedForce,
    ImposedCurvature,
    JointForce,
    JointMovement,
    Line,
    Member,
    PointForce,
    PointMoment,
)

ORDER = 12


@dataclass(frozen=True)
class FiniteElements:
    """End moments (M, 2), end shears (M, 2), joint rotations (J,), movements (J, 2)."""

    end_moments: np.ndarray
    end_shears: np.ndarray
    rotations: np.ndarray
    displacements: np.ndarray


def solve_with_elements(line: Line, case: str, elements: int) -> FiniteElements:
    """Return the solution with ``elements`` elements between neighbouring nodes of interest."""
    count = len(line.joints)
    size = 3 * count + 2 * len(line.members)
    stiffness, load = np.zeros((size, size)), np.zeros(size)
    ties: list[tuple[np.ndarray, float]] = []
    condensed = []
    for member in line.members:
        own, force = condense(line, member, case, elements)
        spread = _spread(line, member, size)
        stiffness += spread.T @ own @ spread
        load += spread.T @ force
        condensed.append((own, force, spread))
        ties += _connections(line, member, size, stiffness)
    ties += _supports(line, case, size, stiffness, load)
    moved = _solve(stiffness, load, ties)
    moments, shears = [], []
    for own, force, spread in condensed:
        forces = own @ (spread @ moved) - force
        shears.append([-forces[0], forces[2]])
        moments.append([forces[1], forces[3]])
    joints = moved[: 3 * count].reshape(count, 3)
    return FiniteElements(np.array(moments), np.array(shears), joints[:, 2], joints[:, :2])


def condense(line: Line, member: Member, case: str, elements: int) -> tuple[np.ndarray, np.ndarray]:
    """Return stiffness (4, 4) and load (4,) on deflection and rotation of start and end."""
    actions = [a for a in line.actions if getattr(a, "member", None) == member.id]
    actions = [a for a in actions if a.case == case]
    basis = Basis(MeshLine(_nodes(member, actions, elements)), ElementLineHermite(), intorder=ORDER)

    @BilinearForm
    def bending(u, v, w):  # type: ignore[no-untyped-def]
        return _rigidity(member, w.x[0]) * dd(u)[0, 0] * dd(v)[0, 0]

    @LinearForm
    def work(v, w):  # type: ignore[no-untyped-def]
        x = w.x[0]
        imposed = _rigidity(member, x) * _curvature(actions, x) * dd(v)[0, 0]
        return _intensity(actions, x) * v - imposed

    matrix, force = bending.assemble(basis).toarray(), work.assemble(basis)
    deflections, rotations = basis.nodal_dofs
    places = basis.mesh.p[0]
    for action in actions:
        if isinstance(action, PointForce | PointMoment):
            node = int(np.abs(places - action.position).argmin())
            if isinstance(action, PointForce):
                force[deflections[node]] += action.transverse
            else:
                force[rotations[node]] += action.moment
    first, last = int(places.argmin()), int(places.argmax())
    ends = [deflections[first], rotations[first], deflections[last], rotations[last]]
    inner = np.setdiff1d(np.arange(len(force)), ends)
    if not inner.size:
        return matrix[np.ix_(ends, ends)], force[ends]
    taken = np.linalg.solve(
        matrix[np.ix_(inner, inner)], np.column_stack([matrix[np.ix_(inner, ends)], force[inner]])
    )
    reduced = matrix[np.ix_(ends, ends)] - matrix[np.ix_(ends, inner)] @ taken[:, :4]
    return reduced, force[ends] - matrix[np.ix_(ends, inner)] @ taken[:, 4]


def _nodes(member: Member, actions: list, elements: int) -> np.ndarray:
    marks = {0.0, member.length}
    reached = 0.0
    for piece in member.pieces[:-1]:
        reached += piece.length
        marks.add(reached)
    for action in actions:
        if isinstance(action, PointForce | PointMoment):
            marks.add(action.position)
        else:
            marks |= {action.start, action.end}
    edges = sorted(marks)
    edges = [edges[0], *(b for a, b in itertools.pairwise(edges) if b - a > 1e-9)]
    parts = [np.linspace(a, b, elements + 1)[:-1] for a, b in itertools.pairwise(edges)]
    return np.concatenate([*parts, [edges[-1]]])


def _rigidity(member: Member, x: np.ndarray) -> np.ndarray:
    value, reached = np.zeros_like(x), 0.0
    for piece in member.pieces:
        u = (x - reached) / piece.length
        inside = (u >= 0.0) & (u <= 1.0)
        shape = sum(c * u**i for i, c in enumerate(piece.flexural)) + 0.0 * x
        value = np.where(inside, np.abs(shape) ** piece.power, value)
        reached += piece.length
    return value


def _curvature(actions: list, x: np.ndarray) -> np.ndarray:
    value = np.zeros_like(x)
    for action in actions:
        if isinstance(action, ImposedCurvature):
            value += np.where((x > action.start) & (x < action.end), action.curvature, 0.0)
    return value


def _intensity(actions: list, x: np.ndarray) -> np.ndarray:
    value = np.zeros_like(x)
    for action in actions:
        if isinstance(action, DistributedForce):
            v = x - action.start
            shape = sum(c * v**i for i, c in enumerate(action.transverse)) + 0.0 * x
            value += np.where((x > action.start) & (x < action.end), shape, 0.0)
    return value


def _spread(line: Line, member: Member, size: int) -> np.ndarray:
    """Return how the member's end values (4) follow from all movements."""
    cosine, sine = line.direction(member)
    spread = np.zeros((4, size))
    for k, joint in enumerate((member.start, member.end)):
        spread[2 * k, 3 * joint : 3 * joint + 2] = sine, cosine
        spread[2 * k + 1, 3 * len(line.joints) + 2 * member.id + k] = 1.0
    return spread


def _connections(
    line: Line, member: Member, size: int, stiffness: np.ndarray
) -> list[tuple[np.ndarray, float]]:
    """Tie member ends to joints rigidly, add springs, and keep the member's length."""
    ties = []
    springs = (member.start_spring, member.end_spring)
    for k, (joint, spring) in enumerate(zip((member.start, member.end), springs, strict=True)):
        row = np.zeros(size)
        row[3 * joint + 2] = 1.0
        row[3 * len(line.joints) + 2 * member.id + k] = -1.0
        if spring == RIGID:
            ties.append((row, 0.0))
        elif spring != FREE:
            stiffness += spring * np.outer(row, row)
    cosine, sine = line.direction(member)
    row = np.zeros(size)
    for joint, sign in ((member.start, -1.0), (member.end, 1.0)):
        row[3 * joint : 3 * joint + 2] = sign * cosine, -sign * sine
    return [*ties, (row, 0.0)]


def _supports(
    line: Line, case: str, size: int, stiffness: np.ndarray, load: np.ndarray
) -> list[tuple[np.ndarray, float]]:
    ties = []
    ground = np.zeros((len(line.joints), 3))
    for action in line.actions:
        if action.case != case:
            continue
        if isinstance(action, JointMovement):
            ground[action.joint] += action.horizontal, action.vertical, action.rotation
        elif isinstance(action, JointForce):
            place = 3 * action.joint
            load[place : place + 3] += action.horizontal, action.vertical, action.moment
    for joint in line.joints:
        if joint.support is None:
            continue
        held = (joint.support.horizontal, joint.support.vertical, joint.support.rotation)
        for d, value in enumerate(held):
            row = np.zeros(size)
            row[3 * joint.id + d] = 1.0
            if value == RIGID:
                ties.append((row, ground[joint.id, d]))
            elif value:
                stiffness += value * np.outer(row, row)
                load += value * ground[joint.id, d] * row
    return ties


def _solve(
    stiffness: np.ndarray, load: np.ndarray, ties: list[tuple[np.ndarray, float]]
) -> np.ndarray:
    """Solve with the ties kept exactly: movements within their null space."""
    rows = np.array([row for row, _ in ties])
    values = np.array([value for _, value in ties])
    given = np.linalg.lstsq(rows, values, rcond=None)[0]
    _, sizes, basis = np.linalg.svd(rows)
    free = basis[int((sizes > 1e-10 * sizes[0]).sum()) :].T
    inner = free.T @ stiffness @ free
    scale = 1.0 / np.sqrt(np.diagonal(inner))
    right = free.T @ (load - stiffness @ given)
    return given + free @ (scale * np.linalg.solve(inner * np.outer(scale, scale), scale * right))
