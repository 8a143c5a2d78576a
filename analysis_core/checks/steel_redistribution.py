"""Whether a steel member may be checked with redistributed moments, by EN 1993-1-1 and AISC 360."""

from __future__ import annotations

import math

from analysis_core.checks.design import MemberDesign, plates, segments, strength_of
from analysis_core.checks.steel_aisc import flange_limits, shape_of
from analysis_core.checks.steel_en_lateral import reduction_between
from analysis_core.checks.steel_en_section import classify, outside, yield_strength
from analysis_core.checks.working import Check, Figures, Working, not_checked

_NAME = "redistribution"
_KSI = 6894757.293168361
_CLAUSES = {"en-1993-1-1": "EN 1993-1-1, 5.4.1(4)B", "aisc-360": "AISC 360, B3.3"}


def why_elastic(design: MemberDesign, figures: Figures, code: str) -> str:
    """Return why a member must be checked with elastic moments; "" where it need not.

    ``design`` holds the redistributed moments.
    """
    return _why_en(design, figures) if code == "en-1993-1-1" else _why_aisc(design, figures)


def check_redistribution(design: MemberDesign, code: str) -> Check | None:
    """Return the part redistributed against the most the code allows; None where none was."""
    shift, clause = design.redistribution, _CLAUSES[code]
    if shift is None or shift.fraction <= 0.0:
        return None
    most = shift.figure("steel")
    if not most:
        return not_checked(_NAME, "The rule set has no limit of redistribution for steel.", clause)
    w = Working()
    w.step("part", "", shift.fraction, "", clause.split(", ")[1],
           note="taken off the elastic support moment")  # fmt: skip
    return w.check(
        _NAME, clause, demand=shift.fraction, resistance=most, quantity="",
        not_covered="All checks of strength use the redistributed moments.",
    )  # fmt: skip


def _why_en(design: MemberDesign, f: Figures) -> str:
    """5.4.1(4)B: class 1 or 2, and lateral torsional buckling prevented."""
    fy = 0.0 if outside(design) else yield_strength(design)
    if not fy:
        return "It is outside the checks, so that its class is not known."
    class_, _ = classify(design, fy)
    if class_ > 2:
        return f"The section is of class {class_}; redistribution needs class 1 or 2."
    sources = {field.source for field in design.fields}
    if min((reduction_between(design, f, fy, class_, s) for s in sources), default=1.0) < 1.0:
        return "Lateral torsional buckling is not prevented, which redistribution asks for."
    return ""


def _why_aisc(design: MemberDesign, f: Figures) -> str:
    """B3.3, F13.5: compact, F_y to 65 ksi, L_b to (0.12 + 0.076 M_1/M_2) E/F_y r_y, little force.

    M_1/M_2 = -1, single curvature under equal moments, on the safe side.
    """
    fy, e = strength_of(design.material, "fy"), f["E"]
    if design.section.shape != "I" or "flange_thickness" not in plates(design.section) or not fy:
        return "Redistribution is covered for I-shapes of a known yield stress alone."
    shape = shape_of(design)
    flange = shape.bf / (2.0 * shape.tf) > flange_limits(shape, e, fy)[0]
    if flange or shape.h / shape.tw > 3.76 * math.sqrt(e / fy):
        return "The section is not compact, which redistribution asks for."
    if fy > 65.5 * _KSI:
        return "F_y is above 65 ksi, up to which redistribution is allowed."
    if -design.axial[0] > 0.15 * fy * design.section.area:
        return "The axial force is above 0.15 F_y A_g, up to which redistribution is allowed."
    longest = (0.12 - 0.076) * e / fy * shape.ry
    lengths = [s.length for field in design.fields for s in segments(design, field)]
    if max(lengths, default=0.0) > longest:
        return f"An unbraced length is above {longest:.2f} m (F13.5 with M_1/M_2 = -1)."
    return ""
