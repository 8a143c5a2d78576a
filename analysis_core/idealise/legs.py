"""Columns above and below a line as legs that restrain its rotation."""

from __future__ import annotations

import math
from collections.abc import Iterable

from analysis_core.building import AxisMember, Carrier
from analysis_core.idealise.draft import Bar, Draft, DraftJoint
from analysis_core.idealise.grid_index import GridIndex
from analysis_core.idealise.log import Log, named
from analysis_core.idealise.plan import inside
from analysis_core.idealise.properties import PropertyTable
from analysis_core.model import FREE, RIGID, Point
from analysis_core.settings import Settings

# A column that reaches less far from the line than this is no leg (m).
_SHORTEST = 0.5
_BESIDE = 0.1
_PLUMB = 0.05


class Legs:
    """Puts the columns of a building on the lines that they hold."""

    def __init__(
        self, columns: Iterable[Carrier], drafts: list[Draft], settings: Settings, log: Log
    ) -> None:
        self._settings, self._log = settings, log
        self._columns: GridIndex[Carrier] = GridIndex()
        self._levels: dict[str, list[float]] = {}
        for column in sorted(columns, key=lambda c: c.global_id):
            if column.start is None or column.end is None or len(column.corners) < 3:
                continue
            xs, ys = zip(*column.corners, strict=True)
            box = (min(xs), min(ys), column.bottom, max(xs), max(ys), column.top)
            self._columns.add_box(column, box)
        for draft in drafts:
            for number, joint in enumerate(draft.joints):
                if joint.element is not None and joint.vertical == RIGID:
                    for column in self._at(draft.point(number)):
                        level = draft.point(number)[2]
                        self._levels.setdefault(column.global_id, []).append(level)

    def put(self, draft: Draft, table: PropertyTable) -> None:
        """Add a leg below and a leg above every joint of a line that a column holds."""
        for number in range(len(draft.joints)):
            joint = draft.joints[number]
            if joint.vertical != RIGID or joint.settled:
                continue
            point = draft.point(number)
            columns = self._at(point)
            if not any(column.global_id == joint.element for column in columns):
                continue
            for column in columns:
                for up in (False, True):
                    reach = self._reach(column, point[2], up=up)
                    if reach >= _SHORTEST:
                        self._add(draft, number, column, reach, table, up=up)

    def _at(self, point: Point) -> list[Carrier]:
        x, y, z = point
        near = self._columns.near_box((x, y, z - 1.0, x, y, z + 1.0))
        return [c for c in near if inside(c.corners, (x, y))]

    def _reach(self, column: Carrier, level: float, *, up: bool) -> float:
        """Return how far a column goes up or down to its end or to the next line that it meets."""
        sign = 1.0 if up else -1.0
        far = (column.top - level) if up else (level - column.bottom)
        near = (column.bottom - level) if up else (level - column.top)
        if near > self._settings.tolerances.bearing + _BESIDE + self._depth_allowed():
            return 0.0
        others = [sign * (z - level) for z in self._levels.get(column.global_id, ())]
        return min([far, *(other for other in others if other > _SHORTEST)])

    def _depth_allowed(self) -> float:
        return 0.5  # half the depth of a deep beam lies between its axis and the column

    def _add(
        self,
        draft: Draft,
        number: int,
        column: Carrier,
        reach: float,
        table: PropertyTable,
        *,
        up: bool,
    ) -> None:
        assert column.start is not None
        assert column.end is not None
        member = _member(column)
        lean = math.hypot(member.end[0] - member.start[0], member.end[1] - member.start[1])
        fault = table.of(member).fault
        if lean > _PLUMB * (member.end[2] - member.start[2]):
            fault = "it is not plumb"
        if fault:
            self._log.add(
                "warning",
                "leg-left-out",
                f"Column {named(column)} is not taken as a leg of line {draft.mark}: {fault}.",
                (column.global_id,),
                draft.mark,
            )
            return
        joint = draft.joints[number]
        side = "above" if up else "below"
        far = DraftJoint(
            joint.x,
            joint.z + (reach if up else -reach),
            f"{column.global_id} {side} {joint.key}",
            vertical=RIGID,  # the line's own joint keeps the reaction; the leg slides along it
            horizontal=RIGID,
            rotation=RIGID if self._settings.analysis.leg_far_end == "fixed" else FREE,
            elements=[column.global_id],
            reason=f"far end of column {named(column)}, taken as "
            f"{self._settings.analysis.leg_far_end} (leg_far_end)",
        )
        point = draft.point(number)
        far.point = (point[0], point[1], point[2] + (reach if up else -reach))
        draft.joints.append(far)
        last = len(draft.joints) - 1
        station = point[2] - member.start[2]
        low, high = (station, station + reach) if up else (station - reach, station)
        ends = (number, last) if up else (last, number)
        draft.bars.append(Bar(member, *ends, low, high, role="leg"))
        if joint.reason and "legs" not in joint.reason:
            joint.reason = joint.reason.replace("taken as pinned by rule", "legs restrain it")
            joint.reason = joint.reason.replace("continuous by rule", "continuous, with legs")


def _member(column: Carrier) -> AxisMember:
    assert column.start is not None
    assert column.end is not None
    return AxisMember(
        column.global_id,
        column.name,
        column.ifc_class,
        column.start,
        column.end,
        column.up,
        column.section,
        material=column.material,
        storey=column.storey,
    )
