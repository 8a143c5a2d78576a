"""Rectangular and T concrete sections by EN 1992-1-1:2004: required reinforcement.

Symbols are those of the standard; clauses are written from memory of it and marked as not
confirmed.  The resistance shown against the demand is that of the section with the largest
reinforcement allowed; what has to be put in is given in the steps.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

from analysis_core.checks.design import MemberDesign, plates, strength_of
from analysis_core.checks.working import Check, Figure, Figures, Working, not_checked
from analysis_core.results import Extreme

FIGURES: Mapping[str, Figure] = {
    "gamma_c": Figure(1.5, "EN 1992-1-1, 2.4.2.4", "concrete", national=True),
    "gamma_s": Figure(1.15, "EN 1992-1-1, 2.4.2.4", "reinforcement", national=True),
    "alpha_cc": Figure(1.0, "EN 1992-1-1, 3.1.6(1)", "long-term effects", national=True),
    "f_yk": Figure(500e6, "EN 1992-1-1, annex C", "yield strength of reinforcement, Pa"),
    "E_s": Figure(200e9, "EN 1992-1-1, 3.2.7(4)", "modulus of reinforcement, Pa"),
    "x_u_d": Figure(0.45, "EN 1992-1-1, 5.6.3(2)", "depth of the neutral axis up to C50/60",
                    national=True),
    "C_Rd_c": Figure(0.18, "EN 1992-1-1, 6.2.2(1)", "shear without links, before γ_c",
                     national=True),
    "v_min": Figure(0.035, "EN 1992-1-1, (6.3N)", "least shear strength", national=True),
    "cot_theta_max": Figure(2.5, "EN 1992-1-1, 6.2.3(2)", "flattest strut", national=True),
    "nu_1": Figure(0.6, "EN 1992-1-1, (6.6N)", "strength of cracked concrete", national=True),
    "A_s_max": Figure(0.04, "EN 1992-1-1, 9.2.1.1(3)", "most reinforcement over the area",
                      national=True),
    "cover": Figure(0.030, "EN 1992-1-1, 4.4.1", "nominal cover, m: of the project", national=True),
    "link": Figure(0.008, "project", "diameter of links, m"),
    "bar": Figure(0.020, "project", "diameter of main bars, m"),
}  # fmt: skip
_NOT_COVERED = (
    "Not covered: axial force, torsion, cracking, curtailment and anchorage, fire, creep."
)


@dataclass(frozen=True, slots=True)
class Flexure:
    """Required reinforcement for a moment: tension, compression (m²); neutral axis over depth."""

    tension: float
    compression: float
    x_over_d: float
    lever: float


def check_concrete(design: MemberDesign, figures: Figures) -> list[Check]:
    """Return required reinforcement for sagging, hogging and shear, and the span/depth check."""
    section = design.section
    fck = strength_of(design.material, "fck")
    if section.shape not in ("rectangle", "tee"):
        reason = f"A section of the shape '{section.shape or 'unknown'}' is outside this check."
        return [not_checked("concrete resistance", reason, "EN 1992-1-1")]
    if not 12e6 <= fck <= 50.5e6:
        reason = (
            f"Material '{design.material.name}' states the strength f_ck = {fck / 1e6:g} MPa; "
            f"12 to 50 MPa are covered. Give it in the job file (materials: strength: {{fck: 30 "
            f"MPa}})."
        )
        return [not_checked("concrete resistance", reason, "EN 1992-1-1, 3.1.2")]
    governing = design.governing
    checks = [
        _bending("sagging reinforcement", design, figures, fck, governing.sagging, bottom=True),
        _bending("hogging reinforcement", design, figures, fck, governing.hogging, bottom=False),
        _shear(design, figures, fck),
    ]
    found = [check for check in checks if check is not None]
    slenderness = _span_to_depth(design, figures, fck)
    return [*found, slenderness] if slenderness is not None else found


def required_reinforcement(
    moment: float,
    *,
    b: float,
    d: float,
    d2: float,
    fcd: float,
    fyd: float,
    limit: float,
    e_s: float,
) -> Flexure:
    """Return the reinforcement of a rectangular section for ``moment`` in N·m.

    Rectangular stress block 0.8 x, up to C50/60 (3.1.7(3)).  ``limit`` is the largest x/d; beyond
    it compression reinforcement at ``d2`` from the compressed edge takes the rest.
    """
    mu = moment / (b * d**2 * fcd)
    at_limit = 0.8 * limit * (1.0 - 0.4 * limit)
    if mu <= at_limit:
        omega = 1.0 - math.sqrt(1.0 - 2.0 * mu)
        return Flexure(omega * b * d * fcd / fyd, 0.0, omega / 0.8, d * (1.0 - omega / 2.0))
    rest = (mu - at_limit) * b * d**2 * fcd
    strain = 0.0035 * (limit * d - d2) / (limit * d)
    stress = min(fyd, max(e_s * strain, 0.0))
    if stress <= 0.0:
        return Flexure(math.inf, math.inf, limit, d * (1.0 - 0.4 * limit))
    compression = rest / (stress * (d - d2))
    tension = 0.8 * limit * b * d * fcd / fyd + compression * stress / fyd
    return Flexure(tension, compression, limit, d * (1.0 - 0.4 * limit))


def _bending(
    name: str, design: MemberDesign, f: Figures, fck: float, extreme: Extreme, *, bottom: bool
) -> Check | None:
    moment = extreme.value if bottom else -extreme.value
    if moment <= 0.0:
        return None
    w = Working()
    section = plates(design.section)
    h = design.section.depth
    b = _compressed_width(design, bottom)
    cover = f["cover"] + f["link"] + f["bar"] / 2.0
    d = w.step(
        "d", "{h} - {cover} - {link} - {bar}/2", h - cover, "section length", "",
        h=(h, "section length"), cover=(f["cover"], "section length"),
        link=(f["link"], "section length"), bar=(f["bar"], "section length"),
    )  # fmt: skip
    fcd = w.step(
        "f_cd", "{alpha_cc} {f_ck} / {gamma_c}", f["alpha_cc"] * fck / f["gamma_c"], "stress",
        "3.1.6(1)", alpha_cc=(f["alpha_cc"], ""), f_ck=(fck, "stress"), gamma_c=(f["gamma_c"], ""),
    )  # fmt: skip
    fyd = w.step(
        "f_yd", "{f_yk} / {gamma_s}", f["f_yk"] / f["gamma_s"], "stress", "3.2.7(2)",
        f_yk=(f["f_yk"], "stress"), gamma_s=(f["gamma_s"], ""),
    )  # fmt: skip
    w.step("μ", "{M} / ({b} {d}² {f_cd})", moment / (b * d**2 * fcd), "", "3.1.7(3)",
           M=(moment, "moment"), b=(b, "section length"), d=(d, "section length"),
           f_cd=(fcd, "stress"))  # fmt: skip
    found = required_reinforcement(
        moment, b=b, d=d, d2=cover, fcd=fcd, fyd=fyd, limit=f["x_u_d"], e_s=f["E_s"]
    )
    w.step("x/d", "", found.x_over_d, "", "5.6.3(2)", note=f"at most {f['x_u_d']:g}")
    least = _least(design, f, fck, d, section)
    w.step("A_s,min", "0.26 f_ctm/f_yk b_t d ≥ 0.0013 b_t d", least, "area", "9.2.1.1(1), (9.1N)")
    needed = w.step("A_s", "", max(found.tension, least), "area", "",
                    note="tension reinforcement required")  # fmt: skip
    if found.compression:
        w.step("A_s2", "", found.compression, "area", "", note="compression reinforcement required")
    largest = w.step(
        "A_s,max", "{k} {A_c}", f["A_s_max"] * design.section.area, "area", "9.2.1.1(3)",
        k=(f["A_s_max"], ""), A_c=(design.section.area, "area"),
    )  # fmt: skip
    return w.check(
        name, "EN 1992-1-1, 6.1, 9.2.1.1", demand=needed, resistance=largest, quantity="area",
        x=extreme.x, source=extreme.source, not_covered=_NOT_COVERED,
    )  # fmt: skip


def _compressed_width(design: MemberDesign, bottom_tension: bool) -> float:
    """A T-section counts with its web in hogging, and with its flange in sagging."""
    d = plates(design.section)
    if design.section.shape == "tee" and not bottom_tension:
        return d["web_thickness"]
    return design.section.width


def _web(design: MemberDesign) -> float:
    d = plates(design.section)
    return d["web_thickness"] if design.section.shape == "tee" else design.section.width


def mean_tensile_strength(fck: float) -> float:
    """Return f_ctm in Pa up to C50/60 (Table 3.1): 0.30 f_ck^(2/3), MPa."""
    return float(0.30e6 * (fck / 1e6) ** (2.0 / 3.0))


def _least(
    design: MemberDesign, f: Figures, fck: float, d: float, section: Mapping[str, float]
) -> float:
    width = _web(design)
    return max(0.26 * mean_tensile_strength(fck) / f["f_yk"], 0.0013) * width * d


def _shear(design: MemberDesign, f: Figures, fck: float) -> Check:
    w = Working()
    demand = abs(design.governing.shear.value)
    b, h = _web(design), design.section.depth
    d = h - f["cover"] - f["link"] - f["bar"] / 2.0
    mm = d * 1e3
    k = w.step("k", "1 + √(200 mm / {d}) ≤ 2", min(1.0 + math.sqrt(200.0 / mm), 2.0), "",
               "6.2.2(1)", d=(d, "section length"))  # fmt: skip
    rho = _least(design, f, fck, d, {}) / (b * d)
    plain = f["C_Rd_c"] / f["gamma_c"] * k * (100.0 * rho * fck / 1e6) ** (1.0 / 3.0)
    least = f["v_min"] * k**1.5 * math.sqrt(fck / 1e6)
    concrete = w.step(
        "V_Rd,c", "max(C_Rd,c k (100 ρ f_ck)^(1/3), v_min) b_w d", max(plain, least) * 1e6 * b * d,
        "force", "6.2.2(1), (6.2)", note="with the least main reinforcement",
    )  # fmt: skip
    fcd, fyd = f["alpha_cc"] * fck / f["gamma_c"], f["f_yk"] / f["gamma_s"]
    lever = 0.9 * d
    nu = f["nu_1"] * (1.0 - fck / 250e6)
    cot = _strut(demand, b * lever * nu * fcd, f["cot_theta_max"])
    w.step("cot θ", "", cot, "", "6.2.3(2)", note="as flat as the struts allow")
    most = w.step(
        "V_Rd,max", "b_w z ν_1 f_cd / (cot θ + tan θ)", b * lever * nu * fcd / (cot + 1.0 / cot),
        "force", "6.2.3(3), (6.9)",
    )  # fmt: skip
    steepest = b * lever * nu * fcd / 2.0
    minimum = w.step("A_sw/s,min", "0.08 √f_ck / f_yk b_w",
                     0.08 * math.sqrt(fck / 1e6) * 1e6 / f["f_yk"] * b, "reinforcement per length",
                     "9.2.2(5), (9.5N)", note="links per length")  # fmt: skip
    needed = max(demand / (lever * fyd * cot), minimum)
    w.step(
        "A_sw/s",
        "V_Ed / (z f_ywd cot θ)",
        needed,
        "reinforcement per length",
        "6.2.3(3), (6.8)",
        note="no links beyond the least" if demand <= concrete else "links per length required",
    )
    return w.check(
        "shear", "EN 1992-1-1, 6.2", demand=demand, resistance=max(most, steepest),
        quantity="force", x=design.governing.shear.x, source=design.governing.shear.source,
        not_covered=_NOT_COVERED,
    )  # fmt: skip


def _strut(demand: float, force: float, flattest: float) -> float:
    """The largest cot θ, from 1 to ``flattest``, for which the struts carry the shear."""
    if demand <= force / (flattest + 1.0 / flattest):
        return flattest
    ratio = 2.0 * demand / force
    if ratio >= 1.0:
        return 1.0
    steep: float = 1.0 / math.tan(0.5 * math.asin(ratio))
    return max(1.0, min(flattest, steep))


def span_to_depth_limit(fck: float, rho: float, system: float) -> float:
    """Return the limiting span/depth of 7.4.2(2), (7.16a), for ρ up to the reference ratio.

    ``fck`` in Pa; ``rho`` required tension reinforcement over b d; ``system`` is K.
    """
    root = math.sqrt(fck / 1e6)
    reference = 1e-3 * root
    if rho <= reference:
        ratio = reference / rho
        return float(system * (11.0 + 1.5 * root * ratio + 3.2 * root * (ratio - 1.0) ** 1.5))
    return system * (11.0 + 1.5 * root * reference / rho)


def _span_to_depth(design: MemberDesign, f: Figures, fck: float) -> Check | None:
    """Deemed to satisfy the deflection limit of span/250 (7.4.2)."""
    moment = (
        -design.governing.hogging.value if design.cantilever else design.governing.sagging.value
    )
    if moment <= 0.0:
        return None
    w = Working()
    cover = f["cover"] + f["link"] + f["bar"] / 2.0
    d = design.section.depth - cover
    fcd, fyd = f["alpha_cc"] * fck / f["gamma_c"], f["f_yk"] / f["gamma_s"]
    b = _compressed_width(design, not design.cantilever)
    found = required_reinforcement(
        moment, b=b, d=d, d2=cover, fcd=fcd, fyd=fyd, limit=f["x_u_d"], e_s=f["E_s"]
    )
    least = _least(design, f, fck, d, {})
    rho = w.step("ρ", "A_s / (b d)", max(found.tension, least) / (b * d), "", "7.4.2(2)")
    system = 0.4 if design.cantilever else 1.0
    words = "cantilever" if design.cantilever else "taken as simply supported, on the safe side"
    w.step("K", "", system, "", "Table 7.4N", note=words)
    limit = w.step("l/d limit", "K (11 + 1.5 √f_ck ρ0/ρ + ...)",
                   span_to_depth_limit(fck, rho, system), "", "(7.16)")  # fmt: skip
    if design.length > 7.0 and not design.cantilever:
        limit = w.step("l/d limit", "{limit} · 7 m / {l}", limit * 7.0 / design.length, "",
                       "7.4.2(2)", limit=(limit, ""), l=(design.length, "length"))  # fmt: skip
    return w.check(
        "span over depth", "EN 1992-1-1, 7.4.2", demand=design.length / d, resistance=limit,
        quantity="", not_covered="Deemed to satisfy; flanged sections by 0.8 are not covered.",
    )  # fmt: skip
