"""Other sections and materials for members, in the real window."""

import pytest

pytestmark = pytest.mark.host


def test_a_section_of_the_host_is_given_solved_undone_and_written_into_a_copy(in_freecad):
    found = in_freecad("scenes_choosing:give")

    assert found["was"] == [["IPE 300", "Steel S355"]]
    assert found["scopes"] == ["line FF-04", "all 4 lines of IPE 300"]
    assert found["picked"] == "IPE 300"  # what it has now
    assert 1000 < found["of_steel"] < found["of_host"]
    assert {"IPE", "HEA"} <= set(found["kinds"])
    assert "Eurocode timber" not in found["kinds"]
    assert "Eurocode timber" in found["all_kinds"]
    assert found["filtered"] == ["IPEA240", "IPE240", "IPEO240", "IPER240"]
    # 2·120·9.8 + 220.4·6.2 mm² of 7850 kg/m³; without fillets, as the host has it.
    assert "mass 42.2 → 29.2 kg/m" in found["compared"]
    assert "states no fillets" in found["compared"]
    assert "Concrete C30/37" in found["materials"]
    assert found["now"] == [["IPE240", "Steel S355"]]
    assert found["moved"].startswith("✓ IPE240 for line FF-04. FF-04: sagging")
    assert "{name: IPE240, shape: I, width: 120 mm, depth: 240 mm" in found["job"]
    assert "profile: IPE240" in found["job"]
    assert "# Job file of Quarry Lane Workshops" in found["job"]  # remarks stay
    assert len(found["findings"]) == 1
    assert found["undone"] == [[["IPE 300", "Steel S355"]], True]
    assert found["redone"] == [["IPE240", "Steel S355"]]
    assert {tuple(row[1:]) for row in found["preview"]} == {
        ("extruded body", "IPE 300", "IPE240"),
        ("profile association", "IPE 300", "IPE240"),
        ("ObjectType", "IPE 300", "IPE240"),
    }
    assert all(row[0].startswith("J-1  ") for row in found["preview"])
    assert "posted.ifc" in found["told"]
    assert found["untouched"]
    assert found["in_file"] == ["IPE240"]
    assert found["known_now"] == "IPE240"
    assert found["taken_back"] == [["IPE 300", "Steel S355"]]
    assert "Traceback" not in found["log"]


def test_what_is_written_into_the_model_itself_is_read_from_there(in_freecad):
    found = in_freecad("scenes_choosing:in_place")

    assert found["changes"] > 0
    assert found["in_file"] == "IPE 270"
    assert found["now"] == "IPE 270"
    assert found["findings"] == []
    assert found["states"] == ["posted"]
    assert found["nothing_left"] is False


def test_the_lightest_section_is_sought_stopped_shown_applied_and_undone(in_freecad):
    found = in_freecad("scenes_choosing:lightest")

    assert found["scopes"] == ["line FF-05", "all 4 lines of IPE 300", "all lines, kind by kind"]
    assert len(found["sources"]) == 2  # the job file has no section table
    assert found["running"] == [True, False, True]
    assert found["stopped"] == "Stopped; nothing was changed."
    assert not found["may_apply"]
    first, *others = found["candidates"]
    assert first[0] == "IPEA330"
    assert first[-1] == "lightest that suffices"
    assert len(others) > 20
    masses = [float(row[2]) for row in found["candidates"]]
    assert masses == sorted(masses, reverse=True)  # the best first
    assert all(row[-1] in ("too weak", "not checked") for row in others)
    assert found["summary"].startswith("IPEA330 in place of IPE 300: 4")
    own = {row[0] for row in found["effects"] if "(itself)" in row[0]}
    assert len(own) == 4
    assert {"FF-01", "FF-02"} <= {row[0] for row in found["effects"]}
    assert found["still"]  # nothing is changed before it is applied
    assert set(found["applied"].values()) == {"IPEA330"}
    assert f"{100 * found['use']:.1f} %" == first[3]
    assert found["job"].count("IPEA330") == 2  # the table and one entry for all
    assert found["undone"]
    assert "Traceback" not in found["log"]


def test_all_kinds_of_lines_by_keyboard_and_every_field_has_a_name(in_freecad):
    found = in_freecad("scenes_choosing:every_kind")

    assert found["scope"] == "all lines, kind by kind"
    assert len(found["groups"]) == len(found["summaries"]) == 3
    assert "of another material were left out" in found["summaries"][1]
    assert found["total"]
    assert found["closed"]
    assert found["spoken"] == []


def test_a_table_beside_the_job_file_is_found_and_the_sheet_shows_the_checks(in_freecad):
    found = in_freecad("scenes_choosing:sheet")

    assert found["table"] == ["My 200x400"]
    assert found["given"] == "My 200x400"
    assert found["listed"]
    assert found["command"]
    assert "sheet.html" in found["told"]
    assert found["checks"] > 5
    assert found["section"]
    assert "would be overwritten" in found["refused"]
    assert found["model"]
    assert found["menu"] == ["Calculation sheet…"]


@pytest.mark.parametrize(
    ("name", "style_sheet", "language"),
    [("_dark", "ProDark.qss", "English"), ("_german", "", "German")],
)
def test_the_windows_follow_theme_and_language(in_freecad, name, style_sheet, language):
    found = in_freecad(
        "scenes_choosing:every_kind", style_sheet=style_sheet, language=language,
        SPANLEDGER_LOOK=name,
    )  # fmt: skip
    assert len(found["groups"]) == 3
    if language == "German":
        assert found["scope"] == "alle Trägerzüge, Art für Art"
        assert "reicht aus" in found["summaries"][0]
