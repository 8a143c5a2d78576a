"""What changed between two bases of a line, in sentences that an engineer understands."""

from __future__ import annotations

import re
from collections.abc import Mapping

from analysis_core.model import Line

_OLD_FORM = "an earlier version of this program wrote down otherwise what the results depend on"
RECEIVES = "whose reactions it receives"
_DIGEST = re.compile(r" ?#[0-9a-f]{10}\b")
_TOLD_IN_FULL = ("geometry", "ends", "section", "material", "support", "actions", "rules")
_WORDS = {
    "combinations": "what is combined with which factors",
    "settings": "what the job file says of rules, analysis or limits",
}
FOR_ALL = tuple(f"{words} changed" for words in _WORDS.values())
"""Reasons that all lines of a model have in common."""


def places(line: Line, names: Mapping[str, str]) -> dict[str, str]:
    """Return where each support of a line is, in words, by the number of its joint."""
    return {
        str(joint.id): f"at {joint.x:.3f} m"
        + (f" ({names.get(joint.element) or joint.element})" if joint.element else "")
        for joint in line.joints
        if joint.support is not None
    }


def differences(
    before: Mapping[str, str],
    after: Mapping[str, str],
    names: Mapping[str, str],
    where: Mapping[str, str] | None = None,
) -> list[str]:
    """Return sentences that say what changed between two bases of a line.

    ``names``: name by GlobalId; ``where``: places of supports, as ``places`` gives them.
    """
    if before.get("form") != after.get("form"):
        return [_OLD_FORM]
    sentences = []
    renamed = _renamed_cases(before, after)
    for key in sorted({*before, *after}):
        old, new = before.get(key), after.get(key)
        if old == new:
            continue
        subject, _, which = key.partition(" ")
        if subject == "actions" and which in renamed:
            sentences.append(f"case {which} is called {renamed[which]} now")
            continue
        if subject == "actions" and which in renamed.values():
            continue
        if subject == "ends" and old and new and _connected(old) == _connected(new):
            continue  # cut into more or fewer stretches, with all of them joined as before
        what = _subject(subject, which, names, where or {})
        if subject == "received":
            sentences.append(_received(which, old, new))
        elif subject in ("section", "material", "ends") and None in (old, new):
            state = "no more" if new is None else "now"
            sentences.append(f"{names.get(which) or which} is part of it {state}")
        elif subject in _TOLD_IN_FULL:
            sentences.append(_change(subject, what, old, new))
        else:
            sentences.append(f"{what} changed")
    return [*dict.fromkeys(sentences)]


def _received(mark: str, old: str | None, new: str | None) -> str:
    if old is None:
        return f"{mark} bears on it now"
    if new is None:
        return f"{mark} bears on it no more"
    if old.partition(";")[0] == new.partition(";")[0]:
        return f"{mark} bears on it elsewhere"
    return f"{mark}, {RECEIVES}, changed"


def _renamed_cases(before: Mapping[str, str], after: Mapping[str, str]) -> dict[str, str]:
    """New name by old name of cases with the same actions; none where several could be meant."""
    gone = {k.partition(" ")[2]: t for k, t in before.items() if k not in after}
    new = {k.partition(" ")[2]: t for k, t in after.items() if k not in before}
    found = {}
    for name, text in gone.items():
        same = [n for n, t in new.items() if t == text and f"actions {n}" in after]
        if f"actions {name}" in before and len(same) == 1:
            found[name] = same[0]
    return found if len({*found.values()}) == len(found) else {}


def _subject(subject: str, which: str, names: Mapping[str, str], where: Mapping[str, str]) -> str:
    if subject in _WORDS:
        return _WORDS[subject]
    if not which:
        return subject
    if subject == "support":
        return f"support {where.get(which) or f'at joint {which}'}"
    if subject == "ends":
        return f"connection of {names.get(which) or which}"
    return f"{subject} of {names.get(which) or which}"


def _change(subject: str, what: str, old: str | None, new: str | None) -> str:
    was, now = _shown(old or ""), _shown(new or "")
    if subject == "support":
        was, now = _held(was), _held(now)
    if subject == "ends":
        was, now = _connected(was), _connected(now)
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


def _held(text: str) -> str:
    """Support conditions in words, as ``_support`` writes them."""
    values = text.split("/")
    if len(values) != 3:
        return text
    named = zip(("vertical", "horizontal", "rotation"), values, ("N/m", "N/m", "N·m/rad"),
                strict=True)  # fmt: skip
    return ", ".join(
        f"{name} {v if v in ('rigid', 'free') else f'{float(v):.4g} {unit}'}"
        for name, v, unit in named
    )


def _connected(text: str) -> str:
    """Connections of the stretches of an element in words: where they are not rigid."""
    stretches = [stretch.split("/") for stretch in text.split("; ")]
    found = []
    for number, ends in enumerate(stretches, 1):
        of = f" of stretch {number}" if len(stretches) > 1 else ""
        for name, value in zip(("start", "end"), ends, strict=False):
            if value != "rigid":
                stiff = "free" if value == "free" else f"{float(value):.4g} N·m/rad"
                found.append(f"{name}{of} {stiff}")
    return ", ".join(found) or "rigid"
