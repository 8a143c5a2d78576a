"""Times the independent check beside the solver it checks.

    python tests/benchmarks/bench_check.py [LINES]

Medians of five in one run, in processor time; building and solving the lines is outside the
timed part of the check.  "Plain" lines are checked together by their pattern; "haunched" ones
need quadrature; floors with columns have redundant axial forces; the long line goes alone.
"""

from __future__ import annotations

import statistics
import sys
import time
from collections.abc import Callable

import numpy as np

from analysis_core import distribution
from analysis_core.model import (
    RIGID,
    Action,
    DistributedForce,
    Joint,
    Line,
    Member,
    Piece,
    PointForce,
    Support,
)
from analysis_core.results import LineSolution
from analysis_core.stiffness_check import largest_differences

CASES = ("G", "Q", "S")
REPEATS = 5


def main() -> None:
    count = int(sys.argv[1]) if len(sys.argv) > 1 else 10_000
    rng = np.random.default_rng(1)
    sets: dict[str, list[Line]] = {
        f"plain, {count} lines of 1 span": [plain(rng, 1) for _ in range(count)],
        f"plain, {count // 5} lines of 5 spans": [plain(rng, 5) for _ in range(count // 5)],
        f"haunched, {count // 50} lines of 5 spans": [
            plain(rng, 5, haunched=True) for _ in range(count // 50)
        ],
        f"floors with columns, {count // 50} of 5 spans": [
            with_columns(rng, 5) for _ in range(count // 50)
        ],
        "plain, 1 line of 1000 spans": [plain(rng, 1000)],
    }
    print(f"{'':44}{'solve, ms':>11}{'check, ms':>11}{'largest difference':>21}")
    for name, lines in sets.items():
        solving = median_time(lambda lines=lines: distribution.solve_lines(lines, CASES))
        solutions = distribution.solve_lines(lines, CASES)
        solved = [s for s in solutions if isinstance(s, LineSolution)]
        checking = median_time(lambda solved=solved: largest_differences(solved))
        worst = max(largest_differences(solved))
        print(f"{name:44}{solving * 1e3:11.1f}{checking * 1e3:11.1f}{worst:21.1e}")


def median_time(work: Callable[[], object]) -> float:
    times = []
    for _ in range(REPEATS):
        start = time.process_time()
        work()
        times.append(time.process_time() - start)
    return statistics.median(times)


def plain(rng: np.random.Generator, spans: int, *, haunched: bool = False) -> Line:
    """A line on pins, uniform in every case and a force on every span."""
    lengths = rng.uniform(3.0, 9.0, spans)
    places = np.concatenate([[0.0], np.cumsum(lengths)])
    joints = tuple(Joint(i, float(x), 0.0, support=Support(RIGID)) for i, x in enumerate(places))
    members = tuple(
        Member(i, i, i + 1, _pieces(rng, float(places[i + 1] - places[i]), haunched), span=i + 1)
        for i in range(spans)
    )
    return Line("plain", joints, members, _actions(rng, members))


def with_columns(rng: np.random.Generator, spans: int) -> Line:
    """A floor with columns above and below every joint, their far ends fixed."""
    floor = plain(rng, spans)
    joints = [Joint(j.id, j.x, 0.0) for j in floor.joints]
    members = list(floor.members)
    for joint in floor.joints:
        for z in (3.5, -4.0):
            held = Support(RIGID, RIGID, RIGID)
            joints.append(Joint(len(joints), joint.x, z, support=held))
            column = (Piece(abs(z), (1.5e7,)),)
            members.append(Member(len(members), joint.id, len(joints) - 1, column, role="leg"))
    return Line("floor", tuple(joints), tuple(members), floor.actions)


def _pieces(rng: np.random.Generator, length: float, haunched: bool) -> tuple[Piece, ...]:
    rigidity = float(rng.uniform(1e7, 5e7))
    if not haunched:
        return (Piece(length, (rigidity,)),)
    root = rigidity ** (1.0 / 3.0)
    return (
        Piece(0.2 * length, (2.0 * root, -2.0 * root, root), 3.0),
        Piece(0.6 * length, (rigidity,)),
        Piece(length - 0.8 * length, (root, 0.0, root), 3.0),
    )


def _actions(rng: np.random.Generator, members: tuple[Member, ...]) -> tuple[Action, ...]:
    found: list[Action] = []
    for member in members:
        length = member.length
        for case in CASES:
            intensity = float(rng.uniform(2e3, 9e3))
            found.append(DistributedForce(case, member.id, 0.0, length, (intensity,)))
        place = float(rng.uniform(0.1, 0.9)) * length
        found.append(PointForce("Q", member.id, place, 12e3))
    return tuple(found)


if __name__ == "__main__":
    main()
