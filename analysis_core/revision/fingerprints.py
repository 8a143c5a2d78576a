"""Fingerprints: what the results of a line depend on, and what of it has changed.

The *basis* of a line is a mapping of subjects to short texts: geometry, each element's section
and material, each support, the actions of each case, rules and settings, and the fingerprints of
the lines whose reactions it receives.  The fingerprint is the hash of the basis.  The basis is
stored with the results, so that a later run can say not only that a result is stale but why.
Lengths are rounded to a micrometre and other values to nine digits, so that the last digits of a
number, which change with the unit of a file, do not make a result stale.  The place of a line in
the building is not part of it.
"""

from __future__ import annotations

import hashlib
import json
import math
from collections.abc import Callable, Hashable, Mapping, Sequence
from dataclasses import fields
from functools import cache
from operator import attrgetter
from typing import Any, get_args

from analysis_core.model import (
    Action,
    Combination,
    JointAction,
    Line,
    Material,
    Member,
    MemberAction,
    Support,
)
from analysis_core.settings import Settings

# What the results depend on of each kind of action: neither its case nor where it came from.
_VALUES: Mapping[type[Action], Callable[[Action], tuple[Any, ...]]] = {
    kind: attrgetter(*(f.name for f in fields(kind) if f.name not in ("case", "source")))
    for kind in get_args(MemberAction | JointAction)
}

FORM = "2"
"""Counts up when the texts of a basis are written differently: older results are then stale."""
_BESIDE = 3.7e-11
"""Halves of a last digit are common (half a sixteenth of an inch is half a micrometre), and which
way they are rounded is chance.  Shifted by this part of itself, no common number is one."""
_NOTHING = 1e-9
"""N, N/m, N·m, m or 1/m: what is left of a zero after turning and scaling."""


def fingerprint(basis: Mapping[str, str]) -> str:
    """Return the fingerprint of a basis: 32 hexadecimal digits.

    Names of elements and marks of lines are left out: new GlobalIds or marks change no result.
    """
    nameless = ("section", "material", "ends", "received")
    rows = [
        [key.partition(" ")[0] if key.startswith(nameless) else key, text]
        for key, text in basis.items()
    ]
    text = json.dumps(rows, ensure_ascii=True)
    return hashlib.sha256(text.encode("ascii")).hexdigest()[:32]


def basis(
    line: Line,
    *,
    combinations: Sequence[Combination],
    rules: str,
    settings: Settings,
    received: Mapping[str, str],
) -> dict[str, str]:
    """Return what the results of ``line`` depend on.

    ``received``: fingerprint by mark of the lines whose reactions act on this one.
    """
    return Bases(combinations=combinations, rules=rules, settings=settings).of(line, received)


class Bases:
    """Writes the bases of many lines; what several of them share is put into words once."""

    def __init__(
        self, *, combinations: Sequence[Combination], rules: str, settings: Settings
    ) -> None:
        self._common = {
            "combinations": _digest(
                [[c.name, c.limit_state, sorted(c.factors.items())] for c in combinations]
            ),
            "rules": rules,
            "settings": _digest(
                [repr(settings.rules), repr(settings.analysis), repr(settings.limits)]
            ),
        }
        self._actions: dict[Hashable, str] = {}
        self._sections: dict[Hashable, str] = {}
        self._materials: dict[Material | None, str] = {}

    def of(self, line: Line, received: Mapping[str, str]) -> dict[str, str]:
        """Return the basis of one line; see ``basis``."""
        texts = {"geometry": _geometry(line)}
        for member in line.members:
            key = member.element or str(member.id)
            _join(texts, f"section {key}", self._section(member))
            _join(texts, f"material {key}", self._material(member.material))
            ends = texts.get(f"ends {key}")
            texts[f"ends {key}"] = f"{ends}; {_ends(member)}" if ends else _ends(member)
        for joint in line.joints:
            if joint.support is not None:
                texts[f"support {joint.id}"] = _support(joint.support)
        by_case: dict[str, list[Action]] = {}
        for action in line.actions:
            by_case.setdefault(action.case, []).append(action)
        for case in sorted(by_case):
            texts[f"actions {case}"] = self._actions_of(by_case[case])
        texts |= self._common
        texts["form"] = FORM
        for mark, print_ in received.items():
            texts[f"received {mark}"] = print_
        return texts

    def _actions_of(self, actions: Sequence[Action]) -> str:
        key = tuple([(type(action), _VALUES[type(action)](action)) for action in actions])
        text = self._actions.get(key)
        if text is None:
            text = self._actions[key] = _actions(actions)
        return text

    def _section(self, member: Member) -> str:
        key = member.pieces, member.section, member.material
        text = self._sections.get(key)
        if text is None:
            text = self._sections[key] = _section(member)
        return text

    def _material(self, material: Material | None) -> str:
        text = self._materials.get(material)
        if text is None:
            text = self._materials[material] = _material(material)
        return text


def _geometry(line: Line) -> str:
    spans = " + ".join(_short(m.length) for m in line.members)
    detail = [
        line.kind,
        [[_micrometres(j.x), _micrometres(j.z)] for j in line.joints],
        [[m.start, m.end, m.role] for m in line.members],
    ]
    return f"{spans} m #{_digest(detail)}"


def _ends(member: Member) -> str:
    """How the member is connected to the joints at its start and end."""
    return "/".join(_degree(spring) for spring in (member.start_spring, member.end_spring))


def _degree(stiffness: float) -> str:
    if math.isinf(stiffness):
        return "rigid"
    return f"{stiffness:.9g}" if stiffness else "free"


def _section(member: Member) -> str:
    """What the section adds to the rigidities: neither the material nor the length."""
    section, material = member.section, member.material
    bending = shearing = 1.0
    if section is not None and material is not None:
        bending = material.elastic_modulus or 1.0
        shearing = material.shear_modulus or bending
    pieces = [
        [
            _nine(p.length / member.length),
            [_nine(c / bending ** (1.0 / p.power)) for c in p.flexural],
            _nine(p.power),
            [_nine(c / shearing) for c in p.shear or ()],
        ]
        for p in member.pieces
    ]
    if section is None:
        return f"EI {member.flexural_rigidity:.4g} N·m² #{_digest(pieces)}"
    size = f"{1e3 * section.depth:.0f} mm deep" if section.depth else ""
    return f"{f'{section.name} {size}'.strip()} #{_digest([pieces, _nine(section.area)])}"


def _material(material: Material | None) -> str:
    if material is None:
        return "not stated"
    m = material
    strength = sorted((k, _nine(v)) for k, v in m.strength)
    values = [_nine(v) for v in (m.elastic_modulus, m.shear_modulus, m.density)]
    modulus = f"E {m.elastic_modulus / 1e9:.5g} GPa"
    density = f", {m.density:.5g} kg/m³" if m.density else ""
    return f"{m.name or 'not named'} ({modulus}{density}) #{_digest([*values, strength])}"


def _support(support: Support) -> str:
    values = (support.vertical, support.horizontal, support.rotation)
    return "/".join(map(_degree, values))


def _actions(actions: Sequence[Action]) -> str:
    """Count and digest; the order and the origin of the actions do not matter."""
    rows = sorted(map(_action, actions))
    return f"{len(rows)} #{_digest(rows)}"


def _action(action: Action) -> str:
    """Kind and values as a JSON list, put together by hand: there are very many of them."""
    kind = type(action)
    numbers: list[float] = []
    lengths: list[int] = []
    for value in _VALUES[kind](action):
        if isinstance(value, tuple):
            numbers += value
            lengths.append(len(value))
        else:
            numbers.append(value)
    form = _form(kind.__name__, len(numbers) - sum(lengths), tuple(lengths))
    shift, nothing = 1.0 + _BESIDE, _NOTHING
    return form % tuple([n * shift if n > nothing or n < -nothing else 0.0 for n in numbers])


@cache
def _form(kind: str, count: int, lengths: tuple[int, ...]) -> str:
    """The JSON of an action with places for ``count`` numbers and for lists behind them."""
    items = ['"%.9g"'] * count
    if kind.startswith("Joint"):
        items[0] = "%d"  # its number
    items += ["[" + ", ".join(['"%.9g"'] * length) + "]" for length in lengths]
    return f'["{kind}", {", ".join(items)}]'


def _join(texts: dict[str, str], key: str, text: str) -> None:
    """An element cut into several members has the texts of all of them, each once."""
    known = texts.get(key)
    if known is None:
        texts[key] = text
    elif text not in known.split("; "):
        texts[key] = f"{known}; {text}"


def _micrometres(value: float) -> int:
    return round(value * 1e6 + 0.0123)


def _nine(value: float) -> str:
    return f"{value * (1.0 + _BESIDE):.9g}" if value else "0"


def _short(value: float) -> str:
    return f"{value:.3f}".rstrip("0").rstrip(".")


def _digest(data: object) -> str:
    text = json.dumps(data, ensure_ascii=True)
    return hashlib.sha256(text.encode("ascii")).hexdigest()[:10]
