"""Reference items as IFC analysis models, and the lines that are read back from them.

An item in kN and m is written in N and m: rigidities, springs and actions times 1000, so that
movements are as they were and forces 1000 times as large.  Every span is a curve member (two
where a hinge or a step divides it) of a rectangular section whose modulus makes its rigidity.
Haunches and shear strain are settings beside the file.
"""

from __future__ import annotations

import itertools
import math
from typing import Any

from ifc_makers import (
    FREE,
    RIGID,
    AnalysisFile,
    Case,
    Joint,
    Link,
    MaterialSpec,
    Model,
    MoveJoint,
    NodeLoad,
    PointLoad,
    SectionSpec,
    SpreadLoad,
    Stick,
    Warmth,
)
from ifc_makers.analysis_file import global_id
from ifc_makers.description import Action
from reference_items import CASE, Item, Structure

from analysis_core import model as lines
from analysis_core.settings import Analysis, SectionSetting, Selector, Settings

KILO = 1000.0
WIDTH, DEPTH = 0.2, 0.4
INERTIA = WIDTH * DEPTH**3 / 12.0
EXPANSION = 12e-6
HINGE = (RIGID, RIGID, RIGID, RIGID, FREE, RIGID)


class NotWrittenError(Exception):
    """An item that the makers of test files have no words for."""


def model_of(item: Item, *, schema: str) -> Model:
    """Return the analysis model that an item describes.  Raises NotWrittenError."""
    return (_Frame if "bars" in item else _Beam)(item, schema).model()


def structure_of(item: Item, line: lines.Line) -> Structure:
    """Return the names of an item in a line that was read back from its file.

    Members and joints are known by the GlobalIds of what they were made from.
    """
    members: dict[str, list[lines.Member]] = {}
    for member in line.members:
        members.setdefault(member.element, []).append(member)
    spans: dict[Any, tuple[tuple[int, float], ...]] = {}
    for name, parts in _parts(item).items():
        found = []
        for stick, offset in parts:
            for member in members[global_id(stick)]:
                assert not member.reversed_
                found.append((member.id, offset + member.element_offset))
        spans[name] = tuple(sorted(found, key=lambda part: part[1]))
    by_id = {joint.element: joint.id for joint in line.joints}
    for joint in line.joints:
        by_id.update(dict.fromkeys(joint.elements, joint.id))
    names = item["joints"] if "bars" in item else range(1, len(item["bearings"]) + 1)
    bearings = {name: by_id[global_id(f"J {name}")] for name in names if _at(item, name) in by_id}
    return Structure(line, spans, bearings)


def _at(item: Item, name: Any) -> str:
    return global_id(f"J {name}")


def _parts(item: Item) -> dict[Any, list[tuple[str, float]]]:
    """Return the sticks of every span or bar with the distance of each from its start."""
    if "bars" in item:
        return {name: [(f"M {name}", 0.0)] for name in item["bars"]}
    found: dict[Any, list[tuple[str, float]]] = {}
    for number in range(1, len(item["spans"]) + 1):
        cuts = _cuts(item, number)
        found[number] = [(f"M {number}.{i}", cut) for i, cut in enumerate(cuts[:-1])]
    return found


def _cuts(item: Item, number: int) -> list[float]:
    span = item["spans"][number - 1]
    length = span["length"] if isinstance(span, dict) else span[0]
    hinges = [x for at, x in item.get("hinges", ()) if at == number]
    steps = span.get("steps", []) if isinstance(span, dict) else []
    return [0.0, *sorted(hinges + [to for to, _ in steps[:-1]]), length]


def settings_of(item: Item) -> Settings:
    """Return the settings that go with the file of an item."""
    spans = [span if isinstance(span, dict) else {} for span in item.get("spans", ())]
    haunches = tuple(
        SectionSetting(Selector(global_ids=(global_id(f"M {number}.0"),)), taper=_depths(span))
        for number, span in enumerate(spans, start=1)
        if "haunches" in span
    )
    sheared = any("GA" in span for span in spans)
    return Settings(analysis=Analysis(shear_flexible=sheared), sections=haunches)


def _depths(span: dict[str, Any]) -> tuple[tuple[float, float], ...]:
    """Return (part of the length, multiple of the least depth) pairs."""
    start, rise_start = span.get("at start", (0.0, 0.0))
    end, rise_end = span.get("at end", (0.0, 0.0))
    before, after = 1.0 + rise_start, 1.0 + rise_end
    if span["haunches"] == "prismatic":
        inner = ((start, before), (start, 1.0), (1.0 - end, 1.0), (1.0 - end, after))
    else:
        inner = ((start, 1.0), (1.0 - end, 1.0))
    return ((0.0, before), *inner, (1.0, after))


class _Written:
    """Collects joints, sticks and actions."""

    def __init__(self, item: Item, schema: str) -> None:
        self.item, self.schema = item, schema
        self.joints: list[Joint] = []
        self.sticks: list[Stick] = []
        self.actions: list[Action] = []
        self.lengths: dict[Any, float] = {}

    def model(self) -> Model:
        self.build()
        for stated in self.item.get("actions", ()):
            self._act(stated)
        return Model(tuple(self.joints), tuple(self.sticks), tuple(self.actions), (Case(CASE),))

    def build(self) -> None:
        raise NotImplementedError

    def name(self) -> str:
        return f"action {len(self.actions)}"

    def support(self, joint: str, bearing: Any, *, along: float) -> tuple[float, ...] | None:
        """Return the stiffness of a bearing and add its movements."""
        stated = bearing if isinstance(bearing, dict) else {"kind": bearing}
        vertical, horizontal, rotation = {
            "pinned": (RIGID, along, FREE),
            "roller": (RIGID, along, FREE),
            "roller_x": (FREE, RIGID, FREE),
            "fixed": (RIGID, along, RIGID),
            "guided": (FREE, along, RIGID),
            "free": (FREE, FREE, FREE),
        }[stated["kind"]]
        if "spring" in stated:
            vertical = stated["spring"] * KILO
        if "turning spring" in stated:
            rotation = stated["turning spring"] * KILO
        if "sinks" in stated or "turns" in stated:
            down, turn = stated.get("sinks", 0.0), stated.get("turns", 0.0)
            self.actions.append(
                MoveJoint(self.name(), CASE, joint, (0.0, 0.0, -down), (0.0, turn, 0.0))
            )
        if not (vertical or rotation or horizontal):
            return None
        return (horizontal, RIGID, vertical, RIGID, rotation, RIGID)

    def _act(self, stated: dict[str, Any]) -> None:
        if "push" in stated:
            force = (stated["push"] * KILO, 0.0, 0.0)
            self.actions.append(NodeLoad(self.name(), CASE, f"J {stated['joint']}", force))
        elif "bearing" in stated:
            self._at_bearing(stated, f"J {stated['bearing']}")
        else:
            where = stated.get("span", stated.get("bar"))
            for key in self.lengths if where is None else [where]:
                self._on_span(stated, key)

    def _at_bearing(self, stated: dict[str, Any], joint: str) -> None:
        if "sinks" in stated:
            self.actions.append(MoveJoint(self.name(), CASE, joint, (0.0, 0.0, -stated["sinks"])))
            return
        force = (0.0, 0.0, -KILO * stated.get("force", 0.0))
        moment = (0.0, KILO * stated.get("couple", 0.0), 0.0)
        self.actions.append(NodeLoad(self.name(), CASE, joint, force, moment))

    def _on_span(self, stated: dict[str, Any], key: Any) -> None:
        whole = self.lengths[key]
        parts = _parts(self.item)[key]
        ends = [offset for _, offset in parts[1:]] + [whole]
        for (stick, offset), end in zip(parts, ends, strict=True):
            if "point" in stated or "couple" in stated:
                if offset <= stated["at"] < end or stated["at"] == end == whole:
                    self._single(stated, stick, stated["at"] - offset)
            elif "curvature" in stated or "warmer below" in stated:
                self._warm(stated, stick)
            else:
                low, high = stated.get("from", 0.0), stated.get("to", whole)
                start, stop = max(low, offset), min(high, end)
                if start < stop:
                    self._spread(stated, stick, (low, high), (start, stop), offset, end)

    def _single(self, stated: dict[str, Any], stick: str, position: float) -> None:
        force = (0.0, 0.0, -KILO * stated.get("point", 0.0))
        moment = (0.0, KILO * stated.get("couple", 0.0), 0.0)
        self.actions.append(PointLoad(self.name(), CASE, stick, position, force, moment))

    def _warm(self, stated: dict[str, Any], stick: str) -> None:
        curvature = stated.get("curvature")
        if curvature is None:
            curvature = stated["expansion"] * stated["warmer below"] / stated["depth"]
        # The upper face less the lower one.
        change = -curvature * DEPTH / EXPANSION
        self.actions.append(Warmth(self.name(), CASE, stick, along_z=change))

    def _spread(
        self,
        stated: dict[str, Any],
        stick: str,
        stated_range: tuple[float, float],
        covered: tuple[float, float],
        offset: float,
        end: float,
    ) -> None:
        if "polynomial" in stated:
            raise NotWrittenError("polynomial loads")
        first, last = stated.get("linear", (stated.get("uniform"),) * 2)
        low, high = stated_range
        values = [first + (last - first) * (x - low) / (high - low) for x in covered]
        right = stated.get("toward") == "right"
        forces = [(KILO * v, 0.0, 0.0) if right else (0.0, 0.0, -KILO * v) for v in values]
        stations = tuple(x - offset for x in covered)
        if covered == (offset, end) and values[0] == values[1]:
            forces, stations = forces[:1], ()
        self.actions.append(SpreadLoad(self.name(), CASE, stick, tuple(forces), stations))


class _Beam(_Written):
    def build(self) -> None:
        x, held = 0.0, False
        item = self.item
        for number, bearing in enumerate(item["bearings"], start=1):
            kind = bearing["kind"] if isinstance(bearing, dict) else bearing
            along = RIGID if kind in ("pinned", "roller", "fixed") and not held else FREE
            held = held or along == RIGID
            name = f"J {number}"
            support = self.support(name, bearing, along=along)
            self.joints.append(Joint(name, (x, 0.0, 0.0), support))  # type: ignore[arg-type]
            if number <= len(item["spans"]):
                x = self._span(number, x)

    def _span(self, number: int, x: float) -> float:
        stated = self.item["spans"][number - 1]
        span = stated if isinstance(stated, dict) else {"length": stated[0], "EI": stated[1]}
        if span.get("haunches") == "parabolic" or span.get("power", 3) != 3:
            raise NotWrittenError("depths are linear between the places where they are stated")
        if "taper" in span and self.schema == "IFC2X3":
            raise NotWrittenError("tapering profiles are younger than IFC2X3")
        cuts = _cuts(self.item, number)
        hinged = {at for where, at in self.item.get("hinges", ()) if where == number}
        rigidities = dict(span.get("steps", ()))
        last = len(cuts) - 2
        for index, (low, high) in enumerate(itertools.pairwise(cuts)):
            start = f"J {number}" if index == 0 else f"J {number}.{index}"
            end = f"J {number + 1}" if index == last else f"J {number}.{index + 1}"
            if index:
                self.joints.append(Joint(start, (x + low, 0.0, 0.0)))
            release = HINGE if low in hinged else None
            if index == 0 and "start spring" in span:
                release = (RIGID, RIGID, RIGID, RIGID, KILO * span["start spring"], RIGID)
            rigidity = KILO * rigidities.get(high, span.get("EI", 0.0))
            deeper = SectionSpec("end", WIDTH, DEPTH * span["taper"]) if "taper" in span else None
            # Five sixths of a rectangle count in shear.
            shear = KILO * span.get("GA", 0.0) / (WIDTH * DEPTH * 5.0 / 6.0) or 81e9
            material = f"EI {rigidity:g} GA {span.get('GA', 0.0):g}"
            self.sticks.append(
                Stick(
                    f"M {number}.{index}",
                    (x + low, 0.0, 0.0),
                    (x + high, 0.0, 0.0),
                    (Link(end), Link(start, release)),
                    SectionSpec("section", WIDTH, DEPTH),
                    deeper,
                    MaterialSpec(material, rigidity / INERTIA, shear, expansion=EXPANSION),
                )
            )
        self.lengths[number] = cuts[-1]
        return x + cuts[-1]


class _Frame(_Written):
    def build(self) -> None:
        item = self.item
        for name, (x, z) in item["joints"].items():
            bearing = item["bearings"].get(name)
            support = None
            if bearing is not None:
                support = self.support(f"J {name}", bearing, along=RIGID)
            self.joints.append(Joint(f"J {name}", (x, 0.0, z), support))  # type: ignore[arg-type]
        for name, (start, end, rigidity, *hinged) in item["bars"].items():
            (ax, az), (bx, bz) = item["joints"][start], item["joints"][end]
            length = math.hypot(bx - ax, bz - az)
            across = (-(bz - az) / length, 0.0, (bx - ax) / length)
            self.sticks.append(
                Stick(
                    f"M {name}",
                    (ax, 0.0, az),
                    (bx, 0.0, bz),
                    (
                        Link(f"J {end}", HINGE if "hinged end" in hinged else None),
                        Link(f"J {start}", HINGE if "hinged start" in hinged else None),
                    ),
                    SectionSpec("section", WIDTH, DEPTH),
                    None,
                    MaterialSpec(f"EI {rigidity:g}", KILO * rigidity / INERTIA),
                    axis=across,
                )
            )
            self.lengths[name] = length


__all__ = ["KILO", "AnalysisFile", "NotWrittenError", "model_of", "settings_of", "structure_of"]
