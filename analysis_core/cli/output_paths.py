"""Where results may be written: never over what they were made from."""

from __future__ import annotations

import os
from collections.abc import Mapping

from analysis_core.errors import JobError


def check_outputs(
    inputs: Mapping[str, str | None],
    outputs: Mapping[str, str | None],
    *,
    in_place: bool = False,
) -> None:
    """Refuse an output that is an input, or the same file as another output.

    Both hold paths by what they are called on the command line; None and "-" (standard output)
    are no files.  Links are followed.  ``in_place``: the command can replace the model if asked.
    Raises JobError.
    """
    taken = [(name, path) for name, path in inputs.items() if _is_file(path)]
    for name, path in outputs.items():
        if path is None or not _is_file(path):
            continue
        for other, known in taken:
            if known is not None and _same(path, known):
                raise JobError(_refusal(name, path, other, in_place))
        taken.append((name, path))


def _refusal(name: str, path: str, other: str, in_place: bool) -> str:
    if other.startswith("-") and other != "--job":
        return f"{name} and {other} name the same file, '{path}'; give each a file of its own."
    kind = "job file" if other == "--job" else "model"
    what = f"{name} names the {kind} itself, '{path}', which would be overwritten"
    asked = ", or use --in-place" if in_place and name == "-o" else ""
    return f"{what}; name another file{asked}."


def _is_file(path: str | None) -> bool:
    return path not in (None, "", "-")


def _same(a: str, b: str) -> bool:
    if os.path.exists(a) and os.path.exists(b):
        return os.path.samefile(a, b)
    return os.path.realpath(a) == os.path.realpath(b)
