"""Open an IFC file and prove that all of it was read."""

from __future__ import annotations

import re
import tempfile
from collections import Counter
from dataclasses import dataclass
from functools import cached_property
from pathlib import Path
from typing import Any

import ifcopenshell
import numpy as np

from analysis_core.errors import IfcReadError
from analysis_core.findings import Finding
from analysis_core.ifc.entities import Entities
from analysis_core.ifc.file_units import FileUnits, read_units
from analysis_core.ifc.schema_fit import check_fit, parser_schema, public_name
from analysis_core.ifc.step.census import Ints
from analysis_core.ifc.step.file_bytes import read_bytes
from analysis_core.ifc.step.text import StepText, line_of, read_step

_parser: Any = ifcopenshell.open  # its published overloads leave out ``lazy``
_ROOTED = re.compile(rb"\(\s*'([0-9A-Za-z_$]{22})'\s*,")


@dataclass(frozen=True, eq=False)
class Source:
    """An IFC file that was read completely.

    ``entities`` are what it holds, ``schema`` is "IFC2X3", "IFC4" or "IFC4X3", ``fingerprint``
    the SHA-256 of the file as it lies on the disk in hexadecimal.  ``as_is`` is False where what
    is read are other bytes than those (an unpacked zip, a mended comment, letters rewritten as
    the standard asks).
    """

    path: Path
    name: str
    text: StepText
    entities: Entities
    schema: str
    fingerprint: str
    units: FileUnits
    findings: tuple[Finding, ...] = ()
    as_is: bool = True

    @cached_property
    def file(self) -> Any:
        """The file as the parser opens it: to be changed, drawn, or read the long way.

        Keep the Source as long as its entities are used: they die with it.  Raises IfcReadError
        where it cannot be opened, or not completely.
        """
        data = _with_schema(self.text, self.entities.schema)
        as_is = self.as_is and data is self.text.clean
        file, numbers = _parse(self.path if as_is else None, data, self.text, self.name)
        _prove(numbers, self.text, self.name)
        return file

    @property
    def has_analysis_model(self) -> bool:
        """Whether the file states members of an analysis model that is not one we posted.

        Our own is the idealisation of an earlier revision; it must not stand in for the building.
        """
        from analysis_core.ifc.posting.ours import MODEL_TYPE  # what is ours is known to the writer

        members = self.entities.by_type("IfcStructuralCurveMember")
        return any(member.ObjectType != MODEL_TYPE for member in members)


def open_model(path: str | Path) -> Source:
    """Return the model in an IFC file (STEP format, zipped or not).

    Every entity that stands in the bytes was read, or IfcReadError says in a sentence why not
    and what to do.
    """
    path = Path(path)
    stored = read_bytes(path)
    name = path.name
    text = read_step(stored.data, name)
    findings = list(stored.findings)
    parser_name = parser_schema(text.schemas, name)
    findings += check_fit(text.census.shapes, parser_name, name)
    findings += _text_findings(text, name)
    entities = Entities(text.content, text.census, parser_name)
    units, unit_findings = read_units(entities, name)
    findings += unit_findings
    findings += _identity_findings(entities, text.content, name)
    return Source(
        path,
        name,
        text,
        entities,
        public_name(parser_name),
        stored.fingerprint,
        units,
        tuple(findings),
        stored.as_is and text.content is stored.data,
    )


def _text_findings(text: StepText, name: str) -> list[Finding]:
    findings = []
    if text.repaired and text.missing.size:
        raise IfcReadError(
            f"'{name}', {text.repaired[0]}: a comment is opened and never closed, and #"
            f"{text.missing[0]} is missing. Remove the comment mark or export the model again."
        )
    if text.repaired:
        findings.append(
            Finding(
                "warning",
                "stray-comment",
                f"'{name}', {', '.join(text.repaired)}: a comment is opened and never closed. The "
                f"mark was passed over and all {text.count:,} entities were read; other programs "
                f"may read only those before it. Remove the mark.",
            )
        )
    elif text.missing.size:
        numbers = ", ".join(f"#{number}" for number in text.missing[:5])
        findings.append(
            Finding(
                "warning",
                "missing-reference",
                f"'{name}' refers to {text.missing.size} entities that it does not hold "
                f"({numbers}); what refers to them was read without them. Export the model again.",
            )
        )
    return findings


def _with_schema(text: StepText, parser_name: str) -> bytes:
    """Return the text with the schema named as the parser knows it."""
    stated = text.schemas[0]
    if stated.upper() == parser_name:
        return text.clean
    header = text.header.replace(f"'{stated}'".encode(), f"'{parser_name}'".encode())
    return header + text.clean[len(text.header) :]


def _parse(path: Path | None, data: bytes, text: StepText, name: str) -> tuple[Any, Ints]:
    """Return the parsed file and the numbers of its entities.

    From ``path`` or, where that is None, from a copy of ``data``.
    """
    try:
        if path is not None:
            return _open(path, text)
        with tempfile.TemporaryDirectory() as folder:
            copy = Path(folder) / "model.ifc"
            copy.write_bytes(data)
            return _open(copy, text)
    except Exception as error:  # the parser raises what it likes; none of it is for the user
        raise IfcReadError(
            f"'{name}' cannot be parsed ({error}). Export the model again."
        ) from error


def _open(path: Path, text: StepText) -> tuple[Any, Ints]:
    """Open lazily, which is three times as fast; with several DATA sections that loses all but
    the first, and then the plain way is taken."""
    if text.data_sections == 1:
        file = _parser(path, format=".ifc", lazy=True)
        numbers = _numbers(file)
        if numbers.size == text.count:
            return file, numbers
    file = _parser(path, format=".ifc")
    return file, _numbers(file)


def _numbers(file: Any) -> Ints:
    return np.array(file.entity_names(), dtype=np.int64)


def _prove(numbers: Ints, text: StepText, name: str) -> None:
    """Compare the entities read with the instances counted in the bytes."""
    read = np.sort(numbers)
    counted = np.sort(text.census.ids)
    if read.size == counted.size and (read == counted).all():
        return
    lost = np.setdiff1d(counted, read)
    where = re.search(rb"#\s*%d\s*=" % lost[0], text.clean) if lost.size else None
    line = f", the first on line {line_of(text.clean, where.start())}" if where else ""
    raise IfcReadError(
        f"'{name}' holds {counted.size:,} entities but only {read.size:,} can be read; "
        f"{lost.size:,} would be lost{line}. Export the model again."
    )


def _identity_findings(entities: Entities, data: bytes, name: str) -> list[Finding]:
    findings = []
    if not entities.by_type("IfcProject"):
        findings.append(
            Finding(
                "warning",
                "no-project",
                f"'{name}' has no IfcProject, so it states no units for what it holds. Export the "
                f"whole project.",
            )
        )
    stated = _ROOTED.findall(data)
    if len(set(stated)) == len(stated):
        return findings
    # Walk the rooted entities only now: other classes may begin with a text of 22 letters too.
    counts = Counter(entity[0] for entity in entities.by_type("IfcRoot"))
    twice = tuple(key for key, count in counts.items() if count > 1 and isinstance(key, str))
    if twice:
        findings.append(
            Finding(
                "warning",
                "duplicate-global-id",
                f"'{name}' gives {len(twice)} GlobalIds to more than one object each "
                f"({', '.join(twice[:3])}); results for them may go to the wrong one. Export the "
                f"model again or give each object its own.",
                twice,
            )
        )
    return findings
