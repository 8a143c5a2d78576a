"""The front of the sheet: what was calculated, on what assumptions, with what outcome."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence

from analysis_core.findings import Finding
from analysis_core.results import LineResult, Outcome
from analysis_core.sheet.anchors import anchor
from analysis_core.sheet.html import Content, Markup, join, tag
from analysis_core.sheet.symbols import symbols
from analysis_core.sheet.table import facts, table
from analysis_core.units import DisplayUnits

Use = tuple[float, str]

CAUTIONS = (
    "This calculation follows from the model as it was idealised; the decisions of the "
    "idealisation are listed with each line and must be agreed first.",
    "Effects are linear and of first order. Members are rigid axially and, unless stated, in "
    "shear. Stability of the structure as a whole, fire, fatigue and connections are not covered.",
    "Checks marked † rest on clauses and figures that were written from memory of the standards "
    "and have not been compared with them; the licensed engineer must do so.",
    "Local codes govern. A licensed engineer must check this calculation and answer for it before "
    "anything is built from it.",
)


def cover(outcome: Outcome, units: DisplayUnits, *, title: str, date: str) -> Markup:
    """Return the cover: project, revision, rules, cautions and a place to sign."""
    model = outcome.model
    name = title or model.title or outcome.file
    pairs: list[tuple[Content, Content]] = [
        ("Model", outcome.file),
        ("Schema", outcome.schema),
        ("Revision", tag("code", outcome.fingerprint[:16])),
        ("Rules", outcome.rules or "none"),
        ("Lines", f"{len(outcome.lines)}, of which {_solved(outcome)} balanced"),
        ("Calculated", date),
    ]
    return tag(
        "header",
        tag("p", "Structural calculation", class_="kind"),
        tag("h1", name),
        facts(pairs),
        tag("section", tag("h2", "Cautions"), tag("ul", [tag("li", c) for c in CAUTIONS]),
            class_="cautions"),
        _signature(),
        class_="cover",
    )  # fmt: skip


def contents(outcome: Outcome) -> Markup:
    """Return the table of contents."""
    fixed = [("summary", "Summary"), ("basis", "Basis"), ("assumptions", "Assumptions"),
             ("findings", "Findings")]  # fmt: skip
    lines = [(anchor(r), f"{r.line.mark}  {_what(r)}") for r in outcome.lines]
    return tag(
        "nav",
        tag("h2", "Contents"),
        tag("ol", [tag("li", tag("a", text, href=f"#{to}")) for to, text in [*fixed, *lines]]),
        aria_label="Contents",
    )


def summary(outcome: Outcome, units: DisplayUnits, uses: Mapping[str, Use]) -> Markup:
    """Return the governing figures of every line; ``uses``: largest use and its check by mark."""
    head = ("Line", "Storey", "Sagging", "Hogging", "Shear", "Deflection", "Reaction", "Use",
            "Check that uses most")  # fmt: skip
    moment = units.symbol("moment")
    below = ("", "", moment, moment, units.symbol("force"), units.symbol("deflection"),
             units.symbol("force"), "", "")  # fmt: skip
    rows = [(*_summary_row(r, units), *_use(uses.get(r.line.mark))) for r in outcome.lines]
    return tag(
        "section",
        tag("h2", "Summary"),
        table(head, below, rows, caption="Governing effects of each line", texts=(0, 1, 8)),
        id="summary",
    )


def assumptions(
    decisions: Sequence[Sequence[str]],
    materials: Sequence[Sequence[str]],
    sections: Sequence[Sequence[str]],
    units: DisplayUnits,
    note: str = "",
    figures: Sequence[Sequence[str]] = (),
) -> Markup:
    """Return what was settled for the whole model and by whom, and what members are made of.

    ``figures``: those that the checks rest on.
    """
    stress, area = units.symbol("stress"), units.symbol("area")
    inertia, length = units.symbol("inertia"), units.symbol("section length")
    return tag(
        "section",
        tag("h2", "Assumptions"),
        table(("Subject", "Taken as", "Settled by"), ("",) * 3, decisions,
              caption="Decisions that hold for all lines; those for single supports and members "
              "stand with each line and under Findings", texts=(0, 1, 2)),
        table(("Material", "Kind", "E", "Density", "Strengths", "From"),
              ("", "", stress, "kg/m³", stress, ""), materials, caption="Materials",
              texts=(0, 1, 4, 5)),
        table(("Section", "Shape", "Depth", "Width", "A", "I", "I across", "From"),
              ("", "", length, length, area, inertia, inertia, ""), sections,
              caption="Sections", texts=(0, 1, 7)),
        _figures(figures),
        tag("p", note) if note else "",
        id="assumptions",
    )  # fmt: skip


def _figures(figures: Sequence[Sequence[str]]) -> Markup:
    if not figures:
        return Markup("")
    return table(
        ("Figure", "Value", "Meaning", "Clause", "Settled by"), ("",) * 5,
        [(symbols(name), *rest) for name, *rest in figures],
        caption="Figures of the checks; a job file replaces any of them", texts=(0, 2, 3, 4),
    )  # fmt: skip


def basis(outcome: Outcome) -> Markup:
    """Return cases and combinations."""
    model = outcome.model
    cases = [(c.name, c.nature, c.category or "–", c.source or "–") for c in model.cases]
    combinations = [
        (c.name, c.limit_state, c.kind or "–", _sum(c.factors), c.rule or c.source or "–")
        for c in model.combinations
    ]
    return tag(
        "section",
        tag("h2", "Basis"),
        table(
            ("Case", "Nature", "Category", "Settled by"), ("",) * 4, cases,
            caption="Load cases", texts=(0, 1, 2, 3),
        ),
        table(
            ("Combination", "Limit state", "Kind", "Factors", "Rule"), ("",) * 5, combinations,
            caption="Combinations", texts=(0, 1, 2, 3, 4),
        ),
        id="basis",
    )  # fmt: skip


def findings(found: tuple[Finding, ...], names: dict[str, str]) -> Markup:
    """Return everything that was assumed, left out or not understood."""
    order = {"error": 0, "warning": 1, "note": 2}
    items = [
        tag(
            "li",
            tag("strong", f.severity),
            f" {f.line + ': ' if f.line else ''}{f.message} ",
            tag("small", ", ".join(names.get(e, e) for e in f.elements[:6])),
            class_=f.severity,
        )
        for f in sorted(found, key=lambda f: order[f.severity])
    ]
    body = tag("ul", items, class_="findings") if items else tag("p", "None.")
    return tag("section", tag("h2", "Findings"), body, id="findings")


def _use(use: Use | None) -> tuple[Markup | str, str]:
    if use is None:
        return "–", "nothing could be checked"
    value, name = use
    shown = f"{value:.2f}" if math.isfinite(value) else "∞"
    return tag("span", shown, class_="pass" if value <= 1.0 else "fail"), name


def _signature() -> Markup:
    cells = ("Prepared by", "Checked by", "Licensed engineer", "Date")
    boxes = [join(tag("dt", cell), tag("dd", "")) for cell in cells]
    return tag("dl", boxes, class_="signature")


def _solved(outcome: Outcome) -> int:
    return sum(result.status == "balanced" for result in outcome.lines)


def _what(result: LineResult) -> str:
    spans = [m for m in result.line.members if m.role == "span"]
    kind = "frame" if result.line.kind == "frame" else "line"
    return f"{kind} of {len(spans)} span{'s' if len(spans) != 1 else ''}"


def _sum(factors: object) -> str:
    assert hasattr(factors, "items")
    return " + ".join(f"{factor:g} {case}" for case, factor in factors.items())


def _summary_row(result: LineResult, units: DisplayUnits) -> tuple[Markup | str, ...]:
    mark = tag("a", result.line.mark, href=f"#{anchor(result)}")
    storey = result.line.storey or "–"
    strength = result.envelopes.get("strength")
    service = result.envelopes.get("serviceability")
    if result.status != "balanced" or strength is None:
        return (mark, storey, result.status, "", "", "", "")
    shears = [e.value for m in strength.members for e in (m.shear_max, m.shear_min)]
    row = [
        units.number(max(m.sagging.value for m in strength.members), "moment"),
        units.number(min(m.hogging.value for m in strength.members), "moment"),
        units.number(max(shears, key=abs), "force"),
    ]
    deflections = [
        e.value
        for m in (service.members if service else ())
        for e in (m.deflection_down, m.deflection_up)
    ]
    row.append(units.number(max(deflections, key=abs), "deflection") if deflections else "–")
    reactions = [r.vertical_max.value for r in strength.reactions]
    row.append(units.number(max(reactions), "force") if reactions else "–")
    return (mark, storey, *row)
