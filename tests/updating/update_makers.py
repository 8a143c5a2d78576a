"""Models to be updated: the samples, with types, property sets and cut bodies put in."""

from pathlib import Path

import ifcopenshell
import ifcopenshell.geom
import ifcopenshell.guid
import ifcopenshell.validate

from analysis_core.job.reader import parse

SAMPLES = Path(__file__).resolve().parents[2] / "sample_models"
SCHEMAS = ("ifc2x3", "ifc4", "ifc4x3")
TABLE = """
section_table:
  - {name: "I 410", shape: I, depth: 410 mm, width: 190 mm, web_thickness: 9 mm,
     flange_thickness: 15 mm, fillet_radius: 18 mm}
  - {name: "R 250x600", shape: rectangle, depth: 600 mm, width: 250 mm}
  - {name: "H 200x100x8", shape: hollow rectangle, depth: 200 mm, width: 100 mm,
     wall_thickness: 8 mm, outer_radius: 12 mm, inner_radius: 4 mm}
  - {name: "T 193x10", shape: tube, diameter: 193 mm, wall_thickness: 10 mm}
  - {name: "C 260", shape: channel, depth: 260 mm, width: 90 mm, web_thickness: 10 mm,
     flange_thickness: 14 mm}
  - {name: "Tee 200", shape: tee, depth: 200 mm, width: 150 mm, web_thickness: 8 mm,
     flange_thickness: 12 mm}
  - {name: "L 150x100x10", shape: angle, depth: 150 mm, width: 100 mm, thickness: 10 mm}
  - {name: "D 220", shape: circle, diameter: 220 mm}
"""
JOB = parse((SAMPLES / "quarry_lane.yaml").read_text(encoding="utf-8") + TABLE)


def sample(schema, kind="physical"):
    return SAMPLES / f"quarry_lane_{kind}_{schema}.ifc"


def changed_model(tmp_path, schema, change, kind="physical"):
    """Write a sample after ``change(model)`` and return its path."""
    model = ifcopenshell.open(sample(schema, kind))
    change(model)
    path = tmp_path / f"before_{schema}.ifc"
    model.write(str(path))
    return path


def named(model, name, ifc_class="IfcBeam"):
    return next(e for e in model.by_type(ifc_class) if e.Name == name)


def body_of(element):
    return next(
        r for r in element.Representation.Representations if r.RepresentationIdentifier == "Body"
    )


def owner(model):
    return model.by_type("IfcOwnerHistory")[0]


def add_type(model, names, *, type_name="Joist IPE 300"):
    """Map the body of the first beam from a type to all beams of these names."""
    first = named(model, names[0])
    body = body_of(first)
    origin = model.create_entity(
        "IfcAxis2Placement3D", model.create_entity("IfcCartesianPoint", (0.0, 0.0, 0.0))
    )
    shape = model.create_entity(
        "IfcShapeRepresentation", body.ContextOfItems, "Body", "SweptSolid", body.Items
    )
    source = model.create_entity("IfcRepresentationMap", origin, shape)
    type_ = model.create_entity(
        "IfcBeamType", ifcopenshell.guid.new(), owner(model), type_name,
        RepresentationMaps=[source], PredefinedType="BEAM",
    )  # fmt: skip
    zero = model.create_entity("IfcCartesianPoint", (0.0, 0.0, 0.0))
    for name in names:
        target = model.create_entity("IfcCartesianTransformationOperator3D", LocalOrigin=zero)
        own = body_of(named(model, name))
        own.RepresentationType = "MappedRepresentation"
        own.Items = [model.create_entity("IfcMappedItem", source, target)]
    model.create_entity(
        "IfcRelDefinesByType", ifcopenshell.guid.new(), owner(model), None, None,
        [named(model, name) for name in names], type_,
    )  # fmt: skip
    return type_


def add_set(model, elements, name, values):
    """Give elements one property set; values are pairs of a measure and its value, by name."""
    properties = [
        model.create_entity(
            "IfcPropertySingleValue", key, None, model.create_entity(measure, value)
        )
        for key, (measure, value) in values.items()
    ]
    whole = model.create_entity(
        "IfcPropertySet", ifcopenshell.guid.new(), owner(model), name, None, properties
    )
    model.create_entity(
        "IfcRelDefinesByProperties", ifcopenshell.guid.new(), owner(model), None, None,
        elements, whole,
    )  # fmt: skip
    return whole


def add_quantities(model, element, values):
    """Give an element base quantities; values are pairs of a class and its value, by name."""
    quantities = [
        model.create_entity(ifc_class, key, None, None, value)
        for key, (ifc_class, value) in values.items()
    ]
    whole = model.create_entity(
        "IfcElementQuantity", ifcopenshell.guid.new(), owner(model), "Qto_BeamBaseQuantities",
        Quantities=quantities,
    )  # fmt: skip
    model.create_entity(
        "IfcRelDefinesByProperties", ifcopenshell.guid.new(), owner(model), None, None,
        [element], whole,
    )  # fmt: skip


def box(element):
    """Lowest and highest corner of an element as drawn, in its own axes, m."""
    settings = ifcopenshell.geom.settings()
    settings.set("use-world-coords", False)
    vertices = ifcopenshell.geom.create_shape(settings, element).geometry.verts
    points = list(zip(vertices[::3], vertices[1::3], vertices[2::3], strict=True))
    return [min(c) for c in zip(*points, strict=True)], [max(c) for c in zip(*points, strict=True)]


def size(element):
    low, high = box(element)
    return [b - a for a, b in zip(low, high, strict=True)]


def complaints(path):
    logger = ifcopenshell.validate.json_logger()
    ifcopenshell.validate.validate(str(path), logger, express_rules=True)
    return sorted(str(s["message"]) for s in logger.statements)


def texts(path):
    return {e.id(): e.to_string() for e in ifcopenshell.open(path)}


def differing(before, after):
    """Entities of ``before`` that are not the same in ``after``, as classes with their names."""
    old, new = texts(before), texts(after)
    model = ifcopenshell.open(before)
    gone = [model.by_id(n) for n in old if new.get(n) != old[n]]
    return sorted((e.is_a(), getattr(e, "Name", None) or "") for e in gone)


def psets(element):
    """Values of the property sets and quantities of an element, by "set.name"."""
    found = {}
    for relation in element.IsDefinedBy:
        if relation.is_a("IfcRelDefinesByProperties"):
            whole = relation.RelatingPropertyDefinition
            for item in getattr(whole, "HasProperties", None) or whole.Quantities:
                if item.is_a("IfcPropertySingleValue"):
                    found[f"{whole.Name}.{item.Name}"] = item.NominalValue.wrappedValue
                elif item.is_a("IfcPhysicalSimpleQuantity"):
                    found[f"{whole.Name}.{item.Name}"] = item[3]
    return found


def profile_of(element):
    """Name of the profile in the material association of an element, "" where there is none."""
    for relation in element.HasAssociations:
        if relation.is_a("IfcRelAssociatesMaterial"):
            select = relation.RelatingMaterial
            if select.is_a("IfcMaterialProfileSetUsage"):
                return select.ForProfileSet.MaterialProfiles[0].Profile.ProfileName
            if select.is_a("IfcMaterialProfileSet"):
                return select.MaterialProfiles[0].Profile.ProfileName
        if relation.is_a("IfcRelAssociatesProfileProperties"):
            return relation.RelatingProfileProperties.ProfileName
    return ""
