"""The one road from ``Building`` and ``Settings`` to ``LineModel``."""

from __future__ import annotations

from analysis_core.building import AxisMember, Building, Carrier, Connection
from analysis_core.collector import collector_paused
from analysis_core.idealise import analytical, meetings
from analysis_core.idealise.actions import put_axis_actions, put_node_actions
from analysis_core.idealise.analytical import analytical_scheme
from analysis_core.idealise.area_loads import put_area_loads
from analysis_core.idealise.bearing_supports import support_chains
from analysis_core.idealise.build import build
from analysis_core.idealise.cases import canonical, cases_of, combinations_of, with_used
from analysis_core.idealise.clear_spans import measure_clear
from analysis_core.idealise.draft import Bar
from analysis_core.idealise.free_ends import explain_free_ends
from analysis_core.idealise.job_actions import put_job_actions
from analysis_core.idealise.job_conditions import (
    put_job_movements,
    put_job_releases,
    put_job_supports,
)
from analysis_core.idealise.leaning import fault_leaning
from analysis_core.idealise.log import Log
from analysis_core.idealise.openings import report_openings
from analysis_core.idealise.physical import physical_scheme, put_legs
from analysis_core.idealise.placing import Placer
from analysis_core.idealise.properties import PropertyTable
from analysis_core.idealise.scheme import Rest, Scheme, fault_fallen, report_on_faulty
from analysis_core.idealise.selectors import Chooser
from analysis_core.idealise.self_weight import put_self_weight, weight_cases
from analysis_core.idealise.standing_columns import let_columns_stand
from analysis_core.idealise.temperature import put_temperature_actions
from analysis_core.idealise.triangles import fault_triangles, let_lean, report_triangles
from analysis_core.idealise.unloaded import report_unloaded
from analysis_core.model import Action, Line, LineModel, Transfer
from analysis_core.settings import Settings


@collector_paused()
def idealise(building: Building, settings: Settings) -> LineModel:
    """Return the lines and frames of a building with their supports, actions and cases.

    Never raises for what a model may hold: a line that cannot be analysed carries the reason in
    ``fault``, and a finding of severity "error" names it.
    """
    log = Log()
    chooser = Chooser()
    table = PropertyTable(settings, chooser)
    weight = weight_cases(building, settings, log)
    cases = cases_of(building, settings, weight, log)
    if building.route == "physical":
        physical = physical_scheme(building, settings, chooser, log)
        scheme = physical.scheme
        chooser.know(scheme.drafts)
        put_job_supports(scheme.drafts, settings, chooser, log)
        support_chains(physical, settings, log)
        meetings.let_carry(physical, table, settings.tolerances, log)
        report_openings(physical, log)
        let_lean(scheme, settings.tolerances, log)
        explain_free_ends(physical, log)
        let_columns_stand(physical, table, settings.tolerances, log)
        if settings.analysis.spans == "face":
            measure_clear(scheme.drafts, log)
        if settings.analysis.columns_as_legs:
            put_legs(physical, settings, table, log)
    else:
        scheme = analytical_scheme(building, settings, log)
        chooser.know(scheme.drafts)
        put_job_supports(scheme.drafts, settings, chooser, log)
        fault_leaning(scheme.drafts, settings.tolerances)
        analytical.let_carry(scheme, building, table, log)
    put_job_releases(scheme.drafts, settings, chooser, log)
    fault_fallen(scheme.drafts)
    if building.route == "physical":
        fault_triangles(scheme.drafts, settings.tolerances, log)
    report_triangles(scheme.drafts, log)
    report_on_faulty(scheme, table, log)

    members = {member.global_id: member for member in building.members}
    placer = Placer(scheme.drafts)
    put_axis_actions(building, placer, members, log)
    put_node_actions(building, placer, scheme.carriers, log)
    put_temperature_actions(building, placer, members, table, log)
    put_self_weight(weight, placer, set(members), table, log)

    spelled: dict[str, str] = {}

    def case_name(name: str) -> str:
        return spelled.setdefault(name.casefold(), canonical(name, cases))

    put_job_actions(building.members, placer, settings, chooser, table, case_name, log)
    walls = put_area_loads(building, placer, settings, chooser, case_name, log)
    things: list[AxisMember | Carrier | Connection] = [
        *building.carriers,
        *building.connections,
        *building.members,
    ]
    put_job_movements(placer, settings, chooser, things, case_name, log)

    used = [action.case for actions in placer.actions.values() for action in actions]
    used += [case for _, case in walls]
    cases = with_used(cases, used, settings, log)
    own = {case.name for case in weight}
    report_unloaded(building, settings, chooser, scheme.drafts, cases, set(used), own, log)
    told = {e for f in building.findings if f.slug == "oblique-bending" for e in f.elements}
    lines = _lines(scheme, placer.actions, table, settings, told, log)
    transfers = _transfers(scheme, lines)
    chooser.report_unused(log)
    return LineModel(
        lines=tuple(lines.values()),
        cases=cases,
        combinations=combinations_of(building, settings, cases, log),
        transfers=transfers,
        findings=building.findings + log.findings,
        title=settings.title or building.name,
        direct=tuple((element, case, force) for (element, case), force in walls.items()),
    )


def _lines(
    scheme: Scheme,
    actions: dict[int, list[Action]],
    table: PropertyTable,
    settings: Settings,
    told: set[str],
    log: Log,
) -> dict[str, Line]:
    lines = {}
    for number, draft in enumerate(scheme.drafts):
        line = build(
            draft,
            actions.get(number, ()),
            table,
            shear_flexible=settings.analysis.shear_flexible,
            told=told,
            log=log,
        )
        if line is not None:
            lines[draft.mark] = line
    return lines


def _transfers(scheme: Scheme, lines: dict[str, Line]) -> tuple[Transfer, ...]:
    transfers = []
    for rest in scheme.rests:
        if rest.carried.mark not in lines or rest.carrier.mark not in lines:
            continue
        joint = rest.carried.joint_of[rest.joint]
        number, position = _seat_of(rest)
        transfers.append(Transfer(rest.carried.mark, joint, rest.carrier.mark, number, position))
    return tuple(transfers)


def _seat_of(rest: Rest) -> tuple[int, float]:
    """Return the member of the carrying line, and where along it the other one rests."""
    carrier = rest.carrier
    if rest.at:
        index = carrier.joint_of[rest.at]
        number, bar = next((n, b) for n, b in enumerate(carrier.bars) if index in (b.start, b.end))
        return number, 0.0 if bar.start == index else carrier.length(bar)
    # A place over a bearing between clear spans, or past the last bearing: the nearest end.
    number, bar = min(
        ((n, b) for n, b in enumerate(carrier.bars) if b.member.global_id == rest.member),
        key=lambda item: _beyond(item[1], rest.station),
    )
    share = (rest.station - bar.station_start) / (bar.station_end - bar.station_start)
    return number, min(max(share, 0.0), 1.0) * carrier.length(bar)


def _beyond(bar: Bar, station: float) -> float:
    low, high = sorted((bar.station_start, bar.station_end))
    return max(low - station, station - high, 0.0)
