"""The bodies of a building as triangles, to be seen faintly behind its beam lines.

For the eye alone: no result depends on it.  What has no body, or one that cannot be made, is
left out and counted.
"""

from __future__ import annotations

import multiprocessing
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import Any

import ifcopenshell.geom
import numpy as np
from numpy.typing import NDArray

from analysis_core.ifc.source import Source

Progress = Callable[[str, float], None]
Floats = NDArray[np.float64]
Integers = NDArray[np.int32]
Body = tuple[str, Floats, Integers, Integers]

_geometry: Any = ifcopenshell.geom  # only partly typed


@dataclass(frozen=True, slots=True, eq=False)
class BuildingShape:
    """points (N, 3) in m, world; triangles (T, 3) and edges (E, 2) are rows of ``points``.

    ``elements`` are the GlobalIds of what is shown, ``missing`` of what has no body to show.
    """

    points: Floats
    triangles: Integers
    edges: Integers
    elements: tuple[str, ...]
    missing: tuple[str, ...] = ()


def building_shape(source: Source, *, progress: Progress | None = None) -> BuildingShape:
    """Return the bodies of all elements of a building, openings cut out.

    ``progress`` may raise to stop the work.
    """
    tell = progress or _silent
    wanted = [
        element
        for element in source.file.by_type("IfcElement")
        if element.Representation is not None and not element.is_a("IfcFeatureElement")
    ]
    points: list[Floats] = [np.zeros((0, 3))]
    triangles: list[Integers] = [np.zeros((0, 3), dtype=np.int32)]
    edges: list[Integers] = [np.zeros((0, 2), dtype=np.int32)]
    elements: list[str] = []
    first = 0
    for done, (global_id, at, faces, borders) in enumerate(_bodies(source.file, wanted)):
        tell("Drawing the building", done / len(wanted))
        points.append(at)
        triangles.append(faces + np.int32(first))
        edges.append(borders + np.int32(first))
        elements.append(global_id)
        first += len(at)
    tell("Drawing the building", 1.0)
    shown = set(elements)
    return BuildingShape(
        points=np.concatenate(points),
        triangles=np.concatenate(triangles),
        edges=np.concatenate(edges),
        elements=tuple(elements),
        missing=tuple(e.GlobalId for e in wanted if e.GlobalId not in shown),
    )


def _bodies(file: Any, wanted: list[Any]) -> Iterator[Body]:
    """Yield the bodies, all at once where possible, else one by one.

    One element with a placement that the geometry library does not know stops the quick way for
    every other as well.
    """
    if not wanted:
        return
    settings = _geometry.settings()
    settings.set("use-world-coords", True)
    seen: set[str] = set()
    try:
        for body in _together(file, wanted, settings):
            seen.add(body[0])
            yield body
    except RuntimeError:
        for element in wanted:
            if element.GlobalId not in seen:
                try:
                    shape = _geometry.create_shape(settings, element)
                except RuntimeError:
                    continue
                yield _body(element.GlobalId, shape.geometry)


def _together(file: Any, wanted: list[Any], settings: Any) -> Iterator[Body]:
    threads = max(multiprocessing.cpu_count() - 1, 1)  # one is left to the window
    iterator = _geometry.iterator(settings, file, threads, include=wanted)
    if not iterator.initialize():
        raise RuntimeError("no body at all")
    while True:
        shape = iterator.get()
        yield _body(shape.guid, shape.geometry)
        if not iterator.next():
            return


def _body(global_id: str, geometry: Any) -> Body:
    points = np.frombuffer(geometry.verts_buffer, dtype=np.float64).reshape(-1, 3)
    triangles = np.frombuffer(geometry.faces_buffer, dtype=np.int32).reshape(-1, 3)
    edges = np.frombuffer(geometry.edges_buffer, dtype=np.int32).reshape(-1, 2)
    return global_id, points.copy(), triangles.copy(), edges.copy()


def _silent(step: str, part: float) -> None:
    return None
