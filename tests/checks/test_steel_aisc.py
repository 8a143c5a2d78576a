"""Steel by AISC 360 against the design tables of the manual and at the limits of its branches."""

from dataclasses import replace

import pytest
from designs import INCH, S355, W18X50, simple_span

from analysis_core.checks import steel_aisc
from analysis_core.checks.working import Figures

FIGURES = Figures(steel_aisc.FIGURES, {})
KIP, FOOT = 4448.2216152605, 0.3048
KSI = 1e3 * 4.4482216152605 / INCH**2
A992 = replace(S355, name="A992", strength=(("fy", 50 * KSI),))
E = 29000 * KSI


@pytest.fixture
def shape():
    return steel_aisc.shape_of(simple_span(W18X50, A992, 6.0, 1e3))


def test_w18x50_has_the_values_of_the_manual(shape):
    # AISC Steel Construction Manual, table 3-2, Fy = 50 ksi, from memory: phi Mp 379 kip-ft,
    # Lp 5.83 ft, Lr 16.9 ft, phi Vn 192 kip (Vn/Omega 128), phi Mr 233 kip-ft.
    design = simple_span(W18X50, A992, 6.0, 1e3, continuous=True)
    flexure, shear = steel_aisc.check_steel(design, FIGURES)
    lp, lr = steel_aisc.limiting_lengths(shape, E, 50 * KSI)

    assert flexure.resistance / (KIP * FOOT) == pytest.approx(379, abs=0.5)
    assert lp / FOOT == pytest.approx(5.83, abs=0.02)
    assert lr / FOOT == pytest.approx(16.9, abs=0.1)
    assert shear.resistance / KIP == pytest.approx(192, abs=0.5)
    allowable = steel_aisc.check_steel(design, FIGURES, allowable=True)[1]
    assert allowable.resistance / KIP == pytest.approx(128, abs=0.5)


def test_strength_is_continuous_at_both_limiting_lengths(shape):
    lp, lr = steel_aisc.limiting_lengths(shape, E, 50 * KSI)

    def strength(lb):
        return steel_aisc.lateral_strength(shape, E, 50 * KSI, lb, 1.0)

    assert strength(lp * 0.9999) == pytest.approx(strength(lp * 1.0001), rel=1e-3)
    assert strength(lr * 0.9999) == pytest.approx(strength(lr * 1.0001), rel=2e-3)
    # At Lr the moment is 0.7 Fy Sx by definition: phi Mr 233 kip-ft in the table.
    assert 0.9 * strength(lr) / (KIP * FOOT) == pytest.approx(233, abs=1.0)


def test_the_moment_gradient_raises_the_strength_to_the_plastic_moment_at_most(shape):
    lb = 12 * FOOT
    plain = steel_aisc.lateral_strength(shape, E, 50 * KSI, lb, 1.0)
    steep = steel_aisc.lateral_strength(shape, E, 50 * KSI, lb, 2.27)

    assert plain < steep <= 50 * KSI * shape.zx


def test_flanges_just_beyond_compact_lose_strength(shape):
    limit = 0.38 * (E / (50 * KSI)) ** 0.5
    compact = replace(shape, tf=shape.bf / 2 / (limit * 0.999))
    beyond = replace(shape, tf=shape.bf / 2 / (limit * 1.05))

    assert steel_aisc.flange_strength(compact, E, 50 * KSI) == 50 * KSI * shape.zx
    assert steel_aisc.flange_strength(beyond, E, 50 * KSI) < 50 * KSI * shape.zx
