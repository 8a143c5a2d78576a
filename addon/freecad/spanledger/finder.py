"""Finds the analysis core and the packages it needs, without the user setting any path.

Imported before anything that needs them; imports only the standard library.  Folders of
packages go in front of ``sys.path``: behind the system's own packages, an older NumPy would win.
"""

from __future__ import annotations

import importlib.util
import os
import sys
from collections.abc import Iterator
from pathlib import Path

ENVIRONMENT = "SPANLEDGER_SITE"
PATH_FILE = "site-folder.txt"
NEEDED = {"numpy": "numpy", "ifcopenshell": "ifcopenshell", "yaml": "pyyaml"}
OLDEST_NUMPY = (1, 26)
_PACKAGE = Path(__file__).resolve().parent
_ADDON = _PACKAGE.parents[1]


def make_importable(preferred: str = "") -> str:
    """Put the core and its packages on ``sys.path``; return "" or what is missing, in a sentence.

    ``preferred`` is the folder of the preference, "" where none is set.  The first folder that
    exists is taken; where none does, what the system's Python finds has to do.
    """
    for folder in _site_folders(preferred):
        if folder.is_dir():
            _put_first(folder)
            break
    for folder in _core_folders():
        _put_first(folder)
    return _missing_sentence() or _old_numpy_sentence()


def missing_packages() -> list[str]:
    """Return the names, as packages are installed, of those that cannot be imported."""
    return [
        package for module, package in NEEDED.items() if importlib.util.find_spec(module) is None
    ]


def _core_folders() -> Iterator[Path]:
    """The checkout that the add-on belongs to; none where the core is installed by pip."""
    checkout = _ADDON.parent
    if (checkout / "analysis_core" / "__init__.py").is_file():
        yield checkout


def _site_folders(preferred: str) -> Iterator[Path]:
    """Folders that may hold the packages, the most deliberate choice first."""
    if os.environ.get(ENVIRONMENT):
        yield Path(os.environ[ENVIRONMENT])
    if preferred:
        yield Path(preferred)
    written = _PACKAGE / PATH_FILE
    if written.is_file():
        yield Path(written.read_text(encoding="utf-8").strip())
    yield _ADDON / "vendor"
    version = f"python{sys.version_info[0]}.{sys.version_info[1]}"
    yield _ADDON.parent / ".venv" / "lib" / version / "site-packages"
    yield _ADDON.parent / ".venv" / "Lib" / "site-packages"  # Windows


def _put_first(folder: Path) -> None:
    text = str(folder)
    if text in sys.path:
        sys.path.remove(text)
    sys.path.insert(0, text)
    importlib.invalidate_caches()


def _missing_sentence() -> str:
    if importlib.util.find_spec("analysis_core") is None:
        return (
            "Spanledger's analysis core was not found. Link the add-on from a checkout with "
            "addon/install, or install it with pip for the Python that FreeCAD uses."
        )
    missing = missing_packages()
    if not missing:
        return ""
    return (
        f"Spanledger needs {' and '.join(missing)} for Python "
        f"{sys.version_info[0]}.{sys.version_info[1]}, which FreeCAD does not find. "
        f"Run sample_models/run in the checkout, or set the folder that holds "
        f"{'it' if len(missing) == 1 else 'them'} in the environment variable {ENVIRONMENT}."
    )


def _old_numpy_sentence() -> str:
    """NumPy cannot be exchanged once another workbench has loaded it."""
    loaded = sys.modules.get("numpy")
    version = str(getattr(loaded, "__version__", "")).split(".")
    if loaded is None or tuple(int(part) for part in version[:2]) >= OLDEST_NUMPY:
        return ""
    return (
        f"NumPy {'.'.join(version)} was loaded before Spanledger; it needs "
        f"{OLDEST_NUMPY[0]}.{OLDEST_NUMPY[1]} or later. Start FreeCAD again and open this "
        f"workbench first."
    )
