"""Findings of the physical reader, gathered by what they say so that one names many elements."""

from __future__ import annotations

import math
from dataclasses import replace

from analysis_core.findings import Finding, Severity
from analysis_core.ifc.physical.records import Record

_NAMED_AT_MOST = 5


class Notes:
    """Collects findings; the same finding for many elements becomes one."""

    def __init__(self) -> None:
        self._shared: dict[Finding, dict[str, None]] = {}
        self._ranges: dict[tuple[Severity, str, str], list[tuple[float, str, str]]] = {}
        self._groups: dict[tuple[Severity, str, str, str], list[tuple[str, str]]] = {}

    def add(self, finding: Finding, element: str = "") -> None:
        """Note a finding for an element; its own list of elements is kept empty until the end."""
        elements = self._shared.setdefault(finding, {})
        if element:
            elements[element] = None

    def add_for(self, finding: Finding, elements: list[str]) -> None:
        """Note a finding for many elements."""
        self._shared.setdefault(finding, {}).update(dict.fromkeys(elements))

    def group(self, severity: Severity, slug: str, what: str, advice: str, record: Record) -> None:
        """Note the same thing about one more element: ``what`` reads on after "N elements"."""
        self._groups.setdefault((severity, slug, what, advice), []).append(
            (record.key, record.name)
        )

    def spread(
        self, severity: Severity, slug: str, what: str, distance: float, record: Record
    ) -> None:
        """Note a distance (m) found at one more element; the finding gives their range."""
        self._ranges.setdefault((severity, slug, what), []).append(
            (distance, record.key, record.name)
        )

    def no_identity(self, record: Record) -> None:
        """Note an element that results could not be given to."""
        what = (
            "whose GlobalId another element has as well"
            if record.global_id
            else "without a GlobalId"
        )
        self._groups.setdefault(
            (
                "error",
                "duplicate-global-id",
                f"left out: {what}",
                "Give each element a GlobalId of its own.",
            ),
            [],
        ).append((record.key, record.name))

    def unknown_class(self, ifc_class: str, schema: str) -> None:
        """Note a class that was asked for and that the schema does not have."""
        self.add(
            Finding(
                "warning",
                "unknown-class",
                f"{schema} has no class {ifc_class}, which is to be read as beams; nothing was "
                f"read for it. Correct the job file (analysis, include).",
            )
        )

    def lying_column(self, record: Record) -> None:
        """Note a column that lies like a beam."""
        self.group(
            "note",
            "lying-column",
            "called columns, which lie flat and are taken as beams",
            "Give them the class IfcBeam.",
            record,
        )

    def steep(self, record: Record, steepest: float) -> None:
        """Note a member too steep to be a beam; ``steepest`` is the sine of the limit."""
        self.group(
            "note",
            "steep-member",
            f"steeper than {math.degrees(math.asin(steepest)):.0f} degrees and taken as columns: "
            f"they may carry beams, and are not analysed as beams",
            "The limit can be changed in the job file (tolerances: beam_slope).",
            record,
        )

    def left_out(self, reason: str, record: Record) -> None:
        """Note an element that is no beam."""
        self.group(
            "note",
            "not-a-beam",
            f"not taken as beams: {reason}",
            "The rules can be changed in the job file (beams).",
            record,
        )

    def curved(self, record: Record, reason: str) -> None:
        """Note a curved member."""
        self.add(
            Finding(
                _severity(record),
                "curved-member",
                f"{record.called} is curved ({reason}) and is not analysed; only straight members "
                f"are. Draw it as straight pieces if that is near enough.",
                (record.key,),
            )
        )

    def no_shape(self, record: Record, reason: str) -> None:
        """Note an element whose place or body cannot be told."""
        self.group(
            _severity(record),
            "no-representation",
            f"left out, because no axis and no body could be read: {reason}",
            "Export them with their geometry.",
            record,
        )

    def no_section(self, record: Record) -> None:
        """Note a member without a section."""
        self.group(
            "warning",
            "no-section",
            "without a section that could be read",
            "Give area and inertia in the job file (sections).",
            record,
        )

    def findings(self) -> list[Finding]:
        """Return everything noted."""
        result = [
            replace(finding, elements=(*finding.elements, *elements))
            for finding, elements in self._shared.items()
        ]
        for (severity, slug, what, advice), items in self._groups.items():
            head = _count(items) if what.startswith(":") else f"{_count(items)} "
            message = f"{head}{what}. {advice}".strip()
            result.append(Finding(severity, slug, message, tuple(i for i, _ in items)))
        for (severity, slug, what), found in self._ranges.items():
            sizes = [size for size, _, _ in found]
            result.append(
                Finding(
                    severity,
                    slug,
                    f"{_count([(i, name) for _, i, name in found])}: {what} "
                    f"({min(sizes) * 1e3:.0f} to {max(sizes) * 1e3:.0f} mm).",
                    tuple(i for _, i, _ in found),
                )
            )
        return result


def _severity(record: Record) -> Severity:
    """A beam that is not analysed is an error; a member may be a rail, a mullion or a brace."""
    return "error" if record.ifc_class.startswith("IfcBeam") else "warning"


def _count(items: list[tuple[str, str]]) -> str:
    names = [f"'{name}'" if name else global_id for global_id, name in items]
    listed = ", ".join(names[:_NAMED_AT_MOST])
    more = f" and {len(names) - _NAMED_AT_MOST} more" if len(names) > _NAMED_AT_MOST else ""
    noun = "element" if len(items) == 1 else "elements"
    return f"{len(items)} {noun} ({listed}{more})"
