"""The beam lines of a run as flat arrays for the 3D view.

Lengths in mm, as the 3D view has them; one row per member, all lines together, so that a
whole building is drawn as one batch.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from analysis_core.model import Line, Point, Support

from .symbols import support_symbol

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]
MM = 1000.0
SYMBOL_PART_OF_SPAN = 0.05
# Single precision resolves 1 mm at 10 km; further out the drawing is moved by whole 100 m.
FAR, ROUND = 1e7, 1e5
MOST_ORDINATES = 60_000


@dataclass(frozen=True, slots=True, eq=False)
class Scene:
    """Geometry of M members.

    ends (M, 2, 3)  world points less ``origin``, mm;  down (M, 3)  unit vector of positive
    deflection;  line_index (M,)  which line;  elements  GlobalId per member;  marks  mark per line

    ``origin`` is (0, 0, 0) unless the model lies so far out that the single precision of the 3D
    view would show it shaking.
    """

    ends: Floats
    down: Floats
    line_index: Integers
    elements: tuple[str, ...]
    marks: tuple[str, ...]
    origin: tuple[float, float, float] = (0.0, 0.0, 0.0)

    def drawn_like(self, other: Scene) -> bool:
        """Whether both show the same members in the same places."""
        return (
            (self.marks, self.elements, self.origin) == (other.marks, other.elements, other.origin)
            and np.array_equal(self.ends, other.ends)
            and np.array_equal(self.down, other.down)
            and np.array_equal(self.line_index, other.line_index)
        )


def scene_of(lines: Sequence[Line]) -> Scene:
    """Return the members of all lines as arrays."""
    ends, down, index, elements = [], [], [], []
    for number, line in enumerate(lines):
        for member in line.members:
            ends.append((line.joints[member.start].point, line.joints[member.end].point))
            cosine, sine = line.direction(member)
            ax, ay, _ = line.axis
            down.append((sine * ax, sine * ay, -cosine))
            index.append(number)
            elements.append(member.element)
    world = MM * np.array(ends, dtype=np.float64).reshape(-1, 2, 3)
    origin = _origin(world)
    return Scene(
        ends=world - np.array(origin),
        down=np.array(down, dtype=np.float64).reshape(-1, 3),
        line_index=np.array(index, dtype=np.int64),
        elements=tuple(elements),
        marks=tuple(line.mark for line in lines),
        origin=origin,
    )


def _origin(world: Floats) -> tuple[float, float, float]:
    """Return a round place among points (mm) that lie far out, else nothing to subtract."""
    if not world.size or np.abs(world).max() < FAR:
        return 0.0, 0.0, 0.0
    x, y, z = (np.round(world.reshape(-1, 3).mean(axis=0) / ROUND) * ROUND).tolist()
    return x, y, z


def symbol_size(scene: Scene) -> float:
    """Return a size in mm for symbols that suits the members drawn."""
    if not len(scene.ends):
        return 0.0
    lengths = np.linalg.norm(scene.ends[:, 1] - scene.ends[:, 0], axis=1)
    return float(SYMBOL_PART_OF_SPAN * np.median(lengths))


@dataclass(frozen=True, slots=True, eq=False)
class Supports:
    """The supported joints of all lines, S of them.

    at (S, 3)  mm, less the scene's origin;  right (S, 3)  horizontal direction of the line;
    stiffness (S, 2)  vertical N/m and rotational N·m/rad
    """

    at: Floats
    right: Floats
    stiffness: Floats

    def drawn_like(self, other: Supports) -> bool:
        """Whether both show the same symbols in the same places."""
        return (
            np.array_equal(self.at, other.at)
            and np.array_equal(self.right, other.right)
            and np.array_equal(self.stiffness, other.stiffness)
        )


def supports_of(lines: Sequence[Line], origin: Point = (0.0, 0.0, 0.0)) -> Supports:
    """Return the joints that something holds."""
    at, right, stiffness = [], [], []
    for line in lines:
        for joint in line.joints:
            if joint.support is not None:
                at.append(joint.point)
                right.append(line.axis)
                stiffness.append((joint.support.vertical, joint.support.rotation))
    return Supports(
        MM * np.array(at).reshape(-1, 3) - np.array(origin),
        np.array(right, dtype=np.float64).reshape(-1, 3),
        np.array(stiffness, dtype=np.float64).reshape(-1, 2),
    )


def support_lines(supports: Supports, size: float) -> tuple[Floats, Integers]:
    """Return all symbols as polylines: points (P, 3) in mm, and how many belong to each.

    Supports that are held alike share one symbol, so that thousands are placed at once.
    """
    points, counts = [np.zeros((0, 3))], [np.zeros(0, dtype=np.int64)]
    alike, kind = np.unique(supports.stiffness, axis=0, return_inverse=True)
    for number, (vertical, rotation) in enumerate(alike):
        here = kind.ravel() == number
        at, right = supports.at[here], supports.right[here]
        for polyline in support_symbol(Support(vertical=vertical, rotation=rotation)):
            across, up = size * np.array(polyline).T
            placed = at[:, None, :] + across[None, :, None] * right[:, None, :]
            placed[:, :, 2] += up
            points.append(placed.reshape(-1, 3))
            counts.append(np.full(len(at), len(polyline), dtype=np.int64))
    return np.concatenate(points), np.concatenate(counts)


def diagram_height(scene: Scene, *ordinates: Floats) -> float:
    """Return the factor from an ordinate to mm that makes the largest one a third of a span."""
    largest = max((float(np.max(np.abs(o), initial=0.0)) for o in ordinates), default=0.0)
    if largest == 0.0 or not len(scene.ends):
        return 0.0
    lengths = np.linalg.norm(scene.ends[:, 1] - scene.ends[:, 0], axis=1)
    return float(np.median(lengths)) / 3.0 / largest


@dataclass(frozen=True, slots=True, eq=False)
class Filled:
    """A filled diagram: quadrilaterals between the axis and the curve.

    corners (Q, 4, 3) in mm: along the axis from 0 to 1, back along the curve from 2 to 3; a corner
    of a triangle comes twice.
    """

    corners: Floats


def filled(scene: Scene, ordinates: Floats, factor: float, *, positive: bool) -> Filled:
    """Return the part of a diagram on one side of the axis.

    ``ordinates`` (M, N) at N equal steps along each member, positive drawn along ``down``;
    ``positive`` chooses the side.  A step in which the sign changes ends at its zero, so that
    no face crosses itself.
    """
    signed = ordinates if positive else -ordinates
    x = np.linspace(0.0, 1.0, ordinates.shape[1])
    a, b = signed[:, :-1], signed[:, 1:]
    member, step = np.nonzero((a > 0.0) | (b > 0.0))
    a, b = a[member, step], b[member, step]
    xa, xb = x[step], x[step + 1]
    with np.errstate(divide="ignore", invalid="ignore"):
        zero = xa + (xb - xa) * a / (a - b)
    corners = np.empty((len(member), 4, 3))
    corners[:, 0] = _along(scene, member, np.where(a < 0.0, zero, xa))
    corners[:, 1] = _along(scene, member, np.where(b < 0.0, zero, xb))
    side = factor if positive else -factor
    down = scene.down[member]
    corners[:, 2] = corners[:, 1] + (side * np.maximum(b, 0.0))[:, None] * down
    corners[:, 3] = corners[:, 0] + (side * np.maximum(a, 0.0))[:, None] * down
    return Filled(corners)


def drawn_stations(members: int) -> int:
    """Return at how many stations a diagram is drawn: fewer where there are very many members."""
    return max(9, min(21, MOST_ORDINATES // max(members, 1)))


def _along(scene: Scene, member: Integers, part: Floats) -> Floats:
    start, end = scene.ends[member, 0], scene.ends[member, 1]
    moved: Floats = start + part[:, None] * (end - start)
    return moved
