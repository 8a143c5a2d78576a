"""Which results in a file still hold, told from the file alone; and marks that stay."""

import json
from pathlib import Path

import ifcopenshell
import pytest

from analysis_core import distribution, pipeline
from analysis_core.cli import main
from analysis_core.ifc.posting.posted import read_posted
from analysis_core.ifc.source import open_model
from analysis_core.job.reader import load, parse

SAMPLES = Path(__file__).resolve().parents[1] / "sample_models"
JOB = SAMPLES / "quarry_lane.yaml"
SCHEMAS = ("ifc2x3", "ifc4", "ifc4x3")
KINDS = [f"{kind}_{schema}" for kind in ("physical", "analytical", "both") for schema in SCHEMAS]


def settings_of(kind):
    return load(JOB) if kind.startswith("physical") else load(SAMPLES / "quarry_lane_analysis.yaml")


def posted(tmp_path, kind="physical_ifc4", settings=None):
    source = SAMPLES / f"quarry_lane_{kind}.ifc"
    settings = settings or settings_of(kind)
    target = tmp_path / "posted.ifc"
    outcome = pipeline.run(source, settings)
    pipeline.post(outcome, source, target)
    return target, outcome


def revised(path, change):
    model = ifcopenshell.open(path)
    change(model)
    model.write(str(path))
    return path


def states_of(path, settings):
    found = pipeline.survey(path, settings)
    names = found.model.names
    states = pipeline.posted_states(found, settings)
    return {names[line.elements[0]]: states[line.mark] for line in found.model.lines}


@pytest.mark.parametrize("kind", KINDS)
def test_what_was_just_posted_is_current_in_every_schema(tmp_path, kind, monkeypatch):
    path, outcome = posted(tmp_path, kind)
    settings = settings_of(kind)

    def forbidden(*_):
        raise AssertionError("nothing is to be solved")

    monkeypatch.setattr(distribution, "solve_lines", forbidden)
    found = pipeline.survey(path, settings)
    states = pipeline.posted_states(found, settings)

    assert len(states) == len(outcome.lines) > 5
    assert {state.state for state in states.values()} == {"current"}
    assert not any(state.reasons for state in states.values())
    assert all(state.computed_at.endswith("Z") for state in states.values())


def test_the_basis_stands_beside_the_fingerprint_and_comes_back_whole(tmp_path):
    path, outcome = posted(tmp_path)
    file = ifcopenshell.open(path)
    back = read_posted(open_model(path))

    texts = [p for p in file.by_type("IfcPropertySingleValue") if p.Name == "Basis"]
    assert {p.NominalValue.is_a() for p in texts} == {"IfcText"}
    for result in outcome.lines:
        for element in result.line.elements:
            (entry,) = back[element]
            assert entry.mark == result.line.mark
            assert entry.fingerprint == result.fingerprint
            assert dict(entry.basis) == dict(result.basis) != {}


def test_a_file_without_our_sets_holds_nothing_posted():
    path = SAMPLES / "quarry_lane_physical_ifc4.ifc"
    found = pipeline.survey(path, load(JOB))

    assert read_posted(open_model(path)) == {}
    assert {s.state for s in pipeline.posted_states(found, load(JOB)).values()} == {"not posted"}


def test_a_changed_section_makes_its_line_and_what_it_bears_on_stale_with_the_reasons(tmp_path):
    path, _ = posted(tmp_path)

    def deeper_joists(model):
        joist = next(b for b in model.by_type("IfcBeam") if b.Name == "J-1")
        shape = joist.Representation.Representations[1].Items[0]
        copy = model.create_entity("IfcIShapeProfileDef", **{
            k: v for k, v in shape.SweptArea.get_info().items() if k not in ("id", "type")
        })  # fmt: skip
        copy.OverallDepth = 333.0
        copy.ProfileName = "I 333"
        body = model.create_entity(
            "IfcExtrudedAreaSolid", copy, shape.Position, shape.ExtrudedDirection, shape.Depth
        )
        joist.Representation.Representations[1].Items = [body]

    states = states_of(revised(path, deeper_joists), load(JOB))

    stale = {name: state for name, state in states.items() if state.state == "stale"}
    assert set(stale) == {"J-1", "B1-AB", "B2-AB"}
    reasons = stale["J-1"].reasons
    assert any(
        r.startswith("section of J-1 changed from") and r.endswith("to I 333 333 mm deep")
        for r in reasons
    )
    mark = next(r for r in stale["B1-AB"].reasons)
    assert mark.startswith("FF-")
    assert mark.endswith(", whose reactions it receives, changed")
    assert all(state.state == "current" for name, state in states.items() if name not in stale)


def test_other_settings_make_all_results_stale(tmp_path):
    path, _ = posted(tmp_path)
    settings = parse(JOB.read_text(encoding="utf-8").replace("8 kN/m", "8.5 kN/m", 1))
    states = states_of(path, settings)

    assert {n for n, s in states.items() if s.state == "stale"} == {"B1-AB"}
    assert states["B1-AB"].reasons == ("actions of Offices changed",)


def test_results_without_a_basis_are_stale_for_a_reason_that_says_so(tmp_path):
    path, _ = posted(tmp_path)

    def without_basis(model):
        for item in model.by_type("IfcPropertySingleValue"):
            if item.Name == "Basis":
                item.NominalValue = model.create_entity("IfcText", "{not JSON")

    revised(path, without_basis)
    assert {s.state for s in states_of(path, load(JOB)).values()} == {"current"}
    changed = parse(JOB.read_text(encoding="utf-8").replace("8 kN/m", "8.5 kN/m", 1))
    assert "was not recorded" in states_of(path, changed)["B1-AB"].reasons[0]


def test_lines_of_which_only_some_were_posted(tmp_path):
    source, target = SAMPLES / "quarry_lane_physical_ifc4.ifc", tmp_path / "some.ifc"
    outcome = pipeline.run(source, load(JOB))
    first, second = outcome.lines[0].line.mark, outcome.lines[2].line.mark

    arguments = ["post", str(source), "--job", str(JOB), "-o", str(target)]
    assert main([*arguments, "--line", first]) == 0
    found = pipeline.survey(target, load(JOB))
    states = pipeline.posted_states(found, load(JOB))
    assert [m for m, s in states.items() if s.state == "current"] == [first]
    assert {s.state for m, s in states.items() if m != first} == {"not posted"}

    # Another line later: what was posted for the first stays.
    assert main(["post", str(target), "--job", str(JOB), "--in-place", "--line", second]) == 0
    states = pipeline.posted_states(pipeline.survey(target, load(JOB)), load(JOB))
    assert [m for m, s in states.items() if s.state == "current"] == [first, second]


@pytest.mark.parametrize("legs", [False, True])
def test_elements_of_several_lines_hold_the_results_of_each(tmp_path, legs):
    text = JOB.read_text(encoding="utf-8")
    if legs:
        text += "\nanalysis: {columns_as_legs: true}\n"
    settings = parse(text)
    path, outcome = posted(tmp_path, settings=settings)
    owners = {}
    for result in outcome.lines:
        for element in result.line.elements:
            owners.setdefault(element, []).append(result)
    shared = {e: found for e, found in owners.items() if len(found) > 1}
    back = read_posted(open_model(path))

    assert bool(shared) == legs
    for element, found in shared.items():
        assert [e.mark for e in back[element]] == [r.line.mark for r in found]
        assert [dict(e.basis) for e in back[element]] == [dict(r.basis) for r in found]
    assert {s.state for s in states_of(path, settings).values()} == {"current"}


def test_survey_shows_the_states_as_text_and_as_data(tmp_path, capsys):
    path, _ = posted(tmp_path)
    changed = tmp_path / "job.yaml"
    changed.write_text(JOB.read_text(encoding="utf-8").replace("8 kN/m", "8.5 kN/m", 1))

    assert main(["survey", str(path), "--job", str(changed), "--json", str(tmp_path / "s")]) == 0
    out, _ = capsys.readouterr()
    data = json.loads((tmp_path / "s").read_text(encoding="utf-8"))

    assert "Results in the file, by line: 10 current, 1 stale" in out
    assert "FF-01 stale: actions of Offices changed" in out
    by_mark = {line["mark"]: line["posted"] for line in data["lines"]}
    assert by_mark["FF-01"]["state"] == "stale"
    assert by_mark["FF-01"]["reasons"] == ["actions of Offices changed"]
    assert by_mark["FF-02"] == {**by_mark["FF-02"], "state": "current", "reasons": []}


def test_survey_of_one_line_shows_that_line_alone(tmp_path, capsys):
    path, _ = posted(tmp_path)

    assert main(["survey", str(path), "--job", str(JOB), "--line", "FF-02"]) == 0
    out, _ = capsys.readouterr()
    assert "FF-02  line" in out
    assert "FF-01  line" not in out
    assert "Results in the file, by line: 1 current" in out


def test_marks_that_were_posted_stay_when_a_line_before_them_is_gone(tmp_path):
    path, outcome = posted(tmp_path)
    names = outcome.model.names
    before = {names[r.line.elements[0]]: r.line.mark for r in outcome.lines}

    def without_the_first_rafters(model):
        beam = next(b for b in model.by_type("IfcBeam") if b.Name == "R-A")
        for relation in model.get_inverse(beam):
            for attribute in ("RelatedObjects", "RelatedElements"):
                others = getattr(relation, attribute, None)
                if others and beam in others:
                    setattr(relation, attribute, [o for o in others if o != beam])
        model.remove(beam)

    revised(path, without_the_first_rafters)
    # By the mark in the job file, too, the line that has it on the screen is meant.
    text = JOB.read_text(encoding="utf-8") + (
        f"  - {{on: {{line: {before['R-C']}}}, span_ratio: 300}}\n"
        f"supports:\n  - {{on: {{line: {before['R-C']}}}, end: start, condition: fixed}}\n"
    )
    found = pipeline.survey(path, parse(text))
    after = {found.model.names[line.elements[0]]: line.mark for line in found.model.lines}

    assert "R-A" in before
    assert "R-A" not in after
    assert {name: before[name] for name in after} == after
    ends = {x.mark: x.joints[0].support for x in found.model.lines}
    fixed = [mark for mark, held in ends.items() if held and held.rotation > 0]
    assert fixed == [before["R-C"]]
