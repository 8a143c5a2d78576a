"""What stands in the posted sets, read back by ifcopenshell in every schema."""

import math
from dataclasses import replace

import ifcopenshell
import ifcopenshell.util.element as element_tools
import pytest
from posting_makers import (
    BEAM,
    COLUMN_A,
    COLUMN_B,
    EI,
    SCHEMAS,
    SECOND_BEAM,
    outcome_of,
    small_model,
    span_result,
)

from analysis_core.ifc.posting import writer


def posted(tmp_path, outcome, schema="IFC4", **options):
    source, target = tmp_path / "model.ifc", tmp_path / "posted.ifc"
    source.write_bytes(small_model(schema, **options))
    report = writer.post(source, target, outcome)
    return ifcopenshell.open(str(target)), report


def properties(model, global_id, name):
    for relation in model.by_guid(global_id).IsDefinedBy:
        if relation.RelatingPropertyDefinition.Name == name:
            return {p.Name: p for p in relation.RelatingPropertyDefinition.HasProperties}
    raise AssertionError(f"{global_id} has no {name}")


@pytest.mark.parametrize("schema", SCHEMAS)
def test_effects_are_typed_measures_in_the_units_of_the_model(tmp_path, schema):
    model, report = posted(tmp_path, outcome_of(span_result(BEAM)), schema)
    found = properties(model, BEAM, "Spanledger_Effects")

    # M = 1.5 qL²/8 in kN·m, V = 1.5 qL/2 in kN, w = 5qL⁴/384EI in mm; q = 12 kN/m, L = 6 m.
    assert found["LineMark"].NominalValue.is_a("IfcLabel")
    assert found["LineMark"].NominalValue.wrappedValue == "B-1"
    for name, kind, value in (
        ("SaggingMoment", "IfcTorqueMeasure", 1.5 * 12.0 * 36.0 / 8.0),
        ("Shear", "IfcForceMeasure", 1.5 * 12.0 * 6.0 / 2.0),
        ("Deflection", "IfcLengthMeasure", 5e3 * 12_000.0 * 6.0**4 / (384.0 * EI)),
        ("SaggingMomentPosition", "IfcLengthMeasure", 3000.0),
        ("DeflectionPosition", "IfcLengthMeasure", 3000.0),
    ):
        value_found = found[name].NominalValue
        assert value_found.is_a(kind)
        assert value_found.wrappedValue == pytest.approx(value, rel=1e-14)
        assert found[name].Unit is None
    assert found["SaggingMomentSource"].NominalValue.wrappedValue == "U1"
    assert found["DeflectionSource"].NominalValue.wrappedValue == "S1"
    assert found["StartMoment"].is_a("IfcPropertyBoundedValue")
    assert found["StartMoment"].UpperBoundValue.is_a("IfcTorqueMeasure")
    assert set(found) == {
        "LineMark", "SaggingMoment", "SaggingMomentPosition", "SaggingMomentSource",
        "HoggingMoment", "HoggingMomentPosition", "HoggingMomentSource", "Shear",
        "ShearPosition", "ShearSource", "Deflection", "DeflectionPosition", "DeflectionSource",
        "StartMoment", "EndMoment",
    }  # fmt: skip
    assert report.path == "append"


@pytest.mark.parametrize("schema", SCHEMAS)
def test_quantities_without_a_unit_in_the_model_carry_their_si_unit(tmp_path, schema):
    model, _ = posted(tmp_path, outcome_of(span_result(BEAM)), schema, torque=False)
    found = properties(model, BEAM, "Spanledger_Effects")
    moment, shear = found["SaggingMoment"], found["Shear"]

    assert moment.NominalValue.wrappedValue == pytest.approx(1.5 * 12e3 * 36 / 8, rel=1e-14)
    assert moment.Unit.is_a("IfcDerivedUnit")
    assert moment.Unit.UnitType == "TORQUEUNIT"
    assert sorted((e.Unit.Name, e.Unit.Prefix, e.Exponent) for e in moment.Unit.Elements) == [
        ("METRE", None, 1),
        ("NEWTON", None, 1),
    ]
    assert found["StartMoment"].Unit == moment.Unit
    assert shear.Unit is None
    table = properties(model, BEAM, "Spanledger_Diagrams")["MomentMax"]
    assert table.DefiningUnit is None
    assert table.DefinedUnit == moment.Unit


def test_a_moment_without_a_unit_is_in_si_whatever_force_and_length_are_in(tmp_path):
    source = tmp_path / "model.ifc"
    metres = small_model(torque=False).replace(b".MILLI.,.METRE.", b"$,.METRE.")
    source.write_bytes(metres)
    writer.post(source, source, outcome_of(span_result(BEAM)))
    model = ifcopenshell.open(str(source))
    found = properties(model, BEAM, "Spanledger_Effects")

    assert found["SaggingMoment"].NominalValue.wrappedValue == pytest.approx(81e3)  # N·m
    assert found["Shear"].NominalValue.wrappedValue == pytest.approx(54.0)  # kN
    assert found["SaggingMomentPosition"].NominalValue.wrappedValue == 3.0


def test_a_model_without_any_units_gets_all_of_them_stated(tmp_path):
    model, _ = posted(tmp_path, outcome_of(span_result(BEAM)), units=False)
    found = properties(model, BEAM, "Spanledger_Effects")

    assert found["Shear"].Unit.Name == "NEWTON"
    assert found["SaggingMomentPosition"].Unit.Name == "METRE"
    assert found["SaggingMomentPosition"].NominalValue.wrappedValue == 3.0


@pytest.mark.parametrize("schema", SCHEMAS)
def test_diagrams_are_tables_over_positions_from_the_start_of_the_element(tmp_path, schema):
    model, _ = posted(tmp_path, outcome_of(span_result(BEAM, stations=5)), schema)
    found = properties(model, BEAM, "Spanledger_Diagrams")

    assert set(found) == {
        "MomentMax", "MomentMin", "ShearMax", "ShearMin", "DeflectionMax", "DeflectionMin"
    }  # fmt: skip
    table = found["MomentMax"]
    assert table.is_a("IfcPropertyTableValue")
    assert {v.is_a() for v in table.DefiningValues} == {"IfcLengthMeasure"}
    assert {v.is_a() for v in table.DefinedValues} == {"IfcTorqueMeasure"}
    assert [v.wrappedValue for v in table.DefiningValues] == [0, 1500, 3000, 4500, 6000]
    # 1.5 q x (L - x) / 2, written to ten digits of the largest
    assert [v.wrappedValue for v in table.DefinedValues] == pytest.approx(
        [0.0, 60.75, 81.0, 60.75, 0.0], abs=1e-8
    )
    assert {v.is_a() for v in found["ShearMin"].DefinedValues} == {"IfcForceMeasure"}
    assert {v.is_a() for v in found["DeflectionMax"].DefinedValues} == {"IfcLengthMeasure"}


def test_without_stations_there_are_effects_and_no_diagrams(tmp_path):
    model, report = posted(tmp_path, outcome_of(span_result(BEAM, stations=0)))

    assert set(element_tools.get_psets(model.by_guid(BEAM))) == {
        "Spanledger_Effects", "Spanledger_Record"
    }  # fmt: skip
    assert report.findings == ()


@pytest.mark.parametrize("schema", SCHEMAS)
def test_the_record_says_how_when_and_with_what_care(tmp_path, schema):
    model, _ = posted(tmp_path, outcome_of(span_result(BEAM, fingerprint="abc123")), schema)
    found = {
        name: p.NominalValue for name, p in properties(model, BEAM, "Spanledger_Record").items()
    }

    assert {name: value.is_a() for name, value in found.items()} == {
        "Method": "IfcLabel",
        "JointResidual": "IfcTorqueMeasure",
        "IndependentCheck": "IfcReal",
        "Rules": "IfcLabel",
        "Fingerprint": "IfcIdentifier",
        "ComputedAt": "IfcLabel" if schema == "IFC2X3" else "IfcDateTime",
        "Version": "IfcLabel",
        "Caution": "IfcText",
    }
    assert found["Method"].wrappedValue == "Moment distribution, exact"
    assert found["Fingerprint"].wrappedValue == "abc123"
    assert found["IndependentCheck"].wrappedValue == 2.5e-14
    assert found["JointResidual"].wrappedValue == pytest.approx(1e-12, rel=1e-14)  # kN·m
    assert found["Caution"].wrappedValue == (
        "Computed from the model as idealised; to be verified by a licensed engineer before use."
    )


@pytest.mark.parametrize("schema", SCHEMAS)
def test_supports_get_the_reactions_of_every_line_that_bears_on_them(tmp_path, schema):
    first = span_result(BEAM, supports=(COLUMN_A, COLUMN_B))
    second = span_result(
        BEAM, mark="B-2", load=20_000.0, supports=(COLUMN_B, None), cases={"G": 1.0}
    )
    model, _ = posted(tmp_path, outcome_of(first, second), schema)
    left = properties(model, COLUMN_A, "Spanledger_Reactions")
    right = properties(model, COLUMN_B, "Spanledger_Reactions")

    # qL/2 = 36 kN and 60 kN; the strength combination has 1.5.
    assert left["Vertical"].UpperBoundValue.wrappedValue == pytest.approx(54.0)
    assert left["Vertical"].LowerBoundValue.wrappedValue == 0.0
    assert left["Vertical"].UpperBoundValue.is_a("IfcForceMeasure")
    assert set(left) == {"Vertical", "B-1 / G", "B-1 / Q"}
    assert left["B-1 / G"].NominalValue.wrappedValue == pytest.approx(0.7 * 36.0)
    assert left["B-1 / G"].NominalValue.is_a("IfcForceMeasure")
    assert set(right) == {"Vertical", "B-1 / G", "B-1 / Q", "B-2 / G"}
    assert right["Vertical"].UpperBoundValue.wrappedValue == pytest.approx(54.0 + 90.0)


def test_an_element_of_two_members_is_governed_by_both(tmp_path):
    result = span_result([BEAM, BEAM], spans=[4.0, 6.0])
    line = result.line
    second = line.members[1]
    moved = type(second)(**{
        **{f: getattr(second, f) for f in second.__dataclass_fields__}, "element_offset": 4.0
    })  # fmt: skip
    line = type(line)(line.mark, line.joints, (line.members[0], moved), elements=line.elements)
    result = type(result)(**{
        **{f: getattr(result, f) for f in result.__dataclass_fields__}, "line": line
    })  # fmt: skip
    model, _ = posted(tmp_path, outcome_of(result))
    found = properties(model, BEAM, "Spanledger_Effects")
    table = properties(model, BEAM, "Spanledger_Diagrams")["ShearMax"]

    assert found["SaggingMomentPosition"].NominalValue.wrappedValue == pytest.approx(7000.0)
    assert found["SaggingMoment"].NominalValue.wrappedValue == pytest.approx(81.0)
    positions = [v.wrappedValue for v in table.DefiningValues]
    assert positions == sorted(set(positions))  # IFC4: LIST OF UNIQUE
    assert positions[0] == 0.0
    assert positions[-1] == 10_000.0
    # The jump at the inner support stands between two positions a thousandth of a mm apart.
    assert positions[4:6] == [4000.0, 4000.001]
    assert [v.wrappedValue for v in table.DefinedValues][4:6] == [0.0, pytest.approx(54.0)]


def test_positions_of_a_reversed_member_count_from_the_start_of_its_element(tmp_path):
    result = span_result(BEAM, reversed_=True, stations=5)
    envelope = result.envelopes["strength"].members[0]
    assert (envelope.shear_max.x, envelope.shear_min.x) == (0.0, 6.0)
    model, _ = posted(tmp_path, outcome_of(result))
    table = properties(model, BEAM, "Spanledger_Diagrams")["ShearMax"]

    # The line's start, with the positive shear, is the element's end.
    assert [v.wrappedValue for v in table.DefiningValues] == [0, 1500, 3000, 4500, 6000]
    assert [v.wrappedValue for v in table.DefinedValues] == [0, 0, 0, 27.0, 54.0]
    found = properties(model, BEAM, "Spanledger_Effects")
    assert found["Shear"].NominalValue.wrappedValue == pytest.approx(54.0)
    assert found["ShearPosition"].NominalValue.wrappedValue == 6000.0
    assert found["SaggingMomentPosition"].NominalValue.wrappedValue == 3000.0


HOSTILE = "B'1\\ 'é漢😀\r\n ENDSEC; /* */ #30=IFCWALL(); */"


@pytest.mark.parametrize("schema", SCHEMAS)
def test_hostile_names_come_back_as_they_were(tmp_path, schema):
    result = span_result(
        BEAM, mark=HOSTILE, supports=(COLUMN_A,), cases={f"Q {HOSTILE}": 1.0},
        fingerprint="'); #1=IFCWALL($,$);",
    )  # fmt: skip
    model, _ = posted(tmp_path, outcome_of(result, rules=HOSTILE), schema)

    mark = properties(model, BEAM, "Spanledger_Effects")["LineMark"]
    assert mark.NominalValue.wrappedValue == HOSTILE
    assert f"{HOSTILE} / Q {HOSTILE}" in properties(model, COLUMN_A, "Spanledger_Reactions")
    assert not model.by_type("IfcWall")


def test_long_names_are_cut_and_stay_different(tmp_path):
    cases = {f"{'Q' * 300}{i}": 0.5 for i in range(2)}
    model, _ = posted(tmp_path, outcome_of(span_result(BEAM, supports=(COLUMN_A,), cases=cases)))
    names = set(properties(model, COLUMN_A, "Spanledger_Reactions"))

    assert len(names) == 3
    assert max(map(len, names)) == 255


def test_an_element_that_is_not_there_becomes_a_finding(tmp_path):
    missing = "0000000000000000000000"
    model, report = posted(tmp_path, outcome_of(span_result(missing), span_result(BEAM)))

    assert [(f.slug, f.elements) for f in report.findings] == [("element-not-in-file", (missing,))]
    assert properties(model, BEAM, "Spanledger_Effects")


def test_of_elements_that_share_a_global_id_the_first_gets_the_results(tmp_path):
    path = tmp_path / "model.ifc"
    path.write_bytes(small_model().replace(SECOND_BEAM.encode(), BEAM.encode()))
    report = writer.post(path, path, outcome_of(span_result(BEAM)))
    model = ifcopenshell.open(str(path))

    assert [(f.slug, f.elements) for f in report.findings] == [("shared-global-id", (BEAM,))]
    assert len(element_tools.get_psets(model.by_id(30))) == 3
    assert not element_tools.get_psets(model.by_id(31))


def test_an_element_of_two_lines_has_the_larger_values_and_says_so(tmp_path):
    first = span_result(BEAM, load=9_000.0, mark="F-1", fingerprint="one")
    second = span_result(BEAM, load=20_000.0, mark="F-2", fingerprint="two")
    model, report = posted(tmp_path, outcome_of(first, second))
    effects = properties(model, BEAM, "Spanledger_Effects")
    record = properties(model, BEAM, "Spanledger_Record")
    table = properties(model, BEAM, "Spanledger_Diagrams")["MomentMax"]

    assert [f.slug for f in report.findings] == ["element-of-several-lines"]
    assert effects["LineMark"].NominalValue.wrappedValue == "F-1, F-2"
    assert effects["SaggingMoment"].NominalValue.wrappedValue == pytest.approx(135.0)
    assert max(v.wrappedValue for v in table.DefinedValues) == pytest.approx(135.0)
    assert record["Fingerprint"].NominalValue.wrappedValue == "one+two"


def test_a_model_that_is_not_the_one_analysed_is_reported(tmp_path):
    outcome = replace(outcome_of(span_result(BEAM)), fingerprint="0" * 64)
    _, report = posted(tmp_path, outcome)

    assert [f.slug for f in report.findings] == ["model-changed"]


def test_a_result_that_is_no_number_is_not_written(tmp_path):
    model, report = posted(
        tmp_path, outcome_of(span_result(BEAM, load=math.nan), span_result(COLUMN_A, mark="X"))
    )

    assert [f.slug for f in report.findings] == ["result-not-finite"]
    assert not element_tools.get_psets(model.by_guid(BEAM))
    assert properties(model, COLUMN_A, "Spanledger_Effects")


@pytest.mark.parametrize("schema", SCHEMAS)
def test_a_property_panel_finds_the_sets(tmp_path, schema):
    model, _ = posted(tmp_path, outcome_of(span_result(BEAM)), schema)

    panel = element_tools.get_psets(model.by_guid(BEAM))
    assert panel["Spanledger_Effects"]["SaggingMoment"] == pytest.approx(81.0)
