"""What this reader does not understand, in words for a user."""

from __future__ import annotations

from typing import Any


class UnreadableShapeError(ValueError):
    """A curve, profile, placement or body that cannot be read; the message says why."""


# What an entity with missing or misplaced values can cause while it is read.
READ_ERRORS = (
    ValueError, TypeError, IndexError, AttributeError, KeyError, ArithmeticError, RuntimeError,
)  # fmt: skip


def reason_of(error: Exception) -> str:
    """Return why something could not be read, in words for a user."""
    if isinstance(error, UnreadableShapeError):
        return str(error)
    return "its values are missing or do not fit the standard"


def text_of(value: Any) -> str:
    """Return an attribute that should be text, "" where it is missing or something else."""
    return value if isinstance(value, str) else ""
