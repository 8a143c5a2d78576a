"""Checks a job file against its published schema and turns its quantities into SI.

Understands the part of JSON Schema that ``job_schema.json`` uses, plus two words of our own:
``quantity`` (text with a unit, converted to SI) and ``words`` (words allowed in its place).
"""

from __future__ import annotations

import difflib
import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from analysis_core.errors import JobError
from analysis_core.units import parse_quantity

_WORDS = {"rigid": math.inf, "free": 0.0}
_TYPES: dict[str, tuple[type | tuple[type, ...], str]] = {
    "object": (dict, "a mapping of keys to values"),
    "array": (list, "a list"),
    "string": (str, "text (put it in quotes)"),
    "number": ((int, float), "a number"),
    "boolean": (bool, "true or false"),
}


@dataclass(frozen=True, slots=True)
class Position:
    """A place along a member: m from its start, or a part of its length."""

    value: float
    relative: bool


def check(data: object, schema: Mapping[str, Any]) -> Any:
    """Return ``data`` with its quantities in SI and positions as Position.

    Raises JobError that names the place in the file, what was received and what is permitted.
    """
    return _Checker(schema.get("$defs", {})).value(data, schema, "")


class _Checker:
    def __init__(self, definitions: Mapping[str, Any]) -> None:
        self._definitions = definitions

    def value(self, data: object, schema: Mapping[str, Any], path: str) -> Any:
        if "$ref" in schema:
            schema = self._definitions[schema["$ref"].rsplit("/", 1)[1]]
        if "anyOf" in schema:
            return self.value(data, self._alternative(data, schema["anyOf"]), path)
        if "quantity" in schema:
            return _quantity(data, schema, path)
        kind = schema.get("type", "object")
        wanted, words = _TYPES[kind]
        if not isinstance(data, wanted) or (kind == "number" and isinstance(data, bool)):
            raise JobError(f"{_at(path)} is {_shown(data)}; it must be {words}.")
        if isinstance(data, float | int) and not math.isfinite(data):
            raise JobError(f"{_at(path)} is {data}; it must be a finite number.")
        if "enum" in schema and data not in schema["enum"]:
            raise JobError(
                f"{_at(path)} is '{data}'; it must be one of {', '.join(schema['enum'])}."
            )
        if kind == "object":
            assert isinstance(data, dict)
            return self._mapping(data, schema, path)
        if kind == "array":
            assert isinstance(data, list)
            return self._list(data, schema, path)
        return data

    def _alternative(self, data: object, options: Sequence[Mapping[str, Any]]) -> Mapping[str, Any]:
        """The option whose type fits what was written; else the first, whose message then helps."""
        for option in options:
            resolved = option
            if "$ref" in option:
                resolved = self._definitions[option["$ref"].rsplit("/", 1)[1]]
            kind = resolved.get("type", "object")
            if isinstance(data, _TYPES[kind][0]) and not isinstance(data, bool):
                return option
        return options[0]

    def _mapping(
        self, data: dict[Any, Any], schema: Mapping[str, Any], path: str
    ) -> dict[str, Any]:
        known = schema.get("properties")
        other = schema.get("additionalProperties", True)
        out: dict[str, Any] = {}
        for key, item in data.items():
            if not isinstance(key, str):
                raise JobError(
                    f"{_at(path)} has the key {key!r}; keys are text (put it in quotes)."
                )
            inner = f"{path}.{key}" if path else key
            if known and key in known:
                out[key] = self.value(item, known[key], inner)
            elif other is False:
                raise JobError(_unknown_key(key, known or {}, path))
            else:
                out[key] = self.value(item, other, inner) if isinstance(other, dict) else item
        for key in schema.get("required", ()):
            if key not in out:
                raise JobError(f"{_at(path)} has no '{key}'; it is required.")
        return out

    def _list(self, data: list[Any], schema: Mapping[str, Any], path: str) -> list[Any]:
        if len(data) < schema.get("minItems", 0):
            raise JobError(
                f"{_at(path)} has {len(data)} entries; at least {schema['minItems']} are needed."
            )
        return [self.value(item, schema["items"], f"{path}[{i}]") for i, item in enumerate(data)]


def _quantity(data: object, schema: Mapping[str, Any], path: str) -> float | Position:
    quantity = schema["quantity"]
    if isinstance(data, str) and data.strip().lower() in schema.get("words", ()):
        return _WORDS[data.strip().lower()]
    readers: dict[str, Callable[[object], float | Position]] = {
        "position": _position,
        "fraction": _fraction,
    }
    try:
        if quantity in readers:
            return readers[quantity](data)
        return parse_quantity(data, quantity)
    except ValueError as error:
        words = schema.get("words")
        hint = f" (or the word {' or '.join(words)})" if words else ""
        raise JobError(f"{_at(path)}: {error}{hint}.") from None


def _position(data: object) -> Position:
    if isinstance(data, str) and data.strip().endswith("%"):
        return Position(_fraction(data), relative=True)
    return Position(parse_quantity(data, "length"), relative=False)


def _fraction(data: object) -> float:
    text = data.strip() if isinstance(data, str) else ""
    if text.endswith("%"):
        try:
            value = float(text[:-1]) / 100.0
        except ValueError:
            value = math.nan
        if math.isfinite(value):
            return value
    raise ValueError(f"{data!r} is no percentage; write it as in '15 %'")


def _unknown_key(key: str, known: Mapping[str, Any], path: str) -> str:
    near = difflib.get_close_matches(key, known, n=1, cutoff=0.0)
    return (
        f"{_at(path)} has the unknown key '{key}'; the nearest known one is '{near[0]}' "
        f"(known: {', '.join(known)})."
    )


def _at(path: str) -> str:
    return f"'{path}'" if path else "The job file"


def _shown(data: object) -> str:
    text = repr(data)
    return text if len(text) <= 40 else text[:37] + "..."
