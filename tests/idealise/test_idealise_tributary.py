"""Tributary widths: bisecting angles, one-way strips, openings; areas are kept."""

from __future__ import annotations

import math

import numpy as np
import pytest

from analysis_core.idealise.region import Region
from analysis_core.idealise.tributary import shares

RECTANGLE = [(0.0, 0.0), (6.0, 0.0), (6.0, 4.0), (0.0, 4.0)]


def edges(corners):
    return list(zip(corners, [*corners[1:], corners[0]], strict=True))


def merged(share):
    """Breakpoints and widths of a share, tidied."""
    return [tuple(round(v, 6) + 0.0 for v in piece) for piece in share.pieces]


def test_a_rectangle_on_four_edges_gives_trapezoids_and_triangles():
    """6 x 4: bisectors at 45 degrees; long sides 0..2 rising, 2..4 flat at 2, 4..6 falling."""
    long, short, *_ = shares(Region(RECTANGLE), edges(RECTANGLE), "two-way")

    assert merged(long) == [(0, 2, 0, 2), (2, 4, 2, 2), (4, 6, 2, 0)]
    assert merged(short) == [(0, 2, 0, 2), (2, 4, 2, 0)]
    assert (long.total, short.total) == (pytest.approx(8.0), pytest.approx(4.0))


def test_a_long_panel_carries_one_way():
    corners = [(0.0, 0.0), (9.0, 0.0), (9.0, 4.0), (0.0, 4.0)]
    long, short, *_ = shares(Region(corners), edges(corners), "panels")

    assert merged(long) == [(0, 9, 2, 2)]
    assert short.total == 0.0


def test_a_panel_up_to_twice_as_long_as_wide_carries_both_ways():
    found = shares(Region(RECTANGLE), edges(RECTANGLE), "panels")

    assert found[0].total == pytest.approx(8.0)


def test_two_parallel_beams_share_by_halves_with_their_overhangs():
    """Beams at y = 1 and y = 3.5 under a slab from 0 to 4: 1 + 1.25 and 1.25 + 0.5."""
    beams = [((0.0, 1.0), (6.0, 1.0)), ((0.0, 3.5), (6.0, 3.5))]
    for spread, way in (("two-way", None), ("one-way", (0.0, 1.0))):
        lower, upper = shares(Region(RECTANGLE), beams, spread, way)
        assert lower.total == pytest.approx(6.0 * 2.25)
        assert upper.total == pytest.approx(6.0 * 1.75)


def test_joists_between_girders_take_the_slab_and_girders_nothing():
    """Girders along the short sides 6 m apart, joists every 2 m: panels of 6 x 2."""
    corners = [(0.0, 0.0), (6.0, 0.0), (6.0, 8.0), (0.0, 8.0)]
    girders = [((0.0, 0.0), (0.0, 8.0)), ((6.0, 0.0), (6.0, 8.0))]
    joists = [((0.0, y), (6.0, y)) for y in (0.0, 2.0, 4.0, 6.0, 8.0)]
    found = shares(Region(corners), girders + joists, "panels")

    assert [round(s.total, 6) for s in found] == [0.0, 0.0, 6.0, 12.0, 12.0, 12.0, 6.0]


def test_an_opening_takes_its_area_away_where_it_is():
    """A hole of 1 x 0.5 beside the lower long edge, from x = 2.5 to 3.5, y = 0.5 to 1."""
    hole = [(2.5, 0.5), (3.5, 0.5), (3.5, 1.0), (2.5, 1.0)]
    region = Region(RECTANGLE, [hole])
    lower, *others = shares(region, edges(RECTANGLE), "two-way")

    assert region.area == pytest.approx(23.5)
    assert lower.total == pytest.approx(7.5)
    assert sum(s.total for s in others) == pytest.approx(16.0)
    assert (2.5, 3.5, 1.5, 1.5) in merged(lower)


def test_slanting_one_way_strips_keep_the_area():
    """Span direction at 30 degrees to the normal of two parallel beams: halves all the same."""
    way = (math.sin(math.radians(30.0)), math.cos(math.radians(30.0)))
    beams = [((-5.0, 0.0), (11.0, 0.0)), ((-5.0, 4.0), (11.0, 4.0))]
    found = shares(Region(RECTANGLE), beams, "one-way", way)

    assert [s.total for s in found] == pytest.approx([12.0, 12.0], rel=1e-6)


@pytest.mark.parametrize("seed", range(10))
def test_any_polygon_with_voids_is_shared_out_completely(seed):
    """Star-shaped outlines, beams along the edges and across, a triangular void."""
    rng = np.random.default_rng(seed)
    angles = np.sort(rng.uniform(0.0, 2.0 * np.pi, 7)) + np.arange(7) * 1e-3
    radius = rng.uniform(4.0, 7.0, 7)
    outline = [(r * math.cos(a), r * math.sin(a)) for r, a in zip(radius, angles, strict=True)]
    void = [(-0.5, -0.4), (0.8, -0.2), (0.1, 0.9)]
    region = Region(outline, [void])
    beams = edges(outline)[::2]
    beams.append(((-3.0, rng.uniform(-1.0, 1.0)), (2.0, rng.uniform(-1.0, 1.0))))
    total = sum(share.total for share in shares(region, beams, "two-way"))

    # CONTRACT asks for 0.1 % between slab and beams.
    assert total == pytest.approx(region.area, rel=1e-3)


def test_area_matches_counting_points_by_their_nearest_line():
    """Monte Carlo with 400,000 points: standard error of a share of 1/3 is 0.075 %."""
    rng = np.random.default_rng(5)
    beams = [((0.0, 0.0), (6.0, 0.0)), ((0.0, 0.0), (0.0, 4.0)), ((2.5, 1.5), (5.0, 3.2))]
    points = rng.uniform((0.0, 0.0), (6.0, 4.0), (400_000, 2))
    distances = []
    for a, b in np.array(beams):
        along = (b - a) / np.linalg.norm(b - a)
        place = np.clip((points - a) @ along, 0.0, np.linalg.norm(b - a))
        distances.append(np.linalg.norm(points - a - place[:, None] * along, axis=1))
    counted = np.bincount(np.argmin(distances, axis=0), minlength=3) / 400_000 * 24.0
    found = [s.total for s in shares(Region(RECTANGLE), beams, "two-way")]

    assert found == pytest.approx(counted, abs=5 * 24.0 * 0.00075)
    assert sum(found) == pytest.approx(24.0, rel=1e-3)
