"""Outcomes made by hand around arbitrary elements, and small models in any schema, as text.

The effects are those of a simple span under a uniform load (closed forms: M = qL²/8, V = qL/2,
w = 5qL⁴/384EI), so that every written value is known without the program's own solver.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace

import numpy as np

from analysis_core.ifc.global_ids import global_id
from analysis_core.model import Case, Combination, Joint, Line, LineModel, Member, Piece, Support
from analysis_core.results import (
    Extreme,
    LineEnvelope,
    LineResult,
    LineSolution,
    MemberEnvelope,
    Outcome,
    ReactionEnvelope,
    Verification,
)

EI = 2.1e11 * 8.356e-5
FACTOR = 1.5  # of the one strength combination; serviceability has 1
PIN = Support(vertical=np.inf)
SCHEMAS = ("IFC2X3", "IFC4", "IFC4X3")


def span_result(
    elements: str | Sequence[str],
    *,
    load: float = 12_000.0,
    spans: float | Sequence[float] = 6.0,
    mark: str = "B-1",
    supports: Sequence[str | None] = (),
    reversed_: bool = False,
    offset: float | None = None,
    cases: Mapping[str, float] | None = None,
    fingerprint: str = "f00d",
    stations: int = 5,
) -> LineResult:
    """Return simple spans in a row, one per element, each under ``load`` N/m.

    ``cases`` by share of the load; ``supports`` are the elements at the joints.
    """
    elements = [elements] if isinstance(elements, str) else list(elements)
    lengths = [float(spans)] * len(elements) if isinstance(spans, int | float) else list(spans)
    cases = cases or {"G": 0.7, "Q": 0.3}
    x = np.concatenate([[0.0], np.cumsum(lengths)])
    supports = [*supports, *[None] * (len(x) - len(supports))]
    joints = tuple(
        Joint(i, float(xi), 0.0, (float(xi), 0.0, 3.0), PIN, element)
        for i, (xi, element) in enumerate(zip(x, supports, strict=True))
    )
    members = tuple(
        Member(
            i, i, i + 1, (Piece(length, (EI,)),), span=i + 1, element=element,
            start_spring=0.0, end_spring=0.0, reversed_=reversed_,
            element_offset=(length if reversed_ else 0.0) if offset is None else offset,
        )
        for i, (element, length) in enumerate(zip(elements, lengths, strict=True))
    )  # fmt: skip
    line = Line(mark, joints, members, elements=tuple(elements))
    solution = _solution(line, lengths, load, cases)
    envelopes = {
        "strength": _envelope("strength", lengths, FACTOR * load, "U1", stations),
        "serviceability": _envelope("serviceability", lengths, load, "S1", stations),
    }
    checks = Verification(1e-9, 1e-15, 2.5e-14)
    return LineResult(
        line,
        "balanced",
        solution,
        envelopes=envelopes,
        verification=checks,
        fingerprint=fingerprint,
    )


def outcome_of(*results: LineResult, rules: str = "EN 1990") -> Outcome:
    """Return an outcome of these lines."""
    names = dict.fromkeys(c for r in results if r.solution for c in r.solution.cases)
    model = LineModel(
        tuple(r.line for r in results),
        tuple(Case(name) for name in names),
        (Combination("U1", "strength", dict.fromkeys(names, FACTOR)),),
    )
    return Outcome("model.ifc", "IFC4", "", model, results, rules=rules)


def with_case_ids(outcome: Outcome, ids: Mapping[str, str]) -> Outcome:
    """Return the outcome with its cases tied to load groups of the model."""
    cases = tuple(replace(c, global_id=ids.get(c.name, "")) for c in outcome.model.cases)
    return replace(outcome, model=replace(outcome.model, cases=cases))


def _solution(
    line: Line, lengths: Sequence[float], load: float, cases: Mapping[str, float]
) -> LineSolution:
    count, members, joints = len(cases), len(lengths), len(lengths) + 1
    shears = np.zeros((count, members, 2))
    reactions = np.zeros((count, joints, 3))
    for c, share in enumerate(cases.values()):
        for m, length in enumerate(lengths):
            half = share * load * length / 2.0
            shears[c, m] = half, -half
            reactions[c, m, 1] += half
            reactions[c, m + 1, 1] += half
    none = np.zeros((count, members, 2))
    flat = np.zeros((count, joints))
    return LineSolution(
        line, tuple(cases), none, shears, none, flat, none, np.zeros((count, joints, 2)),
        reactions, 0.0, 0.0, "by hand",
    )  # fmt: skip


def _envelope(
    state: str, lengths: Sequence[float], load: float, source: str, stations: int
) -> LineEnvelope:
    """Lower values are those without load: zero."""
    members, ends = [], np.zeros(len(lengths) + 1)
    for number, length in enumerate(lengths):
        x = np.linspace(0.0, length, stations)
        moment = load * x * (length - x) / 2.0
        shear = load * (length / 2.0 - x)
        w = load * x * (length**3 - 2 * length * x**2 + x**3) / (24.0 * EI)
        half = load * length / 2.0
        ends[number] += half
        ends[number + 1] += half
        members.append(
            MemberEnvelope(
                number,
                Extreme(load * length**2 / 8.0, length / 2.0, source),
                Extreme(0.0, 0.0, source),
                Extreme(half, 0.0, source),
                Extreme(-half, length, source),
                Extreme(5.0 * load * length**4 / (384.0 * EI), length / 2.0, source),
                Extreme(0.0, 0.0, source),
                (0.0, 0.0),
                (0.0, 0.0),
                x,
                moment,
                0.0 * x,
                np.maximum(shear, 0.0),
                np.minimum(shear, 0.0),
                w,
                0.0 * x,
            )
        )
    reactions = tuple(
        ReactionEnvelope(j, Extreme(float(v), 0.0, source), Extreme(0.0, 0.0, source))
        for j, v in enumerate(ends)
    )
    return LineEnvelope(state, tuple(members), reactions)


BEAM, COLUMN_A, COLUMN_B = (global_id(f"posting tests/{n}") for n in ("beam", "left", "right"))
SECOND_BEAM = global_id("posting tests/second beam")

_KILONEWTON_UNITS = (
    "IFCSIUNIT(*,.LENGTHUNIT.,.MILLI.,.METRE.)",
    "IFCSIUNIT(*,.FORCEUNIT.,.KILO.,.NEWTON.)",
)


def small_model(
    schema: str = "IFC4",
    *,
    newline: str = "\n",
    name: str = "Beam",
    torque: bool = True,
    units: bool = True,
    owner: bool = True,
    tail: str = "",
) -> bytes:
    """Return two beams on two columns: mm, kN and (where ``torque``) kN·m.

    ``owner``: IFC2X3 has an owner history (the standard asks for it); without, rooted entities
    refer to none, as careless exporters write them.
    """
    own = "#4" if schema == "IFC2X3" and owner else "$"
    end = "" if schema == "IFC2X3" else ",$"
    text = [
        "ISO-10303-21;", "HEADER;", "FILE_DESCRIPTION((''),'2;1');",
        "FILE_NAME('m','',(''),(''),'','','');",
        f"FILE_SCHEMA(('{'IFC4X3_ADD2' if schema == 'IFC4X3' else schema}'));",
        "ENDSEC;", "DATA;",
    ]  # fmt: skip
    if own != "$":
        text += [
            "#1=IFCPERSON($,'Somebody',$,$,$,$,$,$);", "#2=IFCORGANIZATION($,'Some office',$,$,$);",
            "#3=IFCPERSONANDORGANIZATION(#1,#2,$);", "#4=IFCOWNERHISTORY(#3,#5,$,.ADDED.,$,$,$,0);",
            "#5=IFCAPPLICATION(#2,'1','A tool','tool');",
        ]  # fmt: skip
    if units:
        kinds = [*_KILONEWTON_UNITS]
        text += [f"#{10 + i}={unit};" for i, unit in enumerate(kinds)]
        assigned = "#10,#11"
        if torque:
            tail_of_unit = ",$" if schema == "IFC4X3" else ""
            text += [
                "#12=IFCSIUNIT(*,.LENGTHUNIT.,$,.METRE.);", "#13=IFCDERIVEDUNITELEMENT(#11,1);",
                "#14=IFCDERIVEDUNITELEMENT(#12,1);",
                f"#15=IFCDERIVEDUNIT((#13,#14),.TORQUEUNIT.,${tail_of_unit});",
            ]  # fmt: skip
            assigned += ",#15"
        text.append(f"#16=IFCUNITASSIGNMENT(({assigned}));")
    text += [
        "#20=IFCCARTESIANPOINT((0.,0.,0.));", "#21=IFCAXIS2PLACEMENT3D(#20,$,$);",
        "#22=IFCGEOMETRICREPRESENTATIONCONTEXT($,'Model',3,1.E-05,#21,$);",
        f"#23=IFCPROJECT('{global_id('project')}',{own},'P',$,$,$,$,(#22),"
        f"{'#16' if units else '$'});",
        *[f"#{24 + i}=IFCLOCALPLACEMENT($,#21);" for i in range(4)],
        f"#30=IFCBEAM('{BEAM}',{own},'{name}',$,$,#24,$,$" + end + ");",
        f"#31=IFCBEAM('{SECOND_BEAM}',{own},'{name} 2',$,$,#25,$,$" + end + ");",
        f"#32=IFCCOLUMN('{COLUMN_A}',{own},'C-1',$,$,#26,$,$" + end + ");",
        f"#33=IFCCOLUMN('{COLUMN_B}',{own},'C-2',$,$,#27,$,$" + end + ");",
        "ENDSEC;", "END-ISO-10303-21;",
    ]  # fmt: skip
    return (newline.join(text) + newline + tail).encode()


ANALYSIS = {
    name: global_id(f"posting tests/{name}")
    for name in ("model", "member", "start", "end", "case", "second member")
}


def analysis_model(schema: str = "IFC4", *, turned: bool = False) -> bytes:
    """Return an analysis model in mm and kN: two members of 6 m in a row, three nodes, one case.

    The nodes at the start and the end are supported.  ``turned``: the model's own x axis is the
    world's y axis, so that a line along the world's x runs along its -y.
    """
    old = schema == "IFC2X3"
    owner, tail = ("#4", "") if old else ("$", ",#25")
    member = "" if old else ",#27"
    node = "" if old else ",$"
    reference = "#28" if turned else "$"
    i = ANALYSIS
    places = [f"#{70 + n}" if old else "#25" for n in range(5)]
    text = small_model(schema).decode().split("#24=")[0].splitlines()
    points = {40: "0.,0.,3000.", 41: "6000.,0.,3000.", 42: "12000.,0.,3000."}
    if turned:  # the same places in the world
        points = {40: "0.,0.,3000.", 41: "0.,-6000.,3000.", 42: "0.,-12000.,3000."}
    text += [
        *([] if old else ["#25=IFCLOCALPLACEMENT($,#26);"]),
        f"#26=IFCAXIS2PLACEMENT3D(#20,$,{reference});",
        "#27=IFCDIRECTION((0.,0.,1.));", "#28=IFCDIRECTION((0.,1.,0.));",
        *[f"#{n}=IFCCARTESIANPOINT(({p}));" for n, p in points.items()],
        *[f"#{n + 3}=IFCVERTEXPOINT(#{n});" for n in points],
        "#46=IFCEDGE(#43,#44);", "#47=IFCEDGE(#44,#45);",
        *[f"#{80 + n}=IFCTOPOLOGYREPRESENTATION(#22,'Reference','{kind}',(#{item}));"
          f"\n#{90 + n}=IFCPRODUCTDEFINITIONSHAPE($,$,(#{80 + n}));"
          for n, (kind, item) in enumerate(
              [("Edge", 46), ("Edge", 47), ("Vertex", 43), ("Vertex", 44), ("Vertex", 45)])],
        *([f"#{70 + n}=IFCLOCALPLACEMENT($,#26);" for n in range(5)] if old else []),
        f"#50=IFCSTRUCTURALCURVEMEMBER('{i['member']}',{owner},'M1',$,$,{places[0]},#90,"
        f".RIGID_JOINED_MEMBER.{member});",
        f"#51=IFCSTRUCTURALCURVEMEMBER('{i['second member']}',{owner},'M2',$,$,{places[1]},#91,"
        f".RIGID_JOINED_MEMBER.{member});",
        f"#52=IFCSTRUCTURALPOINTCONNECTION('{i['start']}',{owner},'N1',$,$,{places[2]},#92,#60"
        f"{node});",
        f"#53=IFCSTRUCTURALPOINTCONNECTION('{global_id('middle')}',{owner},'N2',$,$,{places[3]},"
        f"#93,$" + node + ");",
        f"#54=IFCSTRUCTURALPOINTCONNECTION('{i['end']}',{owner},'N3',$,$,{places[4]},#94,#60"
        f"{node});",
        f"#55=IFCSTRUCTURALPOINTACTION('{global_id('action')}',{owner},'F',$,$,$,$,#56,"
        f".GLOBAL_COORDS.,.F.{',$' if old else ''});",
        "#56=IFCSTRUCTURALLOADSINGLEFORCE($,0.,0.,-5.,$,$,$);",
        f"#57=IFCRELCONNECTSSTRUCTURALACTIVITY('{global_id('on node')}',{owner},$,$,#53,#55);",
        f"#58=IFCRELASSIGNSTOGROUP('{global_id('in case')}',{owner},$,$,(#55),$,#62);",
        "#60=IFCBOUNDARYNODECONDITION('pin',"
        + (",".join(["-1.,-1.,-1.", "0.,0.,0."]) if old else ",".join(
            ["IFCBOOLEAN(.T.)"] * 3 + ["IFCBOOLEAN(.F.)"] * 3)) + ");",
        f"#61=IFCSTRUCTURALANALYSISMODEL('{i['model']}',{owner},'Analysis',$,$,.LOADING_3D.,$,"
        f"(#62),$" + tail + ");",
        f"#62=IFCSTRUCTURALLOADGROUP('{i['case']}',{owner},'G',$,$,.LOAD_CASE.,.PERMANENT_G.,"
        ".DEAD_LOAD_G.,$,$);",
        f"#63=IFCRELASSIGNSTOGROUP('{global_id('grouping')}',{owner},$,$,"
        "(#50,#51,#52,#53,#54),$,#61);",
        *[f"#{64 + n}=IFCRELCONNECTSSTRUCTURALMEMBER('{global_id(f'join {n}')}',{owner},$,$,#{m},"
          f"#{c},$,$,$,$);" for n, (m, c) in enumerate([(50, 52), (50, 53), (51, 53), (51, 54)])],
        "ENDSEC;", "END-ISO-10303-21;", "",
    ]  # fmt: skip
    return "\n".join(text).encode()
