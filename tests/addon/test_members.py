"""Other sections and materials for members: what is offered, decided, found and told."""

import shutil
from dataclasses import replace
from pathlib import Path

import demo
import pytest

from analysis_core import pipeline
from analysis_core.checking.choosing import Choice, Effect, Tried
from analysis_core.checking.offers import Candidate
from analysis_core.errors import JobError
from analysis_core.job.edit import as_list, entries
from analysis_core.job.reader import load, parse
from analysis_core.model import Material, Section
from analysis_core.settings import TableSection
from analysis_core.units import display_units
from freecad.spanledger.opened_model import OpenedModel
from freecad.spanledger.present.choices import choice_view, total_words
from freecad.spanledger.present.member_decisions import decide_members, drop_members
from freecad.spanledger.present.profiles import HOST, compared, fitting, kinds_of, profile_rows
from freecad.spanledger.present.scopes import elements_of, every_kind, scopes
from freecad.spanledger.profile_shelf import ShelfKeeper, lightest, narrowed

SAMPLES = Path(__file__).resolve().parents[2] / "sample_models"
UNITS = display_units()
STEEL = Material("Steel", 210e9, density=7850.0, category="steel")
ROW = TableSection(
    "W 150", "I",
    {"depth": 0.3, "width": 0.15, "web_thickness": 0.0071, "flange_thickness": 0.0107},
    ("Wide",), "l.csv",
)  # fmt: skip


def silent(_step, _part):
    return None


@pytest.fixture
def outcome():
    """The demonstration lines, of a material, the second of the first one's section."""
    made = demo.outcome()
    results = tuple(
        replace(
            r,
            line=replace(r.line, members=tuple(replace(m, material=STEEL) for m in r.line.members)),
        )
        for r in made.lines
    )
    return replace(
        made, lines=results, model=replace(made.model, lines=tuple(r.line for r in results))
    )


# Decisions.
def test_one_entry_holds_for_all_members_and_states_what_only_the_host_has():
    text = decide_members("# mine\n", ["A", "B"], profile="W 150", row=ROW)
    assert entries(text, "members") == [{"on": {"id": ["A", "B"]}, "profile": "W 150"}]
    (section,) = entries(text, "section_table")
    assert (section["depth"], section["category"]) == ("300 mm", "Wide")
    (read,) = parse(text).section_table
    assert read.dimensions == pytest.approx(ROW.dimensions)
    assert text.startswith("# mine")
    again = decide_members(text, ["C"], profile="W 150", row=ROW)
    assert len(entries(again, "section_table")) == 1


def test_a_later_decision_takes_the_place_of_what_it_covers():
    text = decide_members("", ["A", "B"], profile="P")
    text = decide_members(text, ["A", "B"], material="M")
    assert entries(text, "members") == [{"on": {"id": ["A", "B"]}, "material": "M", "profile": "P"}]
    text = decide_members(text, ["A"], profile="Q")
    text = decide_members(text, ["A", "B", "C"], profile="R")
    assert entries(text, "members") == [
        {"on": {"id": ["A", "B"]}, "material": "M"},
        {"on": {"id": ["A", "B", "C"]}, "profile": "R"},
    ]


def test_what_was_given_is_taken_back_from_some_members():
    text = decide_members("title: T\n", ["A", "B", "C"], profile="P")
    text = drop_members(text, ["B"])
    assert entries(text, "members") == [{"on": {"id": ["A", "C"]}, "profile": "P"}]
    assert drop_members(text, ["A", "C"]).strip() == "title: T"
    by_name = "members:\n  - {on: {name: J-*}, profile: P}\n"
    assert drop_members(by_name, ["A"]) == by_name


def test_a_table_in_a_file_stays_beside_what_is_added():
    text = as_list("section_table: own.csv  # ours\n", "section_table")
    assert text == "section_table: [own.csv]  # ours\n"
    text = decide_members("section_table: own.csv\n", ["A"], profile="W 150", row=ROW)
    first, second = entries(text, "section_table")
    assert first == "own.csv"
    assert second["name"] == "W 150"


def test_no_member_is_no_decision():
    with pytest.raises(JobError, match="No element is chosen"):
        decide_members("", [], profile="P")


# What is meant.
def test_a_span_a_line_and_all_lines_alike_can_be_meant(outcome):
    found = scopes(outcome, 0, 1)
    assert [s.key for s in found] == ["span", "line", "alike"]
    span, line, alike = found
    assert span.elements == ("GID-L1-1",)
    assert line.elements == ("GID-L1-0", "GID-L1-1")
    assert set(alike.marks) == {"L1", "L2"}
    assert (line.sections, line.materials, line.density) == (("I-demo 300",), ("Steel",), 7850.0)
    assert [s.key for s in scopes(outcome, 1, 0)] == ["line", "alike"]  # it has one span
    assert every_kind(outcome).marks == ()
    assert elements_of(outcome, ["L2"]) == ("GID-L2-0",)


# What is offered.
def candidates():
    def section(area, inertia):
        return Section("s", "I", area=area, inertia=inertia, depth=0.2, width=0.1)

    return [
        Candidate("Alpha 200", section(2e-3, 2e-5), ("Alpha",), HOST),
        Candidate("Beta [2]", section(3e-3, 1e-5), ("Beta", "Other"), "model"),
        Candidate("<b>Bold", section(1e-3, 3e-5), (), "job"),
    ]


def test_rows_show_units_and_are_filtered_by_words_and_kind():
    rows = profile_rows(candidates(), 7850.0, UNITS)
    depth, width = (UNITS.number(value, "section length") for value in (0.2, 0.1))
    assert rows[0].texts == ("Alpha 200", "Alpha", "FreeCAD", depth, width, "15.7", "2000")
    assert [r.texts[0] for r in fitting(rows, "free 200", "")] == ["Alpha 200"]
    assert [r.texts[0] for r in fitting(rows, "", "Other")] == ["Beta [2]"]
    assert kinds_of(candidates()) == ["Alpha", "Beta", "Other"]
    assert profile_rows(candidates(), 0.0, UNITS)[0].texts[5] == "–"


def test_the_difference_to_what_is_there_is_said():
    old, new, _ = candidates()
    words = compared(old, new, (7850.0, 7850.0), UNITS)
    assert words.startswith("Beta [2]: depth 200")
    assert words.endswith("mass 15.7 → 23.6 kg/m, inertia 2000 → 1000 cm⁴")
    assert "→" not in compared(None, new, (7850.0, 7850.0), UNITS)


def test_kinds_and_names_narrow_together():
    names = [c.name for c in narrowed(candidates(), ["Beta", "Alpha"], ["*200", "<b>*"])]
    assert names == ["Alpha 200"]
    assert len(narrowed(candidates(), [], [])) == 3


# What was found.
def choice():
    return Choice(
        ("L1", "L2"), "old", "new", 40.0, 30.0, 10.0,
        (
            Tried("small", 20.0, 2.5, "bending", False, deflection=0.02),
            Tried("odd", 25.0, float("inf"), "bending", False, "not checked: class 4"),
            Tried("new", 30.0, 0.95, "bending", True, deflection=0.01, categories=("Wide",)),
        ),
        (
            Effect("L1", True, 50e3, 49e3, 0.5, 0.95),
            Effect("L3", False, 90e3, 91e3, 0.99, 1.02),
        ),
        left_out=("plank",),
    )  # fmt: skip


def test_candidates_are_shown_with_their_effects_and_a_warning():
    view = choice_view(choice(), UNITS)
    assert [row.texts[0] for row in view.rows] == ["new", "odd", "small"]
    assert view.rows[0].texts[1:6] == ("Wide", "30.0", "95.0 %", "10.0 mm", "bending")
    assert view.rows[1].texts[-1] == "not checked"
    assert view.rows[1].reason == "not checked: class 4"
    assert view.changes
    assert view.summary.startswith("new in place of old: 30.0 instead of 40.0 kg/m over 10.00 m.")
    assert "1 of another material" in view.summary
    assert view.effects[1].texts == ("L3", "90.00 kN", "91.00 kN", "99.0 %", "102.0 %")
    assert view.effects[0].texts[0] == "L1 (itself)"
    assert "L3" in view.warning
    assert total_words([choice(), choice()]) == "Sections that change: 2; 200 kg less in all."


def test_what_stays_and_what_nothing_suits_is_said():
    stays = replace(choice(), chosen="old", effects=())
    none = replace(choice(), chosen="", effects=())
    assert "old stays" in choice_view(stays, UNITS).summary
    assert "None of 3 suffices" in choice_view(none, UNITS).summary
    assert not choice_view(stays, UNITS).changes
    assert total_words([stays, none]) == "Nothing lighter suffices; nothing would change."
    untried = replace(none, tried=(), reason="a member varies along its length")
    assert "a member varies" in choice_view(untried, UNITS).summary


# An open model.
@pytest.fixture
def opened(tmp_path):
    path = tmp_path / "model.ifc"
    shutil.copy(SAMPLES / "quarry_lane_physical_ifc4.ifc", path)
    job = (SAMPLES / "quarry_lane.yaml").read_text(encoding="utf-8")
    (tmp_path / "own.csv").write_text(
        "name,shape,depth,width\nR 400,rectangle,400 mm,250 mm\n", encoding="utf-8"
    )
    path.with_suffix(".yaml").write_text(job + "\nsection_table: own.csv\n", encoding="utf-8")
    found = OpenedModel.open(path)
    found.receive(found.run(found.settings, silent))
    return found


def test_a_table_beside_the_job_file_is_read_and_a_missing_one_refused(opened):
    assert [s.name for s in opened.settings.section_table] == ["R 400"]
    assert opened.settings.section_table == load(opened.job_path).section_table
    with pytest.raises(JobError, match=r"none\.csv"):
        opened.decide("x", "section_table: none.csv\n")
    (opened.path.parent / "own.csv").write_text("name,shape,diameter\nD,circle,1 m\n", "utf-8")
    assert opened.changed_on_disk()
    assert opened.path.parent / "own.csv" in opened.files
    opened.read_again()
    assert [s.name for s in opened.settings.section_table] == ["D"]
    opened.receive(opened.run(opened.settings, silent))
    assert not opened.changed_on_disk()


def test_the_shelf_holds_model_job_and_host_once_by_name(opened, tmp_path):
    path = tmp_path / "host.csv"
    path.write_text("Wide,W 300,H,150,300,7,11\nI,IPE300,H,150,300,7.1,10.7\n", encoding="utf-8")
    keeper = ShelfKeeper()
    shelf = keeper.fill(opened, opened.settings, [path], silent)

    assert {"IPE 300", "IPE 270"} <= {c.name for c in shelf.offers["model"].candidates}
    assert [c.name for c in shelf.offers["job"].candidates] == ["R 400"]
    assert [(c.name, c.origin) for c in shelf.offers["host"].candidates] == [
        ("W 300", "host"), ("IPE 300", "model"),
    ]  # fmt: skip
    every = {c.name: c for c in shelf.every()}
    assert len(every) == len(shelf.every())
    assert every["IPE 300"].categories == ("I",)  # the kind is known from the host
    assert set(shelf.rows) >= {"W 300"}
    assert "IPE 300" not in shelf.rows
    assert shelf.materials["Steel S355"].density == 7850.0
    made = {c.name for c in shelf.made_of("Steel S355")}
    assert "W 300" in made
    assert not made & {"R 400", "R 300x500"}
    assert shelf.made_of("nothing known") == shelf.every()
    assert keeper.fill(opened, opened.settings, [path], silent).offers["host"] is shelf.offers[
        "host"
    ]  # fmt: skip


def test_a_decision_reads_the_model_once_and_comes_out_as_a_run_of_its_own(opened):
    reading = opened.reading
    line = next(r.line for r in opened.outcome.lines if r.line.mark == "FF-04")
    elements = elements_of(opened.outcome, ["FF-04"])
    opened.decide("x", decide_members(opened.text, elements, profile="IPE 270"))
    opened.receive(opened.run(opened.settings, silent))

    assert opened.reading.building is reading.building  # only the profiles were read
    changed = next(r for r in opened.outcome.lines if r.line.mark == "FF-04")
    assert line.members[0].section.name == "IPE 300"
    assert changed.line.members[0].section.name == "IPE 270"
    full = pipeline.run(opened.path, load(opened.job_path))
    assert {r.line.mark: r.fingerprint for r in full.lines} == {
        r.line.mark: r.fingerprint for r in opened.outcome.lines
    }
    opened.undo()
    opened.receive(opened.run(opened.settings, silent))
    again = next(r for r in opened.outcome.lines if r.line.mark == "FF-04")
    assert again.line == line


def test_the_lightest_follows_what_was_decided_before(opened):
    shelf = ShelfKeeper().fill(opened, opened.settings, [], silent)
    elements = elements_of(opened.outcome, ["ROOF-01"])
    opened.decide("x", decide_members(opened.text, elements, profile="IPE 300"))
    told = []
    (found,) = lightest(
        opened, opened.settings, shelf.every(), ["ROOF-01"],
        lambda step, part: told.append((step, part)), alike=False, strict=True,
    )  # fmt: skip
    assert (found.before, found.chosen) == ("IPE 300", "IPE 270")
    assert "R 400" in found.left_out
    assert ("Choosing", 0.0) in told
    parts = [part for step, part in told if step == "Choosing"]
    assert parts == sorted(parts)


class StopError(Exception):
    pass


def test_the_search_can_be_stopped(opened):
    shelf = ShelfKeeper().fill(opened, opened.settings, [], silent)

    def stop(step, _part):
        if step == "Choosing":
            raise StopError

    with pytest.raises(StopError):
        lightest(opened, opened.settings, shelf.every(), [], stop, alike=True, strict=True)
