"""Beam lines of an analysis model: joints, spans, supports, releases, orientation."""

from __future__ import annotations

import itertools
import math

import pytest
from building_makers import (
    PINNED,
    RIGIDITY,
    ROLLER,
    finding,
    member,
    model,
    node,
    only,
    released,
    shuffled,
    slugs,
    spans,
    turned,
    uniform,
)

from analysis_core.building import Attachment, Restraint
from analysis_core.idealise import idealise
from analysis_core.model import DistributedForce, Support
from analysis_core.settings import Settings

Z = 3.2


def three_spans(*, flip=()):
    """Spans of 5, 7 and 4 m, an overhang of 1.5 m; members may be drawn the other way."""
    xs = (0.0, 5.0, 12.0, 16.0, 17.5)
    members = []
    for i, (a, b) in enumerate(itertools.pairwise(xs)):
        ends = ((b, 0.0, Z), (a, 0.0, Z)) if i in flip else ((a, 0.0, Z), (b, 0.0, Z))
        members.append(member(f"B{i}", *ends))
    nodes = [node(f"N{i}", (x, 0.0, Z), PINNED if i == 0 else ROLLER) for i, x in enumerate(xs[:4])]
    return model(members, nodes, actions=[uniform("q", "B1", (0.0, 0.0, -8e3), 7.0)])


def test_collinear_members_become_one_line_with_its_overhang():
    line = only(idealise(three_spans(), Settings()))

    assert (line.kind, spans(line)) == ("line", [5.0, 7.0, 4.0, 1.5])
    assert [m.span for m in line.members] == [1, 2, 3, 4]
    assert [j.support for j in line.joints] == [
        Support(math.inf, math.inf, 0.0),
        *[Support(math.inf, 0.0, 0.0)] * 3,
        None,
    ]
    assert [j.element for j in line.joints] == ["N0", "N1", "N2", "N3", None]
    assert line.members[0].flexural_rigidity == pytest.approx(RIGIDITY, rel=1e-12)
    assert line.joints[1].point == pytest.approx((5.0, 0.0, Z))


def test_the_line_starts_where_its_first_element_starts():
    line = only(idealise(three_spans(flip=(0, 1, 2, 3)), Settings()))

    assert spans(line) == [1.5, 4.0, 7.0, 5.0]
    assert not any(m.reversed_ for m in line.members)


def test_a_member_drawn_against_the_line_counts_its_stations_backwards():
    line = only(idealise(three_spans(flip=(1,)), Settings()))
    assert spans(line) == [5.0, 7.0, 4.0, 1.5]
    turned_round = line.members[1]

    assert turned_round.reversed_
    assert turned_round.element_offset == pytest.approx(7.0)


def test_actions_on_a_reversed_member_keep_their_place():
    building = three_spans(flip=(1,))
    action = uniform("q", "B1", (0.0, 0.0, -8e3), 2.0)  # the first 2 m of B1 as drawn
    line = only(
        idealise(model(building.members, building.connections, actions=[action]), Settings())
    )
    (force,) = line.actions

    assert isinstance(force, DistributedForce)
    assert (force.member, force.start, force.end) == (1, pytest.approx(5.0), pytest.approx(7.0))
    assert force.transverse == (8e3,)
    assert (force.case, force.source) == ("G", "q")


@pytest.mark.parametrize("angle", [0.0, 0.4, 2.0, 3.9])
def test_turning_and_moving_the_building_changes_no_line(angle):
    plain = only(idealise(three_spans(), Settings()))
    moved = only(idealise(turned(three_spans(), angle, (1.2e6, -4.4e5, 310.0)), Settings()))

    assert [j.x for j in moved.joints] == pytest.approx([j.x for j in plain.joints], abs=1e-8)
    assert [j.z for j in moved.joints] == pytest.approx([j.z for j in plain.joints], abs=1e-8)
    assert [j.support for j in moved.joints] == [j.support for j in plain.joints]
    assert moved.actions[0].transverse == pytest.approx(plain.actions[0].transverse)


def test_order_in_the_file_plays_no_part():
    plain = idealise(three_spans(), Settings())
    for seed in range(5):
        assert idealise(shuffled(three_spans(), seed), Settings()) == plain


def test_a_node_along_a_member_splits_it_into_spans():
    beam = member("B", (0.0, 0.0, Z), (9.0, 0.0, Z))
    nodes = [node(n, (x, 0.0, Z), PINNED) for n, x in (("a", 0.0), ("b", 3.5), ("c", 9.0))]
    line = only(idealise(model([beam], nodes), Settings()))

    assert spans(line) == [3.5, 5.5]
    assert [m.element_offset for m in line.members] == [0.0, 3.5]
    assert line.elements == ("B",)


def test_a_release_becomes_a_hinge_at_that_end():
    building = released(three_spans(), "B1", "N2")
    line = only(idealise(building, Settings()))

    assert [m.end_spring for m in line.members] == [math.inf, 0.0, math.inf, math.inf]
    assert all(m.start_spring == math.inf for m in line.members)


def test_a_rotational_spring_keeps_its_stiffness():
    spring = Restraint(rotation=(math.inf, 4.5e6, math.inf))
    line = only(idealise(released(three_spans(), "B2", "N2", spring), Settings()))

    assert line.members[2].start_spring == pytest.approx(4.5e6)


def test_a_pin_jointed_member_is_released_at_both_ends():
    building = three_spans()
    members = [*building.members[:3], member("B3", (16.0, 0.0, Z), (17.5, 0.0, Z))]
    members[1] = member("B1", (5.0, 0.0, Z), (12.0, 0.0, Z), carries_moment=False)
    line = only(idealise(model(members, building.connections), Settings()))

    assert (line.members[1].start_spring, line.members[1].end_spring) == (0.0, 0.0)


def test_support_springs_and_turned_axes_reach_the_plane():
    """The condition's own x points along Y of the world; its spring about own x bends the beam."""
    axes = ((0.0, 1.0, 0.0), (-1.0, 0.0, 0.0), (0.0, 0.0, 1.0))
    spring = Restraint((0.0, math.inf, 2.5e7), (6e5, 0.0, 0.0), axes)
    beam = member("B", (0.0, 0.0, 0.0), (6.0, 0.0, 0.0))
    nodes = [node("a", (0.0, 0.0, 0.0), spring), node("b", (6.0, 0.0, 0.0), PINNED)]
    line = only(idealise(model([beam], nodes), Settings()))

    assert line.joints[0].support == Support(2.5e7, math.inf, 6e5)


def test_a_sloping_line_lies_along_its_slope():
    beams = [
        member("A", (0.0, 0.0, 0.0), (4.0, 0.0, 3.0)),
        member("B", (4.0, 0.0, 3.0), (8.0, 0.0, 6.0)),
    ]
    nodes = [node(n, (x, 0.0, 0.75 * x), PINNED) for n, x in (("a", 0.0), ("b", 4.0), ("c", 8.0))]
    line = only(idealise(model(beams, nodes), Settings()))

    assert (line.kind, spans(line)) == ("line", [5.0, 5.0])
    assert [(j.x, j.z) for j in line.joints] == [
        (0.0, 0.0),
        (pytest.approx(4.0), pytest.approx(3.0)),
        (pytest.approx(8.0), pytest.approx(6.0)),
    ]


def test_a_beam_lying_on_its_side_bends_about_its_weak_axis():
    beam = member("B", (0.0, 0.0, 0.0), (6.0, 0.0, 0.0), up=(0.0, 1.0, 0.0))
    nodes = [node(n, (x, 0.0, 0.0), PINNED) for n, x in (("a", 0.0), ("b", 6.0))]
    found = idealise(model([beam], nodes), Settings())

    assert only(found).members[0].flexural_rigidity == pytest.approx(210e9 * 3e-5)
    assert "oblique-bending" not in slugs(found)


def test_a_section_turned_by_30_degrees_is_reported_and_takes_the_turned_inertia():
    angle = math.radians(30.0)
    beam = member("B", (0.0, 0.0, 0.0), (6.0, 0.0, 0.0), up=(0.0, math.sin(angle), math.cos(angle)))
    nodes = [node(n, (x, 0.0, 0.0), PINNED) for n, x in (("a", 0.0), ("b", 6.0))]
    found = idealise(model([beam], nodes), Settings())

    # I cos² + I' sin² by hand: 2e-4 * 0.75 + 3e-5 * 0.25.
    assert only(found).members[0].flexural_rigidity == pytest.approx(210e9 * 1.575e-4)
    assert finding(found, "oblique-bending").elements == ("B",)


def test_a_beam_held_nowhere_is_listed_but_not_analysed():
    found = idealise(model([member("B", (0.0, 0.0, 0.0), (6.0, 0.0, 0.0))], []), Settings())

    assert finding(found, "no-support").severity == "error"
    assert "nothing holds it up" in only(found).fault


def test_a_cantilever_needs_no_second_support():
    beam = member("B", (0.0, 0.0, 0.0), (2.5, 0.0, 0.0))
    line = only(idealise(model([beam], [node("a", (0.0, 0.0, 0.0), Restraint())]), Settings()))

    assert line.fault == ""
    assert line.joints[0].support == Support(math.inf, math.inf, math.inf)


def test_a_member_without_section_is_named_with_what_the_job_file_can_state():
    beam = member("B", (0.0, 0.0, 0.0), (6.0, 0.0, 0.0), section=None)
    nodes = [node(n, (x, 0.0, 0.0), PINNED) for n, x in (("a", 0.0), ("b", 6.0))]
    found = idealise(model([beam], nodes), Settings())
    told = finding(found, "no-rigidity")

    assert (told.severity, told.elements, told.line) == ("error", ("B",), only(found).mark)
    assert "inertia in the job file" in told.message
    assert only(found).fault


def test_a_long_eccentricity_is_spanned_to_the_node_and_said():
    beam = member("B", (0.8, 0.0, 0.0), (6.0, 0.0, 0.0))
    nodes = [node("a", (0.0, 0.0, 0.0), PINNED), node("b", (6.0, 0.0, 0.0), ROLLER)]
    attachments = [
        Attachment("B", "a", 0.0, eccentricity=(0.8, 0.0, 0.0)),
        Attachment("B", "b", 5.2),
    ]
    found = idealise(model([beam], nodes, attachments=attachments), Settings())
    line = only(found)

    assert spans(line) == [6.0]
    assert line.members[0].element_offset == pytest.approx(-0.8)
    assert "800 mm" in finding(found, "eccentric-connection").message


def test_an_end_that_misses_its_node_by_millimetres_is_moved_onto_it():
    beam = member("B", (0.004, 0.0, 0.0), (6.0, 0.0, 0.0))
    nodes = [node("a", (0.0, 0.0, 0.0), PINNED), node("b", (6.0, 0.0, 0.0), ROLLER)]
    attachments = [Attachment("B", "a", 0.0), Attachment("B", "b", 5.996)]
    found = idealise(model([beam], nodes, attachments=attachments), Settings())

    assert "4 mm" in finding(found, "end-moved").message
