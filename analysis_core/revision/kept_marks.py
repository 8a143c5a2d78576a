"""Marks that stay from one revision to the next.

A mark is a storey and a number in plan order, so a line that is added or taken out would shift
the numbers of others.  Where earlier marks are known, by the elements of the lines, they are kept
and new lines get numbers that were not used.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import replace

from analysis_core.findings import Finding
from analysis_core.idealise.known_marks import renames
from analysis_core.model import Line, LineModel


def with_kept_marks(model: LineModel, known: Mapping[str, str]) -> LineModel:
    """Return the model with the marks that its elements had: ``known`` gives mark by GlobalId.

    A line takes the mark that most of its elements had, if no other line has more claim to it.
    """
    lines = [(line.mark, line.elements) for line in model.lines]
    new = renames(lines, known)
    if all(old == kept for old, kept in new.items()):
        return model
    return _renamed(model, new)


def _renamed(model: LineModel, new: Mapping[str, str]) -> LineModel:
    pattern = re.compile(
        "|".join(rf"(?<![\w-]){re.escape(mark)}(?![\w-])" for mark in sorted(new, reverse=True))
    )

    def told(text: str) -> str:
        return pattern.sub(lambda match: new[match[0]], text)

    def line(old: Line) -> Line:
        joints = tuple(replace(j, reason=told(j.reason)) for j in old.joints)
        return replace(old, mark=new[old.mark], joints=joints, fault=told(old.fault))

    def finding(old: Finding) -> Finding:
        mark = new.get(old.line, old.line) if old.line else old.line
        return replace(old, line=mark, message=told(old.message))

    return replace(
        model,
        lines=tuple(line(old) for old in model.lines),
        transfers=tuple(
            replace(t, from_line=new[t.from_line], to_line=new[t.to_line]) for t in model.transfers
        ),
        findings=tuple(finding(old) for old in model.findings),
    )
