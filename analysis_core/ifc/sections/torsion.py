"""Torsion and warping constants by shape: the usual formulas, each with its source.

Exact for circles, ellipses and rectangles; thin-walled or fitted formulas elsewhere (within a
few per cent of tables); an estimate for any other solid or hollow outline.
"""

from __future__ import annotations

import math
from collections.abc import Mapping


def rectangle(width: float, depth: float) -> float:
    """Torsion constant of a solid rectangle; Saint-Venant's series (Timoshenko, art. 109)."""
    long, short = max(width, depth), min(width, depth)
    series = sum(math.tanh(n * math.pi * long / (2.0 * short)) / n**5 for n in range(1, 21, 2))
    return long * short**3 / 3.0 * (1.0 - 192.0 / math.pi**5 * short / long * series)


def ellipse(a: float, b: float) -> float:
    """Torsion constant of a solid ellipse with semi-axes a, b; exact: pi a³b³/(a² + b²)."""
    return math.pi * a**3 * b**3 / (a * a + b * b)


def hollow_rectangle(width: float, depth: float, wall: float, outer: float, inner: float) -> float:
    """Torsion constant of a rectangular tube: EN 10210-2, annex B (from memory).

    ``outer`` and ``inner`` are the corner radii.
    """
    radius = 0.5 * (outer + inner)
    perimeter = 2.0 * (width - wall + depth - wall) - 2.0 * radius * (4.0 - math.pi)
    enclosed = (width - wall) * (depth - wall) - radius * radius * (4.0 - math.pi)
    return wall**3 * perimeter / 3.0 + 4.0 * enclosed**2 * wall / perimeter


def i_section(d: Mapping[str, float]) -> float:
    """Torsion constant of a rolled I-section with equal or unequal flanges.

    Rectangles less their free ends, plus the inscribed circle at each junction:
    El Darwish and Johnston, Journal of the Structural Division ASCE 91, 1965 (from memory).
    """
    web, depth = d["web_thickness"], d["depth"]
    total = 0.0
    for flange in ("top", "bottom"):
        width, thickness = d[f"{flange}_flange_width"], d[f"{flange}_flange_thickness"]
        total += width * thickness**3 / 3.0 - 0.210 * thickness**4
        total += _t_junction(web, thickness, d[f"{flange}_fillet_radius"])
    clear = depth - d["top_flange_thickness"] - d["bottom_flange_thickness"]
    return total + clear * web**3 / 3.0


def tee(d: Mapping[str, float]) -> float:
    """Torsion constant of a T-section; source as for ``i_section``."""
    web, flange = d["web_thickness"], d["flange_thickness"]
    return (
        d["width"] * flange**3 / 3.0
        + (d["depth"] - flange) * web**3 / 3.0
        + _t_junction(web, flange, d["fillet_radius"])
        - 0.210 * flange**4
        - 0.105 * web**4
    )


def channel(d: Mapping[str, float]) -> float:
    """Torsion constant of a channel; source as for ``i_section``."""
    web, flange = d["web_thickness"], d["flange_thickness"]
    return (
        2.0 / 3.0 * d["width"] * flange**3
        + (d["depth"] - 2.0 * flange) * web**3 / 3.0
        + 2.0 * _corner_junction(web, flange, d["fillet_radius"])
        - 0.420 * flange**4
    )


def angle(d: Mapping[str, float]) -> float:
    """Torsion constant of an angle; source as for ``i_section``."""
    t, radius = d["thickness"], d["fillet_radius"]
    alpha = 0.0768 + 0.0479 * radius / t
    circle = 2.0 * (3.0 * radius + 2.0 * t - math.sqrt(2.0) * (2.0 * radius + t))
    return (d["width"] + d["depth"] - t) * t**3 / 3.0 + alpha * circle**4 - 0.210 * t**4


def thin_open(developed_length: float, thickness: float) -> float:
    """Torsion constant of an open thin-walled section: one third of length times t³."""
    return developed_length * thickness**3 / 3.0


def solid(area: float, polar: float) -> float:
    """Estimate for any solid outline: A⁴/(40 I_p) (Saint-Venant); exact within 10 % if compact."""
    return area**4 / (40.0 * polar)


def tube(outer_area: float, inner_area: float, perimeter: float, area: float) -> float:
    """Estimate for any one-celled tube: 4 A_m² t / u (R. Bredt), t = area / mean perimeter u."""
    enclosed = 0.5 * (outer_area + inner_area)
    return 4.0 * enclosed**2 * area / perimeter**2


def i_warping(d: Mapping[str, float]) -> float:
    """Warping constant of an I-section: h_s² I_top I_bottom / (I_top + I_bottom)."""
    top = d["top_flange_thickness"] * d["top_flange_width"] ** 3 / 12.0
    bottom = d["bottom_flange_thickness"] * d["bottom_flange_width"] ** 3 / 12.0
    arm = d["depth"] - 0.5 * (d["top_flange_thickness"] + d["bottom_flange_thickness"])
    return arm * arm * top * bottom / (top + bottom)


def channel_warping(d: Mapping[str, float]) -> float:
    """Warping constant of a channel, thin-walled (Roark's Formulas, table 10.2; from memory)."""
    b = d["width"] - 0.5 * d["web_thickness"]
    h = d["depth"] - d["flange_thickness"]
    tf, tw = d["flange_thickness"], d["web_thickness"]
    return h * h * b**3 * tf / 12.0 * (3.0 * b * tf + 2.0 * h * tw) / (6.0 * b * tf + h * tw)


def _t_junction(web: float, flange: float, radius: float) -> float:
    ratio = web / flange
    alpha = (
        -0.042
        + 0.2204 * ratio
        + 0.1355 * radius / flange
        - 0.0865 * radius * web / flange**2
        - 0.0725 * ratio**2
    )
    circle = ((flange + radius) ** 2 + (radius + 0.25 * web) * web) / (2.0 * radius + flange)
    return alpha * circle**4


def _corner_junction(web: float, flange: float, radius: float) -> float:
    ratio = web / flange
    alpha = (
        -0.0908
        + 0.2621 * ratio
        + 0.1231 * radius / flange
        - 0.0752 * web * radius / flange**2
        - 0.0945 * ratio**2
    )
    circle = 2.0 * (
        3.0 * radius
        + web
        + flange
        - math.sqrt(2.0 * (2.0 * radius + web) * (2.0 * radius + flange))
    )
    return alpha * circle**4
