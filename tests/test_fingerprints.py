"""Fingerprints: the same whenever results must be the same, and reasons when they are not."""

import hashlib
import json
from dataclasses import replace

import pytest

from analysis_core.model import (
    Combination,
    DistributedForce,
    ImposedCurvature,
    Joint,
    JointForce,
    JointMovement,
    Line,
    Material,
    Member,
    Piece,
    PointForce,
    PointMoment,
    Section,
    Support,
)
from analysis_core.revision.fingerprints import basis, fingerprint
from analysis_core.revision.reasons import FOR_ALL, differences, places
from analysis_core.settings import Analysis, Settings

SECTION = Section("R 300x500", "rectangle", 0.15, 3.125e-3, depth=0.5, width=0.3)
CONCRETE = Material("C30/37", 33e9, density=2500.0)


@pytest.fixture
def line():
    pinned = Support(vertical=float("inf"))
    joints = (
        Joint(0, 0.0, 0.0, support=pinned, element="W-1"),
        Joint(1, 6.0, 0.0, support=pinned),
        Joint(2, 10.5, 0.0, support=pinned),
    )
    members = tuple(
        Member(i, i, i + 1, (Piece(length, (1.03e8,)),), element=f"B-{i}", span=i + 1,
               section=SECTION, material=CONCRETE)
        for i, length in enumerate((6.0, 4.5))
    )  # fmt: skip
    actions = (
        DistributedForce("G", 0, 0.0, 6.0, (12e3,)),
        DistributedForce("Q", 1, 0.0, 4.5, (8e3,)),
    )
    return Line("L1-01", joints, members, actions)


def of(line, **changes):
    given = {
        "combinations": (Combination("U1", "strength", {"G": 1.35, "Q": 1.5}),),
        "rules": "EN 1990",
        "settings": Settings(),
        "received": {"L1-02": "abc"},
        **changes,
    }
    return basis(line, **given)


@pytest.mark.parametrize(
    "harmless",
    [
        lambda line: replace(line, mark="L1-07", origin=(1e6, 0.0, 3.6)),
        lambda line: replace(line, actions=line.actions[::-1]),
        lambda line: replace(line, actions=tuple(replace(a, source="x") for a in line.actions)),
        lambda line: replace(
            line, joints=(line.joints[0], replace(line.joints[1], x=6.0 + 1e-9), line.joints[2])
        ),
    ],
)
def test_what_cannot_change_the_results_does_not_change_the_fingerprint(line, harmless):
    assert fingerprint(of(harmless(line))) == fingerprint(of(line))


def test_a_deeper_section_is_named_with_both_depths(line):
    deeper = replace(SECTION, name="R 300x600", depth=0.6)
    member = replace(line.members[0], section=deeper)
    after = of(replace(line, members=(member, line.members[1])))

    sentences = differences(of(line), after, {"B-0": "B2-AB"})

    assert len(sentences) == 1
    assert sentences[0].startswith("section of B2-AB changed from R 300x500 500 mm deep")
    assert "to R 300x600 600 mm deep" in sentences[0]


def test_a_longer_span_is_no_change_of_section(line):
    joints = (*line.joints[:2], replace(line.joints[2], x=11.0))
    longer = replace(line.members[1], pieces=(Piece(5.0, (1.03e8,)),))
    after = of(replace(line, joints=joints, members=(line.members[0], longer)))

    assert differences(of(line), after, {}) == ["geometry changed from 6 + 4.5 m to 6 + 5 m"]


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        ({"received": {"L1-02": "other"}}, "L1-02, whose reactions it receives, changed"),
        ({"received": {}}, "L1-02 bears on it no more"),
        ({"received": {"L1-02": "abc; elsewhere"}}, "L1-02 bears on it elsewhere"),
        ({"rules": "ASCE 7-22"}, "rules changed from EN 1990 to ASCE 7-22"),
        ({"settings": Settings(analysis=Analysis(shear_flexible=True))}, FOR_ALL[1]),
        ({"combinations": ()}, FOR_ALL[0]),
    ],
)
def test_what_changes_the_results_is_named(line, change, sentence):
    before, after = of(line), of(line, **change)
    assert differences(before, after, {}) == [sentence]
    assert fingerprint(before) != fingerprint(after)


def test_a_new_action_and_another_support_are_named(line):
    extra = DistributedForce("G", 1, 0.0, 2.0, (1e3,))
    joints = (replace(line.joints[0], support=Support(float("inf"), 0.0, float("inf"))),)
    after = replace(line, actions=(*line.actions, extra), joints=joints + line.joints[1:])

    actions, support = differences(of(line), of(after), {})

    assert actions == "actions of G changed, 1 before and 2 now"
    was, now = (f"vertical rigid, horizontal free, rotation {r}" for r in ("free", "rigid"))
    assert support == f"support at joint 0 changed from {was} to {now}"


@pytest.mark.parametrize(
    ("action", "row"),
    [
        (
            DistributedForce("G", 1, 0.5, 4.5, (8e3, -1.25), (), "source"),
            ["DistributedForce", "1", "0.5", "4.5", ["8000", "-1.25"], []],
        ),
        (
            PointForce("G", 0, 1.0 / 3.0, 5e3, -2e-7),
            ["PointForce", "0", "0.333333333", "5000", "-2e-07"],
        ),
        (PointMoment("G", 1, 2.0, 12e3), ["PointMoment", "1", "2", "12000"]),
        (
            ImposedCurvature("G", 1, 0.0, 4.5, 1.5e-4),
            ["ImposedCurvature", "1", "0", "4.5", "0.00015"],
        ),
        (JointForce("G", 2, 1e3, -2e3, -0.0), ["JointForce", 2, "1000", "-2000", "0"]),
        (JointMovement("G", 1, vertical=8e-3), ["JointMovement", 1, "0", "0.008", "0"]),
    ],
)
def test_actions_are_hashed_in_the_form_that_posted_files_hold(line, action, row):
    # Files keep fingerprints: the same content must give the same hash in every later version, or
    # the form counts up.
    text = of(replace(line, actions=(action,)))["actions G"]

    digest = hashlib.sha256(json.dumps([json.dumps(row)]).encode()).hexdigest()[:10]
    assert text == f"1 #{digest}"


def test_another_modulus_is_told_of_the_material_and_not_of_the_section(line):
    softer = replace(CONCRETE, elastic_modulus=0.5 * CONCRETE.elastic_modulus)
    pieces = [(Piece(m.length, (0.5 * 1.03e8,)),) for m in line.members]
    members = tuple(
        replace(m, material=softer, pieces=p) for m, p in zip(line.members, pieces, strict=True)
    )

    told = differences(of(line), of(replace(line, members=members)), {})

    assert told == [
        f"material of B-{i} changed from C30/37 (E 33 GPa, 2500 kg/m³) to C30/37 (E 16.5 GPa, "
        f"2500 kg/m³)"
        for i in (0, 1)
    ]


def test_a_release_is_told_of_the_connection(line):
    released = replace(line.members[1], end_spring=0.0)
    after = of(replace(line, members=(line.members[0], released)))

    assert differences(of(line), after, {"B-1": "B2-BC"}) == [
        "connection of B2-BC changed from rigid to end free"
    ]
    moved = replace(line.members[0], end_spring=0.0)
    other = of(replace(line, members=(moved, line.members[1])))
    assert fingerprint(other) != fingerprint(after)


def test_a_member_more_is_told_once(line):
    lost = {key: text for key, text in of(line).items() if not key.endswith(" B-1")}

    assert differences(lost, of(line), {}) == ["B-1 is part of it now"]
    assert differences(of(line), lost, {"B-1": "X"}) == ["X is part of it no more"]


def test_a_case_with_another_name_is_told_as_such(line):
    after = replace(line, actions=tuple(
        replace(a, case="Offices") if a.case == "Q" else a for a in line.actions
    ))  # fmt: skip
    assert differences(of(line), of(after), {}) == ["case Q is called Offices now"]


def test_a_support_is_told_by_its_place(line):
    joints = (replace(line.joints[0], support=Support(4e8)), *line.joints[1:])
    after = replace(line, joints=joints)

    (told,) = differences(of(line), of(after), {}, places(after, {"W-1": "Wall 1"}))
    assert told.startswith("support at 0.000 m (Wall 1) changed from vertical rigid")
    assert told.endswith("to vertical 4e+08 N/m, horizontal free, rotation free")


def test_what_an_older_form_recorded_is_told_as_such(line):
    older = {key: text for key, text in of(line).items() if key != "form"}

    (told,) = differences(older, of(line), {})
    assert "earlier version" in told


@pytest.mark.parametrize("sixteenths", range(1, 400, 14))
def test_rounding_does_not_hang_on_the_last_bit(line, sixteenths):
    """Half a sixteenth of an inch is half a micrometre: the usual way of rounding is chance."""
    exact = 1.5875e-3 * sixteenths
    prints = set()
    for x in (exact, 0.0254 / 16 * sixteenths, exact * (1 - 3e-16), exact * (1 + 3e-16)):
        action = PointForce("G", 0, 0.5 * x, 1e3 * x, 1e-13 * x)
        prints.add(fingerprint(of(_stretched(line, x, action))))

    assert len(prints) == 1


def _stretched(line, x, action):
    lengths = (x, line.joints[2].x - x)
    members = tuple(
        replace(m, pieces=(Piece(length, (1.03e8,)),))
        for m, length in zip(line.members, lengths, strict=True)
    )
    joints = (line.joints[0], replace(line.joints[1], x=x), line.joints[2])
    return replace(line, members=members, joints=joints, actions=(action,))
