"""Checks of whole lines: what restrains, what combines, what lasts, and what is refused."""

from dataclasses import replace

import pytest
from designs import C24, C30, IPE300, S355, box, rectangle

from analysis_core import pipeline
from analysis_core.checking.inputs import by_duration
from analysis_core.checking.members import check_lines
from analysis_core.checking.restraints import continuous_ends, stretch_of
from analysis_core.effects.deflection_limits import spans_of
from analysis_core.model import (
    Case,
    Combination,
    DistributedForce,
    Joint,
    JointForce,
    Line,
    LineModel,
    Member,
    Piece,
    PointForce,
    Support,
    Transfer,
)
from analysis_core.settings import CheckSettings, Display, Redistribution, RuleSettings, Settings

BEARING = Support(vertical=float("inf"))
CASES = (Case("G", "permanent"), Case("Q", "imposed", "B"), Case("S", "snow"))


def line(section, material, lengths, *, supported=None, numbers=None, actions=(), width=0.0):
    """A straight line; ``supported``: joints with bearings, all where None."""
    xs = [sum(lengths[:i]) for i in range(len(lengths) + 1)]
    held = range(len(xs)) if supported is None else supported
    joints = tuple(
        Joint(i, x, 0.0, (x, 0.0, 0.0), BEARING if i in held else None, width=width)
        for i, x in enumerate(xs)
    )
    rigidity = material.elastic_modulus * section.inertia
    members = tuple(
        Member(
            i, i, i + 1, (Piece(length, (rigidity,)),), span=(numbers or range(1, 99))[i],
            element=f"E{i}", section=section, material=material,
        )
        for i, length in enumerate(lengths)
    )  # fmt: skip
    return Line("L1", joints, members, tuple(actions))


def uniform(case, load, lengths):
    return [DistributedForce(case, i, 0.0, length, (load,)) for i, length in enumerate(lengths)]


def checked(line_, settings=None, *, cases=CASES, combinations=(), transfers=()):
    settings = settings or Settings()
    model = LineModel((line_,), cases, combinations, transfers)
    survey = pipeline.Survey("f.ifc", "IFC4", "0" * 64, model, ())
    outcome = pipeline.solve(survey, settings)
    found = check_lines(outcome, settings)["L1"]
    return outcome, [{c.name: c for c in member.checks} for member in found], found


def test_the_tip_of_a_cantilever_is_not_held_and_an_unheld_joint_does_not_stop_buckling():
    lengths = (6.0, 1.0, 1.0)
    beam = line(
        IPE300, S355, lengths, supported=(0, 1), numbers=(1, 2, 2),
        actions=[PointForce("G", 2, 1.0, 20e3)],
    )  # fmt: skip
    stretch = stretch_of(beam, beam.members[2])
    assert (stretch.length, stretch.held, stretch.loose) == (2.0, (-1.0,), (1.0,))

    _, found, _ = checked(beam)

    for member in (1, 2):
        steps = {s.symbol: s.value for s in found[member]["lateral torsional buckling"].steps}
        assert steps["L"] == 2.0
        assert steps["C_1"] == 1.0
        # M = 1.35 · 20 kN · 2 m at the root, for both members of the cantilever.
        assert found[member]["lateral torsional buckling"].demand == pytest.approx(-54e3, rel=0.02)


def carried_by(beam, support, **settings):
    """Checks of a beam that carries L2, whose first joint rests on the element ``support``."""
    other = line(IPE300, S355, (3.0,), actions=uniform("G", 1e3, (3.0,)))
    joint = replace(other.joints[0], point=(3.0, 0.0, 3.0), element=support)
    other = replace(other, mark="L2", elements=("J",), joints=(joint, *other.joints[1:]))
    model = LineModel((beam, other), CASES, (), (Transfer("L2", 0, "L1", 0, 3.0),))
    given = Settings(**settings)
    outcome = pipeline.solve(pipeline.Survey("f", "IFC4", "0" * 64, model, ()), given)
    (held,) = check_lines(outcome, given)["L1"]
    return held


def test_what_comes_down_a_column_holds_no_flange():
    beam = line(IPE300, S355, (6.0,), actions=uniform("G", 15e3, (6.0,)))
    held = carried_by(beam, "a column that stands on it")
    assert "L2" not in held.restraints
    lateral = next(c for c in held.checks if c.name == "lateral torsional buckling")
    assert next(s.value for s in lateral.steps if s.symbol == "L") == 6.0


def test_places_of_restraints_are_told_in_display_units():
    beam = line(IPE300, S355, (6.0,), actions=uniform("G", 15e3, (6.0,)))
    held = carried_by(beam, "E0", display=Display("us"))
    assert "top flange at 9.84 ft, where L2 bears" in held.restraints  # 3 m / 0.3048


def test_what_bears_on_a_beam_holds_its_top_flange_and_the_reason_is_stated():
    lengths = (6.0,)
    beam = line(IPE300, S355, lengths, actions=uniform("G", 15e3, lengths))
    held = carried_by(beam, "E0")
    _, (plain,), _ = checked(beam)

    by_name = {c.name: c for c in held.checks}
    assert "top flange at 3.000 m, where L2 bears" in held.restraints
    steps = {s.symbol: s.value for s in by_name["lateral torsional buckling"].steps}
    assert steps["L"] == 3.0
    assert (
        by_name["lateral torsional buckling"].resistance
        > plain["lateral torsional buckling"].resistance
    )


@pytest.mark.parametrize(("permanent", "governs"), [(3.0e3, "permanent"), (1.0e3, "medium")])
def test_the_load_duration_that_governs_may_be_the_longest(permanent, governs):
    """1.35 G at k_mod 0.6 against 1.35 G + 1.5 Q at 0.8: 1.35 G / 0.6 > (1.35 G + 1.5 Q) / 0.8
    where Q < 0.3 G."""
    lengths = (4.0,)
    joist = line(
        rectangle(0.1, 0.2), C24, lengths,
        actions=[*uniform("G", permanent, lengths), *uniform("Q", 0.6e3, lengths)],
    )  # fmt: skip
    _, (found,), _ = checked(joist)

    check = found["bending"]
    g, q = permanent * 2.0, 0.6e3 * 2.0
    w, f = 0.1 * 0.04 / 6, 24e6 / 1.3
    expected = max(1.35 * g / (0.6 * f * w), (1.35 * g + 1.5 * q) / (0.8 * f * w))
    note = next(s.note for s in check.steps if s.symbol == "k_mod")
    assert governs in note
    slender = next((s.value for s in check.steps if s.symbol == "k_crit"), 1.0)
    assert check.use == pytest.approx(expected / slender, rel=1e-6)


def test_combinations_are_kept_whole_and_without_their_shorter_actions():
    combination = Combination("U", "strength", {"G": 1.35, "Q": 1.5, "S": 0.75})
    found = by_duration([combination], LineModel((), CASES), Settings())

    assert {d: [dict(c.factors) for c in cs] for d, cs in found.items()} == {
        "short": [{"G": 1.35, "Q": 1.5, "S": 0.75}],
        "medium": [{"G": 1.35, "Q": 1.5}],
        "permanent": [{"G": 1.35}],
    }
    assert found["medium"][0].name == "U without S"


def test_deflections_of_timber_in_the_end_by_the_formula_of_the_code():
    lengths = (4.0,)
    joist = line(
        rectangle(0.1, 0.2), C24, lengths,
        actions=[*uniform("G", 1e3, lengths), *uniform("Q", 2e3, lengths),
                 *uniform("S", 0.5e3, lengths)],
    )  # fmt: skip
    _, (found,), _ = checked(joist)

    # Bending and shear of a simple span: 5 L^4/(384 EI) and 1.2 L²/(8 G A), G = E/16.
    per_load = 5 * 4.0**4 / (384 * 11e9 * 0.1 * 0.2**3 / 12)
    per_load += 1.2 * 4.0**2 / (8 * 11e9 / 16 * 0.1 * 0.2)
    g, q, s = (load * per_load for load in (1e3, 2e3, 0.5e3))
    # 2.2.3(5), k_def 0.6; EN 1990 table A1.1: office psi0 0.7, psi2 0.3; snow 0.5, 0.
    at_once = max(g + q + 0.5 * s, g + s + 0.7 * q)
    final = g * 1.6 + q * (1 + 0.3 * 0.6) + s * 0.5
    assert found["deflection at once"].demand == pytest.approx(at_once, rel=1e-9)
    assert found["deflection in the end"].demand == pytest.approx(final, rel=1e-9)
    assert found["deflection in the end"].resistance == pytest.approx(4.0 / 250)


def test_bearing_of_timber_counts_the_width_of_the_bearing():
    strong = replace(C24, strength=(*C24.strength, ("fc90k", 2.5e6)))
    lengths = (4.0, 4.0)
    loads = [*uniform("G", 1e3, lengths), *uniform("Q", 2e3, lengths)]
    joist = line(rectangle(0.1, 0.2), strong, lengths, actions=loads, width=0.1)
    outcome, found, _ = checked(joist)

    middle = found[0]["bearing at joint 1"]
    end = found[0]["bearing at joint 0"]
    assert "bearing at joint 1" not in found[1]
    # EN 1995-1-1, 6.1.5: 100 + 2 · 30 mm inside, 100 + 30 at the end; k_mod 0.8.
    strength = 0.8 * 2.5e6 / 1.3
    assert middle.resistance == pytest.approx(strength * 0.1 * 0.160)
    assert end.resistance == pytest.approx(strength * 0.1 * 0.130)
    reaction = outcome.lines[0].envelopes["strength"].reactions[1].vertical_max.value
    assert middle.demand == pytest.approx(reaction)
    # 1.25 w L at the middle, all spans loaded.
    assert reaction == pytest.approx(1.25 * (1.35e3 + 3e3) * 4.0, rel=1e-6)
    unknown = checked(line(rectangle(0.1, 0.2), strong, lengths, actions=loads))[1]
    assert unknown[0]["bearing at joint 1"].status == "not checked"


def test_allowable_stress_combinations_never_reach_checks_for_factored_actions():
    lengths = (5.0,)
    asd = Settings(rules=RuleSettings(name="asce-7-22-asd"))
    concrete = line(rectangle(0.3, 0.5), C30, lengths, actions=uniform("G", 10e3, lengths))
    steel = line(IPE300, S355, lengths, actions=uniform("G", 10e3, lengths))

    _, (of_concrete,), _ = checked(concrete, asd)
    _, (of_steel,), _ = checked(steel, asd)
    _, (factored,), _ = checked(steel, Settings(rules=RuleSettings(name="asce-7-22")))

    assert of_concrete["resistance"].status == "not checked"
    assert "not factored" in of_concrete["resistance"].reason
    steps = {s.symbol for s in of_steel["flexure"].steps}
    assert "M_n/Ω" in steps
    assert "φM_n" in {s.symbol for s in factored["flexure"].steps}
    # 0.9 against 1/1.67, under 1.4 D and D.
    assert factored["shear"].use / of_steel["shear"].use == pytest.approx(1.4 / 1.5, rel=1e-9)


def test_a_member_flexible_in_shear_is_checked_and_one_that_bends_otherwise_is_not():
    lengths = (5.0,)
    steel = line(IPE300, S355, lengths, actions=uniform("G", 10e3, lengths))
    (member,) = steel.members
    piece = replace(member.pieces[0], shear=(1e8,))
    flexible = replace(steel, members=(replace(member, pieces=(piece,)),))
    weak = replace(piece, flexural=(0.1 * piece.flexural[0],), shear=None)
    lying = replace(steel, members=(replace(member, pieces=(weak,)),))

    assert checked(flexible)[1][0]["bending"].status == "satisfied"
    assert checked(lying)[1][0]["resistance"].status == "not checked"


def test_every_member_is_held_against_the_limit_on_deflections():
    lengths = (6.0,)
    steel = line(IPE300, S355, lengths, actions=uniform("G", 10e3, lengths))
    _, (found,), _ = checked(steel)

    exact = 5 * 10e3 * 6.0**4 / (384 * 210e9 * 8356e-8)
    assert found["deflection limit"].demand == pytest.approx(exact, rel=1e-9)
    assert found["deflection limit"].resistance == pytest.approx(6.0 / 250)


def test_ends_count_as_continuous_where_something_keeps_them_from_turning():
    beam = line(rectangle(0.3, 0.5), C30, (5.0, 6.0, 4.0))
    assert [continuous_ends(beam, span) for span in spans_of(beam)] == [1, 2, 1]
    hinged = replace(beam, members=(*beam.members[:2], replace(beam.members[2], start_spring=0.0)))
    assert [continuous_ends(hinged, span) for span in spans_of(hinged)] == [1, 1, 0]


def test_a_leg_with_axial_force_is_checked_with_it():
    """A post with a load on its head and one sideways, as a frame of one member."""
    joints = (
        Joint(0, 0.0, 0.0, support=Support(float("inf"), float("inf"), float("inf"))),
        Joint(1, 0.0, 3.0),
    )
    rigidity = 210e9 * IPE300.inertia
    post = Member(0, 0, 1, (Piece(3.0, (rigidity,)),), role="leg", section=IPE300, material=S355)
    frame = Line(
        "L1", joints, (post,), (JointForce("G", 1, vertical=300e3, horizontal=5e3),), kind="frame"
    )
    _, (found,), (member,) = checked(frame)

    # 1.35 · 300 kN; 1.35 · 5 kN · 3 m at the foot.
    assert found["axial force"].demand == pytest.approx(-405e3)
    assert abs(found["bending"].demand) == pytest.approx(20.25e3, rel=1e-9)
    steps = {s.symbol: s.value for s in found["buckling with bending"].steps}
    assert steps["L_cr,y"] == steps["L_cr,z"] == 6.0  # a post that only its foot holds: twice
    assert "nothing holds it at 3.000 m" in member.restraints


def test_an_unknown_material_or_one_without_a_check_is_said_so():
    lengths = (5.0,)
    odd = replace(S355, category="")
    _, (found,), _ = checked(line(IPE300, odd, lengths, actions=uniform("G", 1e3, lengths)))
    assert found["resistance"].status == "not checked"
    us = Settings(rules=RuleSettings(name="asce-7-22"))
    timber = line(rectangle(0.1, 0.2), C24, lengths, actions=uniform("G", 1e3, lengths))
    assert checked(timber, us)[1][0]["resistance"].status == "not checked"
    stated = replace(us, checks=CheckSettings(codes={"timber": "en-1995-1-1"}))
    assert checked(timber, stated)[1][0]["bending"].status == "satisfied"


def two_spans_redistributed(section, material, part, *, set_="en-1990", load=8e3, **wish):
    """Two spans of 6 m under G and half of Q on each; ``part`` off the middle moment."""
    lengths = (6.0, 6.0)
    actions = uniform("G", load, lengths) + uniform("Q", load / 2, lengths)
    rules = RuleSettings(name=set_, redistribution=(Redistribution(part, **wish),))
    if part is None:
        rules = RuleSettings(name=set_)
    held = CheckSettings(restraints=())
    beam = line(section, material, lengths, actions=actions)
    return checked(beam, Settings(rules=rules, checks=held), cases=CASES[:2])


def moments_by_hand(g, q, part):
    """Largest hogging and sagging moment of two spans of 6 m, q on one or both, by statics."""
    hog = (1 - part) * (1.35 * g + 1.5 * q) * 36 / 8
    total, at_support = 1.35 * g + 1.5 * q, (1 - part) * (1.35 * g * 36 / 8 + 1.5 * q * 36 / 16)
    reaction = total * 3 - at_support / 6
    return hog, reaction**2 / (2 * total)


def test_concrete_is_reinforced_for_the_redistributed_moments():
    _, (first, second), _ = two_spans_redistributed(
        rectangle(0.3, 0.5), C30, 0.2, load=30e3, ductility="B"
    )
    hog, sag = moments_by_hand(30e3, 15e3, 0.2)
    for member in (first, second):
        for name, moment in (("hogging", hog), ("sagging", sag)):
            check = member[f"{name} reinforcement"]
            steps = {s.symbol: s.value for s in check.steps}
            mu = moment / (0.3 * 0.452**2 * 20e6)
            assert steps["μ"] == pytest.approx(mu, rel=1e-6)
        # 5.5(4): delta = 0.8 >= 0.44 + 1.25 x/d, and >= 0.7 for class B.
        ratio = next(s.value for s in member["hogging reinforcement"].steps if s.symbol == "x/d")
        assert member["redistribution"].demand == pytest.approx(max(0.44 + 1.25 * ratio, 0.7))
        assert member["redistribution"].resistance == pytest.approx(0.8)
        assert ratio <= (0.8 - 0.44) / 1.25 + 1e-9


def test_steel_takes_redistributed_moments_where_its_class_and_its_restraint_allow_it():
    stout = two_spans_redistributed(IPE300, S355, 0.1)[1][0]
    assert stout["redistribution"].status == "not checked"  # 6 m of IPE 300 buckle sideways
    assert "elastic moments" in stout["redistribution"].reason
    elastic = two_spans_redistributed(IPE300, S355, None)[1][0]
    assert "redistribution" not in elastic
    assert stout["bending"] == elastic["bending"]

    tube_like = box("RHS", 0.30, 0.20, 0.010)
    moved = two_spans_redistributed(tube_like, S355, 0.1, load=20e3)[1][0]
    hog, sag = moments_by_hand(20e3, 10e3, 0.1)
    assert abs(moved["bending"].demand) == pytest.approx(max(hog, sag), rel=1e-6)
    # The states beside the extremes are redistributed ones as well, here in a long table of x.
    assert abs(moved["bending with shear"].demand) == pytest.approx(max(hog, sag), rel=1e-6)
    before = two_spans_redistributed(tube_like, S355, None, load=20e3)[1][0]
    assert abs(moved["shear"].demand) < abs(before["shear"].demand)
    beside = {s.symbol: s.value for s in moved["bending with shear"].steps}
    # Shear at the middle bearing: half the load and the redistributed moment over the span.
    acting = (1.35 * 20e3 + 1.5 * 10e3) * 3.0 + hog / 6.0
    resistance = next(s.value for s in moved["shear"].steps if s.symbol == "V_pl,Rd")
    assert beside["v"] == pytest.approx(acting / resistance, rel=1e-6)
    assert moved["redistribution"].demand == 0.1
    assert moved["redistribution"].resistance == 0.15

    thin = box("RHS", 0.30, 0.20, 0.0058)  # c/t = 31.5: class 3 in S355, 38 ε = 30.9
    kept = two_spans_redistributed(thin, S355, 0.1, load=20e3)[1][0]
    assert "class" in kept["redistribution"].reason
    plain, _ = moments_by_hand(20e3, 10e3, 0.0)
    assert abs(kept["bending"].demand) == pytest.approx(plain, rel=1e-6)


def test_one_member_that_may_not_redistribute_decides_for_its_line():
    """The moment at a bearing is one for both members beside it."""
    stout, thin = box("RHS", 0.30, 0.20, 0.010), box("thin", 0.30, 0.20, 0.0058)
    lengths = (6.0, 6.0)
    beam = line(stout, S355, lengths, actions=uniform("G", 20e3, lengths))
    weak = replace(beam.members[1], section=thin, pieces=(Piece(6.0, (210e9 * thin.inertia,)),))
    mixed = replace(beam, members=(beam.members[0], weak))
    rules = RuleSettings(redistribution=(Redistribution(0.1),))

    _, found, _ = checked(mixed, Settings(rules=rules), cases=CASES[:1])
    _, elastic, _ = checked(mixed, cases=CASES[:1])

    for member in (0, 1):
        assert "Of span 2: The section is of class 3" in found[member]["redistribution"].reason
        assert found[member]["bending"] == elastic[member]["bending"]


def test_timber_keeps_its_elastic_moments():
    moved = two_spans_redistributed(rectangle(0.1, 0.3), C24, 0.1, load=1e3)[1][0]
    elastic = two_spans_redistributed(rectangle(0.1, 0.3), C24, None, load=1e3)[1][0]
    assert moved["redistribution"].status == "not checked"
    assert moved["bending"] == elastic["bending"]


@pytest.mark.parametrize("part", [0.07, 0.11, 0.13, 0.17, 0.19, 0.23, 0.29])
@pytest.mark.parametrize(("set_", "most"), [("en-1990", 0.3), ("asce-7-16", 0.2)])
def test_reinforcement_made_for_a_redistribution_satisfies_it(part, set_, most):
    """Bars in compression bring x/d, or the strain, just to its limit; it is not what governs."""
    _, (first, _), (member, _) = two_spans_redistributed(
        rectangle(0.3, 0.5), C30, part, set_=set_, load=38e3, ductility="B"
    )
    assert (first["redistribution"].status == "satisfied") is (part <= most)
    assert (member.worst.name != "redistribution") or part > most


def test_more_than_the_code_allows_is_not_satisfied():
    moved = two_spans_redistributed(box("RHS", 0.30, 0.20, 0.010), S355, 0.2)[1][0]
    assert moved["redistribution"].status == "not satisfied"
