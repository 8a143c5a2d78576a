"""Marks that stay from one revision to the next.

A mark is a storey and a number in plan order, so a line that is added or taken out would shift
the numbers of others.  Where earlier marks are known, by the elements of the lines, they are kept
and new lines get numbers that were not used.
"""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Mapping
from dataclasses import replace

from analysis_core.findings import Finding
from analysis_core.model import Line, LineModel


def with_kept_marks(model: LineModel, known: Mapping[str, str]) -> LineModel:
    """Return the model with the marks that its elements had: ``known`` gives mark by GlobalId.

    A line takes the mark that most of its elements had, if no other line has more claim to it.
    """
    claims: dict[str, list[tuple[int, str]]] = {}
    for line in model.lines:
        counts = Counter(known[e] for e in line.elements if e in known)
        for mark, count in counts.items():
            claims.setdefault(mark, []).append((count, line.mark))
    renames: dict[str, str] = {}
    strongest = sorted(
        ((count, mark, own) for mark, found in claims.items() for count, own in found),
        key=lambda claim: (-claim[0], claim[1], claim[2]),
    )
    for _, mark, own in strongest:
        if own not in renames and mark not in renames.values():
            renames[own] = mark
    taken = set(renames.values()) | set(known.values())
    for line in model.lines:
        if line.mark not in renames:
            renames[line.mark] = _free(line.mark, taken)
            taken.add(renames[line.mark])
    if all(old == new for old, new in renames.items()):
        return model
    return _renamed(model, renames)


def _free(mark: str, taken: set[str]) -> str:
    """The mark itself, or the next number of its storey that was never used."""
    if mark not in taken:
        return mark
    stem, number = re.fullmatch(r"(.*?)(\d*)", mark).groups()  # type: ignore[union-attr]  # always
    width = max(len(number), 2)
    count = 1
    while f"{stem}{count:0{width}}" in taken:
        count += 1
    return f"{stem}{count:0{width}}"


def _renamed(model: LineModel, renames: Mapping[str, str]) -> LineModel:
    pattern = re.compile(
        "|".join(rf"(?<![\w-]){re.escape(mark)}(?![\w-])" for mark in sorted(renames, reverse=True))
    )

    def told(text: str) -> str:
        return pattern.sub(lambda match: renames[match[0]], text)

    def line(old: Line) -> Line:
        joints = tuple(replace(j, reason=told(j.reason)) for j in old.joints)
        return replace(old, mark=renames[old.mark], joints=joints, fault=told(old.fault))

    def finding(old: Finding) -> Finding:
        mark = renames.get(old.line, old.line) if old.line else old.line
        return replace(old, line=mark, message=told(old.message))

    return replace(
        model,
        lines=tuple(line(old) for old in model.lines),
        transfers=tuple(
            replace(t, from_line=renames[t.from_line], to_line=renames[t.to_line])
            for t in model.transfers
        ),
        findings=tuple(finding(old) for old in model.findings),
    )
