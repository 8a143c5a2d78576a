"""Load cases with their natures, and the combinations that the model or the job file states."""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from typing import cast, get_args

from analysis_core.building import Building, LoadCase
from analysis_core.idealise.log import Log
from analysis_core.model import Case, Combination, Nature
from analysis_core.settings import CaseSetting, Settings

# Words by which a case of unstated nature is known.  Common practice in English; the job file
# settles everything else.
_WORDS: tuple[tuple[Nature, str], ...] = (
    ("permanent", r"self[ -_]?weight|dead|permanent|finish(es)?|superimposed"),
    ("imposed", r"imposed|live|variable|occupancy|use"),
    ("snow", r"snow"),
    ("wind", r"wind"),
    ("temperature", r"temperature|thermal"),
    ("settlement", r"settlement"),
)


def cases_of(
    building: Building, settings: Settings, weight: Iterable[LoadCase], log: Log
) -> tuple[Case, ...]:
    """Return all cases in order: the model's, self weight, the job file's."""
    result: dict[str, Case] = {}
    chosen = {setting.name.casefold(): setting for setting in settings.cases}
    for case in [*building.cases, *weight]:
        setting = chosen.get(case.name.casefold())
        result.setdefault(case.name, _settled(case, setting, log))
    known = {name.casefold() for name in result}
    for setting in settings.cases:
        if setting.name.casefold() not in known:
            nature = _nature(setting.nature, setting.name, log)
            result[setting.name] = Case(setting.name, nature, setting.category, "", "job file")
    return tuple(result.values())


def with_used(
    cases: tuple[Case, ...], used: Iterable[str], settings: Settings, log: Log
) -> tuple[Case, ...]:
    """Return the cases, and one more for every name that an action uses and nothing states."""
    known = {case.name for case in cases}
    extra = []
    for name in dict.fromkeys(used):
        if name in known:
            continue
        known.add(name)
        extra.append(_settled(LoadCase(name, "other"), None, log))
    return cases + tuple(extra)


def canonical(name: str, cases: Iterable[Case]) -> str:
    """Return the name of a case as the model writes it; upper and lower case do not matter."""
    wanted = name.casefold()
    return next((case.name for case in cases if case.name.casefold() == wanted), name)


def combinations_of(
    building: Building, settings: Settings, cases: Iterable[Case], log: Log
) -> tuple[Combination, ...]:
    """Return the combinations of the model (unless the job file drops them) and the job file."""
    cases = tuple(cases)
    result = []
    if settings.rules.use_model_combinations:
        for stated in building.combinations:
            factors = _known_factors(stated.name, stated.factors, cases, log)
            if factors:
                result.append(
                    Combination(
                        stated.name,
                        stated.limit_state,
                        factors,
                        source=stated.source or "model",
                    )
                )
    for own in settings.combinations:
        factors = _known_factors(own.name, own.factors, cases, log)
        if factors:
            result.append(
                Combination(own.name, own.limit_state, factors, own.kind, source="job file")
            )
    return tuple(result)


def _settled(case: LoadCase, setting: CaseSetting | None, log: Log) -> Case:
    if setting is not None:
        nature = _nature(setting.nature, setting.name, log)
        category = setting.category or case.category
        return Case(case.name, nature, category, case.global_id, "job file")
    if case.nature != "other":
        source = case.source or "model"
        return Case(case.name, case.nature, case.category, case.global_id, source)
    guessed = _by_name(case.name)
    elements = (case.global_id,) if case.global_id else ()
    if guessed is not None:
        log.add(
            "note",
            "nature-from-name",
            f"Load case '{case.name}' states no nature; by its name it is taken as {guessed}. "
            f"Settle it in the job file (cases: name, nature).",
            elements,
        )
        return Case(case.name, guessed, case.category, case.global_id, "by its name")
    log.add(
        "warning",
        "unknown-nature",
        f"Load case '{case.name}' states no nature that is known here; it is taken as 'other'. "
        f"Settle it in the job file (cases: name, nature: {', '.join(get_args(Nature))}).",
        elements,
    )
    return Case(case.name, "other", case.category, case.global_id, "default")


def _by_name(name: str) -> Nature | None:
    for nature, words in _WORDS:
        if re.search(rf"(?<![^\W_])(?:{words})(?![^\W_])", name, re.IGNORECASE):
            return nature
    return None


def _nature(text: str, name: str, log: Log) -> Nature:
    if text in get_args(Nature):
        return cast(Nature, text)
    log.add(
        "warning",
        "unknown-nature",
        f"Load case '{name}' has nature '{text}' in the job file; it is taken as 'other'. "
        f"Permitted: {', '.join(get_args(Nature))}.",
    )
    return "other"


def _known_factors(
    name: str, factors: Mapping[str, float], cases: tuple[Case, ...], log: Log
) -> dict[str, float]:
    known = {case.name for case in cases}
    result: dict[str, float] = {}
    missing = []
    for case_name, factor in factors.items():
        own = canonical(case_name, cases)
        if own in known:
            result[own] = result.get(own, 0.0) + factor
        else:
            missing.append(case_name)
    if missing:
        log.add(
            "warning",
            "unknown-case",
            f"Combination '{name}' has factors for {', '.join(repr(m) for m in missing)}, which "
            f"the model does not hold; those factors have no effect.",
        )
    return result
