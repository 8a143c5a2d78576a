"""From drafts with their actions to frozen lines."""

from __future__ import annotations

from collections.abc import Sequence, Set

from analysis_core.errors import ModelError
from analysis_core.idealise.draft import Bar, Draft
from analysis_core.idealise.lines import number_spans
from analysis_core.idealise.log import Log, named
from analysis_core.idealise.properties import Properties, PropertyTable
from analysis_core.idealise.rigidity import Stretch, length_of, pieces_between, rigidity_of
from analysis_core.idealise.vectors import Vector
from analysis_core.model import Action, Joint, Line, Member, Piece

# Stands in where a member has no rigidity; the line's fault keeps it from being solved.
_PLACEHOLDER = 1.0


def build(
    draft: Draft,
    actions: Sequence[Action],
    table: PropertyTable,
    *,
    shear_flexible: bool,
    told: Set[str],
    log: Log,
) -> Line | None:
    """Return the line of a draft, None (with a finding) where its parts do not fit together.

    ``told``: members whose oblique bending the reader reported already.
    """
    number_spans(draft)
    stretches: dict[str, tuple[Stretch, ...] | None] = {}
    faults = [clause for _, clause in draft.faults]
    for bar in draft.bars:
        if bar.member.global_id in stretches:
            continue
        properties = table.of(bar.member)
        if properties.fault:
            faults.append(f"member {named(bar.member)} has no rigidity: {properties.fault}")
            _report_no_rigidity(draft, bar, properties, log)
            stretches[bar.member.global_id] = None
            continue
        stretches[bar.member.global_id] = rigidity_of(
            bar.member,
            properties,
            _across(draft, bar),
            shear_flexible=shear_flexible,
            told=bar.member.global_id in told,
            log=log,
            line=draft.mark,
        )
    for slug, clause in draft.faults:
        log.add(
            "error",
            slug,
            f"{_capital(draft.kind)} {draft.mark} is not analysed: {clause}.",
            draft.elements,
            draft.mark,
        )
    members = [
        _member(draft, number, bar, table.of(bar.member), stretches[bar.member.global_id])
        for number, bar in enumerate(draft.bars)
    ]
    try:
        return Line(
            mark=draft.mark,
            joints=tuple(_joint(draft, number) for number in range(len(draft.joints))),
            members=tuple(members),
            actions=tuple(actions),
            kind=draft.kind,
            storey=draft.storey,
            elements=draft.elements,
            origin=draft.plane.origin,
            axis=draft.plane.axis,
            fault="; ".join(faults),
        )
    except ModelError as error:
        log.add("error", "line-not-built", str(error), draft.elements, draft.mark)
        return None if not actions else _without_actions(draft, members, str(error))


def _without_actions(draft: Draft, members: list[Member], fault: str) -> Line | None:
    """The line as it can be listed and drawn where only its actions do not fit."""
    try:
        return Line(
            mark=draft.mark,
            joints=tuple(_joint(draft, number) for number in range(len(draft.joints))),
            members=tuple(members),
            kind=draft.kind,
            storey=draft.storey,
            elements=draft.elements,
            origin=draft.plane.origin,
            axis=draft.plane.axis,
            fault=fault,
        )
    except ModelError:
        return None


def _joint(draft: Draft, number: int) -> Joint:
    joint = draft.joints[number]
    return Joint(
        id=number,
        x=joint.x,
        z=joint.z,
        point=draft.point(number),
        support=joint.support,
        element=joint.element,
        elements=tuple(dict.fromkeys(joint.elements)),
        reason=joint.reason,
        width=joint.width,
    )


def _member(
    draft: Draft,
    number: int,
    bar: Bar,
    properties: Properties,
    stretches: tuple[Stretch, ...] | None,
) -> Member:
    length = draft.length(bar)
    pieces: tuple[Piece, ...] = (Piece(length, (_PLACEHOLDER,)),)
    if stretches is not None:
        own = length_of(bar.member)
        pieces = pieces_between(stretches, bar.station_start / own, bar.station_end / own, length)
    return Member(
        id=number,
        start=bar.start,
        end=bar.end,
        pieces=pieces,
        role=bar.role,
        start_spring=bar.start_spring,
        end_spring=bar.end_spring,
        span=bar.span,
        element=bar.member.global_id,
        element_offset=bar.station_start,
        reversed_=bar.station_end < bar.station_start,
        section=properties.section,
        end_section=properties.end_section,
        material=properties.material,
    )


def _across(draft: Draft, bar: Bar) -> Vector:
    cos, sin = draft.direction(bar)
    axis = draft.plane.axis
    return -sin * axis[0], -sin * axis[1], cos


def _report_no_rigidity(draft: Draft, bar: Bar, properties: Properties, log: Log) -> None:
    log.add(
        "error",
        "no-rigidity",
        f"{_capital(draft.kind)} {draft.mark} is not analysed: member {named(bar.member)} has no "
        f"flexural rigidity, because {properties.fault}.",
        (bar.member.global_id,),
        draft.mark,
    )


def _capital(text: str) -> str:
    return text[:1].upper() + text[1:]
