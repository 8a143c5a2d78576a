"""Sections and materials of members as changes of the job file's text."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import Any

from analysis_core.errors import JobError
from analysis_core.job.edit import as_list, entries, with_entry, with_replaced, without_entry
from analysis_core.settings import TableSection


def decide_members(
    text: str,
    elements: Sequence[str],
    *,
    profile: str = "",
    material: str = "",
    row: TableSection | None = None,
) -> str:
    """Give elements (GlobalIds) a section or a material by name.

    ``row``: dimensions of the profile, where neither the model nor the job file has it yet.
    What was given the same elements before and is not given now stays.
    """
    given = {k: v for k, v in (("profile", profile), ("material", material)) if v}
    if row is not None:
        text = _with_section(text, row)
    wanted = set(elements)
    for index, entry in reversed(list(enumerate(entries(text, "members")))):
        ids = _ids(entry)
        if ids is None or not ids <= wanted:
            continue
        rest = {k: v for k, v in entry.items() if k != "on" and k not in given}
        if ids == wanted:
            given = {**rest, **given}
            rest = {}
        text = _left(text, index, entry["on"], rest)
    return with_entry(text, "members", {"on": {"id": _written(elements)}, **given})


def drop_members(text: str, elements: Iterable[str]) -> str:
    """Take back what was given to elements, so that they are as the model has them.

    What the job file gives by name, type or the like stays; it is changed there.
    """
    wanted = set(elements)
    for index, entry in reversed(list(enumerate(entries(text, "members")))):
        ids = _ids(entry)
        if ids is None or not ids & wanted:
            continue
        kept = [i for i in _listed(entry["on"]["id"]) if i not in wanted]
        rest = {k: v for k, v in entry.items() if k != "on"} if kept else {}
        text = _left(text, index, {"id": kept}, rest)
    return text


def _left(text: str, index: int, on: Any, rest: dict[str, Any]) -> str:
    """The text with what is left of an entry, or without it."""
    if rest:
        return with_replaced(text, "members", index, {"on": on, **rest})
    return without_entry(text, "members", index)


def _with_section(text: str, row: TableSection) -> str:
    """Write a section into the section table; one of its name must be the same."""
    text = as_list(text, "section_table")
    for known in entries(text, "section_table"):
        if isinstance(known, dict) and str(known.get("name", "")).strip() == row.name:
            return text
    entry: dict[str, Any] = {"name": row.name, "shape": row.shape}
    entry |= {key: f"{1000.0 * value:.9g} mm" for key, value in row.dimensions.items()}
    if row.categories:
        entry["category"] = row.categories[0]
    return with_entry(text, "section_table", entry)


def _ids(entry: Any) -> set[str] | None:
    """The GlobalIds that an entry chooses; None where it chooses in another way."""
    on = entry.get("on") if isinstance(entry, dict) else None
    if not isinstance(on, dict) or set(on) != {"id"}:
        return None
    return set(_listed(on["id"]))


def _listed(ids: Any) -> list[str]:
    return [ids] if isinstance(ids, str) else list(ids)


def _written(elements: Sequence[str]) -> Any:
    if not elements:
        raise JobError("No element is chosen; choose a line that has some.")
    return elements[0] if len(elements) == 1 else list(elements)
