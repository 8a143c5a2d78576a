"""Every form that a STEP file may have: sections, signatures, comments, strings, line ends, zips.

ISO 10303-21:2016 allows them all; each goes in, and comes out bit for bit.
"""

import zipfile

import ifcopenshell.util.element as element_tools
import pytest
from posting_makers import (
    BEAM,
    COLUMN_A,
    outcome_of,
    small_model,
    span_result,
)

from analysis_core.errors import IfcReadError
from analysis_core.ifc.posting import writer
from analysis_core.ifc.source import open_model
from analysis_core.ifc.step.index import StepIndex

OUTCOME = outcome_of(span_result(BEAM, supports=(COLUMN_A,)))


def round_trip(tmp_path, data, *, name="model.ifc"):
    """Post, post again, take out; return what was posted and the report of the first."""
    source, posted, back = (tmp_path / f"{n}-{name}" for n in ("source", "posted", "back"))
    source.write_bytes(data)
    report = writer.post(source, posted, OUTCOME)
    first = StepIndex(posted.read_bytes())
    assert writer.post(posted, posted, OUTCOME).written == 0
    again = StepIndex(posted.read_bytes())
    assert again.arrays.ids.tolist() == first.arrays.ids.tolist()
    assert writer.remove(posted, back).removed == report.written
    assert back.read_bytes() == data
    return posted, report


def effects(path):
    source = open_model(path)
    return element_tools.get_psets(source.file.by_guid(BEAM))["Spanledger_Effects"]


def with_line(data, line, *, before=b"ENDSEC;\nEND-ISO"):
    at = data.index(before)
    return data[:at] + line + data[at:]


FORMS = {
    "plain": small_model(),
    "CR LF": small_model(newline="\r\n"),
    "CR alone": small_model(newline="\r"),
    "one line": small_model().replace(b"\n", b""),
    "no final newline": small_model().rstrip(),
    "blank lines after the end": small_model() + b"\n\n  \n",
    "byte-order mark": b"\xef\xbb\xbf" + small_model(),
    "comments around the end": small_model()
    .replace(b"ENDSEC;\nEND-ISO", b"/* ENDSEC; it's */ ENDSEC; /* '#1=IFCWALL() */\nEND-ISO"),
    "an end within a comment": small_model() + b"/* ENDSEC;\nEND-ISO-10303-21; */",
    "a quote in a comment": with_line(small_model(), b"/* don't */\n"),
    "keywords in a name": small_model(name="ENDSEC; END-ISO-10303-21; /* #9=IFCWALL('"
                                      .replace("'", "''")),
    "a name that looks like our block": small_model(
        name=f"/* Spanledger results begin {'0' * 64} */ /* Spanledger results end {'0' * 64} */"
    ),
    "an entity over several lines": small_model().replace(
        b"#30=IFCBEAM(", b"#30\n =\n /* the beam */ IFCBEAM (\n "
    ),
    "entities on one line": small_model().replace(b";\n#31=", b";#31="),
    "large numbers": small_model().replace(b"#30=", b"#1999999999="),
    "a reference to nothing": with_line(small_model(), b"#40=IFCRELAGGREGATES"
                                        b"('1CErzYtxLHIhlF94EjSXXX',$,$,$,#23,(#41,#42,#60));\n"),
    "two backslashes before a quote": small_model(name="A\\\\"),
    "a shifted apostrophe": small_model(name="A \\S\\' B"),
}  # fmt: skip


@pytest.mark.parametrize("form", FORMS)
def test_each_form_is_posted_to_and_comes_back_bit_for_bit(tmp_path, form):
    posted, report = round_trip(tmp_path, FORMS[form])

    assert report.path == "append"
    assert report.findings == ()
    assert effects(posted)["SaggingMoment"] == pytest.approx(81.0)


def test_numbers_never_meet_references_that_the_file_leaves_open(tmp_path):
    posted, _ = round_trip(tmp_path, FORMS["a reference to nothing"])
    index = StepIndex(posted.read_bytes())

    assert not {41, 42, 60} & set(index.arrays.ids.tolist())


def test_numbers_at_the_limit_of_32_bits_leave_a_gap_that_is_used(tmp_path):
    data = small_model().replace(b"#30=", b"#2147483646=")
    posted, _ = round_trip(tmp_path, data)

    assert max(StepIndex(posted.read_bytes()).arrays.ids.tolist()) == 2147483646
    assert effects(posted)["SaggingMoment"] == pytest.approx(81.0)


def test_the_last_of_several_data_sections_is_added_to(tmp_path):
    data = small_model()
    at = data.index(b"#24=")
    data = data[:at] + b"ENDSEC;\nDATA('second',('IFC4'));\n" + data[at:]
    data = data.replace(b"DATA;", b"DATA('first',('IFC4'));")
    posted, report = round_trip(tmp_path, data)

    assert report.path == "append"
    text = posted.read_bytes()
    assert text.index(b"IFCPROPERTYSET") > text.index(b"'second'")
    assert text.startswith(data[: data.rindex(b"ENDSEC;")])


def test_a_signature_is_kept_and_reported(tmp_path):
    data = small_model(tail="SIGNATURE;\nMIIB'ENDSEC;\nENDSEC;\n")
    source = tmp_path / "signed.ifc"
    data = data.replace(b"MIIB'ENDSEC;\n", b"MIIBmzCB==\n")
    source.write_bytes(data)
    report = writer.post(source, source, OUTCOME)

    assert [f.slug for f in report.findings] == ["signature-broken"]
    text = source.read_bytes()
    assert text.endswith(data[data.index(b"ENDSEC;\nEND-ISO") :])
    assert text.index(b"IFCPROPERTYSET") < text.index(b"END-ISO-10303-21;")
    writer.remove(source, source)
    assert source.read_bytes() == data


def test_a_comment_that_is_never_closed_is_not_closed_by_ours(tmp_path):
    data = small_model().replace(b"#24=", b"/*\n#24=")
    posted, report = round_trip(tmp_path, data)

    assert b"/* Spanledger" not in posted.read_bytes()
    assert report.path == "append"
    assert effects(posted)["SaggingMoment"] == pytest.approx(81.0)


def test_a_zipped_model_stays_zipped_with_all_that_was_in_it(tmp_path):
    source, posted, back = (tmp_path / f"{n}.ifczip" for n in ("source", "posted", "back"))
    with zipfile.ZipFile(source, "w", zipfile.ZIP_DEFLATED) as archive:
        archive.writestr("inner/model.ifc", small_model())
        archive.writestr("notes.txt", "kept")
        archive.comment = b"a remark"
    writer.post(source, posted, outcome_of())
    assert posted.read_bytes() == source.read_bytes()  # nothing to write, nothing packed anew
    writer.post(source, posted, OUTCOME)
    assert effects(posted)["SaggingMoment"] == pytest.approx(81.0)
    writer.remove(posted, back)

    with zipfile.ZipFile(back) as archive:
        assert archive.read("inner/model.ifc") == small_model()
        assert archive.read("notes.txt") == b"kept"
        assert archive.comment == b"a remark"


@pytest.mark.parametrize("encoding", ["utf-16-le", "utf-16-be"])
def test_a_model_in_utf_16_stays_in_utf_16(tmp_path, encoding):
    mark = "\ufeff".encode(encoding)
    data = mark + small_model(name="Träger").decode().encode(encoding)
    source, back = tmp_path / "wide.ifc", tmp_path / "back.ifc"
    source.write_bytes(data)
    writer.post(source, source, OUTCOME)
    assert source.read_bytes().startswith(mark)
    assert effects(source)["SaggingMoment"] == pytest.approx(81.0)
    writer.remove(source, back)

    assert back.read_bytes() == data


@pytest.mark.parametrize(
    "data",
    [
        b"",
        b"not a model",
        small_model()[:-30],
        small_model().replace(b"END-ISO-10303-21;", b""),
        small_model().replace(b"'C-1'", b"'C-1"),
        b"ISO-10303-21;\nHEADER;\nENDSEC;\nEND-ISO-10303-21;\n",
    ],
)
def test_a_file_without_a_proper_end_is_refused_in_a_sentence(tmp_path, data):
    source, target = tmp_path / "broken.ifc", tmp_path / "out.ifc"
    source.write_bytes(data)
    with pytest.raises(IfcReadError, match=r"broken.ifc' .*(again|model)"):
        writer.post(source, target, OUTCOME)

    assert not target.exists()
    assert source.read_bytes() == data
