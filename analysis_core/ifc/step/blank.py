"""A STEP text in which every mark that is left has its meaning in the grammar.

Texts and comments may hold anything: keywords, apostrophes, whole instances.  Overwriting them at
equal length keeps every other position, so that a plain search finds what the grammar means.
"""

from __future__ import annotations

import re
from dataclasses import dataclass

import numpy as np

Span = tuple[int, int]

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
    comments: tuple[Span, ...] = ()
    stray: tuple[Span, ...] = ()
    open: int = -1


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
    raw = np.frombuffer(text, np.uint8)
    quotes = raw == ord("'")
    marks = np.flatnonzero(quotes)
    # Stretches between apostrophes lie outside and inside of texts by turns.
    stretches = np.diff(marks, prepend=0, append=raw.size)
    outside = np.repeat(np.arange(stretches.size) % 2 == 0, stretches)
    position = int(marks[-1]) if marks.size % 2 else -1
    kept = (quotes | outside).view(np.uint8)
    return Blanked(np.multiply(raw, kept).tobytes(), comments, stray, position)


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
