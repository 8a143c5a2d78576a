"""What a member is checked for: consistent effects, section, material and restraints."""

from __future__ import annotations

import math
import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from analysis_core.model import Material, Section
from analysis_core.results import Extreme

Floats = NDArray[np.float64]

# Part of the resistance below which an axial force is taken as none; common practice.
NEGLIGIBLE = 1e-3
_STAINLESS = re.compile(
    r"stainless|edelstahl|nichtrostend|inox|rostfri|\b1\.4\d{3}\b|\bsus ?\d{3}|\baisi ?[34]\d\d",
    re.I,
)


@dataclass(frozen=True, slots=True, eq=False)
class EffectField:
    """Effects along a member under one combination in one arrangement: they occur together.

    ``x`` (N,) m from the member's start; ``moment`` N·m, sagging positive; ``shear`` N.
    ``along``: places and moments over everything that runs on straight from the member without
    being held between, in the same coordinate; None where nothing does.  ``axial``: the lowest
    and the highest axial force, tension positive.
    """

    source: str
    x: Floats
    moment: Floats
    shear: Floats
    along: tuple[Floats, Floats] | None = None
    axial: tuple[float, float] = (0.0, 0.0)

    @property
    def stretch(self) -> tuple[Floats, Floats]:
        """Places and moments over the stretch in which the member may buckle sideways."""
        return self.along if self.along is not None else (self.x, self.moment)


@dataclass(frozen=True, slots=True)
class Governing:
    """Exact extremes over all combinations and arrangements of strength."""

    sagging: Extreme
    hogging: Extreme
    shear: Extreme


@dataclass(frozen=True, slots=True)
class Restraints:
    """Places (m from the member's start) where each flange is held sideways.

    They may lie beyond the member's ends, where it runs on unheld.  ``loose``: places that end a
    stretch without being held (the tip of a cantilever).  ``continuous``: held all along, as by a
    slab.  ``reason`` says how it was decided.
    """

    top: tuple[float, ...]
    bottom: tuple[float, ...]
    top_continuous: bool = False
    bottom_continuous: bool = False
    reason: str = ""
    loose: tuple[float, ...] = ()


@dataclass(frozen=True, slots=True)
class Bearing:
    """What a member presses on at one of its ends: the force (N) by the combination's source."""

    joint: int
    width: float
    """Along the line, m; 0 where unknown."""
    at_end: bool
    """Whether the line ends here, so that the beam goes on to one side alone."""
    forces: tuple[tuple[str, float], ...]
    x: float = 0.0
    """From the member's start, m."""


@dataclass(frozen=True, slots=True)
class Sag:
    """Largest deflection of the span that a member is part of, m, under one requirement."""

    name: str
    value: float
    span: float
    cantilever: bool
    source: str
    x: float = 0.0


@dataclass(frozen=True, slots=True)
class Redistribution:
    """How far the moments that a member is checked for were redistributed.

    ``fraction``: the largest part taken off a support moment at its ends; ``sagging``: the
    redistributed sagging moment over the elastic one, 1 where it is not reduced.  ``figures`` are
    those of the rule set ("redistribution.k1"), ``ductility`` the class of the reinforcement.
    """

    fraction: float
    figures: Mapping[str, float]
    sagging: float = 1.0
    ductility: str = ""

    def delta(self, *, bottom: bool) -> float:
        """Redistributed over elastic moment, where the bottom (or the top) is in tension."""
        return min(1.0, self.sagging if bottom else 1.0 - self.fraction)

    def figure(self, name: str) -> float:
        """Return a figure of the rule set by its short name; 0 where it has none."""
        return self.figures.get(f"redistribution.{name}", 0.0)


@dataclass(frozen=True, slots=True, eq=False)
class MemberDesign:
    """One member, ready to be checked.

    ``continuous_ends``: of the two ends of its span, how many are held against turning by what
    lies beyond them.  ``span``: length of the span in m; 0: that of the member.
    """

    member: int
    section: Section
    material: Material
    length: float
    fields: tuple[EffectField, ...]
    governing: Governing
    restraints: Restraints
    cantilever: bool = False
    continuous_ends: int = 0
    span: float = 0.0
    bearings: tuple[Bearing, ...] = ()
    sags: tuple[Sag, ...] | None = ()
    """None where the combinations do not give them."""
    redistribution: Redistribution | None = None
    """None: the moments are elastic."""

    @property
    def axial(self) -> tuple[float, float]:
        """Lowest and highest axial force of all fields, N, tension positive."""
        low = min((f.axial[0] for f in self.fields), default=0.0)
        high = max((f.axial[1] for f in self.fields), default=0.0)
        return min(low, 0.0), max(high, 0.0)


@dataclass(frozen=True, slots=True)
class UnbracedSegment:
    """A length over which the compression flange is not held, under one field.

    ``largest`` is the largest moment in it, of either sign, N·m: critical moments belong to it.
    ``moments`` at the ends and at the quarter points; ``flange`` is the one that is not held and
    is compressed somewhere in the segment.  ``free``: one end is not held at all.
    """

    start: float
    end: float
    flange: str
    largest: float
    at: float
    moments: tuple[float, float, float, float, float]
    source: str
    free: bool = False
    tip_moment: bool = False
    """Whether a moment acts at the end that is free."""

    @property
    def length(self) -> float:
        """Length in m."""
        return self.end - self.start

    @property
    def buckling_length(self) -> float:
        """Length to buckle over, m: twice the length under a moment at the end that is free.

        A cantilever under uniform moment buckles as one half of a span of twice its length; under
        loads along it, it carries more than a span of its own length does under uniform moment
        (Timoshenko and Gere, Theory of Elastic Stability, 6.3; from memory).
        """
        return (2.0 if self.tip_moment else 1.0) * self.length

    @property
    def words(self) -> str:
        """What bounds the length, for the working."""
        free = ", one end of it free" if self.free else ""
        twice = ": twice the length, for a moment acts at that end" if self.tip_moment else ""
        return f"between restraints of the {self.flange} flange{free}{twice}"


def segments(design: MemberDesign, field: EffectField) -> list[UnbracedSegment]:
    """Return the unbraced segments at the member in which the flange not held is compressed."""
    out = []
    held = design.restraints
    for flange, sign, places, continuous in (
        ("top", 1.0, held.top, held.top_continuous),
        ("bottom", -1.0, held.bottom, held.bottom_continuous),
    ):
        if continuous:
            continue
        x, moment = field.stretch
        noise = _noise(moment)
        for start, end in _lengths(design, places):
            first, last = np.searchsorted(x, (start - 1e-9, end + 1e-9))
            inside = moment[first:last]
            if not inside.size or (sign * inside).max() <= noise:
                continue
            index = int(first) + int(np.abs(inside).argmax())
            quarter = [start + (end - start) * i / 4.0 for i in range(5)]
            m0, m1, m2, m3, m4 = np.interp(quarter, x, moment).tolist()
            largest = float(moment[index])
            loose = [m for e, m in ((start, m0), (end, m4)) if _among(e, held.loose)]
            tip = any(abs(m) > 1e-3 * abs(largest) for m in loose)
            out.append(
                UnbracedSegment(
                    start, end, flange, largest, float(x[index]), (m0, m1, m2, m3, m4),
                    field.source, bool(loose), tip,
                )
            )  # fmt: skip
    return out


def _lengths(design: MemberDesign, places: tuple[float, ...]) -> Iterator[tuple[float, float]]:
    """The lengths between ``places`` that the member has a part in."""
    for start, end in pairwise(sorted({*places, *design.restraints.loose})):
        if end > 1e-9 and start < design.length - 1e-9:
            yield start, end


def _among(place: float, places: tuple[float, ...]) -> bool:
    return any(abs(place - other) < 1e-9 for other in places)


def _noise(moment: Floats) -> float:
    return 1e-9 * float(np.abs(moment).max(initial=0.0))


def gradient_operands(segment: UnbracedSegment) -> dict[str, tuple[float, str]]:
    """Return the moments of ``moment_gradient`` by symbol, with their quantity."""
    m0, m1, m2, m3, m4 = (abs(m) for m in segment.moments)
    top = max(m0, m1, m2, m3, m4, abs(segment.largest))
    return {name: (value, "moment")
            for name, value in (("M_max", top), ("M_2", m1), ("M_3", m2), ("M_4", m3))}  # fmt: skip


def moment_gradient(segment: UnbracedSegment) -> float:
    """Return the factor for the shape of the moments over an unbraced segment.

    12.5 M_max / (2.5 M_max + 3 M_2 + 4 M_3 + 3 M_4), absolute values, with the moments at the
    quarter points: AISC 360, (F1-1), from memory; 1 where an end is free.
    """
    if segment.free:
        return 1.0
    m0, m1, m2, m3, m4 = (abs(m) for m in segment.moments)
    top = max(m0, m1, m2, m3, m4, abs(segment.largest))
    if top == 0.0:
        return 1.0
    return 12.5 * top / (2.5 * top + 3.0 * m1 + 4.0 * m2 + 3.0 * m3)


def lateral_length(design: MemberDesign) -> float:
    """Return the longest buckling length between places where both flanges are held, m.

    Where an end of it is free, twice its length (a column held at its foot alone).
    """
    held = design.restraints
    both = sorted({*(p for p in held.top if p in held.bottom), *held.loose})
    if held.top_continuous and held.bottom_continuous:
        return 0.0
    lengths = (
        (b - a) * (2.0 if a in held.loose or b in held.loose else 1.0)
        for a, b in _lengths(design, tuple(both))
    )
    return max(lengths, default=design.length)


def length_in_plane(design: MemberDesign) -> float:
    """Return the buckling length in the plane of bending, m: doubled where an end is free."""
    factor = 2.0 if design.restraints.loose else 1.0
    return factor * max(design.length, design.span)


def plates(section: Section) -> dict[str, float]:
    """Return the section's dimensions by name, m."""
    return dict(section.dimensions)


def strength_of(material: Material, name: str) -> float:
    """Return a strength by its symbol in Pa; 0 where the material does not state it."""
    return dict(material.strength).get(name, 0.0)


def unlike_profile(section: Section) -> str:
    """Return why the dimensions of a section do not serve for its resistance; "" where they do."""
    d = plates(section)
    roll = d.get("roll", 0.0)
    lying = abs(math.cos(roll)) < 1e-3 and section.shape == "hollow rectangle"
    solid = section.shape in ("rectangle", "tube", "circle")
    if abs(math.sin(roll)) > 1e-3 and not (lying or solid):
        return (
            f"The section {section.name} lies turned by {math.degrees(roll):.0f}° in the member; "
            f"bending about its strong axis alone is covered."
        )
    if abs(section.inertia_product) > 1e-3 * section.inertia:
        return (
            f"The section {section.name} does not bend in its plane alone; bending about one "
            f"principal axis is covered."
        )
    modulus = d.get("section_modulus_top", 0.0)
    if section.top > 0.0 and abs(modulus * section.top - section.inertia) > 0.02 * section.inertia:
        return (
            f"The second moment of area of {section.name} is not that of its dimensions "
            f"(it was replaced, or stated with the profile)."
        )
    return ""


def unknown_properties(section: Section) -> str:
    """Return why a steel section cannot be checked for want of a property; "" where it can."""
    d = plates(section)
    if min(section.area, section.inertia, section.inertia_lateral) <= 0.0:
        return f"Area or second moments of area of {section.name} are not known."
    needed = ("section_modulus_top", "section_modulus_bottom", "plastic_modulus")
    if section.torsion <= 0.0 or min(d.get(name, 0.0) for name in needed) <= 0.0:
        return f"Torsion constant or section moduli of {section.name} are not known."
    return ""


def is_stainless(material: Material) -> bool:
    """Whether a steel is stainless by its category or name: other standards hold for it."""
    return material.category == "stainless" or bool(_STAINLESS.search(material.name))
