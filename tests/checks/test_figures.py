"""The figures of the checks: printed with clause and mark, replaced by the project."""

import json

import pytest

from analysis_core.checking.members import FIGURES, TITLES
from analysis_core.cli import main


@pytest.mark.parametrize("code", sorted(FIGURES))
def test_every_figure_is_printed_with_its_clause_and_that_it_is_unconfirmed(code, capsys):
    assert main(["rules", code]) == 0

    text = capsys.readouterr().out
    assert TITLES[code] in text
    for name, figure in FIGURES[code].items():
        row = next(line for line in text.splitlines() if line.startswith(f"{name} "))
        assert figure.clause in row
        assert row.rstrip().endswith("†")  # nothing was compared with the standards yet
        assert ("national" in row) is figure.national
    assert "not compared with them" in text.replace("\n", " ")


def test_the_codes_are_listed_with_the_rule_sets(capsys):
    assert main(["rules"]) == 0
    listed = capsys.readouterr().out
    assert all(code in listed for code in FIGURES)


def test_the_values_of_the_project_stand_beside_those_of_the_code(tmp_path, capsys):
    job = tmp_path / "job.yaml"
    job.write_text("checks: {replace: {gamma_M0: 1.1}}\n", encoding="utf-8")

    assert main(["rules", "en-1993-1-1", "--job", str(job)]) == 0
    assert "1 (here 1.1)" in capsys.readouterr().out
    assert main(["rules", "en-1993-1-1", "--job", str(job), "--json", "-"]) == 0
    figures = json.loads(capsys.readouterr().out)["checks"]["figures"]
    assert (figures["gamma_M0"]["value"], figures["gamma_M0"]["of_code"]) == (1.1, 1.0)
    assert figures["gamma_M1"]["value"] == 1.0
