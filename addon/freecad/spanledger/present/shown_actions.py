"""Actions with the words that tell what they are, and where they act on the strip."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from analysis_core.model import (
    Action,
    DistributedForce,
    ImposedCurvature,
    JointForce,
    JointMovement,
    Line,
    PointForce,
    PointMoment,
)
from analysis_core.units import DisplayUnits

from .stretches import Stretch
from .words import say


@dataclass(frozen=True, slots=True)
class ShownAction:
    """An action with the words that tell what it is, and the stretch it acts on (m)."""

    action: Action
    case: str
    words: str
    start: float
    end: float
    low: float
    high: float
    """Intensity at start and end of the stretch, positive downward (0 where it has none)."""
    kind: str
    """"spread", "point", "couple", "curvature", "joint" or "movement"."""


def chosen_actions(line: Line, factors: Mapping[str, float] | None) -> list[Action]:
    """Return the actions that a view shows: all of them, or those with a factor."""
    if factors is None:
        return list(line.actions)
    return [a for a in line.actions if factors.get(a.case, 0.0) != 0.0]


def shown_action(
    action: Action,
    line: Line,
    stretches: tuple[Stretch, ...],
    units: DisplayUnits,
    factors: Mapping[str, float] | None,
) -> ShownAction:
    """Return an action with its words, its factor in front where it has one."""
    factor = 1.0 if factors is None else factors[action.case]
    prefix = "" if factor == 1.0 else f"{factor:g} × "

    def shown(
        kind: str, words: str, start: float, end: float, low: float = 0.0, high: float = 0.0
    ) -> ShownAction:
        return ShownAction(action, action.case, prefix + words, start, end, low, high, kind)

    if isinstance(action, JointForce | JointMovement):
        at = _joint_axis(stretches, action.joint)
        return shown(*_joint_action_words(action, units), at, at)
    stretch = next(s for s in stretches if s.member.id == action.member)
    if isinstance(action, DistributedForce):
        low = action.transverse[0] if action.transverse else 0.0
        high = _polynomial(action.transverse, action.end - action.start)
        words = units.text(low, "line load")
        if units.number(low, "line load") != units.number(high, "line load"):
            words = f"{units.number(low, 'line load')} … {units.text(high, 'line load')}"
        return shown(
            "spread", words, stretch.to_axis(action.start), stretch.to_axis(action.end), low, high
        )
    if isinstance(action, PointForce):
        at = stretch.to_axis(action.position)
        return shown("point", units.text(action.transverse, "force"), at, at, action.transverse)
    if isinstance(action, PointMoment):
        at = stretch.to_axis(action.position)
        return shown("couple", units.text(action.moment, "moment"), at, at, action.moment)
    assert isinstance(action, ImposedCurvature)
    words = say("curvature {value} mrad/m", value=f"{action.curvature * 1e3:.3g}")
    return shown(
        "curvature", words, stretch.to_axis(action.start), stretch.to_axis(action.end),
        action.curvature, action.curvature,
    )  # fmt: skip


def _joint_action_words(action: JointForce | JointMovement, units: DisplayUnits) -> tuple[str, str]:
    if isinstance(action, JointForce):
        parts = []
        if action.vertical:
            parts.append(units.text(action.vertical, "force"))
        if action.horizontal:
            parts.append(say("{force} to the right", force=units.text(action.horizontal, "force")))
        if action.moment:
            parts.append(units.text(action.moment, "moment"))
        return "joint", ", ".join(parts) or "0"
    parts = []
    if action.vertical:
        parts.append(say("moves down {by}", by=units.text(action.vertical, "deflection")))
    if action.horizontal:
        parts.append(say("moves right {by}", by=units.text(action.horizontal, "deflection")))
    if action.rotation:
        parts.append(say("turns {by}", by=units.text(action.rotation, "rotation")))
    return "movement", ", ".join(parts) or "0"


def _joint_axis(stretches: tuple[Stretch, ...], joint: int) -> float:
    for stretch in stretches:
        if stretch.member.start == joint:
            return stretch.start
        if stretch.member.end == joint:
            return stretch.end
    return 0.0


def _polynomial(coefficients: tuple[float, ...], v: float) -> float:
    return float(sum(c * v**i for i, c in enumerate(coefficients)))
