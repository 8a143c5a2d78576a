"""Findings and failed limits as a BCF 2.1 file, so that any coordination viewer shows them.

BCF (BIM Collaboration Format) is the open standard of buildingSMART for issues: a ZIP of one folder
a topic, each with its text, its elements and a camera.  Identifiers are derived from the content,
so that exporting again gives the same topics.
"""

from __future__ import annotations

import io
import math
import uuid
import zipfile
from collections import Counter
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from datetime import UTC, datetime
from xml.etree import ElementTree as Xml

from analysis_core.checking.members import MemberChecks
from analysis_core.findings import Finding
from analysis_core.model import Line, Point
from analysis_core.results import Outcome

_NAMESPACE = uuid.UUID("0c0f3b0e-6f0e-4b42-9a3a-5d6a0f2f7b61")
_EPOCH = (1980, 1, 1, 0, 0, 0)
_AUTHOR = "Spanledger"
_FIELD_OF_VIEW = 60.0
_TYPES = {"error": "Error", "warning": "Warning", "note": "Remark"}
_MOST_ELEMENTS = 200


@dataclass(frozen=True, slots=True)
class Issue:
    """One topic: its title and text, the elements it shows, and what it is about."""

    title: str
    text: str
    kind: str
    elements: tuple[str, ...]
    line: str | None


def issues_of(
    outcome: Outcome, checks: Mapping[str, tuple[MemberChecks, ...]] | None = None
) -> list[Issue]:
    """Return the findings and the failed checks of an outcome as issues, gravest first."""
    order = {"error": 0, "warning": 1, "note": 2}
    found = sorted(outcome.findings, key=lambda f: order[f.severity])
    return [*(_of_finding(f) for f in found), *_failed(outcome, checks or {})]


def bcf_bytes(outcome: Outcome, issues: Sequence[Issue], *, now: datetime | None = None) -> bytes:
    """Return a BCF 2.1 file as bytes."""
    date = (now or datetime.now(UTC)).strftime("%Y-%m-%dT%H:%M:%SZ")
    lines = {line.mark: line for line in outcome.model.lines}
    everything, places = _points(outcome.model.lines), _places(outcome.model.lines)
    taken: Counter[str] = Counter()
    out = io.BytesIO()
    with zipfile.ZipFile(out, "w", zipfile.ZIP_DEFLATED) as archive:
        _put(archive, "bcf.version", _version())
        for index, issue in enumerate(issues):
            key = _clean(f"{outcome.file}/{issue.title}/{issue.text}")
            taken[key] += 1  # the same words may be said of several elements
            told = key if taken[key] == 1 else f"{key}/{taken[key]}"
            topic = str(uuid.uuid5(_NAMESPACE, told))
            view = str(uuid.uuid5(_NAMESPACE, topic))
            shown = [p for element in issue.elements for p in places.get(element, ())]
            if issue.line in lines:
                shown += _points([lines[issue.line]])
            points = shown or everything
            _put(archive, f"{topic}/markup.bcf", _markup(outcome, issue, topic, view, index, date))
            _put(archive, f"{topic}/viewpoint.bcfv", _viewpoint(issue, view, points))
    return out.getvalue()


def _of_finding(finding: Finding) -> Issue:
    words = finding.slug.replace("-", " ")
    title = f"{finding.line}: {words}" if finding.line else words[:1].upper() + words[1:]
    return Issue(title, finding.message, _TYPES[finding.severity], finding.elements, finding.line)


def _failed(outcome: Outcome, checks: Mapping[str, tuple[MemberChecks, ...]]) -> Iterable[Issue]:
    for result in outcome.lines:
        for each in checks.get(result.line.mark, ()):
            member = result.line.members[each.member]
            name = outcome.model.names.get(member.element) or member.element
            for check in each.checks:
                if check.status == "not satisfied":
                    text = (
                        f"{check.name} of {name} in line {result.line.mark}: {check.use:.2f} times "
                        f"the resistance ({check.clause}), by {check.source or 'the envelope'}."
                    )
                    title = f"{result.line.mark}: {check.name} not satisfied"
                    yield Issue(title, text, "Error", (member.element,), result.line.mark)


def _places(lines: Iterable[Line]) -> dict[str, list[Point]]:
    """Points of each element: the ends of its members, and where lines bear on it."""
    found: dict[str, list[Point]] = {}
    for line in lines:
        for member in line.members:
            ends = (line.joints[member.start].point, line.joints[member.end].point)
            found.setdefault(member.element, []).extend(ends)
        for joint in line.joints:
            for element in (joint.element, *joint.elements):
                if element:
                    found.setdefault(element, []).append(joint.point)
    return found


def _points(lines: Iterable[Line]) -> list[Point]:
    return [joint.point for line in lines for joint in line.joints]


def _version() -> Xml.Element:
    root = Xml.Element("Version", VersionId="2.1")
    Xml.SubElement(root, "DetailedVersion").text = "2.1"
    return root


def _markup(
    outcome: Outcome, issue: Issue, topic: str, view: str, index: int, date: str
) -> Xml.Element:
    root = Xml.Element("Markup")
    header = Xml.SubElement(root, "Header")
    file = Xml.SubElement(header, "File", isExternal="true")
    Xml.SubElement(file, "Filename").text = _clean(outcome.file)
    item = Xml.SubElement(root, "Topic", Guid=topic, TopicType=issue.kind, TopicStatus="Open")
    for name, text in (
        ("Title", issue.title),
        ("Index", str(index)),
        ("CreationDate", date),
        ("CreationAuthor", _AUTHOR),
        ("Description", issue.text),
    ):
        Xml.SubElement(item, name).text = _clean(text)
    shown = Xml.SubElement(root, "Viewpoints", Guid=view)
    Xml.SubElement(shown, "Viewpoint").text = "viewpoint.bcfv"
    return root


def _viewpoint(issue: Issue, view: str, points: Sequence[Point]) -> Xml.Element:
    root = Xml.Element("VisualizationInfo", Guid=view)
    components = Xml.SubElement(root, "Components")
    elements = [e for e in issue.elements if len(e) == 22][:_MOST_ELEMENTS]
    if elements:
        selection = Xml.SubElement(components, "Selection")
        for element in elements:
            Xml.SubElement(selection, "Component", IfcGuid=_clean(element))
    Xml.SubElement(components, "Visibility", DefaultVisibility="true")
    eye, direction, up = camera(points)
    seen = Xml.SubElement(root, "PerspectiveCamera")
    for name, vector in (
        ("CameraViewPoint", eye),
        ("CameraDirection", direction),
        ("CameraUpVector", up),
    ):
        place = Xml.SubElement(seen, name)
        for axis, value in zip("XYZ", vector, strict=True):
            Xml.SubElement(place, axis).text = repr(round(value, 6))
    Xml.SubElement(seen, "FieldOfView").text = repr(_FIELD_OF_VIEW)
    return root


def camera(points: Sequence[Point]) -> tuple[Point, Point, Point]:
    """Return place, direction and up vector of a camera that sees all points, from the south-east.

    Metres, world coordinates.
    """
    if not points:
        points = [(0.0, 0.0, 0.0)]
    low = [min(p[i] for p in points) for i in range(3)]
    high = [max(p[i] for p in points) for i in range(3)]
    middle = [(a + b) / 2.0 for a, b in zip(low, high, strict=True)]
    radius = max(0.5 * math.dist(low, high), 1.0)
    away = 1.3 * radius / math.sin(math.radians(_FIELD_OF_VIEW / 2.0))
    ex, ey, ez = 0.5, -0.7, 0.51
    size = math.sqrt(ex**2 + ey**2 + ez**2)
    ex, ey, ez = ex / size, ey / size, ez / size
    flat = math.hypot(ex, ey)
    eye = (middle[0] + away * ex, middle[1] + away * ey, middle[2] + away * ez)
    return eye, (-ex, -ey, -ez), (-ex * ez / flat, -ey * ez / flat, flat)


def _clean(text: str) -> str:
    """Leave out characters that XML 1.0 cannot hold."""
    return "".join(
        c for c in text
        if c in "\t\n\r" or 0x20 <= ord(c) < 0xD800 or 0xE000 <= ord(c) < 0xFFFE or ord(c) > 0xFFFF
    )  # fmt: skip


def _put(archive: zipfile.ZipFile, name: str, root: Xml.Element) -> None:
    Xml.indent(root)
    data = Xml.tostring(root, encoding="utf-8", xml_declaration=True)
    archive.writestr(zipfile.ZipInfo(name, _EPOCH), data, zipfile.ZIP_DEFLATED)
