"""Supports, releases and movements that the job file states."""

from __future__ import annotations

from collections.abc import Callable, Iterator

from analysis_core.building import AxisMember, Carrier, Connection
from analysis_core.idealise.draft import Bar, Draft
from analysis_core.idealise.joints import bars_at, end_joint, joint_at
from analysis_core.idealise.log import Log, named
from analysis_core.idealise.placing import Placer
from analysis_core.idealise.selectors import Chooser
from analysis_core.idealise.vectors import distance
from analysis_core.model import FREE, JointMovement
from analysis_core.settings import MovementSetting, ReleaseSetting, Settings, SupportSetting

Thing = AxisMember | Carrier | Connection


def put_job_supports(drafts: list[Draft], settings: Settings, chooser: Chooser, log: Log) -> None:
    """Set the supports of the job file; nothing else decides those joints any more."""
    for number, setting in enumerate(settings.supports):
        where = setting.source or f"supports[{number}]"
        for draft, member in _chosen(drafts, setting, chooser, where):
            for key in _support_places(draft, member, setting, where, log):
                joint = draft.joints[draft.joint_of[key]]
                joint.vertical, joint.rotation = setting.vertical, setting.rotation
                joint.horizontal = setting.horizontal
                joint.element = joint.element or member.global_id
                joint.reason = f"as stated in the job file ({where})"
                if joint.support is None:
                    joint.element = None
                joint.settled = True


def put_job_releases(drafts: list[Draft], settings: Settings, chooser: Chooser, log: Log) -> None:
    """Set the end springs and hinges of the job file."""
    for number, setting in enumerate(settings.releases):
        where = setting.source or f"releases[{number}]"
        for draft, member in _chosen(drafts, setting, chooser, where):
            if setting.position is not None:
                _hinge(draft, member, setting, where, log)
                continue
            for last in (False, True):
                if setting.end in ("both", "end" if last else "start"):
                    _release_end(draft, member, setting, last=last)


def put_job_movements(
    placer: Placer,
    settings: Settings,
    chooser: Chooser,
    things: list[Thing],
    case_name: Callable[[str], str],
    log: Log,
) -> None:
    """Put the settlements and rotations of the job file on supports.

    Without ``end`` the selector chooses what supports: a column, a wall, a beam or a connection;
    with ``end``, the member whose end moves.
    """
    for number, setting in enumerate(settings.movements):
        where = setting.source or f"movements[{number}]"
        case = case_name(setting.case)
        moved = False
        for draft, index in _moved(placer, setting, chooser, things, where):
            joint = draft.joints[index]
            down = setting.down if joint.vertical > FREE else 0.0
            turn = setting.rotation if joint.rotation > FREE else 0.0
            if down or turn:
                placer.put(draft, JointMovement(case, index, 0.0, down, turn, where))
                moved = True
        if not moved:
            log.add(
                "warning",
                "movement-without-support",
                f"{where} in the job file moves no support: what it chooses holds no line in that "
                f"direction, so it has no effect. `survey` lists the supports of each line.",
            )


def _chosen(
    drafts: list[Draft],
    setting: SupportSetting | ReleaseSetting,
    chooser: Chooser,
    where: str,
) -> Iterator[tuple[Draft, AxisMember]]:
    for draft in drafts:
        members = {bar.member.global_id: bar.member for bar in draft.bars}
        for member in members.values():
            if chooser.chooses(setting.on, member, where=where):
                if setting.on.line and not chooser.fits_line(setting.on, draft.mark):
                    continue
                yield draft, member


def _support_places(
    draft: Draft, member: AxisMember, setting: SupportSetting, where: str, log: Log
) -> list[str]:
    """Return the keys of the joints that a support setting means."""
    if setting.position is not None:
        if not _on_member(member, setting.position, where, log):
            return []
        key = f"{where} {member.global_id}"
        return [draft.joints[joint_at(draft, member.global_id, setting.position, key)].key]
    return [
        draft.joints[end_joint(draft, member.global_id, last=last)].key
        for last in (False, True)
        if setting.end in ("both", "", "end" if last else "start")
    ]


def _release_end(draft: Draft, member: AxisMember, setting: ReleaseSetting, *, last: bool) -> None:
    index = end_joint(draft, member.global_id, last=last)
    for bar in bars_at(draft, index):
        if bar.member is member:
            _set_spring(bar, index, setting.rotation)


def _hinge(draft: Draft, member: AxisMember, setting: ReleaseSetting, where: str, log: Log) -> None:
    """A hinge, or a spring, within a member."""
    assert setting.position is not None
    if not _on_member(member, setting.position, where, log):
        return
    key = f"{where} {member.global_id}"
    index = joint_at(draft, member.global_id, setting.position, key)
    joint = draft.joints[index]
    joint.reason = joint.reason or f"hinge as stated in the job file ({where})"
    bars = [bar for bar in bars_at(draft, index) if bar.member is member]
    if bars:
        _set_spring(bars[0], index, setting.rotation)


def _set_spring(bar: Bar, joint: int, spring: float) -> None:
    if bar.start == joint:
        bar.start_spring = spring
    else:
        bar.end_spring = spring


def _on_member(member: AxisMember, position: float, where: str, log: Log) -> bool:
    size = distance(member.start, member.end)
    if 0.0 <= position <= size + 1e-3:
        return True
    log.add(
        "warning",
        "position-beyond-member",
        f"{where} in the job file means {position:.2f} m along member {named(member)}, which is "
        f"{size:.2f} m long; it has no effect there.",
        (member.global_id,),
    )
    return False


def _moved(
    placer: Placer,
    setting: MovementSetting,
    chooser: Chooser,
    things: list[Thing],
    where: str,
) -> Iterator[tuple[Draft, int]]:
    if setting.end:
        for draft in placer.drafts:
            members = {bar.member.global_id: bar.member for bar in draft.bars}
            for member in members.values():
                if not chooser.chooses(setting.at, member, where=where):
                    continue
                for last in (False, True):
                    if setting.end in ("both", "end" if last else "start"):
                        yield draft, end_joint(draft, member.global_id, last=last)
        return
    ids = {t.global_id for t in things if chooser.chooses(setting.at, t, where=where)}
    for draft in placer.drafts:
        for index, joint in enumerate(draft.joints):
            if joint.element in ids:
                yield draft, index
