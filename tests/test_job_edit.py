"""Changes of a job file's text: only the place that is meant changes."""

import pytest

from analysis_core.errors import JobError
from analysis_core.job import reader as job
from analysis_core.job.edit import (
    entries,
    stated,
    with_entry,
    with_replaced,
    with_value,
    without_entry,
)

TEXT = """\
# What the model does not say.
title: Two spans   # shown on the sheet

rules:
  set: en-1990     # with its national figures
supports:
  # The left end rests on a wall.
  - {on: {id: 2O2Fr$t4X7Zf8NOew3FLOH}, end: start, condition: pinned}
  - on: {name: "B-*"}
    end: end
    condition: fixed
# Loads.
actions:
- {case: Dead, on: {}, uniform: 12 kN/m}   # all of them
"""
ENTRY = {"on": {"id": "1hOSvn6df7F8_7GcBWlRrM"}, "end": "start", "condition": "free"}


def test_an_entry_is_added_after_the_last_one_and_nothing_else_changes():
    changed = with_entry(TEXT, "supports", ENTRY)

    added = "  - {on: {id: 1hOSvn6df7F8_7GcBWlRrM}, end: start, condition: free}\n"
    assert changed == TEXT.replace("    condition: fixed\n", "    condition: fixed\n" + added)


def test_the_dash_of_a_list_that_is_not_indented_is_copied():
    changed = with_entry(TEXT, "actions", {"case": "Snow", "on": {}, "uniform": "2 kN/m"})

    assert changed.endswith("# all of them\n- {case: Snow, on: {}, uniform: 2 kN/m}\n")


def test_a_section_that_is_missing_is_added_at_the_end():
    changed = with_entry(TEXT, "releases", {"on": {"name": "B1"}, "end": "end"})

    assert changed == TEXT + "\nreleases:\n  - {on: {name: B1}, end: end}\n"
    assert job.parse(changed).releases[0].on.name == "B1"


@pytest.mark.parametrize("text", ["", "# only a remark\n", "# no newline", "{}", "supports:\n",
                                  "supports: []\n", "supports: [{on: {}, condition: fixed}]",
                                  "{title: x}", "title: x", "title: x\n\n# end\n",
                                  "{supports: [], title: x}\n"])  # fmt: skip
def test_an_entry_can_be_added_whatever_the_file_looks_like(text):
    changed = with_entry(text, "supports", ENTRY)

    assert entries(changed, "supports") == [*entries(text, "supports"), ENTRY]
    job.parse(changed)


def test_an_entry_is_exchanged_in_place():
    changed = with_replaced(TEXT, "supports", 1, ENTRY)

    assert entries(changed, "supports")[1] == ENTRY
    assert (
        "  - {on: {id: 1hOSvn6df7F8_7GcBWlRrM}, end: start, condition: free}\n# Loads.\n" in changed
    )
    assert len(changed.splitlines()) == len(TEXT.splitlines()) - 2


def test_an_entry_is_taken_out_with_its_lines():
    changed = without_entry(TEXT, "supports", 1)

    gone = '  - on: {name: "B-*"}\n    end: end\n    condition: fixed\n'
    assert changed == TEXT.replace(gone, "")


def test_the_last_entry_takes_its_section_with_it():
    changed = without_entry(TEXT, "actions", 0)

    assert changed == TEXT[: TEXT.index("actions:")]


@pytest.mark.parametrize("index", [0, 1, 2])
def test_an_entry_is_taken_out_of_a_list_in_one_line(index):
    items = [{"name": name} for name in ("A", "B", "C")]
    text = "cases: [{name: A}, {name: B}, {name: C}]  # three\n"

    changed = without_entry(text, "cases", index)

    assert entries(changed, "cases") == [e for i, e in enumerate(items) if i != index]
    assert changed.endswith("]  # three\n")


def test_a_value_is_exchanged_in_place():
    changed = with_value(TEXT, "rules", "set", "asce-7")

    assert changed == TEXT.replace("set: en-1990 ", "set: asce-7 ")


@pytest.mark.parametrize("text", ["", "rules:\n", "rules: {set: a}\n", "rules: {}\n", "{title: x}",
                                  "rules:\n  set: a # why\n\ntitle: x\n"])  # fmt: skip
def test_a_value_can_be_set_whatever_the_file_looks_like(text):
    changed = with_value(text, "rules", "arrangements", "every")

    assert job.read_yaml(changed)["rules"]["arrangements"] == "every"
    job.parse(changed)


def test_line_ends_of_another_system_are_kept():
    changed = with_entry(TEXT.replace("\n", "\r\n"), "supports", ENTRY)

    assert changed.count("\n") == changed.count("\r\n") == TEXT.count("\n") + 1


def test_words_that_yaml_would_misread_are_written_so_that_they_come_back():
    entry = {"case": "on: #1 'yes'", "on": {"name": "*B [1], {x}"}, "uniform": "3 kN/m"}

    assert entries(with_entry("", "actions", entry), "actions") == [entry]


def test_a_file_that_is_not_a_mapping_is_refused_in_a_sentence():
    with pytest.raises(JobError, match="not a mapping"):
        with_entry("- 1\n- 2\n", "supports", ENTRY)


def test_a_change_that_would_not_read_back_is_refused():
    text = "supports: [\n  {on: {}, condition: fixed},  # a comma behind the last entry\n]\n"

    with pytest.raises(JobError, match="cannot be changed here"):
        with_entry(text, "supports", ENTRY)


def test_a_stated_value_is_found():
    assert stated(TEXT, "rules", "set") == "en-1990"
    assert stated(TEXT, "rules", "arrangements") is None
    assert stated("", "rules", "set") is None
