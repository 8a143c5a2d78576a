"""What acts on the building acts on its lines: totals and resultants are kept, whatever the
order, direction and place of the members."""

from __future__ import annotations

import math
import random

import pytest
from building_makers import (
    PINNED,
    Restraint,
    member,
    model,
    node,
    shuffled,
    turned,
)

from analysis_core.building import AxisAction, NodeAction
from analysis_core.idealise import idealise
from analysis_core.model import DistributedForce, JointForce, Line, PointForce
from analysis_core.settings import Settings


def resultant(line: Line):
    """Sum of the forces on a line: (right, down, clockwise moment about its origin)."""
    right = down = moment = 0.0
    for action in line.actions:
        if isinstance(action, JointForce):
            joint = line.joints[action.joint]
            h, v, x, z = action.horizontal, action.vertical, joint.x, joint.z
            moment += action.moment
            right, down, moment = right + h, down + v, moment + v * x + h * z
        elif isinstance(action, PointForce | DistributedForce):
            cos, sin = line.direction(line.members[action.member])
            start = line.joints[line.members[action.member].start]
            for at, across, along in pieces(action):
                h, v = across * sin + along * cos, across * cos - along * sin
                x, z = start.x + at * cos, start.z + at * sin
                right, down, moment = right + h, down + v, moment + v * x + h * z
    return right, down, moment


def pieces(action):
    """Point forces with the resultant of an action: two Gauss points are exact for linear ones."""
    if isinstance(action, PointForce):
        return [(action.position, action.transverse, action.axial)]
    size = action.end - action.start
    found = []
    for root in (-1.0 / math.sqrt(3.0), 1.0 / math.sqrt(3.0)):
        v = size * (1.0 + root) / 2.0
        across, along = (
            sum(c * v**i for i, c in enumerate(part)) * size / 2.0
            for part in (action.transverse, action.axial)
        )
        found.append((action.start + v, across, along))
    return found


def random_grid(seed: int):
    """A floor of primaries along X on supports and secondaries along Y between them, sloping
    a little, drawn either way, with random actions in their planes."""
    rng = random.Random(seed)
    xs = [0.0, rng.uniform(4.0, 6.0), rng.uniform(9.0, 12.0)]
    ys = [0.0, rng.uniform(3.0, 5.0), rng.uniform(8.0, 9.0)]
    members, nodes, actions = [], [], []
    for i, y in enumerate(ys):
        for j, x in enumerate(xs):
            nodes.append(node(f"n{i}{j}", (x, y, 0.1 * x), Restraint() if j == 0 else PINNED))
    for i, y in enumerate(ys):
        for j in (0, 1):
            ends = [(xs[j], y, 0.1 * xs[j]), (xs[j + 1], y, 0.1 * xs[j + 1])]
            if rng.random() < 0.5:
                ends.reverse()
            members.append(member(f"P{i}{j}", *ends))
    at = rng.uniform(1.0, 3.0)
    for i in (0, 1):
        ends = [(at, ys[i], 0.1 * at), (at, ys[i + 1], 0.1 * at)]
        if rng.random() < 0.5:
            ends.reverse()
        members.append(member(f"S{i}", *ends))
    nodes += [node(f"s{i}", (at, y, 0.1 * at)) for i, y in enumerate(ys)]
    for m in members:
        flat = [b - a for a, b in zip(m.start, m.end, strict=True)]
        size = math.hypot(*flat)
        plan = math.hypot(flat[0], flat[1])
        sideways = rng.uniform(-1e3, 1e3)
        forces = tuple(
            (sideways * flat[0] / plan, sideways * flat[1] / plan, -rng.uniform(0.0, 9e3))
            for _ in range(3)
        )
        stations = (rng.uniform(0.0, 0.3) * size, rng.uniform(0.4, 0.6) * size, size)
        shape = rng.choice(["continuous", "discrete"])
        actions.append(AxisAction(f"q{m.global_id}", "", "G", m.global_id, shape, stations, forces))
    for n in nodes:
        actions.append(NodeAction(f"p{n.global_id}", "", "G", n.global_id, force=(0.0, 0.0, -1e3)))
    return model(members, nodes, actions=actions)


def stated(building):
    """Vertical total (down) of the actions of a building."""
    down = 0.0
    for action in building.actions:
        if isinstance(action, NodeAction):
            down -= action.force[2]
        elif action.shape == "discrete":
            down -= sum(f[2] for f in action.forces)
        else:
            for a, b, f, g in zip(
                action.stations, action.stations[1:], action.forces, action.forces[1:], strict=False
            ):
                down -= (b - a) * (f[2] + g[2]) / 2.0
    return down


@pytest.mark.parametrize("seed", range(12))
def test_the_vertical_total_is_kept(seed):
    building = random_grid(seed)
    found = idealise(building, Settings())

    total = sum(resultant(line)[1] for line in found.lines)
    assert total == pytest.approx(stated(building), rel=1e-12)


@pytest.mark.parametrize("seed", range(6))
def test_each_line_keeps_its_resultant_however_the_building_lies(seed):
    building = random_grid(seed)
    plain = {line.elements: line for line in idealise(building, Settings()).lines}
    moved = idealise(shuffled(turned(building, 0.3, (1e6, 2e6, 55.0)), seed), Settings())

    assert len(moved.lines) == len(plain)
    for line in moved.lines:
        other = plain[line.elements]
        assert resultant(line) == pytest.approx(resultant(other), rel=1e-7, abs=1e-3)
