"""Physical buildings for the tests of ``idealise``."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from building_makers import SECTION, STEEL, member

from analysis_core.building import AxisMember, Building, Carrier
from analysis_core.idealise.vectors import Vector

DEPTH = SECTION.depth


def beam(global_id: str, start: Vector, end: Vector, **more: object) -> AxisMember:
    """Return an IfcBeam with the test section, 400 mm deep and 200 mm wide."""
    made = member(global_id, start, end, **more)  # type: ignore[arg-type]
    return replace(made, ifc_class="IfcBeam")


def block(
    global_id: str,
    ifc_class: str,
    low: Vector,
    high: Vector,
    *,
    axis: bool = False,
) -> Carrier:
    """Return a carrier that fills a box; columns get a vertical axis in its middle."""
    corners = ((low[0], low[1]), (high[0], low[1]), (high[0], high[1]), (low[0], high[1]))
    x, y = (low[0] + high[0]) / 2.0, (low[1] + high[1]) / 2.0
    start, end = ((x, y, low[2]), (x, y, high[2])) if axis else (None, None)
    return Carrier(
        global_id, global_id, ifc_class, low[2], high[2], corners, start, end, SECTION, STEEL
    )


def column(
    global_id: str, x: float, y: float, bottom: float, top: float, side: float = 0.3
) -> Carrier:
    """Return a square column."""
    half = side / 2.0
    return block(
        global_id, "IfcColumn", (x - half, y - half, bottom), (x + half, y + half, top), axis=True
    )


def wall(global_id: str, low: Vector, high: Vector) -> Carrier:
    """Return a wall."""
    return block(global_id, "IfcWall", low, high)


def house(members: Sequence[AxisMember], carriers: Sequence[Carrier], **more: object) -> Building:
    """Return a physical building."""
    return Building(
        "physical",
        "IFC4",
        members=tuple(members),
        carriers=tuple(carriers),
        **more,  # type: ignore[arg-type]
    )
