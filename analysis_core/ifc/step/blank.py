"""A STEP text in which every mark that is left has its meaning in the grammar.

Texts and comments may hold anything: keywords, apostrophes, whole instances.  Overwriting them at
equal length keeps every other position, so that a plain search finds what the grammar means.
"""

from __future__ import annotations

import re
from dataclasses import dataclass

import numpy as np

Span = tuple[int, int]

_STRETCH = 1 << 21
"""Bytes that are looked at together; what is worked out of them takes several times as much."""

# \S\ shifts the next character by 128; that character may be a plain apostrophe (for the section
# sign, say).  A doubled backslash before it is no directive.
_SHIFTED_APOSTROPHE = re.compile(rb"(?<!\\)((?:\\\\)*\\S\\)'")


@dataclass(frozen=True, slots=True)
class Blanked:
    """``text``: as long as the original, NUL inside texts, spaces in comments and stray marks.

    ``stray`` are the spans of comment marks that open a comment which is never closed, ``open``
    is the position of an apostrophe that has no partner, or -1.
    """

    text: bytes
    open: int = -1
    comments: tuple[Span, ...] = ()
    stray: tuple[Span, ...] = ()


def blank(data: bytes) -> Blanked:
    """Return ``data`` with texts and comments overwritten.

    An unclosed comment would swallow the rest of the file.  Only its mark is overwritten, and
    reported as stray: whether what follows makes sense is for the caller to prove.
    """
    text = data
    if b"\\S\\'" in text:
        text = _SHIFTED_APOSTROPHE.sub(rb"\1_", text)
    comments, stray = _comments(text) if b"/*" in text else ((), ())
    if comments or stray:
        spaced = bytearray(text)
        for start, stop in (*comments, *stray):
            spaced[start:stop] = b" " * (stop - start)
        text = bytes(spaced)
    return Blanked(*_without_strings(text), comments, stray)


def _without_strings(text: bytes) -> tuple[bytes, int]:
    """Return ``text`` with NUL within strings, and where one begins that is not closed, or -1."""
    parts: list[bytes] = []
    inside, last = 0, -1
    for start in range(0, len(text), _STRETCH):
        raw = np.frombuffer(text[start : start + _STRETCH], np.uint8)
        quotes = raw == ord("'")
        marks = np.flatnonzero(quotes)
        # Stretches between apostrophes lie outside and inside of strings by turns.
        stretches = np.diff(marks, prepend=0, append=raw.size)
        outside = np.repeat(np.arange(stretches.size) % 2 == inside, stretches)
        parts.append(np.multiply(raw, (quotes | outside).view(np.uint8)).tobytes())
        if marks.size:
            inside, last = (inside + marks.size) % 2, start + int(marks[-1])
    return b"".join(parts), last if inside else -1


def _comments(text: bytes) -> tuple[tuple[Span, ...], tuple[Span, ...]]:
    """Return the spans of comments and of stray marks; apostrophes in comments do not count."""
    comments: list[Span] = []
    stray: list[Span] = []
    outside = 0  # a position outside of texts and comments
    while (start := text.find(b"/*", outside)) >= 0:
        if text.count(b"'", outside, start) % 2:
            close = text.find(b"'", start)
            if close < 0:
                break
            outside = close + 1
            continue
        stop = text.find(b"*/", start + 2)
        if stop >= 0:
            comments.append((start, stop + 2))
            outside = stop + 2
            continue
        first = start
        while first and text[first - 1] in b"*/":
            first -= 1
        stray.append((first, start + 2))
        outside = start + 2
    return tuple(comments), tuple(stray)
