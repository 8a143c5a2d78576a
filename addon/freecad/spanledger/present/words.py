"""Words that a person reads, in the language of the window.

Presenters know no Qt; ``texts`` gives them FreeCAD's translator once a window is there.  Names,
numbers and what the core says (findings, reasons, messages) stay as they are.
"""

from __future__ import annotations

from collections.abc import Callable


def _as_it_is(text: str) -> str:
    return text


_translator: Callable[[str], str] = _as_it_is


def use(translator: Callable[[str], str]) -> None:
    """Translate by ``translator`` from now on."""
    global _translator
    _translator = translator


def say(text: str, **parts: object) -> str:
    """Return a literal in the language of the window, its {parts} filled in."""
    said = _translator(text)
    return said.format(**parts) if parts else said


def noop(text: str) -> str:
    """Mark a literal to be translated where it is shown."""
    return text
