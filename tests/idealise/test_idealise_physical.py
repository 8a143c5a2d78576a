"""Physical beams become lines: joined over bearings, carried by what is under them."""

from __future__ import annotations

import itertools
import math
from dataclasses import replace

import pytest
from building_makers import finding, only, shuffled, slugs, spans, turned
from physical_makers import beam, block, column, house, wall

from analysis_core import distribution
from analysis_core.building import Building, Opening
from analysis_core.idealise import idealise
from analysis_core.model import DistributedForce, PointForce, Support
from analysis_core.settings import ActionSetting, Analysis, Selector, Settings

Z = 3.0
PIN = Support(vertical=math.inf)


def row(xs=(0.0, 5.0, 11.2, 15.0), side=0.3) -> Building:
    """Beams drawn from face to face of columns 300 mm square, their underside on the tops."""
    half = side / 2.0
    columns = [column(f"C{i}", x, 0.0, 0.0, Z - 0.2, side) for i, x in enumerate(xs)]
    beams = [
        beam(f"B{i}", (a + half, 0.0, Z), (b - half, 0.0, Z))
        for i, (a, b) in enumerate(itertools.pairwise(xs))
    ]
    return house(beams, columns)


def test_beams_between_columns_are_one_line_measured_axis_to_axis():
    found = idealise(row(), Settings())
    line = only(found)

    assert spans(line) == [5.0, 6.2, 3.8]
    assert [j.support for j in line.joints] == [PIN] * 4
    assert [j.element for j in line.joints] == ["C0", "C1", "C2", "C3"]
    assert line.elements == ("B0", "B1", "B2")
    assert "'C0' (GlobalId C0), 150 mm from its axis" in line.joints[0].reason
    assert "pinned by rule" in line.joints[0].reason
    assert [m.element_offset for m in line.members] == pytest.approx([-0.15] * 3)
    assert line.joints[1].width == pytest.approx(0.3)
    assert finding(found, "assumed-continuous").line == line.mark


def test_beams_that_are_not_to_be_continuous_are_lines_of_their_own():
    settings = Settings(analysis=Analysis(continuous_over_columns=False))
    found = idealise(row(), settings)

    assert [spans(line) for line in found.lines] == [[5.0], [6.2], [3.8]]
    assert all(j.support == PIN for line in found.lines for j in line.joints)


def test_one_beam_over_several_columns_is_split_and_overhangs():
    columns = [column(f"C{i}", x, 0.0, 0.0, Z - 0.2) for i, x in enumerate((0.0, 4.0, 9.0))]
    found = idealise(house([beam("B", (-1.2, 0.0, Z), (9.1, 0.0, Z))], columns), Settings())
    line = only(found)

    assert spans(line) == [1.2, 4.0, 5.0]
    assert [j.element for j in line.joints] == [None, "C0", "C1", "C2"]
    assert [m.span for m in line.members] == [1, 2, 3]


@pytest.mark.parametrize(("angle", "offset"), [(0.0, (1e6, -2e6, 0.0)), (0.7, (1e6, 3e5, 40.0))])
def test_turning_and_moving_changes_nothing(angle, offset):
    plain, moved = (only(idealise(b, Settings())) for b in (row(), turned(row(), angle, offset)))

    assert [j.x for j in moved.joints] == pytest.approx([j.x for j in plain.joints], abs=1e-6)
    assert [j.element for j in moved.joints] == [j.element for j in plain.joints]


def test_order_plays_no_part():
    for seed in range(4):
        assert idealise(shuffled(row(), seed), Settings()) == idealise(row(), Settings())


def test_a_beam_that_ends_in_a_wall_bears_on_the_middle_of_its_thickness():
    walls = [
        wall("W1", (-0.1, -3.0, 0.0), (0.1, 3.0, Z - 0.2)),
        wall("W2", (5.9, -3.0, 0.0), (6.15, 3.0, Z + 1.0)),
    ]
    line = only(idealise(house([beam("B", (0.0, 0.0, Z), (5.95, 0.0, Z))], walls), Settings()))

    assert spans(line) == [6.025]
    assert [j.element for j in line.joints] == ["W1", "W2"]
    assert line.joints[1].width == pytest.approx(0.25)


def test_a_column_that_stands_on_the_beam_does_not_hold_it():
    carriers = [
        column("C0", 0.0, 0.0, 0.0, Z - 0.2),
        column("C1", 6.0, 0.0, 0.0, Z - 0.2),
        column("upper", 2.0, 0.0, Z + 0.2, 6.0),
    ]
    line = only(idealise(house([beam("B", (0.0, 0.0, Z), (6.0, 0.0, Z))], carriers), Settings()))

    assert spans(line) == [6.0]


def test_a_column_that_starts_at_a_beams_end_is_said_not_to_hold_it():
    carriers = [column("C0", 0.0, 0.0, 0.0, Z - 0.2), column("upper", 6.0, 0.0, Z, 6.0)]
    line = only(idealise(house([beam("B", (0.0, 0.0, Z), (6.0, 0.0, Z))], carriers), Settings()))

    assert line.fault
    assert "'upper' (GlobalId upper) is there, but does not come up to it" in line.joints[1].reason


def test_secondary_beams_rest_on_the_primary_that_they_frame_into():
    """Two secondaries, face to face of the primary; by rule not continuous through it."""
    columns = [column("C0", 0.0, 0.0, 0.0, Z - 0.2), column("C1", 7.0, 0.0, 0.0, Z - 0.2)]
    columns += [column("D0", 2.5, 4.0, 0.0, Z - 0.2), column("D1", 2.5, -5.0, 0.0, Z - 0.2)]
    beams = [
        beam("P", (0.0, 0.0, Z), (7.0, 0.0, Z)),
        beam("S1", (2.5, 0.1, Z), (2.5, 4.0, Z)),
        beam("S2", (2.5, -0.1, Z), (2.5, -5.0, Z)),
    ]
    found = idealise(house(beams, columns), Settings())
    lines = {line.elements[0]: line for line in found.lines}

    assert spans(lines["P"]) == [7.0]
    assert spans(lines["S1"]) == [4.0]
    assert spans(lines["S2"]) == [5.0]
    assert lines["S1"].joints[0].element == "P"
    assert "frames into beam 'P'" in lines["S1"].joints[0].reason
    carried = {t.from_line: (t.to_line, t.member, round(t.position, 6)) for t in found.transfers}
    assert carried == {
        lines["S1"].mark: (lines["P"].mark, 0, 2.5),
        lines["S2"].mark: (lines["P"].mark, 0, 2.5),
    }


def test_a_beam_on_top_of_others_rests_on_them_and_runs_through():
    columns = [column(f"C{x}{y}", x, y, 0.0, Z - 0.2) for x in (0.0, 6.0) for y in (0.0, 4.0, 9.0)]
    lower = [beam(f"P{y}", (0.0, y, Z), (6.0, y, Z)) for y in (0.0, 4.0, 9.0)]
    upper = beam("S", (2.0, -0.8, Z + 0.4), (2.0, 9.0, Z + 0.4))
    found = idealise(house([*lower, upper], columns), Settings())
    line = next(line for line in found.lines if line.elements == ("S",))

    assert spans(line) == [0.8, 4.0, 5.0]
    assert [j.element for j in line.joints] == [None, "P0.0", "P4.0", "P9.0"]
    assert len(found.transfers) == 3


@pytest.mark.parametrize(("below", "warned"), [(8.0, True), (2.5, False)])
def test_a_beam_that_lies_on_a_soft_one_between_columns_is_warned_of(below, warned):
    """At mid-span a beam resists 48 EI / L³: the lower one (6 / 8)³ = 0.42 times the upper one."""
    half = below / 2.0
    columns = [column(f"C{x}", x, 0.0, 0.0, Z - 0.2) for x in (-half, half)]
    columns += [column(f"D{y}", 0.0, y, 0.0, Z + 0.2) for y in (-3.0, 3.0)]
    lower = beam("P", (-half, 0.0, Z), (half, 0.0, Z))
    upper = beam("S", (0.0, -3.0, Z + 0.4), (0.0, 3.0, Z + 0.4))
    found = idealise(house([lower, upper], columns), Settings())
    line = next(line for line in found.lines if line.elements == ("S",))

    assert "its deflection is neglected" in line.joints[1].reason
    assert ("grillage-crossing" in slugs(found)) == warned
    if warned:
        told = finding(found, "grillage-crossing")
        assert told.line == line.mark
        assert "0.42 times as stiff" in told.message


def test_a_rafter_on_a_slab_bears_where_its_foot_touches():
    slab = block("S", "IfcSlab", (-1.0, -4.0, 2.8), (2.0, 4.0, 3.0))
    ridge = beam("R", (4.0, -4.0, 6.0 - 0.2), (4.0, 4.0, 6.0 - 0.2))
    posts = [column("P0", 4.0, -4.0, 0.0, 5.6), column("P1", 4.0, 4.0, 0.0, 5.6)]
    rise = math.hypot(4.0, 2.7) / 4.0 * 0.2  # half depth measured upright
    rafter = beam("B", (0.0, 0.0, 3.0 + rise), (4.0, 0.0, 5.7 + rise))
    found = idealise(house([ridge, rafter], [slab, *posts]), Settings())
    line = next(line for line in found.lines if line.elements == ("B",))

    assert [j.element for j in line.joints] == ["S", "R"]
    assert "slab" in line.joints[0].reason


def test_a_beam_with_one_end_in_the_air_and_one_bearing_is_not_analysed():
    found = idealise(
        house([beam("B", (0.0, 0.0, Z), (6.0, 0.0, Z))], [column("C0", 0.0, 0.0, 0.0, Z - 0.2)]),
        Settings(),
    )

    assert finding(found, "no-support").elements == ("B",)
    assert "its end bears on nothing within 350 mm" in only(found).fault


def test_splices_in_a_span_are_joined_and_said():
    columns = [column("C0", 0.0, 0.0, 0.0, Z - 0.2), column("C1", 7.0, 0.0, 0.0, Z - 0.2)]
    beams = [beam("A", (0.0, 0.0, Z), (2.6, 0.0, Z)), beam("B", (2.61, 0.0, Z), (7.0, 0.0, Z))]
    found = idealise(house(beams, columns), Settings())
    line = only(found)

    assert spans(line) == [2.605, 4.395]
    assert [m.span for m in line.members] == [1, 1]
    assert finding(found, "assumed-splice").elements == ("A", "B")


def test_steep_members_carry_like_columns():
    posts = [beam("post", (0.0, 0.0, 0.0), (0.0, 0.0, Z - 0.2))]
    found = idealise(
        house(
            [beam("B", (0.0, 0.0, Z), (6.0, 0.0, Z)), *posts],
            [column("C1", 6.0, 0.0, 0.0, Z - 0.2)],
        ),
        Settings(),
    )

    assert [j.element for j in only(found).joints] == ["post", "C1"]
    assert finding(found, "steep-member").elements == ("post",)


def test_an_edge_beam_over_cantilever_tips_is_carried_by_them():
    """Beams on two columns each overhang to y = -2; the edge beam lies across their tips."""
    xs = (0.0, 4.0, 9.0)
    columns = [column(f"C{x}{y}", x, y, 0.0, Z - 0.2) for x in xs for y in (0.0, 5.0)]
    arms = [beam(f"A{x}", (x, 5.0, Z), (x, -2.0 + 0.1, Z)) for x in xs]
    edge = beam("E", (0.0, -2.0, Z), (9.0, -2.0, Z))
    found = idealise(house([*arms, edge], columns), Settings())
    line = next(line for line in found.lines if line.elements == ("E",))

    assert spans(line) == [4.0, 5.0]
    assert [j.element for j in line.joints] == ["A0.0", "A4.0", "A9.0"]
    assert "no-support" not in slugs(found)


def test_a_beam_on_top_of_a_wall_is_held_along_it_and_a_lintel_at_its_ends():
    """4.5 m of contact: five intervals of 0.9 m.  The same wall 0.5 m higher makes it a lintel."""
    carriers = [column("C1", 9.0, 0.0, 0.0, Z - 0.2)]
    on_top = wall("W", (-1.0, -0.1, 0.0), (4.5, 0.1, Z - 0.2))
    around = wall("W", (-1.0, -0.1, 0.0), (4.5, 0.1, Z + 0.7))
    plate = beam("B", (0.0, 0.0, Z), (9.0, 0.0, Z))
    laid = idealise(house([plate], [on_top, *carriers]), Settings())
    lintel = idealise(house([plate], [around, *carriers]), Settings())

    assert spans(only(laid)) == [0.9] * 5 + [4.5]
    assert spans(only(lintel)) == [4.5, 4.5]
    assert finding(laid, "lies-along").severity == "warning"


@pytest.mark.parametrize(
    ("levels", "x", "severity"),
    [
        ((0.0, Z - 0.2), 0.0, "warning"),  # nothing left under the beam
        ((0.0, Z - 0.5), 0.0, "note"),  # a lintel of 300 mm
        ((0.0, Z - 0.2), 1.0, ""),  # beside the beam
        ((Z - 0.25, Z + 0.3), 0.0, ""),  # the pocket of the beam itself
        ((0.0, 1.0), 0.0, ""),  # far below
    ],
)
def test_a_bearing_over_an_opening_is_told_by_what_is_left_of_the_wall(levels, x, severity):
    corners = ((x - 0.45, -0.3), (x + 0.45, -0.3), (x + 0.45, 0.3), (x - 0.45, 0.3))
    holed = replace(
        wall("W", (-3.0, -0.1, 0.0), (3.0, 0.1, Z - 0.2)), openings=(Opening(*levels, corners),)
    )
    post = column("C", 0.0, 5.0, 0.0, Z - 0.2)
    found = idealise(house([beam("B", (0.0, 0.0, Z), (0.0, 5.0, Z))], [holed, post]), Settings())

    told = [f for f in found.findings if f.slug == "bearing-over-opening"]
    assert [f.severity for f in told] == [severity] * bool(severity)
    if severity == "note":
        assert "300 mm of wall between" in told[0].message


def test_of_two_posts_side_by_side_one_is_the_bearing():
    posts = [column("C0", 0.0, 0.0, 0.0, Z - 0.2), column("C1", 6.0, 0.0, 0.0, Z - 0.2)]
    extra = column("thin", 0.3, 0.0, 0.0, Z - 0.2, side=0.05)
    line = only(
        idealise(house([beam("B", (0.0, 0.0, Z), (6.0, 0.0, Z))], [*posts, extra]), Settings())
    )

    assert spans(line) == [6.0]
    assert "also near: column 'thin'" in line.joints[0].reason


def storeys_with_columns():
    """A bay of 6 m; columns from 0 to the beam's underside at 2.8 and from its top 3.2 to 6.5."""
    columns = []
    for x in (0.0, 6.0):
        columns += [column(f"L{x}", x, 0.0, 0.0, Z - 0.2), column(f"U{x}", x, 0.0, Z + 0.2, 6.5)]
    return house([beam("B", (0.0, 0.0, Z), (6.0, 0.0, Z))], columns)


def test_columns_become_legs_on_request():
    settings = Settings(analysis=Analysis(columns_as_legs=True))
    line = only(idealise(storeys_with_columns(), settings))
    legs = [(m.element, m.role, round(m.length, 3)) for m in line.members[1:]]

    assert line.kind == "line"
    assert legs == [
        ("L0.0", "leg", 3.0),
        ("U0.0", "leg", 3.5),
        ("L6.0", "leg", 3.0),
        ("U6.0", "leg", 3.5),
    ]
    assert line.joints[2].support == Support(math.inf, math.inf, math.inf)
    assert line.elements == ("B", "L0.0", "U0.0", "L6.0", "U6.0")


@pytest.mark.parametrize(("far", "factor"), [("fixed", 4.0), ("pinned", 3.0)])
def test_legs_restrain_the_beam_as_slope_deflection_says(far, factor):
    """M = wL²/12 · K/(K + 2EI/L) for a symmetric bay, K = factor · EI (1/3.0 + 1/3.5)."""
    settings = Settings(
        analysis=Analysis(columns_as_legs=True, leg_far_end=far, self_weight=False),
        actions=(ActionSetting("Q", Selector(name="B"), "uniform", (9e3,)),),
    )
    line = only(idealise(storeys_with_columns(), settings))
    solution = distribution.solve(line, ["Q"])
    columns = factor * (1.0 / 3.0 + 1.0 / 3.5)
    expected = 9e3 * 36.0 / 12.0 * columns / (columns + 2.0 / 6.0)

    assert solution.end_moments[0, 0] == pytest.approx((-expected, expected), rel=1e-9)
    assert solution.reactions[0, 0, 1] == pytest.approx(27e3)


def test_a_column_through_two_floors_is_a_leg_up_to_the_next_line():
    columns = [column(f"C{x}", x, 0.0, 0.0, 7.0) for x in (0.0, 6.0)]
    beams = [beam("B1", (0.0, 0.0, Z), (6.0, 0.0, Z)), beam("B2", (0.0, 0.0, 6.6), (6.0, 0.0, 6.6))]
    found = idealise(house(beams, columns), Settings(analysis=Analysis(columns_as_legs=True)))
    lengths = {
        line.elements[0]: [round(m.length, 3) for m in line.members[1:3]] for line in found.lines
    }

    assert lengths == {"B1": [3.0, 3.6], "B2": [3.6, 3.6]}


def test_clear_spans_run_from_face_to_face_and_keep_the_load():
    settings = Settings(
        analysis=Analysis(spans="face"),
        actions=(ActionSetting("Q", Selector(), "uniform", (1e3,), start=0.0, end=3.0),),
    )
    found = idealise(row(), settings)
    line = only(found)

    assert spans(line) == [4.7, 5.9, 3.5]
    assert line.joints[3].point == pytest.approx((15.0, 0.0, Z))
    assert [m.element_offset for m in line.members] == pytest.approx([0.0, 0.0, 0.0])
    assert "clear-spans" in slugs(found)


def test_what_acts_over_a_bearing_goes_to_it():
    """One beam over three columns, clear spans: 1 kN/m over 2 m, of which 0.3 m over the column."""
    columns = [column(f"C{i}", x, 0.0, 0.0, Z - 0.2) for i, x in enumerate((0.0, 4.0, 9.0))]
    building = house([beam("B", (0.0, 0.0, Z), (9.0, 0.0, Z))], columns)
    action = ActionSetting("Q", Selector(), "uniform", (1e3,), start=3.0, end=5.0)
    settings = Settings(analysis=Analysis(spans="face", self_weight=False), actions=(action,))
    line = only(idealise(building, settings))

    forces = [a for a in line.actions if isinstance(a, PointForce)]
    spread = [a for a in line.actions if isinstance(a, DistributedForce)]
    assert [(f.member, f.position, f.transverse) for f in forces] == [
        (1, 0.0, pytest.approx(300.0))
    ]
    assert sum((a.end - a.start) * a.transverse[0] for a in spread) == pytest.approx(1700.0)


@pytest.mark.parametrize("drawn", [1, -1])
@pytest.mark.parametrize("pieces", [[0.0, 9.0], [0.0, 4.0, 9.0]])
def test_clear_spans_lose_nothing_of_a_load_on_whole_beams(pieces, drawn):
    """2 kN/m over 9 m: 0.6 m over three columns of 300 mm go to them, not into the spans."""
    columns = [column(f"C{i}", x, 0.0, 0.0, Z - 0.2) for i, x in enumerate((0.0, 4.0, 9.0))]
    ends = [(a, b)[::drawn] for a, b in itertools.pairwise(pieces)]
    beams = [beam(f"B{a}", (a, 0.0, Z), (b, 0.0, Z)) for a, b in ends]
    action = ActionSetting("Q", Selector(), "uniform", (2e3,))
    settings = Settings(analysis=Analysis(spans="face", self_weight=False), actions=(action,))
    line = only(idealise(house(beams, columns), settings))
    solution = distribution.solve(line, ["Q"])

    reactions = solution.reactions[0, :, 1]
    assert sum(reactions) == pytest.approx(2e3 * 9.0)
    moment = 2e3 * (3.7**3 + 4.7**3) / (8.0 * (3.7 + 4.7))  # three moments, clear spans
    assert abs(solution.end_moments[0]).max() == pytest.approx(moment)


def test_a_column_on_a_beam_hands_the_upper_line_down():
    """The upper beam rests on a column at x = 4 that stands on the lower beam."""
    carriers = [
        column("A", 0.0, 0.0, 0.0, Z - 0.2),
        column("B", 7.0, 0.0, 0.0, Z - 0.2),
        column("planted", 4.0, 0.0, Z + 0.2, 6.0),
        column("tall", 7.0, 0.0, Z + 0.2, 6.0),
    ]
    beams = [
        beam("low", (0.0, 0.0, Z), (7.0, 0.0, Z)),
        beam("up", (4.0, 0.0, 6.2), (7.0, 0.0, 6.2)),
    ]
    found = idealise(house(beams, carriers), Settings())
    lines = {line.elements[0]: line for line in found.lines}
    (transfer,) = found.transfers

    assert (transfer.from_line, transfer.to_line) == (lines["up"].mark, lines["low"].mark)
    assert (transfer.joint, transfer.member, transfer.position) == (0, 0, pytest.approx(4.0))
    assert "stands on beam low" in lines["up"].joints[0].reason
    assert finding(found, "column-on-beam").elements == ("planted", "low")


@pytest.mark.parametrize("redundant", [True, False])
def test_a_line_propped_from_a_soft_beam_is_warned_of(redundant):
    """At a third of 6 m both beams resist 3 EI L / (a² b²): once as stiff.

    Without its column at x = 6 the upper beam cannot do without the prop.
    """
    places = (0.0, 6.0) if redundant else (0.0,)
    carriers = [column(f"L{x}", x, 0.0, 0.0, Z - 0.2) for x in (0.0, 6.0)]
    carriers += [column(f"U{x}", x, 0.0, Z + 0.2, 6.0) for x in places]
    carriers += [column("prop", 2.0, 0.0, Z + 0.2, 6.0)]
    beams = [
        beam("low", (0.0, 0.0, Z), (6.0, 0.0, Z)),
        beam("up", (0.0, 0.0, 6.2), (6.0, 0.0, 6.2)),
    ]
    found = idealise(house(beams, carriers), Settings())

    assert len(found.transfers) == 1
    assert ("grillage-crossing" in slugs(found)) == redundant
    if redundant:
        assert "only 1 times as stiff" in finding(found, "grillage-crossing").message


def test_a_long_overhang_names_what_is_nearest():
    carriers = [column(f"C{i}", x, 0.0, 0.0, Z - 0.2) for i, x in enumerate((0.0, 4.0))]
    carriers.append(column("near", 7.6, 0.0, 0.0, Z - 0.2))
    found = idealise(house([beam("B", (0.0, 0.0, Z), (7.0, 0.0, Z))], carriers), Settings())
    told = finding(found, "long-overhang")

    assert "overhangs its last bearing by 3.00 m, next to a span of 4.00 m" in told.message
    assert "column 'near' (GlobalId near), 450 mm away in plan" in told.message
    assert only(found).joints[-1].reason == "free end: overhangs its last bearing by 3.00 m"


def test_an_end_that_the_model_states_as_released_ends_the_line():
    building = row()
    loose = replace(building.members[1], end_stiffness=(0.0, None))
    members = (building.members[0], loose, *building.members[2:])
    found = idealise(replace(building, members=members), Settings())

    assert sorted(line.elements for line in found.lines) == [("B0",), ("B1", "B2")]


def test_secondaries_stated_as_rigid_run_on_through_the_primary():
    columns = [column("C0", 0.0, 0.0, 0.0, Z - 0.2), column("C1", 7.0, 0.0, 0.0, Z - 0.2)]
    columns += [column("D0", 2.5, 4.0, 0.0, Z - 0.2), column("D1", 2.5, -5.0, 0.0, Z - 0.2)]
    beams = [
        beam("P", (0.0, 0.0, Z), (7.0, 0.0, Z)),
        beam("S1", (2.5, 0.1, Z), (2.5, 4.0, Z), end_stiffness=(math.inf, None)),
        beam("S2", (2.5, -5.0, Z), (2.5, -0.1, Z), end_stiffness=(None, math.inf)),
    ]
    found = idealise(house(beams, columns), Settings())
    line = next(line for line in found.lines if "S1" in line.elements)

    assert line.elements == ("S2", "S1")
    assert spans(line) == [5.0, 4.0]
    assert line.joints[1].element == "P"
    assert [t.to_line for t in found.transfers] != []


def test_rafters_on_a_ridge_that_nothing_holds_are_told_so():
    carriers = [wall("W", (-0.1, -3.0, 0.0), (0.1, 9.0, Z - 0.2))]
    ridge = beam("R", (4.0, -3.0, Z - 0.4), (4.0, 9.0, Z - 0.4))
    rafters = [beam(f"B{y}", (0.0, y, Z), (4.0, y, Z)) for y in (0.0, 5.0)]
    found = idealise(house([ridge, *rafters], carriers), Settings())
    ridge_line = next(line for line in found.lines if line.elements == ("R",))
    told = finding(found, "carrier-not-analysed")

    assert ridge_line.fault
    assert told.line == ridge_line.mark
    assert [line.fault for line in found.lines if line is not ridge_line] == ["", ""]
