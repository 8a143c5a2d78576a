"""Fixed-end moments with their formulas and numbers, for the calculation sheet."""

from __future__ import annotations

from dataclasses import replace

from analysis_core.distribution.fixed_end import end_actions
from analysis_core.model import (
    DistributedForce,
    ImposedCurvature,
    Line,
    Member,
    MemberAction,
    Piece,
    PointForce,
    PointMoment,
)
from analysis_core.units import DisplayUnits


def fixed_end_rows(line: Line, units: DisplayUnits) -> list[tuple[str, str, str, str, str]]:
    """Return member, action, formula with numbers, and the moments at start and end.

    Both ends held; clockwise on the member; display units.
    """
    rows = []
    for member in line.members:
        for action in line.actions:
            if getattr(action, "member", None) != member.id:
                continue
            assert isinstance(
                action, DistributedForce | PointForce | PointMoment | ImposedCurvature
            )
            found = end_actions(member, action)
            if abs(found.start_moment) + abs(found.end_moment) == 0.0:
                continue
            rows.append((
                f"{member.start}-{member.end}",
                _what(member, action, units),
                _formula(member, action, units),
                units.number(found.start_moment, "moment"),
                units.number(found.end_moment, "moment"),
            ))  # fmt: skip
    return rows


def _what(member: Member, action: MemberAction, units: DisplayUnits) -> str:
    match action:
        case DistributedForce():
            ends = [action.transverse_at(action.start), action.transverse_at(action.end)]
            size = units.number(ends[0], "line load")
            if abs(ends[0] - ends[1]) > 1e-9 * max(abs(e) for e in ends):
                size += f" to {units.number(ends[1], 'line load')}"
            return f"{size} {units.symbol('line load')}{_stretch(member, action, units)}"
        case PointForce():
            place = units.text(action.position, "length")
            return f"{units.text(action.transverse, 'force')} at {place}"
        case PointMoment():
            place = units.text(action.position, "length")
            return f"{units.text(action.moment, 'moment')} at {place}"
        case ImposedCurvature():
            return f"curvature {action.curvature:.3e} 1/m"


def _stretch(member: Member, action: DistributedForce, units: DisplayUnits) -> str:
    if action.start <= 1e-9 and action.end >= member.length - 1e-9:
        return " all along"
    start, end = units.number(action.start, "length"), units.text(action.end, "length")
    return f" from {start} to {end}"


def _formula(member: Member, action: MemberAction, units: DisplayUnits) -> str:
    length = member.length
    span = units.number(length, "length")
    if not member.prismatic:
        shear = member.shear_parameter
        if shear is None:
            return "by integration along the member, whose rigidity varies"
        rigid = _formula(replace(member, pieces=(_rigid(member),)), action, units)
        if isinstance(action, DistributedForce) and "L²/12 =" in rigid:
            return rigid  # the same at both ends: shear changes nothing
        return f"{rigid}; of A and B so: (A - B)/2 ± (A + B)/(2 (1 + Φ)), Φ = {shear:.4f}"
    match action:
        case DistributedForce() if _uniform(action) and _whole(action, length):
            w = units.number(action.transverse[0], "line load")
            return f"∓ w L²/12 = {w} · {span}²/12"
        case DistributedForce():
            return _part_formula(action, length, units)
        case PointForce():
            force = units.number(action.transverse, "force")
            a = units.number(action.position, "length")
            b = units.number(length - action.position, "length")
            return f"- P a b²/L² = {force} · {a} · {b}²/{span}²; + P a² b/L²"
        case PointMoment():
            a = units.number(action.position, "length")
            b = units.number(length - action.position, "length")
            return f"M b (b-2a)/L², M a (a-2b)/L² with a = {a}, b = {b}"
        case ImposedCurvature():
            return "EI κ at each end over the whole length; else by integration"


def _part_formula(action: DistributedForce, length: float, units: DisplayUnits) -> str:
    """Closed forms of ∫ w s (L-s)²/L² ds and ∫ w s² (L-s)/L² ds, where w is uniform or linear."""
    span = units.number(length, "length")
    a, b = (units.number(s, "length") for s in (action.start, action.end))
    if _uniform(action):
        return (
            f"w/(12 L²) [s² (6 L² - 8 L s + 3 s²)] from s = {a} to {b}, L = {span}; start "
            f"negative, end w/(12 L²) [s³ (4 L - 3 s)]"
        )
    if len(action.transverse) == 2 and _whole(action, length):
        first, last = (units.number(action.transverse_at(s), "line load")
                       for s in (action.start, action.end))  # fmt: skip
        return (
            f"- (3 w_1 + 2 w_2) L²/60, (2 w_1 + 3 w_2) L²/60 = (2 · {first} + 3 · {last}) · "
            f"{span}²/60"
        )
    return f"∓ ∫ w s (L-s)²/L² ds and ± ∫ w s² (L-s)/L² ds from {a} to {b}, L = {span}"


def _rigid(member: Member) -> Piece:
    return replace(member.pieces[0], length=member.length, shear=None)


def _uniform(action: DistributedForce) -> bool:
    return bool(action.transverse) and not any(action.transverse[1:])


def _whole(action: DistributedForce, length: float) -> bool:
    slack = 1e-9 * length
    return action.start <= slack and action.end >= length - slack
