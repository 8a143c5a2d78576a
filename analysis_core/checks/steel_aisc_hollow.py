"""Hollow sections in flexure by AISC 360, F7 (rectangular) and F8 (round)."""

from __future__ import annotations

import math
from collections.abc import Mapping

from analysis_core.checks.design import MemberDesign, lateral_length, plates
from analysis_core.checks.steel_aisc_parts import NOT_COVERED, available_strength
from analysis_core.checks.working import Check, Figures, Working, not_checked


def check_hollow(design: MemberDesign, f: Figures, fy: float, allowable: bool) -> Check:
    """Return the check of a hollow section in flexure (F7, F8)."""
    w = Working()
    tube = design.section.shape == "tube"
    w.step("t", "", plates(design.section)["wall_thickness"], "section length", "B4.2",
           note="design wall; section properties shrink as it does")  # fmt: skip
    nominal = _tube(design, fy, f["E"], w) if tube else _box(design, f, fy, w)
    clause = "AISC 360, F8" if tube else "AISC 360, F7"
    if nominal is None:
        reason = "The walls are slender; effective widths (F7.2(c), F7.3(c), F8.2) are not covered."
        return not_checked("flexure", reason, clause)
    available = available_strength(w, f, "b", nominal, allowable)
    worst = max(design.governing.sagging, design.governing.hogging, key=lambda m: abs(m.value))
    return w.check(
        "flexure", clause, demand=worst.value, resistance=available, quantity="moment",
        x=worst.x, source=worst.source, not_covered=NOT_COVERED,
    )  # fmt: skip


def tube_strength(ratio: float, *, z: float, s: float, e: float, fy: float) -> float | None:
    """Return M_n of a round tube with D/t = ``ratio`` (F8-1, F8-2); None where it is slender."""
    if ratio > 0.31 * e / fy:
        return None
    if ratio <= 0.07 * e / fy:
        return fy * z
    return min(fy * z, (0.021 * e / ratio + fy) * s)


def box_strength(
    flange: float, web: float, *, z: float, s: float, e: float, fy: float
) -> float | None:
    """Return M_n of a box by local buckling (F7-1, F7-2, F7-6); None where a wall is slender."""
    root, plastic = math.sqrt(fy / e), fy * z
    if flange > 1.40 / root or web > 5.70 / root:
        return None
    nominal = plastic
    if flange > 1.12 / root:
        nominal = min(nominal, plastic - (plastic - fy * s) * (3.57 * flange * root - 4.0))
    if web > 2.42 / root:
        nominal = min(nominal, plastic - (plastic - fy * s) * (0.305 * web * root - 0.738))
    return nominal


def _tube(design: MemberDesign, fy: float, e: float, w: Working) -> float | None:
    d = plates(design.section)
    plastic, elastic = d["plastic_modulus"], _elastic(d)
    ratio = w.step("D/t", "", design.section.depth / d["wall_thickness"], "", "Table B4.1b",
                   note=f"compact up to {0.07 * e / fy:.1f}")  # fmt: skip
    nominal = tube_strength(ratio, z=plastic, s=elastic, e=e, fy=fy)
    if nominal is None:
        return None
    given = {"F_y": (fy, "stress")}
    if ratio <= 0.07 * e / fy:
        return w.step("M_n", "{F_y} {Z}", nominal, "moment", "(F8-1)", note="",
                      Z=(plastic, "section modulus"), **given)  # fmt: skip
    return w.step("M_n", "(0.021 {E} / {D/t} + {F_y}) {S} ≤ F_y Z", nominal, "moment", "(F8-2)",
                  note="", E=(e, "stress"), S=(elastic, "section modulus"),
                  **{"D/t": (ratio, "")}, **given)  # fmt: skip


def _box(design: MemberDesign, f: Figures, fy: float, w: Working) -> float | None:
    d, section, e = plates(design.section), design.section, f["E"]
    t, plastic, elastic = d["wall_thickness"], d["plastic_modulus"], _elastic(d)
    root = math.sqrt(e / fy)
    flange = w.step("b/t", "", section.width / t - 3.0, "", "Table B4.1b",
                    note=f"compact up to {1.12 * root:.1f}; corners of 1.5 t")  # fmt: skip
    web = w.step("h/t", "", section.depth / t - 3.0, "", "Table B4.1b",
                 note=f"compact up to {2.42 * root:.1f}")  # fmt: skip
    w.step("M_p", "{F_y} {Z}", fy * plastic, "moment", "(F7-1)", F_y=(fy, "stress"),
           Z=(plastic, "section modulus"))  # fmt: skip
    nominal = box_strength(flange, web, z=plastic, s=elastic, e=e, fy=fy)
    if nominal is None:
        return None
    _wall_steps(w, flange, web, plastic, elastic, e, fy)
    return min(nominal, _box_lateral(design, f, fy, w, elastic))


def _wall_steps(
    w: Working, flange: float, web: float, z: float, s: float, e: float, fy: float
) -> None:
    """Write down what walls that are not compact leave."""
    mp, root = fy * z, math.sqrt(e / fy)
    given = {"M_p": (mp, "moment"), "F_y": (fy, "stress"), "S": (s, "section modulus"),
             "E": (e, "stress")}  # fmt: skip
    limit = math.sqrt(fy / e)
    if flange > 1.12 * root:
        w.step("M_n,f", "{M_p} - ({M_p} - {F_y} {S}) (3.57 {b/t} √({F_y}/{E}) - 4.0) ≤ M_p",
               min(mp, mp - (mp - fy * s) * (3.57 * flange * limit - 4.0)), "moment", "(F7-2)",
               note="flange not compact", **{"b/t": (flange, "")}, **given)  # fmt: skip
    if web > 2.42 * root:
        w.step("M_n,w", "{M_p} - ({M_p} - {F_y} {S}) (0.305 {h/t} √({F_y}/{E}) - 0.738) ≤ M_p",
               min(mp, mp - (mp - fy * s) * (0.305 * web * limit - 0.738)), "moment", "(F7-6)",
               note="web not compact", **{"h/t": (web, "")}, **given)  # fmt: skip


def _elastic(d: Mapping[str, float]) -> float:
    return min(d["section_modulus_top"], d["section_modulus_bottom"])


def _box_lateral(design: MemberDesign, f: Figures, fy: float, w: Working, elastic: float) -> float:
    """F7.4 with C_b = 1, over the whole stretch between places where both flanges are held."""
    section, lb = design.section, f["k_L"] * lateral_length(design)
    e, mp = f["E"], fy * plates(section)["plastic_modulus"]
    if section.depth <= section.width:  # bent about its weak axis, or square
        return mp
    ry = math.sqrt(section.inertia_lateral / section.area)
    root = math.sqrt(section.torsion * section.area)
    given = {"E": (e, "stress"), "r_y": (ry, "section length"), "J": (section.torsion, "inertia"),
             "A": (section.area, "area")}  # fmt: skip
    lp = w.step("L_p", "0.13 {E} {r_y} √({J} {A}) / {M_p}", 0.13 * e * ry * root / mp, "length",
                "(F7-12)", note="", M_p=(mp, "moment"), **given)  # fmt: skip
    lr = w.step("L_r", "2 {E} {r_y} √({J} {A}) / (0.7 {F_y} {S_x})",
                2.0 * e * ry * root / (0.7 * fy * elastic), "length", "(F7-13)", note="",
                F_y=(fy, "stress"), S_x=(elastic, "section modulus"), **given)  # fmt: skip
    w.step("L_b", "", lb, "length", "", note="where both flanges are held")
    if lb <= lp:
        return mp
    if lb <= lr:
        return w.step(
            "M_n", "{M_p} - ({M_p} - 0.7 {F_y} {S_x}) ({L_b} - {L_p}) / ({L_r} - {L_p})",
            mp - (mp - 0.7 * fy * elastic) * (lb - lp) / (lr - lp), "moment", "(F7-10)",
            note="C_b = 1", M_p=(mp, "moment"), F_y=(fy, "stress"),
            S_x=(elastic, "section modulus"), L_b=(lb, "length"), L_p=(lp, "length"),
            L_r=(lr, "length"),
        )  # fmt: skip
    return w.step("M_n", "2 {E} {r_y} √({J} {A}) / {L_b}", 2.0 * e * ry * root / lb, "moment",
                  "(F7-11)", note="C_b = 1", L_b=(lb, "length"), **given)  # fmt: skip
