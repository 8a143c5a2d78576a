"""Make the sample models again: python sample_models/make_models.py [FOLDER]

Three versions (physical, analytical, both in one file) in three schemas, in millimetres, and two
more in inches and feet.  The files are the same to the byte each time.
"""

from __future__ import annotations

import sys
from pathlib import Path

HERE = Path(__file__).resolve().parent
sys.path.insert(0, str(HERE / "scripts"))

from analytical import AnalyticalPart  # noqa: E402  # the folder is put on the path first
from physical import PhysicalPart  # noqa: E402
from step import Writer  # noqa: E402

VERSIONS = [
    *((kind, schema, "mm") for kind in ("physical", "analytical", "both")
      for schema in ("IFC2X3", "IFC4", "IFC4X3")),
    ("physical", "IFC4", "in"),
    ("analytical", "IFC4", "ft"),
]  # fmt: skip


def make(kind: str, schema: str, units: str, folder: Path) -> Path:
    """Write one version and return its path."""
    suffix = {"mm": "", "in": "_inch", "ft": "_feet"}[units]
    path = folder / f"quarry_lane_{kind}_{schema.lower()}{suffix}.ifc"
    writer = Writer(schema, units, path.name)
    elements = {}
    if kind != "analytical":
        physical = PhysicalPart(writer)
        physical.write()
        elements = physical.elements
    if kind != "physical":
        AnalyticalPart(writer, elements).write()
    path.write_bytes(writer.file.to_string().encode("utf-8"))
    return path


def main() -> None:
    folder = Path(sys.argv[1]) if len(sys.argv) > 1 else HERE
    for kind, schema, units in VERSIONS:
        print(make(kind, schema, units, folder).name)


if __name__ == "__main__":
    main()
