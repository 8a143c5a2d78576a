"""Plain beam lines: the batch, the single line and the general way agree; errors stay apart."""

from __future__ import annotations

import random
from collections.abc import Callable
from dataclasses import replace

import numpy as np
import pytest
from random_lines import beam_line, plain_line

from analysis_core.distribution import solve, solve_lines
from analysis_core.distribution.assembly import solve_any
from analysis_core.distribution.direct import SpanStiffness, sweep, sweep_lines
from analysis_core.distribution.plain_lines import read
from analysis_core.errors import AnalysisError, MechanismError, ModelError
from analysis_core.model import Line
from analysis_core.results import LineSolution

CASES = ("dead", "live", "snow")
ARRAYS = (
    "end_moments",
    "end_shears",
    "axial",
    "rotations",
    "end_rotations",
    "displacements",
    "reactions",
)


def lines_of_every_length() -> list[Line]:
    return [plain_line(seed, CASES[seed % 3]) for seed in range(5000, 5120)]


def assert_same(one: LineSolution, other: LineSolution) -> None:
    size = max(float(np.abs(other.end_moments).max()), float(np.abs(other.reactions).max()), 1.0)
    for name in ARRAYS:
        # Forces within 1e-13 of the largest force, movements within 1e-14 (rad, m) or that
        # part of the largest.
        moved = name in ("rotations", "end_rotations", "displacements")
        limit = 1e-13 * (max(0.1, float(np.abs(getattr(other, name)).max())) if moved else size)
        np.testing.assert_allclose(
            getattr(one, name), getattr(other, name), rtol=0.0, atol=limit, err_msg=name
        )


def test_the_batch_agrees_with_the_general_way_line_by_line() -> None:
    lines = lines_of_every_length()
    plain = 0
    for line, found in zip(lines, solve_lines(lines, CASES), strict=True):
        if isinstance(found, AnalysisError):
            with pytest.raises(type(found)):
                solve_any(line, CASES)
            continue
        plain += read(line, {name: i for i, name in enumerate(CASES)}) is not None
        assert found.line is line
        assert_same(found, solve_any(line, CASES))
        assert_same(found, solve(line, CASES))
        assert found.joint_residual <= 1e-12 * max(
            1.0, np.abs(found.end_moments).max(), np.abs(found.reactions).max()
        )
    assert plain > 80


def test_a_line_that_cannot_stand_gives_its_error_and_stops_no_other() -> None:
    lines = [plain_line(5000, "dead"), beam_line(44), plain_line(5003, "dead")]
    loose = next(
        line for line in map(beam_line, range(200)) if isinstance(_outcome(line), MechanismError)
    )

    found = solve_lines([lines[0], loose, lines[2]], CASES)

    assert isinstance(found[1], MechanismError)
    assert isinstance(found[0], LineSolution)
    assert isinstance(found[2], LineSolution)


def _outcome(line: Line) -> LineSolution | AnalysisError:
    return solve_lines([line], ["q"])[0]


def test_results_are_read_only() -> None:
    for found in (solve(plain_line(5000), ["q"]), *solve_lines([plain_line(5000)] * 3, ["q"])):
        assert isinstance(found, LineSolution)
        for name in ARRAYS:
            with pytest.raises(ValueError, match="read-only"):
                getattr(found, name)[...] = 1.0


@pytest.mark.parametrize("spans", [1, 2, 7])
def test_sweeping_many_lines_is_sweeping_each(spans: int) -> None:
    rng = np.random.default_rng(spans)
    lines, cases = 70, 3
    stiff = 10.0 ** rng.uniform(0.0, 6.0, (spans, lines))
    held = np.where(rng.random((spans + 1, lines)) < 0.3, 10.0 ** rng.uniform(0, 6), 0.0)
    stiffness = SpanStiffness(4 * stiff, 4 * stiff, 2 * stiff, 12 * stiff**2, held)
    start = rng.uniform(-9.0, 1.0, (spans, cases, lines))
    end = rng.uniform(-1.0, 9.0, (spans, cases, lines))
    couples = rng.uniform(-3.0, 3.0, (spans + 1, cases, lines))

    found = sweep_lines(stiffness, start, end, couples)

    for line, case in [(0, 0), (33, 2), (69, 1)]:
        own = [a[:, line].tolist() for a in (stiffness.near, stiffness.far)]
        own += [a[:, line].tolist() for a in (stiffness.carried, stiffness.both, held)]
        loads = [a[:, case, line].tolist() for a in (start, end, couples)]
        one = sweep(*own, *loads)
        for mine, theirs in zip(one, (found.start, found.end, found.rotations), strict=True):
            np.testing.assert_allclose(theirs[:, case, line], mine, rtol=1e-12, atol=1e-13)


def test_chunks_do_not_change_anything(monkeypatch: pytest.MonkeyPatch) -> None:
    lines = [plain_line(seed, random.Random(seed).choice(CASES)) for seed in range(6000, 6030)]
    whole = solve_lines(lines, CASES)
    monkeypatch.setattr("analysis_core.distribution.CHUNK", 3)
    monkeypatch.setattr("analysis_core.distribution.direct.CHUNK", 5)

    for one, other in zip(solve_lines(lines, CASES), whole, strict=True):
        if isinstance(other, LineSolution):
            assert isinstance(one, LineSolution)
            np.testing.assert_array_equal(one.end_moments, other.end_moments)


@pytest.mark.parametrize("maker", [plain_line, beam_line])
def test_no_cases_give_empty_results(maker: Callable[[int], Line]) -> None:
    found = solve(maker(5003), [])

    assert found.end_moments.shape[0] == 0
    assert found.joint_residual == 0.0


def test_a_line_with_a_fault_is_refused_with_its_reason() -> None:
    faulty = replace(plain_line(5003), fault="It has no material.")

    with pytest.raises(ModelError, match="It has no material"):
        solve(faulty, ["q"])
    assert isinstance(solve_lines([faulty], ["q"])[0], ModelError)


@pytest.mark.parametrize("made", [plain_line, beam_line], ids=["plain", "any"])
@pytest.mark.parametrize("cases", [CASES[:1], CASES])
def test_a_line_has_the_same_bits_alone_and_among_many(
    made: Callable[[int], Line], cases: tuple[str, ...]
) -> None:
    """A reconciled revision, of which few lines are solved, must equal a full run."""
    lines = [made(seed) for seed in range(7000, 7060)]
    lines = [_recased(line, cases) for line in lines]
    together = solve_lines([each for line in lines for each in [line] * 4], cases)
    for line, found in zip(lines, together[::4], strict=True):
        if isinstance(found, AnalysisError):
            continue
        (alone,) = solve_lines([line], cases)
        assert not isinstance(alone, AnalysisError)
        for name in ARRAYS:
            np.testing.assert_array_equal(getattr(found, name), getattr(alone, name), name)


def _recased(line: Line, cases: tuple[str, ...]) -> Line:
    actions = tuple(replace(a, case=cases[i % len(cases)]) for i, a in enumerate(line.actions))
    return replace(line, actions=actions)
