"""Results of solving a line: frozen arrays.  Units and signs as in ``model``.

Arrays have the case first.  They are marked read-only when they leave the solver.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from functools import partial
from typing import NamedTuple, TypeVar, overload

import numpy as np
from numpy.typing import NDArray

from analysis_core.findings import Finding
from analysis_core.model import Line, LineModel

Floats = NDArray[np.float64]
Item = TypeVar("Item", covariant=True)


@dataclass(frozen=True, slots=True, eq=False)
class LineSolution:
    """End forces and joint movements of one line for C cases, M members and J joints.

    end_moments   (C, M, 2)  N·m, on the member at start and end, clockwise positive
    end_shears    (C, M, 2)  N, diagram shear just inside start and end
    axial         (C, M, 2)  N, tension positive, just inside start and end
    rotations     (C, J)     rad, of the joint, clockwise positive
    end_rotations (C, M, 2)  rad, of the member's own ends (differs from the joint's at a
                             release or end spring)
    displacements (C, J, 2)  m, (right, down)
    reactions     (C, J, 3)  N, N, N·m: horizontal (right), vertical (up), moment (clockwise);
                             0 where nothing supports
    joint_residual, continuity_residual  largest over the line and its cases, N·m and rad
    """

    line: Line
    cases: tuple[str, ...]
    end_moments: Floats
    end_shears: Floats
    axial: Floats
    rotations: Floats
    end_rotations: Floats
    displacements: Floats
    reactions: Floats
    joint_residual: float
    continuity_residual: float
    method: str


@dataclass(frozen=True, slots=True)
class Extreme:
    """A governing value: ``x`` in m from the member's start, ``source`` names what governs.

    ``source`` is the combination, and the loading arrangement where one governs:
    "U2 (imposed on spans 1, 3)".
    """

    value: float
    x: float = 0.0
    source: str = ""


@dataclass(frozen=True, slots=True, eq=False)
class MemberEnvelope:
    """Exact extremes of one member over a limit state, and the envelope at N stations.

    Values: N·m, N, m.  ``hogging`` is the lowest diagram moment, ``shear_min`` the lowest shear,
    ``deflection_up`` the lowest deflection (a member that only sags has one of 0 or more).
    ``start_moment``, ``end_moment``: lowest and highest diagram moment at the ends.
    """

    member: int
    sagging: Extreme
    hogging: Extreme
    shear_max: Extreme
    shear_min: Extreme
    deflection_down: Extreme
    deflection_up: Extreme
    start_moment: tuple[float, float]
    end_moment: tuple[float, float]
    x: Floats
    moment_max: Floats
    moment_min: Floats
    shear_max_at: Floats
    shear_min_at: Floats
    deflection_max: Floats
    deflection_min: Floats


@dataclass(frozen=True, slots=True)
class ReactionEnvelope:
    """Governing reactions at one joint: N, N, N·m, as in ``LineSolution.reactions``."""

    joint: int
    vertical_max: Extreme
    vertical_min: Extreme
    horizontal_max: Extreme = Extreme(0.0)
    horizontal_min: Extreme = Extreme(0.0)
    moment_max: Extreme = Extreme(0.0)
    moment_min: Extreme = Extreme(0.0)


class ReactionBounds(NamedTuple):
    """Lowest and highest vertical, horizontal reaction and moment at a joint: N, N, N·m."""

    joint: int
    lowest: Sequence[float]
    highest: Sequence[float]


@dataclass(frozen=True, slots=True)
class LineEnvelope:
    """Governing effects of one line for one limit state."""

    limit_state: str
    members: Sequence[MemberEnvelope]
    reactions: Sequence[ReactionEnvelope]


class OnRequest(Sequence[Item]):
    """``count`` items, the first of which is number ``first`` of what ``make`` makes.

    Lines are treated by the thousand; what few ask for is made when it is asked for, anew each
    time.
    """

    __slots__ = ("_make", "_numbers")

    def __init__(self, make: Callable[[int], Item], count: int, first: int = 0) -> None:
        self._make = make
        self._numbers = range(first, first + count)

    def __len__(self) -> int:
        return len(self._numbers)

    @overload
    def __getitem__(self, index: int) -> Item: ...

    @overload
    def __getitem__(self, index: slice) -> Sequence[Item]: ...

    def __getitem__(self, index: int | slice) -> Item | Sequence[Item]:
        if isinstance(index, slice):
            return tuple(map(self._make, self._numbers[index]))
        return self._make(self._numbers[index])

    def __iter__(self) -> Iterator[Item]:
        return map(self._make, self._numbers)

    def __eq__(self, other: object) -> bool:
        return isinstance(other, Sequence) and tuple(self) == tuple(other)

    __hash__ = None  # type: ignore[assignment]  # as a list: two may be equal


@dataclass(frozen=True, slots=True, eq=False)
class Extremes:
    """B extremes: value, x (B), and the words for each."""

    value: Floats
    x: Floats
    source: Sequence[str]

    def __len__(self) -> int:
        return len(self.value)

    def __getitem__(self, b: int) -> Extreme:
        return Extreme(float(self.value[b]), float(self.x[b]), self.source[b])


@dataclass(frozen=True, slots=True, eq=False)
class EffectEnvelope:
    """One effect of B members: extremes, and the envelope at N stations, top and bottom (B, N)."""

    highest: Extremes
    lowest: Extremes
    top: Floats
    bottom: Floats


@dataclass(frozen=True, slots=True, eq=False)
class MemberEnvelopes:
    """Envelopes of B members of many lines: member (B) its number in its line, x (B, N) m."""

    member: NDArray[np.int64]
    x: Floats
    moment: EffectEnvelope
    shear: EffectEnvelope
    deflection: EffectEnvelope

    def __getitem__(self, b: int) -> MemberEnvelope:
        moment, shear, deflection = self.moment, self.shear, self.deflection
        top, bottom = moment.top[b], moment.bottom[b]
        return MemberEnvelope(
            member=int(self.member[b]),
            sagging=moment.highest[b],
            hogging=moment.lowest[b],
            shear_max=shear.highest[b],
            shear_min=shear.lowest[b],
            deflection_down=deflection.highest[b],
            deflection_up=deflection.lowest[b],
            start_moment=(float(bottom[0]), float(top[0])),
            end_moment=(float(bottom[-1]), float(top[-1])),
            x=self.x[b],
            moment_max=top,
            moment_min=bottom,
            shear_max_at=shear.top[b],
            shear_min_at=shear.bottom[b],
            deflection_max=deflection.top[b],
            deflection_min=deflection.bottom[b],
        )


class MemberRows(OnRequest[MemberEnvelope]):
    """The members of one line, each a row of one of several blocks of envelopes."""

    __slots__ = ("_blocks", "_places")

    def __init__(
        self,
        blocks: Sequence[MemberEnvelopes],
        places: Sequence[tuple[int, int]],
        count: int,
        first: int,
    ) -> None:
        super().__init__(partial(_member, blocks, places), count, first)
        self._blocks = blocks
        self._places = places

    def place(self, member: int) -> tuple[MemberEnvelopes, int]:
        """Return the block that holds a member, and its row in that."""
        block, row = self._places[self._numbers[member]]
        return self._blocks[block], row


def _member(
    blocks: Sequence[MemberEnvelopes], places: Sequence[tuple[int, int]], number: int
) -> MemberEnvelope:
    block, row = places[number]
    return blocks[block][row]


@dataclass(frozen=True, slots=True, eq=False)
class ReactionEnvelopes:
    """Governing reactions at S supports of many lines: joint (S) its number in its line.

    ``highest``, ``lowest``: three extremes of each support, vertical, horizontal, moment (3 * S).
    """

    joint: NDArray[np.int64]
    highest: Extremes
    lowest: Extremes

    def __getitem__(self, s: int) -> ReactionEnvelope:
        both = (each[3 * s + i] for i in range(3) for each in (self.highest, self.lowest))
        return ReactionEnvelope(int(self.joint[s]), *both)


class ReactionRows(OnRequest[ReactionEnvelope]):
    """The supports of one line, rows of a block."""

    __slots__ = ("_block",)

    def __init__(self, block: ReactionEnvelopes, count: int, first: int) -> None:
        super().__init__(block.__getitem__, count, first)
        self._block = block

    def bounds(self) -> list[ReactionBounds]:
        """Return the values alone."""
        rows = slice(self._numbers.start, self._numbers.stop)
        values = slice(3 * rows.start, 3 * rows.stop)
        joints = self._block.joint[rows].tolist()
        low, high = (
            each.value[values].reshape(-1, 3).tolist()
            for each in (self._block.lowest, self._block.highest)
        )
        return list(map(ReactionBounds, joints, low, high))


def reaction_bounds(envelope: LineEnvelope) -> list[ReactionBounds]:
    """Return the lowest and highest reactions at every support."""
    found = envelope.reactions
    if isinstance(found, ReactionRows):
        return found.bounds()
    return [
        ReactionBounds(
            r.joint,
            [float(e.value) for e in (r.vertical_min, r.horizontal_min, r.moment_min)],
            [float(e.value) for e in (r.vertical_max, r.horizontal_max, r.moment_max)],
        )
        for r in found
    ]


@dataclass(frozen=True, slots=True, eq=False)
class Stations:
    """Effects at N stations of each of M members for R results (cases or combinations).

    x (M, N) in m from the member's start; moment, shear, deflection (R, M, N) in N·m, N and m.
    """

    names: tuple[str, ...]
    x: Floats
    moment: Floats
    shear: Floats
    deflection: Floats


@dataclass(frozen=True, slots=True)
class Verification:
    """What every run proves of itself: N·m, rad, and a relative difference."""

    joint_residual: float
    continuity_residual: float
    independent_check: float


@dataclass(frozen=True, slots=True)
class LineResult:
    """One line with everything that was found out about it.

    ``solution`` holds the cases, None where the line was not analysed.  ``envelopes`` by limit
    state.
    """

    line: Line
    status: str
    """"balanced" or "not analysed"."""
    solution: LineSolution | None = None
    combine: Callable[[], LineSolution] | None = None
    """Gives ``combined``, on request."""
    envelopes: Mapping[str, LineEnvelope] = field(default_factory=dict)
    verification: Verification | None = None
    parts: LineSolution | None = None
    """The solution of what stands on each span by itself; its cases are named "Q @ span 2"."""
    detail: Callable[[], object] | None = None
    """Gives the ``line_details.LineDetail`` of the line, on request."""
    fingerprint: str = ""
    """Of all that the results depend on; see ``fingerprints``."""
    basis: Mapping[str, str] = field(default_factory=dict)
    """What the fingerprint was taken of, in short texts by subject."""

    @property
    def combined(self) -> LineSolution | None:
        """The arrays of ``solution`` for combinations: its ``cases`` are their names."""
        return None if self.combine is None else self.combine()


@dataclass(frozen=True, slots=True)
class Outcome:
    """A whole run: the file, the model and a result per line, in the order of its lines."""

    file: str
    schema: str
    fingerprint: str
    model: LineModel
    lines: tuple[LineResult, ...]
    findings: tuple[Finding, ...] = ()
    rules: str = ""
    """Name and edition of the rule set."""
    received: tuple[object, ...] = ()
    """What columns, walls and footings carry, as ``stacks.Received``, from the top down."""
