"""The attributes of an instance of a STEP file, token by token."""

from __future__ import annotations

import re

_TOKEN = re.compile(r"\s*('(?:[^']|'')*'|[(),]|[^\s(),']+)")
_TYPE_NAME = re.compile(r"(?:^|[(,])[A-Z][A-Z0-9_]*$")


def arguments(text: str) -> list[object]:
    """Return the attributes of an instance given as text, or of a bare list in brackets.

    Tokens are text, aggregates are lists; a typed value gives two items, its type and a list.
    """
    opening = text.index("(")
    stack: list[list[object]] = [[]]
    for match in _TOKEN.finditer(text, opening):
        token = match[1]
        if token == "(":
            stack.append([])
        elif token == ")":
            inner = stack.pop()
            stack[-1].append(inner)
            if len(stack) == 1:
                break
        elif token != ",":
            stack[-1].append(token)
    result = stack[0][0] if stack[0] else []
    return result if isinstance(result, list) else []


def rendered(attributes: list[object]) -> str:
    """Return attributes as text; a type stands before its value without a comma."""
    text = ""
    for token in attributes:
        if isinstance(token, list):
            typed = _TYPE_NAME.search(text)
            text += ("" if typed or not text else ",") + rendered(token)
        else:
            text += ("," if text else "") + str(token)
    return f"({text})"


def reference(token: object) -> int | None:
    """Return the number in a reference such as #12, None for anything else."""
    if isinstance(token, str) and token.startswith("#") and token[1:].isdigit():
        return int(token[1:])
    return None
