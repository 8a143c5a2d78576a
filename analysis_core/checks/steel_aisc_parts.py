"""What all checks by AISC 360 share: figures, and strength by factor or by safety factor."""

from __future__ import annotations

from collections.abc import Mapping

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
    "E": Figure(29000 * 6894757.293168361, "AISC 360, symbols", "modulus of elasticity, Pa"),
}
NOT_COVERED = "Not covered: torsion, biaxial bending, concentrated forces on the web."


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
