"""What the checks of concrete by every code share: the shape, the flange, the depth of the bars."""

from __future__ import annotations

import math
import re
from collections.abc import Callable
from dataclasses import dataclass

from analysis_core.checks.design import NEGLIGIBLE, MemberDesign, plates, unlike_profile
from analysis_core.checks.working import Figures

_LIGHT = re.compile(r"lightweight|light-weight|leichtbeton|léger|\blc ?\d", re.I)


@dataclass(frozen=True, slots=True)
class ConcreteShape:
    """A rectangle or a T: web, and a flange on one side (m); without one its width is the web's."""

    depth: float
    web: float
    flange: float
    flange_depth: float
    flange_on_top: bool = True

    def compressed_flange(self, *, top: bool) -> tuple[float, float]:
        """Width and depth of the flange where the top (or the bottom) is compressed."""
        if top is self.flange_on_top and self.flange > self.web:
            return self.flange, self.flange_depth
        return self.web, self.depth

    def tension_width(self, *, bottom: bool, zone: float) -> float:
        """Mean width of the tension zone, which is ``zone`` m deep, on one side."""
        if bottom is self.flange_on_top or self.flange <= self.web:
            return self.web
        inside = min(self.flange_depth, zone)
        return (self.flange * inside + self.web * (zone - inside)) / zone


def shape_of(design: MemberDesign) -> ConcreteShape:
    """Return the shape as modelled."""
    section, d = design.section, plates(design.section)
    if section.shape == "rectangle":
        return ConcreteShape(section.depth, section.width, section.width, section.depth)
    return ConcreteShape(
        section.depth, d["web_thickness"], section.width, d["flange_thickness"],
        math.cos(d.get("roll", 0.0)) > 0.0,
    )  # fmt: skip


def outside(design: MemberDesign, limit: float) -> str:
    """Return why a member is outside the checks of concrete; "" where it is not.

    ``limit``: the compression, N, up to which axial force is left out on the safe side.
    """
    section = design.section
    if section.shape not in ("rectangle", "tee"):
        return f"A section of the shape '{section.shape or 'unknown'}' is outside this check."
    if section.shape == "tee" and not {"web_thickness", "flange_thickness"} <= set(plates(section)):
        return f"The dimensions of {section.name} are not known."
    if reason := unlike_profile(section):
        return reason
    if _LIGHT.search(design.material.name):
        return f"'{design.material.name}' is lightweight concrete, which is not covered."
    low, high = design.axial
    if high > NEGLIGIBLE * limit:
        return "The member is in tension as well; bending with axial force is not covered."
    if -low > limit:
        return (
            f"The member is compressed by {-low / 1e3:.0f} kN, more than the {limit / 1e3:.0f} kN "
            f"up to which it counts as a beam; columns are not covered."
        )
    return ""


def compressed_flange(
    design: MemberDesign,
    shape: ConcreteShape,
    effective: Callable[[ConcreteShape, float], float],
    *,
    top: bool,
) -> tuple[float, float] | None:
    """Effective width and depth of the flange, m; None where it is not compressed.

    ``effective`` gives the width that a code allows, by the shape and the length.
    """
    wide, deep = shape.compressed_flange(top=top)
    if wide <= shape.web:
        return None
    return effective(shape, design.span or design.length), deep


def bar_depth(f: Figures) -> float:
    """Return the distance from the face of the concrete to the centre of the bars, m."""
    return f["cover"] + f["link"] + f["bar"] / 2.0
