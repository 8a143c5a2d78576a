"""Combinations as a table of lowest and highest factors of the parts of the cases.

In one row of the table each part may take any factor between its two, whatever the others do:
the largest effect of a row at a section is the sum over the parts of the larger of low times
effect and high times effect.  A listed arrangement is a row in which both are equal.
"""

from __future__ import annotations

import itertools
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field
from functools import cache

import numpy as np
from numpy.typing import NDArray

from analysis_core.effects.arrangements import (
    Arrangements,
    Part,
    PatternRule,
    SpanCases,
    loaded_spans,
)
from analysis_core.model import Combination
from analysis_core.results import OnRequest

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]
_ROOM_FOR_A_BYTE = 2**54  # so much, and a byte more, is an integer of 63 bits
_NO_MATTER = 1e-9  # a part that contributes less than this of an effect is not named


@dataclass(frozen=True, slots=True, eq=False)
class PartsOf:
    """The parts of the line that each of B extremes belongs to.

    ``distinct``: those of the lines, each tuple once; ``number`` (B): which of them.
    """

    distinct: Sequence[tuple[Part, ...]]
    number: Integers

    def __getitem__(self, b: int) -> tuple[Part, ...]:
        return self.distinct[int(self.number[b])]

    def taken(self, index: Integers) -> PartsOf:
        """Return the parts of extremes that belong to these."""
        return PartsOf(self.distinct, self.number[index])


def parts_of(lines: Sequence[SpanCases]) -> PartsOf:
    """Return the parts of each line."""
    numbers: dict[int, int] = {}  # lines that are split alike share one tuple
    number = [numbers.setdefault(id(line.parts), len(numbers)) for line in lines]
    distinct = {id(line.parts): line.parts for line in lines}
    return PartsOf(list(distinct.values()), np.array(number, dtype=np.int64))


@dataclass(frozen=True, slots=True, eq=False)
class FactorTable:
    """N rows for C parts: low, high, stated (N, C), low <= high; the names behind them.

    ``stated`` is the factor that the combination itself gives; ``labels`` name the listed
    arrangement of a row, "" where none is.
    """

    names: tuple[str, ...]
    labels: tuple[str, ...]
    parts: tuple[Part, ...]
    low: Floats
    high: Floats
    stated: Floats
    fixed: bool = field(init=False)
    """Whether no row leaves a choice."""
    alike: tuple[tuple[int, ...], ...] = field(init=False)
    """Numbers of parts that take the same factors in every row."""

    def __post_init__(self) -> None:
        object.__setattr__(self, "fixed", bool(np.array_equal(self.low, self.high)))
        groups: dict[bytes, list[int]] = {}
        for c in range(len(self.parts)):
            key = self.low[:, c].tobytes() + self.high[:, c].tobytes()
            groups.setdefault(key, []).append(c)
        object.__setattr__(self, "alike", tuple(tuple(g) for g in groups.values()))

    def sources(
        self,
        rows: Integers,
        contributions: Floats,
        parts: PartsOf,
        *,
        largest: bool,
    ) -> Sequence[str]:
        """Return what governs each of B extremes, put into words when it is read.

        For example "U2 (Q on spans 1, 3)".

        ``rows`` (B) of the table; ``contributions`` (C, B) are the unfactored effects of the parts
        at the place of the extreme, which is the ``largest`` value or the least.  ``parts`` are
        those of the line that each belongs to; the table serves lines alike.
        """
        named = zip(self.names, self.labels, strict=True)
        plain = [f"{name} ({label})" if label else name for name, label in named]
        if self.fixed:
            return OnRequest(lambda b: plain[rows[b]], len(rows))
        low, high, stated = (t[rows].T for t in (self.low, self.high, self.stated))
        upward = contributions > 0.0 if largest else contributions < 0.0
        weight = np.abs(contributions) * np.maximum(np.abs(low), np.abs(high))
        matters = weight > _NO_MATTER * np.sum(weight, axis=0)
        full = (np.where(upward, high, low) == stated) & matters
        first, pattern = _patterns(rows, full, matters, parts)
        full, matters = full[:, first], matters[:, first]

        @cache
        def words(number: int) -> str:
            b = int(first[number])
            row = int(rows[b])
            notes = [self.labels[row]] if self.labels[row] else []
            notes += _notes(self._choices(row), full[:, number], matters[:, number], parts[b])
            return f"{self.names[row]} ({'; '.join(notes)})" if notes else plain[row]

        return OnRequest(lambda b: words(int(pattern[b])), len(rows))

    def _choices(self, row: int) -> list[tuple[str, list[int], float]]:
        """The cases of a row that leave a choice: name, parts, share that is kept elsewhere."""
        free = (self.low[row] != self.high[row]).tolist()
        by_case: dict[str, list[int]] = {}
        for c, part in enumerate(self.parts):
            if free[c]:
                by_case.setdefault(part.case, []).append(c)
        return [(case, own, self._rest(row, own)) for case, own in by_case.items()]

    def _rest(self, row: int, own: Sequence[int]) -> float:
        """The share of the stated factor that the other parts keep."""
        first = own[0]
        stated = self.stated[row, first]
        other = self.low[row, first] if stated == self.high[row, first] else self.high[row, first]
        return float(other / stated) if stated else 0.0


def _patterns(
    rows: Integers, full: NDArray[np.bool_], matters: NDArray[np.bool_], parts: PartsOf
) -> tuple[Integers, Integers]:
    """Of B extremes the first of each that the same words fit, and the pattern of every one (B).

    The same words fit where row, marks (C, B) and parts are the same.
    """
    pattern = rows * len(parts.distinct) + parts.number
    bound = (int(rows.max(initial=0)) + 1) * max(1, len(parts.distinct))
    for byte in np.packbits(np.concatenate([full, matters]), axis=0).astype(np.int64):
        if bound > _ROOM_FOR_A_BYTE:
            pattern = np.unique(pattern, return_inverse=True)[1]
            bound = len(pattern)
        pattern = (pattern << 8) | byte
        bound <<= 8
    _, first, pattern = np.unique(pattern, return_index=True, return_inverse=True)
    return first, pattern


def factor_table(
    combinations: Sequence[Combination],
    parts: Sequence[Part],
    arrangements: Arrangements,
    spans: Sequence[int],
) -> FactorTable:
    """Return the table of ``combinations`` for the parts of a line with these span numbers.

    A part of a case that is loaded span by span goes down to its share, a whole case to the
    combination's favourable factor where it names one.  Equal rows are listed once.
    """
    rows: dict[tuple[tuple[float, ...], ...], tuple[str, str, list[float]]] = {}
    for combination in combinations:
        stated = [combination.factors.get(part.case, 0.0) for part in parts]
        for label, low, high in _rows(combination, parts, arrangements, spans, stated):
            key = tuple(low), tuple(high)
            rows.setdefault(key, (combination.name, label, stated))
    lows, highs = (np.array([key[i] for key in rows]) for i in (0, 1))
    size = len(rows), len(parts)
    return FactorTable(
        names=tuple(name for name, _, _ in rows.values()),
        labels=tuple(label for _, label, _ in rows.values()),
        parts=tuple(parts),
        low=np.minimum(lows, highs).reshape(size),
        high=np.maximum(lows, highs).reshape(size),
        stated=np.array([stated for _, _, stated in rows.values()]).reshape(size),
    )


def _rows(
    combination: Combination,
    parts: Sequence[Part],
    arrangements: Arrangements,
    spans: Sequence[int],
    stated: list[float],
) -> Iterator[tuple[str, list[float], list[float]]]:
    listed = [
        PatternRule(tuple(c for c in rule.cases if combination.factors.get(c)), rule.patterns,
                    rule.elsewhere)
        for rule in arrangements.listed
    ]  # fmt: skip
    listed = [rule for rule in listed if rule.cases]
    whole = [
        _whole_low(combination, part, factor) for part, factor in zip(parts, stated, strict=True)
    ]
    if listed:
        for choice in itertools.product(*(_choices(rule, parts, spans) for rule in listed)):
            low, high = list(whole), list(stated)
            for rule, (_, loaded) in zip(listed, choice, strict=True):
                for c, part in enumerate(parts):
                    if part.case in rule.cases:
                        share = _share(part, loaded, rule.elsewhere)
                        low[c] = high[c] = share * stated[c]
            yield "; ".join(label for label, _ in choice if label), low, high
        return
    shares = arrangements.shares
    low = list(whole)
    for c, part in enumerate(parts):
        if part.case in shares and part.place:
            low[c] = shares[part.case] * stated[c]
    yield "", low, list(stated)
    # A share that stays elsewhere belongs to an action that is there; it may be absent as well.
    kept = dict.fromkeys(p.case for p in parts if shares.get(p.case) and p.place)
    acting = [case for case in kept if combination.factors.get(case)]
    for count in range(1, len(acting) + 1):
        for absent in itertools.combinations(acting, count):
            yield (
                f"without {', '.join(absent)}",
                [0.0 if p.case in absent else v for p, v in zip(parts, low, strict=True)],
                [0.0 if p.case in absent else v for p, v in zip(parts, stated, strict=True)],
            )


def _whole_low(combination: Combination, part: Part, factor: float) -> float:
    """The favourable factor of a variable action; permanent ones differ by combination."""
    return min(combination.favourable.get(part.case, factor), factor, key=abs)


def _choices(
    rule: PatternRule, parts: Sequence[Part], spans: Sequence[int]
) -> list[tuple[str, frozenset[int] | None]]:
    """Each listed set once, with its label, and the choice of leaving the action out."""
    out: dict[frozenset[int] | None, str] = {}
    names = ", ".join(rule.cases)
    for pattern in rule.patterns:
        for loaded in loaded_spans(pattern, spans):
            everywhere = len(loaded) == len(spans)
            text = f"{names} on {'all spans' if everywhere else _spans(loaded)}"
            if rule.elsewhere and not everywhere:
                text += f", {rule.elsewhere:g} of it elsewhere"
            out.setdefault(frozenset(loaded), text if len(spans) > 1 else "")
    out.setdefault(None, f"without {names}")
    return [(label, loaded) for loaded, label in out.items()]


def _share(part: Part, loaded: frozenset[int] | None, elsewhere: float) -> float:
    if loaded is None:
        return 0.0
    return 1.0 if part.span is None or part.span in loaded else elsewhere


def _notes(
    choices: Sequence[tuple[str, list[int], float]],
    full: NDArray[np.bool_],
    matters: NDArray[np.bool_],
    parts: tuple[Part, ...],
) -> list[str]:
    notes = []
    for case, own, rest in choices:
        on = [c for c in own if full[c]]
        if any(matters[c] for c in own) and not (len(own) == 1 and on):
            notes.append(_note(case, [parts[c] for c in on], len(on) == len(own), rest))
    return notes


def _note(case: str, loaded: Sequence[Part], everywhere: bool, rest: float) -> str:
    if everywhere:
        return f"{case} on all spans"
    if not loaded:
        return f"without {case}" if not rest else f"{rest:.3g} of {case} on all spans"
    own = [p.span for p in loaded if p.span is not None and p.place == f"span {p.span}"]
    others = [p.place for p in loaded if p.place != f"span {p.span}"]
    where = [_spans(own)] if own else []
    if others:
        where.append(", ".join(others))
    text = f"{case} on {' and '.join(where)}"
    return f"{text}, {rest:.3g} of it elsewhere" if rest else text


def _spans(numbers: Sequence[int]) -> str:
    word = "span" if len(numbers) == 1 else "spans"
    return f"{word} {', '.join(str(n) for n in numbers)}"
