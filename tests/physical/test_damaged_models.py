"""Files damaged at random: never a traceback, never a number that is none."""

import random
import re

import numpy as np
import pytest
from body_makers import Maker, box_faces, box_points

from analysis_core.errors import IfcReadError
from analysis_core.ifc.physical.reader import read_physical
from analysis_core.ifc.source import open_model
from analysis_core.settings import AreaActionSetting, Selector, Settings

LINE = re.compile(r"(#\d+=\w+\()(.*)$")
NUMBER = re.compile(r"(?<![\w#'])-?\d+\.\d*(?:E[-+]?\d+)?")


@pytest.fixture(scope="module")
def model_text(tmp_path_factory):
    """A small building with most of what the reader knows."""
    maker = Maker()
    solid = maker.extrusion(maker.rectangle(200.0, 300.0), 6000.0, maker.lying())
    beam = maker.element("IfcBeam", "B", [solid], axis=maker.line((0, 0, 150), (6000, 0, 150)))
    profile = maker.profile(
        "IfcIShapeProfileDef", "IPE 300", Position=maker.axes_2d(), OverallWidth=150.0,
        OverallDepth=300.0, WebThickness=7.1, FlangeThickness=10.7, FilletRadius=15.0,
    )  # fmt: skip
    steel = maker.extrusion(profile, 4000.0, maker.lying())
    mapped = maker.mapped(steel, Scale=1.0)
    second = maker.element("IfcBeam", "M", [mapped], at=(0, 2000, 0))
    faces = maker.brep(box_points(5000.0, 200.0, 300.0), box_faces())
    maker.element("IfcMember", "F", [faces], at=(0, 4000, 0))
    plane = maker.make("IfcPlane", maker.axes((500, 0, 0), (1, 0, 0), (0, 1, 0)))
    half = maker.make("IfcHalfSpaceSolid", plane, True)
    cut = maker.make("IfcBooleanClippingResult", "DIFFERENCE", solid, half)
    maker.element("IfcBeam", "C", [cut], at=(0, 6000, 0))
    maker.element("IfcColumn", "S", [maker.extrusion(profile, 3000.0)])
    ring = maker.polygon([(0, 0), (4000, 0), (4000, 200), (200, 200), (200, 3000), (0, 3000)])
    maker.element("IfcWall", "W", [maker.extrusion(ring, 3000.0)], at=(0, 8000, 0))
    slab = maker.element("IfcSlab", "D", [maker.extrusion(ring, 200.0)], at=(0, 0, 3000))
    hole = maker.element("IfcOpeningElement", "O", [maker.extrusion(ring, 200.0)])
    maker.root("IfcRelVoidsElement", RelatingBuildingElement=slab, RelatedOpeningElement=hole)
    storey = maker.root("IfcBuildingStorey", "Ground", Elevation=0.0)
    maker.contain(storey, beam, second, slab)
    material = maker.make("IfcMaterial", "S355")
    modulus = maker.make("IfcPropertySingleValue", "YoungModulus", None,
                         maker.make("IfcModulusOfElasticityMeasure", 2.1e11))  # fmt: skip
    maker.make("IfcMaterialProperties", "Pset_MaterialMechanical", None, [modulus], material)
    part = maker.make("IfcMaterialProfile", Material=material, Profile=profile)
    usage = maker.make(
        "IfcMaterialProfileSetUsage",
        maker.make("IfcMaterialProfileSet", MaterialProfiles=[part]),
        5,
    )
    maker.associate(usage, second)
    return maker.write(tmp_path_factory.mktemp("whole")).read_text()


ODD_NUMBERS = ("0.", "-1.", "1.E30", "1.E-30", "$", "1.")


def damaged(text: str, chance: random.Random) -> str:
    """The text with up to twelve entities changed: references, numbers and lists."""
    lines = text.split("\n")
    numbers = re.findall(r"^#(\d+)=", text, re.MULTILINE)

    def changed(pattern, choose, body):
        return re.sub(pattern, lambda m: choose() if chance.random() < 0.4 else m.group(), body)

    for _ in range(chance.randint(1, 12)):
        place = chance.randrange(len(lines))
        found = LINE.match(lines[place])
        if found is None:
            continue
        body, kind = found.group(2), chance.random()
        if kind < 0.35:
            body = changed(r"#\d+", lambda: "#" + chance.choice(numbers), body)
        elif kind < 0.5:
            body = changed(r"#\d+", lambda: "$", body)
        elif kind < 0.85:
            body = changed(NUMBER, lambda: chance.choice(ODD_NUMBERS), body)
        else:
            body = changed(r"\([^()]*\)", lambda: "()", body)
        lines[place] = found.group(1) + body
    return "\n".join(lines)


@pytest.mark.parametrize("seed", range(60))
def test_a_damaged_model_is_read_or_refused(model_text, tmp_path, seed):
    path = tmp_path / "damaged.ifc"
    path.write_text(damaged(model_text, random.Random(seed)))
    settings = Settings(area_actions=(AreaActionSetting("Q", Selector(), 1000.0),))
    try:
        source = open_model(path)
    except IfcReadError:
        return  # refused in one clear sentence

    building = read_physical(source, settings)

    for member in building.members:
        assert np.isfinite([*member.start, *member.end, *member.up]).all()
        if member.section is not None:
            assert member.section.inertia > 0.0
            assert member.section.area > 0.0
    for carrier in building.carriers:
        assert np.isfinite(np.array(carrier.corners)).all()
        assert carrier.bottom <= carrier.top
    for finding in building.findings:
        assert "Error" not in finding.message
        assert "object" not in finding.message


def test_the_undamaged_model_is_read_whole(model_text, tmp_path):
    path = tmp_path / "whole.ifc"
    path.write_text(model_text)
    source = open_model(path)

    building = read_physical(source, Settings())

    assert sorted(m.name for m in building.members) == ["B", "C", "F", "M"]
    assert {c.name for c in building.carriers} == {"S", "W", "D"}
