"""The section table of a job file: written out, in files beside it, or both."""

from __future__ import annotations

import csv
from collections.abc import Iterable, Sequence
from dataclasses import replace
from pathlib import Path
from typing import Any, NamedTuple

from analysis_core.errors import JobError
from analysis_core.findings import Finding, listed
from analysis_core.job.check import check
from analysis_core.job.profile_lists import is_profile_list, profile_list
from analysis_core.job.sections import csv_rows, table_sections
from analysis_core.job.yaml_text import LARGEST, read_yaml, schema, text_of
from analysis_core.settings import TableSection


class SectionTable(NamedTuple):
    """Sections by name; ``files``: the names of those that they are stated in."""

    sections: tuple[TableSection, ...]
    files: tuple[str, ...] = ()
    findings: tuple[Finding, ...] = ()


def section_table(stated: str | Sequence[Any], folder: Path | None) -> SectionTable:
    """Return what the job file states (checked): rows, names of files, or one such name.

    Without a ``folder`` files are named but not read.  Raises JobError.
    """
    items = [stated] if isinstance(stated, str) else list(stated)
    names = [item for item in items if isinstance(item, str)]
    rows = [item for item in items if not isinstance(item, str)]
    files = [] if folder is None else [(name, folder / name) for name in names]
    return _table(rows, files, tuple(names))


def read_files(paths: Sequence[Path]) -> SectionTable:
    """Return the section tables of files.  Raises JobError."""
    return _table([], [(path.name, path) for path in paths], tuple(p.name for p in paths))


def _table(
    rows: list[Any], files: Iterable[tuple[str, Path]], named: tuple[str, ...]
) -> SectionTable:
    lists: list[TableSection] = []
    findings: list[Finding] = []
    for name, path in files:
        text = text_of(path, "Section table")
        try:
            if len(text) > LARGEST:
                raise JobError(f"it is {len(text)} characters long; {LARGEST} are allowed.")
            if name.lower().endswith(".csv") and is_profile_list(text):
                found = profile_list(text, Path(name).name)
                lists += found.sections
                findings += found.findings
            else:
                rows += _rows(name, text)
        except (JobError, csv.Error) as error:
            raise JobError(f"Section table '{name}': {error}") from None
    own = table_sections(rows)
    sections, hidden = _together(own, lists)
    if hidden:
        findings.append(_hidden(hidden))
    return SectionTable(sections, named, tuple(findings))


def _rows(name: str, text: str) -> Any:
    """The checked rows of a section table in a file of its own."""
    rows = csv_rows(text) if name.lower().endswith(".csv") else read_yaml(text)
    if isinstance(rows, dict) and set(rows) == {"section_table"}:
        rows = rows["section_table"]
    if not isinstance(rows, list) or any(isinstance(row, str) for row in rows):
        raise JobError("it must be a list of sections.")
    return check({"section_table": rows}, schema())["section_table"]


def _together(
    own: Iterable[TableSection], lists: Iterable[TableSection]
) -> tuple[tuple[TableSection, ...], list[TableSection]]:
    """One section for each name, and those that another of their name hides."""
    found = {section.name: section for section in own}
    hidden = []
    for section in lists:
        known = found.setdefault(section.name, section)
        if known is section:
            continue
        if (known.shape, known.dimensions) != (section.shape, section.dimensions):
            hidden.append(section)
        elif known.origin:
            categories = dict.fromkeys((*known.categories, *section.categories))
            found[section.name] = replace(known, categories=tuple(categories))
    return tuple(found.values()), hidden


def _hidden(sections: Sequence[TableSection]) -> Finding:
    names = listed(section.name for section in sections)
    return Finding(
        "note",
        "profile-stated-twice",
        f"{len(sections)} profiles of '{sections[0].origin}' stand in the section table with other "
        f"dimensions already ({names}); those that stand there first are used.",
    )
