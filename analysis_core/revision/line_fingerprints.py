"""Bases and fingerprints of all lines of a model, along the load path; nothing is solved."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from analysis_core.load_levels import levels
from analysis_core.model import Combination, LineModel, Transfer
from analysis_core.revision.fingerprints import Bases, fingerprint
from analysis_core.settings import Settings


@dataclass(frozen=True, slots=True)
class Fingerprint:
    """The fingerprint of a line and the basis that it is the hash of."""

    text: str
    basis: dict[str, str]


def line_bases(
    model: LineModel,
    *,
    combinations: Sequence[Combination],
    rules: str,
    settings: Settings,
) -> dict[str, dict[str, str]]:
    """Return the basis of each line by its mark: see ``fingerprints.basis``."""
    found = line_fingerprints(model, combinations=combinations, rules=rules, settings=settings)
    return {mark: each.basis for mark, each in found.items()}


def line_fingerprints(
    model: LineModel,
    *,
    combinations: Sequence[Combination],
    rules: str,
    settings: Settings,
) -> dict[str, Fingerprint]:
    """Return the fingerprint of each line by its mark, with the basis it was taken of.

    In the order of the load path, since a basis holds the fingerprints of what bears on the line.
    Lines of a circle hold the fingerprints that the others have without the circle.
    """
    lines = {line.mark: line for line in model.lines}
    into: dict[str, list[Transfer]] = {}
    for transfer in model.transfers:
        into.setdefault(transfer.to_line, []).append(transfer)
    bases = Bases(combinations=combinations, rules=rules, settings=settings)
    prints: dict[str, str] = {}

    def of(mark: str) -> Fingerprint:
        basis = bases.of(lines[mark], _received(into.get(mark, ()), prints))
        return Fingerprint(fingerprint(basis), basis)

    found: dict[str, Fingerprint] = {}
    for level in levels([*lines], model.transfers):
        for group in level:
            if len(group) > 1:
                prints.update({mark: of(mark).text for mark in group})
            mine = {mark: of(mark) for mark in group}
            found.update(mine)
            prints.update({mark: each.text for mark, each in mine.items()})
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
