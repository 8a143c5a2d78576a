"""Whatever a model holds, idealisation ends with lines and findings, never with an error."""

from __future__ import annotations

import math
import random
from dataclasses import replace

import pytest
from building_makers import (
    FREE3,
    HINGE,
    PINNED,
    ROLLER,
    SECTION,
    STEEL,
    attached,
    member,
    model,
    node,
    uniform,
)
from physical_makers import block, column, house, wall

from analysis_core.building import (
    FIXED,
    Area,
    AreaAction,
    AxisAction,
    LoadCase,
    NodeAction,
    Restraint,
    TemperatureAction,
)
from analysis_core.idealise import idealise
from analysis_core.settings import (
    ActionSetting,
    Analysis,
    AreaActionSetting,
    MovementSetting,
    ReleaseSetting,
    Selector,
    Settings,
    SupportSetting,
)

SLAB = ((0.0, 0.0), (6.0, 0.0), (6.0, 5.0), (0.0, 5.0))


def some_point(rng):
    return (
        rng.choice([0.0, 0.0, 2.0, 4.0, 6.0, 6.05, 12.0]),
        rng.choice([0.0, 0.0, 3.0, 5.0, 5.02, 9.0]),
        rng.choice([0.0, 0.0, 3.0, 3.0, 3.2, 6.0]),
    )


def some_members(rng):
    members = []
    for i in range(rng.randint(1, 9)):
        a, b = some_point(rng), some_point(rng)
        if a == b:  # without length
            point = replace(member("x", FREE3, (1.0, 0.0, 0.0)), global_id=f"B{i}", start=a, end=a)
            members.append(point)
            continue
        members.append(
            member(
                f"B{i}",
                a,
                b,
                carries_moment=rng.random() < 0.9,
                section=rng.choice([SECTION, SECTION, SECTION, None]),
                material=rng.choice([STEEL, STEEL, STEEL, None]),
            )
        )
    return members


def some_settings(rng):
    on = Selector(name=rng.choice(["*", "B1", "B*", "zz"]))
    return Settings(
        analysis=Analysis(
            columns_as_legs=rng.random() < 0.3,
            spans=rng.choice(["axis", "face"]),
            end_fixity=rng.choice(["pinned", "fixed", "guided", "free"]),
            continuous_over_columns=rng.random() < 0.7,
            shear_flexible=rng.random() < 0.3,
            self_weight=rng.choice([None, True, False]),
        ),
        supports=(SupportSetting(on, rng.choice(["start", "end"]), rng.choice([None, 1.0, 50.0])),),
        releases=(
            ReleaseSetting(on, "both", rng.choice([0.0, 1e6, math.inf]), rng.choice([None, 1.5])),
        ),
        movements=(MovementSetting("Q", on, rng.choice(["", "start"]), 0.01),),
        actions=(
            ActionSetting("Q", on, "uniform", (1e3,)),
            ActionSetting("q", on, "point", (1e3,), (1.0,)),
            ActionSetting("T", on, "temperature", (10.0,)),
            ActionSetting("W", on, "linear", (1e3, 2e3), start=0.2, end=0.7, relative=True),
        ),
        area_actions=(AreaActionSetting("Q", Selector(), 1e3, rng.choice(["auto", "one-way"])),),
    )


def some_analysis_model(rng):
    members = some_members(rng)
    points = sorted({p for m in members for p in (m.start, m.end)})
    held = [None, None, PINNED, ROLLER, Restraint(), Restraint((0.0, 0.0, 1e7), (0.0, 1e6, 0.0))]
    nodes = [node(f"N{i}", p, rng.choice(held)) for i, p in enumerate(points)]
    sliding = Restraint((0.0, math.inf, math.inf))
    attachments = [
        replace(
            a,
            release=rng.choice([FIXED, FIXED, HINGE, sliding]),
            eccentricity=rng.choice([FREE3, FREE3, (0.0, 0.0, 0.1)]),
        )
        for a in attached([m for m in members if m.start != m.end], nodes)
        if rng.random() < 0.95
    ]
    actions = []
    for m in members:
        name = m.global_id
        force = (rng.uniform(-1e3, 1e3), rng.uniform(-1e3, 1e3), -5e3)
        actions.append(uniform(f"q{name}", name, force, rng.choice([2.0, 50.0])))
        actions.append(TemperatureAction(f"t{name}", "", "G", name, 5.0, 3.0, 4.0))
        shape = rng.choice(["discrete", "continuous"])
        couples = ((1e3, 2e3, 3e3), (0.0, 1e3, 0.0))
        actions.append(
            AxisAction(f"m{name}", "", "G", name, shape, (0.5, 1.0), (FREE3, FREE3), couples)
        )
    for n in nodes:
        actions.append(
            NodeAction(
                f"p{n.global_id}", "", "G", n.global_id, (1e3, 2e3, -3e3), (1e3, 2e3, 0.0),
                (0.0, 0.0, -0.01),
            )
        )  # fmt: skip
    weight = rng.choice([None, (0.0, 0.0, -1.0), (0.5, 0.0, -1.0)])
    case = LoadCase("G", rng.choice(["permanent", "other"]), "c", self_weight=weight)
    return model(
        members,
        nodes,
        actions=actions,
        attachments=attachments,
        cases=(case,),
        areas=(Area("A0", "s", "IfcStructuralSurfaceMember", 3.0, 3.0, SLAB),),
        area_actions=tuple(AreaAction("x", "x", "G", a, (0.0, 1.0, -1e3)) for a in ("A0", "gone")),
    )


def some_house(rng):
    carriers = [
        column(
            f"C{i}",
            *some_point(rng)[:2],
            rng.choice([0.0, 3.2]),
            rng.choice([2.8, 3.0, 6.0, 3.2]),
            rng.choice([0.2, 0.3, 1.5]),
        )
        for i in range(rng.randint(0, 8))
    ]
    for i in range(rng.randint(0, 2)):
        x = some_point(rng)[0]
        carriers.append(wall(f"W{i}", (x, -1.0, 0.0), (x + 0.2, 8.0, rng.choice([2.8, 3.5]))))
    carriers.append(block("S", "IfcSlab", (-1.0, -1.0, 2.6), (7.0, 6.0, 2.8)))
    carriers.append(block("F", "IfcFooting", (-1.0, -1.0, -0.5), (1.0, 1.0, 0.0)))
    carriers.append(replace(carriers[-1], global_id="bare", corners=()))
    return house(some_members(rng), carriers, areas=(Area("A", "s", "IfcSlab", 3.0, 3.2, SLAB),))


@pytest.mark.parametrize("seed", range(25))
@pytest.mark.parametrize("make", [some_analysis_model, some_house])
def test_no_building_stops_the_work_and_every_member_is_somewhere(make, seed):
    rng = random.Random(seed)
    building = make(rng)
    found = idealise(building, some_settings(rng))

    placed = {element for line in found.lines for element in line.elements}
    named = {element for finding in found.findings for element in finding.elements}
    assert {m.global_id for m in building.members} <= placed | named
    for line in found.lines:
        told = [f for f in found.findings if f.line == line.mark and f.severity == "error"]
        assert bool(line.fault) == bool(told)
