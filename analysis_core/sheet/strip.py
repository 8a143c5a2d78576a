"""Where things stand on a drawing: members side by side along one axis, to scale."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from analysis_core.model import Line, Member

WIDTH = 720.0
MARGIN = 34.0
_GAP = 26.0  # between the members of a frame, which are drawn one after another


@dataclass(frozen=True, slots=True)
class Strip:
    """Pixels of the members of a line: start and pixels per metre.

    The spans of a line follow each other without gaps; legs, and all members of a frame, stand
    one after another with gaps between them.
    """

    members: tuple[Member, ...]
    starts: tuple[float, ...]
    scale: float

    def at(self, index: int, x: float) -> float:
        """Pixel of the place ``x`` m from the start of the member at ``index``."""
        return self.starts[index] + self.scale * x

    @property
    def ends(self) -> tuple[float, ...]:
        """Pixel of the end of each member."""
        return tuple(self.at(i, m.length) for i, m in enumerate(self.members))


def strip(line: Line) -> Strip:
    """Return the strip of a line: its spans, and its legs behind them."""
    spans = [m for m in line.members if m.role == "span"]
    members = [*spans, *(m for m in line.members if m.role != "span")]
    loose = [line.kind == "frame" or m.role != "span" for m in members]
    gaps = sum(loose[1:]) * _GAP
    length = sum(m.length for m in members)
    scale = (WIDTH - 2.0 * MARGIN - gaps) / length
    starts, x = [], MARGIN
    for i, member in enumerate(members):
        if i and loose[i]:
            x += _GAP
        starts.append(x)
        x += scale * member.length
    return Strip(tuple(members), tuple(starts), scale)


def pixels(value: float) -> str:
    """Return a place in pixels as text, to a tenth."""
    text = f"{value:.1f}".removesuffix(".0")
    return "0" if text == "-0" else text


def runs(starts: Sequence[float], ends: Sequence[float], y: float) -> str:
    """Return the path of a level line over members; what follows without a gap is one stroke."""
    path, last = "", ""
    for a, b in zip(starts, ends, strict=True):
        if pixels(a) != last:
            path += f"{f'H{last}' if last else ''}M{pixels(a)},{pixels(y)}"
        last = pixels(b)
    return f"{path}H{last}" if last else path
