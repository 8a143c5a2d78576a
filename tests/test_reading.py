"""When a file that was read need not be read again."""

from pathlib import Path

import pytest

from analysis_core import pipeline
from analysis_core.job import reader as job

MODEL = Path(__file__).resolve().parents[1] / "sample_models" / "quarry_lane_physical_ifc4.ifc"


@pytest.fixture(scope="module")
def reading():
    return pipeline.read(MODEL)


@pytest.mark.parametrize(
    "text",
    [
        "title: Another\n",
        "rules: {set: asce-7-22}\n",
        "supports: [{on: {name: B1-AB}, end: start, condition: fixed}]\n",
        "actions: [{case: Dead, on: {}, uniform: 1 kN/m}]\n",
    ],
)
def test_it_serves_where_only_what_follows_is_decided(reading, text):
    settings = job.parse(text)

    assert reading.serves(settings)
    again = pipeline.idealised(reading, settings)
    assert again.model == pipeline.survey(MODEL, settings).model


@pytest.mark.parametrize(
    "text",
    [
        "analysis: {route: analytical}\n",
        "tolerances: {bearing: 10 mm}\n",
        "materials: [{name: '*', elastic_modulus: 30 GPa}]\n",
    ],
)
def test_it_does_not_where_reading_itself_is_asked_to_differ(reading, text):
    assert not reading.serves(job.parse(text))
