"""Another material for members, of the model or of the job file."""

import ifcopenshell
import pytest
from update_makers import (
    SAMPLES,
    SCHEMAS,
    add_set,
    changed_model,
    complaints,
    differing,
    named,
    psets,
    sample,
)

from analysis_core import pipeline
from analysis_core.errors import JobError
from analysis_core.job.reader import parse

# The validator leaves its own rule files to the garbage collector.
pytestmark = pytest.mark.filterwarnings(
    "ignore::ResourceWarning", "ignore::pytest.PytestUnraisableExceptionWarning"
)
TEXT = (SAMPLES / "quarry_lane.yaml").read_text(encoding="utf-8")
JOB = parse(TEXT)
OAK = parse(
    TEXT + "\nmaterials:\n  - {name: Oak D30, elastic_modulus: 11 GPa, shear_modulus: 0.69 GPa, "
    "density: 640 kg/m3, category: timber}\n"
)


def material_of(element):
    relation = next(r for r in element.HasAssociations if r.is_a("IfcRelAssociatesMaterial"))
    select = relation.RelatingMaterial
    if select.is_a("IfcMaterialProfileSetUsage"):
        select = select.ForProfileSet.MaterialProfiles[0].Material
    return select.Name


def updated(tmp_path, source, name, material, settings):
    model = ifcopenshell.open(source)
    target = tmp_path / "after.ifc"
    done = pipeline.update_members(
        source, target, settings, materials={named(model, name).GlobalId: material}
    )
    names = done.outcome.model.names
    found = next(m for x in done.outcome.model.lines for m in x.members if names[m.element] == name)
    return target, done, found


@pytest.mark.parametrize("schema", SCHEMAS)
def test_a_material_of_the_model(tmp_path, schema):
    def with_set(model):
        add_set(model, [named(model, "J-1")], "Office", {"Material": ("IfcLabel", "Steel S355")})

    source = changed_model(tmp_path, schema, with_set)
    target, done, found = updated(tmp_path, source, "J-1", "Concrete C30/37", JOB)
    model = ifcopenshell.open(target)

    assert found.material.name == "Concrete C30/37"
    assert found.section.name == "IPE 300"
    assert material_of(named(model, "J-1")) == "Concrete C30/37"
    assert material_of(named(model, "J-2")) == "Steel S355"
    assert psets(named(model, "J-1"))["Office.Material"] == "Concrete C30/37"
    assert {(c.what, c.old, c.new) for c in done.changes} == {
        ("material association", "Steel S355", "Concrete C30/37"),
        ("Office.Material", "Steel S355", "Concrete C30/37"),
    }
    assert differing(source, target) == [
        ("IfcPropertySingleValue", "Material"),
        ("IfcRelAssociatesMaterial", ""),
    ]
    assert complaints(target) == complaints(source)


@pytest.mark.parametrize("schema", [*SCHEMAS, "ifc4_inch"])
def test_a_material_of_the_job_file_is_added_with_its_properties(tmp_path, schema):
    target, _, _ = updated(tmp_path, sample(schema), "J-1", "Oak D30", OAK)
    # Without the job file's own values: what now stands in the model.
    found = pipeline.survey(target, parse(TEXT)).model
    joist = next(m for x in found.lines for m in x.members if found.names[m.element] == "J-1")

    assert joist.material.name == "Oak D30"
    assert joist.material.elastic_modulus == pytest.approx(11e9, rel=1e-9)
    assert joist.material.shear_modulus == pytest.approx(0.69e9, rel=1e-9)
    assert joist.material.density == pytest.approx(640.0, rel=1e-9)
    assert complaints(target) == complaints(sample(schema))


def test_a_material_that_is_not_known_is_refused_with_the_nearest(tmp_path):
    with pytest.raises(JobError, match=r"no material 'Oak D31'.*'Oak D30'"):
        updated(tmp_path, sample("ifc4"), "J-1", "Oak D31", OAK)
