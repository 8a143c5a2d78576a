"""Rigidity along tapering members, whole and in part, either way round."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from building_makers import PINNED, STEEL, finding, member, model, node, only, slugs

from analysis_core.idealise import idealise
from analysis_core.model import Section
from analysis_core.settings import Analysis, MaterialSetting, Settings

E = 210e9


def rectangle(depth, width=0.2):
    return Section(
        f"R{depth}",
        "rectangle",
        area=depth * width,
        inertia=width * depth**3 / 12.0,
        inertia_lateral=depth * width**3 / 12.0,
        shear_area=depth * width / 1.2,
        depth=depth,
        width=width,
        dimensions=(("width", width), ("depth", depth)),
    )


def i_shape(depth, fillets=0.0):
    """An I of flange 200 x 15 and web 9 mm: B H³/12 - (B - t)(H - 2 T)³/12, and fillets."""
    sharp = (0.2 * depth**3 - 0.191 * (depth - 0.03) ** 3) / 12.0
    names = ("width", "depth", "web_thickness", "flange_thickness")
    return Section(
        f"I{depth}",
        "I",
        area=0.01,
        inertia=sharp * (1.0 + fillets),
        depth=depth,
        width=0.2,
        dimensions=tuple(zip(names, (0.2, depth, 0.009, 0.015), strict=True)),
    )


def beam_of(start, end, *, flip=False, nodes=(0.0, 6.0), settings=None):
    """A beam of 6 m that tapers from one section to another."""
    points = ((6.0, 0.0, 0.0), (0.0, 0.0, 0.0)) if flip else ((0.0, 0.0, 0.0), (6.0, 0.0, 0.0))
    beam = replace(member("B", *points, section=start), end_section=end)
    supports = [node(f"n{x}", (x, 0.0, 0.0), PINNED) for x in nodes]
    return idealise(model([beam], supports), settings or Settings())


def rigidity_at(line, x):
    """E I at a distance from the start of a line."""
    for m in line.members:
        start = line.joints[m.start].x
        for piece in m.pieces:
            if start <= x <= start + piece.length + 1e-9:
                return piece.flexural_at((x - start) / piece.length)
            start += piece.length
    raise AssertionError(x)


@pytest.mark.parametrize("nodes", [(0.0, 6.0), (0.0, 2.2, 6.0)])
def test_a_rectangle_of_linear_depth_has_its_exact_inertia_everywhere(nodes):
    line = only(beam_of(rectangle(0.3), rectangle(0.7), nodes=nodes))

    for x in (0.0, 0.5, 2.2, 3.3, 6.0):
        depth = 0.3 + 0.4 * x / 6.0
        assert rigidity_at(line, x) == pytest.approx(E * 0.2 * depth**3 / 12.0, rel=1e-12)


def test_both_sides_of_a_rectangle_may_taper():
    line = only(beam_of(rectangle(0.3, 0.2), rectangle(0.7, 0.1)))

    assert rigidity_at(line, 3.0) == pytest.approx(E * 0.15 * 0.5**3 / 12.0, rel=1e-12)


@pytest.mark.parametrize("fillets", [0.0, 0.02])
def test_an_i_shape_of_linear_depth_between_its_ends(fillets):
    found = beam_of(i_shape(0.4, fillets), i_shape(0.8, fillets))
    line = only(found)

    for x in (0.0, 2.0, 6.0):
        depth = 0.4 + 0.4 * x / 6.0
        # What fillets add is taken as linear between the ends: a few per mille of I in between.
        rel = 1e-12 if not fillets or x in (0.0, 6.0) else 4e-3
        expected = E * i_shape(depth, fillets).inertia
        assert rigidity_at(line, x) == pytest.approx(expected, rel=rel)
    assert "taper-interpolated" not in slugs(found)


def test_a_line_that_runs_against_the_drawn_direction():
    """B is drawn from right to left, with A in front drawn the other way to turn the line."""
    tapered = replace(
        member("B", (6.0, 0.0, 0.0), (2.0, 0.0, 0.0), section=rectangle(0.3)),
        end_section=rectangle(0.7),
    )
    first = member("A", (0.0, 0.0, 0.0), (2.0, 0.0, 0.0))
    last = member("C", (6.0, 0.0, 0.0), (8.0, 0.0, 0.0))
    nodes = [node(f"n{x}", (x, 0.0, 0.0), PINNED) for x in (0.0, 2.0, 6.0, 8.0)]
    line = only(idealise(model([first, tapered, last], nodes), Settings()))

    assert line.members[1].reversed_
    assert line.members[1].flexural_rigidity == pytest.approx(E * 0.2 * 0.7**3 / 12.0)
    assert rigidity_at(line, 5.0) == pytest.approx(E * 0.2 * 0.4**3 / 12.0)


def test_a_round_bar_follows_the_fourth_power():
    def bar(d):
        return Section("d", "circle", math.pi * d**2 / 4, math.pi * d**4 / 64, depth=d, width=d)

    line = only(beam_of(bar(0.2), bar(0.4)))

    assert rigidity_at(line, 3.0) == pytest.approx(E * math.pi * 0.3**4 / 64, rel=1e-12)


def test_other_shapes_are_interpolated_and_said():
    plain = replace(i_shape(0.4), shape="", dimensions=())
    found = beam_of(plain, replace(i_shape(0.8), shape="", dimensions=()))

    assert finding(found, "taper-interpolated").elements == ("B",)
    low, middle, high = (rigidity_at(only(found), x) ** (1 / 3) for x in (0.0, 3.0, 6.0))
    assert middle == pytest.approx((low + high) / 2.0)


def test_shear_rigidity_is_taken_on_request():
    section = replace(rectangle(0.4), shear_area=0.06)
    on = Settings(analysis=Analysis(shear_flexible=True))
    line = only(beam_of(section, None, settings=on))

    assert only(beam_of(section, None)).members[0].pieces[0].shear is None
    assert line.members[0].pieces[0].shear == (pytest.approx(0.06 * 81e9),)


def test_a_shear_modulus_is_assumed_from_the_kind_of_material_and_said():
    on = Settings(
        analysis=Analysis(shear_flexible=True),
        materials=(MaterialSetting("S235", elastic_modulus=200e9),),
    )
    unknown = replace(STEEL, shear_modulus=0.0)
    beam = member("B", (0.0, 0.0, 0.0), (6.0, 0.0, 0.0), material=unknown)
    nodes = [node(f"n{x}", (x, 0.0, 0.0), PINNED) for x in (0.0, 6.0)]
    found = idealise(model([beam], nodes), on)

    # G = E / (2 (1 + 0.3)) for steel.
    assert only(found).members[0].pieces[0].shear == (pytest.approx(0.004 * 200e9 / 2.6),)
    assert "assumed-shear-modulus" in slugs(found)


def test_a_shear_modulus_that_no_material_has_is_taken_as_stated_and_named():
    # A lattice modelled as one bar: its shear stiffness is far below that of its chords.
    soft = replace(STEEL, shear_modulus=STEEL.elastic_modulus / 150.0)
    beam = member("B", (0.0, 0.0, 0.0), (6.0, 0.0, 0.0), material=soft)
    nodes = [node(f"n{x}", (x, 0.0, 0.0), PINNED) for x in (0.0, 6.0)]
    found = idealise(model([beam], nodes), Settings(analysis=Analysis(shear_flexible=True)))

    expected = pytest.approx(0.004 * STEEL.elastic_modulus / 150.0)
    assert only(found).members[0].pieces[0].shear == (expected,)
    (finding,) = [f for f in found.findings if f.slug == "implausible-modulus"]
    assert "takes it as stated" in finding.message


@pytest.mark.parametrize("shear_flexible", [True, False])
def test_a_shear_modulus_that_cannot_be_true_is_not_used_and_named(shear_flexible):
    on = Settings(
        analysis=Analysis(shear_flexible=shear_flexible),
        materials=(MaterialSetting("S235", elastic_modulus=200e9),),
    )
    absurd = replace(STEEL, shear_modulus=11.2)  # ksi taken for Pa
    beam = member("B", (0.0, 0.0, 0.0), (6.0, 0.0, 0.0), material=absurd)
    nodes = [node(f"n{x}", (x, 0.0, 0.0), PINNED) for x in (0.0, 6.0)]
    found = idealise(model([beam], nodes), on)

    # G = E / (2 (1 + 0.3)) for steel, as where none is stated.
    expected = (pytest.approx(0.004 * 200e9 / 2.6),) if shear_flexible else None
    assert only(found).members[0].pieces[0].shear == expected
    assert "shear modulus of 1.12e-05 MPa" in finding(found, "implausible-modulus").message


def test_pieces_of_a_tapering_member_are_as_long_as_it():
    line = only(beam_of(rectangle(0.3), rectangle(0.7), nodes=(0.0, 1.1, 4.7, 6.0)))

    assert np.allclose([m.length for m in line.members], [1.1, 3.6, 1.3], rtol=1e-12)
