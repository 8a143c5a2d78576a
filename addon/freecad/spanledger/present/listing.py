"""The list of lines: rows by storey with their state, filtered and sorted."""

from __future__ import annotations

from collections.abc import Collection, Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

from analysis_core.results import LineResult, Outcome
from analysis_core.units import DisplayUnits

from .words import noop, say

if TYPE_CHECKING:  # it brings the IFC library in, which start-up need not wait for
    from analysis_core.revision.posted_states import PostedState

State = Literal["needs a decision", "ready", "balanced", "stale", "posted"]
STATES: tuple[State, ...] = ("needs a decision", "ready", "balanced", "stale", "posted")
# A mark of its own shape for each state, so that none is told by colour alone.
GLYPHS: dict[str, str] = {
    noop("needs a decision"): "?",
    noop("ready"): "○",
    noop("balanced"): "●",
    noop("stale"): "◐",
    noop("posted"): "■",
}
_NOTHING_POSTED: Mapping[str, PostedState] = {}
_NO_USES: Mapping[str, float] = {}
NO_STOREY = noop("No storey")
COLUMNS = (
    noop("Line"),
    noop("State"),
    noop("Spans"),
    noop("Sagging"),
    noop("Hogging"),
    noop("Shear"),
    noop("Deflection"),
    noop("Use"),
)
QUANTITY_OF = ("", "", "", "moment", "moment", "force", "deflection", "")


@dataclass(frozen=True, slots=True)
class Row:
    """One line in the list.  ``values`` are SI and None where there is no result."""

    index: int
    mark: str
    storey: str
    state: State
    spans: int
    values: tuple[float | None, ...]
    """Sagging, hogging, shear, deflection, and the largest use of capacity."""
    texts: tuple[str, ...]
    search: str
    """What the filter looks through, in lower case."""
    reason: str = ""
    """Why the line is in its state, where there is more to say."""


@dataclass(frozen=True, slots=True)
class Group:
    """The rows of one storey."""

    storey: str
    rows: tuple[Row, ...]


def rows_of(
    outcome: Outcome,
    units: DisplayUnits,
    *,
    stale: bool = False,
    posted: Collection[str] = (),
    in_file: Mapping[str, PostedState] = _NOTHING_POSTED,
    uses: Mapping[str, float] = _NO_USES,
) -> list[Row]:
    """Return a row per line.

    ``stale``: the model or the decisions changed since the run.  ``posted`` are the fingerprints
    of the results that were written into a file since, ``in_file`` what stood in the model by
    mark.  ``uses``: the largest use of capacity by mark.
    """
    rows = []
    for index, result in enumerate(outcome.lines):
        mark = result.line.mark
        stands = in_file.get(mark)
        state = _state(result, stale, posted, stands)
        reason = "\n".join(stands.reasons) if state == "stale" and stands and not stale else ""
        rows.append(_row(index, result, units, state, reason, uses.get(mark)))
    return rows


def grouped(
    rows: Sequence[Row],
    *,
    words: str = "",
    states: Collection[str] = STATES,
    column: int = 0,
    descending: bool = False,
) -> list[Group]:
    """Return the rows that match, by storey in the order in which storeys first appear.

    Every word of ``words`` must occur in the line's mark, storey, state or GlobalIds.
    """
    wanted = words.lower().split()
    matching = [
        row for row in rows if row.state in states and all(word in row.search for word in wanted)
    ]
    matching.sort(key=lambda row: _sort_key(row, column), reverse=descending)
    storeys = dict.fromkeys(row.storey for row in rows)
    by_storey: dict[str, list[Row]] = {storey: [] for storey in storeys}
    for row in matching:
        by_storey[row.storey].append(row)
    return [Group(storey, tuple(found)) for storey, found in by_storey.items() if found]


def _row(
    index: int,
    result: LineResult,
    units: DisplayUnits,
    state: State,
    reason: str,
    use: float | None,
) -> Row:
    line = result.line
    spans = len({m.span for m in line.members if m.role == "span"}) or len(line.members)
    values = governing(result)
    shown = tuple(
        "–" if value is None else units.number(value, quantity)
        for value, quantity in zip(values, QUANTITY_OF[3:7], strict=True)
    )
    share = "–" if use is None else f"{100.0 * use:.0f} %"
    storey = line.storey or say(NO_STOREY)
    search = " ".join([line.mark, storey, state, say(state), *line.elements]).lower()
    texts = (line.mark, f"{GLYPHS[state]} {state}", str(spans), *shown, share)
    return Row(index, line.mark, storey, state, spans, (*values, use), texts, search, reason)


def _state(
    result: LineResult, stale: bool, posted: Collection[str], in_file: PostedState | None
) -> State:
    if result.status == "not analysed":
        return "needs a decision"
    if result.solution is None:
        return "ready"
    if stale:
        return "stale"
    if result.fingerprint and result.fingerprint in posted:
        return "posted"
    if in_file is None or in_file.state == "not posted":
        return "balanced"
    return "posted" if in_file.state == "current" else "stale"


def governing(
    result: LineResult,
) -> tuple[float | None, float | None, float | None, float | None]:
    """Return (sagging, hogging, shear, deflection) over a line, SI; None where there is none."""
    strength = result.envelopes.get("strength")
    service = result.envelopes.get("serviceability", strength)
    strength = strength or service
    if strength is None or service is None or not strength.members:
        return None, None, None, None
    shears = [e.value for m in strength.members for e in (m.shear_max, m.shear_min)]
    sags = [e.value for m in service.members for e in (m.deflection_down, m.deflection_up)]
    return (
        max(m.sagging.value for m in strength.members),
        min(m.hogging.value for m in strength.members),
        max(shears, key=abs),
        max(sags, key=abs),
    )


def _sort_key(row: Row, column: int) -> tuple[object, ...]:
    if column == 0:
        return tuple(_natural(row.mark))
    if column == 1:
        return (STATES.index(row.state), *_natural(row.mark))
    if column == 2:
        return (row.spans, *_natural(row.mark))
    value = row.values[column - 3]
    return (value is not None, abs(value or 0.0), *_natural(row.mark))


def _natural(text: str) -> list[tuple[int, int, str]]:
    """Split digits from letters, so that L2 stands before L10."""
    parts: list[tuple[int, int, str]] = []
    word = ""
    for char in text:
        if word and word[-1].isdigit() != char.isdigit():
            parts.append(_part(word))
            word = ""
        word += char
    return [*parts, _part(word)] if word else parts


def _part(word: str) -> tuple[int, int, str]:
    return (0, int(word), "") if word.isdecimal() else (1, 0, word.lower())
