"""Fingerprints: what the results of a line depend on, and what of it has changed.

The *basis* of a line is a mapping of subjects to short texts: geometry, each element's section
and material, each support, the actions of each case, rules and settings, and the fingerprints of
the lines whose reactions it receives.  The fingerprint is the hash of the basis.  The basis is
stored with the results, so that a later run can say not only that a result is stale but why.
Lengths are rounded to a micrometre and other values to nine digits: a re-saved file does not
make a result stale.  The place of a line in the building is not part of it.
"""

from __future__ import annotations

import hashlib
import json
import math
import re
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

RECEIVES = "whose reactions it receives"
_DIGEST = re.compile(r" ?#[0-9a-f]{10}\b")


def fingerprint(basis: Mapping[str, str]) -> str:
    """Return the fingerprint of a basis: 32 hexadecimal digits.

    Names of elements and marks of lines are left out: new GlobalIds or marks change no result.
    """
    nameless = ("section", "material", "received")
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
        for joint in line.joints:
            if joint.support is not None:
                texts[f"support {joint.id}"] = _support(joint.support)
        by_case: dict[str, list[Action]] = {}
        for action in line.actions:
            by_case.setdefault(action.case, []).append(action)
        for case in sorted(by_case):
            texts[f"actions {case}"] = self._actions_of(by_case[case])
        texts |= self._common
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
        key = member.pieces, member.section
        text = self._sections.get(key)
        if text is None:
            text = self._sections[key] = _section(member)
        return text

    def _material(self, material: Material | None) -> str:
        text = self._materials.get(material)
        if text is None:
            text = self._materials[material] = _material(material)
        return text


def differences(
    before: Mapping[str, str], after: Mapping[str, str], names: Mapping[str, str]
) -> list[str]:
    """Return sentences that say what changed between two bases of a line.

    ``names``: name by GlobalId, for sentences that an engineer understands.
    """
    sentences = []
    for key in sorted({*before, *after}):
        old, new = before.get(key), after.get(key)
        if old == new:
            continue
        subject, _, which = key.partition(" ")
        what = _subject(subject, which, names)
        if subject == "received" and old and new:
            sentences.append(f"{which}, {RECEIVES}, changed")
        elif subject in ("geometry", "section", "material", "support", "actions", "rules"):
            sentences.append(_change(subject, what, old, new))
        else:
            sentences.append(f"{what} changed")
    return sentences


def _subject(subject: str, which: str, names: Mapping[str, str]) -> str:
    if not which:
        return subject
    if subject == "support":
        return f"support at joint {which}"
    if subject == "received":
        return f"reactions of {which}"
    return f"{subject} of {names.get(which) or which}"


def _change(subject: str, what: str, old: str | None, new: str | None) -> str:
    was, now = _shown(old or ""), _shown(new or "")
    if subject == "actions":
        if old is None:
            return f"{what} are new ({now} of them)"
        if new is None:
            return f"{what} are gone ({was} before)"
        return f"{what} changed" if was == now else f"{what} changed, {was} before and {now} now"
    if old is None:
        return f"{what} is new ({now})"
    if new is None:
        return f"{what} is gone (was {was})"
    return f"{what} changed" if was == now else f"{what} changed from {was} to {now}"


def _shown(text: str) -> str:
    """A text without the digests, which say nothing to an engineer."""
    return _DIGEST.sub("", text)


def _geometry(line: Line) -> str:
    spans = " + ".join(_short(m.length) for m in line.members)
    detail = [
        line.kind,
        [[_micrometres(j.x), _micrometres(j.z)] for j in line.joints],
        [
            [m.start, m.end, m.role, _nine(m.start_spring), _nine(m.end_spring)]
            for m in line.members
        ],
    ]
    return f"{spans} m #{_digest(detail)}"


def _section(member: Member) -> str:
    section = member.section
    whole = member.length  # shares of it: how long a member is belongs to the geometry
    pieces = [[_nine(p.length / whole), [_nine(c) for c in p.flexural], _nine(p.power),
               [_nine(c) for c in p.shear or ()]] for p in member.pieces]  # fmt: skip
    if section is None:
        return f"EI {member.flexural_rigidity:.4g} N·m² #{_digest(pieces)}"
    size = f"{1e3 * section.depth:.0f} mm deep" if section.depth else ""
    return f"{f'{section.name} {size}'.strip()} #{_digest([pieces, _nine(section.area)])}"


def _material(material: Material | None) -> str:
    if material is None:
        return "not stated"
    m = material
    strength = sorted((k, _nine(v)) for k, v in m.strength)
    return f"{m.name} #{_digest([_nine(m.elastic_modulus), _nine(m.density), strength])}"


def _support(support: Support) -> str:
    values = (support.vertical, support.horizontal, support.rotation)
    return "/".join("rigid" if math.isinf(v) else f"{v:.9g}" if v else "free" for v in values)


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
    # Adding nothing leaves no minus before a zero.
    return form % tuple([number + 0.0 for number in numbers])


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
    return round(value * 1e6)


def _nine(value: float) -> str:
    return f"{value:.9g}" if value else "0"


def _short(value: float) -> str:
    return f"{value:.3f}".rstrip("0").rstrip(".")


def _digest(data: object) -> str:
    text = json.dumps(data, ensure_ascii=True)
    return hashlib.sha256(text.encode("ascii")).hexdigest()[:10]
