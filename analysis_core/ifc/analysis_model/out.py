"""The idealisation as an IfcStructuralAnalysisModel, so that others can take it over.

Members, nodes, supports, releases, materials, sections, actions, cases and combinations are
written as they were analysed; members and nodes are tied to the physical elements that they stand
for by IfcRelAssignsToProduct.
"""

from __future__ import annotations

from collections.abc import Mapping

from analysis_core.findings import Finding
from analysis_core.ifc.analysis_model.bars import varies
from analysis_core.ifc.analysis_model.cases import write_cases, write_combinations
from analysis_core.ifc.analysis_model.items import WrittenLine, write_items
from analysis_core.ifc.analysis_model.loads import LoadWriter
from analysis_core.ifc.analysis_model.sections import Made, made_of, write_made
from analysis_core.ifc.analysis_model.text import ModelText
from analysis_core.ifc.file_units import FileUnits
from analysis_core.ifc.step.append import Lines
from analysis_core.ifc.step.index import StepIndex
from analysis_core.ifc.step.values import references
from analysis_core.results import Outcome

_TITLE = "Spanledger idealisation"


def write_analysis_model(
    outcome: Outcome,
    elements: Mapping[str, int],
    index: StepIndex,
    lines: Lines,
    *,
    owner: str,
    units: FileUnits,
) -> list[Finding]:
    """Add the analysis model of an outcome to ``lines``; return what could not be said exactly.

    ``elements``: instances of the physical elements by GlobalId.
    """
    text = ModelText(
        lines, schema=index.schema, owner=owner, units=units, context=_context(index, lines)
    )
    loads = LoadWriter(text)
    findings: list[Finding] = []
    written = [write_items(text, result.line) for result in outcome.lines]
    _make(text, written)
    for line in written:
        loads.write(line)
        findings += _simplified(line)
        _tie(text, line, elements)
    groups = write_cases(text, outcome.model.cases, loads.cases)
    combinations = write_combinations(text, outcome.model.combinations, groups)
    items = [n for line in written for n in _items(line)]
    if items:
        _model(text, items, combinations or list(groups.values()))
    return findings + loads.findings


def _context(index: StepIndex, lines: Lines) -> str:
    existing = index.instances_of("IFCGEOMETRICREPRESENTATIONCONTEXT")
    if existing:
        return f"#{existing[0]}"
    origin = lines.shared("IFCCARTESIANPOINT((0.,0.,0.))")
    axes = lines.shared(f"IFCAXIS2PLACEMENT3D(#{origin},$,$)")
    context = f"IFCGEOMETRICREPRESENTATIONCONTEXT($,'Model',3,$,#{axes},$)"
    return f"#{lines.shared(context)}"


def _make(text: ModelText, written: list[WrittenLine]) -> None:
    users: dict[tuple[Made, int], list[int]] = {}
    for line in written:
        for bars in line.bars.values():
            for bar in bars:
                upward = text.direction([-c for c in bar.down]) if text.old else 0
                users.setdefault((made_of(bar.bar), upward), []).append(bar.number)
    write_made(text, users)


def _items(line: WrittenLine) -> list[int]:
    members = [bar.number for bars in line.bars.values() for bar in bars]
    return [*members, *line.nodes.values(), *line.free_nodes]


def _tie(text: ModelText, line: WrittenLine, elements: Mapping[str, int]) -> None:
    """Members and supporting nodes stand for physical elements."""
    ties: dict[str, list[int]] = {}
    for member in line.line.members:
        if member.element in elements:
            found = [bar.number for bar in line.bars[member.id]]
            ties.setdefault(member.element, []).extend(found)
    for joint in line.line.joints:
        if joint.support is not None and joint.element and joint.element in elements:
            ties.setdefault(joint.element, []).append(line.nodes[joint.id])
    for element, items in ties.items():
        text.rooted(
            "IFCRELASSIGNSTOPRODUCT", f"{line.line.mark}/{element}", references(items), "$",
            f"#{elements[element]}",
        )  # fmt: skip


def _model(text: ModelText, items: list[int], loaded_by: list[int]) -> None:
    groups = references(loaded_by) if loaded_by else "$"
    shared = [] if text.old else [text.placement()]
    model = text.object(
        "IFCSTRUCTURALANALYSISMODEL", "model", _TITLE, ".LOADING_3D.", "$", groups, "$", *shared
    )
    text.rooted("IFCRELASSIGNSTOGROUP", "model/items", references(items), "$", f"#{model}")


def _simplified(line: WrittenLine) -> list[Finding]:
    members = [m for m in line.line.members if varies(m)]
    if not members:
        return []
    return [
        Finding(
            "note",
            "rigidity-in-steps",
            f"Line {line.line.mark}: {len(members)} members of varying rigidity were written into "
            f"the analysis model as short members of constant rigidity, which changes the effects "
            f"a little.",
            tuple(dict.fromkeys(m.element for m in members)),
            line.line.mark,
        )
    ]
