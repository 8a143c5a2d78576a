"""What a load of the standard says: forces and couples, or temperatures, and where they are.

All values come out in SI, in the axes in which the load is stated.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Any, Literal

from analysis_core.ifc.analytical.notes import is_kind
from analysis_core.ifc.file_units import FileUnits
from analysis_core.ifc.geometry.frames import Vector

NIL: Vector = (0.0, 0.0, 0.0)
Shape = Literal["continuous", "discrete"]

_FORCE_KINDS = ("FORCEUNIT",) * 3 + ("TORQUEUNIT",) * 3
_LINEAR_KINDS = ("LINEARFORCEUNIT",) * 3 + ("LINEARMOMENTUNIT",) * 3
_MOVEMENT_KINDS = ("LENGTHUNIT",) * 3 + ("PLANEANGLEUNIT",) * 3
_TEMPERATURE = "THERMODYNAMICTEMPERATUREUNIT"

# A half wave is drawn as so many straight pieces with the same total; its bending moments then
# differ from those of the curve by less than 0.1 %.
_WAVE_PIECES = 40
_WAVES = {"SINUS": (math.sin, math.pi, 2.0 / math.pi), "PARABOLA": (None, 0.0, 2.0 / 3.0)}


class LoadError(ValueError):
    """A load that is not understood; the message says why and completes "It was left out: "."""


@dataclass(frozen=True, slots=True)
class Load:
    """Samples along a member.

    ``stations`` are m from the start of the extent; None: over all of it, evenly spaced (one
    sample: constant).  ``note`` says what was assumed.
    """

    shape: Shape
    forces: tuple[Vector, ...]
    moments: tuple[Vector, ...]
    stations: tuple[float, ...] | None = None
    note: str = ""

    @property
    def empty(self) -> bool:
        """Whether it states no force and no couple at all."""
        return not any(any(v) for v in (*self.forces, *self.moments))

    def over(self, begin: float, end: float) -> Load:
        """Return the load on a member, for an extent from ``begin`` to ``end``, m.

        Where ``begin`` is the larger, the load runs against the member.
        """
        if begin > end:
            own = self.over(0.0, begin - end)
            return replace(
                own,
                forces=own.forces[::-1],
                moments=own.moments[::-1],
                stations=tuple(begin - station for station in (own.stations or ())[::-1]),
            )
        if self.stations is not None:
            return replace(self, stations=tuple(begin + station for station in self.stations))
        forces, moments = self.forces, self.moments
        if len(forces) == 1:
            forces, moments = (forces[0], forces[0]), (moments[0], moments[0])
        last = len(forces) - 1
        stations = tuple(begin + (end - begin) * i / last for i in range(last + 1))
        return replace(self, forces=forces, moments=moments, stations=stations)


def six(load: Any, units: FileUnits, kinds: Sequence[str]) -> tuple[Vector, Vector]:
    """Return attributes 1 to 6 of a load as two vectors in SI; what is not stated is 0."""
    values = [0.0] * 6
    get = load.get_argument
    for index, kind in enumerate(kinds):
        number = get(index + 1)
        if number:  # neither 0 nor not stated
            value = float(number)
            if not math.isfinite(value):
                raise LoadError("one of its values is not finite")
            values[index] = value * units.to_si(kind)
    a, b, c, d, e, f = values
    return (a, b, c), (d, e, f)


def point_force(load: Any, units: FileUnits) -> tuple[Vector, Vector]:
    """Return force and couple of an IfcStructuralLoadSingleForce."""
    return six(load, units, _FORCE_KINDS)


def movement(load: Any, units: FileUnits) -> tuple[Vector, Vector]:
    """Return displacement and rotation of an IfcStructuralLoadSingleDisplacement."""
    return six(load, units, _MOVEMENT_KINDS)


def temperatures(load: Any, units: FileUnits) -> tuple[float, float, float]:
    """Return the constant part and the differences along y and z (+ face minus - face), K."""
    factor = units.to_si(_TEMPERATURE)
    a, b, c = (float(load[i]) * factor if load[i] is not None else 0.0 for i in (1, 2, 3))
    return a, b, c


def curve_load(load: Any, distribution: str, units: FileUnits) -> Load:
    """Return the load of a curve action.  Raises LoadError where it is not understood."""
    if is_kind(load, "IfcStructuralLoadConfiguration"):
        return _configuration(load, distribution, units)
    if is_kind(load, "IfcStructuralLoadLinearForce"):
        force, moment = six(load, units, _LINEAR_KINDS)
        if distribution in _WAVES:
            return _wave(force, moment, distribution)
        note = ""
        if distribution not in ("CONST", "NOTDEFINED", "", "None"):
            note = f"it states one value for a distribution {distribution}; taken as constant"
        return Load("continuous", (force,), (moment,), None, note)
    if is_kind(load, "IfcStructuralLoadSingleForce"):
        raise LoadError(
            "it is a single force without a place on the member. Give it a vertex "
            "(IfcStructuralPointAction) or a location (IfcStructuralLoadConfiguration)"
        )
    raise LoadError(f"a load of class {load.is_a()} does not act along a member")


def varying_load(loads: Sequence[Any], stations: Sequence[float], units: FileUnits) -> Load:
    """Return the load of an IfcStructuralLinearActionVarying (IFC2X3)."""
    if len(loads) != len(stations):
        raise LoadError(f"it has {len(loads)} values for {len(stations)} places")
    pairs = [_sample(load, "IfcStructuralLoadLinearForce", units) for load in loads]
    return _in_order("continuous", pairs, stations)


def _configuration(load: Any, distribution: str, units: FileUnits) -> Load:
    values = load[1] or ()
    if not values:
        raise LoadError("its configuration holds no values")
    first = values[0].is_a()
    if first.startswith("IfcStructuralLoadSingleForce"):
        shape, expected = "discrete", "IfcStructuralLoadSingleForce"
    elif first == "IfcStructuralLoadLinearForce":
        shape, expected = "continuous", first
    else:
        raise LoadError(f"its configuration holds {first}, which does not act along a member")
    if shape == "continuous" and distribution == "DISCRETE":
        raise LoadError("it is called DISCRETE but states forces per length")
    pairs = [_sample(value, expected, units) for value in values]
    stations = _locations(load[2], len(pairs), units)
    if shape == "discrete":
        if stations is None:
            raise LoadError("its point forces have no locations")
        return _in_order("discrete", pairs, stations)
    if stations is None or len(pairs) == 1:
        forces, moments = zip(*pairs, strict=True)
        return Load("continuous", forces, moments, None, _spacing_note(len(pairs), distribution))
    return _in_order("continuous", pairs, stations)


def _spacing_note(count: int, distribution: str) -> str:
    if count == 1:
        return "" if distribution == "CONST" else "it states one value; taken as constant"
    if count == 2:
        return ""
    if distribution == "EQUIDISTANT":
        return "its values are taken as straight between evenly spaced places"
    return f"its {count} values have no locations; taken as evenly spaced"


def _sample(load: Any, expected: str, units: FileUnits) -> tuple[Vector, Vector]:
    if not is_kind(load, expected):
        raise LoadError(f"it mixes {load.is_a()} with {expected}")
    kinds = _FORCE_KINDS if expected == "IfcStructuralLoadSingleForce" else _LINEAR_KINDS
    return six(load, units, kinds)


def _locations(locations: Any, count: int, units: FileUnits) -> list[float] | None:
    if not locations:
        return None
    if len(locations) != count:
        raise LoadError(f"it has {count} values for {len(locations)} locations")
    if any(len(place) > 1 and place[1] for place in locations):
        raise LoadError("its locations have two coordinates; along a member there is one")
    return [float(place[0]) * units.length for place in locations]


def _in_order(
    shape: Shape, pairs: Sequence[tuple[Vector, Vector]], stations: Sequence[float]
) -> Load:
    """Return a load by ascending stations; the order stays where two stations are the same."""
    if not all(math.isfinite(station) for station in stations):
        raise LoadError("one of its locations is not finite")
    order = sorted(range(len(stations)), key=lambda i: stations[i])
    note = "" if order == list(range(len(stations))) else "its locations were put in order"
    return Load(
        shape,
        tuple(pairs[i][0] for i in order),
        tuple(pairs[i][1] for i in order),
        tuple(stations[i] for i in order),
        note,
    )


def _wave(force: Vector, moment: Vector, distribution: str) -> Load:
    function, reach, total = _WAVES[distribution]
    steps = [i / _WAVE_PIECES for i in range(_WAVE_PIECES + 1)]
    heights = [function(reach * u) if function else 4.0 * u * (1.0 - u) for u in steps]
    scale = total * _WAVE_PIECES / math.fsum(heights)  # the ends are 0, so this is the total
    scaled = [height * scale for height in heights]
    return Load(
        "continuous",
        tuple((h * force[0], h * force[1], h * force[2]) for h in scaled),
        tuple((h * moment[0], h * moment[1], h * moment[2]) for h in scaled),
        None,
        f"its half wave ({distribution}) is drawn as {_WAVE_PIECES} straight pieces of the same "
        f"total",
    )
