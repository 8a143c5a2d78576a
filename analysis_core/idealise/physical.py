"""The physical way in: beams, and what they bear on, become drafts of lines."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

from analysis_core.building import AxisMember, Building, Carrier
from analysis_core.findings import listed
from analysis_core.idealise.beams import Beam, beam_of
from analysis_core.idealise.bearing_search import find_bearings
from analysis_core.idealise.bearings import Bearing, kind_of
from analysis_core.idealise.chains import End, Link, chains, link_ends
from analysis_core.idealise.known_marks import keep_marks
from analysis_core.idealise.legs import Legs
from analysis_core.idealise.log import Log, named
from analysis_core.idealise.marks import put_marks
from analysis_core.idealise.plan import Spot
from analysis_core.idealise.properties import PropertyTable
from analysis_core.idealise.scheme import Scheme
from analysis_core.idealise.selectors import Chooser
from analysis_core.idealise.spans import Chain, chain_of, draft_of, seat
from analysis_core.idealise.vectors import Vector, cross, distance, scale, subtract, unit
from analysis_core.model import RIGID
from analysis_core.settings import Settings

_NO_LENGTH = 1e-3


@dataclass(slots=True)
class PhysicalScheme:
    """Drafts with the chains from which they were laid out, in the same order."""

    scheme: Scheme
    chains: list[Chain]
    bearings: Mapping[str, list[Bearing]]
    links: list[Link]
    carriers: tuple[Carrier, ...] = ()


def physical_scheme(
    building: Building, settings: Settings, chooser: Chooser, log: Log
) -> PhysicalScheme:
    """Return the drafts of a physical building with the bearings found around them."""
    tolerances = settings.tolerances
    beams, posts = _sorted_out(building, settings, log)
    carriers = _outlined((*building.carriers, *posts), log)
    bearings = find_bearings(beams, carriers, tolerances)
    links = link_ends(
        beams,
        bearings,
        tolerances,
        over_bearings=settings.analysis.continuous_over_columns,
        kept_rigid=_kept_rigid(beams, settings, chooser),
        loose=frozenset(
            (beam.id, end) for beam in beams for end in (0, 1) if _is_loose(beam.member, end)
        ),
    )
    by_pair = {frozenset((link.first[0], link.second[0])): link for link in links}
    found = [chain_of(chain, by_pair, tolerances) for chain in chains(beams, links)]
    drafts = []
    for chain in found:
        seat(chain, bearings, tolerances)
        drafts.append(draft_of(chain, tolerances))
    put_marks(drafts, building.storeys)
    keep_marks(drafts, building.known_marks)
    order = sorted(range(len(drafts)), key=lambda i: drafts[i].mark)
    drafts = [drafts[i] for i in order]
    found = [found[i] for i in order]
    return PhysicalScheme(Scheme(drafts), found, bearings, links, carriers)


def _outlined(carriers: tuple[Carrier, ...], log: Log) -> tuple[Carrier, ...]:
    for carrier in carriers:
        if len(carrier.corners) < 3:
            log.add(
                "warning",
                "carrier-without-outline",
                f"Element {named(carrier)} has no outline in plan that could be read; it carries "
                f"nothing here.",
                (carrier.global_id,),
            )
    return tuple(carrier for carrier in carriers if len(carrier.corners) >= 3)


def put_legs(physical: PhysicalScheme, settings: Settings, table: PropertyTable, log: Log) -> None:
    """Put columns on the lines that they hold, as legs."""
    columns = [c for c in physical.carriers if kind_of(c) == "column"]
    legs = Legs(columns, physical.scheme.drafts, settings, log)
    for draft in physical.scheme.drafts:
        legs.put(draft, table)


def _sorted_out(
    building: Building, settings: Settings, log: Log
) -> tuple[list[Beam], list[Carrier]]:
    """Beams, and members too steep to be beams, which may hold others up as columns do."""
    beams, posts = [], []
    steepest = math.sin(settings.tolerances.beam_slope)
    for member in sorted(building.members, key=lambda m: m.global_id):
        size = distance(member.start, member.end)
        if size <= _NO_LENGTH:
            log.add(
                "error",
                "member-without-length",
                f"Member {named(member)} is {size * 1e3:.3g} mm long; it cannot be analysed. "
                f"Check its geometry and the length unit of the file.",
                (member.global_id,),
            )
        elif abs(member.end[2] - member.start[2]) > steepest * size:
            posts.append(_post(member))
        else:
            beams.append(beam_of(member))
    if posts:
        ids = [post.global_id for post in posts]
        log.add(
            "note",
            "steep-member",
            f"{len(ids)} members are steeper than "
            f"{math.degrees(settings.tolerances.beam_slope):.0f} degrees and are taken as columns: "
            f"they may carry beams, and are not analysed as beams ({listed(ids)}).",
            ids,
        )
    return beams, posts


def _post(member: AxisMember) -> Carrier:
    low, high = sorted((member.start, member.end), key=lambda p: p[2])
    axis = unit(subtract(high, low))
    depth = member.section.depth if member.section else 0.0
    width = member.section.width if member.section else 0.0
    lateral = cross(member.up, axis)
    reach = scale(member.up, max(depth, 0.02) / 2.0), scale(lateral, max(width, 0.02) / 2.0)
    corners: list[Spot] = []
    for a, b in ((1, 1), (-1, 1), (-1, -1), (1, -1)):
        offset: Vector = tuple(a * u + b * v for u, v in zip(*reach, strict=True))  # type: ignore[assignment]
        corners.append((low[0] + offset[0], low[1] + offset[1]))
    return Carrier(
        member.global_id,
        member.name,
        member.ifc_class,
        low[2],
        high[2],
        tuple(corners),
        low,
        high,
        member.section,
        member.material,
        member.storey,
        member.up,
    )


def _is_loose(member: AxisMember, end: int) -> bool:
    stiffness = member.end_stiffness[end]
    return stiffness is not None and stiffness < RIGID


def _kept_rigid(beams: list[Beam], settings: Settings, chooser: Chooser) -> frozenset[End]:
    """Ends that the model or the job file joins rigidly to the next span."""
    ends: set[End] = {
        (beam.id, end)
        for beam in beams
        for end in (0, 1)
        if beam.member.end_stiffness[end] == RIGID
    }
    for setting in settings.releases:
        if setting.rotation != RIGID or setting.position is not None or setting.on.line:
            continue
        for beam in beams:
            if chooser.chooses(setting.on, beam.member, where=setting.source or "releases"):
                ends.update(
                    (beam.id, end)
                    for end in (0, 1)
                    if setting.end in ("both", ("start", "end")[end])
                )
    return frozenset(ends)
