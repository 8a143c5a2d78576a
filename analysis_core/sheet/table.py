"""Tables of the sheet: a heading row, a row of units, and rows of texts."""

from __future__ import annotations

from collections.abc import Sequence

from analysis_core.sheet.html import Content, Markup, tag


def table(
    head: Sequence[Content],
    units: Sequence[Content],
    rows: Sequence[Sequence[Content]],
    *,
    caption: Content,
    texts: Sequence[int] = (0,),
    class_: str = "",
) -> Markup:
    """Return a table; columns in ``texts`` are set left, the others are numbers, set right."""

    def kind(column: int) -> str | None:
        return "text" if column in texts else None

    heads = [tag("th", cell, scope="col", class_=kind(i)) for i, cell in enumerate(head)]
    top = [tag("tr", heads)]
    if any(units):
        below = [tag("td", cell, class_=kind(i)) for i, cell in enumerate(units)]
        top.append(tag("tr", below, class_="units"))
    body = [tag("tr", [_cell(c, i, kind(i)) for i, c in enumerate(row)]) for row in rows]
    return tag(
        "table",
        tag("caption", caption),
        tag("thead", top),
        tag("tbody", body),
        class_=class_ or None,
    )


def _cell(content: Content, column: int, class_: str | None) -> Markup:
    if column == 0:
        return tag("th", content, scope="row", class_=class_)
    return tag("td", content, class_=class_)


def facts(pairs: Sequence[tuple[Content, Content]]) -> Markup:
    """Return a list of terms and what is to be said of them."""
    return tag("dl", [m for term, said in pairs for m in (tag("dt", term), tag("dd", said))])
