"""Rectangular and T concrete sections by ACI 318-19: required reinforcement.

Symbols are those of the code; clauses are written from memory of it and marked as not confirmed.
Square roots of strengths are taken in psi, as the code has them.
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

PSI = 6894.757293168361
_INCH = 0.0254

FIGURES: Mapping[str, Figure] = {
    "phi_t": Figure(0.90, "ACI 318-19, 21.2.2", "tension-controlled flexure"),
    "phi_v": Figure(0.75, "ACI 318-19, 21.2.1", "shear"),
    "f_y": Figure(60e3 * PSI, "ACI 318-19, 20.2.2", "yield strength of reinforcement, Pa"),
    "E_s": Figure(29e6 * PSI, "ACI 318-19, 20.2.2.2", "modulus of reinforcement, Pa"),
    "lambda": Figure(1.0, "ACI 318-19, 19.2.4", "lightweight concrete"),
    "rho_max": Figure(
        0.025,
        "ACI 318-19, 18.6.3.1",
        "most tension reinforcement over b_w d: set for "
        "special moment frames, taken as practical here",
    ),
    "cover": Figure(1.5 * _INCH, "ACI 318-19, 20.5.1", "cover, m: of the project"),
    "link": Figure(0.375 * _INCH, "project", "diameter of stirrups, m"),
    "bar": Figure(0.75 * _INCH, "project", "diameter of main bars, m"),
}
_MOST_STIRRUP = 60e3 * PSI  # Table 20.2.2.4(a)
_RATIOS = {
    0: (16.0, "simply supported"),
    1: (18.5, "one end continuous"),
    2: (21.0, "both ends continuous"),
}
_NOT_COVERED = (
    "Not covered: torsion, development, crack control, bars in a second layer, fire, deflections "
    "by calculation (24.2.3)."
)


@dataclass(frozen=True, slots=True)
class Flexure:
    """Required reinforcement in tension and in compression, m²; inf where none suffices.

    ``within``: the moment M_n that needs none in compression, N·m; ``stress`` in it, less that of
    the concrete it displaces, Pa.
    """

    tension: float
    compression: float
    within: float
    stress: float


def check_concrete(design: MemberDesign, figures: Figures) -> list[Check]:
    """Return required reinforcement for sagging, hogging and shear."""
    fc = strength_of(design.material, "fc") or strength_of(design.material, "fck")
    if reason := outside(design, 0.1 * fc * design.section.area):
        return [not_checked("concrete strength", reason, "ACI 318-19, 9.3.3.1")]
    if not 2400 * PSI <= fc <= 10_000 * PSI:
        reason = (
            f"Material '{design.material.name}' states f'c = {fc / PSI:.0f} psi; 2,500 to 10,000 "
            f"psi are covered. Give it in the job file (materials: strength: {{fc: 4 ksi}})."
        )
        return [not_checked("concrete strength", reason, "ACI 318-19, 19.2.1")]
    governing = design.governing
    checks = [
        _bending("sagging reinforcement", design, figures, fc, governing.sagging, bottom=True),
        _bending("hogging reinforcement", design, figures, fc, governing.hogging, bottom=False),
        _shear(design, figures, fc),
        _redistribution(design, figures),
        _least_depth(design, figures),
    ]
    return [check for check in checks if check is not None]


def stress_block_factor(fc: float) -> float:
    """Return β1 (Table 22.2.2.4.3) for f'c in Pa."""
    return min(0.85, max(0.65, 0.85 - 0.05 * (fc / PSI - 4000.0) / 1000.0))


def nominal_moment(area: float, *, b: float, d: float, fc: float, fy: float) -> float:
    """Return M_n = A_s f_y (d - a/2) in N·m of a singly reinforced rectangle."""
    a = area * fy / (0.85 * fc * b)
    return area * fy * (d - a / 2.0)


def required_area(
    moment: float,
    *,
    b: float,
    d: float,
    fc: float,
    fy: float,
    phi: float,
    flange: tuple[float, float] | None = None,
) -> float:
    """Return the tension reinforcement in m² for a factored moment; infinite where none does.

    ``b`` is the width of the web, ``flange`` width and depth of a compressed flange.
    """
    wide, deep = flange or (b, 0.0)
    nominal = moment / phi
    if wide > b:
        if nominal <= 0.85 * fc * wide * deep * (d - deep / 2.0):
            return required_area(moment, b=wide, d=d, fc=fc, fy=fy, phi=phi)
        sides = 0.85 * fc * (wide - b) * deep
        rest = phi * (nominal - sides * (d - deep / 2.0))
        return required_area(rest, b=b, d=d, fc=fc, fy=fy, phi=phi) + sides / fy
    block = 0.85 * fc * b
    inside = d**2 - 2.0 * nominal / block
    if inside < 0.0:
        return math.inf
    return block * (d - math.sqrt(inside)) / fy


def largest_area(
    *,
    b: float,
    d: float,
    fc: float,
    fy: float,
    e_s: float,
    flange: tuple[float, float] | None = None,
    strain: float = 0.0,
) -> float:
    """Return the reinforcement at which ε_t = ε_ty + 0.003 (9.3.3.1) or ``strain``, m²."""
    c = d * 0.003 / (0.003 + max(fy / e_s + 0.003, strain))
    a = stress_block_factor(fc) * c
    wide, deep = flange or (b, 0.0)
    block = wide * a if a <= deep else (wide - b) * deep + b * a
    return 0.85 * fc * block / fy


def required_reinforcement(
    moment: float,
    *,
    b: float,
    d: float,
    d2: float,
    fc: float,
    fy: float,
    phi: float,
    e_s: float,
    flange: tuple[float, float] | None = None,
    strain: float = 0.0,
) -> Flexure:
    """Return the reinforcement for a factored moment, with bars in compression where it takes them.

    ``d2``: their depth from the compressed edge.  The neutral axis stays where ε_t is that of
    9.3.3.1, or ``strain`` where that is more.
    """
    most = largest_area(b=b, d=d, fc=fc, fy=fy, e_s=e_s, flange=flange, strain=strain)
    tension = required_area(moment, b=b, d=d, fc=fc, fy=fy, phi=phi, flange=flange)
    if tension <= most * (1.0 + 1e-12):
        return Flexure(tension, 0.0, math.inf, 0.0)
    within = _moment_of(most, b=b, d=d, fc=fc, fy=fy, flange=flange)
    c = d * 0.003 / (0.003 + max(fy / e_s + 0.003, strain))
    stress = min(fy, e_s * 0.003 * (c - d2) / c) - 0.85 * fc
    if stress <= 0.0 or d <= d2:
        return Flexure(math.inf, math.inf, within, 0.0)
    compression = (moment / phi - within) / (stress * (d - d2))
    return Flexure(most + compression * stress / fy, compression, within, stress)


def _moment_of(
    area: float, *, b: float, d: float, fc: float, fy: float, flange: tuple[float, float] | None
) -> float:
    """M_n of a rectangle or T that is reinforced in tension alone, N·m."""
    wide, deep = flange or (b, 0.0)
    sides = min(0.85 * fc * (wide - b) * deep, area * fy)
    block = area * fy - sides
    if wide > b and area * fy <= 0.85 * fc * wide * deep:
        return nominal_moment(area, b=wide, d=d, fc=fc, fy=fy)
    a = block / (0.85 * fc * b)
    return sides * (d - deep / 2.0) + block * (d - a / 2.0)


def effective_flange(shape: ConcreteShape, length: float) -> float:
    """Return the effective width of a flange (Table 6.3.2.1), m; l_n is taken as the span."""
    side = (shape.flange - shape.web) / 2.0
    return shape.web + 2.0 * min(8.0 * shape.flange_depth, length / 8.0, side)


def concrete_shear(*, b: float, d: float, fc: float, light: float, rho: float | None) -> float:
    """Return V_c in N by Table 22.5.5.1: (a) with stirrups; (c) without, for the ratio ``rho``."""
    root = math.sqrt(fc / PSI) * PSI * light * b * d
    if rho is None:
        return 2.0 * root
    size = min(1.0, math.sqrt(2.0 / (1.0 + d / _INCH / 10.0)))
    return float(8.0 * size * rho ** (1.0 / 3.0) * root)


def _bending(
    name: str, design: MemberDesign, f: Figures, fc: float, extreme: Extreme, *, bottom: bool
) -> Check | None:
    moment = extreme.value if bottom else -extreme.value
    if moment <= 0.0:
        return None
    w = Working()
    shape, d = shape_of(design), design.section.depth - bar_depth(f)
    bw, flange = shape.web, compressed_flange(design, shape, effective_flange, top=bottom)
    w.step("d", "", d, "section length", "", note="to the centre of the bars")
    w.step("β1", "", stress_block_factor(fc), "", "Table 22.2.2.4.3")
    if flange:
        w.step(
            "b_f",
            "",
            flange[0],
            "section length",
            "Table 6.3.2.1",
            note="effective flange, l_n taken as the span",
        )
    strain, words = least_strain(design, f, bottom=bottom)
    found = required_reinforcement(
        moment, b=bw, d=d, d2=bar_depth(f), fc=fc, fy=f["f_y"], phi=f["phi_t"], e_s=f["E_s"],
        flange=flange, strain=strain,
    )  # fmt: skip
    w.step("ε_t", "", strain, "", "9.3.3.1", note=words)
    _flexure_steps(w, moment, found, flange, bw, d, fc, f)
    root, width = math.sqrt(fc / PSI), bw
    in_tension = shape.compressed_flange(top=not bottom)[0]
    if design.cantilever and in_tension > bw:  # statically determinate, flange in tension
        width = min(in_tension, 2.0 * bw)
    stress = max(3.0 * root, 200.0) * PSI
    words = f"max(3 √f'c, 200) psi, f'c = {fc / PSI:.0f} psi"
    words += "; twice the web or the flange, in tension" if width > bw else ""
    least = w.step(
        "A_s,min", "{σ} {b_w} {d} / {f_y}", stress * width * d / f["f_y"], "area", "9.6.1.2",
        note=words, σ=(stress, "stress"), b_w=(width, "section length"),
        d=(d, "section length"), f_y=(f["f_y"], "stress"),
    )  # fmt: skip
    needed = w.step("A_s", "", max(found.tension, least), "area", "",
                    note="tension reinforcement to be put in: the larger")  # fmt: skip
    largest = w.step("A_s,max", "{rho} {b_w} {d}", f["rho_max"] * bw * d, "area", "18.6.3.1",
                     note="taken as practical", rho=(f["rho_max"], ""),
                     b_w=(bw, "section length"), d=(d, "section length"))  # fmt: skip
    return w.check(
        name, "ACI 318-19, 9.3.3, 9.6.1, 22.2", demand=needed, resistance=largest,
        quantity="area", x=extreme.x, source=extreme.source, not_covered=_NOT_COVERED,
    )  # fmt: skip


def least_strain(design: MemberDesign, f: Figures, *, bottom: bool) -> tuple[float, str]:
    """Return the least ε_t at nominal strength: 9.3.3.1, and 6.6.5 where the moment was reduced."""
    least = f["f_y"] / f["E_s"] + 0.003
    shift = design.redistribution
    part = 1.0 - shift.delta(bottom=bottom) if shift is not None else 0.0
    if shift is None or part <= 0.0 or not shift.figure("per_strain"):
        return least, "at least ε_ty + 0.003"
    asked = max(shift.figure("least_strain"), part / shift.figure("per_strain"))
    return max(least, asked), f"at least, where {100 * part:.1f} % were taken off: 6.6.5.2, 6.6.5.3"


def _flexure_steps(
    w: Working,
    moment: float,
    found: Flexure,
    flange: tuple[float, float] | None,
    bw: float,
    d: float,
    fc: float,
    f: Figures,
) -> None:
    """Write down how the reinforcement follows from the moment."""
    phi, fy, depth = f["phi_t"], f["f_y"], bar_depth(f)
    if not math.isfinite(found.tension):
        w.step("A_s,req", "", found.tension, "area", "22.2", note="the section is too small")
        return
    if not found.compression:
        force = found.tension * fy
        lever = moment / phi / force
        wide = flange[0] if flange else bw
        if flange and force > 0.85 * fc * wide * flange[1]:
            w.step("h_f", "", flange[1], "section length", "22.2.2.4", note="the web is compressed "
                   "as well: the sides of the flange take b_f - b_w over h_f")  # fmt: skip
        else:
            a = force / (0.85 * fc * wide)
            w.step("a", "{d} - √({d}² - 2 {M_u} / ({phi} 0.85 {f'c} {b}))", a,
                   "section length", "22.2.2.4", note="", d=(d, "section length"),
                   M_u=(moment, "moment"), phi=(phi, ""),
                   b=(wide, "section length"), **{"f'c": (fc, "stress")})  # fmt: skip
        w.step("z", "" if flange else "d - a/2", lever, "section length", "")
        w.step("A_s,req", "{M_u} / ({phi} {f_y} {z})", found.tension, "area", "22.2, 22.3",
               note="tension-controlled", M_u=(moment, "moment"), phi=(phi, ""),
               f_y=(fy, "stress"), z=(lever, "section length"))  # fmt: skip
        return
    w.step("M_n1", "", found.within, "moment", "22.2", note="without bars in compression, ε_t as "
           "above")  # fmt: skip
    w.step("f'_s - 0.85 f'c", "", found.stress, "stress", "22.2.1", note="in the compressed bars, "
           "less the concrete they displace")  # fmt: skip
    w.step("A'_s", "({M_u}/{phi} - {M_n1}) / ({f'_s} ({d} - {d'}))", found.compression, "area",
           "22.2", note="compression reinforcement required", M_u=(moment, "moment"),
           phi=(phi, ""), M_n1=(found.within, "moment"), d=(d, "section length"),
           **{"f'_s": (found.stress, "stress"), "d'": (depth, "section length")})  # fmt: skip
    first = found.tension - found.compression * found.stress / fy
    w.step("A_s,req", "{A_s1} + {A'_s} {f'_s} / {f_y}", found.tension, "area", "22.2", note="",
           A_s1=(first, "area"), f_y=(fy, "stress"), **{"A'_s": (found.compression, "area"),
           "f'_s": (found.stress, "stress")})  # fmt: skip


def _redistribution(design: MemberDesign, f: Figures) -> Check | None:
    """6.6.5: 1000 ε_t percent, at most 20 %; ε_t is kept by ``least_strain``."""
    shift = design.redistribution
    if shift is None or shift.fraction <= 0.0:
        return None
    if not shift.figure("per_strain"):
        reason = "The rule set has no limits of 6.6.5 for redistribution."
        return not_checked("redistribution", reason, "ACI 318-19, 6.6.5")
    w = Working()
    strain, _ = least_strain(design, f, bottom=False)
    w.step("ε_t", "", strain, "", "6.6.5.2", note="which the hogging reinforcement keeps")
    part = shift.figure("per_strain")
    most = w.step("limit", "{k} {ε_t} ≤ {most}", min(part * strain, shift.figure("most")), "",
                  "6.6.5.3", note="1000 ε_t percent", k=(part, ""), ε_t=(strain, ""),
                  most=(shift.figure("most"), ""))  # fmt: skip
    return w.check(
        "redistribution", "ACI 318-19, 6.6.5", demand=shift.fraction, resistance=most, quantity="",
        not_covered="Flexure and shear are checked with the redistributed moments; they must not "
        "come from approximate coefficients (6.6.5.1).",
    )  # fmt: skip


def _shear(design: MemberDesign, f: Figures, fc: float) -> Check:
    w = Working()
    b, d = shape_of(design).web, design.section.depth - bar_depth(f)
    demand, root = abs(design.governing.shear.value), math.sqrt(fc / PSI)
    fyt = min(f["f_y"], _MOST_STIRRUP)
    w.step("b_w", "", b, "section length", "")
    w.step("d", "", d, "section length", "", note="to the centre of the bars")
    concrete = w.step(
        "V_c", "2 λ √f'c b_w d", concrete_shear(b=b, d=d, fc=fc, light=f["lambda"], rho=None),
        "force", "Table 22.5.5.1(a)",
        note=f"with at least the least stirrups; f'c = {fc / PSI:.0f} psi",
    )  # fmt: skip
    rho = max(3.0 * root, 200.0) * PSI / f["f_y"]
    plain = w.step(
        "V_c,0", "8 λ_s λ ρ_w^(1/3) √f'c b_w d",
        concrete_shear(b=b, d=d, fc=fc, light=f["lambda"], rho=rho), "force",
        "Table 22.5.5.1(c)", note="without stirrups, with the least main reinforcement",
    )  # fmt: skip
    most = w.step(
        "φ (V_c + 8 √f'c b_w d)", "", f["phi_v"] * (concrete + 8.0 * root * PSI * b * d), "force",
        "22.5.1.2",
    )  # fmt: skip
    steel = max(demand / f["phi_v"] - concrete, 0.0)
    least = max(0.75 * root, 50.0) * PSI * b / fyt
    threshold = f["phi_v"] * min(f["lambda"] * root * PSI * b * d, plain)
    if demand <= threshold:
        w.step("A_v/s", "", 0.0, "reinforcement per length", "9.6.3.1", note="no stirrups required")
    else:
        w.step("V_s", "{V_u} / {phi_v} - {V_c} ≥ 0", steel, "force", "22.5.8.1",
               V_u=(demand, "force"), phi_v=(f["phi_v"], ""), V_c=(concrete, "force"))  # fmt: skip
        w.step("A_v/s,min", "max(0.75 √f'c, 50 psi) b_w / f_yt", least, "reinforcement per length",
               "9.6.3.4")  # fmt: skip
        w.step("A_v/s", "{V_s} / ({f_yt} {d}) ≥ A_v/s,min", max(steel / (fyt * d), least),
               "reinforcement per length", "22.5.8.5.3, 9.6.3.4", note="stirrups per length",
               V_s=(steel, "force"), f_yt=(fyt, "stress"), d=(d, "section length"))  # fmt: skip
        w.step("s_max", *stirrup_spacing(steel, b=b, d=d, fc=fc), "section length",
               "Table 9.7.6.2.2", note="largest spacing of stirrups")  # fmt: skip
    return w.check(
        "shear", "ACI 318-19, 22.5", demand=demand, resistance=most, quantity="force",
        x=design.governing.shear.x, source=design.governing.shear.source, not_covered=_NOT_COVERED,
    )  # fmt: skip


def stirrup_spacing(steel: float, *, b: float, d: float, fc: float) -> tuple[str, float]:
    """Return the rule and the largest spacing of stirrups along a beam (Table 9.7.6.2.2), m."""
    if steel <= 4.0 * math.sqrt(fc / PSI) * PSI * b * d:
        return "d/2 ≤ 24 in", min(d / 2.0, 24.0 * _INCH)
    return "d/4 ≤ 12 in", min(d / 4.0, 12.0 * _INCH)


def _least_depth(design: MemberDesign, f: Figures) -> Check:
    """Table 9.3.1.1: depth over which deflections need not be computed."""
    w, span = Working(), design.span or design.length
    ratio, words = (8.0, "cantilever") if design.cantilever else _RATIOS[design.continuous_ends]
    least = span / ratio
    w.step("l/h", "", ratio, "", "Table 9.3.1.1", note=words)
    factor = w.step("factor", "0.4 + {f_y} / 100 ksi", 0.4 + f["f_y"] / (100e3 * PSI), "",
                    "9.3.1.1.1", f_y=(f["f_y"], "stress"))  # fmt: skip
    least = w.step("h_min", "{factor} {l} / {ratio}", least * factor, "section length",
                   "Table 9.3.1.1", factor=(factor, ""), l=(span, "length"),
                   ratio=(ratio, ""))  # fmt: skip
    return w.check(
        "span over depth", "ACI 318-19, 9.3.1", demand=span / design.section.depth,
        resistance=span / least, quantity="",
        not_covered="Holds where no partitions or finishes are attached that deflections damage; "
        "otherwise deflections must be computed (24.2.3).",
    )  # fmt: skip
