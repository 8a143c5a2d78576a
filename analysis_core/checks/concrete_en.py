"""Rectangular and T concrete sections by EN 1992-1-1:2004: required reinforcement.

Symbols are those of the standard; clauses are written from memory of it and marked as not
confirmed.  The resistance shown against the demand is that of the section with the largest
reinforcement allowed; what has to be put in is given in the steps.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

from analysis_core.checks.concrete_parts import ConcreteShape, bar_depth, outside, shape_of
from analysis_core.checks.design import MemberDesign, strength_of
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
    "Not covered: torsion, cracking, curtailment and anchorage, the tension that shear adds "
    "(6.2.3(7)), fire, creep."
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
    fck = strength_of(design.material, "fck")
    limit = 0.1 * design.section.area * figures["alpha_cc"] * fck / figures["gamma_c"]
    if reason := outside(design, limit):
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
    flange: tuple[float, float] | None = None,
) -> Flexure:
    """Return the reinforcement of a rectangle, or of a T with its flange compressed, for a moment.

    ``moment`` in N·m; rectangular stress block 0.8 x, up to C50/60 (3.1.7(3)).  ``b`` is the width
    of the web, ``flange`` width and depth of the flange.  ``limit`` is the largest x/d; beyond it
    compression reinforcement at ``d2`` from the compressed edge takes the rest.
    """
    wide, deep = flange or (b, 0.0)
    if wide > b:
        whole = wide * deep * fcd * (d - deep / 2.0)
        if moment <= whole or 1.25 * deep > limit * d:  # the block stays within the flange
            return required_reinforcement(
                moment, b=wide, d=d, d2=d2, fcd=fcd, fyd=fyd, limit=limit, e_s=e_s
            )
        sides = (wide - b) * deep * fcd
        web = required_reinforcement(
            moment - sides * (d - deep / 2.0), b=b, d=d, d2=d2, fcd=fcd, fyd=fyd, limit=limit,
            e_s=e_s,
        )  # fmt: skip
        tension = web.tension + sides / fyd
        return Flexure(tension, web.compression, web.x_over_d, moment / (tension * fyd))
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


def effective_flange(shape: ConcreteShape, length: float) -> float:
    """Return the effective width of a flange (5.3.2.1(3)), m, with l_0 = 0.7 of the span."""
    side, zero = (shape.flange - shape.web) / 2.0, 0.7 * length
    return shape.web + 2.0 * min(0.2 * side + 0.1 * zero, 0.2 * zero, side)


def _bending(
    name: str, design: MemberDesign, f: Figures, fck: float, extreme: Extreme, *, bottom: bool
) -> Check | None:
    moment = extreme.value if bottom else -extreme.value
    if moment <= 0.0:
        return None
    w, shape = Working(), shape_of(design)
    h = shape.depth
    b, flange = shape.web, _flange(design, shape, top=bottom)
    cover = bar_depth(f)
    d = w.step(
        "d", "{h} - {c_nom} - {d_link} - {d_bar}/2", h - cover, "section length", "",
        h=(h, "section length"), c_nom=(f["cover"], "section length"),
        d_link=(f["link"], "section length"), d_bar=(f["bar"], "section length"),
    )  # fmt: skip
    fcd = w.step(
        "f_cd", "{alpha_cc} {f_ck} / {gamma_c}", f["alpha_cc"] * fck / f["gamma_c"], "stress",
        "3.1.6(1)", alpha_cc=(f["alpha_cc"], ""), f_ck=(fck, "stress"), gamma_c=(f["gamma_c"], ""),
    )  # fmt: skip
    fyd = w.step(
        "f_yd", "{f_yk} / {gamma_s}", f["f_yk"] / f["gamma_s"], "stress", "3.2.7(2)",
        f_yk=(f["f_yk"], "stress"), gamma_s=(f["gamma_s"], ""),
    )  # fmt: skip
    width = flange[0] if flange else b
    if flange:
        w.step("b_eff", "", width, "section length", "5.3.2.1(3)",
               note=f"as modelled {1e3 * shape.flange:.0f} mm, l_0 = 0.7 l")  # fmt: skip
    w.step("μ", "{M_Ed} / ({b} {d}² {f_cd})", moment / (width * d**2 * fcd), "", "3.1.7(3)",
           M_Ed=(moment, "moment"), b=(width, "section length"), d=(d, "section length"),
           f_cd=(fcd, "stress"))  # fmt: skip
    found = required_reinforcement(
        moment, b=b, d=d, d2=cover, fcd=fcd, fyd=fyd, limit=f["x_u_d"], e_s=f["E_s"],
        flange=flange,
    )  # fmt: skip
    if flange and math.isfinite(found.tension) and 0.8 * found.x_over_d * d > flange[1]:
        w.step("h_f", "", flange[1], "section length", "", note="the web is compressed as well")
    w.step("x/d", "", found.x_over_d, "", "5.6.3(2)", note=f"at most {f['x_u_d']:g}")
    least = _least(design, f, fck, d, bottom=bottom)
    w.step("A_s,min", "0.26 f_ctm/f_yk b_t d ≥ 0.0013 b_t d", least, "area", "9.2.1.1(1), (9.1N)")
    needed = w.step("A_s", "", max(found.tension, least), "area", "6.1",
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


def _flange(design: MemberDesign, shape: ConcreteShape, *, top: bool) -> tuple[float, float] | None:
    """Effective width and depth of the flange where it is compressed; None where it is not."""
    wide, deep = shape.compressed_flange(top=top)
    if wide <= shape.web:
        return None
    return effective_flange(shape, design.span or design.length), deep


def mean_tensile_strength(fck: float) -> float:
    """Return f_ctm in Pa up to C50/60 (Table 3.1): 0.30 f_ck^(2/3), MPa."""
    return float(0.30e6 * (fck / 1e6) ** (2.0 / 3.0))


def _least(design: MemberDesign, f: Figures, fck: float, d: float, *, bottom: bool) -> float:
    """9.2.1.1(1), with the mean width of the tension zone of the uncracked section."""
    section = design.section
    zone = section.depth - section.top if bottom else section.top
    width = shape_of(design).tension_width(bottom=bottom, zone=zone)
    return max(0.26 * mean_tensile_strength(fck) / f["f_yk"], 0.0013) * width * d


def _shear(design: MemberDesign, f: Figures, fck: float) -> Check:
    w = Working()
    demand = abs(design.governing.shear.value)
    b, d = shape_of(design).web, design.section.depth - bar_depth(f)
    mm = d * 1e3
    k = w.step("k", "1 + √(200 mm / {d}) ≤ 2", min(1.0 + math.sqrt(200.0 / mm), 2.0), "",
               "6.2.2(1)", d=(d, "section length"))  # fmt: skip
    least_bars = min(_least(design, f, fck, d, bottom=side) for side in (True, False))
    rho = min(least_bars / (b * d), 0.02)
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
    w.step("V_Rd,max(θ)", "b_w z ν_1 f_cd / (cot θ + tan θ)",
           b * lever * nu * fcd / (cot + 1.0 / cot), "force", "6.2.3(3), (6.9)")  # fmt: skip
    steepest = w.step("V_Rd,max", "b_w z ν_1 f_cd / 2", b * lever * nu * fcd / 2.0, "force",
                      "6.2.3(3), (6.9)", note="θ = 45°, the most that struts carry")  # fmt: skip
    minimum = w.step("A_sw/s,min", "0.08 √f_ck / f_yk b_w",
                     0.08 * math.sqrt(fck / 1e6) * 1e6 / f["f_yk"] * b, "reinforcement per length",
                     "9.2.2(5), (9.5N)", note="links per length")  # fmt: skip
    needed = minimum
    if demand > concrete:
        needed = max(demand / (lever * fyd * cot), minimum)
    words = "V_Rd,c suffices: the least links" if demand <= concrete else "links per length"
    w.step("A_sw/s", "V_Ed / (z f_ywd cot θ) ≥ A_sw/s,min", needed, "reinforcement per length",
           "6.2.3(3), (6.8)", note=words)  # fmt: skip
    return w.check(
        "shear", "EN 1992-1-1, 6.2", demand=demand, resistance=steepest,
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
    w, shape = Working(), shape_of(design)
    span = design.span or design.length
    d = design.section.depth - bar_depth(f)
    fcd, fyd = f["alpha_cc"] * fck / f["gamma_c"], f["f_yk"] / f["gamma_s"]
    flange = _flange(design, shape, top=not design.cantilever)
    found = required_reinforcement(
        moment, b=shape.web, d=d, d2=bar_depth(f), fcd=fcd, fyd=fyd, limit=f["x_u_d"],
        e_s=f["E_s"], flange=flange,
    )  # fmt: skip
    width = flange[0] if flange else shape.web
    least = _least(design, f, fck, d, bottom=not design.cantilever)
    rho = w.step("ρ", "A_s / (b d)", max(found.tension, least) / (width * d), "", "7.4.2(2)")
    if not math.isfinite(rho):
        return None  # bending says so
    system, words = structural_system(design)
    w.step("K", "", system, "", "Table 7.4N", note=words)
    w.step("ρ_0", "10⁻³ √f_ck", 1e-3 * math.sqrt(fck / 1e6), "", "7.4.2(2)")
    limit = w.step("(l/d)_0", "K (11 + 1.5 √f_ck ρ_0/ρ + …)",
                   span_to_depth_limit(fck, rho, system), "", "(7.16)",
                   note="without compression reinforcement")  # fmt: skip
    if f["f_yk"] != 500e6:
        limit = w.step("(l/d)_1", "{l} · 500 MPa / {f_yk}", limit * 500e6 / f["f_yk"], "",
                       "(7.17)", l=(limit, ""), f_yk=(f["f_yk"], "stress"))  # fmt: skip
    if width > 3.0 * shape.web:
        limit = w.step("(l/d)_2", "0.8 {l}", 0.8 * limit, "", "7.4.2(2)", l=(limit, ""),
                       note="flange wider than three webs")  # fmt: skip
    if span > 7.0 and not design.cantilever:
        limit = w.step("(l/d)_3", "{limit} · 7 m / {l}", limit * 7.0 / span, "", "7.4.2(2)",
                       limit=(limit, ""), l=(span, "length"))  # fmt: skip
    return w.check(
        "span over depth", "EN 1992-1-1, 7.4.2", demand=span / d, resistance=limit, quantity="",
        not_covered="Deemed to satisfy span/250 and span/500 after construction.",
    )  # fmt: skip


def structural_system(design: MemberDesign) -> tuple[float, str]:
    """Return K of Table 7.4N and what it stands for."""
    if design.cantilever:
        return 0.4, "cantilever"
    return {
        0: (1.0, "simply supported"),
        1: (1.3, "end span: one end goes on or is held"),
        2: (1.5, "inner span: both ends go on or are held"),
    }[design.continuous_ends]
