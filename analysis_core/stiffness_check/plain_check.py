"""The independent solution of one plain line, by plain numbers, and the comparison with it.

The rotations of the joints come from the slope-deflection equations by elimination along the
line.  For a single line this takes a tenth of the time that arrays need.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field

from analysis_core.model import RIGID
from analysis_core.results import LineSolution
from analysis_core.stiffness_check.plain_line import (
    Acting,
    Chain,
    Numbers,
    Pair,
    actions_of,
    chain_of,
)

_NOTHING = 1e-8
"""As in ``compare``: what is smaller than this part of the possible counts as rounding."""


@dataclass(slots=True)
class Found:
    """End moments and shears of the spans, rotations and reactions of the joints in one case."""

    moments: list[Pair]
    shears: list[Pair]
    rotations: Numbers
    lifts: Numbers = field(default_factory=list)
    couples: Numbers = field(default_factory=list)
    idle: set[int] = field(default_factory=set)
    """Joints that nothing turns or keeps from turning."""


def plain_difference(solution: LineSolution) -> float | None:
    """Return the largest relative difference of a plain line's solution; None if not plain.

    The measure is that of ``largest_difference``.
    """
    chain = chain_of(solution.line)
    if chain is None or solution.axial.any():
        return None
    actions = actions_of(solution.line, chain, solution.cases)
    if actions is None:
        return None
    given = zip(
        solution.end_moments.tolist(),
        solution.end_shears.tolist(),
        solution.rotations.tolist(),
        solution.reactions.tolist(),
        strict=True,
    )
    worst = 0.0
    for acting, (moments, shears, rotations, reactions) in zip(actions, given, strict=True):
        found = solve_chain(chain, acting)
        if found is None:
            return None
        possible = _possible(chain, acting, found)
        worst = max(
            worst,
            _of_spans(found, moments, shears, possible),
            _of_joints(chain, found, rotations, reactions, possible),
        )
    return worst


def _of_spans(
    found: Found,
    moments: list[Numbers],
    shears: list[Numbers],
    possible: tuple[float, float, float],
) -> float:
    moment = force = moment_gap = force_gap = 0.0
    for (start, end), given in zip(found.moments, moments, strict=True):
        moment = max(moment, abs(start), abs(end))
        moment_gap = max(moment_gap, abs(start - given[0]), abs(end - given[1]))
    for (start, end), given in zip(found.shears, shears, strict=True):
        force = max(force, abs(start), abs(end))
        force_gap = max(force_gap, abs(start - given[0]), abs(end - given[1]))
    return max(_relative(moment_gap, moment, possible[0]), _relative(force_gap, force, possible[1]))


def _of_joints(
    chain: Chain,
    found: Found,
    rotations: Numbers,
    reactions: list[Numbers],
    possible: tuple[float, float, float],
) -> float:
    turn = turn_gap = couple_gap = lift_gap = 0.0
    couple = max(max(abs(start), abs(end)) for start, end in found.moments)
    lift = max(max(abs(start), abs(end)) for start, end in found.shears)
    for joint, given in enumerate(reactions):
        lift = max(lift, abs(found.lifts[joint]))
        lift_gap = max(lift_gap, abs(found.lifts[joint] - given[1]), abs(given[0]))
        couple = max(couple, abs(found.couples[joint]))
        couple_gap = max(couple_gap, abs(found.couples[joint] - given[2]))
        turn = max(turn, abs(found.rotations[joint]))
        if joint not in found.idle:
            turn_gap = max(turn_gap, abs(found.rotations[joint] - rotations[joint]))
    return max(
        _relative(couple_gap, couple, possible[0]),
        _relative(lift_gap, lift, possible[1]),
        _relative(turn_gap, turn, possible[2]),
    )


def _relative(gap: float, quantity: float, possible: float) -> float:
    if gap == 0.0:
        return 0.0
    scale = quantity if quantity > _NOTHING * possible else possible
    return gap / scale if scale and gap == gap else math.inf


def _possible(chain: Chain, acting: Acting, found: Found) -> tuple[float, float, float]:
    """What the actions could cause at most: moment, force, rotation; as in ``compare``."""
    shortest, longest = min(chain.length), max(chain.length)
    stiff = [
        1.0 / (length * soft / 3.0 + slide / length)
        for length, soft, slide in zip(chain.length, chain.bending, chain.sliding, strict=True)
    ]
    turned = [max(abs(near), abs(far)) for near, far in acting.turned]
    slope = max(map(abs, acting.sinks)) / shortest + max(map(abs, acting.turns))
    force = max(
        max(map(abs, acting.loads)),
        max(max(abs(near), abs(far)) for near, far in acting.forces),
        max(max(abs(start), abs(end)) for start, end in found.shears),
    )
    held = max(k * angle for k, angle in zip(stiff, turned, strict=True)) + max(stiff) * slope
    moment = max(held, force * longest, max(map(abs, acting.couples)))
    return moment, max(force, moment / longest), max(max(turned) + slope, moment / max(stiff))


def solve_chain(chain: Chain, acting: Acting) -> Found | None:
    """Return the effects of one case, None where something turns freely."""
    left, right = chain.overhangs
    first, last = int(left), len(chain.length) - int(right)
    tips = _tip_moments(chain, acting)
    idle: set[int] = set()
    rotations = _rotations(chain, acting, first, last, tips, idle)
    if rotations is None:
        return None
    moments: list[Pair] = []
    for span, (own, cross, other) in enumerate(chain.stiffness):
        if not first <= span < last:
            moments.append(tips[0] if span < first else tips[1])
            continue
        start, end = _bent(chain, acting, span, rotations)
        moments.append((own * start + cross * end, cross * start + other * end))
    found = Found(moments, [], rotations, idle=idle)
    for span, length in enumerate(chain.length):
        lean = (moments[span][0] + moments[span][1]) / length
        near, far = acting.forces[span]
        found.shears.append((near - lean, -far - lean))
    _turn_tips(chain, acting, found)
    _react(chain, acting, found)
    return found


def _bent(chain: Chain, acting: Acting, span: int, rotations: Numbers) -> Pair:
    """Rotations of the ends against the chord, less what the span's own actions turn them."""
    chord = (acting.sinks[span + 1] - acting.sinks[span]) / chain.length[span]
    near, far = acting.turned[span]
    return rotations[span] - chord - near, rotations[span + 1] - chord - far


def _tip_moments(chain: Chain, acting: Acting) -> tuple[Pair, Pair]:
    """End moments of the first and last span where they overhang, by statics."""
    length, (near, far) = chain.length[0], acting.forces[0]
    # Left of its root: the tip's load and couple, and the span's pressure on its tip.
    couple = acting.couples[0]
    first = (couple, (acting.loads[0] + near) * length - couple)
    length, (near, far) = chain.length[-1], acting.forces[-1]
    couple = acting.couples[-1]
    last = (-(acting.loads[-1] + far) * length - couple, couple)
    return first, last


def _rotations(
    chain: Chain,
    acting: Acting,
    first: int,
    last: int,
    tips: tuple[Pair, Pair],
    idle: set[int],
) -> Numbers | None:
    """Rotations of the joints from ``first`` to ``last``, by elimination left to right."""
    rotations = list(acting.turns)
    pivots, rights, crosses = [], [], []
    for joint in range(first, last + 1):
        turning = chain.turning[joint]
        if turning == RIGID:
            pivots.append(1.0)
            rights.append(acting.turns[joint])
            crosses.append(0.0)
            continue
        pivot, right = turning, acting.couples[joint] + turning * acting.turns[joint]
        cross = 0.0
        if joint > first:
            own, across, other = chain.stiffness[joint - 1]
            near, far = _bent(chain, acting, joint - 1, [0.0] * len(rotations))
            pivot += other
            right -= across * near + other * far
            before = -across / pivots[-1]
            right += before * rights[-1]
            pivot += before * crosses[-1]
        elif first:
            right -= tips[0][1]
        if joint < last:
            own, cross, other = chain.stiffness[joint]
            near, far = _bent(chain, acting, joint, [0.0] * len(rotations))
            pivot += own
            right -= own * near + cross * far
        elif last < len(chain.length):
            right -= tips[1][0]
        if pivot <= 0.0:
            # A joint whose member ends are all released does not turn; nothing may turn it.
            if right:
                return None
            pivot = 1.0
            idle.add(joint)
        pivots.append(pivot)
        rights.append(right)
        crosses.append(cross)
    beyond = 0.0
    for place in range(last - first, -1, -1):
        beyond = (rights[place] - crosses[place] * beyond) / pivots[place]
        rotations[first + place] = beyond
    return rotations


def _turn_tips(chain: Chain, acting: Acting, found: Found) -> None:
    """Rotations of free ends: the root's and what bends between."""
    for overhangs, span, root, tip in (
        (chain.overhangs[0], 0, 1, 0),
        (chain.overhangs[1], len(chain.length) - 1, len(chain.length) - 1, len(chain.length)),
    ):
        if not overhangs:
            continue
        length = chain.length[span]
        soft, slide = length * chain.bending[span], chain.sliding[span] / length
        start, end = found.moments[span]
        near = acting.turned[span][0] + (soft / 3.0 + slide) * start + (slide - soft / 6.0) * end
        far = acting.turned[span][1] + (slide - soft / 6.0) * start + (soft / 3.0 + slide) * end
        turned = near - far if tip == 0 else far - near
        found.rotations[tip] = found.rotations[root] + turned


def _react(chain: Chain, acting: Acting, found: Found) -> None:
    last = len(chain.length)
    for joint, turning in enumerate(chain.turning):
        press = acting.loads[joint]
        couple = acting.couples[joint]
        if joint < last:
            press += found.shears[joint][0]
            couple -= found.moments[joint][0]
        if joint > 0:
            press -= found.shears[joint - 1][1]
            couple -= found.moments[joint - 1][1]
        if turning == RIGID:
            found.couples.append(-couple)
        else:
            give = found.rotations[joint] - acting.turns[joint]
            found.couples.append(-turning * give if turning else 0.0)
        found.lifts.append(press)
