"""Effects of many elements at once, from columns, against each found by itself from objects."""

from dataclasses import replace

import numpy as np
import pytest
from random_lines import plain_line

from analysis_core.findings import Finding
from analysis_core.ifc.posting.governing import element_effects, element_parts
from analysis_core.ifc.posting.lone_members import lone_members
from analysis_core.model import Case, LineModel
from analysis_core.pipeline.reading import Survey
from analysis_core.pipeline.solving import solve
from analysis_core.results import Outcome
from analysis_core.settings import RuleSettings, Settings


def line(seed):
    """A random line in two cases, each member an element that it lies on in one of four ways."""
    found = plain_line(seed, case="Q")
    dead = tuple(replace(action, case="G") for action in found.actions[::2])
    members = tuple(
        replace(
            member,
            element=f"{seed}-{member.id}",
            reversed_=member.id % 2 == 1,
            element_offset=(0.0, 11.0)[member.id // 2 % 2],
        )
        for member in found.members
    )
    return replace(found, members=members, actions=(*found.actions, *dead))


@pytest.fixture(scope="module")
def outcome() -> Outcome:
    cases = (Case("G", "permanent"), Case("Q", "imposed"))
    model = LineModel(tuple(line(seed) for seed in range(60)), cases)
    none: tuple[Finding, ...] = ()
    settings = Settings(rules=RuleSettings(arrangements="every"))
    return solve(Survey("m.ifc", "IFC4", "", model, none), settings)


def test_elements_together_have_what_each_has_alone(outcome):
    parts = element_parts(outcome)

    together = lone_members(list(parts.items()))

    assert together.keys() == parts.keys()
    assert len(parts) > 100
    for element, own in parts.items():
        one, other = element_effects(element, own), together[element]
        assert one[:-1] == other[:-1]
        for a, b in zip(one.curves, other.curves, strict=True):
            assert a.name == b.name
            np.testing.assert_array_equal(a.positions, b.positions)
            np.testing.assert_array_equal(a.values, b.values)


def test_an_element_of_several_members_or_without_columns_is_left_to_the_other_way(outcome):
    parts = element_parts(outcome)
    first, second = list(parts.values())[:2]
    in_objects = [
        part._replace(
            result=replace(
                part.result,
                envelopes={
                    state: replace(found, members=tuple(found.members))
                    for state, found in part.result.envelopes.items()
                },
            )
        )
        for part in first
    ]

    assert lone_members([("both", [*first, *second]), ("objects", in_objects)]) == {}
