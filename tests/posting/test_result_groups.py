"""Results beside an analysis model: groups, reactions at nodes, section forces along members."""

from dataclasses import replace

import ifcopenshell
import numpy as np
import pytest
from posting_makers import (
    ANALYSIS,
    SCHEMAS,
    analysis_model,
    outcome_of,
    span_result,
    with_case_ids,
)

from analysis_core.ifc.analytical.reader import read_analytical
from analysis_core.ifc.posting import writer
from analysis_core.ifc.source import open_model
from analysis_core.results import Stations

MEMBERS = [ANALYSIS["member"], ANALYSIS["second member"]]
LOAD = 12_000.0


def line(cases=None, **options):
    supports = (ANALYSIS["start"], None, ANALYSIS["end"])
    return span_result(
        MEMBERS, supports=supports, cases=cases or {"G": 0.75, "Q": 0.25}, load=LOAD, **options
    )


def outcome(*results):
    return with_case_ids(outcome_of(*(results or (line(),))), {"G": ANALYSIS["case"]})


def stations(result):
    """Simple spans under a uniform load: M = qx(L-x)/2, V = q(L/2 - x)."""
    shares = np.array([0.75, 0.25])[:, None, None]
    x = np.tile(np.linspace(0.0, 6.0, 5), (2, 1))
    moment = shares * (LOAD * x * (6.0 - x) / 2.0)
    shear = shares * (LOAD * (3.0 - x))
    return Stations(result.solution.cases, x, moment, shear, 0.0 * moment)


@pytest.fixture(params=SCHEMAS)
def posted(request, tmp_path):
    path = tmp_path / "model.ifc"
    path.write_bytes(analysis_model(request.param))
    report = writer.post(path, path, outcome(), stations=stations)
    assert report.groups == 2
    assert report.path == "append"
    return ifcopenshell.open(str(path))


def groups(file):
    return {g.Name: g for g in file.by_type("IfcStructuralResultGroup")}


def members(group):
    return [o for relation in group.IsGroupedBy for o in relation.RelatedObjects]


def items(reaction):
    return [r.RelatingElement.GlobalId for r in reaction.AssignedToStructuralItem]


def test_each_case_has_a_linear_first_order_group(posted):
    found = groups(posted)

    assert set(found) == {"G", "Q"}
    for group in found.values():
        assert group.TheoryType == "FIRST_ORDER_THEORY"
        assert group.IsLinear is True
    assert found["G"].ResultForLoadGroup.GlobalId == ANALYSIS["case"]
    assert found["Q"].ResultForLoadGroup is None  # a case of the job file


def test_supports_have_their_reaction_in_each_case(posted):
    for case, share in (("G", 0.75), ("Q", 0.25)):
        reactions = [
            r for r in members(groups(posted)[case]) if r.is_a("IfcStructuralPointReaction")
        ]
        assert sorted(items(r)[0] for r in reactions) == sorted(
            [ANALYSIS["start"], ANALYSIS["end"]]
        )
        for reaction in reactions:
            force = reaction.AppliedLoad
            assert force.is_a("IfcStructuralLoadSingleForce")
            assert reaction.GlobalOrLocal == "GLOBAL_COORDS"
            # qL/2 = 36 kN, upward
            assert (force.ForceX, force.ForceY) == (0.0, 0.0)
            assert force.ForceZ == pytest.approx(share * 36.0)


def test_members_have_their_section_forces_from_ifc4_on(posted):
    if posted.schema == "IFC2X3":
        assert {r.is_a() for g in groups(posted).values() for r in members(g)} == {
            "IfcStructuralPointReaction"
        }
        return
    curves = [r for r in members(groups(posted)["G"]) if r.is_a("IfcStructuralCurveReaction")]
    assert sorted(items(r)[0] for r in curves) == sorted(MEMBERS)
    for reaction in curves:
        load = reaction.AppliedLoad
        assert reaction.PredefinedType == "POLYGONAL"
        assert reaction.GlobalOrLocal == "LOCAL_COORDS"
        assert [place for (place,) in load.Locations] == [0, 1500, 3000, 4500, 6000]
        # 0.75 of 12 kN/m on 6 m: 40.5 kN·m in the middle, 27 kN at the ends
        assert [v.MomentY for v in load.Values] == pytest.approx([0, 30.375, 40.5, 30.375, 0])
        assert [v.ForceZ for v in load.Values] == pytest.approx([27, 13.5, 0, -13.5, -27])
        assert [v.ForceX for v in load.Values] == [0.0] * 5
        assert {v.ForceY for v in load.Values} == {None}


def test_the_groups_are_results_of_a_part_of_the_model_that_was_there(posted):
    models = posted.by_type("IfcStructuralAnalysisModel")
    theirs = posted.by_guid(ANALYSIS["model"])
    (ours,) = [m for m in models if m != theirs]

    assert theirs.HasResults is None
    assert set(ours.HasResults) == set(groups(posted).values())
    assert [p for r in theirs.IsDecomposedBy for p in r.RelatedObjects] == [ours]
    if posted.schema != "IFC2X3":
        assert ours.SharedPlacement == theirs.SharedPlacement


def test_without_stations_the_ends_are_given(tmp_path):
    path = tmp_path / "model.ifc"
    path.write_bytes(analysis_model())
    writer.post(path, path, outcome())
    file = ifcopenshell.open(str(path))
    (first, *_) = file.by_type("IfcStructuralCurveReaction")

    assert first.PredefinedType == "DISCRETE"
    assert [place for (place,) in first.AppliedLoad.Locations] == [0, 6000]
    assert [v.ForceZ for v in first.AppliedLoad.Values] == pytest.approx([27, -27])


@pytest.mark.parametrize("schema", SCHEMAS)
def test_reactions_stand_in_the_axes_of_the_analysis_model(tmp_path, schema):
    """The model's x axis is the world's y: the line along the world's x runs along its -y."""
    path = tmp_path / "model.ifc"
    path.write_bytes(analysis_model(schema, turned=True))
    result = line()
    reactions = result.solution.reactions.copy()
    reactions[0, 0] = 4_000.0, 9_000.0, 2_000.0  # to the right, up, clockwise
    result = replace(result, solution=replace(result.solution, reactions=reactions))
    writer.post(path, path, outcome(result))
    file = ifcopenshell.open(str(path))
    force = next(
        r.AppliedLoad for r in file.by_type("IfcStructuralPointReaction")
        if items(r) == [ANALYSIS["start"]] and r.Name == "G"
    )  # fmt: skip

    # World: right is +x, up +z, and clockwise seen from -y turns about +y.
    assert (force.ForceX, force.ForceY, force.ForceZ) == pytest.approx((0.0, -4.0, 9.0))
    # In the file kN·m; the world's y is the model's x.
    assert (force.MomentX, force.MomentY, force.MomentZ) == pytest.approx((2.0, 0.0, 0.0))


def test_a_support_of_two_lines_gets_their_sum(tmp_path):
    path = tmp_path / "model.ifc"
    path.write_bytes(analysis_model())
    across = span_result(
        ANALYSIS["second member"], mark="B-9", load=6_000.0, cases={"G": 1.0},
        supports=(None, ANALYSIS["end"]),
    )  # fmt: skip
    writer.post(path, path, outcome(line(), across))
    file = ifcopenshell.open(str(path))
    found = [
        r.AppliedLoad.ForceZ for r in file.by_type("IfcStructuralPointReaction")
        if items(r) == [ANALYSIS["end"]] and r.Name == "G"
    ]  # fmt: skip

    assert found == pytest.approx([0.75 * 36.0 + 18.0])


@pytest.mark.parametrize("schema", SCHEMAS)
def test_the_model_reads_as_before(tmp_path, schema):
    source, target = tmp_path / "model.ifc", tmp_path / "posted.ifc"
    source.write_bytes(analysis_model(schema))
    writer.post(source, target, outcome(), stations=stations)
    before, after = (read_analytical(open_model(p)) for p in (source, target))

    assert replace(after, counts=before.counts) == before


@pytest.mark.parametrize("schema", SCHEMAS)
def test_twice_is_once_and_taking_out_gives_the_original(tmp_path, schema):
    path = tmp_path / "model.ifc"
    path.write_bytes(analysis_model(schema))
    original = path.read_bytes()
    writer.post(path, path, outcome(), stations=stations)
    once = StepTimeless(path)
    report = writer.post(path, path, outcome(), stations=stations)

    assert StepTimeless(path) == once
    assert report.written == report.updated == 0
    writer.remove(path, path)
    assert path.read_bytes() == original


def StepTimeless(path):  # noqa: N802 -- reads like a value in the tests
    lines = path.read_bytes().splitlines()
    return [line for line in lines if b"ComputedAt" not in line and b"/* " not in line]


@pytest.mark.parametrize("schema", SCHEMAS)
def test_posting_one_line_keeps_the_reactions_of_the_others(tmp_path, schema):
    path = tmp_path / "model.ifc"
    path.write_bytes(analysis_model(schema))
    original = path.read_bytes()
    first = span_result(
        MEMBERS[0], mark="B-1", supports=(ANALYSIS["start"], None), cases={"G": 1.0}
    )
    second = span_result(
        MEMBERS[1], mark="B-2", supports=(None, ANALYSIS["end"]), cases={"G": 1.0}, load=8e3
    )
    writer.post(path, path, outcome(first, second))
    before = shape(path)
    heavier = span_result(
        MEMBERS[1], mark="B-2", supports=(None, ANALYSIS["end"]), cases={"G": 1.0}, load=9e3
    )
    report = writer.post(path, path, outcome(first, heavier), only=["B-2"])

    assert report.path == "append"
    assert shape(path) == {**before, (ANALYSIS["end"], "G"): pytest.approx(27.0)}
    file = ifcopenshell.open(str(path))
    (group,) = file.by_type("IfcStructuralResultGroup")
    assert len(group.IsGroupedBy) == 1
    assert len(members(group)) == (2 if schema == "IFC2X3" else 4)
    assert len(file.by_type("IfcStructuralAnalysisModel")) == 2
    writer.remove(path, path)
    assert path.read_bytes() == original


def shape(path):
    file = ifcopenshell.open(str(path))
    return {
        (items(r)[0], r.Name): r.AppliedLoad.ForceZ
        for r in file.by_type("IfcStructuralPointReaction")
    }
