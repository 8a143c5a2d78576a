"""The general-purpose IFC validator, with the rules of the schemas, finds nothing new."""

import ifcopenshell
import ifcopenshell.validate
import pytest
from lopsided_line import line_of, outcome_for
from posting_makers import (
    ANALYSIS,
    BEAM,
    COLUMN_A,
    SCHEMAS,
    analysis_model,
    outcome_of,
    small_model,
    span_result,
    with_case_ids,
)

from analysis_core.ifc.posting import writer

OUTCOME = outcome_of(span_result(BEAM, supports=(COLUMN_A,)))

# The validator leaves its own rule files to the garbage collector.
pytestmark = pytest.mark.filterwarnings(
    "ignore::ResourceWarning", "ignore::pytest.PytestUnraisableExceptionWarning"
)


def complaints(path):
    logger = ifcopenshell.validate.json_logger()
    ifcopenshell.validate.validate(str(path), logger, express_rules=True)
    return sorted(str(s["message"]) for s in logger.statements)


@pytest.mark.parametrize("schema", SCHEMAS)
def test_property_sets_and_the_units_we_add_are_valid(tmp_path, schema):
    path = tmp_path / "model.ifc"
    path.write_bytes(small_model(schema, torque=False))
    writer.post(path, path, OUTCOME)

    assert complaints(path) == []


@pytest.mark.parametrize("schema", SCHEMAS)
def test_result_groups_are_valid(tmp_path, schema):
    path = tmp_path / "model.ifc"
    path.write_bytes(analysis_model(schema))
    supports = (ANALYSIS["start"], ANALYSIS["end"])
    results = outcome_of(span_result(ANALYSIS["member"], supports=supports))
    writer.post(path, path, with_case_ids(results, {"G": ANALYSIS["case"]}))

    assert complaints(path) == []


@pytest.mark.parametrize("schema", SCHEMAS)
def test_the_analysis_model_is_valid(tmp_path, schema):
    path = tmp_path / "model.ifc"
    path.write_bytes(small_model(schema))
    writer.post(path, path, outcome_for(line_of((0.6, 0.8, 0.0))), analysis_model=True)

    assert complaints(path) == []


def test_the_validator_would_have_found_a_fault(tmp_path):
    path = tmp_path / "model.ifc"
    path.write_bytes(small_model())
    writer.post(path, path, OUTCOME)
    path.write_bytes(path.read_bytes().replace(b"IFCTORQUEMEASURE(81.0)", b"IFCWALL(81.0)"))

    assert complaints(path) != []


def test_an_owner_history_is_made_where_ifc2x3_has_none(tmp_path):
    source, posted = tmp_path / "model.ifc", tmp_path / "posted.ifc"
    source.write_bytes(small_model("IFC2X3", owner=False))
    before = complaints(source)
    writer.post(source, posted, OUTCOME)
    file = ifcopenshell.open(str(posted))

    assert {s.OwnerHistory.is_a() for s in file.by_type("IfcPropertySet")} == {"IfcOwnerHistory"}
    assert complaints(posted) == before
    writer.remove(posted, posted)
    assert posted.read_bytes() == source.read_bytes()
