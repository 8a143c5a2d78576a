"""The analytical version: members, nodes, supports, releases and loads of an analysis model."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

import scenario
from physical import profile_def, profile_set
from scenario import Bar
from step import Writer, material


class AnalyticalPart:
    """Writes the analysis model.  ``physical`` ties members to elements of the same name."""

    def __init__(self, writer: Writer, physical: Mapping[str, Any] | None = None) -> None:
        self.writer = writer
        self.physical = physical or {}
        self.modern = writer.schema != "IFC2X3"
        self.nodes: dict[tuple[float, ...], Any] = {}
        self.vertices: dict[tuple[float, ...], Any] = {}
        self.members: dict[str, Any] = {}
        self.cases: dict[str, list[Any]] = {"Permanent": [], "Offices": [], "Snow": []}
        self._sets: dict[tuple[str, str], list[Any]] = {}

    def write(self) -> None:
        """Write the members first, then what acts on them, then the groups."""
        self._supports()
        bars = [*scenario.floor_beams(), *scenario.joists(clear=False), *scenario.rafters()]
        for bar in bars:
            self._member(bar)
        self._connect_floor()
        self._connect_joists()
        self._connect_rafters()
        self._sections(bars)
        self._actions()
        self._model()
        self._tie()

    # Members and nodes

    def _supports(self) -> None:
        held = self._condition("Pinned", (True, True, True, False, False, False))
        floor = scenario.LEVELS["First floor"] - scenario.BEAM.depth / 2
        roof = scenario.LEVELS["Roof"] + scenario.RAFTER.depth / 2
        for letter, x in scenario.GRID_X.items():
            for row, y in scenario.GRID_Y.items():
                self._node(f"N-{letter}{row}", (x, y, floor), held)
                self._node(f"N-{letter}{row}-1", (x, y, roof), held)

    def _node(self, name: str, at: tuple[float, ...], condition: Any = None) -> Any:
        key = _rounded(at)
        if key not in self.nodes:
            w = self.writer
            shape = self._topology("Vertex", self._vertex(at))
            node = w.new(
                "IfcStructuralPointConnection", Name=name, Representation=shape,
                ObjectPlacement=self._place(), AppliedCondition=condition,
            )  # fmt: skip
            self.nodes[key] = node
        return self.nodes[key]

    def _member(self, bar: Bar) -> None:
        w = self.writer
        edge = w.file.create_entity("IfcEdge", self._vertex(bar.start), self._vertex(bar.end))
        member = w.new(
            "IfcStructuralCurveMember", Name=bar.name, ObjectPlacement=self._place(),
            Representation=self._topology("Edge", edge), PredefinedType="RIGID_JOINED_MEMBER",
        )  # fmt: skip
        if self.modern:
            member.Axis = w.direction(0, 0, 1)
        self.members[bar.name] = member
        self._sets.setdefault((bar.profile.name, bar.material.name), []).append(member)

    def _connect_floor(self) -> None:
        for bar in scenario.floor_beams():
            # The end is related before the start, as some exporters do.
            self._connect(bar, bar.end)
            self._connect(bar, bar.start)

    def _connect_joists(self) -> None:
        hinge = self._condition("Hinge", (True, True, True, True, False, False))
        for joist in scenario.joists(clear=False):
            for row, end in (("1", joist.start), ("2", joist.end)):
                self._node(f"N-{joist.name}-{row}", end)
                carrier = next(
                    b for b in scenario.floor_beams()
                    if b.start[1] == end[1] and b.start[0] < end[0] < b.end[0]
                )  # fmt: skip
                self._connect(carrier, end)
                self._connect(joist, end, hinge)

    def _connect_rafters(self) -> None:
        for rafter in scenario.rafters():
            for y in scenario.GRID_Y.values():
                self._connect(rafter, (rafter.start[0], y, rafter.start[2]))

    def _connect(self, bar: Bar, at: tuple[float, ...], condition: Any = None) -> None:
        node = self._node(f"N-{bar.name}-tip", at)
        self.writer.new(
            "IfcRelConnectsStructuralMember", key=f"{bar.name}/{_rounded(at)}",
            RelatingStructuralMember=self.members[bar.name], RelatedStructuralConnection=node,
            AppliedCondition=condition,
        )  # fmt: skip

    def _condition(self, name: str, held: tuple[bool, ...]) -> Any:
        """Booleans from IFC4 on; IFC2X3 writes -1 for rigid and 0 for free."""
        w = self.writer
        if not self.modern:
            numbers = [-1.0 if h else 0.0 for h in held]
            return w.file.create_entity("IfcBoundaryNodeCondition", name, *numbers)
        flags = [w.measure("IfcBoolean", h) for h in held]
        return w.file.create_entity("IfcBoundaryNodeCondition", name, *flags)

    def _sections(self, bars: list[Bar]) -> None:
        w = self.writer
        profiles = {b.profile.name: b.profile for b in bars}
        stuffs = {b.material.name: b.material for b in bars}
        materials = {name: material(w, stuff) for name, stuff in stuffs.items()}
        for (profile, stuff), members in self._sets.items():
            shape, relating = profile_def(w, profiles[profile]), materials[stuff]
            key = f"analysis/{profile}"
            if self.modern:
                relating = profile_set(w, shape, relating)
            else:
                properties = w.file.create_entity(
                    "IfcGeneralProfileProperties", ProfileName=profile, ProfileDefinition=shape
                )
                w.new(
                    "IfcRelAssociatesProfileProperties", key=key, RelatedObjects=members,
                    RelatingProfileProperties=properties,
                )  # fmt: skip
            w.new(
                "IfcRelAssociatesMaterial", key=key, RelatedObjects=members,
                RelatingMaterial=relating,
            )  # fmt: skip

    # Actions

    def _actions(self) -> None:
        for bar in scenario.floor_beams():
            row = bar.name[1]
            self._line_load("Permanent", bar, scenario.FINISHES[row])
            self._line_load("Offices", bar, scenario.OFFICES[row])
        for bar in scenario.joists():
            self._line_load("Permanent", bar, scenario.JOIST_PERMANENT)
            self._line_load("Offices", bar, scenario.JOIST_IMPOSED)
        for bar in scenario.rafters():
            self._line_load("Permanent", bar, scenario.ROOFING)
            self._line_load("Snow", bar, scenario.SNOW)
        bars = {bar.name: bar for bar in scenario.floor_beams()}
        self._hoist(bars["B3-BC"])
        if self.modern:
            self._parapet(bars["B2-balcony"])

    def _line_load(self, case: str, bar: Bar, intensity: float) -> None:
        w = self.writer
        load = w.file.create_entity(
            "IfcStructuralLoadLinearForce", LinearForceX=0.0, LinearForceY=0.0,
            LinearForceZ=-w.forces(intensity, 1),
        )  # fmt: skip
        extra = {"PredefinedType": "CONST"} if self.modern else {}
        self._act(
            "IfcStructuralLinearAction", case, bar, load, ProjectedOrTrue="TRUE_LENGTH", **extra
        )

    def _hoist(self, bar: Bar) -> None:
        """A point force with a vertex of its own, somewhere along the member."""
        w = self.writer
        x = (bar.start[0] + bar.end[0]) / 2
        load = w.file.create_entity(
            "IfcStructuralLoadSingleForce", ForceX=0.0, ForceY=0.0,
            ForceZ=-w.forces(scenario.HOIST),
        )  # fmt: skip
        shape = self._topology("Vertex", self._vertex((x, bar.start[1], bar.start[2])))
        self._act("IfcStructuralPointAction", "Offices", bar, load, Representation=shape)

    def _parapet(self, bar: Bar) -> None:
        """A load configuration over the outer half of the member."""
        w = self.writer
        length = math.dist(bar.start, bar.end)
        values = [
            w.file.create_entity(
                "IfcStructuralLoadLinearForce", LinearForceZ=-w.forces(scenario.PARAPET, 1)
            )
            for _ in range(2)
        ]
        places = [[w.lengths(length / 2)], [w.lengths(length)]]
        load = w.file.create_entity("IfcStructuralLoadConfiguration", "Parapet", values, places)
        self._act("IfcStructuralCurveAction", "Permanent", bar, load, PredefinedType="LINEAR")

    def _act(self, ifc_class: str, case: str, bar: Bar, load: Any, **more: Any) -> None:
        w = self.writer
        name = f"{case} on {bar.name}"
        action = w.new(
            ifc_class, key=f"{name}/{ifc_class}", Name=name, AppliedLoad=load,
            GlobalOrLocal="GLOBAL_COORDS", DestabilizingLoad=False,
            ObjectPlacement=self._place(), **more,
        )  # fmt: skip
        w.new(
            "IfcRelConnectsStructuralActivity", key=f"{name}/{ifc_class}",
            RelatingElement=self.members[bar.name], RelatedStructuralActivity=action,
        )  # fmt: skip
        self.cases[case].append(action)

    # Groups

    def _model(self) -> None:
        w = self.writer
        cases = {name: self._case(name, actions) for name, actions in self.cases.items()}
        combinations = self._combinations(cases) if self.modern else []
        model = w.new(
            "IfcStructuralAnalysisModel", Name="Line model", PredefinedType="LOADING_3D",
            OrientationOf2DPlane=None, LoadedBy=[*cases.values(), *combinations],
        )  # fmt: skip
        if self.modern:
            model.SharedPlacement = self._place()
            w.new(
                "IfcRelDeclares",
                key="analysis",
                RelatingContext=w.project,
                RelatedDefinitions=[model],
            )
        w.new(
            "IfcRelAssignsToGroup", key="model", RelatingGroup=model,
            RelatedObjects=[*self.members.values(), *self.nodes.values()],
        )  # fmt: skip

    def _case(self, name: str, actions: list[Any]) -> Any:
        """In the permanent case the self weight comes by its coefficients (from IFC4 on)."""
        kind, source = {
            "Permanent": ("PERMANENT_G", "DEAD_LOAD_G"),
            "Offices": ("VARIABLE_Q", "LIVE_LOAD_Q"),
            "Snow": ("VARIABLE_Q", "SNOW_S"),
        }[name]
        w = self.writer
        ifc_class = "IfcStructuralLoadCase" if self.modern else "IfcStructuralLoadGroup"
        case = w.new(
            ifc_class, Name=name, PredefinedType="LOAD_CASE", ActionType=kind,
            ActionSource=source, Coefficient=1.0,
        )  # fmt: skip
        if self.modern and name == "Permanent":
            case.SelfWeightCoefficients = (0.0, 0.0, -1.0)
        w.new("IfcRelAssignsToGroup", key=name, RelatingGroup=case, RelatedObjects=actions)
        return case

    def _combinations(self, cases: Mapping[str, Any]) -> list[Any]:
        groups = []
        for name, (purpose, factors) in scenario.COMBINATIONS.items():
            group = self.writer.new(
                "IfcStructuralLoadGroup", Name=name, PredefinedType="LOAD_COMBINATION",
                ActionType="NOTDEFINED", ActionSource="NOTDEFINED", Purpose=purpose,
            )  # fmt: skip
            groups.append(group)
            for case, factor in factors.items():
                self.writer.new(
                    "IfcRelAssignsToGroupByFactor", key=f"{name}/{case}", RelatingGroup=group,
                    RelatedObjects=[cases[case]], Factor=factor,
                )  # fmt: skip
        return groups

    def _tie(self) -> None:
        for name, member in self.members.items():
            if name in self.physical:
                self.writer.new(
                    "IfcRelAssignsToProduct", key=name, RelatedObjects=[member],
                    RelatingProduct=self.physical[name],
                )  # fmt: skip

    # Geometry

    def _vertex(self, at: tuple[float, ...]) -> Any:
        key = _rounded(at)
        if key not in self.vertices:
            w = self.writer
            self.vertices[key] = w.file.create_entity("IfcVertexPoint", w.point(*at))
        return self.vertices[key]

    def _topology(self, kind: str, item: Any) -> Any:
        w = self.writer
        shape = w.file.create_entity(
            "IfcTopologyRepresentation", w.context, "Reference", kind, [item]
        )
        return w.file.create_entity("IfcProductDefinitionShape", None, None, [shape])

    def _place(self) -> Any:
        w = self.writer
        return w.file.create_entity("IfcLocalPlacement", None, w.placement(w.point(0.0, 0.0, 0.0)))


def _rounded(at: tuple[float, ...]) -> tuple[float, ...]:
    return tuple(round(c, 6) + 0.0 for c in at)
