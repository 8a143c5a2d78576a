"""An outcome made by hand from closed forms, so that what is shown can be checked by itself.

Line L1: spans of 6 m and 4 m under 12 kN/m, on three bearings.  Support moment by the
three-moment equation (Clapeyron, 1857): M = -w (a³ + b³) / (8 (a + b)).
Line L2: 5 m fixed at both ends under 8 kN/m; end moments -w L² / 12.
"""

from __future__ import annotations

import numpy as np

from analysis_core.findings import Finding
from analysis_core.model import (
    RIGID,
    Case,
    DistributedForce,
    Joint,
    Line,
    LineModel,
    Member,
    Piece,
    Section,
    Support,
)
from analysis_core.results import (
    Extreme,
    LineEnvelope,
    LineResult,
    LineSolution,
    MemberEnvelope,
    Outcome,
    Verification,
)

EI = 20.0e6  # N·m²
A, B, LOAD = 6.0, 4.0, 12.0e3
SUPPORT_MOMENT = -LOAD * (A**3 + B**3) / (8.0 * (A + B))
C, LOAD_2 = 5.0, 8.0e3
PINNED, FIXED = Support(vertical=RIGID), Support(RIGID, RIGID, RIGID)
SECTION = Section("I-demo 300", "I", area=5.4e-3, inertia=8.4e-5, depth=0.3, width=0.15)
STATIONS = 21


def outcome() -> Outcome:
    """Return the outcome of both lines, with envelopes that are a single case."""
    first = _line("L1", "First floor", 0.0, (A, B), (PINNED, PINNED, PINNED), LOAD)
    second = _line("L2", "Roof", 3.0, (C,), (FIXED, FIXED), LOAD_2)
    end = -LOAD_2 * C**2 / 12.0
    results = (
        _result(first, ((0.0, SUPPORT_MOMENT), (SUPPORT_MOMENT, 0.0)), LOAD),
        _result(second, ((end, end),), LOAD_2),
    )
    findings = (
        Finding("warning", "demo-finding", "Something to look at.", ("GID-L1-0",), "L1"),
        Finding("note", "demo-note", "Something assumed.", (), None),
    )
    model = LineModel(
        lines=(first, second), cases=(Case("Dead", "permanent"),), findings=findings, title="Demo"
    )
    return Outcome("demo.ifc", "IFC4", "0" * 64, model, results, findings, "demo rules")


def _line(
    mark: str,
    storey: str,
    y: float,
    spans: tuple[float, ...],
    supports: tuple[Support, ...],
    load: float,
) -> Line:
    xs = [0.0, *np.cumsum(spans).tolist()]
    joints = tuple(
        Joint(i, x, 0.0, (x, y, 3.5), support, f"COL-{mark}-{i}", reason="bears on a column")
        for i, (x, support) in enumerate(zip(xs, supports, strict=True))
    )
    members = tuple(
        Member(i, i, i + 1, (Piece(length, (EI,)),), span=i + 1, element=f"GID-{mark}-{i}",
               section=SECTION)
        for i, length in enumerate(spans)
    )  # fmt: skip
    actions = tuple(
        DistributedForce("Dead", i, 0.0, length, (load,)) for i, length in enumerate(spans)
    )
    return Line(
        mark, joints, members, actions, storey=storey,
        elements=tuple(m.element for m in members), origin=(0.0, y, 3.5),
    )  # fmt: skip


def _result(line: Line, ends: tuple[tuple[float, float], ...], load: float) -> LineResult:
    members = tuple(
        _envelope(member, start, end, load)
        for member, (start, end) in zip(line.members, ends, strict=True)
    )
    envelopes = {name: LineEnvelope(name, members, ()) for name in ("strength", "serviceability")}
    return LineResult(
        line, "balanced", solution=_solution(line, ends, load), envelopes=envelopes,
        verification=Verification(1e-9, 1e-15, 1e-14), fingerprint=f"result-{line.mark}",
    )  # fmt: skip


def _envelope(member: Member, start: float, end: float, load: float) -> MemberEnvelope:
    length = member.length
    x = np.linspace(0.0, length, STATIONS)
    moment = load * x * (length - x) / 2.0 + start * (1.0 - x / length) + end * x / length
    slope = (end - start) / length
    shear = load * (length / 2.0 - x) + slope
    part = x / length
    sag = load * length**4 / (24.0 * EI) * (part - 2.0 * part**3 + part**4)
    sag += end * length**2 / (6.0 * EI) * (part - part**3)
    sag += start * length**2 / (6.0 * EI) * ((1.0 - part) - (1.0 - part) ** 3)
    top = float(np.clip(length / 2.0 + slope / load, 0.0, length))
    peak = load * top * (length - top) / 2.0 + start * (1.0 - top / length) + end * top / length
    low, low_x = min((start, 0.0), (end, length))
    deep = int(np.argmax(sag))
    return MemberEnvelope(
        member.id,
        sagging=Extreme(peak, top, "U1"),
        hogging=Extreme(low, low_x, "U1"),
        shear_max=Extreme(float(shear[0]), 0.0, "U1"),
        shear_min=Extreme(float(shear[-1]), length, "U1"),
        deflection_down=Extreme(float(sag[deep]), float(x[deep]), "S1"),
        deflection_up=Extreme(float(sag.min()), float(x[np.argmin(sag)]), "S1"),
        start_moment=(start, start),
        end_moment=(end, end),
        x=x, moment_max=moment, moment_min=moment, shear_max_at=shear, shear_min_at=shear,
        deflection_max=sag, deflection_min=sag,
    )  # fmt: skip


def _solution(line: Line, ends: tuple[tuple[float, float], ...], load: float) -> LineSolution:
    count, joints = len(line.members), len(line.joints)
    lengths = np.array([m.length for m in line.members])
    start, end = np.array(ends).T
    shear = (end - start) / lengths
    return LineSolution(
        line=line,
        cases=("Dead",),
        end_moments=np.stack([start, -end], axis=1)[None],
        end_shears=np.stack([load * lengths / 2 + shear, -load * lengths / 2 + shear], axis=1)[
            None
        ],
        axial=np.zeros((1, count, 2)),
        rotations=np.zeros((1, joints)),
        end_rotations=np.zeros((1, count, 2)),
        displacements=np.zeros((1, joints, 2)),
        reactions=np.zeros((1, joints, 3)),
        joint_residual=0.0,
        continuity_residual=0.0,
        method="by hand",
    )
