"""A thin layer over ifcopenshell for writing the sample models.

Names come first: each GlobalId is derived from the name of what it identifies, so that making
the models again gives the same files.
"""

from __future__ import annotations

import uuid
from typing import Any

import ifcopenshell
import ifcopenshell.guid

from scenario import PROJECT, Stuff

_NAMESPACE = uuid.UUID("6f7d3c52-51a5-4b5e-8a3f-3f0d6b9a7c11")
_STAMP = 1767225600  # 2026-01-01, the same every time

# Units by name: length in m, and the SI prefix or conversion that IFC wants.
LENGTHS = {"mm": (1e-3, "MILLI"), "ft": (0.3048, "foot"), "in": (0.0254, "inch")}
_POUND_FORCE = 4.4482216152605


class Writer:
    """One IFC file in the making.  ``length`` is the SI length of a unit, ``force`` of a force."""

    def __init__(self, schema: str, units: str, name: str) -> None:
        version = {"IFC4X3": (4, 3, 2, 0)}.get(schema)
        self.file = (
            ifcopenshell.file(schema_version=version)
            if version
            else ifcopenshell.file(schema=schema)
        )
        self.schema = schema
        self.name = name
        self.length, self._length_name = LENGTHS[units]
        self.imperial = units != "mm"
        self.force = 1e3 * _POUND_FORCE if self.imperial else 1e3
        self._header()
        self.owner = self._owner()
        self.project, self.body, self.axis = self._project()
        self._points: dict[tuple[float, ...], Any] = {}

    def new(self, ifc_class: str, **attributes: Any) -> Any:
        """Create an entity; the GlobalId comes from ``key`` or else from class and name."""
        key = attributes.pop("key", None)
        entity = self.file.create_entity(ifc_class)
        known = {entity.attribute_name(i) for i in range(len(entity))}
        if "GlobalId" in known:
            entity.GlobalId = self.global_id(f"{ifc_class}/{key or attributes.get('Name')}")
            entity.OwnerHistory = self.owner
        for attribute, value in attributes.items():
            setattr(entity, attribute, value)
        return entity

    def global_id(self, key: str) -> str:
        """A GlobalId that depends on the key alone."""
        return str(ifcopenshell.guid.compress(uuid.uuid5(_NAMESPACE, key).hex))

    def point(self, *coordinates: float) -> Any:
        """An IfcCartesianPoint from metres; equal points are shared."""
        key = tuple(round(c / self.length, 9) + 0.0 for c in coordinates)
        if key not in self._points:
            self._points[key] = self.file.create_entity("IfcCartesianPoint", key)
        return self._points[key]

    def direction(self, *ratios: float) -> Any:
        """An IfcDirection."""
        return self.file.create_entity("IfcDirection", tuple(float(r) for r in ratios))

    def placement(self, origin: Any, z: Any = None, x: Any = None) -> Any:
        """An IfcAxis2Placement3D."""
        return self.file.create_entity("IfcAxis2Placement3D", origin, z, x)

    def measure(self, ifc_type: str, value: float) -> Any:
        """A typed value, already in the units of the file."""
        return self.file.create_entity(ifc_type, value)

    def lengths(self, value: float) -> float:
        """Metres into the file's unit."""
        return round(value / self.length, 9)

    def forces(self, value: float, per_length: int = 0) -> float:
        """Newtons (over metres to a power) into the file's units."""
        return round(value / self.force * self.length**per_length, 9)

    @property
    def pressure(self) -> float:
        """SI value of the file's unit of stress."""
        return _POUND_FORCE * 1e3 / 0.0254**2 if self.imperial else 1e6

    def _header(self) -> None:
        header = self.file.header
        header.file_description.description = ("ViewDefinition [CoordinationView]",)
        header.file_name.name = self.name
        header.file_name.time_stamp = "2026-01-01T00:00:00"
        header.file_name.author = ("",)
        header.file_name.organization = ("",)
        header.file_name.preprocessor_version = "make_models"
        header.file_name.originating_system = "make_models"
        header.file_name.authorization = ""

    def _owner(self) -> Any:
        person = self.file.create_entity("IfcPerson", FamilyName="Modeller")
        firm = self.file.create_entity("IfcOrganization", Name="Invented")
        user = self.file.create_entity("IfcPersonAndOrganization", person, firm)
        program = self.file.create_entity("IfcApplication", firm, "1", "make_models", "make_models")
        return self.file.create_entity(
            "IfcOwnerHistory", OwningUser=user, OwningApplication=program,
            ChangeAction="NOCHANGE", CreationDate=_STAMP,
        )  # fmt: skip

    def _project(self) -> tuple[Any, Any, Any]:
        origin = self.file.create_entity("IfcCartesianPoint", (0.0, 0.0, 0.0))
        context = self.file.create_entity(
            "IfcGeometricRepresentationContext", None, "Model", 3, 1e-5, self.placement(origin)
        )
        body, axis = (
            self.file.create_entity(
                "IfcGeometricRepresentationSubContext", ContextIdentifier=name,
                ContextType="Model", ParentContext=context, TargetView=view,
            )
            for name, view in (("Body", "MODEL_VIEW"), ("Axis", "GRAPH_VIEW"))
        )  # fmt: skip
        project = self.new(
            "IfcProject", Name=PROJECT, RepresentationContexts=[context],
            UnitsInContext=self._units(),
        )  # fmt: skip
        self.context = context
        return project, body, axis

    def _units(self) -> Any:
        si = self._si
        angle = si("PLANEANGLEUNIT", "RADIAN")
        if not self.imperial:
            length, force = si("LENGTHUNIT", "METRE", "MILLI"), si("FORCEUNIT", "NEWTON", "KILO")
            pressure = si("PRESSUREUNIT", "PASCAL", "MEGA")
            area, volume = si("AREAUNIT", "SQUARE_METRE"), si("VOLUMEUNIT", "CUBIC_METRE")
            small_force, small_length = si("FORCEUNIT", "NEWTON"), length
        else:
            length = self._length_unit(self._length_name, self.length)
            force = self._conversion(
                "FORCEUNIT", "kip", self.force, si("FORCEUNIT", "NEWTON"), "IfcForceMeasure",
                (1, 1, -2),
            )  # fmt: skip
            pressure = self._conversion(
                "PRESSUREUNIT", "ksi", self.pressure, si("PRESSUREUNIT", "PASCAL"),
                "IfcPressureMeasure", (-1, 1, -2),
            )  # fmt: skip
            area = self._conversion(
                "AREAUNIT", "square foot", 0.3048**2, si("AREAUNIT", "SQUARE_METRE"),
                "IfcAreaMeasure", (2, 0, 0),
            )  # fmt: skip
            volume = self._conversion(
                "VOLUMEUNIT", "cubic foot", 0.3048**3, si("VOLUMEUNIT", "CUBIC_METRE"),
                "IfcVolumeMeasure", (3, 0, 0),
            )  # fmt: skip
            small_force, small_length = force, length
            if self._length_name != "inch":
                small_length = self._length_unit("inch", 0.0254)
        mass, metre = si("MASSUNIT", "GRAM", "KILO"), si("LENGTHUNIT", "METRE")
        kelvin = si("THERMODYNAMICTEMPERATUREUNIT", "KELVIN")
        derived = [
            self._derived("LINEARFORCEUNIT", (force, 1), (length, -1)),
            self._derived("TORQUEUNIT", (force, 1), (length, 1)),
            self._derived("MODULUSOFELASTICITYUNIT", (small_force, 1), (small_length, -2)),
            self._derived("MASSDENSITYUNIT", (mass, 1), (metre, -3)),
            self._derived("THERMALEXPANSIONCOEFFICIENTUNIT", (kelvin, -1)),
        ]
        units = [length, area, volume, angle, force, pressure, mass, kelvin, *derived]
        return self.file.create_entity("IfcUnitAssignment", units)

    def _si(self, kind: str, name: str, prefix: str | None = None) -> Any:
        return self.file.create_entity("IfcSIUnit", UnitType=kind, Prefix=prefix, Name=name)

    def _length_unit(self, name: str, metres: float) -> Any:
        base = self._si("LENGTHUNIT", "METRE")
        return self._conversion("LENGTHUNIT", name, metres, base, "IfcLengthMeasure", (1, 0, 0))

    def _conversion(
        self, kind: str, name: str, factor: float, base: Any, measure: str, powers: tuple[int, ...]
    ) -> Any:
        exponents = self.file.create_entity("IfcDimensionalExponents", *powers, 0, 0, 0, 0)
        value = self.file.create_entity("IfcMeasureWithUnit", self.measure(measure, factor), base)
        return self.file.create_entity("IfcConversionBasedUnit", exponents, kind, name, value)

    def _derived(self, kind: str, *elements: tuple[Any, int]) -> Any:
        parts = [self.file.create_entity("IfcDerivedUnitElement", u, p) for u, p in elements]
        return self.file.create_entity("IfcDerivedUnit", parts, kind)


def material(writer: Writer, stuff: Stuff) -> Any:
    """An IfcMaterial with its modulus and density, as the schema has it."""
    entity = writer.file.create_entity("IfcMaterial", Name=stuff.name)
    elastic = round(stuff.elastic / writer.pressure, 6)
    shear = round(stuff.shear / writer.pressure, 6)
    if writer.schema == "IFC2X3":
        writer.file.create_entity(
            "IfcMechanicalMaterialProperties", Material=entity, YoungModulus=elastic,
            ShearModulus=shear, ThermalExpansionCoefficient=1.0e-5,
        )  # fmt: skip
        writer.file.create_entity(
            "IfcGeneralMaterialProperties", Material=entity, MassDensity=stuff.density
        )
        return entity
    entity.Category = stuff.category
    for name, values in (
        ("Pset_MaterialMechanical", (
            ("YoungModulus", "IfcModulusOfElasticityMeasure", elastic),
            ("ShearModulus", "IfcModulusOfElasticityMeasure", shear),
            ("ThermalExpansionCoefficient", "IfcThermalExpansionCoefficientMeasure", 1.0e-5),
        )),
        ("Pset_MaterialCommon", (("MassDensity", "IfcMassDensityMeasure", stuff.density),)),
    ):  # fmt: skip
        properties = [
            writer.file.create_entity(
                "IfcPropertySingleValue", Name=key, NominalValue=writer.measure(kind, value)
            )
            for key, kind, value in values
        ]
        writer.file.create_entity(
            "IfcMaterialProperties", Name=name, Properties=properties, Material=entity
        )
    return entity
