"""Steel members in bending and shear by EN 1993-1-1:2005.

Symbols are those of the standard.  Clauses are written from memory of it and marked as not
confirmed.  Covered: rolled I and H sections, channels, rectangular and circular hollow sections
of classes 1 to 3, bent about the strong axis, without axial force.
"""

from __future__ import annotations

import math
from collections.abc import Mapping

from analysis_core.checks.design import MemberDesign, UnbracedSegment, plates, segments, strength_of
from analysis_core.checks.working import Check, Figure, Figures, Working, not_checked

FIGURES: Mapping[str, Figure] = {
    "gamma_M0": Figure(1.00, "EN 1993-1-1, 6.1(1)", "resistance of cross-sections", national=True),
    "gamma_M1": Figure(1.00, "EN 1993-1-1, 6.1(1)", "resistance to instability", national=True),
    "eta": Figure(1.00, "EN 1993-1-1, 6.2.6(3); EN 1993-1-5, 5.1", "shear area", national=True),
    "lambda_LT0": Figure(0.4, "EN 1993-1-1, 6.3.2.3(1)", "plateau of lateral torsional buckling",
                         national=True),
    "beta": Figure(0.75, "EN 1993-1-1, 6.3.2.3(1)", "factor of the rolled curves", national=True),
}  # fmt: skip

_COVERED = ("I", "channel", "hollow rectangle", "tube")
_IMPERFECTION = {"a": 0.21, "b": 0.34, "c": 0.49, "d": 0.76}
_NOT_COVERED = (
    "Not covered: axial force, torsion, biaxial bending, transverse forces on the web, holes."
)


def check_steel(design: MemberDesign, figures: Figures) -> list[Check]:
    """Return the checks of a steel member: bending, shear, both together, lateral buckling."""
    reason = _outside(design)
    if reason:
        return [not_checked("steel resistance", reason, "EN 1993-1-1")]
    fy = _yield_strength(design)
    class_, steps = classify(design, fy)
    if class_ == 4:
        reason = (
            f"The section {design.section.name} is of class 4 in bending; effective widths "
            f"(EN 1993-1-5) are not covered."
        )
        return [not_checked("bending", reason, "EN 1993-1-1, 5.5.2")]
    checks = [
        _bending(design, figures, fy, class_, steps),
        _shear(design, figures, fy),
        _bending_and_shear(design, figures, fy, class_),
    ]
    return [*checks, _lateral(design, figures, fy, class_)]


def classify(design: MemberDesign, fy: float) -> tuple[int, Working]:
    """Return the class of the cross-section in bending (Table 5.2) and the working."""
    d, w = plates(design.section), Working()
    epsilon = w.step(
        "ε", "√(235 MPa / {f_y})", math.sqrt(235e6 / fy), "", "Table 5.2", f_y=(fy, "stress")
    )
    if design.section.shape == "tube":
        ratio = w.step(
            "d/t", "{d} / {t}", d["depth"] / d["wall_thickness"], "", "Table 5.2",
            d=(d["depth"], "section length"), t=(d["wall_thickness"], "section length"),
        )  # fmt: skip
        limits = [50.0 * epsilon**2, 70.0 * epsilon**2, 90.0 * epsilon**2]
        return _class_of(ratio, limits, w, "tube in bending: 50/70/90 ε²")
    flange, flange_limits, words = _flange_slenderness(design, w)
    web = w.step(
        "c_w/t_w", "{c_w} / {t_w}", _web_height(design) / _web(d), "", "Table 5.2",
        c_w=(_web_height(design), "section length"), t_w=(_web(d), "section length"),
    )  # fmt: skip
    of_flange, _ = _class_of(flange, [f * epsilon for f in flange_limits], w, words)
    of_web, _ = _class_of(web, [72 * epsilon, 83 * epsilon, 124 * epsilon], w,
                          "web in bending: 72/83/124 ε")  # fmt: skip
    return max(of_flange, of_web), w


def _outside(design: MemberDesign) -> str:
    section = design.section
    if section.shape not in _COVERED:
        return f"A section of the shape '{section.shape or 'unknown'}' is outside this check."
    if not strength_of(design.material, "fy"):
        return (
            f"Material '{design.material.name}' states no yield strength; give it in the job file "
            f"(materials: strength: {{fy: 355 MPa}})."
        )
    d = plates(section)
    needed = {"I": "flange_thickness", "channel": "flange_thickness"}.get(section.shape)
    if needed and needed not in d:
        return "The two flanges differ; unequal flanges are outside this check."
    if section.shape == "I" and d.get("top_flange_width") != d.get("bottom_flange_width"):
        return "The two flanges differ; unequal flanges are outside this check."
    if abs(section.inertia_product) > 1e-6 * section.inertia:
        return "The section is turned about its axis; bending about one axis alone is covered."
    return ""


def _yield_strength(design: MemberDesign) -> float:
    """Table 3.1: above 40 mm the strength is lower; the material's own is taken up to 40 mm."""
    return strength_of(design.material, "fy")


def _class_of(ratio: float, limits: list[float], w: Working, words: str) -> tuple[int, Working]:
    found = 1 + sum(ratio > limit for limit in limits)
    w.step("class", "", float(found), "", "5.5.2, Table 5.2", note=f"{words}: class {found}")
    return found, w


def _flange_slenderness(design: MemberDesign, w: Working) -> tuple[float, list[float], str]:
    d, shape = plates(design.section), design.section.shape
    t = d.get("flange_thickness", d.get("wall_thickness", d.get("thickness", 0.0)))
    if shape == "hollow rectangle":
        c = d["width"] - 3.0 * t
        limits, words = [33.0, 38.0, 42.0], "internal flange in compression: 33/38/42 ε"
    else:
        r = d.get("fillet_radius", 0.0)
        outstand = d["width"] - _web(d) - r * (2.0 if shape == "I" else 1.0)
        c = outstand / 2.0 if shape == "I" else outstand
        limits, words = [9.0, 10.0, 14.0], "outstand flange in compression: 9/10/14 ε"
    ratio = w.step(
        "c_f/t_f", "{c_f} / {t_f}", c / t, "", "Table 5.2",
        c_f=(c, "section length"), t_f=(t, "section length"),
    )  # fmt: skip
    return ratio, limits, words


def _web(d: Mapping[str, float]) -> float:
    return d.get("web_thickness", d.get("wall_thickness", d.get("thickness", 0.0)))


def _web_height(design: MemberDesign) -> float:
    d = plates(design.section)
    if design.section.shape == "hollow rectangle":
        return d["depth"] - 3.0 * _web(d)
    return d["depth"] - 2.0 * (d["flange_thickness"] + d.get("fillet_radius", 0.0))


def _moduli(design: MemberDesign) -> tuple[float, float]:
    d = plates(design.section)
    elastic = min(d["section_modulus_top"], d["section_modulus_bottom"])
    return d["plastic_modulus"], elastic


def _bending(design: MemberDesign, f: Figures, fy: float, class_: int, steps: Working) -> Check:
    w = Working(list(steps.steps))
    resistance = _moment_resistance(design, f, fy, class_, w)
    worst = max(design.governing.sagging, design.governing.hogging, key=lambda e: abs(e.value))
    return w.check(
        "bending", "EN 1993-1-1, 6.2.5", demand=worst.value, resistance=resistance,
        quantity="moment", x=worst.x, source=worst.source, not_covered=_NOT_COVERED,
    )  # fmt: skip


def _moment_resistance(
    design: MemberDesign, f: Figures, fy: float, class_: int, w: Working
) -> float:
    plastic, elastic = _moduli(design)
    if class_ <= 2:
        return w.step(
            "M_c,Rd",
            "{W_pl} {f_y} / {gamma_M0}",
            plastic * fy / f["gamma_M0"],
            "moment",
            "6.2.5(2), (6.13)",
            W_pl=(plastic, "section modulus"),
            f_y=(fy, "stress"),
            gamma_M0=(f["gamma_M0"], ""),
        )
    return w.step(
        "M_c,Rd",
        "{W_el} {f_y} / {gamma_M0}",
        elastic * fy / f["gamma_M0"],
        "moment",
        "6.2.5(2), (6.14)",
        W_el=(elastic, "section modulus"),
        f_y=(fy, "stress"),
        gamma_M0=(f["gamma_M0"], ""),
    )


def shear_area(design: MemberDesign, eta: float) -> float:
    """Return A_v for shear along the depth (6.2.6(3)), m²."""
    d, area, shape = plates(design.section), design.section.area, design.section.shape
    if shape == "I":
        tf, tw, r = d["flange_thickness"], d["web_thickness"], d.get("fillet_radius", 0.0)
        web = (d["depth"] - 2.0 * tf) * tw
        return max(area - 2.0 * d["width"] * tf + (tw + 2.0 * r) * tf, eta * web)
    if shape == "channel":
        tf, tw, r = d["flange_thickness"], d["web_thickness"], d.get("fillet_radius", 0.0)
        return area - 2.0 * d["width"] * tf + (tw + r) * tf
    if shape == "hollow rectangle":
        return area * d["depth"] / (d["width"] + d["depth"])
    return 2.0 * area / math.pi


def _shear_resistance(design: MemberDesign, f: Figures, fy: float, w: Working) -> float:
    area = w.step("A_v", "", shear_area(design, f["eta"]), "area", "6.2.6(3)",
                  note="shear area of the section")  # fmt: skip
    return w.step(
        "V_pl,Rd", "{A_v} ({f_y} / √3) / {gamma_M0}", area * fy / math.sqrt(3.0) / f["gamma_M0"],
        "force", "6.2.6(2), (6.18)",
        A_v=(area, "area"), f_y=(fy, "stress"), gamma_M0=(f["gamma_M0"], ""),
    )  # fmt: skip


def _shear(design: MemberDesign, f: Figures, fy: float) -> Check:
    w = Working()
    worst = design.governing.shear
    d = plates(design.section)
    if design.section.shape in ("I", "channel"):
        web = (d["depth"] - 2.0 * d["flange_thickness"]) / d["web_thickness"]
        limit = 72.0 * math.sqrt(235e6 / fy) / f["eta"]
        w.step(
            "h_w/t_w", "", web, "", "6.2.6(6), (6.22)", note=f"shear buckling from {limit:.1f} on"
        )
        if web > limit:
            reason = (
                f"The web ratio {web:.1f} exceeds {limit:.1f}; shear buckling (EN 1993-1-5) is not "
                f"covered."
            )
            return not_checked("shear", reason, "EN 1993-1-1, 6.2.6(6)")
    resistance = _shear_resistance(design, f, fy, w)
    return w.check(
        "shear", "EN 1993-1-1, 6.2.6", demand=worst.value, resistance=resistance,
        quantity="force", x=worst.x, source=worst.source, not_covered=_NOT_COVERED,
    )  # fmt: skip


def _bending_and_shear(design: MemberDesign, f: Figures, fy: float, class_: int) -> Check:
    """6.2.8: where the shear exceeds half its resistance, the moment resistance is reduced."""
    base = Working()
    moment_resistance = _moment_resistance(design, f, fy, class_, base)
    shear_resistance = _shear_resistance(design, f, fy, base)
    worst: tuple[float, Working, float, float, float, str] | None = None
    for field in design.fields:
        for x, moment, shear in zip(field.x, field.moment, field.shear, strict=True):
            if abs(shear) <= 0.5 * shear_resistance:
                reduced = moment_resistance
            else:
                reduced = reduced_moment(
                    design, f, fy, class_, abs(float(shear)) / shear_resistance
                )
            use = abs(float(moment)) / reduced if reduced > 0.0 else math.inf
            if worst is None or use > worst[0]:
                worst = (use, base, float(moment), reduced, float(x), field.source)
                acting = abs(float(shear))
    if worst is None:
        return not_checked("bending with shear", "No strength combination was found.", "6.2.8")
    w = Working(list(base.steps))
    share = w.step(
        "V_Ed / V_pl,Rd", "{V_Ed} / {V_pl}", acting / shear_resistance, "", "6.2.8(2)",
        V_Ed=(acting, "force"), V_pl=(shear_resistance, "force"),
    )  # fmt: skip
    if share > 0.5:
        rho = w.step("ρ", "(2 {v} - 1)²", (2.0 * share - 1.0) ** 2, "", "6.2.8(3)", v=(share, ""))
        w.step("M_V,Rd", "", worst[3], "moment", "6.2.8(3), (5)", note=f"reduced by ρ = {rho:.3f}")
    else:
        w.step("M_V,Rd", "", worst[3], "moment", "6.2.8(2)", note="no reduction up to one half")
    return w.check(
        "bending with shear", "EN 1993-1-1, 6.2.8", demand=worst[2], resistance=worst[3],
        quantity="moment", x=worst[4], source=worst[5], not_covered=_NOT_COVERED,
    )  # fmt: skip


def reduced_moment(design: MemberDesign, f: Figures, fy: float, class_: int, share: float) -> float:
    """Return M_V,Rd (N·m) for a shear of ``share`` of V_pl,Rd (6.2.8(3), (5))."""
    full = _moment_resistance(design, f, fy, class_, Working())
    rho = (2.0 * share - 1.0) ** 2 if share > 0.5 else 0.0
    if rho >= 1.0:
        return 0.0
    d = plates(design.section)
    if design.section.shape == "I" and class_ <= 2:
        tw = d["web_thickness"]
        area = (d["depth"] - 2.0 * d["flange_thickness"]) * tw
        plastic, _ = _moduli(design)
        reduced = (plastic - rho * area**2 / (4.0 * tw)) * fy / f["gamma_M0"]
        return min(reduced, full)
    return (1.0 - rho) * full


def _lateral(design: MemberDesign, f: Figures, fy: float, class_: int) -> Check:
    clause = "EN 1993-1-1, 6.3.2"
    shape = design.section.shape
    if shape in ("tube", "hollow rectangle"):
        w = Working()
        w.step("λ", "", 0.0, "", "6.3.2.1(2)", note="hollow sections are not susceptible")
        resistance = _moment_resistance(design, f, fy, class_, w)
        worst = max(design.governing.sagging, design.governing.hogging, key=lambda e: abs(e.value))
        return w.check(
            "lateral torsional buckling", clause, demand=worst.value, resistance=resistance,
            quantity="moment", x=worst.x, source=worst.source,
        )  # fmt: skip
    if shape != "I":
        reason = "Lateral torsional buckling of channels is outside this check."
        return not_checked("lateral torsional buckling", reason, clause)
    found: Check | None = None
    for field in design.fields:
        for segment in segments(design, field):
            check = buckling(design, f, fy, class_, segment)
            if found is None or check.use > found.use:
                found = check
    if found is None:
        w = Working()
        w.step("L", "", 0.0, "length", "6.3.2.1(2)", note=design.restraints.reason)
        return w.check(
            "lateral torsional buckling", clause, demand=0.0,
            resistance=_moment_resistance(design, f, fy, class_, w), quantity="moment",
            not_covered="The compressed flange is held all along.",
        )  # fmt: skip
    return found


def buckling(
    design: MemberDesign, f: Figures, fy: float, class_: int, segment: UnbracedSegment
) -> Check:
    """Return the check of one unbraced segment (6.3.2.3, rolled sections)."""
    w, section = Working(), design.section
    d = plates(section)
    e, g = design.material.elastic_modulus, design.material.shear_modulus
    g = g or e / 2.6
    length = w.step("L", "", segment.length, "length", "",
                    note=f"between restraints of the {segment.flange} flange")  # fmt: skip
    c1 = w.step("C1", "", moment_factor(segment.moments), "", "literature",
                note="from the moments at the quarter points")  # fmt: skip
    critical = w.step(
        "M_cr", "{C1} π² {E} {I_z} / {L}² √({I_w}/{I_z} + {L}² {G} {I_t} / (π² {E} {I_z}))",
        critical_moment(c1, length, e=e, g=g, iz=section.inertia_lateral, it=section.torsion,
                        iw=d.get("warping", 0.0)),
        "moment", "literature; load at the shear centre",
        C1=(c1, ""), E=(e, "stress"), I_z=(section.inertia_lateral, "inertia"),
        L=(length, "length"), I_w=(d.get("warping", 0.0), "warping"), G=(g, "stress"),
        I_t=(section.torsion, "inertia"),
    )  # fmt: skip
    plastic, elastic = _moduli(design)
    modulus = plastic if class_ <= 2 else elastic
    slender = w.step(
        "λ_LT", "√({W_y} {f_y} / {M_cr})", math.sqrt(modulus * fy / critical), "", "6.3.2.2(1)",
        W_y=(modulus, "section modulus"), f_y=(fy, "stress"), M_cr=(critical, "moment"),
    )  # fmt: skip
    curve = "b" if d["depth"] / d["width"] <= 2.0 else "c"
    alpha = w.step("α_LT", "", _IMPERFECTION[curve], "", "Tables 6.3, 6.5",
                   note=f"h/b = {d['depth'] / d['width']:.2f}: curve {curve}")  # fmt: skip
    chi = w.step(
        "χ_LT", "1 / (Φ + √(Φ² - β λ²)) ≤ 1, ≤ 1/λ²",
        reduction_factor(slender, alpha, plateau=f["lambda_LT0"], beta=f["beta"]),
        "", "6.3.2.3(1), (6.57)",
    )  # fmt: skip
    resistance = w.step(
        "M_b,Rd", "{chi} {W_y} {f_y} / {gamma_M1}", chi * modulus * fy / f["gamma_M1"], "moment",
        "6.3.2.1(3), (6.55)",
        chi=(chi, ""), W_y=(modulus, "section modulus"), f_y=(fy, "stress"),
        gamma_M1=(f["gamma_M1"], ""),
    )  # fmt: skip
    return w.check(
        "lateral torsional buckling", "EN 1993-1-1, 6.3.2.3",
        demand=segment.largest if segment.flange == "top" else -segment.largest,
        resistance=resistance, quantity="moment", x=segment.at, source=segment.source,
        not_covered="Not covered: loads above the shear centre (destabilising), f of (6.58).",
    )  # fmt: skip


def moment_factor(moments: tuple[float, float, float, float, float]) -> float:
    """Return C1 from the moments at the ends and quarter points of a segment.

    12.5 M_max / (2.5 M_max + 3 M_2 + 4 M_3 + 3 M_4), absolute values: the same expression as
    AISC 360, (F1-1), used here for C1 as is common practice; not confirmed.
    """
    m0, m1, m2, m3, m4 = (abs(m) for m in moments)
    top = max(m0, m1, m2, m3, m4)
    if top == 0.0:
        return 1.0
    return 12.5 * top / (2.5 * top + 3.0 * m1 + 4.0 * m2 + 3.0 * m3)


def critical_moment(
    c1: float, length: float, *, e: float, g: float, iz: float, it: float, iw: float
) -> float:
    """Return M_cr in N·m of a doubly symmetric section loaded at its shear centre."""
    euler = math.pi**2 * e * iz / length**2
    return c1 * euler * math.sqrt(iw / iz + g * it / euler)


def reduction_factor(slenderness: float, alpha: float, *, plateau: float, beta: float) -> float:
    """Return χ_LT of 6.3.2.3 (rolled or equivalent welded sections)."""
    if slenderness <= plateau:
        return 1.0
    phi = 0.5 * (1.0 + alpha * (slenderness - plateau) + beta * slenderness**2)
    chi = 1.0 / (phi + math.sqrt(phi**2 - beta * slenderness**2))
    return min(chi, 1.0, 1.0 / slenderness**2)
