"""A recorded distribution as rows of texts, for the screen and the sheet alike."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from decimal import Decimal

from analysis_core.distribution.record import DistributionRecord, End, Table
from analysis_core.model import Line
from analysis_core.units import DisplayUnits


@dataclass(frozen=True, slots=True)
class RecordRow:
    """One row: what it is, and a text per column ("" where nothing happens).

    ``kind``: "stiffness", "factor", "carry", "held", "known", "balance", "carried", "sum", "exact".
    """

    kind: str
    name: str
    cells: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class RecordTable:
    """A distribution table: heads of its columns, grouped by joint, its rows, and notes."""

    title: str
    columns: tuple[str, ...]
    joints: tuple[int, ...]
    rows: tuple[RecordRow, ...]
    notes: tuple[str, ...]


def record_tables(record: DistributionRecord, units: DisplayUnits) -> list[RecordTable]:
    """Return the tables of a record in display units."""
    return [_table(record, table, units, number) for number, table in enumerate(record.tables)]


def closing_note(record: DistributionRecord, units: DisplayUnits) -> str:
    """Return how far the recorded sums are from the exact moments."""
    return (
        f"Largest difference between the recorded sums and the exact moments "
        f"{units.text(record.difference, 'moment')}, {100.0 * record.relative_difference:.2f} % of "
        f"the largest fixed-end moment {units.text(record.largest_fixed_end, 'moment')}; released "
        f"until no unbalance exceeded {units.text(record.limit, 'moment')}."
    )


def _table(
    record: DistributionRecord, table: Table, units: DisplayUnits, number: int
) -> RecordTable:
    def moment(value: float) -> str:
        return units.number(value, "moment")

    stiffness = [units.number(end.stiffness, "rotational stiffness") for end in table.ends]
    rows = [
        RecordRow("stiffness", f"stiffness, {units.symbol('rotational stiffness')}",
                  tuple(stiffness)),
        RecordRow("factor", "distribution factor", tuple(f"{e.factor:.4f}" for e in table.ends)),
        RecordRow("carry", "carry-over factor", tuple(_carry(e) for e in table.ends)),
        RecordRow("held", "fixed-end moment", tuple(moment(v) for v in table.held)),
    ]  # fmt: skip
    if any(abs(a - b) > 1e-9 for a, b in zip(table.held, table.start, strict=True)):
        rows.append(
            RecordRow("known", "with known ends set", tuple(moment(v) for v in table.start))
        )
    for step in table.rows:
        joints = ", ".join(str(j) for j in step.joints)
        unbalance = ", ".join(moment(value) for _, value in step.unbalance)
        balanced = {column: moment(value) for column, value in step.balanced}
        carried = _carried(step.carried)
        what = f"release {joints} (unbalance {unbalance})"
        rows.append(RecordRow("balance", what, _cells(table, balanced)))
        if carried:
            texts = {column: moment(value) for column, value in carried.items()}
            rows.append(RecordRow("carried", "carried over", _cells(table, texts)))
    rows.append(RecordRow("sum", "sum", _sums(rows, len(table.ends))))
    if number == 0 and len(record.tables) == 1:
        exact = _exact(record, table)
        if exact is not None:
            rows.append(RecordRow("exact", "exact", tuple(moment(v) for v in exact)))
    return RecordTable(
        title=f"{record.line.mark}, case {record.case}: {table.title}",
        columns=tuple(_head(record.line, end) for end in table.ends),
        joints=tuple(end.joint for end in table.ends),
        rows=tuple(rows),
        notes=_notes(record, table, units, number),
    )


def _sums(rows: Sequence[RecordRow], columns: int) -> tuple[str, ...]:
    """The sums of the printed numbers, so that a checker who adds them up finds them."""
    first = next(i for i, row in reversed([*enumerate(rows)]) if row.kind in ("held", "known"))
    sums = [Decimal(0)] * columns
    for row in rows[first:]:
        sums = [s + Decimal(cell or 0) for s, cell in zip(sums, row.cells, strict=True)]
    return tuple(str(abs(s) if s == 0 else s) for s in sums)


def _carry(end: End) -> str:
    return "–" if end.to is None else f"{end.carry_over:.4f}"


def _carried(carried: Sequence[tuple[int, int, float]]) -> dict[int, float]:
    sums: dict[int, float] = {}
    for _, column, value in carried:
        sums[column] = sums.get(column, 0.0) + value
    return sums


def _cells(table: Table, texts: Mapping[int, str]) -> tuple[str, ...]:
    return tuple(texts.get(column, "") for column in range(len(table.ends)))


def _head(line: Line, end: End) -> str:
    """Near joint and far joint, as hand tables name member ends."""
    if end.member is None:
        return f"{end.joint} support"
    member = line.members[end.member]
    far = member.end if member.start == end.joint else member.start
    return f"{end.joint}-{far}"


def _exact(record: DistributionRecord, table: Table) -> list[float] | None:
    values = []
    for end in table.ends:
        if end.member is None:
            return None
        side = 0 if record.line.members[end.member].start == end.joint else 1
        values.append(float(record.exact[end.member, side]))
    return values


def _notes(
    record: DistributionRecord, table: Table, units: DisplayUnits, number: int
) -> tuple[str, ...]:
    notes = [
        f"{_head(record.line, end)}: stiffness modified, {end.note}"
        for end in table.ends
        if end.note
    ]
    if table.parity:
        notes.append(f"The moments are {table.parity}; the left half is written down.")
    if number == 0:
        notes += _shear_note(record.line)
        notes += [
            f"Overhang {member}: {units.text(start, 'moment')} at its start, "
            f"{units.text(end, 'moment')} at its end, from statics."
            for member, start, end in record.overhangs
        ]
    elif len(record.tables) > 1:
        notes.append(f"By equilibrium of forces this table counts {table.size:.6g} times.")
    return tuple(notes)


def _shear_note(line: Line) -> list[str]:
    """How stiffness follows for members flexible in shear, so that a checker can redo it."""
    found = [
        f"{shear:.4f} for {member.start}-{member.end}"
        for member in line.members
        if (shear := member.shear_parameter) is not None
    ]
    if not found:
        return []
    return [
        f"Flexible in shear: stiffness (4 + Φ)/(1 + Φ) EI/L and carry-over (2 - Φ)/(4 + Φ) with "
        f"Φ = 12 EI/(G A_s L²): {', '.join(found)}."
    ]
