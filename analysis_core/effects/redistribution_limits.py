"""How far moments may be redistributed, by code, with the conditions that go with it."""

from __future__ import annotations

import itertools
from collections.abc import Callable, Mapping
from dataclasses import dataclass

from analysis_core.model import Line


@dataclass(frozen=True, slots=True)
class Limit:
    """The largest part of a support moment that may be redistributed.

    ``fraction`` 0.3 means that 70 % must remain.  ``conditions`` are what the engineer must see to;
    ``missing`` says what had to be known and was not, in which case ``fraction`` is 0.
    """

    rule: str
    fraction: float
    clause: str
    conditions: tuple[str, ...] = ()
    missing: str = ""


@dataclass(frozen=True, slots=True)
class Known:
    """What is known of the sections at the supports; None where it is not.

    ``neutral_axis_ratio``: depth of the neutral axis over effective depth after redistribution;
    ``concrete_strength``: characteristic cylinder strength, Pa; ``ductility``: class of
    reinforcement (A, B or C); ``net_tensile_strain``; ``section_class``: of a steel section.
    """

    neutral_axis_ratio: float | None = None
    concrete_strength: float | None = None
    ductility: str = ""
    net_tensile_strain: float | None = None
    section_class: int | None = None


def largest_allowed(rule: str, figures: Mapping[str, float], known: Known) -> Limit:
    """Return the limit of ``rule`` ("en-1992", "en-1993", "aci-318", "aisc-360").

    ``figures`` are those of the rule set by name (redistribution.k1 and so on).  Raises ValueError
    for another rule.
    """
    rules: dict[str, Callable[[Mapping[str, float], Known], Limit]] = {
        "en-1992": en_1992,
        "en-1993": en_1993,
        "aci-318": aci_318,
        "aisc-360": aisc_360,
    }
    if rule not in rules:
        raise ValueError(
            f"no rule for redistribution is called '{rule}'; known: {', '.join(rules)}"
        )
    return rules[rule](figures, known)


def en_1992(figures: Mapping[str, float], known: Known) -> Limit:
    """Return the limit of EN 1992-1-1 5.5(4), expressions (5.10a) and (5.10b).

    delta >= k1 + k2 xu/d up to 50 MPa, k3 + k4 xu/d above; >= k5 for reinforcement of class B and
    C, >= k6 for class A.  The reinforcement is taken as class A where it is not known.
    """
    clause = "EN 1992-1-1 5.5(4)"
    conditions = (
        "the line is continuous and mainly in bending",
        "adjacent spans are in a ratio of 0.5 to 2",
        "the neutral axis ratio is that of the section after redistribution",
    )
    if known.neutral_axis_ratio is None:
        return Limit(
            "en-1992", 0.0, clause, conditions, "the neutral axis ratio xu/d at the supports"
        )
    ratio = known.neutral_axis_ratio
    high = (known.concrete_strength or 0.0) > 50.0e6
    first, second = ("k3", "k4") if high else ("k1", "k2")
    least = figures["redistribution.k5" if known.ductility in ("B", "C") else "redistribution.k6"]
    delta = max(
        figures[f"redistribution.{first}"] + figures[f"redistribution.{second}"] * ratio, least
    )
    return Limit("en-1992", max(0.0, 1.0 - delta), clause, conditions)


def en_1993(figures: Mapping[str, float], known: Known) -> Limit:
    """Return the limit of EN 1993-1-1 5.4.1(4)B: 15 % in members of class 1 or 2."""
    clause = "EN 1993-1-1 5.4.1(4)B"
    conditions = (
        "all sections are of class 1 or 2",
        "lateral torsional buckling is prevented",
        "equilibrium is kept",
    )
    if known.section_class is not None and known.section_class > 2:
        return Limit("en-1993", 0.0, clause, conditions, "a section of class 1 or 2")
    return Limit("en-1993", figures["redistribution.steel"], clause, conditions)


def aci_318(figures: Mapping[str, float], known: Known) -> Limit:
    """Return the limit of ACI 318-19 6.6.5: 1000 eps_t percent, at most 20 %, from eps_t 0.0075."""
    clause = "ACI 318-19 6.6.5"
    conditions = (
        "moments were calculated, not taken from approximate coefficients",
        "the net tensile strain is that of the section where the moment is reduced",
    )
    strain = known.net_tensile_strain
    if strain is None:
        return Limit("aci-318", 0.0, clause, conditions, "the net tensile strain at the supports")
    if strain < figures["redistribution.least_strain"]:
        return Limit("aci-318", 0.0, clause, conditions)
    most = min(figures["redistribution.per_strain"] * strain, figures["redistribution.most"])
    return Limit("aci-318", most, clause, conditions)


def aisc_360(figures: Mapping[str, float], known: Known) -> Limit:
    """Return the reduction of AISC 360 B3.3: negative moments by a tenth."""
    clause = "AISC 360 B3.3"
    conditions = (
        "sections are compact and Fy is at most 65 ksi",
        "the moments come from gravity load and elastic analysis, and not from cantilevers",
        "the compression flange is braced as F13.5 asks",
        "the axial force is at most 0.15 of the yield force",
    )
    if known.section_class is not None and known.section_class > 1:
        return Limit("aisc-360", 0.0, clause, conditions, "a compact section")
    return Limit("aisc-360", figures["redistribution.steel"], clause, conditions)


def unmet_conditions(rule: str, line: Line) -> tuple[str, ...]:
    """Return the conditions of a rule that the line itself shows to be broken.

    EN 1992-1-1 5.5(4): adjacent spans in a ratio of 0.5 to 2.
    """
    if rule != "en-1992":
        return ()
    lengths: dict[int, float] = {}
    for member in line.members:
        if member.span is not None:
            lengths[member.span] = lengths.get(member.span, 0.0) + member.length
    ends = {number for number in lengths if _overhangs(line, number)}
    numbers = sorted(n for n in lengths if n not in ends)
    out = []
    for a, b in itertools.pairwise(numbers):
        ratio = lengths[a] / lengths[b]
        if not 0.5 <= ratio <= 2.0:
            out.append(
                f"spans {a} and {b} are {lengths[a]:.3f} m and {lengths[b]:.3f} m long, a ratio "
                f"of {ratio:.2f}; 0.5 to 2 is allowed"
            )
    return tuple(out)


def _overhangs(line: Line, number: int) -> bool:
    ends = [j for m in line.members if m.span == number for j in (m.start, m.end)]
    for joint in (j for j in ends if ends.count(j) == 1):
        meeting = sum(joint in (m.start, m.end) for m in line.members)
        support = line.joints[joint].support
        if meeting == 1 and (support is None or support.vertical == 0.0):
            return True
    return False
