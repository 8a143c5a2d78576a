"""The idealisation, taken over by whoever reads the analysis model: the same lines and results."""

import math
from dataclasses import replace
from pathlib import Path

import ifcopenshell
import numpy as np
import pytest
from lopsided_line import line_of, outcome_for
from posting_makers import BEAM, COLUMN_A, COLUMN_B, SCHEMAS, outcome_of, small_model, span_result
from scipy.integrate import quad

from analysis_core import pipeline
from analysis_core.ifc.analysis_model.bars import bars_of
from analysis_core.ifc.posting import writer
from analysis_core.job.reader import load
from analysis_core.model import DistributedForce, ImposedCurvature, Piece, Support
from analysis_core.settings import Analysis, Settings

# Of itself the program reads the building, and passes over what it has written beside it.
ANALYTICAL = Settings(analysis=Analysis(route="analytical"))
SAMPLES = Path(__file__).resolve().parents[2] / "sample_models"
PHYSICAL = sorted(SAMPLES.glob("quarry_lane_physical_*.ifc"))


def settings_for(path):
    job = "quarry_lane_us.yaml" if "inch" in path.name else "quarry_lane.yaml"
    return load(SAMPLES / job)


@pytest.mark.parametrize("path", PHYSICAL, ids=lambda p: p.stem)
def test_a_building_comes_back_with_the_same_results(path, tmp_path):
    target = tmp_path / path.name
    before = pipeline.run(path, settings_for(path))
    report = writer.post(path, target, before, analysis_model=True)
    after = pipeline.run(target, ANALYTICAL)

    assert report.findings == ()
    assert [f for f in after.findings if f.severity != "note"] == []
    assert len(after.lines) == len(before.lines) > 5
    combinations = {c.name: dict(c.factors) for c in after.model.combinations}
    assert combinations == {
        c.name: {k: v for k, v in c.factors.items() if v} for c in before.model.combinations
    }
    natures = {c.name: c.nature for c in after.model.cases}
    assert natures == {c.name: c.nature for c in before.model.cases}
    for result in before.lines:
        same_line(result, counterpart(result, after))
    writer.remove(target, target)
    assert target.read_bytes() == path.read_bytes()


def counterpart(result, outcome):
    (found,) = [r for r in outcome.lines if places(r.line) == places(result.line)]
    return found


def places(line):
    return sorted(tuple(round(c, 6) for c in joint.point) for joint in line.joints)


def same_line(a, b):
    """Supports, rigidities, releases and the solution of every case, whatever the numbering."""
    joints = [nearest(b.line, joint) for joint in a.line.joints]
    for joint, other in zip(a.line.joints, (b.line.joints[j] for j in joints), strict=True):
        held, found = joint.support or Support(), other.support or Support()
        assert (found.vertical, found.rotation) == pytest.approx((held.vertical, held.rotation))
    members = [
        next(n.id for n in b.line.members if {n.start, n.end} == {joints[m.start], joints[m.end]})
        for m in a.line.members
    ]
    for m, n in zip(a.line.members, (b.line.members[k] for k in members), strict=True):
        assert n.flexural_rigidity == pytest.approx(m.flexural_rigidity, rel=1e-12)
        assert (n.start_spring, n.end_spring) == (m.start_spring, m.end_spring)
    for number, case in enumerate(a.solution.cases):
        other = b.solution.cases.index(case)
        scale = max(1.0, np.abs(a.solution.reactions[number]).max())
        assert b.solution.reactions[other][joints] == pytest.approx(
            a.solution.reactions[number], abs=1e-9 * scale
        )
        assert b.solution.end_moments[other][members] == pytest.approx(
            a.solution.end_moments[number], abs=1e-9 * scale
        )


def nearest(line, joint):
    distances = [math.dist(joint.point, other.point) for other in line.joints]
    return int(np.argmin(distances))


@pytest.mark.parametrize("schema", SCHEMAS)
@pytest.mark.parametrize("axis", [(1.0, 0.0, 0.0), (0.0, 1.0, 0.0), (0.6, 0.8, 0.0)])
def test_every_kind_of_action_support_and_release_comes_back(tmp_path, schema, axis):
    from analysis_core.distribution import solve

    line = line_of(axis)
    path = tmp_path / "model.ifc"
    path.write_bytes(small_model(schema))
    report = writer.post(path, path, outcome_for(line), analysis_model=True)
    assert report.findings == ()
    found = pipeline.run(path, ANALYTICAL)
    (result,) = found.lines
    expected = solve(line, ("G", "Q", "Settling"))

    assert [f.slug for f in found.findings if f.severity == "error"] == []
    joints = [nearest(result.line, joint) for joint in line.joints]
    for number, case in enumerate(expected.cases):
        own = result.solution.cases.index(case)
        scale = np.abs(expected.reactions[number]).max()
        vertical = result.solution.reactions[own][joints][:, 1:]
        # A line keeps its direction: its start is the end nearer the first member's own start.
        assert vertical == pytest.approx(expected.reactions[number][:, 1:], abs=1e-8 * scale)
        assert result.solution.displacements[own][joints][:, 1] == pytest.approx(
            expected.displacements[number][:, 1], abs=1e-12
        )


def test_members_are_tied_to_the_elements_they_stand_for(tmp_path):
    path = tmp_path / "model.ifc"
    path.write_bytes(small_model())
    writer.post(path, path, outcome_for(line_of()), analysis_model=True)
    file = ifcopenshell.open(str(path))
    tied = {
        item.is_a() + " " + relation.RelatingProduct.GlobalId
        for relation in file.by_type("IfcRelAssignsToProduct")
        for item in relation.RelatedObjects
    }

    assert tied == {
        f"IfcStructuralCurveMember {BEAM}", f"IfcStructuralPointConnection {COLUMN_A}"
    }  # fmt: skip
    (model,) = file.by_type("IfcStructuralAnalysisModel")
    grouped = [o for r in model.IsGroupedBy for o in r.RelatedObjects]
    assert len([o for o in grouped if o.is_a("IfcStructuralCurveMember")]) == 4  # one in two steps
    assert {g.Name for g in model.LoadedBy} == {"U1", "S1"}


def test_what_cannot_be_said_exactly_is_said_to_be_so(tmp_path):
    line = line_of()
    bent = replace(line.members[0], pieces=(Piece(6.0, (4e7, 1e7), 1.0),))
    curved = DistributedForce("G", 0, 0.0, 6.0, (1e3, 2e3, -3e2))
    warm = ImposedCurvature("G", 0, 0.0, 6.0, 1e-4)
    line = replace(line, members=(bent, *line.members[1:]), actions=(*line.actions, curved, warm))
    path = tmp_path / "model.ifc"
    path.write_bytes(small_model())
    report = writer.post(path, path, outcome_for(line), analysis_model=True)

    assert {f.slug for f in report.findings} == {
        "action-approximated", "curvature-not-written", "rigidity-in-steps"
    }  # fmt: skip
    assert all(f.line == "X-1" for f in report.findings)


def test_a_tapering_member_keeps_its_flexibility():
    """Rigidity falling to an eighth, as the cube of the depth: its bars turn as much."""
    piece = Piece(5.0, (200.0, -100.0), 3.0)
    member = replace(line_of().members[0], pieces=(piece,))
    bars = bars_of(member)
    exact, _ = quad(lambda u: 5.0 / piece.flexural_at(u), 0.0, 1.0)

    assert len(bars) > 4
    assert sum(bar.length for bar in bars) == pytest.approx(5.0, rel=1e-15)
    # The midpoint rule within each bar: error of the order of (1 / bars / 16) squared.
    assert sum(bar.length / bar.flexural for bar in bars) == pytest.approx(exact, rel=1e-4)


def test_it_is_replaced_and_not_doubled_and_stays_where_it_is_not_asked_for_again(tmp_path):
    path = tmp_path / "model.ifc"
    path.write_bytes(small_model())
    original = path.read_bytes()
    beams = outcome_of(span_result(BEAM, supports=(COLUMN_A, COLUMN_B)))
    for wanted in (True, True, False):
        writer.post(path, path, beams, analysis_model=wanted)
        file = ifcopenshell.open(str(path))
        assert len(file.by_type("IfcStructuralAnalysisModel")) == 1
        assert len(file.by_type("IfcStructuralCurveMember")) == 1
        sets = [s for s in file.by_type("IfcPropertySet") if s.Name == "Spanledger_Effects"]
        assert len(sets) == 1
    writer.remove(path, path)
    assert path.read_bytes() == original


def test_a_model_that_has_an_analysis_model_gets_no_second_one(tmp_path):
    path = tmp_path / "model.ifc"
    path.write_bytes((SAMPLES / "quarry_lane_both_ifc4.ifc").read_bytes())
    outcome = pipeline.run(path, Settings())
    report = writer.post(path, path, outcome, analysis_model=True)
    file = ifcopenshell.open(str(path))

    assert "analysis-model-there" in {f.slug for f in report.findings}
    models = [m for m in file.by_type("IfcStructuralAnalysisModel") if not m.ObjectType]
    assert len(models) == 1


def test_the_results_of_a_written_model_can_be_posted_onto_it(tmp_path):
    """Read by its analysis model now; its members get the sets, and all of it comes out again."""
    path = tmp_path / "model.ifc"
    path.write_bytes(PHYSICAL[0].read_bytes())
    original = path.read_bytes()
    writer.post(path, path, pipeline.run(path, settings_for(PHYSICAL[0])), analysis_model=True)
    outcome = pipeline.run(path, ANALYTICAL)
    report = writer.post(path, path, outcome)

    assert report.groups > 0
    assert report.path == "append"
    writer.remove(path, path)
    assert path.read_bytes() == original
