"""Steel by EN 1993-1-1 against published resistances and at the limits of its branches."""

import math
from dataclasses import replace

import pytest
from designs import IPE300, S355, rectangle, simple_span

from analysis_core.checks import steel_en, steel_en_lateral, steel_en_section
from analysis_core.checks.design import UnbracedSegment, moment_gradient
from analysis_core.checks.working import Figures

FIGURES = Figures(steel_en.FIGURES, {})


def checks(design):
    return {check.name: check for check in steel_en.check_steel(design, FIGURES)}


def test_resistances_of_ipe_300_in_s355_are_those_of_published_tables():
    # Tables of section resistances to EN 1993-1-1, from memory: M_pl,Rd 223 kN·m, V_pl,Rd 526 kN.
    found = checks(simple_span(IPE300, S355, 6.0, 20e3, continuous=True))

    assert found["bending"].resistance == pytest.approx(223e3, abs=0.5e3)
    assert found["shear"].resistance == pytest.approx(526e3, abs=0.5e3)
    assert found["bending"].use == pytest.approx(90e3 / 223.08e3, rel=1e-4)


def test_a_long_unrestrained_span_buckles_and_a_held_one_does_not():
    free = checks(simple_span(IPE300, S355, 6.0, 20e3))["lateral torsional buckling"]
    held = checks(simple_span(IPE300, S355, 6.0, 20e3, continuous=True))
    close = checks(simple_span(IPE300, S355, 6.0, 20e3, held=(1, 2, 3, 4, 5)))

    assert held["lateral torsional buckling"].resistance == pytest.approx(223.08e3, rel=1e-4)
    assert free.resistance < close["lateral torsional buckling"].resistance
    # By hand from the clauses: M_cr with C1 = 1.136, curve b, beta 0.75, plateau 0.4.
    euler = math.pi**2 * 210e9 * 603.8e-8 / 36.0
    critical = 1.1363 * euler * math.sqrt(125.9e-9 / 603.8e-8 + 81e9 * 20.12e-8 / euler)
    slender = math.sqrt(628.4e-6 * 355e6 / critical)
    phi = 0.5 * (1 + 0.34 * (slender - 0.4) + 0.75 * slender**2)
    chi = min(1 / (phi + math.sqrt(phi**2 - 0.75 * slender**2)), 1 / slender**2)
    assert free.resistance == pytest.approx(chi * 628.4e-6 * 355e6, rel=1e-3)


@pytest.mark.parametrize(("share", "reduced"), [(0.4999, False), (0.5001, True)])
def test_shear_reduces_the_moment_from_one_half_of_its_resistance_on(share, reduced):
    design = simple_span(IPE300, S355, 6.0, 20e3)
    full = steel_en_section.reduced_moment(design, FIGURES, 355e6, 1, 0.0)
    found = steel_en_section.reduced_moment(design, FIGURES, 355e6, 1, share)

    assert (found < full) is reduced
    assert steel_en_section.reduced_moment(design, FIGURES, 355e6, 1, 1.0) == 0.0


@pytest.mark.parametrize(
    ("ratio", "class_"), [(8.99, 1), (9.01, 2), (9.99, 2), (10.01, 3), (13.99, 3), (14.01, 4)]
)
def test_flanges_change_class_on_both_sides_of_each_limit(ratio, class_):
    epsilon = math.sqrt(235 / 355)
    outstand = (0.150 - 0.0071 - 0.030) / 2
    dimensions = {**dict(IPE300.dimensions), "flange_thickness": outstand / (ratio * epsilon)}
    section = replace(IPE300, dimensions=tuple(dimensions.items()))

    assert steel_en_section.classify(simple_span(section, S355, 6.0, 1e3), 355e6)[0] == class_


@pytest.mark.parametrize(("slender", "chi"), [(0.4, 1.0), (0.39, 1.0)])
def test_there_is_no_reduction_up_to_the_plateau(slender, chi):
    assert steel_en_lateral.reduction_factor(slender, 0.34, plateau=0.4, beta=0.75) == chi
    assert steel_en_lateral.reduction_factor(0.5, 0.34, plateau=0.4, beta=0.75) < 1.0


def test_the_moment_factor_is_one_for_uniform_moment_and_1_14_for_a_uniform_load():
    # AISC 360 commentary, F1: 1.0, 1.14 (simple span, uniform load), 2.27 (full reversal).
    def factor(*moments, free=False):
        largest = max(moments, key=abs)
        return moment_gradient(
            UnbracedSegment(0.0, 1.0, "top", largest, 0.0, moments, "U1", free=free)
        )

    assert factor(1, 1, 1, 1, 1) == pytest.approx(1.0)
    assert factor(0, 0.75, 1.0, 0.75, 0) == pytest.approx(1.14, abs=0.005)
    assert factor(1, 0.5, 0, -0.5, -1) == pytest.approx(2.27, abs=0.005)
    assert factor(0, 0.1, 0.3, 0.6, 1, free=True) == 1.0


def test_what_is_outside_is_not_checked_and_never_passes():
    no_strength = replace(S355, strength=())
    for design in (
        simple_span(rectangle(0.1, 0.2), S355, 6.0, 1e3),
        simple_span(IPE300, no_strength, 6.0, 1e3),
    ):
        (only,) = steel_en.check_steel(design, FIGURES)
        assert only.status == "not checked"
        assert only.reason


def test_the_project_may_replace_a_national_figure_but_not_invent_one():
    design = simple_span(IPE300, S355, 6.0, 20e3, continuous=True)
    replaced = Figures(steel_en.FIGURES, {"gamma_M0": 1.1})

    found = {c.name: c for c in steel_en.check_steel(design, replaced)}

    assert found["bending"].resistance == pytest.approx(223.08e3 / 1.1, rel=1e-4)
    with pytest.raises(KeyError, match="gamma_M9"):
        Figures(steel_en.FIGURES, {"gamma_M9": 1.0})
