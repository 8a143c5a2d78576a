"""What units are made of: SI units of the standard, known names, and dimensions of each kind.

Sources: IFC4 ADD2 TC1, enumerations IfcUnitEnum, IfcDerivedUnitEnum, IfcSIUnitName and IfcSIPrefix;
foot, inch and pound as agreed in 1959, US survey foot 1200/3937 m (NIST Special Publication 811).
"""

from __future__ import annotations

import math

from analysis_core.units import FOOT, INCH, POUND_FORCE, POUND_MASS, STANDARD_GRAVITY

# Exponents of mass, length, time, temperature.  Angles have none.
Dimension = tuple[int, int, int, int]
Parts = tuple[tuple[str, int], ...]

PREFIXES = {
    "EXA": 1e18, "PETA": 1e15, "TERA": 1e12, "GIGA": 1e9, "MEGA": 1e6, "KILO": 1e3, "HECTO": 1e2,
    "DECA": 1e1, "DECI": 1e-1, "CENTI": 1e-2, "MILLI": 1e-3, "MICRO": 1e-6, "NANO": 1e-9,
    "PICO": 1e-12, "FEMTO": 1e-15, "ATTO": 1e-18,
}  # fmt: skip

# SI name: factor without a prefix, power to which a prefix is raised, dimension.
SI_UNITS: dict[str, tuple[float, int, Dimension]] = {
    "METRE": (1.0, 1, (0, 1, 0, 0)),
    "SQUARE_METRE": (1.0, 2, (0, 2, 0, 0)),
    "CUBIC_METRE": (1.0, 3, (0, 3, 0, 0)),
    "GRAM": (1e-3, 1, (1, 0, 0, 0)),
    "SECOND": (1.0, 1, (0, 0, 1, 0)),
    "KELVIN": (1.0, 1, (0, 0, 0, 1)),
    "DEGREE_CELSIUS": (1.0, 1, (0, 0, 0, 1)),  # only differences of temperature are read
    "NEWTON": (1.0, 1, (1, 1, -2, 0)),
    "PASCAL": (1.0, 1, (1, -1, -2, 0)),
    "JOULE": (1.0, 1, (1, 2, -2, 0)),
    "WATT": (1.0, 1, (1, 2, -3, 0)),
    "HERTZ": (1.0, 1, (0, 0, -1, 0)),
    "RADIAN": (1.0, 1, (0, 0, 0, 0)),
    "STERADIAN": (1.0, 1, (0, 0, 0, 0)),
}

# Names whose size everybody knows, by kind, in SI.
KNOWN_SIZES: dict[str, dict[str, float]] = {
    "LENGTHUNIT": {
        "inch": INCH, "in": INCH, "foot": FOOT, "feet": FOOT, "ft": FOOT, "yard": 3.0 * FOOT,
        "mile": 5280.0 * FOOT, "us survey foot": 1200.0 / 3937.0,
    },
    "AREAUNIT": {
        "square inch": INCH**2, "square foot": FOOT**2, "square feet": FOOT**2,
        "square yard": 9.0 * FOOT**2,
    },
    "VOLUMEUNIT": {
        "cubic inch": INCH**3, "cubic foot": FOOT**3, "cubic feet": FOOT**3,
        "cubic yard": 27.0 * FOOT**3,
    },
    "PLANEANGLEUNIT": {"degree": math.pi / 180.0, "deg": math.pi / 180.0, "gon": math.pi / 200.0},
    "MASSUNIT": {"pound": POUND_MASS, "lb": POUND_MASS, "ton us": 2000.0 * POUND_MASS},
    "FORCEUNIT": {
        "pound-force": POUND_FORCE, "lbf": POUND_FORCE, "pound force": POUND_FORCE,
        "kip": 1000.0 * POUND_FORCE, "kip-force": 1000.0 * POUND_FORCE,
        "kilogram-force": STANDARD_GRAVITY, "kgf": STANDARD_GRAVITY,
    },
    "PRESSUREUNIT": {
        "pound-force per square inch": POUND_FORCE / INCH**2, "psi": POUND_FORCE / INCH**2,
        "ksi": 1000.0 * POUND_FORCE / INCH**2, "psf": POUND_FORCE / FOOT**2,
        "pound-force per square foot": POUND_FORCE / FOOT**2,
    },
    "THERMODYNAMICTEMPERATUREUNIT": {"fahrenheit": 5.0 / 9.0, "degree fahrenheit": 5.0 / 9.0},
}  # fmt: skip

_FORCE: Dimension = (1, 1, -2, 0)
_MOMENT: Dimension = (1, 2, -2, 0)
_PRESSURE: Dimension = (1, -1, -2, 0)
_PER_LENGTH: Dimension = (1, 0, -2, 0)

# Kind of unit: its dimension, what to call it, and of which kinds it is made where the file does
# not assign it (empty: SI).  Kinds with mass stay SI: architectural files often assign the gram
# and mean kilograms per cubic metre.  Stiffness against rotation stays per radian: degrees are
# assigned for drawing.
KINDS: dict[str, tuple[Dimension, str, Parts]] = {
    "LENGTHUNIT": ((0, 1, 0, 0), "length", ()),
    "AREAUNIT": ((0, 2, 0, 0), "area", (("LENGTHUNIT", 2),)),
    "VOLUMEUNIT": ((0, 3, 0, 0), "volume", (("LENGTHUNIT", 3),)),
    "PLANEANGLEUNIT": ((0, 0, 0, 0), "angle", ()),
    "MASSUNIT": ((1, 0, 0, 0), "mass", ()),
    "TIMEUNIT": ((0, 0, 1, 0), "time", ()),
    "FORCEUNIT": (_FORCE, "force", ()),
    "PRESSUREUNIT": (_PRESSURE, "pressure", (("FORCEUNIT", 1), ("LENGTHUNIT", -2))),
    "THERMODYNAMICTEMPERATUREUNIT": ((0, 0, 0, 1), "temperature", ()),
    "TORQUEUNIT": (_MOMENT, "moment", (("FORCEUNIT", 1), ("LENGTHUNIT", 1))),
    "LINEARFORCEUNIT": (_PER_LENGTH, "line load", (("FORCEUNIT", 1), ("LENGTHUNIT", -1))),
    "LINEARMOMENTUNIT": (_FORCE, "moment per length", (("FORCEUNIT", 1),)),
    "PLANARFORCEUNIT": (_PRESSURE, "area load", (("FORCEUNIT", 1), ("LENGTHUNIT", -2))),
    "LINEARSTIFFNESSUNIT": (
        _PER_LENGTH, "stiffness of a spring", (("FORCEUNIT", 1), ("LENGTHUNIT", -1))),
    "ROTATIONALSTIFFNESSUNIT": (
        _MOMENT, "rotational stiffness", (("FORCEUNIT", 1), ("LENGTHUNIT", 1))),
    "MODULUSOFSUBGRADEREACTIONUNIT": (
        (1, -2, -2, 0), "subgrade reaction", (("FORCEUNIT", 1), ("LENGTHUNIT", -3))),
    "MODULUSOFLINEARSUBGRADEREACTIONUNIT": (
        _PRESSURE, "linear subgrade reaction", (("FORCEUNIT", 1), ("LENGTHUNIT", -2))),
    "MODULUSOFROTATIONALSUBGRADEREACTIONUNIT": (
        _FORCE, "rotational subgrade reaction", (("FORCEUNIT", 1),)),
    "MODULUSOFELASTICITYUNIT": (_PRESSURE, "modulus of elasticity", (("PRESSUREUNIT", 1),)),
    "SHEARMODULUSUNIT": (_PRESSURE, "shear modulus", (("PRESSUREUNIT", 1),)),
    "MOMENTOFINERTIAUNIT": ((0, 4, 0, 0), "second moment of area", (("LENGTHUNIT", 4),)),
    "SECTIONMODULUSUNIT": ((0, 3, 0, 0), "section modulus", (("LENGTHUNIT", 3),)),
    "SECTIONAREAINTEGRALUNIT": ((0, 5, 0, 0), "section area integral", (("LENGTHUNIT", 5),)),
    "WARPINGCONSTANTUNIT": ((0, 6, 0, 0), "warping constant", (("LENGTHUNIT", 6),)),
    "WARPINGMOMENTUNIT": (
        (1, 3, -2, 0), "warping moment", (("FORCEUNIT", 1), ("LENGTHUNIT", 2))),
    "CURVATUREUNIT": ((0, -1, 0, 0), "curvature", (("LENGTHUNIT", -1),)),
    "MASSDENSITYUNIT": ((1, -3, 0, 0), "density", ()),
    "MASSPERLENGTHUNIT": ((1, -1, 0, 0), "mass per length", ()),
    "ACCELERATIONUNIT": ((0, 1, -2, 0), "acceleration", ()),
    "THERMALEXPANSIONCOEFFICIENTUNIT": (
        (0, 0, 0, -1), "thermal expansion", (("THERMODYNAMICTEMPERATUREUNIT", -1),)),
}  # fmt: skip

# Measure of the standard: kind of unit it is given in.
MEASURES = {
    "IfcLengthMeasure": "LENGTHUNIT",
    "IfcPositiveLengthMeasure": "LENGTHUNIT",
    "IfcNonNegativeLengthMeasure": "LENGTHUNIT",
    "IfcAreaMeasure": "AREAUNIT",
    "IfcVolumeMeasure": "VOLUMEUNIT",
    "IfcPlaneAngleMeasure": "PLANEANGLEUNIT",
    "IfcPositivePlaneAngleMeasure": "PLANEANGLEUNIT",
    "IfcMassMeasure": "MASSUNIT",
    "IfcTimeMeasure": "TIMEUNIT",
    "IfcForceMeasure": "FORCEUNIT",
    "IfcPressureMeasure": "PRESSUREUNIT",
    "IfcThermodynamicTemperatureMeasure": "THERMODYNAMICTEMPERATUREUNIT",
    "IfcTorqueMeasure": "TORQUEUNIT",
    "IfcLinearForceMeasure": "LINEARFORCEUNIT",
    "IfcLinearMomentMeasure": "LINEARMOMENTUNIT",
    "IfcPlanarForceMeasure": "PLANARFORCEUNIT",
    "IfcLinearStiffnessMeasure": "LINEARSTIFFNESSUNIT",
    "IfcRotationalStiffnessMeasure": "ROTATIONALSTIFFNESSUNIT",
    "IfcModulusOfSubgradeReactionMeasure": "MODULUSOFSUBGRADEREACTIONUNIT",
    "IfcModulusOfLinearSubgradeReactionMeasure": "MODULUSOFLINEARSUBGRADEREACTIONUNIT",
    "IfcModulusOfRotationalSubgradeReactionMeasure": "MODULUSOFROTATIONALSUBGRADEREACTIONUNIT",
    "IfcModulusOfElasticityMeasure": "MODULUSOFELASTICITYUNIT",
    "IfcShearModulusMeasure": "SHEARMODULUSUNIT",
    "IfcMomentOfInertiaMeasure": "MOMENTOFINERTIAUNIT",
    "IfcSectionModulusMeasure": "SECTIONMODULUSUNIT",
    "IfcSectionalAreaIntegralMeasure": "SECTIONAREAINTEGRALUNIT",
    "IfcWarpingConstantMeasure": "WARPINGCONSTANTUNIT",
    "IfcWarpingMomentMeasure": "WARPINGMOMENTUNIT",
    "IfcCurvatureMeasure": "CURVATUREUNIT",
    "IfcMassDensityMeasure": "MASSDENSITYUNIT",
    "IfcMassPerLengthMeasure": "MASSPERLENGTHUNIT",
    "IfcAccelerationMeasure": "ACCELERATIONUNIT",
    "IfcThermalExpansionCoefficientMeasure": "THERMALEXPANSIONCOEFFICIENTUNIT",
}
