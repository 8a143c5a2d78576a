"""Governing states: effects that occur together, and the extremes of the envelope among them."""

from pathlib import Path

import numpy as np
import pytest

from analysis_core import pipeline
from analysis_core.distribution import solve
from analysis_core.effects.states import state_line, state_stations
from analysis_core.job.reader import load
from analysis_core.solving.line_details import detail_of

SAMPLES = Path(__file__).resolve().parents[1] / "sample_models"


@pytest.fixture(scope="module")
def outcome():
    job = load(SAMPLES / "quarry_lane.yaml")
    return pipeline.run(SAMPLES / "quarry_lane_physical_ifc4.ifc", job)


def test_the_states_reach_the_extremes_of_the_envelope(outcome):
    for result in outcome.lines:
        states = detail_of(result).states
        at = state_stations(result.parts, states, 161)
        for member in result.envelopes["strength"].members:
            moments = at.moment[:, member.member]
            # Hogging peaks stand at stations; sagging ones lie within (dx)² w / 8 of one.
            assert moments.min() == pytest.approx(member.hogging.value, rel=1e-9, abs=1e-6)
            assert moments.max() == pytest.approx(member.sagging.value, rel=2e-3, abs=1e-6)


def test_a_state_solved_by_itself_has_the_effects_of_its_superposition(outcome):
    for result in outcome.lines[:3]:
        for state in detail_of(result).states:
            line = state_line(result.parts.line, state, case="state")
            moments = solve(line, ["state"]).end_moments[0]
            at = state_stations(result.parts, [state], 21)
            scale = np.abs(moments).max()
            assert at.moment[0, :, 0] == pytest.approx(moments[:, 0], abs=1e-9 * scale)
            assert at.moment[0, :, -1] == pytest.approx(-moments[:, 1], abs=1e-9 * scale)


def test_a_state_says_what_it_governs(outcome):
    first = outcome.lines[0]
    (hogging,) = [s for s in detail_of(first).states if "hogging of span 1" in s.effects]

    assert "Offices on spans 1, 2" in hogging.source
    assert first.envelopes["strength"].members[0].hogging.source == hogging.source
