"""The attributes of one instance: cut apart at once, made Python values when they are asked for.

What stands in the text decides what a value is, not what the schema would have there: 5 is an
int, 5. a float, .T. is True, any other word between points is text.  $ and * (not stated,
derived) are None.  Within a list they are left out, as are references to nothing, and whole
numbers beside others become floats.
"""

from __future__ import annotations

import re
from typing import Any, Protocol

from analysis_core.ifc.step.values import decoded

# Whatever stands between commas: plain text, strings, lists and lists of lists.
_PART = re.compile(
    rb"(?:[^,'()]++|'[^']*+'|\((?:[^()']++|'[^']*+'|\((?:[^()']++|'[^']*+')*+\))*+\))++"
)
_MARK = re.compile(rb"'[^']*'|[(),]")
# \S\ shifts the next character by 128; an apostrophe there ends no string (see ``blank``).
_SHIFTED_APOSTROPHE = re.compile(rb"(?<!\\)((?:\\\\)*)\\S\\'")
_WORDS: dict[bytes, object] = {b".T.": True, b".F.": False, b".U.": "UNKNOWN"}
_HASH, _DOLLAR, _QUOTE, _OPEN, _POINT, _BITS, _BLANK = b"#$'(.\" "
_NOTHING = b"$*"


class Holder(Protocol):
    """What knows the other instances of a file."""

    def refer(self, number: int) -> Any:
        """Return what stands for an instance, None where the file does not hold it."""

    def named(self, keyword: str, text: bytes) -> Any:
        """Return what stands for a value that names its type, such as IFCLABEL('B12')."""


def attributes(text: bytes, count: int) -> list[bytes]:
    """Cut apart what stands between the brackets of an instance; it has ``count`` attributes.

    Comments must be gone.
    """
    parts = text.split(b",")
    if len(parts) == count and b"\\S\\'" not in text:
        return parts  # there is no comma but those between attributes
    if count < 2:
        return [text] if count else []
    return _parts(_SHIFTED_APOSTROPHE.sub(rb"\1\\X\\A7", text))


def value(text: bytes, holder: Holder) -> Any:
    """Return the value of an attribute; what fits no form of a value stays text."""
    mark = text[0] if text else _DOLLAR
    if mark == _HASH:
        try:
            number = int(text[1:])
        except ValueError:  # what follows the number makes it none
            return None
        return holder.refer(number)
    if mark in _NOTHING:
        return None
    if mark == _QUOTE:
        return _string(text)
    if mark == _OPEN:
        return _aggregate(text[1 : text.rindex(b")")], holder)
    if mark == _POINT:
        word = text.rstrip()
        found = _WORDS.get(word)
        return word[1:-1].decode("latin-1") if found is None else found
    if mark == _BITS:
        return text.rstrip()[1:-1].decode("latin-1")
    if mark <= _BLANK:
        return value(text.lstrip(), holder)
    if b"(" in text:
        at = text.index(b"(")
        keyword = text[:at].rstrip().decode("latin-1").upper()
        return holder.named(keyword, text[at + 1 : text.rindex(b")")])
    return _number(text)


def _aggregate(inner: bytes, holder: Holder) -> tuple[Any, ...]:
    plain = b"(" not in inner and b"'" not in inner
    parts = inner.split(b",") if plain else _parts(inner)
    if not inner.strip():
        return ()
    if plain and inner.count(b".") == len(parts) and b"_" not in inner:
        try:
            return tuple(map(float, parts))  # coordinates: the most there is in a file
        except ValueError:
            pass  # points elsewhere than in each number once
    found = [item for part in parts if (item := value(part, holder)) is not None]
    if found and type(found[0]) in (int, float):
        kinds = set(map(type, found))
        return tuple(map(float, found)) if kinds == {int, float} else tuple(found)
    return tuple(found)


def _parts(text: bytes) -> list[bytes]:
    """Cut a text at its commas, save those in strings and in lists."""
    parts: list[bytes] = _PART.findall(text)
    if sum(map(len, parts)) + len(parts) - 1 == len(text):
        return parts
    depth = start = 0
    parts = []
    for match in _MARK.finditer(text):
        mark = match[0]
        if mark == b"(":
            depth += 1
        elif mark == b")":
            depth -= 1
        elif mark == b"," and not depth:
            parts.append(text[start : match.start()])
            start = match.end()
    return [*parts, text[start:]]


def _number(text: bytes) -> float | int | str:
    try:
        if b"_" not in text:  # Python takes 1_000 for a number
            return float(text) if b"." in text else int(text)
    except ValueError:
        pass
    return text.strip().decode("latin-1")


def _string(text: bytes) -> str:
    string = text.rstrip().decode("latin-1")
    if "\\" not in string and "''" not in string:
        return string[1:-1]
    # The parser keeps line breaks, and so do names that are compared with its own.
    return "\n".join(decoded(f"'{line}'") for line in string[1:-1].split("\n"))
