"""Flexural and shear rigidity of a stretch of a member, bending in a given vertical plane."""

from __future__ import annotations

import itertools
import math
from dataclasses import dataclass

from analysis_core.building import AxisMember
from analysis_core.idealise.log import Log, named
from analysis_core.idealise.polynomials import Coefficients, add, multiply, power, substituted
from analysis_core.idealise.properties import Properties
from analysis_core.idealise.vectors import Vector, cross, distance, dot, subtract, unit
from analysis_core.model import Material, Piece, Section

# Product of inertia, as a fraction of the larger inertia, above which bending is called oblique.
_OBLIQUE = 0.01
_EXTENSION = 1e-9


@dataclass(frozen=True, slots=True)
class Stretch:
    """Rigidity between fractions ``low`` and ``high`` of a member's own length.

    ``flexural`` and ``shear`` are polynomials in v = 0..1 along the stretch, as in ``Piece``.
    """

    low: float
    high: float
    flexural: Coefficients
    power: float = 1.0
    shear: Coefficients | None = None


def rigidity_of(
    member: AxisMember,
    properties: Properties,
    across: Vector,
    *,
    shear_flexible: bool,
    told: bool,
    log: Log,
    line: str,
) -> tuple[Stretch, ...]:
    """Return the rigidity along a member that bends so that its axis moves along ``across``.

    ``across`` is the unit vector in the plane of bending perpendicular to the member.  The
    properties are without fault.  ``told``: the reader said already that the section as it lies
    bends obliquely.
    """
    section, material = properties.section, properties.material
    assert section is not None
    assert material is not None
    turn = _Turn.of(member, across)
    if not (told and abs(turn.sin) < _OBLIQUE):
        _report_oblique(member, section, turn, log, line)
    modulus = material.elastic_modulus
    _report_shear_modulus(material, log)
    shear = None
    if shear_flexible:
        shear = _shear_rigidity(member, properties, turn, log, line)
    if properties.taper:
        return _stated_taper(properties.taper, modulus * turn.inertia(section), shear)
    if properties.end_section is None:
        return (Stretch(0.0, 1.0, (modulus * turn.inertia(section),), 1.0, shear),)
    return (
        _linear_taper(member, section, properties.end_section, modulus, turn, shear, log, line),
    )


def pieces_between(
    stretches: tuple[Stretch, ...], start: float, end: float, length: float
) -> tuple[Piece, ...]:
    """Return the pieces of a bar that runs from fraction ``start`` to ``end`` of a member.

    The fractions may be in falling order, and may lie outside 0..1: there the rigidity of the
    member's end holds.  The pieces' lengths add up to ``length``.
    """
    if len(stretches) == 1 and len(stretches[0].flexural) == 1:
        only = stretches[0]
        return (Piece(length, only.flexural, only.power, only.shear),)
    if start > end:
        forward = _cut(stretches, end, start, length)
        return tuple(_turned(piece) for piece in reversed(forward))
    return _cut(stretches, start, end, length)


@dataclass(frozen=True, slots=True)
class _Turn:
    """How the section lies in the plane: cosine of its depth, sine of its width, with it."""

    cos: float
    sin: float

    @classmethod
    def of(cls, member: AxisMember, across: Vector) -> _Turn:
        lateral = cross(member.up, unit(subtract(member.end, member.start)))
        return cls(dot(member.up, across), dot(lateral, across))

    def inertia(self, section: Section) -> float:
        if abs(self.sin) < 1e-9:
            return section.inertia
        return (
            section.inertia * self.cos**2
            + section.inertia_lateral * self.sin**2
            + 2.0 * section.inertia_product * self.sin * self.cos
        )

    def product(self, section: Section) -> float:
        return (section.inertia_lateral - section.inertia) * self.sin * self.cos + (
            section.inertia_product * (self.cos**2 - self.sin**2)
        )


def inertia_in_plane(member: AxisMember, section: Section, across: Vector) -> float:
    """Return the second moment of area with which a section bends along ``across``."""
    return _Turn.of(member, across).inertia(section)


def _report_oblique(member: AxisMember, section: Section, turn: _Turn, log: Log, line: str) -> None:
    product = turn.product(section)
    if abs(product) <= _OBLIQUE * max(section.inertia, section.inertia_lateral):
        return
    log.add(
        "warning",
        "oblique-bending",
        f"Section '{section.name}' of member {named(member)} does not bend in the plane of line "
        f"{line} alone (product of inertia {product * 1e8:.4g} cm4 about the plane). It is taken "
        f"as held sideways, with I = {turn.inertia(section) * 1e8:.4g} cm4; check that something "
        f"holds it.",
        (member.global_id,),
        line,
    )


def _report_shear_modulus(material: Material, log: Log) -> None:
    """Checks use no shear modulus that cannot be true, the analysis no slip of units."""
    stated, used = material.shear_modulus, material.usable_shear_modulus
    if stated <= 0.0 or material.shear_modulus_is_plausible:
        return
    instead = f"G = {used / 1e9:.4g} GPa is taken from E" if used > 0.0 else "it is not used"
    if material.analysed_shear_modulus == stated:
        instead += " by the checks, while an analysis flexible in shear takes it as stated"
    log.add(
        "warning",
        "implausible-modulus",
        f"Material '{material.name}' states a shear modulus of {stated / 1e6:.4g} MPa beside "
        f"E = {material.elastic_modulus / 1e6:.4g} MPa, which no structural material has; "
        f"{instead}. Put it and its units right in the model, or in the job file (materials: name "
        f"'{material.name}', shear_modulus).",
    )


def _shear_rigidity(
    member: AxisMember, properties: Properties, turn: _Turn, log: Log, line: str
) -> Coefficients | None:
    section, end, material = properties.section, properties.end_section, properties.material
    assert section is not None
    assert material is not None
    areas = [s.shear_area for s in (section, end or section)]
    modulus = material.analysed_shear_modulus
    if abs(turn.cos) < 0.9 or min(areas) <= 0.0 or modulus <= 0.0:
        what = "shear modulus" if modulus <= 0.0 else "shear area in the plane of bending"
        log.add(
            "warning",
            "rigid-in-shear",
            f"Member {named(member)} has no {what}, so it is taken as rigid in shear. State it in "
            f"the job file (materials: shear_modulus; sections: shear_area).",
            (member.global_id,),
            line,
        )
        return None
    if material.shear_modulus <= 0.0:
        log.add(
            "note",
            "assumed-shear-modulus",
            f"Material '{material.name}' states no shear modulus; G = {modulus / 1e9:.4g} GPa is "
            f"taken from E = {material.elastic_modulus / 1e9:.4g} GPa for {material.category}.",
        )
    first, last = (modulus * area for area in areas)
    return (first,) if first == last else (first, last - first)


def _stated_taper(
    taper: tuple[tuple[float, float], ...], rigidity: float, shear: Coefficients | None
) -> tuple[Stretch, ...]:
    """Multiples of the depth at fractions of the length, linear between them.

    The rigidity follows the cube of the depth, so its cube root is linear.
    """
    points = sorted(taper, key=lambda pair: pair[0])
    if points[0][0] > 0.0:
        points.insert(0, (0.0, points[0][1]))
    if points[-1][0] < 1.0:
        points.append((1.0, points[-1][1]))
    stretches = []
    for (low, first), (high, last) in itertools.pairwise(points):
        if high - low <= _EXTENSION:  # two values at one place: a step
            continue
        root = rigidity ** (1.0 / 3.0)
        a, b = root * first, root * last
        part = None if shear is None else substituted(shear, low, high - low)
        flexural = (a,) if a == b else (a, b - a)
        stretches.append(Stretch(low, high, flexural, 3.0, part))
    return tuple(stretches)


def _linear_taper(
    member: AxisMember,
    start: Section,
    end: Section,
    modulus: float,
    turn: _Turn,
    shear: Coefficients | None,
    log: Log,
    line: str,
) -> Stretch:
    """Every measure of the profile runs linearly from one end to the other."""
    if abs(turn.sin) < 1e-6:
        if start.shape == end.shape == "circle":  # the fourth power of a linear diameter
            a, b = ((modulus * s.inertia) ** 0.25 for s in (start, end))
            return Stretch(0.0, 1.0, (a, b - a), 4.0, shear)
        exact = _tapered_inertia(start, end)
        if exact is not None:
            return Stretch(0.0, 1.0, tuple(modulus * c for c in exact), 1.0, shear)
    a, b = ((modulus * turn.inertia(s)) ** (1.0 / 3.0) for s in (start, end))
    log.add(
        "note",
        "taper-interpolated",
        f"Member {named(member)} tapers from '{start.name}' to '{end.name}'; between its ends the "
        f"cube root of the rigidity is taken as linear, as for a solid section whose depth is.",
        (member.global_id,),
        line,
    )
    return Stretch(0.0, 1.0, (a, b - a), 3.0, shear)


def _tapered_inertia(start: Section, end: Section) -> Coefficients | None:
    """Second moment of area of a tapering rectangle or I as a polynomial, else None.

    Exact for sharp corners; what fillets add at both ends runs linearly between them.
    """
    first, last = dict(start.dimensions), dict(end.dimensions)

    def measure(name: str) -> Coefficients | None:
        if name not in first or name not in last:
            return None
        return first[name], last[name] - first[name]

    depth, width = measure("depth"), measure("width")
    if depth is None or width is None or start.shape != end.shape:
        return None
    result = multiply(width, power(depth, 3))
    web, flange = measure("web_thickness"), measure("flange_thickness")
    if web is not None and flange is not None:
        hollow = add(width, tuple(-c for c in web))
        clear = add(depth, tuple(-2.0 * c for c in flange))
        result = add(result, tuple(-c for c in multiply(hollow, power(clear, 3))))
    elif start.shape != "rectangle":
        return None
    result = tuple(c / 12.0 for c in result)
    rest = start.inertia - result[0], end.inertia - math.fsum(result)
    if any(abs(r) > 0.1 * s.inertia for r, s in zip(rest, (start, end), strict=True)):
        return None  # these dimensions are not those of the section
    return add(result, (rest[0], rest[1] - rest[0]))


def _cut(
    stretches: tuple[Stretch, ...], start: float, end: float, length: float
) -> tuple[Piece, ...]:
    scale = length / (end - start)
    pieces = []
    first, last = stretches[0], stretches[-1]
    if start < first.low - _EXTENSION:
        pieces.append(_constant(first, 0.0, (min(end, first.low) - start) * scale))
    for stretch in stretches:
        low, high = max(start, stretch.low), min(end, stretch.high)
        if high - low <= _EXTENSION:
            continue
        size = stretch.high - stretch.low
        offset, factor = (low - stretch.low) / size, (high - low) / size
        shear = None if stretch.shear is None else substituted(stretch.shear, offset, factor)
        flexural = substituted(stretch.flexural, offset, factor)
        pieces.append(Piece((high - low) * scale, flexural, stretch.power, shear))
    if end > last.high + _EXTENSION:
        pieces.append(_constant(last, 1.0, (end - max(start, last.high)) * scale))
    return tuple(pieces)


def _constant(stretch: Stretch, at: float, length: float) -> Piece:
    shear = None if stretch.shear is None else substituted(stretch.shear, at, 0.0)[:1]
    return Piece(length, substituted(stretch.flexural, at, 0.0)[:1], stretch.power, shear)


def _turned(piece: Piece) -> Piece:
    shear = None if piece.shear is None else substituted(piece.shear, 1.0, -1.0)
    return Piece(piece.length, substituted(piece.flexural, 1.0, -1.0), piece.power, shear)


def length_of(member: AxisMember) -> float:
    """Return the length of a member's own axis in m."""
    return distance(member.start, member.end)
