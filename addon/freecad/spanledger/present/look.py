"""Colours and line widths, one palette per theme.

Every pair that must be told apart also differs in shape, side, hatching or text.  Contrast of
text and lines against the ground is at least 4.5 to 1 (WCAG 2.1, success criterion 1.4.3); a test
checks it.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

Rgb = tuple[int, int, int]


@dataclass(frozen=True, slots=True)
class Palette:
    """Colours by role, 0 to 255."""

    name: str
    colours: Mapping[str, Rgb]

    def __getitem__(self, role: str) -> Rgb:
        return self.colours[role]

    def parts(self, role: str) -> tuple[float, float, float]:
        """Return a colour with components from 0 to 1, as the 3D view has them."""
        red, green, blue = self.colours[role]
        return red / 255.0, green / 255.0, blue / 255.0


LIGHT = Palette(
    "light",
    {
        "ground": (252, 251, 247),
        "band": (243, 240, 231),
        "ink": (38, 42, 46),
        "faint": (104, 106, 102),
        "rule": (205, 200, 186),
        "line": (24, 62, 84),
        "support": (84, 60, 28),
        "action": (150, 52, 22),
        "sagging": (0, 104, 112),
        "hogging": (150, 36, 96),
        "shear": (122, 82, 0),
        "deflection": (54, 72, 156),
        "before": (104, 106, 102),
        "chosen": (184, 72, 0),
        "good": (28, 104, 52),
        "attention": (134, 84, 0),
        "bad": (168, 28, 28),
    },
)

DARK = Palette(
    "dark",
    {
        "ground": (31, 34, 38),
        "band": (40, 44, 49),
        "ink": (233, 231, 224),
        "faint": (158, 160, 156),
        "rule": (74, 78, 84),
        "line": (150, 200, 226),
        "support": (222, 190, 140),
        "action": (248, 156, 120),
        "sagging": (86, 206, 206),
        "hogging": (238, 142, 192),
        "shear": (232, 186, 84),
        "deflection": (162, 176, 248),
        "before": (158, 160, 156),
        "chosen": (255, 170, 92),
        "good": (124, 206, 146),
        "attention": (236, 190, 96),
        "bad": (250, 136, 130),
    },
)

# The 3D view keeps its own ground, white or a dark gradient, whatever the theme: its colours lie
# in the middle, and its lines have a pale casing.
VIEW = Palette(
    "view",
    {
        **LIGHT.colours,
        "support": (126, 88, 34),
        "faint": (122, 126, 130),
        "sagging": (0, 152, 156),
        "hogging": (208, 66, 138),
        "shear": (186, 132, 0),
        "deflection": (92, 116, 220),
        "chosen": (232, 96, 0),
    },
)


def palette_for(window_ground: Rgb) -> Palette:
    """Return the palette that suits a window whose ground has this colour."""
    return LIGHT if luminance(window_ground) > 0.18 else DARK


def luminance(colour: Rgb) -> float:
    """Return the relative luminance of an sRGB colour, 0 to 1 (WCAG 2.1, definitions)."""
    linear = [
        c / 12.92 if c <= 0.03928 else ((c + 0.055) / 1.055) ** 2.4
        for c in (part / 255.0 for part in colour)
    ]
    return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]


def contrast(one: Rgb, other: Rgb) -> float:
    """Return the contrast ratio of two colours, 1 to 21 (WCAG 2.1, definitions)."""
    high, low = sorted((luminance(one), luminance(other)), reverse=True)
    return (high + 0.05) / (low + 0.05)
