"""The order of solving: what bears on others first, circles together."""

import random

import numpy as np
import pytest
from scipy.sparse import coo_array
from scipy.sparse.csgraph import connected_components

from analysis_core.load_levels import levels
from analysis_core.model import Transfer


def bears(*pairs):
    return [Transfer(a, 0, b, 0, 1.0) for a, b in pairs]


def test_joists_come_before_the_beam_that_carries_them_and_that_before_its_girder():
    found = levels(["G", "J1", "B", "J2"], bears(("J1", "B"), ("J2", "B"), ("B", "G")))

    assert found == [[("J1",), ("J2",)], [("B",)], [("G",)]]


def test_beams_that_bear_on_each_other_in_a_circle_are_one_group():
    circle = bears(("A", "B"), ("B", "C"), ("C", "A"), ("J", "A"), ("C", "G"))

    assert levels(["G", "C", "B", "A", "J"], circle) == [[("J",)], [("C", "B", "A")], [("G",)]]


def test_nothing_to_solve_has_no_levels():
    assert levels([], []) == []


@pytest.mark.parametrize("seed", range(20))
def test_groups_are_the_strongly_connected_components_that_scipy_finds(seed):
    choose = random.Random(seed)
    count = choose.randint(2, 25)
    marks = [f"L{i}" for i in range(count)]
    pairs = [(choose.randrange(count), choose.randrange(count)) for _ in range(2 * count // 3 + 1)]
    rows, columns = np.transpose(pairs)
    graph = coo_array((np.ones(len(pairs)), (rows, columns)), shape=(count, count))
    _, label = connected_components(graph, directed=True, connection="strong")

    found = levels(marks, bears(*((f"L{a}", f"L{b}") for a, b in pairs)))

    expected = {frozenset(m for m, n in zip(marks, label, strict=True) if n == k) for k in label}
    assert {frozenset(group) for level in found for group in level} == expected
    depth = {mark: i for i, level in enumerate(found) for group in level for mark in group}
    assert all(depth[f"L{a}"] < depth[f"L{b}"] for a, b in pairs if label[a] != label[b])
