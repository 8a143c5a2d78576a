"""The reference items written as IFC analysis models and read back, in every schema.

Files are in millimetres and kilonewtons, feet and kips, or metres and newtons.  What the test
files have no words for (parabolic haunches, polynomial loads; tapers in IFC2X3) is left to the
tests on the line model.
"""

from __future__ import annotations

import math
from functools import cache
from pathlib import Path

import pytest
from ifc_makers import write_analysis_model
from reference_files import KILO, NotWrittenError, model_of, settings_of, structure_of
from reference_items import CASE, Item, load
from reference_quantities import KINDS, measure, quantity_of
from test_reference_values import FILES, RELATIVE, _scales

from analysis_core import distribution
from analysis_core.errors import MechanismError, ModelError
from analysis_core.idealise import idealise
from analysis_core.ifc.analytical.reader import read_analytical
from analysis_core.ifc.source import open_model
from analysis_core.model import Line, LineModel

ITEMS = {item["name"]: item for stem in FILES for item in load(stem)}
WRITINGS = {"IFC2X3": "mm_kN", "IFC4": "ft_kip", "IFC4X3": "m_N"}


@cache
def writable(schema: str) -> tuple[str, ...]:
    """Return the names of the items that the test files have words for."""
    names = []
    for name, item in ITEMS.items():
        try:
            model_of(item, schema=schema)
        except NotWrittenError:
            continue
        names.append(name)
    return tuple(names)


@pytest.mark.parametrize(
    ("schema", "name"), [(schema, name) for schema in WRITINGS for name in writable(schema)]
)
def test_an_item_read_from_a_file_has_its_expected_values(tmp_path: Path, schema: str, name: str):
    item = ITEMS[name]

    found = _read(tmp_path, item, schema)

    assert [f.message for f in found.findings if f.severity == "error"] == []
    (line,) = found.lines
    _assert_values(item, line)


def test_most_items_go_through_files():
    assert [len(writable(schema)) for schema in WRITINGS] == [171, 173, 173]


@pytest.mark.parametrize("schema", WRITINGS)
@pytest.mark.parametrize("item", load("mechanisms"), ids=lambda item: item["name"])
def test_a_mechanism_read_from_a_file_is_refused_with_the_joints_that_move(
    tmp_path: Path, item: Item, schema: str
):
    found = _read(tmp_path, item, schema)
    (line,) = found.lines
    if item["name"] in ("BAD-01", "BAD-02"):
        # What stands on less than two bearings is known before any equation.
        assert [f.slug for f in found.findings if f.severity == "error"] == ["no-support"]
        with pytest.raises(ModelError, match="not analysed"):
            distribution.solve(line, [CASE])
        return

    with pytest.raises(MechanismError) as caught:
        distribution.solve(line, [CASE])

    moving: list[object] = list(caught.value.joints)
    if line.kind == "frame":
        places = [(line.joints[j].x, line.joints[j].z) for j in caught.value.joints]
        moving = [
            name
            for name, place in item["joints"].items()
            if any(math.dist(place, other) < 1e-9 for other in places)
        ]
    assert moving == item["moving"]


def _read(folder: Path, item: Item, schema: str) -> LineModel:
    """Write an item and read it."""
    model = model_of(item, schema=schema)
    path = write_analysis_model(folder / "item.ifc", model, schema=schema, units=WRITINGS[schema])
    settings = settings_of(item)
    return idealise(read_analytical(open_model(path), settings), settings)


def _assert_values(item: Item, line: Line) -> None:
    structure = structure_of(item, line)
    solution = distribution.solve(line, [CASE])
    scales = _scales(item)
    for check in item["expect"]:
        kind = KINDS[quantity_of(check)[0]]
        factor = KILO if kind in ("moment", "force") else 1.0
        value = measure(structure, solution, check) / factor
        assert value == pytest.approx(check["is"], abs=RELATIVE * scales[kind]), check
