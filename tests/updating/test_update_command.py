"""Sections and materials from the command line, and the section table of the job file."""

import json

import ifcopenshell
import pytest
from update_makers import SAMPLES, named, sample, size

from analysis_core.cli import main
from analysis_core.errors import JobError
from analysis_core.job.reader import load, parse
from analysis_core.settings import TableSection

JOB = SAMPLES / "quarry_lane.yaml"
ROWS = "name,shape,depth,width,web_thickness,flange_thickness,fillet_radius\n"
CSV = ROWS + '"I 410",I,410 mm,190 mm,9 mm,15 mm,18 mm\nR 8x16,rectangle,16 in,8 in,,,\n'
YAML = "- {name: R 8x16, shape: rectangle, depth: 16 in, width: 8 in}\n"


def job_with(tmp_path, table, text):
    (tmp_path / table).write_text(text, encoding="utf-8")
    path = tmp_path / "job.yaml"
    path.write_text(JOB.read_text(encoding="utf-8") + f"\nsection_table: {table}\n", "utf-8")
    return path


def test_the_command_updates_lists_the_changes_and_posts(tmp_path, capsys):
    job = job_with(tmp_path, "sections.csv", CSV)
    target, data = tmp_path / "out.ifc", tmp_path / "out.json"
    status = main([
        "post", str(sample("ifc4")), "--job", str(job), "-o", str(target), "--json", str(data),
        "--section", "FF-04=I 410", "--section", "FF-05 = R 8x16",
        "--material", "FF-05=Concrete C30/37",
    ])  # fmt: skip
    out, err = capsys.readouterr()
    model = ifcopenshell.open(target)

    assert status == 0
    assert "J-1 [" in out
    assert "extruded body" in out
    assert "property sets new" in err
    assert size(named(model, "J-1"))[1] == pytest.approx(0.410, abs=1e-6)
    assert size(named(model, "J-2"))[:2] == pytest.approx([0.2032, 0.4064], abs=1e-6)
    assert any(s.Name == "Spanledger_Effects" for s in model.by_type("IfcPropertySet"))
    changes = json.loads(data.read_text(encoding="utf-8"))["changes"]
    assert {
        "element": named(model, "J-1").GlobalId, "name": "J-1", "what": "extruded body",
        "before": "IPE 300", "after": "I 410",
    } in changes  # fmt: skip


@pytest.mark.parametrize(
    ("options", "words"),
    [
        (["--section", "FF-04"], "LINE-OR-GLOBALID=NAME"),
        (["--section", "FF-04=A", "--section", "FF-04=B"], "both 'A' and 'B'"),
        (["--section", "FF-04=IPE 270", "--line", "FF-04"], "'--line' does not go"),
        (["--section", "FF-04=IPE 270", "--remove"], "'--remove'"),
    ],
)
def test_what_cannot_be_meant_is_refused_in_a_sentence(tmp_path, capsys, options, words):
    target = tmp_path / "out.ifc"
    status = main(["post", str(sample("ifc4")), "--job", str(JOB), "-o", str(target), *options])

    assert status == 2
    assert words in capsys.readouterr().err
    assert not target.exists()


def test_a_table_in_csv_and_in_yaml_beside_the_job_file(tmp_path):
    wanted = TableSection("R 8x16", "rectangle", {"depth": 0.4064, "width": 0.2032})
    from_csv = load(job_with(tmp_path, "t.csv", CSV)).section_table
    assert load(job_with(tmp_path, "s.csv", CSV.replace(",", ";"))).section_table == from_csv
    from_yaml = load(job_with(tmp_path, "t.yaml", YAML)).section_table

    assert from_csv[1] == from_yaml[0]
    assert from_yaml[0].name == wanted.name
    assert dict(from_yaml[0].dimensions) == pytest.approx(dict(wanted.dimensions), rel=1e-12)


@pytest.mark.parametrize(
    ("row", "words"),
    [
        ("{name: A, shape: I, depth: 1 m, width: 1 m}", "lacks web_thickness, flange_thickness"),
        ("{name: A, shape: circle, diameter: 1 m, width: 1 m}", "'circle' does not have"),
        ("{name: A, shape: circle, diameter: 0 m}", "must be positive"),
        ("{name: A, shape: square, width: 1 m}", "must be one of"),
        ("{name: A, shape: circle, diameter: 5}", "text with a unit"),
        ("{name: A, shape: circle, radius: 5 m}", "unknown key 'radius'"),
        ("{shape: circle, diameter: 5 m}", "no 'name'"),
    ],
)
def test_a_row_that_makes_no_section_is_refused(row, words):
    with pytest.raises(JobError, match=words):
        parse(f"section_table:\n  - {row}\n")


@pytest.mark.parametrize(
    ("table", "text", "words"),
    [
        ("t.csv", ROWS + "A,rectangle,1 m,1 m,,,,9\n", "Row 2 .* 8 cells"),
        ("t.csv", ROWS + "A,rectangle,1,1 m\n", "'1' is not a length with its unit"),
        ("t.yaml", "a: 1\n", "list of sections"),
    ],
)
def test_a_table_that_is_not_understood_is_named(tmp_path, table, text, words):
    with pytest.raises(JobError, match=rf"Section table '{table}'.*{words}"):
        load(job_with(tmp_path, table, text))


def test_a_table_that_is_not_there_is_named(tmp_path):
    path = tmp_path / "job.yaml"
    path.write_text("section_table: none.csv\n")
    with pytest.raises(JobError, match=r"none\.csv' cannot be read"):
        load(path)
