"""The docks around the 3D view in which the engineer works; needs a window."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from .controller import Desk

_desk: Desk | None = None


def the_desk() -> Desk:
    """Return the one desk of this window, made on first use."""
    global _desk
    if _desk is None:
        from .controller import Desk

        _desk = Desk()
    return _desk
