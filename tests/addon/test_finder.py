"""The add-on finds the core and its packages by itself."""

import subprocess
import sys
from pathlib import Path

FINDER = Path(__file__).resolve().parents[2] / "addon/freecad/spanledger/finder.py"
RUN = """
import importlib.util, sys
spec = importlib.util.spec_from_file_location("finder", sys.argv[1])
finder = importlib.util.module_from_spec(spec)
spec.loader.exec_module(finder)
print(finder.make_importable(sys.argv[2]))
print(*sys.path[:2], sep="|")
"""


def run(finder, preferred="", **environment):
    """Run the finder in a Python of its own, without this one's packages."""
    done = subprocess.run(
        [sys.executable, "-I", "-S", "-c", RUN, str(finder), preferred],
        env=environment, capture_output=True, text=True, check=True,
    )  # fmt: skip
    message, path = done.stdout.splitlines()
    return message, path.split("|")


def copied(tmp_path, *, core=True):
    """Return the finder of an add-on copied somewhere, with or without a core beside it."""
    package = tmp_path / "somewhere" / "addon" / "freecad" / "spanledger"
    package.mkdir(parents=True)
    (package / "finder.py").write_text(FINDER.read_text(encoding="utf-8"))
    if core:
        (tmp_path / "somewhere" / "analysis_core").mkdir()
        (tmp_path / "somewhere" / "analysis_core" / "__init__.py").write_text("")
    return package / "finder.py"


def packages(folder, *names):
    for name in names:
        (folder / name).mkdir(parents=True)
        (folder / name / "__init__.py").write_text("")
    return folder


def test_all_is_found_from_the_checkout_and_the_named_folder(tmp_path):
    site = packages(tmp_path / "site", "numpy", "ifcopenshell", "yaml")

    message, path = run(copied(tmp_path), SPANLEDGER_SITE=str(site))

    assert message == ""
    assert path == [str(tmp_path / "somewhere"), str(site)]


def test_the_preference_counts_where_the_environment_says_nothing(tmp_path):
    site = packages(tmp_path / "site", "numpy", "ifcopenshell", "yaml")

    assert run(copied(tmp_path), str(site))[0] == ""


def test_a_folder_written_at_installation_is_found(tmp_path):
    finder = copied(tmp_path)
    site = packages(tmp_path / "site", "numpy", "ifcopenshell", "yaml")
    (finder.parent / "site-folder.txt").write_text(f"{site}\n")

    assert run(finder)[0] == ""


def test_what_is_missing_is_told_in_a_plain_sentence(tmp_path):
    site = packages(tmp_path / "site", "numpy", "yaml")

    message, _ = run(copied(tmp_path), SPANLEDGER_SITE=str(site))

    assert "needs ifcopenshell for Python" in message
    assert "SPANLEDGER_SITE" in message


def test_a_missing_core_is_told_as_well(tmp_path):
    message, _ = run(copied(tmp_path, core=False))

    assert "analysis core was not found" in message
