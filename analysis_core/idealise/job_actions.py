"""Actions on members that the job file states, chosen by what it says of the members."""

from __future__ import annotations

import itertools
import math
from collections.abc import Callable, Iterable

from analysis_core.building import AxisMember
from analysis_core.idealise.draft import Draft
from analysis_core.idealise.log import Log, named
from analysis_core.idealise.placing import Pair, Placer, between
from analysis_core.idealise.properties import PropertyTable
from analysis_core.idealise.selectors import Chooser
from analysis_core.idealise.temperature import expansion
from analysis_core.idealise.vectors import distance
from analysis_core.settings import ActionSetting, Settings

_SLACK = 1e-3


def put_job_actions(
    members: Iterable[AxisMember],
    placer: Placer,
    settings: Settings,
    chooser: Chooser,
    table: PropertyTable,
    case_name: Callable[[str], str],
    log: Log,
) -> None:
    """Put every action of the job file on the members that it chooses.

    A member that lies in two planes (a column) takes it in the first.
    """
    members = list(members)
    for number, setting in enumerate(settings.actions):
        where = setting.source or f"actions[{number}]"
        for member in members:
            if not chooser.chooses(setting.on, member, where=where):
                continue
            drafts = placer.drafts_of(member.global_id)
            drafts = [d for d in drafts if chooser.fits_line(setting.on, d.mark)]
            if drafts:
                _put(setting, member, drafts[0], placer, table, case_name(setting.case), where, log)
            else:
                log.add(
                    "warning",
                    "action-without-line",
                    f"{where} in the job file acts on member {named(member)}, which is part of "
                    f"no line; it is not analysed there.",
                    (member.global_id,),
                )


def _put(
    setting: ActionSetting,
    member: AxisMember,
    draft: Draft,
    placer: Placer,
    table: PropertyTable,
    case: str,
    where: str,
    log: Log,
) -> None:
    if setting.shape == "temperature":
        _put_temperature(setting, member, draft, placer, table, case, where, log)
        return
    if setting.shape in ("point", "moment"):
        stations = _stations(setting.stations, setting, member, where, log)
        for station, value in zip(stations, setting.values, strict=True):
            if station is None:
                continue
            if setting.shape == "moment":
                placer.couple(draft, member.global_id, case, station, value, where)
            else:
                force = _direction(setting, member, draft, placer)
                scaled = force[0] * value, force[1] * value
                placer.point(draft, member.global_id, case, station, scaled, where)
        return
    _put_distributed(setting, member, draft, placer, case, where, log)


def _put_distributed(
    setting: ActionSetting,
    member: AxisMember,
    draft: Draft,
    placer: Placer,
    case: str,
    where: str,
    log: Log,
) -> None:
    force = _direction(setting, member, draft, placer)
    if setting.projected:
        flat = math.hypot(member.end[0] - member.start[0], member.end[1] - member.start[1])
        share = flat / distance(member.start, member.end)
        force = force[0] * share, force[1] * share

    def scaled(value: float) -> Pair:
        return force[0] * value, force[1] * value

    if setting.shape == "polygonal":
        stations = _stations(setting.stations, setting, member, where, log)
        points = [(s, v) for s, v in zip(stations, setting.values, strict=True) if s is not None]
        for (a, value_a), (b, value_b) in itertools.pairwise(points):
            if b > a:
                pair = scaled(value_a), scaled(value_b)
                placer.spread(draft, member.global_id, case, (a, b), pair, where)
        return
    ends = scaled(setting.values[0]), scaled(setting.values[-1])
    if setting.start == 0.0 and math.isinf(setting.end):
        placer.fill(draft, member.global_id, case, ends, where)
        return
    size = distance(member.start, member.end)
    last_station = size if math.isinf(setting.end) else setting.end
    if setting.relative and not math.isinf(setting.end):
        last_station = setting.end * size
    low = setting.start * size if setting.relative else setting.start
    part = _kept_on(member, low, last_station, where, log)
    if part is None:
        return
    first, last = (between((low, last_station), ends, station) for station in part)
    placer.spread(draft, member.global_id, case, part, (first, last), where)


def _put_temperature(
    setting: ActionSetting,
    member: AxisMember,
    draft: Draft,
    placer: Placer,
    table: PropertyTable,
    case: str,
    where: str,
    log: Log,
) -> None:
    """The difference is bottom minus top, K; it makes the member sag where positive."""
    properties = table.of(member)
    depth = properties.section.depth if properties.section else 0.0
    alpha = expansion(properties.material, member, log)
    if depth <= 0.0 or alpha <= 0.0:
        what = "depth of its section" if depth <= 0.0 else "thermal expansion"
        log.add(
            "warning",
            "temperature-not-applied",
            f"{where} in the job file warms member {named(member)}, whose {what} is not known; it "
            f"has no effect there. State it (materials: thermal_expansion; sections: depth).",
            (member.global_id,),
        )
        return
    size = distance(member.start, member.end)
    scale = size if setting.relative else 1.0
    start, end = setting.start * scale, setting.end
    end = math.inf if math.isinf(end) else end * scale
    whole = setting.start == 0.0 and math.isinf(setting.end)
    part = (-math.inf, math.inf) if whole else (start, min(end, size))
    placer.bend(draft, member.global_id, case, part, alpha * setting.values[0] / depth, where)


def _direction(setting: ActionSetting, member: AxisMember, draft: Draft, placer: Placer) -> Pair:
    """Return the unit force (right, up) of a setting's direction in the plane of a draft."""
    if setting.direction == "down":
        return 0.0, -1.0
    if setting.direction == "right":
        return 1.0, 0.0
    seat = placer.seats(draft, member.global_id)[0]
    cos, sin = draft.direction(seat.bar)
    if setting.direction == "across":
        return sin, -cos
    backward = seat.bar.station_end < seat.bar.station_start
    return (-cos, -sin) if backward else (cos, sin)


def _stations(
    places: Iterable[float], setting: ActionSetting, member: AxisMember, where: str, log: Log
) -> list[float | None]:
    """Return stations in m; None where one lies beyond the member."""
    size = distance(member.start, member.end)
    result: list[float | None] = []
    for place in places:
        station = place * size if setting.relative else place
        beyond = station < -_SLACK or station > size + _SLACK
        if beyond:
            _report_beyond(member, station, size, where, "left out", log)
        result.append(None if beyond else min(max(station, 0.0), size))
    return result


def _kept_on(
    member: AxisMember, low: float, high: float, where: str, log: Log
) -> tuple[float, float] | None:
    size = distance(member.start, member.end)
    if high > size + _SLACK or low < -_SLACK:
        at = high if high > size + _SLACK else low
        _report_beyond(member, at, size, where, "cut at the member's end", log)
    part = max(low, 0.0), min(high, size)
    return part if part[1] - part[0] > _SLACK else None


def _report_beyond(
    member: AxisMember, at: float, size: float, where: str, done: str, log: Log
) -> None:
    log.add(
        "warning",
        "action-beyond-member",
        f"{where} in the job file acts {at:.2f} m along member {named(member)}, which is "
        f"{size:.2f} m long; it is {done}. Move it, or choose fewer members.",
        (member.global_id,),
    )
