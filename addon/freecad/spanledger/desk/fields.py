"""Small parts that forms are made of."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from ..qt import Qt, QtWidgets
from ..texts import tr


def choice(name: str, options: Sequence[str], current: str = "", tip: str = "") -> Any:
    """Return a box to choose one of a few words."""
    box = QtWidgets.QComboBox()
    box.setObjectName(name)
    for option in options:
        box.addItem(tr(option), option)
    if current in options:
        box.setCurrentIndex(list(options).index(current))
    box.setToolTip(tip)
    return box


def entry(name: str, text: str = "", hint: str = "", tip: str = "") -> Any:
    """Return a field to type a quantity in."""
    line = QtWidgets.QLineEdit(text)
    line.setObjectName(name)
    line.setPlaceholderText(hint)
    line.setToolTip(tip)
    return line


def button(name: str, text: str, tip: str = "") -> Any:
    """Return a button that Enter presses too when it has the focus."""
    made = QtWidgets.QPushButton(text)
    made.setObjectName(name)
    made.setToolTip(tip)
    made.setAutoDefault(True)
    return made


def facts_text(facts: Sequence[tuple[str, str]]) -> str:
    """Return facts as rich text; whatever came from a model is escaped."""
    rows = [
        f"<tr><td width='34%' style='padding-right:8px'><i>{_escaped(name)}</i></td>"
        f"<td>{_escaped(words)}</td></tr>"
        for name, words in facts
    ]
    return f"<table width='100%'>{''.join(rows)}</table>"


def facts_label(name: str) -> Any:
    """Return a label for facts; its text can be selected and copied."""
    label = QtWidgets.QLabel()
    label.setObjectName(name)
    label.setWordWrap(True)
    label.setTextFormat(Qt.TextFormat.RichText)
    label.setAlignment(Qt.AlignmentFlag.AlignTop | Qt.AlignmentFlag.AlignLeft)
    label.setTextInteractionFlags(
        Qt.TextInteractionFlag.TextSelectableByMouse
        | Qt.TextInteractionFlag.TextSelectableByKeyboard
    )
    return label


def heading(text: str) -> Any:
    """Return a bold label."""
    label = QtWidgets.QLabel(text)
    font = label.font()
    font.setBold(True)
    label.setFont(font)
    return label


def _escaped(text: str) -> str:
    for char, entity in (("&", "&amp;"), ("<", "&lt;"), (">", "&gt;"), ("'", "&#39;")):
        text = text.replace(char, entity)
    return text
