"""Entities read from the bytes of a file, against the general-purpose library (ifcopenshell)."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import ifcopenshell
import pytest

from analysis_core.ifc.source import Source, open_model

SAMPLES = sorted((Path(__file__).parents[1] / "sample_models").glob("*.ifc"))
SHARED = sorted((Path(__file__).parents[2] / "shared" / "ifc").glob("*/*.ifc"))
CLASSES = ("IfcRoot", "IfcRepresentationItem", "IfcProperty", "IfcRelationship", "IfcNamedUnit")

ODD = r"""ISO-10303-21;
HEADER;FILE_DESCRIPTION((''),'2;1');FILE_NAME('','',(''),(''),'','','');
FILE_SCHEMA(('IFC4'));ENDSEC;
DATA;
#900000=IFCCARTESIANPOINT((0,1.,2.E-3));
#2 = IfcPropertySingleValue ( 'a\X\E9 it''s, (so)\X2\03B103B2\X0\' , $,IFCLOGICAL(.U.),$ ) ;
#3=IFCPROPERTYSINGLEVALUE('\S\' kept',$,
 IFCINTEGER( 5 ),$);
#4=IFCPROPERTYSINGLEVALUE('n',$,IFCTEXT('a,b)'),$);
#5=IFCDIRECTION((0,0,1)); /* #2=IFCWALL('no'); */
#6=IFCEXTRUDEDAREASOLID($,$,/* upward */#5,7200);
#7=IFCPROPERTYLISTVALUE('x',$,(IFCLABEL('a,('),IFCREAL(-1.5E+3)),$);
#8=IFCCARTESIANPOINTLIST3D(((0.,0.,0.),(1.,2.,3.)));
#9=IFCSIUNIT(*,.LENGTHUNIT.,.MILLI.,.METRE.);
#10=IFCHALFSPACESOLID($,.F.);
#11=IFCPROPERTYSET('0000000000CN5M2VV7HiQG',$,'P',$,(#2,#3,#4));
#12=IFCINDEXEDPOLYCURVE(#8,(IFCLINEINDEX((1,2)),IFCARCINDEX((1,2,3))),.F.);
#13=IFCRELAGGREGATES('x',$,$,$,#11,(#11));
#15=IFCPRESENTATIONLAYERASSIGNMENT('l',$,(),'');
#14=IFCMIRROREDPROFILEDEF(.AREA.,'m',$,#5,$);
ENDSEC;
END-ISO-10303-21;
"""


def written(folder: Path, text: str) -> Source:
    path = folder / "odd.ifc"
    path.write_text(text)
    return open_model(path)


def plain(value: Any) -> Any:
    """A value such that what differs in kind is not equal: 5 is not 5. here."""
    if isinstance(value, tuple):
        return tuple(map(plain, value))
    if hasattr(value, "is_a"):
        return (value.is_a(), value.id()) if value.id() else (value.is_a(), plain(value[0]))
    return type(value), value


def assert_alike(source: Source, library: ifcopenshell.file) -> None:
    for theirs in library:
        ours = source.entities.by_id(theirs.id())
        assert (ours.is_a(), len(ours)) == (theirs.is_a(), len(theirs))
        for place in range(len(theirs)):
            there = theirs.attribute_name(place)
            assert plain(ours[place]) == plain(theirs[place]), f"{there} of {theirs}"
            assert plain(getattr(ours, there)) == plain(ours[place])


@pytest.mark.parametrize("path", [*SAMPLES, *SHARED], ids=lambda path: path.name)
def test_every_attribute_reads_as_the_library_reads_it(path: Path):
    if path.stat().st_size > 1_000_000 or path.name.startswith("S15"):
        pytest.skip("large, or refused for a header that does not fit")

    source = open_model(path)

    assert_alike(source, source.file)
    for name in CLASSES:
        ours = [entity.id() for entity in source.entities.by_type(name)]
        assert ours == [entity.id() for entity in source.file.by_type(name)]


def test_unusual_ways_to_write_an_attribute_read_as_the_library_reads_them(tmp_path: Path):
    source = written(tmp_path, ODD)

    assert_alike(source, source.file)
    assert source.entities.by_id(3)[0] == "§ kept"


def test_references_to_nothing_and_what_is_not_stated_are_left_out_of_lists(tmp_path: Path):
    text = ODD.replace("(#2,#3,#4)", "(#2,#99,#4)").replace("(0,1.,2.E-3)", "(1.,$)")
    source = written(tmp_path, text)

    assert_alike(source, source.file)
    assert [item.id() for item in source.entities.by_id(11).HasProperties] == [2, 4]


def test_attributes_that_are_missing_are_none_and_surplus_ones_passed_over(tmp_path: Path):
    text = ODD.replace("IFCMIRROREDPROFILEDEF(.AREA.,'m',$,#5,$)", "IFCMATERIAL('a,b')")
    source = written(tmp_path, text.replace("IFCDIRECTION((0,0,1))", "IFCDIRECTION((0,0,1),7)"))

    assert tuple(source.entities.by_id(14)) == ("a,b", None, None)
    assert tuple(source.entities.by_id(5)) == ((0, 0, 1),)


@pytest.mark.parametrize(
    ("text", "value"), [("72.X5", "72.X5"), ("1_000", "1_000"), ("#5X5", None), ("7E5", "7E5")]
)
def test_what_is_no_value_stays_text_and_harms_nothing(tmp_path: Path, text: str, value: Any):
    source = written(tmp_path, ODD.replace("#5,7200", f"#5,{text}"))

    assert source.entities.by_id(6)[3] == value


def test_users_of_an_entity_are_found_by_what_refers_to_it_and_not_by_texts(tmp_path: Path):
    text = ODD.replace("'l',$,(),''", "'#11',$,(),''").replace("#11,(#11)", "#11,(#11,#111)")
    source = written(tmp_path, text)

    users = source.entities.get_inverse(source.entities.by_id(11))

    assert [user.id() for user in users] == [13]


def test_an_unknown_class_or_number_is_an_error(tmp_path: Path):
    entities = written(tmp_path, ODD).entities

    with pytest.raises(RuntimeError):
        entities.by_type("IfcSomething")
    with pytest.raises(RuntimeError, match="no entity #99"):
        entities.by_id(99)
    with pytest.raises(AttributeError, match="IfcDirection has no attribute Name"):
        _ = entities.by_id(5).Name
    with pytest.raises(IndexError):
        entities.by_id(5)[1]


def test_entities_are_equal_where_they_are_the_same_one(tmp_path: Path):
    entities = written(tmp_path, ODD).entities

    assert entities.by_id(13)[4] == entities.by_id(11)
    assert entities.by_id(13) != entities.by_id(11)
    assert entities.by_id(4)[2] == entities.by_id(4)[2]
    assert entities.by_id(4)[2] != entities.by_id(3)[2]
    assert len({entities.by_id(5), entities.by_id(6)[2]}) == 1


@pytest.mark.parametrize("stretch", [1, 7, 64])
def test_strings_over_the_border_of_two_stretches_stay_strings(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, stretch: int
):
    whole = written(tmp_path, ODD).text
    monkeypatch.setattr("analysis_core.ifc.step.blank._STRETCH", stretch)
    monkeypatch.setattr("analysis_core.ifc.step.census._STRETCH", stretch)

    cut = written(tmp_path, ODD).text

    assert cut.census.ids.tolist() == whole.census.ids.tolist()
    assert cut.census.ends.tolist() == whole.census.ends.tolist()
    assert cut.census.shapes == whole.census.shapes
