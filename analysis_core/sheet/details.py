"""Deflections against limits, moments at the faces of supports, and redistribution."""

from __future__ import annotations

import math
from collections.abc import Sequence

from analysis_core.effects.deflection_limits import SpanDeflection
from analysis_core.effects.faces import SupportMoment
from analysis_core.results import Extreme, LineEnvelope
from analysis_core.sheet.html import Markup, tag
from analysis_core.sheet.table import table
from analysis_core.solving.line_details import Redistributed
from analysis_core.units import DisplayUnits


def deflections(found: Sequence[SpanDeflection], units: DisplayUnits) -> Markup:
    """Return the largest deflection of each span from its supports, against its limit."""
    rows = []
    for span in found:
        down = abs(span.down.value) >= abs(span.up.value)
        worst = span.down if down else span.up
        share = span.span.length / abs(worst.value) if abs(worst.value) > 1e-9 else math.inf
        ratio = f"L/{share:.0f}" if share < 1e4 else "–"  # beyond, nothing moves that counts
        limit = "–" if span.limit is None else units.number(span.limit, "deflection")
        rows.append((
            f"span {span.span.number}{' (cantilever)' if span.span.cantilever else ''}",
            units.number(worst.value, "deflection"), ratio, limit, span.rule or "not limited",
            _use(span.utilisation), worst.source or "–",
        ))  # fmt: skip
    unit = units.symbol("deflection")
    return table(
        ("Span", "Deflection", "Ratio", "Limit", "Rule", "Use", "Governed by"),
        ("", unit, "", unit, "", "", ""),
        rows,
        caption="Deflections from the supports of each span, against their limits",
        texts=(0, 4, 6),
    )


def support_moments(found: Sequence[SupportMoment], units: DisplayUnits) -> Markup:
    """Return moments at axes and faces of supports, both kept."""
    rows = [
        (
            f"joint {s.joint}, {s.end} of member {s.member}",
            units.text(s.width, "section length") if s.width else "unknown",
            *(_moment(e, units) for e in (s.axis, s.face, s.rounded, s.fixed_end)),
        )
        for s in found
    ]
    return table(
        ("Support", "Width", "At the axis", "At the face", "Peak rounded", "Least at the face"),
        ("", "", *[units.symbol("moment")] * 4),
        rows,
        caption="Hogging moments at supports",
    )


def redistribution(
    found: Redistributed, elastic: LineEnvelope, names: Sequence[str], units: DisplayUnits
) -> list[Markup]:
    """Return elastic and redistributed moments side by side, with the limit and its conditions."""
    parts = [tag("h3", "Redistribution")]
    if found.limit is not None:
        text = f"{found.limit.clause}: at most {100.0 * found.limit.fraction:.0f} %."
        if found.limit.missing:
            text = f"{found.limit.clause}: the limit could not be found, {found.limit.missing}."
        parts.append(tag("p", text))
        conditions = [*found.limit.conditions, *(f.message for f in found.plan.findings)]
        parts.append(tag("ul", [tag("li", c) for c in conditions], class_="table-notes"))
    if found.envelope is None:
        return [*parts, tag("p", found.problem)]
    shares = ", ".join(f"joint {j}: {100.0 * p:.0f} %" for j, p in found.fractions.items())
    moment = units.symbol("moment")
    rows = [
        (
            names[before.member],
            _moment(before.sagging, units), _moment(after.sagging, units),
            _moment(before.hogging, units), _moment(after.hogging, units),
        )
        for before, after in zip(elastic.members, found.envelope.members, strict=True)
    ]  # fmt: skip
    head = ("Member", "Sagging, elastic", "redistributed", "Hogging, elastic", "redistributed")
    caption = f"Support moments reduced ({shares}); spans rebuilt from statics"
    return [*parts, table(head, ("", *[moment] * 4), rows, caption=caption)]


def _moment(extreme: Extreme | None, units: DisplayUnits) -> str:
    return "–" if extreme is None else units.number(extreme.value, "moment")


def _use(utilisation: float | None) -> Markup | str:
    if utilisation is None:
        return "–"
    return tag("span", f"{utilisation:.2f}", class_="pass" if utilisation <= 1.0 else "fail")
