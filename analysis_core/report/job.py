"""A starting job file from a model: everything that was assumed, with its reason, to be edited.

Loaded again it settles exactly what was assumed, so that the results stay the same until
something in it is changed.
"""

from __future__ import annotations

import json
import math
from collections.abc import Iterator

from analysis_core.model import Joint, Line, LineModel, Material, Member, Support
from analysis_core.report.tables import safe

_CONDITIONS = {
    (math.inf, 0.0): "pinned",
    (math.inf, math.inf): "fixed",
    (0.0, math.inf): "guided",
    (0.0, 0.0): "free",
}


def job_text(model: LineModel, *, file: str, rules: str, physical: bool) -> str:
    """Return the job file as YAML text.

    ``physical``: the supports were decided here (and are written down) rather than stated in the
    model.
    """
    parts = [
        f"# Starting job file for {safe(file)}: what was assumed, and why. Edit what is not so.",
        "# Quantities are text with units; README.md lists everything a job file can say.",
        f"title: {_quoted(model.title)}",
        f"rules:\n  set: {_quoted(rules)}",
        _cases(model),
        _materials(model),
        _supports(model) if physical else "",
        _ACTIONS,
        "limits:\n  - {on: {}, span_ratio: 250, cantilever_ratio: 125}",
    ]
    return "\n\n".join(part for part in parts if part) + "\n"


_ACTIONS = """\
# Actions, once the cases have their natures. For example:
# actions:
#   - {case: Imposed, on: {class: IfcBeam, storey: First floor}, uniform: 12 kN/m}
#   - {case: Imposed, on: {name: B-1}, point: 20 kN, at: 2.5 m}"""


def _cases(model: LineModel) -> str:
    rows = []
    for case in model.cases:
        category = f", category: {_quoted(case.category)}" if case.category else ""
        rows.append(
            f"  - {{name: {_quoted(case.name)}, nature: {case.nature}{category}}}"
            f"  # {safe(case.source or 'stated')}"
        )
    return "cases:\n" + "\n".join(rows) if rows else ""


def _materials(model: LineModel) -> str:
    found: dict[str, Material] = {}
    for line in model.lines:
        for member in line.members:
            if member.material is not None and member.material.elastic_modulus > 0.0:
                found.setdefault(member.material.name, member.material)
    rows = [_material(material) for material in found.values()]
    return "materials:\n" + "\n".join(rows) if rows else ""


def _material(material: Material) -> str:
    values = [f"elastic_modulus: {material.elastic_modulus / 1e6!r} MPa"]
    if material.density:
        values.append(f"density: {material.density!r} kg/m3")
    if material.category:
        values.append(f"category: {material.category}")
    name = "".join(f"[{c}]" if c in "*?[" else c for c in material.name)
    return (
        f"  # {safe(material.source or 'stated in the model')}\n"
        f"  - {{name: {_quoted(name)}, {', '.join(values)}}}"
    )


def _supports(model: LineModel) -> str:
    handing = {(t.from_line, t.joint) for t in model.transfers}
    rows = [row for line in model.lines for row in _line_supports(line, handing)]
    return "supports:\n" + "\n".join(rows) if rows else ""


def _line_supports(line: Line, handing: set[tuple[str, int]]) -> Iterator[str]:
    """A support that hands its reaction to another line is a comment: stating it would cut it."""
    for joint in line.joints:
        member = _member_at(line, joint)
        if joint.support is None or member is None or not member.element:
            continue
        yield f"  # {safe(line.mark)}, joint {joint.id}: {safe(joint.reason)}"
        place = _place(line, member, joint.id)
        mute = "# " if (line.mark, joint.id) in handing else ""
        on = f"on: {{id: {_quoted(member.element)}}}"
        yield f"  {mute}- {{{on}, {place}, {_condition(joint.support)}}}"


def _member_at(line: Line, joint: Joint) -> Member | None:
    spans = [m for m in line.members if m.role == "span"]
    starting = next((m for m in spans if m.start == joint.id), None)
    return starting or next((m for m in spans if m.end == joint.id), None)


def _place(line: Line, member: Member, joint: int) -> str:
    """The start or end of the element, or the distance from its start in between."""
    here = _along(member, 0.0 if member.start == joint else member.length)
    parts = [m for m in line.members if m.element == member.element]
    ends = [_along(m, s) for m in parts for s in (0.0, m.length)]
    if here == min(ends):
        return "end: start"
    if here == max(ends):
        return "end: end"
    return f"at: {here:.6f} m"


def _along(member: Member, s: float) -> float:
    return member.element_offset - s if member.reversed_ else member.element_offset + s


def _condition(support: Support) -> str:
    name = _CONDITIONS.get((support.vertical, support.rotation))
    if name in ("pinned", "fixed") and math.isinf(support.horizontal):
        return f"condition: {name}"
    return (
        f"vertical: {_stiffness(support.vertical, 'N/m')}, "
        f"horizontal: {_stiffness(support.horizontal, 'N/m')}, "
        f"rotation: {_stiffness(support.rotation, 'N*m/rad')}"
    )


def _stiffness(value: float, unit: str) -> str:
    if math.isinf(value):
        return "rigid"
    return f"{value!r} {unit}" if value else "free"


def _quoted(text: str) -> str:
    """A double-quoted scalar; what JSON writes is YAML."""
    return json.dumps(text, ensure_ascii=False)
