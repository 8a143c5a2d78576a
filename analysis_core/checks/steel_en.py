"""Steel members by EN 1993-1-1:2005: cross-section, lateral torsional buckling, axial force.

Symbols are those of the standard.  Clauses are written from memory of it and marked as not
confirmed.  What is covered is said in ``steel_en_section``.
"""

from __future__ import annotations

from analysis_core.checks import steel_en_section as section
from analysis_core.checks.design import MemberDesign
from analysis_core.checks.steel_en_axial import check_axial
from analysis_core.checks.steel_en_lateral import check_lateral
from analysis_core.checks.working import Check, Figures, not_checked

FIGURES = section.FIGURES


def check_steel(design: MemberDesign, figures: Figures) -> list[Check]:
    """Return the checks of a steel member: bending, shear, both, lateral buckling, axial force."""
    reason = section.outside(design)
    if reason:
        return [not_checked("steel resistance", reason, "EN 1993-1-1")]
    fy, thickness = section.yield_strength(design), section.thickest(design)
    if not fy:
        reason = (
            f"Parts of {design.section.name} are {1e3 * thickness:.0f} mm thick; Table 3.1 goes up "
            f"to 80 mm. Give the strength of that thickness under another name of material."
        )
        return [not_checked("steel resistance", reason, "EN 1993-1-1, 3.2.1")]
    class_, steps = section.classify(design, fy)
    if class_ == 4:
        reason = (
            f"The section {design.section.name} is of class 4; effective widths (EN 1993-1-5) are "
            f"not covered."
        )
        return [not_checked("bending", reason, "EN 1993-1-1, 5.5.2")]
    return [
        section.check_bending(design, figures, fy, class_, steps),
        section.check_shear(design, figures, fy),
        section.check_bending_and_shear(design, figures, fy, class_),
        check_lateral(design, figures, fy, class_),
        *check_axial(design, figures, fy, class_),
    ]
