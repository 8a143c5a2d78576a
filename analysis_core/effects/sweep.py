"""The envelope of a block of members: values at stations and exact extremes of every effect."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from analysis_core.effects.extremes import Peaks, largest
from analysis_core.effects.factors import FactorTable
from analysis_core.effects.fields import Fields, sample
from analysis_core.effects.sampling import both
from analysis_core.effects.survey import joined, shifted, survey

Floats = NDArray[np.float64]

_SAMPLES = 9  # per segment, where a member has several
_FEW = 64  # up to so many members the three effects are treated together
_NOTHING = 1e-12  # of the largest value on the member: less than this is rounding


@dataclass(frozen=True, slots=True, eq=False)
class Swept:
    """One effect of B members: the envelope at G stations (G, B) and its extremes."""

    top: Floats
    bottom: Floats
    highest: Peaks
    lowest: Peaks


@dataclass(frozen=True, slots=True, eq=False)
class SweptBlock:
    """The three effects of a block."""

    moment: Swept
    shear: Swept
    deflection: Swept


def sweep(block: Fields, table: FactorTable, count: int) -> SweptBlock:
    """Return the envelope of a block over all rows of the table, at ``count`` stations."""
    effects = (block.moment, block.shear, block.deflection)
    if len(block.length) <= _FEW:
        return SweptBlock(*_swept(block, effects, table, count))
    return SweptBlock(*(_swept(block, (effect,), table, count)[0] for effect in effects))


def sweep_effect(block: Fields, polynomials: Floats, table: FactorTable, count: int) -> Swept:
    """Return the envelope of one effect (P, K, C, B) of a block."""
    return _swept(block, (polynomials,), table, count)[0]


def _swept(block: Fields, effects: Sequence[Floats], table: FactorTable, count: int) -> list[Swept]:
    """Several effects at once, as if each were a block of members: few calls for few members."""
    together, size = _side_by_side(effects), len(block.length)
    single = together.shape[1] == 1 and count >= _SAMPLES
    taken = survey(together, table, count if single else _SAMPLES)
    # The least value is the largest of the negative: the same factors lead to it.
    cuts = np.tile(block.cuts, 2 * len(effects))
    peaks = largest(
        np.concatenate([together, -together], axis=3),
        cuts,
        table,
        joined(taken.highest, shifted(taken.lowest, together.shape[3])),
    )
    x = np.linspace(0.0, 1.0, count)[:, None] * block.length
    out = []
    for e, polynomials in enumerate(effects):
        now = slice(e * size, (e + 1) * size)
        highest = _part(peaks, now)
        lowest = _part(peaks, slice((e + len(effects)) * size, (e + len(effects) + 1) * size))
        lowest = replace(lowest, value=-lowest.value, contributions=-lowest.contributions)
        if single:
            top, bottom = taken.top[:, 0, now], taken.bottom[:, 0, now]
        else:
            top, bottom = _at_stations(block, polynomials, table, x)
        out.append(_cleaned(top, bottom, highest, lowest))
    return out


def _side_by_side(effects: Sequence[Floats]) -> Floats:
    if len(effects) == 1:
        return effects[0]
    degree = max(len(e) for e in effects)
    _, segments, count, size = effects[0].shape
    out = np.zeros((degree, segments, count, size * len(effects)))
    for i, effect in enumerate(effects):
        out[: len(effect), ..., i * size : (i + 1) * size] = effect
    return out


def _part(peaks: Peaks, now: slice) -> Peaks:
    return Peaks(peaks.value[now], peaks.x[now], peaks.row[now], peaks.contributions[:, now])


def _cleaned(top: Floats, bottom: Floats, highest: Peaks, lowest: Peaks) -> Swept:
    """Without the rounding that stands where there is nothing."""
    nothing = _NOTHING * np.maximum(np.abs(highest.value), np.abs(lowest.value))
    for values in (top, bottom, highest.value, lowest.value):
        values[np.abs(values) <= nothing] = 0.0
    return Swept(top, bottom, highest, lowest)


def _at_stations(
    block: Fields, polynomials: Floats, table: FactorTable, x: Floats
) -> tuple[Floats, Floats]:
    """Where a station lies at a cut, both sides count."""
    right, left = (sample(polynomials, block.cuts, x, left=side) for side in (False, True))
    high, low = both(np.concatenate([right, left]), table)
    top, bottom = np.max(high, axis=1), np.min(low, axis=1)
    half = len(x)
    return np.maximum(top[:half], top[half:]), np.minimum(bottom[:half], bottom[half:])
