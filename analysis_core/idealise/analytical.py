"""The analytical way in: members and connections of an analysis model become drafts."""

from __future__ import annotations

from analysis_core.building import Building
from analysis_core.findings import listed
from analysis_core.idealise.assemblies import assemble
from analysis_core.idealise.carrying import Contact, Touch, decide
from analysis_core.idealise.conditions import put_releases, put_supports, vertical_stiffness
from analysis_core.idealise.draft import Draft
from analysis_core.idealise.known_marks import keep_marks
from analysis_core.idealise.log import Log, named
from analysis_core.idealise.marks import put_marks
from analysis_core.idealise.network import network_of
from analysis_core.idealise.plane_groups import plane_groups
from analysis_core.idealise.properties import PropertyTable
from analysis_core.idealise.scheme import Rest, Scheme, body_of, stiffness_at
from analysis_core.model import RIGID
from analysis_core.settings import Settings


def analytical_scheme(building: Building, settings: Settings, log: Log) -> Scheme:
    """Return the drafts of an analytical building with their supports as the model states them."""
    tolerances = settings.tolerances
    network = network_of(building, tolerances, log)
    groups = plane_groups(network, tolerances)
    drafts = [assemble(network, group, tolerances) for group in groups]
    put_marks(drafts, building.storeys)
    keep_marks(drafts, building.known_marks)
    drafts.sort(key=lambda draft: (draft.kind != "line", draft.mark))
    for draft in drafts:
        put_supports(draft, network, log)
        put_releases(draft, network, log)
    _report_two_planes(drafts, log)
    return Scheme(drafts)


def let_carry(scheme: Scheme, building: Building, table: PropertyTable, log: Log) -> None:
    """Decide which line carries which where lines of different planes share a free node."""
    drafts = {draft.mark: draft for draft in scheme.drafts}
    connections = {c.global_id: c for c in building.connections}
    at_node: dict[str, list[Draft]] = {}
    for draft in scheme.drafts:
        for joint in draft.joints:
            at_node.setdefault(joint.key, []).append(draft)
    leaning = {
        draft.mark
        for draft in scheme.drafts
        if any(slug == "not-in-a-vertical-plane" for slug, _ in draft.faults)
    }
    bodies = [body_of(draft) for draft in scheme.drafts]
    contacts = []
    for key, meeting in sorted(at_node.items()):
        connection = connections.get(key)
        meeting = [draft for draft in meeting if draft.mark not in leaning]
        if len(meeting) < 2 or connection is None or _share_column(meeting, key):
            continue
        if vertical_stiffness(connection.restraint) == RIGID:
            continue
        if all(_held(draft, key) for draft in meeting):
            continue
        contacts.append(Contact(key, tuple(_touch(d, key, table) for d in meeting)))
    decide(bodies, contacts)
    for contact in contacts:
        if contact.carrier is not None:
            _rest(scheme, contact, drafts, log)
        else:
            _report_uncoupled(contact, drafts, log)
    _report_outside(scheme, at_node, log)


def _held(draft: Draft, key: str) -> bool:
    return draft.joints[draft.joint_of[key]].vertical == RIGID


def _share_column(drafts: list[Draft], key: str) -> bool:
    """Whether a column stands at the node; it is part of every draft there, and carries them."""
    draft = drafts[0]
    index = draft.joint_of[key]
    return any(
        bar.role == "leg" and abs(draft.direction(bar)[0]) < 0.05
        for bar in draft.bars
        if index in (bar.start, bar.end)
    )


def _touch(draft: Draft, key: str, table: PropertyTable) -> Touch:
    index = draft.joint_of[key]
    bars = [bar for bar in draft.bars if index in (bar.start, bar.end)]
    position = draft.joints[index].x
    stiffness = stiffness_at(draft, position, bars[0].member.global_id, table)
    return Touch(draft.mark, position, len(bars) > 1, stiffness)


def _rest(scheme: Scheme, contact: Contact, drafts: dict[str, Draft], log: Log) -> None:
    assert contact.carrier is not None
    carrier = drafts[contact.carrier]
    scheme.carriers[contact.key] = carrier
    index = carrier.joint_of[contact.key]
    bar = next(b for b in carrier.bars if index in (b.start, b.end))
    for touch in contact.touches:
        if touch.body == contact.carrier:
            continue
        carried = drafts[touch.body]
        joint = carried.joints[carried.joint_of[contact.key]]
        if joint.settled:
            continue
        joint.vertical = RIGID
        joint.element = bar.member.global_id
        joint.reason = (
            f"carried here by line {carrier.mark} (member {named(bar.member)}), which "
            f"{'passes' if _passes(contact, carrier.mark) else 'stands by itself'}; its deflection "
            f"is neglected"
        )
        scheme.rests.append(Rest(carried, contact.key, carrier, at=contact.key))
        if contact.doubtful:
            log.add(
                "warning",
                "grillage-crossing",
                f"Lines {carried.mark} and {carrier.mark} cross at connection {contact.key}, and "
                f"both stand by themselves, so in truth they share what acts there. "
                f"{carrier.mark}, the stiffer, is taken to carry {carried.mark} as a rigid "
                f"support.",
                (contact.key, *carried.elements, *carrier.elements),
                carried.mark,
            )


def _report_uncoupled(contact: Contact, drafts: dict[str, Draft], log: Log) -> None:
    marks = [touch.body for touch in contact.touches]
    log.add(
        "warning",
        "grillage-crossing",
        f"Lines {listed(marks)} meet at their free ends at connection {contact.key}, where in "
        f"truth they hold each other up. Each is analysed by itself. State a support there in the "
        f"job file (supports: on, end) if one carries the other.",
        (contact.key, *(element for mark in marks for element in drafts[mark].elements)),
        marks[0],
    )


def _passes(contact: Contact, mark: str) -> bool:
    return any(touch.passes for touch in contact.touches if touch.body == mark)


def _report_two_planes(drafts: list[Draft], log: Log) -> None:
    planes: dict[str, list[str]] = {}
    names: dict[str, str] = {}
    for draft in drafts:
        for bar in draft.bars:
            marks = planes.setdefault(bar.member.global_id, [])
            if draft.mark not in marks:
                marks.append(draft.mark)
            names[bar.member.global_id] = named(bar.member)
    for global_id, marks in planes.items():
        if len(marks) > 1:
            log.add(
                "note",
                "member-in-two-planes",
                f"Member {names[global_id]} belongs to {' and '.join(marks)}, which lie in "
                f"different planes, and is analysed in each; their effects on it act together.",
                (global_id,),
            )


def _report_outside(scheme: Scheme, at_node: dict[str, list[Draft]], log: Log) -> None:
    """Members across the plane are neglected except for what they carry."""
    for draft in scheme.drafts:
        across: dict[str, None] = {}
        for joint in draft.joints:
            for other in at_node[joint.key]:
                if other is not draft:
                    across[other.mark] = None
        if across:
            log.add(
                "note",
                "stiffness-across-plane",
                f"{listed(across)} meet {draft.mark} outside its plane; their resistance to "
                f"twisting and bending there is neglected.",
                draft.elements,
                draft.mark,
            )
