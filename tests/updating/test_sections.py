"""Another section for members: what changes in the model, and that nothing else does."""

import math

import ifcopenshell
import pytest
from update_makers import (
    JOB,
    SCHEMAS,
    add_quantities,
    add_set,
    add_type,
    body_of,
    box,
    changed_model,
    complaints,
    differing,
    named,
    profile_of,
    psets,
    sample,
    size,
)

from analysis_core import pipeline
from analysis_core.errors import JobError
from analysis_core.ifc.posting import writer

# The validator leaves its own rule files to the garbage collector.
pytestmark = pytest.mark.filterwarnings(
    "ignore::ResourceWarning", "ignore::pytest.PytestUnraisableExceptionWarning"
)


def mark_of(path, name, settings=JOB):
    found = pipeline.survey(path, settings).model
    return next(
        x.mark for x in found.lines if any(found.names[m.element] == name for m in x.members)
    )


def updated(tmp_path, source, sections, settings=JOB, **more):
    """Sections by the name of an element (its line is meant); target, what was done, model."""
    target = tmp_path / "after.ifc"
    by_mark = {mark_of(source, name, settings): new for name, new in sections.items()}
    done = pipeline.update_members(source, target, settings, sections=by_mark, **more)
    return target, done, ifcopenshell.open(target)


def member(done, name):
    names = done.outcome.model.names
    return next(m for x in done.outcome.model.lines for m in x.members if names[m.element] == name)


@pytest.mark.parametrize("schema", [*SCHEMAS, "ifc4_inch"])
def test_the_new_section_is_drawn_surveyed_and_associated(tmp_path, schema):
    target, done, model = updated(tmp_path, sample(schema), {"J-1": "I 410"})
    joist, other = named(model, "J-1"), named(model, "J-2")

    assert size(joist)[:2] == pytest.approx([0.190, 0.410], abs=1e-6)
    assert size(other)[:2] == pytest.approx([0.150, 0.300], abs=1e-6)
    assert joist.ObjectType == "I 410"
    if schema != "ifc2x3":
        assert (profile_of(joist), profile_of(other)) == ("I 410", "IPE 300")
    section = member(done, "J-1").section
    # Two flanges, the web between them, and four fillets of (1 - pi/4) r² each.
    area = 2 * 190 * 15 + 9 * 380 + (4 - math.pi) * 18**2
    assert (section.name, section.depth) == ("I 410", pytest.approx(0.410))
    assert section.area == pytest.approx(area * 1e-6, rel=1e-9)
    again = pipeline.survey(target, JOB)
    assert pipeline.posted_states(again, JOB)[mark_of(target, "J-1")].state == "current"
    assert {s.state for s in pipeline.posted_states(again, JOB).values()} == {"current"}


@pytest.mark.parametrize("schema", SCHEMAS)
def test_only_what_belongs_to_the_member_changes_and_the_file_stays_valid(tmp_path, schema):
    source = sample(schema)
    target, done, _ = updated(tmp_path, source, {"J-1": "I 410"})

    changed = [("IfcBeam", "J-1"), ("IfcExtrudedAreaSolid", "")]
    if schema != "ifc2x3":
        changed.append(("IfcRelAssociatesMaterial", ""))
    assert differing(source, target) == sorted(changed)
    told = {(c.name, c.what, c.old, c.new) for c in done.changes}
    expected = {
        ("J-1", "extruded body", "IPE 300", "I 410"),
        ("J-1", "ObjectType", "IPE 300", "I 410"),
    }
    if schema != "ifc2x3":
        expected.add(("J-1", "profile association", "IPE 300", "I 410"))
    assert told == expected
    assert complaints(target) == complaints(source)


@pytest.mark.parametrize("schema", SCHEMAS)
def test_bytes_around_the_changed_instances_stay(tmp_path, schema):
    source = tmp_path / "commented.ifc"
    data = sample(schema).read_bytes()
    source.write_bytes(data.replace(b"DATA;", b"DATA;\n/* kept: 'as it is */", 1))
    target, _, _ = updated(tmp_path, source, {"J-1": "I 410"})
    writer.remove(target, target)
    before, after = source.read_bytes().splitlines(), target.read_bytes().splitlines()

    assert b"/* kept: 'as it is */" in after
    assert len(set(before) - set(after)) == len(differing(source, target)) <= 3
    assert [line for line in after if line in set(before)] == [
        line for line in before if line in set(after)
    ]


def test_the_results_are_those_of_the_changed_model(tmp_path):
    target, done, _ = updated(tmp_path, sample("ifc4"), {"B2-AB": "R 250x600"})
    full = pipeline.run(target, JOB)
    before = pipeline.run(sample("ifc4"), JOB)

    for one, other in zip(done.outcome.lines, full.lines, strict=True):
        assert one.fingerprint == other.fingerprint
        assert one.envelopes["strength"].reactions == other.envelopes["strength"].reactions
    # EI of 250 x 600 against 300 x 500: 4.5e9 / 3.125e9 mm⁴.
    ratio = member(done, "B2-AB").flexural_rigidity / next(
        m.flexural_rigidity
        for x in before.model.lines
        for m in x.members
        if before.model.names[m.element] == "B2-AB"
    )
    assert ratio == pytest.approx(4.5 / 3.125, rel=1e-9)


@pytest.mark.parametrize("schema", SCHEMAS)
@pytest.mark.parametrize("mapped", ["one of its occurrences", "all of its occurrences"])
def test_a_body_mapped_from_a_type(tmp_path, schema, mapped):
    def with_type(model):
        type_ = add_type(model, ["J-1", "J-2", "J-3"])
        type_.HasPropertySets = [
            model.create_entity(
                "IfcPropertySet", ifcopenshell.guid.new(), model.by_type("IfcOwnerHistory")[0],
                "Office", None,
                [model.create_entity("IfcPropertySingleValue", "ProfileName", None,
                                     model.create_entity("IfcLabel", "IPE 300"))],
            )
        ]  # fmt: skip

    source = changed_model(tmp_path, schema, with_type)
    names = ["J-1", "J-2", "J-3"] if mapped.startswith("all") else ["J-1"]
    target, done, model = updated(tmp_path, source, dict.fromkeys(names, "I 410"))
    type_ = model.by_type("IfcBeamType")[0]
    stated = type_.HasPropertySets[0].HasProperties[0].NominalValue.wrappedValue

    for name in ("J-1", "J-2", "J-3"):
        depth = 0.410 if name in names else 0.300
        assert size(named(model, name))[1] == pytest.approx(depth, abs=1e-6)
        assert member(done, name).section.depth == pytest.approx(depth)
        assert body_of(named(model, name)).Items[0].is_a("IfcMappedItem")
    maps = {body_of(named(model, n)).Items[0].MappingSource.id() for n in ("J-1", "J-2", "J-3")}
    if mapped.startswith("all"):
        assert maps == {type_.RepresentationMaps[0].id()}
        assert (type_.Name, stated) == ("Joist I 410", "I 410")
    else:
        assert len(maps) == 2
        assert (type_.Name, stated) == ("Joist IPE 300", "IPE 300")
        left = [c for c in done.changes if not c.new]
        assert [(c.name, c.old) for c in left] == [("J-1", "Joist IPE 300")]
        kept = {"IfcRepresentationMap", "IfcBeamType", "IfcExtrudedAreaSolid", "IfcMappedItem"}
        assert not kept & {ifc_class for ifc_class, _ in differing(source, target)}
    assert complaints(target) == complaints(source)


@pytest.mark.parametrize("schema", SCHEMAS)
def test_sets_and_quantities_that_state_the_section(tmp_path, schema):
    # IPE 300 of the sample: 53.81 cm² with its fillets (EN 10365 gives 53.8), drawn 6.1 m long.
    area = 2 * 150 * 10.7 + 7.1 * (300 - 2 * 10.7) + (4 - math.pi) * 15**2
    new_area = 2 * 190 * 15 + 9 * 380 + (4 - math.pi) * 18**2

    def with_sets(model):
        one, two = named(model, "J-1"), named(model, "J-2")
        add_set(model, [one, two], "Office", {
            "ProfileName": ("IfcLabel", "IPE 300"), "Mark": ("IfcLabel", "IPE 300x"),
            "Depth": ("IfcPositiveLengthMeasure", 300.0), "Width": ("IfcLengthMeasure", 77.0),
        })  # fmt: skip
        add_set(model, [one], "Own", {"Section": ("IfcText", "HOT ROLLED IPE 300 S355")})
        add_quantities(model, one, {
            "CrossSectionArea": ("IfcQuantityArea", area * 1e-6),
            "GrossVolume": ("IfcQuantityVolume", area * 6.1e-6),
            "NetVolume": ("IfcQuantityVolume", 0.9 * area * 6.1e-6),
            "GrossWeight": ("IfcQuantityWeight", area * 6.1e-6 * 7850.0),
            "OuterSurfaceArea": ("IfcQuantityArea", 7.4), "Length": ("IfcQuantityLength", 6100.0),
        })  # fmt: skip

    source = changed_model(tmp_path, schema, with_sets)
    target, done, model = updated(tmp_path, source, {"J-1": "I 410"})
    one, two = psets(named(model, "J-1")), psets(named(model, "J-2"))

    assert one["Office.ProfileName"] == "I 410"
    assert one["Office.Mark"] == "IPE 300x"  # another word
    assert one["Office.Depth"] == pytest.approx(410.0)
    assert one["Office.Width"] == 77.0  # never stated the section
    assert one["Own.Section"] == "HOT ROLLED I 410 S355"
    quantities = {k.partition(".")[2]: v for k, v in one.items() if k.startswith("Qto")}
    assert quantities["CrossSectionArea"] == pytest.approx(new_area * 1e-6, rel=1e-6)
    assert quantities["GrossVolume"] == pytest.approx(new_area * 6.1e-6, rel=1e-6)
    assert quantities["GrossWeight"] == pytest.approx(new_area * 6.1e-6 * 7850.0, rel=1e-6)
    assert quantities["Length"] == 6100.0
    assert quantities["NetVolume"] == pytest.approx(0.9 * area * 6.1e-6)
    left = {c.what for c in done.changes if not c.new}
    assert left == {"Qto_BeamBaseQuantities.NetVolume", "Qto_BeamBaseQuantities.OuterSurfaceArea"}
    assert {k: v for k, v in two.items() if k.startswith("Office")} == {
        "Office.ProfileName": "IPE 300", "Office.Mark": "IPE 300x",
        "Office.Depth": 300.0, "Office.Width": 77.0,
    }  # fmt: skip
    assert complaints(target) == complaints(source)


def test_a_cut_body_keeps_its_cuts(tmp_path):
    def cut(model):
        body = body_of(named(model, "J-1"))
        point = model.create_entity("IfcCartesianPoint", (0.0, 0.0, 300.0))
        plane = model.create_entity("IfcPlane", model.create_entity("IfcAxis2Placement3D", point))
        half = model.create_entity("IfcHalfSpaceSolid", plane, True)
        body.Items = [
            model.create_entity("IfcBooleanClippingResult", "DIFFERENCE", body.Items[0], half)
        ]
        body.RepresentationType = "Clipping"

    source = changed_model(tmp_path, "ifc4", cut)
    _, _, model = updated(tmp_path, source, {"J-1": "I 410"})

    assert body_of(named(model, "J-1")).Items[0].is_a("IfcBooleanClippingResult")
    assert size(named(model, "J-1")) == pytest.approx([0.190, 0.410, 5.8], abs=1e-6)


@pytest.mark.parametrize("where", ["profile", "solid"])
def test_what_lay_on_the_axis_lies_there_afterwards(tmp_path, where):
    def from_the_top(model):
        solid = body_of(named(model, "J-1")).Items[0]
        if where == "profile":
            own = model.create_entity("IfcIShapeProfileDef", **{
                k: v for k, v in solid.SweptArea.get_info().items() if k not in ("id", "type")
            })  # fmt: skip
            point = model.create_entity("IfcCartesianPoint", (0.0, -150.0))
            own.Position = model.create_entity("IfcAxis2Placement2D", point)
            solid.SweptArea = own
        else:
            point = model.create_entity("IfcCartesianPoint", (0.0, -150.0, 0.0))
            solid.Position = model.create_entity("IfcAxis2Placement3D", point)

    source = changed_model(tmp_path, "ifc4", from_the_top)
    _, _, model = updated(tmp_path, source, {"J-1": "R 250x600"})
    low, high = box(named(model, "J-1"))

    assert (low[1], high[1]) == pytest.approx((-0.6, 0.0), abs=1e-6)
    assert (low[0], high[0]) == pytest.approx((-0.125, 0.125), abs=1e-6)


def test_a_solid_that_two_elements_share_changes_for_one(tmp_path):
    def shared(model):
        body_of(named(model, "J-2")).Items = body_of(named(model, "J-1")).Items

    source = changed_model(tmp_path, "ifc4", shared)
    target, _, model = updated(tmp_path, source, {"J-1": "I 410"})

    assert size(named(model, "J-1"))[1] == pytest.approx(0.410, abs=1e-6)
    assert size(named(model, "J-2"))[1] == pytest.approx(0.300, abs=1e-6)
    assert complaints(target) == complaints(source)


@pytest.mark.parametrize("schema", SCHEMAS)
@pytest.mark.parametrize("kind", ["analytical", "both"])
def test_a_member_of_an_analysis_model_and_the_beam_it_stands_for(tmp_path, schema, kind):
    source = sample(schema, kind)
    found = pipeline.survey(source, JOB).model
    name = next(n for n in found.names.values() if n == "J-1")
    target, done, model = updated(tmp_path, source, {name: "I 410"})
    curve = next(e for e in model.by_type("IfcStructuralCurveMember") if e.Name == name)

    assert profile_of(curve) == "I 410"
    assert member(done, name).section.depth == pytest.approx(0.410)
    if kind == "both":
        assert size(named(model, "J-1"))[1] == pytest.approx(0.410, abs=1e-6)
        assert size(named(model, "J-2"))[1] == pytest.approx(0.300, abs=1e-6)
    assert complaints(target) == complaints(source)


SHAPES = {  # name in the table: area in mm² by hand, size across and up in mm
    "H 200x100x8": (200 * 100 - 184 * 84 - (4 - math.pi) * (12**2 - 4**2), 100, 200),
    "T 193x10": (math.pi / 4 * (193**2 - 173**2), 193, 193),
    "C 260": (2 * 90 * 14 + 232 * 10, 90, 260),
    "Tee 200": (150 * 12 + 188 * 8, 150, 200),
    "L 150x100x10": (150 * 10 + 90 * 10, 100, 150),
    "D 220": (math.pi / 4 * 220**2, 220, 220),
    "R 300x500": (300 * 500, 300, 500),  # one of the model's own
}


@pytest.mark.parametrize("schema", ["ifc2x3", "ifc4"])
@pytest.mark.parametrize("name", SHAPES)
def test_every_shape_of_a_section_table(tmp_path, schema, name):
    target, done, model = updated(tmp_path, sample(schema), {"J-1": name})
    area, across, up = SHAPES[name]

    assert member(done, "J-1").section.area == pytest.approx(area * 1e-6, rel=1e-9)
    # Circles are drawn with chords: within 1 mm.
    assert size(named(model, "J-1"))[:2] == pytest.approx([across / 1e3, up / 1e3], abs=1e-3)
    assert complaints(target) == complaints(sample(schema))


def test_another_profile_of_the_model_is_used_as_it_is(tmp_path):
    _, _, model = updated(tmp_path, sample("ifc4"), {"J-1": "IPE 270"})
    before = ifcopenshell.open(sample("ifc4"))

    used = body_of(named(model, "J-1")).Items[0].SweptArea
    assert used.id() in {p.id() for p in before.by_type("IfcIShapeProfileDef")}
    assert used.ProfileName == "IPE 270"


def test_there_and_back_again(tmp_path):
    first, _, _ = updated(tmp_path, sample("ifc4"), {"J-1": "I 410"})
    second = tmp_path / "again.ifc"
    mark = mark_of(first, "J-1")
    done = pipeline.update_members(first, second, JOB, sections={mark: "IPE 300"})
    third = tmp_path / "third.ifc"
    pipeline.update_members(second, third, JOB, sections={mark: "I 410"})

    fresh = pipeline.run(sample("ifc4"), JOB)
    assert [r.fingerprint for r in done.outcome.lines] == [r.fingerprint for r in fresh.lines]
    assert complaints(third) == []


def test_in_place_by_global_id_with_marks_kept(tmp_path):
    path = tmp_path / "model.ifc"
    path.write_bytes(sample("ifc4").read_bytes())
    pipeline.post(pipeline.run(path, JOB), path, path)
    before = pipeline.survey(path, JOB).model
    model = ifcopenshell.open(path)
    joist = named(model, "J-1").GlobalId

    done = pipeline.update_members(path, path, JOB, sections={joist: "I 410"})

    assert [x.mark for x in done.outcome.model.lines] == [x.mark for x in before.lines]
    model = ifcopenshell.open(path)  # elements die with their file
    assert size(named(model, "J-1"))[1] == pytest.approx(0.410, abs=1e-6)


def refused(tmp_path, source, sections, match, settings=JOB):
    target = tmp_path / "target.ifc"
    target.write_bytes(b"what was there")
    with pytest.raises(JobError, match=match):
        pipeline.update_members(source, target, settings, sections=sections)
    assert target.read_bytes() == b"what was there"


def test_a_body_that_is_no_extrusion_is_refused_and_nothing_written(tmp_path):
    def meshed(model):
        body = body_of(named(model, "J-1"))
        corners = [(x, y, z) for z in (0.0, 6400.0) for y in (-150.0, 150.0) for x in (-75.0, 75.0)]
        points = [model.create_entity("IfcCartesianPoint", c) for c in corners]
        sides = [(0, 2, 3, 1), (4, 5, 7, 6), (0, 1, 5, 4), (2, 6, 7, 3), (0, 4, 6, 2), (1, 3, 7, 5)]
        faces = [
            model.create_entity("IfcFace", [model.create_entity(
                "IfcFaceOuterBound",
                model.create_entity("IfcPolyLoop", [points[i] for i in side]), True)])
            for side in sides
        ]  # fmt: skip
        body.Items = [
            model.create_entity("IfcFacetedBrep", model.create_entity("IfcClosedShell", faces))
        ]
        body.RepresentationType = "Brep"

    source = changed_model(tmp_path, "ifc4", meshed)
    refused(tmp_path, source, {mark_of(source, "J-1"): "I 410"}, "IfcFacetedBrep.*no extrusion")


def test_names_that_are_not_known_are_refused_with_the_nearest(tmp_path):
    source = sample("ifc4")
    mark = mark_of(source, "J-1")

    refused(tmp_path, source, {mark: "IPE 301"}, "no profile 'IPE 301'.*'IPE 300'")
    refused(tmp_path, source, {f"{mark}x": "I 410"}, f"no line '{mark}x'.*nearest is '{mark}'")
    refused(tmp_path, source, {"3" + "x" * 21: "I 410"}, "no element with the GlobalId")
    model = ifcopenshell.open(source)
    joist = named(model, "J-1").GlobalId
    refused(tmp_path, source, {mark: "I 410", joist: "C 260"}, "two")


def test_profiles_of_one_name_and_different_dimensions_are_refused(tmp_path):
    def twice(model):
        copy = model.create_entity("IfcRectangleProfileDef", "AREA", "IPE 270", None, 10.0, 20.0)
        body_of(named(model, "J-4")).Items[0].SweptArea = copy

    source = changed_model(tmp_path, "ifc4", twice)
    refused(tmp_path, source, {mark_of(source, "J-1"): "IPE 270"}, "different dimensions")


def test_a_profile_whose_values_are_stated_is_read_back_as_stated(tmp_path):
    def state(model):
        profile = next(p for p in model.by_type("IfcProfileDef") if p.ProfileName == "IPE 270")
        area = model.create_entity("IfcAreaMeasure", 45.9e-4)  # the outline has 45.95 cm²
        value = model.create_entity(
            "IfcPropertySingleValue", Name="CrossSectionArea", NominalValue=area
        )
        model.create_entity(
            "IfcProfileProperties", Name="Pset_ProfileMechanical", Properties=[value],
            ProfileDefinition=profile,
        )  # fmt: skip

    source = changed_model(tmp_path, "ifc4", state)
    _, done, _ = updated(tmp_path, source, {"J-1": "IPE 270"})
    assert member(done, "J-1").section.area == pytest.approx(45.9e-4, rel=1e-9)


def test_the_section_that_a_member_has_already_is_no_change(tmp_path):
    def weighed(model):
        weight = {"GrossWeight": ("IfcQuantityWeight", 270.4)}
        add_quantities(model, named(model, "J-1"), weight)

    source = changed_model(tmp_path, "ifc4", weighed)
    _, done, _ = updated(tmp_path, source, {"J-1": "IPE 300"})

    assert done.changes == ()
