"""Whether a selector of the job file chooses a member of a line."""

from __future__ import annotations

from fnmatch import fnmatchcase

from analysis_core.model import Line, LineModel, Member
from analysis_core.settings import Selector


def chooses(on: Selector, line: Line, member: Member, model: LineModel) -> bool:
    """Return whether all that the selector states holds; wildcards, case ignored.

    Class and type are not known of a line's members; a selector that states them chooses none.
    """
    if on.global_ids and member.element not in on.global_ids:
        return False
    if on.ifc_class or on.type_name:
        return False
    pairs = (
        (on.name, model.names.get(member.element, "")),
        (on.storey, line.storey or ""),
        (on.line, line.mark),
        (on.material, member.material.name if member.material else ""),
    )
    return all(not p or fnmatchcase(text.casefold(), p.casefold()) for p, text in pairs)
