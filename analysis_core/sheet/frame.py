"""The elevation of a frame: its members as they stand in their plane, to scale."""

from __future__ import annotations

import math

from analysis_core.model import Joint, Line, Member
from analysis_core.sheet.html import Markup, tag
from analysis_core.sheet.strip import WIDTH
from analysis_core.units import DisplayUnits

_MARGIN = 44.0
_TALLEST = 300.0
_SHORT = 46.0  # pixels of a member below which its name alone is written


def frame_elevation(line: Line, units: DisplayUnits) -> Markup:
    """Return joints, members with lengths and sections, and bearings, as a drawing."""
    view = _View(line)
    parts: list[Markup] = []
    for member in line.members:
        parts += _member(line, member, view, units)
    for joint in line.joints:
        parts += _joint(joint, *view.at(joint))
    bar = 10.0 ** math.floor(math.log10(max(view.width / 3.0, 1e-3)))
    x, y, end = _MARGIN, view.height - 8.0, _MARGIN + bar * view.scale
    parts.append(tag("path", d=f"M{x:.1f},{y - 4:.1f}v4H{end:.1f}v-4", class_="axis"))
    parts.append(
        tag("text", units.text(bar, "length"), x=(x + end) / 2.0, y=y - 5.0, class_="note")
    )
    title = "Elevation, to scale"
    drawing = tag(
        "svg", tag("title", title), parts, viewBox=f"0 0 {WIDTH:g} {view.height:.0f}", role="img",
        class_="drawing",
    )  # fmt: skip
    return tag("figure", drawing, tag("figcaption", title))


class _View:
    """Pixels of places in the plane of a frame."""

    def __init__(self, line: Line) -> None:
        xs, zs = [j.x for j in line.joints], [j.z for j in line.joints]
        self.left, self.top = min(xs), max(zs)
        self.width = max(max(xs) - self.left, 1e-9)
        tall = self.top - min(zs)
        room = WIDTH - 2.0 * _MARGIN
        self.scale = min(room / self.width, _TALLEST / tall if tall > 0.0 else math.inf)
        self.shift = _MARGIN + (room - self.scale * self.width) / 2.0
        self.height = self.scale * tall + 2.0 * _MARGIN + 20.0

    def at(self, joint: Joint) -> tuple[float, float]:
        return (
            self.shift + self.scale * (joint.x - self.left),
            _MARGIN + self.scale * (self.top - joint.z),
        )


def _member(line: Line, member: Member, view: _View, units: DisplayUnits) -> list[Markup]:
    (x1, y1), (x2, y2) = (view.at(line.joints[j]) for j in (member.start, member.end))
    parts = [tag("line", x1=x1, y1=y1, x2=x2, y2=y2, class_="member")]
    long = math.hypot(x2 - x1, y2 - y1)
    for spring, part in ((member.start_spring, 7.0), (member.end_spring, long - 7.0)):
        if not math.isinf(spring) and long > 0.0:
            kind = "release" if spring == 0.0 else "spring"
            x, y = x1 + (x2 - x1) * part / long, y1 + (y2 - y1) * part / long
            parts.append(tag("circle", cx=x, cy=y, r=3.2, class_=kind))
    angle = math.degrees(math.atan2(y2 - y1, x2 - x1))
    if angle > 90.0 or angle <= -90.0:  # readable from below or from the right
        angle += 180.0 if angle <= -90.0 else -180.0
    if abs(angle - 90.0) < 1e-6:
        angle = -90.0
    name = f"{member.span}" if member.role == "span" and member.span else f"leg {member.id}"
    where = f"translate({(x1 + x2) / 2.0:.1f},{(y1 + y2) / 2.0:.1f}) rotate({angle:.1f})"
    text = f"{name}:  {units.text(member.length, 'length')}" if long > _SHORT else name
    labels = [tag("text", text, x=0, y=-6.0)]
    section = member.section.title if member.section else ""
    if section and long > 6.0 * len(section):
        labels.append(tag("text", section, x=0, y=13.0, class_="section-name"))
    return [*parts, tag("g", labels, transform=where)]


def _joint(joint: Joint, x: float, y: float) -> list[Markup]:
    number = tag("text", str(joint.id), x=x + 9.0, y=y - 7.0, class_="joint-name")
    support = joint.support
    if support is None or not (support.vertical or support.horizontal or support.rotation):
        return [tag("circle", cx=x, cy=y, r=2.4, class_="free-joint"), number]
    sprung = [s for s in (support.vertical, support.horizontal, support.rotation)
              if 0.0 < s < math.inf]  # fmt: skip
    filling = "support sprung" if sprung else "support"
    parts = [tag("line", x1=x - 13, y1=y + 16, x2=x + 13, y2=y + 16, class_="ground")]
    if support.rotation > 0.0:
        parts.append(tag("path", d=f"M{x - 6:.1f},{y:.1f}h12v16h-12Z", class_=filling))
    elif support.vertical > 0.0:
        parts.append(tag("path", d=f"M{x:.1f},{y + 2:.1f}l-8,14h16Z", class_=filling))
    if support.horizontal <= 0.0:
        parts.append(tag("line", x1=x - 13, y1=y + 20, x2=x + 13, y2=y + 20, class_="axis"))
    if sprung:
        parts.append(tag("text", "spring", x=x, y=y + 31.0, class_="note"))
    return [*parts, number]
