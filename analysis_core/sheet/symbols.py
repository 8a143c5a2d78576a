"""Symbols of the standards with their subscripts, and formulas with their numbers."""

from __future__ import annotations

import math
import re
from functools import lru_cache

from analysis_core.checks.working import Step
from analysis_core.sheet.html import Markup, tag, text_of
from analysis_core.units import DisplayUnits

_GREEK = {
    "alpha": "α", "beta": "β", "gamma": "γ", "lambda": "λ", "chi": "χ", "rho": "ρ", "phi": "φ",
    "eta": "η", "nu": "ν", "mu": "μ", "Omega": "Ω", "epsilon": "ε",
}  # fmt: skip
# A letter or a word, an underscore, and what is set below the line: M_c,Rd, γ_M0, A_sw, c_w.
_WORD = r"(?:(?![²³⁴⁵⁶])[^\W_]|\+)+"
_SUBSCRIPT = re.compile(rf"([^\W\d_]+'?)_({_WORD}(?:,(?!\s){_WORD})*)")
_OPERAND = re.compile(r"\{([^}]*)\}")
_POWER = re.compile(r"\{([^}]*)\}([²³⁴])")
_SIDE_BY_SIDE = re.compile(r"(?<=[}\)²³]) (?=[{(√])|(?<=}) (?=\d)|(?<=[\dπ²³]) (?=[{√])")


@lru_cache(maxsize=4096)
def symbols(text: str) -> Markup:
    """Return text in which every ``X_y`` has its y below the line, and Greek letters are Greek."""
    out, last = [], 0
    for match in _SUBSCRIPT.finditer(text):
        out.append(text_of(text[last : match.start()]))
        out.append(text_of(_GREEK.get(match[1], match[1])))
        out.append(tag("sub", match[2]).text)
        last = match.end()
    out.append(text_of(text[last:]))
    return Markup("".join(out))


def formula(step: Step) -> Markup:
    """Return a step's formula in symbols."""
    return symbols(_OPERAND.sub(lambda match: _GREEK.get(match[1], match[1]), step.formula))


def numbers(step: Step, units: DisplayUnits) -> Markup:
    """Return a step's formula with numbers in the place of its operands."""
    values = {name: value_text(value, quantity, units) for name, value, quantity in step.operands}
    multiplied = _SIDE_BY_SIDE.sub(" · ", step.formula)
    multiplied = _POWER.sub(r"({\1})\2", multiplied)
    text = _OPERAND.sub(lambda match: values.get(match[1], match[1]), multiplied)
    # Numbers rarely repeat: without symbols in them they stay out of the cache.
    return symbols(text) if "_" in text else Markup(text_of(text))


def bounded(step: Step) -> bool:
    """Whether a formula holds a bound, so that its value need not be that of the numbers."""
    return "≤" in step.formula or "≥" in step.formula


def value_text(value: float, quantity: str, units: DisplayUnits) -> str:
    """Return a value in display units, with as many digits as a check needs.

    Three digits that count, where two decimals more than usual give them.
    """
    if quantity:
        text = units.text(value, quantity)
        number, _, symbol = text.partition(" ")
        usual = len(number.partition(".")[2])
        shown = units.value(value, quantity)
        if not usual or not 0.0 < abs(shown) < 100.0:
            return text
        needed = 2 - math.floor(math.log10(abs(shown)))
        precise = f"{shown:.{min(max(needed, usual), usual + 2)}f}".rstrip("0").rstrip(".")
        return f"{precise} {symbol}" if len(precise) > len(number) else text
    if abs(value - round(value)) < 1e-9 and abs(value) < 1000:
        return f"{value:.0f}".replace("-0", "0")
    return f"{value:.3f}" if abs(value) >= 0.01 else f"{value:.5f}"
