"""Write a described analysis model as an IFC file of any schema."""

from __future__ import annotations

import hashlib
import math
from collections.abc import Iterable, Sequence
from pathlib import Path
from typing import Any

import ifcopenshell
import ifcopenshell.guid

from ifc_makers import ifc2x3, ifc4
from ifc_makers.description import (
    Joint,
    Link,
    Model,
    MoveJoint,
    NodeLoad,
    Point,
    PointLoad,
    Six,
    SpreadLoad,
    Stick,
    Warmth,
)
from ifc_makers.units import Units

_SCHEMAS = {"IFC2X3": "IFC2X3", "IFC4": "IFC4", "IFC4X3": "IFC4X3_ADD2"}
_SIX_KINDS = {
    "stiffness": ("LINEARSTIFFNESSUNIT",) * 3 + ("ROTATIONALSTIFFNESSUNIT",) * 3,
    "force": ("FORCEUNIT",) * 3 + ("TORQUEUNIT",) * 3,
    "line": ("LINEARFORCEUNIT",) * 3 + ("LINEARMOMENTUNIT",) * 3,
    "movement": ("LENGTHUNIT",) * 3 + ("PLANEANGLEUNIT",) * 3,
}


def write_analysis_model(
    path: Path | str, model: Model, *, schema: str = "IFC4", units: str = "m_N"
) -> Path:
    """Write a model and return the path."""
    return AnalysisFile(model, schema=schema, units=units).write(path)


def global_id(name: str) -> str:
    """Return the GlobalId that the makers give to what bears this name."""
    return ifcopenshell.guid.compress(hashlib.md5(name.encode()).hexdigest())


class AnalysisFile:
    """The file while it is made; ``by_name`` holds the rooted entities by their names."""

    def __init__(self, model: Model, *, schema: str = "IFC4", units: str = "m_N") -> None:
        self.file = ifcopenshell.file(schema=_SCHEMAS[schema])
        self.schema = schema
        self.model = model
        self.units = Units(self.file, units)
        self.by_name: dict[str, Any] = {}
        self._points: dict[Point, Any] = {}
        self._flavour: Any = ifc2x3 if schema == "IFC2X3" else ifc4
        self._project()
        for joint in model.joints:
            self._joint(joint)
        self._flavour.write_sticks(self, model.sticks)
        for stick in model.sticks:
            for link in stick.links:
                self._link(stick, link)
        actions: dict[str, list[Any]] = {}
        for action in model.actions:
            actions.setdefault(action.case, []).append(self._action(action))
        for case in model.cases:
            self._flavour.write_case(self, case, actions.get(case.name, []))
        for combination in model.combinations:
            self._flavour.write_combination(self, combination)
        self._analysis_model()

    def write(self, path: Path | str) -> Path:
        """Write the file and return its path."""
        path = Path(path)
        path.write_text(self.file.to_string())
        return path

    # -- building blocks ---------------------------------------------------------------------

    def create(self, ifc_class: str, *values: Any, **named: Any) -> Any:
        """Create an entity."""
        return self.file.create_entity(ifc_class, *values, **named)

    def rooted(self, ifc_class: str, name: str, *values: Any, **named: Any) -> Any:
        """Create a rooted entity with a GlobalId made from its name."""
        entity = self.create(ifc_class, global_id(name), self.owner, name, *values, **named)
        self.by_name[name] = entity
        return entity

    def point(self, where: Sequence[float]) -> Any:
        """Return the point at a place in m, shared."""
        key = (where[0], where[1], where[2])
        if key not in self._points:
            scaled = [self.units.of(value, "LENGTHUNIT") for value in key]
            self._points[key] = self.create("IfcCartesianPoint", scaled)
        return self._points[key]

    def direction(self, ratios: Sequence[float]) -> Any:
        """Return a direction."""
        return self.create("IfcDirection", [float(value) for value in ratios])

    def vertex(self, where: Sequence[float]) -> Any:
        """Return a vertex at a place in m."""
        return self.create("IfcVertexPoint", self.point(where))

    def shape(self, item: Any, kind: str) -> Any:
        """Return a product definition shape with one topological item."""
        representation = self.create(
            "IfcTopologyRepresentation", self.context, "Reference", kind, [item]
        )
        return self.create("IfcProductDefinitionShape", None, None, [representation])

    def placement(self, z: Point, x: Point) -> Any:
        """Return axes at the origin."""
        return self.create(
            "IfcAxis2Placement3D", self.point((0.0, 0.0, 0.0)), self.direction(z), self.direction(x)
        )

    def six(self, ifc_class: str, kind: str, values: Iterable[float], name: str = "") -> Any:
        """Create a load with six values, given in SI."""
        scaled = [
            self.units.of(value, unit) if value else None
            for value, unit in zip(values, _SIX_KINDS[kind], strict=True)
        ]
        return self.create(ifc_class, name or None, *scaled)

    def condition(self, stiffness: Six, name: str = "") -> Any:
        """Create a boundary node condition as the schema writes it."""
        kinds = _SIX_KINDS["stiffness"]
        values = [
            self._flavour.stiffness(self, value, kind)
            for value, kind in zip(stiffness, kinds, strict=True)
        ]
        return self.create("IfcBoundaryNodeCondition", name or None, *values)

    def relate(self, ifc_class: str, name: str, *values: Any, **named: Any) -> Any:
        """Create a relation."""
        return self.rooted(ifc_class, name, None, *values, **named)

    # -- the parts of the model --------------------------------------------------------------

    def _project(self) -> None:
        person = self.create("IfcPerson", None, "Tester")
        organization = self.create("IfcOrganization", None, "Test bench")
        both = self.create("IfcPersonAndOrganization", person, organization)
        application = self.create("IfcApplication", organization, "1", "Test makers", "makers")
        self.owner = self.create(
            "IfcOwnerHistory", both, application, None, "ADDED", CreationDate=1700000000
        )
        world = self.create("IfcAxis2Placement3D", self.point((0.0, 0.0, 0.0)))
        self.context = self.create(
            "IfcGeometricRepresentationContext", None, "Model", 3, 1e-6, world
        )
        self.rooted(
            "IfcProject",
            self.model.name,
            RepresentationContexts=[self.context],
            UnitsInContext=self.units.assignment(),
        )
        turn = self.model.turn
        axes = self.create(
            "IfcAxis2Placement3D",
            self.point(self.model.origin),
            self.direction((0.0, 0.0, 1.0)),
            self.direction((math.cos(turn), math.sin(turn), 0.0)),
        )
        self.origin = self.create("IfcLocalPlacement", None, axes)

    def _joint(self, joint: Joint) -> None:
        shape = self.shape(self.vertex(joint.point), "Vertex")
        condition = None if joint.support is None else self.condition(joint.support, joint.name)
        values = [None, None, self.origin, shape, condition]
        if self.schema != "IFC2X3":
            values.append(self.placement(*joint.axes) if joint.axes else None)
        self.rooted("IfcStructuralPointConnection", joint.name, *values)

    def _link(self, stick: Stick, link: Link) -> None:
        member, joint = self.by_name[stick.name], self.by_name[link.joint]
        condition = None if link.release is None else self.condition(link.release)
        values = [member, joint, condition, None, None, None]
        name = f"{stick.name} to {link.joint}"
        if link.on_member is None:
            self.relate("IfcRelConnectsStructuralMember", name, *values)
            return
        place = next(j.point for j in self.model.joints if j.name == link.joint)
        constraint = self.create(
            "IfcConnectionPointGeometry", self.vertex(link.on_member), self.vertex(place)
        )
        self.relate("IfcRelConnectsWithEccentricity", name, *values, constraint)

    def _action(self, action: Any) -> Any:
        if isinstance(action, SpreadLoad):
            entity = self._flavour.write_spread(self, action)
            target = action.member
        elif isinstance(action, PointLoad):
            entity = self._flavour.write_point(self, action)
            target = action.member
        elif isinstance(action, Warmth):
            load = self.create(
                "IfcStructuralLoadTemperature", None, action.constant, action.along_y,
                action.along_z,
            )  # fmt: skip
            entity = self._flavour.curve_action(self, action.name, load, local=False)
            target = action.member
        else:
            entity, target = self._node_action(action)
        self.relate(
            "IfcRelConnectsStructuralActivity",
            f"{action.name} on {target}",
            self.by_name[target],
            entity,
        )
        return entity

    def _node_action(self, action: NodeLoad | MoveJoint) -> tuple[Any, str]:
        if isinstance(action, NodeLoad):
            values = (*action.force, *action.moment)
            load = self.six("IfcStructuralLoadSingleForce", "force", values)
        else:
            values = (*action.displacement, *action.rotation)
            load = self.six("IfcStructuralLoadSingleDisplacement", "movement", values)
        return self.point_action(action.name, load), action.joint

    def point_action(
        self, name: str, load: Any, *, where: Point | None = None, local: bool = False
    ) -> Any:
        """Create a point action, with a vertex of its own where ``where`` is given."""
        shape = self.shape(self.vertex(where), "Vertex") if where is not None else None
        placement = self.origin if where is not None else None
        return self.rooted(
            "IfcStructuralPointAction", name, None, None, placement, shape, load,
            "LOCAL_COORDS" if local else "GLOBAL_COORDS", False,
        )  # fmt: skip

    def stick_point(self, name: str, position: float) -> Point:
        """Return the point on a member at a distance from its start."""
        stick = next(s for s in self.model.sticks if s.name == name)
        length = math.dist(stick.start, stick.end)
        u = position / length
        a, b = stick.start, stick.end
        return (
            a[0] + u * (b[0] - a[0]), a[1] + u * (b[1] - a[1]), a[2] + u * (b[2] - a[2]),
        )  # fmt: skip

    def _analysis_model(self) -> None:
        tops = [self.by_name[c.name] for c in self.model.combinations] or [
            self.by_name[c.name] for c in self.model.cases
        ]
        values = [None, None, "LOADING_3D", None, tops or None, None]
        if self.schema != "IFC2X3":
            values.append(self.origin)
        model = self.rooted("IfcStructuralAnalysisModel", f"{self.model.name} analysis", *values)
        items = [self.by_name[x.name] for x in (*self.model.joints, *self.model.sticks)]
        self.relate("IfcRelAssignsToGroup", "items of the model", items, None, model)
