"""The envelope of a block of members: values at stations and exact extremes of every effect."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from analysis_core.effects.extremes import Peaks, largest
from analysis_core.effects.factors import FactorTable
from analysis_core.effects.fields import Fields, sample
from analysis_core.effects.sampling import both
from analysis_core.effects.survey import survey

Floats = NDArray[np.float64]

_SAMPLES = 9  # per segment, where a member has several
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
    return SweptBlock(
        moment=sweep_effect(block, block.moment, table, count),
        shear=sweep_effect(block, block.shear, table, count),
        deflection=sweep_effect(block, block.deflection, table, count),
    )


def sweep_effect(block: Fields, polynomials: Floats, table: FactorTable, count: int) -> Swept:
    """Return the envelope of one effect (P, K, C, B) of a block."""
    single = polynomials.shape[1] == 1 and count >= _SAMPLES
    samples = count if single else _SAMPLES
    taken = survey(polynomials, table, samples)
    highest = largest(polynomials, block.cuts, table, taken.highest)
    # The least value is the largest of the negative: the same factors lead to it.
    lowest = largest(-polynomials, block.cuts, table, taken.lowest)
    lowest = replace(lowest, value=-lowest.value, contributions=-lowest.contributions)
    if single:
        top, bottom = taken.top[:, 0], taken.bottom[:, 0]
    else:
        x = np.linspace(0.0, 1.0, count)[:, None] * block.length
        top, bottom = _at_stations(block, polynomials, table, x)
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
