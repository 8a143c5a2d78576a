"""Pairs of revisions with known changes: what is told is exactly that, and every figure is that
of a full run."""

import math

import ifcopenshell
import ifcopenshell.guid
import ifcopenshell.util.unit
import numpy as np
import pytest
from test_reconcile import (
    ANALYTICAL,
    JOB,
    PHYSICAL,
    SAMPLES,
    named,
    one_gone,
    removed,
    revised,
    shifted,
)

from analysis_core import pipeline
from analysis_core.job.reader import load
from analysis_core.report.changes import changes_document, changes_text
from analysis_core.revision.motion import STILL, Motion, common_motion
from analysis_core.settings import Settings
from analysis_core.units import display_units

ANALYSIS = load(SAMPLES / "quarry_lane_analysis.yaml")
UNITS = display_units("metric", {})


def checked(before, after, job=JOB):
    """Compare, and see that the result equals a full run in every figure."""
    found = pipeline.reconcile(before, after, job)
    full = {r.line.elements: r for r in pipeline.run(after, job).lines}
    for result in found.after.lines:
        other = full[result.line.elements]
        assert result.status == other.status
        if result.solution is None:
            continue
        for name in ("end_moments", "reactions", "rotations", "displacements"):
            mine, theirs = getattr(result.solution, name), getattr(other.solution, name)
            assert np.array_equal(mine, theirs), (result.line.mark, name)
        for state, envelope in result.envelopes.items():
            for one, two in zip(envelope.members, other.envelopes[state].members, strict=True):
                assert (one.sagging.value, one.hogging.value) == (
                    two.sagging.value, two.hogging.value
                )  # fmt: skip
    return found


def told(found):
    """States and reasons by the names of the elements of each line that is not unchanged."""
    names = {**found.before.model.names, **found.after.model.names}
    lines = [{r.line.mark: r.line.elements for r in o.lines} for o in (found.before, found.after)]
    return {
        names[(lines[1].get((*c.after, "")[0]) or lines[0][(*c.before, "")[0]])[0]]: (
            c.state, *c.reasons
        )
        for c in found.changes
        if c.state != "unchanged"
    }  # fmt: skip


# -- changes that touch no result ------------------------------------------------------------


def nothing(model):
    pass


def in_metres(model):
    return ifcopenshell.util.unit.convert_file_length_units(model, "METRE")


def in_inches(model):
    return ifcopenshell.util.unit.convert_file_length_units(model, "INCH")


def every_global_id(model):
    for entity in model.by_type("IfcRoot"):
        entity.GlobalId = ifcopenshell.guid.new()


def site_turned(model, degrees=30.0, place=(5000.0, 12000.0, 3000.0)):
    site = model.by_type("IfcSite")[0]
    angle = math.radians(degrees)
    axes = model.create_entity(
        "IfcAxis2Placement3D", model.create_entity("IfcCartesianPoint", place),
        model.create_entity("IfcDirection", (0.0, 0.0, 1.0)),
        model.create_entity("IfcDirection", (math.cos(angle), math.sin(angle), 0.0)),
    )  # fmt: skip
    if site.ObjectPlacement is None:
        site.ObjectPlacement = model.create_entity("IfcLocalPlacement", None, axes)
    site.ObjectPlacement.RelativePlacement = axes
    for placement in model.by_type("IfcLocalPlacement"):
        if placement.PlacementRelTo is None and placement != site.ObjectPlacement:
            placement.PlacementRelTo = site.ObjectPlacement


def site_turned_and_some_new_global_ids(model):
    site_turned(model)
    for beam in model.by_type("IfcBeam")[:5]:
        beam.GlobalId = ifcopenshell.guid.new()


def storeys_renamed(model):
    for storey in model.by_type("IfcBuildingStorey"):
        storey.Name = f"Level {storey.Name}"


HARMLESS = [nothing, in_metres, in_inches, every_global_id, site_turned,
            site_turned_and_some_new_global_ids]  # fmt: skip


def after_of(tmp_path, change, source=PHYSICAL):
    model = ifcopenshell.open(source)
    path = tmp_path / "after.ifc"
    (change(model) or model).write(str(path))
    return path


@pytest.mark.parametrize("change", HARMLESS)
def test_what_touches_no_result_is_no_change(change, tmp_path):
    found = checked(PHYSICAL, after_of(tmp_path, change))

    assert told(found) == {}


@pytest.mark.parametrize("change", [nothing, in_metres, every_global_id])
def test_what_touches_no_result_of_an_analysis_model_is_no_change(change, tmp_path):
    assert told(checked(ANALYTICAL, after_of(tmp_path, change, ANALYTICAL), ANALYSIS)) == {}


@pytest.mark.parametrize("change", [nothing, in_metres, in_inches, site_turned])
def test_results_in_the_file_are_not_stale_for_what_touches_none(change, tmp_path):
    posted = tmp_path / "posted.ifc"
    pipeline.post(pipeline.run(PHYSICAL, JOB), PHYSICAL, posted)
    found = pipeline.survey(after_of(tmp_path, change, posted), JOB)

    states = pipeline.posted_states(found, JOB)
    assert {state.state for state in states.values()} == {"current"}


def test_a_turned_and_shifted_site_is_told_once(tmp_path):
    found = pipeline.reconcile(PHYSICAL, after_of(tmp_path, site_turned), JOB)

    assert found.motion.turn == pytest.approx(math.radians(30.0), abs=1e-9)
    assert found.motion.shift == pytest.approx((5.0, 12.0, 3.0), abs=1e-6)
    text = changes_text(found, UNITS)
    assert "The whole model was turned by 30.0000° about the origin" in text
    assert "shifted by (5.000, 12.000, 3.000) m" in text
    assert changes_document(found)["motion"]["shift"] == list(found.motion.shift)


def test_what_moved_in_a_moved_site_is_told_by_how_much(tmp_path):
    def change(model):
        shifted(model, named(model, "IfcBeam", "J-1"), dx=400.0)
        site_turned(model)

    assert told(checked(PHYSICAL, after_of(tmp_path, change))) == {
        "J-1": ("changed", "moved by 0.400 m"),
        "B1-AB": ("changed", "FF-04 bears on it elsewhere"),
        "B2-AB": ("changed", "FF-04 bears on it elsewhere"),
    }


def test_renamed_storeys_are_told_and_change_nothing(tmp_path):
    found = checked(PHYSICAL, after_of(tmp_path, storeys_renamed), Settings())

    assert told(found) == {}
    assert found.storeys == {"First floor": "Level First floor", "Roof": "Level Roof"}
    assert "Storey 'Roof' is called 'Level Roof' now." in changes_text(found, UNITS)


# -- changes of the structure ----------------------------------------------------------------


def swept(model, name):
    shape = named(model, "IfcBeam", name).Representation
    (body,) = [r for r in shape.Representations if r.RepresentationIdentifier == "Body"]
    return body.Items[0]


def resized(model, name, length):
    """Give a beam a body of its own, of another length."""
    beam, solid = named(model, "IfcBeam", name), swept(model, name)
    context = next(
        r.ContextOfItems for r in beam.Representation.Representations
        if r.RepresentationIdentifier == "Body"
    )  # fmt: skip
    own = model.create_entity(
        "IfcExtrudedAreaSolid", solid.SweptArea, solid.Position, solid.ExtrudedDirection, length
    )
    body = model.create_entity("IfcShapeRepresentation", context, "Body", "SweptSolid", [own])
    beam.Representation = model.create_entity("IfcProductDefinitionShape", None, None, [body])


def one_beam_for_two(model):
    length = swept(model, "B1-AB").Depth + swept(model, "B1-BC").Depth
    resized(model, "B1-AB", length)
    removed(model, named(model, "IfcBeam", "B1-BC"))


def two_beams_for_one(model):
    whole = named(model, "IfcBeam", "R-A")
    length = swept(model, "R-A").Depth
    other = model.create_entity(
        "IfcBeam", ifcopenshell.guid.new(), whole.OwnerHistory, "R-A2", None, whole.ObjectType,
        whole.ObjectPlacement, whole.Representation,
    )  # fmt: skip
    for relation in model.get_inverse(whole):
        if relation.is_a("IfcRelAssociatesMaterial"):
            relation.RelatedObjects = [*relation.RelatedObjects, other]
        if relation.is_a("IfcRelContainedInSpatialStructure"):
            relation.RelatedElements = [*relation.RelatedElements, other]
    resized(model, "R-A", 7600.0)
    resized(model, "R-A2", length - 7600.0)
    shifted(model, other, dy=7600.0)


def grid_line_moved(model):
    for name in ("R-D", "C-D1-1", "C-D2-1", "C-D3-1", "C-D1", "C-D2", "C-D3", "B2-balcony"):
        shifted(model, named(model, "IfcElement", name), dx=300.0)
    for name in ("B1-CD", "B2-CD", "B3-CD"):
        resized(model, name, swept(model, name).Depth + 300.0)


def another_in_its_place(model):
    """One line gone, another new: it must not take the old one's mark."""
    source = named(model, "IfcBeam", "R-A")
    copy = model.create_entity(
        "IfcBeam", ifcopenshell.guid.new(), source.OwnerHistory, "R-A2", None, source.ObjectType,
        source.ObjectPlacement, source.Representation,
    )  # fmt: skip
    shifted(model, copy, dx=3000.0)
    for relation in model.get_inverse(source):
        if relation.is_a("IfcRelContainedInSpatialStructure"):
            relation.RelatedElements = [*relation.RelatedElements, copy]
    one_gone(model)


def renamed_materials(model):
    for material in model.by_type("IfcMaterial"):
        material.Name = f"{material.Name} B"


MOVED_LINE = (
    "changed", "actions of Finishes changed", "actions of Offices changed",
    "actions of Self weight changed",
)  # fmt: skip
CHANGES = {
    one_beam_for_two: {"B1-AB": ("changed", "B1-BC is part of it no more")},
    two_beams_for_one: {"R-A": ("changed", "R-A2 is part of it now")},
    grid_line_moved: {
        "B1-AB": (
            *MOVED_LINE, "geometry changed from 6 + 7.2 + 6 m to 6 + 7.2 + 6.3 m",
            "moved by 0.300 m"),
        "B2-AB": (
            *MOVED_LINE, "geometry changed from 6 + 7.2 + 6 + 1.8 m to 6 + 7.2 + 6.3 + 1.8 m",
            "moved by 0.300 m"),
        "B3-AB": (
            *MOVED_LINE, "geometry changed from 6 + 7.2 + 6 m to 6 + 7.2 + 6.3 m",
            "moved by 0.300 m"),
        "R-D": ("changed", "moved by 0.300 m"),
    },
    another_in_its_place: {"R-A": ("gone", "without R-A"), "R-A2": ("new", "with R-A2")},
}  # fmt: skip


@pytest.mark.parametrize("change", CHANGES)
def test_exactly_what_was_changed_is_told_with_its_reason(change, tmp_path):
    assert told(checked(PHYSICAL, revised(tmp_path, change))) == CHANGES[change]


def test_a_new_line_does_not_take_the_mark_of_one_that_is_gone(tmp_path):
    found = pipeline.reconcile(PHYSICAL, revised(tmp_path, another_in_its_place), JOB)
    (gone,) = [c.before for c in found.changes if c.state == "gone"]
    (new,) = [c.after for c in found.changes if c.state == "new"]

    assert gone != new
    assert new[0] not in {line.mark for line in found.before.model.lines}


def test_a_renamed_material_is_told_where_it_is_and_not_where_its_line_bears(tmp_path):
    found = checked(PHYSICAL, revised(tmp_path, renamed_materials))

    reasons = [reason for change in found.changes for reason in change.reasons]
    assert reasons
    assert all(reason.startswith("material of ") for reason in reasons)


# -- changes of an analysis model ------------------------------------------------------------


def released(model):
    relation = model.by_type("IfcRelConnectsStructuralMember")[2]
    free = [model.create_entity("IfcBoolean", turn != 4) for turn in range(6)]
    relation.AppliedCondition = model.create_entity("IfcBoundaryNodeCondition", "hinge", *free)


def clamped(model):
    node = named(model, "IfcStructuralPointConnection", "N-A1-1")
    held = [model.create_entity("IfcBoolean", True)] * 6
    node.AppliedCondition = model.create_entity("IfcBoundaryNodeCondition", "clamp", *held)


@pytest.mark.parametrize(
    ("change", "line", "reason"),
    [
        (released, "L1-01", "connection of B1-BC changed from rigid to end of stretch 3 free"),
        (clamped, "L2-01", "support at 1.200 m (N-A1-1) changed from vertical rigid, horizontal "
         "rigid, rotation free to vertical rigid, horizontal rigid, rotation rigid"),
    ],
)  # fmt: skip
def test_releases_and_supports_are_told_in_words(change, line, reason, tmp_path):
    found = checked(ANALYTICAL, revised(tmp_path, change, ANALYTICAL), ANALYSIS)

    (only,) = [c for c in found.changes if c.state != "unchanged"]
    assert (only.after, only.reasons) == ((line,), (reason,))


def test_other_factors_are_told_of_the_lines_that_they_touch(tmp_path):
    def change(model):
        relation = model.by_type("IfcRelAssignsToGroupByFactor")[0]
        relation.Factor = 1.1 * relation.Factor

    found = checked(ANALYTICAL, revised(tmp_path, change, ANALYTICAL), ANALYSIS)

    for each in found.changes:
        assert (each.state == "changed") == (each.largest > 1e-9)
        if each.state == "changed":
            assert each.reasons == ("what is combined with which factors changed",)


# -- the movement of most elements -----------------------------------------------------------


def ends(x, y, dx, dy, z=3.0):
    return (x, y, z), (x + dx, y + dy, z)


BEAMS = [ends(0, 0, 6, 0), ends(6, 0, 7, 0), ends(0, 5, 6, 0.5), ends(0, 0, 0, 5), ends(2, 1, 1, 4)]


@pytest.mark.parametrize("turn", [0.0, 0.3, -2.9, math.pi / 2, math.pi])
@pytest.mark.parametrize("shift", [(0.0, 0.0, 4.5), (1e5, -2e4, 0.0)])
def test_a_movement_is_found_also_where_some_elements_run_the_other_way(turn, shift):
    motion = Motion(turn, shift)
    moved = [(motion(a), motion(b)) for a, b in BEAMS]
    moved[1] = moved[1][::-1]

    found = common_motion(list(zip(BEAMS, moved, strict=True)))

    for a, b in BEAMS:
        assert found(a) == pytest.approx(motion(a), abs=1e-6)
        assert found(b) == pytest.approx(motion(b), abs=1e-6)


def test_a_few_elements_that_moved_are_no_movement_of_the_model():
    motion = Motion(0.0, (0.3, 0.0, 0.0))
    moved = [(motion(a), motion(b)) for a, b in BEAMS[:3]] + BEAMS[3:]

    assert common_motion(list(zip(BEAMS, moved, strict=True))) == STILL
    assert common_motion([]) == STILL
    assert common_motion(list(zip(BEAMS, BEAMS, strict=True))) == STILL
