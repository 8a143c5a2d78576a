"""Rectangular timber members by EN 1995-1-1:2004 + A1/A2: bending, shear, bearing, deflection.

Symbols are those of the standard; clauses are written from memory of it and marked as not
confirmed.  The action of the shortest duration in a combination sets k_mod, so a combination with
a smaller total load can govern: each combination is also checked without its shorter actions.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping

from analysis_core.checks.design import (
    NEGLIGIBLE,
    Bearing,
    EffectField,
    MemberDesign,
    UnbracedSegment,
    segments,
    strength_of,
    unlike_profile,
)
from analysis_core.checks.working import Check, Figure, Figures, Working, not_checked

DURATIONS = ("permanent", "long", "medium", "short", "instantaneous")
_KMOD = {  # Table 3.1, solid timber, glued laminated timber and LVL, by service class
    1: (0.60, 0.70, 0.80, 0.90, 1.10),
    2: (0.60, 0.70, 0.80, 0.90, 1.10),
    3: (0.50, 0.55, 0.65, 0.70, 0.90),
}
FIGURES: Mapping[str, Figure] = {
    "gamma_M_solid": Figure(1.30, "EN 1995-1-1, Table 2.3", "solid timber", national=True),
    "gamma_M_glulam": Figure(1.25, "EN 1995-1-1, Table 2.3", "glued laminated", national=True),
    "gamma_M_lvl": Figure(1.20, "EN 1995-1-1, Table 2.3", "laminated veneer", national=True),
    "s_lvl": Figure(0.15, "EN 1995-1-1, 3.4(3)", "size effect of laminated veneer"),
    "k_cr": Figure(0.67, "EN 1995-1-1, 6.1.7(2)", "cracks", national=True),
    "service_class": Figure(1, "EN 1995-1-1, 2.3.1.3", "service class of the project"),
    "k_c90": Figure(1.0, "EN 1995-1-1, 6.1.5", "bearing; up to 1.5, 1.75 on discrete supports"),
    "w_inst": Figure(300.0, "EN 1995-1-1, Table 7.2", "span over w_inst", national=True),
    "w_net_fin": Figure(250.0, "EN 1995-1-1, Table 7.2", "span over w_net,fin", national=True),
    "k_sys": Figure(1.0, "EN 1995-1-1, 6.6", "1.1 where members share the load"),
}
KDEF = {1: 0.60, 2: 0.80, 3: 2.00}
"""Table 3.2, solid timber, glued laminated timber and LVL, by service class."""
_SIZES = {
    "glulam": "(600 mm / h)^0.1, from 1 to 1.1", "lvl": "(300 mm / h)^s, at most 1.2",
}  # fmt: skip
_NOT_COVERED = "Not covered: torsion, notches, holes, vibration, fire, curved members."


def check_timber(
    design: MemberDesign, figures: Figures, durations: Mapping[str, str], kind: str = "timber"
) -> list[Check]:
    """Return the checks of a timber member: bending, shear, bearing and deflection.

    ``durations``: the load-duration class that sets k_mod, by the source of a field.  ``kind``:
    "timber", "hardwood", "glulam" or "lvl".
    """
    section = design.section
    fm, fv = strength_of(design.material, "fmk"), strength_of(design.material, "fvk")
    if section.shape != "rectangle":
        reason = f"A section of the shape '{section.shape or 'unknown'}' is outside this check."
        return [not_checked("timber resistance", reason, "EN 1995-1-1")]
    if not fm or not fv:
        reason = (
            f"Material '{design.material.name}' states no bending and shear strength; give them in "
            f"the job file (materials: strength: {{fmk: 24 MPa, fvk: 4 MPa}})."
        )
        return [not_checked("timber resistance", reason, "EN 1995-1-1")]
    reason = unlike_profile(section)
    if int(figures["service_class"]) not in _KMOD:
        reason = f"Service class {figures['service_class']:g} is not one of 1, 2 and 3."
    if max(map(abs, design.axial)) > NEGLIGIBLE * section.area * fm:
        reason = "The member carries an axial force as well (6.2.3, 6.3.2); that is not covered."
    if reason:
        return [not_checked("timber resistance", reason, "EN 1995-1-1")]
    bending: Check | None = None
    shear: Check | None = None
    for field in design.fields:
        duration = durations.get(field.source, "permanent")
        check = _bending(design, figures, field, duration, kind)
        bending = check if bending is None or check.use > bending.use else bending
        check = _shear(design, figures, field, duration, kind)
        shear = check if shear is None or check.use > shear.use else shear
    made = [check for check in (bending, shear) if check is not None]
    made += [_bearing(design, figures, b, durations, kind) for b in design.bearings]
    return [*made, *_deflections(design, figures)]


def modification_factor(service_class: int, duration: str) -> float:
    """Return k_mod of Table 3.1.  Raises KeyError or ValueError for unknown classes."""
    return _KMOD[service_class][DURATIONS.index(duration)]


def size_factor(depth: float, kind: str, s: float = 0.15) -> float:
    """Return k_h (3.2(3), 3.3(3), 3.4(3)) for the depth of the section in m.

    That of laminated veneer, with its exponent ``s``, falls below 1 for deep sections.
    """
    if kind == "lvl":
        return float(min((0.300 / depth) ** s, 1.2))
    if kind == "glulam":
        return float(max(1.0, min((0.600 / depth) ** 0.1, 1.1)))
    return float(max(1.0, min((0.150 / depth) ** 0.2, 1.3)))


def critical_factor(slenderness: float) -> float:
    """Return k_crit (6.3.3(4), (6.34))."""
    if slenderness <= 0.75:
        return 1.0
    if slenderness <= 1.4:
        return 1.56 - 0.75 * slenderness
    return 1.0 / slenderness**2


def _design_strength(
    w: Working,
    symbol: str,
    value: float,
    f: Figures,
    duration: str,
    kind: str,
    size: float,
    *,
    shared: bool = True,
) -> float:
    class_ = int(f["service_class"])
    k_mod = w.step("k_mod", "", modification_factor(class_, duration), "", "Table 3.1",
                   note=f"service class {class_}, {duration} action")  # fmt: skip
    k_sys = f["k_sys"] if shared else 1.0
    gamma = f[{"glulam": "gamma_M_glulam", "lvl": "gamma_M_lvl"}.get(kind, "gamma_M_solid")]
    return w.step(
        f"{symbol},d", "{k_mod} {k_h} {k_sys} {f_k} / {gamma_M}",
        k_mod * size * k_sys * value / gamma, "stress", "2.4.1(1), (2.14)",
        k_mod=(k_mod, ""), k_h=(size, ""), k_sys=(k_sys, ""), f_k=(value, "stress"),
        gamma_M=(gamma, ""),
    )  # fmt: skip


def _bending(
    design: MemberDesign, f: Figures, field: EffectField, duration: str, kind: str
) -> Check:
    w = Working()
    b, h = design.section.width, design.section.depth
    size = w.step("k_h", "", size_factor(h, kind, f["s_lvl"]), "", "3.2(3), 3.3(3), 3.4(3)",
                  note=_SIZES.get(kind, "(150 mm / h)^0.2, from 1 to 1.3"))  # fmt: skip
    strength = _design_strength(
        w, "f_m", strength_of(design.material, "fmk"), f, duration, kind, size
    )
    modulus = w.step("W", "{b} {h}² / 6", b * h**2 / 6.0, "section modulus", "",
                     b=(b, "section length"), h=(h, "section length"))  # fmt: skip
    worst: tuple[float, float, float, float, UnbracedSegment | None, float] | None = None
    for segment, slender in _slender_segments(design, field, kind):
        k = critical_factor(slender)
        use = abs(segment.largest) / (k * strength * modulus)
        if worst is None or use > worst[0]:
            worst = use, segment.largest, k, segment.at, segment, slender
    index = int(abs(field.moment).argmax())
    plain = float(field.moment[index])
    if worst is None or abs(plain) / (strength * modulus) > worst[0]:
        worst = 0.0, plain, 1.0, float(field.x[index]), None, 0.0
    segment_, slender = worst[4], worst[5]
    if segment_ is None:
        w.step(
            "k_crit",
            "",
            1.0,
            "",
            "6.3.3(5)",
            note="where this moment acts, the compressed edge is held",
        )
    else:
        _slenderness_steps(w, design, segment_, slender, worst[2], kind)
    resistance = w.step("M_Rd", "{k_crit} {f} {W}", worst[2] * strength * modulus, "moment",
                        "6.1.6, 6.3.3(3)", k_crit=(worst[2], ""), f=(strength, "stress"),
                        W=(modulus, "section modulus"))  # fmt: skip
    return w.check(
        "bending", "EN 1995-1-1, 6.1.6, 6.3.3", demand=worst[1], resistance=resistance,
        quantity="moment", x=worst[3], source=field.source, not_covered=_NOT_COVERED,
    )  # fmt: skip


def _slenderness_steps(
    w: Working,
    design: MemberDesign,
    segment: UnbracedSegment,
    slender: float,
    k_crit: float,
    kind: str,
) -> None:
    b, h = design.section.width, design.section.depth
    fmk, low = strength_of(design.material, "fmk"), _low_modulus(design, kind)
    effective = w.step("l_ef", "{l} + 2 {h}", segment.buckling_length + 2.0 * h, "length",
                       "Table 6.1", note=segment.words.replace("flange", "edge")
                       + ", loads on the compressed edge", l=(segment.buckling_length, "length"),
                       h=(h, "section length"))  # fmt: skip
    critical = w.step("σ_m,crit", "0.78 {b}² {E_0,05} / ({h} {l_ef})", fmk / slender**2, "stress",
                      "6.3.3(2), (6.32)", note="", b=(b, "section length"),
                      h=(h, "section length"), l_ef=(effective, "length"),
                      **{"E_0,05": (low, "stress")})  # fmt: skip
    w.step("λ_rel,m", "√({f_m,k} / {σ_m,crit})", slender, "", "6.3.3(2), (6.30)", note="",
           **{"f_m,k": (fmk, "stress"), "σ_m,crit": (critical, "stress")})  # fmt: skip
    formula = "" if slender <= 0.75 else "1.56 - 0.75 {λ}" if slender <= 1.4 else "1 / {λ}²"
    w.step("k_crit", formula, k_crit, "", "6.3.3(4), (6.34)",
           note="no reduction up to 0.75" if slender <= 0.75 else "", λ=(slender, ""))  # fmt: skip


def _slender_segments(
    design: MemberDesign, field: EffectField, kind: str
) -> Iterator[tuple[UnbracedSegment, float]]:
    for segment in segments(design, field):
        yield segment, _relative_slenderness(design, segment, kind)


def _relative_slenderness(design: MemberDesign, segment: UnbracedSegment, kind: str) -> float:
    """6.3.3(2): σ_crit = 0.78 b² E_0.05 / (h l_ef), with l_ef the whole segment plus 2 h.

    For hardwood the same: 0.78 is what E/G = 16 gives.
    """
    b, h = design.section.width, design.section.depth
    effective = segment.buckling_length + 2.0 * h
    critical = 0.78 * b**2 * _low_modulus(design, kind) / (h * effective)
    return math.sqrt(strength_of(design.material, "fmk") / critical)


def _low_modulus(design: MemberDesign, kind: str) -> float:
    """E_0.05 from the mean modulus: EN 14080, EN 338 (hardwood 0.84: 2/3 is on the safe side)."""
    ratio = 5.0 / 6.0 if kind in ("glulam", "lvl") else 2.0 / 3.0
    return ratio * design.material.elastic_modulus


def _shear(design: MemberDesign, f: Figures, field: EffectField, duration: str, kind: str) -> Check:
    w = Working()
    b, h = design.section.width, design.section.depth
    strength = _design_strength(
        w, "f_v", strength_of(design.material, "fvk"), f, duration, kind, 1.0
    )
    effective = w.step("b_ef", "{k_cr} {b}", f["k_cr"] * b, "section length", "6.1.7(2), (6.13a)",
                       k_cr=(f["k_cr"], ""), b=(b, "section length"))  # fmt: skip
    index = int(abs(field.shear).argmax())
    demand = abs(float(field.shear[index]))
    resistance = w.step("V_Rd", "{b_ef} {h} {f} / 1.5", effective * h * strength / 1.5, "force",
                        "6.1.7(1)", b_ef=(effective, "section length"),
                        h=(h, "section length"), f=(strength, "stress"))  # fmt: skip
    return w.check(
        "shear", "EN 1995-1-1, 6.1.7", demand=demand, resistance=resistance, quantity="force",
        x=float(field.x[index]), source=field.source, not_covered=_NOT_COVERED,
    )  # fmt: skip


def _bearing(
    design: MemberDesign, f: Figures, bearing: Bearing, durations: Mapping[str, str], kind: str
) -> Check:
    """6.1.5: compression across the grain over a bearing whose width is known."""
    name, clause = f"bearing at joint {bearing.joint}", "EN 1995-1-1, 6.1.5"
    fc = strength_of(design.material, "fc90k")
    if not fc:
        reason = (
            f"Material '{design.material.name}' states no strength across the grain; give it in "
            f"the job file (materials: strength: {{fc90k: 2.5 MPa}})."
        )
        return not_checked(name, reason, clause)
    if bearing.width <= 0.0:
        return not_checked(name, "The width of the bearing is not known.", clause)
    worst: Check | None = None
    for source, force in bearing.forces:
        w = Working()
        duration = durations.get(source, "permanent")
        strength = _design_strength(w, "f_c,90", fc, f, duration, kind, 1.0, shared=False)
        length = w.step(
            "l_ef", "", effective_bearing(bearing.width, at_end=bearing.at_end), "section length",
            "6.1.5(1)", note="up to 30 mm more on each side where the beam goes on",
        )  # fmt: skip
        resistance = w.step(
            "F_c,90,Rd", "{k_c90} {f_c90d} {b} {l_ef}",
            f["k_c90"] * strength * design.section.width * length, "force", "6.1.5(1), (6.3)",
            k_c90=(f["k_c90"], ""), f_c90d=(strength, "stress"),
            b=(design.section.width, "section length"), l_ef=(length, "section length"),
        )  # fmt: skip
        check = w.check(
            name, clause, demand=force, resistance=resistance, quantity="force", x=bearing.x,
            source=source, not_covered=_BEARING_NOT_COVERED,
        )  # fmt: skip
        worst = check if worst is None or check.use > worst.use else worst
    return worst or not_checked(name, "Nothing presses on the bearing.", clause)


def effective_bearing(width: float, *, at_end: bool) -> float:
    """Return the contact length of 6.1.5(1), m: 30 mm more, at most the width, where it goes on."""
    more = min(0.030, width)
    return width + more if at_end else width + 2.0 * more


def _deflections(design: MemberDesign, f: Figures) -> list[Check]:
    """2.2.3, 7.2: at once, and in the end with creep; of cantilevers half the ratio."""
    if design.sags is None:
        reason = "The combinations have no characteristic and quasi-permanent ones."
        return [not_checked("deflection", reason, "EN 1995-1-1, 2.2.3")]
    out = []
    creep = KDEF[int(f["service_class"])]
    for sag in design.sags:
        w = Working()
        ratio = f[sag.name] / (2.0 if sag.cantilever else 1.0)
        if sag.name == "w_net_fin":
            w.step("k_def", "", creep, "", "Table 3.2",
                   note=f"service class {f['service_class']:g}")  # fmt: skip
        w.step(
            _SYMBOLS[sag.name], _FORMULAS[sag.name], abs(sag.value), "deflection", "2.2.3(5), (2.2)"
        )
        limit = w.step("limit", "{l} / {n}", sag.span / ratio, "deflection", "Table 7.2",
                       l=(sag.span, "length"), n=(ratio, ""))  # fmt: skip
        name = "deflection at once" if sag.name == "w_inst" else "deflection in the end"
        check = w.check(name, "EN 1995-1-1, 7.2", demand=sag.value, resistance=limit,
                        quantity="deflection", x=sag.x, source=sag.source,
                        not_covered=_SAG_NOT_COVERED)  # fmt: skip
        out.append(check)
    return out


_BEARING_NOT_COVERED = (
    "The bearing counts as wide as the beam; a force near it may allow less (6.1.5(4))."
)
_SYMBOLS: Mapping[str, str] = {"w_inst": "w_inst", "w_net_fin": "w_net,fin"}
_FORMULAS: Mapping[str, str] = {
    "w_inst": "w_G + w_Q,1 + Σ ψ_0,i w_Q,i",
    "w_net_fin": "w_G (1 + k_def) + w_Q,1 (1 + ψ_2,1 k_def) + Σ w_Q,i (ψ_0,i + ψ_2,i k_def)",
}
_SAG_NOT_COVERED = (
    "Deflection by shear is included, with G of the material and five sixths of the area. Not "
    "covered: camber, slip of connections, vibration."
)
