"""Members through the checks: which code, which fields of effects, which restraints."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

from analysis_core.checks import concrete_aci, concrete_en, steel_aisc, steel_en, timber_en
from analysis_core.checks.design import EffectField, Governing, MemberDesign, Restraints
from analysis_core.checks.working import Check, Figure, Figures, not_checked
from analysis_core.effects.states import state_stations
from analysis_core.errors import JobError
from analysis_core.line_details import detail_of
from analysis_core.line_selection import chooses
from analysis_core.model import Line, LineModel, Member
from analysis_core.results import LineResult, MemberEnvelope, Outcome
from analysis_core.settings import RestraintSetting, Settings

_COUNT = 41

FIGURES: Mapping[str, Mapping[str, Figure]] = {
    "en-1993-1-1": steel_en.FIGURES,
    "aisc-360": steel_aisc.FIGURES,
    "en-1992-1-1": concrete_en.FIGURES,
    "aci-318-19": concrete_aci.FIGURES,
    "en-1995-1-1": timber_en.FIGURES,
}
_BY_RULES = {
    "asce": {"steel": "aisc-360", "concrete": "aci-318-19", "timber": "none"},
    "": {"steel": "en-1993-1-1", "concrete": "en-1992-1-1", "timber": "en-1995-1-1"},
}
# Load duration by the nature of a case, EN 1995-1-1 table 2.2 (from memory; nationally determined).
_DURATION = {
    "permanent": "permanent", "imposed": "medium", "snow": "short", "wind": "short",
    "settlement": "permanent", "temperature": "medium", "other": "medium",
}  # fmt: skip


@dataclass(frozen=True, slots=True)
class MemberChecks:
    """The checks of one member: by which code, with which restraints, and what they found."""

    member: int
    code: str
    restraints: str
    checks: tuple[Check, ...]

    @property
    def worst(self) -> Check | None:
        """The check with the largest use; None where nothing could be checked."""
        made = [check for check in self.checks if check.status != "not checked"]
        return max(made, key=lambda check: check.use, default=None)


def check_lines(outcome: Outcome, settings: Settings) -> dict[str, tuple[MemberChecks, ...]]:
    """Return the checks of every balanced line by its mark.  Raises JobError."""
    _known_figures(settings)
    return {
        result.line.mark: tuple(check_line(result, outcome.model, settings))
        for result in outcome.lines
        if result.status == "balanced"
    }


def check_line(result: LineResult, model: LineModel, settings: Settings) -> list[MemberChecks]:
    """Return the checks of the members of one line."""
    envelope = result.envelopes.get("strength")
    if envelope is None or result.parts is None or result.detail is None:
        return []
    states = detail_of(result).states
    at = state_stations(result.parts, states, _COUNT)
    durations = _durations(model, settings)
    out = []
    for member, found in zip(result.line.members, envelope.members, strict=True):
        fields = tuple(
            EffectField(name, at.x[member.id], at.moment[r, member.id], at.shear[r, member.id])
            for r, name in enumerate(at.names)
        )
        held = restraints(result.line, member, model, settings)
        out.append(_checked(member, found, fields, held, result.line, settings, durations))
    return out


def _checked(
    member: Member,
    envelope: MemberEnvelope,
    fields: tuple[EffectField, ...],
    held: Restraints,
    line: Line,
    settings: Settings,
    durations: Mapping[str, str],
) -> MemberChecks:
    section, material = member.section, member.material
    if section is None or material is None:
        reason = "The member has no section or no material; its rigidity was stated."
        return MemberChecks(member.id, "", held.reason, (not_checked("resistance", reason),))
    code = _code(material.category, settings)
    if code not in FIGURES:
        what = f"'{material.category}'" if material.category else "a kind that is not known"
        reason = f"Material '{material.name}' is of {what}; no check covers it here."
        return MemberChecks(member.id, code, held.reason, (not_checked("resistance", reason),))
    if member.end_section is not None or not member.prismatic:
        reason = "The section varies along the member; that is outside the checks."
        return MemberChecks(member.id, code, held.reason, (not_checked("resistance", reason),))
    shear = max(envelope.shear_max, envelope.shear_min, key=lambda e: abs(e.value))
    design = MemberDesign(
        member.id, section, material, member.length, fields,
        Governing(envelope.sagging, envelope.hogging, shear), held, _cantilever(line, member),
    )  # fmt: skip
    known = FIGURES[code]
    replaced = {k: v for k, v in settings.checks.replace.items() if k in known}
    figures = Figures(known, replaced)
    allowable = settings.rules.name.endswith("-asd")
    glulam = material.name.lower().startswith(("gl", "glulam")) or "glu" in material.source.lower()
    run: dict[str, Callable[[], Sequence[Check]]] = {
        "en-1993-1-1": lambda: steel_en.check_steel(design, figures),
        "aisc-360": lambda: steel_aisc.check_steel(design, figures, allowable=allowable),
        "en-1992-1-1": lambda: concrete_en.check_concrete(design, figures),
        "aci-318-19": lambda: concrete_aci.check_concrete(design, figures),
        "en-1995-1-1": lambda: timber_en.check_timber(design, figures, durations, glulam),
    }
    return MemberChecks(member.id, code, held.reason, tuple(run[code]()))


def restraints(line: Line, member: Member, model: LineModel, settings: Settings) -> Restraints:
    """Return where the flanges of a member are held sideways, with the reason.

    Both flanges at the ends (taken as forked bearings, common practice), the top flange where
    another line bears on this one or a slab lies on it, and what the job file states.
    """
    length = member.length
    ends = {0.0, length}
    reasons = ["both flanges at the ends of the member"]
    top = set(ends)
    for transfer in model.transfers:
        if transfer.to_line == line.mark and transfer.member == member.id:
            top.add(transfer.position)
            reasons.append(
                f"top flange at {transfer.position:.2f} m, where {transfer.from_line} bears"
            )
    bottom = set(ends)
    slab = model.held_by.get(member.element, "")
    top_all, bottom_all = bool(slab), False
    if slab:
        reasons.append(f"top flange all along by slab {slab}")
    for setting in settings.checks.restraints:
        if not chooses(setting.on, line, member, model):
            continue
        places = _places(setting, member)
        if setting.flange in ("top", "both"):
            top |= places
            top_all |= setting.continuous
        if setting.flange in ("bottom", "both"):
            bottom |= places
            bottom_all |= setting.continuous
        reasons.append(f"{setting.flange} flange as stated in the job file")
    return Restraints(
        tuple(sorted(top)), tuple(sorted(bottom)), top_all, bottom_all, "; ".join(reasons)
    )


def _goes_on(line: Line, member: Member, joint: int) -> bool:
    return any(m is not member and joint in (m.start, m.end) for m in line.members)


def _places(setting: RestraintSetting, member: Member) -> set[float]:
    out = set()
    for station in setting.stations:
        s = station - member.element_offset
        s = -s if member.reversed_ else s
        if 0.0 <= s <= member.length:
            out.add(s)
    return out


def _cantilever(line: Line, member: Member) -> bool:
    ends = (member.start, member.end)
    return any(
        line.joints[joint].support is None and not _goes_on(line, member, joint) for joint in ends
    )


def _code(category: str, settings: Settings) -> str:
    kind = {"glulam": "timber", "lvl": "timber", "hardwood": "timber"}.get(category, category)
    stated = settings.checks.codes.get(kind)
    if stated:
        return stated
    family = "asce" if settings.rules.name.startswith("asce") else ""
    return _BY_RULES[family].get(kind, "none")


def _durations(model: LineModel, settings: Settings) -> dict[str, str]:
    """The shortest load duration among the cases of each combination."""
    of_case = {
        case.name: settings.checks.durations.get(case.name, _DURATION[case.nature])
        for case in model.cases
    }
    rank = timber_en.DURATIONS.index
    return {
        c.name: max(
            (of_case[case] for case, factor in c.factors.items() if factor and case in of_case),
            key=rank,
            default="permanent",
        )
        for c in model.combinations
    }


def _known_figures(settings: Settings) -> None:
    known = {name for figures in FIGURES.values() for name in figures}
    for name in settings.checks.replace:
        if name not in known:
            raise JobError(
                f"'checks.replace' has the figure '{name}'; known are {', '.join(sorted(known))}."
            )
