"""Area loads of slabs, spaces and surface members, spread to the beams and walls below."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Iterator
from dataclasses import dataclass, field
from functools import lru_cache

from analysis_core.building import Area, Building
from analysis_core.findings import listed
from analysis_core.idealise.area_receivers import Receiver, Receivers
from analysis_core.idealise.log import Log
from analysis_core.idealise.placing import Placer
from analysis_core.idealise.plan import Spot
from analysis_core.idealise.region import Region
from analysis_core.idealise.selectors import Chooser
from analysis_core.idealise.tributary import Share, Spread, shares
from analysis_core.model import DistributedForce, PointForce
from analysis_core.settings import AreaActionSetting, Settings

# CONTRACT: what arrives on beams and walls is checked against the slab to 0.1 %.
_ALLOWED = 1e-3
_PARALLEL = math.sin(math.radians(2.5))


@dataclass(frozen=True, slots=True)
class _Load:
    """One area load: N/m² downward on an area, in a case."""

    area: Area
    case: str
    intensity: float
    source: str
    spread: str = "auto"
    direction: Spot | None = None


@dataclass(slots=True)
class _Sum:
    """What a source put where, N."""

    beams: float = 0.0
    walls: float = 0.0
    stated: float = 0.0
    areas: list[str] = field(default_factory=list)
    ways: set[str] = field(default_factory=set)


def put_area_loads(
    building: Building,
    placer: Placer,
    settings: Settings,
    chooser: Chooser,
    case_name: Callable[[str], str],
    log: Log,
) -> dict[tuple[str, str], float]:
    """Spread every area load of the model and of the job file.

    Returns what goes straight to walls: N by GlobalId and case.
    """
    walls: dict[tuple[str, str], float] = {}
    loads = [*_of_model(building, log), *_of_job(building, settings, chooser, case_name)]
    if not loads:
        return walls
    receivers = Receivers(placer.drafts, building.carriers)
    known: dict[tuple[str, str, Spot | None], tuple[list[Receiver], list[Share]]] = {}
    sums: dict[str, _Sum] = {}
    for load in loads:
        rule, direction = _rule(load)
        key = (load.area.global_id, rule, direction)
        if key not in known:
            known[key] = _shared(load.area, receivers, rule, direction, log)
        found, parts = known[key]
        total = sums.setdefault(load.source, _Sum())
        total.areas.append(load.area.global_id)
        total.ways.add(rule)
        total.stated += load.intensity * _region(load.area).area
        for receiver, share in zip(found, parts, strict=True):
            force = load.intensity * share.total
            if receiver.draft is None:
                total.walls += force
                key_of_wall = receiver.name, load.case
                walls[key_of_wall] = walls.get(key_of_wall, 0.0) + force
            else:
                total.beams += force
                _put(load, receiver, share, placer)
    for source, total in sums.items():
        _report(source, total, log)
    return walls


def _of_model(building: Building, log: Log) -> Iterator[_Load]:
    areas = {area.global_id: area for area in building.areas}
    for action in building.area_actions:
        area = areas.get(action.area)
        if area is None:
            log.add(
                "warning",
                "action-without-line",
                f"Area action '{action.name}' (GlobalId {action.global_id}) acts on "
                f"{action.area}, whose outline could not be read; it is not analysed.",
                (action.global_id, action.area),
            )
            continue
        sideways = math.hypot(action.force[0], action.force[1])
        if sideways > 1e-6 * abs(action.force[2]):
            log.add(
                "warning",
                "out-of-plane-action",
                f"Area action '{action.name}' (GlobalId {action.global_id}) has a horizontal "
                f"component of {sideways / 1e3:.4g} kN/m²; that part is not analysed.",
                (action.global_id, action.area),
            )
        yield _Load(area, action.case, -action.force[2], action.global_id)


def _of_job(
    building: Building,
    settings: Settings,
    chooser: Chooser,
    case_name: Callable[[str], str],
) -> Iterator[_Load]:
    for number, setting in enumerate(settings.area_actions):
        where = setting.source or f"area_actions[{number}]"
        for area in building.areas:
            if chooser.chooses(setting.on, area, where=where):
                yield _Load(
                    area,
                    case_name(setting.case),
                    setting.intensity,
                    where,
                    setting.spread,
                    _direction(setting, area),
                )


def _direction(setting: AreaActionSetting, area: Area) -> Spot | None:
    return setting.span_direction or area.span


def _rule(load: _Load) -> tuple[Spread, Spot | None]:
    direction = load.direction or load.area.span
    if load.spread == "two-way":
        return "two-way", None
    if direction is not None:
        return "one-way", direction
    return ("one-way" if load.spread == "one-way" else "panels"), None


def _region(area: Area) -> Region:
    return Region(area.outline, area.voids)


def _shared(
    area: Area, receivers: Receivers, rule: Spread, direction: Spot | None, log: Log
) -> tuple[list[Receiver], list[Share]]:
    found = receivers.of(area)
    name = f"'{area.name}' (GlobalId {area.global_id})"
    if not found:
        log.add(
            "warning",
            "area-without-beams",
            f"Nothing that is analysed carries area {name} between levels {area.bottom:.2f} m and "
            f"{area.top:.2f} m; loads on it are left out.",
            (area.global_id,),
        )
        return [], []
    region = _region(area)
    if rule == "one-way" and direction is None:
        direction = _across_most(found, area)
    parts = _congruent(area, [r.segment for r in found], rule, direction)
    total = math.fsum(part.total for part in parts)
    if abs(total - region.area) > _ALLOWED * region.area:
        log.add(
            "warning",
            "area-load-total",
            f"Of the {region.area:.2f} m² of area {name}, {total:.2f} m² reach beams and walls "
            f"({total / region.area - 1.0:+.1%}); the rest spans to nothing that is analysed. "
            f"Check the beams under it, or state its span direction.",
            (area.global_id,),
        )
    return found, parts


def _congruent(
    area: Area, segments: list[tuple[Spot, Spot]], rule: Spread, direction: Spot | None
) -> list[Share]:
    """Return the shares of an area; bays alike, storey by storey, are worked out once.

    Places count from the area's first corner, to a tenth of a millimetre, so that the far
    coordinates of a map cost no digits either.
    """
    ox, oy = area.outline[0]

    def near(spots: Iterable[Spot]) -> tuple[Spot, ...]:
        return tuple((round(x - ox, 4), round(y - oy, 4)) for x, y in spots)

    outline, voids = near(area.outline), tuple(near(void) for void in area.voids)
    return list(_shares_of(outline, voids, tuple(near(s) for s in segments), rule, direction))


@lru_cache(maxsize=4096)
def _shares_of(
    outline: tuple[Spot, ...],
    voids: tuple[tuple[Spot, ...], ...],
    segments: tuple[tuple[Spot, ...], ...],
    rule: Spread,
    direction: Spot | None,
) -> tuple[Share, ...]:
    lines = [(start, end) for start, end in segments]
    return tuple(shares(Region(outline, voids), lines, rule, direction))


def _across_most(found: Iterable[Receiver], area: Area) -> Spot:
    """Return the direction across the greatest length of lines along or under the area.

    Lines whose directions differ by up to 2.5 degrees count as parallel; the longest of them
    gives the direction.
    """
    lines = []
    for receiver in found:
        (ax, ay), (bx, by) = receiver.segment
        size = math.hypot(bx - ax, by - ay)
        along = ((bx - ax) / size, (by - ay) / size)
        places = [(x - ax) * along[0] + (y - ay) * along[1] for x, y in area.outline]
        beside = min(max(places), size) - max(min(places), 0.0)
        lines.append((along, max(beside, 0.0)))

    def alike(along: Spot) -> float:
        return math.fsum(
            beside
            for other, beside in lines
            if abs(along[0] * other[1] - along[1] * other[0]) <= _PARALLEL
        )

    along, _ = max(lines, key=lambda line: (round(alike(line[0]), 3), round(line[1], 3)))
    return -along[1], along[0]


def _put(load: _Load, receiver: Receiver, share: Share, placer: Placer) -> None:
    """Put a share on a bar: per metre of bar, and at its ends."""
    draft, number = receiver.draft, receiver.number
    assert draft is not None
    bar = draft.bars[number]
    (ax, ay), (bx, by) = receiver.segment
    length = draft.length(bar)
    flat = math.hypot(bx - ax, by - ay) / length
    cos, sin = draft.direction(bar)
    for low, high, first, last in share.pieces:
        a, b = (min(max(s / flat, 0.0), length) for s in (low, high))
        if b <= a:
            continue
        start, end = load.intensity * first * flat, load.intensity * last * flat
        slope = (end - start) / (b - a)
        linear = (start, slope) if abs(end - start) > 1e-9 * max(abs(start), abs(end)) else (start,)
        placer.put(
            draft,
            DistributedForce(
                load.case,
                number,
                a,
                b,
                tuple(c * cos for c in linear),
                tuple(-c * sin for c in linear) if abs(sin) > 1e-12 else (),
                load.source,
            ),
        )
    for at, area in ((0.0, share.ends[0]), (length, share.ends[1])):
        force = load.intensity * area
        if abs(force) > 1e-9 * abs(load.intensity):
            placer.put(
                draft, PointForce(load.case, number, at, force * cos, -force * sin, load.source)
            )


def _report(source: str, total: _Sum, log: Log) -> None:
    rules = {
        "panels": "panel by panel (one way where twice as long as wide, else by bisecting angles; "
        "by these alone where beams do not close the panels)",
        "two-way": "by bisecting angles",
        "one-way": "one way along the span direction",
    }
    walls = f" and {total.walls / 1e3:.4g} kN to walls" if total.walls else ""
    log.add(
        "note",
        "area-load-spread",
        f"Area load {source}: {total.stated / 1e3:.4g} kN on {len(total.areas)} areas "
        f"({listed(dict.fromkeys(total.areas), most=3)}), spread "
        f"{' or '.join(rules[way] for way in sorted(total.ways))}: {total.beams / 1e3:.4g} kN to "
        f"beams{walls}.",
        dict.fromkeys(total.areas),
    )
