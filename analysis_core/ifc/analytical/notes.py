"""Findings made while an analysis model is read, and what counts as a malformed entity."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any

from analysis_core.findings import Finding, Severity

# What attribute access raises where an entity holds something else than the schema says:
# a number for a list, nothing for a mandatory value, an entity of the wrong class.
MALFORMED = (
    AttributeError, IndexError, KeyError, TypeError, ValueError, RuntimeError, ArithmeticError,
)  # fmt: skip

# By class name with its schema (the same name may be derived otherwise in another schema).
_KINDS: dict[tuple[str, str], bool] = {}


class Notes:
    """Collects findings in order, each once."""

    def __init__(self) -> None:
        self._findings: dict[Finding, None] = {}

    def add(
        self, severity: Severity, slug: str, message: str, elements: Iterable[str] = ()
    ) -> None:
        """Write down one finding; ``elements`` are GlobalIds."""
        known = tuple(dict.fromkeys(element for element in elements if element))
        self._findings[Finding(severity, slug, message, known)] = None

    def extend(self, findings: Iterable[Finding]) -> None:
        """Take over findings made elsewhere."""
        self._findings.update(dict.fromkeys(findings))

    def identified(self, entity: Any, taken: dict[str, int]) -> bool:
        """Whether an entity has a GlobalId of its own; noted if not, and then it is left out.

        ``taken`` holds the GlobalIds met so far, and is added to.
        """
        key = global_id(entity)
        if key and taken.setdefault(key, entity.id()) == entity.id():
            return True
        why = f"shares its GlobalId with #{taken[key]}" if key else "has no GlobalId"
        self.add(
            "error",
            "no-own-global-id",
            f"{titled(entity)} (#{entity.id()}) was left out: it {why}, so that nothing could be "
            f"told apart or posted. Give it a GlobalId of its own.",
            (key,),
        )
        return False

    def malformed(self, entity: Any, error: Exception) -> None:
        """Note an entity that was left out because its attributes make no sense."""
        reason = str(error).splitlines()[0][:120] if str(error) else type(error).__name__
        self.add(
            "warning",
            "malformed-entity",
            f"{titled(entity)} was left out: it is not as the schema asks ({reason}). Export the "
            f"model again.",
            (global_id(entity),),
        )

    @property
    def findings(self) -> tuple[Finding, ...]:
        """All findings in the order in which they were made."""
        return tuple(self._findings)


def is_kind(entity: Any, ifc_class: str) -> bool:
    """Whether an entity is of a class or of one derived from it.

    Remembered by class: asking the library each time takes three times as long.
    """
    key = entity.is_a(True), ifc_class
    known = _KINDS.get(key)
    if known is None:
        known = _KINDS[key] = bool(entity.is_a(ifc_class))
    return known


def global_id(entity: Any) -> str:
    """Return the GlobalId of a rooted entity, "" where it has none that can be used."""
    try:
        value = entity[0] if is_kind(entity, "IfcRoot") else ""
    except MALFORMED:
        return ""
    return value if isinstance(value, str) else ""


def name_of(entity: Any) -> str:
    """Return the Name of a rooted entity, "" where it has none."""
    try:
        value = entity[2]
    except MALFORMED:
        return ""
    return value.strip() if isinstance(value, str) else ""


def titled(entity: Any) -> str:
    """Return how a message calls an entity: its class, its name, and what to find it by."""
    key = global_id(entity)
    where = f"GlobalId {key}" if key else f"#{entity.id()}"
    name = name_of(entity) if key else ""
    return f"{entity.is_a()} '{name}' ({where})" if name else f"{entity.is_a()} ({where})"
