"""Rectangular and T concrete sections by ACI 318-19: required reinforcement.

Symbols are those of the code; clauses are written from memory of it and marked as not confirmed.
Square roots of strengths are taken in psi, as the code has them.
"""

from __future__ import annotations

import math
from collections.abc import Mapping

from analysis_core.checks.design import MemberDesign, plates, strength_of
from analysis_core.checks.working import Check, Figure, Figures, Working, not_checked
from analysis_core.results import Extreme

PSI = 6894.757293168361
_INCH = 0.0254

FIGURES: Mapping[str, Figure] = {
    "phi_t": Figure(0.90, "ACI 318-19, 21.2.2", "tension-controlled flexure"),
    "phi_v": Figure(0.75, "ACI 318-19, 21.2.1", "shear"),
    "f_y": Figure(60e3 * PSI, "ACI 318-19, 20.2.2", "yield strength of reinforcement, Pa"),
    "E_s": Figure(29e6 * PSI, "ACI 318-19, 20.2.2.2", "modulus of reinforcement, Pa"),
    "lambda": Figure(1.0, "ACI 318-19, 19.2.4", "lightweight concrete"),
    "cover": Figure(1.5 * _INCH, "ACI 318-19, 20.5.1", "cover, m: of the project"),
    "link": Figure(0.375 * _INCH, "project", "diameter of stirrups, m"),
    "bar": Figure(0.75 * _INCH, "project", "diameter of main bars, m"),
}
_NOT_COVERED = "Not covered: axial force, torsion, development, crack control, fire."


def check_concrete(design: MemberDesign, figures: Figures) -> list[Check]:
    """Return required reinforcement for sagging, hogging and shear."""
    section = design.section
    fc = strength_of(design.material, "fc") or strength_of(design.material, "fck")
    if section.shape not in ("rectangle", "tee"):
        reason = f"A section of the shape '{section.shape or 'unknown'}' is outside this check."
        return [not_checked("concrete strength", reason, "ACI 318-19")]
    if not 2400 * PSI <= fc <= 10_000 * PSI:
        reason = (
            f"Material '{design.material.name}' states f'c = {fc / PSI:.0f} psi; 2,500 to 10,000 "
            f"psi are covered. Give it in the job file (materials: strength: {{fc: 4 ksi}})."
        )
        return [not_checked("concrete strength", reason, "ACI 318-19, 19.2.1")]
    governing = design.governing
    checks = [
        _bending("sagging reinforcement", design, figures, fc, governing.sagging, bottom=True),
        _bending("hogging reinforcement", design, figures, fc, governing.hogging, bottom=False),
        _shear(design, figures, fc),
    ]
    return [check for check in checks if check is not None]


def stress_block_factor(fc: float) -> float:
    """Return β1 (Table 22.2.2.4.3) for f'c in Pa."""
    return min(0.85, max(0.65, 0.85 - 0.05 * (fc / PSI - 4000.0) / 1000.0))


def nominal_moment(area: float, *, b: float, d: float, fc: float, fy: float) -> float:
    """Return M_n = A_s f_y (d - a/2) in N·m of a singly reinforced rectangle."""
    a = area * fy / (0.85 * fc * b)
    return area * fy * (d - a / 2.0)


def required_area(moment: float, *, b: float, d: float, fc: float, fy: float, phi: float) -> float:
    """Return the tension reinforcement in m² for a factored moment; infinite where none does."""
    block = 0.85 * fc * b
    inside = d**2 - 2.0 * moment / (phi * block)
    if inside < 0.0:
        return math.inf
    return block * (d - math.sqrt(inside)) / fy


def largest_area(*, b: float, d: float, fc: float, fy: float, e_s: float) -> float:
    """Return the reinforcement at which ε_t = ε_ty + 0.003 (9.3.3.1), m²."""
    c = d * 0.003 / (0.003 + fy / e_s + 0.003)
    return 0.85 * fc * stress_block_factor(fc) * b * c / fy


def _bending(
    name: str, design: MemberDesign, f: Figures, fc: float, extreme: Extreme, *, bottom: bool
) -> Check | None:
    moment = extreme.value if bottom else -extreme.value
    if moment <= 0.0:
        return None
    w = Working()
    b, bw, d = _width(design, bottom), _web(design), _depth(design, f)
    w.step("d", "", d, "section length", "", note="to the centre of the bars")
    w.step("β1", "", stress_block_factor(fc), "", "Table 22.2.2.4.3")
    needed = w.step(
        "A_s", "0.85 f'c b (d - √(d² - 2 M_u / (φ 0.85 f'c b))) / f_y",
        required_area(moment, b=b, d=d, fc=fc, fy=f["f_y"], phi=f["phi_t"]), "area", "22.2, 22.3",
        note=f"φ = {f['phi_t']:g}, tension-controlled",
    )  # fmt: skip
    root = math.sqrt(fc / PSI)
    least = w.step(
        "A_s,min", "max(3 √f'c, 200) b_w d / f_y", max(3.0 * root, 200.0) * PSI * bw * d / f["f_y"],
        "area", "9.6.1.2",
    )  # fmt: skip
    largest = w.step(
        "A_s,max", "", largest_area(b=b, d=d, fc=fc, fy=f["f_y"], e_s=f["E_s"]), "area",
        "9.3.3.1", note="ε_t = ε_ty + 0.003",
    )  # fmt: skip
    return w.check(
        name, "ACI 318-19, 9.3.3, 9.6.1, 22.2", demand=max(needed, least), resistance=largest,
        quantity="area", x=extreme.x, source=extreme.source, not_covered=_NOT_COVERED,
    )  # fmt: skip


def _shear(design: MemberDesign, f: Figures, fc: float) -> Check:
    w = Working()
    b, d = _web(design), _depth(design, f)
    demand, root = abs(design.governing.shear.value), math.sqrt(fc / PSI)
    concrete = w.step(
        "V_c", "2 λ √f'c b_w d", 2.0 * f["lambda"] * root * PSI * b * d, "force",
        "Table 22.5.5.1(a)", note="with at least the least stirrups",
    )  # fmt: skip
    most = w.step(
        "φ (V_c + 8 √f'c b_w d)", "", f["phi_v"] * (concrete + 8.0 * root * PSI * b * d), "force",
        "22.5.1.2",
    )  # fmt: skip
    steel = max(demand / f["phi_v"] - concrete, 0.0)
    least = max(0.75 * root, 50.0) * PSI * b / f["f_y"]
    if demand <= f["phi_v"] * f["lambda"] * root * PSI * b * d:
        w.step("A_v/s", "", 0.0, "reinforcement per length", "9.6.3.1", note="no stirrups required")
    else:
        w.step("A_v/s", "V_s / (f_yt d) ≥ least", max(steel / (f["f_y"] * d), least),
               "reinforcement per length", "22.5.8.5.3, 9.6.3.4",
               note="stirrups per length")  # fmt: skip
    return w.check(
        "shear", "ACI 318-19, 22.5", demand=demand, resistance=most, quantity="force",
        x=design.governing.shear.x, source=design.governing.shear.source, not_covered=_NOT_COVERED,
    )  # fmt: skip


def _depth(design: MemberDesign, f: Figures) -> float:
    return design.section.depth - f["cover"] - f["link"] - f["bar"] / 2.0


def _width(design: MemberDesign, bottom_tension: bool) -> float:
    if design.section.shape == "tee" and not bottom_tension:
        return plates(design.section)["web_thickness"]
    return design.section.width


def _web(design: MemberDesign) -> float:
    if design.section.shape == "tee":
        return plates(design.section)["web_thickness"]
    return design.section.width
