"""Frames whose nodes lie a hair off: they must act as the frame that was meant."""

import pytest
from building_makers import FIXED, attached, member, node

from analysis_core.building import AxisAction, Building, LoadCase
from analysis_core.distribution import solve
from analysis_core.idealise import idealise
from analysis_core.idealise.snapping import NOISE, _clustered
from analysis_core.settings import Settings


def braced_beam(off):
    """A beam in two members between fixed nodes, with a column and a load beside its middle."""
    places = {
        "A": (0.0, 0.0, 4.0),
        "B": (4.0, 0.0, 4.0 + off),
        "C": (9.0, 0.0, 4.0),
        "D": (0.0, 0.0, 0.0),
    }
    nodes = [node(k, p, None if k == "B" else FIXED) for k, p in places.items()]
    members = [
        member("AB", places["A"], places["B"]),
        member("BC", places["B"], places["C"]),
        member("DA", places["D"], places["A"]),
    ]
    load = AxisAction("q", "q", "Q", "AB", "discrete", (3.5,), ((0.0, 0.0, -1e4),))
    return Building(
        "analytical", "IFC4", members=tuple(members), connections=tuple(nodes),
        attachments=tuple(attached(members, nodes)), actions=(load,),
        cases=(LoadCase("Q", "imposed"),),
    )  # fmt: skip


@pytest.mark.parametrize("off", [1e-9, 1e-7, 1e-5, 9e-4, -9e-4])
def test_a_node_a_hair_off_a_braced_beam_holds_nothing(off):
    """Both ends are held sideways: a crown of rigid members would carry the force as a strut."""
    straight, kinked = (idealise(braced_beam(z), Settings()).lines[0] for z in (0.0, off))
    assert straight.kind == kinked.kind == "frame"
    expected, found = (solve(line, ["Q"]).end_moments[0] for line in (straight, kinked))

    assert found == pytest.approx(expected, rel=1e-3, abs=1.0)
    assert abs(expected).max() > 1e3


def test_what_is_farther_off_than_noise_stays_where_it_is():
    far = idealise(braced_beam(5 * NOISE), Settings()).lines[0]
    levels = {round(joint.z, 6) for joint in far.joints}

    assert len(levels) == 3


def test_values_within_the_noise_become_one_and_chains_do_not_creep():
    values = [0.0, 0.4e-3, 0.8e-3, 1.2e-3, 1.6e-3, 5.0]

    out = _clustered(values)

    assert out[:3] == [0.4e-3] * 3
    assert out[3:5] == [pytest.approx(1.4e-3)] * 2
    assert out[5] == 5.0
