"""Results beside an analysis model, as the structural domain of the standard has them.

Per load case an IfcStructuralResultGroup with an IfcStructuralPointReaction at each support and,
from IFC4 on, an IfcStructuralCurveReaction along each member.

**How the groups are tied to the model.**  The standard lists results in ``HasResults`` of the
IfcStructuralAnalysisModel; but that entity was in the file before, and nothing that was there may
change.  So the groups are ``HasResults`` of a partial analysis model of ours, which is part of
theirs by IfcRelAggregates: "the hierarchy between the separate (partial) analysis models"
(IFC documentation, IfcStructuralAnalysisModel).  Each group also names the load case it is for.
In IFC2X3 every group must have members, so there the partial model holds the items that have
results.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field

import numpy as np

from analysis_core.ifc.geometry import frames
from analysis_core.ifc.geometry.paths import Measures as ShapeMeasures
from analysis_core.ifc.geometry.placements import Placements
from analysis_core.ifc.global_ids import global_id
from analysis_core.ifc.posting.clearing import Retained
from analysis_core.ifc.posting.governing import Part
from analysis_core.ifc.posting.measures import Measures
from analysis_core.ifc.posting.ours import RESULT_TYPE
from analysis_core.ifc.posting.section_forces import CaseStations, Sample, SectionForces
from analysis_core.ifc.step.append import Lines
from analysis_core.ifc.step.extract import extract
from analysis_core.ifc.step.index import StepIndex
from analysis_core.ifc.step.tokens import reference
from analysis_core.ifc.step.values import decoded, label, real, references, string
from analysis_core.ifc.unreadable import UnreadableShapeError
from analysis_core.model import Case
from analysis_core.results import LineResult, Outcome

Vector = tuple[float, float, float]

_NODES = frozenset({"IFCSTRUCTURALPOINTCONNECTION"})
_MEMBERS = frozenset({"IFCSTRUCTURALCURVEMEMBER", "IFCSTRUCTURALCURVEMEMBERVARYING"})
_PLACEMENT = 5  # attribute of IfcProduct
_UP: Vector = (0.0, 0.0, 1.0)
_WORLD = (1.0, 0.0, 0.0, 0.0, 1.0, 0.0, 0.0, 0.0, 1.0, 0.0, 0.0, 0.0)
_SIGNS = (
    "Reactions: forces and moments on the structure, in the axes of the analysis model. Along "
    "members, at each location: ForceX axial force, tension positive; ForceZ shear force, positive "
    "where the part towards the start of the line is pushed up; MomentY bending moment, sagging "
    "positive."
)
_TITLE = "Spanledger results"


@dataclass(slots=True)
class Wanted:
    """What is to be written for one analysis model: its supports and members with results.

    ``model`` is its instance, None where the items belong to none.
    """

    model: int | None
    supports: dict[str, list[tuple[LineResult, int]]] = field(default_factory=dict)
    members: dict[str, list[Part]] = field(default_factory=dict)


def reaction_id(element: str, case: Case) -> str:
    """Return the GlobalId of the reaction of one item in one case."""
    return global_id(f"{element}/{case.global_id or case.name}/reaction")


def group_id(model: str, case: Case) -> str:
    """Return the GlobalId of the result group of one analysis model ("" for none) and case."""
    return global_id(f"{model}/{case.global_id or case.name}/results")


def partial_model_id(model: str) -> str:
    """Return the GlobalId of our partial analysis model of one analysis model."""
    return global_id(f"{model}/results")


def rewritten_ids(index: StepIndex, cases: Iterable[Case]) -> list[str]:
    """Return the GlobalIds of the groups and partial models that posting may write anew."""
    models = [_global_id_of(index, model) for model in analysis_models(index)]
    groups = [group_id(model, case) for model in ["", *models] for case in cases]
    return groups + [partial_model_id(model) for model in models]


class ResultGroups:
    """Writes result groups into one file."""

    def __init__(
        self,
        index: StepIndex,
        lines: Lines,
        owner: str,
        measures: Measures,
        stations: CaseStations | None,
        retained: Retained,
    ) -> None:
        self._index = index
        self._lines = lines
        self._owner = owner
        self._measures = measures
        self._forces = SectionForces(stations)
        self._retained = retained
        self._models = analysis_models(index)

    def write(
        self,
        outcome: Outcome,
        supports: Iterable[str],
        parts: Mapping[str, Sequence[Part]],
        elements: Mapping[str, int],
    ) -> int:
        """Write the groups for these supports and members; return how many there are."""
        wanted = self._sorted_by_model(outcome, supports, parts, elements)
        loads = self._index.rooted({c.global_id for c in outcome.model.cases if c.global_id})
        count = 0
        for entry in wanted:
            turned = self._frames(entry, elements)
            made = []
            for case in outcome.model.cases:
                number = self._group(entry, case, loads.get(case.global_id, ()), elements, turned)
                if number is not None:
                    made.append(number)
            if made and entry.model is not None:
                items = [elements[e] for e in (*entry.supports, *entry.members)]
                self._partial_model(entry.model, made, items)
            count += len(made)
        return count

    def _sorted_by_model(
        self,
        outcome: Outcome,
        supports: Iterable[str],
        parts: Mapping[str, Sequence[Part]],
        elements: Mapping[str, int],
    ) -> list[Wanted]:
        members = self._of_class(elements, _MEMBERS)
        nodes = self._of_class(elements, _NODES)
        by_model: dict[int | None, Wanted] = {}
        at: dict[str, list[tuple[LineResult, int]]] = {}
        for result in outcome.lines:
            if result.status == "balanced" and result.solution is not None:
                for joint in result.line.joints:
                    if joint.support is not None and joint.element in nodes:
                        at.setdefault(joint.element, []).append((result, joint.id))
        for element in supports:
            if element in at:
                self._entry(by_model, elements[element]).supports[element] = at[element]
        for element, found in parts.items():
            solved = [part for part in found if part.result.solution is not None]
            if element in members and solved:
                self._entry(by_model, elements[element]).members[element] = solved
        return list(by_model.values())

    def _of_class(self, elements: Mapping[str, int], keywords: frozenset[str]) -> set[str]:
        index = self._index
        return {e for e, n in elements.items() if index.kind(n) in keywords}

    def _entry(self, by_model: dict[int | None, Wanted], item: int) -> Wanted:
        model = next((m for m, members in self._models.items() if item in members), None)
        if model is None and len(self._models) == 1:
            model = next(iter(self._models))
        return by_model.setdefault(model, Wanted(model))

    # -- one group ---------------------------------------------------------------------------

    def _group(
        self,
        entry: Wanted,
        case: Case,
        loads: Sequence[int],
        elements: Mapping[str, int],
        turned: Mapping[str, frames.Frame],
    ) -> int | None:
        reactions = [
            self._point_reaction(element, found, case, elements[element], turned[element])
            for element, found in entry.supports.items()
        ]
        if self._index.schema != "IFC2X3":
            reactions += [
                self._curve_reaction(element, found, case, elements[element])
                for element, found in entry.members.items()
            ]
        model = "" if entry.model is None else _global_id_of(self._index, entry.model)
        own_id = group_id(model, case)
        made = [r for r in reactions if r is not None] + list(
            self._retained.members.get(own_id, ())
        )
        if not made:
            return None
        load_group = next((f"#{n}" for n in loads if self._is_load_group(n)), "$")
        number = self._lines.add(
            f"IFCSTRUCTURALRESULTGROUP('{own_id}',{self._owner},{label(case.name)},"
            f"{string(_SIGNS)},'{RESULT_TYPE}',.FIRST_ORDER_THEORY.,{load_group},.T.)"
        )
        self._lines.add(
            f"IFCRELASSIGNSTOGROUP('{global_id(f'{own_id}/members')}',{self._owner},$,$,"
            f"{references(made)},$,#{number})"
        )
        return number

    def _point_reaction(
        self,
        element: str,
        found: Sequence[tuple[LineResult, int]],
        case: Case,
        item: int,
        frame: frames.Frame,
    ) -> int | None:
        force, moment = np.zeros(3), np.zeros(3)
        known = False
        for result, joint in found:
            solution = result.solution
            if solution is None or case.name not in solution.cases:
                continue
            horizontal, vertical, turning = solution.reactions[
                solution.cases.index(case.name), joint
            ]
            known = True
            along = np.array(result.line.axis)
            force += horizontal * along + vertical * np.array(_UP)
            # Clockwise, seen with x to the right and z up, turns about up × x.
            moment += turning * np.cross(_UP, along)
        if not known or not np.isfinite([*force, *moment]).all():
            return None
        axes = np.array(frame[:9]).reshape(3, 3)
        load = self._single_force(*(axes @ force), *(axes @ moment))
        return self._activity(
            "IFCSTRUCTURALPOINTREACTION", element, case, item, load, ".GLOBAL_COORDS."
        )

    def _curve_reaction(
        self, element: str, parts: Sequence[Part], case: Case, item: int
    ) -> int | None:
        samples: list[Sample] = []
        for part in sorted(parts, key=lambda p: p.start):
            if part.result is parts[0].result:  # two lines would give values in two planes
                samples += self._forces.samples(part, case.name)
        if len(samples) < 2:
            return None
        length = self._measures.units.to_si("LENGTHUNIT")
        places = ",".join(f"({real(x / length)})" for x, _ in samples)
        values = self._lines.shared_list(self._force_text(forces) for _, forces in samples)
        load = self._lines.add(
            f"IFCSTRUCTURALLOADCONFIGURATION('Section forces',{values},({places}))"
        )
        shape = "POLYGONAL" if len(samples) > 2 else "DISCRETE"
        return self._activity(
            "IFCSTRUCTURALCURVEREACTION", element, case, item, load, f".LOCAL_COORDS.,.{shape}."
        )

    # -- text --------------------------------------------------------------------------------

    def _single_force(self, *components: float) -> int:
        return self._lines.shared(self._force_text(components))

    def _force_text(self, components: Sequence[float | None]) -> str:
        kinds = ("FORCEUNIT",) * 3 + ("TORQUEUNIT",) * 3
        texts = [
            "$" if value is None else self._measures.attribute(float(value) + 0.0, kind)
            for value, kind in zip(components, kinds, strict=True)
        ]
        return f"IFCSTRUCTURALLOADSINGLEFORCE($,{','.join(texts)})"

    def _activity(
        self, keyword: str, element: str, case: Case, item: int, load: int, tail: str
    ) -> int:
        own_id = reaction_id(element, case)
        number = self._lines.add(
            f"{keyword}('{own_id}',{self._owner},{label(case.name)},$,'{RESULT_TYPE}',$,$,"
            f"#{load},{tail})"
        )
        self._lines.add(
            f"IFCRELCONNECTSSTRUCTURALACTIVITY('{global_id(f'{own_id}/item')}',{self._owner},$,$,"
            f"#{item},#{number})"
        )
        return number

    def _partial_model(self, model: int, groups: Sequence[int], items: Sequence[int]) -> None:
        attributes = self._index.arguments(model)
        whole = _global_id_of(self._index, model)
        own_id = partial_model_id(whole)
        placement = ""
        if self._index.schema != "IFC2X3":
            placement = f",{attributes[9]}" if len(attributes) > 9 else ",$"
        results = references([*groups, *self._retained.results.get(own_id, ())])
        number = self._lines.add(
            f"IFCSTRUCTURALANALYSISMODEL('{own_id}',{self._owner},'{_TITLE}',$,'{RESULT_TYPE}',"
            f"{attributes[5]},{attributes[6]},$,{results}{placement})"
        )
        self._lines.add(
            f"IFCRELAGGREGATES('{global_id(f'{own_id}/part')}',{self._owner},$,$,#{model},"
            f"(#{number}))"
        )
        if self._index.schema == "IFC2X3":
            members = dict.fromkeys([*items, *self._retained.members.get(own_id, ())])
            self._lines.add(
                f"IFCRELASSIGNSTOGROUP('{global_id(f'{own_id}/items')}',{self._owner},$,$,"
                f"{references(members)},$,#{number})"
            )

    # -- what the file says ------------------------------------------------------------------

    def _frames(self, entry: Wanted, elements: Mapping[str, int]) -> dict[str, frames.Frame]:
        """The axes of the analysis model, as each support has them: rows are world vectors."""
        shared: int | None = None
        if entry.model is not None and self._index.schema != "IFC2X3":
            attributes = self._index.arguments(entry.model)
            shared = reference(attributes[9]) if len(attributes) > 9 else None
        placed: dict[str, int] = {}
        for element in entry.supports:
            own = reference(self._index.arguments(elements[element])[_PLACEMENT])
            if (placement := own if own is not None else shared) is not None:
                placed[element] = placement
        if not placed:
            return dict.fromkeys(entry.supports, _WORLD)
        file = extract(self._index, set(placed.values()))
        units = self._measures.units
        placements = Placements(file, ShapeMeasures(units.length, units.angle))
        found: dict[int, frames.Frame] = {}
        for placement in set(placed.values()):
            try:
                found[placement] = placements.frame(file.by_id(placement))
            except (UnreadableShapeError, RuntimeError):
                found[placement] = _WORLD
        return {e: found[placed[e]] if e in placed else _WORLD for e in entry.supports}

    def _is_load_group(self, number: int) -> bool:
        return self._index.kind(number) in (
            "IFCSTRUCTURALLOADCASE",
            "IFCSTRUCTURALLOADGROUP",
        )


def _global_id_of(index: StepIndex, instance: int) -> str:
    return decoded(str(index.arguments(instance)[0]))


def analysis_models(index: StepIndex) -> dict[int, set[int]]:
    """Return the items of each analysis model of a file, our own partial ones left out."""
    models = {
        number: set[int]()
        for number in index.instances_of("IFCSTRUCTURALANALYSISMODEL")
        if index.arguments(number)[4] != f"'{RESULT_TYPE}'"
    }
    for model, relations in index.referrers(models).items():
        for relation in relations:
            attributes = index.arguments(relation)
            if index.kind(relation) == "IFCRELASSIGNSTOGROUP" and (
                reference(attributes[6]) == model
            ):
                related = attributes[4] if isinstance(attributes[4], list) else []
                models[model].update(n for n in map(reference, related) if n is not None)
    return models
