"""Section properties of any profile definition.

All properties come from the outline of the profile, arcs and fillets included exactly; a
property set of the profile takes precedence where it states a value, and is compared.

What ``Section.dimensions`` holds (m, m², m³, m⁶), by name: the profile's own measures
("width", "depth", "web_thickness", "flange_thickness", "top_flange_width", "wall_thickness",
"fillet_radius", …, see ``profile_outlines``), and for the section as it lies in the member

* "section_modulus_top", "section_modulus_bottom": elastic, for the outermost fibres;
* "section_modulus_lateral", "plastic_modulus" (where the outline is known);
* "inertia_major", "inertia_minor": about the principal axes;
* "warping" for I-sections and channels;
* "roll": angle in rad from the section's z to the shape's own depth axis, where not zero.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any, NamedTuple

import numpy as np

from analysis_core.findings import Finding
from analysis_core.ifc.file_units import FileUnits
from analysis_core.ifc.geometry import outline
from analysis_core.ifc.geometry.outline import IDENTITY, Floats, Loops, Matrix, Moments
from analysis_core.ifc.geometry.paths import Measures
from analysis_core.ifc.sections import slices, torsion
from analysis_core.ifc.sections.drawn import Drawn
from analysis_core.ifc.sections.profile_properties import Stated, stated_for
from analysis_core.ifc.sections.profiles import ProfileDrawer
from analysis_core.ifc.sections.recognise import recognise
from analysis_core.ifc.unreadable import READ_ERRORS, reason_of, text_of
from analysis_core.model import Section


class Profile(NamedTuple):
    """A profile as read once: outline, moments, corners of the outline and what is stated."""

    name: str
    ifc_class: str
    drawn: Drawn
    moments: Moments
    corners: Floats
    """Corners (n, 2) such that their bounding box in the profile's axes is that of the outline."""
    size: tuple[float, float]
    """Extent along x and along y, m."""
    torsion: float
    warping: float


class SectionReader:
    """Reads profiles of one file, each once; thousands of members share a few profiles."""

    def __init__(self, measures: Measures, stated: Mapping[int, Stated] | None = None) -> None:
        self._drawer = ProfileDrawer(measures)
        self._alike: dict[tuple[str, bytes], Profile] = {}
        self._stated = stated or {}
        self._profiles: dict[int, Profile | None] = {}
        self._findings: dict[int, tuple[Finding, ...]] = {}
        self._reasons: dict[int, str] = {}
        self._sections: dict[tuple[object, ...], Section] = {}
        self._kept: list[Profile] = []  # whose identity is a key: they must not go away

    def profile(self, entity: Any) -> Profile | None:
        """Return the profile as read, or None where it cannot be (see ``findings``)."""
        key = entity.id()
        if key not in self._profiles:
            self._profiles[key] = self._read(entity)
        return self._profiles[key]

    def reason(self, entity: Any) -> str:
        """Return why a profile cannot be read, "" where it can."""
        self.profile(entity)
        return self._reasons.get(entity.id(), "")

    @property
    def noticed(self) -> bool:
        """Whether anything was noticed about any profile so far."""
        return bool(self._findings)

    def findings(self, entity: Any) -> tuple[Finding, ...]:
        """Return what was noticed about a profile; elements are not filled in."""
        self.profile(entity)
        return self._findings.get(entity.id(), ())

    def section(self, entity: Any, matrix: Matrix = IDENTITY) -> Section | None:
        """Return the section as it lies in a member: y = row 0, z = row 1 of ``matrix``."""
        profile = self.profile(entity)
        if profile is None:
            stated = self._stated.get(entity.id())
            return stated.section(_name(entity), matrix) if stated else None
        return self.oriented(profile, matrix, entity)

    def oriented(self, profile: Profile, matrix: Matrix, entity: Any = None) -> Section:
        """Return the section of a profile as it lies in a member, worked out once.

        ``entity`` is the profile's entity where it has one; identical outlines share their
        section, as exporters write a profile of its own for every member.
        """
        exact = (id(profile), matrix)
        known = self._sections.get(exact)
        if known is not None:
            return known
        turned = tuple(round(value, 9) for row in matrix for value in row)
        stated = self._stated.get(entity.id()) if entity is not None else None
        outlined = outline.fingerprint(profile.drawn.loops)
        shared = (profile.name, profile.ifc_class, outlined, turned, id(stated) if stated else None)
        section = self._sections.get(shared)
        if section is None:
            section = section_of(profile, matrix)
            if stated:
                section = stated.applied(section, profile.moments, matrix)
            self._sections[shared] = section
        self._sections[exact] = section
        self._kept.append(profile)
        return section

    def _read(self, entity: Any) -> Profile | None:
        try:
            drawn = self._drawer.draw(entity)
            profile = self._profile_of(_name(entity), entity.is_a(), drawn)
        except READ_ERRORS as error:
            self._reasons[entity.id()] = reason_of(error)
            if entity.id() not in self._stated:
                self._findings[entity.id()] = (_unreadable(entity, error),)
            return None
        notes = []
        if not drawn.exact:
            notes.append(_approximate(entity))
        stated = self._stated.get(entity.id())
        if stated:
            notes.extend(stated.compared(_name(entity) or entity.is_a(), profile.moments))
        if notes:
            self._findings[entity.id()] = tuple(notes)
        return profile

    def _profile_of(self, name: str, ifc_class: str, drawn: Drawn) -> Profile:
        key = (ifc_class, outline.fingerprint(drawn.loops))
        known = self._alike.get(key)
        if known is None:
            known = self._alike[key] = profile_of(name, ifc_class, drawn)
        return known if known.name == name else known._replace(name=name)


def read_section(profile: Any, units: FileUnits) -> tuple[Section | None, list[Finding]]:
    """Return the section of one profile, y along its x axis and z along its y axis.

    ``units`` are the FileUnits of the file.  Findings name the profile; the caller adds the
    elements that use it.
    """
    stated = stated_for(profile, units)
    reader = SectionReader(measures_of(units), {profile.id(): stated} if stated else None)
    section = reader.section(profile)
    return section, list(reader.findings(profile))


def measures_of(units: FileUnits) -> Measures:
    """Return the factors for lengths and plane angles of a file."""
    return Measures(units.length, lambda: units.angle)


def profile_of(name: str, ifc_class: str, drawn: Drawn) -> Profile:
    """Return the profile of an outline: moments, corners, torsion and warping constants."""
    moments = outline.moments(drawn.loops)
    corners = np.concatenate([outline.split_at_extremes(rows)[:, :2] for rows in drawn.loops])
    width, depth = np.ptp(corners, axis=0).tolist()
    return Profile(
        name,
        ifc_class,
        drawn,
        moments,
        corners,
        (width, depth),
        _torsion_constant(drawn, moments),
        _warping_constant(drawn),
    )


def section_of(profile: Profile, matrix: Matrix = IDENTITY) -> Section:
    """Return the section of a profile after ``matrix`` turned (mirrored, stretched) it."""
    drawn, scale = profile.drawn, _uniform_scale(matrix)
    loops = drawn.loops if matrix == IDENTITY else outline.transformed(drawn.loops, matrix)
    moments = profile.moments if matrix == IDENTITY else profile.moments.transformed(matrix)
    corners = np.concatenate([outline.split_at_extremes(rows)[:, :2] for rows in loops])
    (left, bottom), (right, top) = corners.min(axis=0).tolist(), corners.max(axis=0).tolist()
    strips = slices.cut(loops)
    dimensions = {name: value * scale for name, value in drawn.dimensions.items()}
    dimensions.setdefault("width", right - left)
    dimensions.setdefault("depth", top - bottom)
    dimensions["section_modulus_top"] = moments.yy / (top - moments.y)
    dimensions["section_modulus_bottom"] = moments.yy / (moments.y - bottom)
    dimensions["section_modulus_lateral"] = moments.xx / max(right - moments.x, moments.x - left)
    dimensions["plastic_modulus"] = slices.plastic_modulus(loops, strips)
    dimensions["inertia_major"], dimensions["inertia_minor"] = moments.principal
    if profile.warping:
        dimensions["warping"] = profile.warping * scale**6
    roll = _roll(drawn.roll, matrix)
    if roll:
        dimensions["roll"] = roll
    return Section(
        name=profile.name,
        shape=drawn.shape,
        area=moments.area,
        inertia=moments.yy,
        inertia_lateral=moments.xx,
        inertia_product=moments.xy,
        torsion=profile.torsion * scale**4,
        shear_area=_shear_area(drawn, strips, moments),
        depth=top - bottom,
        width=right - left,
        top=top - moments.y,
        dimensions=tuple(dimensions.items()),
        source=_source(profile),
    )


def _name(entity: Any) -> str:
    return text_of(entity[1]).strip() if len(entity) > 1 else ""


def _source(profile: Profile) -> str:
    if "Arbitrary" in profile.ifc_class:
        return f"polygon of {len(profile.corners)} corners"
    return f"outline of {profile.ifc_class}"


def _uniform_scale(matrix: Matrix) -> float:
    (a, b), (c, d) = matrix
    return math.sqrt(abs(a * d - b * c))


def _roll(roll: float, matrix: Matrix) -> float:
    (a, b), (c, d) = matrix
    x, y = -math.sin(roll), math.cos(roll)
    across, along = a * x + b * y, c * x + d * y
    angle = math.atan2(-across, along)
    return angle if abs(angle) > 1e-6 else 0.0


def _shear_area(drawn: Drawn, strips: slices.Slices, moments: Moments) -> float:
    """Effective shear area along z: by energy, see ``slices.shear_area``.

    In a round tube shear runs along the wall, not straight down: G. R. Cowper, Journal of
    Applied Mechanics 33, 1966, for a Poisson ratio of zero; half the area where thin.
    """
    if drawn.shape != "tube":
        return slices.shear_area(strips, moments.y, moments.yy)
    d = drawn.dimensions
    ratio = (1.0 - 2.0 * d["wall_thickness"] / d["diameter"]) ** 2
    both = (1.0 + ratio) ** 2
    return moments.area * 6.0 * both / (7.0 * both + 20.0 * ratio)


def _torsion_constant(drawn: Drawn, moments: Moments) -> float:
    d = drawn.dimensions
    if drawn.shape == "rectangle":
        return torsion.rectangle(d["width"], d["depth"])
    if drawn.shape in ("circle", "tube"):
        return moments.xx + moments.yy
    if drawn.shape == "ellipse":
        return torsion.ellipse(0.5 * d["width"], 0.5 * d["depth"])
    if drawn.shape == "hollow rectangle":
        return torsion.hollow_rectangle(
            d["width"], d["depth"], d["wall_thickness"], d["outer_radius"], d["inner_radius"]
        )
    formula = {
        "I": torsion.i_section,
        "tee": torsion.tee,
        "channel": torsion.channel,
        "angle": torsion.angle,
    }.get(drawn.shape)
    if formula is not None:
        return max(formula(d), 0.0)
    if drawn.shape == "zed":
        flat = 2.0 * d["flange_width"] + d["depth"] - 2.0 * d["flange_thickness"]
        return torsion.thin_open(flat, math.sqrt(d["web_thickness"] * d["flange_thickness"]))
    if drawn.shape in ("lipped channel", "thin-walled"):
        return torsion.thin_open(moments.area / d["thickness"], d["thickness"])
    if drawn.shape == "composite":
        # Parts side by side resist twisting each for itself.
        parts = [recognise((rows,)) for rows in drawn.loops if outline.signed_area(rows) > 0.0]
        if len(parts) == len(drawn.loops):
            return sum(_torsion_constant(part, outline.moments(part.loops)) for part in parts)
    if drawn.shape == "hollow polygon" and len(drawn.loops) == 2:
        return _tube_torsion(drawn.loops, moments.area)
    return torsion.solid(moments.area, moments.xx + moments.yy)


def _tube_torsion(loops: Loops, area: float) -> float:
    perimeters = []
    for rows in loops:
        points = outline.flattened(rows, chords=48)[:, :2]
        steps = np.roll(points, -1, axis=0) - points
        perimeters.append(float(np.hypot(steps[:, 0], steps[:, 1]).sum()))
    outer, inner = (abs(outline.signed_area(rows)) for rows in loops)
    return torsion.tube(outer, inner, 0.5 * sum(perimeters), area)


def _warping_constant(drawn: Drawn) -> float:
    if drawn.shape == "I":
        return torsion.i_warping(drawn.dimensions)
    if drawn.shape == "channel":
        return torsion.channel_warping(drawn.dimensions)
    return 0.0


def _unreadable(entity: Any, error: Exception) -> Finding:
    return Finding(
        "warning",
        "profile-unreadable",
        f"Profile '{_name(entity)}' (#{entity.id()}, {entity.is_a()}) gives no "
        f"section: {reason_of(error)}. "
        f"State area and inertia in the job file (sections), or correct the profile.",
    )


def _approximate(entity: Any) -> Finding:
    return Finding(
        "note",
        "section-approximate",
        f"Profile '{_name(entity)}' (#{entity.id()}, {entity.is_a()}) has curves that were "
        f"replaced by short chords, or roundings that were left out.",
    )
