"""Columns that stand on beams: what they carry goes down to the line below."""

from __future__ import annotations

from collections.abc import Collection, Mapping

import numpy as np

from analysis_core.building import Carrier
from analysis_core.idealise.beams import Beam
from analysis_core.idealise.bearing_search import boxes_of_beams, boxes_of_carriers
from analysis_core.idealise.bearings import kind_of
from analysis_core.idealise.draft import Draft, DraftJoint
from analysis_core.idealise.log import Log, named
from analysis_core.idealise.pairs import Floats, overlapping
from analysis_core.idealise.physical import PhysicalScheme
from analysis_core.idealise.plan import centre, gap_to
from analysis_core.idealise.properties import PropertyTable
from analysis_core.idealise.scheme import Rest, stands_without, stiffness_at, x_of, yields_like
from analysis_core.model import RIGID
from analysis_core.settings import Tolerances

# Between a column and the one below it there may be a beam and a slab of this height (m).
_BETWEEN = 1.5


def let_columns_stand(
    physical: PhysicalScheme, table: PropertyTable, tolerances: Tolerances, log: Log
) -> None:
    """Hand the reactions that reach a column which stands on a beam to that beam's line.

    A column is followed down, storey by storey, through the columns, walls and footings below
    it.  Only where the lowest of them has none of these below, and a beam right under it, does
    the load go to the beam.
    """
    drafts = physical.scheme.drafts
    columns = {c.global_id: c for c in physical.carriers if kind_of(c) == "column"}
    used = {j.element for d in drafts for j in d.joints if j.vertical == RIGID} & set(columns)
    if not used:
        return
    below = _below(physical, list(columns.values()))
    beams = {beam.id: beam for chain in physical.chains for beam in chain.beams}
    feet = _feet(columns, below, beams, tolerances)
    home = {beam.id: i for i, chain in enumerate(physical.chains) for beam in chain.beams}
    lowest = _lowest(columns, below)
    for index, draft in enumerate(drafts):
        for joint in draft.joints:
            if joint.element not in columns or joint.vertical != RIGID or joint.settled:
                continue
            column = columns[lowest[joint.element]]
            found = feet.get(column.global_id)
            if found is None or home[found[0]] == index:
                continue
            beam, station = found
            carrier = drafts[home[beam]]
            physical.scheme.rests.append(
                Rest(draft, joint.key, carrier, member=beam, station=station)
            )
            joint.reason += f"; the column stands on beam {beam} of line {carrier.mark}"
            _report(draft, carrier, column, beam, log)
            _report_yielding(draft, joint, physical.scheme.rests[-1], table, log)


def _report(draft: Draft, carrier: Draft, column: Carrier, beam: str, log: Log) -> None:
    log.add(
        "note",
        "column-on-beam",
        f"Column {named(column)} stands on beam {beam} of line {carrier.mark}; what line "
        f"{draft.mark} hands to it acts there. Its own weight is not included.",
        (column.global_id, beam),
        carrier.mark,
    )


def _report_yielding(
    draft: Draft, joint: DraftJoint, rest: Rest, table: PropertyTable, log: Log
) -> None:
    """Warn where a line that stands anyway is propped from a beam that yields as much as itself."""
    carrier = rest.carrier
    number = next(n for n, other in enumerate(draft.joints) if other is joint)
    bar = next(bar for bar in draft.bars if number in (bar.start, bar.end))
    own = stiffness_at(draft, joint.x, bar.member.global_id, table)
    place = x_of(carrier, rest.member, rest.station)
    soft = yields_like(stiffness_at(carrier, place, rest.member, table), own)
    if not soft or not stands_without(draft, joint):
        return
    log.add(
        "warning",
        "grillage-crossing",
        f"Line {draft.mark} is propped by a column on line {carrier.mark}, but stands on other "
        f"bearings as well. {carrier.mark} {soft}, so that in truth {draft.mark} bends more and "
        f"hands down less. State the support in the job file as free or as a spring (supports: "
        f"on, at) to see how much this matters.",
        (*draft.elements, *carrier.elements),
        draft.mark,
    )


def _lowest(columns: Collection[str], below: Mapping[str, str]) -> dict[str, str]:
    """Return the lowest of the columns under each, by GlobalId; each is followed down once."""
    lowest: dict[str, str] = {}
    for column in columns:
        path = [column]
        while (lower := below.get(path[-1])) in columns and lower not in path:
            path.append(str(lower))
            if lower in lowest:
                break
        foot = lowest.get(path[-1], path[-1])
        lowest |= dict.fromkeys(path, foot)
    return lowest


def _below(physical: PhysicalScheme, columns: list[Carrier]) -> dict[str, str]:
    """Return what stands directly under each column, by GlobalId."""
    holders = [c for c in physical.carriers if kind_of(c) in ("column", "wall", "footing")]
    around = boxes_of_carriers(holders)
    i, j = overlapping(_feet_boxes(columns, _BETWEEN), around)
    bottoms = np.array([column.bottom for column in columns])
    under = (around[j, 2] < bottoms[i] - 0.05) & (bottoms[i] - around[j, 5] <= _BETWEEN)
    middles = [centre(column.corners) for column in columns]
    result: dict[str, tuple[float, str]] = {}
    for a, b in zip(i[under].tolist(), j[under].tolist(), strict=True):
        column, holder = columns[a], holders[b]
        if gap_to(holder.corners, middles[a]) > 0.05:
            continue
        drop = column.bottom - holder.top
        found = result.get(column.global_id)
        if found is None or (abs(drop), holder.global_id) < found:
            result[column.global_id] = (abs(drop), holder.global_id)
    return {key: holder for key, (_, holder) in result.items()}


def _feet(
    columns: dict[str, Carrier],
    below: dict[str, str],
    beams: dict[str, Beam],
    tolerances: Tolerances,
) -> dict[str, tuple[str, float]]:
    """Return the beam under each column that has nothing firmer below, and the station there."""
    loose = [c for key, c in columns.items() if key not in below]
    known = list(beams.values())
    if not loose or not known:
        return {}
    boxes = boxes_of_beams(known, tolerances.join)
    i, j = overlapping(_feet_boxes(loose, tolerances.bearing), boxes)
    result: dict[str, tuple[float, str, float]] = {}
    for a, b in zip(i.tolist(), j.tolist(), strict=True):
        column, beam = loose[a], known[b]
        place, side = beam.ray.local(centre(column.corners))
        if abs(side) > beam.half_width + tolerances.join:
            continue
        if not -tolerances.join <= place <= beam.run + tolerances.join:
            continue
        place = min(max(place, 0.0), beam.run)
        lift = abs(column.bottom - beam.top(place))
        if lift > tolerances.bearing:
            continue
        candidate = (lift, beam.id, beam.station(place))
        if column.global_id not in result or candidate < result[column.global_id]:
            result[column.global_id] = candidate
    return {key: (beam, station) for key, (_, beam, station) in result.items()}


def _feet_boxes(columns: list[Carrier], depth: float) -> Floats:
    boxes = boxes_of_carriers(columns)
    boxes[:, 5] = boxes[:, 2] + depth
    boxes[:, 2] -= depth
    return boxes
