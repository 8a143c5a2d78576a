"""Members that the job file gives another section or material: solved so, written on request."""

import json
import math
from pathlib import Path

import ifcopenshell
import numpy as np
import pytest

from analysis_core import pipeline
from analysis_core.cli import main
from analysis_core.errors import JobError
from analysis_core.ifc.updating.stock import table_profile
from analysis_core.job.reader import load, parse

SAMPLES = Path(__file__).resolve().parents[1] / "sample_models"
JOB = (SAMPLES / "quarry_lane.yaml").read_text(encoding="utf-8")
TABLE = """
section_table:
  - {name: "I 410", shape: I, depth: 410 mm, width: 190 mm, web_thickness: 9 mm,
     flange_thickness: 15 mm, fillet_radius: 18 mm}
"""
MATERIAL = '\nmaterials:\n  - {name: "Steel S460", density: 7850 kg/m3}\n'


def model(schema="ifc4", kind="physical"):
    return SAMPLES / f"quarry_lane_{kind}_{schema}.ifc"


def settings(members, more=TABLE):
    return parse(JOB + more + f"\nmembers:\n  - {members}\n")


def line_of(outcome, name):
    names = outcome.model.names
    return next(r for r in outcome.lines if any(names[m.element] == name for m in r.line.members))


@pytest.mark.parametrize("schema", ["ifc2x3", "ifc4", "ifc4_inch"])
@pytest.mark.parametrize("profile", ["I 410", "IPE 270"])
def test_what_is_solved_is_what_comes_out_of_the_changed_model(tmp_path, schema, profile):
    asked = settings(f'{{on: {{name: J-1}}, profile: "{profile}"}}')
    solved = pipeline.run(model(schema), asked)
    target = tmp_path / "written.ifc"
    done = pipeline.update_members(model(schema), target, asked, given=True)
    plain = pipeline.run(target, parse(JOB))

    for one, other, third in zip(solved.lines, done.outcome.lines, plain.lines, strict=True):
        assert one.line.mark == other.line.mark
        for a, b, c in zip(
            *(r.envelopes["strength"].reactions for r in (one, other, third)), strict=True
        ):
            # Names of units and roundings of the file apart: a nanometre of 400 mm.
            assert a.vertical_max.value == pytest.approx(b.vertical_max.value, rel=1e-7)
            assert b.vertical_max.value == pytest.approx(c.vertical_max.value, rel=1e-9)
        for a, b in zip(one.line.members, third.line.members, strict=True):
            assert a.flexural_rigidity == pytest.approx(b.flexural_rigidity, rel=1e-7)
            assert a.section.name == b.section.name
            for (key, x), (other_key, y) in zip(
                a.section.dimensions, b.section.dimensions, strict=True
            ):
                assert key == other_key
                assert x == pytest.approx(y, rel=1e-6)
    before = pipeline.run(model(schema), parse(JOB))
    assert line_of(before, "J-1").line.members[0].section.name == "IPE 300"


def test_a_material_of_the_model_or_of_the_job_file():
    of_model = settings('{on: {name: J-1}, material: "Concrete C30/37"}')
    member = line_of(pipeline.run(model(), of_model), "J-1").line.members[0]
    assert member.material.name == "Concrete C30/37"
    # 33 GPa: EN 1992-1-1, table 3.1.
    assert member.flexural_rigidity == pytest.approx(33e9 * member.section.inertia, rel=1e-9)

    of_job = settings('{on: {name: J-1}, material: "Steel S460"}', MATERIAL)
    member = line_of(pipeline.run(model(), of_job), "J-1").line.members[0]
    assert dict(member.material.strength)["fy"] == pytest.approx(460e6)


def test_the_engineer_is_told_what_the_model_does_not_have_yet():
    found = pipeline.survey(model(), settings('{on: {name: "J-*"}, profile: "I 410"}'))
    (told,) = (f for f in found.findings if f.slug == "member-given")
    assert told.severity == "warning"
    assert len(told.elements) == 4
    assert "4 members are solved with the section 'I 410'" in told.message
    assert "'IPE 300' of the model" in told.message

    same = pipeline.survey(model(), settings('{on: {name: "J-*"}, profile: "IPE 300"}'))
    assert not any(f.slug == "member-given" for f in same.findings)


@pytest.mark.parametrize(
    ("entry", "slug", "words"),
    [
        ('{on: {name: J-1}, profile: "IPE 3000"}', "member-not-given", "'IPE 300'"),
        ('{on: {name: J-1}, material: "Steel"}', "member-not-given", "no material 'Steel'"),
        ("{on: {name: K-1}, profile: IPE 300}", "selector-matches-nothing", "members[0]"),
    ],
)
def test_what_cannot_be_given_is_told_and_the_member_stays_as_it_is(entry, slug, words):
    found = pipeline.survey(model(), settings(entry))
    (told,) = (f for f in found.findings if f.slug == slug)
    assert words in told.message
    member = line_of(pipeline.run(model(), settings(entry)), "J-1").line.members[0]
    assert member.section.name == "IPE 300"


@pytest.mark.parametrize(
    ("entry", "words"),
    [
        ("{on: {name: J-1}}", "gives the members nothing"),
        ("{on: {line: FF-04}, profile: A}", "names a line"),
        ("{profile: A}", "no 'on'"),
    ],
)
def test_an_entry_that_says_nothing_clear_is_refused(entry, words):
    with pytest.raises(JobError, match=words):
        settings(entry)


def test_the_command_writes_members_on_request_alone(tmp_path, capsys):
    job, data = tmp_path / "job.yaml", tmp_path / "out.json"
    job.write_text(JOB + TABLE + '\nmembers:\n  - {on: {name: J-1}, profile: "I 410"}\n', "utf-8")
    common = ["post", str(model()), "--job", str(job), "-o", str(tmp_path / "out.ifc")]

    assert main(common) == 0
    plain = pipeline.run(tmp_path / "out.ifc", parse(JOB))
    assert line_of(plain, "J-1").line.members[0].section.name == "IPE 300"
    written = (tmp_path / "out.ifc").read_text(encoding="utf-8")
    assert written.count("the section ''I 410'' that the job file gives") == 1  # its own line

    assert main([*common, "--members", "--json", str(data)]) == 0
    capsys.readouterr()
    changes = json.loads(data.read_text(encoding="utf-8"))["changes"]
    assert ("J-1", "extruded body", "IPE 300", "I 410") in {
        (c["name"], c["what"], c["before"], c["after"]) for c in changes
    }
    plain = pipeline.run(tmp_path / "out.ifc", parse(JOB))
    assert line_of(plain, "J-1").line.members[0].section.name == "I 410"
    assert "the job file gives" not in (tmp_path / "out.ifc").read_text(encoding="utf-8")
    assert changes == [
        {"element": c.element, "name": c.name, "what": c.what, "before": c.old, "after": c.new}
        for c in pipeline.member_changes(model(), load(job))
    ]
    # Once it is in the model there is nothing left to change.
    assert pipeline.member_changes(tmp_path / "out.ifc", load(job)) == ()


def test_a_section_named_on_the_command_line_comes_first(tmp_path):
    asked = settings('{on: {name: "J-*"}, profile: "I 410"}')
    mark = line_of(pipeline.run(model(), asked), "J-1").line.mark
    done = pipeline.update_members(
        model(), tmp_path / "out.ifc", asked, sections={mark: "IPE 270"}, given=True
    )
    assert line_of(done.outcome, "J-1").line.members[0].section.name == "IPE 270"
    assert line_of(done.outcome, "J-2").line.members[0].section.name == "I 410"


def test_what_the_job_file_gives_is_not_left_out_beside_a_named_section(tmp_path, capsys):
    job = tmp_path / "job.yaml"
    job.write_text(JOB + TABLE + '\nmembers:\n  - {on: {name: J-1}, profile: "I 410"}\n', "utf-8")
    out = tmp_path / "out.ifc"
    common = ["post", str(model()), "--job", str(job), "-o", str(out)]
    assert main([*common, "--section", "FF-05=IPE 270"]) == 2
    assert "post --members" in capsys.readouterr().err
    assert not out.exists()
    assert main([*common, "--section", "FF-05=IPE 270", "--members"]) == 0
    plain = pipeline.run(out, parse(JOB))
    assert [line_of(plain, n).line.members[0].section.name for n in ("J-1", "J-2")] == [
        "I 410", "IPE 270",
    ]  # fmt: skip


@pytest.mark.parametrize("angle", [90.0, -90.0, 30.0])
def test_a_turned_member_stays_turned(tmp_path, angle):
    turned = ifcopenshell.open(model())
    beam = next(e for e in turned.by_type("IfcBeam") if e.Name == "J-1")
    (solid,) = next(
        r.Items for r in beam.Representation.Representations
        if r.RepresentationIdentifier == "Body"
    )  # fmt: skip
    place, a = solid.Position, math.radians(angle)
    z = np.array(place.Axis.DirectionRatios if place.Axis else (0.0, 0.0, 1.0))
    x = np.array(place.RefDirection.DirectionRatios if place.RefDirection else (1.0, 0.0, 0.0))
    ratios = math.cos(a) * x + math.sin(a) * np.cross(z, x)
    place.RefDirection = turned.create_entity("IfcDirection", tuple(map(float, ratios)))
    turned.write(str(tmp_path / "turned.ifc"))
    asked = settings('{on: {name: J-1}, profile: "I 410"}')

    solved = pipeline.run(tmp_path / "turned.ifc", asked)
    done = pipeline.update_members(
        tmp_path / "turned.ifc", tmp_path / "out.ifc", asked, given=True
    ).outcome
    one, other = (line_of(x, "J-1").line.members[0].section for x in (solved, done))
    assert one.inertia == pytest.approx(other.inertia, rel=1e-9)
    assert one.inertia_product == pytest.approx(other.inertia_product, abs=1e-12)
    assert dict(one.dimensions)["roll"] == pytest.approx(dict(other.dimensions)["roll"], abs=1e-9)
    assert one.depth == pytest.approx(other.depth, rel=1e-9)


def test_a_decision_does_not_read_the_file_again():
    asked = settings('{on: {name: J-1}, profile: "I 410"}')
    reading = pipeline.read(model(), asked)
    assert reading.serves(settings('{on: {name: J-2}, profile: "IPE 270"}', ""))
    assert not pipeline.read(model(), parse(JOB)).serves(asked)


def test_an_analysis_models_member_and_its_beam_are_given_together(tmp_path):
    asked = parse('members:\n  - {on: {name: J-1}, profile: "IPE 270"}\n')
    both = model(kind="both")
    solved = pipeline.run(both, asked)
    done = pipeline.update_members(both, tmp_path / "out.ifc", asked, given=True)
    one, other = (line_of(x, "J-1").line.members[0] for x in (solved, done.outcome))
    assert one.section.name == other.section.name == "IPE 270"
    assert one.flexural_rigidity == pytest.approx(other.flexural_rigidity, rel=1e-9)


def test_a_section_lies_as_the_old_one_lay():
    profile = table_profile(settings("{on: {}, profile: A}").section_table[0])
    upright, lying = profile.section(), profile.section(math.pi / 2)
    assert lying.inertia == pytest.approx(upright.inertia_lateral)
    assert dict(lying.dimensions)["roll"] == pytest.approx(math.pi / 2)
    assert lying.depth == pytest.approx(0.190)
