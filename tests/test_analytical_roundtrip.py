"""Analysis models written in every schema and in several units are read back as described."""

from __future__ import annotations

import math
from pathlib import Path

import pytest
from analytical_reading import SCHEMAS, by_name, finding, read, slugs
from ifc_makers import (
    FREE,
    RIGID,
    UNIT_SETS,
    AnalysisFile,
    Case,
    Combination,
    MaterialSpec,
    Model,
    MoveJoint,
    NodeLoad,
    PointLoad,
    SectionSpec,
    SpreadLoad,
    Warmth,
    continuous_beam,
    fixed,
    pinned,
    roller,
)

from analysis_core.building import AxisAction, Building, NodeAction, TemperatureAction
from analysis_core.ifc.analytical.reader import read_analytical
from analysis_core.ifc.source import open_model

SHARED = Path(__file__).parents[2] / "shared" / "ifc"
# Differences come from unit factors and from writing decimal numbers: a few rounding units.
TIGHT = 1e-12
HINGE = (RIGID, RIGID, RIGID, RIGID, FREE, RIGID)
SPRING = (RIGID, RIGID, RIGID, RIGID, 2.5e6, RIGID)


def lopsided() -> Model:
    """Three unequal spans with every kind of support, release and action."""
    return continuous_beam(
        [6.0, 4.5, 3.25],
        supports=[fixed(), roller(), (0.0, RIGID, 4.2e7, RIGID, 3.1e6, RIGID), pinned()],
        section=SectionSpec("I 300", 0.15, 0.3, 0.0071, 0.0107),
        material=MaterialSpec("S355 test", 210e9, 80.77e9, 7850.0, 12e-6),
        releases={"M2 start": HINGE, "M3 end": SPRING},
        cases=[
            Case("Dead", "PERMANENT_G", "DEAD_LOAD_G", coefficient=1.0),
            Case("Live", "VARIABLE_Q", "LIVE_LOAD_Q", group="Live loads"),
            Case("Other"),
        ],
        combinations=[
            Combination("Strength 1", {"Dead": 1.35, "Live": 1.5, "Other": -0.9}),
            Combination("Service 1", {"Dead": 1.0, "Live": 0.7}, purpose="SLS"),
        ],
        actions=[
            SpreadLoad("everywhere", "Dead", "M1", ((0.0, 0.0, -11e3),)),
            SpreadLoad(
                "ramp", "Live", "M2", ((0.0, 0.0, -5e3), (1e3, 0.0, -17e3)), (1.0, 3.5),
                ((0.0, 200.0, 0.0), (0.0, 300.0, 0.0)),
            ),
            SpreadLoad("local", "Live", "M3", ((0.0, 0.0, -7e3), (0.0, 0.0, -7e3)), local=True),
            PointLoad("point", "Live", "M1", 2.25, (0.0, 0.0, -31e3), (0.0, 4e3, 0.0)),
            NodeLoad("node", "Other", "J1", (1e3, 0.0, -9e3), (0.0, -2e3, 0.0)),
            MoveJoint("settles", "Other", "J2", (0.0, 0.0, -0.012), (0.0, 0.002, 0.0)),
            Warmth("sun", "Other", "M2", 12.0, 0.0, 25.0),
        ],
    )  # fmt: skip


@pytest.mark.parametrize("units", UNIT_SETS)
@pytest.mark.parametrize("schema", SCHEMAS)
def test_a_model_comes_back_as_it_was_described(tmp_path: Path, schema: str, units: str) -> None:
    building = read(lopsided(), tmp_path, schema=schema, units=units)

    assert building.schema == schema
    assert building.route == "analytical"
    assert slugs(building) <= {"missing-unit"}
    check_members(building)
    check_supports(building)
    check_actions(building)
    check_cases(building)


def check_members(building: Building) -> None:
    members = by_name(building.members)
    places = {"M1": (0.0, 6.0), "M2": (6.0, 10.5), "M3": (10.5, 13.75)}
    for name, (start, end) in places.items():
        member = members[name]
        assert member.start == pytest.approx((start, 0.0, 0.0), rel=TIGHT, abs=1e-12)
        assert member.end == pytest.approx((end, 0.0, 0.0), rel=TIGHT)
        assert member.up == pytest.approx((0.0, 0.0, 1.0))
        # Rectangles without fillets: area and inertia by hand.
        b, h, s, t = 0.15, 0.3, 0.0071, 0.0107
        assert member.section is not None
        assert member.section.area == pytest.approx(2 * b * t + (h - 2 * t) * s, rel=1e-9)
        inertia = (b * h**3 - (b - s) * (h - 2 * t) ** 3) / 12
        assert member.section.inertia == pytest.approx(inertia, rel=1e-9)
        assert member.material is not None
        assert member.material.elastic_modulus == pytest.approx(210e9, rel=TIGHT)
        assert member.material.shear_modulus == pytest.approx(80.77e9, rel=TIGHT)
        assert member.material.density == pytest.approx(7850.0, rel=TIGHT)
        assert member.material.thermal_expansion == pytest.approx(12e-6, rel=TIGHT)
        assert member.carries_moment


def check_supports(building: Building) -> None:
    joints = by_name(building.connections)
    stated = {
        "J0": (RIGID,) * 6,
        "J1": (FREE, RIGID, RIGID, RIGID, FREE, RIGID),
        "J2": (FREE, RIGID, 4.2e7, RIGID, 3.1e6, RIGID),
        "J3": (RIGID, RIGID, RIGID, RIGID, FREE, RIGID),
    }
    for name, stiffness in stated.items():
        restraint = joints[name].restraint
        found = (*restraint.translation, *restraint.rotation)
        assert found == pytest.approx(stiffness, rel=TIGHT), name
    names = {j.global_id: j.name for j in building.connections}
    members = {m.global_id: m.name for m in building.members}
    found = {
        (members[a.member], names[a.connection]): (a.position, a.release)
        for a in building.attachments
    }
    assert len(found) == 6
    for (member, joint), (position, release) in found.items():
        starts = joint[1:] == str(int(member[1:]) - 1)
        length = {"M1": 6.0, "M2": 4.5, "M3": 3.25}[member]
        assert position == pytest.approx(0.0 if starts else length, abs=1e-9)
        rotation = {("M2", "J1"): FREE, ("M3", "J3"): 2.5e6}.get((member, joint), RIGID)
        assert release.rotation[1] == pytest.approx(rotation, rel=TIGHT)
        assert release.rotation[0] == release.rotation[2] == RIGID
        assert release.translation == (RIGID,) * 3


def check_actions(building: Building) -> None:
    actions = by_name(building.actions)
    members = {m.global_id: m.name for m in building.members}
    assert len(building.actions) == 7
    for name, case, member, stations, forces in (
        ("everywhere", "Dead", "M1", (0.0, 6.0), ((0, 0, -11e3), (0, 0, -11e3))),
        ("ramp", "Live", "M2", (1.0, 3.5), ((0, 0, -5e3), (1e3, 0, -17e3))),
        ("local", "Live", "M3", (0.0, 3.25), ((0, 0, -7e3), (0, 0, -7e3))),
    ):
        action = actions[name]
        assert isinstance(action, AxisAction)
        assert (action.case, members[action.member]) == (case, member)
        assert action.shape == "continuous"
        assert action.stations == pytest.approx(stations, rel=TIGHT, abs=1e-9)
        assert len(action.forces) == len(forces)
        for found, stated in zip(action.forces, forces, strict=True):
            assert found == pytest.approx(stated, rel=TIGHT, abs=1e-9)
    assert actions["ramp"].moments[1] == pytest.approx((0.0, 300.0, 0.0), rel=TIGHT)
    point = actions["point"]
    assert (point.shape, point.case) == ("discrete", "Live")
    assert point.stations == pytest.approx((2.25,), rel=TIGHT)
    assert point.forces[0] == pytest.approx((0.0, 0.0, -31e3), rel=TIGHT)
    assert point.moments[0] == pytest.approx((0.0, 4e3, 0.0), rel=TIGHT)
    node, settles, sun = actions["node"], actions["settles"], actions["sun"]
    assert isinstance(node, NodeAction)
    assert node.force == pytest.approx((1e3, 0.0, -9e3), rel=TIGHT)
    assert node.moment == pytest.approx((0.0, -2e3, 0.0), rel=TIGHT)
    assert settles.displacement == pytest.approx((0.0, 0.0, -0.012), rel=TIGHT)
    assert settles.rotation == pytest.approx((0.0, 0.002, 0.0), rel=TIGHT)
    assert isinstance(sun, TemperatureAction)
    assert (sun.constant, sun.difference_y, sun.difference_z) == (12.0, 0.0, 25.0)
    assert members[sun.member] == "M2"


def check_cases(building: Building) -> None:
    cases = by_name(building.cases)
    assert list(cases) == ["Dead", "Live", "Other"]
    assert [c.nature for c in cases.values()] == ["permanent", "imposed", "other"]
    assert cases["Live"].source == "ActionSource LIVE_LOAD_Q"
    combinations = by_name(building.combinations)
    assert combinations["Strength 1"].limit_state == "strength"
    assert combinations["Strength 1"].factors == {"Dead": 1.35, "Live": 1.5, "Other": -0.9}
    assert combinations["Service 1"].limit_state == "serviceability"
    assert combinations["Service 1"].factors == {"Dead": 1.0, "Live": 0.7}


@pytest.mark.parametrize("schema", SCHEMAS)
def test_a_model_that_is_placed_and_turned_comes_back_in_world_directions(
    tmp_path: Path, schema: str
) -> None:
    turn, origin = math.radians(30.0), (1186e3, -40e3, 12.5)
    flat = lopsided()
    model = Model(
        flat.joints, flat.sticks, flat.actions, flat.cases, flat.combinations,
        origin=origin, turn=turn,
    )  # fmt: skip
    building = read(model, tmp_path, schema=schema, units="mm_kN")

    c, s = math.cos(turn), math.sin(turn)
    member = by_name(building.members)["M2"]
    # At 1,186 km a double holds a tenth of a nanometre.
    assert member.start == pytest.approx((origin[0] + 6 * c, origin[1] + 6 * s, 12.5), abs=1e-8)
    actions = by_name(building.actions)
    assert actions["ramp"].forces[1] == pytest.approx((1e3 * c, 1e3 * s, -17e3), rel=1e-9)
    assert actions["ramp"].stations == pytest.approx((1.0, 3.5), rel=1e-8)
    assert actions["point"].stations == pytest.approx((2.25,), rel=1e-8)
    assert actions["point"].moments[0] == pytest.approx((-4e3 * s, 4e3 * c, 0.0), rel=1e-9)
    assert actions["node"].force == pytest.approx((1e3 * c, 1e3 * s, -9e3), rel=1e-9)
    support = by_name(building.connections)["J1"].restraint
    assert support.axes[0] == pytest.approx((c, s, 0.0))
    assert support.axes[1] == pytest.approx((-s, c, 0.0))


def test_self_weight_acts_in_the_directions_of_the_model(tmp_path: Path) -> None:
    flat = continuous_beam([5.0], cases=[Case("W", self_weight=(0.5, 0.0, -1.1))])
    model = Model(flat.joints, flat.sticks, cases=flat.cases, turn=math.radians(90.0))
    (case,) = read(model, tmp_path).cases
    assert case.self_weight == pytest.approx((0.0, 0.5, -1.1), abs=1e-12)


def test_upward_self_weight_is_doubted(tmp_path: Path) -> None:
    model = continuous_beam([5.0], cases=[Case("W", self_weight=(0.0, 0.0, 1.0))])
    building = read(model, tmp_path)
    assert building.cases[0].self_weight == (0.0, 0.0, 1.0)
    assert finding(building, "self-weight-upward").severity == "warning"


@pytest.mark.skipif(not SHARED.exists(), reason="the shared files are not here")
@pytest.mark.parametrize("pattern", ["structural/S14*", "structural/S16*"])
def test_the_published_portal_is_read_with_its_loads_in_balance(pattern: str) -> None:
    building = read_analytical(open_model(next(SHARED.glob(pattern))))

    assert len(building.members) == 3
    assert sum(c.restraint is not None for c in building.connections) == 2
    assert all(c.restraint.rotation == (RIGID,) * 3 for c in building.connections if c.restraint)
    (action,) = building.actions
    # The file stores the reactions that its author computed, in pounds-force.
    load = -sum(f[2] for f in action.forces) / 2 * (action.stations[1] - action.stations[0])
    assert load / 4.44822162 == pytest.approx(2278.52897011915 + 7321.47102988085, rel=1e-12)
    assert slugs(building) == {"implausible-modulus"}
    assert len(finding(building, "implausible-modulus").elements) == 3


@pytest.mark.skipif(not SHARED.exists(), reason="the shared files are not here")
def test_the_published_mixed_model_names_what_is_not_analysed() -> None:
    source = open_model(next(SHARED.glob("structural/S13*")))
    building = read_analytical(source)

    assert len(building.members) == 6
    assert all(member.element for member in building.members)
    beams = {e.GlobalId for e in source.file.by_type("IfcElement")}
    assert {member.element for member in building.members} <= beams
    held = [f for f in building.findings if f.slug == "line-support"]
    assert len(held) == 6
    assert {e for f in held for e in f.elements} > {m.global_id for m in building.members}
    assert len(finding(building, "curve-connection").elements) == 34
    assert len(finding(building, "surface-member").elements) == 20


@pytest.mark.skipif(not SHARED.exists(), reason="the shared files are not here")
def test_no_real_file_stops_the_reader() -> None:
    for path in sorted(SHARED.glob("*/*.ifc*")):
        if not path.name.startswith("S15"):
            assert read_analytical(open_model(path)).route == "analytical"


def test_a_file_without_structural_members_says_so(tmp_path: Path) -> None:
    made = AnalysisFile(Model((), ()))
    assert "no-structural-member" in slugs(read(made, tmp_path))
