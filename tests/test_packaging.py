"""What pip installs: an installed core must find every file that it reads beside its modules."""

from __future__ import annotations

import tomllib
from pathlib import Path

ROOT = Path(__file__).parents[1]
CORE = ROOT / "analysis_core"


def test_every_file_of_the_core_is_a_module_or_named_as_package_data():
    settings = tomllib.loads((ROOT / "pyproject.toml").read_text("utf-8"))
    patterns = settings["tool"]["setuptools"]["package-data"]["analysis_core"]
    installed = {path for pattern in patterns for path in CORE.glob(pattern)}
    files = {p for p in CORE.rglob("*") if p.is_file() and "__pycache__" not in p.parts}
    left_out = {p for p in files - installed if p.suffix != ".py"}
    assert left_out == set()


def test_every_folder_of_the_core_is_a_package():
    folders = {path.parent for path in CORE.rglob("*.py")}
    assert [f for f in sorted(folders) if not (f / "__init__.py").is_file()] == []
