"""``post`` from the command line: in place, into a copy, with an analysis model, and out again."""

from pathlib import Path

import ifcopenshell
import pytest

from analysis_core.cli import main

SAMPLES = Path(__file__).resolve().parents[2] / "sample_models"
MODEL = SAMPLES / "quarry_lane_physical_ifc4.ifc"
JOB = str(SAMPLES / "quarry_lane.yaml")


@pytest.fixture
def model(tmp_path):
    path = tmp_path / "model.ifc"
    path.write_bytes(MODEL.read_bytes())
    return path


def test_results_go_in_and_come_out_again(model, capsys):
    assert main(["post", str(model), "--job", JOB, "--in-place"]) == 0
    assert "property sets new" in capsys.readouterr().err
    assert b"Spanledger_Effects" in model.read_bytes()
    assert main(["post", str(model), "--remove", "--in-place"]) == 0

    assert "all other bytes are as they were" in capsys.readouterr().err
    assert model.read_bytes() == MODEL.read_bytes()


def test_results_are_taken_out_into_a_copy(model, tmp_path):
    main(["post", str(model), "--job", JOB, "--in-place"])
    posted, copy = model.read_bytes(), tmp_path / "copy.ifc"
    assert main(["post", str(model), "--remove", "-o", str(copy)]) == 0

    assert copy.read_bytes() == MODEL.read_bytes()
    assert model.read_bytes() == posted


def test_the_idealisation_is_written_on_request(model):
    arguments = ["post", str(model), "--job", JOB, "--in-place"]
    assert main([*arguments, "--analysis-model"]) == 0
    file = ifcopenshell.open(str(model))

    assert len(file.by_type("IfcStructuralAnalysisModel")) == 1
    assert file.by_type("IfcStructuralCurveMember")


def test_an_analysis_model_gets_section_forces_at_stations(tmp_path):
    target = tmp_path / "out.ifc"
    model = SAMPLES / "quarry_lane_analytical_ifc4.ifc"
    assert main(["post", str(model), "-o", str(target)]) == 0
    file = ifcopenshell.open(str(target))
    reactions = file.by_type("IfcStructuralCurveReaction")

    assert {r.PredefinedType for r in reactions} == {"POLYGONAL"}
    assert min(len(r.AppliedLoad.Values) for r in reactions) == 11


def test_taking_out_and_putting_in_do_not_go_together(model, capsys):
    with pytest.raises(SystemExit) as caught:
        main(["post", str(model), "--remove", "--analysis-model", "--in-place"])

    assert caught.value.code == 2
    assert "not allowed with" in capsys.readouterr().err


def test_a_target_that_cannot_be_written_is_one_sentence(model, tmp_path, capsys):
    missing = tmp_path / "gone" / "out.ifc"
    assert main(["post", str(model), "--remove", "-o", str(missing)]) == 2
    message = capsys.readouterr().err.strip()

    assert "does not exist" in message
    assert "\n" not in message
    assert "Traceback" not in message
