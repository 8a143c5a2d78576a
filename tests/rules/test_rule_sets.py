"""Loading, replacing, choosing and describing rule sets."""

import jsonschema
import pytest
import yaml

from analysis_core import rules
from analysis_core.errors import JobError
from analysis_core.model import Case

CASES = [Case("G", "permanent"), Case("Q", "imposed", "B"), Case("S", "snow", "low")]


def test_the_built_in_sets_are_listed():
    assert set(rules.names()) >= {
        "en-1990", "en-1990-ab", "en-1990-equ", "asce-7-16", "asce-7-22", "asce-7-16-asd",
        "asce-7-22-asd",
    }  # fmt: skip


def test_unknown_name_tells_the_nearest_and_all_known():
    with pytest.raises(
        JobError, match=r"'en-199' is no rule set; the nearest known one is 'en-1990"
    ):
        rules.load("en-199")


def test_the_project_replaces_a_national_value_and_it_is_marked():
    rule_set = rules.load("en-1990-ab", {"xi": 0.925, "psi0.snow": 0.6})

    found = [dict(c.factors) for c in rules.combinations(rule_set, CASES)]

    assert {"G": 1.24875, "Q": 1.5, "S": 0.9} in found  # 0.925 * 1.35, 1.5 * 0.6
    assert rule_set.figures["xi"].replaced == 0.85
    assert rule_set.figures["xi"].confirmed
    assert not rule_set.figures["gamma_Q"].confirmed
    assert "in the rule set 0.85" in rules.describe(rule_set)


@pytest.mark.parametrize(
    ("replace", "message"),
    [
        ({"gama_Q": 1.4}, r"'rules.replace.gama_Q' is no figure .* nearest known one is 'gamma_Q'"),
        ({"gamma_Q": "1.4 kN"}, r"'rules.replace.gamma_Q' is '1.4 kN'; it must be a number"),
        ({"gamma_Q": True}, r"must be a number"),
        ({"gamma_Q": float("inf")}, r"must be a finite number"),
    ],
)
def test_a_wrong_replacement_is_refused(replace, message):
    with pytest.raises(JobError, match=message):
        rules.load("en-1990", replace)


def test_a_set_of_ones_own_is_based_on_a_built_in_one(tmp_path):
    path = tmp_path / "annex.yaml"
    path.write_text(
        "name: our-annex\nbase: en-1990\nedition: annex of 2030\n"
        "figures:\n  gamma_Q: {value: 1.6, clause: NA.1}\n",
        encoding="utf-8",
    )

    rule_set = rules.load(str(path))

    assert rule_set.name == "our-annex"
    assert rule_set.figure("gamma_Q") == 1.6
    assert rule_set.figure("gamma_G_sup") == 1.35


def test_a_relative_path_starts_beside_the_job_file(tmp_path):
    (tmp_path / "own.yaml").write_text("name: own\nbase: en-1990\n", encoding="utf-8")

    assert rules.load("own.yaml", folder=tmp_path).name == "own"


def test_a_set_of_ones_own_from_scratch(tmp_path):
    path = tmp_path / "plain.yaml"
    path.write_text(
        """
name: plain
actions:
  dead: {nature: permanent}
  live: {nature: imposed, group: live}
groups:
  live: {several: together}
expressions:
  only: {prefix: X, limit_state: strength, permanent: [1.25], always: {live: 1.75}}
""",
        encoding="utf-8",
    )

    (only,) = rules.combinations(rules.load(str(path)), CASES[:2])

    assert (only.name, dict(only.factors)) == ("X1", {"G": 1.25, "Q": 1.75})


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("name: x\nfigurs: {}\n", r"unknown key 'figurs'; the nearest known one is 'figures'"),
        ("name: x\nbase: en-1991\n", r"no built-in rule set; the nearest known one is 'en-1990'"),
        ("- 1\n", r"is no mapping"),
        ("a: [\n", r"not YAML"),
        ("figures: {}\n", r"has no 'name'"),
        (
            "name: x\nbase: en-1990\nexpressions: {strength: {leading: gamma_R}}\n",
            r"names the figure 'gamma_R', which the rule set does not have; the nearest",
        ),
        (
            "name: x\nbase: en-1990\nactions: {wind: {group: winds}}\n",
            r"names the group 'winds', .* nearest known one is 'wind'",
        ),
        (
            "name: x\nbase: en-1990\nfigures: {gamma_Q: {value: high}}\n",
            r"'figures.gamma_Q.value' is 'high'; it must be a number",
        ),
        ("name: x\nexpressions: {a: {prefix: U}}\n", r"'expressions.a' has no 'limit_state'"),
        (
            "name: x\nbase: en-1990\narrangements: {default: alternat}\n",
            r"names the set 'alternat'",
        ),
    ],
)
def test_a_faulty_set_is_refused_in_one_sentence(tmp_path, text, message):
    path = tmp_path / "faulty.yaml"
    path.write_text(text, encoding="utf-8")

    with pytest.raises(JobError, match=message) as caught:
        rules.load(str(path))
    assert "faulty.yaml" in str(caught.value)


def test_a_missing_file_is_one_sentence(tmp_path):
    with pytest.raises(JobError, match="cannot be read: No such file"):
        rules.load(str(tmp_path / "absent.yaml"))


def test_the_data_files_satisfy_the_published_schema_by_another_checker():
    from importlib import resources

    schema = rules.schema()
    for name in rules.names():
        text = resources.files("analysis_core.rules").joinpath(f"{name}.yaml").read_text("utf-8")
        data = yaml.safe_load(text)
        if "base" not in data:  # a set based on another may take entries out with null
            jsonschema.validate(data, schema)


def test_unknown_category_takes_the_first_of_its_nature_and_says_so():
    rule_set = rules.load("en-1990")

    found = rules.classify(rule_set, [Case("Q", "imposed", "workshop", "guid-1")])

    assert found.actions["Q"].name == "A"
    (finding,) = found.findings
    assert (finding.severity, finding.slug) == ("warning", "category-assumed")
    assert finding.elements == ("guid-1",)
    assert "'workshop'" in finding.message


def test_a_case_without_category_is_noted_only_where_it_matters():
    rule_set = rules.load("en-1990")

    found = rules.classify(
        rule_set, [Case("Q", "imposed"), Case("W", "wind"), Case("G", "permanent")]
    )

    assert [(f.severity, f.slug) for f in found.findings] == [("note", "category-assumed")]


@pytest.mark.parametrize("category", ["category C", "c", "Congregation"])
def test_categories_are_understood_as_people_write_them(category):
    found = rules.classify(rules.load("en-1990"), [Case("Q", "imposed", category)])

    assert found.actions["Q"].name == "C"
    assert not found.findings


def test_other_nature_is_combined_unreduced_and_reported():
    rule_set = rules.load("en-1990")
    cases = [Case("G", "permanent"), Case("Crane", "other"), Case("Q", "imposed", "B")]

    findings = rules.classify(rule_set, cases).findings
    strength = [c for c in rules.combinations(rule_set, cases) if c.limit_state == "strength"]

    assert [f.slug for f in findings] == ["nature-assumed"]
    assert all(c.factors["Crane"] == 1.5 for c in strength)


def test_combinations_are_named_apart_from_the_models_own():
    found = rules.combinations(rules.load("en-1990"), CASES[:2], taken=["U1"])

    assert [c.name for c in found if c.limit_state == "strength"] == ["U2", "U3"]


def test_no_combination_is_listed_twice():
    for name in rules.names():
        found = rules.combinations(rules.load(name), CASES)
        keys = [(c.limit_state, c.kind, tuple(sorted(c.factors.items()))) for c in found]
        assert len(keys) == len(set(keys))


def test_favourable_variable_action_is_absent():
    for combination in rules.combinations(rules.load("en-1990"), CASES):
        assert set(combination.favourable.values()) <= {0.0}
        assert "G" not in combination.favourable


def test_wind_cases_act_one_at_a_time():
    cases = [CASES[0], Case("W+", "wind"), Case("W-", "wind")]

    for combination in rules.combinations(rules.load("en-1990"), cases):
        assert not {"W+", "W-"} <= set(combination.factors)


def test_formula_reads_as_people_write_it():
    (first, *_) = rules.combinations(rules.load("en-1990"), CASES)

    assert rules.formula(first) == "1.35 G + 1.5 Q + 0.75 S"


def test_arrangements_of_the_rule_set_the_job_and_single_cases():
    rule_set = rules.load("asce-7-16")

    usual = rules.arrangements(rule_set, CASES)
    none = rules.arrangements(rule_set, CASES, chosen="none")
    only_snow = rules.arrangements(rule_set, CASES, one_by_one={"Q": False})

    assert usual.shares == {"Q": 0.0, "S": 0.5}  # ASCE 7-16 7.5.1: half stays elsewhere
    assert none.shares == {}
    assert only_snow.shares == {"S": 0.5}


def test_listed_arrangements_name_their_clause():
    found = rules.arrangements(rules.load("en-1990"), CASES, chosen="alternate-adjacent")

    assert "5.1.3" in found.clause
    assert [(p.cases, p.patterns) for p in found.listed] == [(("Q",), ("alternate", "adjacent"))]


def test_an_arrangement_that_is_not_listed_is_refused():
    with pytest.raises(JobError, match="must be one of none, every, alternate-adjacent"):
        rules.arrangements(rules.load("en-1990"), CASES, chosen="chequered")


@pytest.mark.parametrize("name", rules.names())
def test_description_shows_every_figure_with_its_clause(name):
    rule_set = rules.load(name)

    text = rules.describe(rule_set)

    for figure in rule_set.figures.values():
        assert figure.clause in text
        assert f"{figure.value:g}" in text
    for expression in rule_set.expressions:
        assert expression.clause in text
