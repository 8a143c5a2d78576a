"""From an analysis model in a file to effects: closed forms, in every schema and in several units.

Closed forms: three-moment equation (Clapeyron, 1857) for two spans on three supports; simple and
fixed beams as in any handbook.  All are exact, so the tolerance is that of rounding.
"""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest
from analytical_reading import SCHEMAS
from ifc_makers import (
    FREE,
    RIGID,
    UNIT_SETS,
    Case,
    Combination,
    Joint,
    Link,
    Model,
    MoveJoint,
    PointLoad,
    SectionSpec,
    SpreadLoad,
    Stick,
    Warmth,
    continuous_beam,
    fixed,
    pinned,
    write_analysis_model,
)

from analysis_core import pipeline
from analysis_core.results import LineResult
from analysis_core.settings import Analysis, MaterialSetting, Settings
from analysis_core.units import POUND_FORCE

SHARED = Path(__file__).parents[2] / "shared" / "ifc"
EXACT = 1e-9
HINGE = (RIGID, RIGID, RIGID, RIGID, FREE, RIGID)
MODULUS, SECTION = 210e9, SectionSpec("R 120x300", 0.12, 0.3)
RIGIDITY = MODULUS * 0.12 * 0.3**3 / 12


def solved(model: Model, folder: Path, **options: Any) -> LineResult:
    """Write, read, idealise and solve a model of one line or frame."""
    path = write_analysis_model(folder / "model.ifc", model, **options)
    (result,) = pipeline.run(path).lines
    assert result.solution is not None
    return result


def reactions(result: LineResult, name: str) -> list[float]:
    """Return the vertical reactions in a case or combination, from left to right."""
    for solution in (result.solution, result.combined):
        if solution is not None and name in solution.cases:
            row = solution.reactions[solution.cases.index(name)]
            joints = sorted(result.line.joints, key=lambda joint: joint.x)
            return [float(row[joint.id, 1]) for joint in joints]
    raise KeyError(name)


@pytest.mark.parametrize("units", UNIT_SETS)
@pytest.mark.parametrize("schema", SCHEMAS)
def test_two_unequal_spans_agree_with_the_three_moment_equation(
    tmp_path: Path, schema: str, units: str
) -> None:
    a, b, p, q = 6.2, 4.1, 11e3, 23e3
    model = continuous_beam(
        [a, b],
        section=SECTION,
        cases=[Case("P", "PERMANENT_G"), Case("Q", "VARIABLE_Q", "LIVE_LOAD_Q")],
        combinations=[Combination("U", {"P": 1.35, "Q": 1.5})],
        actions=[
            SpreadLoad("p", "P", "M1", ((0.0, 0.0, -p),)),
            SpreadLoad("q", "Q", "M2", ((0.0, 0.0, -q),)),
        ],
    )
    result = solved(model, tmp_path, schema=schema, units=units)

    hogging_p, hogging_q = p * a**3 / (8 * (a + b)), q * b**3 / (8 * (a + b))
    left, right = p * a / 2 - hogging_p / a, -hogging_p / b
    assert reactions(result, "P") == pytest.approx([left, p * a - left - right, right], rel=EXACT)
    first, last = -hogging_q / a, q * b / 2 - hogging_q / b
    found = reactions(result, "Q")
    assert found == pytest.approx([first, q * b - first - last, last], rel=EXACT)
    assert reactions(result, "U")[0] == pytest.approx(1.35 * left + 1.5 * first, rel=EXACT)


@pytest.mark.parametrize("schema", SCHEMAS)
def test_a_hinge_in_the_middle_of_a_fixed_beam_leaves_two_cantilevers(
    tmp_path: Path, schema: str
) -> None:
    w, half = 7e3, 2.5
    model = continuous_beam(
        [half, half],
        supports=[fixed(), None, fixed()],
        section=SECTION,
        releases={"M2 start": HINGE},
        cases=[Case("P")],
        actions=[SpreadLoad(n, "P", n[1:], ((0.0, 0.0, -w),)) for n in ("pM1", "pM2")],
    )
    result = solved(model, tmp_path, schema=schema, units="ft_kip")
    solution = result.solution
    assert reactions(result, "P") == pytest.approx([w * half, 0.0, w * half], rel=EXACT, abs=1e-6)
    # Cantilever, w L²/8 each way round the hinge: w half²/2.
    assert abs(solution.end_moments[0, 0, 0]) == pytest.approx(w * half**2 / 2, rel=EXACT)
    assert solution.end_moments[0, 0, 1] == pytest.approx(0.0, abs=1e-6)


@pytest.mark.parametrize("schema", SCHEMAS)
def test_a_settling_support_and_a_warm_top_bend_the_beam(tmp_path: Path, schema: str) -> None:
    length, drop, alpha, difference = 5.0, 0.008, 12e-6, 20.0
    model = continuous_beam(
        [length],
        supports=[fixed(), fixed()],
        section=SECTION,
        cases=[Case("S", source="SETTLEMENT_U"), Case("T", source="TEMPERATURE_T")],
        actions=[
            MoveJoint("s", "S", "J1", (0.0, 0.0, -drop)),
            Warmth("t", "T", "M1", 0.0, 0.0, difference),
        ],
    )
    solution = solved(model, tmp_path, schema=schema, units="mm_kN").solution
    settle, warm = (solution.cases.index(name) for name in ("S", "T"))
    # The right end sinks by d: 6 EI d / L² at both ends, anticlockwise on the member.
    moment = 6 * RIGIDITY * drop / length**2
    assert solution.end_moments[settle, 0] == pytest.approx([-moment, -moment], rel=EXACT)
    # Top warmer by T: fully fixed, EI alpha T / h all along, with tension below (sagging).
    moment = RIGIDITY * alpha * difference / 0.3
    assert solution.end_moments[warm, 0] == pytest.approx([moment, -moment], rel=EXACT)


@pytest.mark.parametrize("schema", SCHEMAS)
def test_one_long_member_over_three_supports_is_two_spans(tmp_path: Path, schema: str) -> None:
    w, a, b = 9e3, 3.75, 5.5
    joints = tuple(
        Joint(name, (x, 0.0, 0.0), pinned()) for name, x in (("A", 0.0), ("B", a), ("C", a + b))
    )
    stick = Stick("M", joints[0].point, joints[2].point, (Link("C"), Link("A"), Link("B")), SECTION)
    actions = (
        SpreadLoad("w", "P", "M", ((0.0, 0.0, -w),)),
        PointLoad("f", "F", "M", a + b / 2, (0.0, 0.0, -30e3)),
    )
    model = Model(joints, (stick,), actions, (Case("P"), Case("F")))
    result = solved(model, tmp_path, schema=schema, units="mm_kN")
    hogging = w * (a**3 + b**3) / (8 * (a + b))
    assert reactions(result, "P")[0] == pytest.approx(w * a / 2 - hogging / a, rel=EXACT)
    # A force at mid-span of the second span: 3 P b² / (16 (a + b)) over the middle support.
    hogging = 3 * 30e3 * b**2 / (16 * (a + b))
    assert reactions(result, "F")[0] == pytest.approx(-hogging / a, rel=EXACT)


@pytest.mark.skipif(not SHARED.exists(), reason="the shared files are not here")
def test_the_published_portal_gives_about_the_reactions_stored_in_its_file() -> None:
    """S14 stores reactions that allow for axial and for some shear deformation.

    They must lie between those of shear-rigid members and of members with the full shear
    flexibility of their webs; vertical reactions hardly depend on either.
    """
    path = next(SHARED.glob("structural/S14*"))
    steel = MaterialSetting("*", elastic_modulus=199.948e9, shear_modulus=77.22e9)
    inch_pound = POUND_FORCE * 0.0254
    feet = []
    for shear_flexible in (False, True):
        settings = Settings(materials=(steel,), analysis=Analysis(shear_flexible=shear_flexible))
        (result,) = pipeline.run(path, settings).lines
        assert result.solution is not None
        rows = result.solution.reactions[0]
        held = sorted((j for j in result.line.joints if j.support), key=lambda j: j.x)
        feet.append([rows[joint.id] for joint in held])
    for foot, (vertical, horizontal, moment) in enumerate(
        ((2278.52897, 1422.66327, 66694.85489), (7321.47103, 1422.73493, 43375.44767))
    ):
        rigid, flexible = feet[0][foot], feet[1][foot]
        assert rigid[1] / POUND_FORCE == pytest.approx(vertical, rel=5e-3)
        assert abs(flexible[0]) < horizontal * POUND_FORCE < abs(rigid[0])
        assert abs(flexible[2]) < moment * inch_pound < abs(rigid[2])
    # Both feet push inwards on the frame: to the right on the left.
    assert feet[0][0][0] > 0.0 > feet[0][1][0]
