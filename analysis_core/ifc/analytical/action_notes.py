"""What is found about actions while they are read, in sentences."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from analysis_core.findings import listed
from analysis_core.ifc.analytical.members import Local
from analysis_core.ifc.analytical.notes import Notes, global_id, is_kind, titled
from analysis_core.ifc.analytical.targets import Target
from analysis_core.settings import Tolerances

_OFF_TARGET = (
    ("IfcStructuralCurveMember", "the member it acts on was left out itself"),
    ("IfcStructuralPointConnection", "the connection it acts on was left out itself"),
    ("IfcStructuralCurveConnection", "actions on curve connections are not analysed"),
    ("IfcStructuralSurfaceMember", "surface members are not analysed"),
    ("IfcStructuralSurfaceConnection", "surface connections are not analysed"),
    ("IfcElement", "it acts on a physical element, not on a member of the analysis model"),
)


class ActionNotes:
    """Writes down what was assumed about actions, and what was left out."""

    def __init__(self, notes: Notes, tolerances: Tolerances, unit_length: float) -> None:
        self._notes = notes
        self._tolerances = tolerances
        self._unit_length = unit_length
        self._relative: list[str] = []

    def relative(self, action: Any, stations: Sequence[float], target: Target) -> None:
        """Locations are lengths; from exactly 0 to exactly 1 they look like fractions."""
        length = self._unit_length
        low, high = stations[0] / length, stations[-1] / length
        if low >= 0.0 and abs(high - 1.0) < 1e-9 and target.length / length > 1.5:
            self._relative.append(global_id(action))

    def finish(self) -> None:
        """Write down what was gathered."""
        if self._relative:
            self._notes.add(
                "warning",
                "locations-look-relative",
                f"{len(self._relative)} actions ({listed(self._relative)}) end at location 1 "
                f"exactly. Locations are lengths by the standard and were taken so; if they are "
                f"meant as fractions of the member, multiply them by its length.",
                self._relative,
            )

    def left_out(
        self, action: Any, reason: str, item: Any = None, *, slug: str = "action-not-understood"
    ) -> None:
        """Note an action that was left out; ``reason`` completes "was left out: "."""
        on = f" on {titled(item)}" if item is not None else ""
        self._notes.add(
            "warning",
            slug,
            f"{titled(action)}{on} was left out: {reason}.",
            (global_id(action), global_id(item) if item is not None else ""),
        )

    def off_target(self, action: Any, item: Any) -> None:
        """Note an action on something that is not analysed."""
        reason = next(
            (text for name, text in _OFF_TARGET if is_kind(item, name)), "nothing is known of it"
        )
        self.left_out(action, reason, item, slug="action-without-member")

    def several(self, action: Any, items: Sequence[Any]) -> None:
        """Note an action on more than one item."""
        self._notes.add(
            "warning",
            "action-on-several",
            f"{titled(action)} acts on {len(items)} items; it was put on each of them in full.",
            (global_id(action), *(global_id(item) for item in items)),
        )

    def empty(self, action: Any) -> None:
        """Note an action without effect."""
        self._notes.add(
            "note",
            "empty-action",
            f"{titled(action)} states no value other than zero; it has no effect.",
            (global_id(action),),
        )

    def aside(self, action: Any, local: Local, aside: float) -> None:
        """Note an action that lies ``aside`` m off the axis of its member."""
        near = aside <= self._tolerances.join
        self._notes.add(
            "note" if near else "warning",
            "action-off-axis",
            f"{titled(action)} acts {aside * 1e3:.0f} mm beside the axis of member "
            f"{local.member.global_id}; it was moved onto the axis, and the couple that this "
            f"would add is neglected.",
            (global_id(action), local.member.global_id),
        )

    def warping(self, action: Any, load: Any) -> None:
        """Note a warping moment."""
        if is_kind(load, "IfcStructuralLoadSingleForceWarping") and load[7]:
            self._notes.add(
                "warning",
                "warping-moment",
                f"{titled(action)} states a warping moment, which is not analysed.",
                (global_id(action),),
            )
