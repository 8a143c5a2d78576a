"""Units: exact factors (NIST Special Publication 811, appendix B.8) and clear refusals."""

import pytest

from analysis_core.units import display_units, parse_quantity, unit_factor


@pytest.mark.parametrize(
    ("text", "quantity", "si"),
    [
        ("12 kN/m", "line load", 12e3),
        ("30 N/mm²", "stress", 30e6),
        ("5000 kN·m/rad", "rotational stiffness", 5e6),
        ("5000 kN*m", "rotational stiffness", 5e6),
        ("12e-6 1/K", "thermal expansion", 12e-6),
        ("-15 °C", "temperature difference", -15.0),
        ("18 degF", "temperature difference", 10.0),
        ("23130 cm^4", "inertia", 2.313e-4),
    ],
)
def test_text_with_a_unit_becomes_si(text, quantity, si):
    assert parse_quantity(text, quantity) == pytest.approx(si, rel=1e-15)


# NIST SP 811 (2008), appendix B.8, digits as printed.
@pytest.mark.parametrize(
    ("unit", "printed", "digits"),
    [
        ("lbf", 4.448222, 7),
        ("kip", 4.448222e3, 7),
        ("psi", 6.894757e3, 7),
        ("psf", 4.788026e1, 7),
        ("plf", 1.459390e1, 7),
        ("pcf", 1.601846e1, 7),
        ("ft", 3.048e-1, 16),
        ("kgf", 9.80665, 16),
    ],
)
def test_factors_agree_with_the_printed_table(unit, printed, digits):
    assert unit_factor(unit)[0] == pytest.approx(printed, rel=0.6 * 10.0 ** (1 - digits))


@pytest.mark.parametrize(
    ("text", "inches"),
    [("12'-6 1/2\"", 150.5), ("12'", 144.0), ('6"', 6.0), ('3/4"', 0.75), ("-2' 3\"", -27.0)],
)
def test_lengths_may_be_feet_and_inches(text, inches):
    assert parse_quantity(text, "length") == pytest.approx(inches * 0.0254, rel=1e-15)


@pytest.mark.parametrize(
    ("text", "quantity", "message"),
    [
        (12, "force", "12 has no unit; a force is text with a unit, as in '20 kN'"),
        ("12", "force", "'12' is not a force with its unit"),
        ("12 kn/m", "line load", "'kn' in 'kn/m' is no known unit; did you mean 'kN'"),
        ("12 kN", "line load", "'12 kN' is not a line load; expected something like '12 kN/m'"),
        ("12 kg/m", "line load", "is not a line load"),
        ("1e999 kN", "force", "too large"),
        ("a'", "length", "not a length in feet and inches"),
        ("3 kN 4", "force", "'kN 4' is not a unit"),
    ],
)
def test_what_cannot_be_meant_is_refused_with_the_next_step(text, quantity, message):
    with pytest.raises(ValueError, match=message.replace("(", r"\(")):
        parse_quantity(text, quantity)


def test_display_rounds_and_never_prints_minus_zero():
    units = display_units("metric")
    assert units.text(12345.0, "moment") == "12.35 kN·m"
    assert units.text(-0.001, "moment") == "0.00 kN·m"


def test_a_replaced_unit_keeps_about_the_same_resolution():
    assert display_units("metric", {"force": "N"}).text(1234.5, "force") == "1234 N"
    assert display_units("metric", {"length": "mm"}).text(6.5, "length") == "6500 mm"


def test_a_display_unit_must_measure_its_quantity():
    with pytest.raises(ValueError, match="'kN' does not measure a moment"):
        display_units("metric", {"moment": "kN"})
