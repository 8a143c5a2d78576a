"""Writes a frame of any size as an IFC file, quickly and as text: for benchmarks.

Storeys of beam lines over columns.  A line has five beams and five columns: four spans of
different lengths and a cantilever, each beam an element of its own with axis, extrusion, type,
material, property set and quantities, as authoring tools write them (about 20 entities an
element).

    python tests/benchmarks/synthetic.py 10000 frame.ifc
"""

from __future__ import annotations

import sys
from collections.abc import Iterator
from pathlib import Path

SPANS = (7200, 6000, 8400, 6600, 1500)  # mm; the last one is the cantilever
LINE_SPACING = 5400
LINES_PER_STOREY = 40
STOREY_HEIGHT = 3600
SECTIONS = (  # name, depth, width, web, flange, fillet; mm, EN 10365 from memory
    ("IPE 400", 400.0, 180.0, 8.6, 13.5, 21.0),
    ("IPE 360", 360.0, 170.0, 8.0, 12.7, 18.0),
    ("IPE 450", 450.0, 190.0, 9.4, 14.6, 21.0),
)
COLUMN = ("HEB 300", 300.0, 300.0, 11.0, 19.0, 27.0)
_DIGITS = "0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz_$"


def write_frame(path: str | Path, beams: int, schema: str = "IFC4") -> int:
    """Write a frame of ``beams`` beams and as many columns; return the number of entities."""
    if schema not in ("IFC2X3", "IFC4"):
        raise ValueError(f"schema must be IFC2X3 or IFC4; got {schema}")
    writer = _Writer(schema)
    header = (
        "ISO-10303-21;\nHEADER;\nFILE_DESCRIPTION(('ViewDefinition [CoordinationView]'),'2;1');\n"
        f"FILE_NAME('frame.ifc','2024-01-01T00:00:00',(''),(''),'','','');\n"
        f"FILE_SCHEMA(('{schema}'));\nENDSEC;\nDATA;\n"
    )
    with Path(path).open("w", encoding="ascii", newline="\n") as file:
        file.write(header)
        for chunk in writer.frame(beams):
            file.write(chunk)
        file.write("ENDSEC;\nEND-ISO-10303-21;\n")
    return writer.last


class _Writer:
    def __init__(self, schema: str) -> None:
        self.schema = schema
        self.last = 0
        self.lines: list[str] = []
        self.type_at_end = ",$" if schema == "IFC4" else ""

    def add(self, text: str) -> int:
        self.last += 1
        self.lines.append(f"#{self.last}={text};\n")
        return self.last

    def guid(self) -> str:
        number, text = (self.last + 1) * 0x9E3779B97F4A7C15 % (1 << 126), ""
        for _ in range(22):
            text = _DIGITS[number & 63] + text
            number >>= 6
        return _DIGITS[_DIGITS.index(text[0]) & 3] + text[1:]

    def flush(self) -> str:
        text = "".join(self.lines)
        self.lines.clear()
        return text

    def frame(self, beams: int) -> Iterator[str]:
        self.start()
        yield self.flush()
        count = -(-beams // len(SPANS))
        left = beams
        for line in range(count):
            storey = line // LINES_PER_STOREY
            if line % LINES_PER_STOREY == 0:
                self.open_storey(storey)
            self.line(line, storey, min(left, len(SPANS)))
            left -= len(SPANS)
            if line % LINES_PER_STOREY == LINES_PER_STOREY - 1 or line == count - 1:
                self.close_storey()
                yield self.flush()
        self.finish()
        yield self.flush()

    def start(self) -> None:
        person = self.add("IFCPERSON($,'Nobody',$,$,$,$,$,$)")
        organisation = self.add("IFCORGANIZATION($,'None',$,$,$)")
        both = self.add(f"IFCPERSONANDORGANIZATION(#{person},#{organisation},$)")
        application = self.add(f"IFCAPPLICATION(#{organisation},'1','synthetic','synthetic')")
        self.owner = self.add(f"IFCOWNERHISTORY(#{both},#{application},$,.ADDED.,$,$,$,0)")
        units = [
            self.add("IFCSIUNIT(*,.LENGTHUNIT.,.MILLI.,.METRE.)"),
            self.add("IFCSIUNIT(*,.AREAUNIT.,$,.SQUARE_METRE.)"),
            self.add("IFCSIUNIT(*,.VOLUMEUNIT.,$,.CUBIC_METRE.)"),
            self.add("IFCSIUNIT(*,.FORCEUNIT.,$,.NEWTON.)"),
            self.add("IFCSIUNIT(*,.PRESSUREUNIT.,$,.PASCAL.)"),
            self.add("IFCSIUNIT(*,.MASSUNIT.,.KILO.,.GRAM.)"),
            self.add("IFCSIUNIT(*,.PLANEANGLEUNIT.,$,.RADIAN.)"),
        ]
        assigned = self.add(f"IFCUNITASSIGNMENT(({','.join(f'#{u}' for u in units)}))")
        self.origin = self.add("IFCCARTESIANPOINT((0.,0.,0.))")
        self.x = self.add("IFCDIRECTION((1.,0.,0.))")
        self.y = self.add("IFCDIRECTION((0.,1.,0.))")
        self.z = self.add("IFCDIRECTION((0.,0.,1.))")
        world = self.add(f"IFCAXIS2PLACEMENT3D(#{self.origin},$,$)")
        self.world = world
        model = self.add(f"IFCGEOMETRICREPRESENTATIONCONTEXT($,'Model',3,1.E-05,#{world},$)")
        sub = "IFCGEOMETRICREPRESENTATIONSUBCONTEXT('{}','Model',*,*,*,*,#{},$,.{}_VIEW.,$)"
        self.body = self.add(sub.format("Body", model, "MODEL"))
        self.axis = self.add(sub.format("Axis", model, "GRAPH"))
        project = self.add(
            f"IFCPROJECT('{self.guid()}',#{self.owner},'Frame',$,$,$,$,(#{model}),#{assigned})"
        )
        self.top = self.add(f"IFCLOCALPLACEMENT($,#{world})")
        self.building = self.add(
            f"IFCBUILDING('{self.guid()}',#{self.owner},'Frame',$,$,#{self.top},$,$,.ELEMENT.,"
            f"$,$,$)"
        )
        self.relate("IFCRELAGGREGATES", project, [self.building])
        self.storeys: list[int] = []
        self.members: dict[int, list[int]] = {}
        # The section's depth upward, extruded along the element's x (beams) or z (columns).
        self.along_x = self.add(f"IFCAXIS2PLACEMENT3D(#{self.origin},#{self.x},#{self.y})")
        self.profiles = [self.profile(*section) for section in SECTIONS]
        self.column_profile = self.profile(*COLUMN)
        names = [section[0] for section in SECTIONS]
        self.types = [self.element_type("BEAM", name) for name in names]
        self.column_type = self.element_type("COLUMN", COLUMN[0])
        name = "IFCMATERIAL('S355')" if self.schema == "IFC2X3" else "IFCMATERIAL('S355',$,$)"
        self.material = self.add(name)

    def profile(
        self, name: str, depth: float, width: float, web: float, flange: float, fillet: float
    ) -> int:
        centre = self.add("IFCCARTESIANPOINT((0.,0.))")
        at = self.add(f"IFCAXIS2PLACEMENT2D(#{centre},$)")
        tail = "" if self.schema == "IFC2X3" else ",$,$"
        return self.add(
            f"IFCISHAPEPROFILEDEF(.AREA.,'{name}',#{at},{width},{depth},{web},{flange},{fillet}"
            f"{tail})"
        )

    def element_type(self, kind: str, name: str) -> int:
        number = self.add(
            f"IFC{kind}TYPE('{self.guid()}',#{self.owner},'{name}',$,$,$,$,$,$,.{kind}.)"
        )
        self.members[number] = []
        return number

    def relate(self, ifc_class: str, one: int, many: list[int]) -> None:
        listed = ",".join(f"#{number}" for number in many)
        self.add(f"{ifc_class}('{self.guid()}',#{self.owner},$,$,#{one},({listed}))")

    def spread(self, ifc_class: str, many: list[int], one: int) -> None:
        listed = ",".join(f"#{number}" for number in many)
        self.add(f"{ifc_class}('{self.guid()}',#{self.owner},$,$,({listed}),#{one})")

    def open_storey(self, index: int) -> None:
        level = (index + 1) * STOREY_HEIGHT
        point = self.add(f"IFCCARTESIANPOINT((0.,0.,{level}.))")
        at = self.add(f"IFCAXIS2PLACEMENT3D(#{point},$,$)")
        self.storey_placement = self.add(f"IFCLOCALPLACEMENT(#{self.top},#{at})")
        self.storey = self.add(
            f"IFCBUILDINGSTOREY('{self.guid()}',#{self.owner},'Storey {index + 1}',$,$,"
            f"#{self.storey_placement},$,$,.ELEMENT.,{level}.)"
        )
        self.storeys.append(self.storey)
        self.contained: list[int] = []

    def close_storey(self) -> None:
        self.spread("IFCRELCONTAINEDINSPATIALSTRUCTURE", self.contained, self.storey)

    def line(self, line: int, storey: int, spans: int) -> None:
        y = (line % LINES_PER_STOREY) * LINE_SPACING
        x = 0
        for index, span in enumerate(SPANS[:spans]):
            kind = (line + index) % len(SECTIONS) if index < 4 else 0
            self.beam(f"B{storey + 1}-{line}-{index}", kind, x, y, span)
            self.column(f"C{storey + 1}-{line}-{index}", x, y)
            x += span

    def placement(self, x: int, y: int, z: int) -> int:
        point = self.add(f"IFCCARTESIANPOINT(({x}.,{y}.,{z}.))")
        at = self.add(f"IFCAXIS2PLACEMENT3D(#{point},#{self.z},#{self.x})")
        return self.add(f"IFCLOCALPLACEMENT(#{self.storey_placement},#{at})")

    def beam(self, name: str, kind: int, x: int, y: int, length: int) -> None:
        depth = int(SECTIONS[kind][1])
        at = self.placement(x, y, -depth // 2)
        end = self.add(f"IFCCARTESIANPOINT(({length}.,0.,0.))")
        line = self.add(f"IFCPOLYLINE((#{self.origin},#{end}))")
        axis = self.add(f"IFCSHAPEREPRESENTATION(#{self.axis},'Axis','Curve3D',(#{line}))")
        solid = self.add(
            f"IFCEXTRUDEDAREASOLID(#{self.profiles[kind]},#{self.along_x},#{self.z},{length}.)"
        )
        body = self.add(f"IFCSHAPEREPRESENTATION(#{self.body},'Body','SweptSolid',(#{solid}))")
        shape = self.add(f"IFCPRODUCTDEFINITIONSHAPE($,$,(#{axis},#{body}))")
        self.element("BEAM", name, at, shape, length, self.types[kind])

    def column(self, name: str, x: int, y: int) -> None:
        at = self.placement(x, y, -STOREY_HEIGHT)
        solid = self.add(
            f"IFCEXTRUDEDAREASOLID(#{self.column_profile},#{self.world},#{self.z},{STOREY_HEIGHT}.)"
        )
        body = self.add(f"IFCSHAPEREPRESENTATION(#{self.body},'Body','SweptSolid',(#{solid}))")
        shape = self.add(f"IFCPRODUCTDEFINITIONSHAPE($,$,(#{body}))")
        self.element("COLUMN", name, at, shape, STOREY_HEIGHT, self.column_type)

    def element(self, kind: str, name: str, at: int, shape: int, length: int, type_: int) -> None:
        number = self.add(
            f"IFC{kind}('{self.guid()}',#{self.owner},'{name}',$,$,#{at},#{shape},'{self.last}'"
            f"{self.type_at_end})"
        )
        self.contained.append(number)
        self.members[type_].append(number)
        values = [
            self.add(f"IFCPROPERTYSINGLEVALUE('Reference',$,IFCIDENTIFIER('{name}'),$)"),
            self.add("IFCPROPERTYSINGLEVALUE('LoadBearing',$,IFCBOOLEAN(.T.),$)"),
            self.add("IFCPROPERTYSINGLEVALUE('IsExternal',$,IFCBOOLEAN(.F.),$)"),
            self.add("IFCPROPERTYSINGLEVALUE('FireRating',$,IFCLABEL('R60'),$)"),
            self.add(f"IFCPROPERTYSINGLEVALUE('Span',$,IFCPOSITIVELENGTHMEASURE({length}.),$)"),
        ]
        listed = ",".join(f"#{value}" for value in values)
        common = self.add(
            f"IFCPROPERTYSET('{self.guid()}',#{self.owner},'Pset_{kind.capitalize()}Common',$,"
            f"({listed}))"
        )
        self.spread("IFCRELDEFINESBYPROPERTIES", [number], common)
        tail = ",$" if self.schema == "IFC4" else ""
        size = self.add(f"IFCQUANTITYLENGTH('Length',$,$,{length}.{tail})")
        quantities = self.add(
            f"IFCELEMENTQUANTITY('{self.guid()}',#{self.owner},'BaseQuantities',$,$,(#{size}))"
        )
        self.spread("IFCRELDEFINESBYPROPERTIES", [number], quantities)

    def finish(self) -> None:
        self.relate("IFCRELAGGREGATES", self.building, self.storeys)
        everything: list[int] = []
        for type_, members in self.members.items():
            if members:
                self.spread("IFCRELDEFINESBYTYPE", members, type_)
                everything += members
        self.spread("IFCRELASSOCIATESMATERIAL", everything, self.material)


if __name__ == "__main__":
    if len(sys.argv) < 3:
        sys.exit("usage: synthetic.py NUMBER_OF_BEAMS FILE.ifc [IFC2X3|IFC4]")
    written = write_frame(sys.argv[2], int(sys.argv[1]), *sys.argv[3:4])
    print(f"{sys.argv[2]}: {written:,} entities")
