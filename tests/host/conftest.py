"""Starts a real FreeCAD for each scene, under a virtual display where it needs a window."""

from __future__ import annotations

import json
import os
import shutil
import subprocess
from pathlib import Path

import pytest

HERE = Path(__file__).resolve().parent
ROOT = HERE.parents[1]
NEEDED = ("freecad", "xvfb-run", "xauth")


def pytest_collection_modifyitems(config, items):
    """Skip the tests of the window where FreeCAD is missing, unless it is required."""
    missing = [name for name in NEEDED if shutil.which(name) is None]
    if os.environ.get("SPANLEDGER_NO_HOST") == "1":
        reason = "FreeCAD was left out (SPANLEDGER_NO_HOST=1)"
    elif missing:
        reason = f"not installed: {', '.join(missing)}"
    else:
        return
    required = os.environ.get("SPANLEDGER_REQUIRE_HOST") == "1"
    for item in items:
        if item.get_closest_marker("host") is None:
            continue
        if required:
            item.user_properties.append(("host-missing", reason))
        else:
            item.add_marker(
                pytest.mark.skip(reason=f"needs FreeCAD under a virtual display; {reason}")
            )


@pytest.fixture
def in_freecad(tmp_path, request):
    """Return a function that plays a scene in FreeCAD and returns what the scene found."""
    for name, reason in request.node.user_properties:
        if name == "host-missing":
            pytest.fail(f"FreeCAD is required (SPANLEDGER_REQUIRE_HOST=1), but {reason}")

    def play(
        scene: str,
        *,
        timeout: float = 120.0,
        scale: str = "1",
        window: bool = True,
        style_sheet: str = "",
        language: str = "English",
        **environment,
    ) -> dict:
        home = tmp_path / "home"
        home.mkdir(exist_ok=True)
        preferences = (HERE / "user.cfg").read_text(encoding="utf-8")
        preferences = preferences.replace("STYLE_SHEET", style_sheet)
        (home / "user.cfg").write_text(preferences.replace("LANGUAGE", language))
        result = tmp_path / "result.json"
        result.unlink(missing_ok=True)
        log = tmp_path / "log.txt"
        size = "1600x1000" if scale == "1" else "3200x2000"
        display = f"-screen 0 {size}x24 -dpi 96"  # at other densities Qt scales everything
        script = [str(HERE / "zz_spanledger_scene.py"), "-M", str(ROOT / "addon")]
        command = ["xvfb-run", "-a", "-s", display, "freecad", *script]
        if not window:
            command = ["freecadcmd", *script]
        with log.open("w") as written:
            done = subprocess.run(
                command, stdin=subprocess.DEVNULL, stdout=written, stderr=subprocess.STDOUT,
                timeout=timeout, check=False,
                env={
                    **os.environ,
                    "FREECAD_USER_HOME": str(home),
                    "XDG_RUNTIME_DIR": str(home),
                    "LIBGL_ALWAYS_SOFTWARE": "1",
                    "QTWEBENGINE_DISABLE_SANDBOX": "1",
                    "QT_SCALE_FACTOR": scale,
                    "SPANLEDGER_SCENE": scene,
                    "SPANLEDGER_RESULT": str(result),
                    "SPANLEDGER_PICTURES": os.environ.get("SPANLEDGER_PICTURES", str(tmp_path)),
                    **environment,
                },
            )  # fmt: skip
        assert result.exists(), (
            f"FreeCAD ended with {done.returncode} and no result:\n{log.read_text()[-4000:]}"
        )
        found = json.loads(result.read_text(encoding="utf-8"))
        assert "error" not in found, found["error"]
        assert done.returncode == 0, log.read_text()[-4000:]
        found["log"] = log.read_text()
        return found

    return play
