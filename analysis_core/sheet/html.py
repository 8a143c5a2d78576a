"""HTML as data: every text is escaped unless it was built here.

Names in a model are hostile text; nothing of them can become markup, a script or an address.
"""

from __future__ import annotations

import html
import re
from collections.abc import Iterable
from dataclasses import dataclass

_NAMES = {"class_": "class", "viewBox": "viewBox"}
_EMPTY = frozenset({"br", "col", "hr", "img", "meta", "line", "path", "rect", "circle", "polyline"})

# HTML living standard, 13.1.2.4: their end tags may be left out where nothing else follows.
_OPEN = frozenset({"td", "th", "tr", "li", "thead", "tbody"})
_HARMLESS = re.compile(r"[\w .,:;/()+=-]*", re.ASCII)
_PLAIN = re.compile(r"[\w.#-]+", re.ASCII)


@dataclass(frozen=True, slots=True)
class Markup:
    """A piece of finished HTML or SVG."""

    text: str


Content = Markup | str | Iterable["Markup | str"]


def tag(name: str, /, *children: Content, **attributes: str | float | None) -> Markup:
    """Return an element.  ``class_`` stands for class, underscores for hyphens.

    What HTML allows to leave out is left out (end tags of cells, rows and items; quotes around
    plain words): a sheet of a whole building has millions of cells.
    """
    shown = ""
    for key, value in attributes.items():
        if value is not None:
            shown += f" {_NAMES.get(key) or key.replace('_', '-')}={_attribute(value)}"
    inner = "".join([text_of(child) for child in children])
    if name in _EMPTY and not inner:
        return Markup(f"<{name}{shown} />")
    if name in _OPEN:
        return Markup(f"<{name}{shown}>{inner}")
    return Markup(f"<{name}{shown}>{inner}</{name}>")


def text_of(content: Content) -> str:
    """Return content as HTML, escaping what is plain text."""
    if isinstance(content, Markup):
        return content.text
    if isinstance(content, str):
        if _HARMLESS.fullmatch(content):  # most texts are words and numbers
            return content
        return html.escape(visible(content), quote=False)
    return "".join([text_of(item) for item in content])


def join(*items: Content) -> Markup:
    """Return several pieces as one."""
    return Markup("".join(text_of(item) for item in items))


def visible(text: str) -> str:
    """Replace characters that would hide or reorder text by their code."""
    if text.isascii() and text.isprintable():
        return text
    return "".join(c if c.isprintable() or c in " \n\xa0" else f"\\u{ord(c):04x}" for c in text)


def _attribute(value: str | float) -> str:
    if not isinstance(value, str):
        return f"{round(value, 1):g}"
    if _PLAIN.fullmatch(value):
        return value
    return f'"{html.escape(visible(value), quote=True)}"'
