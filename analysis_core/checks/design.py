"""What a member is checked for: consistent effects, section, material and restraints."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from analysis_core.model import Material, Section
from analysis_core.results import Extreme

Floats = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class EffectField:
    """Effects along a member under one combination in one arrangement: they occur together.

    ``x`` (N,) m from the member's start; ``moment`` N·m, sagging positive; ``shear`` N.
    """

    source: str
    x: Floats
    moment: Floats
    shear: Floats


@dataclass(frozen=True, slots=True)
class Governing:
    """Exact extremes over all combinations and arrangements of strength."""

    sagging: Extreme
    hogging: Extreme
    shear: Extreme


@dataclass(frozen=True, slots=True)
class Restraints:
    """Places (m from the member's start, ends included) where each flange is held sideways.

    ``continuous``: held all along, as by a slab.  ``reason`` says how it was decided.
    """

    top: tuple[float, ...]
    bottom: tuple[float, ...]
    top_continuous: bool = False
    bottom_continuous: bool = False
    reason: str = ""


@dataclass(frozen=True, slots=True, eq=False)
class MemberDesign:
    """One member, ready to be checked."""

    member: int
    section: Section
    material: Material
    length: float
    fields: tuple[EffectField, ...]
    governing: Governing
    restraints: Restraints
    cantilever: bool = False


@dataclass(frozen=True, slots=True)
class UnbracedSegment:
    """A length over which the compression flange is not held, under one field.

    Moments (N·m) at the ends and at the quarter points, and the largest absolute one; ``flange``
    is the one compressed at that place.
    """

    start: float
    end: float
    flange: str
    largest: float
    at: float
    moments: tuple[float, float, float, float, float]
    source: str

    @property
    def length(self) -> float:
        """Length in m."""
        return self.end - self.start


def segments(design: MemberDesign, field: EffectField) -> list[UnbracedSegment]:
    """Return the unbraced segments of both flanges that are compressed somewhere in them."""
    out = []
    held = design.restraints
    for flange, sign, places, continuous in (
        ("top", 1.0, held.top, held.top_continuous),
        ("bottom", -1.0, held.bottom, held.bottom_continuous),
    ):
        if continuous:
            continue
        for start, end in pairwise(places):
            inside = (field.x >= start - 1e-9) & (field.x <= end + 1e-9)
            compressed = sign * field.moment[inside]
            if not compressed.size or compressed.max() <= 0.0:
                continue
            at = float(field.x[inside][int(compressed.argmax())])
            quarter = np.linspace(start, end, 5)
            moments = np.interp(quarter, field.x, field.moment)
            m0, m1, m2, m3, m4 = (float(m) for m in moments)
            largest = float(compressed.max())
            out.append(
                UnbracedSegment(start, end, flange, largest, at, (m0, m1, m2, m3, m4), field.source)
            )
    return out


def plates(section: Section) -> dict[str, float]:
    """Return the section's dimensions by name, m."""
    return dict(section.dimensions)


def strength_of(material: Material, name: str) -> float:
    """Return a strength by its symbol in Pa; 0 where the material does not state it."""
    return dict(material.strength).get(name, 0.0)
