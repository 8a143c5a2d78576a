"""Nothing but our own is touched: entity by entity and byte by byte, on every model at hand."""

import hashlib
from pathlib import Path

import pytest
from posting_makers import outcome_of, span_result

from analysis_core.errors import IfcReadError
from analysis_core.ifc.posting import writer
from analysis_core.ifc.source import open_model

ROOT = Path(__file__).resolve().parents[2]
SHARED = ROOT.parent / "shared" / "ifc"
MODELS = sorted([*SHARED.rglob("*.ifc"), *SHARED.rglob("*.ifczip")]) + sorted(
    (ROOT / "sample_models").glob("*.ifc")
)


def opened(path):
    try:
        return open_model(path)
    except IfcReadError as error:
        pytest.skip(f"not readable: {error}")


def any_elements(file):
    """Some elements that results could belong to: beams first, then whatever is an object."""
    found = []
    for kind in ("IfcBeam", "IfcStructuralCurveMember", "IfcMember", "IfcColumn", "IfcObject"):
        found += [e.GlobalId for e in file.by_type(kind)[:20]]
    return list(dict.fromkeys(found))[:40]


def outcome_for(file):
    elements = any_elements(file)
    lines = [
        span_result(e, mark=f"B-{i}", load=1e3 * (i + 1), supports=(elements[-1], None))
        for i, e in enumerate(elements)
    ]
    return outcome_of(*lines)


def entities(file):
    return {entity.id(): entity.to_string() for entity in file}


def digest(path):
    return hashlib.sha256(path.read_bytes()).hexdigest()


@pytest.mark.parametrize("path", MODELS, ids=lambda p: p.name)
def test_every_entity_keeps_its_number_and_its_values(path, tmp_path):
    before = opened(path)
    outcome = outcome_for(before.file)
    if not outcome.lines:
        pytest.skip("no objects in it")
    target = tmp_path / path.name
    report = writer.post(path, target, outcome)
    after = open_model(target)

    old, new = entities(before.file), entities(after.file)
    assert old.items() <= new.items()
    added = [after.file.by_id(i) for i in new.keys() - old.keys()]
    kinds = {e.is_a() for e in added}
    assert kinds <= {
        "IfcPropertySet", "IfcRelDefinesByProperties", "IfcPropertySingleValue",
        "IfcPropertyBoundedValue", "IfcPropertyTableValue", "IfcSIUnit", "IfcDerivedUnit",
        "IfcDerivedUnitElement", "IfcOwnerHistory", "IfcPerson", "IfcOrganization",
        "IfcPersonAndOrganization", "IfcApplication", "IfcStructuralResultGroup",
        "IfcStructuralPointReaction", "IfcStructuralCurveReaction", "IfcStructuralLoadSingleForce",
        "IfcStructuralLoadConfiguration", "IfcRelConnectsStructuralActivity",
        "IfcRelAssignsToGroup", "IfcStructuralAnalysisModel", "IfcRelAggregates",
    }  # fmt: skip
    sets = [e for e in added if e.is_a("IfcPropertySet")]
    assert len(sets) == report.written > 0
    assert {s.Name for s in sets} == {
        f"Spanledger_{n}" for n in ("Effects", "Diagrams", "Record", "Reactions")
    }


@pytest.mark.parametrize("path", MODELS, ids=lambda p: p.name)
def test_taking_the_results_out_gives_the_original_bytes(path, tmp_path):
    outcome = outcome_for(opened(path).file)
    target, back = tmp_path / path.name, tmp_path / f"back{path.suffix}"
    writer.post(path, target, outcome)
    report = writer.remove(target, back)

    if path.suffix == ".ifczip":  # packed anew: the model inside is the same
        assert open_model(back).file.to_string() == open_model(path).file.to_string()
        return
    assert digest(back) == digest(path)
    assert report.removed == 0 or digest(target) != digest(path)


@pytest.mark.parametrize("path", MODELS, ids=lambda p: p.name)
def test_the_original_bytes_stand_around_what_was_added(path, tmp_path):
    outcome = outcome_for(opened(path).file)
    if path.suffix == ".ifczip" or not outcome.lines:
        pytest.skip("no plain bytes to compare")
    target = tmp_path / path.name
    assert writer.post(path, target, outcome).path == "append"
    original, posted = path.read_bytes(), target.read_bytes()
    end = original.rindex(b"ENDSEC")

    assert posted.startswith(original[:end])
    assert posted.endswith(original[end:])
