"""The section of one line: how it was idealised, what acts on it, and what follows."""

from __future__ import annotations

import math
from collections.abc import Mapping

from analysis_core.model import Line, Member
from analysis_core.report.tables import support_text
from analysis_core.results import LineEnvelope, LineResult
from analysis_core.sheet.anchors import anchor
from analysis_core.sheet.diagrams import DEFLECTION, MOMENT, SHEAR, diagram
from analysis_core.sheet.elevation import actions_drawing, elevation
from analysis_core.sheet.html import Markup, tag
from analysis_core.sheet.strip import Strip, strip
from analysis_core.sheet.table import table
from analysis_core.units import DisplayUnits


def line_section(
    result: LineResult,
    names: Mapping[str, str],
    units: DisplayUnits,
    working: list[Markup],
    checks: list[Markup],
) -> Markup:
    """Return the section of a line.

    ``working`` stands between actions and effects, ``checks`` behind the effects.
    """
    line = result.line
    at = strip(line)
    storey = f", {line.storey}" if line.storey else ""
    parts = [
        tag("h2", f"{line.mark}{storey}"),
        elevation(line, at, units),
        _members(line, names, units),
        _bearings(line, names, units),
        *_actions(line, at, units),
    ]
    if result.status == "balanced":
        parts += working
        parts += _effects(result, at, units)
        parts += checks
        parts += _reactions(result, names, units)
        parts.append(_verification(result))
    else:
        why = f": {line.fault}" if line.fault else "; the findings say why."
        parts.append(tag("p", f"This line was not analysed{why}", class_="error"))
    return tag("section", parts, id=anchor(result), class_="line")


def member_name(member: Member) -> str:
    """Return "span 2", or "leg 5"."""
    if member.role == "span" and member.span:
        return f"span {member.span}"
    return f"{'leg' if member.role == 'leg' else 'member'} {member.id}"


def _members(line: Line, names: Mapping[str, str], units: DisplayUnits) -> Markup:
    head = ("Member", "Element", "Joints", "Length", "Section", "Material", "EI", "Ends")
    below = ("", "", "", units.symbol("length"), "", "", units.symbol("flexural rigidity"), "")
    rows = [
        (
            member_name(m),
            names.get(m.element) or m.element or "–",
            f"{m.start} to {m.end}",
            units.number(m.length, "length"),
            m.section.title if m.section else "–",
            m.material.name if m.material else "–",
            units.number(m.flexural_rigidity, "flexural rigidity"),
            _ends(m),
        )
        for m in line.members
    ]
    return table(head, below, rows, caption="Members", texts=(0, 1, 2, 4, 5, 7))


def _ends(member: Member) -> str:
    words = [
        f"{end} {'released' if spring == 0.0 else 'on a spring'}"
        for end, spring in (("start", member.start_spring), ("end", member.end_spring))
        if not math.isinf(spring)
    ]
    return ", ".join(words) or "rigid"


def _bearings(line: Line, names: Mapping[str, str], units: DisplayUnits) -> Markup:
    rows = [
        (
            str(joint.id),
            units.number(joint.x, "length"),
            support_text(joint.support, units),
            names.get(joint.element or "") or joint.element or "–",
            joint.reason or "as stated in the model",
        )
        for joint in line.joints
        if joint.support is not None or joint.reason
    ]
    return table(
        ("Joint", "At", "Condition", "On", "Why"),
        ("", units.symbol("length"), "", "", ""),
        rows,
        caption="Bearings",
        texts=(0, 2, 3, 4),
        class_="bearings",
    )


def _actions(line: Line, at: Strip, units: DisplayUnits) -> list[Markup]:
    cases = dict.fromkeys(action.case for action in line.actions)
    drawings = [actions_drawing(line, case, at, units) for case in cases]
    return [drawing for drawing in drawings if drawing is not None]


def _effects(result: LineResult, at: Strip, units: DisplayUnits) -> list[Markup]:
    parts = []
    strength = result.envelopes.get("strength")
    service = result.envelopes.get("serviceability")
    if strength is not None:
        parts += [diagram(kind, strength, at, units) for kind in (MOMENT, SHEAR)]
    if service is not None:
        parts.append(diagram(DEFLECTION, service, at, units))
    if strength is not None:
        parts.append(_extremes(result.line, strength, service, units))
    return parts


def _extremes(
    line: Line, strength: LineEnvelope, service: LineEnvelope | None, units: DisplayUnits
) -> Markup:
    length = units.symbol("length")
    rows = []
    for index, member in enumerate(strength.members):
        name = member_name(line.members[member.member])
        shear = max(member.shear_max, member.shear_min, key=lambda e: abs(e.value))
        items = [
            ("sagging", member.sagging, "moment"),
            ("hogging", member.hogging, "moment"),
            ("shear", shear, "force"),
        ]
        if service is not None:
            other = service.members[index]
            worst = max(other.deflection_down, other.deflection_up, key=lambda e: abs(e.value))
            items.append(("deflection", worst, "deflection"))
        for effect, extreme, quantity in items:
            rows.append((
                name, effect, units.text(extreme.value, quantity),
                units.number(extreme.x, "length"), extreme.source or "–",
            ))  # fmt: skip
    return table(
        ("Member", "Effect", "Value", "At", "Governed by"),
        ("", "", "", length, ""),
        rows,
        caption="Governing effects, exact, with the combination and arrangement behind them",
        texts=(0, 1, 4),
    )


def _reactions(result: LineResult, names: Mapping[str, str], units: DisplayUnits) -> list[Markup]:
    solution, envelope = result.solution, result.envelopes.get("strength")
    assert solution is not None
    force = units.symbol("force")
    head = ["Joint", "On", *solution.cases, "Factored max", "Factored min"]
    ranges = {r.joint: r for r in envelope.reactions} if envelope else {}
    rows = []
    for joint in result.line.joints:
        if joint.support is None:
            continue
        row = [str(joint.id), names.get(joint.element or "") or joint.element or "–"]
        row += [units.number(float(v), "force") for v in solution.reactions[:, joint.id, 1]]
        found = ranges.get(joint.id)
        row += (
            [units.number(found.vertical_max.value, "force"),
             units.number(found.vertical_min.value, "force")] if found else ["–", "–"]
        )  # fmt: skip
        rows.append(row)
    caption = f"Vertical reactions [{force}], upward positive: unfactored by case, and factored"
    return [table(head, [""] * len(head), rows, caption=caption, texts=(0, 1))]


def _verification(result: LineResult) -> Markup:
    check = result.verification
    assert check is not None
    return tag(
        "p",
        f"Verification: largest unbalance at a joint {check.joint_residual:.1e} N·m; largest gap "
        f"of rotation between a joint and its members {check.continuity_residual:.1e} rad; largest "
        f"difference from an independent stiffness solution {check.independent_check:.1e} of the "
        f"largest effect. Fingerprint {result.fingerprint[:16]}.",
        class_="verification",
    )
