"""Translation of what a person reads.

Literals are marked with ``translate("Spanledger", "…")`` where they stand; texts that the
Qt-free presenters make are looked up whole through ``tr``.
"""

from __future__ import annotations

import FreeCAD

from .present import words
from .qt import QtCore

CONTEXT = "Spanledger"
translate = FreeCAD.Qt.translate
QT_TRANSLATE_NOOP = QtCore.QT_TRANSLATE_NOOP


words.use(lambda text: str(translate(CONTEXT, text)))


# What the core says in single words, shown here as well.
CORE_WORDS = (
    words.noop("distribution factor"),
    words.noop("carry-over factor"),
    words.noop("fixed-end moment"),
    words.noop("with known ends set"),
    words.noop("carried over"),
    words.noop("sum"),
    words.noop("exact"),
    words.noop("no support"),
    words.noop("permanent"),
    words.noop("imposed"),
    words.noop("snow"),
    words.noop("wind"),
    words.noop("temperature"),
    words.noop("settlement"),
    words.noop("other"),
    words.noop("Reading"),
    words.noop("Solving"),
    words.noop("Verifying"),
    words.noop("Enveloping"),
    words.noop("Checking"),
    words.noop("Posting"),
    words.noop("Choosing"),
    words.noop("Writing"),
    words.noop("moment"),
)

# What members are checked for.
CHECKS = (
    words.noop("axial force"),
    words.noop("axial force and flexure"),
    words.noop("bending"),
    words.noop("bending with axial force"),
    words.noop("bending with shear"),
    words.noop("buckling with bending"),
    words.noop("concrete resistance"),
    words.noop("concrete strength"),
    words.noop("deflection limit"),
    words.noop("flexure"),
    words.noop("hogging reinforcement"),
    words.noop("lateral torsional buckling"),
    words.noop("nothing to check"),
    words.noop("redistribution"),
    words.noop("resistance"),
    words.noop("sagging reinforcement"),
    words.noop("span over depth"),
    words.noop("steel resistance"),
    words.noop("steel strength"),
    words.noop("timber resistance"),
)


def tr(text: str) -> str:
    """Return the translation of a text that a presenter marked."""
    return str(translate(CONTEXT, text))
