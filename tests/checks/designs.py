"""Members to be checked, made by hand for the tests of checks."""

from dataclasses import replace

import numpy as np

from analysis_core.checks.design import EffectField, Governing, MemberDesign, Restraints
from analysis_core.model import Material, Section
from analysis_core.results import Extreme

S355 = Material("S355", 210e9, 81e9, 7850.0, category="steel", strength=(("fy", 355e6),))
C30 = Material("C30/37", 33e9, category="concrete", strength=(("fck", 30e6),))
C24 = Material("C24", 11e9, category="timber", strength=(("fmk", 24e6), ("fvk", 4e6)))


def i_section(name, h, b, tw, tf, r, *, area, iy, iz, it, iw, wpl, wel):
    """An I-section with tabulated properties."""
    dimensions = {
        "width": b, "depth": h, "web_thickness": tw, "flange_thickness": tf, "fillet_radius": r,
        "top_flange_width": b, "bottom_flange_width": b, "section_modulus_top": wel,
        "section_modulus_bottom": wel, "plastic_modulus": wpl, "warping": iw,
    }  # fmt: skip
    return Section(
        name, "I", area, iy, iz, torsion=it, depth=h, width=b, top=h / 2,
        dimensions=tuple(dimensions.items()),
    )  # fmt: skip


# EN 10365 dimensions; properties as tabulated by makers of sections, from memory.
IPE300 = i_section(
    "IPE 300", 0.300, 0.150, 0.0071, 0.0107, 0.015, area=53.81e-4, iy=8356e-8, iz=603.8e-8,
    it=20.12e-8, iw=125.9e-9, wpl=628.4e-6, wel=557.1e-6,
)  # fmt: skip
INCH = 0.0254
# AISC Steel Construction Manual, table 1-1, from memory.
W18X50 = i_section(
    "W18X50", 18.0 * INCH, 7.50 * INCH, 0.355 * INCH, 0.570 * INCH, 0.402 * INCH,
    area=14.7 * INCH**2, iy=800 * INCH**4, iz=40.1 * INCH**4, it=1.24 * INCH**4,
    iw=3040 * INCH**6, wpl=101 * INCH**3, wel=88.9 * INCH**3,
)  # fmt: skip


def rectangle(b, h):
    """A solid rectangle."""
    dimensions = {
        "width": b, "depth": h, "section_modulus_top": b * h**2 / 6,
        "section_modulus_bottom": b * h**2 / 6, "plastic_modulus": b * h**2 / 4,
    }  # fmt: skip
    return Section(
        "R", "rectangle", b * h, b * h**3 / 12, h * b**3 / 12, depth=h, width=b, top=h / 2,
        dimensions=tuple(dimensions.items()),
    )  # fmt: skip


def simple_span(section, material, length, load, *, held=(), continuous=False):
    """A simple span under a uniform load, held sideways at its ends and at ``held``."""
    x = np.linspace(0.0, length, 41)
    moment, shear = load * x * (length - x) / 2, load * (length / 2 - x)
    top = tuple(sorted({0.0, length, *held}))
    peak = load * length**2 / 8
    return MemberDesign(
        0, section, material, length, (EffectField("U1", x, moment, shear),),
        Governing(
            Extreme(peak, length / 2, "U1"), Extreme(0.0), Extreme(load * length / 2, 0.0, "U1")
        ),
        Restraints(top, (0.0, length), top_continuous=continuous),
    )  # fmt: skip


def box(name, h, b, t):
    """A rectangular hollow section with sharp corners."""
    area = b * h - (b - 2 * t) * (h - 2 * t)
    iy = (b * h**3 - (b - 2 * t) * (h - 2 * t) ** 3) / 12
    iz = (h * b**3 - (h - 2 * t) * (b - 2 * t) ** 3) / 12
    wpl = (b * h**2 - (b - 2 * t) * (h - 2 * t) ** 2) / 4
    torsion = 2 * t * (h - t) ** 2 * (b - t) ** 2 / (h + b - 2 * t)  # Bredt
    dimensions = {
        "width": b, "depth": h, "wall_thickness": t, "section_modulus_top": 2 * iy / h,
        "section_modulus_bottom": 2 * iy / h, "plastic_modulus": wpl,
    }  # fmt: skip
    return Section(
        name, "hollow rectangle", area, iy, iz, torsion=torsion, depth=h, width=b, top=h / 2,
        dimensions=tuple(dimensions.items()),
    )  # fmt: skip


def tube(name, diameter, t):
    """A round tube."""
    inner = diameter - 2 * t
    inertia = np.pi * (diameter**4 - inner**4) / 64
    dimensions = {
        "diameter": diameter, "wall_thickness": t, "depth": diameter, "width": diameter,
        "section_modulus_top": 2 * inertia / diameter,
        "section_modulus_bottom": 2 * inertia / diameter,
        "plastic_modulus": (diameter**3 - inner**3) / 6,
    }  # fmt: skip
    return Section(
        name, "tube", np.pi * (diameter**2 - inner**2) / 4, inertia, inertia, torsion=2 * inertia,
        depth=diameter, width=diameter, top=diameter / 2, dimensions=tuple(dimensions.items()),
    )  # fmt: skip


def tee(flange, flange_depth, web, depth, *, roll=0.0):
    """A T of concrete, its flange on top unless rolled over."""
    parts = ((flange, flange_depth, flange_depth / 2),
             (web, depth - flange_depth, (depth + flange_depth) / 2))  # fmt: skip
    area = sum(b * h for b, h, _ in parts)
    down = sum(b * h * z for b, h, z in parts) / area
    inertia = sum(b * h**3 / 12 + b * h * (z - down) ** 2 for b, h, z in parts)
    top = down if roll == 0.0 else depth - down
    dimensions = {
        "width": flange, "depth": depth, "web_thickness": web, "flange_thickness": flange_depth,
        "section_modulus_top": inertia / top, "section_modulus_bottom": inertia / (depth - top),
        "roll": roll,
    }  # fmt: skip
    return Section(
        "T", "tee", area, inertia, depth=depth, width=flange, top=top,
        dimensions=tuple(dimensions.items()),
    )  # fmt: skip


def pressed(design, force):
    """The same member with an axial force all along, tension positive."""
    fields = tuple(replace(f, axial=(force, force)) for f in design.fields)
    return replace(design, fields=fields)
