"""One small building per finding that no other test raises."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest
from building_makers import (
    FREE3,
    PINNED,
    STEEL,
    Restraint,
    attached,
    finding,
    member,
    model,
    node,
    only,
    released,
    slugs,
    uniform,
)
from physical_makers import beam, column, house

from analysis_core.building import FIXED, Attachment, LoadCase, NodeAction, TemperatureAction
from analysis_core.idealise import idealise
from analysis_core.settings import (
    ActionSetting,
    Analysis,
    SectionSetting,
    Selector,
    Settings,
    SupportSetting,
)

END = (6.0, 0.0, 0.0)


def simple(**more):
    """A simple beam of 6 m with changes."""
    given = {"members": [member("B", FREE3, END)], "actions": ()} | more
    nodes = [node("a", FREE3, PINNED), node("b", END, PINNED)]
    return model(given.pop("members"), nodes, **given)


def told(building, slug, settings=None):
    return finding(idealise(building, settings or Settings()), slug)


def test_a_member_free_to_slide_where_others_meet_is_refused():
    members = [member("A", FREE3, END), member("B", END, (9.0, 0.0, 0.0))]
    nodes = [node("a", FREE3, PINNED), node("b", END, PINNED), node("c", (9.0, 0.0, 0.0), PINNED)]
    sliding = Restraint((math.inf, math.inf, 0.0))
    found = idealise(released(model(members, nodes), "A", "b", sliding), Settings())

    assert finding(found, "sliding-release").severity == "error"
    assert "slide across its axis" in only(found).fault


def test_a_member_free_to_slide_at_a_support_is_not_held_there():
    sliding = Restraint((math.inf, math.inf, 3e6))
    found = idealise(released(simple(), "B", "b", sliding), Settings())

    assert only(found).joints[1].support.vertical == 3e6


def test_a_release_along_a_line_has_no_effect_and_is_said():
    loose = Restraint((0.0, math.inf, math.inf))

    assert "no effect" in told(released(simple(), "B", "a", loose), "axial-release").message


def test_an_attachment_beyond_its_member():
    building = simple(attachments=[Attachment("B", "a", 0.0), Attachment("B", "b", 7.5)])

    assert "at 7.500 m, but is 6.000 m long" in told(building, "attachment-beyond-member").message


def test_an_attachment_to_something_that_is_not_there():
    beam_only = [member("B", FREE3, END)]
    extra = [*attached(beam_only, [node("a", FREE3, PINNED), node("b", END, PINNED)])]
    building = simple(attachments=[*extra, Attachment("B", "gone", 3.0)])

    assert told(building, "attachment-to-nothing").elements == ("B", "gone")


def test_a_connection_that_joins_nothing():
    building = simple()
    lone = node("lone", (0.0, 9.0, 0.0), PINNED)
    building = replace(building, connections=(*building.connections, lone))

    assert told(building, "connection-without-member").elements == ("lone",)


def test_two_ends_at_one_place_that_nothing_joins():
    members = [member("A", FREE3, END), member("B", END, (9.0, 0.0, 0.0))]
    nodes = [node("a", FREE3, PINNED), node("b", END, PINNED), node("c", (9.0, 0.0, 0.0), PINNED)]
    building = model(members, nodes)
    loose = tuple(a for a in building.attachments if (a.member, a.connection) != ("B", "b"))

    assert told(replace(building, attachments=loose), "nodes-not-joined").elements == ("A", "B")


def test_a_member_without_length():
    point = replace(member("P", FREE3, END), end=FREE3)
    building = replace(simple(), members=(member("B", FREE3, END), point))

    assert told(building, "member-without-length").elements == ("P",)


@pytest.mark.parametrize("kind", ["force", "temperature"])
def test_an_action_on_what_is_no_line(kind):
    action = uniform("q", "gone", (0.0, 0.0, -1e3), 1.0)
    if kind == "temperature":
        action = TemperatureAction("q", "q", "G", "gone", 1.0)

    assert told(simple(actions=[action]), "action-without-line").elements == ("q", "gone")


def test_a_nature_is_taken_from_the_name_and_said():
    building = simple(cases=(LoadCase("Live load, offices", "other", "c"),))
    found = idealise(building, Settings())

    assert found.cases[0].nature == "imposed"
    assert finding(found, "nature-from-name").elements == ("c",)


def test_self_weight_of_the_model_can_be_switched_off():
    building = simple(cases=(LoadCase("G", "permanent", "c", self_weight=(0.0, 0.0, -1.0)),))
    off = Settings(analysis=Analysis(self_weight=False))

    assert only(idealise(building, Settings())).actions[0].transverse == pytest.approx((769.822,))
    assert only(idealise(building, off)).actions == ()
    assert told(building, "self-weight-left-out", off).elements == ("c",)


@pytest.mark.parametrize("wanted", [None, True])
def test_an_analysis_model_without_self_weight_is_told_how_to_have_it(wanted):
    found = idealise(simple(), Settings(analysis=Analysis(self_weight=wanted)))

    assert ("self-weight-not-stated" in slugs(found)) == (wanted is None)
    assert bool(only(found).actions) == (wanted is True)


def test_a_member_without_shear_area_stays_rigid_in_shear():
    beam_only = member("B", FREE3, END)
    assert beam_only.section is not None
    bare = replace(beam_only, section=replace(beam_only.section, shear_area=0.0))
    on = Settings(analysis=Analysis(shear_flexible=True))

    assert "no shear area" in told(simple(members=[bare]), "rigid-in-shear", on).message


def test_temperature_needs_a_depth():
    beam_only = member("B", FREE3, END)
    assert beam_only.section is not None
    flat = replace(beam_only, section=replace(beam_only.section, depth=0.0))
    warm = TemperatureAction("t", "t", "T", "B", difference_z=9.0)

    building = simple(members=[flat], actions=[warm])
    assert "depth of its section" in told(building, "temperature-not-applied").message


def test_thermal_expansion_is_assumed_from_the_kind_of_material():
    timber = replace(STEEL, thermal_expansion=0.0, category="timber")
    warm = TemperatureAction("t", "t", "T", "B", difference_z=-40.0)
    building = simple(members=[member("B", FREE3, END, material=timber)], actions=[warm])
    found = idealise(building, Settings())

    # EN 1991-1-5, table C.1: timber along the grain 5e-6 1/K (from memory), over 0.4 m.
    assert only(found).actions[0].curvature == pytest.approx(5e-4)
    assert "assumed-thermal-expansion" in slugs(found)


def test_a_position_beyond_the_member():
    far = Settings(supports=(SupportSetting(Selector(), position=8.0, source="supports[0]"),))

    assert "8.00 m along member" in told(simple(), "position-beyond-member", far).message


def test_a_job_action_on_a_member_that_is_no_line():
    post = beam("post", (3.0, 3.0, 0.0), (3.0, 3.0, 2.0))
    building = house([post], [])
    action = ActionSetting("Q", Selector(), "uniform", (1e3,), source="a")
    found = idealise(building, Settings(actions=(action,)))

    assert finding(found, "action-without-line").elements == ("post",)


def test_a_carrier_without_outline():
    bare = replace(column("C", 0.0, 0.0, 0.0, 2.8), corners=())
    building = house([beam("B", (0.0, 0.0, 3.0), (6.0, 0.0, 3.0))], [bare])

    assert told(building, "carrier-without-outline").elements == ("C",)


def test_a_column_without_section_is_no_leg():
    columns = [column("C0", 0.0, 0.0, 0.0, 2.8), column("C1", 6.0, 0.0, 0.0, 2.8)]
    columns[1] = replace(columns[1], section=None)
    building = house([beam("B", (0.0, 0.0, 3.0), (6.0, 0.0, 3.0))], columns)
    legs = Settings(analysis=Analysis(columns_as_legs=True))

    assert told(building, "leg-left-out", legs).elements == ("C1",)


def test_an_end_stated_as_rigid_at_a_column_is_pinned_and_said():
    columns = [column("C0", 0.0, 0.0, 0.0, 2.8), column("C1", 6.0, 0.0, 0.0, 2.8)]
    stiff = beam("B", (0.0, 0.0, 3.0), (6.0, 0.0, 3.0), end_stiffness=(math.inf, None))

    assert told(house([stiff], columns), "moment-connection").elements == ("B",)


def test_a_line_of_beams_side_by_side_is_still_analysed():
    """Two beams between the same nodes: no line of spans, but a frame."""
    twins = [member("A", FREE3, END), member("B", FREE3, END)]
    line = only(idealise(simple(members=twins), Settings()))

    assert (line.kind, len(line.members), line.fault) == ("frame", 2, "")


def test_a_member_between_two_connections_at_one_point_is_refused():
    nodes = [node("a", FREE3, PINNED), node("b", FREE3, PINNED)]
    building = replace(
        model([member("B", FREE3, END)], nodes),
        attachments=(Attachment("B", "a", 0.0), Attachment("B", "b", 6.0)),
    )

    assert (
        "6.000 m apart to a and b, which lie at one point"
        in told(building, "member-without-length").message
    )


def test_a_support_moved_sideways_as_well_is_said():
    moved = NodeAction("s", "s", "S", "a", displacement=(0.0, 0.012, -0.005))
    found = idealise(simple(actions=[moved]), Settings())

    assert "12 mm sideways" in finding(found, "movement-without-support").message
    assert only(found).actions[0].vertical == 0.005


def test_a_support_turned_about_an_axis_that_is_free_is_said():
    moved = NodeAction("s", "s", "S", "a", displacement=(0.0, 0.0, -0.005), rotation=(0, 0.02, 0))

    assert "0.02 rad" in told(simple(actions=[moved]), "movement-without-support").message


def test_cantilevers_that_meet_at_their_tips_are_said_to_share_what_acts_there():
    corner, far = (3.0, 0.0, 0.0), (3.0, 4.0, 0.0)
    nodes = [node("a", FREE3, FIXED), node("b", corner), node("c", far, FIXED)]
    building = model([member("A", FREE3, corner), member("B", corner, far)], nodes)

    assert "hold each other up" in told(building, "grillage-crossing").message


@pytest.mark.parametrize("value", [1e308, -3e40])
def test_an_action_beyond_all_measure_is_refused_and_the_line_still_listed(value):
    found = idealise(simple(actions=[uniform("q", "B", (0.0, 0.0, value), 6.0)]), Settings())

    assert finding(found, "line-not-built").severity == "error"
    assert "check the units" in only(found).fault


@pytest.mark.parametrize("inertia", [1e-300, 1e200])
def test_a_rigidity_that_no_section_has_is_refused(inertia):
    settings = Settings(sections=(SectionSetting(Selector(), inertia=inertia),))
    found = idealise(simple(), settings)

    assert "Check its section" in finding(found, "line-not-built").message
