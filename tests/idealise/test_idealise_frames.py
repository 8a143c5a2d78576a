"""Frames and planes of an analysis model; lines that carry each other; actions in a plane."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from building_makers import (
    FREE3,
    PINNED,
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

from analysis_core import distribution
from analysis_core.building import Attachment, AxisAction, NodeAction, Restraint, TemperatureAction
from analysis_core.idealise import idealise
from analysis_core.model import JointForce, JointMovement, PointForce, Support
from analysis_core.settings import Settings

H, L = 4.0, 6.0


FIXED_BASE = Restraint()


def portal(base=FIXED_BASE, y=0.0, name=""):
    """A portal frame in the plane at ``y``: left column, right column drawn downward, beam."""
    points = {"a": (0.0, y, 0.0), "b": (0.0, y, H), "c": (L, y, H), "d": (L, y, 0.0)}
    members = [
        member(f"{name}CL", points["a"], points["b"]),
        member(f"{name}CR", points["c"], points["d"]),
        member(f"{name}B", points["b"], points["c"]),
    ]
    nodes = [node(f"{name}{k}", p, base if k in "ad" else None) for k, p in points.items()]
    return members, nodes


def test_a_portal_is_a_frame_with_columns_as_legs():
    line = only(idealise(model(*portal()), Settings()))

    assert line.kind == "frame"
    assert [(j.x, j.z) for j in line.joints] == [(0.0, 0.0), (L, 0.0), (0.0, H), (L, H)]
    assert [j.support is not None for j in line.joints] == [True, True, False, False]
    assert line.joints[0].support == Support(math.inf, math.inf, math.inf)
    assert [(m.element, m.role, m.start, m.end, m.reversed_) for m in line.members] == [
        ("B", "span", 2, 3, False),
        ("CL", "leg", 0, 2, False),
        ("CR", "leg", 1, 3, True),
    ]
    assert [m.span for m in line.members] == [1, None, None]


def test_a_portal_under_sideways_force_agrees_with_the_closed_form():
    """Fixed bases, all EI equal: slope-deflection by hand with k = EI/H, b = EI/L.

    Antisymmetric sway: M_base = -(P H / 2)(3 b + k) / (6 b + k), M_top = -(P H / 2) 3 b / (6 b + k)
    per column, so that both columns together resist P H (as in Kleinlogel's tables of rigid
    frames, frame 38, from memory; derived anew here).
    """
    members, nodes = portal()
    push = NodeAction("p", "p", "W", "b", force=(10e3, 0.0, 0.0))
    line = only(idealise(model(members, nodes, actions=[push]), Settings()))
    solution = distribution.solve(line, ["W"])
    k, b, half = 1.0 / H, 1.0 / L, 10e3 * H / 2.0

    base = half * (3.0 * b + k) / (6.0 * b + k)
    assert line.actions == (JointForce("W", 2, 10e3, 0.0, 0.0, "p"),)
    assert solution.reactions[0, 0] == pytest.approx(
        (-5e3, -20e3 * 3 * b / (6 * b + k) * 2 / L, -base)
    )


@pytest.mark.parametrize("angle", [0.5, 1.9, 3.6])
def test_a_turned_frame_is_seen_along_the_nearest_world_axis(angle):
    line = only(idealise(turned(model(*portal()), angle, (5e5, 6e6, 12.0)), Settings()))

    nearest = np.argmax(np.abs(line.axis[:2]))
    assert line.axis[nearest] > 0.0
    assert sorted(round(j.x, 6) for j in line.joints) == [0.0, 0.0, L, L]


def test_order_and_drawing_direction_change_no_frame():
    plain = idealise(model(*portal()), Settings())
    members, nodes = portal()
    back = [replace(m, start=m.end, end=m.start) for m in members]
    other = only(idealise(model(back, nodes), Settings()))

    assert idealise(shuffled(model(*portal()), 3), Settings()) == plain
    assert [(j.x, j.z) for j in other.joints] == [(j.x, j.z) for j in only(plain).joints]
    assert [(m.element, m.start, m.end) for m in other.members] == [
        (m.element, m.start, m.end) for m in only(plain).members
    ]


def space_frame():
    """Two portals along X, 5 m apart, tied along Y by beams between their heads."""
    members, nodes = [], []
    for name, y in (("f", 0.0), ("g", 5.0)):
        m, n = portal(y=y, name=name)
        members += m
        nodes += n
    for x, side in ((0.0, "b"), (L, "c")):
        members.append(member(f"T{side}", (x, 0.0, H), (x, 5.0, H)))
    return members, nodes


def test_planes_are_found_in_a_space_frame_and_shared_columns_named():
    found = idealise(model(*space_frame()), Settings())

    assert [(line.kind, line.mark) for line in found.lines] == [
        ("frame", f"F-0{i}") for i in (1, 2, 3, 4)
    ]
    assert [set(line.elements) for line in found.lines] == [
        {"fB", "fCL", "fCR"},
        {"gB", "gCL", "gCR"},
        {"Tb", "fCL", "gCL"},
        {"Tc", "fCR", "gCR"},
    ]
    shared = [f for f in found.findings if f.slug == "member-in-two-planes"]
    assert {f.elements[0] for f in shared} == {"fCL", "fCR", "gCL", "gCR"}
    assert "F-01 and F-03" in next(f.message for f in shared if f.elements == ("fCL",))


def test_a_force_on_a_shared_column_is_shared_among_its_planes_and_counted_once():
    members, nodes = space_frame()
    push = NodeAction("p", "p", "G", "fb", force=(3e3, 4e3, -20e3))
    found = idealise(model(members, nodes, actions=[push]), Settings())
    marks = {line.mark: line.actions for line in found.lines if line.actions}

    assert marks == {
        "F-01": (JointForce("G", 2, 3e3, 20e3, 0.0, "p"),),
        "F-03": (JointForce("G", 2, 4e3, 0.0, 0.0, "p"),),
    }
    assert "out-of-plane-action" not in slugs(found)


def secondary_floor(*, end_release=None):
    """A primary of 8 m along X; secondaries of 5 and 4 m along Y meet it at 3 m, one each side."""
    members = [
        member("P", (0.0, 0.0, 0.0), (8.0, 0.0, 0.0)),
        member("S1", (3.0, 0.0, 0.0), (3.0, 5.0, 0.0)),
        member("T1", (5.5, 0.0, 0.0), (5.5, -4.0, 0.0)),
    ]
    nodes = [
        node("p0", (0.0, 0.0, 0.0), PINNED),
        node("p1", (8.0, 0.0, 0.0), PINNED),
        node("s", (3.0, 0.0, 0.0)),
        node("s5", (3.0, 5.0, 0.0), PINNED),
        node("t", (5.5, 0.0, 0.0)),
        node("t4", (5.5, -4.0, 0.0), PINNED),
    ]
    return members, nodes


def test_secondary_lines_rest_on_the_primary_and_hand_their_reactions_on():
    members, nodes = secondary_floor()
    found = idealise(
        model(members, nodes, actions=[uniform("q", "S1", (0.0, 0.0, -6e3), 5.0)]), Settings()
    )
    lines = {line.elements[0]: line for line in found.lines}

    assert spans(lines["P"]) == [3.0, 2.5, 2.5]
    assert lines["S1"].joints[0].support == Support(vertical=math.inf)
    assert lines["S1"].joints[0].element == "P"
    assert "carried here by line" in lines["S1"].joints[0].reason
    primary = lines["P"].mark
    assert {(t.from_line, t.joint, t.to_line) for t in found.transfers} == {
        (lines["S1"].mark, 0, primary),
        (lines["T1"].mark, 0, primary),
    }
    where = {t.from_line: (t.member, t.position) for t in found.transfers}
    assert where[lines["S1"].mark] in [(0, pytest.approx(3.0)), (1, 0.0)]
    assert where[lines["T1"].mark] in [(1, pytest.approx(2.5)), (2, 0.0)]
    assert "stiffness-across-plane" in slugs(found)


def test_a_vertical_force_on_a_shared_node_acts_on_the_line_that_carries():
    members, nodes = secondary_floor()
    load = NodeAction("p", "p", "G", "s", force=(0.0, 0.0, -7e3))
    found = idealise(model(members, nodes, actions=[load]), Settings())
    (line,) = [line for line in found.lines if line.actions]

    assert line.elements == ("P",)
    assert line.actions == (JointForce("G", 1, 0.0, 7e3, 0.0, "p"),)


def test_crossing_beams_that_both_stand_are_said_to_share_what_acts():
    members = [
        member("A", (-3.0, 0.0, 0.0), (3.0, 0.0, 0.0)),
        member("B", (0.0, -5.0, 0.0), (0.0, 5.0, 0.0)),
    ]
    nodes = [node("x", FREE3)]
    nodes += [node(f"A{x}", (x, 0.0, 0.0), PINNED) for x in (-3.0, 3.0)]
    nodes += [node(f"B{y}", (0.0, y, 0.0), PINNED) for y in (-5.0, 5.0)]
    found = idealise(model(members, nodes), Settings())

    told = finding(found, "grillage-crossing")
    assert told.severity == "warning"
    (transfer,) = found.transfers
    lines = {line.elements[0]: line.mark for line in found.lines}
    assert (transfer.from_line, transfer.to_line) == (lines["B"], lines["A"])


def test_reciprocal_beams_carry_each_other_in_a_circle():
    """Four beams, each from a wall to the side of the next."""
    ends = [
        ((0.0, -4.0, 0.0), (0.0, 1.0, 0.0)),
        ((-4.0, 1.0, 0.0), (1.0, 1.0, 0.0)),
        ((1.0, 5.0, 0.0), (1.0, 0.0, 0.0)),
        ((5.0, 0.0, 0.0), (0.0, 0.0, 0.0)),
    ]
    members = [member(f"R{i}", a, b) for i, (a, b) in enumerate(ends)]
    nodes = [node(f"w{i}", a, PINNED) for i, (a, _) in enumerate(ends)]
    nodes += [node(f"j{i}", b) for i, (_, b) in enumerate(ends)]
    found = idealise(model(members, nodes), Settings())
    mark = {line.elements[0]: line.mark for line in found.lines}

    assert {(t.from_line, t.to_line) for t in found.transfers} == {
        (mark["R0"], mark["R1"]),
        (mark["R1"], mark["R2"]),
        (mark["R2"], mark["R3"]),
        (mark["R3"], mark["R0"]),
    }
    assert not any(line.fault for line in found.lines)


def test_a_pin_joined_column_head():
    members, nodes = portal()
    line = only(idealise(released(model(members, nodes), "CR", "c"), Settings()))
    springs = {m.element: (m.start_spring, m.end_spring) for m in line.members}

    assert springs == {
        "B": (math.inf, math.inf),
        "CL": (math.inf, math.inf),
        "CR": (math.inf, 0.0),
    }


def test_a_column_pinned_under_a_beam_that_runs_on():
    """The release is stated where the beam passes: what turns against it is the column's head."""
    members = [
        member("B", (-5.0, 0.0, H), (5.0, 0.0, H)),
        member("C", (0.0, 0.0, 0.0), (0.0, 0.0, H)),
    ]
    nodes = [
        node("l", (-5.0, 0.0, H), PINNED),
        node("m", (0.0, 0.0, H)),
        node("r", (5.0, 0.0, H), ROLLER),
        node("base", FREE3, Restraint()),
    ]
    line = only(idealise(released(model(members, nodes), "B", "m"), Settings()))
    springs = {(m.element, m.id): (m.start_spring, m.end_spring) for m in line.members}

    assert [s for (e, _), s in springs.items() if e == "B"] == [(math.inf, math.inf)] * 2
    assert [s for (e, _), s in springs.items() if e == "C"] == [(math.inf, 0.0)]


def test_an_action_across_the_plane_is_named_with_its_size():
    beam = member("B", FREE3, (6.0, 0.0, 0.0))
    nodes = [node("a", FREE3, PINNED), node("b", (6.0, 0.0, 0.0), PINNED)]
    action = uniform("q", "B", (0.0, 2.5e3, -8e3), 6.0)
    found = idealise(model([beam], nodes, actions=[action]), Settings())
    told = finding(found, "out-of-plane-action")

    assert told.elements == ("q", "B")
    assert "2.5 kN/m" in told.message
    assert only(found).actions[0].transverse == (8e3,)


def test_a_couple_about_the_axis_is_torsion_and_one_about_y_bends():
    beam = member("B", FREE3, (6.0, 0.0, 0.0))
    nodes = [node("a", FREE3, PINNED), node("b", (6.0, 0.0, 0.0), PINNED)]
    action = AxisAction(
        "m", "m", "G", "B", "discrete", (2.0,), (FREE3,), moments=((3e3, 5e3, 0.0),)
    )
    found = idealise(model([beam], nodes, actions=[action]), Settings())

    assert "3 kN·m" in finding(found, "torsion").message
    # Seen along +Y with X to the right, a couple about +Y turns clockwise.
    assert only(found).actions[0].moment == 5e3


def test_couples_per_metre_bend_like_the_forces_that_replace_them():
    """m constant over a simple span bends nothing inside but makes reactions of m each."""
    beam = member("B", FREE3, (6.0, 0.0, 0.0))
    nodes = [node("a", FREE3, PINNED), node("b", (6.0, 0.0, 0.0), PINNED)]
    action = AxisAction(
        "m", "m", "G", "B", "continuous", (0.0, 6.0), (FREE3, FREE3),
        moments=((0.0, 2e3, 0.0), (0.0, 2e3, 0.0)),
    )  # fmt: skip
    line = only(idealise(model([beam], nodes, actions=[action]), Settings()))

    assert [(a.position, a.transverse) for a in line.actions if isinstance(a, PointForce)] == [
        (0.0, -2e3),
        (6.0, 2e3),
    ]
    # Clockwise 2 kN·m/m over 6 m is balanced by a couple of reactions of 12 kN·m: 2 kN at 6 m.
    assert distribution.solve(line, ["G"]).reactions[0, :, 1] == pytest.approx((-2e3, 2e3))


def test_a_horizontal_force_along_a_line_that_nothing_holds_is_said():
    beam = member("B", FREE3, (6.0, 0.0, 0.0))
    nodes = [node("a", FREE3, ROLLER), node("b", (6.0, 0.0, 0.0), ROLLER)]
    action = uniform("q", "B", (1.5e3, 0.0, -8e3), 6.0)
    found = idealise(model([beam], nodes, actions=[action]), Settings())

    assert "1.5 kN/m" in finding(found, "axial-unresisted").message
    assert only(found).actions[0].axial == (1.5e3,)


def test_settlement_and_rotation_of_a_node():
    beam = member("B", FREE3, (6.0, 0.0, 0.0))
    nodes = [node("a", FREE3, Restraint()), node("b", (6.0, 0.0, 0.0), PINNED)]
    moved = NodeAction(
        "s", "s", "S", "a", displacement=(0.0, 0.0, -0.005), rotation=(0.0, 0.002, 0.0)
    )
    line = only(idealise(model([beam], nodes, actions=[moved]), Settings()))

    assert line.actions == (JointMovement("S", 0, 0.0, 0.005, 0.002, "s"),)


def test_moving_a_free_node_is_said():
    beam = member("B", FREE3, (6.0, 0.0, 0.0))
    nodes = [node("a", FREE3, Restraint()), node("b", (6.0, 0.0, 0.0))]
    moved = NodeAction("s", "s", "S", "b", displacement=(0.0, 0.0, -0.005))
    found = idealise(model([beam], nodes, actions=[moved]), Settings())

    assert "movement-without-support" in slugs(found)


@pytest.mark.parametrize(("flip", "sign"), [(False, 1.0), (True, 1.0)])
def test_a_warmer_underside_makes_a_beam_sag_however_it_is_drawn(flip, sign):
    """difference_z is top minus bottom: -20 K over 0.4 m, alpha 12e-6."""
    ends = ((6.0, 0.0, 0.0), FREE3) if flip else (FREE3, (6.0, 0.0, 0.0))
    beam = member("B", *ends, up=(0.0, 0.0, 1.0))
    nodes = [node("a", FREE3, PINNED), node("b", (6.0, 0.0, 0.0), PINNED)]
    warm = TemperatureAction("t", "t", "T", "B", constant=8.0, difference_z=-20.0)
    found = idealise(model([beam], nodes, actions=[warm]), Settings())

    assert only(found).actions[0].curvature == pytest.approx(sign * 6e-4)
    assert "8 K" in finding(found, "uniform-temperature").message


def test_a_warmer_side_curves_a_member_across_its_plane():
    beam = member("B", FREE3, (6.0, 0.0, 0.0))
    nodes = [node("a", FREE3, PINNED), node("b", (6.0, 0.0, 0.0), PINNED)]
    warm = TemperatureAction("t", "t", "T", "B", difference_y=15.0)
    found = idealise(model([beam], nodes, actions=[warm]), Settings())

    assert only(found).actions == ()
    assert "out of the plane" in finding(found, "out-of-plane-action").message


def test_a_slanting_roller_under_a_frame_is_refused_and_under_a_line_explained():
    tilt = math.radians(20.0)
    axes = (
        (math.cos(tilt), 0.0, math.sin(tilt)),
        (0.0, 1.0, 0.0),
        (-math.sin(tilt), 0.0, math.cos(tilt)),
    )
    roller = Restraint((0.0, 0.0, math.inf), FREE3, axes)
    beam = member("B", FREE3, (6.0, 0.0, 0.0))
    line_nodes = [node("a", FREE3, PINNED), node("b", (6.0, 0.0, 0.0), roller)]
    members, nodes = portal()
    nodes[-1] = replace(nodes[-1], restraint=roller)

    line = idealise(model([beam], line_nodes), Settings())
    frame = idealise(model(members, nodes), Settings())

    assert only(line).joints[1].support.vertical == math.inf
    assert finding(line, "skew-support").severity == "note"
    assert finding(frame, "skew-support").severity == "error"
    assert "slanting" in only(frame).fault


def test_a_leaning_column_out_of_the_frames_plane_is_named():
    members, nodes = portal()
    members[1] = member("CR", (L, 0.0, H), (L, 1.5, 0.0))
    nodes[-1] = replace(nodes[-1], point=(L, 1.5, 0.0))
    found = idealise(model(members, nodes), Settings())

    told = finding(found, "not-in-a-vertical-plane")
    assert (told.severity, told.elements) == ("error", ("CR",))


def test_a_lone_column_is_seen_in_the_plane_of_its_depth():
    post = member("C", FREE3, (0.0, 0.0, 3.0), up=(0.0, 1.0, 0.0))
    push = NodeAction("p", "p", "W", "top", force=(0.0, 5e3, 0.0))
    nodes = [node("base", FREE3, Restraint()), node("top", (0.0, 0.0, 3.0))]
    line = only(idealise(model([post], nodes, actions=[push]), Settings()))

    assert line.kind == "frame"
    assert line.axis == (0.0, 1.0, 0.0)
    assert line.actions == (JointForce("W", 1, 5e3, 0.0, 0.0, "p"),)


def test_a_beam_drawn_between_column_faces_keeps_its_load_when_it_is_taken_to_the_nodes():
    """Drawn 5.4 m long between nodes 6 m apart: 5.4 kN at 1 kN/m, spread over 6 m."""
    members, nodes = portal()
    members[2] = member("B", (0.3, 0.0, H), (L - 0.3, 0.0, H))
    action = uniform("q", "B", (0.0, 0.0, -1e3), 5.4)
    building = model(members, nodes, actions=[action])
    building = replace(
        building,
        attachments=(
            *building.attachments,
            Attachment("B", "b", 0.0, eccentricity=(0.3, 0.0, 0.0)),
            Attachment("B", "c", 5.4, eccentricity=(-0.3, 0.0, 0.0)),
        ),
    )
    (force,) = only(idealise(building, Settings())).actions

    assert (force.start, force.end) == (0.0, pytest.approx(6.0))
    assert force.transverse == pytest.approx((900.0,))
