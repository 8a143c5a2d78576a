"""Units: text with units into SI, and SI into what a person reads.

Inside the program everything is SI; units are met only here, once on the way in and once on the
way out.  Factors are exact definitions: the international foot and pound (1959 agreement; NIST
Special Publication 811, appendix B) and standard gravity 9.80665 m/s² (3rd CGPM, 1901).
"""

from __future__ import annotations

import difflib
import math
import re
from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction

STANDARD_GRAVITY = 9.80665
INCH = 0.0254
FOOT = 0.3048
POUND_MASS = 0.45359237
POUND_FORCE = POUND_MASS * STANDARD_GRAVITY

# Exponents of (mass, length, time, temperature, angle).
Dimension = tuple[int, int, int, int, int]
_NONE: Dimension = (0, 0, 0, 0, 0)
_MASS: Dimension = (1, 0, 0, 0, 0)
_LENGTH: Dimension = (0, 1, 0, 0, 0)
_FORCE: Dimension = (1, 1, -2, 0, 0)
_PRESSURE: Dimension = (1, -1, -2, 0, 0)
_TEMPERATURE: Dimension = (0, 0, 0, 1, 0)
_ANGLE: Dimension = (0, 0, 0, 0, 1)

_UNITS: dict[str, tuple[float, Dimension]] = {
    "m": (1.0, _LENGTH),
    "mm": (1e-3, _LENGTH),
    "cm": (1e-2, _LENGTH),
    "km": (1e3, _LENGTH),
    "in": (INCH, _LENGTH),
    "inch": (INCH, _LENGTH),
    "ft": (FOOT, _LENGTH),
    "yd": (3.0 * FOOT, _LENGTH),
    "N": (1.0, _FORCE),
    "kN": (1e3, _FORCE),
    "MN": (1e6, _FORCE),
    "lbf": (POUND_FORCE, _FORCE),
    "kip": (1e3 * POUND_FORCE, _FORCE),
    "kgf": (STANDARD_GRAVITY, _FORCE),
    "kg": (1.0, _MASS),
    "t": (1e3, _MASS),
    "g": (1e-3, _MASS),
    "lb": (POUND_MASS, _MASS),
    "Pa": (1.0, _PRESSURE),
    "kPa": (1e3, _PRESSURE),
    "MPa": (1e6, _PRESSURE),
    "GPa": (1e9, _PRESSURE),
    "psi": (POUND_FORCE / INCH**2, _PRESSURE),
    "ksi": (1e3 * POUND_FORCE / INCH**2, _PRESSURE),
    "psf": (POUND_FORCE / FOOT**2, _PRESSURE),
    "ksf": (1e3 * POUND_FORCE / FOOT**2, _PRESSURE),
    "plf": (POUND_FORCE / FOOT, (1, 0, -2, 0, 0)),
    "klf": (1e3 * POUND_FORCE / FOOT, (1, 0, -2, 0, 0)),
    "pcf": (POUND_MASS / FOOT**3, (1, -3, 0, 0, 0)),
    "K": (1.0, _TEMPERATURE),
    "degC": (1.0, _TEMPERATURE),
    "degF": (5.0 / 9.0, _TEMPERATURE),
    "rad": (1.0, _ANGLE),
    "mrad": (1e-3, _ANGLE),
    "deg": (math.pi / 180.0, _ANGLE),
}

# What a quantity may be measured in: its dimension, and an example for messages.
QUANTITIES: dict[str, tuple[Dimension, str]] = {
    "length": (_LENGTH, "6.5 m"),
    "force": (_FORCE, "20 kN"),
    "moment": ((1, 2, -2, 0, 0), "15 kN*m"),
    "line load": ((1, 0, -2, 0, 0), "12 kN/m"),
    "area load": (_PRESSURE, "2.5 kN/m2"),
    "stress": (_PRESSURE, "210 GPa"),
    "translational stiffness": ((1, 0, -2, 0, 0), "25 kN/mm"),
    "rotational stiffness": ((1, 2, -2, 0, 0), "5000 kN*m/rad"),
    "density": ((1, -3, 0, 0, 0), "7850 kg/m3"),
    "temperature difference": (_TEMPERATURE, "15 K"),
    "thermal expansion": ((0, 0, 0, -1, 0), "12e-6 1/K"),
    "angle": (_ANGLE, "2 deg"),
    "area": ((0, 2, 0, 0, 0), "84.5 cm2"),
    "inertia": ((0, 4, 0, 0, 0), "23130 cm4"),
}

_SPELLINGS = str.maketrans({"·": "*", "×": "*", "²": "2", "³": "3", "⁴": "4", "−": "-"})
_QUANTITY = re.compile(r"\s*([-+]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?)\s*(.*?)\s*", re.DOTALL)
_FEET_AND_INCHES = re.compile(
    r"""\s*(?P<sign>-?)\s*(?:(?P<feet>\d+)\s*')?\s*-?\s*"""
    r"""(?:(?P<inches>\d+(?:\.\d+)?)??(?:(?:\s+|(?<!\d))(?P<part>\d+/\d+))?\s*")?\s*"""
)


def parse_quantity(text: object, quantity: str) -> float:
    """Return ``text`` such as "12 kN/m" in SI.

    ``quantity`` is a key of QUANTITIES.  Lengths may also be feet and inches: 12'-6 1/2".
    Raises ValueError with what was received and what is permitted.
    """
    dimension, example = QUANTITIES[quantity]
    if not isinstance(text, str):
        raise ValueError(
            f"{text!r} has no unit; a {quantity} is text with a unit, as in '{example}'"
        )
    if quantity == "length" and (value := _feet_and_inches(text)) is not None:
        return value
    match = _QUANTITY.fullmatch(text)
    if match is None or not match[2]:
        raise ValueError(f"'{text}' is not a {quantity} with its unit, as in '{example}'")
    factor, found = unit_factor(match[2])
    if not _compatible(found, dimension):
        raise ValueError(f"'{text}' is not a {quantity}; expected something like '{example}'")
    value = float(match[1]) * factor
    if not math.isfinite(value):
        raise ValueError(f"'{text}' is too large to be a {quantity}")
    return value


def unit_factor(expression: str) -> tuple[float, Dimension]:
    """Return the SI factor and the dimension of a unit expression such as "kN*m/rad".

    Raises ValueError that names the nearest known unit.
    """
    plain = expression.translate(_SPELLINGS).replace("°C", "degC").replace("°F", "degF")
    tokens = re.findall(r"[A-Za-z]+|\^?-?\d+|[*/.() ]", plain)
    if "".join(tokens).replace(" ", "") != plain.replace(" ", "") or not tokens:
        raise ValueError(f"'{expression}' is not a unit")
    factor, dimension, sign = 1.0, _NONE, 1
    name: str | None = None
    for token in [*tokens, "*"]:
        if token.lstrip("^-").isdigit():
            if name is None:
                if token == "1":  # as in 1/K
                    continue
                raise ValueError(f"'{expression}' is not a unit")
            factor, dimension = _times(factor, dimension, name, sign * int(token.lstrip("^")))
            name = None
            continue
        if name is not None:
            factor, dimension = _times(factor, dimension, name, sign)
            name = None
        if token == "/":
            sign = -1
        elif token.isalpha():
            name = _known(token, expression)
    return factor, dimension


@dataclass(frozen=True, slots=True)
class DisplayUnits:
    """Units in which a person reads, by quantity: (symbol, SI factor, decimals)."""

    units: Mapping[str, tuple[str, float, int]]

    def symbol(self, quantity: str) -> str:
        """Return the unit's symbol, "kN·m" say."""
        return self.units[quantity][0]

    def value(self, si: float, quantity: str) -> float:
        """Return an SI value in the display unit."""
        return si / self.units[quantity][1]

    def number(self, si: float, quantity: str) -> str:
        """Return an SI value as a rounded number without its unit."""
        _, factor, decimals = self.units[quantity]
        text = f"{si / factor:.{decimals}f}"
        return text.lstrip("-") if float(text) == 0.0 else text

    def text(self, si: float, quantity: str) -> str:
        """Return an SI value as a rounded number with its unit."""
        return f"{self.number(si, quantity)} {self.symbol(quantity)}"


_SYSTEMS: dict[str, dict[str, tuple[str, int]]] = {
    "metric": {
        "length": ("m", 3), "deflection": ("mm", 1), "force": ("kN", 2), "moment": ("kN*m", 2),
        "line load": ("kN/m", 2), "area load": ("kN/m2", 2), "stress": ("MPa", 1),
        "section length": ("mm", 1), "area": ("cm2", 1), "inertia": ("cm4", 0),
        "translational stiffness": ("kN/m", 0), "rotational stiffness": ("kN*m/rad", 0),
        "rotation": ("mrad", 3), "density": ("kg/m3", 0), "temperature difference": ("K", 1),
        "flexural rigidity": ("kN*m2", 0), "section modulus": ("cm3", 1), "warping": ("cm6", 0),
        "reinforcement per length": ("mm2/m", 0),
    },
    "us": {
        "length": ("ft", 2), "deflection": ("in", 3), "force": ("kip", 2), "moment": ("kip*ft", 2),
        "line load": ("kip/ft", 3), "area load": ("psf", 1), "stress": ("ksi", 2),
        "section length": ("in", 3), "area": ("in2", 2), "inertia": ("in4", 1),
        "translational stiffness": ("kip/in", 1), "rotational stiffness": ("kip*ft/rad", 0),
        "rotation": ("mrad", 3), "density": ("pcf", 0), "temperature difference": ("degF", 1),
        "flexural rigidity": ("kip*in2", 0), "section modulus": ("in3", 2), "warping": ("in6", 0),
        "reinforcement per length": ("in2/ft", 3),
    },
}  # fmt: skip

_DISPLAY_DIMENSIONS: dict[str, Dimension] = {
    **{name: dimension for name, (dimension, _) in QUANTITIES.items()},
    "deflection": _LENGTH,
    "section length": _LENGTH,
    "rotation": _ANGLE,
    "flexural rigidity": (1, 3, -2, 0, 0),
    "section modulus": (0, 3, 0, 0, 0),
    "warping": (0, 6, 0, 0, 0),
    "reinforcement per length": _LENGTH,
}


def display_units(
    system: str = "metric", overrides: Mapping[str, str] | None = None
) -> DisplayUnits:
    """Return the display units of a system ("metric", "us"), some replaced by quantity.

    Raises ValueError for an unknown quantity or a unit that does not measure it.
    """
    chosen = {
        quantity: _display_unit(symbol, decimals)
        for quantity, (symbol, decimals) in _SYSTEMS[system].items()
    }
    for quantity, symbol in (overrides or {}).items():
        if quantity not in chosen:
            raise ValueError(f"'{quantity}' is no displayed quantity{_nearest(quantity, chosen)}")
        unit = _display_unit(symbol, 0)
        if not _compatible(unit_factor(symbol)[1], _DISPLAY_DIMENSIONS[quantity]):
            raise ValueError(f"'{symbol}' does not measure a {quantity}")
        decimals = _decimals_like(chosen[quantity], unit[1])
        chosen[quantity] = (unit[0], unit[1], decimals)
    return DisplayUnits(chosen)


def _display_unit(symbol: str, decimals: int) -> tuple[str, float, int]:
    factor, _ = unit_factor(symbol)
    pretty = symbol.replace("*", "·").replace("degF", "°F").replace("degC", "°C")
    pretty = re.sub(r"(?<=[A-Za-z])\^?2", "²", pretty)
    pretty = re.sub(r"(?<=[A-Za-z])\^?3", "³", pretty)
    pretty = re.sub(r"(?<=[A-Za-z])\^?6", "⁶", pretty)
    return re.sub(r"(?<=[A-Za-z])\^?4", "⁴", pretty), factor, decimals


def _decimals_like(unit: tuple[str, float, int], factor: float) -> int:
    """Keep about the same resolution when the unit changes."""
    return max(0, min(9, round(unit[2] + math.log10(factor / unit[1]))))


def _times(factor: float, dimension: Dimension, name: str, power: int) -> tuple[float, Dimension]:
    unit, exponents = _UNITS[name]
    m, length, t, k, a = (d + power * e for d, e in zip(dimension, exponents, strict=True))
    return factor * unit**power, (m, length, t, k, a)


def _known(token: str, expression: str) -> str:
    if token in _UNITS:
        return token
    raise ValueError(f"'{token}' in '{expression}' is no known unit{_nearest(token, _UNITS)}")


def _nearest(word: str, known: Mapping[str, object]) -> str:
    by_lower = {name.lower(): name for name in known}
    near = difflib.get_close_matches(word.lower(), by_lower, n=1, cutoff=0.5)
    return f"; did you mean '{by_lower[near[0]]}'?" if near else ""


def _compatible(found: Dimension, wanted: Dimension) -> bool:
    """Compare dimensions; per radian may be written or left out, as the trade does."""
    if wanted == _ANGLE:
        return found == _ANGLE
    return found[:4] == wanted[:4] and found[4] in (0, -1)


def _feet_and_inches(text: str) -> float | None:
    if "'" not in text and '"' not in text:
        return None
    match = _FEET_AND_INCHES.fullmatch(text.replace("′", "'").replace("″", '"'))
    if match is None or not any(match[g] for g in ("feet", "inches", "part")):
        raise ValueError(f"""{text} is not a length in feet and inches, as in 12'-6 1/2\"""")
    inches = 12 * int(match["feet"] or 0) + Fraction(match["inches"] or 0)
    inches += Fraction(match["part"] or 0)
    return float(inches) * INCH * (-1.0 if match["sign"] else 1.0)
