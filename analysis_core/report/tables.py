"""Tables and sentences for the screen: an Outcome in the display units of the job file.

No arithmetic beyond units.  Names from a model are hostile text: control characters are shown
as escapes, so that nothing in a file can drive a terminal.
"""

from __future__ import annotations

import math
import unicodedata
from collections import Counter
from collections.abc import Callable, Iterable, Mapping, Sequence
from typing import TYPE_CHECKING, cast

from analysis_core.findings import Finding, Severity
from analysis_core.model import Joint, Line, LineModel, Member, Support
from analysis_core.results import Extreme, LineResult, MemberEnvelope, Outcome
from analysis_core.units import DisplayUnits

if TYPE_CHECKING:
    from analysis_core.revision.posted_states import PostedState
    from analysis_core.solving.line_details import LineDetail, Redistributed
    from analysis_core.solving.stacks import Received

CAUTION = (
    "Caution: computed from the model as idealised. Local codes govern; a licensed engineer must "
    "check every result before it is used."
)


def safe(text: str) -> str:
    """Return text with control and direction-changing characters made visible."""
    return "".join(
        c if unicodedata.category(c) not in ("Cc", "Cf", "Cs", "Zl", "Zp") else f"\\u{ord(c):04x}"
        for c in text
    )


def counts_text(counts: Mapping[str, int]) -> str:
    """Return what a file holds by class, in one sentence; "" where nothing was counted."""
    shown = [f"{safe(name)} {count}" for name, count in counts.items() if count]
    return f"The file holds: {', '.join(shown)}." if shown else ""


def survey_text(
    model: LineModel,
    file: str,
    schema: str,
    units: DisplayUnits,
    *,
    states: Mapping[str, PostedState] | None = None,
    only: Sequence[str] = (),
    counts: Mapping[str, int] | None = None,
) -> str:
    """Return what was found: lines, spans, supports with their reasons, actions, findings.

    ``states`` by mark: whether the results that stand in the file hold.  ``only``: marks of the
    lines wanted, all where empty.  ``counts``: what the file holds by class.
    """
    parts = [_headline(model, file, schema), counts_text(counts or {})]
    wanted = [line for line in model.lines if not only or line.mark in only]
    parts += [_survey_line(line, model.names, units) for line in wanted]
    known = states or {}
    parts.append(_posted_text({x.mark: known[x.mark] for x in wanted if x.mark in known}))
    parts.append(_cases_text(model))
    parts.append(findings_text(model.findings))
    parts.append(CAUTION)
    return "\n\n".join(part for part in parts if part)


def balance_text(outcome: Outcome, units: DisplayUnits) -> str:
    """Return the governing effects per span, the reactions, the verification and the findings."""
    model = outcome.model
    parts = [_headline(model, outcome.file, outcome.schema)]
    if outcome.rules:
        parts.append(f"Rules: {safe(outcome.rules)}; {len(model.combinations)} combinations.")
    parts.append(_effects_table(outcome, units))
    parts.append(_redistribution_text(outcome, units))
    parts.append(_reactions_table(outcome, units))
    parts.append(_received_text(outcome, units))
    parts.append(_verification_text(outcome, units))
    parts.append(findings_text(outcome.findings))
    parts.append(CAUTION)
    return "\n\n".join(part for part in parts if part)


def findings_text(findings: Sequence[Finding]) -> str:
    """Return the findings, gravest first, or "" where there are none."""
    if not findings:
        return ""
    order: dict[Severity, int] = {"error": 0, "warning": 1, "note": 2}
    counts = Counter(f.severity for f in findings)
    head = ", ".join(f"{counts[s]} {s}{'s' if counts[s] > 1 else ''}" for s in order if counts[s])
    rows = [_finding_text(f) for f in sorted(findings, key=lambda f: order[f.severity])]
    return "\n".join([f"Findings: {head}", *rows])


def table(head: Sequence[str], units: Sequence[str], rows: Iterable[Sequence[str]]) -> str:
    """Return aligned columns: the first to the left, the others to the right."""
    body = [list(row) for row in rows]
    every = [list(head), list(units), *body] if any(units) else [list(head), *body]
    widths = [max(len(row[i]) for row in every) for i in range(len(head))]
    lines = ["  ".join(_cell(c, w, i) for i, (c, w) in enumerate(zip(row, widths, strict=True)))
             for row in every]  # fmt: skip
    rule = "-" * len(lines[0])
    top = 2 if any(units) else 1
    return "\n".join(line.rstrip() for line in [*lines[:top], rule, *lines[top:]])


def support_text(support: Support | None, units: DisplayUnits) -> str:
    """Return a support in the words of the trade, or its stiffnesses."""
    if support is None:
        return "no support"
    vertical, rotation = support.vertical, support.rotation
    words = {
        (math.inf, 0.0): "pinned",
        (math.inf, math.inf): "fixed",
        (0.0, math.inf): "guided",
        (0.0, 0.0): "free",
    }
    if (vertical, rotation) in words:
        return words[vertical, rotation]
    return (
        f"vertical {_stiffness(vertical, units, 'translational stiffness')}, "
        f"rotation {_stiffness(rotation, units, 'rotational stiffness')}"
    )


def _stiffness(value: float, units: DisplayUnits, quantity: str) -> str:
    if math.isinf(value):
        return "rigid"
    return units.text(value, quantity) if value else "free"


def _cell(text: str, width: int, column: int) -> str:
    return text.ljust(width) if column == 0 else text.rjust(width)


def _headline(model: LineModel, file: str, schema: str) -> str:
    spans = sum(
        any(m.role == "span" for m, _ in members)
        for line in model.lines
        for _, members in spans_of(line)
    )
    frames = sum(line.kind == "frame" for line in model.lines)
    kinds = f"{len(model.lines) - frames} beam lines" + (f", {frames} frames" if frames else "")
    title = f"{safe(model.title)}: " if model.title else ""
    return f"{title}{safe(file)} ({schema}): {kinds}, {spans} spans."


def _survey_line(line: Line, names: Mapping[str, str], units: DisplayUnits) -> str:
    spans = [m for m in line.members if m.role == "span"]
    lengths = " + ".join(units.number(m.length, "length") for m in spans)
    storey = f", {safe(line.storey)}" if line.storey else ""
    kind = "frame" if line.kind == "frame" else "line"
    rows = [f"{safe(line.mark)}  {kind}{storey}: {lengths} {units.symbol('length')}"]
    rows += [_survey_member(m, names, units) for m in line.members]
    rows += [_survey_joint(j, units) for j in line.joints if j.support is not None or j.reason]
    counts = Counter(action.case for action in line.actions)
    if counts:
        rows.append("  actions: " + ", ".join(f"{safe(c)} {n}" for c, n in sorted(counts.items())))
    return "\n".join(rows)


def _survey_member(member: Member, names: Mapping[str, str], units: DisplayUnits) -> str:
    what = f"span {member.span}" if member.role == "span" and member.span else member.role
    section = safe(member.section.title) if member.section else "section by stiffness"
    material = safe(member.material.name) if member.material else "material not named"
    ends = [
        f"{end} {'released' if spring == 0.0 else 'on a spring'}"
        for end, spring in (("start", member.start_spring), ("end", member.end_spring))
        if not math.isinf(spring)
    ]
    tail = f", {', '.join(ends)}" if ends else ""
    rigidity = units.text(member.flexural_rigidity, "flexural rigidity")
    name = safe(names.get(member.element, ""))
    return (
        f"  {what}: {units.text(member.length, 'length')}, {section}, {material}, "
        f"EI {rigidity}{tail}  {name and name + ' '}[{safe(member.element)}]"
    )


def _survey_joint(joint: Joint, units: DisplayUnits) -> str:
    reason = f": {safe(joint.reason)}" if joint.reason else ""
    element = f"  [{safe(joint.element)}]" if joint.element else ""
    return (
        f"  joint {joint.id} at {units.text(joint.x, 'length')}: "
        f"{support_text(joint.support, units)}{reason}{element}"
    )


def _posted_text(states: Mapping[str, PostedState]) -> str:
    """Which results in the file hold; nothing where none were posted."""
    counts = Counter(state.state for state in states.values())
    if not counts.keys() - {"not posted"}:
        return ""
    head = ", ".join(f"{counts[s]} {s}" for s in ("current", "stale", "not posted") if counts[s])
    rows = [f"Results in the file, by line: {head}"]
    for mark, state in states.items():
        if state.state != "current":
            why = f": {safe('; '.join(state.reasons))}" if state.reasons else ""
            rows.append(f"  {safe(mark)} {state.state}{why}")
    return "\n".join(rows)


def _cases_text(model: LineModel) -> str:
    if not model.cases:
        return ""
    rows = [
        (safe(c.name), c.nature, safe(c.category) or "-", safe(c.source) or "-")
        for c in model.cases
    ]
    return table(("case", "nature", "category", "settled by"), ("",) * 4, rows)


def _effects_table(outcome: Outcome, units: DisplayUnits) -> str:
    head = ("line", "span", "length", "sagging", "at", "hogging", "at", "shear", "at",
            "deflection", "at", "ratio", "of limit")  # fmt: skip
    length, moment = units.symbol("length"), units.symbol("moment")
    below = ("", "", length, moment, length, moment, length, units.symbol("force"), length,
             units.symbol("deflection"), length, "", "")  # fmt: skip
    rows: list[Sequence[str]] = []
    sources: list[str] = []
    for result in outcome.lines:
        if result.status != "balanced":
            rows.append((safe(result.line.mark), "not analysed", *[""] * 11))
            continue
        for name, members in spans_of(result.line):
            rows.append(_effects_row(result, name, members, units))
        sources += _governing(result)
    if not rows:
        return "No lines were found."
    notes = "\n".join(dict.fromkeys(sources))
    return table(head, below, rows) + (f"\n\nGoverning:\n{notes}" if notes else "")


def spans_of(line: Line) -> list[tuple[str, list[tuple[Member, float]]]]:
    """Return name and members of each span, then each leg; members with their place in it (m).

    A span may consist of several members, cut at nodes that nothing supports.
    """
    groups: dict[str, list[tuple[Member, float]]] = {}
    for member in line.members:
        if member.span:
            name = str(member.span)
        else:
            name = f"{'leg' if member.role == 'leg' else 'member'} {member.id}"
        group = groups.setdefault(name, [])
        offset = group[-1][1] + group[-1][0].length if group else 0.0
        group.append((member, offset))
    return list(groups.items())


def _effects_row(
    result: LineResult, name: str, members: list[tuple[Member, float]], units: DisplayUnits
) -> Sequence[str]:
    length = sum(member.length for member, _ in members)
    row = [safe(result.line.mark), name, units.number(length, "length")]
    strength = [(_envelope_of(result, "strength", m), at) for m, at in members]
    for pick, choose, quantity in _COLUMNS:
        found = [(pick(e), at) for e, at in strength if e is not None]
        row += _extreme_cells(found, choose, quantity, units)
    return [*row, *_deflection_cells(result, name, members, units)]


def _deflection_cells(
    result: LineResult, name: str, members: list[tuple[Member, float]], units: DisplayUnits
) -> list[str]:
    """Largest deflection from the supports of the span, its place, ratio and use of the limit."""
    span = next((d for d in _detail_of(result).deflections if str(d.span.number) == name), None)
    if span is None:
        return ["-"] * 4
    offsets = {member.id: at for member, at in members}
    down = abs(span.down.value) >= abs(span.up.value)
    worst, member = (span.down, span.down_member) if down else (span.up, span.up_member)
    share = span.span.length / abs(worst.value) if abs(worst.value) > 1e-9 else math.inf
    ratio = f"L/{share:.0f}" if share < 1e4 else "-"
    use = "-" if span.utilisation is None else f"{span.utilisation:.2f}"
    place = units.number(offsets[member] + worst.x, "length")
    return [units.number(worst.value, "deflection"), place, ratio, use]


def _extreme_cells(
    found: list[tuple[Extreme, float]],
    choose: Callable[[Extreme], float],
    quantity: str,
    units: DisplayUnits,
) -> list[str]:
    if not found:
        return ["-", "-"]
    extreme, offset = max(found, key=lambda pair: choose(pair[0]))
    place = units.number(offset + extreme.x, "length")
    return [units.number(extreme.value, quantity), place]


def _largest(extreme: Extreme) -> float:
    return abs(extreme.value)


def _shear(envelope: MemberEnvelope) -> Extreme:
    return max(envelope.shear_max, envelope.shear_min, key=_largest)


_COLUMNS: tuple[
    tuple[Callable[[MemberEnvelope], Extreme], Callable[[Extreme], float], str], ...
] = (
    (lambda e: e.sagging, lambda e: e.value, "moment"),
    (lambda e: e.hogging, lambda e: -e.value, "moment"),
    (_shear, _largest, "force"),
)


def _envelope_of(result: LineResult, state: str, member: Member) -> MemberEnvelope | None:
    envelope = result.envelopes.get(state)
    if envelope is None:
        return None
    return next((m for m in envelope.members if m.member == member.id), None)


def _governing(result: LineResult) -> list[str]:
    """The combination and arrangement behind the line's largest effects."""
    envelope = result.envelopes.get("strength")
    if envelope is None or not envelope.members:
        return []
    best = max(envelope.members, key=lambda m: m.sagging.value).sagging
    worst = min(envelope.members, key=lambda m: m.hogging.value).hogging
    return [
        f"  {safe(result.line.mark)}: sagging by {safe(best.source)}; "
        f"hogging by {safe(worst.source)}"
    ]


def _redistribution_text(outcome: Outcome, units: DisplayUnits) -> str:
    """Elastic and redistributed moments of the lines where redistribution was asked for."""
    rows = []
    notes = []
    for result in outcome.lines:
        found = _detail_of(result).redistributed if result.detail else None
        if found is None:
            continue
        mark = safe(result.line.mark)
        if found.limit is not None:
            notes.append(f"  {mark}: {safe(_limit_text(found))}")
        if found.envelope is None:
            notes.append(f"  {mark}: not redistributed. {safe(found.problem)}")
            continue
        elastic = result.envelopes["strength"]
        for before, after in zip(elastic.members, found.envelope.members, strict=True):
            rows.append((
                mark,
                str(result.line.members[before.member].span or before.member),
                units.number(before.sagging.value, "moment"),
                units.number(after.sagging.value, "moment"),
                units.number(before.hogging.value, "moment"),
                units.number(after.hogging.value, "moment"),
            ))  # fmt: skip
    if not rows and not notes:
        return ""
    moment = units.symbol("moment")
    head = ("line", "span", "sagging elastic", "redistributed", "hogging elastic", "redistributed")
    text = table(head, ("", "", *[moment] * 4), rows) if rows else ""
    return "\n".join(["Redistribution", *([text] if text else []), *notes])


def _detail_of(result: LineResult) -> LineDetail:
    from analysis_core.solving.line_details import detail_of  # late: words need no solver

    return detail_of(result)


def _limit_text(found: Redistributed) -> str:
    """What the rule set allows, on what conditions, and whether more was stated."""
    assert found.limit is not None
    limit = found.limit
    if limit.missing:
        return f"the limit of {limit.clause} could not be found: {limit.missing}"
    text = f"at most {100.0 * limit.fraction:.0f} % by {limit.clause}"
    if any(part > limit.fraction + 1e-12 for part in found.fractions.values()):
        text += ", WHICH IS EXCEEDED"
    return "; ".join((text, *limit.conditions))


def _reactions_table(outcome: Outcome, units: DisplayUnits) -> str:
    force, moment = units.symbol("force"), units.symbol("moment")
    rows: list[Sequence[str]] = []
    for result in outcome.lines:
        envelope = result.envelopes.get("strength")
        if envelope is None:
            continue
        for reaction in envelope.reactions:
            joint = result.line.joints[reaction.joint]
            rows.append((
                safe(result.line.mark),
                str(joint.id),
                units.number(joint.x, "length"),
                units.number(reaction.vertical_max.value, "force"),
                units.number(reaction.vertical_min.value, "force"),
                units.number(reaction.moment_max.value, "moment"),
                units.number(reaction.moment_min.value, "moment"),
                safe(outcome.model.names.get(joint.element or "") or joint.element or "-"),
            ))  # fmt: skip
    if not rows:
        return ""
    head = ("line", "joint", "x", "vertical max", "vertical min", "moment max", "moment min", "on")
    below = ("", "", units.symbol("length"), force, force, moment, moment, "")
    return "Reactions (strength, factored; vertical positive upward)\n" + table(head, below, rows)


def _received_text(outcome: Outcome, units: DisplayUnits) -> str:
    """What columns, walls and footings carry, from the top down."""
    found = cast("tuple[Received, ...]", outcome.received)
    if not found:
        return ""
    names = {each.element.global_id: each.element.name for each in found}
    cases = list(dict.fromkeys(case for each in found for case in each.total))
    rows = [
        (
            safe(each.element.name or each.element.global_id),
            units.number(each.element.bottom, "length"),
            *(units.number(each.total.get(case, 0.0), "force") for case in cases),
            safe(names.get(each.element.on or "") or each.element.on or "-"),
        )
        for each in found
    ]
    head = ("element", "foot at", *(safe(case) for case in cases), "stands on")
    below = ("", units.symbol("length"), *[units.symbol("force")] * len(cases), "")
    title = "Carried by columns, walls and footings (by case, unfactored, own weight left out)"
    return f"{title}\n" + table(head, below, rows)


def _verification_text(outcome: Outcome, units: DisplayUnits) -> str:
    checks = [r.verification for r in outcome.lines if r.verification is not None]
    if not checks:
        return ""
    joint = max(c.joint_residual for c in checks)
    turn = max(c.continuity_residual for c in checks)
    other = max(c.independent_check for c in checks)
    return (
        f"Verification of {len(checks)} lines: largest joint residual {joint:.1e} N·m, continuity "
        f"residual {turn:.1e} rad, difference from the stiffness solution {other:.1e} (relative)."
    )


def _finding_text(finding: Finding) -> str:
    line = f" {safe(finding.line)}" if finding.line else ""
    shown = finding.elements[:4]
    more = f" and {len(finding.elements) - 4} more" if len(finding.elements) > 4 else ""
    elements = f"  [{', '.join(safe(e) for e in shown)}{more}]" if shown else ""
    return f"  {finding.severity} {finding.slug}{line}: {safe(finding.message)}{elements}"
