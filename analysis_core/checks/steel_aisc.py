"""Steel members by AISC 360 (2016 and 2022), strength or allowable stress.

Symbols are those of the specification.  Clauses are written from memory of it and marked as not
confirmed.  Covered: doubly symmetric I-shapes (F2, F3), rectangular and round hollow sections
(F7, F8), compact channels (F2), bent about the strong axis; axial force in ``steel_aisc_axial``.
I-shapes without a fillet radius count as built up.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from analysis_core.checks.design import (
    EffectField,
    MemberDesign,
    UnbracedSegment,
    gradient_operands,
    is_stainless,
    moment_gradient,
    plates,
    segments,
    strength_of,
    unknown_properties,
    unlike_profile,
)
from analysis_core.checks.steel_aisc_axial import check_axial
from analysis_core.checks.steel_aisc_hollow import check_hollow
from analysis_core.checks.steel_aisc_parts import (
    FIGURES,
    NOT_COVERED,
    available_strength,
    with_design_walls,
)
from analysis_core.checks.working import Check, Figures, Working, not_checked

__all__ = ["FIGURES", "check_steel"]

_COVERED = ("I", "channel", "hollow rectangle", "tube")


@dataclass(frozen=True, slots=True)
class IShape:
    """Dimensions and properties of an I-shape or channel in the symbols of the specification."""

    d: float
    bf: float
    tf: float
    tw: float
    h: float
    zx: float
    sx: float
    iy: float
    j: float
    cw: float
    area: float
    channel: bool = False
    built_up: bool = False

    @property
    def ry(self) -> float:
        """Radius of gyration about the weak axis, m."""
        return math.sqrt(self.iy / self.area)

    @property
    def ho(self) -> float:
        """Distance between flange centroids, m."""
        return self.d - self.tf

    @property
    def rts(self) -> float:
        """Effective radius of gyration (F2-7), m."""
        return math.sqrt(math.sqrt(self.iy * self.cw) / self.sx)

    @property
    def c(self) -> float:
        """F2-8: 1 for I-shapes; ho/2 √(Iy/Cw) for channels."""
        return self.ho / 2.0 * math.sqrt(self.iy / self.cw) if self.channel else 1.0


def check_steel(design: MemberDesign, figures: Figures, *, allowable: bool = False) -> list[Check]:
    """Return the checks of a steel member: flexure and shear.

    ``allowable``: strengths are divided by Ω (allowable stress combinations), else multiplied by φ.
    """
    section, fy = design.section, strength_of(design.material, "fy")
    if section.shape not in _COVERED:
        reason = f"A section of the shape '{section.shape or 'unknown'}' is outside this check."
        return [not_checked("steel strength", reason, "AISC 360")]
    if not fy:
        reason = (
            f"Material '{design.material.name}' states no yield stress; give it in the job file "
            f"(materials: strength: {{fy: 50 ksi}})."
        )
        return [not_checked("steel strength", reason, "AISC 360")]
    if is_stainless(design.material):
        reason = f"'{design.material.name}' is stainless; AISC 370 is not covered."
        return [not_checked("steel strength", reason, "AISC 360, A3")]
    if section.shape == "I":
        d = plates(section)
        if d.get("top_flange_width") != d.get("bottom_flange_width"):
            reason = "The two flanges differ; unequal flanges are outside this check."
            return [not_checked("steel strength", reason, "AISC 360, F4")]
    if reason := unlike_profile(section) or unknown_properties(section):
        return [not_checked("steel strength", reason, "AISC 360")]
    design = with_design_walls(design, figures)
    hollow = section.shape not in ("I", "channel")
    flexure = (
        check_hollow(design, figures, fy, allowable)
        if hollow
        else check_flexure(design, figures, fy, allowable)
    )
    shear = _shear(design, figures, fy, allowable)

    def under(field: EffectField) -> tuple[float, float]:
        if hollow:
            return float(abs(field.moment).max()), flexure.resistance
        return _worst_under(design, figures, fy, field, allowable)

    axial = check_axial(design, figures, fy, flexure, under, allowable=allowable)
    return [flexure, shear, *axial]


def shape_of(design: MemberDesign) -> IShape:
    """Return the section in the symbols of the specification."""
    section, d = design.section, plates(design.section)
    r = d.get("fillet_radius", 0.0)
    return IShape(
        d=d["depth"], bf=d["width"], tf=d["flange_thickness"], tw=d["web_thickness"],
        h=d["depth"] - 2.0 * (d["flange_thickness"] + r), zx=d["plastic_modulus"],
        sx=min(d["section_modulus_top"], d["section_modulus_bottom"]),
        iy=section.inertia_lateral, j=section.torsion, cw=d.get("warping", 0.0),
        area=section.area, channel=section.shape == "channel", built_up=r <= 0.0,
    )  # fmt: skip


def limiting_lengths(s: IShape, e: float, fy: float) -> tuple[float, float]:
    """Return L_p (F2-5) and L_r (F2-6) in m."""
    lp = 1.76 * s.ry * math.sqrt(e / fy)
    x = s.j * s.c / (s.sx * s.ho)
    lr = (
        1.95 * s.rts * e / (0.7 * fy)
        * math.sqrt(x + math.sqrt(x**2 + 6.76 * (0.7 * fy / e) ** 2))
    )  # fmt: skip
    return lp, lr


def lateral_strength(s: IShape, e: float, fy: float, lb: float, cb: float) -> float:
    """Return M_n for lateral torsional buckling (F2-1 to F2-4), N·m."""
    mp = fy * s.zx
    lp, lr = limiting_lengths(s, e, fy)
    if lb <= lp:
        return mp
    if lb <= lr:
        inelastic = cb * (mp - (mp - 0.7 * fy * s.sx) * (lb - lp) / (lr - lp))
        return min(inelastic, mp)
    slender = lb / s.rts
    fcr = (
        cb * math.pi**2 * e / slender**2
        * math.sqrt(1.0 + 0.078 * s.j * s.c / (s.sx * s.ho) * slender**2)
    )  # fmt: skip
    return min(fcr * s.sx, mp)


def flange_strength(s: IShape, e: float, fy: float) -> float:
    """Return M_n for local buckling of the compression flange (F3), N·m."""
    mp = fy * s.zx
    slender = s.bf / s.tf if s.channel else s.bf / (2.0 * s.tf)
    compact, noncompact = flange_limits(s, e, fy)
    if slender <= compact:
        return mp
    if slender <= noncompact:
        return mp - (mp - 0.7 * fy * s.sx) * (slender - compact) / (noncompact - compact)
    return 0.9 * e * _kc(s) * s.sx / slender**2


def flange_limits(s: IShape, e: float, fy: float) -> tuple[float, float]:
    """Return the limits of b/t for compact and noncompact flanges (Table B4.1b, cases 10, 11)."""
    compact = 0.38 * math.sqrt(e / fy)
    if s.built_up and not s.channel:
        return compact, 0.95 * math.sqrt(_kc(s) * e / (0.7 * fy))
    return compact, 1.0 * math.sqrt(e / fy)


def _kc(s: IShape) -> float:
    return min(max(4.0 / math.sqrt(s.h / s.tw), 0.35), 0.76)


def check_flexure(design: MemberDesign, f: Figures, fy: float, allowable: bool) -> Check:
    """Return the check of an I-shape or channel in flexure (F2, F3)."""
    s, e = shape_of(design), f["E"]
    if s.h / s.tw > 3.76 * math.sqrt(e / fy):
        reason = f"The web ratio h/tw = {s.h / s.tw:.1f} is not compact; F4 and F5 are not covered."
        return not_checked("flexure", reason, "AISC 360, Table B4.1b")
    if s.channel and s.bf / s.tf > 0.38 * math.sqrt(e / fy):
        reason = "The flanges of the channel are not compact; that is not covered."
        return not_checked("flexure", reason, "AISC 360, Table B4.1b")
    found = [
        _segment(s, f, fy, segment, allowable)
        for field in design.fields
        for segment in segments(design, field)
    ]
    return max([*found, _section(design, s, f, fy, allowable)], key=lambda check: check.use)


def _worst_under(
    design: MemberDesign, f: Figures, fy: float, field: EffectField, allowable: bool
) -> tuple[float, float]:
    """Moment and available strength of the length that uses most of it under one field."""
    s = shape_of(design)
    found = [
        (abs(segment.largest), _segment(s, f, fy, segment, allowable).resistance)
        for segment in segments(design, field)
    ]
    local = available_strength(Working(), f, "b", _local(Working(), s, f["E"], fy), allowable)
    found.append((float(abs(field.moment).max()), local))
    return max(found, key=lambda pair: pair[0] / pair[1])


def _section(design: MemberDesign, s: IShape, f: Figures, fy: float, allowable: bool) -> Check:
    """Yielding and flange buckling at the largest moment, where no length is unbraced."""
    w = Working()
    nominal = _local(w, s, f["E"], fy)
    available = available_strength(w, f, "b", nominal, allowable)
    worst = max(design.governing.sagging, design.governing.hogging, key=lambda m: abs(m.value))
    return w.check(
        "flexure", "AISC 360, F2.1, F3", demand=worst.value, resistance=available,
        quantity="moment", x=worst.x, source=worst.source, not_covered=NOT_COVERED,
    )  # fmt: skip


def _local(w: Working, s: IShape, e: float, fy: float) -> float:
    plastic = w.step(
        "M_p", "{F_y} {Z_x}", fy * s.zx, "moment", "(F2-1)",
        F_y=(fy, "stress"), Z_x=(s.zx, "section modulus"),
    )  # fmt: skip
    slender = s.bf / s.tf if s.channel else s.bf / (2.0 * s.tf)
    compact = 0.38 * math.sqrt(e / fy)
    words = "compact" if slender <= compact else "not compact: F3 applies"
    w.step("b/t", "", slender, "", "Table B4.1b", note=f"limit {compact:.2f}: {words}")
    if slender <= compact:
        return plastic
    compact, noncompact = flange_limits(s, e, fy)
    value = flange_strength(s, e, fy)
    given = {"λ": (slender, ""), "S_x": (s.sx, "section modulus")}
    if slender <= noncompact:
        return w.step(
            "M_n,FLB",
            "{M_p} - ({M_p} - 0.7 {F_y} {S_x}) ({λ} - {λ_pf}) / ({λ_rf} - {λ_pf})", value,
            "moment", "(F3-1)", note="", M_p=(plastic, "moment"), F_y=(fy, "stress"),
            λ_pf=(compact, ""), λ_rf=(noncompact, ""), **given,
        )  # fmt: skip
    return w.step("M_n,FLB", "0.9 {E} {k_c} {S_x} / {λ}²", value, "moment", "(F3-2)", note="",
                  E=(e, "stress"), k_c=(_kc(s), ""), **given)  # fmt: skip


def _segment(s: IShape, f: Figures, fy: float, segment: UnbracedSegment, allowable: bool) -> Check:
    w, e = Working(), f["E"]
    local = _local(w, s, e, fy)
    lp, lr = limiting_lengths(s, e, fy)
    words = segment.words + (f"; times k_L = {f['k_L']:g}" if f["k_L"] != 1.0 else "")
    lb = w.step("L_b", "", f["k_L"] * segment.buckling_length, "length", "", note=words)
    w.step("L_p", "1.76 {r_y} √({E}/{F_y})", lp, "length", "(F2-5)",
           r_y=(s.ry, "section length"), E=(e, "stress"), F_y=(fy, "stress"))  # fmt: skip
    torsion = w.step("x", "{J} {c} / ({S_x} {h_o})", s.j * s.c / (s.sx * s.ho), "", "(F2-6)",
                     J=(s.j, "inertia"), c=(s.c, ""), S_x=(s.sx, "section modulus"),
                     h_o=(s.ho, "section length"))  # fmt: skip
    w.step("L_r", "1.95 {r_ts} {E}/(0.7 {F_y}) √({x} + √({x}² + 6.76 (0.7 {F_y}/{E})²))", lr,
           "length", "(F2-6)", r_ts=(s.rts, "section length"), E=(e, "stress"),
           F_y=(fy, "stress"), x=(torsion, ""))  # fmt: skip
    if segment.free:
        cb = w.step("C_b", "", moment_gradient(segment), "", "F1", note="1 at a free end")
    else:
        cb = w.step("C_b", "12.5 {M_max} / (2.5 {M_max} + 3 {M_2} + 4 {M_3} + 3 {M_4})",
                    moment_gradient(segment), "", "(F1-1)", note="moments at the quarter points",
                    **gradient_operands(segment))  # fmt: skip
    lateral = _lateral_step(w, s, e, fy, lb, cb)
    nominal = w.step("M_n", "", min(lateral, local), "moment", "F2, F3", note="the smaller")
    available = available_strength(w, f, "b", nominal, allowable)
    return w.check(
        "flexure", "AISC 360, F2, F3",
        demand=segment.largest,
        resistance=available, quantity="moment", x=segment.at, source=segment.source,
        not_covered=NOT_COVERED,
    )  # fmt: skip


def _lateral_step(w: Working, s: IShape, e: float, fy: float, lb: float, cb: float) -> float:
    """Write M_n for lateral torsional buckling down, by the formula that holds for L_b."""
    lp, lr = limiting_lengths(s, e, fy)
    value = lateral_strength(s, e, fy, lb, cb)
    sx, c = (s.sx, "section modulus"), (cb, "")
    if lb <= lp:
        return w.step("M_n,LTB", "", value, "moment", "(F2-1)", note="L_b ≤ L_p: M_p")
    if lb <= lr:
        return w.step(
            "M_n,LTB",
            "{C_b} ({M_p} - ({M_p} - 0.7 {F_y} {S_x}) ({L_b} - {L_p}) / ({L_r} - {L_p})) ≤ M_p",
            value, "moment", "(F2-2)", note="", C_b=c, M_p=(fy * s.zx, "moment"),
            F_y=(fy, "stress"), S_x=sx, L_b=(lb, "length"), L_p=(lp, "length"),
            L_r=(lr, "length"),
        )  # fmt: skip
    return w.step(
        "M_n,LTB", "{C_b} π² {E} {S_x} / ({L_b}/{r_ts})² √(1 + 0.078 {x} ({L_b}/{r_ts})²) ≤ M_p",
        value, "moment", "(F2-3), (F2-4)", note="", C_b=c, E=(e, "stress"), S_x=sx,
        L_b=(lb, "length"), r_ts=(s.rts, "section length"), x=(s.j * s.c / (s.sx * s.ho), ""),
    )  # fmt: skip


def _shear(design: MemberDesign, f: Figures, fy: float, allowable: bool) -> Check:
    section, e = design.section, f["E"]
    w = Working()
    kind, area, coefficient, clause = _shear_parts(design, fy, e, w)
    nominal = w.step(
        "V_n", "0.6 {F_y} {A_w} {C_v}", 0.6 * fy * area * coefficient, "force",
        {"tube": "(G5-1)", "hollow rectangle": "(G4-1)"}.get(section.shape, "(G2-1)"),
        F_y=(fy, "stress"), A_w=(area, "area"), C_v=(coefficient, ""),
    )  # fmt: skip
    available = available_strength(w, f, kind, nominal, allowable)
    worst = design.governing.shear
    return w.check(
        "shear", clause, demand=worst.value, resistance=available, quantity="force",
        x=worst.x, source=worst.source, not_covered=NOT_COVERED,
    )  # fmt: skip


def _shear_parts(
    design: MemberDesign, fy: float, e: float, w: Working
) -> tuple[str, float, float, str]:
    """Which factor applies, the area, the coefficient of buckling and the clause."""
    d, section = plates(design.section), design.section
    if section.shape == "tube":
        ratio = section.depth / d["wall_thickness"]
        buckling = 0.78 * e / ratio**1.5  # (G5-2b), which needs no length
        w.step("F_cr", "0.78 E / (D/t)^1.5 ≤ 0.6 F_y", min(buckling, 0.6 * fy), "stress", "(G5-2b)")
        return "v", section.area / 2.0, min(1.0, buckling / (0.6 * fy)), "AISC 360, G5"
    if section.shape == "hollow rectangle":
        t = d["wall_thickness"]
        h = section.depth - 3.0 * t
        w.step("h/t", "", h / t, "", "G4")
        return "v", 2.0 * h * t, panel_coefficient(h / t, 5.0, e, fy), "AISC 360, G4"
    s = shape_of(design)
    limit = 2.24 * math.sqrt(e / fy)
    w.step("h/t_w", "", s.h / s.tw, "", "G2.1", note=f"2.24 √(E/F_y) = {limit:.1f}")
    if not s.channel and not s.built_up and s.h / s.tw <= limit:
        return "v_rolled", s.d * s.tw, 1.0, "AISC 360, G2.1"
    return "v", s.d * s.tw, _web_coefficient(s.h / s.tw, 5.34, e, fy), "AISC 360, G2.1"


def panel_coefficient(ratio: float, kv: float, e: float, fy: float) -> float:
    """Return C_v2 (G2-9 to G2-11), without tension field, as G4 takes it."""
    root = math.sqrt(kv * e / fy)
    if ratio <= 1.10 * root:
        return 1.0
    if ratio <= 1.37 * root:
        return 1.10 * root / ratio
    return 1.51 * kv * e / (ratio**2 * fy)


def _web_coefficient(ratio: float, kv: float, e: float, fy: float) -> float:
    """C_v1 (G2-3, G2-4)."""
    limit = 1.10 * math.sqrt(kv * e / fy)
    return 1.0 if ratio <= limit else limit / ratio
