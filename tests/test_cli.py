"""The command line as a newcomer and a script meet it."""

import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

from analysis_core.cli import main

ROOT = Path(__file__).resolve().parents[1]
SAMPLES = ROOT / "sample_models"
MODEL = SAMPLES / "quarry_lane_physical_ifc4.ifc"
JOB = SAMPLES / "quarry_lane.yaml"


@pytest.fixture
def run(capsys):
    def call(*arguments):
        status = main([str(a) for a in arguments])
        out, err = capsys.readouterr()
        return status, out, err

    return call


def test_survey_lists_lines_bearings_with_reasons_and_findings(run):
    status, out, err = run("survey", MODEL, "--job", JOB)

    assert (status, err) == (0, "")
    assert "bears on column 'C-A1'" in out
    assert "R 300x500, Concrete C30/37" in out
    assert "  B1-AB [3qvn7zaWfMcPViGGe89CIw]" in out  # its name, as the drawing calls it
    assert "assumed-continuous" in out
    assert "licensed engineer" in out


def test_balance_prints_effects_reactions_and_verification(run):
    status, out, _ = run("balance", MODEL, "--job", JOB)

    assert status == 0
    for words in ("sagging", "hogging", "deflection", "Reactions", "Verification of 11 lines"):
        assert words in out


def test_json_goes_to_standard_output_alone(run):
    status, out, _ = run("balance", MODEL, "--job", JOB, "--json", "-", "--stations", 5)

    data = json.loads(out)
    assert status == 0
    assert (data["format"], data["version"]) == ("spanledger-results", 1)
    assert data["model"]["schema"] == "IFC4"
    first = next(iter(data["lines"][0]["results"].values()))
    assert len(first["members"][0]["stations"]["x"]) == 5


def test_json_goes_to_a_file_beside_the_table(run, tmp_path):
    _, out, _ = run("survey", MODEL, "--json", tmp_path / "s.json")

    data = json.loads((tmp_path / "s.json").read_text(encoding="utf-8"))
    assert {line["status"] for line in data["lines"]} == {"not analysed"}
    assert "pinned" in out


def test_only_the_chosen_line_is_reported(run):
    _, everything, _ = run("balance", MODEL, "--json", "-")
    marks = [line["mark"] for line in json.loads(everything)["lines"]]
    _, out, _ = run("balance", MODEL, "--json", "-", "--line", marks[1])

    (line,) = json.loads(out)["lines"]
    assert line["mark"] == marks[1]


def test_rules_are_listed_and_printed(run):
    _, listed, _ = run("rules")
    assert "en-1990" in listed
    assert "asce-7-22" in listed
    _, printed, _ = run("rules", "en-1990")
    assert "gamma_Q" in printed


def test_rules_are_data_too_with_the_figures_of_the_project(run, tmp_path):
    job = tmp_path / "job.yaml"
    job.write_text("rules: {set: en-1990, replace: {gamma_Q: 1.6}}", encoding="utf-8")

    _, listed, _ = run("rules", "--json", "-")
    _, plain, _ = run("rules", "en-1990", "--json", "-")
    _, ours, _ = run("rules", "--job", job, "--json", "-")

    assert "asce-7-22" in {s["name"] for s in json.loads(listed)["sets"]}
    assert json.loads(plain)["set"]["figures"]["gamma_Q"]["value"] == 1.5  # EN 1990, A1.2(B)
    assert json.loads(ours)["set"]["figures"]["gamma_Q"]["value"] == 1.6


@pytest.mark.parametrize(
    ("command", "option", "target"),
    [
        ("sheet", "-o", "model"),
        ("post", "-o", "model"),
        ("post", "-o", "link"),
        ("balance", "--json", "model"),
        ("balance", "--reactions", "job"),
        ("survey", "--job-out", "job"),
    ],
)
def test_no_output_goes_over_the_model_or_the_job_file(run, tmp_path, command, option, target):
    files = {"model": tmp_path / "a.ifc", "job": tmp_path / "j.yaml", "link": tmp_path / "l.ifc"}
    files["model"].write_bytes(MODEL.read_bytes())
    files["job"].write_bytes(JOB.read_bytes())
    files["link"].symlink_to(files["model"])

    status, out, err = run(
        command, files["model"], "--job", files["job"], option, files[target],
        *(["-o", tmp_path / "s.html"] if command == "sheet" and option != "-o" else []),
    )  # fmt: skip

    assert (status, out) == (2, "")
    assert "would be overwritten; name another file" in err
    assert ("--in-place" in err) == (command == "post")
    assert files["model"].read_bytes() == MODEL.read_bytes()
    assert files["job"].read_bytes() == JOB.read_bytes()


def test_two_outputs_cannot_share_a_file(run, tmp_path):
    both = tmp_path / "out.html"

    status, _, err = run("sheet", MODEL, "-o", both, "--json", tmp_path / "x" / ".." / "out.html")

    assert status == 2
    assert "name the same file" in err
    assert not both.exists()


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        (["survey", "absent.ifc"], "absent.ifc"),
        (["survey", str(MODEL), "--job", "absent.yaml"], "absent.yaml"),
        (["balance", str(MODEL), "--line", "X-99"], "no line 'X-99'; the nearest is"),
        (["rules", "en-1991"], "en-1990"),
        (["balance", str(MODEL), "--json", "/nowhere/at/all.json"], "cannot be written"),
        (["survey", str(ROOT)], "is a folder"),
        (["survey", str(JOB)], "quarry_lane.yaml"),
    ],
)
def test_what_cannot_be_done_is_one_sentence_and_status_2(run, arguments, message):
    status, out, err = run(*arguments)

    assert (status, out) == (2, "")
    assert message in err
    assert err.count("\n") == 1
    assert "Traceback" not in err


@pytest.mark.parametrize(
    "arguments", [["balance"], ["survey", "a.ifc", "--what"], ["post", "a.ifc"], []]
)
def test_a_bad_option_is_status_2(arguments, capsys):
    with pytest.raises(SystemExit, match="2"):
        main(arguments)
    assert "spanledger" in capsys.readouterr().err


def test_a_job_with_a_mistake_names_the_place(run, tmp_path):
    job = tmp_path / "job.yaml"
    job.write_text("actions: [{case: G, on: {}, uniform: 12}]", encoding="utf-8")

    status, _, err = run("balance", MODEL, "--job", job)

    assert status == 2
    assert "'actions[0].uniform': 12 has no unit" in err


def test_the_module_runs_and_a_closed_pipe_is_no_error():
    command = [sys.executable, "-m", "analysis_core", "survey", str(MODEL)]
    with subprocess.Popen(
        command, stdout=subprocess.PIPE, stderr=subprocess.PIPE, cwd=ROOT, env={**os.environ}
    ) as process:
        assert process.stdout is not None
        process.stdout.readline()
        process.stdout.close()
        assert process.stderr is not None
        assert process.stderr.read() == b""


@pytest.mark.parametrize("asked", [["survey"], ["balance", "--json", "-"]])
def test_a_terminal_without_our_characters_gets_escapes_instead(asked, tmp_path):
    """A list with kN·m², and JSON that must stay JSON, where the encoding is ASCII."""
    model = tmp_path / "umlaut.ifc"
    text = MODEL.read_text(encoding="utf-8").replace("'C-A1'", r"'S\X2\00E4\X0\ule'")
    model.write_text(text, encoding="utf-8")
    command = [sys.executable, "-m", "analysis_core", asked[0], str(model), *asked[1:]]
    environment = {**os.environ, "PYTHONIOENCODING": "ascii", "PYTHONUTF8": "0"}
    done = subprocess.run(command, capture_output=True, cwd=ROOT, env=environment, check=False)

    assert (done.returncode, done.stderr) == (0, b"")
    if "--json" in asked:
        assert "'Säule'" in str(json.loads(done.stdout))
    else:
        assert b"kN\\xb7m\\xb2" in done.stdout


@pytest.mark.skipif(os.name != "posix", reason="streams are closed by a POSIX shell")
def test_closed_streams_are_no_fault_of_the_program():
    command = f"{sys.executable} -m analysis_core survey {MODEL} >&- 2>&-"
    assert subprocess.run(command, shell=True, cwd=ROOT, check=False).returncode == 0


def test_a_model_cannot_drive_the_terminal(run, tmp_path):
    text = MODEL.read_text(encoding="utf-8").replace("'C-A1'", r"'C\X\1B\X\07[2Jevil'")
    hostile = tmp_path / "hostile.ifc"
    hostile.write_text(text, encoding="utf-8")

    _, out, _ = run("survey", hostile)

    assert "evil" in out
    assert "\x1b" not in out
