"""Quarry Lane Workshops: an invented building of ours, in metres and newtons.

Two storeys on a grid of four by three.  The first floor is of concrete: three continuous beams
along x, the middle one running on as a balcony, with steel joists between them that carry the
slab of two bays.  The roof is of steel: one beam over three columns on each grid line, with eaves.
A wall replaces the column A3.  Nothing here stands for a real place or firm.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

Point = tuple[float, float, float]

PROJECT = "Quarry Lane Workshops"
LEVELS = {"Ground floor": 0.0, "First floor": 3.6, "Roof": 7.0}
GRID_X = {"A": 0.0, "B": 6.0, "C": 13.2, "D": 19.2}
GRID_Y = {"1": 0.0, "2": 6.4, "3": 11.6}
BALCONY = 1.8
EAVES = 1.2
WALL_THICKNESS = 0.2
SLAB_THICKNESS = 0.2
COLUMN_SIDE = 0.3
JOISTS_X = (2.0, 4.0, 8.4, 10.8)
STAIR_OPENING = ((15.0, 7.6), (17.4, 10.4))


@dataclass(frozen=True)
class Profile:
    """A rectangle (no web) or an I-shape, dimensions in m."""

    name: str
    depth: float
    width: float
    web: float = 0.0
    flange: float = 0.0
    fillet: float = 0.0


@dataclass(frozen=True)
class Stuff:
    """A material: Pa and kg/m³."""

    name: str
    category: str
    elastic: float
    shear: float
    density: float


# EN 1992-1-1 table 3.1 (mean modulus, from memory); EN 1993-1-1 3.2.6.
CONCRETE = Stuff("Concrete C30/37", "concrete", 33e9, 13.75e9, 2500.0)
STEEL = Stuff("Steel S355", "steel", 210e9, 81e9, 7850.0)
# Dimensions of the I-shapes: EN 10365.
BEAM = Profile("R 300x500", 0.5, 0.3)
JOIST = Profile("IPE 300", 0.3, 0.15, 0.0071, 0.0107, 0.015)
RAFTER = Profile("IPE 270", 0.27, 0.135, 0.0066, 0.0102, 0.015)
COLUMN = Profile("R 300x300", 0.3, 0.3)


@dataclass(frozen=True)
class Bar:
    """A beam or column by its centre line."""

    name: str
    storey: str
    start: Point
    end: Point
    profile: Profile
    material: Stuff


def floor_beams() -> list[Bar]:
    """Concrete beams of the first floor, modelled span by span; their top is the floor level."""
    z = LEVELS["First floor"] - BEAM.depth / 2
    bars = []
    names = list(GRID_X)
    for row, y in GRID_Y.items():
        for left, right in pairwise(names):
            ends = (GRID_X[left], y, z), (GRID_X[right], y, z)
            bars.append(Bar(f"B{row}-{left}{right}", "First floor", *ends, BEAM, CONCRETE))
    tip = (GRID_X["D"], GRID_Y["2"], z), (GRID_X["D"] + BALCONY, GRID_Y["2"], z)
    bars.append(Bar("B2-balcony", "First floor", *tip, BEAM, CONCRETE))
    return bars


def joists(clear: bool = True) -> list[Bar]:
    """Steel joists from beam row 1 to row 2: face to face, or axis to axis as an analyst would."""
    half = BEAM.width / 2 if clear else 0.0
    z = LEVELS["First floor"] - (JOIST.depth / 2 if clear else BEAM.depth / 2)
    return [
        Bar(
            f"J-{number}", "First floor",
            (x, GRID_Y["1"] + half, z), (x, GRID_Y["2"] - half, z), JOIST, STEEL,
        )
        for number, x in enumerate(JOISTS_X, start=1)
    ]  # fmt: skip


def rafters() -> list[Bar]:
    """Steel roof beams, each one piece over the columns of a grid line, with eaves in front."""
    z = LEVELS["Roof"] + RAFTER.depth / 2
    return [
        Bar(f"R-{name}", "Roof", (x, -EAVES, z), (x, GRID_Y["3"], z), RAFTER, STEEL)
        for name, x in GRID_X.items()
    ]


def columns() -> list[Bar]:
    """Columns of both storeys: the lower ones reach the beams' axes, the upper ones the roof."""
    lower_top, roof = LEVELS["First floor"] - BEAM.depth, LEVELS["Roof"]
    bars = []
    for letter, x in GRID_X.items():
        for row, y in GRID_Y.items():
            lower = (x, y, 0.0), (x, y, lower_top)
            upper = (x, y, LEVELS["First floor"]), (x, y, roof)
            if letter + row != "A3":
                bars.append(Bar(f"C-{letter}{row}", "Ground floor", *lower, COLUMN, CONCRETE))
            bars.append(Bar(f"C-{letter}{row}-1", "First floor", *upper, COLUMN, CONCRETE))
    return bars


def panels() -> list[tuple[str, Point, Point]]:
    """Floor slabs, one a bay: name and two opposite corners at the floor level."""
    z = LEVELS["First floor"]
    xs, ys = list(GRID_X), list(GRID_Y)
    return [
        (
            f"S-{left}{front}",
            (GRID_X[left], GRID_Y[front], z),
            (GRID_X[right], GRID_Y[back], z),
        )
        for left, right in pairwise(xs)
        for front, back in pairwise(ys)
    ]


# Actions of the analytical version.  Intensities in N/m, N and N/m².
FINISHES = {"1": 9.0e3, "2": 14.0e3, "3": 7.5e3}
OFFICES = {"1": 8.0e3, "2": 13.0e3, "3": 6.5e3}
JOIST_PERMANENT, JOIST_IMPOSED = 6.2e3, 6.6e3
ROOFING, SNOW = 2.4e3, 3.1e3
HOIST = 18.0e3
"""A hoist in the middle of the second span of row 3, part of the imposed actions."""
PARAPET = 3.5e3
"""Along the outer half of the balcony, permanent."""
COMBINATIONS = {
    # EN 1990, expression 6.10 and 6.14b, with offices (category B) and snow below 1,000 m.
    "Strength, offices leading": ("ULS", {"Permanent": 1.35, "Offices": 1.5, "Snow": 0.75}),
    "Strength, snow leading": ("ULS", {"Permanent": 1.35, "Offices": 1.05, "Snow": 1.5}),
    "Service, characteristic": ("SLS", {"Permanent": 1.0, "Offices": 1.0, "Snow": 0.5}),
}
