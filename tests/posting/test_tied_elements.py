"""Results of structural members on the building elements that they stand for.

The beam of these tests is drawn from right to left and stands for two members, lopsided: a
position on it is 9 m minus the position along the line.
"""

from datetime import UTC, datetime

import ifcopenshell
import ifcopenshell.util.element as element_tools
import pytest
from ifc_makers import AnalysisFile, Case, SpreadLoad, continuous_beam

from analysis_core import pipeline
from analysis_core.ifc.posting import writer
from analysis_core.settings import Settings

SCHEMAS = ("IFC2X3", "IFC4", "IFC4X3")
SPANS = (4.0, 5.0)
NOON = datetime(2031, 5, 4, 12, 0, 0, tzinfo=UTC)


def made_file(schema="IFC4", *, body=True, both_ways=False):
    """A line of two members with a load on each, and a beam from its right end to its left."""
    made = AnalysisFile(
        continuous_beam(
            SPANS,
            cases=[Case("G")],
            actions=[
                SpreadLoad("on 1", "G", "M1", ((0.0, 0.0, -7e3),) * 2),
                SpreadLoad("on 2", "G", "M2", ((0.0, 0.0, -3e3),) * 2),
            ],
        ),
        schema=schema,
    )
    beam = element(made, "IfcBeam", "the beam", (9.0, 0.0, 0.0), (-1.0, 0.0, 0.0), body=body)
    members = [made.by_name["M1"], made.by_name["M2"]]
    if schema == "IFC2X3":
        for member in members:
            made.relate("IfcRelConnectsStructuralElement", f"tie {member.Name}", beam, member)
    else:
        made.relate("IfcRelAssignsToProduct", "ties", members, None, beam)
    if both_ways:
        made.relate("IfcRelAssignsToProduct", "again", [beam], None, members[0])
    return made


def element(made, ifc_class, name, place, along, *, body=True, length=9.0):
    """An element with a rectangle swept along a direction, as programs draw beams."""
    at = made.create(
        "IfcAxis2Placement3D", made.point(place), made.direction(along),
        made.direction((0.0, 0.0, 1.0) if not along[2] else (1.0, 0.0, 0.0)),
    )  # fmt: skip
    flat = made.create("IfcAxis2Placement2D", made.create("IfcCartesianPoint", (0.0, 0.0)))
    profile = made.create("IfcRectangleProfileDef", "AREA", "300 x 200", flat, 0.3, 0.2)
    solid = made.create(
        "IfcExtrudedAreaSolid", profile,
        made.create("IfcAxis2Placement3D", made.point((0.0, 0.0, 0.0))),
        made.direction((0.0, 0.0, 1.0)), length,
    )  # fmt: skip
    shape = None
    if body:
        swept = made.create("IfcShapeRepresentation", made.context, "Body", "SweptSolid", [solid])
        shape = made.create("IfcProductDefinitionShape", None, None, [swept])
    local = made.create("IfcLocalPlacement", None, at)
    return made.rooted(ifc_class, name, None, None, local, shape)


@pytest.fixture(params=SCHEMAS)
def model(request, tmp_path):
    return made_file(request.param).write(tmp_path / "model.ifc")


def sets_of(path, made_name):
    file = ifcopenshell.open(str(path))
    (entity,) = [e for e in file.by_type("IfcProduct") if e.Name == made_name]
    return element_tools.get_psets(entity)


def test_a_beam_has_the_results_of_its_members_in_its_own_direction(model):
    outcome = pipeline.run(model)
    pipeline.post(outcome, model, model)
    beam, first, second = (sets_of(model, name) for name in ("the beam", "M1", "M2"))

    effects = beam["Spanledger_Effects"]
    mine, theirs = effects, first["Spanledger_Effects"]
    assert theirs["SaggingMoment"] > second["Spanledger_Effects"]["SaggingMoment"]
    assert mine["SaggingMoment"] == theirs["SaggingMoment"]
    assert mine["SaggingMomentPosition"] == pytest.approx(9.0 - theirs["SaggingMomentPosition"])
    # The moment over the middle support, 4 m from the left end: 5 m from the beam's start.
    # Theorem of three moments: 2 M (4 + 5) = -(7 * 4**3 + 3 * 5**3) / 4, in kN·m; 1.5 is the
    # factor of the strength combination.
    expected = -1.5e3 * (7 * 64 + 3 * 125) / 72
    assert mine["HoggingMoment"] == pytest.approx(expected, rel=1e-9)
    assert mine["HoggingMomentPosition"] == pytest.approx(5.0)
    assert mine["LineMark"] == theirs["LineMark"]
    file = ifcopenshell.open(str(model))
    ids = [file.by_type("IfcStructuralCurveMember")[i].GlobalId for i in (0, 1)]
    assert set(beam["Spanledger_Record"]["AnalysedAs"].split(", ")) == set(ids)
    assert "AnalysedAs" not in first["Spanledger_Record"]


def test_the_diagrams_run_over_the_whole_beam(model):
    pipeline.post(pipeline.run(model), model, model)
    file = ifcopenshell.open(str(model))
    (beam,) = file.by_type("IfcBeam")
    (found,) = [
        r.RelatingPropertyDefinition for r in beam.IsDefinedBy
        if r.is_a("IfcRelDefinesByProperties")
        and r.RelatingPropertyDefinition.Name == "Spanledger_Diagrams"
    ]  # fmt: skip
    for table in found.HasProperties:
        places = [value.wrappedValue for value in table.DefiningValues]
        assert places == sorted(places)
        assert (places[0], places[-1]) == pytest.approx((0.0, 9.0), abs=1e-9)


def test_posting_twice_and_taking_out_know_the_beam_too(model):
    before = model.read_bytes()
    first = pipeline.post(pipeline.run(model), model, model)
    again = pipeline.post(pipeline.run(model), model, model)
    assert (again.written, again.updated, again.unchanged) == (0, 0, first.written)
    assert len([name for name in sets_of(model, "the beam") if "Spanledger" in name]) == 3

    removed = pipeline.remove(model, model)
    assert removed.removed == first.written
    assert model.read_bytes() == before


def test_results_of_one_line_alone_are_written_to_its_beam(tmp_path):
    path = made_file().write(tmp_path / "model.ifc")
    outcome = pipeline.run(path)
    pipeline.post(outcome, path, path)
    mark = outcome.lines[0].line.mark
    report = pipeline.post(outcome, path, path, only=[mark])

    assert report.written == report.updated == 0
    assert sets_of(path, "the beam")["Spanledger_Effects"]["LineMark"] == mark


def test_a_beam_tied_both_ways_has_its_results_once(tmp_path):
    path = made_file(both_ways=True).write(tmp_path / "model.ifc")
    pipeline.post(pipeline.run(path), path, path)
    file = ifcopenshell.open(str(path))
    names = [
        r.RelatingPropertyDefinition.Name for r in file.by_type("IfcBeam")[0].IsDefinedBy
        if r.is_a("IfcRelDefinesByProperties")
    ]  # fmt: skip

    assert sorted(names) == ["Spanledger_Diagrams", "Spanledger_Effects", "Spanledger_Record"]


def test_without_a_body_positions_count_along_the_members(tmp_path):
    path = made_file(body=False).write(tmp_path / "model.ifc")
    pipeline.post(pipeline.run(path), path, path)

    assert sets_of(path, "the beam")["Spanledger_Effects"]["HoggingMomentPosition"] == (
        pytest.approx(4.0)
    )  # the longest member runs from left to right


def test_an_element_that_its_members_do_not_follow_gets_none_of_the_results(tmp_path):
    made = made_file()
    (relation,) = made.file.by_type("IfcRelAssignsToProduct")
    upright = element(made, "IfcColumn", "a column", (0.0, 0.0, 0.0), (0.0, 0.0, 1.0), length=3.0)
    relation.RelatingProduct = upright
    path = made.write(tmp_path / "model.ifc")
    outcome = pipeline.run(path)
    (told,) = [f for f in outcome.findings if f.slug == "tied-but-astray"]
    pipeline.post(outcome, path, path)

    assert upright.GlobalId in told.elements
    assert "Spanledger_Effects" not in sets_of(path, "a column")
    assert "Spanledger_Effects" in sets_of(path, "M1")


def test_what_a_node_stands_for_has_its_reactions(tmp_path):
    made = made_file()
    pad = element(made, "IfcFooting", "a pad", (4.0, 0.0, -1.0), (0.0, 0.0, 1.0), length=0.5)
    made.relate("IfcRelAssignsToProduct", "pad", [made.by_name["J1"]], None, pad)
    path = made.write(tmp_path / "model.ifc")
    writer.post(path, path, pipeline.run(path, Settings()), computed_at=NOON)
    node, pad_sets = sets_of(path, "J1"), sets_of(path, "a pad")

    assert forces(pad_sets) == forces(node) != {}


def forces(sets):
    """Reactions by name: numbers, and pairs of bounds."""
    found = {}
    for name, value in sets["Spanledger_Reactions"].items():
        if isinstance(value, dict):
            found[name] = value["LowerBoundValue"], value["UpperBoundValue"]
        elif name != "id":
            found[name] = value
    return found
