"""Rectangular and T concrete sections by EN 1992-1-1:2004: required reinforcement.

Symbols are those of the standard; clauses are written from memory of it and marked as not
confirmed.  The resistance shown against the demand is that of the section with the largest
reinforcement allowed; what has to be put in is given in the steps.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

from analysis_core.checks.concrete_parts import (
    ConcreteShape,
    bar_depth,
    compressed_flange,
    outside,
    shape_of,
)
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
    "s_l_max": Figure(0.75, "EN 1992-1-1, 9.2.2(6)", "spacing of links over d", national=True),
    "A_s_max": Figure(0.04, "EN 1992-1-1, 9.2.1.1(3)", "most reinforcement over the area",
                      national=True),
    "cover": Figure(0.030, "EN 1992-1-1, 4.4.1", "nominal cover, m: of the project", national=True),
    "link": Figure(0.008, "project", "diameter of links, m"),
    "bar": Figure(0.020, "project", "diameter of main bars, m"),
}  # fmt: skip
_NOT_COVERED = (
    "Not covered: torsion, cracking, curtailment and anchorage, the tension that shear adds "
    "(6.2.3(7)), partial fixity at supports taken as simple (9.2.1.2(1)), bars in a second layer, "
    "fire, creep."
)
_OF_FLANGES = " Nor shear between web and flanges (6.2.4)."


@dataclass(frozen=True, slots=True)
class Flexure:
    """Required reinforcement for a moment: tension, compression (m²); neutral axis over depth.

    ``lever`` m; ``within``: the moment that needs no reinforcement in compression, N·m, where more
    acts; ``stress`` of that reinforcement, Pa.
    """

    tension: float
    compression: float
    x_over_d: float
    lever: float
    within: float = 0.0
    stress: float = 0.0


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
    more = _redistribution(design, figures, fck, found), _span_to_depth(design, figures, fck)
    return [*found, *(check for check in more if check is not None)]


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
        return Flexure(
            tension, web.compression, web.x_over_d, moment / (tension * fyd),
            web.within + sides * (d - deep / 2.0), web.stress,
        )  # fmt: skip
    mu = moment / (b * d**2 * fcd)
    limit = max(limit, 0.0)
    at_limit = 0.8 * limit * (1.0 - 0.4 * limit)
    if mu <= at_limit:
        omega = 1.0 - math.sqrt(1.0 - 2.0 * mu)
        return Flexure(omega * b * d * fcd / fyd, 0.0, omega / 0.8, d * (1.0 - omega / 2.0))
    rest = (mu - at_limit) * b * d**2 * fcd
    strain = 0.0035 * (limit * d - d2) / (limit * d) if limit else 0.0
    stress = min(fyd, max(e_s * strain, 0.0))
    if stress <= 0.0 or d <= d2:
        return Flexure(math.inf, math.inf, limit, d * (1.0 - 0.4 * limit))
    compression = rest / (stress * (d - d2))
    tension = 0.8 * limit * b * d * fcd / fyd + compression * stress / fyd
    lever, within = d * (1.0 - 0.4 * limit), at_limit * b * d**2 * fcd
    return Flexure(tension, compression, limit, lever, within, stress)


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
    b, flange = shape.web, compressed_flange(design, shape, effective_flange, top=bottom)
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
    limit, words = neutral_axis_limit(design, f, bottom=bottom)
    found = required_reinforcement(
        moment, b=b, d=d, d2=cover, fcd=fcd, fyd=fyd, limit=limit, e_s=f["E_s"], flange=flange
    )
    _flexure_steps(w, moment, found, width, d, fcd, fyd, cover, flange, limit, words)
    least = _least(design, f, fck, d, bottom=bottom)
    tensile = mean_tensile_strength(fck)
    wide = least / d / max(0.26 * tensile / f["f_yk"], 0.0013)
    w.step("A_s,min", "0.26 {f_ctm} / {f_yk} {b_t} {d} ≥ 0.0013 b_t d", least, "area",
           "9.2.1.1(1), (9.1N)", note="b_t the mean width of the tension zone",
           f_ctm=(tensile, "stress"), f_yk=(f["f_yk"], "stress"), b_t=(wide, "section length"),
           d=(d, "section length"))  # fmt: skip
    needed = w.step("A_s", "", max(found.tension, least), "area", "",
                    note="tension reinforcement to be put in: the larger")  # fmt: skip
    largest = w.step(
        "A_s,max", "{k} {A_c}", f["A_s_max"] * design.section.area, "area", "9.2.1.1(3)",
        k=(f["A_s_max"], ""), A_c=(design.section.area, "area"),
    )  # fmt: skip
    return w.check(
        name, "EN 1992-1-1, 6.1, 9.2.1.1", demand=needed, resistance=largest, quantity="area",
        x=extreme.x, source=extreme.source,
        not_covered=_NOT_COVERED + (_OF_FLANGES if flange else ""),
    )  # fmt: skip


def neutral_axis_limit(design: MemberDesign, f: Figures, *, bottom: bool) -> tuple[float, str]:
    """Return the largest x/d and where it comes from: 5.6.3(2), and 5.5(4) after redistribution."""
    shift = design.redistribution
    delta = shift.delta(bottom=bottom) if shift is not None else 1.0
    if shift is None or delta >= 1.0 or shift.figure("k2") <= 0.0:
        return f["x_u_d"], f"at most {f['x_u_d']:g}, 5.6.3(2)"
    allowed = (delta - shift.figure("k1")) / shift.figure("k2")
    return min(f["x_u_d"], allowed), (
        f"at most {min(f['x_u_d'], allowed):.3f}: (δ - k_1)/k_2 with δ = {delta:.2f}, 5.5(4)"
    )


def _flexure_steps(
    w: Working,
    moment: float,
    found: Flexure,
    width: float,
    d: float,
    fcd: float,
    fyd: float,
    d2: float,
    flange: tuple[float, float] | None,
    limit: float,
    words: str,
) -> None:
    """Write down how the reinforcement follows from the moment."""
    w.step("μ", "{M_Ed} / ({b} {d}² {f_cd})", moment / (width * d**2 * fcd), "", "3.1.7(3)",
           M_Ed=(moment, "moment"), b=(width, "section length"), d=(d, "section length"),
           f_cd=(fcd, "stress"))  # fmt: skip
    if not math.isfinite(found.tension):
        w.step("x/d", "", limit, "", "", note=f"{words}: no reinforcement suffices")
        return
    in_web = flange is not None and 0.8 * found.x_over_d * d > flange[1]
    if in_web and flange is not None:
        w.step("h_f", "", flange[1], "section length", "", note="the web is compressed as well: "
               "the sides of the flange take b_eff - b_w over h_f, the web the rest")  # fmt: skip
        w.step("x/d", "", found.x_over_d, "", "3.1.7(3)", note=words)
    else:
        if found.compression:
            w.step("x/d", "", found.x_over_d, "", "3.1.7(3)", note=f"{words}: reached")
        else:
            w.step("x/d", "(1 - √(1 - 2 {μ})) / 0.8", found.x_over_d, "", "3.1.7(3)", note=words,
                   μ=(moment / (width * d**2 * fcd), ""))  # fmt: skip
    if not found.compression:
        w.step("z", "" if in_web else "{d} (1 - 0.4 {x/d})", found.lever, "section length", "",
               note="", d=(d, "section length"), **{"x/d": (found.x_over_d, "")})  # fmt: skip
        w.step("A_s,req", "{M_Ed} / ({z} {f_yd})", found.tension, "area", "6.1",
               M_Ed=(moment, "moment"), z=(found.lever, "section length"),
               f_yd=(fyd, "stress"))  # fmt: skip
        return
    w.step("M_lim", "0.8 ξ (1 - 0.4 ξ) b d² f_cd", found.within, "moment", "3.1.7(3)",
           note=f"ξ = {limit:.3f}, the largest x/d"
           + (", and the flange" if in_web else ""))  # fmt: skip
    w.step("σ_s2", "E_s 0.0035 (x - d_2)/x ≤ f_yd", found.stress, "stress", "6.1",
           note="in the compressed bars")  # fmt: skip
    w.step("A_s2", "({M_Ed} - {M_lim}) / ({σ_s2} ({d} - {d_2}))", found.compression, "area", "6.1",
           note="compression reinforcement required", M_Ed=(moment, "moment"),
           M_lim=(found.within, "moment"), σ_s2=(found.stress, "stress"),
           d=(d, "section length"), d_2=(d2, "section length"))  # fmt: skip
    concrete = found.tension * fyd - found.compression * found.stress
    w.step("A_s,req", "({F_c} + {A_s2} {σ_s2}) / {f_yd}", found.tension, "area", "6.1",
           note="F_c the force in the concrete at the largest x/d", F_c=(concrete, "force"),
           A_s2=(found.compression, "area"), σ_s2=(found.stress, "stress"),
           f_yd=(fyd, "stress"))  # fmt: skip


def _redistribution(
    design: MemberDesign, f: Figures, fck: float, made: list[Check]
) -> Check | None:
    """5.5(4): δ ≥ k_1 + k_2 x_u/d, and at least k_5 or k_6 by the class of the reinforcement."""
    shift = design.redistribution
    if shift is None or shift.fraction <= 0.0:
        return None
    if not shift.figure("k2"):
        reason = "The rule set has no limits of 5.5(4) for redistribution."
        return not_checked("redistribution", reason, "EN 1992-1-1, 5.5(4)")
    delta = shift.delta(bottom=False)
    hogging = next((c for c in made if c.name.startswith("hogging")), None)
    ratio = next((s.value for s in hogging.steps if s.symbol == "x/d"), 0.0) if hogging else 0.0
    w = Working()
    w.step("δ", "", delta, "", "5.5(4)", note="redistributed over elastic support moment")
    axis = w.step(
        "δ_x", "{k_1} + {k_2} {x/d}", shift.figure("k1") + shift.figure("k2") * ratio, "",
        "5.5(4), (5.10a)", note="", k_1=(shift.figure("k1"), ""), k_2=(shift.figure("k2"), ""),
        **{"x/d": (ratio, "")},
    )  # fmt: skip
    name = "k5" if shift.ductility in ("B", "C") else "k6"
    words = f"class {shift.ductility}" if shift.ductility else "class A, as none is stated"
    least = w.step("δ_min", "", shift.figure(name), "", "5.5(4)",
                   note=f"{name}, reinforcement of {words}")  # fmt: skip
    return w.check(
        "redistribution", "EN 1992-1-1, 5.5(4)", demand=max(axis, least), resistance=delta,
        quantity="", not_covered="Bending and shear are checked with the redistributed moments. "
        "Not covered: rotation capacity beyond 5.5(4), ratios of spans (see the findings).",
    )  # fmt: skip


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
    w.step("ρ_l", "", rho, "", "6.2.2(1)", note="the least main reinforcement, at most 0.02")
    w.step("v_Rd,c", "C_Rd,c/γ_c k (100 ρ_l f_ck)^(1/3)", plain * 1e6, "stress", "6.2.2(1), (6.2a)",
           note=f"C_Rd,c = {f['C_Rd_c']:g}, f_ck in MPa")  # fmt: skip
    w.step("v_min", f"{f['v_min']:g} k^1.5 √f_ck", least * 1e6, "stress", "6.2.2(1), (6.3N)")
    concrete = w.step(
        "V_Rd,c", "{v} {b_w} {d}", max(plain, least) * 1e6 * b * d, "force",
        "6.2.2(1), (6.2)", note="v the larger of both", v=(max(plain, least) * 1e6, "stress"),
        b_w=(b, "section length"), d=(d, "section length"),
    )  # fmt: skip
    fcd, fyd = f["alpha_cc"] * fck / f["gamma_c"], f["f_yk"] / f["gamma_s"]
    lever = 0.9 * d
    nu = f["nu_1"] * (1.0 - fck / 250e6)
    cot = _strut(demand, b * lever * nu * fcd, f["cot_theta_max"])
    w.step("z", "0.9 {d}", lever, "section length", "6.2.3(1)", d=(d, "section length"))
    w.step("ν_1", "{k} (1 - {f_ck} / 250 MPa)", nu, "", "6.2.2(6), (6.6N)", k=(f["nu_1"], ""),
           f_ck=(fck, "stress"))  # fmt: skip
    w.step("cot θ", "", cot, "", "6.2.3(2)", note="as flat as the struts allow")
    strut = {"b_w": (b, "section length"), "z": (lever, "section length"), "ν_1": (nu, ""),
             "f_cd": (fcd, "stress")}  # fmt: skip
    w.step("V_Rd,max(θ)", "{b_w} {z} {ν_1} {f_cd} / ({cot} + 1/{cot})",
           b * lever * nu * fcd / (cot + 1.0 / cot), "force", "6.2.3(3), (6.9)",
           note="", cot=(cot, ""), **strut)  # fmt: skip
    steepest = w.step("V_Rd,max", "{b_w} {z} {ν_1} {f_cd} / 2", b * lever * nu * fcd / 2.0, "force",
                      "6.2.3(3), (6.9)", note="θ = 45°, the most that struts carry",
                      **strut)  # fmt: skip
    minimum = w.step("A_sw/s,min", "0.08 √f_ck / f_yk b_w",
                     0.08 * math.sqrt(fck / 1e6) * 1e6 / f["f_yk"] * b, "reinforcement per length",
                     "9.2.2(5), (9.5N)", note="links per length")  # fmt: skip
    needed = minimum
    if demand > concrete:
        needed = max(demand / (lever * fyd * cot), minimum)
    words = "V_Rd,c suffices: the least links" if demand <= concrete else "links per length"
    w.step("A_sw/s", "{V_Ed} / ({z} {f_ywd} {cot}) ≥ A_sw/s,min", needed,
           "reinforcement per length", "6.2.3(3), (6.8)", note=words, V_Ed=(demand, "force"),
           z=(lever, "section length"), f_ywd=(fyd, "stress"), cot=(cot, ""))  # fmt: skip
    w.step("s_l,max", "{k} {d}", f["s_l_max"] * d, "section length", "9.2.2(6), (9.6N)",
           note="largest spacing of links along the member", k=(f["s_l_max"], ""),
           d=(d, "section length"))  # fmt: skip
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
    flange = compressed_flange(design, shape, effective_flange, top=not design.cantilever)
    limit, _ = neutral_axis_limit(design, f, bottom=not design.cantilever)
    found = required_reinforcement(
        moment, b=shape.web, d=d, d2=bar_depth(f), fcd=fcd, fyd=fyd, limit=limit, e_s=f["E_s"],
        flange=flange,
    )  # fmt: skip
    width = flange[0] if flange else shape.web
    least = _least(design, f, fck, d, bottom=not design.cantilever)
    area = max(found.tension, least)
    rho = w.step("ρ", "{A_s} / ({b} {d})", area / (width * d), "", "7.4.2(2)",
                 A_s=(area, "area"), b=(width, "section length"),
                 d=(d, "section length"))  # fmt: skip
    if not math.isfinite(rho):
        return None  # bending says so
    system, words = structural_system(design)
    w.step("K", "", system, "", "Table 7.4N", note=words)
    reference = w.step("ρ_0", "10⁻³ √f_ck", 1e-3 * math.sqrt(fck / 1e6), "", "7.4.2(2)",
                       note="f_ck in MPa")  # fmt: skip
    low = "{K} (11 + 1.5 √{f_ck} {ρ_0}/{ρ} + 3.2 √{f_ck} ({ρ_0}/{ρ} - 1)^1.5)"
    limit = w.step(
        "(l/d)_0", low if rho <= reference else "{K} (11 + 1.5 √{f_ck} {ρ_0}/{ρ})",
        span_to_depth_limit(fck, rho, system), "", "(7.16a)" if rho <= reference else "(7.16b)",
        note="without compression reinforcement; f_ck in MPa", K=(system, ""),
        f_ck=(fck / 1e6, ""), ρ_0=(reference, ""), ρ=(rho, ""),
    )  # fmt: skip
    if f["f_yk"] != 500e6:
        limit = w.step("(l/d)_1", "{l} · 500 MPa / {f_yk}", limit * 500e6 / f["f_yk"], "",
                       "(7.17)", l=(limit, ""), f_yk=(f["f_yk"], "stress"))  # fmt: skip
    if width > 3.0 * shape.web:
        limit = w.step("(l/d)_2", "0.8 {l}", 0.8 * limit, "", "7.4.2(2)", l=(limit, ""),
                       note="flange wider than three webs")  # fmt: skip
    if span > 7.0:
        limit = w.step("(l/d)_3", "{limit} · 7 m / {l}", limit * 7.0 / span, "", "7.4.2(2)",
                       limit=(limit, ""), l=(span, "length"))  # fmt: skip
    return w.check(
        "span over depth", "EN 1992-1-1, 7.4.2", demand=span / d, resistance=limit, quantity="",
        not_covered="Deemed to satisfy span/250 and span/500 after construction; where it does not "
        "hold, deflections must be calculated with cracking and creep (7.4.3), which is not "
        "covered.",
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
