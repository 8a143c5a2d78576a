"""Published files that lie beside the project: read without a traceback, beams counted.

The files are not part of the project; where they are absent, these tests are skipped.
"""

import math
from pathlib import Path

import ifcopenshell.geom
import numpy as np
import pytest

from analysis_core.errors import IfcReadError
from analysis_core.ifc.physical.reader import read_physical
from analysis_core.ifc.source import open_model
from analysis_core.settings import Settings

SHARED = Path(__file__).resolve().parents[3] / "shared" / "ifc"
FILES = sorted(p for p in SHARED.glob("*/*.ifc*")) if SHARED.is_dir() else []
needs_files = pytest.mark.skipif(not FILES, reason="the published files are not here")


def building_of(name):
    path = next((p for p in FILES if p.name.startswith(name)), None)
    if path is None:
        pytest.skip("the published files are not here")
    source = open_model(path)
    return source, read_physical(source, Settings())


@needs_files
@pytest.mark.parametrize("path", FILES, ids=lambda p: p.name)
def test_every_beam_is_a_member_a_column_or_named(path):
    try:
        source = open_model(path)
    except IfcReadError:
        return  # refused in one clear sentence
    building = read_physical(source, Settings())

    asked = {
        entity.GlobalId
        for ifc_class in ("IfcBeam", "IfcMember")
        for entity in source.file.by_type(ifc_class)
    }
    known = {m.global_id for m in building.members} | {c.global_id for c in building.carriers}
    named = {element for f in building.findings for element in f.elements}
    assert asked <= known | named
    for member in building.members:
        along = np.subtract(member.end, member.start)
        assert math.hypot(*member.up) == pytest.approx(1.0)
        assert float(along @ np.array(member.up)) == pytest.approx(0.0, abs=1e-6)
        assert member.section is None or member.section.inertia > 0.0


def test_the_steel_frame_stands_on_its_column_axes():
    # 12 beams, 9 columns; all 24 ends on a column axis, seen from above.
    _, building = building_of("P02")
    columns = np.array([c.start[:2] for c in building.carriers])

    assert len(building.members) == 12
    assert len(columns) == 9
    for member in building.members:
        for end in (member.start, member.end):
            assert np.linalg.norm(columns - np.array(end[:2]), axis=1).min() < 1e-6
        assert member.material.elastic_modulus == 210e9
        assert member.section.shape == "I"
    # UB 406x140x46: 15,700 cm⁴ (EN 10365, from memory); top of steel at 5 m.
    first = next(m for m in building.members if m.section.name == "UB406*140*46")
    assert first.section.inertia * 1e8 == pytest.approx(15700, rel=0.001)
    assert first.start[2] + first.section.top == pytest.approx(5.0, abs=1e-4)


def test_the_office_has_all_its_beams_and_knows_its_polygons():
    _, building = building_of("P03")

    assert len(building.members) == 43
    assert {m.section.shape for m in building.members} == {"channel", "angle", "hollow rectangle"}
    offsets = [m.axis_offset for m in building.members]
    assert max(offsets) < 0.21
    # 300 PFC 40.1 (AS/NZS 3679.1, from memory): 5120 mm², 72.4e6 mm⁴.
    channel = next(m.section for m in building.members if m.section.name == "300PFC40.1")
    assert channel.area * 1e6 == pytest.approx(5120, rel=0.005)
    assert channel.inertia * 1e12 == pytest.approx(72.4e6, rel=0.005)


def test_the_rafters_are_read_from_their_faces():
    _, building = building_of("P07")

    assert len(building.members) == 51
    rafters = [m for m in building.members if m.name.startswith("Sparren")]
    assert len(rafters) == 42
    for rafter in rafters:
        rise, run = rafter.end[2] - rafter.start[2], rafter.end[1] - rafter.start[1]
        assert abs(math.degrees(math.atan2(rise, abs(run)))) == pytest.approx(30.0, abs=0.01)
        assert (rafter.section.width, rafter.section.depth) == pytest.approx((0.08, 0.16), abs=1e-4)


def test_the_drawn_axis_at_the_top_flange_does_not_move_the_beam():
    # A FOOT unit is declared and not assigned: the file is in millimetres.
    _, building = building_of("P22")

    (member,) = building.members
    assert member.start == pytest.approx((0.0, 0.0, -0.12))
    assert member.end == pytest.approx((3.6, 0.0, -0.12))
    assert member.axis_offset == pytest.approx(0.12)
    assert member.section.name == "IPE240"


@needs_files
@pytest.mark.parametrize("name", ["P02", "P03", "P22", "P30", "P32", "P34"])
def test_members_fill_the_bounding_boxes_of_the_geometry_library(name):
    source, building = building_of(name)
    settings = ifcopenshell.geom.settings()
    settings.set("use-world-coords", True)
    settings.set("disable-opening-subtractions", True)
    checked = 0
    for member in building.members:
        if "BooleanClipping" in str(source.file.by_guid(member.global_id).Representation):
            continue
        shape = ifcopenshell.geom.create_shape(settings, source.file.by_guid(member.global_id))
        points = np.array(shape.geometry.verts).reshape(-1, 3)
        start = np.array(member.modelled_start or member.start)
        end = np.array(member.modelled_end or member.end)
        along = (end - start) / np.linalg.norm(end - start)
        up = np.array(member.up)
        z = (points - start) @ up
        x = (points - start) @ along
        y = (points - start) @ np.cross(up, along)
        s = member.section
        assert z.max() == pytest.approx(s.top, abs=1e-4)
        assert z.min() == pytest.approx(s.top - s.depth, abs=1e-4)
        assert np.ptp(y) == pytest.approx(s.width, abs=1e-4)
        # Bevelled ends reach beyond the ends of the centroid line.
        assert x.min() < 1e-4
        assert x.max() > np.linalg.norm(end - start) - 1e-4
        checked += 1
    assert checked
