"""Bases and fingerprints of all lines of a model, along the load path; nothing is solved."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from analysis_core.load_levels import levels
from analysis_core.model import Combination, LineModel, Transfer
from analysis_core.revision.fingerprints import basis, fingerprint
from analysis_core.settings import Settings


def line_bases(
    model: LineModel,
    *,
    combinations: Sequence[Combination],
    rules: str,
    settings: Settings,
) -> dict[str, dict[str, str]]:
    """Return the basis of each line by its mark: see ``fingerprints.basis``.

    In the order of the load path, since a basis holds the fingerprints of what bears on the line.
    Lines of a circle hold the fingerprints that the others have without the circle.
    """
    lines = {line.mark: line for line in model.lines}
    into: dict[str, list[Transfer]] = {}
    for transfer in model.transfers:
        into.setdefault(transfer.to_line, []).append(transfer)
    prints: dict[str, str] = {}

    def of(mark: str) -> dict[str, str]:
        return basis(
            lines[mark],
            combinations=combinations,
            rules=rules,
            settings=settings,
            received=_received(into.get(mark, ()), prints),
        )

    found: dict[str, dict[str, str]] = {}
    for level in levels([*lines], model.transfers):
        for group in level:
            if len(group) > 1:
                prints.update({mark: fingerprint(of(mark)) for mark in group})
            mine = {mark: of(mark) for mark in group}
            found.update(mine)
            prints.update({mark: fingerprint(texts) for mark, texts in mine.items()})
    return found


def _received(transfers: Sequence[Transfer], prints: Mapping[str, str]) -> dict[str, str]:
    """What is handed down: the fingerprint of each line that bears, and the places."""
    received: dict[str, str] = {}
    for t in transfers:
        if t.from_line in prints:
            place = f"joint {t.joint} at {t.position:.6f} m of member {t.member}"
            known = received.setdefault(t.from_line, prints[t.from_line])
            received[t.from_line] = f"{known}; {place}"
    return received
