"""Lists of profiles without a head: what each class means, and what is told of the rest."""

import json
import math
import shutil
from pathlib import Path

import pytest

from analysis_core import pipeline
from analysis_core.cli import main
from analysis_core.errors import JobError
from analysis_core.ifc.updating.stock import table_profile
from analysis_core.job.profile_lists import is_profile_list, profile_list
from analysis_core.job.reader import load, parse, with_section_tables

SAMPLES = Path(__file__).resolve().parents[1] / "sample_models"
MODEL = SAMPLES / "quarry_lane_physical_ifc4.ifc"
JOB = SAMPLES / "quarry_lane.yaml"
HEAD = "# Category, Name, Class, dimensions in mm\n\n"
# Invented; the numbers stand in the order that the host documents (_ProfileC, _ProfileH, …).
LIST = (
    HEAD
    + """Round,O 120x6,C,120,6
Wide,W 150x300,H,150,300,7,11
Planks,P 60x240,R,60,240
Boxes,B 200x100x6,RH,200,100,6
Gutters,G 180x70,U,180,70,8,10
Trays,B 200x100x6,RH,200,100,6
"""
)


def area_of(name):
    (row,) = (s for s in profile_list(LIST, "l.csv").sections if s.name == name)
    return table_profile(row).section()


@pytest.mark.parametrize(
    ("name", "area", "inertia"),
    [
        # Closed forms, mm² and mm⁴: annulus, I without fillets, rectangle, box, channel.
        ("O 120x6", math.pi / 4 * (120**2 - 108**2), math.pi / 64 * (120**4 - 108**4)),
        ("W 150x300", 2 * 150 * 11 + 278 * 7, (150 * 300**3 - 143 * 278**3) / 12),
        ("P 60x240", 60 * 240, 60 * 240**3 / 12),
        ("B 200x100x6", 200 * 100 - 188 * 88, (100 * 200**3 - 88 * 188**3) / 12),
        ("G 180x70", 2 * 70 * 10 + 160 * 8, (70 * 180**3 - 62 * 160**3) / 12),
    ],
)
def test_each_class_has_its_dimensions_where_the_host_puts_them(name, area, inertia):
    section = area_of(name)
    assert section.area == pytest.approx(area * 1e-6, rel=1e-9)
    assert section.inertia == pytest.approx(inertia * 1e-12, rel=1e-9)


def test_a_profile_of_two_categories_is_one_profile():
    found = profile_list(LIST, "l.csv")
    (box,) = (s for s in found.sections if s.shape == "hollow rectangle")
    assert box.categories == ("Boxes", "Trays")
    assert box.origin == "l.csv"


def test_a_box_stated_lying_stands_upright_and_that_is_told():
    (told,) = (f for f in profile_list(LIST, "l.csv").findings if f.slug == "profile-upright")
    assert "B 200x100x6" in told.message
    assert "greater side as depth" in told.message


@pytest.mark.parametrize(
    ("row", "words"),
    [
        ("Wide,A,X,1,2,3,4", "the class is none of C, H, R, RH, U"),
        ("Wide,A,H,100,200,7", "class H has 4 numbers"),
        ("Wide,A,H,100,200,7,11,12", "class H has 4 numbers"),
        ("Wide,A,H,100,two hundred,7,11", "class H has 4 numbers"),
        ("Wide,A,H,100,nan,7,11", "class H has 4 numbers"),
        ("Wide,A,H,100,-200,7,11", "not positive"),
        ("Wide,A,H,100,20,7,11", "thicker than the profile has room for"),
        ("Round,A,C,100,50", "thicker than the profile has room for"),
        ("Boxes,A,RH,100,10,5", "thicker than the profile has room for"),
        ("Gutters,A,U,100,7,8,5", "thicker than the profile has room for"),
        ("Wide,,H,100,200,7,11", "a row has category, name, class"),
        ("Wide", "a row has category, name, class"),
        ("Wide,P 60x240,R,60,250", "further up with other dimensions"),
    ],
)
def test_a_row_that_is_no_profile_is_told_of_with_its_line(row, words):
    found = profile_list(LIST + "\n" + row + "\n" + "Round,O 90x5,C,90,5\n", "l.csv")
    (told,) = (f for f in found.findings if f.slug == "profile-row")
    assert told.message.startswith("Line 10 of the profile list 'l.csv'")
    assert words in told.message
    assert found.sections[-1].name == "O 90x5"
    assert len(found.sections) == 6


def test_many_bad_rows_make_one_readable_sentence():
    found = profile_list(HEAD + "Wide,A,X,1,2\n" * 40, "l.csv")
    (told,) = found.findings
    assert "Lines 3, 4, 5, 6, 7, 8, 9, 10, 11, 12 and 30 more" in told.message


def test_a_table_with_a_head_is_no_such_list():
    assert is_profile_list(LIST)
    assert not is_profile_list("name,shape,depth,width\nA,rectangle,300 mm,200 mm\n")
    assert not is_profile_list("")


def test_a_list_beside_the_job_file_is_its_section_table(tmp_path):
    (tmp_path / "l.csv").write_text(LIST + "x,y,X,1\n", encoding="utf-8")
    job = tmp_path / "job.yaml"
    own = "{name: P 60x240, shape: rectangle, depth: 240 mm, width: 80 mm, category: Beams}"
    job.write_text(f"section_table:\n  - l.csv\n  - {own}\n", encoding="utf-8")

    settings = load(job)
    found = {s.name: s for s in settings.section_table}
    assert set(found) == {"O 120x6", "W 150x300", "P 60x240", "B 200x100x6", "G 180x70"}
    assert found["P 60x240"].dimensions["width"] == pytest.approx(0.08)  # the engineer's own
    assert found["P 60x240"].categories == ("Beams",)
    slugs = {f.slug for f in settings.section_table_findings}
    assert slugs == {
        "profile-row", "profile-upright", "profile-without-fillets", "profile-stated-twice"
    }  # fmt: skip
    told = {f.slug for f in pipeline.survey(MODEL, settings).findings}
    assert slugs <= told
    assert parse(job.read_text(encoding="utf-8")).section_table_files == ("l.csv",)


def test_a_steel_line_is_offered_no_planks_and_only_what_is_asked_for(tmp_path, capsys):
    path, out = tmp_path / "l.csv", tmp_path / "out.json"
    path.write_text(LIST.replace("Planks", "Wood"), encoding="utf-8")
    common = ["balance", str(MODEL), "--job", str(JOB), "--lightest", str(path), "--line", "FF-04",
              "--json", str(out)]  # fmt: skip

    assert main(common) == 0
    (choice,) = json.loads(out.read_text(encoding="utf-8"))["choices"]
    assert choice["left_out"] == ["P 60x240"]
    assert "P 60x240" not in {t["name"] for t in choice["tried"]}
    assert "without fillets" not in capsys.readouterr().out

    assert main([*common, "--only", "gutt*", "--only", "W *"]) == 0
    data = json.loads(out.read_text(encoding="utf-8"))
    (choice,) = data["choices"]
    assert {t["name"] for t in choice["tried"]} <= {"G 180x70", "W 150x300", "IPE 300"}
    assert choice["chosen"] == "W 150x300"
    assert {f["slug"] for f in data["findings"]} == {"profile-upright", "profile-without-fillets"}
    (tried,) = (t for t in choice["tried"] if t["name"] == "W 150x300")
    assert tried["categories"] == ["Wide"]
    assert tried["origin"] == "l.csv"
    # 7850 kg/m³ times the area of the closed form above.
    assert tried["mass_per_length"] == pytest.approx(7850 * (3300 + 1946) * 1e-6, rel=1e-9)


def test_nothing_that_fits_and_options_that_belong_together_are_said(tmp_path, capsys):
    path = tmp_path / "l.csv"
    path.write_text(LIST, encoding="utf-8")
    assert main(["balance", str(MODEL), "--lightest", str(path), "--only", "Rails"]) == 2
    assert "holds no section that fits 'Rails'" in capsys.readouterr().err
    assert main(["balance", str(MODEL), "--only", "Rails"]) == 2
    assert "'--lightest'" in capsys.readouterr().err


def test_the_models_own_profile_takes_the_place_of_a_rougher_one(tmp_path):
    path = tmp_path / "l.csv"
    # As in the model but for the fillets, and another profile altogether.
    path.write_text("I,IPE300,H,150,300,7.1,10.7\nI,IPE 270,H,300,300,20,20\n", encoding="utf-8")
    choices, told = pipeline.lightest(MODEL, str(path), load(JOB), marks=["FF-04"], only=["I*"])

    (choice,) = choices
    assert [(t.name, t.origin) for t in choice.tried] == [("IPE 300", "model")]
    assert choice.tried[0].mass == pytest.approx(42.2, abs=0.05)  # with fillets, EN 10365
    assert {f.slug for f in told} >= {"profile-of-model", "profile-clashes"}


def test_another_profile_of_nearly_the_same_name_stays_one_of_its_own(tmp_path):
    path = tmp_path / "l.csv"
    path.write_text("I,IPE300,H,300,300,20,20\n", encoding="utf-8")
    choices, _ = pipeline.lightest(MODEL, str(path), load(JOB), marks=["FF-04"])
    assert [t.name for t in choices[0].tried] == ["IPE 300"]  # the lighter one stands there
    settings = with_section_tables(load(JOB), [path])
    (candidate,) = pipeline.offered(pipeline.stock(MODEL), settings, "job").candidates
    assert (candidate.name, candidate.origin) == ("IPE300", "l.csv")


def test_a_name_that_several_profiles_of_the_model_have_is_not_offered(tmp_path):
    path = tmp_path / "model.ifc"
    text = MODEL.read_text(encoding="utf-8").replace("'IPE 270'", "'IPE 300'")
    path.write_text(text, encoding="utf-8")
    offer = pipeline.offered(pipeline.stock(path), load(JOB), "model")
    assert "IPE 300" not in {c.name for c in offer.candidates}
    (told,) = offer.findings
    assert (told.slug, "IPE 300" in told.message) == ("profile-ambiguous", True)


def test_the_list_of_the_host_is_understood_row_by_row():
    path = Path("/usr/share/freecad/Mod/Arch/Presets/profiles.csv")
    if shutil.which("freecad") is None or not path.exists():
        pytest.skip("FreeCAD's list is not here")
    text = path.read_text(encoding="utf-8")
    found = profile_list(text, path.name)
    rows = [r for r in text.splitlines() if r.strip() and not r.startswith("#")]

    assert [f.slug for f in found.findings] == ["profile-upright", "profile-without-fillets"]
    assert sum(len(s.categories) for s in found.sections) == len(rows)
    for section in found.sections[::37]:
        assert table_profile(section).section().area > 0.0


def test_a_list_that_holds_nothing_is_an_error(tmp_path):
    path = tmp_path / "l.csv"
    path.write_text("Wide,A,H,1,2\n", encoding="utf-8")
    with pytest.raises(JobError, match="holds no section to choose from"):
        pipeline.lightest(MODEL, str(path), load(JOB))
