"""Colours can be read; nothing is told by colour alone."""

import pytest

from freecad.spanledger.present.look import DARK, LIGHT, contrast, palette_for

INKS = [role for role in LIGHT.colours if role not in ("ground", "band", "rule")]


def test_contrast_is_that_of_the_standard():
    # WCAG 2.1: black on white is 21 to 1; #777777 on white is 4.48 to 1 (common knowledge).
    assert contrast((0, 0, 0), (255, 255, 255)) == pytest.approx(21.0)
    assert contrast((0x77, 0x77, 0x77), (255, 255, 255)) == pytest.approx(4.48, abs=0.005)


@pytest.mark.parametrize("palette", [LIGHT, DARK], ids=lambda p: p.name)
@pytest.mark.parametrize("role", INKS)
def test_every_ink_is_readable_on_both_grounds(palette, role):
    # WCAG 2.1, success criterion 1.4.3: at least 4.5 to 1 for text.
    assert contrast(palette[role], palette["ground"]) >= 4.5
    assert contrast(palette[role], palette["band"]) >= 4.5


def test_both_themes_have_the_same_roles():
    assert set(LIGHT.colours) == set(DARK.colours)


def test_the_palette_follows_the_window():
    assert palette_for((239, 239, 239)) is LIGHT
    assert palette_for((45, 45, 48)) is DARK
