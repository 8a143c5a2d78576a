"""Steel members by EN 1993-1-1: thickness, restraint, axial force, each derived a second way."""

import math
from dataclasses import replace

import numpy as np
import pytest
from designs import IPE300, S355, box, i_section, pressed, rectangle, simple_span, tube
from scipy.linalg import eigh
from scipy.optimize import brentq

from analysis_core.checks import (
    steel_aisc,
    steel_en,
    steel_en_axial,
    steel_en_lateral,
    steel_en_section,
)
from analysis_core.checks.design import EffectField, Restraints, segments
from analysis_core.checks.working import Figures
from analysis_core.model import Section

FIGURES = Figures(steel_en.FIGURES, {})
E, G = 210e9, 81e9


def checks(design):
    return {check.name: check for check in steel_en.check_steel(design, FIGURES)}


def with_dimensions(section, **changed):
    return replace(section, dimensions=tuple({**dict(section.dimensions), **changed}.items()))


def test_thick_parts_have_the_lower_strength_of_the_table():
    # EN 1993-1-1 table 3.1, from memory: S355, up to 40 mm 355 MPa, up to 80 mm 335 MPa.
    for thickness, fy in ((0.040, 355e6), (0.0401, 335e6), (0.080, 335e6), (0.0801, 0.0)):
        design = simple_span(with_dimensions(IPE300, flange_thickness=thickness), S355, 6.0, 1e3)
        assert steel_en_section.yield_strength(design) == fy
    beyond = simple_span(with_dimensions(IPE300, flange_thickness=0.09), S355, 6.0, 1e3)
    (only,) = steel_en.check_steel(beyond, FIGURES)
    assert only.status == "not checked"
    assert "80 mm" in only.reason


def test_a_section_that_lies_turned_or_was_replaced_is_not_checked():
    lying = replace(IPE300, inertia=603.8e-8, top=0.075)
    turned = with_dimensions(lying, roll=math.pi / 2, section_modulus_top=603.8e-8 / 0.075)
    replaced = replace(IPE300, inertia=2 * IPE300.inertia, source="job file")
    stainless = replace(S355, name="1.4301 stainless")
    for design in (
        simple_span(turned, S355, 6.0, 1e3),
        simple_span(replaced, S355, 6.0, 1e3),
        simple_span(IPE300, stainless, 6.0, 1e3),
        simple_span(rectangle(0.1, 0.2), S355, 6.0, 1e3),
    ):
        (only,) = steel_en.check_steel(design, FIGURES)
        assert only.status == "not checked"


def test_the_critical_moment_is_that_of_the_differential_equation():
    """M_cr of a simple span under uniform moment, as an eigenvalue of its Fourier series.

    Energy of lateral bending, torsion and warping against the work of the moment, for
    u = a sin, phi = b sin: (EIz k^4) (GIt k^2 + EIw k^4) = (M k^2)^2.
    """
    length, iz, it, iw = 7.3, IPE300.inertia_lateral, IPE300.torsion, 125.9e-9
    k = math.pi / length
    stiff = np.array([[E * iz * k**4, 0.0], [0.0, G * it * k**2 + E * iw * k**4]])
    work = np.array([[0.0, k**2], [k**2, 0.0]])
    # stiff - M work is singular: eigenvalues of work against stiff are 1/M.
    expected = 1.0 / eigh(work, stiff, eigvals_only=True).max()

    found = steel_en_lateral.critical_moment(1.0, length, e=E, g=G, iz=iz, it=it, iw=iw)

    assert found == pytest.approx(expected, rel=1e-12)


def test_a_hogging_region_uses_the_flange_that_is_compressed():
    design = simple_span(IPE300, S355, 6.0, -20e3)  # hogs all along
    on_top = replace(design, restraints=replace(design.restraints, top_continuous=True))
    below = replace(design, restraints=replace(design.restraints, bottom_continuous=True))

    assert checks(on_top)["lateral torsional buckling"].use > 1.5 * checks(on_top)["bending"].use
    assert checks(below)["lateral torsional buckling"].use == pytest.approx(
        checks(below)["bending"].use
    )


def test_a_segment_is_compared_with_its_largest_moment_of_either_sign():
    x = np.linspace(0.0, 6.0, 61)
    moment = -100e3 + 150e3 * x / 6.0
    design = simple_span(IPE300, S355, 6.0, 1e3)
    field = EffectField("U", x, moment, np.zeros(61))
    held = replace(design, restraints=Restraints((0.0, 3.0, 6.0), (0.0, 6.0)))

    found = {(s.flange, s.start): s for s in segments(held, field)}

    assert set(found) == {("top", 3.0), ("bottom", 0.0)}  # the top is compressed beyond 4 m alone
    assert found["bottom", 0.0].largest == pytest.approx(-100e3)
    assert found["top", 3.0].largest == pytest.approx(50e3)


def test_the_tip_of_a_cantilever_is_no_restraint():
    design = simple_span(IPE300, S355, 3.0, 1e3)
    x = np.linspace(0.0, 3.0, 31)
    field = EffectField("U", x, -30e3 * (1 - x / 3.0), np.full(31, 10e3))
    tip = replace(
        design,
        fields=(field,),
        cantilever=True,
        restraints=Restraints((0.0,), (0.0,), loose=(3.0,)),
    )

    (segment,) = segments(tip, field)

    assert segment.free
    assert (segment.flange, segment.length) == ("bottom", 3.0)
    steps = {s.symbol: s for s in checks(tip)["lateral torsional buckling"].steps}
    assert steps["C_1"].value == 1.0


def test_unheld_joints_make_one_long_segment():
    design = simple_span(IPE300, S355, 2.0, 1e3)
    along = np.linspace(-4.0, 2.0, 61)
    field = replace(design.fields[0], along=(along, np.full(61, 40e3)))
    long = replace(design, fields=(field,), restraints=Restraints((-4.0, 2.0), (-4.0, 2.0)))

    (segment,) = segments(long, field)

    assert segment.length == 6.0


def test_channels_buckle_by_the_general_curve_d():
    channel = Section(
        "UPN 200", "channel", 32.2e-4, 1910e-8, 148e-8, torsion=11.9e-8, depth=0.2, width=0.075,
        top=0.1, dimensions=tuple({
            "depth": 0.2, "width": 0.075, "web_thickness": 0.0085, "flange_thickness": 0.0115,
            "fillet_radius": 0.0115, "section_modulus_top": 191e-6,
            "section_modulus_bottom": 191e-6, "plastic_modulus": 228e-6, "warping": 9.07e-9,
        }.items()),
    )  # fmt: skip
    found = checks(simple_span(channel, S355, 5.0, 1e3))["lateral torsional buckling"]
    steps = {s.symbol: s.value for s in found.steps}

    # By hand: 6.3.2.2 with alpha 0.76 and the plateau at 0.2.
    lam = steps["λ_LT"]
    phi = 0.5 * (1 + 0.76 * (lam - 0.2) + lam**2)
    assert steps["χ_LT"] == pytest.approx(1 / (phi + math.sqrt(phi**2 - lam**2)), rel=1e-12)
    assert found.resistance == pytest.approx(steps["χ_LT"] * 228e-6 * 355e6, rel=1e-9)


@pytest.mark.parametrize(
    ("welded", "depth", "curve"),
    [(False, 2.0, "b"), (False, 2.01, "c"), (True, 2.0, "c"), (True, 2.01, "d")],
)
def test_the_curve_of_lateral_buckling_follows_the_making_and_the_slenderness(welded, depth, curve):
    section = with_dimensions(IPE300, depth=depth * 0.15, fillet_radius=0.0 if welded else 0.015)
    assert steel_en_lateral.buckling_curve(simple_span(section, S355, 6.0, 1e3))[0] == curve


def test_the_moment_with_axial_force_is_safe_against_the_plastic_one():
    """6.2.9.1(5) against the exact plastic interaction of the sharp-cornered section."""
    h, b, tw, tf = 0.3, 0.15, 0.0071, 0.0107
    section = replace(
        with_dimensions(IPE300, fillet_radius=0.0,
                        plastic_modulus=(b * h**2 - (b - tw) * (h - 2 * tf) ** 2) / 4),
        area=b * h - (b - tw) * (h - 2 * tf),
    )  # fmt: skip
    design = simple_span(section, S355, 6.0, 1e3)
    full = dict(section.dimensions)["plastic_modulus"]

    def exact(share):  # a strip around the middle of area n A carries the force
        need = share * section.area
        if need <= tw * (h - 2 * tf):
            return full - (need / tw) ** 2 * tw / 4
        depth = brentq(lambda z: section.area - b * (h - z) - need, h - 2 * tf, h)
        return b * (h**2 - depth**2) / 4

    for share in (0.05, 0.2, 0.3, 0.5, 0.7, 0.9):
        found = steel_en_axial.moment_with_axial(design, 1, share, full)
        assert found <= full
        assert found == pytest.approx(exact(share), rel=0.06)  # the code's formula is a fit
    assert steel_en_axial.moment_with_axial(design, 1, 1.0, full) == 0.0
    assert steel_en_axial.moment_with_axial(design, 3, 0.4, full) == pytest.approx(0.6 * full)


def test_flexural_buckling_has_the_values_of_the_curves():
    # EN 1993-1-1 figure 6.4; the values of ECCS curves at slenderness 1, from memory:
    # a0.. : a 0.666, b 0.597, c 0.540, d 0.467.
    for curve, chi in (("a", 0.666), ("b", 0.597), ("c", 0.540), ("d", 0.467)):
        alpha = steel_en_lateral.IMPERFECTION[curve]
        found = steel_en_lateral.reduction_factor(1.0, alpha, plateau=0.2, beta=1.0)
        assert found == pytest.approx(chi, abs=6e-4)


def test_a_column_is_checked_for_buckling_about_both_axes():
    design = pressed(simple_span(IPE300, S355, 4.0, 5e3), -400e3)
    found = checks(design)
    check = found["buckling with bending"]
    steps = {s.symbol: s.value for s in check.steps}
    # By hand: N_cr,z = pi² 210e9 603.8e-8 / 16 = 782.2 kN; slenderness, curve b (h/b = 2).
    assert steps["N_cr,z"] == pytest.approx(782.2e3, rel=1e-3)
    lam = math.sqrt(53.81e-4 * 355e6 / 782.2e3)
    phi = 0.5 * (1 + 0.34 * (lam - 0.2) + lam**2)
    chi_z = 1 / (phi + math.sqrt(phi**2 - lam**2))
    assert steps["χ_z"] == pytest.approx(chi_z, rel=1e-3)
    moment, squash = 10e3, 53.81e-4 * 355e6
    bending = moment / (steps["χ_LT"] * 628.4e-6 * 355e6)
    assert check.use == pytest.approx(400e3 / (chi_z * squash) + bending, rel=1e-3)  # (6.62)
    assert found["axial force"].use == pytest.approx(400e3 / squash)


def test_a_force_next_to_nothing_changes_nothing_and_tension_does_not_buckle():
    plain = simple_span(IPE300, S355, 4.0, 5e3)

    assert set(checks(pressed(plain, -1e3))) == set(checks(plain))
    pulled = checks(pressed(plain, 400e3))
    assert "buckling with bending" not in pulled
    assert pulled["axial force"].status == "satisfied"


def test_the_web_is_of_a_higher_class_where_it_is_compressed():
    # IPE 300: c/t = 35.0; limits of pure bending 58.6, of pure compression 26.8/30.9/34.2 (S355).
    design = simple_span(IPE300, S355, 4.0, 5e3)
    assert steel_en_section.classify(design, 355e6)[0] == 1
    # At 1500 kN psi = 0.57, so the limit of class 3 is 42 eps / (0.67 + 0.33 psi) = 39.8.
    assert steel_en_section.classify(pressed(design, -1500e3), 355e6)[0] == 3
    assert steel_en_section.classify(pressed(design, -1900e3), 355e6)[0] == 4
    assert checks(pressed(design, -1900e3))["bending"].status == "not checked"


def test_hollow_sections_by_a_second_way():
    rhs, chs = box("RHS 200x100x8", 0.2, 0.1, 0.008), tube("CHS 168.3x8", 0.1683, 0.008)
    for section in (rhs, chs):
        found = checks(simple_span(section, S355, 5.0, 5e3))
        # Moments of the fully plastic halves, integrated.
        z = np.linspace(0.0, section.depth / 2, 200_001)
        if section is rhs:
            width = np.where(z > 0.1 - 0.008, 0.1, 0.016)
        else:
            r, i = 0.1683 / 2, 0.1683 / 2 - 0.008
            width = 2 * (np.sqrt(r**2 - z**2) - np.sqrt(np.maximum(i**2 - z**2, 0.0)))
        plastic = 2.0 * float(((width * z)[1:] + (width * z)[:-1]).sum() / 2.0 * z[1])
        assert found["bending"].resistance == pytest.approx(plastic * 355e6, rel=1e-4)
        assert found["lateral torsional buckling"].use == pytest.approx(found["bending"].use)
    # 6.2.6(3): A h / (b + h), and 2 A / pi.
    assert steel_en_section.shear_area(simple_span(rhs, S355, 5.0, 1e3), 1.0) == pytest.approx(
        rhs.area * 2 / 3
    )
    assert steel_en_section.shear_area(simple_span(chs, S355, 5.0, 1e3), 1.0) == pytest.approx(
        2 * chs.area / math.pi
    )


@pytest.mark.parametrize(("share", "shape", "class_"), [(0.75, "I", 1), (0.75, "box", 1)])
def test_the_moment_beside_shear_is_that_of_a_weaker_web(share, shape, class_):
    """6.2.8(3): the shear area has the strength (1 - rho) f_y; here by plastic moduli."""
    rho = (2 * share - 1) ** 2
    if shape == "I":
        section = with_dimensions(IPE300, fillet_radius=0.0)
        web = (0.3 - 2 * 0.0107) ** 2 * 0.0071 / 4
        expected = (628.4e-6 - rho * web) * 355e6
    else:
        section = box("RHS", 0.2, 0.1, 0.008)
        expected = (1 - rho) * dict(section.dimensions)["plastic_modulus"] * 355e6
    design = simple_span(section, S355, 6.0, 20e3)

    found = steel_en_section.reduced_moment(design, FIGURES, 355e6, class_, share)

    assert found == pytest.approx(expected, rel=1e-9)


@pytest.mark.parametrize(
    ("stated", "taken"),
    [(81e9, 81e9), (0.0, 210e9 / 2.6), (1e3, 210e9 / 2.6), (210e9, 210e9 / 2.6)],
)
def test_a_shear_modulus_that_no_steel_has_is_not_used(stated, taken):
    material = replace(S355, shear_modulus=stated)
    assert material.usable_shear_modulus == pytest.approx(taken)
    found, plain = (
        critical_of(simple_span(IPE300, m, 6.0, 1e3))
        for m in (material, replace(S355, shear_modulus=taken))
    )
    assert found == pytest.approx(plain, rel=1e-12)


def critical_of(design):
    checks = steel_en.check_steel(design, FIGURES)
    lateral = next(c for c in checks if c.name == "lateral torsional buckling")
    return next(s.value for s in lateral.steps if s.symbol == "M_cr")


def test_the_limits_of_a_web_run_from_pure_bending_to_pure_compression():
    # EN 1993-1-1 table 5.2, sheet 1, from memory: 72/83 (bending) and 33/38/42 (compression).
    from analysis_core.checks.working import Working

    design = simple_span(IPE300, S355, 4.0, 5e3)
    squash = IPE300.area * 355e6
    crushed, _ = steel_en_section._web_limits(pressed(design, -squash), 355e6, Working())
    assert crushed == pytest.approx([33.0, 38.0, 42.0])
    little, _ = steel_en_section._web_limits(pressed(design, -2e3), 355e6, Working())
    assert little[:2] == pytest.approx([72.0, 83.0], rel=0.01)
    assert little[2] == pytest.approx(124.0, rel=0.01)
    # Half of the web's own force: alpha = 0.75, 396 / 8.75 = 45.3 and 456 / 8.75 = 52.1.
    half = 0.5 * (0.3 - 2 * (0.0107 + 0.015)) * 0.0071 * 355e6
    found, _ = steel_en_section._web_limits(pressed(design, -half), 355e6, Working())
    assert found[:2] == pytest.approx([45.26, 52.11], abs=0.01)


def test_a_column_held_all_along_is_governed_in_its_plane_with_its_factor():
    held = simple_span(IPE300, S355, 10.0, 5e3)
    held = replace(
        held, restraints=replace(held.restraints, top_continuous=True, bottom_continuous=True)
    )
    check = checks(pressed(held, -400e3))["buckling with bending"]

    # By hand, (6.61) with table B.1: slenderness about y over 10 m, curve a (h/b = 2 > 1.2).
    lam = math.sqrt(53.81e-4 * 355e6 * 100.0 / (math.pi**2 * 210e9 * 8356e-8))
    phi = 0.5 * (1 + 0.21 * (lam - 0.2) + lam**2)
    chi = 1 / (phi + math.sqrt(phi**2 - lam**2))
    n = 400e3 / (chi * 53.81e-4 * 355e6)
    k = 1 + min(lam - 0.2, 0.8) * n
    assert check.use == pytest.approx(n + k * 62.5e3 / (628.4e-6 * 355e6), rel=1e-6)
    assert steel_en_axial.interaction_factor(3, 0.5, 0.4) == pytest.approx(1 + 0.6 * 0.5 * 0.4)
    assert steel_en_axial.interaction_factor(1, 2.0, 0.4) == pytest.approx(1.32)


def plate_girder(h, b, tw, tf):
    """A welded I from plates."""
    hw = h - 2 * tf
    iy = (b * h**3 - (b - tw) * hw**3) / 12
    wpl = b * tf * (h - tf) + tw * hw**2 / 4
    iz = (2 * tf * b**3 + hw * tw**3) / 12
    return i_section(
        "PG", h, b, tw, tf, 0.0, area=2 * b * tf + hw * tw, iy=iy, iz=iz,
        it=(2 * b * tf**3 + hw * tw**3) / 3, iw=iz * (h - tf) ** 2 / 4, wpl=wpl, wel=2 * iy / h,
    )  # fmt: skip


def test_a_slender_web_buckles_in_shear_as_the_theory_of_plates_says():
    girder = plate_girder(0.84, 0.20, 0.008, 0.020)  # h_w/t_w = 100, c/t of class 3 in S355
    checks = {
        c.name: c
        for c in steel_en.check_steel(
            simple_span(girder, S355, 4.0, 300e3, continuous=True), FIGURES
        )
    }
    # tau_cr = 5.34 pi² E / (12 (1 - nu²)) (t/h)² of a long plate in shear, simply supported
    # (Timoshenko and Gere); EN 1993-1-5, Table 5.1: chi = 0.83 sqrt(tau_cr / (fy / sqrt 3)).
    elastic = 5.34 * math.pi**2 * 210e9 / (12 * 0.91) / 100**2
    slender = math.sqrt(355e6 / math.sqrt(3) / elastic)
    expected = 0.83 / slender * 355e6 / math.sqrt(3) * 0.8 * 0.008
    shear = checks["shear"]
    assert slender > 0.83
    assert shear.resistance == pytest.approx(expected, rel=0.005)
    assert "stiffeners at the supports" in shear.not_covered
    # Beside bending the same resistance counts: 300 kN/m on 4 m, 600 kN at the support.
    beside = {s.symbol: s.value for s in checks["bending with shear"].steps}
    assert beside["v"] > 0.5 or beside["M_V,Rd"] == pytest.approx(checks["bending"].resistance)
    assert shear.use == pytest.approx(600e3 / expected, rel=0.005)


@pytest.mark.parametrize(("fy", "covered"), [(460e6, True), (500e6, False), (690e6, False)])
def test_grades_above_s460_are_not_checked(fy, covered):
    strong = replace(S355, name="X", strength=(("fy", fy),))
    checks = steel_en.check_steel(simple_span(IPE300, strong, 6.0, 1e3), FIGURES)
    assert (checks[0].status == "not checked") is not covered
    assert covered or "EN 1993-1-12" in checks[0].reason


def test_a_moment_at_the_free_end_buckles_a_cantilever_over_twice_its_length():
    """Cantilever under uniform moment: M_cr = pi/(2 L) sqrt(E Iz G It) for a narrow rectangle."""
    length, x = 3.0, np.linspace(0.0, 3.0, 41)
    narrow = replace(IPE300, dimensions=tuple({**dict(IPE300.dimensions), "warping": 0.0}.items()))

    def critical(moment):
        design = replace(
            simple_span(narrow, S355, length, 1e3),
            fields=(EffectField("U1", x, moment, np.zeros(41)),),
            restraints=Restraints((0.0,), (0.0,), loose=(length,)),
        )
        return critical_of(design)

    torsion = 81e9 * narrow.torsion
    half = math.pi / (2 * length) * math.sqrt(210e9 * narrow.inertia_lateral * torsion)
    assert critical(np.full(41, -10e3)) == pytest.approx(half, rel=1e-9)
    # Loads along it, none at the tip: at least what its length carries under uniform moment.
    assert critical(-5e3 * (length - x)) == pytest.approx(2 * half, rel=1e-9)


def test_the_project_may_lengthen_unbraced_lengths_for_loads_above_the_shear_centre():
    design = simple_span(IPE300, S355, 6.0, 5e3)
    plain, high = (
        next(c for c in steel_en.check_steel(design, Figures(steel_en.FIGURES, changes))
             if c.name == "lateral torsional buckling")
        for changes in ({}, {"k_L": 1.2})
    )  # fmt: skip
    longer = next(s.value for s in high.steps if s.symbol == "L")
    assert longer == pytest.approx(7.2)
    assert high.resistance < plain.resistance


@pytest.mark.parametrize(("length", "reduced"), [(4.0, False), (15.0, True)])
def test_a_deep_box_buckles_sideways_when_it_is_long(length, reduced):
    """M_cr = pi/L sqrt(E Iz G It) of a section without warping (Timoshenko and Gere)."""
    deep = box("RHS 300x100", 0.30, 0.10, 0.008)
    check = checks(simple_span(deep, S355, length, 2e3))["lateral torsional buckling"]
    elastic = (
        1.136 * math.pi / length * math.sqrt(210e9 * deep.inertia_lateral * 81e9 * deep.torsion)
    )  # 1.136: the shape of the moments of a uniform load
    plastic = dict(deep.dimensions)["plastic_modulus"] * 355e6
    slender = math.sqrt(plastic / elastic)
    # 6.3.2.2 with curve d, and nothing up to 0.4 (6.3.2.2(4)).
    phi = 0.5 * (1 + 0.76 * (slender - 0.2) + slender**2)
    chi = 1 / (phi + math.sqrt(phi**2 - slender**2)) if reduced else 1.0
    assert (slender > 0.4) is reduced
    assert check.resistance == pytest.approx(chi * plastic, rel=2e-3)


@pytest.mark.parametrize("section", [box("SHS", 0.2, 0.2, 0.008), box("lying", 0.1, 0.2, 0.008)])
def test_square_and_lying_boxes_do_not_buckle_sideways(section):
    check = checks(simple_span(section, S355, 15.0, 1e3))["lateral torsional buckling"]
    plastic = dict(section.dimensions)["plastic_modulus"] * 355e6
    assert check.resistance == pytest.approx(plastic)


@pytest.mark.parametrize("change", [{"torsion": 0.0}, {"inertia_lateral": 0.0}, {"area": 0.0}])
@pytest.mark.parametrize("section", [IPE300, box("RHS", 0.3, 0.1, 0.008), tube("CHS", 0.3, 0.01)])
def test_properties_that_are_not_known_are_said_so(section, change):
    for found in (
        steel_en.check_steel(simple_span(replace(section, **change), S355, 6.0, 1e3), FIGURES),
        steel_aisc.check_steel(
            simple_span(replace(section, **change), S355, 6.0, 1e3), Figures(steel_aisc.FIGURES, {})
        ),
    ):
        assert [c.status for c in found] == ["not checked"]
        assert "not known" in found[0].reason
