"""Surface actions of an analysis model reach the members below, in total and by statics."""

import pytest
from ifc_makers import AnalysisFile
from ifc_makers.description import Case, Joint, Link, Model, Stick, pinned, roller

from analysis_core import pipeline

LENGTH, WIDTH, LOAD = 6.0, 4.0, 3e3


def two_beams(schema, units, *, loop="poly", void=(), z=0.0, tilt=0.0, kind="planar"):
    """Two parallel beams with a slab between them, loaded evenly in case Q."""
    joints, sticks = [], []
    for row, y in enumerate((0.0, WIDTH)):
        ends = ((0.0, y, 0.0), (LENGTH, y, 0.0))
        held = (pinned(), roller())
        names = [f"J{row}{i}" for i in range(2)]
        joints += [Joint(n, at, h) for n, at, h in zip(names, ends, held, strict=True)]
        sticks.append(Stick(f"B{row}", *ends, tuple(Link(n) for n in names)))
    case = Case("Q", action_type="VARIABLE_Q", source="LIVE_LOAD_Q")
    made = AnalysisFile(
        Model(tuple(joints), tuple(sticks), cases=(case,)), schema=schema, units=units
    )
    corners = [(0, 0, z), (LENGTH, 0, z), (LENGTH, WIDTH, z + tilt), (0, WIDTH, z + tilt)]
    bounds = [made.create("IfcFaceOuterBound", _loop(made, corners, loop), True)]
    if void:
        bounds.append(made.create("IfcFaceBound", _loop(made, void, "poly"), True))
    face = made.create("IfcFace", bounds)
    slab = made.rooted(
        "IfcStructuralSurfaceMember",
        "Slab",
        None,
        None,
        None,
        made.shape(face, "Face"),
        "SHELL",
        0.2,
    )
    force = -made.units.of(LOAD, "PLANARFORCEUNIT")
    load = made.create("IfcStructuralLoadPlanarForce", None, None, None, force)
    if kind == "temperature":
        load = made.create("IfcStructuralLoadTemperature", None, 10.0, 0.0, 0.0)
    if schema == "IFC2X3":
        action = made.rooted(
            "IfcStructuralPlanarAction", "Q on slab", None, None, None, None, load,
            "GLOBAL_COORDS", False, None, "TRUE_LENGTH",
        )  # fmt: skip
    else:
        action = made.rooted(
            "IfcStructuralSurfaceAction", "Q on slab", None, None, None, None, load,
            "GLOBAL_COORDS", False, "TRUE_LENGTH", "CONST",
        )  # fmt: skip
    made.relate("IfcRelConnectsStructuralActivity", "on slab", slab, action)
    made.relate("IfcRelAssignsToGroup", "slab in Q", [action], None, made.by_name["Q"])
    return made


def _loop(made, corners, kind):
    if kind == "poly":
        return made.create("IfcPolyLoop", [made.point(c) for c in corners])
    vertices = [made.vertex(c) for c in corners]
    edges = [
        made.create("IfcOrientedEdge", None, None, made.create("IfcEdge", a, b), True)
        for a, b in zip(vertices, [*vertices[1:], vertices[0]], strict=True)
    ]
    return made.create("IfcEdgeLoop", edges)


def reactions(outcome):
    return {
        outcome.model.names[r.line.elements[0]]: r.solution.reactions[
            r.solution.cases.index("Q"), :, 1
        ].sum()
        for r in outcome.lines
    }


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
@pytest.mark.parametrize("units", ["m_N", "ft_kip"])
@pytest.mark.parametrize("loop", ["poly", "edges"])
def test_each_of_two_beams_carries_half_of_the_slab(schema, units, loop, tmp_path):
    path = two_beams(schema, units, loop=loop).write(tmp_path / "slab.ifc")

    found = reactions(pipeline.run(path))

    half = LOAD * LENGTH * WIDTH / 2
    assert found == {"B0": pytest.approx(half, rel=1e-6), "B1": pytest.approx(half, rel=1e-6)}


def test_a_void_carries_nothing(tmp_path):
    void = [(2, 0.5, 0), (4, 0.5, 0), (4, 1.5, 0), (2, 1.5, 0)]
    path = two_beams("IFC4", "m_N", void=void).write(tmp_path / "slab.ifc")

    found = reactions(pipeline.run(path))

    assert sum(found.values()) == pytest.approx(LOAD * (LENGTH * WIDTH - 2.0), rel=1e-3)
    assert found["B1"] == pytest.approx(LOAD * LENGTH * WIDTH / 2, rel=1e-3)


@pytest.mark.parametrize(
    ("bend", "words"), [({"tilt": 1.0}, "not level"), ({"kind": "temperature"}, "Temperature")]
)
def test_what_cannot_be_spread_is_named(bend, words, tmp_path):
    made = two_beams("IFC4", "m_N", **bend)
    path = made.write(tmp_path / "slab.ifc")

    (finding,) = [f for f in pipeline.survey(path).findings if f.slug == "surface-action"]

    assert words in finding.message
    assert made.by_name["Q on slab"].GlobalId in finding.elements
