"""Axial force with flexure by AISC 360: D2, E3 and H1.1."""

from __future__ import annotations

import math
from collections.abc import Callable

from analysis_core.checks.design import (
    NEGLIGIBLE,
    EffectField,
    MemberDesign,
    lateral_length,
    length_in_plane,
    plates,
)
from analysis_core.checks.working import Check, Figures, Working, not_checked

_NAME, _CLAUSE = "axial force and flexure", "AISC 360, H1.1"
_NOT_COVERED = (
    "Not covered: effects of second order, notional loads and reduced stiffness (C2); K = 1 holds "
    "with them. Not covered: torsional buckling (E4)."
)


Flexure = Callable[[EffectField], tuple[float, float]]
"""Moment and available strength of the length that uses most of it under a field, N·m."""


def check_axial(
    design: MemberDesign, f: Figures, fy: float, flexure: Check, under: Flexure, *, allowable: bool
) -> list[Check]:
    """Return the interaction check; none where the axial force is next to nothing.

    ``flexure`` is the check of flexure alone; ``under`` gives M_r and M_c under each field, for
    what governs flexure alone need not govern beside an axial force.
    """
    low, high = design.axial
    if max(high, -low) <= NEGLIGIBLE * design.section.area * fy:
        return []
    if flexure.status == "not checked":
        return [not_checked(_NAME, flexure.reason, _CLAUSE)]
    if low < 0.0:
        slender = _slender_walls(design, f["E"], fy)
        if slender or design.section.shape == "channel":
            reason = slender or "Channels may buckle by twisting (E4); that is not covered."
            return [not_checked(_NAME, reason, _CLAUSE)]
    return [_interaction(design, f, fy, under, allowable)]


def critical_stress(elastic: float, fy: float) -> float:
    """Return F_cr (E3-2, E3-3) for the elastic buckling stress F_e, Pa."""
    if fy / elastic <= 2.25:
        return float(0.658 ** (fy / elastic) * fy)
    return 0.877 * elastic


def interaction(axial: float, flexure: float) -> float:
    """Return the sum of (H1-1a), (H1-1b) from P_r/P_c and M_r/M_c; 1 is allowed."""
    if axial >= 0.2:
        return axial + 8.0 / 9.0 * flexure
    return axial / 2.0 + flexure


def _interaction(
    design: MemberDesign, f: Figures, fy: float, under: Flexure, allowable: bool
) -> Check:
    w, area, e = Working(), design.section.area, f["E"]
    slender = _slenderness(design, w)
    elastic = math.pi**2 * e / slender**2
    w.step("F_e", "π² {E} / {s}²", elastic, "stress", "(E3-4)", E=(e, "stress"), s=(slender, ""))
    given = {"F_e": (elastic, "stress")}
    if fy / elastic <= 2.25:
        stress = w.step("F_cr", "0.658^({F_y}/{F_e}) {F_y}", critical_stress(elastic, fy), "stress",
                        "(E3-2)", note="", F_y=(fy, "stress"), **given)  # fmt: skip
    else:
        stress = w.step("F_cr", "0.877 {F_e}", critical_stress(elastic, fy), "stress", "(E3-3)",
                        note="", **given)  # fmt: skip
    factors = (
        (1.0 / f["Omega_c"], 1.0 / f["Omega_t"]) if allowable else (f["phi_c"], f["phi_t"])
    )  # fmt: skip
    sign = "1/Ω" if allowable else "φ"
    compression = w.step("P_c", "{k} {F_cr} {A_g}", factors[0] * stress * area, "force",
                         "E1, (E3-1)", note=f"k = {sign}", k=(factors[0], ""),
                         F_cr=(stress, "stress"), A_g=(area, "area"))  # fmt: skip
    tension = w.step("T_c", "{k} {F_y} {A_g}", factors[1] * fy * area, "force", "D2(a)",
                     note=f"yielding, k = {sign}", k=(factors[1], ""), F_y=(fy, "stress"),
                     A_g=(area, "area"))  # fmt: skip
    worst: tuple[float, EffectField, float, float, float] | None = None
    for field in design.fields:
        moment, strength = under(field)
        for force in field.axial:
            share = -force / compression if force < 0.0 else force / tension
            use = interaction(share, moment / strength)
            if worst is None or use > worst[0]:
                worst = use, field, force, moment, strength
    if worst is None:
        return not_checked(_NAME, "No strength combination was found.", _CLAUSE)
    use, field, force, moment, strength = worst
    w.step("P_r", "", force, "force", "", note="tension positive")
    w.step("M_r", "", moment, "moment", "", note="with M_c, the length that uses most of it")
    w.step("M_c", "", strength, "moment", "F", note="as for flexure, under this combination")
    share = -force / compression if force < 0.0 else force / tension
    axial = (abs(force), "force"), (compression if force < 0.0 else tension, "force")
    bending = {"M_r": (moment, "moment"), "M_c": (strength, "moment")}
    if share >= 0.2:
        w.step("sum", "{P_r} / {P_c} + 8/9 · {M_r} / {M_c}", use, "", "(H1-1a)", note="at most 1",
               P_r=axial[0], P_c=axial[1], **bending)  # fmt: skip
    else:
        w.step("sum", "{P_r} / (2 {P_c}) + {M_r} / {M_c}", use, "", "(H1-1b)", note="at most 1",
               P_r=axial[0], P_c=axial[1], **bending)  # fmt: skip
    return w.check(
        _NAME, _CLAUSE, demand=use, resistance=1.0, quantity="", source=field.source,
        not_covered=_NOT_COVERED,
    )  # fmt: skip


def _slenderness(design: MemberDesign, w: Working) -> float:
    section = design.section
    radii = [math.sqrt(i / section.area) for i in (section.inertia, section.inertia_lateral)]
    lengths = [length_in_plane(design), lateral_length(design)]
    notes = ("K = 1; 2 where an end is free", "K = 1, where both flanges are held")
    found = []
    for axis, length, radius, note in zip("xy", lengths, radii, notes, strict=True):
        found.append(w.step(
            f"L_{axis}/r_{axis}", f"{{L_{axis}}} / {{r_{axis}}}", length / radius, "", "E2",
            note=note, **{f"L_{axis}": (length, "length"), f"r_{axis}": (radius, "section length")},
        ))  # fmt: skip
    return max(found)


def _slender_walls(design: MemberDesign, e: float, fy: float) -> str:
    """Table B4.1a: E3 holds for walls that are not slender in compression."""
    d, shape, root = plates(design.section), design.section.shape, math.sqrt(e / fy)
    if shape == "tube":
        slender = design.section.depth / d["wall_thickness"] > 0.11 * e / fy
    elif shape == "hollow rectangle":
        longest = max(design.section.depth, design.section.width)
        slender = longest / d["wall_thickness"] - 3.0 > 1.40 * root
    else:
        clear = d["depth"] - 2.0 * (d["flange_thickness"] + d.get("fillet_radius", 0.0))
        web, flange = clear / d["web_thickness"], d["width"] / (2.0 * d["flange_thickness"])
        kc = min(max(4.0 / math.sqrt(web), 0.35), 0.76)
        rolled = d.get("fillet_radius", 0.0) > 0.0
        limit = 0.56 * root if rolled else 0.64 * math.sqrt(kc) * root
        slender = web > 1.49 * root or flange > limit
    words = "A wall of the section is slender in compression (Table B4.1a); E7 is not covered."
    return words if slender else ""
