"""What stands in our property sets, to tell which of them posting changes.

The time of posting does not count.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterable, Mapping
from functools import cached_property, partial

from analysis_core.ifc.step.index import StepIndex
from analysis_core.ifc.step.tokens import arguments, reference

_LINE = re.compile(r"#(\d+)=(.*);")
_SET = re.compile(r"IFCPROPERTYSET\('([^']{22})'.*\(([#0-9,]+)\)\)")
_REFERENCE = re.compile(r"'(?:[^']|'')*'|#(\d+)")
_TIME_VALUE = re.compile(rb"'ComputedAt',\$,IFC[A-Z]+\('[^']*'\)")
_TIME = re.compile(r"IFCPROPERTYSINGLEVALUE\s*\(\s*'ComputedAt'")

Texts = Callable[[int], str]
# The texts of the properties of a set, and how to look up what these refer to.
Content = tuple[list[str], Texts]


class SetContents:
    """Contents of property sets by GlobalId, read only where they are compared."""

    def __init__(
        self,
        load: Callable[[], Mapping[str, Callable[[], Content]]] | None = None,
        *,
        verbatim: bool = True,
    ) -> None:
        self._load = load or dict
        self._verbatim = verbatim

    def __bool__(self) -> bool:
        """Whether there may be any: false without looking where nothing was there before."""
        return self._load is not dict

    @cached_property
    def _sets(self) -> Mapping[str, Callable[[], Content]]:
        return self._load()

    def __len__(self) -> int:
        return len(self._sets)

    def __contains__(self, global_id: str) -> bool:
        return global_id in self._sets

    def __or__(self, other: SetContents) -> SetContents:
        return SetContents(lambda: {**self._sets, **other._sets}, verbatim=False)

    def changed(self, after: SetContents, global_ids: Iterable[str]) -> int:
        """Return how many of these sets differ from what they are now."""
        # Other programs print numbers in other ways, and order a set as they like.
        read = _texts if self._verbatim and after._verbatim else _values
        return sum(read(*self._sets[g]()) != read(*after._sets[g]()) for g in global_ids)


def contents_in_block(block: bytes) -> SetContents:
    """Return the sets of our own block, in which every instance is one line."""

    def load() -> Mapping[str, Callable[[], Content]]:
        lines = map(_LINE.fullmatch, block.decode("ascii", "replace").splitlines())
        texts = {int(line[1]): line[2] for line in lines if line}
        sets: dict[str, Callable[[], Content]] = {}
        for text in texts.values():
            if match := _SET.fullmatch(text):
                numbers = [int(n[1:]) for n in match[2].split(",")]
                sets[match[1]] = partial(_in_block, numbers, texts)
        return sets

    return SetContents(load)


def contents_in_file(index: StepIndex, sets: Mapping[int, tuple[str, str]]) -> SetContents:
    """Return sets (GlobalId and name by number) of a file that any program may have written."""
    return SetContents(
        lambda: {name: partial(_in_file, index, number) for number, (name, _) in sets.items()},
        verbatim=False,
    )


def timeless(block: bytes) -> bytes:
    """Return the lines of a block with the time of posting left out."""
    return _TIME_VALUE.sub(b"", block)


def _in_block(numbers: list[int], texts: Mapping[int, str]) -> Content:
    return [texts[n] for n in numbers], texts.__getitem__


def _in_file(index: StepIndex, number: int) -> Content:
    def text(instance: int) -> str:
        whole = index.text(instance)
        return whole[whole.index("=") + 1 :].strip().rstrip(";")

    properties = index.arguments(number)[4]
    numbers = map(reference, properties) if isinstance(properties, list) else ()
    return [text(n) for n in numbers if n is not None and n in index], text


def _texts(properties: list[str], texts: Texts) -> object:
    """The texts, with the texts of units in the place of their numbers."""
    return [_expanded(p, texts) for p in properties if not _TIME.match(p)]


def _expanded(text: str, texts: Texts) -> str:
    if "#" not in text:
        return text
    return _REFERENCE.sub(lambda m: _expanded(texts(int(m[1])), texts) if m[1] else m[0], text)


def _values(properties: list[str], texts: Texts) -> object:
    return frozenset(_value(p, texts) for p in properties if not _TIME.match(p))


def _value(text: str, texts: Texts) -> object:
    return text[: text.index("(")].strip().upper(), _tokens(arguments(text), texts)


def _tokens(tokens: list[object], texts: Texts) -> tuple[object, ...]:
    return tuple(_token(token, texts) for token in tokens)


def _token(token: object, texts: Texts) -> object:
    if isinstance(token, list):
        return _tokens(token, texts)
    if (number := reference(token)) is not None:
        return _value(texts(number), texts)
    try:
        return float(str(token))
    except ValueError:
        return token
