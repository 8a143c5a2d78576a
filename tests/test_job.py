"""Job files: what is written arrives in SI, and what is not understood is named."""

import json
import math

import jsonschema
import pytest

from analysis_core.errors import JobError
from analysis_core.job.check import check
from analysis_core.job.reader import load, parse
from analysis_core.job.yaml_text import read_yaml, schema

WHOLE = """
title: Quarry Lane Workshops
display: {system: us, units: {force: lbf}}
analysis: {route: physical, shear_flexible: true, columns_as_legs: true, include: [IfcBeam]}
tolerances: {join: 25 mm, collinear: 1 deg}
beams: {least_length: 300 mm, least_slenderness: 2.5, judge_by_role: false}
rules:
  set: en-1990
  combinations: both
  replace: {gamma.Q: 1.6}
  redistribution: [{on: {line: L1-01}, fraction: 15 %, joints: {"2": 10 %}}]
cases:
  - {name: Q, nature: imposed, category: B, by_span: false}
combinations:
  - {name: C1, limit_state: strength, factors: {G: 1.35, Q: 1.5}}
actions:
  - {case: G, on: {class: IfcBeam}, uniform: 12 kN/m, from: 1 m, to: 3 m}
  - {case: Q, on: {id: [abc, def]}, point: 20 kN, at: [25 %, 75 %]}
  - {case: Q, on: {}, polygonal: [0 kN/m, 4 kN/m, 1 kN/m], at: [0 m, 2 m, 5 m]}
  - {case: T, on: {name: "B-*"}, temperature: -15 K}
area_actions:
  - {case: Q, on: {class: IfcSlab}, load: 2.5 kN/m2, spread: one-way, direction: [1, 0]}
movements:
  - {case: S, on: {name: C-1}, down: 10 mm}
supports:
  - {on: {name: B-1}, end: start, condition: fixed}
  - {on: {name: B-1}, at: 3 m, vertical: 25 kN/mm, rotation: free}
releases:
  - {on: {name: B-2}, end: end}
materials:
  - {name: "C30*", elastic_modulus: 33 GPa, category: concrete, strength: {fck: 30 MPa}}
sections:
  - {on: {name: B-3}, inertia: 23130 cm4, taper: [[0, 1], [0.5, 1.4], [1, 2]]}
limits:
  - {span_ratio: 360, absolute: 20 mm}
"""


@pytest.fixture
def settings():
    return parse(WHOLE)


def test_quantities_arrive_in_si(settings):
    uniform, point, polygonal, temperature = settings.actions
    assert (uniform.values, uniform.start, uniform.end) == ((12e3,), 1.0, 3.0)
    assert (point.values, point.stations, point.relative) == ((20e3, 20e3), (0.25, 0.75), True)
    assert polygonal.stations == (0.0, 2.0, 5.0)
    assert temperature.values == (-15.0,)
    assert settings.tolerances.collinear == pytest.approx(math.radians(1.0))
    assert (settings.beams.least_length, settings.beams.least_slenderness) == (0.3, 2.5)
    assert not settings.beams.judge_by_role
    assert settings.materials[0].strength == {"fck": 30e6}
    assert settings.sections[0].inertia == pytest.approx(2.313e-4)


def test_supports_are_stated_by_a_word_or_by_stiffness(settings):
    fixed, spring = settings.supports
    assert (fixed.vertical, fixed.rotation, fixed.end) == (math.inf, math.inf, "start")
    assert (spring.vertical, spring.rotation, spring.position) == (25e6, 0.0, 3.0)
    assert settings.releases[0].rotation == 0.0


def test_rules_and_redistribution_arrive(settings):
    rules = settings.rules
    assert (rules.name, rules.use_model_combinations, rules.use_rule_combinations) == (
        "en-1990", True, True,
    )  # fmt: skip
    assert rules.redistribution[0].fraction == pytest.approx(0.15)
    assert rules.redistribution[0].per_joint == {2: pytest.approx(0.10)}


def test_an_empty_job_file_is_the_defaults():
    assert parse("").rules.name == "en-1990"


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("actoins: []", "unknown key 'actoins'; the nearest known one is 'actions'"),
        ("actions: [{case: G, on: {}, unifrom: 2 kN/m}]", r"'actions\[0\]' .*nearest.*'uniform'"),
        ("actions: [{case: G, on: {}, uniform: 12}]", "12 has no unit"),
        ("actions: [{case: G, on: {}}]", "exactly one of uniform"),
        ("actions: [{case: G, on: {}, point: 2 kN}]", "without a place"),
        ("actions: [{on: {}, uniform: 2 kN/m}]", "has no 'case'"),
        ("actions: [{case: G, on: {}, point: 2 kN, at: [1 m, 20 %]}]", "mixes lengths"),
        ("actions: [{case: G, on: {}, linear: [1 kN/m]}]", "at least 2"),
        ("cases: [{name: G, nature: dead}]", "must be one of permanent"),
        ("cases: {name: G}", "must be a list"),
        ("cases: [{name: Q}, {name: q}]", r"'cases\[1\]' has the name 'q'.*join the two"),
        ("cases: [{name: 12}]", "must be text"),
        ("supports: [{on: {}, condition: fixed, vertical: rigid}]", "either a 'condition'"),
        ("supports: [{on: {}, vertical: stiff}]", "or the word rigid or free"),
        ("supports: [{on: {}, vertical: -3 kN/m}]", "negative"),
        ("display: {units: {force: m}}", "does not measure a force"),
        ("title: a\ntitle: b", "Line 2 states the key 'title' a second time"),
        ("a: &x [1]\nb: *x", "alias"),
        ("title: [", "not YAML"),
        ("- 1", "must be a mapping"),
        ("limits: [{span_ratio: .nan}]", "finite"),
        ("title: !!python/object/apply:os.system [ls]", "not YAML"),
    ],
)
def test_what_is_not_understood_is_named(text, message):
    with pytest.raises(JobError, match=message):
        parse(text)


def test_a_missing_job_file_is_one_sentence(tmp_path):
    with pytest.raises(JobError, match="cannot be read: No such file"):
        load(tmp_path / "absent.yaml")


def test_the_published_schema_is_a_json_schema_and_accepts_the_whole_example():
    jsonschema.Draft202012Validator.check_schema(schema())
    jsonschema.validate(read_yaml(WHOLE), schema())
    assert json.dumps(schema())


def test_our_checker_and_the_general_purpose_one_refuse_the_same_structures():
    validator = jsonschema.Draft202012Validator(schema())
    for data in (
        {"cases": [{}]},
        {"x": 1},
        {"actions": {}},
        {"rules": {"set": 3}},
        {"limits": [{}]},
    ):
        ours = True
        try:
            check(data, schema())
        except JobError:
            ours = False
        assert ours == validator.is_valid(data), data


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("tolerances: {bearing: -5 m}", "'tolerances.bearing' is -5 (SI); it must not be negative"),
        ("sections: [{on: {}, inertia: 0 cm4}]", "'sections[0].inertia' is 0 (SI); it must be gre"),
        ("sections: [{on: {}, area: -2 cm2}]", "'sections[0].area' is -0.0002 (SI)"),
        ("materials: [{name: S, elastic_modulus: -210 GPa}]", "'materials[0].elastic_modulus'"),
        ("materials: [{name: S, density: 0 kg/m3}]", "'materials[0].density' is 0 (SI)"),
        ("materials: [{name: S, strength: {fy: 0 MPa}}]", "'materials[0].strength.fy' is 0 (SI)"),
        ("limits: [{span_ratio: -3}]", "'limits[0].span_ratio' is -3 (SI)"),
        ("rules: {redistribution: [{on: {}, fraction: 200 %}]}", "redistributes 200%; it must be"),
    ],
)
def test_a_size_that_cannot_be_is_refused_not_passed_over(text, message):
    """Zero stands for 'not stated' inside, so that a stated zero would have no effect."""
    with pytest.raises(JobError) as caught:
        parse(text)

    assert message in str(caught.value)


def test_a_text_with_merge_keys_says_the_same_twice():
    from analysis_core.job.yaml_text import read_yaml

    # Constructing writes what is merged into the nodes; kept nodes would state 'b' twice.
    text = "display: {<<: {b: 1, c: 3}, b: 2}\n"

    assert read_yaml(text) == read_yaml(text) == {"display": {"b": 2, "c": 3}}
