"""Who may import whom, as DESIGN and DEVELOPERS state it; also for packages still to come.

Imports are read from the source, wherever they stand (in functions too), so that a rule cannot
be dodged by importing late.
"""

from __future__ import annotations

import ast
import sys
from collections.abc import Iterator
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[1]
CORE = "analysis_core"

PLAIN = frozenset({"errors", "findings", "units", "settings", "collector"})
DATA = PLAIN | {"model", "results", "building"}
SOLVERS = frozenset({"distribution", "effects", "checks", "idealise", "stiffness_check"})
HOST = frozenset(
    {"FreeCAD", "FreeCADGui", "Part", "PySide", "PySide2", "PySide6", "PyQt5", "PyQt6", "pivy"}
)

# What a part of the core may import of the core (itself always); parts not named here tie the
# others together and may import any of them.
MAY_IMPORT: dict[str, frozenset[str]] = {
    **dict.fromkeys(PLAIN, PLAIN),
    **dict.fromkeys(DATA - PLAIN, DATA),
    **dict.fromkeys(SOLVERS, DATA),
    "ifc": DATA,
    # Rule sets are read like job files and name the arrangements that effects knows.
    "rules": DATA | {"job", "effects"},
    "job": PLAIN,
}
# Third parties by the only parts that may use them.
THIRD_PARTIES: dict[str, frozenset[str] | None] = {
    "numpy": None,
    "ifcopenshell": frozenset({"ifc"}),
    "yaml": frozenset({"job", "rules"}),
}
WITHOUT_NUMPY = PLAIN | {"sheet", "rules", "job"}


def test_every_part_of_the_core_imports_only_what_it_may():
    assert list(breaches(ROOT)) == []


def test_no_module_of_the_core_imports_itself_in_a_ring():
    assert rings(module_graph(ROOT)) == []


def test_no_part_of_the_core_depends_on_itself_through_others():
    assert rings(part_graph(ROOT)) == []


def test_the_add_on_leaves_files_and_rules_to_the_core():
    folder = ROOT / "addon"
    for path in sorted(folder.rglob("*.py")):
        for name in imported(path, package=path.relative_to(folder).parts[:-1]):
            top = name.partition(".")[0]
            if top in sys.stdlib_module_names or top in HOST | {"numpy", CORE, "freecad"}:
                continue
            pytest.fail(f"{path.relative_to(ROOT)} imports {name}")


@pytest.mark.parametrize(
    ("place", "text"),
    [
        ("distribution/sweep.py", "from analysis_core.effects import stations"),
        ("distribution/sweep.py", "def late():\n    import analysis_core.stiffness_check"),
        ("stiffness_check/solve.py", "from analysis_core import distribution"),
        ("stiffness_check/solve.py", "from ..distribution import bars"),
        ("checks/steel.py", "from analysis_core.idealise import lines"),
        ("checks/steel.py", "import scipy.linalg"),
        ("sheet/page.py", "import numpy"),
        ("sheet/page.py", "from importlib import import_module\nimport_module('ifcopenshell')"),
        ("model.py", "from analysis_core.pipeline import run"),
        ("settings.py", "from analysis_core.model import Line"),
        ("pipeline/reading.py", "import ifcopenshell.util.element"),
        ("pipeline.py", "import yaml"),
        ("idealise/lines.py", "import ifcopenshell"),
        ("ifc/view.py", "import FreeCAD"),
    ],
)
def test_a_forbidden_import_is_noticed(tmp_path: Path, place: str, text: str):
    for part in ("effects", "distribution", "idealise", "stiffness_check"):
        (tmp_path / CORE / part).mkdir(parents=True)
        (tmp_path / CORE / part / "__init__.py").touch()
    path = tmp_path / CORE / place
    path.parent.mkdir(exist_ok=True)
    path.write_text(text)

    assert len(list(breaches(tmp_path))) == 1


def test_a_ring_is_noticed():
    assert rings({"a": {"b"}, "b": {"c"}, "c": {"a"}, "d": {"a"}}) == [["a", "b", "c", "a"]]


def breaches(root: Path) -> Iterator[str]:
    """Yield a sentence for every import in the core that is against the rule."""
    for path in sorted((root / CORE).rglob("*.py")):
        inside = path.relative_to(root / CORE)
        part = inside.parts[0].removesuffix(".py")
        for name in imported(path, package=(CORE, *inside.parts[:-1])):
            if reason := _breach(part, name):
                yield f"{CORE}/{inside} imports {name}: {reason}"


def _breach(part: str, name: str) -> str:
    top, _, rest = name.partition(".")
    if top in sys.stdlib_module_names or top == "__future__":
        return ""
    if top == CORE:
        other = rest.partition(".")[0]
        allowed = MAY_IMPORT.get(part)
        if not other or other == part or other.startswith("__") or allowed is None:
            return ""
        return "" if other in allowed else f"{part} knows only {', '.join(sorted(allowed))}"
    if top in HOST:
        return "the host belongs to the add-on"
    if top not in THIRD_PARTIES:
        return "not among the project's dependencies"
    users = THIRD_PARTIES[top]
    if users is not None and part not in users:
        return f"only {', '.join(sorted(users))} may"
    if top == "numpy" and part in WITHOUT_NUMPY:
        return f"{part} does without it"
    return ""


def imported(path: Path, *, package: tuple[str, ...]) -> Iterator[str]:
    """Yield the full name of everything a file imports, submodules of the core included."""
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        yield from _names(node, package, path)


def _names(node: ast.AST, package: tuple[str, ...], path: Path) -> Iterator[str]:
    if isinstance(node, ast.Import):
        yield from (alias.name for alias in node.names)
    elif isinstance(node, ast.ImportFrom):
        base = ".".join(package[: len(package) - node.level + 1]) if node.level else ""
        module = ".".join(filter(None, (base, node.module)))
        for alias in node.names:
            yield f"{module}.{alias.name}" if module == CORE else module
    elif isinstance(node, ast.Call):
        called = getattr(node.func, "attr", getattr(node.func, "id", ""))
        if called in ("import_module", "__import__") and node.args:
            named = node.args[0]
            if isinstance(named, ast.Constant) and isinstance(named.value, str):
                yield named.value


def module_graph(root: Path) -> dict[str, set[str]]:
    """Return what each module of the core imports while it is itself imported."""
    modules = {}
    for path in (root / CORE).rglob("*.py"):
        parts = path.relative_to(root).with_suffix("").parts
        name = ".".join(parts[:-1] if parts[-1] == "__init__" else parts)
        modules[name] = path
    graph: dict[str, set[str]] = {}
    for name, path in modules.items():
        package = tuple(path.relative_to(root).parts[:-1])
        graph[name] = {
            target
            for node in _at_once(ast.parse(path.read_text(encoding="utf-8")))
            for target in _targets(node, package, path, modules)
            if target != name and not name.startswith(f"{target}.")
        }
    return graph


def _targets(
    node: ast.AST, package: tuple[str, ...], path: Path, modules: dict[str, Path]
) -> Iterator[str]:
    for name in _names(node, package, path):
        if isinstance(node, ast.ImportFrom):
            below = [f"{name}.{alias.name}" for alias in node.names]
            found = [candidate for candidate in below if candidate in modules]
            yield from found
            if found and len(found) == len(below):
                continue
        if name in modules:
            yield name


def _at_once(tree: ast.Module) -> Iterator[ast.AST]:
    """Yield the imports that run with the module: not in functions, not for typing alone."""
    waiting: list[ast.AST] = list(tree.body)
    while waiting:
        node = waiting.pop()
        if isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef | ast.Lambda):
            continue
        if isinstance(node, ast.If) and "TYPE_CHECKING" in ast.dump(node.test):
            continue
        if isinstance(node, ast.Import | ast.ImportFrom):
            yield node
        waiting.extend(ast.iter_child_nodes(node))


def part_graph(root: Path) -> dict[str, set[str]]:
    """Return which parts of the core each part imports, late imports included."""
    graph: dict[str, set[str]] = {}
    for path in (root / CORE).rglob("*.py"):
        inside = path.relative_to(root / CORE)
        part = inside.parts[0].removesuffix(".py")
        if part.startswith("__"):
            continue
        names = imported(path, package=(CORE, *inside.parts[:-1]))
        others = {name.split(".")[1] for name in names if name.startswith(f"{CORE}.")}
        graph.setdefault(part, set()).update(o for o in others - {part} if not o.startswith("__"))
    return graph


def rings(graph: dict[str, set[str]]) -> list[list[str]]:
    """Return a ring of imports if there is one (the first that is met), closed."""
    done: set[str] = set()
    for start in sorted(graph):
        path: list[str] = []
        if ring := _ring(graph, start, path, done):
            return [ring]
    return []


def _ring(graph: dict[str, set[str]], node: str, path: list[str], done: set[str]) -> list[str]:
    if node in path:
        return [*path[path.index(node) :], node]
    if node in done:
        return []
    path.append(node)
    for other in sorted(graph.get(node, ())):
        if ring := _ring(graph, other, path, done):
            return ring
    path.pop()
    done.add(node)
    return []
