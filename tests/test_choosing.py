"""The lightest section for lines: stiffness and weight follow, neighbours are told of."""

import json
from dataclasses import replace
from pathlib import Path

import pytest

from analysis_core import pipeline
from analysis_core.checking import choosing
from analysis_core.cli import main
from analysis_core.job.reader import load, parse, with_section_tables
from analysis_core.model import DistributedForce
from analysis_core.settings import Selector

SAMPLES = Path(__file__).resolve().parents[1] / "sample_models"
MODEL = SAMPLES / "quarry_lane_physical_ifc4.ifc"
JOB = SAMPLES / "quarry_lane.yaml"
# Dimensions of EN 10365, from memory.
TABLE = """name,shape,depth,width,web_thickness,flange_thickness,fillet_radius
IPE 200,I,200 mm,100 mm,5.6 mm,8.5 mm,12 mm
IPE 240,I,240 mm,120 mm,6.2 mm,9.8 mm,15 mm
IPE 360,I,360 mm,170 mm,8 mm,12.7 mm,18 mm
IPE 450,I,450 mm,190 mm,9.4 mm,14.6 mm,21 mm
"""


@pytest.fixture
def table(tmp_path):
    path = tmp_path / "sections.csv"
    path.write_text(TABLE, encoding="utf-8")
    return path


@pytest.fixture(scope="module")
def model():
    return pipeline.survey(MODEL, load(JOB)).model


def test_stiffness_and_self_weight_follow_the_section(model):
    line = next(line for line in model.lines if line.mark == "FF-04")
    (member,) = line.members
    heavier = replace(
        member.section, name="twice", area=2 * member.section.area,
        inertia=3 * member.section.inertia,
    )  # fmt: skip

    changed = choosing.with_section(line, heavier, [])

    assert changed.members[0].flexural_rigidity == pytest.approx(3 * member.flexural_rigidity)
    before, after = (
        {a.case: a.transverse[0] for a in x.actions if isinstance(a, DistributedForce)}
        for x in (line, changed)
    )
    # 7850 kg/m³ · 9.80665 m/s² · 53.8 cm².
    assert before["Self weight"] == pytest.approx(7850 * 9.80665 * member.section.area)
    assert after["Self weight"] == pytest.approx(2 * before["Self weight"])
    assert after["Offices"] == before["Offices"]


def test_the_lightest_that_suits_is_chosen_and_everything_lighter_was_tried(table):
    (choice,), _ = pipeline.lightest(MODEL, str(table), load(JOB), marks=["ROOF-01"])

    assert choice.before == "IPE 270"
    assert choice.chosen == choice.tried[-1].name == "IPE 200"
    # Deflection and lateral buckling of IPE 200 found anew by putting it into the model's line.
    assert choice.tried[-1].use <= 1.0
    assert choice.mass_after == pytest.approx(22.4, rel=0.01)  # kg/m, as makers print it


def test_what_stands_there_stays_where_nothing_lighter_suits(table):
    (choice,), _ = pipeline.lightest(MODEL, str(table), load(JOB), marks=["FF-04"])

    assert [t.name for t in choice.tried] == ["IPE 200", "IPE 240", "IPE 300"]
    assert [t.suits for t in choice.tried] == [False, False, True]
    assert choice.chosen == choice.before == "IPE 300"
    # w scales with 1/I: 16.5 mm · 8356/3892 = 35.3 mm of 17.8 mm for IPE 240, less its weight.
    assert choice.tried[1].use == pytest.approx(0.925 * 8356 / 3892, rel=0.02)


def test_the_lines_that_carry_it_are_told_of_before_anything_is_written(table):
    job = load(JOB)
    weak = replace(job, limits=(replace(job.limits[0], span_ratio=600.0),))
    (choice,), _ = pipeline.lightest(MODEL, str(table), weak, marks=["FF-04"])

    assert choice.chosen == "IPE 360"
    effects = {e.mark: e for e in choice.effects}
    assert set(effects) == {"FF-01", "FF-02", "FF-04"}
    own = effects["FF-04"]
    more = (choice.mass_after - choice.mass_before) * 9.80665 * 1.35
    assert own.own
    assert own.reaction_after - own.reaction_before == pytest.approx(more * 6.4 / 2, rel=1e-6)
    assert own.use_after < own.use_before
    carrier = effects["FF-01"]
    assert 0 < carrier.reaction_after - carrier.reaction_before < more * 6.4


def test_all_lines_of_a_kind_get_one_section(model):
    groups = choosing.kinds(model, ["FF-05"], alike=True)
    assert groups == [("FF-04", "FF-05", "FF-06", "FF-07")]
    each = choosing.kinds(model, ["FF-05", "ROOF-01"], alike=False)
    assert sorted(each) == [("FF-05",), ("ROOF-01",)]
    every = choosing.kinds(model, [], alike=True)
    assert ("ROOF-01", "ROOF-02", "ROOF-03", "ROOF-04") in every


def test_what_is_chosen_can_be_posted_and_then_has_the_use_that_was_told(table, tmp_path, capsys):
    out = tmp_path / "out.json"
    common = [str(MODEL), "--job", str(JOB)]
    assert main(["balance", *common, "--lightest", str(table), "--line", "ROOF-01",
                 "--json", str(out)]) == 0  # fmt: skip
    assert '--section "ROOF-01=IPE 200"' in capsys.readouterr().out
    (choice,) = json.loads(out.read_text(encoding="utf-8"))["choices"]

    job = tmp_path / "job.yaml"
    job.write_text(
        JOB.read_text(encoding="utf-8") + f"\nsection_table: {table.name}\n", encoding="utf-8"
    )
    target = tmp_path / "changed.ifc"
    assert main(["post", str(MODEL), "--job", str(job), "-o", str(target),
                 "--section", "ROOF-01=IPE 200"]) == 0  # fmt: skip
    settings = load(job)
    outcome = pipeline.run(target, settings)
    found = pipeline.checks(outcome, settings)["ROOF-01"]
    worst = max(each.worst.use for each in found)
    assert worst == pytest.approx(choice["tried"][-1]["use"], rel=1e-6)


def test_an_empty_table_and_an_unknown_line_are_errors(tmp_path, capsys):
    empty = tmp_path / "none.csv"
    empty.write_text("name,shape\n", encoding="utf-8")
    assert main(["balance", str(MODEL), "--lightest", str(empty)]) == 2
    assert "holds no section to choose from" in capsys.readouterr().err
    assert main(["balance", str(MODEL), "--lightest", "model", "--line", "FF-99"]) == 2
    assert "the nearest is" in capsys.readouterr().err


def test_a_line_that_nothing_suits_is_said_so(tmp_path, capsys):
    small = tmp_path / "small.csv"
    small.write_text(TABLE.rsplit("IPE 360", 1)[0], encoding="utf-8")
    job = load(JOB)
    strict = replace(job, limits=(replace(job.limits[0], span_ratio=2000.0),))
    (choice,), _ = pipeline.lightest(MODEL, str(small), strict, marks=["FF-04"])
    assert choice.chosen == ""
    assert not any(t.suits for t in choice.tried)


def test_what_has_no_code_is_not_chosen_though_nothing_speaks_against_it(tmp_path):
    path = tmp_path / "aluminium.ifc"
    path.write_text(
        MODEL.read_text(encoding="utf-8").replace("Steel S355", "Aluminium 6082"), encoding="utf-8"
    )
    (choice,), _ = pipeline.lightest(path, "model", load(JOB), marks=["FF-04"])
    assert choice.chosen == ""
    assert {t.reason.partition(":")[0] for t in choice.tried} == {"not checked"}


def test_of_many_lines_each_has_its_say(table):
    # FF-04 and ROOF-01 have other spans, loads and limits; a common choice suits both.
    job = load(JOB)
    known = pipeline.stock(MODEL, job)
    found = pipeline.survey(MODEL, job)
    settings = with_section_tables(job, [table])
    offer = pipeline.offered(known, settings, "job")

    def together(*marks):
        def solve(model):
            return pipeline.solve(replace(found, model=model, standing=()), job)

        (choice,) = choosing.choose_lightest(found.model, job, offer.candidates, [marks], solve)
        return choice

    alone = {mark: together(mark) for mark in ("ROOF-01", "FF-04")}
    both = together("ROOF-01", "FF-04")
    heaviest = max(alone.values(), key=lambda choice: choice.tried[-1].mass)
    assert [t.name for t in heaviest.tried if t.name != "IPE 300"][-1] == "IPE 240"
    assert both.chosen == "IPE 360"  # what stands there differs, so it is no candidate
    # The use told of the chosen one is the largest of all lines.
    assert both.tried[-1].use == max(e.use_after for e in both.effects if e.own)


def test_the_line_that_fails_is_not_the_longest_one():
    # Of equal spans the first is asked first; one with a stricter limit must still decide.
    job = load(JOB)
    strict = replace(
        job, limits=(*job.limits, replace(job.limits[1], on=Selector(name="J-4"), span_ratio=420.0))
    )
    found = pipeline.survey(MODEL, strict)
    offer = pipeline.offered(pipeline.stock(MODEL, strict), strict, "model")
    (choice,) = pipeline.lightest_of(found, strict, offer, marks=["FF-04"], alike=True)
    assert choice.marks == ("FF-04", "FF-05", "FF-06", "FF-07")
    assert choice.chosen == ""
    assert choice.tried[-1].name == "IPE 300"
    assert choice.tried[-1].use > 1.0


def test_a_line_of_several_sections_is_named_and_chosen_for_when_asked():
    given = 'members:\n  - {on: {name: B1-AB}, profile: "R 300x300"}\n'
    mixed = parse(f"{JOB.read_text(encoding='utf-8')}\n{given}")
    found = pipeline.survey(MODEL, mixed)
    offer = pipeline.offered(pipeline.stock(MODEL), mixed, "model")

    *_, rest = pipeline.lightest_of(found, mixed, offer)
    assert rest.marks == ("FF-01",)
    assert "several sections" in rest.reason
    (asked,) = pipeline.lightest_of(found, mixed, offer, marks=["FF-01"], alike=True)
    assert asked.before == "R 300x300, R 300x500"
    assert asked.tried
