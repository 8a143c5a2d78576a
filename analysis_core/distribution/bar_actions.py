"""What the actions do to a bar of several members, and how its end moments spread over them.

The bar is first taken as a simple beam; its diagram moments at the ends of every member follow
from statics.  The rotations that those moments and the members' own actions cause are the load
on the bar's analogous column (see ``stiffness_factors``).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.bars import Bar
from analysis_core.distribution.fixed_end import held_moments
from analysis_core.distribution.loads import Loads
from analysis_core.distribution.stiffness_factors import (
    elastic_weights,
    end_rotations,
    inverse,
)
from analysis_core.model import Line, Member

Floats = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class BarActions:
    """The actions of C cases on a bar of n members, as EndActions does for one member.

    moments (2, C) at held ends, springs and releases included; forces (2, C) on the joints,
    along the bar's local down; axial, axial_lever (C,).  simple (n, 2, C): diagram moments of
    the bar as a simple beam at the start and end of each member.
    """

    moments: Floats
    forces: Floats
    axial: Floats
    axial_lever: Floats
    simple: Floats


def bar_actions(line: Line, bar: Bar, loads: Loads) -> BarActions:
    """Return what the actions on a bar's members and inner joints do to the bar."""
    own = loads.members[list(bar.members)]
    if len(bar.members) == 1:
        return _of_one_member(line.members[bar.members[0]], bar, own[0])
    across, along, couples = _inner_forces(line, bar, loads)
    at = np.array(bar.offsets[1:])[:, None]
    rest = bar.length - at
    presses = own[:-1, 5] + own[1:, 4] + across
    right = (presses * rest - couples).sum(0) / bar.length
    left = (presses * at + couples).sum(0) / bar.length
    simple = _simple_moments(bar, presses, couples, right)
    tails = bar.length - np.array(_ends(bar))[:, None]
    return BarActions(
        _held(line, bar, own, simple),
        np.stack([own[0, 4] + right, own[-1, 5] + left]),
        own[:, 6].sum(0) + along.sum(0),
        (own[:, 7] + own[:, 6] * tails).sum(0) + (along * rest).sum(0),
        simple,
    )


def member_moments(bar: Bar, actions: BarActions, start: Floats, end: Floats) -> Floats:
    """Return the end moments (n, 2, C) of the bar's members from those of the bar.

    N·m on the member, clockwise positive.
    """
    if len(bar.members) == 1:
        return np.stack([start, end])[None]
    x = np.array([*bar.offsets, bar.length])[:, None]
    straight = (start * (bar.length - x) - end * x) / bar.length
    return np.stack(
        [actions.simple[:, 0] + straight[:-1], -actions.simple[:, 1] - straight[1:]], axis=1
    )


def _of_one_member(member: Member, bar: Bar, own: Floats) -> BarActions:
    moments = own[0:2]
    if bar.hinges or inverse(member.start_spring) or inverse(member.end_spring):
        moments = np.stack(held_moments(bar.stiffness, own[2], own[3]))
    return BarActions(moments, own[4:6], own[6], own[7], np.zeros((1, 2, own.shape[1])))


def _inner_forces(line: Line, bar: Bar, loads: Loads) -> tuple[Floats, Floats, Floats]:
    """Forces across and along the bar, and couples, on its inner joints: (n - 1, C) each."""
    inner = [line.members[index].end for index in bar.members[:-1]]
    cosine, sine = bar.direction
    right: Floats = loads.forces[inner, 0]
    down: Floats = loads.forces[inner, 1]
    couples: Floats = loads.forces[inner, 2]
    return right * sine + down * cosine, right * cosine - down * sine, couples


def _ends(bar: Bar) -> list[float]:
    return [*bar.offsets[1:], bar.length]


def _simple_moments(bar: Bar, presses: Floats, couples: Floats, right: Floats) -> Floats:
    """Diagram moments at the members' ends: at each joint just before and just after it."""
    count, cases = presses.shape
    simple = np.zeros((count + 1, 2, cases))
    moment, shear = np.zeros(cases), right.copy()
    for index in range(count):
        moment = moment + shear * (bar.offsets[index + 1] - bar.offsets[index])
        simple[index, 1] = moment
        moment = moment + couples[index]
        simple[index + 1, 0] = moment
        shear = shear - presses[index]
    return simple


def _held(line: Line, bar: Bar, own: Floats, simple: Floats) -> Floats:
    """Moments at held ends: the straight line that closes the bar's deformation and its hinges."""
    level, slope, about = np.zeros(simple.shape[2]), np.zeros(simple.shape[2]), 0.0
    if bar.hinges:
        about = bar.hinges[0]
        level = -_moment_at_hinge(line, bar, simple, about)
    if len(bar.hinges) == 2:
        apart = bar.hinges[1] - about
        slope = (-_moment_at_hinge(line, bar, simple, bar.hinges[1]) - level) / apart
    else:
        if not bar.hinges:
            about = bar.stiffness.centre
            level = -bar.stiffness.turn * _column_load(line, bar, own, simple, None)
        lifted = simple + level if bar.hinges else simple
        slope = -bar.stiffness.sway * _column_load(line, bar, own, lifted, about)
    return np.stack([level - slope * about, -(level + slope * (bar.length - about))])


def _moment_at_hinge(line: Line, bar: Bar, simple: Floats, position: float) -> Floats:
    """The simple-beam moment at a hinge, on the side of its joint that is released."""
    if position in (0.0, bar.length):
        return np.zeros(simple.shape[2])
    index = bar.offsets.index(position)
    at_start = line.members[bar.members[index]].start_spring == 0.0
    found: Floats = simple[index, 0] if at_start else simple[index - 1, 1]
    return found


def _column_load(line: Line, bar: Bar, own: Floats, simple: Floats, about: float | None) -> Floats:
    """Integral over the bar of the moments times dx/EI (``about`` None) or times (x - about).

    Springs weigh in with the moment on their side of the joint; shear strain through the
    members' own end rotations.
    """
    total = np.zeros(simple.shape[2])
    for index, number in enumerate(bar.members):
        member = line.members[number]
        weights = elastic_weights(member.pieces)
        start, end = simple[index]
        turned = end_rotations(weights, start, -end)
        near = bar.offsets[index] - about if about is not None else 1.0
        far = near + weights.length if about is not None else 1.0
        total += near * (turned[0] + own[index, 2]) - far * (turned[1] + own[index, 3])
        for stiffness, moment, arm in (
            (member.start_spring, start, near),
            (member.end_spring, end, far),
        ):
            if stiffness:
                total += arm * moment / stiffness
    return total
