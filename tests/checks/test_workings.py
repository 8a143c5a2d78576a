"""Every formula of every working, evaluated anew from its own operands."""

import ast
import math
import operator
import re
from dataclasses import replace

import numpy as np
import pytest
from designs import C24, C30, IPE300, S355, W18X50, box, pressed, rectangle, simple_span, tee, tube

from analysis_core.checks import concrete_aci, concrete_en, steel_aisc, steel_en, timber_en
from analysis_core.checks.design import EffectField, Redistribution
from analysis_core.checks.working import Figures
from analysis_core.results import Extreme

KSI = 6894757.293168361
UNITS = {"MPa": 1e6, "mm": 1e-3, "m": 1.0, "ksi": KSI}
OPERATORS = {ast.Add: operator.add, ast.Sub: operator.sub, ast.Mult: operator.mul,
             ast.Div: operator.truediv, ast.Pow: operator.pow}  # fmt: skip


def evaluated(step):
    """The value of a formula as printed, within its bounds, and whether all bounds are numbers."""
    first, *bounds = re.split(r",? [≤≥] ?", step.formula)
    value, known = number(first, step), True
    for bound in bounds:
        try:
            value = (max if "≥" in step.formula else min)(value, number(bound, step))
        except (AssertionError, SyntaxError):  # a bound in words, or a symbol of another step
            known = False
    return value, known


def number(text, step):
    """The value of a text: products without sign, powers and roots as signs."""
    text = re.sub(r"\{([^}]*)\}", lambda m: f"({dict_of(step)[m[1]]!r})", text)
    text = re.sub(r"(\d+) (MPa|mm|ksi|m)\b", lambda m: f"({m[1]}*{UNITS[m[2]]!r})", text)
    text = re.sub(r"√(\d+)", r"√(\1)", text).replace("√", "root").replace("π", "(pi)")
    text = text.replace("²", "**2").replace("³", "**3").replace("^", "**").replace("·", "*")
    text = re.sub(r"(?<=[\d)]) +(?=[\d(r])", "*", text)
    text = re.sub(r"(?<=[\d)])(?=root|\()", "*", text)
    return value_of(ast.parse(text.strip(), mode="eval").body)


def dict_of(step):
    return {name: value for name, value, _ in step.operands}


def value_of(node):
    match node:
        case ast.Constant():
            return float(node.value)
        case ast.Name(id="pi"):
            return math.pi
        case ast.UnaryOp(op=ast.USub()):
            return -value_of(node.operand)
        case ast.BinOp():
            return OPERATORS[type(node.op)](value_of(node.left), value_of(node.right))
        case ast.Call(func=ast.Name(id="root")):
            return math.sqrt(value_of(node.args[0]))
    raise AssertionError(ast.dump(node))


A992 = replace(S355, name="A992", strength=(("fy", 50 * KSI),))
NARROW = replace(
    W18X50, dimensions=tuple({**dict(W18X50.dimensions), "flange_thickness": 0.008}.items())
)


def hogging(section, material, length, load):
    base = simple_span(section, material, length, load)
    x = base.fields[0].x
    moment = base.fields[0].moment - load * length**2 / 9 * x / length
    shear = base.fields[0].shear - load * length / 9
    field = EffectField("U1", x, moment, shear)
    low, high = Extreme(float(moment.min()), length, "U1"), Extreme(float(moment.max()), 2.0, "U1")
    most = Extreme(float(shear[np.abs(shear).argmax()]), length, "U1")
    held = replace(base.governing, sagging=high, hogging=low, shear=most)
    shift = Redistribution(0.15, {"redistribution.k1": 0.44, "redistribution.k2": 1.25,
                                  "redistribution.k6": 0.8, "redistribution.per_strain": 10.0,
                                  "redistribution.most": 0.2,
                                  "redistribution.least_strain": 0.0075})  # fmt: skip
    return replace(base, fields=(field,), governing=held, redistribution=shift)


EN, AISC = Figures(steel_en.FIGURES, {}), Figures(steel_aisc.FIGURES, {})
CEN, ACI = Figures(concrete_en.FIGURES, {}), Figures(concrete_aci.FIGURES, {})
RHS = box("RHS", 0.3, 0.2, 0.008)
CHS = tube("CHS", 0.3, 0.008)
CASES = {
    "IPE": lambda: steel_en.check_steel(simple_span(IPE300, S355, 6.0, 20e3), EN),
    "IPE with much shear": lambda: steel_en.check_steel(simple_span(IPE300, S355, 1.0, 900e3), EN),
    "IPE compressed": lambda: steel_en.check_steel(
        pressed(simple_span(IPE300, S355, 6.0, 5e3), -200e3), EN),
    "RHS compressed": lambda: steel_en.check_steel(
        pressed(simple_span(RHS, S355, 6.0, 5e3), -200e3), EN),
    "CHS": lambda: steel_en.check_steel(simple_span(CHS, S355, 6.0, 20e3), EN),
    "W": lambda: steel_aisc.check_steel(simple_span(W18X50, A992, 9.0, 20e3), AISC),
    "W short": lambda: steel_aisc.check_steel(simple_span(W18X50, A992, 4.0, 20e3), AISC),
    "W noncompact": lambda: steel_aisc.check_steel(simple_span(NARROW, A992, 3.0, 20e3), AISC),
    "W tension": lambda: steel_aisc.check_steel(
        pressed(simple_span(W18X50, A992, 4.0, 20e3), 900e3), AISC),
    "HSS": lambda: steel_aisc.check_steel(pressed(simple_span(RHS, A992, 4.0, 20e3), -9e5), AISC),
    "HSS with thin walls": lambda: steel_aisc.check_steel(
        simple_span(box("thin", 0.40, 0.2, 0.0065), A992, 9.0, 2e3), AISC),
    "HSS long": lambda: steel_aisc.check_steel(
        simple_span(box("deep", 0.5, 0.1, 0.012), A992, 60.0, 2e2), AISC),
    "pipe": lambda: steel_aisc.check_steel(
        simple_span(tube("P", 0.3, 0.006), A992, 4.0, 1e3), AISC),
    "slender column": lambda: steel_aisc.check_steel(
        pressed(simple_span(RHS, A992, 14.0, 2e2), -9e4), AISC),
    "concrete": lambda: concrete_en.check_concrete(
        hogging(rectangle(0.3, 0.5), C30, 8.0, 40e3), CEN),
    "T": lambda: concrete_en.check_concrete(hogging(tee(1.0, 0.12, 0.3, 0.6), C30, 8.0, 60e3), CEN),
    "T with bars in compression": lambda: concrete_en.check_concrete(
        simple_span(tee(0.8, 0.12, 0.3, 0.5), C30, 8.0, 110e3), CEN),
    "ACI T with bars in compression": lambda: concrete_aci.check_concrete(
        simple_span(tee(0.8, 0.12, 0.3, 0.5), C30, 8.0, 130e3), ACI),
    "ACI": lambda: concrete_aci.check_concrete(hogging(rectangle(0.3, 0.5), C30, 8.0, 40e3), ACI),
    "ACI T": lambda: concrete_aci.check_concrete(
        hogging(tee(1.0, 0.12, 0.3, 0.6), C30, 8.0, 60e3), ACI),
    "slender timber": lambda: timber_en.check_timber(
        simple_span(rectangle(0.05, 0.4), C24, 7.0, 2e3), Figures(timber_en.FIGURES, {}),
        {"U1": "medium"}),
    "very slender glulam": lambda: timber_en.check_timber(
        simple_span(rectangle(0.04, 0.8), C24, 9.0, 2e3), Figures(timber_en.FIGURES, {}),
        {"U1": "medium"}, "glulam"),
    "timber": lambda: timber_en.check_timber(
        simple_span(rectangle(0.1, 0.3), C24, 5.0, 2e3), Figures(timber_en.FIGURES, {}),
        {"U1": "medium"}),
}  # fmt: skip


@pytest.mark.parametrize("case", CASES)
def test_each_formula_with_its_numbers_gives_its_value(case):
    checks = CASES[case]()
    steps = [s for check in checks for s in check.steps if s.formula and s.operands]
    assert len(steps) >= 3
    for step in steps:
        value, known = evaluated(step)
        room = 1e-9 * abs(value)
        if known:
            assert step.value == pytest.approx(value, rel=1e-9), step
        elif "≤" in step.formula:
            assert step.value <= value + room, step
        else:
            assert step.value >= value - room, step


@pytest.mark.parametrize(("case", "symbol"), [
    ("T with bars in compression", "A_s2"), ("ACI T with bars in compression", "A'_s"),
])  # fmt: skip
def test_these_cases_have_bars_in_compression(case, symbol):
    assert symbol in {s.symbol for check in CASES[case]() for s in check.steps}
