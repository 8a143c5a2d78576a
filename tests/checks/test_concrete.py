"""Reinforcement of concrete sections, by equilibrium computed another way."""

import math

import pytest
from designs import C30, rectangle, simple_span
from scipy.optimize import brentq

from analysis_core.checks import concrete_aci, concrete_en
from analysis_core.checks.working import Figures

EN = Figures(concrete_en.FIGURES, {})
ACI = Figures(concrete_aci.FIGURES, {})
PSI = concrete_aci.PSI


@pytest.mark.parametrize("moment", [20e3, 120e3, 260e3])
def test_required_tension_reinforcement_balances_the_stress_block(moment):
    b, d, fcd, fyd = 0.3, 0.45, 20e6, 434.8e6

    def unbalance(x):
        return 0.8 * x * b * fcd * (d - 0.4 * x) - moment

    x = brentq(unbalance, 1e-6, d)
    found = concrete_en.required_reinforcement(
        moment, b=b, d=d, d2=0.05, fcd=fcd, fyd=fyd, limit=0.45, e_s=200e9
    )

    assert found.x_over_d == pytest.approx(x / d, rel=1e-9)
    assert found.tension == pytest.approx(0.8 * x * b * fcd / fyd, rel=1e-9)
    assert found.compression == 0.0


def test_beyond_the_limit_of_the_neutral_axis_compression_steel_takes_the_rest():
    b, d, d2, fcd, fyd = 0.3, 0.45, 0.05, 20e6, 434.8e6
    at_limit = 0.8 * 0.45 * (1 - 0.4 * 0.45) * b * d**2 * fcd
    below, above = (
        concrete_en.required_reinforcement(
            at_limit * k, b=b, d=d, d2=d2, fcd=fcd, fyd=fyd, limit=0.45, e_s=200e9
        )
        for k in (0.9999, 1.2)
    )

    assert below.compression == 0.0
    # Moments about the tension steel: concrete at its limit, and the compression steel.
    stress = min(fyd, 200e9 * 0.0035 * (0.45 * d - d2) / (0.45 * d))
    assert at_limit + above.compression * stress * (d - d2) == pytest.approx(1.2 * at_limit)
    # Horizontal equilibrium.
    concrete = 0.8 * 0.45 * d * b * fcd
    assert above.tension * fyd == pytest.approx(concrete + above.compression * stress)


def test_the_mean_tensile_strength_and_the_span_to_depth_ratio_are_those_of_the_tables():
    # EN 1992-1-1 table 3.1: f_ctm of C30/37 is 2.9 MPa; table 7.4N for C30/37, simple span:
    # l/d 14 at rho 1.5 %, 20 at 0.5 % (from memory).
    assert concrete_en.mean_tensile_strength(30e6) / 1e6 == pytest.approx(2.9, abs=0.05)
    assert concrete_en.span_to_depth_limit(30e6, 0.015, 1.0) == pytest.approx(14, abs=0.5)
    assert concrete_en.span_to_depth_limit(30e6, 0.005, 1.0) == pytest.approx(20, abs=0.6)


def test_checks_of_a_simple_concrete_span_name_the_reinforcement():
    design = simple_span(rectangle(0.3, 0.5), C30, 6.0, 30e3)
    found = {c.name: c for c in concrete_en.check_concrete(design, EN)}

    assert set(found) == {"sagging reinforcement", "shear", "span over depth"}
    steps = {s.symbol: s.value for s in found["sagging reinforcement"].steps}
    assert steps["A_s"] == pytest.approx(135e3 / (0.9 * 0.452 * 434.8e6), rel=0.05)


@pytest.mark.parametrize("moment", [100e3, 200e3])
def test_the_required_area_gives_back_the_moment_it_was_required_for(moment):
    values = {"b": 0.3, "d": 0.5, "fc": 4000 * PSI, "fy": 60e3 * PSI}
    area = concrete_aci.required_area(moment, **values, phi=0.9)

    assert 0.9 * concrete_aci.nominal_moment(area, **values) == pytest.approx(moment, rel=1e-12)


def test_beta_1_falls_from_4_to_8_ksi():
    # ACI 318-19, table 22.2.2.4.3.
    values = {2500: 0.85, 4000: 0.85, 6000: 0.75, 8000: 0.65, 9000: 0.65}
    for psi, beta in values.items():
        assert concrete_aci.stress_block_factor(psi * PSI) == pytest.approx(beta)


def test_the_ductility_limit_is_where_the_strain_of_the_steel_says():
    values = {"b": 0.3, "d": 0.5, "fc": 4000 * PSI, "fy": 60e3 * PSI}
    area = concrete_aci.largest_area(**values, e_s=29e6 * PSI)
    depth = area * values["fy"] / (0.85 * values["fc"] * 0.3) / 0.85

    assert 0.003 * (0.5 - depth) / depth == pytest.approx(60 / 29000 + 0.003)


def test_a_section_too_small_fails_and_says_by_how_much():
    design = simple_span(rectangle(0.2, 0.3), C30, 6.0, 60e3)
    en = concrete_en.check_concrete(design, EN)[0]
    aci = concrete_aci.check_concrete(design, ACI)[0]

    assert en.status == aci.status == "not satisfied"
    assert math.isinf(aci.use) or aci.use > 1.0
