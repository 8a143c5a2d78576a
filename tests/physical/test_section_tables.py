"""Sections of profile entities against published tables.

European sections: EN 10365 (I, channels), EN 10056-1 (angles), EN 10210-2 (tubes); American ones:
AISC Steel Construction Manual, table 1-1 and 1-8.  Figures from memory, as printed; ``exact`` rows
agree to half a unit in the last place printed, the others as said beside them.
"""

import math

import pytest
from body_makers import Maker

from analysis_core.ifc.file_units import read_units
from analysis_core.ifc.sections.reader import read_section

CM = 100.0  # metres to centimetres
INCH = 1.0 / 0.0254


def section_of(ifc_class, scale=1.0, schema="IFC4", **measures):
    """The section of a profile whose lengths are given in mm, or in inches with scale 25.4."""
    maker = Maker(schema)
    lengths = {k: v if k.endswith("Slope") else v * scale for k, v in measures.items()}
    profile = maker.profile(ifc_class, "P", Position=maker.axes_2d(), **lengths)
    section, findings = read_section(profile, read_units(maker.file, "test")[0])
    assert not findings
    return section


def i_shape(h, b, tw, tf, r, **more):
    return {"OverallDepth": h, "OverallWidth": b, "WebThickness": tw, "FlangeThickness": tf,
            "FilletRadius": r, **more}  # fmt: skip


def channel(h, b, tw, tf, r, **more):
    return {"Depth": h, "FlangeWidth": b, "WebThickness": tw, "FlangeThickness": tf,
            "FilletRadius": r, **more}  # fmt: skip


def printed(text):
    """A printed figure and half a unit in its last place."""
    decimals = len(text.partition(".")[2])
    zeros = len(text) - len(text.rstrip("0")) if "." not in text else 0
    return float(text), 0.5 * 10.0 ** (zeros if zeros > 1 else -decimals)


# h, b, tw, tf, r in mm; A cm², I_y and I_z cm⁴, W_el and W_pl cm³, I_w in 1000 cm⁶.
EN_10365_I = {
    "IPE 100": ((100, 55, 4.1, 5.7, 7), ("10.3", "171", "15.9", "34.2", "39.4", "0.35")),
    "IPE 200": ((200, 100, 5.6, 8.5, 12), ("28.5", "1943", "142", "194", "221", "13.0")),
    "IPE 300": ((300, 150, 7.1, 10.7, 15), ("53.8", "8356", "604", "557", "628", "125.9")),
    "IPE 600": ((600, 220, 12, 19, 24), ("156.0", "92083", "3387", "3069", "3512", "2846")),
    "HE 200 A": ((190, 200, 6.5, 10, 18), ("53.8", "3692", "1336", "389", "429", "108.0")),
    "HE 200 B": ((200, 200, 9, 15, 18), ("78.1", "5696", "2003", "570", "643", "171.1")),
    "HE 300 B": ((300, 300, 11, 19, 27), ("149.1", "25166", "8563", "1678", "1869", "1688")),
}


@pytest.mark.parametrize("name", EN_10365_I)
def test_parallel_flanged_sections_agree_with_en_10365_to_the_last_digit(name):
    measures, figures = EN_10365_I[name]
    section = section_of("IfcIShapeProfileDef", **i_shape(*measures))
    d = dict(section.dimensions)

    found = (
        section.area * CM**2,
        section.inertia * CM**4,
        section.inertia_lateral * CM**4,
        d["section_modulus_top"] * CM**3,
        d["plastic_modulus"] * CM**3,
        d["warping"] * CM**6 / 1000.0,
    )
    for value, text in zip(found, figures, strict=True):
        expected, tolerance = printed(text)
        assert value == pytest.approx(expected, abs=1.01 * tolerance), text
    assert section.shape == "I"
    assert (section.depth, section.width) == pytest.approx((measures[0] / 1e3, measures[1] / 1e3))


# EN 10365, torsion constant cm⁴: the tables use the formula of El Darwish and Johnston too, in
# an older form; within 4 %.
@pytest.mark.parametrize(
    ("measures", "torsion"),
    [
        ((100, 55, 4.1, 5.7, 7), 1.20),
        ((300, 150, 7.1, 10.7, 15), 20.1),
        ((600, 220, 12, 19, 24), 165.0),
        ((200, 200, 9, 15, 18), 59.3),
    ],
)
def test_torsion_constant_of_i_sections(measures, torsion):
    section = section_of("IfcIShapeProfileDef", **i_shape(*measures))

    assert section.torsion * CM**4 == pytest.approx(torsion, rel=0.04)


# UPN and IPN: sloping inner faces (8 % and 14 %) with rounded toes.  The thickness is that at
# half (UPN) and a quarter (IPN) of the flange; tables round the toe a little differently: 0.6 %.
UPN = {
    "UPN 100": ((100, 50, 6, 8.5, 8.5), 4.5, (13.5, 206.0, 29.3), 1.55),
    "UPN 200": ((200, 75, 8.5, 11.5, 11.5), 6.0, (32.2, 1910.0, 148.0), 2.01),
    "UPN 300": ((300, 100, 10, 16, 16), 8.0, (58.8, 8030.0, 495.0), 2.70),
}


@pytest.mark.parametrize("name", UPN)
def test_channels_with_sloping_flanges(name):
    measures, toe, (area, inertia, lateral), distance = UPN[name]
    section = section_of(
        "IfcUShapeProfileDef", **channel(*measures, EdgeRadius=toe, FlangeSlope=math.atan(0.08))
    )

    assert section.area * CM**2 == pytest.approx(area, rel=0.006)
    assert section.inertia * CM**4 == pytest.approx(inertia, rel=0.006)
    assert section.inertia_lateral * CM**4 == pytest.approx(lateral, rel=0.006)
    # I_z / W_z gives the larger distance from the centroid: to the toes.
    toes = section.inertia_lateral / dict(section.dimensions)["section_modulus_lateral"]
    assert measures[1] / 10.0 - toes * CM == pytest.approx(distance, abs=0.006)
    assert section.inertia_product == pytest.approx(0.0, abs=1e-12)


def test_a_channel_with_parallel_flanges():
    # UPE 200, EN 10365: 29.0 cm², 1909 cm⁴, 187 cm⁴, I_t 8.89 cm⁴.
    section = section_of("IfcUShapeProfileDef", **channel(200, 80, 6, 11, 13))

    assert section.area * CM**2 == pytest.approx(29.0, abs=0.05)
    assert section.inertia * CM**4 == pytest.approx(1909.0, abs=0.5)
    assert section.inertia_lateral * CM**4 == pytest.approx(187.0, abs=0.5)
    assert section.torsion * CM**4 == pytest.approx(8.89, rel=0.01)


def test_an_i_section_with_sloping_flanges():
    # IPN 200 and 300, EN 10365: 33.4 cm², 2140, 117; 69.0 cm², 9800, 451 cm⁴.
    for measures, toe, figures in (
        ((200, 90, 7.5, 11.3, 7.5), 4.5, (33.4, 2140.0, 117.0)),
        ((300, 125, 10.8, 16.2, 10.8), 6.5, (69.0, 9800.0, 451.0)),
    ):
        section = section_of(
            "IfcIShapeProfileDef",
            **i_shape(*measures, FlangeEdgeRadius=toe, FlangeSlope=math.atan(0.14)),
        )
        found = (section.area * CM**2, section.inertia * CM**4, section.inertia_lateral * CM**4)
        assert found == pytest.approx(figures, rel=0.006)


# EN 10056-1: h, b, t, r1, r2; A, I_y, I_z, e_z (to the back of the long leg).
ANGLES = {
    "L 100x100x10": ((100, 100, 10, 12, 6), "19.2", "177", "177", "2.82"),
    "L 150x100x10": ((150, 100, 10, 12, 6), "24.2", "553", "198", "2.34"),
    "L 100x50x8": ((100, 50, 8, 8, 4), "11.4", "116", "19.7", "1.13"),
}


@pytest.mark.parametrize("name", ANGLES)
def test_angles_agree_with_en_10056_to_the_last_digit(name):
    (h, b, t, r1, r2), area, inertia, lateral, distance = ANGLES[name]
    section = section_of(
        "IfcLShapeProfileDef", Depth=h, Width=b, Thickness=t, FilletRadius=r1, EdgeRadius=r2
    )

    for value, text in (
        (section.area * CM**2, area),
        (section.inertia * CM**4, inertia),
        (section.inertia_lateral * CM**4, lateral),
    ):
        expected, tolerance = printed(text)
        assert value == pytest.approx(expected, abs=1.01 * tolerance)
    toes = section.inertia_lateral / dict(section.dimensions)["section_modulus_lateral"]
    assert b / 10.0 - toes * CM == pytest.approx(float(distance), abs=0.005)
    # The legs point to +x and +y from the corner: the product of inertia is negative.
    assert section.inertia_product < 0.0


def test_principal_inertias_of_an_angle():
    # L 100x100x10: I_u 280, I_v 73.0 cm⁴ (EN 10056-1).
    section = section_of(
        "IfcLShapeProfileDef", Depth=100, Width=100, Thickness=10, FilletRadius=12, EdgeRadius=6
    )
    d = dict(section.dimensions)

    both = [d["inertia_major"] * CM**4, d["inertia_minor"] * CM**4]
    assert both == pytest.approx([280.0, 73.0], abs=0.5)


def test_tubes_agree_with_en_10210():
    # Hot finished: outer radius 1.5 t, inner 1.0 t.  A, I, W_el, W_pl, I_t.
    def box(h, b, t):
        return section_of(
            "IfcRectangleHollowProfileDef",
            XDim=b,
            YDim=h,
            WallThickness=t,
            OuterFilletRadius=1.5 * t,
            InnerFilletRadius=t,
        )

    def pipe(d, t):
        return section_of("IfcCircleHollowProfileDef", Radius=d / 2.0, WallThickness=t)

    for section, figures in (
        (box(100, 100, 6.3), ("23.2", "336", "67.1", "80.9", "534")),
        (box(200, 100, 8), ("44.8", "2234", "223", "282", "1804")),
        (pipe(114.3, 5), ("17.2", "257", "45.0", "59.8", "514")),
        (pipe(168.3, 6.3), ("32.1", "1053", "125", "165", "2107")),
    ):
        d = dict(section.dimensions)
        found = (
            section.area * CM**2,
            section.inertia * CM**4,
            d["section_modulus_top"] * CM**3,
            d["plastic_modulus"] * CM**3,
            section.torsion * CM**4,
        )
        for value, text in zip(found, figures, strict=True):
            expected, tolerance = printed(text)
            assert value == pytest.approx(expected, abs=1.01 * tolerance), text


# AISC tables compute areas with fillets of their own: within 0.6 % of ours.
# d, bf, tw, tf, fillet (k_des - tf) in inches; A, I_x, I_y, S_x, Z_x, J.
AISC_W = {
    "W8x18": ((8.14, 5.25, 0.230, 0.330, 0.300), (5.26, 61.9, 7.97, 15.2, 17.0, 0.172)),
    "W12x26": ((12.2, 6.49, 0.230, 0.380, 0.300), (7.65, 204.0, 17.3, 33.4, 37.2, 0.300)),
    "W14x90": ((14.0, 14.5, 0.440, 0.710, 0.600), (26.5, 999.0, 362.0, 143.0, 157.0, 4.06)),
    "W18x50": ((18.0, 7.50, 0.355, 0.570, 0.402), (14.7, 800.0, 40.1, 88.9, 101.0, 1.24)),
}


@pytest.mark.parametrize("name", AISC_W)
def test_american_wide_flange_sections(name):
    measures, figures = AISC_W[name]
    section = section_of("IfcIShapeProfileDef", scale=25.4, **i_shape(*measures))
    d = dict(section.dimensions)

    found = (
        section.area * INCH**2,
        section.inertia * INCH**4,
        section.inertia_lateral * INCH**4,
        d["section_modulus_top"] * INCH**3,
        d["plastic_modulus"] * INCH**3,
        section.torsion * INCH**4,
    )
    assert found == pytest.approx(figures, rel=0.007)


def test_an_american_tee():
    # WT8x25: d 8.13, bf 7.07, tw 0.380, tf 0.630; A 7.37, I_x 42.3, I_y 18.6, y 1.89, J 0.760.
    section = section_of(
        "IfcTShapeProfileDef",
        scale=25.4,
        Depth=8.13,
        FlangeWidth=7.07,
        WebThickness=0.380,
        FlangeThickness=0.630,
        FilletRadius=0.400,
    )

    found = (section.area * INCH**2, section.inertia * INCH**4, section.inertia_lateral * INCH**4)
    assert found == pytest.approx((7.37, 42.3, 18.6), rel=0.002)
    assert section.top * INCH == pytest.approx(1.89, abs=0.005)
    assert section.torsion * INCH**4 == pytest.approx(0.760, rel=0.01)


def test_the_shear_area_of_an_i_section_is_about_its_web():
    # Common practice: web thickness times the distance of the flange centres, within 5 %.
    section = section_of("IfcIShapeProfileDef", **i_shape(300, 150, 7.1, 10.7, 15))

    assert section.shear_area * CM**2 == pytest.approx(0.71 * (30.0 - 1.07), rel=0.05)


def test_a_thin_round_tube_resists_shear_with_half_its_area():
    section = section_of("IfcCircleHollowProfileDef", Radius=100.0, WallThickness=1.0)

    assert section.shear_area == pytest.approx(0.5 * section.area, rel=0.001)


def test_torsion_of_a_square_bar():
    # Timoshenko and Goodier, table of k_1: 0.1406 a⁴ for the square, 0.229 a b³ for 2 to 1.
    square = section_of("IfcRectangleProfileDef", XDim=100.0, YDim=100.0)
    double = section_of("IfcRectangleProfileDef", XDim=100.0, YDim=200.0)

    assert square.torsion / 0.1**4 == pytest.approx(0.1406, abs=5e-5)
    assert double.torsion / (0.2 * 0.1**3) == pytest.approx(0.229, abs=5e-4)


def test_a_zed_counts_its_flange_from_the_outer_face_of_the_web():
    # Z 100 of DIN 1027: h 100, b 55, s 6.5, t 8, r 8 and 4; 14.5 cm², 222 and 72.5 cm⁴.
    section = section_of(
        "IfcZShapeProfileDef",
        Depth=100,
        FlangeWidth=55,
        WebThickness=6.5,
        FlangeThickness=8,
        FilletRadius=8,
        EdgeRadius=4,
    )

    found = (section.area * CM**2, section.inertia * CM**4, section.inertia_lateral * CM**4)
    assert found == pytest.approx((14.5, 222.0, 72.5), rel=0.005)
