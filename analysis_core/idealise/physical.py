"""The physical way in: beams, and what they bear on, become drafts of lines."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

from analysis_core.building import AxisMember, Building, Carrier
from analysis_core.idealise.beams import Beam, beam_of
from analysis_core.idealise.bearings import Bearing, find_bearings, kind_of
from analysis_core.idealise.chains import End, Link, chains, link_ends
from analysis_core.idealise.draft import Draft, DraftJoint
from analysis_core.idealise.legs import Legs
from analysis_core.idealise.log import Log, listed, named
from analysis_core.idealise.marks import put_marks
from analysis_core.idealise.plan import Spot
from analysis_core.idealise.properties import PropertyTable
from analysis_core.idealise.scheme import Scheme
from analysis_core.idealise.selectors import Chooser
from analysis_core.idealise.spans import Chain, Seating, chain_of, draft_of, seat, seat_key
from analysis_core.idealise.vectors import Vector, cross, distance, scale, subtract, unit
from analysis_core.model import FREE, RIGID
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
    bearings = find_bearings(beams, (*building.carriers, *posts), tolerances)
    links = link_ends(
        beams,
        bearings,
        tolerances,
        over_bearings=settings.analysis.continuous_over_columns,
        kept_rigid=_kept_rigid(beams, settings, chooser),
    )
    by_pair = {frozenset((link.first[0], link.second[0])): link for link in links}
    found = [chain_of(chain, by_pair, tolerances) for chain in chains(beams, links)]
    drafts = []
    for chain in found:
        seat(chain, bearings, tolerances)
        drafts.append(draft_of(chain, tolerances))
    put_marks(drafts, building.storeys)
    order = sorted(range(len(drafts)), key=lambda i: drafts[i].mark)
    drafts = [drafts[i] for i in order]
    found = [found[i] for i in order]
    return PhysicalScheme(Scheme(drafts), found, bearings, links, (*building.carriers, *posts))


def support_chains(physical: PhysicalScheme, settings: Settings, log: Log) -> None:
    """Put supports on the drafts as found around them, where the job file does not say more."""
    for draft, chain in zip(physical.scheme.drafts, physical.chains, strict=True):
        _support(draft, chain, settings, log)


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


def _kept_rigid(beams: list[Beam], settings: Settings, chooser: Chooser) -> frozenset[End]:
    """Ends that the job file joins rigidly to the next span."""
    ends: set[End] = set()
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


def _support(draft: Draft, chain: Chain, settings: Settings, log: Log) -> None:
    """Put the supports of a chain's seatings on its joints, each with its reason."""
    joint_of = draft.joint_of
    for seating in chain.seatings:
        index = joint_of.get(seat_key(seating))
        if index is None or seating.best.kind == "beam":
            continue
        joint, bearing = draft.joints[index], seating.best
        if joint.settled:
            continue
        joint.vertical = RIGID
        joint.element = bearing.id
        joint.elements.extend([bearing.id, *(other.id for other in seating.others)])
        joint.width = bearing.width
        how = "continuous by rule"
        if seating.outer:
            how = _fix_end(joint, settings)
        joint.reason = _reason(seating, how)
    for joint in draft.joints:
        if joint.key.startswith("splice "):
            joint.reason = "ends meet here without a bearing; taken as joined rigidly"
    for index, outer in ((0, -1), (len(draft.joints) - 1, 1)):
        joint = draft.joints[index]
        if joint.support is None and not any(s.outer == outer for s in chain.seatings):
            which = "start" if outer < 0 else "end"
            limit = settings.tolerances.bearing * 1e3
            joint.reason = f"free end: its {which} bears on nothing within {limit:.0f} mm"
    _report_joins(draft, chain, log)
    _report_lying(draft, chain, log)


def _fix_end(joint: DraftJoint, settings: Settings) -> str:
    """Hold an outer end as the job file says; return how, for the reason."""
    fixity = settings.analysis.end_fixity
    if fixity == "fixed":
        joint.rotation = joint.horizontal = RIGID
        return "taken as fixed, as the job file says (end_fixity)"
    if fixity == "guided":
        joint.vertical, joint.rotation = FREE, RIGID
        return "taken as guided, as the job file says (end_fixity)"
    if fixity == "free":
        joint.vertical = FREE
        return "taken as free, as the job file says (end_fixity)"
    return "taken as pinned by rule"


def _reason(seating: Seating, how: str) -> str:
    bearing = seating.best
    what = _called(bearing)
    if bearing.lengthwise:
        text = f"lies along {what}, one of its points of contact; {how}"
    elif seating.outer or bearing.end is not None:
        clear = f", {bearing.gap * 1e3:.0f} mm clear of it" if bearing.gap > 1e-3 else ""
        text = f"end bears on {what}, {bearing.distance * 1e3:.0f} mm from its axis{clear}; {how}"
    else:
        text = f"passes over {what}; {how}"
    if seating.others:
        text += f"; also near: {listed(_called(b) for b in seating.others)}"
    return text


def _report_lying(draft: Draft, chain: Chain, log: Log) -> None:
    carriers = {s.best.id: s.best for s in chain.seatings if s.best.lengthwise}
    for bearing in carriers.values():
        count = sum(s.best.id == bearing.id for s in chain.seatings)
        log.add(
            "warning",
            "lies-along",
            f"Line {draft.mark} lies along {_called(bearing)}; it is taken as held at {count} "
            f"points of the contact. State its supports in the job file where that is not so "
            f"(a lintel over an opening, say).",
            (*draft.elements, bearing.id),
            draft.mark,
        )


def _called(bearing: Bearing) -> str:
    name = f"'{bearing.name}' " if bearing.name else ""
    return f"{bearing.kind} {name}(GlobalId {bearing.id})"


def _report_joins(draft: Draft, chain: Chain, log: Log) -> None:
    for how, slug, text in (
        (
            "bearing",
            "assumed-continuous",
            "meet end to end over a bearing and are taken as continuous there",
        ),
        ("splice", "assumed-splice", "meet end to end in a span and are taken as joined rigidly"),
    ):
        pairs = [link for link in chain.links if link.how == how]
        if not pairs:
            continue
        ids = list(dict.fromkeys(e for link in pairs for e in (link.first[0], link.second[0])))
        log.add(
            "note",
            slug,
            f"Members of line {draft.mark} {text} ({len(pairs)} "
            f"{'place' if len(pairs) == 1 else 'places'}). State releases in the job file where "
            f"they are not.",
            ids,
            draft.mark,
        )
