"""Two revisions with known changes: exactly those are found, and nothing else is solved again."""

import json
import re
from pathlib import Path

import ifcopenshell
import ifcopenshell.guid
import numpy as np
import pytest

from analysis_core import pipeline
from analysis_core.cli import main
from analysis_core.job.reader import load

SAMPLES = Path(__file__).resolve().parents[1] / "sample_models"
PHYSICAL = SAMPLES / "quarry_lane_physical_ifc4.ifc"
ANALYTICAL = SAMPLES / "quarry_lane_analytical_ifc4.ifc"
JOB = load(SAMPLES / "quarry_lane.yaml")


def revised(tmp_path, change, source=PHYSICAL):
    model = ifcopenshell.open(source)
    change(model)
    path = tmp_path / "after.ifc"
    model.write(str(path))
    return path


def named(model, ifc_class, name):
    return next(e for e in model.by_type(ifc_class) if e.Name == name)


def shifted(model, element, dx=0.0, dy=0.0, dz=0.0):
    """Give an element a place of its own, moved by millimetres."""
    place = element.ObjectPlacement.RelativePlacement
    x, y, z = place.Location.Coordinates
    point = model.create_entity("IfcCartesianPoint", (x + dx, y + dy, z + dz))
    axes = model.create_entity("IfcAxis2Placement3D", point, place.Axis, place.RefDirection)
    element.ObjectPlacement = model.create_entity("IfcLocalPlacement", None, axes)


def removed(model, element):
    for relation in model.get_inverse(element):
        if relation.is_a("IfcRelationship"):
            for attribute in ("RelatedObjects", "RelatedElements"):
                others = getattr(relation, attribute, None)
                if others and element in others:
                    setattr(relation, attribute, [o for o in others if o != element])
    model.remove(element)


def deeper(model):
    model.by_type("IfcRectangleProfileDef")[0].YDim = 600.0


def stiffer(model):
    for value in model.by_type("IfcPropertySingleValue"):
        if value.Name == "YoungModulus" and value.NominalValue.wrappedValue == 210000.0:
            value.NominalValue.wrappedValue = 200000.0


def moved_sideways(model):
    for name in ("R-D", "C-D1-1", "C-D2-1", "C-D3-1"):
        shifted(model, named(model, "IfcElement", name), dx=100.0)


def new_global_ids(model):
    for beam in model.by_type("IfcBeam"):
        beam.GlobalId = ifcopenshell.guid.new()


def one_gone(model):
    removed(model, named(model, "IfcBeam", "R-A"))


def one_more(model):
    source = named(model, "IfcBeam", "R-A")
    copy = model.create_entity(
        "IfcBeam", ifcopenshell.guid.new(), source.OwnerHistory, "R-A2", None, source.ObjectType,
        source.ObjectPlacement, source.Representation,
    )  # fmt: skip
    shifted(model, copy, dx=3000.0)
    for relation in model.get_inverse(source):
        if relation.is_a("IfcRelAssociatesMaterial"):
            relation.RelatedObjects = [*relation.RelatedObjects, copy]
        if relation.is_a("IfcRelContainedInSpatialStructure"):
            relation.RelatedElements = [*relation.RelatedElements, copy]


def middle_span_gone(model):
    removed(model, named(model, "IfcBeam", "B1-BC"))


def column_gone(model):
    removed(model, named(model, "IfcColumn", "C-B2-1"))


def joist_moved(model):
    shifted(model, named(model, "IfcBeam", "J-1"), dx=400.0)


def heavier(model):
    for value in model.by_type("IfcPropertySingleValue"):
        if value.Name == "MassDensity" and value.NominalValue.wrappedValue == 2500.0:
            value.NominalValue.wrappedValue = 2600.0


CHANGES = {
    # change: what is found, by the names of the elements of the lines concerned
    deeper: {"B1": "section", "B2": "section", "B3": "section"},
    stiffer: {"J-": "^changed: material of J-. changed", "R-": "E 210 GPa.*E 200 GPa"},
    moved_sideways: {"R-D": "moved by 0.100 m"},
    new_global_ids: {},
    one_gone: {"R-A": "gone"},
    one_more: {"R-A2": "new"},
    # Two joists lose the beam they bear on, and with them what row 2 carries is not known.
    middle_span_gone: {
        "B1": "split",
        "J-3": "not analysed now",
        "J-4": "not analysed now",
        "B2": "not analysed now",
    },
    column_gone: {"R-B": "geometry"},
    joist_moved: {
        "J-1": "moved by 0.400 m",
        "B1": "FF-04 bears on it elsewhere",
        "B2": "FF-04 bears on it elsewhere",
    },
    heavier: {"B1": "actions of Self weight", "B2": "actions", "B3": "actions"},
}


@pytest.mark.parametrize("change", CHANGES, ids=lambda change: change.__name__)
def test_exactly_the_known_changes_are_found(change, tmp_path):
    after = revised(tmp_path, change)

    found = pipeline.reconcile(PHYSICAL, after, JOB)

    names = {**found.before.model.names, **found.after.model.names}
    before, after = (
        {line.mark: [names[e] for e in line.elements] for line in outcome.model.lines}
        for outcome in (found.before, found.after)
    )
    expected = CHANGES[change]
    for each in found.changes:
        elements = [n for mark in each.before for n in before[mark]]
        elements += [n for mark in each.after for n in after[mark]]
        wanted = [text for start, text in expected.items() if elements[0].startswith(start)]
        if each.state == "unchanged":
            assert not wanted, elements
        elif change is not heavier or not elements[0].startswith(("J-", "R-")):
            text = f"{each.state}: {'; '.join(each.reasons)}"
            assert wanted, f"{elements} {text}"
            assert re.search(wanted[0], text), text


@pytest.mark.parametrize("change", [deeper, joist_moved, column_gone, new_global_ids])
def test_what_is_not_solved_again_equals_a_full_run_to_the_last_digit(change, tmp_path):
    after = revised(tmp_path, change)
    found = pipeline.reconcile(PHYSICAL, after, JOB)
    full = pipeline.run(after, JOB)

    assert len(found.solved_again) < len(full.lines)
    for one, other in zip(found.after.lines, full.lines, strict=True):
        assert one.line.mark == other.line.mark
        assert np.array_equal(one.solution.end_moments, other.solution.end_moments)
        assert np.array_equal(one.solution.reactions, other.solution.reactions)
        assert one.envelopes["strength"].reactions == other.envelopes["strength"].reactions
        assert one.fingerprint == other.fingerprint


def test_a_changed_action_is_found_in_an_analysis_model(tmp_path):
    def heavier_offices(model):
        action = named(model, "IfcStructuralLinearAction", "Offices on B3-AB")
        action.AppliedLoad.LinearForceZ = 1.5 * action.AppliedLoad.LinearForceZ

    found = pipeline.reconcile(ANALYTICAL, revised(tmp_path, heavier_offices, ANALYTICAL))

    changed = [c for c in found.changes if c.state != "unchanged"]
    assert len(changed) == 1
    assert changed[0].reasons[0].startswith("actions of Offices changed")
    assert changed[0].effects_after.hogging < changed[0].effects_before.hogging
    assert found.solved_again == changed[0].after


def test_the_command_tells_writes_and_posts(tmp_path, capsys):
    after = revised(tmp_path, deeper)
    arguments = ["reconcile", str(PHYSICAL), str(after), "--job", str(SAMPLES / "quarry_lane.yaml")]
    arguments += ["--csv", str(tmp_path / "c.csv"), "--json", str(tmp_path / "c.json")]

    status = main([*arguments, "-o", str(tmp_path / "posted.ifc")])

    out, _ = capsys.readouterr()
    assert status == 0
    assert "section of B2-AB changed from R 300x500 500 mm deep" in out
    data = json.loads((tmp_path / "c.json").read_text(encoding="utf-8"))
    assert data["format"] == "spanledger-changes"
    assert sum(c["state"] == "changed" for c in data["changes"]) == 3
    rows = (tmp_path / "c.csv").read_text(encoding="utf-8").splitlines()
    assert len(rows) == 1 + len(data["changes"])
    assert ifcopenshell.open(tmp_path / "posted.ifc").by_type("IfcPropertySet")


def test_the_command_keeps_to_the_chosen_lines(tmp_path, capsys):
    after, posted = revised(tmp_path, deeper), tmp_path / "posted.ifc"
    arguments = ["reconcile", str(PHYSICAL), str(after), "--json", "-", "-o", str(posted)]
    assert main(arguments[:5]) == 0
    everything = json.loads(capsys.readouterr().out)["changes"]
    mark = next(c["after"][0] for c in everything if c["state"] == "changed")

    assert main([*arguments, "--line", mark]) == 0

    (change,) = json.loads(capsys.readouterr().out)["changes"]
    assert change["after"] == [mark]
    labels = {
        p.NominalValue.wrappedValue
        for p in ifcopenshell.open(posted).by_type("IfcPropertySingleValue")
        if p.Name == "LineMark"
    }
    assert labels == {mark}
    assert main([*arguments[:3], "--line", "X-99"]) == 2
    assert "has a line 'X-99'; the nearest is" in capsys.readouterr().err
