"""Lateral torsional buckling by EN 1993-1-1, 6.3.2, between restraints.

I-sections by 6.3.2.3, channels and hollow sections deeper than wide by the general case.
"""

from __future__ import annotations

import math

from analysis_core.checks.design import (
    MemberDesign,
    UnbracedSegment,
    gradient_operands,
    moment_gradient,
    plates,
    segments,
)
from analysis_core.checks.steel_en_section import is_welded, moduli, moment_resistance_of
from analysis_core.checks.working import Check, Figures, Working

IMPERFECTION = {"a": 0.21, "b": 0.34, "c": 0.49, "d": 0.76}  # Tables 6.1 and 6.3
_NAME = "lateral torsional buckling"
_NOT_COVERED = (
    "Loads count as acting at the shear centre; where they act above it and nothing holds them "
    "sideways, replace k_L. f of (6.58) is left out, on the safe side."
)


def check_lateral(design: MemberDesign, f: Figures, fy: float, class_: int) -> Check:
    """Return the check of the unbraced length that uses most of its resistance."""
    if _stout(design):
        words = "round and square hollow sections, and wide ones, are not susceptible"
        return _not_susceptible(design, f, fy, class_, words)
    found = [s for field in design.fields for s in segments(design, field)]
    if not found:
        words = "no flange is compressed where it is not held"
        return _not_susceptible(design, f, fy, class_, words)
    worst = max(found, key=lambda s: abs(s.largest) / _reduction(design, f, fy, class_, s, None))
    return buckling(design, f, fy, class_, worst)


def buckling(
    design: MemberDesign, f: Figures, fy: float, class_: int, segment: UnbracedSegment
) -> Check:
    """Return the check of one unbraced segment."""
    w = Working()
    length = f["k_L"] * segment.buckling_length
    words = segment.words + (f"; times k_L = {f['k_L']:g}" if f["k_L"] != 1.0 else "")
    w.step("L", "", length, "length", "", note=words)
    chi = _reduction(design, f, fy, class_, segment, w)
    plastic, elastic = moduli(design)
    modulus = plastic if class_ <= 2 else elastic
    resistance = w.step(
        "M_b,Rd", "{chi_LT} {W_y} {f_y} / {gamma_M1}", chi * modulus * fy / f["gamma_M1"],
        "moment", "6.3.2.1(3), (6.55)", chi_LT=(chi, ""), W_y=(modulus, "section modulus"),
        f_y=(fy, "stress"), gamma_M1=(f["gamma_M1"], ""),
    )  # fmt: skip
    return w.check(
        _NAME, "EN 1993-1-1, 6.3.2", demand=segment.largest, resistance=resistance,
        quantity="moment", x=segment.at, source=segment.source, not_covered=_NOT_COVERED,
    )  # fmt: skip


def _stout(design: MemberDesign) -> bool:
    """6.3.2.1(2): round and square hollow sections, and boxes bent about their weak axis."""
    section = design.section
    if section.shape == "hollow rectangle":
        return section.depth <= section.width * (1.0 + 1e-9)
    return section.shape == "tube"


def reduction_between(
    design: MemberDesign, f: Figures, fy: float, class_: int, source: str
) -> float:
    """Return the smallest χ_LT of the unbraced segments under the field of this source."""
    if _stout(design):
        return 1.0
    found = [
        _reduction(design, f, fy, class_, segment, None)
        for field in design.fields
        if field.source == source
        for segment in segments(design, field)
    ]
    return min(found, default=1.0)


def _reduction(
    design: MemberDesign,
    f: Figures,
    fy: float,
    class_: int,
    segment: UnbracedSegment,
    w: Working | None,
) -> float:
    """χ_LT of a segment, written down where there is a working to write it in."""
    section, iw = design.section, plates(design.section).get("warping", 0.0)
    e, g = design.material.elastic_modulus, design.material.usable_shear_modulus
    c1, length = moment_gradient(segment), f["k_L"] * segment.buckling_length
    critical = critical_moment(
        c1, length, e=e, g=g, iz=section.inertia_lateral, it=section.torsion, iw=iw
    )
    plastic, elastic = moduli(design)
    modulus = plastic if class_ <= 2 else elastic
    slender = math.sqrt(modulus * fy / critical)
    curve, why = buckling_curve(design)
    rolled = section.shape == "I"
    plateau, beta = (f["lambda_LT0"], f["beta"]) if rolled else (0.2, 1.0)
    ignored = section.shape == "hollow rectangle" and slender <= f["lambda_LT0"]
    chi = 1.0
    if not ignored:
        chi = reduction_factor(slender, IMPERFECTION[curve], plateau=plateau, beta=beta)
    if w is None:
        return chi
    if segment.free:
        w.step("C_1", "", c1, "", "common practice", note="a free end: none taken")
    else:
        w.step("C_1", "12.5 {M_max} / (2.5 {M_max} + 3 {M_2} + 4 {M_3} + 3 {M_4})", c1, "",
               "common practice", note="moments at the quarter points",
               **gradient_operands(segment))  # fmt: skip
    w.step(
        "M_cr", "{C_1} π² {E} {I_z} / {L}² √({I_w}/{I_z} + {L}² {G} {I_t} / (π² {E} {I_z}))",
        critical, "moment", "literature; load at the shear centre",
        C_1=(c1, ""), E=(e, "stress"), I_z=(section.inertia_lateral, "inertia"),
        L=(length, "length"), I_w=(iw, "warping"), G=(g, "stress"),
        I_t=(section.torsion, "inertia"),
    )  # fmt: skip
    w.step(
        "λ_LT", "√({W_y} {f_y} / {M_cr})", slender, "", "6.3.2.2(1)",
        W_y=(modulus, "section modulus"), f_y=(fy, "stress"), M_cr=(critical, "moment"),
    )  # fmt: skip
    w.step("α_LT", "", IMPERFECTION[curve], "", "Tables 6.3, 6.5", note=why)
    if ignored or slender <= plateau:
        most = f["lambda_LT0"] if ignored else plateau
        return w.step("χ_LT", "", chi, "", "6.3.2.2(4)", note=f"no reduction up to {most:g}")
    alpha = IMPERFECTION[curve]
    phi = w.step(
        "Φ_LT", "0.5 (1 + {α_LT} ({λ_LT} - {λ_LT,0}) + {β} {λ_LT}²)",
        0.5 * (1.0 + alpha * (slender - plateau) + beta * slender**2), "",
        "6.3.2.3(1)" if rolled else "6.3.2.2(1)", note="", α_LT=(alpha, ""), λ_LT=(slender, ""),
        β=(beta, ""), **{"λ_LT,0": (plateau, "")},
    )  # fmt: skip
    bound = " ≤ 1, ≤ 1/{λ_LT}²" if rolled else " ≤ 1"
    return w.step(
        "χ_LT", "1 / ({Φ_LT} + √({Φ_LT}² - {β} {λ_LT}²))" + bound, chi, "",
        "6.3.2.3(1), (6.57)" if rolled else "6.3.2.2(1), (6.56)",
        Φ_LT=(phi, ""), β=(beta, ""), λ_LT=(slender, ""),
    )  # fmt: skip


def buckling_curve(design: MemberDesign) -> tuple[str, str]:
    """Return the curve of lateral torsional buckling and why.

    Table 6.5 for I-sections (rolled b, c; welded c, d); Table 6.4 for channels and deep boxes (d).
    """
    if design.section.shape != "I":
        return "d", "no I-section: curve d of Table 6.4"
    d = plates(design.section)
    ratio = d["depth"] / d["width"]
    welded = is_welded(design)
    stocky, slender = ("c", "d") if welded else ("b", "c")
    curve = stocky if ratio <= 2.0 else slender
    return curve, f"{'welded' if welded else 'rolled'}, h/b = {ratio:.2f}: curve {curve}"


def critical_moment(
    c1: float, length: float, *, e: float, g: float, iz: float, it: float, iw: float
) -> float:
    """Return M_cr in N·m of a section bent about an axis of symmetry, loaded at its shear centre.

    S. P. Timoshenko and J. M. Gere, Theory of Elastic Stability, 6.2 (from memory): both ends
    held against turning about the member's axis and free to warp.
    """
    euler = math.pi**2 * e * iz / length**2
    return c1 * euler * math.sqrt(iw / iz + g * it / euler)


def reduction_factor(slenderness: float, alpha: float, *, plateau: float, beta: float) -> float:
    """Return χ of 6.3.2.3, and with a plateau of 0.2 and β = 1 that of 6.3.1.2 and 6.3.2.2."""
    if slenderness <= plateau:
        return 1.0
    phi = 0.5 * (1.0 + alpha * (slenderness - plateau) + beta * slenderness**2)
    chi = 1.0 / (phi + math.sqrt(phi**2 - beta * slenderness**2))
    return min(chi, 1.0, 1.0 / slenderness**2)


def _not_susceptible(design: MemberDesign, f: Figures, fy: float, class_: int, words: str) -> Check:
    w = Working()
    w.step("λ_LT", "", 0.0, "", "6.3.2.1(2)", note=words)
    resistance = moment_resistance_of(design, f, fy, class_, w)
    worst = max(design.governing.sagging, design.governing.hogging, key=lambda e: abs(e.value))
    return w.check(
        _NAME, "EN 1993-1-1, 6.3.2.1", demand=worst.value, resistance=resistance,
        quantity="moment", x=worst.x, source=worst.source, not_covered=f"Not needed: {words}.",
    )  # fmt: skip
