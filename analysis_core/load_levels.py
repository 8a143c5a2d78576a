"""The order in which lines are solved: what bears on others comes first.

Lines that bear on each other in a circle (reciprocal framing) form one group and are solved
together.
"""

from __future__ import annotations

from collections.abc import Sequence
from graphlib import CycleError, TopologicalSorter

from analysis_core.model import Transfer


def levels(marks: Sequence[str], transfers: Sequence[Transfer]) -> list[list[tuple[str, ...]]]:
    """Return groups of marks, level by level: a group needs only groups of earlier levels.

    A group is one mark, or all marks of a circle.  Groups and marks keep the order of ``marks``.
    """
    group = {mark: mark for mark in marks}  # the first mark of each group stands for it
    pairs = [(t.from_line, t.to_line) for t in transfers if {t.from_line, t.to_line} <= {*group}]
    while True:
        sorter = TopologicalSorter[str](dict.fromkeys(group.values(), ()))
        for bearing, carrier in pairs:
            if group[bearing] != group[carrier]:
                sorter.add(group[carrier], group[bearing])
        try:
            sorter.prepare()
            break
        except CycleError as error:
            circle = {*error.args[1]}
            first = min(circle, key=[*marks].index)
            group = {mark: first if of in circle else of for mark, of in group.items()}
    members: dict[str, list[str]] = {}
    for mark in marks:
        members.setdefault(group[mark], []).append(mark)
    out = []
    while sorter.is_active():
        ready = {*sorter.get_ready()}
        out.append([tuple(found) for first, found in members.items() if first in ready])
        sorter.done(*ready)
    return out
