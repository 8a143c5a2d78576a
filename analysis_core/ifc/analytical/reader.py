"""The analytical way in: an analysis model of the open standard becomes a Building.

Each class of relation is walked once and spread to the items by entity number.  What is not
understood becomes a finding with its GlobalId; nothing is dropped in silence.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from typing import Any

from analysis_core.building import Building
from analysis_core.collector import collector_paused
from analysis_core.findings import listed
from analysis_core.ifc.analytical.actions import ActionReader
from analysis_core.ifc.analytical.conditions import ConditionReader
from analysis_core.ifc.analytical.groups import UNASSIGNED, GroupReader
from analysis_core.ifc.analytical.members import Local, MemberReader
from analysis_core.ifc.analytical.notes import MALFORMED, Notes, global_id, is_kind, name_of, titled
from analysis_core.ifc.analytical.properties import MemberProperties
from analysis_core.ifc.analytical.surfaces import SurfaceReader
from analysis_core.ifc.analytical.targets import Target, chained
from analysis_core.ifc.analytical.ties import ties_of
from analysis_core.ifc.analytical.topology import Topology
from analysis_core.ifc.analytical.unassigned import report_unassigned
from analysis_core.ifc.geometry.frames import Frame
from analysis_core.ifc.geometry.paths import Measures
from analysis_core.ifc.posting.ours import RESULT_TYPE
from analysis_core.ifc.source import Source
from analysis_core.settings import Settings

_COUNTED = (
    "IfcStructuralAnalysisModel",
    "IfcStructuralCurveMember",
    "IfcStructuralSurfaceMember",
    "IfcStructuralPointConnection",
    "IfcStructuralCurveConnection",
    "IfcStructuralSurfaceConnection",
    "IfcStructuralAction",
    "IfcStructuralLoadGroup",
)


def read_analytical(source: Source, settings: Settings | None = None) -> Building:
    """Return what the analysis models of a file hold, in SI and world coordinates.

    Never raises for what a model holds: see ``Building.findings``.
    """
    notes = Notes()
    with collector_paused():
        return _Reader(source, settings or Settings(), notes).building()


class _Reader:
    def __init__(self, source: Source, settings: Settings, notes: Notes) -> None:
        self.source = source
        self.file = source.file
        self.settings = settings
        self.notes = notes
        units = source.units
        self.topology = Topology(self.file, Measures(units.length, units.angle))
        # What we posted earlier is a part of a model that was there, and no model of its own.
        models = self.file.by_type("IfcStructuralAnalysisModel")
        self.models = [model for model in models if model[4] != RESULT_TYPE]
        self.shared = self._shared_placements()
        self.varying = self._varying()

    def building(self) -> Building:
        entities = self._elements()
        elements = {key: entity[0] for key, entity in entities.items()}
        locals_ = self._members(elements)
        conditions = ConditionReader(
            self.topology, self.source.units, self.shared, elements, self.notes
        )
        nodes = conditions.connections(self.file.by_type("IfcStructuralPointConnection"))
        relations = self.file.by_type("IfcRelConnectsStructuralMember")
        targets = self._targets(locals_)
        attachments = conditions.attachments(relations, targets, nodes, self.settings.tolerances)
        self._report_surfaces_and_edges(relations)
        actions = list(self.file.by_type("IfcStructuralAction"))
        groups = GroupReader(self.file, [action.id() for action in actions], self.notes)
        cases, combinations, cases_of = groups.read(self._frames_of_groups())
        surfaces = SurfaceReader(
            self.topology,
            self.source.units,
            self.shared,
            self.notes,
            self.file.by_type("IfcStructuralSurfaceMember"),
        )
        reader = ActionReader(
            self.topology,
            self.source.units,
            targets,
            nodes,
            self.settings.tolerances,
            self.notes,
            self.source.schema,
            surfaces,
        )
        placed = reader.read(actions, self._targets_of_actions(), cases_of)
        self._report_loose(actions, cases_of)
        self._report_models()
        report_unassigned(self.file, self.models, self.notes)
        members = tuple(local.member for local in locals_.values())
        joined = tuple(node.connection for node in nodes.values())
        tied = {entity[0]: entity for entity in entities.values()}
        ties = ties_of(self.source, self.settings, members, joined, tied, self.notes)
        self.notes.extend(self.source.units.findings())
        return Building(
            route="analytical",
            schema=self.source.schema,
            name=self._name(),
            members=members,
            connections=joined,
            attachments=tuple(attachments),
            actions=tuple(placed),
            areas=tuple(surfaces.areas.values()),
            area_actions=tuple(reader.area_actions),
            cases=tuple(cases),
            combinations=tuple(combinations),
            findings=self.notes.findings,
            storeys=self._storeys(),
            counts=self._counts(),
            ties=ties,
        )

    def _counts(self) -> dict[str, int]:
        counts = {name: len(self.file.by_type(name)) for name in _COUNTED}
        return counts | {"IfcStructuralAnalysisModel": len(self.models)}

    def _shared_placements(self) -> dict[int, Any]:
        """Return the placement that an item without its own takes from its model (IFC4 on)."""
        placements = {}
        for model in self.models:
            if len(model) > 9 and model[9] is not None:
                placements[model.id()] = model[9]
        shared: dict[int, Any] = {}
        for relation in self.file.by_type("IfcRelAssignsToGroup"):
            try:
                placement = placements.get(relation[6].id())
                if placement is not None:
                    for item in relation[4] or ():
                        shared[item.id()] = placement
            except MALFORMED:
                continue  # the group reader reports it
        return shared

    def _members(self, elements: Mapping[int, str]) -> dict[int, Local]:
        properties = MemberProperties(self.source, self.settings, self.notes)
        reader = MemberReader(self.topology, properties, self.shared, elements, self.notes)
        return reader.read(self.file.by_type("IfcStructuralCurveMember"), self.varying)

    def _varying(self) -> dict[int, list[Any]]:
        """Return the parts of varying members by entity number of the whole."""
        parts: dict[int, list[Any]] = {}
        for relation in self.file.by_type("IfcRelAggregates"):
            try:
                if is_kind(relation[4], "IfcStructuralCurveMember"):
                    members = [p for p in relation[5] if is_kind(p, "IfcStructuralCurveMember")]
                    parts.setdefault(relation[4].id(), []).extend(members)
            except MALFORMED as error:
                self.notes.malformed(relation, error)
        return {key: members for key, members in parts.items() if members}

    def _targets(self, locals_: Mapping[int, Local]) -> dict[int, Target]:
        targets = {key: Target(((local, 0.0),)) for key, local in locals_.items()}
        for key, members in self.varying.items():
            known = [locals_[member.id()] for member in members if member.id() in locals_]
            whole = chained(known) if len(known) == len(members) else None
            if whole is not None:
                targets[key] = whole
        return targets

    def _targets_of_actions(self) -> dict[int, list[Any]]:
        targets: dict[int, list[Any]] = {}
        for relation in self.file.by_type("IfcRelConnectsStructuralActivity"):
            try:
                if relation[4] is not None and relation[5] is not None:
                    targets.setdefault(relation[5].id(), []).append(relation[4])
            except MALFORMED as error:
                self.notes.malformed(relation, error)
        return targets

    def _frames_of_groups(self) -> dict[int, Frame]:
        """Return the "global" system of each load group: that of the model that it loads."""
        below = self._groups_below()
        result: dict[int, Frame] = {}
        for model in self.models:
            try:
                placement = model[9] if len(model) > 9 else None
                frame = self.topology.placements.frame(placement)
                todo = [group.id() for group in model[7] or ()]
                while todo:
                    key = todo.pop()
                    if key not in result:
                        result[key] = frame
                        todo += below.get(key, ())
            except MALFORMED as error:
                self.notes.malformed(model, error)
        return result

    def _groups_below(self) -> Mapping[int, list[int]]:
        below: dict[int, list[int]] = {}
        for relation in self.file.by_type("IfcRelAssignsToGroup"):
            try:
                items = [i.id() for i in relation[4] or () if is_kind(i, "IfcGroup")]
                below.setdefault(relation[6].id(), []).extend(items)
            except MALFORMED:
                continue
        return below

    def _elements(self) -> dict[int, Any]:
        """Return the physical element that each item stands for, by the item's entity number.

        The standard ties them by IfcRelAssignsToProduct, IFC2X3 also by
        IfcRelConnectsStructuralElement; files write the former both ways round.
        """
        ties: dict[int, Any] = {}
        for relation in self.file.by_type("IfcRelAssignsToProduct"):
            try:
                for item in relation[4] or ():
                    _tie(ties, item, relation[6])
                    _tie(ties, relation[6], item)
            except MALFORMED as error:
                self.notes.malformed(relation, error)
        for relation in _by_type(self.file, "IfcRelConnectsStructuralElement"):
            try:
                _tie(ties, relation[5], relation[4])
            except MALFORMED as error:
                self.notes.malformed(relation, error)
        for whole, parts in self.varying.items():
            for part in parts:
                if whole in ties:
                    ties.setdefault(part.id(), ties[whole])
        return ties

    def _storeys(self) -> tuple[tuple[str, float], ...]:
        found = []
        for storey in self.file.by_type("IfcBuildingStorey"):
            try:
                level = float(storey[9] or 0.0) * self.source.units.length
                if storey[5] is not None:
                    level = self.topology.placements.frame(storey[5])[11]
            except MALFORMED as error:
                self.notes.malformed(storey, error)
                continue
            found.append((name_of(storey) or global_id(storey), level))
        return tuple(sorted(found, key=lambda pair: pair[1]))

    def _name(self) -> str:
        projects = self.file.by_type("IfcProject")
        return name_of(projects[0]) if projects else ""

    # -- findings ----------------------------------------------------------------------------

    def _report_surfaces_and_edges(self, relations: Iterable[Any]) -> None:
        """Name what is not analysed: surfaces, and edges that hold members along their length."""
        held: dict[int, list[Any]] = {}
        for relation in relations:
            try:
                member, connection = relation[4], relation[5]
                if is_kind(connection, "IfcStructuralCurveConnection") and is_kind(
                    member, "IfcStructuralCurveMember"
                ):
                    held.setdefault(connection.id(), []).append(member)
            except MALFORMED:
                continue  # the condition reader reports it
        others = []
        for connection in self.file.by_type("IfcStructuralCurveConnection"):
            members = held.get(connection.id(), [])
            if members:
                self._report_edge(connection, members)
            else:
                others.append(global_id(connection))
        if others:
            self.notes.add(
                "note",
                "curve-connection",
                f"{len(others)} curve connections join or hold surface members only "
                f"({listed(others)}); surface members are not analysed.",
                others,
            )
        for ifc_class, slug, noun in (
            ("IfcStructuralSurfaceConnection", "surface-connection", "surface connections"),
        ):
            ids = [global_id(entity) for entity in self.file.by_type(ifc_class)]
            if ids:
                self.notes.add(
                    "note",
                    slug,
                    f"The file holds {len(ids)} {noun} ({listed(ids)}); they are not analysed.",
                    ids,
                )

    def _report_edge(self, connection: Any, members: list[Any]) -> None:
        stated = connection[7] is not None
        how = "supported along their length" if stated else "joined along their length"
        self.notes.add(
            "warning" if stated else "note",
            "line-support" if stated else "curve-connection",
            f"{titled(connection)}: {len(members)} members "
            f"({listed(global_id(m) for m in members)}) are {how}, which is not analysed. Put "
            f"point supports where they bear, or leave them out.",
            (global_id(connection), *(global_id(m) for m in members)),
        )

    def _report_loose(
        self, actions: Iterable[Any], cases_of: Mapping[int, list[tuple[str, float]]]
    ) -> None:
        loose = [
            global_id(action)
            for action in actions
            if any(case == UNASSIGNED for case, _ in cases_of.get(action.id(), ()))
        ]
        if loose:
            self.notes.add(
                "warning",
                "action-without-case",
                f"{len(loose)} actions belong to no load case ({listed(loose)}). They were put "
                f"into a case called '{UNASSIGNED}', which no combination of the model holds.",
                loose,
            )

    def _report_models(self) -> None:
        if len(self.models) > 1:
            names = [name_of(model) or global_id(model) for model in self.models]
            self.notes.add(
                "note",
                "several-analysis-models",
                f"The file holds {len(names)} analysis models ({listed(names)}); all of them are "
                f"read together.",
                [global_id(model) for model in self.models],
            )
        elif not self.file.by_type("IfcStructuralCurveMember"):
            self.notes.add(
                "warning",
                "no-structural-member",
                "The file holds no structural curve members, so there is no analysis model to "
                "read. Take the physical way (analysis: route: physical).",
            )
        elif not self.models:
            self.notes.add(
                "note",
                "no-analysis-model",
                "The file holds structural members but no IfcStructuralAnalysisModel; they were "
                "read as one model.",
            )


def _tie(ties: dict[int, Any], item: Any, element: Any) -> None:
    if is_kind(item, "IfcStructuralItem") and is_kind(element, "IfcElement"):
        ties.setdefault(item.id(), element)


def _by_type(file: Any, ifc_class: str) -> Iterable[Any]:
    try:
        return tuple(file.by_type(ifc_class))
    except RuntimeError:
        return ()  # not a class of this schema
