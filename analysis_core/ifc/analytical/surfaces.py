"""Level surface members as areas, and the forces on them, to be spread to the members below."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from typing import Any

from analysis_core.building import Area, AreaAction
from analysis_core.findings import listed
from analysis_core.ifc.analytical.loads import LoadError, six
from analysis_core.ifc.analytical.notes import MALFORMED, Notes, global_id, is_kind, name_of
from analysis_core.ifc.analytical.targets import axes_of, times, turned
from analysis_core.ifc.analytical.topology import Chain, Topology
from analysis_core.ifc.file_units import FileUnits
from analysis_core.ifc.unreadable import UnreadableShapeError

_PLANAR = ("PLANARFORCEUNIT",) * 3
_LEVEL = math.sin(math.radians(2.0))
"""A surface that leans by more is not level: its load does not simply hang on what is below."""


class SurfaceReader:
    """Reads surface members once, and what acts on them."""

    def __init__(
        self,
        topology: Topology,
        units: FileUnits,
        shared: Mapping[int, Any],
        notes: Notes,
        members: Sequence[Any],
    ) -> None:
        self._topology, self._units, self._shared = topology, units, shared
        self.areas: dict[int, Area] = {}
        others = []
        for member in members:
            try:
                area = self._area(member)
            except (UnreadableShapeError, *MALFORMED):
                area = None
            if area is None:
                others.append(global_id(member))
            else:
                self.areas[member.id()] = area
        _report(notes, [a.global_id for a in self.areas.values()], others)

    def action(
        self, action: Any, item: Any, cases: Sequence[tuple[str, float]]
    ) -> list[AreaAction]:
        """Return the force of an action per square metre of plan, once for each case.

        Raises LoadError for what is not an even planar force on a level surface.
        """
        area, load = self.areas.get(item.id()), action[7]
        if area is None:
            raise LoadError("it acts on a surface that is not level or whose outline is not stated")
        if load is None or not is_kind(load, "IfcStructuralLoadPlanarForce"):
            kind = "no load" if load is None else f"a load of class {load.is_a()}"
            raise LoadError(f"it states {kind}; an even planar force is understood on a surface")
        force, _ = six(load, self._units, _PLANAR)
        if action[8] == "LOCAL_COORDS":
            frame = self._topology.frame(item, self._shared.get(item.id()))
            force = turned(force, axes_of(frame))
        head = global_id(action), name_of(action)
        return [AreaAction(*head, case, area.global_id, times(force, f)) for case, f in cases]

    def _area(self, member: Any) -> Area | None:
        frame = self._topology.frame(member, self._shared.get(member.id()))
        loops = self._topology.face(member, frame)
        if not loops:
            return None
        outer = next((chain for chain, is_outer in loops if is_outer), loops[0][0])
        levels = [z for _, _, z in outer]
        size = max((math.dist(a[:2], b[:2]) for a in outer for b in outer), default=0.0)
        if len(outer) < 3 or max(levels) - min(levels) > _LEVEL * size:
            return None
        level = math.fsum(levels) / len(levels)
        return Area(
            global_id(member), name_of(member), member.is_a(), level, level, _plan(outer),
            tuple(_plan(chain) for chain, _ in loops if chain is not outer and len(chain) >= 3),
        )  # fmt: skip


def _report(notes: Notes, level: list[str], others: list[str]) -> None:
    """Say what surface members are taken for."""
    if not level and not others:
        return
    text = f"The file holds {len(level) + len(others)} surface members."
    if level:
        text += f" {len(level)} are level ({listed(level)}): their loads are spread to members."
    if others:
        text += (
            f" {len(others)} are not level, or state no outline of straight edges "
            f"({listed(others)}): they are not analysed."
        )
    notes.add("note", "surface-member", text, (*level, *others))


def _plan(chain: Chain) -> tuple[tuple[float, float], ...]:
    return tuple((x, y) for x, y, _ in chain)
