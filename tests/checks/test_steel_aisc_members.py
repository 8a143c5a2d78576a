"""Steel members by AISC 360: hollow sections, built-up shapes, axial force, each a second way."""

import math
from dataclasses import replace

import pytest
from designs import INCH, S355, W18X50, box, i_section, pressed, simple_span, tube

from analysis_core.checks import (
    steel_aisc,
    steel_aisc_axial,
    steel_aisc_hollow,
    steel_redistribution,
)
from analysis_core.checks.working import Figures

FIGURES = Figures(steel_aisc.FIGURES, {})
KIP, FOOT = 4448.2216152605, 0.3048
KSI = 1e3 * 4.4482216152605 / INCH**2
A992 = replace(S355, name="A992", strength=(("fy", 50 * KSI),))
A500 = replace(S355, name="A500", strength=(("fy", 50 * KSI),))
E, FY = 29000 * KSI, 50 * KSI


def checks(design, **options):
    return {c.name: c for c in steel_aisc.check_steel(design, FIGURES, **options)}


def test_the_available_strength_in_compression_is_that_of_the_manual():
    # AISC Manual, table 4-14 (available critical stress, Fy = 50 ksi), from memory:
    # KL/r = 50: phi Fcr = 37.5 ksi; 100: 21.7; 150: 10.0 (Fcr / Omega 14.4 at 100).
    for slender, stress in ((50, 37.5), (100, 21.7), (150, 10.0)):
        elastic = math.pi**2 * E / slender**2
        found = 0.9 * steel_aisc_axial.critical_stress(elastic, FY) / KSI
        assert found == pytest.approx(stress, abs=0.06)


def test_column_strength_is_continuous_where_its_formulas_meet():
    meet = FY / 2.25
    below, above = (steel_aisc_axial.critical_stress(meet * k, FY) for k in (0.999999, 1.000001))
    assert below == pytest.approx(above, rel=6e-4)  # 0.877 has three digits


@pytest.mark.parametrize(("axial", "flexure", "total"), [
    (0.2, 0.9, 0.2 + 8 / 9 * 0.9), (0.1999, 0.9, 0.1999 / 2 + 0.9), (0.6, 0.45, 1.0),
])  # fmt: skip
def test_the_interaction_meets_on_both_sides_of_one_fifth(axial, flexure, total):
    assert steel_aisc_axial.interaction(axial, flexure) == pytest.approx(total)
    assert steel_aisc_axial.interaction(0.2, 0.9) == pytest.approx(
        steel_aisc_axial.interaction(0.2 - 1e-12, 0.9)
    )


# AISC Steel Construction Manual, table 1-1, from memory.
W10X49 = i_section(
    "W10X49", 10.0 * INCH, 10.0 * INCH, 0.340 * INCH, 0.560 * INCH, 0.500 * INCH,
    area=14.4 * INCH**2, iy=272 * INCH**4, iz=93.4 * INCH**4, it=1.39 * INCH**4,
    iw=2070 * INCH**6, wpl=60.4 * INCH**3, wel=54.6 * INCH**3,
)  # fmt: skip


def test_a_column_with_moment_by_hand():
    design = pressed(simple_span(W10X49, A992, 12 * FOOT, 5e3), -150 * KIP)
    found = checks(design)
    check = found["axial force and flexure"]
    # By hand: r_y = sqrt(93.4/14.4) = 2.547 in, L/r = 56.5, F_e = 89.6 ksi, F_cr = 39.6 ksi;
    # AISC Manual, table 4-1, from memory: phi P_n of W10x49 at 12 ft is 513 kip.
    slender = 144 / math.sqrt(93.4 / 14.4)
    elastic = math.pi**2 * 29000 / slender**2
    strength = 0.9 * 0.658 ** (50 / elastic) * 50 * 14.4
    assert strength == pytest.approx(513, abs=1.5)
    share = 150 / strength
    moment = 5e3 * (12 * FOOT) ** 2 / 8 / found["flexure"].resistance
    assert share > 0.2
    assert check.use == pytest.approx(share + 8 / 9 * moment, rel=1e-3)
    assert "axial force and flexure" not in checks(simple_span(W10X49, A992, 12 * FOOT, 5e3))
    # W18x50: h/t_w = 45.2 > 1.49 sqrt(E/F_y) = 35.9, slender in compression.
    slender_web = pressed(simple_span(W18X50, A992, 12 * FOOT, 5e3), -150 * KIP)
    assert checks(slender_web)["axial force and flexure"].status == "not checked"


def test_a_slender_wall_in_compression_is_not_checked():
    thin = box("HSS 16x8x1/8", 16 * INCH, 8 * INCH, 0.125 * INCH)
    found = checks(pressed(simple_span(thin, A500, 5.0, 1e3), -50 * KIP))
    assert found["axial force and flexure"].status == "not checked"


def test_a_round_tube_passes_from_plastic_to_elastic_without_a_step():
    z, s = 1.3e-4, 1.0e-4
    compact, slender = 0.07 * E / FY, 0.31 * E / FY

    def strength(ratio):
        return steel_aisc_hollow.tube_strength(ratio, z=z, s=s, e=E, fy=FY)

    assert strength(compact) == FY * z
    # (F8-2) gives 1.3 F_y S at the limit: the shape factor of a thin tube is 4/pi = 1.27.
    assert strength(compact * 1.0001) == pytest.approx(1.3 * FY * s, rel=1e-3)
    assert strength(slender) == pytest.approx((0.021 / 0.31 + 1.0) * FY * s, rel=1e-9)
    assert strength(slender * 1.0001) is None


def test_the_walls_of_a_box_pass_from_plastic_to_elastic():
    z, s, root = 1.2e-4, 1.0e-4, math.sqrt(E / FY)

    def strength(flange, web):
        return steel_aisc_hollow.box_strength(flange * root, web * root, z=z, s=s, e=E, fy=FY)

    assert strength(1.12, 2.42) == FY * z
    # (F7-2): 3.57 * 1.12 - 4.0 = -0.0016 and 3.57 * 1.40 - 4.0 = 0.998, that is, M_p to F_y S.
    assert strength(1.1201, 1.0) == pytest.approx(FY * z, rel=1e-3)
    assert strength(1.40, 1.0) == pytest.approx(FY * s, rel=1e-3)
    # (F7-6): 0.305 * 5.70 - 0.738 = 1.0.
    assert strength(1.0, 5.70) == pytest.approx(FY * s, rel=1e-3)
    assert strength(1.4001, 1.0) is None
    assert strength(1.0, 5.7001) is None


def test_the_webs_of_a_box_buckle_in_shear_without_a_step():
    root = math.sqrt(5.0 * E / FY)

    def coefficient(ratio):
        return steel_aisc.panel_coefficient(ratio * root, 5.0, E, FY)

    assert coefficient(1.10) == 1.0
    assert coefficient(1.37) == pytest.approx(1.10 / 1.37)
    assert coefficient(1.3701) == pytest.approx(1.10 / 1.37, rel=3e-3)
    assert coefficient(2.0) == pytest.approx(1.51 / 4.0)


def test_shear_of_hollow_sections_by_hand():
    hss = box("HSS 8x4x1/4", 8 * INCH, 4 * INCH, 0.25 * INCH)
    found = checks(simple_span(hss, A500, 5.0, 1e3))["shear"]
    # Design wall 0.93 · 1/4 = 0.2325 in (AISC Manual, table 1-11, from memory: 0.233 in);
    # A_w = 2 (8 - 3 · 0.2325) 0.2325 = 3.396 in²; 0.9 · 0.6 · 50 · 3.396 = 91.68 kip.
    assert found.resistance / KIP == pytest.approx(91.683, rel=1e-4)
    pipe = tube("HSS 6.000x0.250", 6 * INCH, 0.25 * INCH)
    found = checks(simple_span(pipe, A500, 5.0, 1e3))["shear"]
    area = 0.93 * math.pi * (6**2 - 5.5**2) / 4
    assert found.resistance / KIP == pytest.approx(0.9 * 0.6 * 50 * area / 2, rel=1e-4)


@pytest.mark.parametrize(("name", "part"), [("A500 Gr C", 0.93), ("ASTM A1085", 1.0)])
def test_hollow_sections_count_with_their_design_wall(name, part):
    """AISC Manual, table 1-12, from memory: HSS 6x6x3/8 has t = 0.349 in, Z = 15.8 in³.

    The sharp corners here give more, so the wall alone is compared, and how Z follows it.
    """
    hss = box("HSS 6x6x3/8", 6 * INCH, 6 * INCH, 0.375 * INCH)
    found = checks(simple_span(hss, replace(A500, name=name), 3.0, 1e3))["flexure"]
    wall = next(s.value for s in found.steps if s.symbol == "t")
    assert wall / INCH == pytest.approx(0.375 * part, rel=1e-9)
    inner = 6 - 2 * 0.375 * part
    exact = (6 * 36 - inner * inner**2) / 4 * INCH**3 * 0.9 * FY
    assert found.resistance <= exact * (1 + 1e-9)
    assert found.resistance == pytest.approx(exact, rel=0.012)


def test_axial_force_goes_with_the_flexure_of_its_own_combination():
    """A held member under its large moment, an unheld one under a small moment and compression.

    What governs flexure alone (downward load, top flange held) must not stand for the strength
    under the combination that compresses the bottom flange, unheld, together with the force.
    """
    down = simple_span(W10X49, A992, 40 * FOOT, 14e3, continuous=True)
    field = down.fields[0]
    up = replace(field, source="U2", moment=-0.3 * field.moment, shear=-0.3 * field.shear,
                 axial=(-60 * KIP, -60 * KIP))  # fmt: skip
    hogging = replace(down.governing.sagging, value=-0.3 * down.governing.sagging.value,
                      source="U2")  # fmt: skip
    both = replace(down, fields=(field, up), governing=replace(down.governing, hogging=hogging))
    none = replace(down.governing.sagging, value=0.0)
    alone = replace(both, fields=(up,), governing=replace(both.governing, sagging=none))

    together, single = (checks(d)["axial force and flexure"] for d in (both, alone))

    assert together.source == "U2"
    assert together.use == pytest.approx(single.use, rel=1e-12)
    # 40 ft unheld: phi M_n well below phi M_p = 226 kip ft, by which it was divided before.
    assert checks(alone)["flexure"].resistance / (KIP * FOOT) < 150


def test_built_up_shapes_have_the_smaller_factor_for_shear_and_other_limits():
    dimensions = {**dict(W18X50.dimensions), "fillet_radius": 0.0}
    welded = replace(W18X50, dimensions=tuple(dimensions.items()))
    rolled_, welded_ = (
        checks(simple_span(s, A992, 6.0, 1e3))["shear"].resistance for s in (W18X50, welded)
    )
    assert welded_ == pytest.approx(0.9 * rolled_)
    shape = steel_aisc.shape_of(simple_span(welded, A992, 6.0, 1e3))
    kc = 4 / math.sqrt(shape.h / shape.tw)
    assert steel_aisc.flange_limits(shape, E, FY)[1] == pytest.approx(
        0.95 * math.sqrt(min(max(kc, 0.35), 0.76) * E / (0.7 * FY))
    )


def test_the_flange_strength_is_continuous_at_both_limits():
    shape = steel_aisc.shape_of(simple_span(W18X50, A992, 6.0, 1e3))
    compact, noncompact = steel_aisc.flange_limits(shape, E, FY)

    def strength(ratio):
        return steel_aisc.flange_strength(replace(shape, tf=shape.bf / 2 / ratio), E, FY)

    plastic = FY * shape.zx
    assert strength(compact * 1.0001) == pytest.approx(plastic, rel=1e-3)
    assert strength(noncompact) == pytest.approx(0.7 * FY * shape.sx, rel=1e-9)
    # kc <= 0.76 makes F3-2 lower at its start: 0.9 kc E S / lambda² = 0.684 F_y S at most.
    assert strength(noncompact * 1.0001) <= 0.7 * FY * shape.sx


def test_lateral_strength_is_that_of_the_elastic_theory_beyond_the_limit():
    """(F2-4) against M_cr of the exact theory: C_w = I_y h_o² / 4 makes them one."""
    shape = steel_aisc.shape_of(simple_span(W18X50, A992, 6.0, 1e3))
    g = E / 2.6
    length = 30 * FOOT
    euler = math.pi**2 * E * shape.iy / length**2
    exact = euler * math.sqrt(shape.cw / shape.iy + g * shape.j / euler)

    found = steel_aisc.lateral_strength(shape, E, FY, length, 1.0)

    # 0.078 = pi^-2 · 2 G/E · ... with G = 11,200 ksi; rts is rounded into it.
    assert found == pytest.approx(exact, rel=0.01)


def test_long_boxes_buckle_as_the_theory_of_closed_sections_says():
    """(F7-11) against pi sqrt(E I_y G J) / L, with E / G = 2.6."""
    hss = box("HSS 20x4x1/2", 20 * INCH, 4 * INCH, 0.5 * INCH)
    length = 200.0  # m: far beyond L_r, to be in the elastic branch
    check = checks(simple_span(hss, A500, length, 1.0))["flexure"]
    exact = math.pi * E * math.sqrt(hss.inertia_lateral * hss.torsion / 2.6) / length
    exact *= 0.93  # design walls: both properties shrink as the wall

    assert check.resistance / 0.9 == pytest.approx(exact, rel=0.03)
    steps = {s.symbol: s.value for s in check.steps}
    # Where they meet, the moment is 0.7 F_y S; L_p is 0.13 / 2 of where the elastic one is M_p.
    elastic = check.resistance / 0.9 * length
    assert steps["L_r"] == pytest.approx(
        elastic / (0.7 * FY * 0.93 * dict(hss.dimensions)["section_modulus_top"])
    )
    assert steps["L_p"] == pytest.approx(
        0.13 / 2.0 * elastic / (FY * 0.93 * dict(hss.dimensions)["plastic_modulus"])
    )


@pytest.mark.parametrize(("change", "length", "words"), [
    ({}, 1.5, ""),
    ({}, 1.10, "unbraced length"),  # L_m = 0.044 · 29000/50 · 1.652 in = 42.2 in = 1.071 m
    ({"fy": 70 * KSI}, 1.0, "65 ksi"),
    ({"flange": 0.35 * INCH}, 1.0, "compact"),
    ({"axial": -0.2}, 1.0, "axial force"),
])  # fmt: skip
def test_redistribution_by_aisc_asks_for_compactness_restraint_and_little_force(
    change, length, words
):
    """B3.3 and F13.5 with M1/M2 = -1: L_m = 0.044 (E/F_y) r_y."""
    section = W18X50
    if "flange" in change:
        section = replace(section, dimensions=tuple(
            {**dict(section.dimensions), "flange_thickness": change["flange"]}.items()
        ))  # fmt: skip
    fy = change.get("fy", FY)
    material = replace(A992, strength=(("fy", fy),))
    design = simple_span(section, material, length, 1e3, continuous=words != "unbraced length")
    design = pressed(design, change.get("axial", 0.0) * fy * section.area)
    reason = steel_redistribution.why_elastic(design, FIGURES, "aisc-360")
    assert (words in reason) if words else not reason
