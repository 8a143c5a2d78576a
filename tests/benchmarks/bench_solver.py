"""Times the solver against a banded SciPy solution per line and a copy of its memory.

    python tests/benchmarks/bench_solver.py [LINES]

Prints medians of one run in processor time (so that other work on the machine counts less) and
their ratios, beside the goals of the project (rows 5, 6, 7 and 12
of its table of goals).  Building the lines and importing are outside the timed parts.  "Arrays"
is the entry that works on arrays over lines (EI, lengths, supports, fixed-end moments to end
moments and rotations); "lines" is the public call, from line models to verified solutions.
"""

from __future__ import annotations

import gc
import platform
import random
import statistics
import sys
import time
from collections.abc import Callable
from fractions import Fraction

import numpy as np
import scipy
from scipy.linalg import solveh_banded

from analysis_core.distribution import solve, solve_lines
from analysis_core.distribution.direct import SpanMoments, prismatic, sweep, sweep_lines
from analysis_core.model import RIGID, DistributedForce, Joint, Line, Member, Piece, Support

REPEATS = 7


def main() -> None:
    lines = int(sys.argv[1]) if len(sys.argv) > 1 else 10_000
    print(
        f"NumPy {np.__version__}, SciPy {scipy.__version__}, Python {platform.python_version()}, "
        f"{time.strftime('%Y-%m-%d')}"
    )
    many_lines(lines, spans=5, cases=40)
    for spans in (1, 2, 5, 10):
        one_line(spans)
    long_line(1_000)
    accuracy()
    for beams in (1_000, 10_000, 50_000):
        whole_lines(beams)


def median_time(work: Callable[[], object], repeats: int = REPEATS) -> float:
    """Median processor time; one run before to warm up."""
    work()
    times = []
    for _ in range(repeats):
        gc.collect()
        start = time.process_time()
        work()
        times.append(time.process_time() - start)
    return statistics.median(times)


def report(row: str, text: str, reached: float, goal: float, *, least: bool = False) -> None:
    met = reached >= goal if least else reached <= goal
    sign = ">=" if least else "<="
    print(f"{row:>3}  {text:<66} {reached:9.3g}  {sign} {goal:<7.3g} {'' if met else 'MISSED'}")


def random_spans(lines: int, spans: int, cases: int) -> tuple[np.ndarray, ...]:
    rng = np.random.default_rng(4)
    length = rng.uniform(3.0, 9.0, (spans, lines))
    rigidity = 10.0 ** rng.uniform(6.0, 8.0, (spans, lines))
    held = np.zeros((spans + 1, lines))
    load = rng.uniform(1e3, 2e4, (spans, cases, lines))
    moment = load * (length**2 / 12.0)[:, None]
    return length, rigidity, held, -moment, moment


def many_lines(lines: int, spans: int, cases: int) -> None:
    length, rigidity, held, start, end = random_spans(lines, spans, cases)
    out = SpanMoments(np.empty_like(start), np.empty_like(end), np.empty((spans + 1, cases, lines)))
    targets = np.empty_like(start), np.empty_like(end)

    def copy() -> None:
        targets[0][...] = start
        targets[1][...] = end

    per_line = [
        (rigidity[:, i] / length[:, i], start[:, :, i].copy(), end[:, :, i].copy())
        for i in range(lines)
    ]
    copied = median_time(copy)
    swept = median_time(lambda: sweep_lines(prismatic(length, rigidity, held), start, end, out=out))
    looped = median_time(lambda: [banded(*line) for line in per_line], 5)
    last = banded(*per_line[-1])
    assert np.allclose(last[0], out.start[:, :, -1], rtol=1e-9, atol=1e-6)
    print(
        f"     {lines} lines x {spans} spans x {cases} cases: copy {copied * 1e3:.1f} ms, "
        f"arrays {swept * 1e3:.1f} ms, banded loop {looped * 1e3:.0f} ms"
    )
    report("5", "arrays: times faster than the banded loop", looped / swept, 25.0, least=True)
    report("5", "arrays: times a memory copy of inputs to outputs", swept / copied, 6.0)


def banded(slim: np.ndarray, start: np.ndarray, end: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Slope deflection of one line on pins by SciPy's banded Cholesky; all cases at once."""
    count = len(slim)
    bands = np.zeros((2, count + 1))
    bands[1, :-1] += 4.0 * slim
    bands[1, 1:] += 4.0 * slim
    bands[0, 1:] = 2.0 * slim
    right = np.zeros((count + 1, *start.shape[1:]))
    right[:-1] -= start
    right[1:] -= end
    turns = solveh_banded(bands, right, overwrite_ab=True, overwrite_b=True, check_finite=False)
    k = slim.reshape(-1, *([1] * (start.ndim - 1)))
    return (
        start + 4.0 * k * turns[:-1] + 2.0 * k * turns[1:],
        end + 2.0 * k * turns[:-1] + 4.0 * k * turns[1:],
    )


def single(spans: int) -> tuple[list[list[float]], tuple[np.ndarray, np.ndarray, np.ndarray]]:
    length, rigidity, _, start, end = random_spans(1, spans, 1)
    slim = (rigidity / length)[:, 0]
    m, n = start[:, 0, 0].copy(), end[:, 0, 0].copy()
    none = [0.0] * (spans + 1)
    whole = (4.0 * slim).tolist()
    given = [whole, whole, (2.0 * slim).tolist(), (12.0 * slim * slim).tolist(), none]
    return [*given, m.tolist(), n.tolist(), none], (slim, m, n)


def per_call(work: Callable[[], object], calls: int) -> float:
    return median_time(lambda: [work() for _ in range(calls)]) / calls


def one_line(spans: int) -> None:
    floats, arrays = single(spans)
    direct = per_call(lambda: sweep(*floats), 1_000)
    by_bands = per_call(lambda: banded(*arrays), 200)
    text = f"one line, {spans} spans: {direct * 1e6:.1f} us, part of the banded path"
    report("6", text, direct / by_bands, 0.25)


def long_line(spans: int) -> None:
    floats, _ = single(spans)
    report("6", f"one line of {spans} spans, ms", per_call(lambda: sweep(*floats), 5) * 1e3, 1.0)


def accuracy() -> None:
    """Largest error against fractions, over lines with EI/L spread over six decades."""
    rng = random.Random(7)
    worst = 0.0
    for _ in range(200):
        count = rng.randint(1, 15)
        slim = [10.0 ** rng.uniform(0.0, 6.0) for _ in range(count)]
        start = [-rng.uniform(1.0, 100.0) for _ in range(count)]
        end = [rng.uniform(1.0, 100.0) for _ in range(count)]
        none = [0.0] * (count + 1)
        whole, half = [4 * k for k in slim], [2 * k for k in slim]
        first, last, _ = sweep(
            whole, whole, half, [12 * k * k for k in slim], none, start, end, none
        )
        expected = exactly(slim, start, end)
        largest = max(abs(float(v)) for v in expected)
        if largest < 1e-9:
            continue
        for found, value in zip([*first, *last], expected, strict=True):
            worst = max(worst, abs(float(Fraction(found) - value)) / largest)
    report("7", "error of the largest moment, EI/L 1 to 1,000,000", worst, 2e-15)


def exactly(slim: list[float], start: list[float], end: list[float]) -> list[Fraction]:
    k = [Fraction(v) for v in slim]
    m, n = [Fraction(v) for v in start], [Fraction(v) for v in end]
    count = len(k)
    main, right = [Fraction(0)] * (count + 1), [Fraction(0)] * (count + 1)
    for j in range(count):
        main[j] += 4 * k[j]
        main[j + 1] += 4 * k[j]
        right[j] -= m[j]
        right[j + 1] -= n[j]
    for j in range(count):
        factor = 2 * k[j] / main[j]
        main[j + 1] -= factor * 2 * k[j]
        right[j + 1] -= factor * right[j]
    turns = [Fraction(0)] * (count + 1)
    turns[-1] = right[-1] / main[-1]
    for j in range(count - 1, -1, -1):
        turns[j] = (right[j] - 2 * k[j] * turns[j + 1]) / main[j]
    first = [m[j] + 4 * k[j] * turns[j] + 2 * k[j] * turns[j + 1] for j in range(count)]
    last = [n[j] + 2 * k[j] * turns[j] + 4 * k[j] * turns[j + 1] for j in range(count)]
    return first + last


CASES = ("G", "Q", "S", "W")
_PER_BEAM: list[float] = []


def whole_lines(beams: int) -> None:
    """The public call on lines of 1 to 6 spans with an overhang here and there."""
    rng = random.Random(beams)
    lines: list[Line] = []
    left = beams
    while left > 0:
        spans = min(left, rng.randint(1, 6))
        lines.append(model_line(rng, spans))
        left -= spans
    taken = median_time(lambda: solve_lines(lines, CASES), 5)
    _PER_BEAM.append(taken / beams)
    text = f"lines: {beams} beams in {taken * 1e3:.0f} ms; per beam, of that at 1,000"
    report("12", text, _PER_BEAM[-1] / _PER_BEAM[0], 1.5)
    if beams == 1_000:
        five = next(line for line in lines if len(line.members) == 5)
        one = per_call(lambda: solve(five, CASES), 50)
        print(f"     one line of 5 spans and 4 cases, model to solution: {one * 1e6:.0f} us")


def model_line(rng: random.Random, spans: int) -> Line:
    bare = spans > 1 and rng.random() < 0.2
    joints, members = [Joint(0, 0.0, 0.0, support=Support(RIGID))], []
    for index in range(spans):
        x = joints[-1].x + rng.uniform(3.0, 9.0)
        support = None if bare and index == spans - 1 else Support(RIGID)
        joints.append(Joint(index + 1, x, 0.0, support=support))
        length = x - joints[-2].x
        pieces = (Piece(length, (10.0 ** rng.uniform(6.0, 8.0),)),)
        members.append(Member(index, index, index + 1, pieces, span=index + 1))
    actions = tuple(
        DistributedForce(case, m.id, 0.0, m.length, (rng.uniform(1e3, 2e4),))
        for m in members
        for case in CASES
    )
    return Line(f"B-{len(members)}", tuple(joints), tuple(members), actions)


if __name__ == "__main__":
    main()
