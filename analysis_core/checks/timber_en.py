"""Rectangular timber members by EN 1995-1-1:2004 + A1/A2: bending, shear, lateral buckling.

Symbols are those of the standard; clauses are written from memory of it and marked as not
confirmed.  The action of the shortest duration in a combination sets k_mod, so a combination with
a smaller total load can govern; every combination is checked with its own k_mod.
"""

from __future__ import annotations

import math
from collections.abc import Mapping

from analysis_core.checks.design import (
    EffectField,
    MemberDesign,
    UnbracedSegment,
    segments,
    strength_of,
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
    "k_cr": Figure(0.67, "EN 1995-1-1, 6.1.7(2)", "cracks", national=True),
    "service_class": Figure(1, "EN 1995-1-1, 2.3.1.3", "service class of the project"),
    "k_sys": Figure(1.0, "EN 1995-1-1, 6.6", "1.1 where members share the load"),
}
_NOT_COVERED = (
    "Not covered: axial force, torsion, notches, holes, bearing, vibration, fire, curved members."
)


def check_timber(
    design: MemberDesign, figures: Figures, durations: Mapping[str, str], glulam: bool
) -> list[Check]:
    """Return the checks of a timber member: bending with lateral buckling, and shear.

    ``durations``: the load-duration class that sets k_mod, by the name of a combination.
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
    bending: Check | None = None
    shear: Check | None = None
    for field in design.fields:
        duration = durations.get(field.source.split(" (")[0], "permanent")
        check = _bending(design, figures, field, duration, glulam)
        bending = check if bending is None or check.use > bending.use else bending
        check = _shear(design, figures, field, duration, glulam)
        shear = check if shear is None or check.use > shear.use else shear
    return [check for check in (bending, shear) if check is not None]


def modification_factor(service_class: int, duration: str) -> float:
    """Return k_mod of Table 3.1.  Raises KeyError or ValueError for unknown classes."""
    return _KMOD[service_class][DURATIONS.index(duration)]


def size_factor(depth: float, glulam: bool) -> float:
    """Return k_h (3.2(3), 3.3(3)) for the depth of the section in m."""
    if glulam:
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
    w: Working, symbol: str, value: float, f: Figures, duration: str, glulam: bool, size: float
) -> float:
    class_ = int(f["service_class"])
    k_mod = w.step("k_mod", "", modification_factor(class_, duration), "", "Table 3.1",
                   note=f"service class {class_}, {duration} action")  # fmt: skip
    gamma = f["gamma_M_glulam"] if glulam else f["gamma_M_solid"]
    return w.step(
        f"{symbol},d", "{k_mod} {k_h} {k_sys} {f_k} / {gamma_M}",
        k_mod * size * f["k_sys"] * value / gamma, "stress", "2.4.1(1), (2.14)",
        k_mod=(k_mod, ""), k_h=(size, ""), k_sys=(f["k_sys"], ""), f_k=(value, "stress"),
        gamma_M=(gamma, ""),
    )  # fmt: skip


def _bending(
    design: MemberDesign, f: Figures, field: EffectField, duration: str, glulam: bool
) -> Check:
    w = Working()
    b, h = design.section.width, design.section.depth
    strength = _design_strength(
        w, "f_m", strength_of(design.material, "fmk"), f, duration, glulam, size_factor(h, glulam)
    )
    modulus = w.step("W", "{b} {h}² / 6", b * h**2 / 6.0, "section modulus", "",
                     b=(b, "section length"), h=(h, "section length"))  # fmt: skip
    worst: tuple[float, float, float, float] | None = None
    for segment in segments(design, field):
        k = critical_factor(_relative_slenderness(design, segment, glulam))
        use = segment.largest / (k * strength * modulus)
        if worst is None or use > worst[0]:
            worst = use, segment.largest, k, segment.at
    index = int(abs(field.moment).argmax())
    plain = abs(float(field.moment[index]))
    if worst is None or plain / (strength * modulus) > worst[0]:
        worst = 0.0, plain, 1.0, float(field.x[index])
        w.step("k_crit", "", 1.0, "", "6.3.3(5)", note="the compressed edge is held, or stocky")
    else:
        w.step("k_crit", "", worst[2], "", "6.3.3(4), (6.34)")
    resistance = w.step("M_Rd", "{k_crit} {f} {W}", worst[2] * strength * modulus, "moment",
                        "6.1.6, 6.3.3(3)", k_crit=(worst[2], ""), f=(strength, "stress"),
                        W=(modulus, "section modulus"))  # fmt: skip
    return w.check(
        "bending", "EN 1995-1-1, 6.1.6, 6.3.3", demand=worst[1], resistance=resistance,
        quantity="moment", x=worst[3], source=field.source, not_covered=_NOT_COVERED,
    )  # fmt: skip


def _relative_slenderness(design: MemberDesign, segment: UnbracedSegment, glulam: bool) -> float:
    """6.3.3(2): σ_crit = 0.78 b² E_0.05 / (h l_ef), with l_ef the whole segment plus 2 h."""
    b, h = design.section.width, design.section.depth
    ratio = 5.0 / 6.0 if glulam else 2.0 / 3.0  # E_0.05 over the mean modulus, EN 14080, EN 338
    low = ratio * design.material.elastic_modulus
    effective = segment.length + 2.0 * h
    critical = 0.78 * b**2 * low / (h * effective)
    return math.sqrt(strength_of(design.material, "fmk") / critical)


def _shear(
    design: MemberDesign, f: Figures, field: EffectField, duration: str, glulam: bool
) -> Check:
    w = Working()
    b, h = design.section.width, design.section.depth
    strength = _design_strength(
        w, "f_v", strength_of(design.material, "fvk"), f, duration, glulam, 1.0
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
