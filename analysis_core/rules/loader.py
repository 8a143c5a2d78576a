"""Reads rule sets from YAML: those of the package by name, the user's own by path."""

from __future__ import annotations

import difflib
import json
import math
from collections.abc import Iterable, Mapping
from dataclasses import replace as changed
from functools import lru_cache
from importlib import resources
from pathlib import Path
from typing import Any

from analysis_core.errors import JobError
from analysis_core.job.check import check
from analysis_core.job.yaml_text import read_yaml
from analysis_core.rules.model import (
    PSI,
    ActionClass,
    ArrangementRules,
    Expression,
    Figure,
    Group,
    ListedSet,
    PatternSpec,
    RuleSet,
)

_LARGEST = 1_000_000  # bytes
_DEEPEST = 8  # rule sets based on one another


def names() -> tuple[str, ...]:
    """Return the names of the built-in rule sets."""
    folder = resources.files("analysis_core.rules")
    return tuple(
        sorted(f.name.removesuffix(".yaml") for f in folder.iterdir() if f.name.endswith(".yaml"))
    )


def load(
    name_or_path: str, replace: Mapping[str, object] | None = None, *, folder: Path | None = None
) -> RuleSet:
    """Return a built-in rule set by name, or the one in a YAML file.

    ``replace`` puts the project's own values in place of figures, by name ("gamma_Q",
    "psi0.snow").  A relative path starts at ``folder``.  Raises JobError that says what was
    received and what is permitted.
    """
    if name_or_path in names():
        where, text = f"Rule set '{name_or_path}'", _built_in(name_or_path)
    elif name_or_path.lower().endswith((".yaml", ".yml")):
        path = (folder or Path()) / name_or_path
        where = f"Rule set '{path}'"
        text = _from_file(path, where)
    else:
        raise JobError(
            f"'{name_or_path}' is no rule set{_nearest(name_or_path, names())}. Built-in are "
            f"{', '.join(names())}; one of your own is named by the path of a .yaml file."
        )
    try:
        rules = _parsed(text)
    except JobError as error:
        raise JobError(f"{where}: {error}") from None
    return _replaced(rules, replace or {})


@lru_cache(maxsize=16)  # by the text itself, so that a file that was edited is read anew
def _parsed(text: str) -> RuleSet:
    return _rule_set(check(_complete(read_yaml(text), 0), schema()))


def schema() -> dict[str, Any]:
    """Return the JSON schema of a rule set."""
    source = resources.files("analysis_core.rules").joinpath("rule_schema.json")
    loaded: dict[str, Any] = json.loads(source.read_text(encoding="utf-8"))
    return loaded


def _built_in(name: str) -> str:
    return resources.files("analysis_core.rules").joinpath(f"{name}.yaml").read_text("utf-8")


def _from_file(path: Path, where: str) -> str:
    try:
        raw = path.read_bytes()
    except OSError as error:
        raise JobError(f"{where} cannot be read: {error.strerror or error}.") from None
    if len(raw) > _LARGEST:
        raise JobError(f"{where} is {len(raw)} bytes long; at most {_LARGEST} are read.")
    try:
        return raw.decode("utf-8-sig")
    except UnicodeDecodeError:
        raise JobError(f"{where} is not UTF-8 text; save it as UTF-8.") from None


def _complete(data: object, depth: int) -> dict[str, Any]:
    """The data with that of its base under it."""
    if not isinstance(data, dict):
        raise JobError("it is no mapping of keys to values.")
    base = data.get("base")
    if base is None:
        return data
    if base not in names():
        raise JobError(
            f"it is based on '{base}', which is no built-in rule set"
            f"{_nearest(str(base), names())} (built-in: {', '.join(names())})."
        )
    if depth >= _DEEPEST:
        raise JobError("it is based on itself.")
    out = _merged(_complete(read_yaml(_built_in(base)), depth + 1), data)
    del out["base"]
    return out


def _merged(below: Mapping[str, Any], above: Mapping[str, Any]) -> dict[str, Any]:
    """Mappings are joined key by key, everything else is replaced; None takes an entry out."""
    out = dict(below)
    for key, value in above.items():
        if value is None:
            out.pop(key, None)
        elif isinstance(value, dict) and isinstance(out.get(key), dict):
            out[key] = _merged(out[key], value)
        else:
            out[key] = value
    return out


def _rule_set(data: Mapping[str, Any]) -> RuleSet:
    figures = {name: _figure(name, item) for name, item in data.get("figures", {}).items()}
    actions = {}
    for name, item in data.get("actions", {}).items():
        actions[name] = ActionClass(
            name, item["nature"], item.get("group", ""), tuple(item.get("words", ()))
        )
        figures.update(_psi(name, item))
    faces = data.get("faces", {})
    out = RuleSet(
        name=data["name"],
        title=data.get("title", data["name"]),
        edition=data.get("edition", ""),
        note=" ".join(data.get("note", "").split()),
        figures=figures,
        actions=actions,
        groups={
            name: Group(name, item["several"], tuple(item.get("not_with", ())))
            for name, item in data.get("groups", {}).items()
        },
        expressions=tuple(_expression(n, i) for n, i in data.get("expressions", {}).items()),
        arrangements=_arrangements(data.get("arrangements", {})),
        redistribution=data.get("redistribution", {}),
        reduction=data.get("reduction", ""),
        rounding=faces.get("rounding", False),
        monolithic=faces.get("monolithic", False),
        faces_clause=faces.get("clause", ""),
    )
    _check_names(out)
    return out


def _figure(name: str, item: Mapping[str, Any]) -> Figure:
    return Figure(name, **{**item, "value": float(item["value"])})


def _psi(name: str, item: Mapping[str, Any]) -> dict[str, Figure]:
    marks = {k: item[k] for k in ("clause", "confirmed", "unsure", "national") if k in item}
    return {
        f"{psi}.{name}": Figure(f"{psi}.{name}", float(value), meaning=f"{psi}, {name}", **marks)
        for psi, value in zip(PSI, item.get("psi", ()), strict=False)
    }


def _expression(name: str, item: Mapping[str, Any]) -> Expression:
    missing = [k for k in ("prefix", "limit_state", "permanent") if k not in item]
    if missing:
        raise JobError(f"'expressions.{name}' has no '{missing[0]}'; it is required.")
    return Expression(
        name=name,
        prefix=item["prefix"],
        limit_state=item["limit_state"],
        kind=item.get("kind", ""),
        clause=item.get("clause", ""),
        permanent=tuple(str(f) for f in item["permanent"]),
        always={g: str(f) for g, f in item.get("always", {}).items()},
        one_of=tuple({g: str(f) for g, f in o.items()} for o in item.get("one_of", ())),
        leading=str(item.get("leading", "")),
        accompanying=str(item.get("accompanying", "")),
        needs=item.get("needs", ""),
        confirmed=item.get("confirmed", False),
        unsure=item.get("unsure", False),
    )


def _arrangements(item: Mapping[str, Any]) -> ArrangementRules:
    return ArrangementRules(
        default=item.get("default", "every"),
        by_span=item.get("by_span", {}),
        permanent_by_span=item.get("permanent_by_span", False),
        clause=item.get("clause", ""),
        sets={
            name: ListedSet(
                name,
                one.get("clause", ""),
                tuple(
                    PatternSpec(
                        tuple(r["natures"]), tuple(r["patterns"]), float(r.get("elsewhere", 0.0))
                    )
                    for r in one["rules"]
                ),
                one.get("confirmed", False),
            )
            for name, one in item.get("sets", {}).items()
        },
    )


def _check_names(rules: RuleSet) -> None:
    """Every group and every figure that is named must be there."""
    for action in rules.actions.values():
        if action.nature != "permanent":
            _known(action.group, rules.groups, f"actions.{action.name}.group", "group")
    for group in rules.groups.values():
        for other in group.not_with:
            _known(other, rules.groups, f"groups.{group.name}.not_with", "group")
    for e in rules.expressions:
        where = f"expressions.{e.name}"
        factors = [*e.permanent, *e.always.values(), *(f for o in e.one_of for f in o.values())]
        for factor in (*factors, e.leading, e.accompanying):
            _check_factor(factor, rules, where)
        for group_name in (*e.always, *(g for o in e.one_of for g in o), *filter(None, [e.needs])):
            _known(group_name, rules.groups, where, "group")
    default = rules.arrangements.default
    _known(default, ("every", "none", *rules.arrangements.sets), "arrangements.default", "set")


def _check_factor(factor: str, rules: RuleSet, where: str) -> None:
    for word in (w.strip() for w in factor.split("*") if factor):
        if word in PSI or word in rules.figures:
            continue
        try:
            good = math.isfinite(float(word))
        except ValueError:
            good = False
        if not good:
            _known(word, rules.figures, where, "figure")


def _known(name: str, known: Iterable[str], where: str, what: str) -> None:
    known = list(known)
    if name not in known:
        raise JobError(
            f"'{where}' names the {what} '{name}', which the rule set does not have"
            f"{_nearest(name, known)} (known: {', '.join(known)})."
        )


def _replaced(rules: RuleSet, values: Mapping[str, object]) -> RuleSet:
    figures = dict(rules.figures)
    for name, value in values.items():
        if name not in figures:
            raise JobError(
                f"'rules.replace.{name}' is no figure of the rule set '{rules.name}'"
                f"{_nearest(name, figures)} (known: {', '.join(figures)})."
            )
        if isinstance(value, bool) or not isinstance(value, int | float):
            raise JobError(f"'rules.replace.{name}' is {value!r}; it must be a number.")
        if not math.isfinite(value):
            raise JobError(f"'rules.replace.{name}' is {value}; it must be a finite number.")
        own = figures[name]
        figures[name] = changed(
            own, value=float(value), replaced=own.value, confirmed=True, unsure=False
        )
    return changed(rules, figures=figures)


def _nearest(name: str, known: Iterable[str]) -> str:
    near = difflib.get_close_matches(name, list(known), n=1, cutoff=0.3)
    return f"; the nearest known one is '{near[0]}'" if near else ""
