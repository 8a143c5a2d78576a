"""T-sections of concrete, shear, least reinforcement and span over depth, each a second way."""

import math
from dataclasses import replace

import numpy as np
import pytest
from designs import C30, pressed, rectangle, simple_span, tee
from scipy.optimize import brentq

from analysis_core.checks import concrete_aci, concrete_en
from analysis_core.checks.concrete_parts import shape_of
from analysis_core.checks.design import Redistribution
from analysis_core.checks.working import Figures
from analysis_core.results import Extreme

EN = Figures(concrete_en.FIGURES, {})
ACI = Figures(concrete_aci.FIGURES, {})
PSI = concrete_aci.PSI
T = {"flange": 1.0, "flange_depth": 0.12, "web": 0.3}


def strips(depth, *, flange, flange_depth, web, count=200_000):
    """Area and first moment about the top of the compressed part of a T, by summation."""
    z = (np.arange(count) + 0.5) * depth / count
    width = np.where(z < flange_depth, flange, web)
    return float(width.mean() * depth), float((width * z).mean() * depth)


@pytest.mark.parametrize("moment", [200e3, 700e3, 1000e3])
def test_the_reinforcement_of_a_t_balances_its_stress_block(moment):
    d, fcd, fyd = 0.5, 17e6, 434.8e6

    def resisted(depth):
        area, first = strips(depth, **T)
        return fcd * (area * d - first)

    depth = brentq(lambda s: resisted(s) - moment, 1e-4, 0.45)
    found = concrete_en.required_reinforcement(
        moment, b=0.3, d=d, d2=0.05, fcd=fcd, fyd=fyd, limit=0.6, e_s=200e9, flange=(1.0, 0.12)
    )

    assert (0.8 * found.x_over_d * d) == pytest.approx(depth, rel=1e-4)
    assert found.tension == pytest.approx(fcd * strips(depth, **T)[0] / fyd, rel=1e-4)
    assert found.compression == 0.0
    block = concrete_aci.required_area(
        moment, b=0.3, d=d, fc=fcd / 0.85, fy=fyd, phi=1.0, flange=(1.0, 0.12)
    )
    assert block == pytest.approx(found.tension, rel=1e-9)  # the same block under another name


def test_the_most_reinforcement_of_a_t_counts_its_flange():
    values = {"b": 0.3, "d": 0.5, "fc": 4000 * PSI, "fy": 60e3 * PSI, "e_s": 29e6 * PSI}
    depth = 0.85 * 0.5 * 0.003 / (0.006 + 60 / 29000)
    area = strips(depth, **T)[0]

    found = concrete_aci.largest_area(**values, flange=(1.0, 0.12))

    assert found == pytest.approx(0.85 * 4000 / 60e3 * area, rel=1e-4)


def test_a_flange_counts_only_where_it_is_compressed():
    on_top = simple_span(tee(1.0, 0.12, 0.3, 0.5), C30, 6.0, 30e3)
    below = simple_span(tee(1.0, 0.12, 0.3, 0.5, roll=math.pi), C30, 6.0, 30e3)
    plain = simple_span(rectangle(0.3, 0.5), C30, 6.0, 30e3)

    def needed(design):
        (check,) = [c for c in concrete_en.check_concrete(design, EN) if "sagging" in c.name]
        return next(s.value for s in check.steps if s.symbol == "A_s")

    assert shape_of(on_top).flange_on_top
    assert not shape_of(below).flange_on_top
    assert needed(on_top) < needed(plain)
    assert needed(below) == pytest.approx(needed(plain), rel=1e-9)


def test_a_flange_in_tension_needs_more_least_reinforcement():
    # 9.2.1.1: b_t is the mean width of the tension zone, from the centroid outwards.
    section = tee(1.0, 0.12, 0.3, 0.5)
    inside = (1.0 * 0.12 + 0.3 * (section.top - 0.12)) / section.top
    assert shape_of(simple_span(section, C30, 6.0, 1e3)).tension_width(
        bottom=False, zone=section.top
    ) == pytest.approx(inside)


def test_only_the_effective_width_of_a_flange_counts():
    wide = shape_of(simple_span(tee(3.0, 0.12, 0.3, 0.5), C30, 6.0, 1e3))
    # EN: sides 1.35, l0 = 4.2: 0.2 · 1.35 + 0.42 = 0.69 <= 0.84; b = 0.3 + 1.38.
    assert concrete_en.effective_flange(wide, 6.0) == pytest.approx(1.68)
    # ACI: the least of 8 · 0.12 = 0.96, 6/8 = 0.75 and 1.35.
    assert concrete_aci.effective_flange(wide, 6.0) == pytest.approx(1.8)


def test_shear_of_a_slab_strip_by_hand():
    # EN 1992-1-1, 6.2.2 by hand: d = 452 mm, k = 1.665, rho = 0.151 %, C30.
    design = simple_span(rectangle(0.3, 0.5), C30, 6.0, 10e3)
    check = next(c for c in concrete_en.check_concrete(design, EN) if c.name == "shear")
    steps = {s.symbol: s.value for s in check.steps}
    k = 1 + math.sqrt(200 / 452)
    rho = 0.26 * 0.3 * 30 ** (2 / 3) / 500
    by_rho = 0.12 * k * (100 * rho * 30) ** (1 / 3)
    least = 0.035 * k**1.5 * math.sqrt(30)
    assert steps["V_Rd,c"] == pytest.approx(max(by_rho, least) * 300 * 452, rel=1e-6)
    # Below it the least links do: 0.08 sqrt(30) / 500 · 300 mm²/mm.
    assert check.demand < steps["V_Rd,c"]
    assert steps["A_sw/s"] == pytest.approx(0.08 * math.sqrt(30) / 500 * 0.3, rel=1e-9)


@pytest.mark.parametrize("load", [40e3, 150e3, 210e3])
def test_links_carry_the_shear_at_the_angle_that_the_struts_allow(load):
    design = simple_span(rectangle(0.3, 0.5), C30, 6.0, load)
    check = next(c for c in concrete_en.check_concrete(design, EN) if c.name == "shear")
    steps = {s.symbol: s.value for s in check.steps}
    demand, z, fcd = load * 3.0, 0.9 * 0.452, 20e6
    nu = 0.6 * (1 - 30 / 250)

    def struts(cot):
        return 0.3 * z * nu * fcd / (cot + 1 / cot)

    cot = 2.5 if struts(2.5) >= demand else brentq(lambda c: struts(c) - demand, 1.0, 2.5)
    assert steps["cot θ"] == pytest.approx(cot, rel=1e-6)
    assert steps["A_sw/s"] == pytest.approx(demand / (z * 500e6 / 1.15 * cot), rel=1e-6)


def test_no_stirrups_only_where_both_limits_allow_it():
    """9.6.3.1 with 22.5.5.1(c): the size effect makes deep beams weaker than the threshold."""
    values = {"b": 0.3, "fc": 4000 * PSI, "light": 1.0}
    with_ = concrete_aci.concrete_shear(d=0.3, rho=None, **values)
    assert with_ == pytest.approx(2 * math.sqrt(4000) * PSI * 0.3 * 0.3)
    deep = 0.9
    size = math.sqrt(2 / (1 + deep / 0.0254 / 10))
    without = concrete_aci.concrete_shear(d=deep, rho=0.0033, **values)
    assert without == pytest.approx(
        8 * size * 0.0033 ** (1 / 3) * math.sqrt(4000) * PSI * 0.3 * deep
    )
    assert without < concrete_aci.concrete_shear(d=deep, rho=None, **values) / 2


@pytest.mark.parametrize(
    ("ends", "cantilever", "factor", "depth"),
    [(0, False, 1.0, 16), (1, False, 1.3, 18.5), (2, False, 1.5, 21), (0, True, 0.4, 8)],
)
def test_span_over_depth_follows_the_structural_system(ends, cantilever, factor, depth):
    # EN 1992-1-1 table 7.4N and ACI 318-19 table 9.3.1.1, from memory.
    design = replace(
        simple_span(rectangle(0.3, 0.5), C30, 6.0, 20e3), continuous_ends=ends,
        cantilever=cantilever,
    )  # fmt: skip
    assert concrete_en.structural_system(design)[0] == factor
    aci = next(c for c in concrete_aci.check_concrete(design, ACI) if c.name == "span over depth")
    assert aci.resistance == pytest.approx(depth)  # grade 60: the factor 0.4 + fy/100 ksi is 1
    assert aci.use == pytest.approx(6.0 / 0.5 / depth)


def test_axial_force_and_odd_concrete_are_not_checked():
    design = simple_span(rectangle(0.3, 0.5), C30, 6.0, 20e3)
    light = replace(design, material=replace(C30, name="LC30/33"))
    for outside in (pressed(design, 50e3), pressed(design, -500e3), light):
        for found in (
            concrete_en.check_concrete(outside, EN), concrete_aci.check_concrete(outside, ACI)
        ):  # fmt: skip
            assert [c.status for c in found] == ["not checked"]
    little = concrete_en.check_concrete(pressed(design, -100e3), EN)
    assert [c.status for c in little] == [c.status for c in concrete_en.check_concrete(design, EN)]


def test_the_least_reinforcement_is_that_of_the_clause():
    # 9.2.1.1(1): C30, f_ctm = 0.30 · 30^(2/3) = 2.896 MPa; 0.26 · 2.896 / 500 = 0.1506 %.
    design = simple_span(rectangle(0.3, 0.5), C30, 6.0, 0.5e3)
    check = next(c for c in concrete_en.check_concrete(design, EN) if "sagging" in c.name)
    steps = {s.symbol: s.value for s in check.steps}
    assert steps["A_s,min"] == pytest.approx(0.001506 * 0.3 * 0.452, rel=1e-3)
    assert steps["A_s"] == steps["A_s,min"]
    aci = next(c for c in concrete_aci.check_concrete(design, ACI) if "sagging" in c.name)
    # 9.6.1.2: f'c = 4351 psi, 3 sqrt(f'c) = 197.9 < 200 psi; grade 60: 200/60000.
    depth = 0.5 - (1.5 + 0.375 + 0.375) * 0.0254
    least = next(s.value for s in aci.steps if s.symbol == "A_s,min")
    assert least == pytest.approx(200 / 60000 * 0.3 * depth, rel=1e-9)


@pytest.mark.parametrize(("span", "part"), [(6.9, 1.0), (7.1, 7.0 / 7.1), (10.0, 0.7)])
def test_long_spans_and_wide_flanges_lower_the_span_over_depth(span, part):
    def limit(section):
        load = 10e3 * (6.0 / span) ** 2  # the same moment, so the same reinforcement
        design = simple_span(section, C30, span, load)
        check = next(c for c in concrete_en.check_concrete(design, EN) if "depth" in c.name)
        steps = {s.symbol: s.value for s in check.steps}
        return check.resistance, steps["(l/d)_0"]

    found, plain = limit(rectangle(0.3, 0.5))
    assert found == pytest.approx(part * plain)
    found, plain = limit(tee(1.2, 0.12, 0.3, 0.5))  # b / b_w = 4 > 3
    assert found == pytest.approx(0.8 * part * plain)
    found, plain = limit(tee(0.85, 0.12, 0.3, 0.5))  # 2.8
    assert found == pytest.approx(part * plain)


@pytest.mark.parametrize(("strain", "flange"), [
    (0.0, None), (0.0075, None), (0.0, (0.8, 0.10)), (0.015, (0.8, 0.10)),
])  # fmt: skip
def test_bars_in_compression_by_compatibility_of_strains(strain, flange):
    """The reinforcement found, put into a section whose neutral axis is solved for anew."""
    b, d, d2, fc, fy, e_s = 0.3, 0.44, 0.06, 4000 * PSI, 60e3 * PSI, 29e6 * PSI
    most = concrete_aci.largest_area(b=b, d=d, fc=fc, fy=fy, e_s=e_s, flange=flange, strain=strain)
    moment = 1.4 * 0.9 * most * fy * 0.8 * d  # beyond what tension reinforcement alone carries
    found = concrete_aci.required_reinforcement(
        moment, b=b, d=d, d2=d2, fc=fc, fy=fy, phi=0.9, e_s=e_s, flange=flange, strain=strain
    )
    wide, deep = flange or (b, d)

    def forces(c):
        a = 0.85 * c
        concrete = 0.85 * fc * (wide * min(a, deep) + b * max(a - deep, 0.0))
        arm = (wide * min(a, deep) ** 2 + b * max(a * a - deep * deep, 0.0)) / 2 * 0.85 * fc
        upper = min(fy, max(-fy, e_s * 0.003 * (c - d2) / c)) - 0.85 * fc
        lower = min(fy, e_s * 0.003 * (d - c) / c)
        axial = concrete + found.compression * upper - found.tension * lower
        return axial, found.tension * lower * d - arm - found.compression * upper * d2

    c = brentq(lambda c: forces(c)[0], d2, d)

    assert found.compression > 0.0
    assert 0.9 * forces(c)[1] == pytest.approx(moment, rel=1e-6)
    assert 0.003 * (d - c) / c == pytest.approx(max(60 / 29000 + 0.003, strain), rel=1e-6)


@pytest.mark.parametrize(("moment", "compressed"), [(0.999, False), (1.001, True)])
def test_bars_in_compression_begin_where_the_strain_of_the_tension_bars_ends(moment, compressed):
    values = {"b": 0.3, "d": 0.44, "fc": 4000 * PSI, "fy": 60e3 * PSI}
    most = concrete_aci.largest_area(**values, e_s=29e6 * PSI)
    limit = 0.9 * concrete_aci.nominal_moment(most, **values)
    found = concrete_aci.required_reinforcement(
        moment * limit, **values, d2=0.06, phi=0.9, e_s=29e6 * PSI
    )
    assert (found.compression > 0.0) is compressed


@pytest.mark.parametrize(("steel", "rule", "spacing"), [
    (0.99, "d/2", 0.22), (1.01, "d/4", 0.11),
])  # fmt: skip
def test_stirrups_stand_closer_where_they_carry_much(steel, rule, spacing):
    limit = 4 * math.sqrt(4000) * PSI * 0.3 * 0.44
    found = concrete_aci.stirrup_spacing(steel * limit, b=0.3, d=0.44, fc=4000 * PSI)
    assert found[0].startswith(rule)
    assert found[1] == pytest.approx(spacing)


def shifted(design, fraction, **more):
    figures = {
        "redistribution.k1": 0.44, "redistribution.k2": 1.25, "redistribution.k5": 0.7,
        "redistribution.k6": 0.8, "redistribution.per_strain": 10.0, "redistribution.most": 0.2,
        "redistribution.least_strain": 0.0075,
    }  # fmt: skip
    return replace(design, redistribution=Redistribution(fraction, figures, **more))


def hogging(section, moment):
    """A member whose top is in tension at one end."""
    base = simple_span(section, C30, 6.0, 1.0)
    extreme = Extreme(-moment, 0.0, "U1")
    return replace(base, governing=replace(base.governing, hogging=extreme))


@pytest.mark.parametrize("fraction", [0.1, 0.2, 0.3])
def test_redistribution_by_en_1992_keeps_the_neutral_axis_high(fraction):
    """5.5(4): δ ≥ 0.44 + 1.25 x_u/d; beyond that bars in compression take the rest."""
    design = shifted(hogging(rectangle(0.3, 0.5), 260e3), fraction, ductility="B")
    found = {c.name: c for c in concrete_en.check_concrete(design, EN)}
    steps = {s.symbol: s.value for s in found["hogging reinforcement"].steps}
    d, fcd, fyd = 0.452, 20e6, 500e6 / 1.15

    assert steps["x/d"] <= (1 - fraction - 0.44) / 1.25 + 1e-12
    assert found["redistribution"].status == "satisfied"

    # Equilibrium of the section as reinforced, solved anew.
    def unbalanced(x):
        strain = 0.0035 * (x - 0.048) / x
        upper = steps.get("A_s2", 0.0) * min(fyd, max(-fyd, 200e9 * strain))
        return 0.8 * x * 0.3 * fcd + upper - steps["A_s"] * fyd

    x = brentq(unbalanced, 1e-3, d)
    strain = 0.0035 * (x - 0.048) / x
    upper = steps.get("A_s2", 0.0) * min(fyd, max(-fyd, 200e9 * strain))
    moment = 0.8 * x * 0.3 * fcd * (d - 0.4 * x) + upper * (d - 0.048)
    assert x / d == pytest.approx(steps["x/d"], rel=1e-6)
    assert moment == pytest.approx(260e3, rel=1e-6)


@pytest.mark.parametrize(("fraction", "class_", "status"), [
    (0.19, "", "satisfied"), (0.21, "", "not satisfied"), (0.21, "B", "satisfied"),
    (0.31, "C", "not satisfied"),
])  # fmt: skip
def test_redistribution_ends_with_the_ductility_of_the_bars(fraction, class_, status):
    design = shifted(hogging(rectangle(0.3, 0.5), 60e3), fraction, ductility=class_)
    found = {c.name: c for c in concrete_en.check_concrete(design, EN)}
    assert found["redistribution"].status == status


@pytest.mark.parametrize(("fraction", "strain", "status"), [
    (0.05, 0.0075, "satisfied"), (0.15, 0.015, "satisfied"), (0.21, 0.021, "not satisfied"),
])  # fmt: skip
def test_redistribution_by_aci_keeps_the_strain_it_needs(fraction, strain, status):
    """6.6.5: ε_t of at least 0.0075, and 1000 ε_t percent, at most 20 %."""
    design = shifted(hogging(rectangle(0.3, 0.5), 200e3), fraction)
    found = {c.name: c for c in concrete_aci.check_concrete(design, ACI)}
    steps = {s.symbol: s.value for s in found["hogging reinforcement"].steps}
    assert steps["ε_t"] == pytest.approx(strain)
    assert found["redistribution"].status == status
    assert "redistribution" not in {
        c.name for c in concrete_aci.check_concrete(hogging(rectangle(0.3, 0.5), 200e3), ACI)
    }
