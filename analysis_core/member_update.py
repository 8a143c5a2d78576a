"""Members given another section or material by the engineer, by the mark of a line or GlobalId."""

from __future__ import annotations

import difflib
import re
from collections.abc import Iterable, Mapping, Sequence
from typing import TYPE_CHECKING

from analysis_core.building import Building
from analysis_core.errors import IfcWriteError, JobError
from analysis_core.given_members import Given
from analysis_core.ifc.updating import Change, Wish
from analysis_core.model import LineModel
from analysis_core.report.tables import safe, table
from analysis_core.settings import Settings

if TYPE_CHECKING:
    from analysis_core.ifc.updating import Updated

_GLOBAL_ID = re.compile(r"[0-3][0-9A-Za-z_$]{21}")
_AGREEMENT = 1e-6


def wishes(
    model: LineModel,
    building: Building,
    settings: Settings,
    *,
    sections: Mapping[str, str],
    materials: Mapping[str, str],
    given: Given | None = None,
) -> list[Wish]:
    """Return what is wanted of which elements; keys are marks of lines or GlobalIds.

    A mark means the spans of the line.  ``given``: what the job file gives elements, where nothing
    else is wanted.  Raises JobError for one that the model does not have, and
    where an element is given two sections or materials.
    """
    if settings.section_table_files and not settings.section_table:  # named but not read
        raise JobError(
            f"The section table '{settings.section_table_files[0]}' of the job file was not read, "
            f"as the job file has no place on the disk yet. Save it first."
        )
    areas = {m.global_id: m.section.area for m in building.members if m.section is not None}
    densities = {m.global_id: m.material.density for m in building.members if m.material}
    found = []
    more = given or Given({}, {})
    for chosen, kind, rest in (
        (sections, "profile", more.profiles), (materials, "material", more.materials),
    ):  # fmt: skip
        wanted: dict[str, str] = {}
        for target, name in chosen.items():
            for element in _elements(target, model):
                if wanted.setdefault(element, name) != name:
                    what = "sections" if kind == "profile" else "materials"
                    raise JobError(
                        f"{model.names.get(element) or element} is given two {what}, "
                        f"'{wanted[element]}' and '{name}'. Give it one."
                    )
        wanted = {**rest, **wanted}
        # Together, so that a type is changed itself where all its occurrences are.
        for name in dict.fromkeys(wanted.values()):
            elements = tuple(e for e, n in wanted.items() if n == name)
            asked = {kind: name}
            found.append(Wish(elements, areas=areas, densities=densities, **asked))
    return found


def check_update(updated: Updated, after: Building) -> None:
    """Raise IfcWriteError where a member read back does not have the section it was given."""
    for member in after.members:
        wanted = updated.expected.get(member.global_id)
        if wanted is None:
            continue
        area = member.section.area if member.section is not None else 0.0
        if abs(area - wanted) > _AGREEMENT * wanted:
            raise IfcWriteError(
                f"Member '{member.name}' (GlobalId {member.global_id}) would not show the new "
                f"section when read back ({1e4 * area:.4g} cm² instead of {1e4 * wanted:.4g} cm²); "
                f"nothing was written. Change it where the model was made."
            )


def pairs(texts: Iterable[str], option: str) -> dict[str, str]:
    """Return target and name of each "TARGET=NAME".  Raises JobError."""
    found: dict[str, str] = {}
    for text in texts:
        target, sign, name = (part.strip() for part in text.partition("="))
        if not (target and sign and name):
            raise JobError(
                f"'{option} {text}' is not understood; write LINE-OR-GLOBALID=NAME, as in "
                f"'{option} \"L1-02=IPE 300\"'."
            )
        if found.setdefault(target, name) != name:
            raise JobError(
                f"'{option}' gives {target} both '{found[target]}' and '{name}'. Give it one."
            )
    return found


def changes_text(changes: Sequence[Change]) -> str:
    """Return the list of what was changed in the model."""
    done = [(_who(c), safe(c.what), safe(c.old), safe(c.new)) for c in changes if c.new]
    left = [f"  {_who(c)}: {safe(c.what)} ({safe(c.old)})" for c in changes if not c.new]
    parts = []
    if done:
        parts.append(table(("changed in the model", "what", "was", "is"), ("",) * 4, done))
    if left:
        parts.append("\n".join(["Left as it was, though it may no longer fit:", *left]))
    return "\n\n".join(parts)


def changes_data(changes: Sequence[Change]) -> list[dict[str, str | None]]:
    """Return the list of what was changed as plain data."""
    return [
        {"element": c.element, "name": c.name, "what": c.what, "before": c.old,
         "after": c.new or None}
        for c in changes
    ]  # fmt: skip


def _who(change: Change) -> str:
    return f"{safe(change.name)} [{safe(change.element)}]" if change.name else safe(change.element)


def _elements(target: str, model: LineModel) -> tuple[str, ...]:
    line = next((x for x in model.lines if x.mark == target), None)
    if line is not None:
        spans = dict.fromkeys(m.element for m in line.members if m.element and m.role == "span")
        return tuple(spans)
    if _GLOBAL_ID.fullmatch(target):
        return (target,)
    near = difflib.get_close_matches(target, [x.mark for x in model.lines], n=1, cutoff=0.0)
    hint = f"; the nearest is '{near[0]}'" if near else ""
    raise JobError(f"The model has no line '{target}'{hint}, and it is no GlobalId.")
