"""Posting again: nothing doubles, what changed is updated, what others wrote stays."""

import re
from dataclasses import replace
from datetime import UTC, datetime

import ifcopenshell
import ifcopenshell.util.element as element_tools
import pytest
from posting_makers import (
    BEAM,
    COLUMN_A,
    COLUMN_B,
    SCHEMAS,
    SECOND_BEAM,
    outcome_of,
    small_model,
    span_result,
)

from analysis_core.ifc.posting import writer

NOON = datetime(2031, 5, 4, 12, 0, 0, tzinfo=UTC)
LATER = datetime(2031, 5, 4, 13, 30, 0, tzinfo=UTC)


def two_lines(load=12_000.0, second=9_000.0):
    return outcome_of(
        span_result(BEAM, load=load, supports=(COLUMN_A, COLUMN_B)),
        span_result(SECOND_BEAM, load=second, mark="B-2", supports=(COLUMN_B, None)),
    )


@pytest.fixture(params=SCHEMAS)
def model(request, tmp_path):
    path = tmp_path / "model.ifc"
    path.write_bytes(small_model(request.param))
    return path


def sets_of(path, global_id):
    file = ifcopenshell.open(str(path))  # its elements die with it
    return element_tools.get_psets(file.by_guid(global_id))


def timeless(found):
    """Sets by name without instance numbers and time."""
    return {
        name: {k: v for k, v in values.items() if k not in ("id", "ComputedAt")}
        for name, values in found.items()
    }


def resaved(path):
    """Written by another program: other numbers, other layout, no comments."""
    file = ifcopenshell.open(str(path))
    copy = ifcopenshell.file(schema=file.schema_identifier)
    for entity in reversed(list(file)):
        copy.add(entity)
    result = path.with_name("resaved.ifc")
    copy.write(str(result))
    assert b"/* Spanledger" not in result.read_bytes()
    return result


def test_twice_changes_nothing_but_the_time(model):
    outcome = two_lines()
    first = writer.post(model, model, outcome, computed_at=NOON)
    once = model.read_bytes()
    second = writer.post(model, model, outcome, computed_at=LATER)
    twice = model.read_bytes()

    assert first.written == 8  # effects, diagrams and record of two beams; two columns
    assert (second.written, second.updated, second.unchanged) == (0, 0, first.written)
    differing = [
        (a, b) for a, b in zip(once.splitlines(), twice.splitlines(), strict=True) if a != b
    ]
    assert len(differing) == 2  # the time, and our own digest of the block
    assert b"2031-05-04T12:00:00Z" in differing[0][0]
    assert b"2031-05-04T13:30:00Z" in differing[0][1]
    assert b"Spanledger results end" in differing[1][0]


def test_the_same_time_gives_the_same_bytes(model):
    outcome = two_lines()
    writer.post(model, model, outcome, computed_at=NOON)
    once = model.read_bytes()
    writer.post(model, model, outcome, computed_at=NOON)

    assert model.read_bytes() == once


def test_changed_results_are_updated_and_counted(model):
    original = model.read_bytes()
    writer.post(model, model, two_lines())
    report = writer.post(model, model, two_lines(second=10_000.0))

    # Of B-2: effects and diagrams; of the column that carries it: reactions.
    assert (report.written, report.updated, report.unchanged) == (0, 3, 5)
    found = sets_of(model, SECOND_BEAM)
    assert found["Spanledger_Effects"]["SaggingMoment"] == pytest.approx(1.5 * 10 * 36 / 8)
    assert len([s for s in found if s.startswith("Spanledger_")]) == 3
    writer.remove(model, model)
    assert model.read_bytes() == original


def test_results_of_elements_no_longer_analysed_go(model):
    writer.post(model, model, two_lines())
    writer.post(model, model, outcome_of(span_result(BEAM)))

    assert not sets_of(model, SECOND_BEAM)
    assert not sets_of(model, COLUMN_A)
    assert sets_of(model, BEAM)


def test_posting_one_line_keeps_the_results_of_the_others(model):
    original = model.read_bytes()
    writer.post(model, model, two_lines(), computed_at=NOON)
    before = timeless(sets_of(model, BEAM))
    changed = two_lines(load=50_000.0, second=10_000.0)
    report = writer.post(model, model, changed, only=["B-2"], computed_at=LATER)

    assert timeless(sets_of(model, BEAM)) == before
    assert sets_of(model, BEAM)["Spanledger_Record"]["ComputedAt"] == "2031-05-04T12:00:00Z"
    second = sets_of(model, SECOND_BEAM)
    assert second["Spanledger_Effects"]["SaggingMoment"] == pytest.approx(1.5 * 10 * 36 / 8)
    assert second["Spanledger_Record"]["ComputedAt"] == "2031-05-04T13:30:00Z"
    # The column under both carries both as they are now.
    both = sets_of(model, COLUMN_B)["Spanledger_Reactions"]
    assert both["B-1 / G"] == pytest.approx(0.7 * 150.0)
    assert both["B-2 / G"] == pytest.approx(0.7 * 30.0)
    assert (report.written, report.updated, report.unchanged, report.path) == (0, 3, 1, "append")
    once = model.read_bytes()
    writer.post(model, model, changed, only=["B-2"], computed_at=LATER)
    assert timeless_text(model.read_bytes()) == timeless_text(once)
    writer.remove(model, model)
    assert model.read_bytes() == original


def timeless_text(data):
    return re.sub(rb"[0-9a-f]{64}|#\d+", b"", data)


def test_posting_one_line_into_a_fresh_model_adds_it_alone(model):
    report = writer.post(model, model, two_lines(), only=["B-2"])

    assert not sets_of(model, BEAM)
    assert not sets_of(model, COLUMN_A)
    assert sets_of(model, COLUMN_B)
    assert (report.written, report.path) == (4, "append")


def test_a_file_written_anew_by_another_program_is_updated_without_loss(model):
    writer.post(model, model, two_lines(), computed_at=NOON)
    again = resaved(model)
    columns = sorted(text for text in again.read_text().splitlines() if "IFCCOLUMN" in text)
    report = writer.post(again, again, two_lines(second=10_000.0), computed_at=LATER)

    assert report.path == "general"
    assert (report.written, report.updated, report.unchanged) == (0, 3, 5)
    for global_id in (BEAM, SECOND_BEAM):
        assert len(sets_of(again, global_id)) == 3
    second = sets_of(again, SECOND_BEAM)["Spanledger_Effects"]
    assert second["SaggingMoment"] == pytest.approx(1.5 * 10 * 36 / 8)
    file = ifcopenshell.open(str(again))
    text = again.read_text().splitlines()
    assert sorted(line for line in text if "IFCCOLUMN" in line) == columns
    assert len([s for s in file.by_type("IfcPropertySet") if "Spanledger" in s.Name]) == 8
    report = writer.post(again, again, two_lines(second=10_000.0))
    assert (report.path, report.unchanged) == ("append", 8)


def test_posting_one_line_into_a_file_written_anew(model):
    writer.post(model, model, two_lines(), computed_at=NOON)
    again = resaved(model)
    before = timeless(sets_of(again, BEAM))
    report = writer.post(again, again, two_lines(second=10_000.0), only=["B-2"])

    assert report.path == "general"
    assert timeless(sets_of(again, BEAM)) == before
    found = sets_of(again, SECOND_BEAM)
    assert len(found) == 3
    assert found["Spanledger_Effects"]["SaggingMoment"] == pytest.approx(1.5 * 10 * 36 / 8)


def test_everything_of_ours_leaves_a_file_written_anew(model):
    entities, before = count(model), values(model)
    writer.post(model, model, two_lines())
    again = resaved(model)
    report = writer.remove(again, again)

    assert (report.removed, report.path) == (8, "general")
    assert b"Spanledger_" not in again.read_bytes()
    assert values(again) == before
    assert count(again) == entities


def values(path):
    """Texts of entities that refer to nothing, so that they do not depend on numbers."""
    file = ifcopenshell.open(str(path))
    texts = [e.to_string().split("=", 1)[1] for e in file]
    return sorted(text for text in texts if "#" not in text)


def count(path):
    file = ifcopenshell.open(str(path))
    return len(list(file))


def test_a_set_that_others_put_beside_ours_stays(model):
    writer.post(model, model, two_lines())
    file = ifcopenshell.open(str(model))
    own = {"OwnerHistory": file.by_type("IfcOwnerHistory")[0]} if file.schema == "IFC2X3" else {}
    theirs = file.create_entity(
        "IfcPropertySet", GlobalId=ifcopenshell.guid.new(), Name="Office_Notes", **own,
        HasProperties=[file.create_entity("IfcPropertySingleValue", "Spanledger_Note")],
    )  # fmt: skip
    file.create_entity(
        "IfcRelDefinesByProperties", GlobalId=ifcopenshell.guid.new(), **own,
        RelatedObjects=[file.by_guid(BEAM)], RelatingPropertyDefinition=theirs,
    )  # fmt: skip
    file.write(str(model))
    writer.post(model, model, two_lines(load=5_000.0))
    assert set(sets_of(model, BEAM)) == {
        "Office_Notes", "Spanledger_Effects", "Spanledger_Diagrams", "Spanledger_Record"
    }  # fmt: skip
    writer.remove(model, model)
    assert set(sets_of(model, BEAM)) == {"Office_Notes"}


def test_a_set_shared_out_by_another_program_is_taken_from_the_right_element_only(model):
    """Some programs merge sets of equal content and give one to many elements."""
    writer.post(model, model, two_lines())
    file = ifcopenshell.open(str(model))
    relation = next(
        r for r in file.by_guid(BEAM).IsDefinedBy
        if r.RelatingPropertyDefinition.Name == "Spanledger_Effects"
    )  # fmt: skip
    relation.RelatedObjects = [file.by_guid(BEAM), file.by_guid(COLUMN_A)]
    file.write(str(model))
    writer.post(model, model, two_lines(load=5_000.0), only=["B-1"])

    assert sets_of(model, BEAM)["Spanledger_Effects"]["SaggingMoment"] == pytest.approx(33.75)
    assert sets_of(model, COLUMN_A)["Spanledger_Effects"]["SaggingMoment"] == pytest.approx(81)


def test_a_copied_element_does_not_keep_the_results_of_the_original(model):
    """Copied in an authoring tool, sets and all; the copy is not analysed."""
    writer.post(model, model, two_lines())
    file = ifcopenshell.open(str(model))
    for relation in file.by_guid(BEAM).IsDefinedBy:
        copy = element_tools.copy(file, relation)
        copy.RelatedObjects = [file.by_guid(COLUMN_A)]
        pset = element_tools.copy(file, relation.RelatingPropertyDefinition)
        copy.RelatingPropertyDefinition = pset
    file.write(str(model))
    assert "Spanledger_Effects" in sets_of(model, COLUMN_A)
    writer.post(model, model, two_lines())

    assert set(sets_of(model, COLUMN_A)) == {"Spanledger_Reactions"}
    assert len(sets_of(model, BEAM)) == 3


def test_a_block_with_lines_missing_or_added_is_put_right(model):
    """Edited by hand: our sets are found by name, and what was added by others stays."""
    original = model.read_bytes()
    writer.post(model, model, two_lines())
    lines = model.read_bytes().splitlines(keepends=True)
    begin = next(i for i, line in enumerate(lines) if b"results begin" in line)
    extra = b"#900000=IFCCARTESIANPOINT((1.,2.,3.));\n"
    lines[begin + 1 : begin + 1] = [extra]
    model.write_bytes(b"".join(lines))
    report = writer.post(model, model, two_lines(load=5_000.0))

    assert report.path == "general"
    assert len(sets_of(model, BEAM)) == 3
    writer.remove(model, model)
    assert sorted(model.read_bytes().splitlines()) == sorted(
        [*original.splitlines(), extra.strip()]
    )


def test_results_of_another_case_list_replace_the_old_names(model):
    first = span_result(BEAM, supports=(COLUMN_A,), cases={"Dead": 1.0})
    second = span_result(BEAM, supports=(COLUMN_A,), cases={"Live": 1.0})
    writer.post(model, model, outcome_of(first))
    writer.post(model, model, replace(outcome_of(second)))

    assert set(sets_of(model, COLUMN_A)["Spanledger_Reactions"]) == {
        "id", "Vertical", "B-1 / Live"
    }  # fmt: skip


@pytest.mark.parametrize("name", ["Effects", "Diagrams", "Record", "Reactions"])
def test_a_set_that_somebody_renamed_is_theirs_and_ours_gets_a_global_id_of_its_own(model, name):
    outcome = two_lines()
    writer.post(model, model, outcome)
    data = model.read_bytes()
    at = data.index(f"'Spanledger_{name}'".encode())
    model.write_bytes(data[:at] + b"'State of May'" + data[at + len(f"'Spanledger_{name}'") :])
    report = writer.post(model, model, outcome)
    again = writer.post(model, model, outcome)

    assert "set-renamed" in {f.slug for f in report.findings}
    assert (again.written, again.updated) == (0, 0)
    file = ifcopenshell.open(str(model))
    ids = [entity.GlobalId for entity in file.by_type("IfcRoot")]
    assert len(set(ids)) == len(ids)
    names = [s.Name for s in file.by_type("IfcPropertySet")]
    assert names.count("State of May") == 1
    assert names.count(f"Spanledger_{name}") == 2
    writer.remove(model, model)
    left = ifcopenshell.open(str(model)).by_type("IfcPropertySet")
    assert [s.Name for s in left] == ["State of May"]
