"""What governs elements that are one member of one line each, as most are: many at a time.

From the columns of the envelopes, and the same as ``governing.element_effects`` finds for each.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from analysis_core.ifc.posting.governing import (
    SERVICEABILITY,
    STRENGTH,
    Curve,
    ElementEffects,
    Part,
)
from analysis_core.results import Extreme, Extremes, Floats, MemberEnvelopes, MemberRows

Rows = NDArray[np.int64]


class _Lone(NamedTuple):
    """An element with its one member, and the rows of it in the columns of both limit states."""

    element: str
    part: Part
    strength: tuple[MemberEnvelopes, int]
    service: tuple[MemberEnvelopes, int]


def lone_members(elements: Sequence[tuple[str, list[Part]]]) -> dict[str, ElementEffects]:
    """Return what governs each element that is one member; those that go another way left out."""
    together: dict[tuple[int, int], list[_Lone]] = {}
    for element, parts in elements:
        lone = _lone(element, parts[0]) if len(parts) == 1 else None
        if lone is not None:
            key = id(lone.strength[0]), id(lone.service[0])
            together.setdefault(key, []).append(lone)
    return {
        effects.element: effects for group in together.values() for effects in _governing(group)
    }


def _lone(element: str, part: Part) -> _Lone | None:
    """None where the envelopes are not in columns, or others than these two were found."""
    envelopes = part.result.envelopes
    if len(envelopes) != 2 or STRENGTH not in envelopes or SERVICEABILITY not in envelopes:
        return None
    u, s = envelopes[STRENGTH].members, envelopes[SERVICEABILITY].members
    if not isinstance(u, MemberRows) or not isinstance(s, MemberRows):
        return None
    number = part.member.id
    return _Lone(element, part, u.place(number), s.place(number))


def _governing(group: Sequence[_Lone]) -> list[ElementEffects]:
    """What governs elements whose members stand in the same columns."""
    u, s = group[0].strength[0], group[0].service[0]
    i = np.array([lone.strength[1] for lone in group])
    j = np.array([lone.service[1] for lone in group])
    members = _Members([lone.part for lone in group])
    m, n, v, w, d = u.moment, s.moment, u.shear, s.shear, s.deflection
    sagging = members.first([(m.highest, i), (n.highest, j)], np.positive)
    hogging = members.first([(m.lowest, i), (n.lowest, j)], np.negative)
    shear = members.first(
        [(v.highest, i), (v.lowest, i), (w.highest, j), (w.lowest, j)], np.absolute
    )
    deflection = members.first([(d.highest, j), (d.lowest, j)], np.absolute)
    start, end = members.ends(m.bottom[i], m.top[i], n.bottom[j], n.top[j])
    along = members.places(u.x[i])
    strength = members.curves(
        along, MomentMax=m.top[i], MomentMin=m.bottom[i], ShearMax=v.top[i], ShearMin=v.bottom[i]
    )
    if s.x is not u.x or not np.array_equal(i, j):
        along = members.places(s.x[j])
    service = members.curves(along, DeflectionMax=d.top[j], DeflectionMin=d.bottom[j])
    return [
        ElementEffects(
            lone.element, (lone.part.result,), sagging[k], hogging[k], shear[k], deflection[k],
            start[k], end[k], (*strength[k], *service[k]),
        )
        for k, lone in enumerate(group)
    ]  # fmt: skip


class _Members:
    """Members seen from their elements: places count from the element's start."""

    def __init__(self, parts: Sequence[Part]) -> None:
        self._offset = np.array([part.member.element_offset for part in parts])
        self._turned = np.array([part.member.reversed_ for part in parts])

    def first(
        self,
        candidates: Sequence[tuple[Extremes, Rows]],
        measure: Callable[[Floats], Floats],
    ) -> list[Extreme]:
        """The first of the candidates (each of so many rows) whose measure is largest."""
        values = np.stack([found.value[rows] for found, rows in candidates])
        places = np.stack([found.x[rows] for found, rows in candidates])
        best = np.argmax(measure(values), axis=0)
        value, x = (np.take_along_axis(a, best[None], 0)[0] for a in (values, places))
        sources = [
            candidates[b][0].source[int(candidates[b][1][k])] for k, b in enumerate(best.tolist())
        ]
        return list(map(Extreme, value.tolist(), self._on_element(x).tolist(), sources))

    def ends(
        self, low: Floats, high: Floats, other_low: Floats, other_high: Floats
    ) -> list[list[tuple[float, float]]]:
        """Lowest and highest value at the element's start and end, of two pairs of curves."""
        found = []
        for end in (0, -1):
            at = np.where(self._turned, -1 - end, end)
            rows = np.arange(len(at))
            a, b, c, e = (curve[rows, at] for curve in (low, high, other_low, other_high))
            bounds = np.where(c < a, c, a), np.where(e > b, e, b)
            found.append(list(zip(*(bound.tolist() for bound in bounds), strict=True)))
        return found

    def places(self, x: Floats) -> list[Floats]:
        """The places on each element of ``x`` (B, N) on the members, ascending."""
        return list(self._on_element(self._turned_round(x).T).T)

    def curves(self, places: list[Floats], **values: Floats) -> list[list[Curve]]:
        """The curves (B, N) by name of each element, along the element."""
        along = {name: self._turned_round(each) for name, each in values.items()}
        return [
            [Curve(name, x, each[k]) for name, each in along.items()] if x.size else []
            for k, x in enumerate(places)
        ]

    def _turned_round(self, values: Floats) -> Floats:
        """Values (B, N) in the direction of the elements."""
        return np.where(self._turned[:, None], values[:, ::-1], values)

    def _on_element(self, x: Floats) -> Floats:
        """Places on the elements of ``x`` (..., B) on the members."""
        return np.where(self._turned, self._offset - x, self._offset + x)
