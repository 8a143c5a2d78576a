"""Strings, numbers, GlobalIds and places in a STEP file, against ifcopenshell and Python."""

import random
import uuid
from decimal import Decimal

import ifcopenshell
import ifcopenshell.guid
import numpy as np
import pytest
from posting_makers import small_model

from analysis_core.ifc.global_ids import NAMESPACE, derived_ids, global_ids
from analysis_core.ifc.step.index import StepIndex
from analysis_core.ifc.step.number_text import printed
from analysis_core.ifc.step.tokens import arguments, rendered
from analysis_core.ifc.step.values import decoded, real, reals, string

TEXTS = [
    "", "plain", "it's", "back\\slash", "\\X2\\0041\\X0\\", "tab\tand\r\nline", "Träger", "梁",
    "𝄞 clef", "a'b''c", "ENDSEC; /* */ END-ISO-10303-21;", "\x7f\x80\x9f\xa0ÿ", "#12=IFCWALL();",
]  # fmt: skip


def as_read(text):
    """The text of a quoted string, as ifcopenshell reads it."""
    model = small_model().decode().replace("'Beam'", string(text))
    file = ifcopenshell.file.from_string(model)
    return file.by_type("IfcBeam")[0].Name


@pytest.mark.parametrize("text", TEXTS)
def test_a_string_is_read_as_it_was(text):
    quoted = string(text)

    assert quoted.isascii()
    assert quoted.isprintable()
    assert as_read(text) == text
    assert decoded(quoted) == text


def test_a_lone_surrogate_stands_for_nothing():
    assert string("a\ud800b") == "'a?b'"


@pytest.mark.parametrize("value", [0.0, -0.0, 1.0, 1e-5, -2.5e-300, 1e22, 123456.789, 1e16, 5e-324])
def test_a_number_has_a_point_and_all_its_digits(value):
    text = real(value)

    assert float(text) == value
    assert "." in text
    assert "e" not in text
    assert reals([value, 2.0 * value]) == [real(value), real(2.0 * value)]


@pytest.mark.parametrize("value", [float("nan"), float("inf")])
def test_what_is_no_number_is_not_written(value):
    with pytest.raises(ValueError, match="cannot be written"):
        real(value)


def test_rows_of_numbers_are_printed_to_so_many_digits_of_their_largest():
    rng = np.random.default_rng(5)
    rows = [rng.normal(size=n) * 10.0 ** rng.uniform(-9, 9) for n in rng.integers(1, 40, 400)]
    rows += [np.zeros(3), np.array([0.0, -1e-30, 12345.678905]), np.array([9.9999999999, 1.0])]
    texts = printed(rows, digits=9, before="X(", after="),", factor=2.5)

    for row, text in zip(rows, texts, strict=True):
        values = [t.removeprefix("X(").removesuffix(")") for t in text.text.split("),")]
        largest = np.abs(row / 2.5).max()
        step = Decimal(1).scaleb(-max(1, min(15, 8 - int(np.floor(np.log10(largest or 1.0))))))
        for value, printed_ in zip(row / 2.5, values, strict=True):
            assert -Decimal(printed_).as_tuple().exponent == -step.as_tuple().exponent
            assert abs(float(printed_) - value) <= 0.5000001 * float(step)
            assert not printed_.lstrip("-").startswith("00")
            assert printed_ != "-" + "0" * len(printed_[1:])


def test_rows_that_cannot_be_printed_are_told():
    rows = [np.array([1.0, np.nan]), np.array([np.inf]), np.array([1e30]), np.zeros(0)]

    assert printed(rows, digits=9, before="", after=",") == [None] * 4


def test_rows_of_equal_numbers_are_recognised():
    a, b = printed([np.array([1 / 3, 2.0]), np.array([1 / 3 + 1e-15, 2.0])], digits=9, before="",
                   after=",")  # fmt: skip

    assert a == b


def test_positions_are_moved_apart_where_they_coincide():
    (row,) = printed([np.array([0.0, 2.0, 2.0, 2.0, 5.0])], digits=12, before="", after=",",
                     apart=1e-6)  # fmt: skip

    assert row.text.startswith("0.00000000000,2.00000000000,2.00000100000,2.00000200000,5.0")


def test_global_ids_are_version_5_uuids_in_our_namespace():
    names = ["a", "b/ö", "x" * 300]

    assert global_ids(names) == [
        ifcopenshell.guid.compress(uuid.uuid5(NAMESPACE, name).hex) for name in names
    ]


def test_derived_ids_differ_by_name_and_by_purpose_and_are_uuids():
    names = [f"element {i}" for i in range(500)]
    derived = derived_ids(names, ["p", "q"])
    every = [*derived["p"], *derived["q"], *global_ids(names)]

    assert len(set(every)) == len(every)
    assert derived == derived_ids(names, ["p", "q"])
    versions = {uuid.UUID(ifcopenshell.guid.expand(i)).version for i in every}
    assert versions == {5}


@pytest.mark.parametrize(
    "text",
    ["#1=IFCX('a''b',(#1,#2),$,*,.T.,(),((1.,2.),(3.)),IFCLABEL('x'),(IFCREAL(1.),IFCREAL(2.)));",
     "#1 = IFCX ( 'a;b' , ( #2 ) ) ;", "#1=IFCX();"],
)  # fmt: skip
def test_attributes_are_taken_apart_and_put_together(text):
    again = rendered(arguments(text))

    assert arguments(f"#1=IFCX{again};") == arguments(text)
    compact = text[text.index("(") : -1].replace(" ", "")
    assert again == compact.rstrip(";")


def scrambled(seed):
    """A model with comments, odd spacing and hostile strings between its instances."""
    rng = random.Random(seed)
    noise = [" ", "\n", "\r\n", "/* #9=IFCWALL('x'); */", "/* it's */", "\t", ""]
    names = ["ENDSEC;", "#77=IFCWALL()", "a''b", "(''2O2Fr$t4X7Zf8NOew3FLOH'',", "\\\\", "/*", "*/"]
    lines = []
    for line in small_model().decode().splitlines():
        if line.startswith("#") and rng.random() < 0.7:
            line = line.replace("=", f"{rng.choice([' ', ''])}={rng.choice(['', ' '])}", 1)
            line = line.replace("'Beam'", f"'{rng.choice(names)}'").replace(
                "'C-1'", f"'{rng.choice(names)}'"
            )
        lines.append(line + rng.choice(noise))
    return "\n".join(lines).encode()


@pytest.mark.parametrize("seed", range(40))
def test_the_index_finds_what_the_parser_finds(seed):
    data = scrambled(seed)
    file = ifcopenshell.file.from_string(data.decode())
    index = StepIndex(data)

    assert sorted(index.arrays.ids.tolist()) == sorted(e.id() for e in file)
    assert index.arrays.largest == max(e.id() for e in file)
    assert index.largest_number >= index.arrays.largest  # strings may hold larger ones
    for entity in file:
        assert index.kind(entity.id()) == entity.is_a().upper()
        assert sorted(index.references(entity.id())) == sorted(
            e.id() for e in file.traverse(entity, max_levels=1)[1:]
        )
    rooted = {e.GlobalId: [e.id()] for e in file.by_type("IfcRoot")}
    assert index.rooted(rooted) == rooted
    for name in ("IfcBeam", "IfcProject", "IfcLocalPlacement"):
        assert index.instances_of(name.upper()) == [e.id() for e in file.by_type(name)]
    referrers = index.referrers([e.id() for e in file])
    for entity in file:
        expected = {e.id() for e in file.get_inverse(entity)}
        assert referrers.get(entity.id(), set()) == expected
