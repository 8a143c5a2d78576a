"""Tables of the sheet: a heading row, a row of units, and rows of texts."""

from __future__ import annotations

from collections.abc import Sequence

from analysis_core.sheet.html import Content, Markup, tag, text_of

_SHORT = 16
"""Rows of a table that is kept together on one page."""


def table(
    head: Sequence[Content],
    units: Sequence[Content],
    rows: Sequence[Sequence[Content]],
    *,
    caption: Content,
    texts: Sequence[int] = (0,),
    class_: str = "",
) -> Markup:
    """Return a table; columns in ``texts`` are set left, the others are numbers, set right.

    Heads of columns need no scope: a row of nothing but heads has it by the rules of HTML.
    """
    top = [tag("tr", [tag("th", cell) for cell in head])]
    if any(units):
        top.append(tag("tr", [tag("td", cell) for cell in units], class_="units"))
    body = Markup("".join([table_row(row) for row in rows]))
    left = " ".join(f"t{column}" for column in texts if column)
    keep = "keep" if len(rows) <= _SHORT else ""
    return tag(
        "table",
        tag("caption", caption),
        tag("thead", top),
        tag("tbody", body),
        class_=" ".join(filter(None, (left, class_, keep))) or None,
    )


def table_row(cells: Sequence[Content], class_: str = "") -> str:
    """Return a row whose first cell is its head: the same as of tags, but quicker."""
    head = f"<tr class={class_}>" if class_ else "<tr>"
    rest = "".join([f"<td>{text_of(cell)}" for cell in cells[1:]])
    return f"{head}<th scope=row>{text_of(cells[0])}{rest}"


def facts(pairs: Sequence[tuple[Content, Content]]) -> Markup:
    """Return a list of terms and what is to be said of them."""
    return tag("dl", [m for term, said in pairs for m in (tag("dt", term), tag("dd", said))])
