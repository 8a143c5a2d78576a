"""Where findings are written down while the building is idealised."""

from __future__ import annotations

from collections.abc import Iterable

from analysis_core.building import AxisMember, Carrier, Connection
from analysis_core.findings import Finding, Severity


class Log:
    """Collects findings; the same finding is kept once."""

    def __init__(self) -> None:
        self._findings: dict[Finding, None] = {}

    def add(
        self,
        severity: Severity,
        slug: str,
        message: str,
        elements: Iterable[str] = (),
        line: str | None = None,
    ) -> None:
        """Write down one finding; ``elements`` are GlobalIds."""
        finding = Finding(severity, slug, message, tuple(elements), line)
        self._findings[finding] = None

    @property
    def findings(self) -> tuple[Finding, ...]:
        """All findings in the order in which they were made."""
        return tuple(self._findings)


def named(item: AxisMember | Carrier | Connection) -> str:
    """Return how a message calls an element: its name, and its GlobalId to find it by."""
    name = item.name.strip()
    return f"'{name}' (GlobalId {item.global_id})" if name else f"GlobalId {item.global_id}"
