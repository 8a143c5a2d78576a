"""What stood in our property sets before, to tell which of them posting changes.

The time of posting does not count.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Sequence
from functools import cached_property, partial

from analysis_core.ifc.property_sets import PropertySet
from analysis_core.ifc.step_index import StepIndex, arguments, reference

_LINE = re.compile(r"#(\d+)=(.*);")
_SET = re.compile(r"IFCPROPERTYSET\('([^']{22})'.*\(([#0-9,]+)\)\)")
_REFERENCE = re.compile(r"'(?:[^']|'')*'|#(\d+)")
_TIME_VALUE = re.compile(rb"'ComputedAt',\$,IFC[A-Z]+\('[^']*'\)")
_TIME = "IFCPROPERTYSINGLEVALUE('ComputedAt'"

Bodies = Callable[[int], str]


class SetContents:
    """Contents of property sets by GlobalId, looked at only where they are compared."""

    def __init__(self, load: Callable[[], dict[str, Callable[[], object]]] | None = None) -> None:
        self._load = load or dict

    @cached_property
    def _sets(self) -> dict[str, Callable[[], object]]:
        return self._load()

    def __len__(self) -> int:
        return len(self._sets)

    def __contains__(self, global_id: str) -> bool:
        return global_id in self._sets

    def __or__(self, other: SetContents) -> SetContents:
        return SetContents(lambda: self._sets | other._sets)

    def equal(self, global_id: str, made: PropertySet, bodies: Bodies) -> bool:
        """Whether a set had just these properties; ``bodies`` gives the text of what they name."""
        before = self._sets[global_id]()
        read = _plain if isinstance(before, tuple) else _values
        return before == read(made.properties, bodies)


def contents_in_block(block: bytes) -> SetContents:
    """Return the sets of our own block, in which every instance is one line."""

    def load() -> dict[str, Callable[[], object]]:
        lines = map(_LINE.fullmatch, block.decode("ascii", "replace").splitlines())
        bodies = {int(line[1]): line[2] for line in lines if line}
        sets: dict[str, Callable[[], object]] = {}
        for body in bodies.values():
            if match := _SET.fullmatch(body):
                numbers = [int(n[1:]) for n in match[2].split(",")]
                sets[match[1]] = partial(_in_block, numbers, bodies)
        return sets

    return SetContents(load)


def contents_in_file(index: StepIndex, sets: dict[int, tuple[str, str]]) -> SetContents:
    """Return sets (GlobalId and name by number) of a file that any program may have written."""
    return SetContents(
        lambda: {name: partial(_in_file, index, number) for number, (name, _) in sets.items()}
    )


def timeless(block: bytes) -> bytes:
    """Return the lines of a block with the time of posting left out."""
    return _TIME_VALUE.sub(b"", block)


def _in_block(numbers: list[int], bodies: dict[int, str]) -> object:
    return _plain([bodies[n] for n in numbers], bodies.__getitem__)


def _in_file(index: StepIndex, number: int) -> object:
    def body(instance: int) -> str:
        text = index.text(instance)
        return text[text.index("=") + 1 :].strip().rstrip(";")

    properties = index.arguments(number)[4]
    numbers = map(reference, properties) if isinstance(properties, list) else ()
    return _values([body(n) for n in numbers if n is not None and n in index], body)


def _plain(properties: Sequence[str], bodies: Bodies) -> object:
    """The texts, with the texts of units in the place of their numbers."""
    return tuple(_expanded(p, bodies) for p in properties if not p.startswith(_TIME))


def _expanded(text: str, bodies: Bodies) -> str:
    if "#" not in text:
        return text
    return _REFERENCE.sub(lambda m: _expanded(bodies(int(m[1])), bodies) if m[1] else m[0], text)


def _values(properties: Sequence[str], bodies: Bodies) -> object:
    """The values: other programs print numbers in other ways, and order a set as they like."""
    return frozenset(_value(p, bodies) for p in properties if not p.startswith(_TIME))


def _value(text: str, bodies: Bodies) -> object:
    return (text[: text.index("(")].strip().upper(), _tokens(arguments(text), bodies))


def _tokens(tokens: list[object], bodies: Bodies) -> tuple[object, ...]:
    return tuple(_token(token, bodies) for token in tokens)


def _token(token: object, bodies: Bodies) -> object:
    if isinstance(token, list):
        return _tokens(token, bodies)
    if (number := reference(token)) is not None:
        return _value(bodies(number), bodies)
    try:
        return float(str(token))
    except ValueError:
        return token
