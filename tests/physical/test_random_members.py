"""Members thrown about at random, against meshes of the general-purpose geometry library.

Placed on parents of their own, turned about their axis, mapped with mirrors and uneven scales,
extruded obliquely or clipped: whatever the chain, the section must have the area, the extents
and the second moments that the mesh has.
"""

import math
import random

import ifcopenshell.geom
import numpy as np
import pytest
from body_makers import Maker

from analysis_core.ifc.physical.reader import read_physical
from analysis_core.ifc.source import open_model
from analysis_core.settings import BeamRules, Settings, Tolerances

ALL_BEAMS = Settings(
    beams=BeamRules(least_length=0.0, least_slenderness=0.0),
    tolerances=Tolerances(beam_slope=math.radians(89.0)),
)


def unit(chance):
    while True:
        v = [chance.gauss(0.0, 1.0) for _ in range(3)]
        size = math.hypot(*v)
        if size > 0.1:
            return tuple(c / size for c in v)


def frame(maker, chance, reach):
    z = unit(chance)
    x = unit(chance)
    return maker.axes([chance.uniform(-reach, reach) for _ in range(3)], z, x)


def profile(maker, chance):
    at = maker.axes_2d(
        chance.uniform(-200, 200), chance.uniform(-200, 200), chance.uniform(0.0, 6.0)
    )
    kind = chance.randrange(6)
    size = chance.uniform(0.7, 1.5)
    if kind == 0:
        return maker.profile(
            "IfcRectangleProfileDef", None, Position=at, XDim=200 * size, YDim=300.0
        )
    if kind == 1:
        return maker.profile(
            "IfcTShapeProfileDef", None, Position=at, Depth=250 * size, FlangeWidth=180.0,
            WebThickness=12.0, FlangeThickness=18.0,
        )  # fmt: skip
    if kind == 2:
        return maker.profile(
            "IfcLShapeProfileDef", None, Position=at, Depth=150 * size, Width=90.0, Thickness=12.0
        )
    if kind == 3:
        return maker.profile(
            "IfcUShapeProfileDef", None, Position=at, Depth=220 * size, FlangeWidth=85.0,
            WebThickness=9.0, FlangeThickness=13.0,
        )  # fmt: skip
    if kind == 4:
        points = [(0, 0), (260 * size, 30), (200, 180), (90, 240), (-40, 120)]
        return maker.polygon(points)
    return maker.profile(
        "IfcRectangleHollowProfileDef", None, Position=at, XDim=160 * size, YDim=240.0,
        WallThickness=10.0,
    )  # fmt: skip


def random_member(maker, chance):
    solid = maker.extrusion(
        profile(maker, chance),
        chance.uniform(3000, 9000),
        frame(maker, chance, 2000),
        along=(chance.uniform(-0.3, 0.3), chance.uniform(-0.3, 0.3), 1.0)
        if chance.random() < 0.4
        else (0.0, 0.0, 1.0),
    )
    kind = "SweptSolid"
    if chance.random() < 0.5:
        operator = {"LocalOrigin": maker.point(*(chance.uniform(-900, 900) for _ in range(3)))}
        if chance.random() < 0.6:
            third = unit(chance)
            operator["Axis3"] = maker.direction(*third)
            operator["Axis1"] = maker.direction(*unit(chance))
            operator["Axis2"] = maker.direction(*unit(chance))
        operator["Scale"] = chance.choice([1.0, 0.8, 1.4])
        if chance.random() < 0.4:
            operator["Scale2"] = chance.uniform(0.6, 1.6)
            operator["Scale3"] = chance.uniform(0.6, 1.6)
        solid = maker.mapped(solid, **operator)
        kind = "MappedRepresentation"
    storey = maker.make("IfcLocalPlacement", None, frame(maker, chance, 50000))
    return maker.element(
        "IfcBeam", "B", [solid], kind=kind, parent=storey, at=(10, 20, 30), z=unit(chance),
        x=unit(chance),
    )  # fmt: skip


def mesh(element):
    settings = ifcopenshell.geom.settings()
    settings.set("use-world-coords", True)
    geometry = ifcopenshell.geom.create_shape(settings, element).geometry
    points = np.array(geometry.verts).reshape(-1, 3)
    return points, np.array(geometry.faces).reshape(-1, 3)


def moments_of_mesh(points, triangles):
    """Volume, centroid and second moments (3, 3) about the centroid, by signed tetrahedra."""
    base = points.mean(axis=0)
    a, b, c = (points[triangles] - base).transpose(1, 0, 2)
    volume = np.einsum("ij,ij->i", a, np.cross(b, c)) / 6.0
    total = volume.sum()
    centre = (volume[:, None] * (a + b + c)).sum(axis=0) / 4.0 / total
    s = a + b + c
    second = sum(np.einsum("i,ij,ik->jk", volume, v, v) for v in (a, b, c, s)) / 20.0
    second -= total * np.outer(centre, centre)
    return abs(total), centre + base, second * math.copysign(1.0, total)


@pytest.mark.parametrize("seed", range(40))
def test_a_random_member_has_the_moments_of_its_mesh(tmp_path, seed):
    chance = random.Random(seed)
    maker = Maker()
    element = random_member(maker, chance)
    points, triangles = mesh(element)
    source = open_model(maker.write(tmp_path))

    building = read_physical(source, ALL_BEAMS)

    (member,) = building.members
    section = member.section
    start, end = np.array(member.start), np.array(member.end)
    length = float(np.linalg.norm(end - start))
    along, up = (end - start) / length, np.array(member.up)
    side = np.cross(up, along)
    volume, centre, second = moments_of_mesh(points, triangles)
    # A prism's volume is its cross-section times the length of its centroid line.
    assert section.area * length == pytest.approx(volume, rel=1e-6)
    assert (start + end) / 2.0 == pytest.approx(centre, abs=1e-5)
    # Seen along the line every slice is alike: moments over the body are those of the section.
    assert section.inertia * length == pytest.approx(up @ second @ up, rel=1e-5)
    assert section.inertia_lateral * length == pytest.approx(side @ second @ side, rel=1e-5)
    product = math.sqrt(section.inertia * section.inertia_lateral) * length
    assert section.inertia_product * length == pytest.approx(up @ second @ side, abs=1e-5 * product)
    # Extents across the line.
    z = (points - start) @ up
    assert section.top == pytest.approx(z.max(), abs=1e-6)
    assert section.depth == pytest.approx(np.ptp(z), abs=1e-6)
    assert section.width == pytest.approx(np.ptp((points - start) @ side), abs=1e-6)
    # In the vertical plane of the member.
    assert float(up @ np.cross(along, (0.0, 0.0, 1.0))) == pytest.approx(0.0, abs=1e-9)
    assert up[2] > 0.0
