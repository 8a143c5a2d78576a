"""Opening a file: everything in it is read, or a sentence says why not and what to do."""

from __future__ import annotations

import hashlib
import re
import subprocess
import sys
import zipfile
from pathlib import Path

import ifcopenshell
import pytest
from ifc_makers import AnalysisFile, Case, SpreadLoad, continuous_beam

from analysis_core.errors import IfcReadError
from analysis_core.ifc.source import Source, open_model

SHARED = Path(__file__).parents[2] / "shared" / "ifc"
SCHEMAS = ("IFC2X3", "IFC4", "IFC4X3")

HEADER = """ISO-10303-21;
HEADER;
FILE_DESCRIPTION((''),'2;1');
FILE_NAME('t.ifc','2024-01-01T00:00:00',(''),(''),'','','');
FILE_SCHEMA(('IFC4'));
ENDSEC;
"""
UNITS = """#1=IFCSIUNIT(*,.LENGTHUNIT.,$,.METRE.);
#2=IFCUNITASSIGNMENT((#1));
#3=IFCPROJECT('3tzC9CZ3DEzQMkHbYc8Yvs',$,'P',$,$,$,$,$,#2);
"""
END = "ENDSEC;\nEND-ISO-10303-21;\n"
PERSON = "#9=IFCPERSON($,'{}',$,$,$,$,$,$);\n"


def small(*, data: str = "", header: str = HEADER) -> str:
    return f"{header}DATA;\n{UNITS}{data}{END}"


def opened(path: Path, content: str | bytes) -> Source:
    path.write_bytes(content.encode() if isinstance(content, str) else content)
    return open_model(path)


def refusal(path: Path, content: str | bytes) -> str:
    with pytest.raises(IfcReadError) as caught:
        opened(path, content)
    message = str(caught.value)
    assert "\n" not in message
    assert message.startswith("'")
    assert message.endswith(".")
    return message


def slugs(source: Source) -> set[str]:
    return {finding.slug for finding in source.findings}


@pytest.fixture
def path(tmp_path: Path) -> Path:
    return tmp_path / "t.ifc"


def beam(schema: str) -> str:
    model = continuous_beam(
        [5.0, 4.0],
        cases=[Case("G", "PERMANENT_G", "DEAD_LOAD_G")],
        actions=[SpreadLoad("g", "G", "M1", ((0.0, 0.0, -1e4),))],
    )
    return str(AnalysisFile(model, schema=schema).file.to_string())


# -- what is read ----------------------------------------------------------------------------


@pytest.mark.parametrize("schema", SCHEMAS)
def test_a_whole_file_opens_without_a_finding(path: Path, schema: str) -> None:
    source = opened(path, beam(schema))

    assert source.schema == schema
    assert source.findings == ()
    assert source.as_is
    assert source.has_analysis_model
    assert source.fingerprint == hashlib.sha256(path.read_bytes()).hexdigest()


def test_opening_never_changes_the_file(path: Path) -> None:
    for content in (small(), "\ufeff" + small(), small(data="\t*//*\n" + PERSON.format("x"))):
        path.write_bytes(content.encode())
        before = path.read_bytes(), path.stat().st_mtime_ns
        open_model(path)
        assert (path.read_bytes(), path.stat().st_mtime_ns) == before
        assert [p.name for p in path.parent.iterdir()] == ["t.ifc"]


def test_a_file_on_disk_without_an_analysis_model_says_so(path: Path) -> None:
    assert not opened(path, small()).has_analysis_model


@pytest.mark.parametrize(
    ("mark", "encoding"), [(b"\xef\xbb\xbf", "utf-8"), (b"\xff\xfe", "utf-16-le"),
                           (b"\xfe\xff", "utf-16-be")]
)  # fmt: skip
def test_a_byte_order_mark_is_passed_over_with_a_note(
    path: Path, mark: bytes, encoding: str
) -> None:
    source = opened(path, mark + small(data=PERSON.format("Zoë")).encode(encoding))

    assert slugs(source) == {"byte-order-mark", "text-encoding"}
    assert source.file.by_id(9).FamilyName == "Zoë"
    assert not source.as_is


def test_utf_16_that_is_none_is_refused(path: Path) -> None:
    assert "UTF-16" in refusal(path, b"\xff\xfe" + b"I")


def test_plain_utf_8_letters_are_read_as_such(path: Path) -> None:
    # The parser drops them; ISO 10303-21 asks for \X2\...\X0\, and \X4\ beyond 16 bits.
    source = opened(path, small(data=PERSON.format("Zoë 梁 𝛼")))

    assert source.file.by_id(9).FamilyName == "Zoë 梁 𝛼"
    assert slugs(source) == {"text-encoding"}


def test_shift_jis_letters_are_noted_and_the_rest_is_read(path: Path) -> None:
    content = small(data=PERSON.format("梁")).encode("shift_jis")

    source = opened(path, content)

    assert slugs(source) == {"text-encoding"}
    assert len(list(source.file)) == 4


@pytest.mark.parametrize("name", ["m.ifczip", "m.ifc", "m.zip"])
def test_a_zipped_model_opens_under_any_name(tmp_path: Path, name: str) -> None:
    path = tmp_path / name
    with zipfile.ZipFile(path, "w", zipfile.ZIP_DEFLATED) as archive:
        archive.writestr("readme.txt", "not this")
        archive.writestr("inner/Model.IFC", small())

    source = open_model(path)

    assert source.schema == "IFC4"
    assert not source.as_is
    assert source.fingerprint == hashlib.sha256(path.read_bytes()).hexdigest()


def zipped(path: Path, **files: str) -> bytes:
    with zipfile.ZipFile(path, "w") as archive:
        for name, content in files.items():
            archive.writestr(name.replace("_", "."), content)
    return path.read_bytes()


def test_zips_that_hold_no_model_or_several_are_refused(path: Path) -> None:
    assert "without an .ifc file" in refusal(path, zipped(path, notes_txt="x"))
    assert "with 2 models" in refusal(path, zipped(path, a_ifc=small(), b_ifc=small()))
    whole = zipped(path, a_ifc=small() * 50)
    assert "damaged zip" in refusal(path, whole[:-30])
    broken = bytearray(whole)
    broken[120] ^= 0xFF
    assert "damaged zip" in refusal(path, bytes(broken))


def test_an_encrypted_zip_is_refused(path: Path) -> None:
    content = bytearray(zipped(path, a_ifc=small()))
    for signature, offset in ((b"PK\x03\x04", 6), (b"PK\x01\x02", 8)):
        content[content.index(signature) + offset] |= 1  # the flag for encryption
    assert "password" in refusal(path, bytes(content))


def test_a_zip_that_unpacks_to_too_much_is_refused(
    path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr("analysis_core.ifc.step.file_bytes.LARGEST_MODEL", 100)
    assert "at most 100" in refusal(path, zipped(path, a_ifc=small()))


def test_several_data_sections_are_all_read(path: Path) -> None:
    # Opened lazily, the parser would drop all but the first without a word.
    content = f"{HEADER}DATA;\n{UNITS}ENDSEC;\nDATA;\n{PERSON.format('x')}{END}"

    source = opened(path, content)

    assert sorted(e.id() for e in source.file) == [1, 2, 3, 9]


def test_texts_may_hold_keywords_instances_apostrophes_and_comment_marks(path: Path) -> None:
    nasty = "it''s #7=IFCWALL(); /* ENDSEC;END-ISO-10303-21; DATA; */ ''''/*''/*"

    source = opened(path, small(data=PERSON.format(nasty)))

    assert source.file.by_id(9).FamilyName == nasty.replace("''", "'")
    assert source.findings == ()


def test_a_shifted_apostrophe_does_not_end_a_text(path: Path) -> None:
    # \S\' is the section sign; a doubled backslash before S is none of this.
    content = small(data=PERSON.format("\\S\\'") + "#10=IFCPERSON($,'C:\\\\S\\\\',$,$,$,$,$,$);\n")

    source = opened(path, content)

    assert source.file.by_id(9).FamilyName == "§"
    assert source.findings == ()


def test_instances_over_several_lines_and_several_on_one_line_are_counted(path: Path) -> None:
    content = small(data="#5 = IFCCARTESIANPOINT\n ((0.,\n0., 0.)\n);#6=IFCPERSON($,'a\nb',$,$,$,$,"
                         "$,$);\n")  # fmt: skip
    assert {e.id() for e in opened(path, content).file} == {1, 2, 3, 5, 6}


def test_comments_are_no_matter(path: Path) -> None:
    content = small(data="/* it's ; ( #77=IFCWALL( ' */" + PERSON.format("x") + "/**//* #78=X */")
    source = opened(path, content)
    assert source.findings == ()
    assert len(list(source.file)) == 4


def test_a_signature_after_the_end_is_no_matter(path: Path) -> None:
    assert opened(path, small() + "SIGNATURE;\nTWFu=;\nENDSEC;\n").findings == ()


@pytest.mark.parametrize(
    "name", ["IFC4_ADD2_TC1", "IFC4_ADD1", "ifc4", "IFC2X3_TC1", "IFC4X3", "IFC4X3_ADD1"]
)
def test_other_names_of_the_three_schemas_are_understood(path: Path, name: str) -> None:
    content = small(header=HEADER.replace("IFC4", name))
    if name.startswith("IFC2"):
        content = content.replace("Yvs',$,", "Yvs',#4,").replace("$,$,#2);", "$,(#8),#2);")
        content = content.replace(END, OWNER + END)
    assert opened(path, content).schema == name.upper().split("_")[0]


OWNER = """#4=IFCOWNERHISTORY(#5,#6,$,.ADDED.,$,$,$,0);
#5=IFCPERSONANDORGANIZATION(#7,#10,$);
#6=IFCAPPLICATION(#10,'1','a','b');
#7=IFCPERSON($,'x',$,$,$,$,$,$);
#8=IFCGEOMETRICREPRESENTATIONCONTEXT($,'Model',3,$,#11,$);
#10=IFCORGANIZATION($,'o',$,$,$);
#11=IFCAXIS2PLACEMENT3D(#12,$,$);
#12=IFCCARTESIANPOINT((0.,0.,0.));
"""

# -- what is mended, or read with a finding --------------------------------------------------


def test_a_comment_that_is_never_closed_is_mended_and_proved(path: Path) -> None:
    content = small(data="\t*//*\n" + PERSON.format("x") + "#10=IFCPERSON($,'y',$,$,$,$,$,$);\n")
    with_mark = len(content[: content.index("*//*")].splitlines())

    source = opened(path, content)

    assert len(list(source.file)) == 5
    (finding,) = source.findings
    assert finding.slug == "stray-comment"
    assert f"line {with_mark}" in finding.message
    assert "5 entities" in finding.message


def test_an_unclosed_comment_in_a_file_with_gaps_is_refused(path: Path) -> None:
    data = "#8=IFCPERSONANDORGANIZATION(#77,#77,$);\n/*\n" + PERSON.format("x")
    message = refusal(path, small(data=data))
    assert "never closed" in message
    assert "#77 is missing" in message


def test_a_comment_that_hides_entities_which_others_need_is_refused(path: Path) -> None:
    content = small(data=f"#8=IFCPERSONANDORGANIZATION(#9,#9,$);\n/*\n{PERSON.format('x')}*/\n")
    message = refusal(path, content)
    assert "a comment hides 1 entities" in message
    assert "#9" in message


def test_a_reference_to_nothing_is_a_finding(path: Path) -> None:
    source = opened(path, small(data="#8=IFCPERSONANDORGANIZATION(#777,#776,$);\n"))
    (finding,) = source.findings
    assert finding.slug == "missing-reference"
    assert "#776, #777" in finding.message


def test_wrong_attribute_counts_are_a_finding(path: Path) -> None:
    source = opened(path, small(data="#9=IFCPERSON($,'x');\n"))
    (finding,) = source.findings
    assert finding.slug == "attribute-count"
    assert "IFCPERSON has 2, expected 8" in finding.message


def test_the_same_global_id_twice_is_a_finding_that_names_it(path: Path) -> None:
    wall = "#{}=IFCWALL('3tzC9CZ3DEzQMkHbYc8Yvs',$,'w',$,$,$,$,$,$);\n"
    source = opened(path, small(data=wall.format(8) + wall.format(9)))
    (finding,) = source.findings
    assert finding.slug == "duplicate-global-id"
    assert finding.elements == ("3tzC9CZ3DEzQMkHbYc8Yvs",)


def test_a_file_without_project_and_units_is_read_with_two_findings(path: Path) -> None:
    source = opened(path, f"{HEADER}DATA;\n{PERSON.format('x')}{END}")
    assert slugs(source) == {"no-project", "no-units"}


def test_an_empty_model_opens(path: Path) -> None:
    assert slugs(opened(path, f"{HEADER}DATA;\n{END}")) == {"no-project", "no-units"}


# -- what is refused -------------------------------------------------------------------------


@pytest.mark.parametrize(
    "name", ["IFC4X1", "IFC4X2", "IFC4X3_RC2", "IFC2X2_FINAL", "IFC5", "AP214", "", "IFC4','IFC2X3"]
)
def test_other_schemas_are_refused_by_name(path: Path, name: str) -> None:
    message = refusal(path, small(header=HEADER.replace("IFC4", name)))
    assert "IFC2X3, IFC4 and IFC4X3" in message
    assert name.split("'")[0] in message


def test_a_header_without_a_schema_is_refused(path: Path) -> None:
    header = HEADER.replace("FILE_SCHEMA(('IFC4'));\n", "")
    assert "no schema" in refusal(path, small(header=header))


def test_content_of_another_schema_is_refused_with_the_one_that_fits(path: Path) -> None:
    lying = beam("IFC4").replace("'IFC4'", "'IFC2X3'")
    message = refusal(path, lying)
    assert "says that it is IFC2X3" in message
    assert "IFCSTRUCTURALLOADCASE" in message or "IFCMATERIALPROFILE" in message
    assert "correct FILE_SCHEMA to 'IFC4'" in message


def test_structural_attributes_that_would_be_cut_off_are_refused(path: Path) -> None:
    # In IFC2X3 a curve member has no Axis and a point action a CausedBy: nothing is unknown by
    # name here, and yet the parser would drop an attribute.
    member = "#8=IFCSTRUCTURALCURVEMEMBER('0tzC9CZ3DEzQMkHbYc8Yvs',#4,$,$,$,$,$,.CABLE.,#13);\n"
    content = small(data=OWNER + member + "#13=IFCDIRECTION((0.,0.,1.));\n").replace(
        "#8=IFCG", "#14=IFCG"
    )
    message = refusal(path, content.replace("'IFC4'", "'IFC2X3'").replace("Yvs',$", "Yvs',#4"))
    assert "IFCSTRUCTURALCURVEMEMBER with 9" in message
    assert "correct FILE_SCHEMA to 'IFC4'" in message


def test_a_file_that_was_cut_off_is_refused_wherever_it_was_cut(path: Path) -> None:
    content = beam("IFC4").encode().rstrip()
    for cut in range(0, len(content), 97):
        message = refusal(path, content[:cut])
        assert "cut off" in message or "no model" in message or "ISO-10303-21" in message


def test_a_file_without_its_last_line_counts_what_is_there(path: Path) -> None:
    message = refusal(path, small().replace("END-ISO-10303-21;\n", ""))
    assert "END-ISO-10303-21 is missing" in message
    assert "after 3 entities" in message


@pytest.mark.parametrize(
    ("data", "reason"),
    [
        ("#9=IFCPERSON($,'x'$,$,$,$,$,$);\n", "near"),
        ("#9=IFCPERSON($,'x',$,$,$,$,$,$;\n", "near"),
        ("#9=IFCPERSON($,'x',$,$,$,$,$,$));\n", "near"),
        ("#9=IFCPERSON($,,$,$,$,$,$,$);\n", "near"),
        ("#9IFCPERSON($,'x',$,$,$,$,$,$);\n", "no name"),
        ("#9=(IFCPERSON()IFCACTOR());\n", "near"),
        ("#9=IFCPERSON($,'x',$,$,$,$,$,$)\n", "does not end"),
        ("#9=IFC.PERSON($,'x',$,$,$,$,$,$);\n", "plain name"),
        ("#99999999999999999999=IFCPERSON($,'x',$,$,$,$,$,$);\n", "digits"),
        ("IFCPERSON($,'x',$,$,$,$,$,$);\n", "near"),
        ("#9=IFCPERSON(),IFCACTOR();\n", "near"),
        ("#9=;\n", "near"),
        ("*\n", "near"),
    ],
)
def test_what_is_no_whole_entity_is_refused_with_its_line(
    path: Path, data: str, reason: str
) -> None:
    content = small(data=data)
    line = len(content[: content.index(data)].splitlines()) + 1

    message = refusal(path, content)

    assert f"line {line}:" in message
    assert reason in message


def test_an_open_text_is_refused(path: Path) -> None:
    assert "apostrophe" in refusal(path, small(data="#9=IFCPERSON($,'x,$,$,$,$,$,$);\n"))


def test_the_same_number_twice_is_refused(path: Path) -> None:
    message = refusal(path, small(data=PERSON.format("x") + PERSON.format("y")))
    assert "#9" in message
    assert "same number" in message


def test_numbers_may_be_large_but_not_beyond_all_bounds(path: Path) -> None:
    pair = "#{0}=IFCPERSON($,'x',$,$,$,$,$,$);\n#7=IFCPERSONANDORGANIZATION(#{0},#{1},$);\n"
    source = opened(path, small(data=pair.format(2147483647, 2147483646)))
    assert source.file.by_id(2147483647).FamilyName == "x"
    assert "#2147483646" in source.findings[0].message
    assert "#2147483648" in refusal(path, small(data=pair.format(2147483648, 1)))


def test_two_models_in_one_file_are_refused(path: Path) -> None:
    assert "two models in one file" in refusal(path, small() + small())


def test_sections_in_a_strange_order_are_refused(path: Path) -> None:
    content = small().replace("DATA;\n", "ANCHOR;\n<a>=#1;\nENDSEC;\nDATA;\n")
    assert "order" in refusal(path, content)
    assert "no DATA section" in refusal(path, HEADER + "END-ISO-10303-21;\n")


@pytest.mark.parametrize(
    ("content", "kind"),
    [
        (b"", "is empty"),
        (b" \n\t ", "is empty"),
        (b"\0" * 5000, "is empty"),
        (b"<?xml version='1.0'?><ifcXML/>", "XML"),
        (b'{"header": {"version": "ifcx_alpha"}}', "JSON"),
        (bytes(range(256)) * 40, "binary"),
        (b"%PDF-1.7 something", "some other kind"),
    ],
)
def test_other_files_are_refused_by_kind(path: Path, content: bytes, kind: str) -> None:
    assert kind in refusal(path, content)


def test_paths_that_cannot_be_read_are_refused(
    tmp_path: Path, path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    for bad, reason in ((tmp_path, "is a folder"), (tmp_path / "no.ifc", "does not exist"),
                        (tmp_path / ("x" * 300), "cannot be read")):  # fmt: skip
        with pytest.raises(IfcReadError, match=reason):
            open_model(bad)
    with pytest.raises(IfcReadError, match="cannot be read"):
        open_model("null\0byte.ifc")

    def denied(_: Path) -> bytes:
        raise PermissionError

    monkeypatch.setattr(Path, "read_bytes", denied)
    assert "may not be read by you" in refusal_of(path, small())


def refusal_of(path: Path, content: str) -> str:
    path.write_text(content)
    with pytest.raises(IfcReadError) as caught:
        open_model(path)
    return str(caught.value)


def test_a_parser_that_stops_early_is_found_out(
    path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    half = ifcopenshell.file(schema="IFC4")
    half.create_entity("IfcPerson")
    monkeypatch.setattr("analysis_core.ifc.source._parser", lambda *_, **__: half)
    with pytest.raises(IfcReadError, match="3 entities but only 1 can be read"):
        _ = opened(path, small()).file


def test_what_the_parser_raises_becomes_a_sentence(
    path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def broken(*_: object, **__: object) -> None:
        raise RuntimeError("bad things at offset 7")

    monkeypatch.setattr("analysis_core.ifc.source._parser", broken)
    with pytest.raises(IfcReadError, match=r"cannot be parsed \(bad things at offset 7\)"):
        _ = opened(path, small()).file


# -- real files ------------------------------------------------------------------------------

REAL = sorted(SHARED.glob("*/*.ifc*"))
FINDINGS = {
    "O04_double_guids.ifc": {"duplicate-global-id"},
    "O05_stray_comment.ifc": {"stray-comment"},
    "O09_axis2placement_error.ifc": {"no-project", "no-units"},
    "O17_unit_survey_foot_ifc2x3.ifc": {"unit-size"},
    "O26_extrusion_depth_zero.ifc": {"no-project", "no-units"},
    "O29_duplicated_guids_ifc4.ifc": {"duplicate-global-id", "no-project", "no-units"},
    "P03_office_mm.ifc": {"attribute-count", "missing-reference"},
    "P34_members_ifc4.ifc": {"attribute-count"},
    "P36_members_mirrored_profile_inch_ifc4.ifc": {"attribute-count"},
    "S14_rule_groups_ifc4x3.ifc": {"unit-dimension"},
    "S16_rule_gem004_wrong_topology_rep_ifc4.ifc": {"attribute-count", "unit-dimension"},
}


@pytest.mark.skipif(not REAL, reason="the shared files are not here")
@pytest.mark.parametrize("real", REAL, ids=lambda p: p.name)
def test_real_files_are_read_whole_or_refused(real: Path) -> None:
    if real.name.startswith("S15"):
        with pytest.raises(IfcReadError, match="fits IFC4X3: correct FILE_SCHEMA"):
            open_model(real)
        return
    source = open_model(real)
    if real.suffix == ".ifc":
        # These files have one instance a line, so a plain pattern counts them.
        counted = len(re.findall(rb"(?m)^#\d+ *=", real.read_bytes()))
        assert len(source.file.entity_names()) == counted
    assert slugs(source) == FINDINGS.get(real.name, set())


_FUZZ = """
import random, sys
from pathlib import Path
sys.path[:0] = {paths!r}
from analysis_core.errors import IfcReadError
from analysis_core.ifc.analytical.reader import read_analytical
from analysis_core.ifc.source import open_model

content, path, rng = Path({source!r}).read_bytes(), Path({target!r}), random.Random({seed})
start, opened, refused = content.index(b"DATA;"), 0, 0
for round in range({rounds}):
    if round % 3 == 0:
        bent = content[: rng.randrange(start, len(content))] + rng.choice(
            [b"", b"\\nENDSEC;\\nEND-ISO-10303-21;\\n"])
    else:
        bent = bytearray(content)
        for _ in range(rng.choice([1, 2, 6])):
            place = rng.randrange(len(bent))
            bent[place] = rng.choice([rng.randrange(256), *b"$*'();,#./", *b"0123456789"])
    path.write_bytes(bytes(bent))
    try:
        read_analytical(open_model(path))
        opened += 1
    except IfcReadError as error:
        assert str(error).endswith("."), error
        refused += 1
print(opened, refused)
"""


@pytest.mark.parametrize("schema", SCHEMAS)
def test_damaged_files_are_read_or_refused_and_never_crash(tmp_path: Path, schema: str) -> None:
    """In a process of its own, because the parser is native code and could take us with it."""
    source = tmp_path / "whole.ifc"
    source.write_text(beam(schema))
    root = str(Path(__file__).parents[1])
    script = _FUZZ.format(paths=[root], source=str(source), target=str(tmp_path / "bent.ifc"),
                          seed=len(schema), rounds=150)  # fmt: skip

    run = subprocess.run([sys.executable, "-c", script], capture_output=True, text=True,
                         timeout=240, check=False)  # fmt: skip

    assert run.returncode == 0, run.stderr[-2000:]
    opened_count, refused_count = map(int, run.stdout.split())
    assert opened_count + refused_count == 150
    assert opened_count > 0
    assert refused_count > 0
