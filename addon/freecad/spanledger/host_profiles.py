"""Where FreeCAD keeps the profiles that it offers, and the user's own beside them."""

from __future__ import annotations

import importlib.util
from collections.abc import Iterator
from pathlib import Path

import FreeCAD

_MODULES = ("Arch", "BIM")  # the workbench that keeps them changed its name
_FILE = "profiles.csv"


def profile_lists() -> list[Path]:
    """Return the lists of profiles that are there: FreeCAD's own first, then the user's."""
    found: dict[Path, None] = {}
    for path in _places():
        if path.is_file():
            found.setdefault(path.resolve())
    return list(found)


def _places() -> Iterator[Path]:
    resources, user = (
        Path(folder) for folder in (FreeCAD.getResourceDir(), FreeCAD.getUserAppDataDir())
    )
    for name in _MODULES:
        yield resources / "Mod" / name / "Presets" / _FILE
    module = importlib.util.find_spec("ArchProfile")  # on the path once FreeCAD has started
    if module is not None and module.origin:
        yield Path(module.origin).parent / "Presets" / _FILE
    for name in _MODULES:
        yield user / name / _FILE
