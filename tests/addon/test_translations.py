"""Every word of the window is there in the other language as well."""

import importlib.util
import string
from pathlib import Path

import pytest

FOLDER = Path(__file__).resolve().parents[2] / "addon/freecad/spanledger/resources/translations"


@pytest.fixture(scope="module")
def collect():
    spec = importlib.util.spec_from_file_location("collect", FOLDER / "collect.py")
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


def fields(text):
    return {name for _, name, _, _ in string.Formatter().parse(text) if name}


@pytest.mark.parametrize("path", sorted(FOLDER.glob("*.ts")), ids=lambda path: path.stem)
def test_every_literal_is_translated_with_the_same_parts(collect, path):
    known = collect.translations(path)

    assert collect.missing(path) == []
    for (_, text), translation in known.items():
        assert fields(text) == fields(translation), text


@pytest.mark.parametrize("path", sorted(FOLDER.glob("*.ts")), ids=lambda path: path.stem)
def test_nothing_is_translated_that_is_no_longer_said(collect, path):
    assert set(collect.translations(path)) == set(collect.literals())


def test_literals_are_found_in_each_kind_of_call(collect):
    found = collect.literals()

    assert ("Spanledger", "Show me") in found  # translate
    assert ("Spanledger", "needs a decision") in found  # noop
    assert ("Spanledger", "1 span") in found  # say
    assert ("Spanledger_Open", "Open IFC model…") in found  # QT_TRANSLATE_NOOP
