"""Axial force with bending by EN 1993-1-1: cross-section (6.2.9) and member (6.3.3, annex B)."""

from __future__ import annotations

import math

import numpy as np

from analysis_core.checks.design import (
    NEGLIGIBLE,
    EffectField,
    MemberDesign,
    lateral_length,
    length_in_plane,
    plates,
)
from analysis_core.checks.steel_en_lateral import (
    IMPERFECTION,
    reduction_between,
    reduction_factor,
)
from analysis_core.checks.steel_en_section import (
    compression,
    is_welded,
    moment_resistance_of,
    reduced_moment,
    shear_resistance_of,
)
from analysis_core.checks.working import Check, Figures, Working, not_checked

_NOT_COVERED = (
    "Not covered: effects of second order and imperfections (α_cr ≥ 10 is taken for granted, "
    "5.2.1), torsional buckling."
)


def check_axial(design: MemberDesign, f: Figures, fy: float, class_: int) -> list[Check]:
    """Return the checks of bending with axial force; none where the force is next to nothing."""
    low, high = design.axial
    if max(high, -low) <= NEGLIGIBLE * design.section.area * fy:
        return []
    checks = [_section(design, f, fy, class_)]
    if compression(design, fy):
        checks.append(_member(design, f, fy, class_))
    return checks


def moment_with_axial(design: MemberDesign, class_: int, share: float, moment: float) -> float:
    """Return M_N,Rd for N_Ed = ``share`` of N_pl,Rd, ``moment`` being that without axial force.

    I-sections and boxes of class 1 and 2: 6.2.9.1(4), (5); everything else by 6.2.1(7), linear.
    """
    if share >= 1.0:
        return 0.0
    d, area = plates(design.section), design.section.area
    if class_ > 2 or design.section.shape not in ("I", "hollow rectangle"):
        return moment * (1.0 - share)
    if design.section.shape == "I":
        hw = d["depth"] - 2.0 * d["flange_thickness"]
        a = min((area - 2.0 * d["width"] * d["flange_thickness"]) / area, 0.5)
        if share <= 0.25 and share * area <= 0.5 * hw * d["web_thickness"]:
            return moment
    else:
        a = min((area - 2.0 * design.section.width * d["wall_thickness"]) / area, 0.5)
    return min(moment, moment * (1.0 - share) / (1.0 - 0.5 * a))


def _section(design: MemberDesign, f: Figures, fy: float, class_: int) -> Check:
    w = Working()
    squash = w.step(
        "N_pl,Rd", "{A} {f_y} / {gamma_M0}", design.section.area * fy / f["gamma_M0"], "force",
        "6.2.3, 6.2.4", A=(design.section.area, "area"), f_y=(fy, "stress"),
        gamma_M0=(f["gamma_M0"], ""),
    )  # fmt: skip
    shear = shear_resistance_of(design, f, fy, Working())
    best: tuple[float, float, float, float, EffectField, float] | None = None
    for field in design.fields:
        force = _larger(field)
        for i in {int(np.abs(field.moment).argmax()), 0, len(field.x) - 1}:
            part = abs(float(field.shear[i])) / shear
            full = reduced_moment(design, f, fy, class_, part)
            reduced = moment_with_axial(design, class_, abs(force) / squash, full)
            moment = float(field.moment[i])
            bending = abs(moment) / reduced if reduced > 0.0 else math.inf
            use = max(bending, abs(force) / squash)
            if best is None or use > best[0]:
                best = use, force, moment, reduced, field, float(field.x[i])
    if best is None:
        return not_checked("bending with axial force", "No strength combination was found.")
    _, force, moment, reduced, field, x = best
    w.step("N_Ed", "", force, "force", "", note="tension positive, the largest along the member")
    share = w.step("n", "{N_Ed} / {N_pl}", abs(force) / squash, "", "6.2.9.1",
                   N_Ed=(abs(force), "force"), N_pl=(squash, "force"))  # fmt: skip
    full = reduced_moment_at(design, f, fy, class_, field, x)
    _reduced_step(design, w, class_, share, full, reduced)
    if share >= abs(moment) / reduced if reduced > 0.0 else True:
        return w.check("axial force", "EN 1993-1-1, 6.2.3, 6.2.4", demand=force, resistance=squash,
                       quantity="force", x=x, source=field.source,
                       not_covered=_NOT_COVERED)  # fmt: skip
    return w.check("bending with axial force", "EN 1993-1-1, 6.2.9", demand=moment,
                   resistance=reduced, quantity="moment", x=x, source=field.source,
                   not_covered=_NOT_COVERED)  # fmt: skip


def reduced_moment_at(
    design: MemberDesign, f: Figures, fy: float, class_: int, field: EffectField, x: float
) -> float:
    """Return M_V,Rd at a place of a field, N·m: the moment without axial force."""
    acting = abs(float(field.shear[int(np.abs(field.x - x).argmin())]))
    share = acting / shear_resistance_of(design, f, fy, Working())
    return reduced_moment(design, f, fy, class_, share)


def _reduced_step(
    design: MemberDesign,
    w: Working,
    class_: int,
    share: float,
    full: float,
    value: float,
) -> None:
    """Write M_N,Rd down by the formula that gave it."""
    section, d = design.section, plates(design.section)
    given = {"M_Rd": (full, "moment"), "n": (share, "")}
    if class_ > 2 or section.shape not in ("I", "hollow rectangle"):
        w.step("M_N,Rd", "{M_Rd} (1 - {n})", value, "moment", "6.2.1(7)",
               note="with shear above one half, 6.2.10", **given)  # fmt: skip
        return
    if value >= full * (1.0 - 1e-12):
        w.step("M_N,Rd", "", value, "moment", "6.2.9.1(4), (5)",
               note="so small a force reduces nothing")  # fmt: skip
        return
    wide, thick = d["width"], d.get("flange_thickness", 0.0)
    if section.shape == "hollow rectangle":
        wide, thick = section.width, d["wall_thickness"]
    part = w.step("a", "({A} - 2 {b} {t_f}) / {A} ≤ 0.5",
                  min((section.area - 2.0 * wide * thick) / section.area, 0.5), "", "6.2.9.1(5)",
                  A=(section.area, "area"), b=(wide, "section length"),
                  t_f=(thick, "section length"))  # fmt: skip
    w.step("M_N,Rd", "{M_Rd} (1 - {n}) / (1 - 0.5 {a}) ≤ M_Rd", value, "moment",
           "6.2.9.1(5)", note="with shear above one half, 6.2.10", a=(part, ""),
           **given)  # fmt: skip


def _member(design: MemberDesign, f: Figures, fy: float, class_: int) -> Check:
    """(6.61) and (6.62) with annex B; C_m = 1 throughout, on the safe side."""
    name, clause = "buckling with bending", "EN 1993-1-1, 6.3.3"
    if design.section.shape == "channel":
        reason = "Channels may buckle by twisting (6.3.1.4); that is not covered."
        return not_checked(name, reason, clause)
    w, section = Working(), design.section
    squash = section.area * fy / f["gamma_M1"]
    chi_y = _flexural(design, w, "y", f["L_cr_y"] * length_in_plane(design), section.inertia, fy)
    chi_z = _flexural(design, w, "z", lateral_length(design), section.inertia_lateral, fy)
    moment_resistance = moment_resistance_of(design, f, fy, class_, w) * f["gamma_M0"]
    moment_resistance /= f["gamma_M1"]
    worst: tuple[float, EffectField, float, float, float, float] | None = None
    for field in design.fields:
        force = max(-field.axial[0], 0.0)
        if not force:
            continue
        moment = float(np.abs(field.moment).max())
        chi_lt = reduction_between(design, f, fy, class_, field.source)
        y, z = (force / (chi * squash) for chi in (chi_y[0], chi_z[0]))
        k_yy = interaction_factor(class_, chi_y[1], y)
        k_zy = 1.0 if section.shape == "I" else 0.8 * k_yy
        bending = moment / (chi_lt * moment_resistance)
        use = max(y + k_yy * bending, z + k_zy * bending)
        if worst is None or use > worst[0]:
            worst = use, field, force, moment, k_yy, chi_lt
    assert worst is not None  # the member is compressed under some field
    use, field, force, moment, k_yy, chi_lt = worst
    w.step("N_Ed", "", force, "force", "", note="compression")
    w.step("M_y,Ed", "", moment, "moment", "")
    w.step("χ_LT", "", chi_lt, "", "6.3.2", note="under the same combination")
    n_y = force / (chi_y[0] * squash)
    if class_ <= 2:
        w.step("k_yy", "1 + {λ} {n_y}", k_yy, "", "annex B, Table B.1",
               note="C_my = 1; λ = λ_y - 0.2, from 0 to 0.8",
               λ=(min(max(chi_y[1] - 0.2, 0.0), 0.8), ""), n_y=(n_y, ""))  # fmt: skip
    else:
        w.step("k_yy", "1 + 0.6 {λ} {n_y}", k_yy, "", "annex B, Table B.1",
               note="C_my = 1; λ = λ_y ≤ 1", λ=(min(chi_y[1], 1.0), ""), n_y=(n_y, ""))  # fmt: skip
    words = "largest value of Table B.2" if section.shape == "I" else "0.8 k_yy, Table B.1"
    w.step("k_zy", "", 1.0 if section.shape == "I" else 0.8 * k_yy, "", "annex B", note=words)
    k_zy = 1.0 if section.shape == "I" else 0.8 * k_yy
    common = {"N_Ed": (force, "force"), "N_Rk/γ_M1": (squash, "force"),
              "M_y,Ed": (moment, "moment"), "χ_LT": (chi_lt, ""),
              "M_y,Rk/γ_M1": (moment_resistance, "moment")}  # fmt: skip
    for axis, chi, factor, equation in (
        ("y", chi_y[0], k_yy, "(6.61)"), ("z", chi_z[0], k_zy, "(6.62)"),
    ):  # fmt: skip
        value = force / (chi * squash) + factor * moment / (chi_lt * moment_resistance)
        w.step(
            f"use_{axis}", f"{{N_Ed}} / ({{χ_{axis}}} {{N_Rk/γ_M1}}) + {{k_{axis}y}} {{M_y,Ed}} / "
            "({χ_LT} {M_y,Rk/γ_M1})", value, "", f"6.3.3(4), {equation}", note="",
            **common, **{f"χ_{axis}": (chi, ""), f"k_{axis}y": (factor, "")},
        )  # fmt: skip
    return w.check(
        name, clause, demand=use, resistance=1.0, quantity="", source=field.source,
        not_covered=_NOT_COVERED,
    )  # fmt: skip


def interaction_factor(class_: int, slenderness: float, share: float) -> float:
    """Return k_yy of Table B.1 with C_my = 1, ``share`` being N_Ed over χ_y N_Rk/γ_M1."""
    if class_ <= 2:
        return 1.0 + min(max(slenderness - 0.2, 0.0), 0.8) * share
    return 1.0 + 0.6 * min(slenderness, 1.0) * share


def flexural_curve(design: MemberDesign, axis: str) -> str:
    """Return the buckling curve of Table 6.2 about "y" or "z", for steels up to S450.

    Hollow sections count as cold formed, on the safe side.
    """
    if design.section.shape != "I":
        return "c"
    d = plates(design.section)
    thick = d["flange_thickness"]
    if is_welded(design):
        curves = "bc" if thick <= 0.040 + 1e-9 else "cd"
    elif d["depth"] / d["width"] > 1.2:
        curves = "ab" if thick <= 0.040 + 1e-9 else "bc"
    else:
        curves = "bc" if thick <= 0.100 + 1e-9 else "dd"
    return curves["yz".index(axis)]


def _flexural(
    design: MemberDesign, w: Working, axis: str, length: float, inertia: float, fy: float
) -> tuple[float, float]:
    """Return χ and the relative slenderness for buckling about one axis (6.3.1)."""
    if length <= 0.0:
        w.step(f"χ_{axis}", "", 1.0, "", "6.3.1", note="both flanges are held all along")
        return 1.0, 0.0
    e, area = design.material.elastic_modulus, design.section.area
    w.step(f"L_cr,{axis}", "", length, "length", "5.2.2(7)")
    critical = w.step(
        f"N_cr,{axis}", "π² {E} {I} / {L_cr}²", math.pi**2 * e * inertia / length**2, "force",
        "6.3.1.2(1)", E=(e, "stress"), I=(inertia, "inertia"), L_cr=(length, "length"),
    )  # fmt: skip
    slender = w.step(
        f"λ_{axis}", "√({A} {f_y} / {N_cr})", math.sqrt(area * fy / critical), "", "6.3.1.2(1)",
        A=(area, "area"), f_y=(fy, "stress"), N_cr=(critical, "force"),
    )  # fmt: skip
    curve = flexural_curve(design, axis)
    chi = reduction_factor(slender, IMPERFECTION[curve], plateau=0.2, beta=1.0)
    alpha = IMPERFECTION[curve]
    if slender <= 0.2:
        return w.step(
            f"χ_{axis}", "", chi, "", "6.3.1.2(4)", note="no reduction up to 0.2"
        ), slender
    phi = w.step(
        f"Φ_{axis}", "0.5 (1 + {α} ({λ} - 0.2) + {λ}²)",
        0.5 * (1.0 + alpha * (slender - 0.2) + slender**2), "", "6.3.1.2(1)",
        note=f"curve {curve}", α=(alpha, ""), λ=(slender, ""),
    )  # fmt: skip
    return w.step(f"χ_{axis}", "1 / ({Φ} + √({Φ}² - {λ}²)) ≤ 1", chi, "", "6.3.1.2(1), (6.49)",
                  Φ=(phi, ""), λ=(slender, "")), slender  # fmt: skip


def _larger(field: EffectField) -> float:
    return max(field.axial, key=abs)
