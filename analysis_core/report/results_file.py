"""The results file: an Outcome as plain data in SI, ready for JSON.

Names, units and signs are those that other programs rely on; README.md describes them.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any, cast

from analysis_core.effects.stations import stations as stations_of
from analysis_core.findings import Finding
from analysis_core.model import Case, Combination, Joint, Line, Member, Support
from analysis_core.results import Extreme, LineEnvelope, LineResult, LineSolution, Outcome
from analysis_core.solving.line_details import LineDetail, detail_of
from analysis_core.solving.stacks import Received

FORMAT = "spanledger-results"
VERSION = 1


def results_document(outcome: Outcome, *, stations: int = 21) -> dict[str, Any]:
    """Return the results file as nested dicts and lists.

    ``stations`` is the number of stations per member, ends included.
    """
    return {
        "format": FORMAT,
        "version": VERSION,
        "model": {
            "file": outcome.file,
            "schema": outcome.schema,
            "fingerprint": outcome.fingerprint,
        },
        "rules": outcome.rules,
        "cases": {case.name: _case(case) for case in outcome.model.cases},
        "combinations": {c.name: _combination(c) for c in outcome.model.combinations},
        "lines": [_line(result, stations) for result in outcome.lines],
        "received": [_received(each) for each in cast(tuple[Received, ...], outcome.received)],
        "findings": [finding_data(finding) for finding in outcome.findings],
    }


def _received(each: Received) -> dict[str, Any]:
    """What a column, wall or footing carries by case: N, downward positive."""
    return {
        "element": each.element.global_id,
        "name": each.element.name,
        "storey": each.element.storey,
        "stands_on": each.element.on,
        "from_lines": dict(each.lines),
        "total": dict(each.total),
    }


def _case(case: Case) -> dict[str, Any]:
    return {
        "nature": case.nature,
        "category": case.category,
        "global_id": case.global_id,
        "source": case.source,
    }


def _combination(combination: Combination) -> dict[str, Any]:
    return {
        "limit_state": combination.limit_state,
        "factors": dict(combination.factors),
        "kind": combination.kind,
        "rule": combination.rule,
    }


def finding_data(finding: Finding) -> dict[str, Any]:
    """Return a finding as plain data."""
    return {
        "slug": finding.slug,
        "severity": finding.severity,
        "elements": list(finding.elements),
        "line": finding.line,
        "message": finding.message,
    }


def _line(result: LineResult, stations: int) -> dict[str, Any]:
    line = result.line
    data: dict[str, Any] = {
        "mark": line.mark,
        "kind": line.kind,
        "storey": line.storey,
        "elements": list(line.elements),
        "status": result.status,
        "joints": [_joint(line, joint) for joint in line.joints],
        "members": [_member(member) for member in line.members],
        "results": {},
        "envelope": {},
    }
    for solution in (result.solution, result.combined):
        if solution is not None:
            data["results"].update(_solution(line, solution, stations))
    data["envelope"] = {state: _envelope(env) for state, env in result.envelopes.items()}
    if result.verification is not None:
        data["verification"] = {
            "joint_residual": result.verification.joint_residual,
            "continuity_residual": result.verification.continuity_residual,
            "independent_check": result.verification.independent_check,
        }
    if result.detail is not None:
        data.update(_detail(detail_of(result)))
    if result.fingerprint:
        data["fingerprint"] = result.fingerprint
    return data


def _joint(line: Line, joint: Joint) -> dict[str, Any]:
    return {
        "id": joint.id,
        "position": _position(line, joint),
        "point": [float(c) for c in joint.point],
        "element": joint.element,
        "support": None if joint.support is None else _support(joint.support),
        "reason": joint.reason,
    }


def _position(line: Line, joint: Joint) -> float | None:
    """Distance along the line from its start; None off the line (legs) and in frames."""
    if line.kind == "frame":
        return None
    spans = [m for m in line.members if m.role == "span"]
    on_line = {m.start for m in spans} | {m.end for m in spans}
    if joint.id not in on_line:
        return None
    first = line.joints[min(on_line, key=lambda j: line.joints[j].x)]
    return math.hypot(joint.x - first.x, joint.z - first.z)


def _support(support: Support) -> dict[str, Any]:
    data = {"vertical": _stiffness(support.vertical), "rotation": _stiffness(support.rotation)}
    data["horizontal"] = _stiffness(support.horizontal)
    return data


def _stiffness(value: float) -> str | float:
    if math.isinf(value):
        return "rigid"
    return value if value > 0.0 else "free"


def _member(member: Member) -> dict[str, Any]:
    return {
        "id": member.id,
        "role": member.role,
        "element": member.element,
        "start": member.start,
        "end": member.end,
        "length": member.length,
        "flexural_rigidity": member.flexural_rigidity,
        "start_release": member.start_spring == 0.0,
        "end_release": member.end_spring == 0.0,
        "span": member.span,
        "section": member.section.name if member.section else None,
        "material": member.material.name if member.material else None,
    }


def _solution(line: Line, solution: LineSolution, stations: int) -> Mapping[str, Any]:
    fields = stations_of(line, solution, stations)
    return {
        name: {
            "reactions": [
                {
                    "joint": joint.id,
                    "vertical": float(solution.reactions[r, joint.id, 1]),
                    "horizontal": float(solution.reactions[r, joint.id, 0]),
                    "moment": float(solution.reactions[r, joint.id, 2]),
                }
                for joint in line.joints
                if joint.support is not None
            ],
            "rotations": solution.rotations[r].tolist(),
            "members": [
                {
                    "id": m.id,
                    "moment_start": float(solution.end_moments[r, m.id, 0]),
                    "moment_end": float(solution.end_moments[r, m.id, 1]),
                    "shear_start": float(solution.end_shears[r, m.id, 0]),
                    "shear_end": float(solution.end_shears[r, m.id, 1]),
                    "axial_start": float(solution.axial[r, m.id, 0]),
                    "axial_end": float(solution.axial[r, m.id, 1]),
                    "stations": {
                        "x": fields.x[m.id].tolist(),
                        "moment": fields.moment[r, m.id].tolist(),
                        "shear": fields.shear[r, m.id].tolist(),
                        "deflection": fields.deflection[r, m.id].tolist(),
                    },
                }
                for m in line.members
            ],
        }
        for r, name in enumerate(solution.cases)
    }


def _detail(detail: LineDetail) -> dict[str, Any]:
    data: dict[str, Any] = {
        "deflections": [
            {
                "span": d.span.number,
                "members": list(d.span.members),
                "length": d.span.length,
                "cantilever": d.span.cantilever,
                "down": {**_extreme(d.down, "deflection"), "member": d.down_member},
                "up": {**_extreme(d.up, "deflection"), "member": d.up_member},
                "limit": d.limit,
                "rule": d.rule,
                "utilisation": d.utilisation,
            }
            for d in detail.deflections
        ]
    }
    if detail.supports:
        data["support_moments"] = [
            {
                "joint": s.joint,
                "member": s.member,
                "end": s.end,
                "width": s.width,
                **{
                    key: None if extreme is None else _extreme(extreme, "moment")
                    for key, extreme in (
                        ("axis", s.axis),
                        ("face", s.face),
                        ("rounded", s.rounded),
                        ("fixed_end", s.fixed_end),
                    )
                },
            }
            for s in detail.supports
        ]
    if detail.redistributed is not None:
        found = detail.redistributed
        data["redistribution"] = {
            "fractions": {str(joint): part for joint, part in found.fractions.items()},
            "allowed": None if found.limit is None else found.limit.fraction,
            "clause": None if found.limit is None else found.limit.clause,
            "conditions": [] if found.limit is None else list(found.limit.conditions),
            "problem": found.problem,
            "envelope": None if found.envelope is None else _envelope(found.envelope),
        }
    return data


def _envelope(envelope: LineEnvelope) -> dict[str, Any]:
    return {
        "members": [
            {
                "id": m.member,
                "sagging": _extreme(m.sagging, "moment"),
                "hogging": _extreme(m.hogging, "moment"),
                "shear_max": _extreme(m.shear_max, "shear"),
                "shear_min": _extreme(m.shear_min, "shear"),
                "deflection_down": _extreme(m.deflection_down, "deflection"),
                "deflection_up": _extreme(m.deflection_up, "deflection"),
            }
            for m in envelope.members
        ],
        "reactions": [
            {
                "joint": r.joint,
                **{
                    key: {"value": extreme.value, "source": extreme.source}
                    for key, extreme in (
                        ("vertical_max", r.vertical_max),
                        ("vertical_min", r.vertical_min),
                        ("horizontal_max", r.horizontal_max),
                        ("horizontal_min", r.horizontal_min),
                        ("moment_max", r.moment_max),
                        ("moment_min", r.moment_min),
                    )
                },
            }
            for r in envelope.reactions
        ],
    }


def _extreme(extreme: Extreme, name: str) -> dict[str, Any]:
    return {name: extreme.value, "x": extreme.x, "source": extreme.source}
