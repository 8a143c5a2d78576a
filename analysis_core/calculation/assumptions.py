"""What was settled for a whole model, and by whom: for the calculation sheet."""

from __future__ import annotations

from collections.abc import Iterable

from analysis_core.calculation.check_figures import check_figures
from analysis_core.model import LineModel, Material, Section
from analysis_core.results import Outcome
from analysis_core.settings import Analysis, RuleSettings, Settings, Tolerances
from analysis_core.sheet.cover import assumptions
from analysis_core.sheet.html import Markup
from analysis_core.units import DisplayUnits

_JOB, _DEFAULT = "job file", "default"


def assumptions_part(
    outcome: Outcome,
    settings: Settings,
    units: DisplayUnits,
    note: str = "",
    codes: Iterable[str] = (),
) -> Markup:
    """Return the section of assumptions of the sheet, with a note at its end.

    ``codes``: those that members were checked by.
    """
    members = [m for r in outcome.lines for m in r.line.members]
    materials = dict.fromkeys(m.material for m in members if m.material is not None)
    sections = dict.fromkeys(m.section for m in members if m.section is not None)
    return assumptions(
        decisions(outcome.model, settings),
        [_material(material, units) for material in materials],
        [_section(section, units) for section in sections],
        units,
        note,
        check_figures(codes, settings.checks.replace, units),
    )


def decisions(model: LineModel, settings: Settings) -> list[tuple[str, str, str]]:
    """Return subject, what was taken, and who settled it."""
    out = [*_analysis(settings.analysis), *_rules(settings.rules), *_tolerances(settings)]
    for kind, code in sorted(settings.checks.codes.items()):
        out.append((f"Checks of {kind}", code, _JOB))
    slabs = len(model.held_by)
    if slabs:
        out.append((
            "Slabs", f"hold the tops of {slabs} members sideways all along",
            "model: they cover the whole member",
        ))  # fmt: skip
    out.append(("Bearings and corners", "hold members sideways like forks", "common practice"))
    return out


def _analysis(given: Analysis) -> list[tuple[str, str, str]]:
    plain = Analysis()

    def by(name: str) -> str:
        return _JOB if getattr(given, name) != getattr(plain, name) else _DEFAULT

    weight = {None: "as the model states; of the material where it states nothing",
              True: "counted", False: "left out"}[given.self_weight]  # fmt: skip
    columns = "legs of the frame" if given.columns_as_legs else "bearings"
    if given.columns_as_legs:
        columns += f", their far ends {given.leg_far_end}"
    over = "continuous" if given.continuous_over_columns else "jointed"
    spans = "axes" if given.spans == "axis" else "faces"
    return [
        ("Self weight", weight, by("self_weight")),
        ("Members", "rigid axially; "
         + ("flexible" if given.shear_flexible else "rigid") + " in shear", by("shear_flexible")),
        ("Columns below beams", columns, by("columns_as_legs")),
        ("Ends of beams on bearings", f"{given.end_fixity}, where the model is silent",
         by("end_fixity")),
        ("Beams that meet over a bearing", over, by("continuous_over_columns")),
        ("Spans", f"between the {spans} of the bearings", by("spans")),
    ]  # fmt: skip


def _rules(given: RuleSettings) -> list[tuple[str, str, str]]:
    plain = RuleSettings()
    arrangements = {
        "": "as the rule set says", "every": "every arrangement of variable actions, exactly",
        "none": "all spans loaded",
    }.get(given.arrangements, given.arrangements)  # fmt: skip
    out = [
        ("Arrangements of actions", arrangements,
         _JOB if given.arrangements != plain.arrangements else _DEFAULT),
        ("Permanent actions", "factored by span" if given.permanent_by_span
         else "one factor over all spans", _JOB if given.permanent_by_span else _DEFAULT),
        ("Moments over bearings", "at the faces as well" if given.face_moments
         else "at the axes", _JOB if given.face_moments else _DEFAULT),
        ("Redistribution", "asked for" if given.redistribution else "none: elastic moments",
         _JOB if given.redistribution else _DEFAULT),
        ("Reduction of imposed load by area", "applied" if given.live_load_reduction else "none",
         _JOB if given.live_load_reduction else _DEFAULT),
    ]  # fmt: skip
    out += [(f"Figure {name}", str(value), _JOB) for name, value in sorted(given.replace.items())]
    return out


def _tolerances(settings: Settings) -> list[tuple[str, str, str]]:
    t, by = settings.tolerances, _DEFAULT
    if t != Tolerances():
        by = _JOB
    text = (
        f"ends meet within {1e3 * t.join:g} mm, successive axes within {1e3 * t.offset:g} mm; a "
        f"bearing may lie {1e3 * t.bearing:g} mm from an end"
    )
    return [("Tolerances", text, by)]


def _material(material: Material, units: DisplayUnits) -> tuple[str, ...]:
    strengths = ", ".join(
        f"{name} {units.number(value, 'stress')}" for name, value in material.strength
    )
    density = f"{material.density:.0f}" if material.density else "–"
    return (
        material.name or "–", material.category or "not known",
        units.number(material.elastic_modulus, "stress"), density, strengths or "none stated",
        material.source or "model",
    )  # fmt: skip


def _section(section: Section, units: DisplayUnits) -> tuple[str, ...]:
    across = units.number(section.inertia_lateral, "inertia") if section.inertia_lateral else "–"
    sizes = [units.number(v, "section length") if v else "–"
             for v in (section.depth, section.width)]  # fmt: skip
    return (
        section.name or "–", section.shape or "any outline", *sizes,
        units.number(section.area, "area"), units.number(section.inertia, "inertia"), across,
        section.source or "model",
    )  # fmt: skip
