"""Reads a job file: YAML, read safely, checked against its schema, into ``Settings``.

The complete reference of the job file stands in README.md; ``job_schema.json`` is the schema
for editors.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import replace
from pathlib import Path
from typing import Any

from analysis_core.errors import JobError
from analysis_core.job.check import Position, check
from analysis_core.job.section_tables import SectionTable, read_files, section_table
from analysis_core.job.yaml_text import LARGEST, read_yaml, schema, text_of
from analysis_core.settings import (
    ActionSetting,
    Analysis,
    AreaActionSetting,
    BeamRules,
    CaseSetting,
    CheckSettings,
    CombinationSetting,
    Display,
    Limits,
    MaterialSetting,
    MemberSetting,
    MovementSetting,
    Redistribution,
    ReleaseSetting,
    RestraintSetting,
    RuleSettings,
    SectionSetting,
    Selector,
    Settings,
    SupportSetting,
    Tolerances,
)
from analysis_core.units import display_units

_CONDITIONS = {
    # (vertical, horizontal, rotation) of the supports that have a name in the trade.
    "pinned": (math.inf, math.inf, 0.0),
    "fixed": (math.inf, math.inf, math.inf),
    "guided": (0.0, 0.0, math.inf),
    "free": (0.0, 0.0, 0.0),
}
_SHAPES = ("uniform", "linear", "polygonal", "point", "moment", "temperature")


def load(path: str | Path) -> Settings:
    """Return the settings of the job file at ``path``.

    Raises JobError in one sentence that names the place, what was received and what is permitted.
    """
    path = Path(path)
    text = text_of(path, "Job file")
    try:
        return parse(text, folder=path.parent)
    except JobError as error:
        raise JobError(f"Job file '{path}': {error}") from None


def parse(text: str, *, folder: Path | None = None) -> Settings:
    """Return the settings that the text of a job file states.  Raises JobError.

    ``folder``: where the job file stands, for a section table in a file beside it; without, such
    a table is named in the settings but not read.
    """
    if len(text) > LARGEST:
        raise JobError(f"It is {len(text)} characters long; a job file has at most {LARGEST}.")
    data = read_yaml(text)
    checked = check({} if data is None else data, schema())
    return _with_table(
        _settings(checked, text), section_table(checked.get("section_table", ()), folder)
    )


def with_section_tables(settings: Settings, paths: Sequence[Path]) -> Settings:
    """Return settings with the section tables of files in the place of their own.

    A file is a table as in the job file (CSV, YAML), or a list of profiles without a head; see
    ``profile_lists``.  Raises JobError.
    """
    return _with_table(settings, read_files(paths))


def _with_table(settings: Settings, table: SectionTable) -> Settings:
    return replace(
        settings,
        section_table=table.sections,
        section_table_files=table.files,
        section_table_findings=table.findings,
    )


def _settings(data: Mapping[str, Any], text: str) -> Settings:
    _named_once(data.get("cases", ()), "cases")
    _named_once(data.get("combinations", ()), "combinations")

    def each(key: str, build: Any) -> tuple[Any, ...]:
        return tuple(build(item, f"{key}[{i}]") for i, item in enumerate(data.get(key, ())))

    return Settings(
        title=data.get("title", ""),
        display=_display(data.get("display", {})),
        rules=_rules(data.get("rules", {})),
        analysis=Analysis(**_tupled(data.get("analysis", {}))),
        tolerances=Tolerances(**_sized(data.get("tolerances", {}), "tolerances")),
        beams=BeamRules(**data.get("beams", {})),
        cases=each("cases", _case),
        combinations=each("combinations", _combination),
        actions=each("actions", _action),
        area_actions=each("area_actions", _area_action),
        movements=each("movements", _movement),
        supports=each("supports", _support),
        releases=each("releases", _release),
        materials=each("materials", _material),
        sections=each("sections", _section),
        members=each("members", _member),
        limits=each("limits", _limits),
        checks=_checks(data.get("checks", {})),
        text=text,
    )


def _display(data: Mapping[str, Any]) -> Display:
    display = Display(**data)
    try:
        display_units(display.system, display.units)
    except ValueError as error:
        raise JobError(f"'display.units': {error}.") from None
    return display


def _rules(data: Mapping[str, Any]) -> RuleSettings:
    known = dict(data)
    which = known.pop("combinations", None)
    redistribution = known.pop("redistribution", ())
    if "set" in known:
        known["name"] = known.pop("set")
    return RuleSettings(
        **known,
        use_model_combinations=which != "rules",
        use_rule_combinations={None: None, "model": False, "rules": True, "both": True}[which],
        redistribution=tuple(
            _redistribution(item, f"rules.redistribution[{i}]")
            for i, item in enumerate(redistribution)
        ),
    )


def _redistribution(data: Mapping[str, Any], where: str) -> Redistribution:
    joints: dict[int, float] = {}
    for joint, fraction in data.get("joints", {}).items():
        if not joint.isdigit():
            raise JobError(f"'{where}.joints' has the key '{joint}'; it must be a joint number.")
        joints[int(joint)] = fraction
    for fraction in (data.get("fraction", 0.0), *joints.values()):
        if not 0.0 <= fraction <= 1.0:
            raise JobError(f"'{where}' redistributes {fraction:.0%}; it must be 0 % to 100 %.")
    return Redistribution(
        fraction=data.get("fraction", 0.0),
        largest=data.get("largest", False),
        per_joint=joints,
        on=_selector(data.get("on", {})),
        neutral_axis_ratio=data.get("neutral_axis_ratio"),
        ductility=data.get("ductility", ""),
        net_tensile_strain=data.get("net_tensile_strain"),
        section_class=_section_class(data.get("section_class"), where),
    )


def _section_class(value: float | None, where: str) -> int | None:
    if value is not None and value not in (1, 2, 3, 4):
        raise JobError(f"'{where}.section_class' is {value:g}; it must be 1, 2, 3 or 4.")
    return None if value is None else int(value)


def _selector(data: Mapping[str, Any]) -> Selector:
    ids = data.get("id", ())
    return Selector(
        global_ids=(ids,) if isinstance(ids, str) else tuple(ids),
        name=data.get("name", ""),
        ifc_class=data.get("class", ""),
        type_name=data.get("type", ""),
        material=data.get("material", ""),
        storey=data.get("storey", ""),
        line=data.get("line", ""),
    )


def _case(data: Mapping[str, Any], where: str) -> CaseSetting:
    return CaseSetting(
        name=data["name"],
        nature=data.get("nature", "other"),
        category=data.get("category", ""),
        one_by_one=data.get("by_span"),
    )


def _combination(data: Mapping[str, Any], where: str) -> CombinationSetting:
    return CombinationSetting(**data)


def _action(data: Mapping[str, Any], where: str) -> ActionSetting:
    shape = _one_of(data, _SHAPES, where)
    value = data[shape]
    values = tuple(value) if isinstance(value, list) else (value,)
    stations, relative = _positions(data.get("at"), f"{where}.at")
    start, end = data.get("from"), data.get("to")
    if start is not None or end is not None:
        if stations:
            raise JobError(f"'{where}' has both 'at' and 'from'/'to'; state one of them.")
        relative = _same_kind([p for p in (start, end) if p is not None], where)
    _check_places(shape, values, stations, start is not None or end is not None, where)
    if shape in ("point", "moment"):
        values = values * len(stations)
    return ActionSetting(
        case=data["case"],
        on=_selector(data["on"]),
        shape=shape,  # type: ignore[arg-type]  # one of _SHAPES
        values=values,
        stations=stations,
        start=start.value if start is not None else 0.0,
        end=end.value if end is not None else math.inf,
        relative=relative,
        direction=data.get("direction", "down"),
        projected=data.get("projected", False),
        source=where,
    )


def _check_places(
    shape: str, values: tuple[float, ...], stations: tuple[float, ...], part: bool, where: str
) -> None:
    if shape in ("point", "moment") and not stations:
        raise JobError(f"'{where}' has a {shape} without a place; add 'at: 2.5 m' or 'at: 50 %'.")
    if shape in ("point", "moment") and part:
        raise JobError(f"'{where}' has a {shape} with 'from'/'to'; it needs 'at'.")
    if shape == "polygonal" and len(values) != len(stations):
        raise JobError(
            f"'{where}' has {len(values)} intensities and {len(stations)} positions; "
            f"a polygonal force needs one position each in 'at'."
        )
    if shape == "polygonal" and list(stations) != sorted(stations):
        raise JobError(f"'{where}.at' must go from the start of the member to its end.")
    if shape == "linear" and len(values) != 2:
        raise JobError(f"'{where}.linear' has {len(values)} intensities; it needs two.")
    if shape in ("uniform", "linear", "temperature") and stations:
        raise JobError(f"'{where}' has 'at'; a {shape} action is placed by 'from' and 'to'.")


def _area_action(data: Mapping[str, Any], where: str) -> AreaActionSetting:
    direction = data.get("direction")
    if direction is not None and (len(direction) != 2 or not any(direction)):
        raise JobError(f"'{where}.direction' must be two numbers [x, y], not both 0.")
    return AreaActionSetting(
        case=data["case"],
        on=_selector(data["on"]),
        intensity=data["load"],
        spread=data.get("spread", "auto"),
        span_direction=(direction[0], direction[1]) if direction else None,
        source=where,
    )


def _movement(data: Mapping[str, Any], where: str) -> MovementSetting:
    if "down" not in data and "rotation" not in data:
        raise JobError(f"'{where}' moves nothing; state 'down' or 'rotation'.")
    return MovementSetting(
        case=data["case"],
        at=_selector(data["on"]),
        end=data.get("end", ""),
        down=data.get("down", 0.0),
        rotation=data.get("rotation", 0.0),
        source=where,
    )


def _support(data: Mapping[str, Any], where: str) -> SupportSetting:
    stiffness = {k: data[k] for k in ("vertical", "horizontal", "rotation") if k in data}
    if ("condition" in data) == bool(stiffness):
        raise JobError(f"'{where}' needs either a 'condition' or stiffnesses.")
    if "condition" in data:
        names = ("vertical", "horizontal", "rotation")
        stiffness = dict(zip(names, _CONDITIONS[data["condition"]], strict=True))
    _not_negative(stiffness, where)
    return SupportSetting(
        on=_selector(data["on"]), end=_end(data, where), position=_at(data, where),
        source=where, **stiffness,
    )  # fmt: skip


def _release(data: Mapping[str, Any], where: str) -> ReleaseSetting:
    rotation = data.get("rotation", 0.0)
    _not_negative({"rotation": rotation}, where)
    return ReleaseSetting(
        on=_selector(data["on"]),
        end=_end(data, where) or "both",
        rotation=rotation,
        position=_at(data, where),
        source=where,
    )


def _material(data: Mapping[str, Any], where: str) -> MaterialSetting:
    known = dict(data)
    override = not known.pop("fill_gaps_only", False)
    sizes = ("elastic_modulus", "shear_modulus", "density", "thermal_expansion")
    _sized(known, where, sizes, zero=False)
    _sized(known.get("strength", {}), f"{where}.strength", zero=False)
    return MaterialSetting(**known, override=override)


def _section(data: Mapping[str, Any], where: str) -> SectionSetting:
    known = {k: v for k, v in data.items() if k not in ("on", "taper")}
    _sized(known, where, zero=False)
    taper = []
    for i, pair in enumerate(data.get("taper", ())):
        if len(pair) != 2 or any(isinstance(v, Position) for v in pair):
            raise JobError(f"'{where}.taper[{i}]' must be two numbers: part of the length, depth.")
        if not 0.0 <= pair[0] <= 1.0 or pair[1] <= 0.0:
            raise JobError(f"'{where}.taper[{i}]' must lie from 0 to 1, with a positive depth.")
        taper.append((float(pair[0]), float(pair[1])))
    places = [place for place, _ in taper]
    if taper and (places[0] != 0.0 or places[-1] != 1.0 or places != sorted(places)):
        raise JobError(f"'{where}.taper' must go from 0 to 1 in order.")
    return SectionSetting(on=_selector(data["on"]), taper=tuple(taper), source=where, **known)


def _member(data: Mapping[str, Any], where: str) -> MemberSetting:
    profile, material = (data.get(key, "").strip() for key in ("profile", "material"))
    if not (profile or material):
        raise JobError(f"'{where}' gives the members nothing; state a 'profile' or a 'material'.")
    if "line" in data["on"]:
        raise JobError(
            f"'{where}.on' names a line; lines are only known once members have their sections. "
            f"Name the elements (id, name, type, material, storey)."
        )
    return MemberSetting(_selector(data["on"]), profile, material, where)


def _limits(data: Mapping[str, Any], where: str) -> Limits:
    known = {k: v for k, v in data.items() if k != "on"}
    _sized(known, where, ("span_ratio", "cantilever_ratio", "absolute"))
    return Limits(on=_selector(data.get("on", {})), **known)


def _checks(data: Mapping[str, Any]) -> CheckSettings:
    return CheckSettings(
        codes={key: data[key] for key in ("steel", "concrete", "timber") if key in data},
        replace=data.get("replace", {}),
        restraints=tuple(
            RestraintSetting(
                on=_selector(item["on"]),
                flange=item.get("flange", "top"),
                continuous=item.get("continuous", False),
                stations=tuple(item.get("at", ())),
            )
            for item in data.get("restraints", ())
        ),
        durations=data.get("durations", {}),
    )


def _named_once(items: Iterable[Mapping[str, Any]], key: str) -> None:
    """Two entries of one name would say different things of one case; the first would win."""
    seen: dict[str, int] = {}
    for number, item in enumerate(items):
        name = item["name"].casefold()
        if name in seen:
            raise JobError(
                f"'{key}[{number}]' has the name '{item['name']}', which '{key}[{seen[name]}]' "
                f"has already; join the two."
            )
        seen[name] = number


def _end(data: Mapping[str, Any], where: str) -> Any:
    if "end" in data and "at" in data:
        raise JobError(f"'{where}' has both 'end' and 'at'; state one of them.")
    return data.get("end", "" if "at" in data else "both")


def _at(data: Mapping[str, Any], where: str) -> float | None:
    position = data.get("at")
    if position is None:
        return None
    if position.relative:
        raise JobError(f"'{where}.at' must be a length from the member's start, as in '2.5 m'.")
    value: float = position.value
    return value


def _positions(data: object, where: str) -> tuple[tuple[float, ...], bool]:
    if data is None:
        return (), False
    items: list[Any] = data if isinstance(data, list) else [data]
    relative = _same_kind(items, where)
    return tuple(item.value for item in items), relative


def _same_kind(items: list[Any], where: str) -> bool:
    kinds = {item.relative for item in items}
    if len(kinds) > 1:
        raise JobError(f"'{where}' mixes lengths and percentages; use one of them.")
    return bool(kinds.pop())


def _one_of(data: Mapping[str, Any], keys: tuple[str, ...], where: str) -> str:
    found = [key for key in keys if key in data]
    if len(found) != 1:
        what = " and ".join(found) or "none"
        raise JobError(f"'{where}' needs exactly one of {', '.join(keys)}; it has {what}.")
    return found[0]


def _sized(
    data: Mapping[str, Any], where: str, names: Iterable[str] | None = None, *, zero: bool = True
) -> Mapping[str, Any]:
    """Return the data; raise JobError where a size in it is negative, or 0 without ``zero``.

    ``names``: which of the data are sizes; all where None.
    """
    for name in data if names is None else names:
        value = data.get(name, 1.0)
        if value < 0.0 or (value == 0.0 and not zero):
            wanted = "must not be negative" if zero else "must be greater than 0"
            raise JobError(f"'{where}.{name}' is {value:g} (SI); it {wanted}.")
    return data


def _not_negative(stiffness: Mapping[str, float], where: str) -> None:
    for name, value in stiffness.items():
        if value < 0.0:
            raise JobError(f"'{where}.{name}' is negative; a stiffness is 0 or more.")


def _tupled(data: Mapping[str, Any]) -> dict[str, Any]:
    return {k: tuple(v) if isinstance(v, list) else v for k, v in data.items()}
