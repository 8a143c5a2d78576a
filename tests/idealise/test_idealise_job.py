"""What a job file settles: supports, releases, movements, actions, sections, materials, cases."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest
from building_makers import (
    PINNED,
    RIGIDITY,
    STEEL,
    finding,
    member,
    model,
    node,
    only,
    slugs,
    spans,
)
from physical_makers import beam, column, house

from analysis_core.idealise import idealise
from analysis_core.model import (
    DistributedForce,
    ImposedCurvature,
    JointMovement,
    PointMoment,
    Support,
)
from analysis_core.settings import (
    ActionSetting,
    CaseSetting,
    CombinationSetting,
    MaterialSetting,
    MovementSetting,
    ReleaseSetting,
    SectionSetting,
    Selector,
    Settings,
    SupportSetting,
)

Z = 3.0


def portal_row():
    """Beams of 5 and 7 m over three columns; the second is drawn from right to left."""
    columns = [column(f"C{i}", x, 0.0, 0.0, Z - 0.2) for i, x in enumerate((0.0, 5.0, 12.0))]
    beams = [
        beam("B0", (0.15, 0.0, Z), (4.85, 0.0, Z), storey="Level 1"),
        beam("B1", (11.85, 0.0, Z), (5.15, 0.0, Z), storey="Level 1"),
    ]
    return house(beams, columns, storeys=(("Level 1", 3.2),))


def with_actions(*settings, building=None):
    return idealise(building or portal_row(), Settings(actions=settings))


def placed(found, source):
    return [a for a in only(found).actions if a.source == source]


def test_a_uniform_action_on_a_whole_element_fills_its_spans():
    action = ActionSetting("Q", Selector(name="B0"), "uniform", (12e3,), source="actions[0]")
    (force,) = placed(with_actions(action), "actions[0]")

    assert isinstance(force, DistributedForce)
    assert (force.case, force.member, force.start, force.end) == ("Q", 0, 0.0, pytest.approx(5.0))
    assert force.transverse == (12e3,)


def test_a_linear_action_on_an_element_drawn_backwards_runs_the_other_way():
    action = ActionSetting("Q", Selector(name="b1"), "linear", (0.0, 6e3), source="a")
    (force,) = placed(with_actions(action), "a")

    assert force.member == 1
    assert force.transverse == (pytest.approx(6e3), pytest.approx(-6e3 / 7.0))


def test_part_of_an_element_is_measured_from_its_own_start():
    """30 % to 60 % of B1 (6.70 m as drawn, from x = 11.85 m leftward)."""
    action = ActionSetting(
        "Q", Selector(name="B1"), "uniform", (1e3,), start=0.3, end=0.6, relative=True, source="a"
    )
    (force,) = placed(with_actions(action), "a")

    assert (force.start, force.end) == (
        pytest.approx(11.85 - 0.6 * 6.7 - 5.0),
        pytest.approx(11.85 - 0.3 * 6.7 - 5.0),
    )


def test_point_forces_moments_and_polygonal_actions_find_their_place():
    selector = Selector(name="B0")
    found = with_actions(
        ActionSetting("Q", selector, "point", (20e3, 5e3), stations=(1.0, 2.0), source="p"),
        ActionSetting("Q", selector, "moment", (7e3,), stations=(1.5,), source="m"),
        ActionSetting(
            "Q", selector, "polygonal", (0.0, 4e3, 1e3), stations=(0.5, 1.5, 4.0), source="g"
        ),
    )

    assert [(a.position, a.transverse) for a in placed(found, "p")] == [
        (pytest.approx(1.15), 20e3),
        (pytest.approx(2.15), 5e3),
    ]
    (moment,) = placed(found, "m")
    assert isinstance(moment, PointMoment)
    assert (moment.position, moment.moment) == (pytest.approx(1.65), 7e3)
    first, second = placed(found, "g")
    assert (first.start, first.end, second.end) == pytest.approx((0.65, 1.65, 4.15))
    assert first.transverse == pytest.approx((0.0, 4e3))
    assert second.transverse == pytest.approx((4e3, -3e3 / 2.5))


def test_snow_on_a_slope_counts_per_metre_of_plan():
    """3-4-5 triangle: 1 kN/m of plan is 0.8 kN/m of rafter, of which 0.8 acts across it."""
    rafter = member("R", (0.0, 0.0, 0.0), (4.0, 0.0, 3.0))
    nodes = [node("a", (0.0, 0.0, 0.0), PINNED), node("b", (4.0, 0.0, 3.0), PINNED)]
    action = ActionSetting("S", Selector(), "uniform", (1e3,), projected=True, source="a")
    found = with_actions(action, building=model([rafter], nodes))
    (force,) = placed(found, "a")

    assert force.transverse == pytest.approx((640.0,))
    assert force.axial == pytest.approx((-480.0,))


def test_directions_across_along_and_right():
    rafter = member("R", (0.0, 0.0, 0.0), (4.0, 0.0, 3.0))
    nodes = [node("a", (0.0, 0.0, 0.0), PINNED), node("b", (4.0, 0.0, 3.0), PINNED)]
    found = with_actions(
        *(
            ActionSetting("W", Selector(), "uniform", (1e3,), direction=way, source=way)
            for way in ("across", "along", "right")
        ),
        building=model([rafter], nodes),
    )
    across, along, right = (placed(found, way)[0] for way in ("across", "along", "right"))

    assert (across.transverse, across.axial) == (pytest.approx((1e3,)), ())
    assert (along.transverse, along.axial) == ((), pytest.approx((1e3,)))
    assert right.transverse == pytest.approx((600.0,))
    assert right.axial == pytest.approx((800.0,))


def test_temperature_below_makes_the_member_sag():
    """alpha dT / h = 12e-6 * 20 / 0.4."""
    action = ActionSetting("T", Selector(name="B0"), "temperature", (20.0,), source="t")
    (bend,) = placed(with_actions(action), "t")

    assert isinstance(bend, ImposedCurvature)
    assert bend.curvature == pytest.approx(6e-4)
    assert (bend.start, bend.end) == (0.0, pytest.approx(5.0))


def test_an_action_beyond_the_member_is_said():
    action = ActionSetting("Q", Selector(name="B0"), "point", (1e3,), stations=(7.25,), source="p")
    found = with_actions(action)

    assert placed(found, "p") == []
    assert "7.25 m along member 'B0'" in finding(found, "action-beyond-member").message


def test_a_selector_that_matches_nothing_is_said():
    action = ActionSetting("Q", Selector(name="X-*"), "uniform", (1e3,), source="actions[4]")
    found = with_actions(action)

    assert "actions[4]" in finding(found, "selector-matches-nothing").message


@pytest.mark.parametrize(
    ("selector", "members"),
    [
        (Selector(name="b?"), {0, 1}),
        (Selector(global_ids=("B1",)), {1}),
        (Selector(ifc_class="IfcBeam"), {0, 1}),
        (Selector(ifc_class="IfcMember"), set()),
        (Selector(material="S2*"), {0, 1}),
        (Selector(storey="level 1", name="B0"), {0}),
        (Selector(line="L1-01"), {0, 1}),
        (Selector(line="L9-01"), set()),
    ],
)
def test_selectors(selector, members):
    found = with_actions(ActionSetting("Q", selector, "uniform", (1e3,), source="a"))

    assert {a.member for a in placed(found, "a")} == members


def test_a_support_of_the_job_file_says_how_what_stands_there_holds():
    setting = SupportSetting(
        Selector(name="B1"), "start", vertical=4e8, rotation=0.0, source="supports[0]"
    )
    line = only(idealise(portal_row(), Settings(supports=(setting,))))

    assert line.joints[2].support == Support(4e8, 0.0, 0.0)
    assert line.joints[2].reason.endswith("held as stated in the job file (supports[0])")
    # The column still carries: its reaction must not land on the beam itself.
    assert line.joints[2].element == "C2"


def test_a_support_along_a_member_splits_it():
    setting = SupportSetting(Selector(name="B0"), position=2.0, source="s")
    line = only(idealise(portal_row(), Settings(supports=(setting,))))

    assert spans(line) == [2.15, 2.85, 7.0]
    assert line.joints[1].support == Support(math.inf, 0.0, 0.0)
    assert [m.span for m in line.members] == [1, 2, 3]


def test_a_support_makes_a_hanging_beam_analysable():
    lone = house([beam("B", (0.0, 0.0, Z), (6.0, 0.0, Z))], [])
    setting = SupportSetting(Selector(name="B"), "both", source="s")

    assert only(idealise(lone, Settings())).fault
    assert not only(idealise(lone, Settings(supports=(setting,)))).fault


def test_releases_and_hinges():
    settings = Settings(
        releases=(
            ReleaseSetting(Selector(name="B1"), "end", rotation=6e7, source="r0"),
            ReleaseSetting(Selector(name="B0"), "both", position=1.85, source="r1"),
        )
    )
    line = only(idealise(portal_row(), settings))

    assert spans(line) == [2.0, 3.0, 7.0]
    assert line.members[2].start_spring == 6e7  # B1 is drawn from right to left
    assert (line.members[0].end_spring, line.members[1].start_spring) == (0.0, math.inf)
    assert [m.span for m in line.members] == [1, 1, 2]


def test_a_column_settles():
    setting = MovementSetting("Sett", Selector(name="C1"), down=0.008, source="m")
    (moved,) = placed(idealise(portal_row(), Settings(movements=(setting,))), "m")

    assert moved == JointMovement("Sett", 1, 0.0, 0.008, 0.0, "m")


def test_a_movement_of_nothing_is_said():
    setting = MovementSetting("Sett", Selector(name="C1"), rotation=0.01, source="m")
    found = idealise(portal_row(), Settings(movements=(setting,)))

    assert "movement-without-support" in slugs(found)


def test_stiffness_stated_for_a_material_replaces_the_models():
    setting = MaterialSetting("s2*", elastic_modulus=200e9)
    line = only(idealise(portal_row(), Settings(materials=(setting,))))

    assert line.members[0].flexural_rigidity == pytest.approx(RIGIDITY * 200.0 / 210.0)


def test_an_implausible_modulus_is_refused_and_can_be_put_right():
    slip = replace(STEEL, elastic_modulus=29.0e6 * 6894.757 / 1e6)  # 29 read as lb, not kip
    nodes = [node("a", (0.0, 0.0, 0.0), PINNED), node("b", (6.0, 0.0, 0.0), PINNED)]
    building = model([member("B", (0.0, 0.0, 0.0), (6.0, 0.0, 0.0), material=slip)], nodes)
    right = Settings(materials=(MaterialSetting("S235", elastic_modulus=200e9),))

    told = finding(idealise(building, Settings()), "no-rigidity")
    assert "MPa, which no structural material has" in told.message
    assert only(idealise(building, right)).fault == ""


def test_inertia_stated_for_a_member_without_section():
    nodes = [node("a", (0.0, 0.0, 0.0), PINNED), node("b", (6.0, 0.0, 0.0), PINNED)]
    building = model([member("B", (0.0, 0.0, 0.0), (6.0, 0.0, 0.0), section=None)], nodes)
    settings = Settings(sections=(SectionSetting(Selector(), inertia=3e-4, source="s"),))
    line = only(idealise(building, settings))

    assert line.members[0].flexural_rigidity == pytest.approx(210e9 * 3e-4)


def test_a_haunch_follows_the_cube_of_its_depth():
    """Twice the depth at the start, falling to one at 20 %: at 10 %, 1.5 cubed."""
    taper = ((0.0, 2.0), (0.2, 1.0), (1.0, 1.0))
    nodes = [node("a", (0.0, 0.0, 0.0), PINNED), node("b", (6.0, 0.0, 0.0), PINNED)]
    building = model([member("B", (0.0, 0.0, 0.0), (6.0, 0.0, 0.0))], nodes)
    settings = Settings(sections=(SectionSetting(Selector(), taper=taper, source="s"),))
    haunch, rest = only(idealise(building, settings)).members[0].pieces

    assert (haunch.length, rest.length) == (pytest.approx(1.2), pytest.approx(4.8))
    assert [haunch.flexural_at(u) / RIGIDITY for u in (0.0, 0.5, 1.0)] == pytest.approx(
        [8.0, 3.375, 1.0]
    )
    assert rest.flexural_at(0.7) == pytest.approx(RIGIDITY)


def test_cases_take_their_nature_from_the_job_file():
    action = ActionSetting("offices", Selector(), "uniform", (1e3,), source="a")
    settings = Settings(cases=(CaseSetting("Offices", "imposed", "B"),), actions=(action,))
    found = idealise(portal_row(), settings)

    assert [(c.name, c.nature, c.category) for c in found.cases] == [
        ("Self weight", "permanent", ""),
        ("Offices", "imposed", "B"),
    ]
    assert {a.case for a in only(found).actions} == {"Self weight", "Offices"}


def test_an_unknown_nature_is_said_and_taken_as_other():
    action = ActionSetting("Load 7", Selector(), "uniform", (1e3,), source="a")
    found = with_actions(action)

    assert found.cases[-1].nature == "other"
    assert "'Load 7'" in finding(found, "unknown-nature").message


def test_a_combination_with_an_unknown_case_is_said():
    settings = Settings(
        combinations=(CombinationSetting("U", "strength", {"Self weight": 1.35, "Nope": 1.5}),)
    )
    found = idealise(portal_row(), settings)

    assert found.combinations[0].factors == {"Self weight": 1.35}
    assert "'Nope'" in finding(found, "unknown-case").message


def test_self_weight_is_density_times_area_times_gravity():
    """7850 * 0.01 * 9.80665 = 769.82 N/m, over axis-to-axis spans."""
    line = only(idealise(portal_row(), Settings()))

    assert [(a.case, a.member, a.start) for a in line.actions] == [
        ("Self weight", 0, 0.0),
        ("Self weight", 1, 0.0),
    ]
    assert [a.transverse[0] for a in line.actions] == pytest.approx([769.822025] * 2)
    assert [a.end for a in line.actions] == pytest.approx([5.0, 7.0])


def test_no_density_no_self_weight_and_said():
    building = portal_row()
    light = replace(STEEL, density=0.0)
    members = tuple(replace(m, material=light) for m in building.members)
    found = idealise(replace(building, members=members), Settings())

    assert only(found).actions == ()
    assert finding(found, "no-self-weight").elements == ("B0", "B1")
