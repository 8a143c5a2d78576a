"""Members through the checks: which code, which fields of effects, which restraints."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, replace

from analysis_core.checking.direct_bearing import ByLine, direct_bearing
from analysis_core.checking.inputs import (
    designs,
    elastic_effects,
    line_fields,
    redistributed_effects,
    timber_fields,
    timber_sags,
)
from analysis_core.checks import (
    concrete_aci,
    concrete_en,
    steel_aisc,
    steel_en,
    steel_redistribution,
    timber_en,
)
from analysis_core.checks.design import MemberDesign
from analysis_core.checks.working import Check, Figure, Figures, Working, not_checked
from analysis_core.errors import JobError
from analysis_core.model import LineModel, Member
from analysis_core.results import LineResult, Outcome
from analysis_core.settings import Settings
from analysis_core.solving.line_details import detail_of

FIGURES: Mapping[str, Mapping[str, Figure]] = {
    "en-1993-1-1": steel_en.FIGURES,
    "aisc-360": steel_aisc.FIGURES,
    "en-1992-1-1": concrete_en.FIGURES,
    "aci-318-19": concrete_aci.FIGURES,
    "en-1995-1-1": timber_en.FIGURES,
}
TITLES: Mapping[str, str] = {
    "en-1993-1-1": "EN 1993-1-1:2005, steel",
    "aisc-360": "ANSI/AISC 360-16 and 360-22, steel",
    "en-1992-1-1": "EN 1992-1-1:2004, concrete",
    "aci-318-19": "ACI 318-19, concrete",
    "en-1995-1-1": "EN 1995-1-1:2004 with A1 and A2, timber",
}
DEFLECTION_LIMIT = "deflection limit"
_TIMBER = "en-1995-1-1"
_STEEL = ("en-1993-1-1", "aisc-360")
_ELASTIC = "All checks of the line use the elastic moments."
_DEFLECTION_NOT_COVERED = (
    "Elastic, from the rigidities as modelled; cracking and creep are not covered here."
)
_BY_RULES = {
    "asce": {"steel": "aisc-360", "concrete": "aci-318-19", "timber": "none"},
    "": {"steel": "en-1993-1-1", "concrete": "en-1992-1-1", "timber": "en-1995-1-1"},
}


@dataclass(frozen=True, slots=True)
class MemberChecks:
    """The checks of one member: by which code, with which restraints, and what they found."""

    member: int
    code: str
    restraints: str
    checks: tuple[Check, ...]

    @property
    def worst(self) -> Check | None:
        """The check with the largest use; None where nothing could be checked.

        Redistribution counts where it fails: reinforcement keeps it just within its limit else.
        """
        made = [
            check for check in self.checks
            if check.status == "not satisfied"
            or (check.status == "satisfied" and check.name != "redistribution")
        ]  # fmt: skip
        return max(made, key=lambda check: check.use, default=None)


def check_lines(outcome: Outcome, settings: Settings) -> dict[str, tuple[MemberChecks, ...]]:
    """Return the checks of every balanced line by its mark.  Raises JobError."""
    _known_figures(settings)
    bearing = direct_bearing(outcome.model)
    return {
        result.line.mark: tuple(check_line(result, outcome.model, settings, bearing))
        for result in outcome.lines
        if result.status == "balanced"
    }


def check_line(
    result: LineResult, model: LineModel, settings: Settings, bearing: ByLine | None = None
) -> list[MemberChecks]:
    """Return the checks of the members of one line.

    ``bearing``: ``direct_bearing`` of the model, where it is at hand already.
    """
    if "strength" not in result.envelopes or result.parts is None or result.detail is None:
        return []
    on_it = (direct_bearing(model) if bearing is None else bearing).get(result.line.mark, ())
    codes = [_code(member, result, settings) for member in result.line.members]
    plain = line_fields(result, elastic_effects(result))
    factored = _factored(result)
    moved: list[MemberDesign | None] | None = None
    why_elastic, shifted = "", redistributed_effects(result)
    if shifted is not None:
        moved = designs(result, line_fields(result, shifted), model, settings, on_it)
        why_elastic = _why_elastic(result.line.members, moved, codes, settings, factored)
    timber = timber_fields(result, model, settings) if _TIMBER in codes else plain
    sags = timber_sags(result, _creep(settings)) if _TIMBER in codes else None
    prepared = designs(result, plain, model, settings, on_it)
    of_timber = prepared
    if timber is not plain:
        of_timber = designs(result, timber, model, settings, on_it)
    out = []
    for member, code in zip(result.line.members, codes, strict=True):
        design = (of_timber if code == _TIMBER else prepared)[member.id]
        if design is not None and code == _TIMBER:
            design = replace(design, sags=None if sags is None else sags.get(member.id, ()))
        after = moved[member.id] if moved is not None else None
        checks = _checks(
            member, design, after, why_elastic, code, settings, timber.durations, factored
        )
        held = design.restraints.reason if design is not None else ""
        checks = (*checks, *_deflections(result, member))
        out.append(MemberChecks(member.id, code if code in FIGURES else "", held, checks))
    return out


def _checks(
    member: Member, design: MemberDesign | None, moved: MemberDesign | None, why_elastic: str,
    code: str, settings: Settings, durations: Mapping[str, str], factored: bool,
) -> tuple[Check, ...]:  # fmt: skip
    """``moved``: the same with redistributed moments, which hold unless ``why_elastic``."""
    reason = _outside(member, code, factored)
    if reason or design is None:
        return (not_checked("resistance", reason),)
    figures = _figures(code, settings)
    shift: Check | None = None
    if moved is not None and why_elastic:
        shift = not_checked("redistribution", f"{why_elastic} {_ELASTIC}")
    elif moved is not None:
        design = moved
        if code in _STEEL:
            shift = steel_redistribution.check_redistribution(moved, code)
    kind = design.material.category
    run: dict[str, Callable[[], Sequence[Check]]] = {
        "en-1993-1-1": lambda: steel_en.check_steel(design, figures),
        "aisc-360": lambda: steel_aisc.check_steel(design, figures, allowable=not factored),
        "en-1992-1-1": lambda: concrete_en.check_concrete(design, figures),
        "aci-318-19": lambda: concrete_aci.check_concrete(design, figures),
        "en-1995-1-1": lambda: timber_en.check_timber(design, figures, durations, kind),
    }
    return (*run[code](), *(() if shift is None else (shift,)))


def _why_elastic(
    members: Sequence[Member],
    moved: Sequence[MemberDesign | None],
    codes: Sequence[str],
    settings: Settings,
    factored: bool,
) -> str:
    """Why a line must keep its elastic moments; "" where all of its members may redistribute.

    A support moment is one for both members beside it, so that one member decides for all.
    """
    for member, design, code in zip(members, moved, codes, strict=True):
        reason = ""
        if code == _TIMBER:
            reason = "Timber does not redistribute moments."
        elif code in _STEEL and (design is None or _outside(member, code, factored)):
            reason = "It cannot be checked, so that its class is not known."
        elif code in _STEEL and design is not None:
            figures = _figures(code, settings)
            reason = steel_redistribution.why_elastic(design, figures, code)
        if reason:
            name = f"span {member.span}" if member.span else f"member {member.id}"
            return f"Of {name}: {reason}"
    return ""


def _figures(code: str, settings: Settings) -> Figures:
    known = FIGURES[code]
    return Figures(known, {k: v for k, v in settings.checks.replace.items() if k in known})


def _outside(member: Member, code: str, factored: bool) -> str:
    """Why a member is not checked at all; "" where it is."""
    section, material = member.section, member.material
    if section is None or material is None:
        return "The member has no section or no material; its rigidity was stated."
    if material.category == "stainless" and code not in FIGURES:
        return (
            f"Material '{material.name}' is stainless steel, for which the clauses for carbon "
            f"steel do not hold; EN 1993-1-4 and AISC 370 are not covered."
        )
    if code not in FIGURES:
        what = f"'{material.category}'" if material.category else "a kind that is not known"
        return f"Material '{material.name}' is of {what}; no check covers it under these rules."
    if not factored and code != "aisc-360":
        return (
            f"No strength combination has a factor above 1, so actions are not factored; {code} "
            f"needs factored ones. Choose a rule set for strength design."
        )
    bends = member.flexural_rigidity
    steady = all(
        not any(piece.flexural[1:]) and abs(piece.flexural_at(0.0) - bends) <= 1e-6 * bends
        for piece in member.pieces
    )
    if member.end_section is not None or not steady:
        return "The section varies along the member; that is outside the checks."
    if abs(bends - material.elastic_modulus * section.inertia) > 0.02 * bends:
        return (
            f"The member does not bend about the strong axis of {section.name} (or its rigidity "
            f"was stated); that is outside the checks."
        )
    return ""


def _deflections(result: LineResult, member: Member) -> list[Check]:
    """The limits on deflections, at the member of a span where it is largest."""
    out = []
    for found in detail_of(result).deflections:
        down = found.down.value - found.camber >= -found.up.value
        worst, where = (found.down, found.down_member) if down else (found.up, found.up_member)
        if where != member.id or found.limit is None or found.utilisation is None:
            continue
        value = worst.value - found.camber if down else worst.value
        w = Working()
        w.step("w", "", value, "deflection", "", note="from the supports of the span"
               + (f", less the camber of {1e3 * found.camber:g} mm" if found.camber else "")
               )  # fmt: skip
        out.append(
            w.check(DEFLECTION_LIMIT, found.rule, demand=value, resistance=found.limit,
                    quantity="deflection", x=worst.x, source=worst.source,
                    not_covered=_DEFLECTION_NOT_COVERED)
        )  # fmt: skip
    return out


def _factored(result: LineResult) -> bool:
    """Whether any strength combination has a factor above 1: allowable stress design has none."""
    given = detail_of(result).given
    assert given is not None
    strength = [c for c in given.combinations if c.limit_state == "strength"]
    return any(factor > 1.0 for c in strength for factor in c.factors.values())


def _creep(settings: Settings) -> float:
    class_ = settings.checks.replace.get("service_class", FIGURES[_TIMBER]["service_class"].value)
    return timber_en.KDEF.get(int(class_), 0.0)


def _code(member: Member, result: LineResult, settings: Settings) -> str:
    category = member.material.category if member.material is not None else ""
    kind = category
    if category in ("glulam", "lvl", "hardwood"):
        kind = "timber"
    stated = settings.checks.codes.get(kind)
    if stated:
        return stated
    given = detail_of(result).given
    assert given is not None
    of_rules = f"{settings.rules.name} {given.rule_set.name} {given.rule_set.title}".lower()
    return _BY_RULES["asce" if "asce" in of_rules else ""].get(kind, "none")


def _known_figures(settings: Settings) -> None:
    known = {name for figures in FIGURES.values() for name in figures}
    for name in settings.checks.replace:
        if name not in known:
            raise JobError(
                f"'checks.replace' has the figure '{name}'; known are {', '.join(sorted(known))}."
            )
