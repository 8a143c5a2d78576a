"""Materials: property sets in three schemas, names, lists and sets, and what cannot be told."""

import pytest
from body_makers import Maker

from analysis_core.ifc.file_units import read_units
from analysis_core.ifc.materials.reader import material_and_profile_of, read_material
from analysis_core.ifc.materials.table import known_material
from analysis_core.ifc.source import open_model
from analysis_core.settings import MaterialSetting, Settings

GPA, MPA = 1e9, 1e6


def read(maker, entity, settings=None):
    return read_material(entity, read_units(maker.file, "test")[0], settings or Settings())


# Moduli as printed: EN 1992-1-1 table 3.1, EN 1993-1-1 3.2.6, EN 338, EN 14080, AISC 360 (29,000
# ksi), ACI 318 19.2.2.1(b), GB 50017, JIS; from memory.
@pytest.mark.parametrize(
    ("name", "category", "modulus", "strength"),
    [
        ("C30/37", "concrete", 33.0, {"fck": 30.0}),
        ("Beton C25/30 XC1", "concrete", 31.0, {"fck": 25.0}),
        ("Concrete 35 MPa", "concrete", 34.0, {"fck": 35.0}),
        ("Concrete, 4000 psi", "concrete", 24.86, {"fck": 27.58}),
        ("S355J2+N", "steel", 210.0, {"fy": 355.0, "fu": 490.0}),
        ("STEEL/S275J0", "steel", 210.0, {"fy": 275.0, "fu": 430.0}),
        ("St 52", "steel", 210.0, {"fy": 355.0, "fu": 490.0}),
        ("ASTM A992", "steel", 199.95, {"fy": 344.7, "fu": 448.2}),
        ("ASTM A572 Grade 65", "steel", 199.95, {"fy": 448.2, "fu": 551.6}),
        ("Q355B", "steel", 206.0, {"fy": 355.0, "fu": 470.0}),
        ("SN490B", "steel", 205.0, {"fy": 325.0, "fu": 490.0}),
        ("C24", "timber", 11.0, {"fmk": 24.0, "fvk": 4.0}),
        ("KVH Fichte C24", "timber", 11.0, {"fmk": 24.0, "fvk": 4.0}),
        ("D40", "hardwood", 13.0, {"fmk": 40.0, "fvk": 4.2, "fc90k": 5.5}),
        ("GL28c", "glulam", 12.5, {"fmk": 28.0, "fvk": 3.5, "fc90k": 2.5}),
        ("Brettschichtholz GL 24h", "glulam", 11.5, {"fmk": 24.0, "fvk": 3.5, "fc90k": 2.5}),
    ],
)
def test_names_of_grades(name, category, modulus, strength):
    known = known_material(name)

    assert known.category == category
    assert known.elastic_modulus / GPA == pytest.approx(modulus, rel=1e-3)
    assert {k: v / MPA for k, v in known.strength.items() if k in strength} == pytest.approx(
        strength, rel=1e-3
    )
    assert not known.assumed


# EN 338:2016 gives the strength across the grain as EN 384 derives it from the characteristic
# density, which is the mean over 1.2: 0.007 of it for softwood, 0.010 for hardwood, 0.015 from
# 700 kg/m3 on (MPa; from memory).  The table rounds to 0.1 and its densities to 10 kg/m3.
@pytest.mark.parametrize(
    ("name", "factor"),
    [(f"C{grade} timber", 0.007) for grade in (14, 16, 18, 20, 22, 24, 27, 30, 35, 40, 45, 50)]
    + [(f"D{grade}", 0.010) for grade in (18, 24, 27, 30, 35, 40, 45, 50, 55)]
    + [(f"D{grade}", 0.015) for grade in (60, 65, 70)],
)
def test_the_strength_across_the_grain_follows_from_the_density(name, factor):
    known = known_material(name)

    across = known.strength["fc90k"] / MPA
    assert across == pytest.approx(factor * known.density / 1.2, abs=0.1)


@pytest.mark.parametrize(
    "name", ["1.4301", "1.4571", "Edelstahl V4A", "Stainless Steel 316", "SUS304", "AISI 316L"]
)
def test_stainless_steel_is_a_category_of_its_own(name):
    assert known_material(name).category == "stainless"


@pytest.mark.parametrize("name", ["Steel", "Stahlbeton", "Structural Concrete", "Holz", "acier"])
def test_a_kind_without_a_grade_is_assumed(name):
    assert known_material(name).assumed


@pytest.mark.parametrize("name", ["", "Solid", "C30", "S-1", "Mauerwerk", "Batt Insulation", "A1"])
def test_names_that_tell_nothing(name):
    assert known_material(name) is None


def test_an_ambiguous_grade_is_settled_by_the_category():
    # C30 is a class of timber and, without its slash, of concrete.
    assert known_material("C30", "Concrete").elastic_modulus == 33.0 * GPA
    assert known_material("C30", "Wood").elastic_modulus == 12.0 * GPA


def stated(maker, material, group, **values):
    measures = {
        "YoungModulus": "IfcModulusOfElasticityMeasure",
        "ShearModulus": "IfcModulusOfElasticityMeasure",
        "PoissonRatio": "IfcPositiveRatioMeasure",
        "MassDensity": "IfcMassDensityMeasure",
        "YieldStress": "IfcPressureMeasure",
    }
    items = [
        maker.make("IfcPropertySingleValue", name, None, maker.make(measures[name], value))
        for name, value in values.items()
    ]
    return maker.make("IfcMaterialProperties", group, None, items, material)


@pytest.mark.parametrize("schema", ["IFC4", "IFC4X3"])
def test_property_sets_come_before_the_name(schema):
    maker = Maker(schema)
    material = maker.make("IfcMaterial", "S355")
    stated(maker, material, "Pset_MaterialMechanical", YoungModulus=205e9, PoissonRatio=0.3)
    stated(maker, material, "Pset_MaterialCommon", MassDensity=7900.0)
    stated(maker, material, "Pset_MaterialSteel", YieldStress=345e6)

    found, findings = read(maker, material)

    assert found.elastic_modulus == 205e9
    assert found.shear_modulus == pytest.approx(205e9 / 2.6)
    assert found.density == 7900.0
    assert dict(found.strength) == {"fy": 345e6, "fu": 490e6}
    assert "Pset_MaterialMechanical" in found.source
    assert not findings


def test_property_classes_of_ifc2x3():
    maker = Maker("IFC2X3")
    material = maker.make("IfcMaterial", "special")
    maker.make("IfcMechanicalSteelMaterialProperties", Material=material, YoungModulus=200e9,
               ShearModulus=77e9, YieldStress=300e6)  # fmt: skip
    maker.make("IfcGeneralMaterialProperties", Material=material, MassDensity=7800.0)
    extended = maker.make("IfcPropertySingleValue", "ThermalExpansionCoefficient", None,
                          maker.make("IfcThermalExpansionCoefficientMeasure", 1.2e-5))  # fmt: skip
    maker.make("IfcExtendedMaterialProperties", Material=material, ExtendedProperties=[extended],
               Name="Pset_MaterialMechanical")  # fmt: skip

    found, findings = read(maker, material)

    assert (found.elastic_modulus, found.shear_modulus, found.density) == (200e9, 77e9, 7800.0)
    assert found.thermal_expansion == pytest.approx(1.2e-5)
    assert dict(found.strength) == {"fy": 300e6}
    assert not findings


def test_a_property_with_a_unit_of_its_own():
    maker = Maker()
    material = maker.make("IfcMaterial", "X")
    unit = maker.make("IfcSIUnit", UnitType="PRESSUREUNIT", Prefix="MEGA", Name="PASCAL")
    item = maker.make("IfcPropertySingleValue", "Youngs Modulus", None,
                      maker.make("IfcReal", 31000.0), unit)  # fmt: skip
    maker.make("IfcMaterialProperties", "own", None, [item], material)

    found, _ = read(maker, material)

    assert found.elastic_modulus == pytest.approx(31e9)


def test_an_implausible_modulus_is_reported_and_kept():
    maker = Maker()
    material = maker.make("IfcMaterial", "Steel")
    stated(maker, material, "Pset_MaterialMechanical", YoungModulus=29.0)

    found, findings = read(maker, material)

    assert found.elastic_modulus == 29.0
    assert [f.slug for f in findings] == ["implausible-modulus"]
    assert "0.5 to 1000 GPa" in findings[0].message


@pytest.mark.parametrize(("density", "told"), [(7.85e-6, True), (7850e3, True), (420.0, False)])
def test_a_density_in_the_wrong_unit_is_reported_unless_the_job_settles_it(density, told):
    """Steel in kg/mm³ leaves self weight out in silence, in g/m³ it makes a thousand of it."""
    maker = Maker()
    material = maker.make("IfcMaterial", "Steel")
    stated(maker, material, "Pset_MaterialMechanical", YoungModulus=210e9)
    stated(maker, material, "Pset_MaterialCommon", MassDensity=density)
    settled = Settings(materials=(MaterialSetting("st*", density=7850.0),))

    assert [f.slug for f in read(maker, material)[1]] == ["implausible-density"] * told
    assert read(maker, material, settled)[1] == []


def test_a_material_that_tells_nothing_is_reported_unless_the_job_settles_it():
    maker = Maker()
    material = maker.make("IfcMaterial", "Solid")
    settled = Settings(materials=(MaterialSetting("sol*", elastic_modulus=11e9),))

    found, findings = read(maker, material)
    _, none = read(maker, material, settled)

    assert (found.name, found.elastic_modulus) == ("Solid", 0.0)
    assert [f.slug for f in findings] == ["no-material-stiffness"]
    assert "name 'Solid'" in findings[0].message
    assert none == []


def test_a_property_that_is_no_number_is_left_out_and_named():
    maker = Maker()
    material = maker.make("IfcMaterial", "S355")
    item = maker.make("IfcPropertySingleValue", "YoungModulus", None, maker.make("IfcText", "high"))
    maker.make("IfcMaterialProperties", "Pset_MaterialMechanical", None, [item], material)

    found, findings = read(maker, material)

    assert found.elastic_modulus == 210e9
    assert [f.slug for f in findings] == ["material-property"]


def test_lists_layers_and_constituents_choose_one_material_and_say_so():
    maker = Maker()
    concrete, steel, wool = (maker.make("IfcMaterial", n) for n in ("C30/37", "S355", "wool"))
    layers = [
        maker.make("IfcMaterialLayer", Material=wool, LayerThickness=60.0),
        maker.make("IfcMaterialLayer", Material=concrete, LayerThickness=200.0),
    ]
    parts = [
        maker.make("IfcMaterialConstituent", Name="finish", Material=wool, Fraction=0.1),
        maker.make("IfcMaterialConstituent", Name="load bearing core", Material=steel),
    ]
    selects = {
        "list": (maker.make("IfcMaterialList", [steel, wool]), "S355"),
        "layers": (maker.make("IfcMaterialLayerSet", layers), "C30/37"),
        "constituents": (maker.make("IfcMaterialConstituentSet", "S", None, parts), "S355"),
    }

    for what, (select, expected) in selects.items():
        found, findings = read(maker, select)
        assert found.name == expected, what
        assert "material-choice" in [f.slug for f in findings], what


def test_a_select_without_a_material():
    maker = Maker()
    profile = maker.make("IfcMaterialProfile", Profile=maker.rectangle(1.0, 2.0))

    assert read(maker, maker.make("IfcMaterialProfileSet", MaterialProfiles=[profile])) == (
        None, [],
    )  # fmt: skip


def test_an_element_takes_its_own_material_before_that_of_its_type(tmp_path):
    maker = Maker()
    own, typical = maker.make("IfcMaterial", "S355"), maker.make("IfcMaterial", "C24")
    first, second = maker.element("IfcBeam", "first"), maker.element("IfcBeam", "second")
    kind = maker.root("IfcBeamType", "T", PredefinedType="BEAM")
    profile = maker.rectangle(100.0, 200.0, "R")
    part = maker.make("IfcMaterialProfile", Material=typical, Profile=profile)
    usage = maker.make("IfcMaterialProfileSet", MaterialProfiles=[part])
    maker.root("IfcRelDefinesByType", RelatedObjects=[first, second], RelatingType=kind)
    maker.associate(usage, kind)
    maker.associate(own, first)
    numbers = first.id(), second.id()

    source = open_model(maker.write(tmp_path))  # entities die with it
    found = material_and_profile_of(source)

    assert found[numbers[0]].material.Name == "S355"
    assert found[numbers[1]].material.Name == "C24"
    assert found[numbers[1]].profile.ProfileName == "R"
