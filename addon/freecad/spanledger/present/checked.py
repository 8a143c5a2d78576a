"""The checks of members in words."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING

from analysis_core.report.tables import safe
from analysis_core.results import LineResult
from analysis_core.units import DisplayUnits

from .words import say

if TYPE_CHECKING:
    from analysis_core.checking.members import MemberChecks


def largest_uses(checks: Mapping[str, Sequence[MemberChecks]]) -> dict[str, float]:
    """Return the largest use of capacity of each line by its mark, where anything was checked."""
    uses = {}
    for mark, members in checks.items():
        found = [member.worst.use for member in members if member.worst is not None]
        if found:
            uses[mark] = max(found)
    return uses


def check_facts(members: Sequence[MemberChecks], member: int) -> list[tuple[str, str]]:
    """Return (name, words) of every check of a member, the code and what restrains it first."""
    facts = []
    for checked in members:
        if checked.member != member:
            continue
        facts.append((say("Checked by"), safe(checked.code or "–")))
        if checked.restraints:
            facts.append((say("Restrained"), safe(checked.restraints)))
        for check in checked.checks:
            if check.status == "not checked":
                words = say("not checked: {reason}", reason=safe(check.reason))
            else:
                words = f"{100.0 * check.use:.0f} % ({safe(check.clause)})"
                if check.use > 1.0:
                    words = "✖ " + words
            facts.append((say(safe(check.name)), words))
    return facts


def deflection_facts(result: LineResult, member: int, units: DisplayUnits) -> list[tuple[str, str]]:
    """Return what part of its limit the deflection of a member's span takes."""
    from analysis_core.solving.line_details import detail_of  # late: start-up of the workbench

    if result.detail is None:
        return []
    facts = []
    for span in detail_of(result).deflections:
        if member in span.span.members and span.limit:
            words = f"{100.0 * span.utilisation:.0f} % ({safe(span.rule)})"
            facts.append(
                (say("Deflection limit"), f"{units.text(span.limit, 'deflection')}: {words}")
            )
    return facts
