"""Area loads reach the beams and walls that carry the area, to the last newton."""

from __future__ import annotations

import math

import pytest
from building_makers import PINNED, finding, member, model, node, slugs
from physical_makers import beam, column, house, wall

from analysis_core.building import Area, AreaAction
from analysis_core.idealise import idealise
from analysis_core.model import DistributedForce
from analysis_core.settings import AreaActionSetting, Selector, Settings

TOP = 3.4
AXIS = TOP - 0.2 - 0.2  # slab of 200 mm on beams of 400 mm
CORNERS = ((0.0, 0.0), (6.0, 0.0), (6.0, 4.0), (0.0, 4.0))


def slab(outline=CORNERS, **more):
    return Area("S", "S-1", "IfcSlab", TOP - 0.2, TOP, outline, storey="First", **more)


def bay(*areas, walls=(), beams=("S", "E", "N", "W"), extra=()):
    """A bay of 6 x 4 m: columns at the corners, beams along the chosen edges."""
    ends = {
        "S": ((0.0, 0.0, AXIS), (6.0, 0.0, AXIS)),
        "E": ((6.0, 0.0, AXIS), (6.0, 4.0, AXIS)),
        "N": ((0.0, 4.0, AXIS), (6.0, 4.0, AXIS)),
        "W": ((0.0, 0.0, AXIS), (0.0, 4.0, AXIS)),
    }
    columns = [column(f"C{x}{y}", x, y, 0.0, AXIS - 0.2) for x in (0.0, 6.0) for y in (0.0, 4.0)]
    members = [beam(name, *ends[name]) for name in beams]
    return house([*members, *extra], [*columns, *walls], areas=areas)


def with_load(building, **more):
    setting = AreaActionSetting("Q", Selector(name="S-1"), 3e3, source="area", **more)
    return idealise(building, Settings(area_actions=(setting,)))


def carried(found):
    """Force that each element takes in case Q, N."""
    total: dict[str, float] = {}
    for line in found.lines:
        for action in line.actions:
            if action.case == "Q":
                element = line.members[action.member].element
                size = action.end - action.start
                part = sum(c * size ** (i + 1) / (i + 1) for i, c in enumerate(action.transverse))
                total[element] = total.get(element, 0.0) + part
    return total


def test_a_slab_on_four_beams_loads_them_by_bisecting_angles():
    found = with_load(bay(slab()))

    assert carried(found) == pytest.approx({"S": 24e3, "N": 24e3, "E": 12e3, "W": 12e3})
    assert "72 kN on 1 areas" in finding(found, "area-load-spread").message
    (south,) = [line for line in found.lines if line.elements == ("S",)]
    shapes = [a for a in south.actions if a.case == "Q"]
    assert [(a.start, a.end) for a in shapes] == [
        (0.0, pytest.approx(2.0)),
        (pytest.approx(2.0), pytest.approx(4.0)),
        (pytest.approx(4.0), pytest.approx(6.0)),
    ]
    assert all(isinstance(a, DistributedForce) and a.source == "area" for a in shapes)


def test_the_job_file_can_make_it_span_one_way():
    found = with_load(bay(slab()), spread="one-way", span_direction=(0.0, 1.0))

    assert carried(found) == pytest.approx({"S": 36e3, "N": 36e3})


def test_a_span_direction_of_the_model_is_followed():
    found = with_load(bay(slab(span=(1.0, 0.0))))

    assert carried(found) == pytest.approx({"E": 36e3, "W": 36e3})


def test_walls_take_their_part_and_it_is_said():
    north = wall("W-N", (0.0, 3.9, 0.0), (6.0, 4.1, TOP - 0.2))
    found = with_load(bay(slab(), walls=[north], beams=("S", "E", "W")))

    assert carried(found) == pytest.approx({"S": 24e3, "E": 12e3, "W": 12e3}, rel=1e-4)
    assert "24 kN to walls" in finding(found, "area-load-spread").message


def test_a_wall_that_stands_on_the_slab_carries_nothing():
    above = wall("W-A", (0.0, 1.9, TOP), (6.0, 2.1, TOP + 3.0))
    found = with_load(bay(slab(), walls=[above]))

    assert sum(carried(found).values()) == pytest.approx(72e3)


def test_an_opening_takes_its_load_away():
    hole = ((2.5, 1.5), (3.5, 1.5), (3.5, 2.5), (2.5, 2.5))
    found = with_load(bay(slab(voids=(hole,))))

    assert sum(carried(found).values()) == pytest.approx(69e3, rel=1e-6)


def test_joists_within_the_bay_take_the_slab():
    """A joist across at x = 3 makes panels of 3 x 4: both ways, and it takes most."""
    joist = beam("J", (3.0, 0.1, AXIS), (3.0, 3.9, AXIS))
    found = with_load(bay(slab(), extra=[joist]))
    parts = carried(found)

    # By hand, panels of 3 x 4: triangles of 3 x 1.5 / 2 on the short sides, the rest halved.
    assert parts["J"] == pytest.approx(2 * 3e3 * (12.0 - 4.5) / 2.0)
    assert parts["S"] == pytest.approx(2 * 3e3 * 2.25)
    assert sum(parts.values()) == pytest.approx(72e3)


def test_a_slab_that_nothing_carries_is_said():
    far = slab(outline=((20.0, 0.0), (26.0, 0.0), (26.0, 4.0), (20.0, 4.0)))
    found = with_load(bay(far))

    assert finding(found, "area-without-beams").elements == ("S",)
    assert carried(found) == {}


def test_a_slab_that_spans_to_nothing_on_one_side_is_said():
    """One way along X with beams along X only: nothing is met."""
    found = with_load(bay(slab(), beams=("S", "N")), spread="one-way", span_direction=(1.0, 0.0))

    assert "area-load-total" in slugs(found)


def test_other_areas_are_left_alone():
    other = Area("T", "S-2", "IfcSlab", TOP - 0.2, TOP, CORNERS)
    found = with_load(bay(other))

    assert carried(found) == {}
    assert "selector-matches-nothing" in slugs(found)


def test_area_actions_of_an_analysis_model_reach_its_beams():
    corners = [(x, y, 0.0) for x, y in CORNERS]
    members = [
        member(f"B{i}", a, b)
        for i, (a, b) in enumerate(zip(corners, [*corners[1:], corners[0]], strict=True))
    ]
    nodes = [node(f"n{i}", p, PINNED) for i, p in enumerate(corners)]
    area = Area("A", "A-1", "IfcStructuralSurfaceMember", 0.0, 0.0, CORNERS)
    action = AreaAction("q", "q", "G", "A", (500.0, 0.0, -2e3))
    found = idealise(model(members, nodes, areas=(area,), area_actions=(action,)), Settings())
    total = 0.0
    for line in found.lines:
        for a in line.actions:
            size = a.end - a.start
            total += sum(c * size ** (i + 1) / (i + 1) for i, c in enumerate(a.transverse))

    assert total == pytest.approx(2e3 * 24.0)
    assert "0.5 kN/m²" in finding(found, "out-of-plane-action").message


@pytest.mark.parametrize("degrees", [0.0, 37.0, 122.5])
def test_one_way_without_a_direction_spans_between_the_longer_sides(degrees):
    """Whatever the angle in plan; beams that run on beyond the slab count beside it only."""
    turn = math.radians(degrees)

    def turned(x, y, z=AXIS):
        return (
            x * math.cos(turn) - y * math.sin(turn), x * math.sin(turn) + y * math.cos(turn), z,
        )  # fmt: skip

    ends = {"S": ((0, 0), (20, 0)), "N": ((0, 6), (20, 6)), "W": ((0, 0), (0, 6)),
            "M": ((4, 0), (4, 6)), "E": ((20, 0), (20, 6))}  # fmt: skip
    members = [beam(name, turned(*a), turned(*b)) for name, (a, b) in ends.items()]
    places = [turned(x, y) for x in (0.0, 20.0) for y in (0.0, 6.0)]
    columns = [column(f"C{i}", x, y, 0.0, AXIS - 0.2) for i, (x, y, _) in enumerate(places)]
    corners = tuple(turned(*spot)[:2] for spot in ((0, 0), (4, 0), (4, 6), (0, 6)))
    found = with_load(house(members, columns, areas=[slab(outline=corners)]), spread="one-way")

    # 3 kN/m² on 4 x 6 m, half to each of the 6 m beams, rays parallel to the short sides; places
    # are taken to a tenth of a millimetre in 4 m.
    assert carried(found) == pytest.approx({"W": 36e3, "M": 36e3}, rel=2.5e-5)
