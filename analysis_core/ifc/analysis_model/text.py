"""The small change of an analysis model as text: rooted entities, points, shapes, placements."""

from __future__ import annotations

from collections.abc import Sequence

from analysis_core.ifc.file_units import FileUnits
from analysis_core.ifc.global_ids import global_id
from analysis_core.ifc.posting.ours import MODEL_TYPE
from analysis_core.ifc.step.append import Lines
from analysis_core.ifc.step.values import label, real
from analysis_core.model import Point

Vector = tuple[float, float, float]
UP: Vector = (0.0, 0.0, 1.0)


class ModelText:
    """Writes into ``lines``; ``context`` is a reference to the geometric context of the file.

    ``old``: IFC2X3, where every item has a placement of its own and conditions are numbers.
    """

    def __init__(
        self, lines: Lines, *, schema: str, owner: str, units: FileUnits, context: str
    ) -> None:
        self.lines = lines
        self.old = schema == "IFC2X3"
        self.schema = schema
        self.owner = owner
        self.units = units
        self.context = context
        self.described: dict[tuple[object, ...], int] = {}
        """Materials and profiles written so far, by all that is stated of them."""

    def rooted(self, keyword: str, key: str, *attributes: str) -> int:
        """Add a rooted entity without name; its GlobalId follows from ``key``."""
        return self.lines.add(
            f"{keyword}('{global_id(f'analysis model/{key}')}',{self.owner},$,$,"
            f"{','.join(attributes)})"
        )

    def object(self, keyword: str, key: str, name: str, *attributes: str) -> int:
        """Add an object of ours with a name, marked as such by its ObjectType."""
        tail = "".join(f",{attribute}" for attribute in attributes)
        return self.lines.add(
            f"{keyword}('{global_id(f'analysis model/{key}')}',{self.owner},{label(name)},$,"
            f"'{MODEL_TYPE}'{tail})"
        )

    def measured(self, si: float, kind: str) -> str:
        """Return an SI value as an attribute measured in a kind of unit."""
        return real(si / self.units.to_si(kind) + 0.0)

    def direction(self, vector: Sequence[float]) -> int:
        """Return a direction."""
        return self.lines.shared(f"IFCDIRECTION(({','.join(real(c + 0.0) for c in vector)}))")

    def vertex(self, point: Point) -> int:
        """Return a vertex; one at the same place is the same."""
        return self.lines.shared(f"IFCVERTEXPOINT(#{self.point(point)})")

    def point(self, point: Point) -> int:
        """Return a point given in m."""
        coordinates = ",".join(self.measured(c, "LENGTHUNIT") for c in point)
        return self.lines.shared(f"IFCCARTESIANPOINT(({coordinates}))")

    def topology(self, kind: str, item: int) -> int:
        """Add a topology representation: "Vertex" or "Edge"."""
        return self.lines.add(
            f"IFCTOPOLOGYREPRESENTATION({self.context},'Reference','{kind}',(#{item}))"
        )

    def shape(self, kind: str, item: int) -> str:
        """Add a shape of one vertex or edge; return a reference to it."""
        return (
            f"#{self.lines.add(f'IFCPRODUCTDEFINITIONSHAPE($,$,(#{self.topology(kind, item)}))')}"
        )

    def axes(self, origin: Point = (0.0, 0.0, 0.0), along: Vector | None = None) -> int:
        """Return axes at a point, z up and x ``along``."""
        turned = "$,$" if along is None else f"#{self.direction(UP)},#{self.direction(along)}"
        return self.lines.shared(f"IFCAXIS2PLACEMENT3D(#{self.point(origin)},{turned})")

    def placement(self, origin: Point = (0.0, 0.0, 0.0), along: Vector | None = None) -> str:
        """Return a placement: one for all items; in IFC2X3 a new one, as it asks for."""
        text = f"IFCLOCALPLACEMENT($,#{self.axes(origin, along)})"
        return f"#{self.lines.add(text) if self.old else self.lines.shared(text)}"
