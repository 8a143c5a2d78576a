"""Moment, shear and deflection along members: exact, as polynomials per segment.

Built from what the solver returns (end moments and the movements of the joints) and the actions
of the line; shear from equilibrium, deflection by integrating the curvature twice:

    M' = V,   V' = -q,   slope' = -(M/EI + curvature imposed),   deflection' = slope + V/GA

(S. Timoshenko, On the correction for shear, 1921, for the last term; signs as in ``model``).
The deflection is anchored at both ends of the member, so it needs no rotations.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from analysis_core.effects import segments
from analysis_core.effects.polynomials import evaluate, product
from analysis_core.model import Line
from analysis_core.results import LineSolution

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]

_TOGETHER = 48  # fewer rows than this share blocks, whatever their degrees
_SAME_PLACE = 1e-9  # of the member's length
_NUMBERS = 400_000  # of doubles in the largest array of a block, so that it stays in the cache


@dataclass(frozen=True, slots=True, eq=False)
class Fields:
    """B members, C cases, K segments each; along a segment t runs from 0 to 1.

    line (B), member (B)      which member of which line (numbers in the sequences given)
    cuts (K+1, B)             m from the member's start; segments of no length may end a row
    moment (P, K, C, B)       N·m in powers of t
    shear (P-1, K, C, B)      N
    deflection (Q, K, C, B)   m, positive down, across the member
    """

    line: Integers
    member: Integers
    cuts: Floats
    moment: Floats
    shear: Floats
    deflection: Floats

    @property
    def length(self) -> Floats:
        """Length of each member (B), m."""
        return np.asarray(self.cuts[-1])


def fields(
    lines: Sequence[Line], solutions: Sequence[LineSolution], *, movements: Floats | None = None
) -> Iterator[Fields]:
    """Yield the fields of every member of every line, in blocks of members alike in shape.

    The solutions must have the same number of cases; their names may differ from line to line.
    ``movements`` (C, members of all lines in order, 2) replaces the deflections of the members'
    ends, m.
    """
    if not lines:
        return
    count = len(solutions[0].cases)
    columns = [{name: c for c, name in enumerate(s.cases)} for s in solutions]
    rows = segments.rows(lines)
    moments = np.concatenate([s.end_moments for s in solutions], axis=1)
    if movements is None:
        movements = end_movements(lines, solutions)
    for chosen in _groups(rows, count):
        block = segments.block([rows[i] for i in chosen], columns, count)
        index = np.array(chosen)
        ends = np.moveaxis(moments[:, index], 1, 2)
        moved = np.moveaxis(movements[:, index], 1, 2)
        yield _integrate(block, ends, moved)


def end_movements(lines: Sequence[Line], solutions: Sequence[LineSolution]) -> Floats:
    """Return the deflection of both ends of every member, across it: (C, members, 2), m."""
    across, joints, offset = [], [], 0
    for line in lines:
        for member in line.members:
            cos, sin = line.direction(member)
            across.append((sin, cos))
            joints.append((offset + member.start, offset + member.end))
        offset += len(line.joints)
    moved = np.concatenate([s.displacements for s in solutions], axis=1)
    at_ends = moved[:, np.array(joints)]  # (C, members, 2, right/down)
    factors = np.array(across)[None, :, None, :]
    return np.asarray(at_ends[..., 0] * factors[..., 0] + at_ends[..., 1] * factors[..., 1])


def _groups(rows: Sequence[segments.Row], count: int) -> Iterator[list[int]]:
    """Numbers of rows that go together: of one shape, or of few at least as many segments.

    Coefficients of 0 change no bit of a result, segments of no length might.
    """
    together: dict[tuple[int, ...], list[int]] = {}
    for i, row in enumerate(rows):
        key = row.shape if len(rows) >= _TOGETHER else row.shape[:1]
        together.setdefault(key, []).append(i)
    for members in together.values():
        largest = max(rows[i].shape[0] * (rows[i].shape[1] + rows[i].shape[2] + 3) for i in members)
        step = max(8, _NUMBERS // max(1, largest * count))
        for first in range(0, len(members), step):
            yield members[first : first + step]


def _integrate(block: segments.Block, ends: Floats, moved: Floats) -> Fields:
    """``ends`` (C, 2, B): end moments; ``moved`` (C, 2, B): deflection of the ends."""
    moment, shear = equilibrium(block, ends)
    return Fields(
        line=np.array([row.line for row in block.rows]),
        member=np.array([row.member.id for row in block.rows]),
        cuts=block.cuts,
        moment=moment,
        shear=shear,
        deflection=_deflection(block, moment, shear, moved),
    )


def equilibrium(block: segments.Block, ends: Floats) -> tuple[Floats, Floats]:
    """Return moment and shear from the moments on the members' ends (C, 2, B) and the actions."""
    load, (degree, count, *_) = block.load, block.load.shape
    width = np.diff(block.cuts, axis=0)
    moment = np.zeros((degree + 2, *load.shape[1:]))
    shear = np.zeros((degree + 1, *load.shape[1:]))
    # First with no moment and no shear at the start, then put right for the ends.
    at_moment = block.couple[0].copy()
    at_shear = -block.force[0]
    for k in range(count):
        h = width[k]
        shear[0, k], moment[0, k] = at_shear, at_moment
        moment[1, k] = h * at_shear
        for d in range(degree):
            shear[d + 1, k] = -h * load[d, k] / (d + 1)
            moment[d + 2, k] = h * shear[d + 1, k] / (d + 2)
        at_shear = _sum(shear[:, k]) - block.force[k + 1]
        at_moment = _sum(moment[:, k]) + block.couple[k + 1]
    first = (-ends[:, 1] - ends[:, 0] - at_moment) / block.cuts[-1]
    shear[0] += first
    moment[0] += ends[:, 0] + first * block.cuts[:-1, None]
    moment[1] += first * width[:, None]
    return moment, shear


def _deflection(block: segments.Block, moment: Floats, shear: Floats, moved: Floats) -> Floats:
    width = np.diff(block.cuts, axis=0)[:, None]
    curvature = product(moment, block.bending[:, :, None])
    curvature[0] += block.curvature
    sheared = product(shear, block.shear[:, :, None]) if len(block.shear) else None
    terms = max(len(curvature) + 2, 0 if sheared is None else len(sheared) + 1)
    out = np.zeros((terms, *curvature.shape[1:]))
    for p, coefficient in enumerate(curvature):
        out[p + 2] = -width * width * coefficient / ((p + 1) * (p + 2))
    turned = -width * sum(c / (p + 1) for p, c in enumerate(curvature))
    for p, coefficient in enumerate(sheared if sheared is not None else ()):
        out[p + 1] += width * coefficient / (p + 1)
    slope, at = np.zeros(out.shape[2:]), np.zeros(out.shape[2:])
    for k in range(out.shape[1]):
        out[0, k] = at
        out[1, k] += width[k] * slope
        at, slope = _sum(out[:, k]), slope + turned[k]
    start, length = moved[:, 0], block.cuts[-1]
    tilt = (moved[:, 1] - moved[:, 0] - at) / length
    out[0] += start + tilt * block.cuts[:-1, None]
    out[1] += tilt * width
    return out


def _sum(terms: Floats) -> Floats:
    """The sum along the first axis, term by term, so that it does not depend on the others."""
    total: Floats = terms[0].copy()
    for term in terms[1:]:
        total += term
    return total


def sample(coefficients: Floats, cuts: Floats, x: Floats, *, left: bool = False) -> Floats:
    """Return values at ``x`` (G, B) m from the start: (G, C, B).

    At a cut the value just right of it, or just left of it; at an end of the member the one
    inside it.
    """
    if coefficients.shape[1] == 1:
        return evaluate(coefficients[:, 0][:, None], (x / cuts[-1])[:, None])
    k = np.zeros(x.shape, dtype=np.int64)
    slack = _SAME_PLACE * cuts[-1]
    for cut in cuts[1:-1]:
        past = x > cut + slack if left else x >= cut - slack
        k += past & (cut < cuts[-1])
    columns = np.arange(x.shape[1])
    low, high = cuts[k, columns], cuts[k + 1, columns]
    t = np.clip((x - low) / np.where(high > low, high - low, 1.0), 0.0, 1.0)
    chosen = np.moveaxis(coefficients, 2, 0)[:, :, k, columns]  # (C, P, G, B)
    return evaluate(np.moveaxis(chosen, 0, 2), t[:, None])
