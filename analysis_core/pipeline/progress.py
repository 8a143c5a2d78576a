"""How a long road says how far it is."""

from __future__ import annotations

from collections.abc import Callable

Progress = Callable[[str, float], None]
"""Told the step and the part of it that is done, from 0 to 1."""


def silent(step: str, part: float) -> None:
    """Say nothing."""
