"""A starting job file, loaded again, settles exactly what was assumed."""

from pathlib import Path

import numpy as np
import pytest

from analysis_core import pipeline
from analysis_core.cli import main
from analysis_core.job.reader import load

ROOT = Path(__file__).resolve().parents[1]
SAMPLES = ROOT / "sample_models"
PUBLIC = ROOT.parent / "shared" / "ifc" / "physical"


@pytest.mark.parametrize(
    "model",
    [
        SAMPLES / "quarry_lane_physical_ifc4.ifc",
        SAMPLES / "quarry_lane_physical_ifc4_inch.ifc",
        SAMPLES / "quarry_lane_analytical_ifc4.ifc",
        PUBLIC / "P02_steel_frame_mm.ifc",
        PUBLIC / "P03_office_mm.ifc",
    ],
    ids=lambda path: path.stem,
)
def test_loading_what_was_written_changes_no_result(model, tmp_path, capsys):
    if not model.exists():
        pytest.skip("public files are not here")
    job = tmp_path / "job.yaml"
    main(["survey", str(model), "--job-out", str(job)])
    text = job.read_text(encoding="utf-8")

    plain, settled = pipeline.run(model), pipeline.run(model, load(job))

    assert "bears on" in text or "analytical" in model.stem or model.parent == PUBLIC
    for one, other in zip(plain.lines, settled.lines, strict=True):
        assert (one.line.mark, one.status) == (other.line.mark, other.status)
        if one.solution is not None:
            assert one.solution.cases == other.solution.cases
            scale = np.abs(one.solution.end_moments).max(initial=1.0)
            assert np.allclose(
                one.solution.end_moments, other.solution.end_moments, rtol=0.0, atol=1e-9 * scale
            )
