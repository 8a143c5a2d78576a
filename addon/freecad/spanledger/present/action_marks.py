"""Marks of actions above the beam: rows by case, arrows, bows and their words."""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np

from .drawing import Drawing, Fill, Place, Spot, Stroke, Words
from .strip import ShownAction, Strip
from .words import say

MOST_ACTION_ROWS = 5

Measure = Callable[[str], float]


def action_rows(actions: Sequence[ShownAction]) -> list[tuple[str, list[ShownAction]]]:
    """Return (case, actions) per row; actions of a case that lie over one another get rows each."""
    by_case: dict[str, list[list[ShownAction]]] = {}
    for action in actions:
        layers = by_case.setdefault(action.case, [])
        for layer in layers:
            if not any(_overlap(action, other) for other in layer):
                layer.append(action)
                break
        else:
            layers.append([action])
    rows = [(case, layer) for case, layers in by_case.items() for layer in layers]
    if len(rows) <= MOST_ACTION_ROWS:
        return rows
    kept = rows[: MOST_ACTION_ROWS - 1]
    return [*kept, (say("{count} more", count=len(rows) - len(kept)), [])]


def draw_actions(
    drawing: Drawing,
    strip: Strip,
    case: str,
    actions: list[ShownAction],
    bottom: float,
    row_height: float,
    measure: Measure,
) -> None:
    """Draw one row of actions, its words and its spots."""
    largest = max((max(abs(a.low), abs(a.high)) for a in actions if a.kind == "spread"), default=0)
    room = max(row_height - 16.0, 6.0)
    taken: list[tuple[float, float]] = []
    for action in actions:
        left, right = drawing.to_pixel(action.start), drawing.to_pixel(action.end)
        if action.kind == "spread":
            _spread(drawing, action, left, right, bottom, room / largest if largest else 0.0)
        else:
            _single(drawing, action, left, right, bottom, room)
        _label(drawing, action, (left + right) / 2.0, bottom - room - 6.0, measure, taken)
        drawing.spots.append(
            Spot(left - 4.0, bottom - room - 12.0, right + 4.0, bottom + 2.0, "action",
                 strip.line.actions.index(action.action), f"{case}: {action.words}")
        )  # fmt: skip


def short(text: str, most: int) -> str:
    """Return a text cut to a length."""
    return text if len(text) <= most else f"{text[: most - 1]}…"


def _overlap(one: ShownAction, other: ShownAction) -> bool:
    if one.kind != "spread" or other.kind != "spread":
        return False
    return one.start < other.end - 1e-6 and other.start < one.end - 1e-6


def _label(
    drawing: Drawing, action: ShownAction, x: float, y: float, measure: Measure,
    taken: list[tuple[float, float]],
) -> None:  # fmt: skip
    half = measure(action.words) / 2.0
    if any(x - half < right and x + half > left for left, right in taken):
        return  # its words are in the tooltip
    taken.append((x - half, x + half))
    drawing.words.append(Words(x, y, action.words, "action", small=True))


def _spread(
    drawing: Drawing, action: ShownAction, left: float, right: float, bottom: float, scale: float
) -> None:
    low, high = (bottom - max(scale * abs(v), 2.0) for v in (action.low, action.high))
    box = ((left, bottom), (left, low), (right, high), (right, bottom))
    drawing.fills.append(Fill(box, "action", 0.16))
    drawing.strokes.append(Stroke((*box, box[0]), "action", 1.0))
    down = action.low + action.high >= 0.0
    at = np.linspace(left, right, max(int((right - left) / 34.0), 1) + 1).tolist()
    first, *more = (_arrow_head(x, bottom if down else bottom - 5.0, down) for x in at)
    drawing.strokes.append(Stroke(first, "action", 1.2, more=tuple(more)))


def _single(
    drawing: Drawing, action: ShownAction, left: float, right: float, bottom: float, room: float
) -> None:
    if action.kind == "couple":
        turn = np.linspace(-2.4, 2.4, 15) if action.low >= 0.0 else np.linspace(2.4, -2.4, 15)
        radius = room / 2.0
        points = tuple(
            (left + radius * np.sin(a), bottom - radius - radius * np.cos(a)) for a in turn
        )
        drawing.strokes.append(Stroke(points, "action", 1.6))
        _head(drawing, points[-2], points[-1])
        return
    if action.kind == "curvature":
        drawing.strokes.append(Stroke(((left, bottom), (right, bottom)), "action", 1.6, True))
        return
    if action.kind == "movement":
        drawing.strokes.append(Stroke(((left, bottom - room), (left, bottom)), "action", 1.6, True))
    else:
        drawing.strokes.append(Stroke(((left, bottom - room), (left, bottom)), "action", 1.8))
    drawing.strokes.append(Stroke(_arrow_head(left, bottom, action.low >= 0.0), "action", 1.2))


def _arrow_head(x: float, y: float, down: bool) -> tuple[Place, ...]:
    side = -5.0 if down else 5.0
    return (x - 3.0, y + side), (x, y), (x + 3.0, y + side)


def _head(drawing: Drawing, before: Place, tip: Place) -> None:
    direction = np.array(tip) - np.array(before)
    direction /= np.hypot(*direction) or 1.0
    across = np.array((-direction[1], direction[0]))
    a, b = (np.array(tip) - 5.0 * direction + side * 3.0 * across for side in (1.0, -1.0))
    drawing.strokes.append(Stroke((tuple(a), tip, tuple(b)), "action", 1.2))
