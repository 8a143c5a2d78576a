"""Members that meet at angles within a vertical plane: trusses, rafters, struts and ties."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest
from building_makers import PINNED, ROLLER, finding, member, model, node, only, slugs, turned
from physical_makers import beam, column, house, wall

from analysis_core.building import Building
from analysis_core.idealise import idealise
from analysis_core.model import RIGID
from analysis_core.settings import Selector, Settings, SupportSetting

WALLS = (
    wall("W0", (-0.1, -3.0, 0.0), (0.1, 3.0, 2.8)),
    wall("W1", (7.9, -3.0, 0.0), (8.1, 3.0, 2.8)),
)


def truss() -> Building:
    """Five panels of 2 m on two columns; the diagonals are members of their own."""
    columns = [column(f"C{x}", x, 0.0, 0.0, 2.8) for x in (0.0, 10.0)]
    low = [beam(f"L{i}", (2.0 * i, 0.0, 3.0), (2.0 * i + 2.0, 0.0, 3.0)) for i in range(5)]
    top = [beam(f"T{i}", (2.0 * i + 1.0, 0.0, 4.5), (2.0 * i + 3.0, 0.0, 4.5)) for i in range(4)]
    web = []
    for i in range(5):
        apex = (2.0 * i + 1.0, 0.0, 4.5)
        web += [
            beam(f"U{i}", (2.0 * i, 0.0, 3.0), apex),
            beam(f"D{i}", apex, (2.0 * i + 2.0, 0.0, 3.0)),
        ]
    return house([*low, *top, *web], columns)


def rafters(*more) -> Building:
    """Two rafters that meet at an apex which nothing holds."""
    pair = [
        beam("L", (0.0, 0.0, 3.0), (4.0, 0.0, 6.0)),
        beam("R", (8.0, 0.0, 3.0), (4.0, 0.0, 6.0)),
    ]
    return house([*pair, *more], WALLS)


@pytest.mark.parametrize("angle", [0.0, 30.0, 90.0])
def test_no_part_of_a_truss_is_analysed_as_a_beam(angle):
    """Its lower chord rests on columns, but what the diagonals bring to it is not known."""
    building = truss()
    found = idealise(turned(building, math.radians(angle), (0.0, 0.0, 0.0)), Settings())

    assert all(line.fault for line in found.lines)
    told = [f for f in found.findings if f.slug == "triangulated"]
    assert set(told[0].elements) == {m.global_id for m in building.members}
    assert [f.severity for f in told] == ["warning", "error"]


def test_rafters_without_a_ridge_beam_are_told_what_they_are():
    found = idealise(rafters(), Settings())

    assert all(line.fault for line in found.lines)
    assert finding(found, "triangulated").elements == ("L", "R")


def test_a_support_stated_at_the_apex_makes_beams_of_rafters():
    stated = tuple(
        SupportSetting(Selector(name=name), end="end", vertical=RIGID) for name in ("L", "R")
    )
    found = idealise(rafters(), Settings(supports=stated))

    assert [line.fault for line in found.lines] == ["", ""]
    assert "triangulated" not in slugs(found)


def test_rafters_on_a_ridge_beam_are_beams():
    ridge = beam("RIDGE", (4.0, -3.0, 6.0), (4.0, 3.0, 6.0))
    posts = [column(f"P{y}", 4.0, y, 0.0, 5.8) for y in (-3.0, 3.0)]
    building = rafters(ridge)
    found = idealise(replace(building, carriers=(*building.carriers, *posts)), Settings())

    assert not any(line.fault for line in found.lines)
    assert "triangulated" not in slugs(found)


def test_a_tie_between_a_post_and_a_rafter_is_carried_by_the_rafter():
    """The rafter rises 3 in 4 from the wall to a post at 8 m; the tie meets it at x = 3 m."""
    post = column("P", 8.0, 0.0, 0.0, 8.9)
    rafter = beam("R", (0.0, 0.0, 3.0), (8.0, 0.0, 9.0))
    tie = beam("T", (8.0, 0.0, 5.25), (3.0, 0.0, 5.25))
    found = idealise(house([rafter, tie], [WALLS[0], post]), Settings())
    lines = {line.elements: line for line in found.lines}

    assert not any(line.fault for line in found.lines)
    (transfer,) = found.transfers
    assert (transfer.from_line, transfer.to_line) == (lines["T",].mark, lines["R",].mark)
    assert transfer.position == pytest.approx(3.0 * 5.0 / 4.0)
    assert lines["T",].joints[transfer.joint].element == "R"
    assert finding(found, "triangulated").line == lines["T",].mark


def test_a_frame_of_triangles_is_said_to_hide_the_stretching_of_its_members():
    points = {"a": (0.0, 0.0, 0.0), "b": (6.0, 0.0, 0.0), "c": (3.0, 0.0, 2.0)}
    rests = {"a": PINNED, "b": ROLLER, "c": None}
    nodes = [node(name, point, rests[name]) for name, point in points.items()]
    members = [member(a + b, points[a], points[b]) for a, b in ("ab", "ac", "cb")]
    found = idealise(model(members, nodes), Settings())

    assert finding(found, "triangulated").line == only(found).mark
    # Without the tie it is no triangle: two members that meet at an angle.
    assert "triangulated" not in slugs(idealise(model(members[1:], nodes), Settings()))
