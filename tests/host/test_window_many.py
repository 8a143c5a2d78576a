"""Ten thousand lines in the real window; limits are ratios taken in one run."""

import pytest

pytestmark = pytest.mark.host


def test_ten_thousand_lines_are_drawn_turned_and_filtered(in_freecad):
    found = in_freecad("scenes_many:many_lines")

    print(found)
    assert found["shown"] == 5_000
