"""What the 3D view draws, as numbers."""

from dataclasses import replace

import demo
import numpy as np
import pytest

from analysis_core.model import Joint, Line, Member, Piece, Support
from freecad.spanledger.present.scene import (
    diagram_height,
    filled,
    scene_of,
    support_lines,
    supports_of,
    symbol_size,
)


@pytest.fixture
def scene():
    return scene_of(demo.outcome().model.lines)


def test_members_lie_where_their_joints_are_in_millimetres(scene):
    assert scene.ends[1].tolist() == [[6000.0, 0.0, 3500.0], [10000.0, 0.0, 3500.0]]
    assert scene.line_index.tolist() == [0, 0, 1]
    assert scene.elements == ("GID-L1-0", "GID-L1-1", "GID-L2-0")


def test_positive_ordinates_of_an_inclined_member_stand_square_to_it():
    # A 3-4-5 member rising along a line that is oblique in plan: its local down leans forward.
    joints = (Joint(0, 0.0, 0.0, (1.0, 2.0, 0.0)), Joint(1, 4.0, 3.0, (3.4, 5.2, 3.0)))
    line = Line("L", joints, (Member(0, 0, 1, (Piece(5.0, (1.0,)),)),), axis=(0.6, 0.8, 0.0))

    scene = scene_of([line])

    assert scene.down[0] == pytest.approx([0.6 * 0.6, 0.6 * 0.8, -0.8])
    assert scene.down[0] @ (scene.ends[0, 1] - scene.ends[0, 0]) == pytest.approx(0.0, abs=1e-9)


def test_the_area_of_a_filled_diagram_is_the_integral_of_its_curve(scene):
    # One member of 6 m with a triangle of height 2 on its first half, nothing after.
    ordinates = np.zeros((3, 5))
    ordinates[0] = [0.0, 1.0, 2.0, 1.0, 0.0]

    drawn = filled(scene, ordinates, factor=1000.0, positive=True)

    a, b, c, d = drawn.corners.transpose(1, 0, 2)
    area = 0.5 * np.linalg.norm(np.cross(c - a, d - b), axis=1).sum()  # plane quadrilaterals
    assert area == pytest.approx(0.5 * 6000.0 * 2000.0)
    assert drawn.corners[..., 0].max() <= 6000.0


def test_a_curve_that_changes_sign_is_split_at_its_zero_and_crosses_no_face(scene):
    ordinates = np.zeros((3, 2))
    ordinates[0] = [-1.0, 2.0]  # zero at a third of 6 m

    above = filled(scene, ordinates, 100.0, positive=False)
    below = filled(scene, ordinates, 100.0, positive=True)

    assert below.corners[..., 0].min() == pytest.approx(2000.0)
    assert above.corners[..., 0].max() == pytest.approx(2000.0)
    assert below.corners[..., 2].min() == pytest.approx(3500.0 - 200.0)  # sagging hangs below
    assert above.corners[..., 2].max() == pytest.approx(3500.0 + 100.0)


def test_nothing_is_filled_where_there_is_no_effect(scene):
    assert len(filled(scene, np.zeros((3, 7)), 100.0, positive=True).corners) == 0


def test_every_support_has_a_symbol_below_its_joint():
    model = demo.outcome().model
    size = symbol_size(scene_of(model.lines))

    points, counts = support_lines(supports_of(model.lines), size)

    assert len(counts) == 3 * 2 + 2 * 2  # wedge and ground; block and cross
    assert counts.sum() == len(points)
    assert size == pytest.approx(0.05 * 5000.0)
    assert points[:, 2].max() <= 3500.0 + size
    assert set(points[:, 1]) == {0.0, 3000.0}  # in the planes of the two lines


def test_the_largest_ordinate_is_drawn_a_third_of_a_span_high(scene):
    factor = diagram_height(scene, np.array([[3.0e4, -6.0e4]]))

    assert factor * 6.0e4 == pytest.approx(5000.0 / 3.0)
    assert diagram_height(scene, np.zeros((3, 2))) == 0.0


def test_a_joint_that_nothing_holds_has_no_symbol():
    joints = (
        Joint(0, 0.0, 0.0, support=Support(vertical=1e6, rotation=5e5)),
        Joint(1, 2.0, 0.0, (2.0, 0.0, 0.0)),
    )
    line = Line("L", joints, (Member(0, 0, 1, (Piece(2.0, (1.0,)),)),))

    _, counts = support_lines(supports_of([line]), 100.0)

    assert len(counts) == 3  # coil, ground and spiral of the sprung joint alone


def test_a_model_far_out_is_drawn_near_the_origin_and_says_by_how_much():
    lines = demo.outcome().model.lines
    far = [
        replace(
            line,
            joints=tuple(
                replace(j, point=(j.point[0] + 1.186e6, j.point[1], j.point[2]))
                for j in line.joints
            ),
        )
        for line in lines
    ]

    scene, near = scene_of(far), scene_of(lines)

    assert scene.ends + np.array(scene.origin) == pytest.approx(
        near.ends + np.array([1.186e9, 0.0, 0.0])
    )
    assert np.abs(scene.ends).max() < 1e5
    assert supports_of(far, scene.origin).at[0, 0] == pytest.approx(scene.ends[0, 0, 0])
    assert near.origin == (0.0, 0.0, 0.0)
