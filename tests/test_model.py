"""The small helpers of the line model."""

import pytest

from analysis_core.model import Section


@pytest.mark.parametrize(
    ("name", "depth", "title"),
    [
        ("R 200x400", 0.4, "R 200x400"),
        ("", 0.4, "rectangle 200 x 400 mm"),
        ("", 0.0, "rectangle"),
    ],
)
def test_a_section_without_a_name_is_called_by_its_size(name, depth, title):
    assert Section(name, "rectangle", 0.08, 1.07e-3, depth=depth, width=0.2).title == title
