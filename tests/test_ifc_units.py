"""The units of a file: what the project assigns, made of what, and what is assumed."""

from __future__ import annotations

import math
from pathlib import Path

import ifcopenshell
import pytest
from ifc_makers import UNIT_SETS, AnalysisFile, continuous_beam

from analysis_core.ifc.file_units import FileUnits, UnitError, read_units
from analysis_core.ifc.source import open_model

SHARED = Path(__file__).parents[2] / "shared" / "ifc"

# NIST Special Publication 811, appendix B.8, as printed there.
NIST = {
    "foot": 3.048e-1,
    "inch": 2.54e-2,
    "pound-force": 4.448222,
    "kip": 4.448222e3,
    "pound-force foot": 1.355818,
    "pound-force per foot": 1.459390e1,
    "pound-force per square inch": 6.894757e3,
    "kip per square inch": 6.894757e6,
}


class Project:
    """A file with a project, to which a test gives units."""

    def __init__(self, schema: str = "IFC4") -> None:
        self.file = ifcopenshell.file(schema=schema)
        self.units: list[object] = []

    def si(self, kind: str, name: str, prefix: str | None = None) -> object:
        return self.file.create_entity("IfcSIUnit", UnitType=kind, Prefix=prefix, Name=name)

    def converted(self, kind: str, name: str, factor: float | None, base: object) -> object:
        value = None if factor is None else self.file.create_entity("IfcReal", factor)
        measure = self.file.create_entity("IfcMeasureWithUnit", value, base)
        return self.file.create_entity(
            "IfcConversionBasedUnit", UnitType=kind, Name=name, ConversionFactor=measure
        )

    def derived(self, kind: str, *parts: tuple[object, int]) -> object:
        elements = [self.file.create_entity("IfcDerivedUnitElement", *part) for part in parts]
        return self.file.create_entity("IfcDerivedUnit", Elements=elements, UnitType=kind)

    def read(self, *units: object) -> tuple[FileUnits, dict[str, str]]:
        assignment = self.file.create_entity("IfcUnitAssignment", units)
        self.file.create_entity(
            "IfcProject", ifcopenshell.guid.new(), None, "P", UnitsInContext=assignment
        )
        found, findings = read_units(self.file, "t.ifc")
        return found, {finding.slug: finding.message for finding in findings}


@pytest.fixture
def project() -> Project:
    return Project()


def test_prefixes_count_once_for_lengths_and_twice_or_thrice_for_areas_and_volumes(
    project: Project,
) -> None:
    units, findings = project.read(
        project.si("LENGTHUNIT", "METRE", "MILLI"),
        project.si("AREAUNIT", "SQUARE_METRE", "CENTI"),
        project.si("VOLUMEUNIT", "CUBIC_METRE", "DECI"),
        project.si("FORCEUNIT", "NEWTON", "KILO"),
        project.si("PRESSUREUNIT", "PASCAL", "MEGA"),
        project.si("MASSUNIT", "GRAM", "KILO"),
        project.si("THERMODYNAMICTEMPERATUREUNIT", "DEGREE_CELSIUS"),
    )

    for kind, factor in (
        ("LENGTHUNIT", 1e-3), ("AREAUNIT", 1e-4), ("VOLUMEUNIT", 1e-3), ("FORCEUNIT", 1e3),
        ("PRESSUREUNIT", 1e6), ("MASSUNIT", 1.0), ("THERMODYNAMICTEMPERATUREUNIT", 1.0),
    ):  # fmt: skip
        assert units.to_si(kind) == pytest.approx(factor, rel=1e-15)
        assert units.to_si(kind) * units.from_si(kind) == pytest.approx(1.0, rel=1e-15)
    assert findings == {}
    assert units.findings() == ()


def test_feet_and_pounds_agree_with_published_factors(project: Project) -> None:
    foot = project.converted("LENGTHUNIT", "foot", 0.3048, project.si("LENGTHUNIT", "METRE"))
    pound = project.converted(
        "FORCEUNIT", "pound-force", 4.4482216152605, project.si("FORCEUNIT", "NEWTON")
    )
    units, findings = project.read(
        foot,
        pound,
        project.derived("LINEARFORCEUNIT", (pound, 1), (foot, -1)),
        project.derived("TORQUEUNIT", (pound, 1), (foot, 1)),
    )

    # The tolerance is that of the seven digits printed.
    assert units.length == pytest.approx(NIST["foot"], rel=1e-7)
    assert units.force == pytest.approx(NIST["pound-force"], rel=1e-7)
    assert units.to_si("LINEARFORCEUNIT") == pytest.approx(NIST["pound-force per foot"], rel=1e-6)
    assert units.to_si("TORQUEUNIT") == pytest.approx(NIST["pound-force foot"], rel=1e-6)
    assert findings == {}


def test_a_unit_that_is_declared_but_not_assigned_counts_for_nothing(project: Project) -> None:
    project.converted("LENGTHUNIT", "FOOT", 0.3048, project.si("LENGTHUNIT", "METRE"))
    project.file.create_entity(
        "IfcUnitAssignment", [project.si("FORCEUNIT", "NEWTON", "MEGA")]
    )  # of nothing
    units, _ = project.read(project.si("LENGTHUNIT", "METRE", "MILLI"))

    assert units.length == 1e-3
    assert units.missing("LENGTHUNIT", "FORCEUNIT") == ("FORCEUNIT",)
    assert set(units.entities) == {"LENGTHUNIT"}


def test_line_loads_are_made_of_force_and_length_where_both_are_assigned(project: Project) -> None:
    units, _ = project.read(
        project.si("LENGTHUNIT", "METRE", "MILLI"), project.si("FORCEUNIT", "NEWTON", "KILO")
    )

    assert units.to_si("LINEARFORCEUNIT") == pytest.approx(1e6, rel=1e-15)
    assert units.to_si("TORQUEUNIT") == pytest.approx(1.0, rel=1e-15)
    assert units.to_si("MODULUSOFELASTICITYUNIT") == pytest.approx(1e9, rel=1e-15)
    assert units.to_si("MOMENTOFINERTIAUNIT") == pytest.approx(1e-12, rel=1e-15)
    messages = {f.message.split("(")[1].split(")")[0]: f for f in units.findings()}
    # Kilonewtons per millimetre may well be meant as per metre: a thousand times as much.
    assert messages["LINEARFORCEUNIT"].severity == "warning"
    assert messages["MOMENTOFINERTIAUNIT"].severity == "note"
    assert "force and length" in messages["LINEARFORCEUNIT"].message
    assert "force and length" in messages["MODULUSOFELASTICITYUNIT"].message
    # A moment comes out in N·m either way, so there is nothing to say.
    assert "TORQUEUNIT" not in messages


def test_what_is_made_of_nothing_assigned_is_si_and_says_so_once(project: Project) -> None:
    units, _ = project.read(project.si("LENGTHUNIT", "METRE", "MILLI"))

    assert units.missing("FORCEUNIT", "LENGTHUNIT", "AREAUNIT") == ("FORCEUNIT", "AREAUNIT")
    assert [units.to_si("LINEARFORCEUNIT") for _ in range(3)] == [1.0] * 3
    assert units.to_si("AREAUNIT") == pytest.approx(1e-6)
    findings = units.findings()
    assert [(f.slug, f.severity) for f in findings] == [
        ("missing-unit", "note"), ("missing-unit", "warning")
    ]  # fmt: skip
    assert "area (AREAUNIT)" in findings[0].message
    assert "line load (LINEARFORCEUNIT); values were taken as SI" in findings[1].message


def test_densities_stay_in_kilograms_where_only_the_gram_is_assigned(project: Project) -> None:
    # Architectural files assign the gram and the cubic metre, and mean 7850 kg/m³ by 7850.
    units, _ = project.read(
        project.si("MASSUNIT", "GRAM"), project.si("VOLUMEUNIT", "CUBIC_METRE"),
        project.si("LENGTHUNIT", "METRE"),
    )  # fmt: skip
    assert units.to_si("MASSDENSITYUNIT") == 1.0


def test_stiffness_against_rotation_is_per_radian_unless_assigned_per_degree(
    project: Project,
) -> None:
    degree = project.converted(
        "PLANEANGLEUNIT", "DEGREE", math.pi / 180.0, project.si("PLANEANGLEUNIT", "RADIAN")
    )
    metre, newton = project.si("LENGTHUNIT", "METRE"), project.si("FORCEUNIT", "NEWTON")
    plain, _ = project.read(degree, metre, newton)
    assert plain.to_si("ROTATIONALSTIFFNESSUNIT") == 1.0

    stated = project.derived("ROTATIONALSTIFFNESSUNIT", (newton, 1), (metre, 1), (degree, -1))
    assert plain.of_entity(stated) == pytest.approx(180.0 / math.pi, rel=1e-15)


@pytest.mark.parametrize(
    ("name", "factor"), [("US survey foot", 1.0), ("foot", 0.3), ("INCH", 25.4), ("kip", 1000.0)]
)
def test_a_name_everybody_knows_with_another_size_is_a_finding(
    project: Project, name: str, factor: float
) -> None:
    kind, base = ("FORCEUNIT", "NEWTON") if name == "kip" else ("LENGTHUNIT", "METRE")
    units, findings = project.read(project.converted(kind, name, factor, project.si(kind, base)))

    assert units.to_si(kind) == factor
    assert set(findings) == {"unit-size"}
    assert f"'{name}'" in findings["unit-size"]


def test_rounded_factors_are_no_finding(project: Project) -> None:
    square = project.converted(
        "AREAUNIT", "square inch", 0.000645, project.si("AREAUNIT", "SQUARE_METRE")
    )
    assert project.read(square)[1] == {}


def test_a_modulus_made_of_a_mass_is_a_finding(project: Project) -> None:
    pound = project.converted(
        "MASSUNIT", "pound", 0.45359237, project.si("MASSUNIT", "GRAM", "KILO")
    )
    inch = project.converted("LENGTHUNIT", "inch", 0.0254, project.si("LENGTHUNIT", "METRE"))
    units, findings = project.read(
        project.derived("MODULUSOFELASTICITYUNIT", (pound, 1), (inch, -2))
    )

    assert set(findings) == {"unit-dimension"}
    assert "mass length^-2" in findings["unit-dimension"]
    assert units.to_si("MODULUSOFELASTICITYUNIT") == pytest.approx(703.0696, rel=1e-6)


def test_units_that_make_no_sense_are_findings_and_count_as_not_assigned(project: Project) -> None:
    metre = project.si("LENGTHUNIT", "METRE")
    file = project.file
    loop = file.create_entity("IfcConversionBasedUnit", UnitType="LENGTHUNIT", Name="loop")
    loop.ConversionFactor = file.create_entity(
        "IfcMeasureWithUnit", file.create_entity("IfcReal", 2.0), loop
    )
    for unit, reason in (
        (loop, "refers to itself"),
        (project.converted("LENGTHUNIT", "nil", 0.0, metre), "must be positive"),
        (project.converted("LENGTHUNIT", "minus", -2.0, metre), "must be positive"),
        (project.converted("LENGTHUNIT", "none", None, metre), "no number"),
        (file.create_entity("IfcConversionBasedUnit", UnitType="LENGTHUNIT", Name="bare"), "no "),
        (file.create_entity("IfcContextDependentUnit", UnitType="LENGTHUNIT", Name="x"), "size"),
        (project.derived("LINEARFORCEUNIT"), "made of nothing"),
        (project.derived("LINEARFORCEUNIT", (metre, 1), (loop, 1)), "refers to itself"),
        (
            project.derived(
                "LINEARFORCEUNIT", (project.converted("LENGTHUNIT", "huge", 1e300, metre), 3)
            ),
            "beyond all measure",
        ),
    ):
        units, findings = Project.read(project, unit)
        for entity in file.by_type("IfcProject"):
            file.remove(entity)
        assert reason in findings["unit-not-understood"], unit
        assert units.to_si("LENGTHUNIT") == 1.0
        with pytest.raises(UnitError):
            units.of_entity(unit)


def test_two_units_of_one_kind_are_a_finding_where_they_differ(project: Project) -> None:
    units, findings = project.read(
        project.si("LENGTHUNIT", "METRE", "MILLI"), project.si("LENGTHUNIT", "METRE")
    )
    assert units.length == 1e-3
    assert set(findings) == {"unit-assigned-twice"}


def test_currencies_are_no_matter(project: Project) -> None:
    money = project.file.create_entity("IfcMonetaryUnit", "EUR")
    assert project.read(money, project.si("LENGTHUNIT", "METRE"))[1] == {}


def test_a_project_without_units_is_one_finding_and_no_more(project: Project) -> None:
    units, findings = read_units(project.file, "t.ifc")
    assert [f.slug for f in findings] == ["no-units"]
    assert units.length == units.force == units.angle == 1.0
    assert units.findings() == ()


def test_values_are_converted_by_their_measure_or_by_their_own_unit(project: Project) -> None:
    foot = project.converted("LENGTHUNIT", "foot", 0.3048, project.si("LENGTHUNIT", "METRE"))
    units, _ = project.read(project.si("LENGTHUNIT", "METRE", "MILLI"))
    create = project.file.create_entity

    assert units.value(create("IfcPositiveLengthMeasure", 250.0)) == pytest.approx(0.25)
    assert units.value(create("IfcLengthMeasure", 2.0), foot) == pytest.approx(0.6096)
    assert units.value(create("IfcReal", 3.0)) == 3.0
    assert units.of_measure("IfcForceMeasure") == 1.0
    with pytest.raises(TypeError):
        units.value(create("IfcLabel", "x"))
    with pytest.raises(TypeError):
        units.value(create("IfcBoolean", True))


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
@pytest.mark.parametrize("name", UNIT_SETS)
def test_the_unit_sets_of_the_makers_are_read_back(tmp_path: Path, schema: str, name: str) -> None:
    made = AnalysisFile(continuous_beam([5.0]), schema=schema, units=name)

    units = open_model(made.write(tmp_path / "t.ifc")).units

    for kind in ("LENGTHUNIT", "FORCEUNIT", "LINEARFORCEUNIT", "TORQUEUNIT", "LINEARSTIFFNESSUNIT",
                 "ROTATIONALSTIFFNESSUNIT", "MODULUSOFELASTICITYUNIT"):  # fmt: skip
        assert units.to_si(kind) == pytest.approx(made.units.factor(kind), rel=1e-12), kind


@pytest.mark.skipif(not SHARED.exists(), reason="the shared files are not here")
def test_units_of_real_files() -> None:
    portal = open_model(next(SHARED.glob("structural/S14*"))).units
    assert portal.length == 0.0254
    assert portal.force == 4.44822162
    assert portal.to_si("LINEARFORCEUNIT") == pytest.approx(175.126836, rel=1e-7)  # lbf/in
    assert open_model(next(SHARED.glob("physical/P22*"))).units.length == 1e-3
    mixed = open_model(next(SHARED.glob("odd/O19*"))).units
    assert mixed.length == 0.3048
    assert mixed.to_si("AREAUNIT") == 0.000645
