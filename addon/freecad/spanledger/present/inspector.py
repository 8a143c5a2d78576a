"""What the desk says of a chosen joint, member or action, and of a whole line."""

from __future__ import annotations

import math

from analysis_core.model import FREE, RIGID, Support
from analysis_core.report.tables import safe
from analysis_core.results import LineResult, Outcome
from analysis_core.units import DisplayUnits

from .decisions import CONDITIONS
from .diagrams import View
from .symbols import support_kind
from .words import noop, say

SPRING = noop("spring")
SUPPORT_CHOICES = (*CONDITIONS, SPRING)
RELEASE_CHOICES = (noop("continuous"), noop("hinge"), SPRING)
STATUSES = (noop("balanced"), noop("not analysed"))


def line_facts(result: LineResult, outcome: Outcome, units: DisplayUnits) -> list[tuple[str, str]]:
    """Return (name, words) about a line as a whole."""
    line = result.line
    facts = [
        (say("Line"), safe(line.mark)),
        (say("Storey"), safe(line.storey or "–")),
        (say("State"), say(result.status)),
        (
            say("Length"),
            units.text(sum(m.length for m in line.members if m.role == "span"), "length"),
        ),
        (say("Rules"), safe(outcome.rules or "–")),
    ]
    if line.fault:
        facts.append((say("Not analysed"), safe(line.fault)))
    if result.solution is not None:
        facts.append((say("Method"), safe(result.solution.method)))
    if result.verification is not None:
        check = result.verification
        facts += [
            (say("Joint residual"), f"{check.joint_residual:.1e} N·m"),
            (say("Continuity"), f"{check.continuity_residual:.1e} rad"),
            (
                say("Independent check"),
                say("differs by {part}", part=f"{check.independent_check:.1e}"),
            ),
        ]
    return facts


def joint_facts(
    result: LineResult, joint: int, view: View, names: dict[str, str], units: DisplayUnits
) -> list[tuple[str, str]]:
    """Return (name, words) about a joint: what carries it, why, and its reactions."""
    at = result.line.joints[joint]
    facts = [(say("Place"), say("{length} along the line", length=units.text(at.x, "length")))]
    if at.element:
        facts.append((say("Carried by"), named(at.element, names)))
    if at.reason:
        facts.append((say("Reason"), safe(at.reason)))
    if at.width:
        facts.append((say("Bearing width"), units.text(at.width, "section length")))
    return facts + _reactions(result, joint, view, units)


def member_facts(
    result: LineResult, member: int, names: dict[str, str], units: DisplayUnits
) -> list[tuple[str, str]]:
    """Return (name, words) about a member: its element, section and material."""
    part = result.line.members[member]
    facts = [
        (say("Element"), named(part.element, names)),
        (say("Length"), units.text(part.length, "length")),
        ("EI", units.text(part.flexural_rigidity, "flexural rigidity")),
    ]
    if part.section is not None:
        facts.append((say("Section"), safe(part.section.name)))
        facts.append((say("Inertia"), units.text(part.section.inertia, "inertia")))
        if part.section.source:
            facts.append((say("From"), safe(part.section.source)))
    if part.material is not None:
        facts.append((say("Material"), safe(part.material.name)))
        facts.append((say("Modulus"), units.text(part.material.elastic_modulus, "stress")))
    return facts


def named(global_id: str, names: dict[str, str]) -> str:
    """Return an element by its name, where the model gives one, and its GlobalId."""
    name = names.get(global_id, "")
    return f"{safe(name)} ({safe(global_id)})" if name else safe(global_id)


def support_choice(support: Support | None) -> str:
    """Return which choice of the form stands for a support."""
    kind = support_kind(support)
    return "free" if kind == "none" else kind


def release_choice(spring: float) -> str:
    """Return which choice of the form stands for a member's end."""
    if math.isinf(spring):
        return "continuous"
    return "hinge" if spring == 0.0 else SPRING


def stiffness_words(value: float, quantity: str, units: DisplayUnits) -> str:
    """Return a stiffness as it is typed: rigid, free, or a number with its unit."""
    if value == RIGID:
        return "rigid"
    return "free" if value == FREE else units.text(value, quantity)


def _reactions(
    result: LineResult, joint: int, view: View, units: DisplayUnits
) -> list[tuple[str, str]]:
    if view.kind == "envelope":
        envelope = result.envelopes.get(view.name)
        found = [r for r in envelope.reactions if r.joint == joint] if envelope else []
        return [
            (word, f"{units.text(e.value, 'force')} ({safe(e.source)})")
            for r in found
            for word, e in (
                (say("Largest reaction"), r.vertical_max),
                (say("Smallest reaction"), r.vertical_min),
            )
        ]
    solution = result.solution if view.kind == "case" else result.combined
    if solution is None or view.name not in solution.cases:
        return []
    across, up, moment = solution.reactions[solution.cases.index(view.name), joint]
    rows = [(say("Reaction up"), units.text(float(up), "force"))]
    if abs(across) > 0.0:
        rows.append((say("Reaction to the right"), units.text(float(across), "force")))
    if abs(moment) > 0.0:
        rows.append((say("Reaction moment"), units.text(float(moment), "moment")))
    return rows
