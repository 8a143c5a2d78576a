"""Reduction of imposed load by the area that a line carries, where the job file asks for it.

The area is what the area actions themselves tell: force over intensity.  A line reduces what is
put on it directly; what others hand down to it is reduced by their own, smaller areas, which is on
the safe side.  Actions that were not stated per area stay as they are.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

from analysis_core.effects.combinations import factored
from analysis_core.effects.live_load_reduction import Reduction, reduction
from analysis_core.findings import Finding
from analysis_core.model import Action, Case, DistributedForce, Line, LineModel, PointForce
from analysis_core.rules import RuleSet, classify
from analysis_core.settings import Settings


def reduced_by_area(
    model: LineModel, settings: Settings, rules: RuleSet
) -> tuple[LineModel, list[Finding]]:
    """Return the model with imposed area actions reduced, and a finding that says by how much."""
    if not settings.rules.live_load_reduction:
        return model, []
    intensities = {a.source: a.intensity for a in settings.area_actions if a.intensity > 0.0}
    kinds = classify(rules, model.cases).actions
    imposed = {c.name: c for c in model.cases if c.nature == "imposed"}
    findings: list[Finding] = []
    lines = []
    for line in model.lines:
        factors: dict[str, Reduction] = {}
        for case in imposed.values():
            area, heaviest = _area(line, case, intensities)
            if area > 0.0:
                category = kinds[case.name].name if case.name in kinds else case.category
                psi0 = rules.values().get(f"psi0.{category}", 1.0)
                factors[case.name] = reduction(
                    rules.reduction, rules.values(), area=area, category=category, psi0=psi0,
                    intensity=heaviest,
                )  # fmt: skip
        findings += [_finding(line, name, found) for name, found in factors.items()]
        lines.append(_reduced(line, intensities, factors))
    if not findings:
        message = (
            "Live-load reduction was asked for, but no imposed action is stated per area "
            "(area_actions), so the areas carried are not known; nothing was reduced."
        )
        findings.append(Finding("warning", "no-area-to-reduce-by", message))
    return replace(model, lines=tuple(lines)), findings


def _area(line: Line, case: Case, intensities: Mapping[str, float]) -> tuple[float, float]:
    """Area in m² that the area actions of a case put on a line, and the largest intensity."""
    area = heaviest = 0.0
    for action in line.actions:
        intensity = intensities.get(action.source, 0.0)
        if action.case == case.name and intensity:
            area += _force(action, line) / intensity
            heaviest = max(heaviest, intensity)
    return area, heaviest


def _force(action: Action, line: Line) -> float:
    """The downward resultant in N of an area action's share: across a level member."""
    if isinstance(action, PointForce):
        return action.transverse
    if isinstance(action, DistributedForce):
        length = action.end - action.start
        return sum(c * length ** (i + 1) / (i + 1) for i, c in enumerate(action.transverse))
    return 0.0


def _reduced(
    line: Line, intensities: Mapping[str, float], factors: Mapping[str, Reduction]
) -> Line:
    if not any(found.factor < 1.0 for found in factors.values()):
        return line
    actions = tuple(
        factored(action, factors[action.case].factor)
        if action.case in factors and action.source in intensities
        else action
        for action in line.actions
    )
    return replace(line, actions=actions)


def _finding(line: Line, case: str, found: Reduction) -> Finding:
    text = (
        f"Imposed area actions of case '{case}' on line {line.mark} are taken at "
        f"{found.factor:.3f} ({found.clause}: {found.working})."
    )
    return Finding("note", "reduced-by-area", text, line.elements, line.mark)
