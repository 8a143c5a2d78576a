"""Symbols of supports and member ends, as polylines; drawn alike in the strip and in 3D.

Coordinates are in symbol sizes: ``u`` to the right, ``v`` up, (0, 0) at the joint.  Every kind
differs in shape, not in colour alone.
"""

from __future__ import annotations

import math
from typing import Literal

from analysis_core.model import FREE, RIGID, Support

Polyline = tuple[tuple[float, float], ...]
SupportKind = Literal["none", "pinned", "fixed", "guided", "spring"]

_WEDGE: Polyline = ((0.0, 0.0), (-0.5, -0.8), (0.5, -0.8), (0.0, 0.0))
_GROUND: Polyline = ((-0.75, -0.95), (0.75, -0.95))
_BLOCK: Polyline = ((-0.55, 0.45), (0.55, 0.45), (0.55, -0.8), (-0.55, -0.8), (-0.55, 0.45))
_CROSSED: Polyline = ((-0.55, -0.8), (0.55, 0.45))
_RAILS: tuple[Polyline, ...] = (
    ((-0.25, 0.7), (-0.25, -0.7)),
    ((0.25, 0.7), (0.25, -0.7)),
)
_COIL: Polyline = (
    (0.0, 0.0), (0.0, -0.15), (0.35, -0.25), (-0.35, -0.4), (0.35, -0.55), (-0.35, -0.7),
    (0.0, -0.8), (0.0, -0.95),
)  # fmt: skip
_ROTARY: Polyline = tuple(
    (
        (0.12 + 0.05 * i) * math.cos(0.55 * i),
        (0.12 + 0.05 * i) * math.sin(0.55 * i),
    )
    for i in range(13)
)


def support_kind(support: Support | None) -> SupportKind:
    """Return the kind of symbol that tells how a joint is held."""
    if support is None:
        return "none"
    springs = [s for s in (support.vertical, support.rotation) if s not in (FREE, RIGID)]
    if springs:
        return "spring"
    if support.vertical == RIGID:
        return "fixed" if support.rotation == RIGID else "pinned"
    return "guided" if support.rotation == RIGID else "none"


def support_symbol(support: Support | None) -> tuple[Polyline, ...]:
    """Return the polylines of a support; none for a joint that nothing holds."""
    kind = support_kind(support)
    if support is None or kind == "none":
        return ()
    if kind == "pinned":
        return (_WEDGE, _GROUND)
    if kind == "fixed":
        return (_BLOCK, _CROSSED)
    if kind == "guided":
        return _RAILS
    parts: list[Polyline] = []
    if support.vertical == RIGID:
        parts += [_WEDGE, _GROUND]
    elif support.vertical != FREE:
        parts += [_COIL, _GROUND]
    if support.rotation not in (FREE, RIGID):
        parts.append(_ROTARY)
    elif support.rotation == RIGID:
        parts += list(_RAILS)
    return tuple(parts)
