"""Reduction of imposed load by the area that a member carries; used only where asked for."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Reduction:
    """Factor on the imposed load, with the clause and how it was found."""

    factor: float
    clause: str
    working: str


def reduction(
    rule: str,
    figures: Mapping[str, float],
    *,
    area: float,
    category: str = "",
    psi0: float = 1.0,
    intensity: float = 0.0,
    element_factor: float = 2.0,
) -> Reduction:
    """Return the reduction for a beam by the rule of a rule set ("en-1991", "asce-7").

    ``category`` is that of the rule set, ``psi0`` belongs to it; ``intensity`` in Pa.  A rule set
    without a rule reduces nothing.
    """
    if rule == "en-1991":
        return en_1991_area(figures, psi0=psi0, area=area, category=category)
    if rule == "asce-7":
        return asce_7(figures, area=area, element_factor=element_factor, intensity=intensity)
    return Reduction(1.0, "", "the rule set has no reduction by area")


def en_1991_area(
    figures: Mapping[str, float], *, psi0: float, area: float, category: str
) -> Reduction:
    """Return alpha_A of EN 1991-1-1 6.3.1.2(10), expression (6.1).

    alpha_A = 5/7 psi0 + A0/A <= 1, and at least 0.6 in categories C and D.  ``area`` in m².  The
    categories A to D alone are reduced.  Not to be used together with psi0 on the same action
    (6.3.1.2(10), note; see the national annex).
    """
    clause = "EN 1991-1-1 6.3.1.2(10)"
    _positive(area)
    if category not in ("A", "B", "C", "D"):
        return Reduction(1.0, clause, f"category {category or 'unknown'} is not reduced")
    value = 5.0 / 7.0 * psi0 + figures["reduction.A0"] / area
    least = figures["reduction.floor_CD"] if category in ("C", "D") else 0.0
    factor = min(1.0, max(value, least))
    working = f"5/7 * {psi0:g} + {figures['reduction.A0']:g}/{area:.1f} = {value:.3f}"
    return Reduction(factor, clause, working)


def en_1991_storeys(*, psi0: float, storeys: int) -> Reduction:
    """Return alpha_n of EN 1991-1-1 6.3.1.2(11), expression (6.2), for what carries n storeys.

    alpha_n = (2 + (n - 2) psi0) / n for n > 2.  Not to be used together with psi0 < 1 on the same
    action (6.2.2).
    """
    clause = "EN 1991-1-1 6.3.1.2(11)"
    if storeys < 1:
        raise ValueError(f"the number of storeys carried must be at least 1; got {storeys}")
    if storeys <= 2:
        return Reduction(1.0, clause, "no more than two storeys are carried")
    factor = (2.0 + (storeys - 2) * psi0) / storeys
    return Reduction(
        min(1.0, factor), clause, f"(2 + {storeys - 2} * {psi0:g})/{storeys} = {factor:.3f}"
    )


def asce_7(
    figures: Mapping[str, float],
    *,
    area: float,
    element_factor: float,
    intensity: float,
    floors: int = 1,
    assembly: bool = False,
) -> Reduction:
    """Return the reduction of ASCE 7 4.7.2: L = Lo (0.25 + 4.57/sqrt(K_LL A_T)), SI.

    ``area`` A_T in m², ``element_factor`` K_LL (2 for interior beams, Table 4.7-1), ``intensity``
    Lo in Pa.  At least 0.5 where one floor is carried, 0.4 for more; nothing below
    K_LL A_T = 37.16 m² (400 ft²), above 100 psf on one floor (4.7.3; by a fifth at most
    where two or more floors are carried) or in assembly uses (4.7.5).
    """
    clause = "ASCE 7 4.7.2"
    _positive(area)
    influence = element_factor * area
    if assembly:
        return Reduction(1.0, "ASCE 7 4.7.5", "assembly uses are not reduced")
    if influence < figures["reduction.least_area"]:
        return Reduction(1.0, clause, f"K_LL A_T = {influence:.1f} m2 is too small")
    value = figures["reduction.intercept"] + figures["reduction.root_area"] / math.sqrt(influence)
    least = figures["reduction.least_one" if floors <= 1 else "reduction.least_more"]
    factor = min(1.0, max(value, least))
    working = (
        f"{figures['reduction.intercept']:g} + {figures['reduction.root_area']:g}"
        f"/sqrt({influence:.1f}) = {value:.3f}, at least {least:g}"
    )
    if intensity > figures["reduction.heavy"]:
        if floors <= 1:
            return Reduction(1.0, "ASCE 7 4.7.3", "heavy live load is not reduced")
        return Reduction(max(factor, 0.8), "ASCE 7 4.7.3", f"{working}; heavy: at least 0.8")
    return Reduction(factor, clause, working)


def _positive(area: float) -> None:
    if not area > 0.0:
        raise ValueError(f"the area carried must be positive; got {area} m2")
