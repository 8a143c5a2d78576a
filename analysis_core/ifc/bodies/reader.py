"""Bodies of products as prisms, meshes or curved sweeps, in the product's own coordinates."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable
from itertools import pairwise
from typing import Any

import numpy as np

from analysis_core.ifc.bodies.face_gatherer import FaceGatherer
from analysis_core.ifc.bodies.items import NOTHING, Cut, Item, Mesh, Prism, Shape, together
from analysis_core.ifc.bodies.sweeps import SweepReader, Swept, disk_profile
from analysis_core.ifc.geometry import frames, outline
from analysis_core.ifc.geometry.curves import read_path
from analysis_core.ifc.geometry.frames import WORLD, Frame
from analysis_core.ifc.geometry.outline import Floats
from analysis_core.ifc.geometry.paths import Measures, Path, Segment, in_space, sampled
from analysis_core.ifc.geometry.placements import Placements
from analysis_core.ifc.sections.drawn import Drawn
from analysis_core.ifc.sections.reader import Profile, SectionReader, profile_of
from analysis_core.ifc.unreadable import READ_ERRORS, UnreadableShapeError, reason_of

_DEEPEST_NESTING = 40

_NOT_A_BODY = {"body", "axis", "footprint", "box", "annotation", "cog", "profile", "reference",
               "clearance", "lighting", "survey", "surface", "plan", "boundingbox"}  # fmt: skip


class BodyReader:
    """Reads representations; mapped ones once."""

    def __init__(self, sections: SectionReader, placements: Placements, measures: Measures) -> None:
        self._sections = sections
        self._placements = placements
        self._measures = measures
        self._length = measures.length
        self._maps: dict[int, tuple[Item, ...]] = {}
        self._axis_maps: dict[int, Path | None] = {}
        self._troubles: list[str] = []
        sweeps = SweepReader(self._profile, placements, measures)
        self._readers: dict[str, Callable[[Any, int], Iterable[Item]]] = {
            "IfcExtrudedAreaSolid": self._extrusion,
            "IfcExtrudedAreaSolidTapered": self._tapered_extrusion,
            "IfcMappedItem": self._mapped,
            "IfcBooleanResult": self._boolean,
            "IfcBooleanClippingResult": self._boolean,
            "IfcCsgSolid": lambda item, depth: self._item(item[0], depth + 1),
            "IfcBlock": self._block,
            "IfcRightCircularCylinder": self._cylinder,
            "IfcRightCircularCone": self._cone,
            "IfcRectangularPyramid": self._pyramid,
            "IfcGeometricSet": self._set,
            "IfcCurveBoundedPlane": self._bounded_plane,
            "IfcFacetedBrep": self._brep,
            "IfcFacetedBrepWithVoids": self._brep,
            "IfcManifoldSolidBrep": self._brep,
            "IfcAdvancedBrep": self._brep,
            "IfcAdvancedBrepWithVoids": self._brep,
            "IfcShellBasedSurfaceModel": self._surfaces,
            "IfcFaceBasedSurfaceModel": self._surfaces,
            "IfcOpenShell": self._shell,
            "IfcClosedShell": self._shell,
            "IfcConnectedFaceSet": self._shell,
            "IfcTriangulatedFaceSet": self._tessellation,
            "IfcTriangulatedIrregularNetwork": self._tessellation,
            "IfcPolygonalFaceSet": self._tessellation,
            "IfcRevolvedAreaSolid": _swept(sweeps.revolution),
            "IfcRevolvedAreaSolidTapered": _swept(sweeps.revolution),
            "IfcSweptDiskSolid": _swept(sweeps.disk),
            "IfcSweptDiskSolidPolygonal": _swept(sweeps.disk),
            "IfcFixedReferenceSweptAreaSolid": _swept(sweeps.directrix),
            "IfcDirectrixDerivedReferenceSweptAreaSolid": _swept(sweeps.directrix),
            "IfcSurfaceCurveSweptAreaSolid": _swept(sweeps.directrix),
            "IfcSectionedSpine": _swept(sweeps.spine),
            "IfcSectionedSolidHorizontal": _swept(sweeps.horizontal),
            "IfcBoundingBox": self._box,
        }

    def read(self, definition: Any) -> Shape:
        """Return the shape of an IfcProductDefinitionShape (None: nothing)."""
        if definition is None:
            return NOTHING
        axis: Path | None = None
        body: tuple[Item, ...] = ()
        box: tuple[Item, ...] = ()
        self._troubles = []
        representations = definition.get_argument(2)
        for representation in representations:
            identifier = representation.get_argument(1)
            if identifier == "Body" or (identifier or "").lower() == "body":
                body = body + self._items(representation)
            elif identifier == "Axis" or (identifier or "").lower() == "axis":
                axis = axis or self._axis(representation)
            elif (identifier or "").lower() in ("box", "boundingbox"):
                box = self._items(representation)
        if not body:
            for representation in representations:
                if (representation[1] or "").lower() not in _NOT_A_BODY:
                    body = self._items(representation)
                    if body:
                        break
        troubles = tuple(dict.fromkeys(self._troubles))
        if not body and box:
            return Shape(axis, box, troubles, box_only=True)
        return Shape(axis, body, troubles)

    def _items(self, representation: Any) -> tuple[Item, ...]:
        items: tuple[Any, ...] = representation.get_argument(3) or ()
        if len(items) == 1:
            return tuple(self._item(items[0], 0))
        return tuple(found for item in items for found in self._item(item, 0))

    def _item(self, item: Any, depth: int) -> Iterable[Item]:
        reader = self._readers.get(item.is_a())
        if depth > _DEEPEST_NESTING:
            self._troubles.append(f"{item.is_a()} #{item.id()} is nested in a circle")
            return ()
        if reader is None:
            if not item.is_a("IfcCurve") and not item.is_a("IfcPoint"):
                self._troubles.append(f"{item.is_a()} #{item.id()} is not a body it reads")
            return ()
        try:
            return tuple(reader(item, depth))
        except READ_ERRORS as error:
            self._troubles.append(f"{item.is_a()} #{item.id()}: {reason_of(error)}")
            return ()

    def _axis(self, representation: Any) -> Path | None:
        for item in representation.get_argument(3) or ():
            try:
                if item.is_a() == "IfcPolyline":
                    return read_path(item, self._measures)
                if item.is_a("IfcMappedItem"):
                    path = self._axis(item[0][1])
                    return _moved_path(path, self._mapping_frame(item)) if path else None
                if item.is_a("IfcCurve"):
                    return read_path(item, self._measures)
            except READ_ERRORS as error:
                self._troubles.append(f"axis {item.is_a()} #{item.id()}: {reason_of(error)}")
        return None

    def _mapped(self, item: Any, depth: int) -> Iterable[Item]:
        source = item[0]
        key = source.id()
        if key not in self._maps:
            self._maps[key] = ()
            found: list[Item] = []
            for inner in source[1][3] or ():
                found.extend(self._item(inner, depth + 1))
            self._maps[key] = tuple(found)
        frame = self._mapping_frame(item)
        if frame == WORLD:
            return self._maps[key]
        return tuple(inner.moved(frame) for inner in self._maps[key])

    def _mapping_frame(self, item: Any) -> Frame:
        target = self._operator(item[1])
        # Applications, the geometry library among them, place the map by its origin; taken by
        # the letter (ISO 10303-43) the origin would be undone first.  It hardly ever differs
        # from the identity.
        origin = self._placements.axes(item[0][0])
        return target if origin == WORLD else frames.compose(target, origin)

    def _operator(self, operator: Any) -> Frame:
        """Return the frame of an IfcCartesianTransformationOperator3D (IfcBaseAxis)."""
        axis1, axis2, origin = operator[0], operator[1], operator[2][0]
        scale = operator[3] if operator[3] is not None else 1.0
        axis3 = operator[4]
        z = frames.unit(self._placements.direction(axis3)) if axis3 else (0.0, 0.0, 1.0)
        rough = self._placements.direction(axis1) if axis1 else (1.0, 0.0, 0.0)
        x = frames.unit(frames.plus(rough, z, -frames.dot(rough, z)))
        y = frames.cross(z, x)
        if axis2 and frames.dot(self._placements.direction(axis2), y) < 0.0:
            y = (-y[0], -y[1], -y[2])
        scale2 = scale3 = scale
        if len(operator) > 5:
            scale2 = operator[5] if operator[5] is not None else scale
            scale3 = operator[6] if operator[6] is not None else scale
        factor = self._length
        return (
            x[0] * scale, x[1] * scale, x[2] * scale,
            y[0] * scale2, y[1] * scale2, y[2] * scale2,
            z[0] * scale3, z[1] * scale3, z[2] * scale3,
            origin[0] * factor, origin[1] * factor,
            origin[2] * factor if len(origin) > 2 else 0.0,
        )  # fmt: skip

    def _extrusion(self, item: Any, depth: int) -> tuple[Item, ...]:
        swept, position = item.get_argument(0), item.get_argument(1)
        profile = self._profile(swept)
        frame = self._placements.shared_axes(position) if position is not None else WORLD
        dx, dy, dz = self._placements.direction(item.get_argument(2))
        norm = math.sqrt(dx * dx + dy * dy + dz * dz)
        extent = item.get_argument(3) * self._length
        if not norm > 0.0 or not extent > 0.0:
            raise UnreadableShapeError(f"an extrusion of depth {item[3]} has no extent")
        factor = extent / norm
        vector = frames.direction(frame, dx * factor, dy * factor, dz * factor)
        return (Prism(profile, frame, vector, swept),)

    def _tapered_extrusion(self, item: Any, depth: int) -> tuple[Item, ...]:
        (prism,) = self._extrusion(item, depth)
        assert isinstance(prism, Prism)
        return (prism._replace(end_profile=self._profile(item[4]), end_entity=item[4]),)

    def _profile(self, entity: Any) -> Profile:
        profile = self._sections.profile(entity)
        if profile is None:
            name = entity[1] or entity.is_a()
            reason = self._sections.reason(entity)
            raise UnreadableShapeError(f"its profile '{name}' (#{entity.id()}): {reason}")
        return profile

    def _boolean(self, item: Any, depth: int) -> Iterable[Item]:
        operator, first, second = item[0], item[1], item[2]
        kept = tuple(self._item(first, depth + 1))
        if operator == "UNION":
            return kept + tuple(self._item(second, depth + 1))
        if operator != "DIFFERENCE":
            return kept
        cuts: tuple[Cut, ...] = ()
        holes: tuple[Prism, ...] = ()
        if second.is_a("IfcHalfSpaceSolid"):
            cut = self._half_space(second)
            cuts = (cut,) if cut is not None else ()
        else:
            taken = self._item(second, depth + 1)
            holes = tuple(part for part in taken if isinstance(part, Prism))
        return tuple(
            part._replace(cuts=part.cuts + cuts, holes=part.holes + holes)
            if isinstance(part, Prism)
            else part
            for part in kept
        )

    def _half_space(self, half: Any) -> Cut | None:
        surface = half[0]
        if not surface.is_a("IfcPlane"):
            return None
        plane = self._placements.axes(surface[0])
        normal = (plane[6], plane[7], plane[8])
        if half[1]:
            # The half-space lies where the normal does not point.
            normal = (-normal[0], -normal[1], -normal[2])
        if not half.is_a("IfcPolygonalBoundedHalfSpace"):
            return Cut(plane[9:], normal)
        frame = self._placements.axes(half[2])
        reach = sampled(read_path(half[3], self._measures))[:, :2]
        return Cut(plane[9:], normal, frame, reach)

    def _block(self, item: Any, depth: int) -> Iterable[Item]:
        x, y, z = (item[i] * self._length for i in (1, 2, 3))
        rows = outline.loop([(0.0, 0.0), (x, 0.0), (x, y), (0.0, y)])
        drawn = Drawn((rows,), "rectangle", {"width": x, "depth": y})
        frame = self._placements.axes(item[0])
        profile = profile_of("", "IfcBlock", drawn)
        return (Prism(profile, frame, frames.direction(frame, 0.0, 0.0, z)),)

    def _cylinder(self, item: Any, depth: int) -> Iterable[Item]:
        height, radius = item[1] * self._length, item[2] * self._length
        frame = self._placements.axes(item[0])
        vector = frames.direction(frame, 0.0, 0.0, height)
        return (Prism(disk_profile(radius, 0.0), frame, vector),)

    def _cone(self, item: Any, depth: int) -> Iterable[Item]:
        height, radius = item[1] * self._length, item[2] * self._length
        turns = np.linspace(0.0, 2.0 * math.pi, 24, endpoint=False)
        ring = radius * np.column_stack([np.cos(turns), np.sin(turns), 0.0 * turns])
        return self._spire(item, ring, height)

    def _pyramid(self, item: Any, depth: int) -> Iterable[Item]:
        x, y, height = (item[i] * self._length for i in (1, 2, 3))
        base = np.array([(0.0, 0.0, 0.0), (x, 0.0, 0.0), (x, y, 0.0), (0.0, y, 0.0)])
        return self._spire(item, base, height)

    def _spire(self, item: Any, base: Floats, height: float) -> Iterable[Item]:
        tip = base.mean(axis=0) + np.array([0.0, 0.0, height])
        count = len(base)
        sides = tuple(((i, (i + 1) % count, count),) for i in range(count))
        bottom = (tuple(range(count - 1, -1, -1)),)
        points = frames.images(self._placements.axes(item[0]), np.vstack([base, tip]))
        return (Mesh(points, (bottom, *sides), item.is_a()),)

    def _set(self, item: Any, depth: int) -> Iterable[Item]:
        parts = [part for inner in item[0] for part in self._item(inner, depth + 1)]
        surfaces = [part for part in parts if isinstance(part, Mesh)]
        return (together(surfaces),) if surfaces else parts

    def _bounded_plane(self, item: Any, depth: int) -> Iterable[Item]:
        frame = self._placements.axes(item[0][0])
        rings = [sampled(read_path(curve, self._measures)) for curve in (item[1], *item[2])]
        rings = [frames.images(frame, in_space(ring[:-1, :2])) for ring in rings]
        stops = np.cumsum([0, *(len(ring) for ring in rings)]).tolist()
        loops = tuple(tuple(range(a, b)) for a, b in pairwise(stops))
        return (Mesh(np.vstack(rings), (loops,), item.is_a()),)

    def _box(self, item: Any, depth: int) -> Iterable[Item]:
        corner = [value * self._length for value in item[0][0]]
        sizes = [item[i] * self._length for i in (1, 2, 3)]
        corners = np.array(
            [
                [
                    c + s * k
                    for c, s, k in zip(corner, sizes, (i & 1, i >> 1 & 1, i >> 2), strict=True)
                ]
                for i in range(8)
            ]
        )
        faces = ((0, 1, 3, 2), (4, 6, 7, 5), (0, 4, 5, 1), (2, 3, 7, 6), (0, 2, 6, 4), (1, 5, 7, 3))
        return (Mesh(corners, tuple((face,) for face in faces), item.is_a()),)

    def _brep(self, item: Any, depth: int) -> Iterable[Item]:
        return self._shell(item[0], depth, item.is_a())

    def _surfaces(self, item: Any, depth: int) -> Iterable[Item]:
        gathered = FaceGatherer(self._length, self._measures)
        for shell in item[0]:
            for face in shell[0]:
                gathered.add(face)
        return gathered.mesh(item.is_a())

    def _shell(self, item: Any, depth: int, ifc_class: str = "") -> Iterable[Item]:
        gathered = FaceGatherer(self._length, self._measures)
        for face in item[0]:
            gathered.add(face)
        return gathered.mesh(ifc_class or item.is_a())

    def _tessellation(self, item: Any, depth: int) -> Iterable[Item]:
        points = np.array(item[0][0], dtype=np.float64) * self._length
        if points.ndim != 2 or points.shape[1] != 3 or len(points) < 4:
            raise UnreadableShapeError("a tessellation with fewer than four points")
        faces: list[tuple[tuple[int, ...], ...]] = []
        if item.is_a("IfcPolygonalFaceSet"):
            renumbered = item.PnIndex
            for face in item.Faces:
                loops = [face[0], *(face[1] if len(face) > 1 else ())]
                faces.append(tuple(tuple(i - 1 for i in loop) for loop in loops))
        else:
            renumbered = item.PnIndex if hasattr(item, "PnIndex") else None
            faces = [(tuple(i - 1 for i in triangle),) for triangle in item.CoordIndex]
        if renumbered:
            faces = [
                tuple(tuple(renumbered[i] - 1 for i in loop) for loop in face) for face in faces
            ]
        return (Mesh(points, tuple(faces), item.is_a()),)


def _moved_path(path: Path, frame: Frame) -> Path:
    def image(p: tuple[float, ...]) -> tuple[float, ...]:
        return frames.point(frame, p[0], p[1], p[2] if len(p) > 2 else 0.0)

    return Path(
        tuple(Segment(tuple(image(p) for p in segment.points)) for segment in path.segments),
        path.exact,
    )


def _swept(read: Callable[[Any], Swept]) -> Callable[[Any, int], Iterable[Item]]:
    return lambda item, depth: read(item)
