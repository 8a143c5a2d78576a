"""Files that belong to the add-on: icons and translations."""

from __future__ import annotations

from pathlib import Path

FOLDER = Path(__file__).resolve().parent


def icon(name: str) -> str:
    """Return the path of an icon; FreeCAD wants a text."""
    return str(FOLDER / "icons" / name)
