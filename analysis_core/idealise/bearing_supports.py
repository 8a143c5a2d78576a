"""Supports of physical lines as found around them, each with its distance and its reason."""

from __future__ import annotations

from analysis_core.findings import listed
from analysis_core.idealise.bearings import Bearing
from analysis_core.idealise.draft import Draft, DraftJoint
from analysis_core.idealise.joints import bars_at, end_joint
from analysis_core.idealise.log import Log
from analysis_core.idealise.physical import PhysicalScheme
from analysis_core.idealise.spans import Chain, Seating, seat_key
from analysis_core.model import FREE, RIGID
from analysis_core.settings import Settings


def support_chains(physical: PhysicalScheme, settings: Settings, log: Log) -> None:
    """Put supports on the drafts as found around them, where the job file does not say more."""
    for draft, chain in zip(physical.scheme.drafts, physical.chains, strict=True):
        _support(draft, chain, settings, log)
        _report_joins(draft, chain, log)
        _report_lying(draft, chain, log)
        _put_stated_releases(draft, log)


def _support(draft: Draft, chain: Chain, settings: Settings, log: Log) -> None:
    """Put the supports of a chain's seatings on its joints, each with its reason."""
    joint_of = draft.joint_of
    for seating in chain.seatings:
        index = joint_of.get(seat_key(seating))
        if index is None or seating.best.kind == "beam":
            continue
        joint, bearing = draft.joints[index], seating.best
        if joint.settled and joint.support is None:
            continue
        joint.element = bearing.id
        joint.elements.extend([bearing.id, *(other.id for other in seating.others)])
        joint.width = bearing.width
        if joint.settled:
            # The job file says how it is held; what carries it is still what stands there.
            joint.reason = f"{_reason(seating, 'held')} {joint.reason}"
            continue
        joint.vertical = RIGID
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


def _put_stated_releases(draft: Draft, log: Log) -> None:
    """Springs and hinges that the model itself states at the ends of its members."""
    for member in {bar.member.global_id: bar.member for bar in draft.bars}.values():
        for last in (False, True):
            stated = member.end_stiffness[last]
            if stated is None:
                continue
            index = end_joint(draft, member.global_id, last=last)
            if stated < RIGID:
                for bar in bars_at(draft, index):
                    if bar.member is member and bar.start == index:
                        bar.start_spring = stated
                    elif bar.member is member:
                        bar.end_spring = stated
            elif index in (0, len(draft.joints) - 1) and draft.joints[index].support is not None:
                log.add(
                    "note",
                    "moment-connection",
                    f"The model joins an end of member '{member.name}' (GlobalId "
                    f"{member.global_id}) rigidly to what carries it. Line {draft.mark} is taken "
                    f"as pinned there; take its columns as legs (analysis: columns_as_legs) or "
                    f"state the support in the job file.",
                    (member.global_id,),
                    draft.mark,
                )
