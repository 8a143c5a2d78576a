"""A few entities of a model as a file of their own, for the reader to read.

Posting works on the bytes and does not open the model.  What it has to understand as the reader
does (units, placements) is copied with all that it refers to.
"""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any

import ifcopenshell

from analysis_core.ifc.schema_classes import PARSER_SCHEMAS
from analysis_core.ifc.step.index import StepIndex


def extract(index: StepIndex, roots: Iterable[int], *bodies: str) -> Any:
    """Return a file with these instances, what they refer to, and new ones with these texts.

    Numbers stay; references to what the model does not hold stay open.
    """
    texts: dict[int, str] = {}
    waiting = list(roots)
    while waiting:
        instance = waiting.pop()
        if instance in index and instance not in texts:
            texts[instance] = index.text(instance)
            waiting += index.references(instance)
    first = max(texts, default=0) + 1
    own = [f"#{first + i}={body};" for i, body in enumerate(bodies)]
    schema = PARSER_SCHEMAS.get(index.schema, index.schema)
    lines = [
        "ISO-10303-21;",
        "HEADER;",
        "FILE_DESCRIPTION((''),'2;1');",
        "FILE_NAME('','',(''),(''),'','','');",
        f"FILE_SCHEMA(('{schema}'));",
        "ENDSEC;",
        "DATA;",
        *texts.values(),
        *own,
        "ENDSEC;",
        "END-ISO-10303-21;",
        "",
    ]
    # Letters that are not ASCII stand in names, which nobody reads here.
    text = "\n".join(lines).encode("ascii", "replace").decode("ascii")
    return ifcopenshell.file.from_string(text)
