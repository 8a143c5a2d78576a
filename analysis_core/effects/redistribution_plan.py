"""From what the engineer asks for to fractions at the supports of a line, held to the code."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from analysis_core.effects.redistribution import redistributable
from analysis_core.effects.redistribution_limits import (
    Known,
    Limit,
    largest_allowed,
    unmet_conditions,
)
from analysis_core.findings import Finding
from analysis_core.model import Line
from analysis_core.settings import Redistribution


@dataclass(frozen=True, slots=True)
class Plan:
    """Fractions by joint, the limit of the code (None: no rule for the material), findings."""

    fractions: Mapping[int, float]
    limit: Limit | None
    findings: tuple[Finding, ...] = ()
    ductility: str = ""
    """Class of reinforcement as stated: A, B, C or ""."""


def plan_redistribution(
    line: Line, wish: Redistribution, rules: Mapping[str, str], figures: Mapping[str, float]
) -> Plan:
    """Return the fractions to redistribute by.

    ``rules`` gives the rule by category of material ("concrete": "en-1992"), ``figures`` are those
    of the rule set by name.  A fraction above the limit is used as asked, with a warning; a support
    that cannot be redistributed keeps its moment, with a note where it was asked for by number.
    """
    category = _category(line)
    rule = rules.get(category, "")
    limit = largest_allowed(rule, figures, _known(line, wish)) if rule else None
    findings = _of_limit(line, wish, limit, category)
    fraction = limit.fraction if wish.largest and limit is not None else wish.fraction
    fractions: dict[int, float] = {}
    for support in redistributable(line):
        asked = wish.per_joint.get(support.joint, fraction)
        if not asked:
            continue
        if support.possible:
            fractions[support.joint] = asked
            findings += _over(line, support.joint, asked, limit)
        elif support.joint in wish.per_joint:
            findings.append(
                _finding(
                    line,
                    "warning",
                    "not-redistributed",
                    f"The moment at joint {support.joint} was not redistributed: {support.reason}.",
                )
            )
    known = {support.joint for support in redistributable(line)}
    for joint in sorted(set(wish.per_joint) - known):
        message = f"Joint {joint} is no support; its moment was not redistributed."
        findings.append(_finding(line, "warning", "not-redistributed", message))
    if fractions and rule:
        findings += [
            _finding(
                line, "warning", "redistribution-condition", f"{limit_clause(limit)}: {broken}."
            )
            for broken in unmet_conditions(rule, line)
        ]
    return Plan(fractions, limit, tuple(findings), wish.ductility)


def limit_clause(limit: Limit | None) -> str:
    """Return the clause of a limit, "" where there is none."""
    return limit.clause if limit is not None else ""


def _known(line: Line, wish: Redistribution) -> Known:
    strengths = [
        dict(member.material.strength).get("fck", 0.0)
        for member in line.members
        if member.material is not None
    ]
    return Known(
        neutral_axis_ratio=wish.neutral_axis_ratio,
        concrete_strength=max(strengths, default=0.0) or None,
        ductility=wish.ductility,
        net_tensile_strain=wish.net_tensile_strain,
        section_class=wish.section_class,
    )


def _category(line: Line) -> str:
    found = {m.material.category for m in line.members if m.material is not None}
    return found.pop() if len(found) == 1 else ""


def _of_limit(
    line: Line, wish: Redistribution, limit: Limit | None, category: str
) -> list[Finding]:
    if limit is None:
        what = f"material '{category}'" if category else "material of this line"
        message = f"The rule set has no limit of redistribution for the {what}"
        if wish.largest:
            return [
                _finding(
                    line, "warning", "not-redistributed",
                    f"{message}; nothing was redistributed. State a fraction in the job file.",
                )
            ]  # fmt: skip
        return [_finding(line, "note", "redistribution-unlimited", f"{message}; none was applied.")]
    if limit.missing:
        severity = "warning" if wish.largest else "note"
        return [
            _finding(
                line, severity, "redistribution-limit-unknown",
                f"{limit.clause}: the limit needs {limit.missing}. State it in the job file, or "
                f"see the member checks, which hold it with the reinforcement they require.",
            )
        ]  # fmt: skip
    return []


def _over(line: Line, joint: int, asked: float, limit: Limit | None) -> list[Finding]:
    if limit is None or limit.missing or asked <= limit.fraction + 1e-12:
        return []
    message = (
        f"{100 * asked:.1f} % of the moment at joint {joint} is redistributed; {limit.clause} "
        f"allows {100 * limit.fraction:.1f} %."
    )
    return [_finding(line, "warning", "redistribution-over-limit", message)]


def _finding(line: Line, severity: str, slug: str, message: str) -> Finding:
    return Finding(
        "warning" if severity == "warning" else "note",
        slug,
        f"Line {line.mark}: {message}",
        line.elements,
        line.mark,
    )
