"""The reference values of ``tests/data/reference`` and the lines they describe.

An item describes a structure, its actions and what is expected.  kN, m, kN·m², rad (any
consistent set serves).  Spans, bearings and hinges make a beam line, joints and bars a frame::

    spans     [length, EI] or a mapping: length, EI, GA, start spring, end spring;
              steps [[up to, EI], ...];  haunches straight|parabolic|prismatic with "at start",
              "at end" [length / span, rise / least depth];  taper (end depth / start depth) with
              power (of the depth that EI goes with)
    bearings  pinned|roller|fixed|guided|free, in a frame also roller_x (held to the right only),
              or a mapping: kind, spring, turning spring, sinks, turns
    hinges    [span from 1, distance from its start]
    joints    name: [x, z];   bars  name: [start, end, EI, "hinged start", "hinged end"]
    actions   uniform, linear [from, to], polynomial (in the distance from "from"), point,
              couple, curvature, warmer below (with expansion, depth) on a span or bar, all spans
              if none is named, "from", "to", "at", "toward" right|down (else across);  force,
              couple, sinks at a bearing (from 1);  push of a joint to the right
    expect    quantity: where;  "is" the value, "by" a formula of ``given``, "printed" the
              handbook's coefficient with its digits, "per" what the coefficient multiplies
"""

from __future__ import annotations

import itertools
import math
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import yaml

from analysis_core.model import (
    FREE,
    RIGID,
    Action,
    DistributedForce,
    ImposedCurvature,
    Joint,
    JointForce,
    JointMovement,
    Line,
    Member,
    Piece,
    PointForce,
    PointMoment,
    Support,
)

CASE = "reference"
FOLDER = Path(__file__).parents[1] / "data" / "reference"

Item = dict[str, Any]


@dataclass(frozen=True)
class Structure:
    """A line with the names its item uses.

    ``spans``: (member, distance of its start from the span's start) by span number or bar name.
    ``bearings``: joint by bearing number (from 1) or joint name.
    """

    line: Line
    spans: Mapping[Any, tuple[tuple[int, float], ...]]
    bearings: Mapping[Any, int]


def load(stem: str) -> list[Item]:
    """Return the items of one file; the source in words."""
    text = (FOLDER / f"{stem}.yaml").read_text(encoding="utf-8")
    data = yaml.safe_load(text)
    sources = data.get("sources", {})
    return [{**item, "source": sources.get(item.get("source"), "")} for item in data["items"]]


def build(item: Item) -> Structure:
    """Return the line that an item describes, with its actions in case CASE."""
    return _frame(item) if "bars" in item else _beam(item)


def _beam(item: Item) -> Structure:
    joints: list[Joint] = []
    members: list[Member] = []
    actions: list[Action] = []
    spans: dict[Any, list[tuple[int, float]]] = {}
    bearings: dict[Any, int] = {}
    reached = 0.0
    for number, bearing in enumerate(item["bearings"], start=1):
        bearings[number] = len(joints)
        joints.append(Joint(len(joints), reached, 0.0, support=_support(bearing, frame=False)))
        actions += _movements(bearing, len(joints) - 1)
        if number > len(item["spans"]):
            break
        spans[number] = []
        span = _mapping(item["spans"][number - 1])
        hinges = sorted(x for at, x in item.get("hinges", ()) if at == number)
        cuts = [0.0, *hinges, span["length"]]
        for index, (low, high) in enumerate(itertools.pairwise(cuts)):
            if index:
                joints.append(Joint(len(joints), reached + low, 0.0))
            spans[number].append((len(members), low))
            last = index == len(hinges)
            members.append(
                Member(
                    id=len(members),
                    start=len(joints) - 1,
                    end=len(joints),
                    pieces=_pieces(span, low, high),
                    start_spring=FREE if index else span.get("start spring", RIGID),
                    end_spring=span.get("end spring", RIGID) if last else RIGID,
                    span=number,
                )
            )
        reached += span["length"]
    line = Line(item["name"], tuple(joints), tuple(members))
    actions += _actions(item, line, spans, bearings)
    return _finished(line, actions, spans, bearings)


def _frame(item: Item) -> Structure:
    bearings = {name: index for index, name in enumerate(item["joints"])}
    joints, actions = [], []
    for index, (name, (x, z)) in enumerate(item["joints"].items()):
        bearing = item["bearings"].get(name)
        support = None if bearing is None else _support(bearing, frame=True)
        joints.append(Joint(index, x, z, support=support))
        actions += _movements(bearing, index) if bearing else []
    members, spans = [], {}
    for name, (start, end, rigidity, *hinged) in item["bars"].items():
        a, b = joints[bearings[start]], joints[bearings[end]]
        spans[name] = [(len(members), 0.0)]
        members.append(
            Member(
                id=len(members),
                start=a.id,
                end=b.id,
                pieces=(Piece(math.hypot(b.x - a.x, b.z - a.z), (rigidity,)),),
                start_spring=FREE if "hinged start" in hinged else RIGID,
                end_spring=FREE if "hinged end" in hinged else RIGID,
            )
        )
    line = Line(item["name"], tuple(joints), tuple(members), kind="frame")
    actions += _actions(item, line, spans, bearings)
    return _finished(line, actions, spans, bearings)


def _finished(line: Line, actions: list[Action], spans: Any, bearings: Any) -> Structure:
    full = Line(line.mark, line.joints, line.members, tuple(actions), line.kind)
    return Structure(full, {key: tuple(parts) for key, parts in spans.items()}, bearings)


def _mapping(span: Any) -> dict[str, Any]:
    if isinstance(span, dict):
        return span
    return {"length": span[0], "EI": span[1]}


def _support(bearing: Any, *, frame: bool) -> Support | None:
    stated = bearing if isinstance(bearing, dict) else {"kind": bearing}
    along = RIGID if frame else FREE
    vertical, horizontal, rotation = {
        "pinned": (RIGID, along, FREE),
        "roller": (RIGID, FREE, FREE),
        "roller_x": (FREE, RIGID, FREE),
        "fixed": (RIGID, along, RIGID),
        "guided": (FREE, along, RIGID),
        "free": (FREE, FREE, FREE),
    }[stated["kind"]]
    vertical = stated.get("spring", vertical)
    rotation = stated.get("turning spring", rotation)
    return Support(vertical, horizontal, rotation) if vertical or horizontal or rotation else None


def _movements(bearing: Any, joint: int) -> list[Action]:
    if not isinstance(bearing, dict) or not {"sinks", "turns"} & set(bearing):
        return []
    sinks, turns = bearing.get("sinks", 0.0), bearing.get("turns", 0.0)
    return [JointMovement(CASE, joint, vertical=sinks, rotation=turns)]


def _pieces(span: dict[str, Any], low: float, high: float) -> tuple[Piece, ...]:
    """Return the pieces of a span between two distances from its start."""
    length = span["length"]
    if (low, high) != (0.0, length):
        return (Piece(high - low, (span["EI"],)),)
    if "steps" in span:
        edges = [0.0, *(to for to, _ in span["steps"])]
        return tuple(
            Piece(to - edge, (rigidity,))
            for edge, (to, rigidity) in zip(edges, span["steps"], strict=False)
        )
    if "taper" in span:
        power = float(span["power"])
        root = span["EI"] ** (1.0 / power)
        return (Piece(length, (root, root * (span["taper"] - 1.0)), power),)
    if "haunches" in span:
        return _haunched(span)
    shear = (span["GA"],) if "GA" in span else None
    return (Piece(length, (span["EI"],), shear=shear),)


def _haunched(span: dict[str, Any]) -> tuple[Piece, ...]:
    start, rise_start = span.get("at start", (0.0, 0.0))
    end, rise_end = span.get("at end", (0.0, 0.0))
    root = span["EI"] ** (1.0 / 3.0)
    # Depth over least depth, from the end of the span inwards (u = 0 to 1).
    shapes = {
        "straight": lambda r: (1.0 + r, -r),
        "parabolic": lambda r: (1.0 + r, -2.0 * r, r),
        "prismatic": lambda r: (1.0 + r,),
    }
    shape = shapes[span["haunches"]]
    inward = [root * c for c in shape(rise_start)]
    outward = [root * c for c in _reversed(shape(rise_end))]
    middle = 1.0 - start - end
    pieces = [
        Piece(start * span["length"], tuple(inward), 3.0),
        Piece(middle * span["length"], (span["EI"],)),
        Piece(end * span["length"], tuple(outward), 3.0),
    ]
    return tuple(piece for piece in pieces if piece.length > 1e-12)


def _reversed(coefficients: tuple[float, ...]) -> tuple[float, ...]:
    """Return the coefficients of p(1 - u) for those of p(u), degree up to 2."""
    c0, c1, c2 = (*coefficients, 0.0, 0.0)[:3]
    return (c0 + c1 + c2, -c1 - 2.0 * c2, c2)


def _actions(item: Item, line: Line, spans: Any, bearings: Any) -> list[Action]:
    found: list[Action] = []
    for stated in item.get("actions", ()):
        if "bearing" in stated:
            found.append(_at_bearing(stated, bearings[stated["bearing"]]))
        elif "push" in stated:
            found.append(JointForce(CASE, bearings[stated["joint"]], horizontal=stated["push"]))
        else:
            where = stated.get("span", stated.get("bar"))
            for key in spans if where is None else [where]:
                found += _on_span(stated, line, spans[key])
    return found


def _at_bearing(stated: dict[str, Any], joint: int) -> Action:
    if "sinks" in stated:
        return JointMovement(CASE, joint, vertical=stated["sinks"])
    return JointForce(
        CASE, joint, vertical=stated.get("force", 0.0), moment=stated.get("couple", 0.0)
    )


def _on_span(stated: dict[str, Any], line: Line, parts: Any) -> list[Action]:
    found: list[Action] = []
    whole = parts[-1][1] + line.members[parts[-1][0]].length
    for index, offset in parts:
        member = line.members[index]
        length = member.length
        if "point" in stated or "couple" in stated:
            x = stated["at"] - offset
            if not 0.0 <= x < length and not (x == length and offset + x == whole):
                continue
            found.append(
                PointForce(CASE, index, x, stated["point"])
                if "point" in stated
                else PointMoment(CASE, index, x, stated["couple"])
            )
            continue
        if "curvature" in stated or "warmer below" in stated:
            found.append(ImposedCurvature(CASE, index, 0.0, length, _curvature(stated)))
            continue
        low, high = stated.get("from", 0.0), stated.get("to", whole)
        start, end = max(low, offset), min(high, offset + length)
        if start < end:
            shape = _shape(stated, low, high, start)
            across, along = _components(stated.get("toward"), line.direction(member))
            transverse = tuple(across * c for c in shape)
            axial = tuple(along * c for c in shape) if along else ()
            found.append(
                DistributedForce(CASE, index, start - offset, end - offset, transverse, axial)
            )
    return found


def _curvature(stated: dict[str, Any]) -> float:
    if "curvature" in stated:
        return float(stated["curvature"])
    return float(stated["expansion"] * stated["warmer below"] / stated["depth"])


def _shape(stated: dict[str, Any], low: float, high: float, start: float) -> tuple[float, ...]:
    """Return the intensity as a polynomial in the distance from ``start`` (at least ``low``)."""
    if "uniform" in stated:
        return (stated["uniform"],)
    if "linear" in stated:
        first, last = stated["linear"]
        slope = (last - first) / (high - low)
        return (first + slope * (start - low), slope)
    assert start == low, "a polynomial is not cut by a hinge in these items"
    return tuple(stated["polynomial"])


def _components(toward: str | None, direction: tuple[float, float]) -> tuple[float, float]:
    """Return what part of an intensity acts across (local down) and along the member."""
    cosine, sine = direction
    if toward == "right":
        return sine, cosine
    if toward == "down":
        return cosine, -sine
    return 1.0, 0.0
