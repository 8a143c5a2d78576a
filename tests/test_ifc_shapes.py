"""The bodies that are shown faintly behind the beam lines."""

import ifcopenshell
import ifcopenshell.api.context
import ifcopenshell.api.root
import ifcopenshell.api.unit
import numpy as np
import pytest

from analysis_core.ifc.shapes import building_shape
from analysis_core.ifc.source import open_model


@pytest.fixture
def model(tmp_path):
    """A file in millimetres with a bar of 4000 × 200 × 300 that starts at (1, 2, 3) m."""
    file = ifcopenshell.file(schema="IFC4")
    ifcopenshell.api.root.create_entity(file, ifc_class="IfcProject", name="Bar")
    ifcopenshell.api.unit.assign_unit(file)  # millimetres
    context = ifcopenshell.api.context.add_context(file, "Model")
    point, direction = file.createIfcCartesianPoint, file.createIfcDirection
    place = file.createIfcAxis2Placement3D(point((1000.0, 2000.0, 3000.0)))
    flat = file.createIfcAxis2Placement2D(point((0.0, 0.0)))
    profile = file.createIfcRectangleProfileDef("AREA", None, flat, 200.0, 300.0)
    along_x = file.createIfcAxis2Placement3D(
        point((0.0, 0.0, 0.0)), direction((1.0, 0.0, 0.0)), direction((0.0, 1.0, 0.0))
    )
    solid = file.createIfcExtrudedAreaSolid(profile, along_x, direction((0.0, 0.0, 1.0)), 4000.0)
    beam = ifcopenshell.api.root.create_entity(file, ifc_class="IfcBeam", name="B")
    beam.ObjectPlacement = file.createIfcLocalPlacement(None, place)
    body = file.createIfcShapeRepresentation(context, "Body", "SweptSolid", [solid])
    beam.Representation = file.createIfcProductDefinitionShape(None, None, [body])
    ifcopenshell.api.root.create_entity(file, ifc_class="IfcColumn", name="bodiless")
    path = tmp_path / "bar.ifc"
    file.write(str(path))
    return open_model(path)


def test_a_bar_stands_where_it_is_in_metres(model):
    shape = building_shape(model)

    assert shape.points.min(axis=0) == pytest.approx([1.0, 1.9, 2.85])
    assert shape.points.max(axis=0) == pytest.approx([5.0, 2.1, 3.15])
    assert shape.elements == (model.file.by_type("IfcBeam")[0].GlobalId,)


def test_its_triangles_enclose_its_volume_and_its_edges_are_twelve(model):
    shape = building_shape(model)

    a, b, c = shape.points[shape.triangles].transpose(1, 0, 2)
    volume = np.sum(a * np.cross(b, c)) / 6.0  # divergence theorem
    assert abs(volume) == pytest.approx(4.0 * 0.2 * 0.3)
    lengths = np.linalg.norm(np.diff(shape.points[shape.edges], axis=1), axis=2)
    assert lengths.sum() == pytest.approx(4.0 * (4.0 + 0.2 + 0.3))


def test_the_work_can_be_stopped(model):
    def stop(step, part):
        raise KeyboardInterrupt

    with pytest.raises(KeyboardInterrupt):
        building_shape(model, progress=stop)
