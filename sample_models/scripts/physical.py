"""The physical version: beams, columns, a wall, slabs and footings, as an architect's export."""

from __future__ import annotations

import math
from typing import Any

import scenario
from scenario import Bar, Profile
from step import Writer, material


class PhysicalPart:
    """Writes the building elements; ``elements`` keeps them by name."""

    def __init__(self, writer: Writer) -> None:
        self.writer = writer
        self.elements: dict[str, Any] = {}
        self.profiles: dict[str, Any] = {}
        self._members: dict[tuple[str, str], list[Any]] = {}
        self._contents: dict[str, list[Any]] = {name: [] for name in scenario.LEVELS}
        self.materials = {
            stuff.name: material(writer, stuff) for stuff in (scenario.CONCRETE, scenario.STEEL)
        }

    def write(self) -> None:
        """Write everything and relate it."""
        storeys = self._spatial_structure()
        for bar in [*scenario.floor_beams(), *scenario.joists(), *scenario.rafters()]:
            self._bar(bar, "IfcBeam")
        for bar in scenario.columns():
            self._bar(bar, "IfcColumn")
        self._wall()
        for name, low, high in scenario.panels():
            self._slab(name, low, high)
        for bar in scenario.columns():
            if bar.storey == "Ground floor":
                self._footing(bar)
        self._associate_materials()
        self._contain(storeys)

    def profile(self, profile: Profile) -> Any:
        """The IfcProfileDef of a profile, shared."""
        if profile.name not in self.profiles:
            self.profiles[profile.name] = profile_def(self.writer, profile)
        return self.profiles[profile.name]

    def _spatial_structure(self) -> dict[str, Any]:
        w = self.writer
        site = w.new("IfcSite", Name="Site", CompositionType="ELEMENT", ObjectPlacement=self._at())
        building = w.new(
            "IfcBuilding", Name="Workshops", CompositionType="ELEMENT", ObjectPlacement=self._at()
        )
        storeys = {
            name: w.new(
                "IfcBuildingStorey", Name=name, CompositionType="ELEMENT",
                Elevation=w.lengths(level), ObjectPlacement=self._at((0.0, 0.0, level)),
            )
            for name, level in scenario.LEVELS.items()
        }  # fmt: skip
        for whole, parts in (
            (w.project, [site]),
            (site, [building]),
            (building, [*storeys.values()]),
        ):
            w.new("IfcRelAggregates", key=whole.Name, RelatingObject=whole, RelatedObjects=parts)
        return storeys

    def _bar(self, bar: Bar, ifc_class: str) -> None:
        """Axis from start to end, and an extrusion of the profile along it, depth upward."""
        w = self.writer
        length = math.dist(bar.start, bar.end)
        along = tuple((b - a) / length for a, b in zip(bar.start, bar.end, strict=True))
        # Local z runs along the bar; local y, the profile's depth, points up (north for columns).
        up = (0.0, 0.0, 1.0) if abs(along[2]) < 0.5 else (0.0, 1.0, 0.0)
        sideways = (
            up[1] * along[2] - up[2] * along[1],
            up[2] * along[0] - up[0] * along[2],
            up[0] * along[1] - up[1] * along[0],
        )
        place = w.file.create_entity(
            "IfcLocalPlacement", None,
            w.placement(w.point(*bar.start), w.direction(*along), w.direction(*sideways)),
        )  # fmt: skip
        body = w.file.create_entity(
            "IfcExtrudedAreaSolid", self.profile(bar.profile), self._origin(),
            w.direction(0, 0, 1), w.lengths(length),
        )  # fmt: skip
        line = w.file.create_entity(
            "IfcPolyline", [w.point(0.0, 0.0, 0.0), w.point(0.0, 0.0, length)]
        )
        shapes = [
            w.file.create_entity("IfcShapeRepresentation", w.axis, "Axis", "Curve3D", [line]),
            w.file.create_entity("IfcShapeRepresentation", w.body, "Body", "SweptSolid", [body]),
        ]
        element = self._element(ifc_class, bar.name, bar.storey, place, shapes)
        element.ObjectType = bar.profile.name
        self._members.setdefault((bar.profile.name, bar.material.name), []).append(element)

    def _wall(self) -> None:
        half = scenario.WALL_THICKNESS / 2
        south, north = scenario.GRID_Y["2"], scenario.GRID_Y["3"]
        top = scenario.LEVELS["First floor"] - scenario.BEAM.depth
        corners = [(-half, south + half), (half, south + half), (half, north), (-half, north)]
        wall = self._prism("IfcWall", "W-A", "Ground floor", corners, 0.0, top)
        self._members.setdefault(("", scenario.CONCRETE.name), []).append(wall)

    def _slab(self, name: str, low: tuple[float, ...], high: tuple[float, ...]) -> None:
        corners = [(low[0], low[1]), (high[0], low[1]), (high[0], high[1]), (low[0], high[1])]
        bottom = low[2] - scenario.SLAB_THICKNESS
        slab = self._prism("IfcSlab", name, "First floor", corners, bottom, low[2])
        slab.PredefinedType = "FLOOR"
        self._members.setdefault(("", scenario.CONCRETE.name), []).append(slab)
        (x1, y1), (x2, y2) = scenario.STAIR_OPENING
        if low[0] < x1 < high[0] and low[1] < y1 < high[1]:
            hole = [(x1, y1), (x2, y1), (x2, y2), (x1, y2)]
            opening = self._prism("IfcOpeningElement", f"{name} stair", "", hole, bottom, low[2])
            self.writer.new(
                "IfcRelVoidsElement", key=name, RelatingBuildingElement=slab,
                RelatedOpeningElement=opening,
            )  # fmt: skip

    def _footing(self, column: Bar) -> None:
        x, y, side = column.start[0], column.start[1], 0.7
        corners = [
            (x - side, y - side),
            (x + side, y - side),
            (x + side, y + side),
            (x - side, y + side),
        ]
        name = column.name.replace("C-", "F-")
        footing = self._prism("IfcFooting", name, "Ground floor", corners, -0.5, 0.0)
        footing.PredefinedType = "PAD_FOOTING"
        self._members.setdefault(("", scenario.CONCRETE.name), []).append(footing)

    def _prism(
        self, ifc_class: str, name: str, storey: str,
        corners: list[tuple[float, float]], bottom: float, top: float,
    ) -> Any:  # fmt: skip
        w = self.writer
        outline = w.file.create_entity("IfcPolyline", [w.point(*c) for c in [*corners, corners[0]]])
        profile = w.file.create_entity("IfcArbitraryClosedProfileDef", "AREA", None, outline)
        body = w.file.create_entity(
            "IfcExtrudedAreaSolid", profile, self._origin(), w.direction(0, 0, 1),
            w.lengths(top - bottom),
        )  # fmt: skip
        shape = w.file.create_entity("IfcShapeRepresentation", w.body, "Body", "SweptSolid", [body])
        place = self._at((0.0, 0.0, bottom))
        return self._element(ifc_class, name, storey, place, [shape])

    def _element(
        self, ifc_class: str, name: str, storey: str, place: Any, shapes: list[Any]
    ) -> Any:
        w = self.writer
        shape = w.file.create_entity("IfcProductDefinitionShape", None, None, shapes)
        element = w.new(ifc_class, Name=name, ObjectPlacement=place, Representation=shape)
        self.elements[name] = element
        if storey:
            self._contents[storey].append(element)
        return element

    def _associate_materials(self) -> None:
        """IFC2X3 names the material alone; from IFC4 on the profile goes with it."""
        w = self.writer
        for (profile, stuff), elements in self._members.items():
            relating = self.materials[stuff]
            if profile and w.schema != "IFC2X3":
                relating = profile_set(w, self.profiles[profile], relating)
            w.new(
                "IfcRelAssociatesMaterial", key=f"{profile}/{stuff}",
                RelatingMaterial=relating, RelatedObjects=elements,
            )  # fmt: skip

    def _contain(self, storeys: dict[str, Any]) -> None:
        for name, elements in self._contents.items():
            if elements:
                self.writer.new(
                    "IfcRelContainedInSpatialStructure", key=name,
                    RelatingStructure=storeys[name], RelatedElements=elements,
                )  # fmt: skip

    def _at(self, origin: tuple[float, float, float] = (0.0, 0.0, 0.0)) -> Any:
        w = self.writer
        return w.file.create_entity("IfcLocalPlacement", None, w.placement(w.point(*origin)))

    def _origin(self) -> Any:
        return self.writer.placement(self.writer.point(0.0, 0.0, 0.0))


def profile_def(writer: Writer, profile: Profile) -> Any:
    """An I-shape or a rectangle, its depth along y."""
    w = writer
    place = w.file.create_entity("IfcAxis2Placement2D", w.point(0.0, 0.0))
    if not profile.web:
        return w.file.create_entity(
            "IfcRectangleProfileDef", "AREA", profile.name, place,
            w.lengths(profile.width), w.lengths(profile.depth),
        )  # fmt: skip
    return w.file.create_entity(
        "IfcIShapeProfileDef", ProfileType="AREA", ProfileName=profile.name, Position=place,
        OverallWidth=w.lengths(profile.width), OverallDepth=w.lengths(profile.depth),
        WebThickness=w.lengths(profile.web), FlangeThickness=w.lengths(profile.flange),
        FilletRadius=w.lengths(profile.fillet),
    )  # fmt: skip


def profile_set(writer: Writer, profile: Any, material_entity: Any) -> Any:
    """An IfcMaterialProfileSetUsage of one profile, placed by its centroid (cardinal point 10)."""
    w = writer
    one = w.file.create_entity(
        "IfcMaterialProfile", Material=material_entity, Profile=profile, Name=profile.ProfileName
    )
    whole = w.file.create_entity("IfcMaterialProfileSet", profile.ProfileName, None, [one])
    return w.file.create_entity("IfcMaterialProfileSetUsage", whole, 10)
