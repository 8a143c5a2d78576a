"""Steel members in bending and shear by AISC 360 (2016 and 2022), strength or allowable stress.

Symbols are those of the specification.  Clauses are written from memory of it and marked as not
confirmed.  Covered: doubly symmetric I-shapes (F2, F3), rectangular and round hollow sections
(F7, F8), compact channels (F2), bent about the strong axis, without axial force.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

from analysis_core.checks.design import MemberDesign, UnbracedSegment, plates, segments, strength_of
from analysis_core.checks.working import Check, Figure, Figures, Working, not_checked

FIGURES: Mapping[str, Figure] = {
    "phi_b": Figure(0.90, "AISC 360, F1(1)", "resistance factor for flexure"),
    "Omega_b": Figure(1.67, "AISC 360, F1(1)", "safety factor for flexure"),
    "phi_v": Figure(0.90, "AISC 360, G1", "resistance factor for shear"),
    "Omega_v": Figure(1.67, "AISC 360, G1", "safety factor for shear"),
    "phi_v_rolled": Figure(1.00, "AISC 360, G2.1(a)", "rolled I-shapes with stocky webs"),
    "Omega_v_rolled": Figure(1.50, "AISC 360, G2.1(a)", "rolled I-shapes with stocky webs"),
    "E": Figure(29000 * 6894757.293168361, "AISC 360, symbols", "modulus of elasticity, Pa"),
}
_COVERED = ("I", "channel", "hollow rectangle", "tube")
_NOT_COVERED = "Not covered: axial force, torsion, biaxial bending, concentrated forces on the web."


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
    if section.shape == "I":
        d = plates(section)
        if d.get("top_flange_width") != d.get("bottom_flange_width"):
            reason = "The two flanges differ; unequal flanges are outside this check."
            return [not_checked("steel strength", reason, "AISC 360, F4")]
    flexure = _flexure_open if section.shape in ("I", "channel") else _flexure_hollow
    return [flexure(design, figures, fy, allowable), _shear(design, figures, fy, allowable)]


def shape_of(design: MemberDesign) -> IShape:
    """Return the section in the symbols of the specification."""
    section, d = design.section, plates(design.section)
    r = d.get("fillet_radius", 0.0)
    return IShape(
        d=d["depth"], bf=d["width"], tf=d["flange_thickness"], tw=d["web_thickness"],
        h=d["depth"] - 2.0 * (d["flange_thickness"] + r), zx=d["plastic_modulus"],
        sx=min(d["section_modulus_top"], d["section_modulus_bottom"]),
        iy=section.inertia_lateral, j=section.torsion, cw=d.get("warping", 0.0),
        area=section.area, channel=section.shape == "channel",
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
    compact, noncompact = 0.38 * math.sqrt(e / fy), 1.0 * math.sqrt(e / fy)
    if slender <= compact:
        return mp
    if slender <= noncompact:
        return mp - (mp - 0.7 * fy * s.sx) * (slender - compact) / (noncompact - compact)
    kc = min(max(4.0 / math.sqrt(s.h / s.tw), 0.35), 0.76)
    return 0.9 * e * kc * s.sx / slender**2


def moment_gradient(moments: tuple[float, float, float, float, float]) -> float:
    """Return C_b (F1-1) from the moments at ends and quarter points of the unbraced segment."""
    m0, a, b, c, m4 = (abs(m) for m in moments)
    largest = max(m0, a, b, c, m4)
    if largest == 0.0:
        return 1.0
    return 12.5 * largest / (2.5 * largest + 3.0 * a + 4.0 * b + 3.0 * c)


def _flexure_open(design: MemberDesign, f: Figures, fy: float, allowable: bool) -> Check:
    s, e = shape_of(design), f["E"]
    if s.h / s.tw > 3.76 * math.sqrt(e / fy):
        reason = f"The web ratio h/tw = {s.h / s.tw:.1f} is not compact; F4 and F5 are not covered."
        return not_checked("flexure", reason, "AISC 360, Table B4.1b")
    if s.channel and s.bf / s.tf > 0.38 * math.sqrt(e / fy):
        reason = "The flanges of the channel are not compact; that is not covered."
        return not_checked("flexure", reason, "AISC 360, Table B4.1b")
    found: Check | None = None
    for field in design.fields:
        for segment in segments(design, field):
            check = _segment(s, f, fy, segment, allowable)
            if found is None or check.use > found.use:
                found = check
    section = _section(design, s, f, fy, allowable)
    return section if found is None or section.use >= found.use else found


def _section(design: MemberDesign, s: IShape, f: Figures, fy: float, allowable: bool) -> Check:
    """Yielding and flange buckling at the largest moment, where no length is unbraced."""
    w = Working()
    nominal = _local(w, s, f["E"], fy)
    available = _available(w, f, "b", nominal, allowable)
    worst = max(design.governing.sagging, design.governing.hogging, key=lambda m: abs(m.value))
    return w.check(
        "flexure", "AISC 360, F2.1, F3", demand=worst.value, resistance=available,
        quantity="moment", x=worst.x, source=worst.source, not_covered=_NOT_COVERED,
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
    return w.step("M_n,FLB", "", flange_strength(s, e, fy), "moment", "F3.2")


def _segment(s: IShape, f: Figures, fy: float, segment: UnbracedSegment, allowable: bool) -> Check:
    w, e = Working(), f["E"]
    local = _local(w, s, e, fy)
    lp, lr = limiting_lengths(s, e, fy)
    lb = w.step("L_b", "", segment.length, "length", "",
                note=f"between restraints of the {segment.flange} flange")  # fmt: skip
    w.step("L_p", "1.76 {r_y} √({E}/{F_y})", lp, "length", "(F2-5)",
           r_y=(s.ry, "section length"), E=(e, "stress"), F_y=(fy, "stress"))  # fmt: skip
    w.step("L_r", "1.95 {r_ts} {E}/(0.7 {F_y}) √(x + √(x² + 6.76 (0.7 {F_y}/{E})²))", lr,
           "length", "(F2-6)", note="x = J c / (S_x h_o)",
           r_ts=(s.rts, "section length"), E=(e, "stress"), F_y=(fy, "stress"))  # fmt: skip
    cb = w.step("C_b", "", moment_gradient(segment.moments), "", "(F1-1)",
                note="from the moments at the quarter points")  # fmt: skip
    equation = "(F2-1)" if lb <= lp else "(F2-2)" if lb <= lr else "(F2-3), (F2-4)"
    lateral = w.step("M_n,LTB", "", lateral_strength(s, e, fy, lb, cb), "moment", equation)
    nominal = w.step("M_n", "", min(lateral, local), "moment", "F2, F3", note="the smaller")
    available = _available(w, f, "b", nominal, allowable)
    return w.check(
        "flexure", "AISC 360, F2, F3",
        demand=segment.largest if segment.flange == "top" else -segment.largest,
        resistance=available, quantity="moment", x=segment.at, source=segment.source,
        not_covered=_NOT_COVERED,
    )  # fmt: skip


def _available(w: Working, f: Figures, kind: str, nominal: float, allowable: bool) -> float:
    quantity = "moment" if kind == "b" else "force"
    symbol = "M" if kind == "b" else "V"
    if allowable:
        omega = f[f"Omega_{kind}"]
        return w.step(
            f"{symbol}_n/Ω", "{nominal} / {Omega}", nominal / omega, quantity, "B3.2",
            nominal=(nominal, quantity), Omega=(omega, ""),
        )  # fmt: skip
    phi = f[f"phi_{kind}"]
    return w.step(
        f"φ{symbol}_n", "{phi} {nominal}", phi * nominal, quantity, "B3.1",
        phi=(phi, ""), nominal=(nominal, quantity),
    )  # fmt: skip


def _flexure_hollow(design: MemberDesign, f: Figures, fy: float, allowable: bool) -> Check:
    d, section, e = plates(design.section), design.section, f["E"]
    w = Working()
    plastic = d["plastic_modulus"]
    elastic = min(d["section_modulus_top"], d["section_modulus_bottom"])
    if section.shape == "tube":
        ratio, compact = d["depth"] / d["wall_thickness"], 0.07 * e / fy
        words, clause = "D/t", "AISC 360, F8"
    else:
        ratio = (d["width"] - 3.0 * d["wall_thickness"]) / d["wall_thickness"]
        compact, words, clause = 1.12 * math.sqrt(e / fy), "b/t", "AISC 360, F7"
        web = (d["depth"] - 3.0 * d["wall_thickness"]) / d["wall_thickness"]
        if web > 2.42 * math.sqrt(e / fy):
            reason = f"The web ratio h/t = {web:.1f} is not compact; F7.3 is not covered."
            return not_checked("flexure", reason, clause)
    w.step(words, "", ratio, "", "Table B4.1b", note=f"compact up to {compact:.2f}")
    if ratio > compact:
        reason = f"The wall ratio {words} = {ratio:.1f} is not compact; that is not covered."
        return not_checked("flexure", reason, clause)
    nominal = w.step(
        "M_p", "{F_y} {Z}", fy * plastic, "moment", "F7.1, F8.1",
        F_y=(fy, "stress"), Z=(plastic, "section modulus"),
    )  # fmt: skip
    if section.shape == "hollow rectangle":
        nominal = _box_lateral(design, f, fy, w, elastic, nominal)
    available = _available(w, f, "b", nominal, allowable)
    worst = max(design.governing.sagging, design.governing.hogging, key=lambda m: abs(m.value))
    return w.check(
        "flexure", clause, demand=worst.value, resistance=available, quantity="moment",
        x=worst.x, source=worst.source, not_covered=_NOT_COVERED,
    )  # fmt: skip


def _box_lateral(
    design: MemberDesign, f: Figures, fy: float, w: Working, elastic: float, mp: float
) -> float:
    """F7.4 with C_b = 1: long narrow boxes; the whole member counts as unbraced."""
    section, e = design.section, f["E"]
    ry = math.sqrt(section.inertia_lateral / section.area)
    root = math.sqrt(section.torsion * section.area)
    lp = w.step("L_p", "0.13 E r_y √(J A) / M_p", 0.13 * e * ry * root / mp, "length", "(F7-12)")
    lr = w.step("L_r", "2 E r_y √(J A) / (0.7 F_y S_x)", 2.0 * e * ry * root / (0.7 * fy * elastic),
                "length", "(F7-13)")  # fmt: skip
    lb = design.length
    if lb <= lp:
        return mp
    if lb <= lr:
        nominal = mp - (mp - 0.7 * fy * elastic) * (lb - lp) / (lr - lp)
    else:
        nominal = 2.0 * e * ry * root / lb
    return w.step("M_n", "", min(nominal, mp), "moment", "(F7-10), (F7-11)", note="C_b = 1")


def _shear(design: MemberDesign, f: Figures, fy: float, allowable: bool) -> Check:
    d, section, e = plates(design.section), design.section, f["E"]
    w = Working()
    kind, coefficient = "v", 1.0
    if section.shape == "tube":
        area, clause = section.area / 2.0, "AISC 360, G5"
    elif section.shape == "hollow rectangle":
        h, t = d["depth"] - 3.0 * d["wall_thickness"], d["wall_thickness"]
        area, clause, coefficient = 2.0 * h * t, "AISC 360, G4", _web_coefficient(h / t, 5.0, e, fy)
    else:
        s = shape_of(design)
        area, clause = s.d * s.tw, "AISC 360, G2.1"
        if not s.channel and s.h / s.tw <= 2.24 * math.sqrt(e / fy):
            kind = "v_rolled"
        else:
            coefficient = _web_coefficient(s.h / s.tw, 5.34, e, fy)
        w.step("h/t_w", "", s.h / s.tw, "", "G2.1",
               note=f"2.24 √(E/F_y) = {2.24 * math.sqrt(e / fy):.1f}")  # fmt: skip
    nominal = w.step(
        "V_n", "0.6 {F_y} {A_w} {C_v1}", 0.6 * fy * area * coefficient, "force", "(G2-1)",
        F_y=(fy, "stress"), A_w=(area, "area"), C_v1=(coefficient, ""),
    )  # fmt: skip
    available = _available(w, f, kind, nominal, allowable)
    worst = design.governing.shear
    return w.check(
        "shear", clause, demand=worst.value, resistance=available, quantity="force",
        x=worst.x, source=worst.source, not_covered=_NOT_COVERED,
    )  # fmt: skip


def _web_coefficient(ratio: float, kv: float, e: float, fy: float) -> float:
    limit = 1.10 * math.sqrt(kv * e / fy)
    return 1.0 if ratio <= limit else limit / ratio
