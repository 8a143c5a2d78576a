"""The main job in the real window, by clicks."""

import os
from pathlib import Path

import pytest

pytestmark = pytest.mark.host


def test_a_model_is_opened_balanced_and_seen(in_freecad):
    found = in_freecad("scenes_model:tour")

    assert found["lines"] == 11
    assert found["states"] == ["balanced"]
    assert found["shape"] > 40


def test_decisions_are_taken_undone_and_kept_by_clicks(in_freecad):
    found = in_freecad("scenes_model:decide")

    pinned, fixed, undone, redone, loaded = found["sagging"]
    assert found["was"] == "pinned"
    assert "fixed" in found["offered"]
    assert fixed < pinned  # a fixed end takes moment off its span
    assert undone == pinned
    assert redone == fixed
    assert "condition: fixed" in found["job"]
    assert "# Job file of Quarry Lane Workshops" in found["job"]  # remarks stay
    assert "sagging" in found["moved"]
    assert found["dashed"] > 0  # the curves before stand beside
    assert found["undone"]
    assert found["redone"]
    assert "nonsense" in found["refused"]
    assert found["still"]
    assert "uniform: 30 kN/m" in found["added"]
    assert loaded != redone


def test_results_are_previewed_posted_and_found_again_on_reopening(in_freecad):
    found = in_freecad("scenes_model:post_and_reopen")

    assert found["previewed"] > 20
    assert found["written"] == found["members"] > 10
    assert "posted.ifc" in found["told"]
    assert found["source_untouched"]
    assert found["states"] == ["posted"]
    assert found["after_close"] == 0
    assert found["after_reopen"] == 11
    assert found["proxy"] == "freecad.spanledger.draw.view"
    assert found["sagging"] > 1000


def test_a_line_is_chosen_in_the_list_in_the_3d_view_and_by_a_finding(in_freecad):
    found = in_freecad("scenes_model:choose")

    assert found["filtered"] == 4
    assert found["count"] == "4 of 11 lines"
    line, (members,) = found["by_list"]
    assert line == 2
    assert len(members) == 3
    assert found["by_view"] == 8
    assert found["by_finding"] == 1
    assert "continuous" in found["message"]
    titles = [shown for _, shown, _ in found["views"]]
    assert len(set(titles)) == len(titles) > 10
    assert len({largest for *_, largest in found["views"]}) > 5
    assert found["cursor"] is not None
    assert found["cursor_after_key"] > found["cursor"]


def test_trouble_ends_in_a_sentence_and_never_in_a_lost_window(in_freecad):
    found = in_freecad("scenes_model:trouble")

    assert "bad.ifc" in found["truncated"]
    assert "nothing.ifc" in found["missing"]
    assert "titel" in found["bad_job"]
    assert found["closed_mid_run"] == [0, 0]
    assert "Stopped" in found["cancelled"]
    assert found["two"] == ["other.ifc", 2]
    assert found["back"] == ["quarry_lane_physical_ifc4.ifc", 11]
    assert "balance its lines again" in found["stale"][0]
    assert found["stale"][1] == ["stale"]
    assert found["balanced_again"] == ["balanced"]
    assert "quarry_lane_physical_ifc4.ifc" in found["deleted"]
    assert found["still_shown"] == 11
    assert "out.ifc" in found["not_written"]
    assert "Traceback" not in found["log"]


@pytest.mark.parametrize(
    ("name", "style_sheet", "scale", "palette"),
    [
        ("light_100", "", "1", "light"),
        ("dark_100", "Behave-dark.qss", "1", "dark"),
        ("darker_100", "ProDark.qss", "1", "dark"),
        ("light_200", "", "2", "light"),
    ],
)
def test_the_desk_follows_theme_and_scale(in_freecad, name, style_sheet, scale, palette):
    found = in_freecad(
        "scenes_model:look", style_sheet=style_sheet, scale=scale, SPANLEDGER_LOOK=name
    )

    assert found["palette"] == palette
    assert found["ratio"] == pytest.approx(float(scale), abs=0.01)  # by the dots per inch
    assert found["spot"] == ["joint", 1]


def test_the_distribution_fills_row_by_row(in_freecad):
    found = in_freecad("scenes_model:distribution")

    assert "Choose a case" in found["envelope"]
    assert "fixed-end moment, kN·m" in found["names"]
    assert "far end pinned. 2-3:" in found["notes"]  # one note ends before the next begins
    assert 0 < found["first"] < found["rows"][0] < found["rows"][1] < found["whole"]
    assert found["rows"] == sorted(found["rows"])
    assert ["joint", 2] in found["marked"]  # the larger unbalance is released first


def test_lines_that_changed_stand_out_and_reactions_lead_downward(in_freecad):
    found = in_freecad("scenes_model:shade")

    assert found["bearings"] == 28
    assert found["changed"] > 50 > found["plain"]
    assert found["words"] == "↓ on FF-01"
    assert found["carried_by"] == 0


def test_an_earlier_revision_is_compared_line_by_line(in_freecad):
    found = in_freecad("scenes_model:compare")

    assert 0 < found["changed"] < found["every"] == 11
    assert f"{found['changed']} of 11 lines changed" in found["summary"]
    assert all(found["reasons"])
    assert any("reactions it receives" in reason for reason in found["reasons"])
    assert found["line"] == found["first"]
    assert found["dashed"] > 0  # the curves of the earlier revision stand beside


def test_the_desk_speaks_another_language(in_freecad):
    found = in_freecad("scenes_model:language", language="German")

    assert found["tabs"][0] == "Trägerzüge"
    assert "3 Felder" in found["title"]
    assert "Querkraft" in found["words"]
    assert found["states"] == ["● ausgeglichen"]


def test_every_sample_model_can_be_looked_at(in_freecad):
    samples = sorted((Path(__file__).resolve().parents[2] / "sample_models").glob("*.ifc"))

    found = in_freecad(
        "scenes_model:every_model",
        timeout=300.0,
        SPANLEDGER_MODELS=os.pathsep.join(map(str, samples)),
    )

    log = found.pop("log")
    assert set(found) == {path.name for path in samples}
    assert all(count == 11 for count in found.values())
    assert "Traceback" not in log


def test_use_redistribution_and_what_was_posted_are_shown(in_freecad):
    found = in_freecad("scenes_model:use")

    assert found["use"].endswith("%")
    assert "1992" in found["facts"]  # the code that checked a concrete span
    assert found["redistributed"]
    assert found["reopened"] == ["posted"]
    assert found["after"] == "stale"
    assert found["reason"]
    assert found["others"] == ["posted"]
