"""Small IFC files with profiles, bodies and elements, for the tests of the physical way in."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

import ifcopenshell
import ifcopenshell.guid

from analysis_core.ifc.physical.reader import read_physical
from analysis_core.ifc.source import open_model
from analysis_core.settings import Settings


class Maker:
    """Writes one file; lengths in its own unit (millimetres unless ``metres``)."""

    def __init__(self, schema: str = "IFC4", metres: bool = False, degrees: bool = False) -> None:
        self.file = ifcopenshell.file(schema="IFC4X3_ADD2" if schema == "IFC4X3" else schema)
        self.schema = schema
        self.owner = self._owner() if schema == "IFC2X3" else None
        prefix = None if metres else "MILLI"
        length = self.make("IfcSIUnit", UnitType="LENGTHUNIT", Prefix=prefix, Name="METRE")
        angle = self.make("IfcSIUnit", UnitType="PLANEANGLEUNIT", Name="RADIAN")
        if degrees:
            angle = self._degrees(angle)
        units = self.make("IfcUnitAssignment", Units=[length, angle])
        origin = self.axes((0.0, 0.0, 0.0))
        self.context = self.make(
            "IfcGeometricRepresentationContext",
            ContextType="Model",
            CoordinateSpaceDimension=3,
            Precision=1e-5,
            WorldCoordinateSystem=origin,
        )
        self.project = self.root(
            "IfcProject", "Test", RepresentationContexts=[self.context], UnitsInContext=units
        )

    def make(self, ifc_class: str, *values: Any, **named: Any) -> Any:
        return self.file.create_entity(ifc_class, *values, **named)

    def root(self, ifc_class: str, name: str | None = None, **named: Any) -> Any:
        guid = named.pop("GlobalId", None) or ifcopenshell.guid.new()
        return self.make(ifc_class, GlobalId=guid, OwnerHistory=self.owner, Name=name, **named)

    def point(self, *coordinates: float) -> Any:
        return self.make("IfcCartesianPoint", [float(c) for c in coordinates])

    def direction(self, *ratios: float) -> Any:
        return self.make("IfcDirection", [float(r) for r in ratios])

    def axes(self, origin: Any, z: Any = None, x: Any = None) -> Any:
        return self.make(
            "IfcAxis2Placement3D",
            self.point(*origin),
            self.direction(*z) if z else None,
            self.direction(*x) if x else None,
        )

    def axes_2d(self, x: float = 0.0, y: float = 0.0, turn: float = 0.0) -> Any:
        along = self.direction(math.cos(turn), math.sin(turn)) if turn else None
        return self.make("IfcAxis2Placement2D", self.point(x, y), along)

    def profile(self, ifc_class: str, name: str | None = None, **named: Any) -> Any:
        return self.make(ifc_class, ProfileType="AREA", ProfileName=name, **named)

    def rectangle(self, width: float, depth: float, name: str | None = None) -> Any:
        return self.profile(
            "IfcRectangleProfileDef", name, Position=self.axes_2d(), XDim=width, YDim=depth
        )

    def polygon(self, points: Any, name: str | None = None, voids: Any = ()) -> Any:
        if voids:
            return self.profile(
                "IfcArbitraryProfileDefWithVoids",
                name,
                OuterCurve=self.ring(points),
                InnerCurves=[self.ring(void) for void in voids],
            )
        return self.profile("IfcArbitraryClosedProfileDef", name, OuterCurve=self.ring(points))

    def ring(self, points: Any) -> Any:
        made = [self.point(*p) for p in points]
        return self.make("IfcPolyline", [*made, made[0]])

    def line(self, *points: Any) -> Any:
        return self.make("IfcPolyline", [self.point(*p) for p in points])

    def extrusion(
        self, profile: Any, depth: float, position: Any = None, along: Any = (0.0, 0.0, 1.0)
    ) -> Any:
        return self.make(
            "IfcExtrudedAreaSolid",
            profile,
            position if position is not None else self.axes((0.0, 0.0, 0.0)),
            self.direction(*along),
            float(depth),
        )

    def lying(self, origin: Any = (0.0, 0.0, 0.0)) -> Any:
        """Position whose z runs along the element's x and whose y is up."""
        return self.axes(origin, (1.0, 0.0, 0.0), (0.0, 1.0, 0.0))

    def element(
        self,
        ifc_class: str,
        name: str,
        items: Any = (),
        *,
        at: Any = (0.0, 0.0, 0.0),
        z: Any = None,
        x: Any = None,
        axis: Any = None,
        kind: str = "SweptSolid",
        parent: Any = None,
        identifier: str = "Body",
        **named: Any,
    ) -> Any:
        representations = []
        if axis is not None:
            representations.append(
                self.make("IfcShapeRepresentation", self.context, "Axis", "Curve3D", [axis])
            )
        if items:
            representations.append(
                self.make("IfcShapeRepresentation", self.context, identifier, kind, list(items))
            )
        placement = self.make("IfcLocalPlacement", parent, self.axes(at, z, x))
        shape = None
        if representations:
            shape = self.make("IfcProductDefinitionShape", None, None, representations)
        return self.root(ifc_class, name, ObjectPlacement=placement, Representation=shape, **named)

    def associate(self, select: Any, *elements: Any) -> Any:
        return self.root(
            "IfcRelAssociatesMaterial", RelatedObjects=list(elements), RelatingMaterial=select
        )

    def contain(self, storey: Any, *elements: Any) -> Any:
        return self.root(
            "IfcRelContainedInSpatialStructure",
            RelatedElements=list(elements),
            RelatingStructure=storey,
        )

    def mapped(self, item: Any, kind: str = "SweptSolid", **operator: Any) -> Any:
        inner = self.make("IfcShapeRepresentation", self.context, "Body", kind, [item])
        source = self.make("IfcRepresentationMap", self.axes((0.0, 0.0, 0.0)), inner)
        operator.setdefault("LocalOrigin", self.point(0.0, 0.0, 0.0))
        uneven = "Scale2" in operator or "Scale3" in operator
        target = self.make(
            "IfcCartesianTransformationOperator3D" + ("nonUniform" if uneven else ""), **operator
        )
        return self.make("IfcMappedItem", source, target)

    def brep(self, points: Any, faces: Any) -> Any:
        made = [self.point(*p) for p in points]
        shell = [
            self.make(
                "IfcFace",
                [
                    self.make(
                        "IfcFaceOuterBound",
                        self.make("IfcPolyLoop", [made[i] for i in face]),
                        True,
                    )
                ],
            )
            for face in faces
        ]
        return self.make("IfcFacetedBrep", self.make("IfcClosedShell", shell))

    def write(self, folder: Path) -> Path:
        path = folder / "model.ifc"
        self.file.write(str(path))
        return path

    def read(self, folder: Path, settings: Settings | None = None) -> Any:
        """Write, open and read; returns the Building.

        What is made here fits the standard: where the reader says otherwise, it is at fault.
        """
        building = read_physical(open_model(self.write(folder)), settings or Settings())
        for finding in building.findings:
            assert "do not fit the standard" not in finding.message, finding
        return building

    def _owner(self) -> Any:
        person = self.make("IfcPerson", FamilyName="Nobody")
        organisation = self.make("IfcOrganization", Name="None")
        both = self.make("IfcPersonAndOrganization", person, organisation)
        application = self.make("IfcApplication", organisation, "1", "test", "test")
        return self.make("IfcOwnerHistory", both, application, None, "ADDED", CreationDate=0)

    def _degrees(self, radian: Any) -> Any:
        size = self.make(
            "IfcMeasureWithUnit",
            self.make("IfcPlaneAngleMeasure", math.radians(1.0)),
            radian,
        )
        none = self.make("IfcDimensionalExponents", 0, 0, 0, 0, 0, 0, 0)
        return self.make("IfcConversionBasedUnit", none, "PLANEANGLEUNIT", "DEGREE", size)


def box_faces() -> tuple[tuple[int, ...], ...]:
    """Faces of a box whose corner i has x from bit 0, y from bit 1, z from bit 2 of i."""
    return ((0, 2, 3, 1), (4, 5, 7, 6), (0, 1, 5, 4), (2, 6, 7, 3), (0, 4, 6, 2), (1, 3, 7, 5))


def box_points(x: float, y: float, z: float) -> list[tuple[float, float, float]]:
    """Corners of a box that starts at the origin."""
    return [(x * (i & 1), y * (i >> 1 & 1), z * (i >> 2)) for i in range(8)]


def slugs(building: Any) -> set[str]:
    """Slugs of a building's findings."""
    return {finding.slug for finding in building.findings}
