"""Values in the clear text of ISO 10303-21: how strings, numbers and references are written."""

from __future__ import annotations

import math
import re
from collections.abc import Iterable

LABEL_LENGTH = 255
"""Longest IfcLabel and IfcIdentifier."""

_PLAIN = re.compile(r"[\x20-\x26\x28\x29\x2b-\x5b\x5d-\x7e]*")
_TO_ENCODE = re.compile(r"[^\x20-\x26\x28-\x5b\x5d-\x7e]")
_ESCAPES = re.compile(
    r"''|\\\\|\\X2\\((?:[0-9A-F]{4})*)\\X0\\|\\X4\\((?:[0-9A-F]{8})*)\\X0\\"
    r"|\\X\\([0-9A-F]{2})|\\S\\(.)|\\P[A-I]\\|[\r\n]",
    re.DOTALL,
)
_SHORT_EXPONENT = re.compile(r"(?<![0-9.])(-?[0-9]+)E")


def string(text: str) -> str:
    r"""Return text as a quoted string: '' for ', \\ for \, \X\, \X2\ and \X4\ for the rest.

    ISO 10303-21:2016, 6.4.3.  A lone surrogate, which no character stands for, becomes "?".
    Where text holds the mark of a comment, its star is written as \X\2A: legal, and safe with
    readers that look for comments first.
    """
    if _PLAIN.fullmatch(text):
        return f"'{text}'"
    encoded = _TO_ENCODE.sub(lambda match: _character(match[0]), text)
    if "/*" in encoded or "*/" in encoded:
        encoded = encoded.replace("*", "\\X\\2A")
    return f"'{encoded}'"


def label(text: str) -> str:
    """Return text as a quoted string no longer than IfcLabel allows."""
    return string(shortened(text))


def shortened(text: str, length: int = LABEL_LENGTH) -> str:
    """Return text cut to ``length`` characters, with an ellipsis where something went."""
    return text if len(text) <= length else f"{text[: length - 1]}…"


def decoded(literal: str) -> str:
    """Return the text of a quoted string; line breaks within it do not count."""
    return _ESCAPES.sub(_unescaped, literal[1:-1])


def real(value: float) -> str:
    """Return a number as REAL with every digit it needs: 2.5, 0.0, 1.E-05."""
    if not math.isfinite(value):
        raise ValueError(f"{value} cannot be written as a number")
    return real_text(repr(float(value)))


def real_text(text: str) -> str:
    """Turn numbers as Python prints them (one, or a list of them) into REAL.

    A REAL has a decimal point and an upper-case exponent; Python prints 1e-05.
    """
    if "e" not in text:
        return text
    return _SHORT_EXPONENT.sub(r"\1.E", text.replace("e", "E"))


def reals(values: list[float]) -> list[str]:
    """Return finite numbers as REAL, every digit they need; quicker than one by one."""
    return real_text(repr(values)[1:-1]).split(", ")


def references(ids: Iterable[int]) -> str:
    """Return a list of references: (#1,#2)."""
    return f"({','.join(f'#{i}' for i in ids)})"


def _character(c: str) -> str:
    code = ord(c)
    if c == "'":
        return "''"
    if c == "\\":
        return "\\\\"
    if 0x20 <= code < 0x7F:
        return c
    if code < 0x20 or 0x7F <= code < 0xA0:
        return f"\\X\\{code:02X}"
    if 0xD800 <= code < 0xE000:
        return "?"
    if code > 0xFFFF:
        return f"\\X4\\{code:08X}\\X0\\"
    return f"\\X2\\{code:04X}\\X0\\"


def _unescaped(match: re.Match[str]) -> str:
    whole = match[0]
    if whole == "''":
        return "'"
    if whole == "\\\\":
        return "\\"
    if match[1] is not None:
        return bytes.fromhex(match[1]).decode("utf-16-be", "replace")
    if match[2] is not None:
        return bytes.fromhex(match[2]).decode("utf-32-be", "replace")
    if match[3] is not None:
        return chr(int(match[3], 16))
    if match[4] is not None:
        return chr(ord(match[4]) + 128)
    return ""
