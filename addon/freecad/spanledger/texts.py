"""Translation of what a person reads.

Literals are marked with ``translate("Spanledger", "…")`` where they stand; texts that the
Qt-free presenters make are looked up whole through ``tr``.
"""

from __future__ import annotations

import FreeCAD

from .qt import QtCore

CONTEXT = "Spanledger"
translate = FreeCAD.Qt.translate
QT_TRANSLATE_NOOP = QtCore.QT_TRANSLATE_NOOP


def tr(text: str) -> str:
    """Return the translation of a text that a presenter marked."""
    return str(translate(CONTEXT, text))
