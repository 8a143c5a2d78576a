"""Times envelopes and arrangements against a copy of the memory they read and write.

    python tests/benchmarks/bench_effects.py [LINES]

Prints ratios of medians of one run, in processor time, so that other work on the machine counts
less.  Preparation (building lines, solving) is outside the timed
part.  "At stations" is the envelope of moment, shear and deflection at 21 stations, superposition
included, once the actions are laid out as arrays; "with exact extremes" adds the largest and least
of each with place and row; "whole call" is the public one, from lines to result objects with the
names of what governs.
"""

from __future__ import annotations

import gc
import statistics
import sys
import time
from collections.abc import Callable
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).parents[1] / "effects"))
from small_solver import PIN, beam_line, uniform

from analysis_core.effects.arrangements import Arrangements, SpanCases, split_by_span
from analysis_core.effects.envelopes import envelopes
from analysis_core.effects.factors import factor_table
from analysis_core.effects.fields import fields
from analysis_core.effects.survey import values_only
from analysis_core.effects.sweep import sweep
from analysis_core.model import Combination
from analysis_core.results import LineSolution

STATIONS = 21
REPEATS = 5
EVERY = Arrangements("every", {"Q": 0.0})


def median_time(work: Callable[[], object]) -> float:
    times = []
    for _ in range(REPEATS):
        gc.collect()
        start = time.process_time()
        work()
        times.append(time.process_time() - start)
    return statistics.median(times)


def solved_lines(
    count: int, spans: int, cases: list[str], split: list[str], seed: int
) -> tuple[list[SpanCases], list[LineSolution]]:
    """Lines of unequal spans under uniform loads, solved together by the three-moment equation."""
    rng = np.random.default_rng(seed)
    lines, solutions = [], []
    for number in range(count):
        lengths = rng.uniform(4.0, 9.0, spans)
        rigidities = rng.uniform(1e7, 4e7, spans)
        actions = [
            uniform(case, i, lengths[i], rng.uniform(2e3, 9e3))
            for case in cases
            for i in range(spans)
        ]
        line = beam_line(lengths, rigidities, [PIN] * (spans + 1), actions, mark=f"B-{number}")
        parts = split_by_span(line, cases, split)
        lines.append(parts)
        solutions.append(three_moments(parts, lengths, rigidities))
    return lines, solutions


def three_moments(parts: SpanCases, lengths, rigidities) -> LineSolution:
    spans, count = len(lengths), len(parts.cases)
    column = {name: c for c, name in enumerate(parts.cases)}
    load = np.zeros((count, spans))
    for action in parts.line.actions:
        load[column[action.case], action.member] += action.transverse[0]
    flexible = lengths / rigidities
    matrix = np.diag(2.0 * (flexible[:-1] + flexible[1:]))
    matrix += np.diag(flexible[1:-1], 1) + np.diag(flexible[1:-1], -1)
    turned = load * lengths**3 / rigidities / 4.0
    inner = np.linalg.solve(matrix, -(turned[:, :-1] + turned[:, 1:]).T).T
    sagging = np.pad(inner, ((0, 0), (1, 1)))
    zero = np.zeros((count, spans, 2))
    return LineSolution(
        line=parts.line,
        cases=parts.cases,
        end_moments=np.stack([sagging[:, :-1], -sagging[:, 1:]], axis=2),
        end_shears=zero,
        axial=zero,
        rotations=np.zeros((count, spans + 1)),
        end_rotations=zero,
        displacements=np.zeros((count, spans + 1, 2)),
        reactions=np.zeros((count, spans + 1, 3)),
        joint_residual=0.0,
        continuity_residual=0.0,
        method="three-moment equation",
    )


def memory_floor(members: int, combinations: int) -> float:
    """Copy what an envelope must read and write: load and end moments, then six arrays.

    Into fresh memory, as results are.
    """
    read = np.ones((combinations, 3, members))
    write = np.ones((6, STATIONS, members))
    return median_time(lambda: (read.copy(), write.copy()))


def diagrams(lines, solutions, combinations, arrangements) -> tuple[float, float]:
    """Seconds for the envelope at the stations, and for that with the exact extremes."""
    spans = tuple(sorted({m.span for m in lines[0].line.members}))
    table = factor_table(combinations, lines[0].parts, arrangements, spans)
    blocks = list(fields([line.line for line in lines], solutions))

    def at_stations() -> None:
        for block in blocks:
            for effect in (block.moment, block.shear, block.deflection):
                values_only(effect, table, STATIONS)

    def exact() -> None:
        for block in blocks:
            sweep(block, table, STATIONS)

    return median_time(at_stations), median_time(exact)


def whole(lines, solutions, combinations, arrangements) -> float:
    return median_time(
        lambda: envelopes(
            lines, solutions, combinations, limit_state="strength", arrangements=arrangements
        )
    )


def forty(rng: np.random.Generator, cases: list[str]) -> list[Combination]:
    return [
        Combination(f"U{n}", "strength", {case: rng.uniform(0.0, 1.5) for case in cases})
        for n in range(1, 41)
    ]


def show(text: str, seconds: float, remark: str = "") -> None:
    print(f"{text:52}{1e3 * seconds:10.2f} ms  {remark}")


def main(count: int) -> None:
    cases = ["G", "Q", "S", "W1", "W2"]
    lines, solutions = solved_lines(count, 5, cases, [], 1)
    combinations = forty(np.random.default_rng(2), cases)
    floor = memory_floor(5 * count, len(combinations))
    stations, exact = diagrams(lines, solutions, combinations, Arrangements())
    plain = whole(lines, solutions, combinations, Arrangements())
    print(f"{count} lines of 5 spans, {STATIONS} stations, medians of {REPEATS}")
    show("memory floor", floor)
    show(
        "row 8  40 combinations, at stations", stations, f"{stations / floor:.1f} x floor, goal 30"
    )
    show("       with exact extremes", exact, f"{exact / floor:.1f} x floor")
    show("       whole call", plain, f"{plain / floor:.1f} x floor")
    del lines, solutions

    both = [Combination("U1", "strength", {"G": 1.35, "Q": 1.5}, favourable={"Q": 0.0})]
    lines, solutions = solved_lines(count, 5, ["G", "Q"], ["Q"], 3)
    every, every_exact = diagrams(lines, solutions, both, EVERY)
    every_whole = whole(lines, solutions, both, EVERY)
    show(
        "row 9  all 32 arrangements, at stations",
        every,
        f"{every / stations:.2f} x row 8, goal 0.8",
    )
    show("       with exact extremes", every_exact, f"{every_exact / exact:.2f} x row 8 with them")
    show("       whole call", every_whole, f"{every_whole / plain:.2f} x row 8 whole")
    del lines, solutions

    long = max(50, count // 20)
    lines, solutions = solved_lines(long, 20, ["G", "Q"], ["Q"], 4)
    every, every_exact = diagrams(lines, solutions, both, EVERY)
    every_whole = whole(lines, solutions, both, EVERY)
    show(
        "row 9  20 spans, 1,048,576 arrangements, at stations", every / long, "a line, goal 0.2 ms"
    )
    show("       with exact extremes", every_exact / long, "a line")
    show("       whole call", every_whole / long, "a line")

    lines, solutions = solved_lines(1, 5, ["G", "Q"], ["Q"], 5)
    show("one line of 5 spans alone, whole call", whole(lines, solutions, both, EVERY))


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 10_000)
