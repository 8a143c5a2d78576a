"""What all checks by AISC 360 share: figures, and strength by factor or by safety factor."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

from analysis_core.checks.design import MemberDesign
from analysis_core.checks.working import Figure, Figures, Working

FIGURES: Mapping[str, Figure] = {
    "phi_b": Figure(0.90, "AISC 360, F1(1)", "resistance factor for flexure"),
    "Omega_b": Figure(1.67, "AISC 360, F1(1)", "safety factor for flexure"),
    "phi_v": Figure(0.90, "AISC 360, G1", "resistance factor for shear"),
    "Omega_v": Figure(1.67, "AISC 360, G1", "safety factor for shear"),
    "phi_v_rolled": Figure(1.00, "AISC 360, G2.1(a)", "rolled I-shapes with stocky webs"),
    "Omega_v_rolled": Figure(1.50, "AISC 360, G2.1(a)", "rolled I-shapes with stocky webs"),
    "phi_c": Figure(0.90, "AISC 360, E1", "resistance factor for compression"),
    "Omega_c": Figure(1.67, "AISC 360, E1", "safety factor for compression"),
    "phi_t": Figure(0.90, "AISC 360, D2(a)", "resistance factor for tension, yielding"),
    "Omega_t": Figure(1.67, "AISC 360, D2(a)", "safety factor for tension, yielding"),
    "t_design": Figure(0.93, "AISC 360, B4.2", "design wall over nominal wall of hollow sections; "
                       "1 where the model gives design walls, or for A1085 by its name"),
    "k_L": Figure(1.0, "common practice", "on unbraced lengths, where loads act above the shear "
                  "centre and may move sideways: of the project"),
    "E": Figure(29000 * 6894757.293168361, "AISC 360, symbols", "modulus of elasticity, Pa"),
}  # fmt: skip
NOT_COVERED = (
    "Not covered: torsion, biaxial bending, concentrated forces on the web, holes in flanges, "
    "loads above the shear centre (replace k_L)."
)


def with_design_walls(design: MemberDesign, f: Figures) -> MemberDesign:
    """Return a hollow member with its design wall thickness (B4.2).

    Areas and moduli shrink as the wall does, which is a little more than they do in truth.
    """
    if design.section.shape not in ("tube", "hollow rectangle"):
        return design
    part = 1.0 if "1085" in design.material.name else f["t_design"]
    walls = ("wall_thickness", "section_modulus_top", "section_modulus_bottom", "plastic_modulus")
    dimensions = tuple(
        (name, value * part if name in walls else value)
        for name, value in design.section.dimensions
    )
    section = design.section
    changed = replace(
        section, area=part * section.area, inertia=part * section.inertia,
        inertia_lateral=part * section.inertia_lateral, torsion=part * section.torsion,
        dimensions=dimensions,
    )  # fmt: skip
    return replace(design, section=changed)


def available_strength(w: Working, f: Figures, kind: str, nominal: float, allowable: bool) -> float:
    """Return φ M_n or M_n/Ω ("b"), or the same of V_n, and write it down."""
    quantity = "moment" if kind == "b" else "force"
    symbol = "M" if kind == "b" else "V"
    if allowable:
        omega = f[f"Omega_{kind}"]
        return w.step(
            f"{symbol}_n/Ω", "{nominal} / {Omega}", nominal / omega, quantity, "B3.2",
            nominal=(nominal, quantity), Omega=(omega, ""),
        )  # fmt: skip
    phi = f[f"phi_{kind}"]
    return w.step(
        f"φ{symbol}_n", "{phi} {nominal}", phi * nominal, quantity, "B3.1",
        phi=(phi, ""), nominal=(nominal, quantity),
    )  # fmt: skip
