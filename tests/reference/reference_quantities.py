"""Reading the quantities of a reference item out of a solution."""

from __future__ import annotations

import ast
import math
from collections.abc import Mapping
from typing import Any

from member_fields import MemberFields
from reference_items import Structure

from analysis_core.results import LineSolution

KINDS = {
    "end moment": "moment",
    "moment": "moment",
    "largest moment": "moment",
    "least moment": "moment",
    "moment over bearing": "moment",
    "reaction couple": "moment",
    "reaction": "force",
    "reaction to the right": "force",
    "shear": "force",
    "deflection": "length",
    "largest deflection": "length",
    "least deflection": "length",
    "sinks": "length",
    "moves right": "length",
    "moves down": "length",
    "rotation": "rotation",
    "carry-over": "ratio",
    "place of largest moment": "place",
    "place of largest deflection": "place",
}


def quantity_of(check: Mapping[str, Any]) -> tuple[str, list[Any]]:
    """Return the name of the quantity and where it is meant."""
    (name,) = set(check) - {"is", "by", "printed", "per"}
    where = check[name]
    return name, where if isinstance(where, list) else [where]


def measure(structure: Structure, solution: LineSolution, check: Mapping[str, Any]) -> float:
    """Return the value that ``solution`` has for a check."""
    name, where = quantity_of(check)
    if name in ("end moment", "carry-over"):
        return _at_ends(structure, solution, name, where)
    if name in ("reaction", "reaction couple", "reaction to the right"):
        column = {"reaction to the right": 0, "reaction": 1, "reaction couple": 2}[name]
        return float(solution.reactions[0, structure.bearings[where[0]], column])
    if name in ("sinks", "moves right", "moves down", "rotation"):
        return _movement(solution, structure.bearings[where[0]], name)
    if name == "moment over bearing":
        return _over_bearing(structure, solution, where[0])
    if name in ("moment", "shear", "deflection"):
        fields, x = _place(structure, solution, where[0], where[1])
        return getattr(fields, name)(x)
    return _extreme(structure, solution, name, where[0])


def _at_ends(structure: Structure, solution: LineSolution, name: str, where: list[Any]) -> float:
    parts = structure.spans[where[0]]
    start = float(solution.end_moments[0, parts[0][0], 0])
    end = float(solution.end_moments[0, parts[-1][0], 1])
    if name == "end moment":
        return {"start": start, "end": end}[where[1]]
    return {"from start": end / start, "from end": start / end if start else math.inf}[where[1]]


def _movement(solution: LineSolution, joint: int, name: str) -> float:
    if name == "rotation":
        return float(solution.rotations[0, joint])
    return float(solution.displacements[0, joint, 0 if name == "moves right" else 1])


def _over_bearing(structure: Structure, solution: LineSolution, bearing: int) -> float:
    """Diagram moment just left of an inner bearing; just right of the first one."""
    if bearing == 1:
        return float(solution.end_moments[0, structure.spans[1][0][0], 0])
    return -float(solution.end_moments[0, structure.spans[bearing - 1][-1][0], 1])


def _place(
    structure: Structure, solution: LineSolution, span: Any, x: float
) -> tuple[MemberFields, float]:
    for member, offset in structure.spans[span]:
        fields = MemberFields.of(solution, 0, member)
        if x <= offset + fields.member.length * (1.0 + 1e-12):
            return fields, x - offset
    raise AssertionError(f"{x} lies beyond span {span}")


def _extreme(structure: Structure, solution: LineSolution, name: str, span: Any) -> float:
    what = "moment" if "moment" in name else "deflection"
    found = []
    for member, offset in structure.spans[span]:
        fields = MemberFields.of(solution, 0, member)
        found += [(offset + x, value) for x, value in fields.extremes(what)]
    choose = min if name.startswith("least") else max
    x, value = choose(found, key=lambda pair: pair[1])
    return x if name.startswith("place") else value


def formula_value(text: str, given: Mapping[str, float]) -> float:
    """Return the value of a formula made of + - * / ^, sqrt, numbers and ``given`` names."""
    tree = ast.parse(text.replace("^", "**"), mode="eval")
    return _value(tree.body, given)


def _value(node: ast.expr, given: Mapping[str, float]) -> float:
    if isinstance(node, ast.Constant):
        return float(node.value)
    if isinstance(node, ast.Name):
        return float(given[node.id])
    if isinstance(node, ast.UnaryOp) and isinstance(node.op, ast.USub):
        return -_value(node.operand, given)
    if isinstance(node, ast.BinOp):
        left, right = _value(node.left, given), _value(node.right, given)
        operations = {
            ast.Add: lambda: left + right,
            ast.Sub: lambda: left - right,
            ast.Mult: lambda: left * right,
            ast.Div: lambda: left / right,
            ast.Pow: lambda: left**right,
        }
        return operations[type(node.op)]()
    if isinstance(node, ast.Call) and getattr(node.func, "id", "") == "sqrt":
        return math.sqrt(_value(node.args[0], given))
    raise ValueError(f"not understood in a formula: {ast.dump(node)}")
