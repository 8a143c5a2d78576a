"""Timber by EN 1995-1-1: durations, slenderness and the worked numbers of a floor joist."""

import math

import pytest
from designs import C24, rectangle, simple_span

from analysis_core.checks import timber_en
from analysis_core.checks.working import Figures

FIGURES = Figures(timber_en.FIGURES, {})


def test_a_joist_is_checked_with_the_duration_of_its_combination():
    design = simple_span(rectangle(0.06, 0.2), C24, 4.0, 1.5e3, continuous=True)
    medium, permanent = (
        timber_en.check_timber(design, FIGURES, {"U1": duration})
        for duration in ("medium", "permanent")
    )

    # By hand: f_m,d = 0.8 · 24 / 1.3 = 14.77 MPa, W = 400 cm³, M_Rd = 5.908 kN·m, M = 3.0 kN·m.
    assert medium[0].resistance == pytest.approx(5.908e3, rel=1e-3)
    assert medium[0].use == pytest.approx(3.0 / 5.908, rel=1e-3)
    assert permanent[0].use == pytest.approx(medium[0].use * 0.8 / 0.6)
    # Shear: V = 3.0 kN, V_Rd = 2/3 · 0.67 · 60 · 200 · 0.8 · 4 / 1.3 = 13.19 kN.
    assert medium[1].use == pytest.approx(3.0 / 13.19, rel=1e-3)


@pytest.mark.parametrize(
    ("slender", "factor"),
    [(0.75, 1.0), (0.7501, 0.9974), (1.4, 0.51), (1.4001, 0.5101), (2.0, 0.25)],
)
def test_the_critical_factor_on_both_sides_of_its_limits(slender, factor):
    assert timber_en.critical_factor(slender) == pytest.approx(factor, abs=3e-4)


@pytest.mark.parametrize(
    ("depth", "kind", "factor"),
    [
        (0.15, "timber", 1.0),
        (0.1, "timber", 1.0845),
        (0.03, "hardwood", 1.3),
        (0.6, "glulam", 1.0),
        (0.2, "glulam", 1.1),
        (0.3, "lvl", 1.0),
        (0.6, "lvl", 0.9013),
    ],
)
def test_shallow_sections_are_stronger_up_to_a_limit(depth, kind, factor):
    assert timber_en.size_factor(depth, kind) == pytest.approx(factor, abs=5e-5)


def test_a_slender_beam_without_restraint_loses_strength():
    free = simple_span(rectangle(0.05, 0.4), C24, 8.0, 1e3)
    held = simple_span(rectangle(0.05, 0.4), C24, 8.0, 1e3, continuous=True)

    assert (
        timber_en.check_timber(free, FIGURES, {})[0].resistance
        < timber_en.check_timber(held, FIGURES, {})[0].resistance
    )


def test_the_slenderness_is_that_of_the_theory_of_a_narrow_rectangle():
    """6.3.3: sigma_crit = pi sqrt(E I_z G I_t) / (l_ef W), with E / G = 16 and I_t = h b³/3."""
    b, h, length = 0.05, 0.4, 8.0
    design = simple_span(rectangle(b, h), C24, length, 1e3)
    (segment,) = timber_en.segments(design, design.fields[0])
    low = 2.0 / 3.0 * 11e9
    iz, it, w = h * b**3 / 12, h * b**3 / 3, b * h**2 / 6
    critical = math.pi * math.sqrt(low * iz * low / 16 * it) / ((length + 2 * h) * w)

    found = timber_en._relative_slenderness(design, segment, "timber")

    # 0.78 in the code stands for pi/4 = 0.785.
    assert found == pytest.approx(math.sqrt(24e6 / critical), rel=4e-3)
    assert found == pytest.approx(math.sqrt(24e6 / (0.78 * b**2 * low / (h * 8.8))), rel=1e-12)
