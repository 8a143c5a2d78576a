"""The whole sheet as one self-contained HTML file."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from importlib import resources

from analysis_core.results import LineResult, Outcome
from analysis_core.sheet.cover import Use, basis, contents, cover, findings, summary
from analysis_core.sheet.html import Markup, tag
from analysis_core.sheet.line_section import line_section
from analysis_core.units import DisplayUnits

Extra = Callable[[LineResult], list[Markup]]


def sheet(
    outcome: Outcome,
    units: DisplayUnits,
    *,
    title: str = "",
    date: str = "",
    working: Extra | None = None,
    checks: Extra | None = None,
    uses: Mapping[str, Use] | None = None,
    assumed: Markup | None = None,
) -> str:
    """Return the sheet as HTML text.

    ``date`` is shown as given.  ``working`` gives what stands between a line's actions and its
    effects (the distribution), ``checks`` what stands behind them.  ``uses``: the largest use of a
    line and its check, by mark.  ``assumed``: the section of assumptions.
    """
    names = dict(outcome.model.names)
    working = working or _nothing
    checks = checks or _nothing
    body = tag(
        "body",
        cover(outcome, units, title=title, date=date),
        contents(outcome),
        tag(
            "main",
            summary(outcome, units, uses or {}),
            basis(outcome),
            assumed or tag("section", tag("h2", "Assumptions"), id="assumptions"),
            findings(outcome.findings, names),
            [
                line_section(result, names, units, working(result), checks(result))
                for result in outcome.lines
            ],
        ),
    )
    style = resources.files("analysis_core.sheet").joinpath("style.css").read_text("utf-8")
    name = title or outcome.model.title or outcome.file
    head = tag(
        "head",
        tag("meta", charset="utf-8"),
        tag("meta", name="viewport", content="width=device-width, initial-scale=1"),
        tag("title", f"{name}: structural calculation"),
        tag("style", Markup(style)),
    )
    return f"<!DOCTYPE html>\n{tag('html', head, body, lang='en').text}\n"


def _nothing(result: LineResult) -> list[Markup]:
    return []
