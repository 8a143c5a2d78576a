"""Cross-sections of steel by EN 1993-1-1:2005: class, bending, shear, and both together.

Symbols are those of the standard.  Clauses are written from memory of it and marked as not
confirmed.  Covered: rolled and welded I and H sections, channels, rectangular and circular hollow
sections of classes 1 to 3, bent about the strong axis; webs that buckle in shear by EN 1993-1-5,
5.2, stiffened at the supports alone.  Sections without a fillet radius count as welded.
"""

from __future__ import annotations

import math
from collections.abc import Mapping

import numpy as np

from analysis_core.checks.design import (
    NEGLIGIBLE,
    MemberDesign,
    is_stainless,
    plates,
    strength_of,
    unknown_properties,
    unlike_profile,
)
from analysis_core.checks.working import Check, Figure, Figures, Working, not_checked

FIGURES: Mapping[str, Figure] = {
    "gamma_M0": Figure(1.00, "EN 1993-1-1, 6.1(1)", "resistance of cross-sections", national=True),
    "gamma_M1": Figure(1.00, "EN 1993-1-1, 6.1(1)", "resistance to instability", national=True),
    "eta": Figure(1.00, "EN 1993-1-1, 6.2.6(3); EN 1993-1-5, 5.1", "shear area", national=True),
    "lambda_LT0": Figure(0.4, "EN 1993-1-1, 6.3.2.3(1)", "plateau of lateral torsional buckling",
                         national=True),
    "beta": Figure(0.75, "EN 1993-1-1, 6.3.2.3(1)", "factor of the rolled curves", national=True),
    "k_L": Figure(1.0, "common practice", "on unbraced lengths; 1.2 where loads act above the "
                  "shear centre and may move sideways, 2.5 at free ends: of the project"),
    "L_cr_y": Figure(1.0, "EN 1993-1-1, 5.2.2(7), 6.3.1.3", "buckling length in the plane over the "
                     "member's length: of the project"),
}  # fmt: skip

_COVERED = ("I", "channel", "hollow rectangle", "tube")
# Table 3.1: yield strength in MPa of thicknesses over 40 mm up to 80 mm, by that up to 40 mm.
_THICK = {235: 215.0, 275: 255.0, 355: 335.0, 420: 390.0, 450: 410.0, 460: 430.0}
_STRONGEST = 460.5e6  # 3.1(2), Table 3.1: grades up to S460
NOT_COVERED = "Not covered: torsion, biaxial bending, transverse forces on the web, holes."


def compression(design: MemberDesign, fy: float) -> float:
    """Return the largest compression, N; 0 where it is too small to count."""
    force = -design.axial[0]
    return force if force > NEGLIGIBLE * design.section.area * fy else 0.0


def yield_strength(design: MemberDesign) -> float:
    """Return f_y for the thickest part, Pa (Table 3.1); 0 beyond 80 mm.

    The material's own value is taken up to 40 mm, and throughout where it is not one of the table.
    """
    fy, thickness = strength_of(design.material, "fy"), thickest(design)
    lower = _THICK.get(round(fy / 1e6))
    if thickness <= 0.040 + 1e-9 or lower is None:
        return fy
    return lower * 1e6 if thickness <= 0.080 + 1e-9 else 0.0


def is_welded(design: MemberDesign) -> bool:
    """Whether an I-section counts as welded: it has no fillets."""
    return plates(design.section).get("fillet_radius", 0.0) <= 0.0


def classify(design: MemberDesign, fy: float) -> tuple[int, Working]:
    """Return the class of the cross-section (Table 5.2) and the working.

    Of the web in bending, or in bending and compression where the member is compressed.
    """
    d, w = plates(design.section), Working()
    if fy != strength_of(design.material, "fy"):
        w.step("f_y", "", fy, "stress", "Table 3.1", note="thicker than 40 mm")
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
        "c_w/t_w", "{c_w} / {t_w}", web_height(design) / web_thickness(d), "", "Table 5.2",
        c_w=(web_height(design), "section length"), t_w=(web_thickness(d), "section length"),
    )  # fmt: skip
    of_flange, _ = _class_of(flange, [f * epsilon for f in flange_limits], w, words)
    limits, words = _web_limits(design, fy, w)
    of_web, _ = _class_of(web, [limit * epsilon for limit in limits], w, words)
    return max(of_flange, of_web), w


def _web_limits(design: MemberDesign, fy: float, w: Working) -> tuple[list[float], str]:
    """Table 5.2, sheet 1: α of the depth is compressed when plastic, ψ is the ratio of stresses."""
    force = compression(design, fy)
    if not force:
        return [72.0, 83.0, 124.0], "web in bending: 72/83/124 ε"
    webs = 2.0 if design.section.shape == "hollow rectangle" else 1.0
    thickness = webs * web_thickness(plates(design.section))
    alpha = min(1.0, 0.5 * (1.0 + force / (web_height(design) * thickness * fy)))
    psi = min(1.0, 2.0 * force / (design.section.area * fy) - 1.0)
    given = {"N_Ed": (force, "force"), "f_y": (fy, "stress")}
    w.step("α", "0.5 (1 + {N_Ed} / ({c_w} {t_w} {f_y})) ≤ 1", alpha, "", "Table 5.2",
           note="part of the web compressed, plastic", c_w=(web_height(design), "section length"),
           t_w=(thickness, "section length"), **given)  # fmt: skip
    w.step("ψ", "2 {N_Ed} / ({A} {f_y}) - 1 ≤ 1", psi, "", "Table 5.2",
           note="ratio of stresses at the web's ends, elastic", A=(design.section.area, "area"),
           **given)  # fmt: skip
    third = 42.0 / (0.67 + 0.33 * psi)
    if psi <= -1.0:
        third = 62.0 * (1.0 - psi) * math.sqrt(-psi)
    limits = [396.0 / (13.0 * alpha - 1.0), 456.0 / (13.0 * alpha - 1.0), third]
    return limits, "web in bending and compression"


def outside(design: MemberDesign) -> str:
    """Return why a member is outside these checks; "" where it is not."""
    section = design.section
    if section.shape not in _COVERED:
        return f"A section of the shape '{section.shape or 'unknown'}' is outside this check."
    if not strength_of(design.material, "fy"):
        return (
            f"Material '{design.material.name}' states no yield strength; give it in the job file "
            f"(materials: strength: {{fy: 355 MPa}})."
        )
    if is_stainless(design.material):
        return f"'{design.material.name}' is stainless; EN 1993-1-4 is not covered."
    if strength_of(design.material, "fy") > _STRONGEST:
        return f"'{design.material.name}' is stronger than S460; EN 1993-1-12 is not covered."
    d = plates(section)
    needed = {"I": "flange_thickness", "channel": "flange_thickness"}.get(section.shape)
    if needed and needed not in d:
        return "The two flanges differ; unequal flanges are outside this check."
    if section.shape == "I" and d.get("top_flange_width") != d.get("bottom_flange_width"):
        return "The two flanges differ; unequal flanges are outside this check."
    return unlike_profile(section) or unknown_properties(section)


def thickest(design: MemberDesign) -> float:
    """Return the thickness of the thickest part, m."""
    d = plates(design.section)
    names = ("flange_thickness", "web_thickness", "wall_thickness", "thickness")
    return max((d[name] for name in names if name in d), default=0.0)


def _class_of(ratio: float, limits: list[float], w: Working, words: str) -> tuple[int, Working]:
    found = 1 + sum(ratio > limit for limit in limits)
    w.step("class", "", float(found), "", "5.5.2, Table 5.2", note=f"{words}: class {found}")
    return found, w


def _flange_slenderness(design: MemberDesign, w: Working) -> tuple[float, list[float], str]:
    d, shape = plates(design.section), design.section.shape
    t = d.get("flange_thickness", d.get("wall_thickness", d.get("thickness", 0.0)))
    if shape == "hollow rectangle":
        c = design.section.width - 3.0 * t
        limits, words = [33.0, 38.0, 42.0], "internal flange in compression: 33/38/42 ε"
    else:
        r = d.get("fillet_radius", 0.0)
        outstand = d["width"] - web_thickness(d) - r * (2.0 if shape == "I" else 1.0)
        c = outstand / 2.0 if shape == "I" else outstand
        limits, words = [9.0, 10.0, 14.0], "outstand flange in compression: 9/10/14 ε"
    ratio = w.step(
        "c_f/t_f", "{c_f} / {t_f}", c / t, "", "Table 5.2",
        c_f=(c, "section length"), t_f=(t, "section length"),
    )  # fmt: skip
    return ratio, limits, words


def web_thickness(d: Mapping[str, float]) -> float:
    """Return the thickness of the web or wall, m."""
    return d.get("web_thickness", d.get("wall_thickness", d.get("thickness", 0.0)))


def web_height(design: MemberDesign) -> float:
    """Return the straight height of the web, m."""
    d = plates(design.section)
    if design.section.shape == "hollow rectangle":
        return design.section.depth - 3.0 * web_thickness(d)
    return d["depth"] - 2.0 * (d["flange_thickness"] + d.get("fillet_radius", 0.0))


def moduli(design: MemberDesign) -> tuple[float, float]:
    """Return the plastic and the smaller elastic section modulus, m³."""
    d = plates(design.section)
    elastic = min(d["section_modulus_top"], d["section_modulus_bottom"])
    return d["plastic_modulus"], elastic


def check_bending(
    design: MemberDesign, f: Figures, fy: float, class_: int, steps: Working
) -> Check:
    """Return the check of the cross-section in bending (6.2.5)."""
    w = Working(list(steps.steps))
    resistance = moment_resistance_of(design, f, fy, class_, w)
    worst = max(design.governing.sagging, design.governing.hogging, key=lambda e: abs(e.value))
    return w.check(
        "bending", "EN 1993-1-1, 6.2.5", demand=worst.value, resistance=resistance,
        quantity="moment", x=worst.x, source=worst.source, not_covered=NOT_COVERED,
    )  # fmt: skip


def moment_resistance_of(
    design: MemberDesign, f: Figures, fy: float, class_: int, w: Working
) -> float:
    """Return M_c,Rd in N·m and write it down."""
    plastic, elastic = moduli(design)
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
        if is_welded(design):
            return eta * web
        return max(area - 2.0 * d["width"] * tf + (tw + 2.0 * r) * tf, eta * web)
    if shape == "channel":
        tf, tw, r = d["flange_thickness"], d["web_thickness"], d.get("fillet_radius", 0.0)
        return area - 2.0 * d["width"] * tf + (tw + r) * tf
    if shape == "hollow rectangle":
        return area * design.section.depth / (design.section.width + design.section.depth)
    return 2.0 * area / math.pi


def _shear_area_step(design: MemberDesign, eta: float, w: Working) -> float:
    """Write A_v down with the formula of its shape."""
    d, section = plates(design.section), design.section
    value = shear_area(design, eta)
    size = "section length"
    area = {"A": (section.area, "area")}
    if section.shape == "tube":
        return w.step("A_v", "2 {A} / π", value, "area", "6.2.6(3)", note="", **area)
    if section.shape == "hollow rectangle":
        return w.step("A_v", "{A} {h} / ({b} + {h})", value, "area", "6.2.6(3)", note="",
                      h=(section.depth, size), b=(section.width, size), **area)  # fmt: skip
    tf, tw, r = d["flange_thickness"], d["web_thickness"], d.get("fillet_radius", 0.0)
    given = {"b": (d["width"], size), "t_f": (tf, size), "t_w": (tw, size), "r": (r, size)}
    if section.shape == "channel":
        return w.step("A_v", "{A} - 2 {b} {t_f} + ({t_w} + {r}) {t_f}", value, "area", "6.2.6(3)",
                      note="", **area, **given)  # fmt: skip
    if not is_welded(design) and value > eta * (d["depth"] - 2.0 * tf) * tw:
        return w.step("A_v", "{A} - 2 {b} {t_f} + ({t_w} + 2 {r}) {t_f}", value, "area",
                      "6.2.6(3)", note="more than η h_w t_w", **area, **given)  # fmt: skip
    return w.step("A_v", "{η} {h_w} {t_w}", value, "area", "6.2.6(3)", note="", η=(eta, ""),
                  h_w=(d["depth"] - 2.0 * tf, size), t_w=(tw, size))  # fmt: skip


def shear_resistance_of(design: MemberDesign, f: Figures, fy: float, w: Working) -> float:
    """Return V_pl,Rd in N, or V_b,Rd where the web buckles before, and write it down."""
    area = _shear_area_step(design, f["eta"], w)
    plastic = w.step(
        "V_pl,Rd", "{A_v} ({f_y} / √3) / {gamma_M0}", area * fy / math.sqrt(3.0) / f["gamma_M0"],
        "force", "6.2.6(2), (6.18)",
        A_v=(area, "area"), f_y=(fy, "stress"), gamma_M0=(f["gamma_M0"], ""),
    )  # fmt: skip
    ratio, limit = web_slenderness(design, f, fy)
    if ratio <= limit:
        return plastic
    return min(plastic, _buckling_shear(design, f, fy, ratio, w))


def web_slenderness(design: MemberDesign, f: Figures, fy: float) -> tuple[float, float]:
    """Return h_w/t_w and the ratio up to which the web does not buckle in shear (6.22)."""
    d = plates(design.section)
    limit = 72.0 * math.sqrt(235e6 / fy) / f["eta"]
    if design.section.shape == "tube":
        return 0.0, limit
    if design.section.shape == "hollow rectangle":
        return web_height(design) / web_thickness(d), limit
    return (d["depth"] - 2.0 * d["flange_thickness"]) / d["web_thickness"], limit


def _buckling_shear(design: MemberDesign, f: Figures, fy: float, ratio: float, w: Working) -> float:
    """V_b,Rd of the web alone, stiffened at the supports alone (EN 1993-1-5, 5.2, 5.3), N.

    Non-rigid end posts; the part of the flanges is left out, on the safe side.
    """
    d = plates(design.section)
    webs = 2.0 if design.section.shape == "hollow rectangle" else 1.0
    thickness = web_thickness(d)
    height = ratio * thickness
    epsilon = math.sqrt(235e6 / fy)
    slender = w.step(
        "λ_w", "{h_w} / (86.4 {t_w} {ε})", ratio / (86.4 * epsilon), "",
        "EN 1993-1-5, 5.3(3), (5.5)", h_w=(height, "section length"),
        t_w=(thickness, "section length"), ε=(epsilon, ""),
    )  # fmt: skip
    chi = w.step("χ_w", "0.83 / λ_w ≤ η", min(f["eta"], 0.83 / slender), "",
                 "EN 1993-1-5, Table 5.1", note="end posts not rigid")  # fmt: skip
    return w.step(
        "V_bw,Rd", "{chi_w} {f_y} {h_w} {t_w} / (√3 {gamma_M1})",
        chi * fy * height * webs * thickness / (math.sqrt(3.0) * f["gamma_M1"]), "force",
        "EN 1993-1-5, 5.2(1), (5.2)", chi_w=(chi, ""), f_y=(fy, "stress"),
        h_w=(height, "section length"), t_w=(webs * thickness, "section length"),
        gamma_M1=(f["gamma_M1"], ""),
    )  # fmt: skip


def check_shear(design: MemberDesign, f: Figures, fy: float) -> Check:
    """Return the check of the cross-section in shear (6.2.6)."""
    w = Working()
    worst = design.governing.shear
    ratio, limit = web_slenderness(design, f, fy)
    words = ""
    if ratio:
        w.step("h_w/t_w", "", ratio, "", "6.2.6(6), (6.22)",
               note=f"shear buckling above {limit:.1f}")  # fmt: skip
    if ratio > limit:
        words = " The web needs transverse stiffeners at the supports (EN 1993-1-5, 5.1(2))."
    resistance = shear_resistance_of(design, f, fy, w)
    return w.check(
        "shear", "EN 1993-1-1, 6.2.6", demand=worst.value, resistance=resistance,
        quantity="force", x=worst.x, source=worst.source, not_covered=NOT_COVERED + words,
    )  # fmt: skip


def check_bending_and_shear(design: MemberDesign, f: Figures, fy: float, class_: int) -> Check:
    """6.2.8: where the shear exceeds half its resistance, the moment resistance is reduced."""
    moment_resistance = moment_resistance_of(design, f, fy, class_, Working())
    shear_resistance = shear_resistance_of(design, f, fy, Working())
    worst: tuple[float, float, float, float, float, str] | None = None
    for field in design.fields:
        shares = np.abs(field.shear) / shear_resistance
        reduced = np.array([moment_resistance])
        if shares.max() > 0.5:
            reduced = np.array([reduced_moment(design, f, fy, class_, v) for v in shares.tolist()])
        reduced = np.broadcast_to(reduced, shares.shape)
        with np.errstate(divide="ignore", invalid="ignore"):
            uses = np.where(reduced > 0.0, np.abs(field.moment) / reduced, np.inf)
        i = int(uses.argmax())
        if worst is None or uses[i] > worst[0]:
            worst = (
                float(uses[i]), float(field.moment[i]), float(reduced[i]), float(field.x[i]),
                float(abs(field.shear[i])), field.source,
            )  # fmt: skip
    if worst is None:
        return not_checked("bending with shear", "No strength combination was found.", "6.2.8")
    _, moment, resistance, x, acting, source = worst
    w = Working()
    share = w.step(
        "v", "{V_Ed} / {V_Rd}", acting / shear_resistance, "", "6.2.8(2)",
        V_Ed=(acting, "force"), V_Rd=(shear_resistance, "force"),
    )  # fmt: skip
    if share > 0.5:
        rho = w.step("ρ", "(2 {v} - 1)²", (2.0 * share - 1.0) ** 2, "", "6.2.8(3)", v=(share, ""))
        _reduced_step(design, f, fy, class_, rho, resistance, w)
    else:
        w.step("M_V,Rd", "", resistance, "moment", "6.2.8(2)", note="no reduction up to one half")
    return w.check(
        "bending with shear", "EN 1993-1-1, 6.2.8", demand=moment, resistance=resistance,
        quantity="moment", x=x, source=source, not_covered=NOT_COVERED,
    )  # fmt: skip


def _reduced_step(
    design: MemberDesign, f: Figures, fy: float, class_: int, rho: float, value: float, w: Working
) -> None:
    d, (plastic, elastic) = plates(design.section), moduli(design)
    if design.section.shape == "I" and class_ <= 2:
        tw = d["web_thickness"]
        w.step(
            "M_V,Rd", "({W_pl} - {rho} {A_w}² / (4 {t_w})) {f_y} / {gamma_M0} ≤ M_c,Rd", value,
            "moment", "6.2.8(5), (6.30)", W_pl=(plastic, "section modulus"), rho=(rho, ""),
            A_w=((d["depth"] - 2.0 * d["flange_thickness"]) * tw, "area"),
            t_w=(tw, "section length"), f_y=(fy, "stress"), gamma_M0=(f["gamma_M0"], ""),
        )  # fmt: skip
        return
    w.step(
        "M_V,Rd", "(1 - {rho}) {W} {f_y} / {gamma_M0}", value, "moment", "6.2.8(3)",
        rho=(rho, ""), W=(plastic if class_ <= 2 else elastic, "section modulus"),
        f_y=(fy, "stress"), gamma_M0=(f["gamma_M0"], ""),
    )  # fmt: skip


def reduced_moment(design: MemberDesign, f: Figures, fy: float, class_: int, share: float) -> float:
    """Return M_V,Rd (N·m) for a shear of ``share`` of its resistance (6.2.8(3), (5)).

    Where the web buckles in shear, the same with V_bw,Rd is EN 1993-1-5, 7.1(1), on the safe side.
    """
    full = moment_resistance_of(design, f, fy, class_, Working())
    rho = (2.0 * share - 1.0) ** 2 if share > 0.5 else 0.0
    if rho >= 1.0:
        return 0.0
    d = plates(design.section)
    if design.section.shape == "I" and class_ <= 2:
        tw = d["web_thickness"]
        area = (d["depth"] - 2.0 * d["flange_thickness"]) * tw
        plastic, _ = moduli(design)
        reduced = (plastic - rho * area**2 / (4.0 * tw)) * fy / f["gamma_M0"]
        return min(reduced, full)
    return (1.0 - rho) * full
