"""What is asked of the modeller (IDS 1.0), checked with a general-purpose checker."""

from pathlib import Path

import ifcopenshell
import pytest
from ifctester import ids

ROOT = Path(__file__).resolve().parents[1]
REQUIREMENTS = ROOT / "analysis_core" / "model_requirements.ids"
SAMPLES = sorted((ROOT / "sample_models").glob("*.ifc"))


def failed(model):
    requirements = ids.open(str(REQUIREMENTS))
    requirements.validate(model, should_filter_version=True)
    return [s.name for s in requirements.specifications if s.status is False]


@pytest.mark.parametrize("path", SAMPLES, ids=lambda path: path.stem)
def test_the_sample_models_state_all_that_is_asked_for(path):
    assert failed(ifcopenshell.open(path)) == []


@pytest.mark.parametrize(
    ("ifc_class", "name"),
    [
        ("IfcRelAssociatesMaterial", "Beams have a material"),
        ("IfcRelContainedInSpatialStructure", "Columns belong to a storey"),
        ("IfcMaterialProperties", "Materials state their modulus of elasticity"),
    ],
)
def test_what_is_left_out_is_asked_for(ifc_class, name):
    model = ifcopenshell.open(ROOT / "sample_models" / "quarry_lane_physical_ifc4.ifc")
    for entity in model.by_type(ifc_class):
        model.remove(entity)

    assert name in failed(model)
