"""What the engineer settles beside the model: everything a job file can say, in SI units.

Plain frozen data: ``job.py`` fills it from YAML, ``idealise``, ``effects`` and the rest read it.
Every field has the default that holds when there is no job file.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Literal

from analysis_core.findings import Finding

Route = Literal["auto", "analytical", "physical"]
Fixity = Literal["pinned", "fixed", "guided", "free"]


@dataclass(frozen=True, slots=True)
class Selector:
    """Chooses elements: all given patterns must match (shell wildcards, case ignored).

    An empty selector matches everything of the kind it is used for.
    """

    global_ids: tuple[str, ...] = ()
    name: str = ""
    ifc_class: str = ""
    type_name: str = ""
    material: str = ""
    storey: str = ""
    line: str = ""
    """Mark of a line."""


@dataclass(frozen=True, slots=True)
class CaseSetting:
    """Nature (and category) of a load case, by its name; a new case where the model has none."""

    name: str
    nature: str = "other"
    category: str = ""
    one_by_one: bool | None = None
    """Whether spans are loaded one by one (arrangements); None: by nature."""


@dataclass(frozen=True, slots=True)
class CombinationSetting:
    """A combination of the user's own."""

    name: str
    limit_state: Literal["strength", "serviceability"]
    factors: Mapping[str, float]
    kind: str = ""


@dataclass(frozen=True, slots=True)
class ActionSetting:
    """An action on members chosen by ``on``; SI units, downward positive.

    ``shape``: "uniform" (``values`` = one intensity, N/m, over ``start``..``end`` or all),
    "linear" (two intensities, N/m), "polygonal" (intensities at ``stations``), "point" (N, at
    ``stations``), "moment" (N·m clockwise, at ``stations``), "temperature" (K, bottom minus top).
    Positions are m from the start of the element, or fractions of its length where
    ``relative``.  ``end`` infinite: to the end.  ``direction``: "down" (global, the default),
    "across" (perpendicular to the member), "along" (member axis), "right" (global horizontal).
    ``projected``: intensity per metre of horizontal projection.
    """

    case: str
    on: Selector
    shape: Literal["uniform", "linear", "polygonal", "point", "moment", "temperature"]
    values: tuple[float, ...]
    stations: tuple[float, ...] = ()
    start: float = 0.0
    end: float = math.inf
    relative: bool = False
    direction: Literal["down", "across", "along", "right"] = "down"
    projected: bool = False
    source: str = ""
    """Where in the job file it stands: "actions[2]"."""


@dataclass(frozen=True, slots=True)
class AreaActionSetting:
    """An area load (N/m², downward) on slabs or spaces, spread to the beams that carry them."""

    case: str
    on: Selector
    intensity: float
    spread: Literal["auto", "one-way", "two-way"] = "auto"
    span_direction: tuple[float, float] | None = None
    source: str = ""


@dataclass(frozen=True, slots=True)
class MovementSetting:
    """Settlement (m, down) or rotation (rad, clockwise) of a support, in a case."""

    case: str
    at: Selector
    end: Literal["start", "end", "both", ""] = ""
    """Which end of the selected element; "" where ``at`` selects the support itself."""
    down: float = 0.0
    rotation: float = 0.0
    source: str = ""


@dataclass(frozen=True, slots=True)
class SupportSetting:
    """Settles a support where the model is silent, or overrides it.

    ``on`` selects members; ``end`` says at which of their ends, ``position`` (m from the start)
    puts a support along the member.  Stiffness: infinite rigid, 0 free, else N/m, N·m/rad.
    """

    on: Selector
    end: Literal["start", "end", "both", ""] = "both"
    position: float | None = None
    vertical: float = math.inf
    horizontal: float = 0.0
    rotation: float = 0.0
    source: str = ""


@dataclass(frozen=True, slots=True)
class ReleaseSetting:
    """How a member's end is joined to the next span: rigid (infinite), released (0) or a spring."""

    on: Selector
    end: Literal["start", "end", "both"]
    rotation: float = 0.0
    position: float | None = None
    """A hinge at this distance from the element's start, instead of at an end."""
    source: str = ""


@dataclass(frozen=True, slots=True)
class MaterialSetting:
    """Properties for every material whose name matches ``name`` (wildcards); 0: not stated."""

    name: str
    elastic_modulus: float = 0.0
    shear_modulus: float = 0.0
    density: float = 0.0
    thermal_expansion: float = 0.0
    category: str = ""
    strength: Mapping[str, float] = field(default_factory=dict)
    override: bool = True
    """Whether it replaces what the model states (else it only fills gaps)."""


@dataclass(frozen=True, slots=True)
class SectionSetting:
    """Section values for members chosen by ``on``: m², m⁴; ``haunches`` vary the depth."""

    on: Selector
    area: float = 0.0
    inertia: float = 0.0
    shear_area: float = 0.0
    depth: float = 0.0
    width: float = 0.0
    taper: tuple[tuple[float, float], ...] = ()
    """(part of the length from 0 to 1, depth as a multiple of the section's) pairs; the depth is
    linear between them and the rigidity follows its cube."""
    source: str = ""


@dataclass(frozen=True, slots=True)
class TableSection:
    """A section by its dimensions, for members that are given another; m.

    ``shape``: "I", "rectangle", "hollow rectangle", "tube", "circle", "channel", "tee", "angle".
    ``dimensions``: "depth", "width", "web_thickness", "flange_thickness", "wall_thickness",
    "thickness" (of an angle), "diameter", "fillet_radius", "outer_radius", "inner_radius".
    """

    name: str
    shape: str
    dimensions: Mapping[str, float]
    categories: tuple[str, ...] = ()
    """What kinds of profile it belongs to, to choose among."""
    origin: str = ""
    """Name of the profile list that it stands in; "" where the engineer stated it."""


@dataclass(frozen=True, slots=True)
class MemberSetting:
    """Another section or material for members chosen by ``on``, by name; "" for what they have."""

    on: Selector
    profile: str = ""
    material: str = ""
    source: str = ""


@dataclass(frozen=True, slots=True)
class Tolerances:
    """Distances in m and angles in rad used when members become lines."""

    join: float = 0.05
    """Ends of members closer than this meet in one joint."""
    bearing: float = 0.35
    """An element within this distance of a beam's end may carry it."""
    collinear: float = math.radians(2.0)
    offset: float = 0.05
    """Axes of successive spans may be this far apart sideways or in height."""
    horizontal: float = math.radians(1.0)
    beam_slope: float = math.radians(60.0)
    """Steeper members are columns."""


@dataclass(frozen=True, slots=True)
class BeamRules:
    """When an element of the classes to be included is no beam (physical route); m.

    ``least_slenderness``: length over the larger side of the section; EN 1992-1-1, 5.3.1(3)
    calls shorter ones deep beams.  The other figures are common practice: rods, strips and
    anchors are thinner than ``least_depth``, plates than ``least_thickness``; a solid section
    deeper than ``panel_depth`` (and four times its width) is a wall panel, one wider than
    ``slab_width`` (and four times its depth) a slab strip.
    """

    least_length: float = 0.5
    least_slenderness: float = 3.0
    least_depth: float = 0.04
    least_thickness: float = 0.02
    panel_depth: float = 1.5
    slab_width: float = 1.0
    judge_by_role: bool = True
    """Leave out mullions, plates and parts of railings, curtain walls and the like."""


@dataclass(frozen=True, slots=True)
class Limits:
    """Deflection limits: span divided by this, or m; 0: not checked."""

    span_ratio: float = 250.0
    cantilever_ratio: float = 125.0
    absolute: float = 0.0
    on: Selector = field(default_factory=Selector)
    kind: str = ""
    """Which serviceability combinations: "characteristic", "frequent", …; "": all of them."""
    camber: float = 0.0
    """Built in upwards at the middle of a span, or at the tip of a cantilever, m."""
    variable_only: bool = False
    """Whether only what variable actions add is compared (brittle finishes)."""


@dataclass(frozen=True, slots=True)
class Redistribution:
    """Moment redistribution per combination: fraction of the support moment (0.15 = 15 %).

    ``largest``: as much as the rule set allows.
    """

    fraction: float = 0.0
    largest: bool = False
    per_joint: Mapping[int, float] = field(default_factory=dict)
    on: Selector = field(default_factory=Selector)
    neutral_axis_ratio: float | None = None
    """Concrete: depth of the neutral axis over effective depth after redistribution."""
    ductility: str = ""
    """Class of reinforcement: A, B or C."""
    net_tensile_strain: float | None = None
    section_class: int | None = None
    """Steel: class of the section, 1 to 4."""


@dataclass(frozen=True, slots=True)
class RuleSettings:
    """Which rule set, and the figures of it that the project replaces."""

    name: str = "en-1990"
    replace: Mapping[str, object] = field(default_factory=dict)
    arrangements: str = ""
    """"" as the rule set says; "none", "every" (exact envelope) or a set that it lists."""
    permanent_by_span: bool = False
    use_model_combinations: bool = True
    use_rule_combinations: bool | None = None
    """None: only where the model states no combinations."""
    face_moments: bool = False
    redistribution: tuple[Redistribution, ...] = ()
    live_load_reduction: bool = False


@dataclass(frozen=True, slots=True)
class RestraintSetting:
    """Where the flanges of members are held sideways: m from the element's start, or all along."""

    on: Selector
    flange: Literal["top", "bottom", "both"] = "top"
    continuous: bool = False
    stations: tuple[float, ...] = ()


@dataclass(frozen=True, slots=True)
class CheckSettings:
    """By what members are checked: a code by category of material, "none" to leave it out.

    ``codes`` by "steel", "concrete", "timber"; those not named follow the rule set.  ``replace``
    puts the project's own values in place of figures ("gamma_M0").  ``durations``: load-duration
    class by case.
    """

    codes: Mapping[str, str] = field(default_factory=dict)
    replace: Mapping[str, float] = field(default_factory=dict)
    restraints: tuple[RestraintSetting, ...] = ()
    durations: Mapping[str, str] = field(default_factory=dict)


@dataclass(frozen=True, slots=True)
class Analysis:
    """How the lines are idealised and solved."""

    route: Route = "auto"
    shear_flexible: bool = False
    self_weight: bool | None = None
    """None: on for the physical way; as the load groups state for the analytical."""
    columns_as_legs: bool = False
    leg_far_end: Fixity = "fixed"
    spans: Literal["axis", "face"] = "axis"
    continuous_over_columns: bool = True
    end_fixity: Fixity = "pinned"
    include: tuple[str, ...] = (
        "IfcBeam",
        "IfcMember",
        "IfcBeamStandardCase",
        "IfcMemberStandardCase",
    )


@dataclass(frozen=True, slots=True)
class Display:
    """Units in which a person reads: names known to ``units``."""

    system: Literal["metric", "us"] = "metric"
    units: Mapping[str, str] = field(default_factory=dict)
    """Overrides by quantity: {"force": "kN", "length": "m", …}."""


@dataclass(frozen=True, slots=True)
class Settings:
    """Everything a job file can say."""

    title: str = ""
    display: Display = field(default_factory=Display)
    rules: RuleSettings = field(default_factory=RuleSettings)
    analysis: Analysis = field(default_factory=Analysis)
    tolerances: Tolerances = field(default_factory=Tolerances)
    beams: BeamRules = field(default_factory=BeamRules)
    cases: tuple[CaseSetting, ...] = ()
    combinations: tuple[CombinationSetting, ...] = ()
    actions: tuple[ActionSetting, ...] = ()
    area_actions: tuple[AreaActionSetting, ...] = ()
    movements: tuple[MovementSetting, ...] = ()
    supports: tuple[SupportSetting, ...] = ()
    releases: tuple[ReleaseSetting, ...] = ()
    materials: tuple[MaterialSetting, ...] = ()
    sections: tuple[SectionSetting, ...] = ()
    section_table: tuple[TableSection, ...] = ()
    section_table_files: tuple[str, ...] = ()
    """The files that the job file names for the section table."""
    section_table_findings: tuple[Finding, ...] = ()
    """What was noticed while the section table was read."""
    members: tuple[MemberSetting, ...] = ()
    limits: tuple[Limits, ...] = ()
    checks: CheckSettings = field(default_factory=CheckSettings)
    text: str = ""
    """The job file as it was read, for fingerprints."""
